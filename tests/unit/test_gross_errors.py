"""Which value is wrong, on data sets that can be judged on paper."""

from __future__ import annotations

from fractions import Fraction
from math import erfc, sqrt
from typing import TYPE_CHECKING

import pytest

from tests.unit.judged import FERMENTATION, TWO_PRODUCTS, case_from, correlated, measured
from yieldnet.balance.elements import element_problem
from yieldnet.balance.freedom import CoefficientEquations, coefficient_equations
from yieldnet.balance.gross_errors import eliminate_serially, missing_products, suspects
from yieldnet.balance.redundancy import Redundancy, redundancy_of
from yieldnet.balance.statements import statements_of

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from tests.unit.judged import CaseOf
    from yieldnet.balance.gross_errors import Suspect
    from yieldnet.model.case import Measurement

F = Fraction


def _without(case_of: CaseOf, text: str) -> Callable[[Sequence[Measurement]], Redundancy]:
    case = case_from(case_of, text)
    equations = coefficient_equations(case, element_problem(case, statements_of(case)))
    return lambda kept: redundancy_of(case, equations, kept)


def _compounds(item: Suspect) -> list[str]:
    return [member.compound for member in item.members]


# Likelihood ratio --------------------------------------------------------------------------------


def test_the_wrong_one_of_two_values_that_are_both_told(case_of: CaseOf) -> None:
    # Ethanol is 0.5 too low, ten standard deviations; carbon dioxide is right.
    values = [measured("ethanol", "1.5", "0.05"), measured("carbon dioxide", "2", "0.05")]
    first, second = suspects(_without(case_of, FERMENTATION)(values))
    assert _compounds(first) == ["ethanol"]
    assert first.bias == (F("-0.5"),)
    assert first.bias_sd == (F("0.05"),)
    assert [first.statistic, first.statistic_left, first.degrees_left] == [100, 0, 1]
    assert first.p_value == pytest.approx(erfc(sqrt(50)))
    assert first.p_left == 1
    assert _compounds(second) == ["carbon dioxide"]
    assert [second.statistic, second.statistic_left] == [0, 100]
    assert second.p_value == 1
    assert second.p_left == pytest.approx(erfc(sqrt(50)))


def test_a_right_value_does_not_take_the_blame_for_a_correlated_one(case_of: CaseOf) -> None:
    values = [measured("ethanol", "1.5", "0.05"), measured("carbon dioxide", "2", "0.05")]
    case = case_from(case_of, FERMENTATION)
    equations = coefficient_equations(case, element_problem(case, statements_of(case)))
    data = redundancy_of(case, equations, values, [correlated("ethanol", "carbon dioxide", "3/5")])
    first, second = suspects(data)
    # Deviations 10 and 0 s.d.: 100/(1 - 0.36) in all; carbon dioxide would have to be off by
    # 0.6 · 10 s.d. to agree with it, which would save 56.25.
    assert data.statistic == F("156.25")
    assert _compounds(first) == ["ethanol"]
    assert first.statistic == F("156.25")
    assert second.statistic == F("56.25")
    assert second.bias == (F("0.3"),)


def test_values_that_cannot_be_told_apart_are_one_suspect(case_of: CaseOf) -> None:
    values = [measured("ethanol", "1.2", "0.2"), measured("lactate", "1.0", "0.1")]
    (suspect,) = suspects(_without(case_of, TWO_PRODUCTS)(values))
    assert _compounds(suspect) == ["ethanol", "lactate"]
    # Either would be 0.2 too high; that is known to the root of 0.04 + 0.01.
    assert suspect.bias == (F("0.2"), F("0.2"))
    assert [float(sd) for sd in suspect.bias_sd] == pytest.approx([0.05**0.5] * 2)
    assert [suspect.statistic, suspect.statistic_left] == [F("0.8"), 0]
    assert suspect.degrees_left == 0
    assert suspect.p_left is None


def test_a_group_has_the_bias_of_each_of_its_members(case_of: CaseOf) -> None:
    # 12 ethanol + 4 oxygen = 24: an excess of 3.6 is 0.3 of ethanol or 0.9 of oxygen.
    text = (
        "case: x\nequation: glucose + ? oxygen -> ? ethanol\neither side: [carbon dioxide, water]\n"
    )
    values = [measured("ethanol", "1", "0.1"), measured("oxygen", "3.9", "0.3")]
    (suspect,) = suspects(_without(case_of, text)(values))
    assert _compounds(suspect) == ["ethanol", "oxygen"]
    assert suspect.bias == (F("0.3"), F("0.9"))
    assert suspect.statistic == F("4.5")


def test_a_value_that_nothing_checks_is_no_suspect(case_of: CaseOf) -> None:
    # Water is zero by the balances alone, so it is checked; ethanol by itself is not.
    values = [measured("ethanol", "1.2", "0.2"), measured("water", "0.4", "0.2")]
    (suspect,) = suspects(_without(case_of, TWO_PRODUCTS)(values))
    assert _compounds(suspect) == ["water"]
    assert suspect.bias == (F("0.4"),)
    assert suspects(_without(case_of, TWO_PRODUCTS)(values[:1])) == ()


# Serial elimination ------------------------------------------------------------------------------


def test_nothing_is_taken_out_of_values_that_agree(case_of: CaseOf) -> None:
    values = [measured("ethanol", "1.9", "0.1"), measured("carbon dioxide", "2.1", "0.1")]
    assert eliminate_serially(values, _without(case_of, FERMENTATION), "elements", 0.95) == ()


