"""Equations between measured values, and their test, on balances that can be solved on paper."""

from __future__ import annotations

from fractions import Fraction
from math import exp
from typing import TYPE_CHECKING

import pytest

from tests.unit.judged import (
    FERMENTATION,
    TWO_PRODUCTS,
    case_from,
    correlated,
    measured,
)
from yieldnet.balance.elements import balances_by_name, element_problem
from yieldnet.balance.freedom import CoefficientEquations, coefficient_equations
from yieldnet.balance.redundancy import DataTest, RedundancyEquation, redundancy_of
from yieldnet.balance.statements import statements_of

if TYPE_CHECKING:
    from collections.abc import Sequence

    from tests.unit.judged import CaseOf
    from yieldnet.balance.redundancy import Redundancy
    from yieldnet.model.case import Correlation, Measurement

F = Fraction
ELECTRONS = 12
"""Available electrons of ethanol and of lactate: 4·2 + 6 - 2 and 4·3 + 6 - 6 [mol/mol]."""


def _judge(
    case_of: CaseOf,
    text: str,
    values: Sequence[Measurement],
    correlations: Sequence[Correlation] = (),
    named: bool = True,
) -> Redundancy:
    case = case_from(case_of, text)
    equations = coefficient_equations(case, element_problem(case, statements_of(case)))
    balances = {
        f"{name.removesuffix('s')} balance": content
        for name, content in balances_by_name(case).items()
    }
    return redundancy_of(case, equations, values, correlations, balances if named else None)


def _fermentation(ethanol: str = "1.9", carbon_dioxide: str = "2.1") -> list[Measurement]:
    return [
        measured("ethanol", ethanol, "0.1"),
        measured("carbon dioxide", carbon_dioxide, "0.1"),
    ]


def _two_products() -> list[Measurement]:
    return [measured("ethanol", "1.2", "0.2"), measured("lactate", "1.0", "0.1")]


def _words(item: RedundancyEquation) -> tuple[str, dict[str, Fraction], Fraction]:
    return item.name, {entry.label: factor for entry, factor in item.terms}, item.constant


# Two values, two equations -----------------------------------------------------------------------


def test_the_well_known_balances_are_found_under_their_names(case_of: CaseOf) -> None:
    data = _judge(case_of, FERMENTATION, _fermentation())
    assert [_words(item) for item in data.equations()] == [
        ("carbon balance", {"measured ethanol": F(2), "measured carbon dioxide": F(1)}, F(6)),
        ("electron balance", {"measured ethanol": F(12)}, F(24)),
    ]
    assert data.degrees == 2
    assert data.deviations == (F("-0.1"), F("-1.2"))


def test_the_covariance_of_the_deviations_by_hand(case_of: CaseOf) -> None:
    # Rows (2 1) and (12 0) over variances of 0.01: 4 + 1, 24, 144.
    data = _judge(case_of, FERMENTATION, _fermentation())
    assert data.deviation_covariance == (
        (F("0.05"), F("0.24")),
        (F("0.24"), F("1.44")),
    )


def test_two_values_that_two_equations_tell_are_left_without_an_error(case_of: CaseOf) -> None:
    # Both must be 2, so each is moved by one standard deviation: 1 + 1.
    data = _judge(case_of, FERMENTATION, _fermentation())
    assert data.statistic == 2
    assert data.adjustments() == (F("0.1"), F("-0.1"))
    assert data.adjusted_covariance() == ((F(0), F(0)), (F(0), F(0)))
    assert [data.own_share(place) for place in (0, 1)] == [1, 1]


def test_the_statistic_does_not_depend_on_the_form_of_the_equations(case_of: CaseOf) -> None:
    plain = _judge(case_of, FERMENTATION, _fermentation(), named=False)
    assert {item.name for item in plain.equations()} == {""}
    named = _judge(case_of, FERMENTATION, _fermentation())
    assert plain.rows != named.rows
    assert plain.statistic == named.statistic == 2
    assert plain.adjustments() == named.adjustments()


@pytest.mark.parametrize(
    ("correlation", "statistic"),
    [
        # Deviations -1 and 1 in standard deviations: (1 + 1 + 2r)/(1 - r^2) = 2/(1 - r).
        ("1/2", F(4)),
        ("-1/2", F(4, 3)),
        ("-9/10", F(20, 19)),
    ],
)
def test_correlated_errors_change_what_is_unlikely(
    case_of: CaseOf, correlation: str, statistic: Fraction
) -> None:
    data = _judge(
        case_of,
        FERMENTATION,
        _fermentation(),
        [correlated("carbon dioxide", "ethanol", correlation)],
    )
    assert data.statistic == statistic
    assert data.adjustments() == (F("0.1"), F("-0.1"))


