"""The chi-square distribution against its simplest cases, a printed table and another library."""

from __future__ import annotations

from math import erfc, exp, sqrt

import pytest
from scipy.stats import chi2  # type: ignore[import-untyped]

from yieldnet.balance.chi_square import chi_square_limit, chi_square_tail

# Abramowitz and Stegun (1964), Handbook of Mathematical Functions, table 26.8, from memory.
TABLE = [(1, 3.84146), (2, 5.99147), (3, 7.81473), (5, 11.0705), (10, 18.3070), (30, 43.7729)]


@pytest.mark.parametrize("value", [0.0, 1e-9, 0.3, 2.0, 7.0, 40.0])
def test_one_and_two_degrees_are_well_known_functions(value: float) -> None:
    assert chi_square_tail(value, 1) == pytest.approx(erfc(sqrt(value / 2)), rel=1e-14)
    assert chi_square_tail(value, 2) == pytest.approx(exp(-value / 2), rel=1e-14)


@pytest.mark.parametrize("degrees", [1, 2, 3, 4, 5, 8, 17, 40, 101])
@pytest.mark.parametrize("value", [1e-6, 0.1, 1.0, 3.84, 12.0, 55.5, 300.0, 1300.0])
def test_the_tail_is_that_of_scipy(value: float, degrees: int) -> None:
    expected = float(chi2.sf(value, degrees))
    assert chi_square_tail(value, degrees) == pytest.approx(expected, rel=1e-11, abs=1e-300)


def test_the_tail_beyond_all_floats_is_zero() -> None:
    assert chi_square_tail(1e6, 1) == chi_square_tail(1e6, 6) == 0.0


@pytest.mark.parametrize(("degrees", "limit"), TABLE)
def test_the_limit_of_95_percent_is_that_of_the_table(degrees: int, limit: float) -> None:
    assert chi_square_limit(0.95, degrees) == pytest.approx(limit, rel=3e-6)


@pytest.mark.parametrize("level", [1e-6, 0.05, 0.5, 0.9, 0.999, 1 - 1e-9])
@pytest.mark.parametrize("degrees", [1, 2, 7, 40])
def test_the_limit_is_where_the_tail_is_what_is_left(level: float, degrees: int) -> None:
    limit = chi_square_limit(level, degrees)
    assert limit == pytest.approx(float(chi2.ppf(level, degrees)), rel=1e-6)
    assert chi_square_tail(limit, degrees) == pytest.approx(1 - level, rel=1e-9)


@pytest.mark.parametrize(("value", "degrees"), [(1.0, 0), (1.0, -2), (-0.1, 3)])
def test_no_test_without_degrees_or_with_a_negative_sum(value: float, degrees: int) -> None:
    with pytest.raises(ValueError, match="needs a degree of freedom and a sum of squares"):
        chi_square_tail(value, degrees)


@pytest.mark.parametrize("level", [0.0, 1.0, -0.5, 95.0])
def test_a_level_is_a_probability(level: float) -> None:
    with pytest.raises(ValueError, match=f"a level of {level} is no probability"):
        chi_square_limit(level, 2)
