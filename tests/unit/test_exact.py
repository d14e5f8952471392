"""Exact numbers: what a text says, and what it must not be able to do."""

from __future__ import annotations

from fractions import Fraction
from math import sqrt

import pytest

from yieldnet.foundation.exact import (
    MAX_DIGITS,
    MAX_EXPONENT,
    NumberTextError,
    WrittenNumber,
    decimal_text,
    eliminate,
    inverse,
    is_positive_definite,
    product,
    read_number,
    root_of_square,
)

F = Fraction


@pytest.mark.parametrize(
    ("text", "value", "last_place"),
    [
        ("2", F(2), None),
        ("0", F(0), None),
        ("007", F(7), None),
        ("1.8", F(9, 5), F(1, 10)),
        ("1.80", F(9, 5), F(1, 100)),
        (".5", F(1, 2), F(1, 10)),
        ("5.", F(5), F(1)),
        ("1/3", F(1, 3), None),
        ("-6/4", F(-3, 2), None),
        ("+2", F(2), None),
        ("-0.25", F(-1, 4), F(1, 100)),
        ("−0.25", F(-1, 4), F(1, 100)),
        ("  3 ", F(3), None),
        ("2e3", F(2000), None),
        ("2E+3", F(2000), None),
        ("2e-3", F(1, 500), F(1, 1000)),
        ("2.5e-3", F(1, 400), F(1, 10_000)),
        ("2.5e3", F(2500), F(100)),
        ("1e30", F(10) ** 30, None),
        ("1e-30", F(1, 10**30), F(1, 10**30)),
        ("1" * MAX_DIGITS, F(int("1" * MAX_DIGITS)), None),
    ],
)
def test_a_number_is_read_as_the_fraction_it_says(
    text: str, value: Fraction, last_place: Fraction | None
) -> None:
    number = read_number(text)
    assert number.value == value
    assert number.last_place == last_place


def test_a_number_keeps_its_text_with_a_plain_minus() -> None:
    assert read_number(" −1.50 ") == WrittenNumber(F(-3, 2), "-1.50", F(1, 100))


@pytest.mark.parametrize(
    ("text", "code", "reason"),
    [
        ("1,5", "YN201", "decimal comma"),
        ("5%", "YN201", "is a percentage"),
        ("5 %", "YN201", "is a percentage"),
        ("nan", "YN201", "not a number that can be used"),
        ("NaN", "YN201", "not a number that can be used"),
        (".nan", "YN201", "not a number that can be used"),
        ("-inf", "YN201", "not a number that can be used"),
        ("+.Infinity", "YN201", "not a number that can be used"),
        ("", "YN201", "'' is not a number"),
        (".", "YN201", "'.' is not a number"),
        ("-", "YN201", "'-' is not a number"),
        ("e5", "YN201", "'e5' is not a number"),
        ("five", "YN201", "'five' is not a number"),
        ("1.2.3", "YN201", "is not a number"),
        ("1_000", "YN201", "is not a number"),
        ("0x1F", "YN201", "is not a number"),
        ("1.5/2", "YN201", "is not a number"),
        ("1/-2", "YN201", "is not a number"),
        ("1 / 2", "YN201", "is not a number"),
        ("1/0", "YN207", "divides by zero"),
        ("1e31", "YN202", f"power of ten beyond {MAX_EXPONENT}"),
        ("1e-31", "YN202", f"power of ten beyond {MAX_EXPONENT}"),
        ("1e10000000", "YN202", f"power of ten beyond {MAX_EXPONENT}"),
        ("1" * (MAX_DIGITS + 1), "YN202", f"more than {MAX_DIGITS} digits"),
        ("0." + "1" * MAX_DIGITS, "YN202", f"more than {MAX_DIGITS} digits"),
        ("1" * (MAX_DIGITS + 1) + "/2", "YN202", f"more than {MAX_DIGITS} digits"),
        ("2/" + "1" * (MAX_DIGITS + 1), "YN202", f"more than {MAX_DIGITS} digits"),
        ("1" * 100_000, "YN202", "100000 characters is too long"),
    ],
)
def test_a_text_that_is_no_usable_number_says_why(text: str, code: str, reason: str) -> None:
    with pytest.raises(NumberTextError, match=reason) as caught:
        read_number(text)
    assert caught.value.code == code
    assert caught.value.reason == str(caught.value)


@pytest.mark.parametrize(
    ("text", "hint"),
    [
        ("1,5", "Write it with a point: 1.5."),
        ("5%", "Write it as a fraction of 1, such as 0.05."),
        ("nan", "Leave the entry out instead."),
        ("1/0", "Write a non-zero divisor."),
        ("1e31", "Write it in a unit in which the number is near 1."),
    ],
)
def test_a_refused_number_comes_with_a_way_out(text: str, hint: str) -> None:
    with pytest.raises(NumberTextError, match=r".") as caught:
        read_number(text)
    assert caught.value.hint == hint


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (F(9, 5), "1.8"),
        (F(-9, 5), "-1.8"),
        (F(3), "3"),
        (F(0), "0"),
        (F(1, 8), "0.125"),
        (F(1, 20), "0.05"),
        (F(1, 10**12), "0.000000000001"),
        (F(1, 10**13), None),
        (F(1, 3), None),
        (F(1, 2**13), None),
    ],
)
def test_decimal_text_is_exact_or_none(value: Fraction, text: str | None) -> None:
    assert decimal_text(value) == text


