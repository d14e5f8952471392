"""Fluxes at the aim of the small network, by hand."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from tests.unit.conftest import NETWORK
from yieldnet.optimum.ranges import Range

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.prediction.fluxes import FluxAnswer, Fluxes
    from yieldnet.prediction.result import Prediction

    Predict = Callable[..., Prediction]

F = Fraction
TEXT = (
    "equation: glucose + ? oxygen -> ? ethanol\naim: most ethanol\ndemands: {oxygen: at least 3}\n"
)


def _fluxes(result: Prediction) -> tuple[Fluxes, dict[str, FluxAnswer]]:
    assert result.fluxes is not None
    return result.fluxes, {item.reaction: item for item in result.fluxes.answers}


def test_fluxes_that_follow_from_the_yields(predict: Predict) -> None:
    # One ethanol and 4 carbon dioxide: one pyruvate each way, and 6 NADH go to 3 oxygen.
    fluxes, found = _fluxes(predict(TEXT, fluxes=True))
    assert {name: item.flux for name, item in found.items() if item.flux} == {
        "glycolysis": F(1),
        "ethanol path": F(1),
        "burning": F(1),
        "respiration": F(6),
    }
    assert all(item.range.single for item in found.values())
    assert fluxes.loops == ()


def test_fluxes_that_are_not_unique_have_a_range_and_the_least_total_is_shown(
    predict: Predict, tmp_path: Path
) -> None:
    second = "  second respiration: NADH + 1/2 oxygen -> water\n"
    detour = "  half way: NADH <-> carrier\n  other half: carrier <-> NADH\n"
    network = NETWORK.replace("growth:", second + detour + "growth:").replace(
        "carriers:\n", "carriers:\n  carrier: {kind: redox, formula: H2}\n"
    )
    (tmp_path / "network.yaml").write_text(network, "utf-8")
    fluxes, found = _fluxes(predict(TEXT, fluxes=True))
    assert found["respiration"].range == Range(F(0), F(6))
    assert found["respiration"].flux + found["second respiration"].flux == 6
    # The detour can turn for nothing; it stands still in the pattern and is named.
    assert found["half way"].flux == found["other half"].flux == 0
    assert [set(loop) for loop in fluxes.loops] == [{"half way", "other half"}]


def test_a_reaction_that_is_switched_off_is_left_out(predict: Predict) -> None:
    _, found = _fluxes(predict(TEXT + "knock-outs: [hydrogenase]\n", fluxes=True))
    assert "hydrogenase" not in found
