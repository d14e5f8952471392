"""How numbers are written for people; the only place where they are rounded."""

from __future__ import annotations

from fractions import Fraction
from math import floor, log10
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterable

    from yieldnet.foundation.sourced import Assumption
    from yieldnet.optimum.ranges import Range

__all__ = [
    "DIGITS",
    "assumption_rows",
    "figure",
    "p_words",
    "percent",
    "probability",
    "range_text",
    "signed",
    "with_error",
    "with_sign",
]

DIGITS = 3
"""Significant digits of a number in a text: no cultivation is known better [-]."""


def figure(value: Fraction | float | None) -> str:
    """Number in three significant digits, whole numbers plain.

    Parameters
    ----------
    value : Fraction, float or None
        The number; ``None`` stands for no bound.

    Returns
    -------
    str
        Text without a power of ten.

    Examples
    --------
    >>> figure(Fraction(12, 7)), figure(Fraction(2)), figure(Fraction(1, 2000)), figure(None)
    ('1.71', '2', '0.000500', 'unbounded')
    """
    if value is None:
        return "unbounded"
    number = float(value)
    if number == round(number) and abs(number) < 10**6:
        return str(round(number))
    text = f"{number:#.{DIGITS}g}"
    if "e" in text:
        from decimal import Decimal

        text = format(Decimal(text), "f")
    return text.removesuffix(".")


def signed(value: float) -> str:
    """Number with its sign and two decimals, for standard deviations.

    Examples
    --------
    >>> signed(0.5)
    '+0.50'
    """
    return f"{value:+.2f}"


def with_sign(value: Fraction | None) -> str:
    """Number in three significant digits with its sign; ``0`` without.

    Examples
    --------
    >>> with_sign(Fraction(1, 2)), with_sign(Fraction(0))
    ('+0.500', '0')
    """
    return f"+{figure(value)}" if value is not None and value > 0 else figure(value)


def percent(value: Fraction | None) -> str:
    """Fraction of 1 as a whole percentage; empty for none.

    Examples
    --------
    >>> percent(Fraction(4, 7)), percent(None)
    ('57 %', '')
    """
    return "" if value is None else f"{float(100 * value):.0f} %"


def range_text(value: Range | None) -> str:
    """Range as ``low…high``, one number where the ends agree.

    Examples
    --------
    >>> from yieldnet.optimum.ranges import Range
    >>> range_text(Range(Fraction(0), Fraction(12, 7)))
    '0…1.71'
    """
    if value is None:
        return ""
    if value.low is None and value.high is None:
        return "unbounded"
    if value.single:
        return figure(value.low)
    low = "unbounded" if value.low is None else figure(value.low)
    return f"{low}…{figure(value.high)}"


def probability(value: float | None) -> str:
    """Probability in two significant digits; small ones as a bound.

    Examples
    --------
    >>> probability(0.0512), probability(1e-7)
    ('0.051', '< 0.0001')
    """
    if value is None:
        return "none left"
    return "< 0.0001" if value < 1e-4 else f"{value:.2g}"


def p_words(value: float) -> str:
    """A p value with its sign.

    Examples
    --------
    >>> p_words(0.0512), p_words(1e-7)
    ('p = 0.051', 'p < 0.0001')
    """
    text = probability(value)
    return f"p {text}" if text.startswith("<") else f"p = {text}"


def with_error(value: Fraction | float, sd: Fraction | float) -> str:
    """Value ± standard deviation: the latter in two digits, the value to the same place.

    Parameters
    ----------
    value, sd : Fraction or float
        Number and standard deviation in one unit.

    Returns
    -------
    str
        Text; without the error where there is none.

    Examples
    --------
    >>> with_error(1.23456, 0.0512), with_error(1234.5, 150.2), with_error(2, 0)
    ('1.235±0.051', '1234±150', '2')
    """
    size = float(sd)
    if not size:
        return figure(value)
    places = max(0, 1 - floor(log10(size)))
    return f"{float(value):.{places}f}±{size:.{places}f}"


def assumption_rows(assumptions: Iterable[Assumption]) -> tuple[tuple[str, str, str], ...]:
    """Assumptions as a screen shows them.

    Parameters
    ----------
    assumptions : iterable of Assumption
        In the order of the rows.

    Returns
    -------
    tuple of (str, str, str)
        Text, value with its unit (empty where there is none), source on one line.
    """
    return tuple(
        (
            item.text,
            "" if item.value is None else f"{figure(item.value)} {item.unit}".strip(),
            " ".join(item.source.split()),
        )
        for item in assumptions
    )
