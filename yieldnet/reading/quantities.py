"""Parser for numbers with errors and units: ``0.11 ± 0.01 g/g``, ``at most 0.65``, ``38 degC``."""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.exact import NumberTextError, WrittenNumber, read_number, root_of_square
from yieldnet.foundation.units import UnitError, read_unit

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Findings, SourceSpan
    from yieldnet.foundation.units import Unit

__all__ = ["Quantity", "QuantityRange", "read_quantity", "read_range"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Quantity:
    """A number with perhaps a standard deviation and a unit, as written.

    Parameters
    ----------
    number : WrittenNumber
        The number, in ``unit``.
    sd : Fraction or None
        Standard deviation of the value, in ``unit``; ``None`` if exact.
    unit : Unit or None
        ``None`` where none is written.
    """

    number: WrittenNumber
    sd: Fraction | None
    unit: Unit | None


@dataclass(frozen=True, slots=True, kw_only=True)
class QuantityRange:
    """A least and a most, either of which may be open, with a unit."""

    low: WrittenNumber | None
    high: WrittenNumber | None
    unit: Unit | None


_FOREIGN_BOUNDS = {"<": "at most", "<=": "at most", "≤": "at most", ">": "at least"}
_FOREIGN_BOUNDS.update({">=": "at least", "≥": "at least"})


class _Refused(Exception):
    def __init__(self, code: str, reason: str, hint: str = "") -> None:
        self.code, self.reason, self.hint = code, reason, hint


def read_quantity(text: str, span: SourceSpan, label: str, findings: Findings) -> Quantity | None:
    """Number, standard deviation and unit of a text, or ``None`` with a finding.

    Parameters
    ----------
    text : str
        ``0.11 ± 0.01 g/g``; ``+/-`` and ``+-`` stand for ±, the error may be a percentage of the
        value, and ``exact`` may stand in its place. What ± means may stand behind it in brackets:
        ``(95 %)`` a 95 % confidence interval, ``(n = 4)`` the standard deviation of single values
        of which four were averaged, ``(95 %, n = 4)`` the interval found from those four.
    span : SourceSpan
        Where it stands.
    label : str
        Its name in messages.
    findings : Findings
        Receives what is wrong.

    Returns
    -------
    Quantity or None
        What was written.

    Notes
    -----
    An interval of 95 % is 1.96 standard deviations of a normal distribution to either side; with n
    it is Student's t for n - 1 degrees of freedom. The standard deviation of a mean of n is that of
    single values over the root of n.
    """
    try:
        body, meaning = _meaning(text)
        words = _words(body)
        number, rest = _number(words)
        sd: Fraction | None = None
        if rest and rest[0] == "exact":
            rest = rest[1:]
        elif rest and rest[0] == "±":
            if len(rest) < 2:
                raise _Refused("YN201", "nothing stands after ±", "Write a standard deviation.")
            word, rest = rest[1], rest[2:]
            percent = word.endswith("%")
            if not percent and rest and rest[0] == "%":
                percent, rest = True, rest[1:]
            sd = _read(word.rstrip("%")).value
            if percent:
                sd = abs(number.value) * sd / 100
            if sd < 0:
                raise _Refused(
                    "YN209",
                    f"the standard deviation {word} is negative",
                    "Write its size without a sign.",
                )
        if meaning and not sd:
            raise _Refused(
                "YN201",
                f"({meaning}) explains an error, and none is written",
                f"Write value ± error unit ({meaning}).",
            )
        if sd and meaning:
            sd /= _divisor(meaning)
        return Quantity(number=number, sd=sd or None, unit=_unit(rest))
    except _Refused as refused:
        findings.add(refused.code, f"{label}: {refused.reason}", span, hint=refused.hint)
        return None


def read_range(text: str, span: SourceSpan, label: str, findings: Findings) -> QuantityRange | None:
    """Least and most of a text, or ``None`` with a finding.

    Parameters
    ----------
    text : str
        ``at most 0.65``, ``at least 0.1 g/g``, ``0.05 to 0.30``.
    span : SourceSpan
        Where it stands.
    label : str
        Its name in messages.
    findings : Findings
        Receives what is wrong.

    Returns
    -------
    QuantityRange or None
        What was written.
    """
    try:
        words = _words(text)
        low: WrittenNumber | None = None
        high: WrittenNumber | None = None
        if words[:1] == ["at"] and words[1:2] in (["most"], ["least"]):
            number, rest = _number(words[2:])
            low, high = (None, number) if words[1] == "most" else (number, None)
        else:
            low, rest = _number(words)
            if rest[:1] != ["to"]:
                raise _Refused(
                    "YN201",
                    f"{text!r} is no bound",
                    "Write 'at most 0.65', 'at least 0.1 g/g' or '0.05 to 0.30'.",
                )
            high, rest = _number(rest[1:])
            if low.value > high.value:
                raise _Refused(
                    "YN511",
                    f"the low end {low.text} is above the high end {high.text}",
                    "Exchange them.",
                )
        return QuantityRange(low=low, high=high, unit=_unit(rest))
    except _Refused as refused:
        findings.add(refused.code, f"{label}: {refused.reason}", span, hint=refused.hint)
        return None


_NORMAL_95 = Fraction("1.96")
"""Half width of a 95 % interval of a normal distribution in standard deviations [-]."""
_BRACKET = re.compile(r"(?P<body>.*\S)\s+\((?P<meaning>[^()]*)\)\s*")
_COUNT = re.compile(r"n\s*=\s*(\d+)", re.ASCII)


@dataclass(frozen=True, slots=True)
class _Meaning:
    """What stands behind ±: an interval of 95 %, a number of values, or both."""

    interval: bool
    count: int | None
    text: str

    def __str__(self) -> str:
        return self.text


def _meaning(text: str) -> tuple[str, _Meaning | None]:
    """The text before a bracket at its end, and what the bracket says."""
    found = _BRACKET.fullmatch(text)
    if found is None:
        return text, None
    interval, count = False, None
    for part in found["meaning"].split(","):
        number = _COUNT.fullmatch(part.strip())
        if part.replace(" ", "") == "95%" and not interval:
            interval = True
        elif number and count is None:
            if not 2 <= int(number[1]) <= _MAX_COUNT:
                raise _Refused(
                    "YN210",
                    f"n = {number[1]} is no number of values that were averaged",
                    f"Write a whole number from 2 to {_MAX_COUNT}, or leave it out.",
                )
            count = int(number[1])
        else:
            raise _Refused(
                "YN201",
                f"({found['meaning']}) is not understood behind an error",
                "Known: (95 %), (n = 4), (95 %, n = 4).",
            )
    return found["body"], _Meaning(interval, count, found["meaning"].strip())


def _divisor(meaning: _Meaning) -> Fraction:
    """What turns the error as written into the standard deviation of the value."""
    if meaning.interval and meaning.count:
        return _student(meaning.count - 1)
    if meaning.interval:
        return _NORMAL_95
    assert meaning.count is not None
    return root_of_square(Fraction(meaning.count))


def _student(degrees: int) -> Fraction:
    """Student's t of a two-sided 95 % interval, to 12 significant digits."""
    from scipy.stats import t  # type: ignore[import-untyped]

    return Fraction(f"{t.ppf(0.975, degrees):.12g}")


_MAX_COUNT = 100_000
"""Most values that a mean is believed to be taken of [-]."""


def _words(text: str) -> list[str]:
    for sign in ("+/-", "+-", "±"):
        text = text.replace(sign, " ± ")
    return text.split()


def _number(words: list[str]) -> tuple[WrittenNumber, list[str]]:
    if not words:
        raise _Refused("YN201", "a number is missing", "Write a number here.")
    return _read(words[0]), words[1:]


def _read(word: str) -> WrittenNumber:
    if word == "at":
        raise _Refused("YN201", "a bound stands where a value belongs", "Write it under 'demands'.")
    for sign, words in _FOREIGN_BOUNDS.items():
        if word == sign or (word.startswith(sign) and word[len(sign) :][:1].isdigit()):
            raise _Refused("YN201", f"{sign!r} is not understood", f"Write '{words}' instead.")
    try:
        return read_number(word)
    except NumberTextError as error:
        hint = error.hint
        if not hint and (found := re.match(r"[-+−]?\d*\.?\d+(?=[A-Za-z°])", word)):
            hint = f"Leave a space before the unit: {found[0]} {word[found.end() :]}."
        raise _Refused(error.code, error.reason, hint) from None


def _unit(words: list[str]) -> Unit | None:
    if not words:
        return None
    if words[0] == "to":
        raise _Refused("YN201", "a range stands where a value belongs", "Write it under 'demands'.")
    if "±" in words:
        raise _Refused(
            "YN203", "the error stands after the unit", "Write number ± error unit: 0.3 ± 0.1 g/g."
        )
    if words == ["%"]:
        raise _Refused(
            "YN201", "a percentage is not understood here", "Write it as a fraction of 1: 0.05."
        )
    try:
        return read_unit(" ".join(words))
    except UnitError as error:
        raise _Refused(error.code, error.reason, error.hint) from None
