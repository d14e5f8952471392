"""Doubts that only a solved case can show."""

from __future__ import annotations

from fractions import Fraction
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
    # Off by 0.3 with a variance of 0.01 + 0.09/9: each takes half of it, 1.5 s.d. The chi-square is
    # 0.09/0.02 = 4.5 with one degree of freedom, so the values fail their test as well.
    assert [(code, severity) for code, severity, _ in _told(result)] == [
        ("YN801", Severity.WARNING),
        ("YN604", Severity.WARNING),
        ("YN604", Severity.WARNING),
    ]
    (test,) = result.tests
    assert (test.layer, test.statistic, test.degrees) == ("elements", Fraction(9, 2), 1)
    assert "although they fail the test" in result.assumptions[0].text


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


MEANT = NETWORK.replace(
    "crossing:", "meant for: {substrates: [glucose], products: [ethanol, biomass]}\ncrossing:"
)


@pytest.mark.parametrize(
    ("asked", "told"),
    [
        ("equation: glucose -> ? ethanol\naim: most ethanol\n", []),
        ("equation: glucose -> ? ethanol + ? lactate\naim: most ethanol\n", []),
        ("equation: glucose -> ? ethanol\nmeasured: {ethanol: 1.5}\n", []),
        # How much is needed, and energy, are no products.
        ("equation: glucose + ? oxygen -> ? lactate\naim: least oxygen\n", []),
        ("equation: glucose + ? oxygen -> ? lactate\naim: most ATP\n", []),
        (
            "equation: glucose -> ? lactate\naim: most lactate\n",
            [("product 'lactate'", "aim most lactate", "ethanol, biomass", 5)],
        ),
        (
            "equation: glucose + ? oxygen -> ? lactate\naim: most carbon dioxide\n",
            [("product 'carbon dioxide'", "aim most carbon dioxide", "ethanol, biomass", 5)],
        ),
        (
            "equation: fructose -> ? ethanol\naim: most ethanol\n",
            [("substrate 'fructose'", "basis fructose", "glucose", 4)],
        ),
        (
            "equation: fructose -> ? lactate\naim: least lactate\n",
            [
                ("substrate 'fructose'", "basis fructose", "glucose", 4),
                ("product 'lactate'", "aim least lactate", "ethanol, biomass", 5),
            ],
        ),
    ],
)
def test_beyond_what_the_network_is_meant_for(
    predict: Predict, tmp_path: Path, asked: str, told: list[tuple[str, str, str, int]]
) -> None:
    (tmp_path / "network.yaml").write_text(
        MEANT.replace("[glucose, oxygen", "[glucose, fructose, oxygen").replace(
            "reactions:", "reactions:\n  fructose path: fructose -> 2 pyruvate + 2 NADH + 2 ATP"
        ),
        "utf-8",
    )
    found = [item for item in predict(asked).findings if item.code == "YN516"]
    assert len(found) == len(told)
    for item, (what, left, meant, line) in zip(found, told, strict=True):
        assert item.severity is Severity.WARNING
        assert what in item.message
        assert item.left == left
        assert item.right.endswith(f" {meant}")
        assert "'yieldnet networks' lists those that ship" in item.hint
        assert "under 'meant for' of 'Small'" in item.hint
        assert item.where is not None
        assert item.where.line == line


def test_elements_alone_are_meant_for_everything(predict: Predict, tmp_path: Path) -> None:
    (tmp_path / "network.yaml").write_text(MEANT, "utf-8")
    case = predict("equation: glucose -> ? lactate\naim: most lactate\n").case
    assert "YN516" not in [item.code for item in yieldnet.balance(case).findings]
