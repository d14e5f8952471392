"""Limits of the small network: slopes of the best value, checked against solving again."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.prediction.limits import Limit
    from yieldnet.prediction.result import Prediction

    Predict = Callable[..., Prediction]

F = Fraction
EQUATION = "equation: glucose + ? oxygen -> ? ethanol\naim: most ethanol\n"


def _limit(result: Prediction, name: str) -> Limit:
    return next(item for item in result.limits if item.name == name)


def _best(result: Prediction) -> Fraction:
    assert result.aim is not None
    assert result.aim.value is not None
    return result.aim.value


def test_the_slope_of_a_demand_is_what_moving_it_brings(predict: Predict) -> None:
    # A second route: the demand itself is moved, and the case is answered again.
    demand = EQUATION + "demands: {{oxygen: at least {}}}\n"
    here = predict(demand.format("3"))
    limit = _limit(here, "demand oxygen")
    assert (limit.kind, limit.unit) == ("demand", "mol/mol")
    assert (limit.gain, limit.cost) == (F(-1, 3), F(1, 3))
    assert limit.gain is not None
    assert limit.cost is not None
    assert _best(predict(demand.format("3.3"))) - _best(here) == F("0.3") * limit.gain
    assert _best(predict(demand.format("2.7"))) - _best(here) == F("0.3") * limit.cost
    # It holds until no ethanol is left at 6 oxygen, and until none is burnt at 0.
    assert (limit.gain_until, limit.cost_until) == (F(3), F(3))


def test_a_statement_told_in_grams_is_moved_by_a_gram(predict: Predict) -> None:
    here = predict(EQUATION + "measured: {oxygen: 0.5 ± 0.01 g/g}\n")
    limit = _limit(here, "measured oxygen")
    assert limit.unit == "g/g"
    # One g/g of oxygen is 180.156/31.998 mol/mol, at a third of an ethanol each.
    assert limit.cost == F("180.156") / F("31.998") / 3


def test_a_written_coefficient_has_a_price_too(predict: Predict) -> None:
    here = predict(EQUATION.replace("? oxygen", "3 oxygen"))
    limit = _limit(here, "written oxygen")
    assert (limit.kind, limit.gain, limit.cost) == ("written", F(-1, 3), F(1, 3))


def test_carriers_are_priced_and_an_impossible_move_has_none(predict: Predict) -> None:
    # 12 electrons of 6 NADH make an ethanol less or more.
    with_oxygen = predict(EQUATION + "demands: {oxygen: at least 3}\n")
    nadh = _limit(with_oxygen, "NADH")
    assert (nadh.kind, nadh.gain, nadh.cost) == ("carrier", F(1, 6), F(-1, 6))
    assert _limit(with_oxygen, "ATP").gain == 0
    without = predict("equation: glucose -> ? ethanol\naim: most ethanol\n")
    # Nothing could take up one NADH more.
    assert _limit(without, "NADH").gain is None


def test_maintenance_is_priced_in_its_own_unit(predict: Predict) -> None:
    # One mmol/g/h more is 1/10 mol ATP a mol glucose at 10 mmol/g/h.
    text = "equation: glucose + ? oxygen -> ? ethanol\naim: most ATP\n"
    result = predict(text + "conditions: {substrate uptake: 10 mmol/g/h}\n")
    limit = _limit(result, "maintenance")
    assert (limit.kind, limit.unit) == ("condition", "mmol/g/h")
    assert limit.gain in (F(0), F(-1, 10))


@pytest.mark.parametrize("aim", ["most", "least"])
def test_both_aims_have_limits(predict: Predict, aim: str) -> None:
    result = predict(
        f"equation: glucose + ? oxygen -> ? ethanol\naim: {aim} ethanol\n"
        "demands: {oxygen: 2 to 3}\n"
    )
    limit = _limit(result, "demand oxygen")
    assert {limit.gain, limit.cost} <= {F(-1, 3), F(1, 3), F(0)}
