"""Judging the measured values of a case as a whole, on cases that can be worked by hand."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from math import sqrt
from typing import TYPE_CHECKING

import pytest

import yieldnet
from tests.unit.judged import NETWORK, case_from, fermentation, two_products
from yieldnet.foundation.findings import Severity
from yieldnet.prediction.reconcile import reconcile_case

if TYPE_CHECKING:
    from pathlib import Path
    from typing import Any

    from tests.unit.judged import CaseOf
    from yieldnet.prediction.reconciliation import JudgedValue, Reconciliation

F = Fraction


def _judge(case_of: CaseOf, text: str, **options: Any) -> Reconciliation:
    return reconcile_case(case_from(case_of, text), **options)


def _values(result: Reconciliation) -> dict[str, JudgedValue]:
    return {item.compound: item for item in result.values}


def _codes(result: Reconciliation) -> list[tuple[str, Severity]]:
    return [(item.code, item.severity) for item in result.findings]


# Values that are all told ------------------------------------------------------------------------


def test_two_values_that_the_elements_tell(case_of: CaseOf) -> None:
    result = _judge(case_of, fermentation("1.9 ± 0.1", "2.1 ± 0.1"))
    assert result.failed is None
    assert result.feasible
    assert not result.with_network
    assert [(c.compound, c.known, c.redundant, c.calculable) for c in result.classified] == [
        ("ethanol", "measured", "elements", ""),
        ("carbon dioxide", "measured", "elements", ""),
    ]
    (tested,) = result.tested
    assert tested.test is not None
    assert [tested.test.statistic, tested.test.degrees] == [2, 2]
    ethanol, carbon_dioxide = result.values
    assert (ethanol.measured, ethanol.measured_sd) == (F("1.9"), F("0.1"))
    assert ethanol.reconciled == carbon_dioxide.reconciled == 2
    assert ethanol.reconciled_sd == carbon_dioxide.reconciled_sd == 0
    assert ethanol.residual == ethanol.moved_sd == pytest.approx(1)
    assert carbon_dioxide.residual == carbon_dioxide.moved_sd == pytest.approx(-1)
    assert ethanol.own_share == carbon_dioxide.own_share == 1
    assert result.covariance == ((0, 0), (0, 0))
    assert result.calculated == ()
    assert result.eliminations == ()
    assert result.draws is None
    assert result.optimum is None
    assert (result.target, result.next) == ("", ())
    assert _codes(result) == []


def test_correlated_errors_are_taken_from_the_case(case_of: CaseOf) -> None:
    ties = "correlations: {ethanol: {carbon dioxide: 0.5}}\n"
    result = _judge(case_of, fermentation("1.9 ± 0.1", "2.1 ± 0.1", ties))
    # 2/(1 - 1/2), as in the tests of redundancy.
    assert result.tested[0].test is not None
    assert result.tested[0].test.statistic == 4
    # Carbon: 4 + 1 + 4 · 1/2.
    carbon = next(item for item in result.recoveries if item.quantity == "carbon")
    assert float(carbon.sd) == pytest.approx(sqrt(0.07) / 6)


# Values that share one equation ------------------------------------------------------------------


def test_reconciled_and_calculated_values_with_their_errors(case_of: CaseOf) -> None:
    result = _judge(case_of, two_products("1.2 ± 0.2", "1.0 ± 0.1"))
    ethanol, lactate = result.values
    # The excess of 0.2 is shared 4 to 1; 0.04 - 0.032 and 0.01 - 0.002 are left of the variances.
    assert (ethanol.reconciled, lactate.reconciled) == (F("1.04"), F("0.96"))
    assert ethanol.reconciled_sd == lactate.reconciled_sd == pytest.approx(sqrt(0.008))
    assert ethanol.moved_sd == pytest.approx(-0.8)
    assert lactate.moved_sd == pytest.approx(-0.4)
    # Both adjustments say the same: -0.2 over the root of 0.05.
    assert [ethanol.residual, lactate.residual] == pytest.approx([-0.2 / sqrt(0.05)] * 2)
    assert (ethanol.own_share, lactate.own_share) == (F(4, 5), F(1, 5))
    assert list(result.covariance[0]) == pytest.approx([0.008, -0.008])
    assert list(result.covariance[1]) == pytest.approx([-0.008, 0.008])
    calculated = {item.compound: item for item in result.calculated}
    assert calculated["carbon dioxide"].value == F("1.04")
    assert calculated["carbon dioxide"].sd == pytest.approx(sqrt(0.008))
    assert [calculated["water"].value, calculated["water"].sd] == [0, 0]
    assert {item.layer for item in result.calculated} == {"elements"}
    classes = {item.compound: item for item in result.classified}
    assert classes["carbon dioxide"].known == "not measured"
    assert classes["carbon dioxide"].calculable == "elements"


def test_correlations_of_reconciled_values_enter_what_follows(case_of: CaseOf) -> None:
    # Carbon dioxide is 6 - 2 ethanol - 3 lactate; both are measured and nothing ties them together.
    text = (
        "case: x\nequation: glucose + ? oxygen -> ? ethanol + ? lactate\n"
        "either side: [carbon dioxide, water]\n"
        "measured: {ethanol: 0.5 ± 0.1, lactate: 0.5 ± 0.1}\n"
        "correlations: {lactate: {ethanol: -0.5}}\n"
    )
    result = _judge(case_of, text)
    calculated = {item.compound: item for item in result.calculated}
    # (4 + 9 - 2 · 2 · 3 · 1/2) · 0.01.
    assert calculated["carbon dioxide"].value == F("3.5")
    assert calculated["carbon dioxide"].sd == pytest.approx(sqrt(0.07))
    # Oxygen, taken up: (24 - 12 · 1)/4 = 3; 9 (1 + 1 - 1) · 0.01. Water follows hydrogen: 12 - 6.
    assert calculated["oxygen"].value == 3
    assert calculated["oxygen"].sd == pytest.approx(0.3)
    assert calculated["water"].value == 3
    assert [item.residual for item in result.values] == [None, None]
    assert _codes(result) == [("YN805", Severity.NOTE)]


def test_the_own_share_is_that_of_the_equations(case_of: CaseOf) -> None:
    text = two_products("1.2 ± 0.2", "1.0 ± 0.1", "correlations: {ethanol: {lactate: 0.3}}\n")
    result = _judge(case_of, text)
    data = result.tested[-1].redundancy
    shares = [item.own_share for item in result.values]
    assert shares == [data.own_share(0), data.own_share(1)]
    assert all(0 < share < 1 for share in shares)


def test_two_values_of_one_coefficient_are_judged_as_their_mean(case_of: CaseOf) -> None:
    # Growth rate over uptake tells biomass once more; nothing else checks it.
    text = (
        "case: x\nequation: glucose + ? ammonia + ? oxygen -> ? biomass\n"
        "either side: [carbon dioxide, water]\ncompounds: {biomass: CH1.8O0.5N0.2}\n"
        "conditions: {growth rate: 0.1 ± 0.01 1/h, substrate uptake: 2 mmol/g/h}\n"
        "measured: {biomass: 2.2 ± 0.1}\n"
    )
    result = _judge(case_of, text)
    (tested,) = result.tested
    assert tested.test is not None
    assert tested.test.degrees == 1
    (biomass,) = result.values
    # 0.1/0.002 = 50 g/mol over 24.626 g/mol is 2.03 ± 0.203.
    other = 50 / 24.626
    weights = 100, 1 / (other / 10) ** 2
    mean = (2.2 * weights[0] + other * weights[1]) / sum(weights)
    assert float(biomass.measured) == pytest.approx(mean, rel=1e-4)
    assert biomass.reconciled == biomass.measured
    assert (biomass.residual, biomass.own_share) == (None, F(0))


def test_the_aim_has_an_error_and_two_ends(case_of: CaseOf) -> None:
    text = two_products("1.2 ± 0.2", "1.0 ± 0.1", "aim: most carbon dioxide\n")
    optimum = _judge(case_of, text).optimum
    assert optimum is not None
    assert (optimum.direction, optimum.compound) == ("most", "carbon dioxide")
    assert optimum.value == F("1.04")
    assert optimum.sd == pytest.approx(sqrt(0.008))
    assert not optimum.sampled
    assert (optimum.worse.value, optimum.better) == (F("0.8"), F("1.2"))


def test_a_value_of_the_aim_itself_is_judged_and_then_set_aside(case_of: CaseOf) -> None:
    result = _judge(case_of, two_products("1.2 ± 0.2", "1.0 ± 0.1", "aim: most ethanol\n"))
    # All values are judged together,
    assert _values(result)["ethanol"].reconciled == F("1.04")
    # but the best ethanol is what lactate alone leaves.
    assert result.optimum is not None
    assert result.optimum.value == 1
    assert result.optimum.sd == pytest.approx(0.1)
    assert (result.optimum.worse.value, result.optimum.better) == (F("0.8"), F("1.2"))


def test_an_aim_of_energy_has_no_meaning_by_the_elements(case_of: CaseOf, tmp_path: Path) -> None:
    (tmp_path / "network.yaml").write_text(
        NETWORK.replace("crossing", "carriers: {ATP: {kind: energy}}\ncrossing")
        + "  more: glucose -> 2 lactate + 2 ATP\n  other: lactate -> ethanol + carbon dioxide\n",
        "utf-8",
    )
    text = two_products("1.2 ± 0.2", "0.9 ± 0.1", "aim: most ATP\nnetwork: network.yaml\n")
    assert _judge(case_of, text, network=False).optimum is None
    optimum = _judge(case_of, text).optimum
    assert optimum is not None
    assert optimum.compound == "ATP"


# Values that fail --------------------------------------------------------------------------------


def test_a_wrong_value_is_named(case_of: CaseOf) -> None:
    result = _judge(case_of, fermentation("1.5 ± 0.05", "2.04 ± 0.05"))
    assert result.failed is result.tested[0]
    codes = _codes(result)
    assert ("YN801", Severity.WARNING) in codes
    assert ("YN802", Severity.WARNING) in codes
    suspect = next(item for item in result.findings if item.code == "YN802")
    assert suspect.message == "most suspect: measured ethanol"
    # 10² + 0.8² in all, of which 0.8² is left.
    assert suspect.left == "without it chi-square 0.64 instead of 101"
    assert suspect.right == "p = 0.42"
    (step,) = result.eliminations
    assert [item.compound for item in step.members] == ["ethanol"]
    # Ten standard deviations are beyond every band: nothing keeps them all.
    assert not result.feasible
    assert ("YN601", Severity.WARNING) in codes
    assert [item.reconciled for item in result.values] == [2, 2]


def test_the_layer_that_failed_is_the_first(case_of: CaseOf, tmp_path: Path) -> None:
    (tmp_path / "network.yaml").write_text(NETWORK, "utf-8")
    text = two_products("1.2 ± 0.1", "0.8 ± 0.1", "network: network.yaml\n")
    result = _judge(case_of, text)
    assert result.with_network
    assert result.failed is not None
    assert result.failed.layer == "pathways"
    assert {item.redundant for item in result.classified if item.known == "measured"} == {
        "elements"
    }
    assert [item.reconciled for item in result.values] == [1, 1]
    alone = _judge(case_of, text, network=False)
    assert not alone.with_network
    assert alone.failed is None
    assert [item.reconciled for item in alone.values] == [F("1.2"), F("0.8")]
    assert _judge(case_of, text, level=0.99).failed is None


def test_one_of_a_group_is_all_that_can_be_said(case_of: CaseOf) -> None:
    result = _judge(case_of, two_products("1.5 ± 0.1", "1.0 ± 0.1"))
    suspect = next(item for item in result.findings if item.code == "YN802")
    assert suspect.message == "most suspect: measured ethanol or measured lactate"
    assert suspect.right == "nothing left to test"


# Sides, demands, exact values --------------------------------------------------------------------


def test_a_side_holds_a_value_where_the_equalities_would_not(case_of: CaseOf) -> None:
    # Least squares alone would make lactate negative: 2.02 and -0.02.
    result = _judge(case_of, two_products("2.05 ± 0.1", "0.01 ± 0.1"), draws=100)
    values = _values(result)
    assert [values["ethanol"].reconciled, values["lactate"].reconciled] == [2, 0]
    assert result.held == ("ethanol", "lactate")
    assert result.draws is not None
    assert result.draws.asked == 100
    # The test still judges the equalities alone: an excess of 0.06 over the root of 0.02.
    assert values["lactate"].residual == pytest.approx(-0.06 / sqrt(0.02))
    # Half of the sets would fall beyond the side: less than the 0.0707 of the equalities.
    assert 0.02 < values["lactate"].reconciled_sd < 0.06
    assert _codes(result) == [("YN806", Severity.WARNING)]
    calculated = {item.compound: item for item in result.calculated}
    assert calculated["carbon dioxide"].sd == pytest.approx(values["ethanol"].reconciled_sd)


def test_a_demand_holds_a_value_and_its_best_value_is_drawn(case_of: CaseOf) -> None:
    text = two_products(
        "1.1 ± 0.1", "0.9 ± 0.1", "demands: {ethanol: at most 1}\naim: most carbon dioxide\n"
    )
    told: list[tuple[int, int]] = []
    result = _judge(case_of, text, draws=20, tick=lambda done, of: told.append((done, of)))
    assert result.held == ("ethanol", "lactate")
    assert result.optimum is not None
    assert result.optimum.value == 1
    assert result.optimum.sampled
    assert 0 < result.optimum.sd < 0.06
    assert told[-1] == (20, 20)


def test_an_exact_value_is_said_to_be_beyond_judgement(case_of: CaseOf) -> None:
    result = _judge(case_of, two_products("1.2", "0.9 ± 0.1"))
    finding = next(item for item in result.findings if item.code == "YN803")
    assert finding.severity is Severity.WARNING
    assert finding.message.startswith("measured ethanol has no error")
    classes = {item.compound: item.known for item in result.classified}
    assert classes["ethanol"] == "exact"
    (lactate,) = result.values
    assert lactate.reconciled == F("0.8")
    assert lactate.reconciled_sd == 0
    assert {item.compound: item.value for item in result.calculated}["carbon dioxide"] == F("1.2")


def test_exact_values_that_contradict_a_balance(case_of: CaseOf) -> None:
    text = (
        "case: x\nequation: glucose -> ? ethanol + ? lactate\n"
        "either side: [carbon dioxide, water]\n"
        "measured: {ethanol: 1.2, lactate: 0.9, water: 0.1 ± 0.1}\n"
    )
    result = _judge(case_of, text)
    assert "YN804" in [item.code for item in result.findings]
    assert not result.feasible


def test_written_coefficients_count(case_of: CaseOf) -> None:
    # 1.79 is a measured value within its last digit, 1/2 an exact one.
    text = (
        "case: x\nequation: glucose -> ? ethanol + 1/2 lactate\n"
        "either side: [carbon dioxide, water]\nmeasured: {ethanol: 1.4 ± 0.1}\n"
    )
    result = _judge(case_of, text)
    assert {item.compound: item.known for item in result.classified}["lactate"] == "exact"
    assert _values(result)["ethanol"].reconciled == F(3, 2)
    electrons = next(item for item in result.recoveries if item.quantity == "electrons")
    assert electrons.ratio == F(12 * 19, 240)


# The next measurement ----------------------------------------------------------------------------


def test_the_next_measurement_is_for_the_aim_or_for_what_is_asked(case_of: CaseOf) -> None:
    text = (
        "case: x\nequation: glucose + ? oxygen -> ? ethanol + ? lactate\n"
        "either side: [carbon dioxide, water]\nmeasured: {ethanol: 0.5 ± 0.1}\naim: most lactate\n"
    )
    result = _judge(case_of, text, precision=F(1, 10))
    assert (result.target, result.precision) == ("lactate", F(1, 10))
    assert {item.compound for item in result.next} == {"oxygen", "carbon dioxide", "water"}
    other = _judge(case_of, text, of="oxygen")
    assert other.target == "oxygen"
    assert {item.compound for item in other.next} == {"lactate", "carbon dioxide", "water"}
    assert other.next[0].narrowing > 0


def test_a_range_that_cannot_be_narrowed_is_a_note(case_of: CaseOf) -> None:
    result = _judge(case_of, two_products("1.2 ± 0.2", "1.0 ± 0.1"), of="water")
    assert (result.target, result.next) == ("water", ())
    assert _codes(result) == [("YN807", Severity.NOTE)]


# Refusals ----------------------------------------------------------------------------------------


def test_nothing_measured_is_nothing_to_judge(case_of: CaseOf) -> None:
    text = two_products("1.2", "0.8")
    with pytest.raises(yieldnet.InputError, match="no value with an error is measured"):
        _judge(case_of, text)


def test_a_target_outside_the_equation_is_refused_with_a_near_match(case_of: CaseOf) -> None:
    text = two_products("1.2 ± 0.2", "1.0 ± 0.1")
    with pytest.raises(yieldnet.InputError, match="'lactat' is not in the overall equation"):
        _judge(case_of, text, of="lactat")
    with pytest.raises(yieldnet.InputError, match="lactate"):
        _judge(case_of, text, of="lactat")


@pytest.mark.parametrize(
    "options",
    [
        {"level": 0.0},
        {"level": 1.0},
        {"level": 95.0},
        {"precision": F(1)},
        {"precision": F(-1, 10)},
        {"draws": 1},
    ],
    ids=str,
)
def test_options_beyond_their_range_are_refused(case_of: CaseOf, options: dict[str, Any]) -> None:
    with pytest.raises(ValueError, match="level and precision are shares between 0 and 1"):
        _judge(case_of, two_products("1.2 ± 0.2", "1.0 ± 0.1"), **options)


def test_another_engine_gives_the_same_answer(case_of: CaseOf) -> None:
    text = two_products("1.2 ± 0.2", "1.0 ± 0.1", "aim: most carbon dioxide\n")
    ours, other = (_judge(case_of, text, engine=engine) for engine in ("glpk", "optlang"))
    assert replace(other, case=ours.case) == ours