@pytest.mark.parametrize("root", [F(3, 4), F(0), F(7), F(1, 10**20)])
def test_the_root_of_a_rational_square_is_exact(root: Fraction) -> None:
    assert root_of_square(root * root) == root


@pytest.mark.parametrize("square", [F(2), F(1, 3), F(2, 10**40), F(7 * 10**30)])
def test_another_root_is_rounded_down_to_fifteen_digits(square: Fraction) -> None:
    root = root_of_square(square)
    assert root * root < square
    assert (root * (1 + F(1, 10**14))) ** 2 > square
    assert float(root) == pytest.approx(sqrt(square), rel=1e-13)


def test_elimination_gives_the_reduced_form() -> None:
    # x + 2y + 3z = 6 and 2x + 4y + 7z = 13: z = 1, x + 2y = 3.
    form = eliminate([[F(1), F(2), F(3), F(6)], [F(2), F(4), F(7), F(13)]], 4)
    assert form.rows == ((F(1), F(2), F(0), F(3)), (F(0), F(0), F(1), F(1)))
    assert form.pivots == (0, 2)
    assert form.rank == 2


@pytest.mark.parametrize(
    ("rows", "columns"), [([], 3), ([[], []], 0), ([[F(0), F(0)], [F(0), F(0)]], 2)]
)
def test_elimination_of_nothing_has_rank_zero(rows: list[list[Fraction]], columns: int) -> None:
    form = eliminate(rows, columns)
    assert form.rank == 0
    assert form.rows == ()
    assert form.columns == columns


def test_elimination_keeps_large_fractions_exact() -> None:
    small = F(1, 10**25)
    form = eliminate([[F(1), small], [F(1), F(0)]], 2)
    assert form.rows == ((F(1), F(0)), (F(0), F(1)))


# Matrices ----------------------------------------------------------------------------------------


def test_the_inverse_by_hand() -> None:
    # Determinant 4 · 6 - 7 · 2 = 10.
    assert inverse([[F(4), F(7)], [F(2), F(6)]]) == (
        (F(6, 10), F(-7, 10)),
        (F(-2, 10), F(4, 10)),
    )
    assert inverse([]) == ()
    # Rows must be exchanged on the way.
    assert inverse([[F(0), F(1)], [F(2), F(0)]]) == ((F(0), F(1, 2)), (F(1), F(0)))


@pytest.mark.parametrize("size", [1, 2, 3, 5])
def test_a_matrix_times_its_inverse_is_one(size: int) -> None:
    # The Hilbert matrix: almost singular in floats, exact in fractions.
    matrix = [[F(1, i + j + 1) for j in range(size)] for i in range(size)]
    unit = tuple(tuple(F(i == j) for j in range(size)) for i in range(size))
    assert product(matrix, inverse(matrix)) == unit
    assert product(inverse(matrix), matrix) == unit


@pytest.mark.parametrize(
    "matrix", [[[F(0)]], [[F(1), F(2)], [F(2), F(4)]], [[F(0), F(0)], [F(0), F(1)]]]
)
def test_a_singular_matrix_has_no_inverse(matrix: list[list[Fraction]]) -> None:
    with pytest.raises(ZeroDivisionError, match="a singular matrix has no inverse"):
        inverse(matrix)


def test_the_product_by_hand() -> None:
    left = [[F(1), F(2), F(0)], [F(0), F(-1), F(3)]]
    right = [[F(1)], [F(1, 2)], [F(2)]]
    assert product(left, right) == ((F(2),), (F(11, 2),))
    assert product([], right) == ()
    with pytest.raises(ValueError, match="zip"):
        product(left, right[:2])


@pytest.mark.parametrize(
    ("matrix", "definite"),
    [
        ([], True),
        ([[F(1)]], True),
        ([[F(0)]], False),
        ([[F(-1)]], False),
        ([[F(1), F(9, 10)], [F(9, 10), F(1)]], True),
        ([[F(1), F(1)], [F(1), F(1)]], False),
        ([[F(1), F(2)], [F(2), F(1)]], False),
        # All pairs are possible; the three together are not.
        (
            [
                [F(1), F(9, 10), F(-9, 10)],
                [F(9, 10), F(1), F(9, 10)],
                [F(-9, 10), F(9, 10), F(1)],
            ],
            False,
        ),
        # Determinant 1 - 2 · 0.49 = 0.02, and with 3/4 it is -1/8.
        ([[F(1), F(7, 10), F(0)], [F(7, 10), F(1), F(7, 10)], [F(0), F(7, 10), F(1)]], True),
        ([[F(1), F(3, 4), F(0)], [F(3, 4), F(1), F(3, 4)], [F(0), F(3, 4), F(1)]], False),
    ],
)
def test_a_matrix_is_positive_definite_by_its_pivots(
    matrix: list[list[Fraction]], definite: bool
) -> None:
    assert is_positive_definite(matrix) is definite
