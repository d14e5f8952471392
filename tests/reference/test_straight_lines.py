"""Straight lines against the certified data sets of NIST, and against other ways to the same line.

Source: National Institute of Standards and Technology, Statistical Reference Datasets (StRD),
linear regression: Norris (Norris, J., NIST, calibration of ozone monitors), NoInt1 and NoInt2
(Eberhardt, K., NIST). Data and certified values from memory; a wrong digit in either could not
give the certified values to nine digits.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pytest
from scipy.optimize import curve_fit  # type: ignore[import-untyped]
from scipy.stats import chi2  # type: ignore[import-untyped]

from yieldnet.rates.straight_line import chance_beyond, fit_straight_line

NINE_DIGITS = 1e-9
"""Relative tolerance; NIST certifies 15 digits, sums in double precision keep at least 9 here."""


@dataclass(frozen=True)
class Certified:
    x: tuple[float, ...]
    y: tuple[float, ...]
    slope: float
    slope_sd: float
    intercept: float | None
    intercept_sd: float
    residual_sd: float
    r_squared: float


# fmt: off
NORRIS = Certified(
    x=(0.2, 337.4, 118.2, 884.6, 10.1, 226.5, 666.3, 996.3, 448.6, 777.0, 558.2, 0.4, 0.6, 775.5,
       666.9, 338.0, 447.5, 11.6, 556.0, 228.1, 995.8, 887.6, 120.2, 0.3, 0.3, 556.8, 339.1, 887.2,
       999.0, 779.0, 11.1, 118.3, 229.2, 669.1, 448.9, 0.5),
    y=(0.1, 338.8, 118.1, 888.0, 9.2, 228.1, 668.5, 998.5, 449.1, 778.9, 559.2, 0.3, 0.1, 778.1,
       668.8, 339.3, 448.9, 10.8, 557.7, 228.3, 998.0, 888.8, 119.6, 0.3, 0.6, 557.6, 339.3, 888.0,
       998.5, 778.9, 10.2, 117.6, 228.9, 668.4, 449.2, 0.2),
    slope=1.00211681802045, slope_sd=0.429796848199937e-3,
    intercept=-0.262323073774029, intercept_sd=0.232818234301152,
    residual_sd=0.884796396144373, r_squared=0.999993745883712,
)
# fmt: on
NO_INTERCEPT_1 = Certified(
    x=tuple(float(x) for x in range(60, 71)),
    y=tuple(float(y) for y in range(130, 141)),
    slope=2.07438016528926,
    slope_sd=0.165289256198347e-1,
    intercept=None,
    intercept_sd=0.0,
    residual_sd=3.56753034006338,
    r_squared=0.999365492298663,
)
NO_INTERCEPT_2 = Certified(
    x=(4.0, 5.0, 6.0),
    y=(3.0, 4.0, 4.0),
    slope=0.727272727272727,
    slope_sd=0.420827318078432e-1,
    intercept=None,
    intercept_sd=0.0,
    residual_sd=0.369274472937998,
    r_squared=0.993348115299335,
)
SETS = {"Norris": NORRIS, "NoInt1": NO_INTERCEPT_1, "NoInt2": NO_INTERCEPT_2}


@pytest.mark.parametrize("name", SETS)
def test_the_certified_values_are_reproduced(name: str) -> None:
    known = SETS[name]
    line = fit_straight_line(known.x, known.y, through_origin=known.intercept is None)
    assert line.slope == pytest.approx(known.slope, rel=NINE_DIGITS)
    assert line.slope_sd == pytest.approx(known.slope_sd, rel=NINE_DIGITS)
    assert line.intercept == pytest.approx(known.intercept or 0.0, rel=NINE_DIGITS)
    assert line.intercept_sd == pytest.approx(known.intercept_sd, rel=NINE_DIGITS)
    assert line.residual_sd == pytest.approx(known.residual_sd, rel=NINE_DIGITS)
    assert line.r_squared == pytest.approx(known.r_squared, rel=NINE_DIGITS)
    assert line.degrees_of_freedom == len(known.x) - (1 if known.intercept is None else 2)


def test_a_line_with_known_errors_is_that_of_another_solver() -> None:
    generator = np.random.default_rng(3)
    x = np.sort(generator.uniform(0, 10, 12))
    sds = generator.uniform(0.05, 0.5, 12)
    y = generator.normal(1.5 - 0.3 * x, sds)
    (slope, intercept), spread = curve_fit(
        lambda at, a, b: a * at + b, x, y, sigma=sds, absolute_sigma=True
    )
    line = fit_straight_line(list(x), list(y), list(sds))
    assert line.slope == pytest.approx(slope, rel=1e-7)
    assert line.intercept == pytest.approx(intercept, rel=1e-7)
    assert line.slope_sd == pytest.approx(np.sqrt(spread[0, 0]), rel=1e-6)
    assert line.intercept_sd == pytest.approx(np.sqrt(spread[1, 1]), rel=1e-6)
    squares = float((((y - slope * x - intercept) / sds) ** 2).sum())
    assert line.chi_square == pytest.approx(squares, rel=1e-9)
    assert line.p_value == pytest.approx(chi2.sf(squares, 10), rel=1e-9)


@pytest.mark.parametrize("freedom", [1, 2, 7, 40])
def test_chances_are_those_of_the_distribution(freedom: int) -> None:
    for value in (0.1, 1.0, 5.0, 60.0):
        assert chance_beyond(value, freedom) == pytest.approx(chi2.sf(value, freedom), rel=1e-10)
