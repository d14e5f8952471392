"""The straight line where there is little to go by."""

from __future__ import annotations

import pytest

from yieldnet.rates.straight_line import chance_beyond, fit_straight_line


def test_two_points_with_known_errors_have_a_line_and_no_test() -> None:
    line = fit_straight_line([0.0, 2.0], [1.0, 2.0], [0.1, 0.1])
    assert (line.slope, line.intercept) == (0.5, 1.0)
    # Each point moves the slope by 1/2 of its error: 0.1 sqrt(2) / 2.
    assert line.slope_sd == pytest.approx(0.1 * 2**0.5 / 2)
    assert line.intercept_sd == pytest.approx(0.1)
    assert line.degrees_of_freedom == 0
    assert line.p_value is None
    assert line.residual_sd is None


def test_two_points_without_errors_say_nothing_of_them() -> None:
    with pytest.raises(ValueError, match="neither errors nor a scatter"):
        fit_straight_line([0.0, 2.0], [1.0, 2.0])


def test_a_level_line_explains_nothing() -> None:
    line = fit_straight_line([0.0, 1.0, 2.0], [4.0, 4.0, 4.0])
    assert line.slope == 0
    assert line.r_squared is None


@pytest.mark.parametrize(("x", "y"), [([1.0], [2.0]), ([1.0, 1.0], [2.0, 3.0])])
def test_no_line_through_one_place(x: list[float], y: list[float]) -> None:
    with pytest.raises(ValueError, match="too few different x"):
        fit_straight_line(x, y)


def test_errors_must_be_errors() -> None:
    with pytest.raises(ValueError, match="not positive"):
        fit_straight_line([0.0, 1.0], [0.0, 1.0], [0.1, 0.0])


def test_no_chance_without_degrees_of_freedom() -> None:
    assert chance_beyond(1.0, 0) is None