# Two values, one equation ------------------------------------------------------------------------


def test_coefficients_that_are_not_measured_are_eliminated(case_of: CaseOf) -> None:
    data = _judge(case_of, TWO_PRODUCTS, _two_products())
    assert [_words(item) for item in data.equations()] == [
        (
            "electron balance",
            {"measured ethanol": F(ELECTRONS), "measured lactate": F(ELECTRONS)},
            F(24),
        )
    ]
    # Off by 12 · 0.2; its variance is 144 (0.04 + 0.01).
    assert data.deviations == (F("2.4"),)
    assert data.deviation_covariance == ((F("7.2"),),)
    assert data.statistic == F("0.8")


def test_the_excess_is_shared_by_the_variances(case_of: CaseOf) -> None:
    data = _judge(case_of, TWO_PRODUCTS, _two_products())
    assert data.adjustments() == (F("-0.16"), F("-0.04"))
    assert [data.own_share(place) for place in (0, 1)] == [F(4, 5), F(1, 5)]
    # What is left of each: 0.04 - 0.04²/0.05 and 0.01 - 0.01²/0.05, and as they must add up to 2,
    # one goes up where the other goes down.
    eight = F("0.008")
    assert data.adjusted_covariance() == ((eight, -eight), (-eight, eight))
    assert data.adjustment_covariance == (
        (F("0.032"), F("0.008")),
        (F("0.008"), F("0.002")),
    )


def test_the_own_share_is_a_share_with_correlated_errors_too(case_of: CaseOf) -> None:
    # Covariance (0.04 -0.016; -0.016 0.01) with the determinant 0.000144; the excess has a variance
    # of 0.018. 1/0.018 over 0.01/0.000144 and over 0.04/0.000144.
    ties = [correlated("ethanol", "lactate", "-4/5")]
    data = _judge(case_of, TWO_PRODUCTS, _two_products(), ties)
    assert [data.own_share(place) for place in (0, 1)] == [F(4, 5), F(1, 5)]


@pytest.mark.parametrize("values", [[], [measured("ethanol", "1.2", "0.2")]])
def test_what_nothing_checks_keeps_its_error(case_of: CaseOf, values: list[Measurement]) -> None:
    data = _judge(case_of, TWO_PRODUCTS, values)
    assert data.degrees == 0
    assert data.statistic == 0
    assert data.test("elements", 0.95) is None
    assert data.adjustments() == (F(0),) * len(values)
    assert data.adjusted_covariance() == data.covariance
    assert [data.own_share(place) for place in range(len(values))] == [F(0)] * len(values)


def test_a_coefficient_without_a_share_is_told_by_the_equations_alone(case_of: CaseOf) -> None:
    # Water must be zero, whatever the products are.
    values = [*_two_products(), measured("water", "0.3", "0.1")]
    data = _judge(case_of, TWO_PRODUCTS, values)
    assert data.degrees == 2
    assert data.statistic == F("0.8") + 9
    assert data.adjustments()[2] == F("-0.3")
    assert data.column(2) != (F(0), F(0))


def test_a_compound_taken_up_is_positive_on_its_side(case_of: CaseOf) -> None:
    # 24 = 12 ethanol + 4 oxygen; the amounts of both are positive.
    text = (
        "case: x\nequation: glucose + ? oxygen -> ? ethanol\neither side: [carbon dioxide, water]\n"
    )
    values = [measured("oxygen", "3", "0.3"), measured("ethanol", "1", "0.1")]
    (equation,) = _judge(case_of, text, values).equations()
    factors = {item.compound: factor for item, factor in equation.terms}
    assert equation.constant / factors["ethanol"] == 2
    assert factors["ethanol"] == 3 * factors["oxygen"]
    assert equation.sum() == equation.constant


# Several values of one coefficient, exact values --------------------------------------------------


def test_two_values_of_one_coefficient_test_each_other(case_of: CaseOf) -> None:
    values = [
        measured("ethanol", "1.2", "0.3"),
        measured("ethanol", "0.7", "0.4", "growth rate / substrate uptake"),
    ]
    data = _judge(case_of, TWO_PRODUCTS, values)
    assert [_words(item) for item in data.equations()] == [
        (
            "values of ethanol",
            {"measured ethanol": F(1), "growth rate / substrate uptake": F(-1)},
            F(0),
        )
    ]
    # 0.5 apart with a variance of 0.09 + 0.16: one standard deviation.
    assert data.statistic == 1
    # Both meet at their mean of 1.02, weights 16 to 9.
    assert data.adjustments() == (F("-0.18"), F("0.32"))


