"""Conflicts of infeasible cases: fewest statements, and what each would have to become."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.prediction.conflict import Conflict
    from yieldnet.prediction.result import Prediction

    Predict = Callable[..., Prediction]

F = Fraction
EQUATION = "equation: glucose + ? oxygen -> ? ethanol\n"
# Statement and its least change alone [unit as written].
Members = dict[tuple[str, str], Fraction | None]


def _conflict(result: Prediction) -> Conflict:
    assert result.outcome == "infeasible"
    assert result.conflict is not None
    return result.conflict


@pytest.mark.parametrize(
    ("text", "members"),
    [
        # 24 electrons = 12 an ethanol + 4 an oxygen. With 3 oxygen, ethanol is 1 and must come down
        # from 1.88, the lower end of its band; with 1.88 ethanol, oxygen is 0.36. Hydrogen taken up
        # would bring electrons for both.
        (
            "measured: {ethanol: 1.9 ± 0.01}\ndemands: {oxygen: at least 3}\n",
            {
                ("measured", "measured ethanol"): F("-0.88"),
                ("demand", "demand oxygen"): F("-2.64"),
                ("closed compound", "hydrogen"): None,
            },
        ),
        # No other path makes ethanol, so 0 lies 8 standard deviations below 0.8.
        (
            "measured: {ethanol: 1 ± 0.1}\nknock-outs: [ethanol path]\n",
            {
                ("measured", "measured ethanol"): F("-0.8"),
                ("knock-out", "ethanol path"): None,
            },
        ),
        # Burning glucose makes 20 ATP a mol: at 0.05 mmol/g/h that pays for 1 mmol/g/h, not for 2.
        (
            "conditions: {substrate uptake: 0.05 mmol/g/h}\n",
            {
                ("condition", "maintenance"): F(-1),
                ("closed compound", "hydrogen"): None,
            },
        ),
        # Told in g/g, a measured value changes in g/g: 46.069/180.156 times the mol.
        (
            "measured: {ethanol: 0.3 ± 0.01 g/g}\nknock-outs: [ethanol path]\n",
            {
                ("measured", "measured ethanol"): F("-0.28"),
                ("knock-out", "ethanol path"): None,
            },
        ),
    ],
)
def test_a_conflict_and_the_way_out_of_each_member(
    predict: Predict, text: str, members: Members
) -> None:
    conflict = _conflict(predict(EQUATION + text))
    assert conflict.least
    assert {(item.kind, item.name): item.needs for item in conflict.members} == members


def test_a_change_is_told_in_standard_deviations_too(predict: Predict) -> None:
    text = EQUATION + "measured: {ethanol: 1 ± 0.1}\nknock-outs: [ethanol path]\n"
    needs = {item.name: item.needs_sd for item in _conflict(predict(text)).members}
    assert needs == {"measured ethanol": -8.0, "ethanol path": None}


def test_spare_energy_that_may_not_be_lost_is_a_member(predict: Predict) -> None:
    # Every way through the network makes ATP, which only growth could use.
    conflict = _conflict(predict(EQUATION + "energy surplus: none\n"))
    assert ("condition", "energy surplus: none") in {
        (item.kind, item.name) for item in conflict.members
    }


def test_every_member_is_needed(predict: Predict) -> None:
    # A second route: give up one member of the conflict at a time, and the case can be answered.
    statements = {
        "measured ethanol": "measured: {ethanol: 1.9 ± 0.01}\n",
        "demand oxygen": "demands: {oxygen: at least 3}\n",
    }
    names = {
        item.name for item in _conflict(predict(EQUATION + "".join(statements.values()))).members
    }
    assert set(statements) < names
    for kept in statements.values():
        assert predict(EQUATION + kept).outcome == "solved"
    opened = EQUATION.replace("? oxygen", "? oxygen + ? hydrogen")
    assert predict(opened + "".join(statements.values())).outcome == "solved"


def test_what_the_network_cannot_do_at_all_names_what_is_lacking(predict: Predict) -> None:
    # More than two ethanol needs electrons or carbon from elsewhere.
    text = (
        "equation: glucose + ? oxygen + ? hydrogen -> ? ethanol\ndemands: {ethanol: at least 2.5}\n"
    )
    conflict = _conflict(predict(text))
    assert [(item.kind, item.name, item.needs) for item in conflict.members] == [
        ("demand", "demand ethanol", F("-0.5"))
    ]
    # Each of these is a carbon source on the way to ethanol.
    assert conflict.lacking == ("pyruvate",)
