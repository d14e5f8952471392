"""Maintenance of a network file, its own and that of its parameter sets."""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.foundation.findings import near
from yieldnet.foundation.units import UnitError, Weight, specific_rate_mol_per_gram_hour
from yieldnet.model.network import Maintenance
from yieldnet.reading.fields import Fields, entries, text
from yieldnet.reading.nodes import Kind
from yieldnet.reading.quantities import read_quantity

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.foundation.findings import Findings
    from yieldnet.reading.nodes import Node

__all__ = ["read_maintenance"]


def read_maintenance(
    node: Node | None,
    energy: Sequence[str],
    findings: Findings,
    label: str = "maintenance",
    source: str = "",
) -> Maintenance | None:
    """Energy for staying alive, or ``None``, with a finding where it cannot be read.

    Parameters
    ----------
    node : Node or None
        The section: one energy carrier with its rate.
    energy : sequence of str
        Energy carriers of the network.
    findings : Findings
        Receives what is wrong.
    label : str
        Its name in messages.
    source : str
        Where it comes from, if the section does not say so itself.

    Returns
    -------
    Maintenance or None
        Carrier and specific rate.
    """
    if node is None:
        return None
    pairs = entries(node, f"'{label}'", findings)
    if len(pairs) != 1:
        if node.kind is Kind.MAPPING:
            findings.add(
                "YN112",
                f"'{label}' names {len(pairs)} carriers",
                node.span,
                left="expected one",
                hint="Write {ATP: 2.5 mmol/g/h}.",
            )
        return None
    key, value = pairs[0]
    if key.text not in energy:
        findings.add(
            "YN302",
            f"{label} is told in {key.text!r}, which is no energy carrier",
            key.span,
            hint=near(key.text, energy) or "Name a carrier of kind energy.",
        )
    if value.kind is Kind.MAPPING:
        fields = Fields(value, f"'{label}'", ("value", "source"), findings)
        source = fields.text("source") or source
        inner = fields.need("value", "Give the rate.")
        if inner is None:
            return None
        value = inner
    written = text(value, f"'{label}'", findings)
    quantity = read_quantity(written, value.span, label, findings) if written else None
    if quantity is None or written is None:
        return None
    try:
        if quantity.unit is None:
            raise UnitError("the unit is missing", "Write it in mmol/g/h.")
        factor = specific_rate_mol_per_gram_hour(
            quantity.unit, Weight(name=key.text, molar_mass=None, carbon=None)
        )
    except UnitError as error:
        findings.add(error.code, f"{label}: {error.reason}", value.span, hint=error.hint)
        return None
    if quantity.sd is not None:
        findings.add(
            "YN112",
            f"{label} has an error, which nothing here would use",
            value.span,
            hint="Write the value alone; a parameter may have a low and a high.",
        )
    if quantity.number.value < 0:
        findings.add(
            "YN210",
            f"{label} {quantity.number.text} is negative",
            value.span,
            hint="Maintenance spends energy: write its size.",
        )
    return Maintenance(
        carrier=key.text,
        rate_mol_per_gram_hour=quantity.number.value * factor,
        written=quantity.number,
        unit=str(quantity.unit),
        source=source,
        span=value.span,
    )
