"""The ladder of the first example, rung by rung, in exact fractions."""

from __future__ import annotations

from fractions import Fraction
from itertools import pairwise
from typing import TYPE_CHECKING

import pytest

import yieldnet
from yieldnet.balance.covariance import pool
from yieldnet.balance.statements import statements_of

if TYPE_CHECKING:
    from pathlib import Path

    from yieldnet.prediction.result import Prediction

F = Fraction
LADDER = {
    "elements": F(10, 7),
    "measured": F(
        7192448091859850249063473769818692183131, 5991765858330046669444541526592795610480
    ),
    "demands": F(
        7192448091859850249063473769818692183131, 5991765858330046669444541526592795610480
    ),
    "pathways": F(
        14753095536260084952712401370007437135775822935711,
        13106987815096977089409934589421740397925000000000,
    ),
    "redox": F(
        32461201039747602567801593119968009020473849050887,
        33703682953106512515625546087084475308950000000000,
    ),
    "energy": F(
        5007796261774361546136733705651604102185467522233,
        6319440553707471096679789891328339120428125000000,
    ),
    "maintenance": F(
        210274013750791098556923341069548939226931658589417,
        309652587131666083737309704675088616900978125000000,
    ),
}


@pytest.fixture(scope="module")
def result(checkout: Path) -> Prediction:
    return yieldnet.predict(checkout / "examples" / "succinate-from-xylose" / "case.yaml")


def test_every_rung_by_name_and_exactly(result: Prediction) -> None:
    assert {item.rung: item.value for item in result.ladder} == LADDER


def test_the_last_rung_is_well_below_the_last_one_without_the_network() -> None:
    assert LADDER["maintenance"] <= F(9, 10) * LADDER["demands"]


def test_redox_energy_or_maintenance_costs_something(result: Prediction) -> None:
    losses = {item.rung: item.loss for item in result.ladder}
    assert any((losses[rung] or 0) > 0 for rung in ("redox", "energy", "maintenance"))
    assert all(above >= below for above, below in pairwise(LADDER.values()))


def test_the_first_two_rungs_by_hand(result: Prediction) -> None:
    # Xylose holds 20 available electrons, succinate 14, formate 2, and biomass CH1.75O0.43N0.22
    # 4 + 1.75 - 0.86 - 0.66 = 4.23, with nitrogen from urea counted as ammonia.
    biomass = pool(statements_of(result.case).measured)["biomass"].value
    assert LADDER["elements"] == F(20, 14)
    assert LADDER["measured"] == (20 - F("4.23") * biomass - 2 * F("0.21")) / 14
    # The biomass is the weighted mean of 0.11 ± 0.01 g/g and 0.08 ± 0.004 over 4.9 ± 0.2 mmol/g/h.
    xylose, cells = F("150.13"), F("23.73611") / F("0.95")
    grams, mol = 0.11 * float(xylose / cells), 0.08 / 0.0049 / float(cells)
    weights = [1 / (grams / 11) ** 2, 1 / (mol**2 * ((0.004 / 0.08) ** 2 + (0.2 / 4.9) ** 2))]
    mean = (weights[0] * grams + weights[1] * mol) / sum(weights)
    assert float(biomass) == pytest.approx(mean, rel=1e-9)
