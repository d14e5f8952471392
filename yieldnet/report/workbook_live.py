"""Live numbers of a workbook: a formula as text together with what it comes to now.

In: numbers, texts and cells. Out: formulas that a spreadsheet recalculates, each with the value
that is stored beside it, so that a viewer which does not calculate shows the same. Only functions
that every spreadsheet knows are used, and no array formulas.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = [
    "Live",
    "Place",
    "Value",
    "all_of",
    "any_of",
    "at_least_zero",
    "count_of",
    "exponential",
    "if_then",
    "is_number",
    "largest",
    "live",
    "logarithm",
    "magnitude",
    "power_of_ten",
    "rounded_up",
    "sum_of",
    "sum_of_magnitudes",
    "sum_of_products",
]

Value = float | str | bool
"""What a cell comes to."""
_ATOM, _PRODUCT, _SUM, _COMPARISON = 3, 2, 1, 0
_STEADY = 9
"""Decimals to which a number is rounded before it is rounded up: 7.0000000000000009 is 7 [-]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Place:
    """Where a cell stands.

    Parameters
    ----------
    sheet : str
        Name of the sheet.
    column, row : int
        From 1 on [-].
    """

    sheet: str
    column: int
    row: int

    @property
    def text(self) -> str:
        """Address without the sheet, as ``$B$5``."""
        from openpyxl.utils import get_column_letter

        return f"${get_column_letter(self.column)}${self.row}"

    @property
    def whole(self) -> str:
        """Address with the sheet, as ``'cost'!$B$5``."""
        return f"'{self.sheet}'!{self.text}"


@dataclass(frozen=True, slots=True, kw_only=True)
class Live:
    """A formula and what it comes to.

    Parameters
    ----------
    text : str
        Formula without the sign of equality.
    value : float, str or bool
        What it comes to; not a number where it cannot be told.
    level : int
        How firmly its parts hold together: from 0, a comparison, to 3, a single term [-].
    place : Place or None
        The cell, if it is one.

    Examples
    --------
    >>> three = live(3)
    >>> ((three + 1) / (three * 2)).text, ((three + 1) / (three * 2)).value
    ('(3+1)/(3*2)', 0.6666666666666666)
    >>> (live("none") * 2).value
    nan
    """

    text: str
    value: Value
    level: int = _ATOM
    place: Place | None = None

    @property
    def number(self) -> float:
        """What it comes to, as a number: 0 for an empty cell, not a number for a text."""
        if isinstance(self.value, str):
            return math.nan if self.value else 0.0
        return float(self.value)

    def _within(self, level: int) -> str:
        return self.text if self.level >= level else f"({self.text})"

    def _joined(self, sign: str, other: Operand, level: int, value: float) -> Live:
        # The right side is bracketed at the same level, too: a - (b + c), a / (b * c).
        right = live(other)._within(level + (sign in "-/" or right_is_signed(live(other))))
        return Live(text=f"{self._within(level)}{sign}{right}", value=value, level=level)

    def __add__(self, other: Operand) -> Live:
        return self._joined("+", other, _SUM, self.number + live(other).number)

    def __radd__(self, other: Number) -> Live:
        return live(other) + self

    def __sub__(self, other: Operand) -> Live:
        return self._joined("-", other, _SUM, self.number - live(other).number)

    def __rsub__(self, other: Number) -> Live:
        return live(other) - self

    def __mul__(self, other: Operand) -> Live:
        return self._joined("*", other, _PRODUCT, self.number * live(other).number)

    def __rmul__(self, other: Number) -> Live:
        return live(other) * self

    def __truediv__(self, other: Operand) -> Live:
        by = live(other).number
        return self._joined("/", other, _PRODUCT, self.number / by if by else math.nan)

    def __rtruediv__(self, other: Number) -> Live:
        return live(other) / self

    def __neg__(self) -> Live:
        return Live(text=f"-{self._within(_ATOM)}", value=-self.number, level=_SUM)

    def _compared(self, sign: str, other: Operand, holds: bool) -> Live:
        text = f"{self._within(_SUM)}{sign}{live(other)._within(_SUM)}"
        return Live(text=text, value=holds, level=_COMPARISON)

    def below(self, other: Operand) -> Live:
        """Whether it is smaller than something."""
        return self._compared("<", other, self.number < live(other).number)

    def at_most(self, other: Operand) -> Live:
        """Whether it is at most something."""
        return self._compared("<=", other, self.number <= live(other).number)

    def above(self, other: Operand) -> Live:
        """Whether it is larger than something."""
        return self._compared(">", other, self.number > live(other).number)

    def at_least(self, other: Operand) -> Live:
        """Whether it is at least something."""
        return self._compared(">=", other, self.number >= live(other).number)

    def same_as(self, other: Operand) -> Live:
        """Whether it is the same number or text."""
        return self._compared("=", other, self.value == live(other).value)


Number = Fraction | float | int
Operand = Live | Number | str


def right_is_signed(item: Live) -> bool:
    """Whether a formula begins with a sign, which may not follow another one."""
    return item.text.startswith("-")


