"""The whole answer of small cases, against sums done by hand."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

import yieldnet
from tests.unit.conftest import NETWORK
from yieldnet.model.network import Direction
from yieldnet.optimum.ranges import Range
from yieldnet.prediction.result import CoefficientStatus

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.foundation.findings import Findings
    from yieldnet.model.case import Case
    from yieldnet.prediction.result import Prediction

    CaseOf = Callable[[str], tuple[Case | None, Findings]]

F = Fraction
Answers = dict[str, "Prediction"]


def _balance(case_of: CaseOf, text: str) -> Prediction:
    case, findings = case_of("case: x\n" + text)
    assert case is not None, findings.items
    return yieldnet.balance(case)


def test_succinate_from_glucose_by_elements_alone(answers: Answers) -> None:
    result = answers["taken up"]
    terms = {item.compound: (item.side, item.range) for item in result.terms}
    assert terms == {
        "glucose": (Direction.CONSUMED, Range(F(1), F(1))),
        "succinate": (Direction.PRODUCED, Range(F(12, 7), F(12, 7))),
        "carbon dioxide": (Direction.CONSUMED, Range(F(6, 7), F(6, 7))),
        "water": (Direction.PRODUCED, Range(F(6, 7), F(6, 7))),
    }
    assert result.net_carbon_dioxide == Range(F(-6, 7), F(-6, 7))


@pytest.mark.parametrize("name", ["solved", "energy", "taken up", "charged"])
def test_the_filled_in_equation_closes_every_element(answers: Answers, name: str) -> None:
    # A second route: the terms are summed with the formulas of the case.
    result = answers[name]
    totals: dict[str, Fraction] = {}
    for term in result.terms:
        assert term.range.low is not None
        assert term.range.single
        sign = -1 if term.side is Direction.CONSUMED else 1
        formula = result.case.compound(term.compound).formula
        for element, atoms in (*formula.elements, ("charge", F(formula.charge))):
            totals[element] = totals.get(element, F(0)) + sign * term.range.low * atoms
    assert totals
    assert set(totals.values()) == {F(0)}


def test_carbon_dioxide_from_outside_that_can_be_done_without(case_of: CaseOf) -> None:
    result = _balance(
        case_of,
        "equation: glucose -> ? succinate + ? acetate\n"
        "either side: [carbon dioxide, water]\naim: most succinate\n",
    )
    need = result.carbon_dioxide_need
    assert need is not None
    assert need.least == need.most == F(6, 7)
    # Without carbon dioxide: 14 s + 8 a = 24 electrons and 4 s + 2 a = 6 carbon leave s = 0.
    assert need.without == F(0)


def test_without_net_uptake_there_may_be_nothing_at_all(answers: Answers) -> None:
    need = answers["taken up"].carbon_dioxide_need
    assert need is not None
    assert need.without is None


@pytest.mark.parametrize("oxygen", ["left", "either"])
def test_the_respiratory_quotient_of_burning_is_one(case_of: CaseOf, oxygen: str) -> None:
    text = {
        "left": "equation: glucose + ? oxygen -> ? ethanol\neither side: [carbon dioxide, water]\n",
        "either": "equation: glucose -> ? ethanol\neither side: [carbon dioxide, water, oxygen]\n",
    }[oxygen]
    result = _balance(case_of, text + "measured: {ethanol: 0}\n")
    assert result.respiratory_quotient == 1


def test_without_oxygen_there_is_no_quotient(answers: Answers) -> None:
    assert answers["taken up"].respiratory_quotient is None
    assert answers["no aim"].respiratory_quotient is None


def test_carbon_dioxide_written_on_the_left_counts_as_taken_up(case_of: CaseOf) -> None:
    result = _balance(case_of, "equation: glucose + ? carbon dioxide -> ? succinate + ? water\n")
    assert result.net_carbon_dioxide == Range(F(-6, 7), F(-6, 7))


@pytest.mark.parametrize(
    ("source", "electrons"),
    # Biomass CH1.8O0.5N0.2 holds 4.2, 4.8 or 5.8 electrons, as its nitrogen counts from ammonia,
    # nitrogen gas or nitrate.
    [("ammonia", F(21, 5)), ("nitrogen", F(24, 5)), ("nitrate", F(29, 5))],
)
def test_electrons_are_counted_from_the_nitrogen_source(
    case_of: CaseOf, source: str, electrons: Fraction
) -> None:
    result = _balance(
        case_of,
        f"equation: glucose + ? {source} + ? oxygen -> ? biomass\n"
        "either side: [carbon dioxide, water]\ncompounds: {biomass: CH1.8O0.5N0.2}\n"
        "measured: {biomass: 2}\n",
    )
    recovery = next(item for item in result.recoveries if item.quantity == "electrons")
    assert recovery.measured == 2 * electrons / 24
    assert recovery.total == 1


def test_recoveries_of_the_filled_in_equation(answers: Answers) -> None:
    carbon, electrons = answers["energy"].recoveries
    assert (carbon.quantity, carbon.total, carbon.measured) == ("carbon", F(1), None)
    assert dict(carbon.shares)["carbon dioxide"] == 1
    # Oxygen carries off all electrons.
    assert (electrons.quantity, electrons.total) == ("electrons", F(1))
    assert dict(electrons.shares)["oxygen"] == 1


def test_a_residual_of_growth_is_charged_to_biomass_in_every_layer(
    predict: Callable[..., Prediction], tmp_path: Path
) -> None:
    # 0.201 glucose brings 0.006 C more than one biomass and 0.2 carbon dioxide hold; the digits
    # written allow it, and the elements alone must carry the same error as the network.
    network = NETWORK.replace(
        "0.2 glucose + 0.2 ammonia + 2 ATP -> biomass + ? carbon dioxide + ? water + ? NADH",
        "0.201 glucose + 0.2 ammonia + 2 ATP"
        " -> biomass + 0.2 carbon dioxide + 0.3 water + 0.3 NADH",
    )
    assert network != NETWORK
    (tmp_path / "network.yaml").write_text(network, "utf-8")
    result = predict(
        "equation: glucose + ? ammonia + ? oxygen -> ? biomass + ? ethanol\n"
        "measured: {biomass: 1, ethanol: 1}\naim: most oxygen\n"
    )
    assert [item.code for item in result.findings] == ["YN405"]
    found = {item.compound: item.at_aim for item in result.coefficients}
    carbon_dioxide = found["carbon dioxide"]
    assert carbon_dioxide is not None
    # Carbon: 6 = 1 biomass + 2 ethanol + carbon dioxide + what growth loses, 0.006.
    assert carbon_dioxide == Range(F("2.994"), F("2.994"))
    elements = result.coefficient("carbon dioxide").elements
    assert elements is not None
    assert elements.high == F("2.994")


def test_a_written_decimal_is_held_within_its_last_digit(case_of: CaseOf) -> None:
    result = _balance(
        case_of,
        "equation: glucose + ? oxygen -> 1.79 ethanol\neither side: [carbon dioxide, water]\n",
    )
    oxygen = result.coefficient("oxygen")
    # 24 = 12 ethanol + 4 oxygen, ethanol from 1.785 to 1.795.
    assert oxygen.elements == Range(6 - 3 * F("1.795"), 6 - 3 * F("1.785"))
    assert result.coefficient("ethanol").status is CoefficientStatus.MEASURED


def test_an_element_without_valence_leaves_the_electrons_out(case_of: CaseOf) -> None:
    result = _balance(
        case_of,
        "equation: glucose -> ? lactate + ? salt\ncompounds: {salt: C3H5O3Na}\n",
    )
    assert [item.quantity for item in result.recoveries] == ["carbon"]


@pytest.mark.parametrize(
    ("name", "compound", "status"),
    [
        ("solved", "biomass", CoefficientStatus.RECONCILED),
        ("solved", "ammonia", CoefficientStatus.FIXED_BY_ELEMENTS),
        ("solved", "ethanol", CoefficientStatus.BRACKETED),
        ("charged", "biomass", CoefficientStatus.MEASURED),
        ("charged", "H+", CoefficientStatus.FIXED_BY_ELEMENTS),
        ("runaway", "ethanol", CoefficientStatus.OPEN),
        ("taken up", "succinate", CoefficientStatus.FIXED_BY_ELEMENTS),
    ],
)
def test_how_a_coefficient_is_known(
    answers: Answers, name: str, compound: str, status: CoefficientStatus
) -> None:
    assert answers[name].coefficient(compound).status is status


def test_a_measured_value_of_the_aim_is_set_aside(answers: Answers) -> None:
    ethanol = answers["solved"].coefficient("ethanol")
    assert ethanol.set_aside
    assert ethanol.reconciled is None
    assert ethanol.elements is not None
    # Were it not set aside, 1.0 ± 0.1 would hold the range below 1.2.
    assert (ethanol.elements.high or 0) > F(6, 5)
    assert answers["solved"].aim is not None
    assert (answers["solved"].aim.value or 0) > F(6, 5)


def test_the_order_of_the_rungs_must_be_one_of_the_case(answers: Answers) -> None:
    case = answers["energy"].case
    with pytest.raises(yieldnet.InputError, match=r"YN514.*other rungs than the case has"):
        yieldnet.predict(case, order=["redox", "energy"])


def test_another_order_ends_at_the_same_value(answers: Answers) -> None:
    case = answers["solved"].case
    order = ["maintenance", "energy", "redox", "pathways", "demands", "measured"]
    result = yieldnet.predict(case, order=order)
    assert [rung for rung, _ in result.other_order] == ["elements", *order]
    assert result.aim is not None
    assert result.other_order[-1][1] == result.aim.value


def test_what_was_not_asked_for_is_not_computed(answers: Answers) -> None:
    result = answers["solved"]
    assert (result.fluxes, result.certificate, result.other_order) == (None, None, ())
    asked = yieldnet.predict(result.case, fluxes=True, proof=True)
    assert asked.fluxes is not None
    assert asked.certificate is not None
    assert asked.ladder == result.ladder


def test_the_rung_above_the_network_gives_the_percentage(answers: Answers) -> None:
    result = answers["solved"]
    ladder = {item.rung: item.value for item in result.ladder}
    last, over_the_cell = ladder["maintenance"], ladder["demands"]
    assert last is not None
    assert over_the_cell is not None
    assert result.coefficient("ethanol").percent == last / over_the_cell
