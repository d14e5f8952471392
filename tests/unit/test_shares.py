"""Shares of the layers: they sum to the loss, and do not depend on the order."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.prediction.result import Prediction

    Predict = Callable[..., Prediction]

F = Fraction
EQUATION = "equation: glucose + ? oxygen -> ? ethanol\n"


def _shares(result: Prediction) -> dict[str, Fraction]:
    assert result.shares is not None
    assert result.shares.reason == ""
    return {item.layer: item.share for item in result.shares.shares}


def test_a_layer_that_costs_the_same_in_every_order_has_that_as_its_share(
    predict: Predict,
) -> None:
    result = predict(EQUATION + "aim: most ethanol\ndemands: {oxygen: at least 3}\n")
    assert _shares(result) == {
        "demands": F(1),
        "pathways": F(0),
        "redox": F(0),
        "energy": F(0),
    }


def test_two_layers_that_forbid_the_same_share_its_loss(predict: Predict) -> None:
    # Either alone takes the ethanol down from 2 to 1, so the order decides which the ladder
    # charges; the shares are halves.
    result = predict(
        EQUATION + "aim: most ethanol\nmeasured: {oxygen: 3}\ndemands: {oxygen: at least 3}\n"
    )
    assert [(item.rung, item.loss) for item in result.ladder][1:3] == [
        ("measured", F(1)),
        ("demands", F(0)),
    ]
    shares = _shares(result)
    assert (shares["measured"], shares["demands"]) == (F(1, 2), F(1, 2))


@pytest.mark.parametrize("aim", ["most ethanol", "least carbon dioxide"])
def test_shares_sum_to_the_whole_loss(predict: Predict, aim: str) -> None:
    result = predict(
        "equation: glucose + ? ammonia + ? oxygen -> ? biomass + ? ethanol\n"
        "conditions: {growth rate: 0.1 1/h, substrate uptake: 5 mmol/g/h}\n"
        f"demands: {{oxygen: at most 1/2}}\naim: {aim}\n"
    )
    first, last = result.ladder[0].value, result.ladder[-1].value
    assert first is not None
    assert last is not None
    assert sum(_shares(result).values()) == abs(first - last)


def test_why_there_are_no_shares_is_said(answers: dict[str, Prediction]) -> None:
    energy = answers["energy"].shares
    assert energy is not None
    assert energy.shares == ()
    assert "energy carrier" in energy.reason
