"""The values that a network file says its network gives again (README, "The network file").

Each entry of ``reproduces`` is a small case, so it is read as one, with the network of the same
file.
"""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from yieldnet.foundation.findings import Findings, TooManyFindings
from yieldnet.foundation.units import UnitError, Weight, read_unit, yield_factor
from yieldnet.model.case import DEFAULT_YIELD_UNIT
from yieldnet.model.reproduction import Reproduction
from yieldnet.reading.case_file import CaseReader
from yieldnet.reading.fields import Fields, entries, text
from yieldnet.reading.network_file import compose_network
from yieldnet.reading.quantities import read_quantity
from yieldnet.reading.source import MAX_FINDINGS, read_text, too_many

if TYPE_CHECKING:
    from yieldnet.model.case import Case
    from yieldnet.model.network import Network
    from yieldnet.reading.nodes import Node

__all__ = ["REPRODUCTION_KEYS", "load_reproducing_network", "load_reproductions"]

REPRODUCTION_KEYS = (
    "strain",
    "parameter set",
    "equation",
    "either side",
    "conditions",
    "measured",
    "demands",
    "aim",
    "energy surplus",
    "knock-outs",
    "parameters",
    "value",
    "source",
)
"""Keys of one entry of 'reproduces'."""


def load_reproductions(path: str) -> tuple[tuple[Reproduction, ...], Findings]:
    """What the network of a file says it gives again, with all findings.

    Parameters
    ----------
    path : str
        Path of the network file.

    Returns
    -------
    tuple of Reproduction
        Those that could be read; none if anything else in the file is wrong.
    Findings
        Everything wrong or doubtful, in the network and in the entries.
    """
    _, reproductions, findings = load_reproducing_network(path)
    return reproductions, findings


def load_reproducing_network(
    path: str,
) -> tuple[Network | None, tuple[Reproduction, ...], Findings]:
    """Network of a file with what it says it gives again; the file is read once.

    Parameters
    ----------
    path : str
        Path of the network file.

    Returns
    -------
    Network or None
        The network as written; ``None`` if anything in its own sections is wrong.
    tuple of Reproduction
        Those that could be read; none without a network.
    Findings
        Everything wrong or doubtful, in the network and in the entries.
    """
    findings = Findings(limit=MAX_FINDINGS)
    network: Network | None = None
    found: tuple[Reproduction, ...] = ()
    try:
        source = read_text(path, findings)
        if source is None:
            return None, (), findings
        root, network = compose_network(source, path, findings)
        if findings.refused:
            network = None
        if root is not None:
            found = _entries(root, path, network, findings)
    except TooManyFindings:
        findings.items.append(too_many(path))
        return None, (), findings
    return network, found, findings


def _entries(
    root: Node, path: str, network: Network | None, findings: Findings
) -> tuple[Reproduction, ...]:
    section = next((value for key, value in root.pairs if key.text == "reproduces"), None)
    if section is None:
        return ()
    found: list[Reproduction] = []
    for key, node in entries(section, "'reproduces'", findings):
        read = _entry(key, node, path, network, findings)
        if read is not None:
            found.append(read)
    return tuple(found)


def _entry(
    key: Node, node: Node, path: str, network: Network | None, findings: Findings
) -> Reproduction | None:
    label = f"{key.text!r} of 'reproduces'"
    own = Findings(limit=MAX_FINDINGS)
    fields = Fields(node, label, REPRODUCTION_KEYS, own)
    fields.need("aim", "Write 'aim: most ethanol'.")
    value = fields.need("value", "Write the best value: 2, or 0.511 g/g.")
    fields.need("source", "Say where the value stands, or how it was derived by hand.")
    reader = CaseReader(fields=fields, path=path, findings=own)
    if network is not None:
        reader.take_network(network)
    else:
        # What is wrong in the network is told already; here only shapes can be judged.
        reader.has_network = True
        reader.book.accept_all = True
    case = reader.case(key.text)
    source = fields.text("source")
    if network is None:
        # Without formulas no unit can be turned, which would be told as one more mistake.
        case = None
    read = _value(key, value, case, source, label, own) if value is not None else None
    findings.extend(own)
    return None if own.refused else read


def _value(
    key: Node, node: Node, case: Case | None, source: str, label: str, findings: Findings
) -> Reproduction | None:
    written = text(node, f"the value of {label}", findings)
    if written is None:
        return None
    quantity = read_quantity(written, node.span, f"the value of {label}", findings)
    if quantity is None:
        return None
    if quantity.sd is not None:
        findings.add(
            "YN112",
            f"the value of {label} has an error, which nothing here would use",
            node.span,
            left="expected a number, perhaps with a unit",
            right=f"found {written}",
            hint="Write the value alone: a decimal stands for the interval of its last digit.",
        )
    if case is None or case.aim is None:
        return None
    if case.aim.is_energy:
        weight = Weight(name=case.aim.compound, molar_mass=None, carbon=None)
    else:
        weight = case.compound(case.aim.compound).weight
    try:
        factor = yield_factor(
            quantity.unit or read_unit(DEFAULT_YIELD_UNIT), weight, case.basis.weight
        )
    except UnitError as error:
        findings.add(
            error.code, f"the value of {label}: {error.reason}", node.span, hint=error.hint
        )
        return None
    return Reproduction(
        name=key.text,
        case=replace(case, span=key.span),
        written=quantity.number,
        unit=str(quantity.unit or DEFAULT_YIELD_UNIT),
        factor=factor,
        source=source,
        span=key.span,
    )
