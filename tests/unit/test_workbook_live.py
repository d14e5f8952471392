"""Formulas of the workbook: their text, brackets included, comes to their value."""

from __future__ import annotations

import math
from fractions import Fraction

import pytest

from yieldnet.report.workbook_live import (
    Live,
    Place,
    all_of,
    any_of,
    at_least_zero,
    count_of,
    exponential,
    if_then,
    is_number,
    largest,
    live,
    logarithm,
    magnitude,
    power_of_ten,
    rounded_up,
    sum_of,
    sum_of_magnitudes,
    sum_of_products,
)

TWO, SEVEN = live(2), live(7)
SUMS = [1 + SEVEN, TWO + SEVEN, TWO - SEVEN, -TWO, 1 - SEVEN, live(-3)]
PRODUCTS = [TWO * SEVEN, TWO / SEVEN, 5 / SEVEN, 3 * TWO]
PARTS = [TWO, live(Fraction(1, 3)), live(1e-7), *SUMS, *PRODUCTS]


def _cell(value: float | str, row: int, column: int = 2) -> Live:
    place = Place(sheet="a b", column=column, row=row)
    return Live(text=place.whole, value=value, place=place)


@pytest.mark.parametrize("first", PARTS, ids=lambda item: item.text)
@pytest.mark.parametrize("second", PARTS, ids=lambda item: item.text)
def test_brackets_stand_where_they_are_needed(first: Live, second: Live) -> None:
    # The grammar of these formulas is that of Python, too.
    for formula in (first + second, first - second, first * second, first / second, -first):
        assert eval(formula.text) == pytest.approx(formula.value)


def test_brackets_do_not_stand_where_they_are_not_needed() -> None:
    assert (TWO * SEVEN + 1 - TWO).text == "2*7+1-2"
    assert (TWO - (SEVEN + 1)).text == "2-(7+1)"
    assert (TWO / (SEVEN * 3)).text == "2/(7*3)"
    assert (TWO * -SEVEN).text == "2*(-7)"


@pytest.mark.parametrize(
    ("condition", "text", "holds"),
    [
        (TWO.below(SEVEN), "2<7", True),
        (TWO.at_most(2), "2<=2", True),
        (TWO.above(SEVEN - 1), "2>7-1", False),
        (TWO.at_least(3), "2>=3", False),
        (live("none").same_as("none"), '"none"="none"', True),
        (all_of([TWO.below(3), TWO.below(1)]), "AND(2<3,2<1)", False),
        (any_of([TWO.below(3), TWO.below(1)]), "OR(2<3,2<1)", True),
        (is_number(live("none")), 'ISNUMBER("none")', False),
    ],
)
def test_conditions(condition: Live, text: str, holds: bool) -> None:
    assert (condition.text, condition.value) == (text, holds)


def test_functions() -> None:
    assert if_then(TWO.below(1), "small", SEVEN).value == 7
    assert if_then(TWO.below(1), "small", SEVEN).text == 'IF(2<1,"small",7)'
    assert at_least_zero(-TWO).value == 0
    assert largest([TWO, SEVEN]).value == 7
    assert magnitude(-TWO).value == 2
    assert exponential(TWO).value == math.exp(2)
    assert logarithm(TWO).value == math.log(2)
    assert power_of_ten(-TWO).value == pytest.approx(0.01)
    assert rounded_up(SEVEN / 2).text == "ROUNDUP(ROUND(7/2,9),0)"
    assert rounded_up(SEVEN / 2).value == 4


def test_what_cannot_be_told_is_no_number() -> None:
    assert math.isnan((TWO / 0).number)
    assert math.isnan((live("none") + 1).number)
    assert math.isnan(logarithm(live(0)).number)
    # A cell that is empty counts as 0, as in a spreadsheet.
    assert (_cell("", 1) * 2 + 1).value == 1
    assert is_number(_cell("", 1)).value is False


def test_ranges_are_written_by_their_ends() -> None:
    values: tuple[float | str, ...] = (1.0, -2.0, "none")
    column = [_cell(value, row) for row, value in enumerate(values, start=5)]
    other = [_cell(3.0, row, 4) for row in (5, 6)]
    across = [_cell(3.0, 5, place) for place in (4, 5)]
    assert sum_of(column).text == "SUM('a b'!$B$5:$B$7)"
    assert sum_of(column).value == -1
    assert sum_of(column[:1]).text == "SUM('a b'!$B$5)"
    assert count_of(column).value == 2
    assert sum_of(across).text == "SUM('a b'!$D$5:$E$5)"
    assert sum_of_products(column[:2], other).text == "SUMPRODUCT('a b'!$B$5:$B$6,'a b'!$D$5:$D$6)"
    assert sum_of_products(column[:2], other).value == -3
    assert sum_of_magnitudes(column[:2], other).value == 9
    with pytest.raises(AssertionError, match="have one shape"):
        sum_of_products(column[:2], across)
    with pytest.raises(AssertionError, match="side by side"):
        sum_of([column[0], column[2]])


def test_a_quote_in_a_text_is_doubled() -> None:
    assert live('a "b"').text == '"a ""b"""'