def test_one_wrong_value_is_taken_out(case_of: CaseOf) -> None:
    values = [measured("ethanol", "1.5", "0.05"), measured("carbon dioxide", "2.04", "0.05")]
    (step,) = eliminate_serially(values, _without(case_of, FERMENTATION), "elements", 0.95)
    assert [item.compound for item in step.members] == ["ethanol"]
    assert step.test is not None
    # 0.8 standard deviations of carbon dioxide are left.
    assert (step.test.statistic, step.test.degrees, step.test.passed) == (F("0.64"), 1, True)


def test_two_wrong_values_are_taken_out_the_worse_one_first(case_of: CaseOf) -> None:
    values = [measured("ethanol", "1.5", "0.05"), measured("carbon dioxide", "2.7", "0.05")]
    steps = eliminate_serially(values, _without(case_of, FERMENTATION), "elements", 0.95)
    assert [item.members[0].compound for item in steps] == ["carbon dioxide", "ethanol"]
    assert steps[0].test is not None
    assert steps[0].test.statistic == 100
    assert not steps[0].test.passed
    assert steps[1].test is None


def test_one_of_a_group_is_taken_out_and_the_group_named(case_of: CaseOf) -> None:
    values = [measured("ethanol", "1.5", "0.1"), measured("lactate", "1.0", "0.1")]
    (step,) = eliminate_serially(values, _without(case_of, TWO_PRODUCTS), "elements", 0.95)
    assert [item.compound for item in step.members] == ["ethanol", "lactate"]
    assert step.test is None


# A product that was overlooked -------------------------------------------------------------------


def _with_others(deviations: tuple[str, ...], columns: dict[str, tuple[str, ...]]) -> Redundancy:
    """Equations of one value each, all of variance 1, which deviate as stated."""
    size = len(deviations)
    unit = tuple(tuple(F(i == j) for j in range(size)) for i in range(size))
    return Redundancy(
        measured=tuple(measured(f"value {i}", deviations[i], "1") for i in range(size)),
        covariance=unit,
        rows=unit,
        constants=(F(0),) * size,
        names=("",) * size,
        others=tuple((name, tuple(F(x) for x in column)) for name, column in columns.items()),
    )


def test_the_product_that_explains_all_comes_first() -> None:
    # 3 and 6 are missing. One of "both" adds 1 and 2, so 3 of it explain all of 9 + 36.
    data = _with_others(("-3", "-6"), {"one": ("1", "0"), "both": ("1", "2"), "other": ("0", "2")})
    first, second, third = missing_products(data)
    assert first.compounds == ("both",)
    assert first.amounts == (F(3),)
    # Variance 1/(1 + 4).
    assert float(first.amount_sd[0]) == pytest.approx(0.2**0.5)
    assert [first.statistic, first.statistic_left, first.degrees_left] == [45, 0, 1]
    assert first.p_left == 1
    assert (second.compounds, second.amounts, second.statistic) == (("other",), (F(3),), F(36))
    assert second.statistic_left == 9
    assert (third.compounds, third.amounts, third.statistic) == (("one",), (F(3),), F(9))


def test_products_of_one_composition_stand_together() -> None:
    data = _with_others(
        ("-3", "-6"), {"small": ("1", "2"), "large": ("2", "4"), "nothing": ("0", "0")}
    )
    (found,) = missing_products(data)
    assert found.compounds == ("small", "large")
    assert found.amounts == (F(3), F(3, 2))
    assert float(found.amount_sd[0]) == pytest.approx(0.2**0.5)
    assert float(found.amount_sd[1]) == pytest.approx(0.2**0.5 / 2)


def test_a_product_of_which_there_would_be_too_much_is_none() -> None:
    # There is too much of all already; only what takes it up, with a negative column, would help.
    data = _with_others(("3", "6"), {"more": ("1", "2"), "acceptor": ("-1", "-2")})
    (found,) = missing_products(data)
    assert found.compounds == ("acceptor",)
    assert found.amounts == (F(3),)


def test_without_equations_no_product_is_missed() -> None:
    data = _with_others((), {"one": ()})
    assert missing_products(data) == ()


def test_a_single_equation_has_nothing_left_to_test() -> None:
    (found,) = missing_products(_with_others(("-3",), {"one": ("1",)}))
    assert found.degrees_left == 0
    assert found.p_left is None


def test_lactate_that_was_overlooked_in_a_fermentation(case_of: CaseOf) -> None:
    # Truly glucose -> 1.5 ethanol + 1.5 carbon dioxide + 0.5 lactate: carbon lacks 1.5 of 6 and
    # electrons 6 of 24, which is 0.5 of C3H6O3 or 0.75 of C2H4O2.
    case = case_from(case_of, FERMENTATION)
    values = [measured("ethanol", "1.5", "0.05"), measured("carbon dioxide", "1.5", "0.05")]
    rows = (
        (F(2), F(1), F(3), F(2), F(1)),
        (F(6), F(0), F(6), F(4), F(4)),
        (F(1), F(2), F(3), F(2), F(0)),
    )
    names = ("ethanol", "carbon dioxide", "lactate", "acetate", "methane")
    equations = CoefficientEquations(names, rows, (F(6), F(12), F(6)))
    data = redundancy_of(case, equations, values, (), None, names[2:])
    first, *rest = missing_products(data)
    assert first.compounds == ("lactate", "acetate")
    assert first.amounts == (F(1, 2), F(3, 4))
    assert first.statistic_left == 0
    # Methane would bring eight electrons with each carbon, where four are missing.
    assert [item.compounds for item in rest] == [("methane",)]
    assert rest[0].statistic_left > 0
