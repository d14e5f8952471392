"""The checker finds what is wrong with an answer: one that passes all proves nothing."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import pytest

from tests.reference.checking import check_answer, check_equation, closes_over_the_cell
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.problem import Bounds, Problem, ProblemBuilder
from yieldnet.optimum.proof import Answer, Optimiser, Status
from yieldnet.optimum.ranges import Range
from yieldnet.verbs import balance, read_case

CASE = "tests/reference/cases/bakers-yeast.yaml"
ONE = Fraction(1)


def _problem(most: int = 4) -> Problem:
    """x + y <= most, x - y >= -2, x at most 3: the best of x + 2 y is at (1, 3)."""
    builder = ProblemBuilder()
    builder.add_column("x", Bounds(Fraction(0), Fraction(3)))
    builder.add_column("y", Bounds(Fraction(0), None))
    builder.add_row("sum", "elements", Bounds(None, Fraction(most)), {"x": ONE, "y": ONE})
    builder.add_row("difference", "elements", Bounds(Fraction(-2), None), {"x": ONE, "y": -ONE})
    return builder.build()


def _answer(problem: Problem, maximise: bool = True, **objective: int) -> Answer:
    costs = {name: Fraction(value) for name, value in objective.items()}
    return Optimiser(engine_named("glpk")).optimise(problem, costs, maximise)


@pytest.fixture
def best() -> Answer:
    answer = _answer(_problem(), x=1, y=2)
    assert answer.primal == (ONE, Fraction(3))
    return answer


@pytest.mark.parametrize("maximise", [True, False])
def test_right_optimum_passes(maximise: bool) -> None:
    check_answer(_answer(_problem(), maximise, x=1, y=2))


def test_point_outside_its_bounds_is_found(best: Answer) -> None:
    with pytest.raises(AssertionError, match="lies outside"):
        check_answer(replace(best, primal=(Fraction(1), Fraction(4))))


def test_point_that_is_not_the_best_is_found(best: Answer) -> None:
    with pytest.raises(AssertionError, match="primal 6, dual 7"):
        check_answer(replace(best, primal=(Fraction(2), Fraction(2))))


def test_wrong_dual_is_found(best: Answer) -> None:
    with pytest.raises(AssertionError, match="do not follow from the duals"):
        check_answer(replace(best, duals=(ONE, ONE)))


def test_price_on_a_side_without_a_bound_is_found(best: Answer) -> None:
    turned = tuple(-price for price in best.duals)
    reduced = (ONE - turned[0] - turned[1], Fraction(2) - turned[0] + turned[1])
    with pytest.raises(AssertionError, match="side without a bound"):
        check_answer(replace(best, duals=turned, reduced_costs=reduced))


def test_least_called_most_is_found(best: Answer) -> None:
    with pytest.raises(AssertionError, match="side without a bound"):
        check_answer(replace(best, maximise=False))


def test_infeasible_problem_passes_and_a_feasible_one_called_so_is_found(best: Answer) -> None:
    problem = _problem(most=-1)
    answer = _answer(problem, x=1)
    assert answer.status is Status.INFEASIBLE
    check_answer(answer)
    with pytest.raises(AssertionError, match="and yet a point keeps all bounds"):
        check_answer(replace(best, status=Status.INFEASIBLE))


def test_runaway_passes_and_a_direction_into_a_bound_is_found() -> None:
    problem = _problem().with_rows({"sum": Bounds(), "difference": Bounds()})
    answer = _answer(problem, y=1)
    assert answer.status is Status.UNBOUNDED
    check_answer(answer)
    with pytest.raises(AssertionError, match="runs into a bound"):
        check_answer(replace(answer, direction=(("x", ONE), ("y", ONE))))
    with pytest.raises(AssertionError, match="leads nowhere"):
        check_answer(replace(answer, direction=()))


def test_unbounded_problem_without_a_point_is_found() -> None:
    builder = ProblemBuilder()
    builder.add_column("x", Bounds(Fraction(0), ONE))
    builder.add_column("y", Bounds())
    builder.add_row("x alone", "elements", Bounds(), {"x": ONE})
    answer = _answer(builder.build(), y=1)
    check_answer(answer)
    beyond = answer.problem.with_rows({"x alone": Bounds(Fraction(2), None)})
    with pytest.raises(AssertionError, match="no point keeps the bounds"):
        check_answer(replace(answer, problem=beyond))


def test_coefficients_that_do_not_close_are_found() -> None:
    case = read_case(CASE)
    result = balance(case)
    check_equation(result)
    wrong = replace(result.terms[1], range=Range(Fraction(2), Fraction(2)))
    with pytest.raises(AssertionError, match="does not close"):
        check_equation(replace(result, terms=(result.terms[0], wrong, *result.terms[2:])))
    builder = ProblemBuilder()
    builder.add_column("yield of glucose", Bounds(-ONE, -ONE))
    builder.add_column("yield of ethanol", Bounds(Fraction(2), Fraction(2)))
    with pytest.raises(AssertionError, match="do not close"):
        closes_over_the_cell(case, _answer(builder.build()))


def test_source_outside_the_cell_is_not_asked_to_close() -> None:
    case = read_case(CASE)
    builder = ProblemBuilder()
    builder.add_column("yield of glucose", Bounds(-ONE, -ONE))
    builder.add_column("step 0", Bounds(ONE, ONE))
    assert not closes_over_the_cell(case, _answer(builder.build()))
    builder = ProblemBuilder()
    builder.add_column("yield of glucose", Bounds(-ONE, -ONE))
    builder.add_row("C balance", "elements", Bounds(), {"yield of glucose": Fraction(6)})
    assert not closes_over_the_cell(case, _answer(builder.build()))


def test_problem_of_fluxes_alone_holds_no_coefficients(best: Answer) -> None:
    assert not closes_over_the_cell(read_case(CASE), best)