def live(value: Operand) -> Live:
    """A number or text as a formula; a formula as it is.

    Parameters
    ----------
    value : Live, Fraction, float, int or str
        The number or text.

    Returns
    -------
    Live
        Its formula.

    Examples
    --------
    >>> live(Fraction(1, 2)).text, live("none").text
    ('0.5', '"none"')
    """
    if isinstance(value, Live):
        return value
    if isinstance(value, str):
        return Live(text='"' + value.replace('"', '""') + '"', value=value)
    number = float(value)
    text = str(int(number)) if number.is_integer() and abs(number) < 1e15 else repr(number)
    return Live(text=text.replace("e", "E"), value=number, level=_SUM if number < 0 else _ATOM)


def _call(name: str, value: Value, *parts: str) -> Live:
    return Live(text=f"{name}({','.join(parts)})", value=value)


def if_then(condition: Live, then: Operand, otherwise: Operand) -> Live:
    """One of two things, by a condition."""
    first, second = live(then), live(otherwise)
    return _call(
        "IF",
        first.value if condition.value is True else second.value,
        condition.text,
        first.text,
        second.text,
    )


def is_number(item: Live) -> Live:
    """Whether a cell holds a number rather than a text."""
    return _call("ISNUMBER", not isinstance(item.value, str), item.text)


def all_of(conditions: Sequence[Live]) -> Live:
    """Whether all conditions hold."""
    held = all(item.value is True for item in conditions)
    return _call("AND", held, *(item.text for item in conditions))


def any_of(conditions: Sequence[Live]) -> Live:
    """Whether any condition holds."""
    held = any(item.value is True for item in conditions)
    return _call("OR", held, *(item.text for item in conditions))


def at_least_zero(item: Live) -> Live:
    """A number, or 0 where it is negative."""
    return _call("MAX", max(0.0, item.number), "0", item.text)


def largest(items: Sequence[Live]) -> Live:
    """Largest of several numbers."""
    return _call("MAX", max(item.number for item in items), *(item.text for item in items))


def magnitude(item: Live) -> Live:
    """A number without its sign."""
    return _call("ABS", abs(item.number), item.text)


def exponential(item: Live) -> Live:
    """The exponential."""
    return _call("EXP", math.exp(item.number), item.text)


def logarithm(item: Live) -> Live:
    """The natural logarithm."""
    number = item.number
    return _call("LN", math.log(number) if number > 0 else math.nan, item.text)


def power_of_ten(item: Live) -> Live:
    """Ten to a power."""
    return _call("POWER", 10.0**item.number, "10", item.text)


def rounded_up(item: Live) -> Live:
    """Next whole number, steady against the last digits.

    Examples
    --------
    >>> rounded_up(live(7.0000000000000009)).value, rounded_up(live(6.25)).value
    (7.0, 7.0)
    """
    steady = _call("ROUND", round(item.number, _STEADY), item.text, str(_STEADY))
    return _call("ROUNDUP", float(math.ceil(steady.number)), steady.text, "0")


def _span(cells: Sequence[Live]) -> str:
    """Address of cells that stand in one row or column, without a gap."""
    places = [item.place for item in cells]
    first, last = places[0], places[-1]
    assert first is not None
    assert last is not None
    for k, place in enumerate(places):
        down = Place(sheet=first.sheet, column=first.column, row=first.row + k)
        right = Place(sheet=first.sheet, column=first.column + k, row=first.row)
        assert place in (down, right), "cells of a range stand side by side"
    return first.whole if len(cells) == 1 else f"{first.whole}:{last.text}"


def _same_shape(first: Sequence[Live], second: Sequence[Live]) -> None:
    """Refuse a row beside a column, of which a spreadsheet makes an error."""
    upright = [len({item.place.row for item in cells if item.place}) for cells in (first, second)]
    assert upright[0] == upright[1], "ranges that are multiplied have one shape"


def sum_of(cells: Sequence[Live]) -> Live:
    """Sum of cells that stand side by side; texts count as nothing."""
    value = math.fsum(item.number for item in cells if not isinstance(item.value, str))
    return _call("SUM", value, _span(cells))


def count_of(cells: Sequence[Live]) -> Live:
    """How many of some cells hold a number."""
    texts = (item.text for item in cells)
    return _call("COUNT", float(sum(not isinstance(item.value, str) for item in cells)), *texts)


def sum_of_products(first: Sequence[Live], second: Sequence[Live]) -> Live:
    """Sum of the products of two ranges of cells of one shape."""
    _same_shape(first, second)
    pairs = zip(first, second, strict=True)
    value = math.fsum(one.number * other.number for one, other in pairs)
    return _call("SUMPRODUCT", value, _span(first), _span(second))


def sum_of_magnitudes(first: Sequence[Live], second: Sequence[Live]) -> Live:
    """Sum of the products of two ranges, each without its sign."""
    _same_shape(first, second)
    pairs = zip(first, second, strict=True)
    value = math.fsum(abs(one.number * other.number) for one, other in pairs)
    return _call("SUMPRODUCT", value, f"ABS({_span(first)})", f"ABS({_span(second)})")
