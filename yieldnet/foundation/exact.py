"""Exact numbers: text to fraction and back, and linear algebra in fractions.

Every number that a user writes is kept as the fraction it says; floats live in the engines only.
Elimination runs on ``python-flint``'s rational matrices.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import TextError

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = [
    "MAX_DIGITS",
    "MAX_EXPONENT",
    "Elimination",
    "Matrix",
    "NumberTextError",
    "WrittenNumber",
    "decimal_text",
    "eliminate",
    "inverse",
    "is_positive_definite",
    "product",
    "read_number",
    "root_of_square",
]

MAX_DIGITS = 40
"""Most digits a written number may have: beyond that it is a slip, or an attack on memory [-]."""
MAX_EXPONENT = 30
"""Largest power of ten a written number may have [-]."""

_NUMBER = re.compile(r"([+-]?)(\d*)(?:\.(\d*))?(?:[eE]([+-]?\d+))?", re.ASCII)
_RATIO = re.compile(r"([+-]?\d+)/(\d+)", re.ASCII)


class NumberTextError(TextError):
    """A text that is not a usable number."""

    usual_code = "YN201"


@dataclass(frozen=True, slots=True)
class WrittenNumber:
    """A number as somebody wrote it.

    Parameters
    ----------
    value : Fraction
        Exactly what was written.
    text : str
        The digits as written.
    last_place : Fraction or None
        Worth of one unit in the last written digit of a decimal; ``None`` for integers and
        fractions, which are exact.
    """

    value: Fraction
    text: str
    last_place: Fraction | None = None


def read_number(text: str) -> WrittenNumber:
    """Exact fraction that a text stands for.

    Parameters
    ----------
    text : str
        ``2``, ``0.25``, ``1/3``, ``2.5e-3``; a unicode minus is understood.

    Returns
    -------
    WrittenNumber
        Value, text and worth of the last digit.

    Raises
    ------
    NumberTextError
        If the text is no number, or is outside the bounds on digits and exponent.

    Examples
    --------
    >>> read_number("1.8").value
    Fraction(9, 5)
    >>> read_number("1.80").last_place
    Fraction(1, 100)
    >>> read_number("3/4").last_place is None
    True
    """
    plain = text.strip().replace("−", "-")
    if len(plain) > 4 * MAX_DIGITS:
        raise NumberTextError(f"a number of {len(plain)} characters is too long", code="YN202")
    if ratio := _RATIO.fullmatch(plain):
        over, under = ratio.groups()
        if len(over) > MAX_DIGITS or len(under) > MAX_DIGITS:
            raise NumberTextError(f"{plain!r} has more than {MAX_DIGITS} digits", code="YN202")
        if int(under) == 0:
            raise NumberTextError(
                f"{plain!r} divides by zero", "Write a non-zero divisor.", code="YN207"
            )
        return WrittenNumber(Fraction(int(over), int(under)), plain)
    found = _NUMBER.fullmatch(plain)
    if found is None or not (found[2] or found[3]):
        raise _why_not(plain)
    sign, whole, after, power = found.groups()
    digits = (whole or "") + (after or "")
    if len(digits) > MAX_DIGITS:
        raise NumberTextError(f"{plain!r} has more than {MAX_DIGITS} digits", code="YN202")
    if power and (len(power) > 4 or abs(int(power)) > MAX_EXPONENT):
        raise NumberTextError(
            f"{plain!r} has a power of ten beyond {MAX_EXPONENT}",
            "Write it in a unit in which the number is near 1.",
            code="YN202",
        )
    last = Fraction(10) ** (int(power or 0) - len(after or ""))
    value = int(digits) * last * (-1 if sign == "-" else 1)
    is_decimal = found[3] is not None or last < 1
    return WrittenNumber(value, plain, last if is_decimal else None)


def _why_not(text: str) -> NumberTextError:
    if re.fullmatch(r"[+-]?\d+,\d+", text):
        return NumberTextError(
            f"{text!r} is written with a decimal comma",
            f"Write it with a point: {text.replace(',', '.')}.",
        )
    if text.casefold().lstrip("+-.") in {"nan", "inf", "infinity"}:
        return NumberTextError(
            f"{text!r} is not a number that can be used", "Leave the entry out instead."
        )
    if text.endswith("%"):
        return NumberTextError(
            f"{text!r} is a percentage", "Write it as a fraction of 1, such as 0.05."
        )
    return NumberTextError(f"{text!r} is not a number")


def decimal_text(value: Fraction) -> str | None:
    """Decimal text of a fraction that ends after at most 12 places, else ``None``.

    Examples
    --------
    >>> decimal_text(Fraction(9, 5)), decimal_text(Fraction(1, 3))
    ('1.8', None)
    """
    rest = value.denominator
    twos = fives = 0
    while rest % 2 == 0:
        rest //= 2
        twos += 1
    while rest % 5 == 0:
        rest //= 5
        fives += 1
    places = max(twos, fives)
    if rest != 1 or places > 12:
        return None
    whole = abs(value.numerator) * 10**places // value.denominator
    digits = str(whole).rjust(places + 1, "0")
    text = digits if places == 0 else f"{digits[:-places]}.{digits[-places:]}"
    return ("-" if value < 0 else "") + text


def root_of_square(square: Fraction) -> Fraction:
    """Square root of a fraction, exact where it is rational, else to 15 significant digits.

    Parameters
    ----------
    square : Fraction
        A fraction that is not negative [-].

    Returns
    -------
    Fraction
        Its root, rounded down [-].

    Notes
    -----
    Only standard deviations of products and quotients need it: a relative variance is a sum of
    squares, its root is a rounded number from then on and used as that same number everywhere.

    Examples
    --------
    >>> root_of_square(Fraction(9, 16))
    Fraction(3, 4)
    """
    from math import isqrt

    over, under = isqrt(square.numerator), isqrt(square.denominator)
    if over * over == square.numerator and under * under == square.denominator:
        return Fraction(over, under)
    scale = 10 ** (15 + max(0, len(str(square.denominator)) - len(str(square.numerator))))
    return Fraction(isqrt(square.numerator * scale * scale // square.denominator), scale)


@dataclass(frozen=True, slots=True)
class Elimination:
    """Reduced row echelon form of a matrix.

    Parameters
    ----------
    rows : tuple of tuple of Fraction
        Non-zero rows, pivots equal to 1.
    pivots : tuple of int
        Column of each row's pivot.
    columns : int
        Number of columns [-].
    """

    rows: tuple[tuple[Fraction, ...], ...]
    pivots: tuple[int, ...]
    columns: int

    @property
    def rank(self) -> int:
        """Rank of the matrix [-]."""
        return len(self.pivots)


def eliminate(rows: Sequence[Sequence[Fraction]], columns: int) -> Elimination:
    """Reduced row echelon form in exact fractions.

    Parameters
    ----------
    rows : sequence of sequence of Fraction
        The matrix, row by row.
    columns : int
        Number of columns [-].

    Returns
    -------
    Elimination
        Non-zero rows and their pivots.

    Examples
    --------
    >>> eliminate([[Fraction(2), Fraction(4)], [Fraction(1), Fraction(2)]], 2).rank
    1
    """
    if not rows or columns == 0:
        return Elimination((), (), columns)
    from flint import fmpq, fmpq_mat

    matrix = fmpq_mat(
        len(rows),
        columns,
        [fmpq(v.numerator, v.denominator) if v else fmpq(0) for row in rows for v in row],
    )
    reduced, rank = matrix.rref()
    kept: list[tuple[Fraction, ...]] = []
    pivots: list[int] = []
    for i in range(rank):
        row = tuple(
            Fraction(int(entry.p), int(entry.q)) if entry else Fraction(0)
            for entry in (reduced[i, j] for j in range(columns))
        )
        kept.append(row)
        pivots.append(next(j for j, entry in enumerate(row) if entry))
    return Elimination(tuple(kept), tuple(pivots), columns)


Matrix = tuple[tuple[Fraction, ...], ...]
"""Rows of fractions."""


def inverse(matrix: Sequence[Sequence[Fraction]]) -> Matrix:
    """Inverse of a square matrix in exact fractions.

    Parameters
    ----------
    matrix : sequence of sequence of Fraction
        Square, row by row.

    Returns
    -------
    tuple of tuple of Fraction
        Its inverse.

    Raises
    ------
    ZeroDivisionError
        If the matrix is singular.

    Examples
    --------
    >>> inverse([[Fraction(2), Fraction(0)], [Fraction(0), Fraction(4)]])[1][1]
    Fraction(1, 4)
    """
    size = len(matrix)
    one, zero = Fraction(1), Fraction(0)
    wide = [(*row, *(one if i == j else zero for j in range(size))) for i, row in enumerate(matrix)]
    form = eliminate(wide, 2 * size)
    if form.pivots != tuple(range(size)):
        raise ZeroDivisionError("a singular matrix has no inverse")
    return tuple(row[size:] for row in form.rows)


def product(left: Sequence[Sequence[Fraction]], right: Sequence[Sequence[Fraction]]) -> Matrix:
    """Product of two matrices in exact fractions.

    Parameters
    ----------
    left, right : sequence of sequence of Fraction
        Row by row; as many columns on the left as rows on the right.

    Returns
    -------
    tuple of tuple of Fraction
        Their product.

    Examples
    --------
    >>> product([[Fraction(1), Fraction(2)]], [[Fraction(3)], [Fraction(4)]])
    ((Fraction(11, 1),),)
    """
    columns = tuple(zip(*right, strict=True))
    return tuple(
        tuple(
            sum((a * b for a, b in zip(row, column, strict=True) if a and b), Fraction(0))
            for column in columns
        )
        for row in left
    )


def is_positive_definite(matrix: Sequence[Sequence[Fraction]]) -> bool:
    """Whether a symmetric matrix is positive definite, by exact pivots without exchanges.

    Parameters
    ----------
    matrix : sequence of sequence of Fraction
        Symmetric, row by row.

    Returns
    -------
    bool
        ``False`` as soon as a pivot is not positive.

    Examples
    --------
    >>> is_positive_definite([[Fraction(1), Fraction(1)], [Fraction(1), Fraction(1)]])
    False
    """
    rows = [list(row) for row in matrix]
    for i, row in enumerate(rows):
        if row[i] <= 0:
            return False
        for other in rows[i + 1 :]:
            if other[i]:
                share = other[i] / row[i]
                for j in range(i, len(rows)):
                    other[j] -= share * row[j]
    return True
