"""Doubts that only a solved case can show."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

import yieldnet
from tests.unit.conftest import NETWORK
from yieldnet.foundation.findings import Severity

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.prediction.result import Prediction

    Predict = Callable[[str], Prediction]


def _told(result: Prediction) -> list[tuple[str, Severity, str]]:
    return [(item.code, item.severity, item.message) for item in result.findings]


def test_a_growth_rate_without_biomass_in_the_equation_is_refused(predict: Predict) -> None:
    with pytest.raises(yieldnet.InputError, match=r"YN510.*biomass is not in the overall equation"):
        predict("equation: glucose -> ? ethanol\nconditions: {growth rate: 0.1 1/h}\n")


@pytest.mark.parametrize("uptake", [False, True])
def test_maintenance_per_growth_rate_needs_growth(predict: Predict, uptake: bool) -> None:
    # Without an uptake, maintenance is told per biomass; the most ethanol makes none of it.
    conditions = "growth rate: 0.1 1/h" + (", substrate uptake: 13 mmol/g/h" if uptake else "")
    result = predict(
        "equation: glucose + ? ammonia -> ? biomass + ? ethanol\n"
        f"conditions: {{{conditions}}}\naim: most ethanol\n"
    )
    standing = [item for item in _told(result) if "does not grow" in item[2]]
    assert standing == [
        (
            "YN510",
            Severity.WARNING,
            "the answer does not grow, so maintenance per growth rate is zero in it",
        )
    ] * (not uptake)


def test_a_value_that_the_elements_move(predict: Predict) -> None:
    # Electrons tie the two: 24 of glucose = 12 an ethanol + 4 an oxygen.
    result = predict(
        "equation: glucose + ? oxygen -> ? ethanol\n"
        "measured: {ethanol: 1.0 ± 0.2, oxygen: 3.3 ± 0.3}\n"
    )
    told = _told(result)
    assert [(code, severity) for code, severity, _ in told] == [("YN604", Severity.NOTE)] * 2
    # Least squares by hand: ethanol + oxygen/3 = 2, off by 0.1; the variances are 0.04 and
    # 0.09/9 = 0.01, so ethanol takes 4/5 of it, 0.08 or 0.4 s.d., oxygen 0.06 or 0.2 s.d.
    assert [message for _, _, message in told] == [
        "measured ethanol is moved by -0.40 s.d.",
        "measured oxygen is moved by -0.20 s.d.",
    ]
    ethanol = result.coefficient("ethanol").reconciled
    assert ethanol is not None
    assert float(ethanol.value) == pytest.approx(0.92)
    assert ethanol.moved_sd == pytest.approx(-0.4)


def test_a_large_move_is_a_warning(predict: Predict) -> None:
    result = predict(
        "equation: glucose + ? oxygen -> ? ethanol\n"
        "measured: {ethanol: 1.0 ± 0.1, oxygen: 3.9 ± 0.3}\n"
    )
    assert [(code, severity) for code, severity, _ in _told(result)] == [
        ("YN604", Severity.WARNING),
        ("YN604", Severity.WARNING),
    ]


def test_a_value_that_only_the_network_moves(predict: Predict) -> None:
    # The elements allow more biomass than the ATP of a fermentation pays for.
    result = predict(
        "equation: glucose + ? ammonia -> ? biomass + ? ethanol\n"
        "measured: {biomass: 2 ± 1}\nknock-outs: [respiration]\n"
    )
    told = [item for item in _told(result) if item[0] == "YN603"]
    assert [(code, severity) for code, severity, _ in told] == [("YN603", Severity.WARNING)]
    assert "by the network; the elements alone would not" in told[0][2]


def test_values_that_agree_are_not_moved(predict: Predict) -> None:
    result = predict(
        "equation: glucose + ? oxygen -> ? ethanol\n"
        "measured: {ethanol: 1.0 ± 0.1, oxygen: 3.0 ± 0.3}\n"
    )
    assert _told(result) == []


@pytest.mark.parametrize(
    ("strain", "knock_outs", "messages"),
    [
        ("", "[lactate dehydrogenase]", ["'lactate dehydrogenase' could not run in this case"]),
        ("", "[ethanol path]", []),
        ("", "[growth]", []),
        ("without air", "[respiration]", ["the strain already switches off 'respiration'"]),
        ("without lactate", "[]", ["strain 'without lactate' cannot change this case"]),
        ("without air", "[]", []),
    ],
)
def test_a_switch_that_changes_nothing_is_told(
    predict: Predict, tmp_path: Path, strain: str, knock_outs: str, messages: list[str]
) -> None:
    strains = "strains:\n  without air: [respiration]\n  without lactate: [lactate dehydrogenase]\n"
    (tmp_path / "network.yaml").write_text(NETWORK + strains, "utf-8")
    result = predict(
        "equation: glucose + ? oxygen -> ? ethanol + ? lactate\n".replace(" + ? lactate", "")
        + (f"strain: {strain}\n" if strain else "")
        + f"knock-outs: {knock_outs}\naim: least ethanol\n"
    )
    told = [item for item in _told(result) if item[0] == "YN509"]
    assert len(told) == len(messages)
    for (_, severity, message), words in zip(told, messages, strict=True):
        assert severity is Severity.WARNING
        assert words in message