def test_a_value_beside_an_exact_one_is_tested_against_it(case_of: CaseOf) -> None:
    values = [
        measured("ethanol", "1.2", "0.1"),
        measured("ethanol", "1", None, "written ethanol"),
        measured("lactate", "0.9", "0.1"),
    ]
    data = _judge(case_of, TWO_PRODUCTS, values)
    assert [item.label for item in data.measured] == ["measured ethanol", "measured lactate"]
    # Ethanol is 1 and lactate 2 - 1.
    assert data.statistic == 4 + 1
    assert data.adjustments() == (F("-0.2"), F("0.1"))
    assert data.consistent
    assert {item.name for item in data.equations()} == {"electron balance", "values of ethanol"}


@pytest.mark.parametrize(("lactate", "consistent"), [("1", True), ("1.1", False)])
def test_exact_values_may_contradict_a_balance(
    case_of: CaseOf, lactate: str, consistent: bool
) -> None:
    values = [measured("ethanol", "1", None), measured("lactate", lactate, None)]
    data = _judge(case_of, TWO_PRODUCTS, values)
    assert data.consistent is consistent
    assert data.degrees == 0


# The test ----------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("ethanol", "statistic", "passed"), [("1.8", 4, True), ("1.75", 6.25, False)]
)
def test_values_pass_up_to_the_limit(
    case_of: CaseOf, ethanol: str, statistic: float, passed: bool
) -> None:
    # The limit for two degrees of freedom is -2 ln 0.05 = 5.991.
    test = _judge(case_of, FERMENTATION, _fermentation(ethanol, "2")).test("elements", 0.95)
    assert test is not None
    assert test.statistic == F(str(statistic))
    assert test.degrees == 2
    assert test.layer == "elements"
    assert test.limit == pytest.approx(5.99146454711)
    assert test.p_value == pytest.approx(exp(-statistic / 2))
    assert test.passed is passed
    assert test.passed is (statistic <= test.limit)


def test_a_stricter_level_fails_less(case_of: CaseOf) -> None:
    data = _judge(case_of, FERMENTATION, _fermentation("1.75", "2"))
    found = [data.test("elements", level) for level in (0.9, 0.95, 0.96, 0.99)]
    # exp(-6.25/2) = 0.0439.
    assert [item.passed for item in found if item] == [False, False, True, True]


def test_a_perfect_fit_has_a_p_value_of_one() -> None:
    assert DataTest(layer="elements", statistic=F(0), degrees=3, level=0.95).p_value == 1


# Another compound --------------------------------------------------------------------------------


def test_another_compound_has_its_column_in_the_equations(case_of: CaseOf) -> None:
    case = case_from(case_of, TWO_PRODUCTS)
    names = ("ethanol", "lactate", "carbon dioxide", "water", "acetate", "formate")
    # C, H and O of each, production positive, and the glucose that goes in.
    rows = (
        (F(2), F(3), F(1), F(0), F(2), F(1)),
        (F(6), F(6), F(0), F(2), F(4), F(2)),
        (F(1), F(3), F(2), F(1), F(2), F(2)),
    )

    equations = CoefficientEquations(names, rows, (F(6), F(12), F(6)))
    data = redundancy_of(case, equations, _two_products(), (), None, others=("acetate", "formate"))
    columns = dict(data.others)
    ((ethanol, lactate),) = data.rows
    # Electrons: acetate 8 and formate 2 against 12.
    assert ethanol == lactate
    assert columns == {"acetate": (ethanol * F(8, 12),), "formate": (ethanol * F(2, 12),)}


def test_a_compound_that_cannot_be_there_alone_is_no_hypothesis(case_of: CaseOf) -> None:

    case = case_from(case_of, FERMENTATION)
    # Without water in the equation, 4 C - H - 2 O is zero for glucose, ethanol and carbon dioxide;
    # it is so for lactate too, but 2 for succinate: one such product alone cannot close.
    rows = (
        (F(2), F(1), F(3), F(4)),
        (F(6), F(0), F(6), F(6)),
        (F(1), F(2), F(3), F(4)),
    )
    equations = CoefficientEquations(
        ("ethanol", "carbon dioxide", "lactate", "succinate"), rows, (F(6), F(12), F(6))
    )
    data = redundancy_of(
        case, equations, _fermentation(), (), None, others=("lactate", "succinate")
    )
    assert [name for name, _ in data.others] == ["lactate"]
    assert data.degrees == 2
