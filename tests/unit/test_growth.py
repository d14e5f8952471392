"""Yield against growth rate: the law of a cell worked by hand, and agreement with predictions."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from itertools import pairwise
from typing import TYPE_CHECKING

import pytest

import yieldnet
from tests.unit.cells import GRAMS, case_of
from yieldnet.model.case import Aim, AimDirection, Condition
from yieldnet.optimum.problem import MADE, Bounds, ProblemBuilder
from yieldnet.prediction.growth import DEFAULT_RATES, grow_case
from yieldnet.prediction.pirt_line import per_biomass

if TYPE_CHECKING:
    from pathlib import Path

M = Fraction(GRAMS)
MAINTENANCE = Fraction(1, 1000)
RATES = tuple(Fraction(text) for text in ("0.01", "0.02", "0.0225195", "0.05", "0.1", "1"))


def _burning(rate: Fraction) -> Fraction:
    """Glucose per biomass with all the air there is."""
    return Fraction(4, 15) + MAINTENANCE * M / rate / 20


def _short_of_air(rate: Fraction) -> Fraction:
    """Glucose per biomass with 3 oxygen per glucose."""
    return Fraction(7, 33) + MAINTENANCE * M / rate / 11


def test_one_line_where_nothing_changes(tmp_path: Path) -> None:
    curve = yieldnet.growth(case_of(tmp_path), rates=RATES)
    (piece,) = curve.pieces
    assert piece.true_yield == Fraction(15, 4)
    assert piece.maintenance == MAINTENANCE / 20
    assert (piece.fastest, piece.slowest) == (None, None)
    for point in curve.points:
        assert point.yield_mol == 1 / _burning(point.rate)
        assert point.uptake == _burning(point.rate) * point.rate / M
        assert point.y_atp == M / (2 + MAINTENANCE * M / point.rate)
    assert curve.atp_growth == 2 / M


def test_the_line_breaks_where_air_runs_out(tmp_path: Path) -> None:
    curve = yieldnet.growth(case_of(tmp_path, "demands: {oxygen: at most 3}\n"), rates=RATES)
    fast, slow = curve.pieces
    broken = MAINTENANCE * M * 3 / 4
    assert (fast.fastest, fast.slowest) == (None, broken)
    assert (slow.fastest, slow.slowest) == (broken, None)
    assert (fast.true_yield, fast.maintenance) == (Fraction(15, 4), MAINTENANCE / 20)
    assert (slow.true_yield, slow.maintenance) == (Fraction(33, 7), MAINTENANCE / 11)
    assert slow.starts == ("demand oxygen at its limit", "ethanol given off", "fermenting")
    assert slow.stops == ()
    for point in curve.points:
        expected = max(_burning(point.rate), _short_of_air(point.rate))
        assert point.yield_mol == 1 / expected


def test_growth_ends_where_maintenance_takes_all(tmp_path: Path) -> None:
    more = "demands: {oxygen: at most 3, ethanol: at most 0}\n"
    curve = yieldnet.growth(case_of(tmp_path, more), rates=RATES)
    (piece,) = curve.pieces
    assert piece.slowest == MAINTENANCE * M * 3 / 4
    assert [point.yield_mol is not None for point in curve.points] == [
        point.rate >= piece.slowest for point in curve.points
    ]
    assert not any(item.code == "YN886" for item in curve.findings)


def test_all_atp_must_be_used_where_the_case_says_so(tmp_path: Path) -> None:
    """Ethanol of at least 1.5 per glucose makes at least 1 ATP per biomass; growth takes 1/2.

    So with no spare ATP growth may not be faster than maintenance of 1/2 ATP per biomass allows.
    """
    more = "demands: {ethanol: at least 1.5}\nenergy surplus: none\n"
    curve = yieldnet.growth(case_of(tmp_path, more, growth="1/2"), rates=RATES)
    assert curve.pieces[0].fastest == MAINTENANCE * M * 2
    grown = [point.rate for point in curve.points if point.yield_mol is not None]
    assert grown == [rate for rate in RATES if rate <= MAINTENANCE * M * 2]
    lost = yieldnet.growth(
        case_of(tmp_path, "demands: {ethanol: at least 1.5}\n", growth="1/2"), rates=RATES
    )
    assert all(point.yield_mol == Fraction(3, 2) for point in lost.points[-2:])
    assert lost.pieces[0].maintenance == 0
    # The level piece ends where the forced ATP is all used: k = 1/2.
    assert lost.pieces[0].slowest == MAINTENANCE * M * 2


def test_a_demand_with_two_ends_and_a_measured_value_are_kept(tmp_path: Path) -> None:
    """Half an ethanol per glucose is fermented: 1/4 of it; burnt is 3/4 glucose less 1/6."""
    for more in ("demands: {ethanol: 0.5 to 2}\n", "measured: {ethanol: 0.5 exact}\n"):
        curve = yieldnet.growth(case_of(tmp_path, more), rates=[Fraction(1, 10)])
        need = 2 + MAINTENANCE * M * 10
        # need = 20 (3/4 g - 1/6) + 2/4 g
        glucose = (need + Fraction(20, 6)) / Fraction(31, 2)
        assert curve.points[0].yield_mol == 1 / glucose, more


@pytest.mark.parametrize("example", ["succinate-from-xylose", "growth", "missing-coefficients"])
@pytest.mark.parametrize("rate", ["0.03", "0.08", "0.4"])
def test_every_point_is_what_a_prediction_says(checkout: Path, example: str, rate: str) -> None:
    case = yieldnet.read_case(checkout / "examples" / example / "case.yaml")
    mu = Fraction(rate)
    # Measured values are reconciled with maintenance in a prediction, so they are left out here.
    bare = replace(case, measured=(), correlations=())
    (point,) = grow_case(bare, [mu]).points
    asked = replace(
        bare,
        aim=Aim(direction=AimDirection.MOST, compound="biomass"),
        growth_rate=Condition(value=mu, sd=None, text=rate),
        substrate_uptake=None,
    )
    predicted = yieldnet.predict(asked)
    assert predicted.aim is not None
    assert point.yield_mol == predicted.aim.value
    assert predicted.y_atp is not None
    assert predicted.y_atp.range.low == predicted.y_atp.range.high == point.y_atp


def test_pieces_join_and_each_further_one_is_steeper(checkout: Path) -> None:
    curve = yieldnet.growth(checkout / "examples" / "growth" / "case.yaml")
    mass = curve.weight.molar_mass
    assert mass is not None
    assert len(curve.pieces) == 3
    for fast, slow in pairwise(curve.pieces):
        assert fast.slowest == slow.fastest
        assert fast.slowest is not None
        assert fast.true_yield is not None
        assert slow.true_yield is not None
        # 1/Y = 1/Y_true + m_S M/mu is the same on both sides of the break.
        step = 1 / fast.true_yield - 1 / slow.true_yield
        assert step == (slow.maintenance - fast.maintenance) * mass / fast.slowest
        assert slow.maintenance > fast.maintenance
        assert slow.true_yield > fast.true_yield
    yields = [point.yield_mol or Fraction(0) for point in curve.points]
    assert yields == sorted(yields)
    first = curve.pieces[1]
    assert first.starts[:2] == ("demand oxygen at its limit", "ethanol given off")


def test_a_parameter_set_of_the_case_counts(tmp_path: Path, checkout: Path) -> None:
    text = (checkout / "examples" / "growth" / "case.yaml").read_text("utf-8")
    path = tmp_path / "set.case.yaml"
    path.write_text(
        text.replace("../../models", str(checkout / "models"))
        + "parameter set: chemostat of the course exercise\n",
        "utf-8",
    )
    curve = yieldnet.growth(path)
    assert curve.atp_growth == Fraction(84, 1000)


def test_both_engines_give_the_same_fractions(checkout: Path) -> None:
    case = yieldnet.read_case(checkout / "examples" / "growth" / "case.yaml")
    glpk, other = (grow_case(case, engine=engine) for engine in ("glpk", "optlang"))
    assert [item.yield_mol for item in glpk.points] == [item.yield_mol for item in other.points]
    assert [(item.true_yield, item.maintenance) for item in glpk.pieces] == [
        (item.true_yield, item.maintenance) for item in other.pieces
    ]


def test_rates_come_from_the_case_or_by_default(tmp_path: Path) -> None:
    plain = yieldnet.growth(case_of(tmp_path))
    assert tuple(point.rate for point in plain.points) == DEFAULT_RATES
    more = "conditions: {growth rate: 0.2 1/h}\n"
    own = yieldnet.growth(case_of(tmp_path, more))
    assert Fraction("0.2") in [point.rate for point in own.points]
    assert own.points[0].rate == Fraction("0.05")


def test_rates_are_sorted_and_each_counts_once(tmp_path: Path) -> None:
    curve = yieldnet.growth(case_of(tmp_path), rates=[0.3, 0.1, 0.3])
    assert [point.rate for point in curve.points] == [Fraction("0.1"), Fraction("0.3")]


def test_without_maintenance_every_rate_gives_the_same(tmp_path: Path) -> None:
    curve = yieldnet.growth(case_of(tmp_path, maintenance=False), rates=[0.1, 0.5])
    assert [point.yield_mol for point in curve.points] == [Fraction(15, 4)] * 2
    assert [item.code for item in curve.findings] == ["YN882"]
    assert curve.pieces[0].maintenance == 0


def test_aim_growth_rate_and_measured_biomass_are_set_aside(tmp_path: Path) -> None:
    plain = yieldnet.growth(case_of(tmp_path), rates=RATES)
    more = (
        "aim: least ethanol\nmeasured: {biomass: 1.0 ± 0.1}\n"
        "conditions: {growth rate: 0.1 1/h, substrate uptake: 5 mmol/g/h}\n"
    )
    asked = yieldnet.growth(case_of(tmp_path, more), rates=RATES)
    assert asked.points == plain.points
    told = [item.text for item in asked.assumptions]
    assert any("measured biomass is set aside" in text for text in told)
    assert any("the same at every growth rate" in text for text in told)


def test_a_rate_of_zero_is_refused(tmp_path: Path) -> None:
    with pytest.raises(ValueError, match="growth rates are above zero"):
        yieldnet.growth(case_of(tmp_path), rates=[0])


def test_a_case_that_does_not_grow_is_refused(tmp_path: Path, checkout: Path) -> None:
    with pytest.raises(yieldnet.InputError, match=r"YN881.*network has no growth"):
        yieldnet.growth(checkout / "examples" / "lysine" / "case.yaml")
    case = case_of(tmp_path)
    with pytest.raises(yieldnet.InputError, match=r"YN881.*names no network"):
        grow_case(replace(case, network=None))
    without = tuple(item for item in case.coefficients if item.name != "biomass")
    with pytest.raises(yieldnet.InputError, match=r"YN881.*biomass does not stand"):
        grow_case(replace(case, coefficients=without))


def test_a_bound_that_is_no_ratio_is_refused() -> None:
    builder = ProblemBuilder()
    builder.add_column("yield of glucose", Bounds(Fraction(-1), Fraction(-1)))
    builder.add_column("yield of biomass", MADE)
    builder.add_column("flux of growth", Bounds(Fraction(0), Fraction(3)))
    with pytest.raises(ValueError, match="'flux of growth' has a bound that is not zero"):
        per_biomass(builder.build(), "glucose", "", exact=False)
