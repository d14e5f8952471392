"""Numbers of the section ``plant``: a number with a unit, a share, a price.

Takes nodes, gives exact values in the unit of the plant, or ``None`` with a finding.
"""

from __future__ import annotations

import re
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.exact import NumberTextError, read_number
from yieldnet.model.plant import Price, Stated
from yieldnet.reading.fields import text

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.foundation.findings import Findings
    from yieldnet.reading.nodes import Node

__all__ = [
    "CELSIUS",
    "CONCENTRATIONS",
    "HOURS",
    "OUTPUTS",
    "POWERS",
    "PRESSURES",
    "PRODUCTIVITIES",
    "RATES",
    "SPARGES",
    "TIMES",
    "VOLUMES",
    "read_measure",
    "read_price",
    "read_share",
]

_ONE = Fraction(1)
OUTPUTS = {
    "t/y": (Fraction(1000), "y"),
    "kg/y": (_ONE, "y"),
    "kt/y": (Fraction(10**6), "y"),
    "t/h": (Fraction(1000), "h"),
    "kg/h": (_ONE, "h"),
}
"""Units of an output [kg], and per year or per hour of work."""
HOURS = {"h/y": _ONE, "d/y": Fraction(24)}
"""Units of the time on stream [h/y]."""
TIMES = {"h": _ONE, "min": Fraction(1, 60), "d": Fraction(24)}
"""Units of a time [h]."""
CONCENTRATIONS = {"g/L": _ONE, "kg/m3": _ONE, "mg/mL": _ONE, "g/l": _ONE}
"""Units of a titre or of cells [kg/m3]."""
PRODUCTIVITIES = {"g/L/h": _ONE, "kg/m3/h": _ONE, "g/l/h": _ONE, "g/L/d": Fraction(1, 24)}
"""Units of a productivity [kg/m3/h]."""
VOLUMES = {"m3": _ONE, "L": Fraction(1, 1000)}
"""Units of a vessel [m3]."""
POWERS = {"kW/m3": _ONE, "W/L": _ONE, "W/m3": Fraction(1, 1000)}
"""Units of the power of a stirrer [kW/m3]."""
PRESSURES = {"bar": _ONE, "kPa": Fraction(1, 100), "atm": Fraction(101_325, 100_000)}
"""Units of an absolute pressure [bar]."""
RATES = {"1/h": _ONE, "1/s": Fraction(3600), "1/min": Fraction(60)}
"""Units of kLa [1/h]."""
SPARGES = {"": _ONE, "vvm": _ONE, "1/min": _ONE}
"""Units of gas per broth [1/min]."""
CELSIUS = {"degC": Fraction(0), "°C": Fraction(0), "K": Fraction("-273.15")}
"""What is added to a temperature in the unit [degC]."""
_WORDS = re.compile(r"\s*(?P<number>\S+?)\s*(?:\s(?P<unit>\S.*)|(?P<percent>%))?\s*")
_CURRENCY = re.compile(r"[^\W\d_]{1,10}|[€$£¥]")
_HUNDRED = 100
_TWO = 2


def _split(written: str) -> tuple[str, str]:
    found = _WORDS.fullmatch(written)
    if found is None:
        return written, ""
    return found["number"], (found["unit"] or found["percent"] or "").strip()


def read_measure(
    node: Node, label: str, units: Mapping[str, Fraction], findings: Findings, *, zero: bool = False
) -> tuple[Stated, str] | None:
    """Positive number with a unit, and the unit; ``None`` with a finding.

    Parameters
    ----------
    node : Node
        The value.
    label : str
        Its name in messages.
    units : mapping of str to Fraction
        What one of each unit is worth.
    findings : Findings
        Receives what is wrong.
    zero : bool
        Whether zero is a value, too.

    Returns
    -------
    Stated or None
        The number in the unit that is worth 1, with the unit as written.
    """
    written = text(node, label, findings)
    if written is None:
        return None
    number, unit = _split(written)
    known = [name for name in units if name]
    hint = f"Write a number and one of {', '.join(known)}, without an error."
    try:
        value = read_number(number).value
    except NumberTextError as error:
        findings.add(error.code, f"{label}: {error.reason}", node.span, hint=error.hint or hint)
        return None
    if unit not in units:
        message = f"{label}: {unit!r} is not its unit" if unit else f"{label}: the unit is missing"
        findings.add("YN203", message, node.span, hint=hint)
        return None
    if value < 0 or (value == 0 and not zero):
        findings.add(
            "YN900",
            f"{label} {written} is not {'zero or above' if zero else 'above zero'}",
            node.span,
            hint="Correct it, or leave the line out if it is not known.",
        )
        return None
    return Stated(value=value * units[unit], text=written, span=node.span), unit


def read_share(
    node: Node, label: str, findings: Findings, *, name: str = "", zero: bool = False
) -> Stated | None:
    """Share of 1, as 0.9 or 90 %; ``None`` with a finding.

    Parameters
    ----------
    node : Node
        The value.
    label : str
        Its name in messages.
    findings : Findings
        Receives what is wrong.
    name : str
        What it belongs to.
    zero : bool
        Whether zero is a share, too.

    Returns
    -------
    Stated or None
        The share [-].
    """
    written = text(node, label, findings)
    if written is None:
        return None
    number, unit = _split(written)
    percent = unit == "%"
    if number.endswith("%"):
        number, percent = number[:-1], True
    try:
        value = read_number(number).value
    except NumberTextError as error:
        findings.add(error.code, f"{label}: {error.reason}", node.span, hint=error.hint)
        return None
    if unit not in ("", "%"):
        message = f"{label}: a share has no unit {unit!r}"
        findings.add("YN203", message, node.span, hint="Write 0.9.")
        return None
    share = value / _HUNDRED if percent else value
    if share < 0 or share > 1 or (share == 0 and not zero):
        hint = "A share lies between 0 and 1."
        if not percent and _TWO < value <= _HUNDRED:
            hint = f"Write {float(value / _HUNDRED):.4g}, or {number} %."
        findings.add(
            "YN901",
            f"{label} {written} is no share",
            node.span,
            left=f"found {float(share):g}",
            right="expected above 0 and at most 1" if not zero else "expected 0 to 1",
            hint=hint,
        )
        return None
    return Stated(value=share, text=written, name=name, span=node.span)


def read_price(node: Node, name: str, findings: Findings) -> Price | None:
    """Price per kg of a compound, or ``None`` with a finding.

    Parameters
    ----------
    node : Node
        The value, such as ``0.25 EUR/kg``.
    name : str
        Of what.
    findings : Findings
        Receives what is wrong.

    Returns
    -------
    Price or None
        Per kg of pure compound.
    """
    label = f"price of {name}"
    written = text(node, label, findings)
    if written is None:
        return None
    number, unit = _split(written)
    currency, _, mass = unit.partition("/")
    try:
        value = read_number(number).value
    except NumberTextError as error:
        findings.add(error.code, f"{label}: {error.reason}", node.span, hint=error.hint)
        return None
    worth = {"kg": _ONE, "t": Fraction(1, 1000)}.get(mass.strip())
    if _CURRENCY.fullmatch(currency.strip()) is None or worth is None or value < 0:
        findings.add(
            "YN908",
            f"{label} {written!r} is not understood",
            node.span,
            left="expected a number, a currency, and per kg or t",
            hint="Write 0.25 EUR/kg.",
        )
        return None
    return Price(name=name, value=value * worth, currency=currency.strip(), span=node.span)
