"""Measured values as a run file writes them: ``1.50 ± 0.01 L``, ``400 ± 1 % g/L``.

A percent sign behind ± is a share of the value, except where percent is the unit of the value.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import TextError
from yieldnet.foundation.exact import NumberTextError, read_number
from yieldnet.reading.measures import Measure

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Findings, SourceSpan

__all__ = [
    "PERCENT_UNITS",
    "QuantityTextError",
    "Written",
    "check_value",
    "read_size",
    "read_written",
]

PERCENT_UNITS = (Measure.FRACTION, Measure.HUMIDITY)
"""Measures of which percent is a unit, so that a percent sign alone is no share of the value."""
_POSITIVE = (Measure.RATE, Measure.PRESSURE, Measure.TEMPERATURE, Measure.MASS_RATIO)
_HIGHEST_PH = 14.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Written:
    """A value as written.

    Parameters
    ----------
    number : float
        In ``unit``.
    sd : float or None
        Standard deviation in ``unit``, or as a share of the value [-]; 0 for exact; ``None`` where
        nothing is written.
    relative : bool
        Whether ``sd`` is a share of the value.
    unit : str
        Text of the unit.
    """

    number: float
    sd: float | None
    relative: bool
    unit: str


class QuantityTextError(TextError):
    """A text that is no value with a standard deviation and a unit."""

    usual_code = "YN201"


def _number(word: str) -> float:
    try:
        return float(read_number(word).value)
    except NumberTextError as error:
        raise QuantityTextError(error.reason, error.hint, error.code) from None


def read_size(word: str) -> float:
    """Standard deviation of a word, which is a size above zero.

    Raises
    ------
    QuantityTextError
        If it is no number, or not above zero.
    """
    found = _number(word)
    if found < 0:
        raise QuantityTextError(
            f"the standard deviation {word} is negative", "Write its size without a sign.", "YN209"
        )
    if found == 0:
        raise QuantityTextError(
            f"the standard deviation is {word}",
            "Write how far repeated measurements differ, or 'exact' if you mean it.",
            "YN132",
        )
    return found


def read_written(
    words: str, measure: Measure, span: SourceSpan, label: str, findings: Findings
) -> Written | None:
    """Value, standard deviation and unit of a text, or ``None`` with a finding.

    Parameters
    ----------
    words : str
        ``1.50 ± 0.01 L``, ``400 ± 1 % g/L``, ``20.95 ± 0.01 %``, ``5 exact mol/L``.
    measure : Measure
        What is measured; where percent is a unit of it, a percent sign alone is that unit.
    span : SourceSpan
        Where it stands.
    label : str
        Its name in messages.
    findings : Findings
        Receives what is wrong.

    Returns
    -------
    Written or None
        What was written.
    """
    for sign in ("+/-", "+-", "±"):
        words = words.replace(sign, " ± ")
    parts = words.replace("%", " % ").replace("mol %", "mol%").replace("vol %", "vol%").split()
    try:
        if not parts:
            raise QuantityTextError("a number is missing", "Write a number here.", "YN201")
        number, rest = _number(parts[0]), parts[1:]
        if "exact" in rest:
            rest.remove("exact")
            return Written(number=number, sd=0.0, relative=False, unit=_unit(rest))
        if rest[:1] != ["±"]:
            return Written(number=number, sd=None, relative=False, unit=_unit(rest))
        if len(rest) < 2:
            raise QuantityTextError(
                "nothing stands after ±", "Write a standard deviation.", "YN201"
            )
        size, rest = read_size(rest[1]), rest[2:]
        if rest[:1] == ["%"] and (len(rest) > 1 or measure not in PERCENT_UNITS):
            return Written(number=number, sd=size / 100, relative=True, unit=_unit(rest[1:]))
        return Written(number=number, sd=size, relative=False, unit=_unit(rest))
    except QuantityTextError as refused:
        findings.add(refused.code, f"{label}: {refused.reason}", span, hint=refused.hint)
        return None


def _unit(words: list[str]) -> str:
    if "±" in words:
        raise QuantityTextError(
            "the error stands after the unit", "Write number ± error unit: 1.5 ± 0.1 g/L.", "YN203"
        )
    return " ".join(words)


def check_value(
    value: float, measure: Measure, span: SourceSpan, label: str, findings: Findings, shown: str
) -> bool:
    """Whether a value lies where its measure has a meaning; if not, a finding says so.

    Parameters
    ----------
    value : float
        In the unit of the run.
    measure : Measure
        What is measured.
    span : SourceSpan
        Where it stands.
    label : str
        Its name in messages.
    findings : Findings
        Receives what is wrong.
    shown : str
        The value as written.

    Returns
    -------
    bool
        Whether it can be used.
    """
    hint = ""
    if measure is Measure.ACIDITY and not 0 <= value <= _HIGHEST_PH:
        hint = "A pH lies between 0 and 14."
    elif measure in PERCENT_UNITS and value > 1:
        hint = "A fraction is at most 1, or 100 %: is the unit % instead of mol/mol?"
    elif measure is not Measure.TIME and value < 0:
        hint = f"{measure.capitalize()} is not negative."
    elif measure in _POSITIVE and value == 0:
        hint = f"{measure.capitalize()} is above zero."
    if not hint:
        return True
    findings.add("YN210", f"{label} {shown} is outside its meaning", span, hint=hint)
    return False
