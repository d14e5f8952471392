"""The next measurement, on regions whose strips can be averaged by hand."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from tests.unit.judged import TWO_PRODUCTS, case_from, two_products
from yieldnet.balance.statements import yield_column
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser
from yieldnet.optimum.ranges import Range
from yieldnet.prediction.next_measurement import next_measurements
from yieldnet.prediction.prepare import prepare

if TYPE_CHECKING:
    from tests.unit.judged import CaseOf
    from yieldnet.prediction.next_measurement import NextMeasurement

F = Fraction
THREE = (
    "case: x\nequation: glucose + ? oxygen -> ? ethanol + ? lactate\n"
    "either side: [carbon dioxide, water]\n"
)


def _next(
    case_of: CaseOf, text: str, of: str, precision: str = "1/20"
) -> tuple[NextMeasurement, ...] | None:
    optimiser = Optimiser(engine_named("glpk"))
    layers = prepare(case_from(case_of, text), optimiser, network=False).layers
    return next_measurements(optimiser, layers, yield_column(of), F(precision))


def _by_name(found: tuple[NextMeasurement, ...] | None) -> dict[str, NextMeasurement]:
    assert found is not None
    return {item.compound: item for item in found}


def test_a_strip_of_two_standard_deviations_is_left(case_of: CaseOf) -> None:
    found = _by_name(_next(case_of, TWO_PRODUCTS, "ethanol"))
    lactate = found["lactate"]
    assert lactate.range == Range(F(0), F(2))
    assert lactate.before == 2
    # Ethanol is 2 - lactate. With 5 % the strip is 0.9 to 1.1 times lactate, cut at 2: 0.2 times
    # lactate up to 20/11, 2 - 0.9 times lactate beyond. Its integral over 0 to 2 is 0.1 (20/11)² +
    # 2 · 2/11 - 0.45 (4 - (20/11)²) = 0.381818, so 0.190909 on average and 4/11 at most.
    assert lactate.expected == pytest.approx(0.190909, rel=1e-3)
    assert lactate.worst == pytest.approx(4 / 11, rel=1e-2)
    assert lactate.narrowing == pytest.approx(1 - 0.0954545, rel=1e-3)
    # Carbon dioxide is ethanol itself.
    assert found["carbon dioxide"].expected == pytest.approx(0.190909, rel=1e-3)


def test_what_is_known_already_brings_nothing(case_of: CaseOf) -> None:
    water = _by_name(_next(case_of, TWO_PRODUCTS, "ethanol"))["water"]
    assert water.range == Range(F(0), F(0))
    assert water.expected == water.worst == 2
    assert water.narrowing == 0


def test_a_perfect_measurement_leaves_nothing_of_a_line(case_of: CaseOf) -> None:
    lactate = _by_name(_next(case_of, TWO_PRODUCTS, "ethanol", "0"))["lactate"]
    assert lactate.expected == pytest.approx(0, abs=1e-12)
    assert lactate.narrowing == pytest.approx(1)


def test_a_perfect_measurement_leaves_the_heights_of_a_triangle(case_of: CaseOf) -> None:
    # Lactate up to 2 - ethanol, oxygen takes the rest: known ethanol leaves 2 - ethanol, on average
    # half of the range of 2.
    found = _by_name(_next(case_of, THREE, "lactate", "0"))
    assert found["ethanol"].before == 2
    assert found["ethanol"].expected == pytest.approx(1)
    assert found["ethanol"].worst == pytest.approx(2, rel=3e-3)
    # 12 ethanol + 12 lactate + 4 oxygen = 24: known oxygen leaves 2 - oxygen/3.
    assert found["oxygen"].range == Range(F(0), F(6))
    assert found["oxygen"].expected == pytest.approx(1)
    # Carbon dioxide is v = 6 - 2 ethanol - 3 lactate. With ethanol >= 0 and ethanol + lactate <= 2
    # lactate lies between 2 - v and 2 - v/3: a width of 2/3 v up to v = 2, of 2 - v/3 up to 6. The
    # mean is (4/3 + 8/3)/6.
    carbon = found["carbon dioxide"]
    assert carbon.range == Range(F(0), F(6))
    assert carbon.expected == pytest.approx(2 / 3, rel=1e-3)
    assert carbon.worst == pytest.approx(4 / 3, rel=1e-2)


def test_the_most_useful_comes_first_and_what_is_measured_is_left_out(case_of: CaseOf) -> None:
    found = _next(case_of, f"{THREE}measured: {{oxygen: 1 ± 0.5}}\n", "lactate")
    assert found is not None
    shares = [item.narrowing for item in found]
    assert shares == sorted(shares, reverse=True)
    assert {item.compound for item in found} == {"ethanol", "carbon dioxide", "water"}
    # The band of oxygen, 0 to 2, is kept: 12 ethanol + 12 lactate is between 16 and 24.
    assert {item.before for item in found} == {F(2)}
    assert _by_name(found)["ethanol"].range == Range(F(0), F(2))


def test_a_better_measurement_never_leaves_more(case_of: CaseOf) -> None:
    widths = [
        _by_name(_next(case_of, THREE, "lactate", precision))["ethanol"].expected
        for precision in ("0", "1/100", "1/20", "1/5")
    ]
    assert widths == sorted(widths, key=lambda width: width or 0)


def test_a_range_without_width_cannot_be_narrowed(case_of: CaseOf) -> None:
    assert _next(case_of, TWO_PRODUCTS, "water") is None
    text = two_products("1 exact", "0.9 ± 0.1")
    assert _next(case_of, text, "carbon dioxide") is None


def test_a_range_without_an_end_cannot_be_narrowed(case_of: CaseOf) -> None:
    # Hydrogen feeds the making of ethanol from carbon dioxide.
    text = (
        "case: x\nequation: glucose -> ? ethanol + ? lactate\n"
        "either side: [carbon dioxide, water, hydrogen]\n"
    )
    assert _next(case_of, text, "ethanol") is None


def test_a_coefficient_without_an_end_has_no_average(case_of: CaseOf) -> None:
    # Lactate is held between 0 and 1; the others run away with hydrogen.
    text = (
        "case: x\nequation: glucose -> ? ethanol + ? lactate\n"
        "either side: [carbon dioxide, water, hydrogen]\ndemands: {lactate: at most 1}\n"
    )
    found = _by_name(_next(case_of, text, "lactate"))
    assert found["hydrogen"].range == Range(None, F(12))
    assert found["hydrogen"].expected is None
    assert found["hydrogen"].worst is None
    assert found["hydrogen"].narrowing == 0
