"""How numbers are written for people."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.optimum.ranges import Range
from yieldnet.report.figures import figure, percent, range_text, signed, with_sign

F = Fraction


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (F(0), "0"),
        (F(2), "2"),
        (F(-2), "-2"),
        (F(12, 7), "1.71"),
        (F(-12, 7), "-1.71"),
        (F(1, 3), "0.333"),
        (F(1, 2), "0.500"),
        (F(1234, 10), "123"),
        (F(12345, 10), "1230"),
        (F(123_456_789, 10), "12300000"),
        (F(1, 2000), "0.000500"),
        (F(1, 3_000_000), "0.000000333"),
        (F(9996, 10_000), "1.00"),
        (F(9996, 10), "1000"),
        (F(999_999), "999999"),
        (F(10**6), "1000000"),
        (1.5, "1.50"),
        (-0.0, "0"),
        (None, "unbounded"),
    ],
)
def test_a_figure_has_three_digits_and_never_a_power_of_ten(
    value: Fraction | float | None, text: str
) -> None:
    assert figure(value) == text


@pytest.mark.parametrize(("value", "text"), [(0.5, "+0.50"), (-1.005, "-1.00"), (0.0, "+0.00")])
def test_standard_deviations_are_signed(value: float, text: str) -> None:
    assert signed(value) == text


@pytest.mark.parametrize(
    ("value", "text"),
    [(F(1, 2), "+0.500"), (F(-1, 2), "-0.500"), (F(0), "0"), (None, "unbounded")],
)
def test_a_gain_has_its_sign(value: Fraction | None, text: str) -> None:
    assert with_sign(value) == text


@pytest.mark.parametrize(
    ("value", "text"),
    [(F(4, 7), "57 %"), (F(1), "100 %"), (F(0), "0 %"), (F(3, 2), "150 %"), (None, "")],
)
def test_a_share_is_a_whole_percentage(value: Fraction | None, text: str) -> None:
    assert percent(value) == text


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (Range(F(0), F(12, 7)), "0…1.71"),
        (Range(F(-1, 2), F(1, 2)), "-0.500…0.500"),
        (Range(F(1, 3), F(1, 3)), "0.333"),
        (Range(F(0), None), "0…unbounded"),
        (Range(None, F(6)), "unbounded…6"),
        (Range(None, None), "unbounded"),
        (None, ""),
    ],
)
def test_a_range_names_both_ends_and_says_unbounded(value: Range | None, text: str) -> None:
    assert range_text(value) == text
