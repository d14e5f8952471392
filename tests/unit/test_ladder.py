"""The ladder: rungs, losses, reasons, and where a case first fails."""

from __future__ import annotations

from fractions import Fraction
from itertools import pairwise
from typing import TYPE_CHECKING

import pytest

from yieldnet.model.case import AimDirection

if TYPE_CHECKING:
    from yieldnet.prediction.result import Prediction

Answers = dict[str, "Prediction"]


@pytest.mark.parametrize("name", ["solved", "energy", "charged", "taken up"])
def test_the_ladder_never_climbs_and_each_loss_is_the_step_down(
    answers: Answers, name: str
) -> None:
    result = answers[name]
    assert result.case.aim is not None
    sign = 1 if result.case.aim.direction is AimDirection.MOST else -1
    known = [item for item in result.ladder if item.value is not None]
    assert known[0].loss is None
    for above, below in pairwise(known):
        assert above.value is not None
        assert below.value is not None
        assert below.loss == sign * (above.value - below.value)
        assert below.loss >= 0
    assert result.aim is not None
    assert known[-1].value == result.aim.value


def test_a_rung_is_there_only_if_the_case_or_the_network_has_it(answers: Answers) -> None:
    rungs = {name: [item.rung for item in answers[name].ladder] for name in answers}
    assert rungs["solved"] == [
        "elements",
        "measured",
        "demands",
        "pathways",
        "redox",
        "energy",
        "maintenance",
    ]
    assert rungs["energy"] == ["elements", "pathways", "redox", "energy"]
    assert rungs["taken up"] == ["elements"]
    assert rungs["charged"] == ["elements", "measured"]
    assert rungs["no aim"] == []


def test_an_energy_aim_has_no_value_above_the_energy_rung(answers: Answers) -> None:
    *above, energy = answers["energy"].ladder
    assert [item.value for item in above] == [None, None, None]
    assert {item.reason for item in above} == {
        "energy carriers are not balanced above the rung 'energy'"
    }
    # By hand: glucose gives 2 ATP and 2 NADH on the way to 2 pyruvate, which give 10 NADH;
    # 12 NADH at 1.5 ATP and 2 ATP make 20.
    assert (energy.value, energy.loss) == (Fraction(20), None)


def test_an_infeasible_case_names_the_rung_and_what_follows(answers: Answers) -> None:
    ladder = {item.rung: item for item in answers["infeasible"].ladder}
    assert ladder["measured"].value is not None
    assert ladder["demands"].reason == "no point keeps all balances and statements from here on"
    assert ladder["energy"].reason == "infeasible since 'demands'"
    assert ladder["energy"].value is None
    (finding,) = answers["infeasible"].findings
    assert finding.code == "YN601"
    assert "from the rung 'demands' on" in finding.message


def test_an_unbounded_aim_says_what_runs_away(answers: Answers) -> None:
    (rung,) = answers["runaway"].ladder
    assert rung.value is None
    for words in ("ethanol made", "carbon dioxide taken up", "hydrogen taken up", "water made"):
        assert words in rung.reason
    (finding,) = answers["runaway"].findings
    assert finding.code == "YN602"
    assert finding.where is not None
