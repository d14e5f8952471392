"""The chi-square distribution in closed form, against the one of scipy and a printed table: row E1.

Villadsen, Nielsen and Liden 2003, Bioreaction Engineering Principles, 2nd ed., Table 3.5, p. 85
(seen in the source): limits by degrees of freedom at six levels.
"""

from __future__ import annotations

from fractions import Fraction

import pytest

from tests.reference.rows import Printed
from yieldnet.balance.chi_square import chi_square_limit, chi_square_tail

LEVELS = (0.50, 0.75, 0.90, 0.95, 0.975, 0.99)
TABLE = {
    1: "0.46 1.32 2.71 3.84 5.02 6.63",
    2: "1.39 2.77 4.61 5.99 7.38 9.21",
    3: "2.37 4.11 6.25 7.81 9.35 11.3",
    4: "3.36 5.39 7.78 9.49 11.1 13.3",
    5: "4.35 6.63 9.24 11.1 12.8 15.1",
}
HALF = Printed("0.46", Fraction(6, 1000), "0.4549 to four places, which the table rounds up")
"""The first number of the table, the only one that is not the nearest with its digits."""
RELATIVE = 1e-12
"""Both are good to a few units in the last place; the tail magnifies an error of its argument by
half of it, up to some hundreds."""
DEGREES = (*range(1, 31), 40, 57, 60)
VALUES = (1e-6, 0.001, 0.1, 0.5, 1, 2, 3.84, 5.99, 10, 17.3, 40, 99, 250, 700, 1390)


@pytest.mark.parametrize("degrees", TABLE)
def test_printed_table_of_limits(degrees: int) -> None:
    printed = [HALF if text == HALF.text else Printed(text) for text in TABLE[degrees].split()]
    assert len(printed) == len(LEVELS)
    for level, number in zip(LEVELS, printed, strict=True):
        found = chi_square_limit(level, degrees)
        assert number.agrees(Fraction(found)), f"{found} at {level}"
        # And the other way round: a value printed to three digits has that chance.
        assert chi_square_tail(found, degrees) == pytest.approx(1 - level, rel=1e-9)


def test_table_is_whole() -> None:
    assert sum(len(line.split()) for line in TABLE.values()) == 30


@pytest.mark.parametrize("degrees", DEGREES)
def test_tail_is_that_of_scipy(degrees: int) -> None:
    from scipy.stats import chi2  # type: ignore[import-untyped]

    for value in VALUES:
        expected = float(chi2.sf(value, degrees))
        assert chi_square_tail(value, degrees) == pytest.approx(expected, rel=RELATIVE, abs=0)


@pytest.mark.parametrize("degrees", DEGREES)
def test_limit_is_that_of_scipy(degrees: int) -> None:
    from scipy.stats import chi2

    for level in (0.01, 0.05, 0.2, *LEVELS, 0.999, 0.99999):
        expected = float(chi2.ppf(level, degrees))
        assert chi_square_limit(level, degrees) == pytest.approx(expected, rel=RELATIVE, abs=0)


def test_edges() -> None:
    from scipy.stats import chi2

    assert chi_square_tail(0, 1) == chi_square_tail(0, 7) == 1
    # Below any float the chance is zero; near that it still holds, and with many degrees of
    # freedom a large sum of squares is nothing strange.
    assert chi_square_tail(1e6, 2) == 0
    assert chi_square_tail(1401, 1) == pytest.approx(chi2.sf(1401, 1), rel=1e-9)
    assert chi_square_tail(1500, 1500) == pytest.approx(chi2.sf(1500, 1500), rel=1e-9)
    tails = [chi_square_tail(value, 3) for value in (0, 1e-12, 1e-3, 1, 10, 100, 1000, 1500)]
    assert tails == sorted(tails, reverse=True)
    assert all(0 <= tail <= 1 for tail in tails)
    assert chi_square_limit(1e-9, 1) < 1e-15
    # With two degrees of freedom the tail is exp(-x/2).
    assert chi_square_limit(0.5, 2) == pytest.approx(2 * 0.6931471805599453, rel=RELATIVE)


@pytest.mark.parametrize(("value", "degrees"), [(1, 0), (-1e-9, 1), (1, -3)])
def test_tail_of_nothing_is_refused(value: float, degrees: int) -> None:
    with pytest.raises(ValueError, match="needs a degree of freedom and a sum of squares"):
        chi_square_tail(value, degrees)


@pytest.mark.parametrize("level", [0, 1, -0.1, 1.5])
def test_level_that_is_no_probability_is_refused(level: float) -> None:
    with pytest.raises(ValueError, match="no probability between 0 and 1"):
        chi_square_limit(level, 1)
