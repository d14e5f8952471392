"""The parameters of a network file, and its named sets of other values of them."""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.foundation.exact import decimal_text
from yieldnet.foundation.findings import Severity, near
from yieldnet.model.network import Parameter, ParameterSet
from yieldnet.reading.fields import Fields, entries, number
from yieldnet.reading.maintenance import read_maintenance
from yieldnet.reading.nodes import Kind

if TYPE_CHECKING:
    from collections.abc import Sequence
    from fractions import Fraction

    from yieldnet.foundation.exact import WrittenNumber
    from yieldnet.foundation.findings import Findings
    from yieldnet.reading.nodes import Node

__all__ = ["PARAMETER_KEYS", "PARAMETER_SET_KEYS", "read_parameter_sets", "read_parameters"]

PARAMETER_KEYS = ("value", "low", "high", "unit", "about", "source")
"""Keys of one parameter."""
PARAMETER_SET_KEYS = ("about", "source", "values", "maintenance")
"""Keys of one parameter set."""


def read_parameters(
    node: Node | None, findings: Findings
) -> tuple[tuple[Parameter, ...], tuple[str, ...]]:
    """Parameters of a network.

    Parameters
    ----------
    node : Node or None
        The section.
    findings : Findings
        Receives what is wrong.

    Returns
    -------
    tuple of Parameter
        Those whose value could be read.
    tuple of str
        The names of all.
    """
    parameters: list[Parameter] = []
    declared: list[str] = []
    for key, value in entries(node, "'parameters'", findings) if node else ():
        label = f"parameter {key.text!r}"
        declared.append(key.text)
        if not key.text.isidentifier():
            findings.add(
                "YN206",
                f"{label} cannot be used in an expression",
                key.span,
                hint="Use letters, digits and underscores, a letter first.",
            )
        if value.kind is not Kind.MAPPING:
            plain = number(value, label, findings)
            if plain is not None:
                parameters.append(Parameter(name=key.text, value=plain.value, span=value.span))
            continue
        fields = Fields(value, label, PARAMETER_KEYS, findings)
        fields.need("value", "Give its value.")
        main, low, high = (fields.number(name) for name in ("value", "low", "high"))
        if low and high and low.value > high.value:
            findings.add(
                "YN511",
                f"{label} has its low end above its high end",
                fields.span("low"),
                left=f"low {low.text}",
                right=f"high {high.text}",
                hint="Exchange them.",
            )
        if main is not None:
            parameters.append(
                Parameter(
                    name=key.text,
                    value=main.value,
                    low=low.value if low else None,
                    high=high.value if high else None,
                    unit=fields.text("unit"),
                    about=fields.text("about"),
                    source=fields.text("source"),
                    span=fields.span("value"),
                )
            )
    return tuple(parameters), tuple(declared)


def read_parameter_sets(
    node: Node | None,
    parameters: tuple[Parameter, ...],
    declared: Sequence[str],
    energy: Sequence[str],
    findings: Findings,
) -> tuple[ParameterSet, ...]:
    """Named sets of parameter values, perhaps with another maintenance.

    Parameters
    ----------
    node : Node or None
        The section.
    parameters : tuple of Parameter
        Parameters of the network.
    declared : sequence of str
        Their names, those among them whose value could not be read.
    energy : sequence of str
        Energy carriers of the network.
    findings : Findings
        Receives what is wrong or doubtful.

    Returns
    -------
    tuple of ParameterSet
        In written order.
    """
    found: list[ParameterSet] = []
    for key, value in entries(node, "'parameter sets'", findings) if node else ():
        label = f"parameter set {key.text!r}"
        fields = Fields(value, label, PARAMETER_SET_KEYS, findings)
        fields.need("source", "Say where its values come from.")
        inner, alive = fields.get("values"), fields.get("maintenance")
        if inner is None and alive is None:
            inner = fields.need("values", "Write {po_nadh: 0.5}, or a maintenance.")
        values = _values(inner, label, parameters, declared, findings) if inner else ()
        found.append(
            ParameterSet(
                name=key.text,
                values=values,
                maintenance=read_maintenance(
                    alive, energy, findings, f"maintenance of {label}", fields.text("source")
                ),
                about=fields.text("about"),
                source=fields.text("source"),
                span=key.span,
            )
        )
    return tuple(found)


def _values(
    node: Node,
    label: str,
    parameters: tuple[Parameter, ...],
    declared: Sequence[str],
    findings: Findings,
) -> tuple[tuple[str, Fraction], ...]:
    pairs = entries(node, f"'values' of {label}", findings)
    if not pairs and node.kind is Kind.MAPPING:
        findings.add(
            "YN111", f"{label} has no values", node.span, hint="Write {po_nadh: 0.5} or delete it."
        )
    known = {item.name: item for item in parameters}
    found: list[tuple[str, Fraction]] = []
    for key, value in pairs:
        if key.text not in declared:
            findings.add(
                "YN302",
                f"{label}: parameter {key.text!r} is not known",
                key.span,
                hint=near(key.text, declared) or "Define it in 'parameters'.",
            )
        written = number(value, f"{key.text!r} of {label}", findings)
        if written is None:
            continue
        if key.text in known:
            _in_range(known[key.text], written, label, value, findings)
        found.append((key.text, written.value))
    return tuple(found)


def _in_range(
    parameter: Parameter, written: WrittenNumber, label: str, node: Node, findings: Findings
) -> None:
    below = parameter.low is not None and written.value < parameter.low
    above = parameter.high is not None and written.value > parameter.high
    if not (below or above):
        return
    end = parameter.low if below else parameter.high
    assert end is not None
    findings.add(
        "YN412",
        f"{label}: {parameter.name!r} is outside the range of the parameter",
        node.span,
        left=f"value {written.text}",
        right=f"{'low' if below else 'high'} {decimal_text(end) or end} {parameter.unit}".rstrip(),
        hint="Correct the value, or widen the range if there is a reason for it.",
        severity=Severity.WARNING,
    )
