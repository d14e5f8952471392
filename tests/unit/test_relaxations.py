"""Relaxations of the small network: what each thing given back brings, by hand."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.prediction.relaxations import RelaxationReport
    from yieldnet.prediction.result import Prediction

    Predict = Callable[..., Prediction]

F = Fraction
EQUATION = "equation: glucose + ? oxygen -> ? ethanol\n"


def _report(result: Prediction) -> RelaxationReport:
    assert result.outcome == "solved"
    assert result.relaxations is not None
    return result.relaxations


@pytest.mark.parametrize(
    ("text", "gains"),
    [
        # Fermentation makes 2 ATP; with respiration, burning makes 2 + 12 * 1.5 = 20.
        (
            EQUATION + "aim: most ATP\nknock-outs: [respiration]\n",
            {"respiration": F(18)},
        ),
        # Three oxygen take 12 of 24 electrons; without the demand, 2 ethanol are made.
        (
            EQUATION + "aim: most ethanol\ndemands: {oxygen: at least 3}\n",
            {"demand oxygen": F(1), "NADH": F(1), "hydrogen": F(1)},
        ),
        (
            EQUATION.replace("? oxygen", "3 oxygen") + "aim: most ethanol\n",
            {"written oxygen": F(1), "NADH": F(1), "hydrogen": F(1)},
        ),
        # For the least, a gain is a fall: without the demand, no ethanol needs to be made.
        (
            EQUATION + "aim: least ethanol\ndemands: {ethanol: at least 1/2}\n",
            {"demand ethanol": F(1, 2)},
        ),
    ],
)
def test_what_giving_back_brings(predict: Predict, text: str, gains: dict[str, Fraction]) -> None:
    report = _report(predict(text))
    assert {item.parts[0][1]: item.gain for item in report.helpful} == gains
    assert not report.pairs
    assert report.without_effect > 0


def test_gains_come_in_order_and_change_the_best_value_by_as_much(
    answers: dict[str, Prediction],
) -> None:
    result = answers["solved"]
    assert result.aim is not None
    assert result.aim.value is not None
    gains = [item.gain for item in _report(result).helpful if item.gain is not None]
    assert len(gains) > 1
    assert gains == sorted(gains, reverse=True)
    for item in _report(result).helpful:
        assert item.value is not None
        assert item.gain == item.value - result.aim.value


def test_where_nothing_helps_alone_pairs_are_tried(predict: Predict) -> None:
    report = _report(predict(EQUATION + "aim: most ethanol\n"))
    assert report.pairs
    assert all(len(item.parts) == 2 for item in report.helpful)
    # Electrons alone make no ethanol, and burning backwards alone fixes no carbon dioxide; the two
    # together do, without end.
    assert (("compound", "hydrogen"), ("reaction", "burning")) in [
        item.parts for item in report.helpful
    ]
    assert all(item.value is None and "without limit" in item.reason for item in report.helpful)


def test_a_reaction_backwards_that_makes_energy_from_nothing_is_not_offered(
    predict: Predict,
) -> None:
    # Respiration backwards would split water; with it forwards through a second way, ATP would
    # come from nothing. It is counted, not offered.
    result = predict(EQUATION + "aim: most ATP\ndemands: {oxygen: at most 1}\n")
    report = _report(result)
    offered = {name for item in report.helpful for _, name in item.parts}
    assert "respiration" not in offered
    assert "demand oxygen" in offered
