"""Tests of the measured values by layer, with a network whose own balances add redundancy."""

from __future__ import annotations

from fractions import Fraction
from math import exp
from typing import TYPE_CHECKING

import pytest

from tests.unit.judged import FERMENTATION, NETWORK, case_from, fermentation, two_products
from yieldnet.foundation.findings import Severity
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser
from yieldnet.prediction.coefficients import layer_equations
from yieldnet.prediction.data_tests import (
    failed_findings,
    judge_layers,
    missing_product_hypotheses,
    serial_elimination,
    stated_assumptions,
)
from yieldnet.prediction.prepare import prepare

if TYPE_CHECKING:
    from collections.abc import Mapping
    from pathlib import Path

    from tests.unit.judged import CaseOf
    from yieldnet.balance.freedom import CoefficientEquations
    from yieldnet.model.case import Case
    from yieldnet.prediction.layers import Layers

F = Fraction


def _layers(case: Case, network: bool = True) -> tuple[Layers, Mapping[str, CoefficientEquations]]:
    with_network = network and case.network is not None
    layers = prepare(case, Optimiser(engine_named("glpk")), with_network).layers
    return layers, layer_equations(layers)


@pytest.fixture
def together(case_of: CaseOf, tmp_path: Path) -> Case:
    """Values that the elements allow and the network does not."""
    (tmp_path / "network.yaml").write_text(NETWORK, "utf-8")
    return case_from(case_of, two_products("1.2 ± 0.1", "0.8 ± 0.1", "network: network.yaml\n"))


def test_each_layer_has_a_test_of_its_own(together: Case) -> None:
    tested = judge_layers(*_layers(together), 0.95)
    assert [item.layer for item in tested] == ["elements", "pathways"]
    elements, pathways = (item.test for item in tested)
    assert elements is not None
    assert pathways is not None
    # They add up to 2, but both should be 1: 2 s.d. each.
    assert (elements.statistic, elements.degrees, elements.passed) == (F(0), 1, True)
    assert (pathways.statistic, pathways.degrees, pathways.passed) == (F(8), 2, False)
    assert pathways.p_value == pytest.approx(exp(-4))
    assert tested[1].redundancy.adjustments() == (F("-0.2"), F("0.2"))


def test_a_layer_that_ties_nothing_more_is_left_out(together: Case) -> None:
    tested = judge_layers(*_layers(together, network=False), 0.95)
    assert [item.layer for item in tested] == ["elements"]


def test_the_finding_names_the_layer_that_failed(together: Case) -> None:
    tested = judge_layers(*_layers(together), 0.95)
    (finding,) = failed_findings(tested, together)
    assert (finding.code, finding.severity) == ("YN801", Severity.WARNING)
    assert "against 'pathways'" in finding.message
    assert finding.left == "chi-square 8 with 2 degrees of freedom, p = 0.018"
    assert finding.right == "at most 5.99 in 95 % of correct sets"
    assert "yieldnet reconcile" in finding.hint
    (assumption,) = stated_assumptions(tested)
    assert assumption.text.endswith("fail the test against 'pathways' (p = 0.018)")


def test_values_that_agree_are_told_nothing(case_of: CaseOf) -> None:
    case = case_from(case_of, fermentation("1.9 ± 0.1", "2.1 ± 0.1"))
    tested = judge_layers(*_layers(case), 0.95)
    assert failed_findings(tested, case).items == []
    assert stated_assumptions(tested) == ()


def test_only_the_first_layer_that_fails_is_told(case_of: CaseOf, tmp_path: Path) -> None:
    (tmp_path / "network.yaml").write_text(NETWORK, "utf-8")
    text = two_products("1.5 ± 0.1", "0.8 ± 0.1", "network: network.yaml\n")
    case = case_from(case_of, text)
    tested = judge_layers(*_layers(case), 0.95)
    # Elements: 0.3 over 0.02; network: 5 s.d. and 2 s.d. away from 1.
    statistics = [item.test.statistic for item in tested if item.test is not None]
    assert statistics == [F("4.5"), 29]
    (finding,) = failed_findings(tested, case)
    assert "against 'elements'" in finding.message
    assert "1 degree of freedom" in finding.left
    assert len(stated_assumptions(tested)) == 1


def test_the_level_decides(together: Case) -> None:
    layers, equations = _layers(together)
    # p = 0.018.
    assert list(failed_findings(judge_layers(layers, equations, 0.98), together)) != []
    assert list(failed_findings(judge_layers(layers, equations, 0.99), together)) == []


def test_suspects_and_elimination_of_a_layer(together: Case) -> None:
    layers, equations = _layers(together)
    _, pathways = judge_layers(layers, equations, 0.95)
    # Either alone leaves 4 of 8.
    assert [item.statistic_left for item in pathways.suspects()] == [4, 4]
    assert serial_elimination(layers, equations, "elements", 0.95) == ()
    steps = serial_elimination(layers, equations, "pathways", 0.95)
    # 2 s.d. with one degree of freedom fail just so, p = 0.0455: both are taken out.
    assert [item.members[0].compound for item in steps] == ["ethanol", "lactate"]
    (step,) = serial_elimination(layers, equations, "pathways", 0.96)
    assert step.test is not None
    assert step.test.statistic == 4


def test_the_library_is_searched_for_an_overlooked_product(case_of: CaseOf) -> None:
    # 1.5 ethanol and 0.5 lactate; the lactate was not listed, so electrons lack 6 of 24.
    text = (
        f"{FERMENTATION}either side: [water]\n"
        "measured: {ethanol: 1.5 ± 0.05, carbon dioxide: 1.5 ± 0.05}\n"
    )
    layers, _ = _layers(case_from(case_of, text))
    found = missing_product_hypotheses(layers)
    first = found[0]
    assert "lactate" in first.compounds
    assert "acetate" in first.compounds
    amounts = dict(zip(first.compounds, first.amounts, strict=True))
    assert amounts["lactate"] == F(1, 2)
    assert amounts["acetate"] == F(3, 4)
    assert first.statistic_left == 0
    # What is ranked behind explains less; succinate has 3.5 electrons a carbon instead of 4.
    assert all(item.statistic <= first.statistic for item in found)
    succinate = next(item for item in found if "succinate" in item.compounds)
    assert 0 < succinate.statistic_left < first.statistic
    names = [name for item in found for name in item.compounds]
    # Compounds of the equation, and those with other elements, are not tried.
    assert not {"ethanol", "glucose", "water", "ammonia", "sulphate"} & set(names)
    assert len(names) == len(set(names))


def test_without_water_in_the_equation_a_product_must_close_without_it(case_of: CaseOf) -> None:
    # 4 C - H - 2 O is zero for all that is listed, so one overlooked product alone must have that,
    # too: lactate C3H6O3 has it, succinate C4H6O4 has 2.
    case = case_from(case_of, fermentation("1.5 ± 0.05", "1.5 ± 0.05"))
    layers, _ = _layers(case)
    names = {name for item in missing_product_hypotheses(layers) for name in item.compounds}
    assert {"lactate", "acetate"} <= names
    assert not {"succinate", "formate", "hydrogen", "water"} & names
