"""Proof: every answer is checked from scratch, against another solver and against lying engines."""

from __future__ import annotations

from fractions import Fraction
from random import Random
from typing import TYPE_CHECKING, Any

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from tests.property.engines import LIES, LyingEngine, SlackEngine
from tests.property.lps import LinearProblem, assert_proven, linear_problems, random_problem
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.problem import Bounds, ProblemBuilder
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.optimum.ranges import column_ranges

if TYPE_CHECKING:
    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Answer

HIGHS_TOLERANCE = 1e-6
"""Feasibility and optimality tolerance of HiGHS are 1e-7; the numbers here are of order 10 [-]."""
GAVE_UP = 4
"""Status of ``linprog`` for numerical difficulties, which also says infeasible or unbounded [-]."""


def _optimise(item: LinearProblem, engine: str = "glpk") -> Answer:
    return Optimiser(engine_named(engine)).optimise(*item)


def _feasible(problem: Problem) -> bool:
    """Whether there is a point, found out by an elastic problem that always has one.

    Every row may be missed at a price; the least price is proven by its own duals, so a price
    above zero proves that no point keeps all rows.
    """
    builder = ProblemBuilder()
    for column in problem.columns:
        builder.add_column(column.name, column.bounds)
    for row, entries in zip(problem.rows, problem.matrix.rows, strict=True):
        line = {problem.columns[j].name: value for j, value in entries}
        for sign in (1, -1):
            builder.add_column(f"{row.name} missed by {sign}", Bounds(Fraction(0), None))
            line[f"{row.name} missed by {sign}"] = Fraction(sign)
        builder.add_row(row.name, "test", row.bounds, line)
    price = {name: Fraction(1) for name in builder.index if "missed by" in name}
    answer = _optimise((builder.build(), price, False))
    assert_proven(answer)
    return answer.value == 0


@given(linear_problems())
@settings(max_examples=200)
def test_every_answer_is_proven_from_scratch(item: LinearProblem) -> None:
    answer = _optimise(item)
    feasible = _feasible(item[0])
    assert feasible is (answer.status is not Status.INFEASIBLE)
    if feasible:
        assert_proven(answer)


def _highs(item: LinearProblem) -> tuple[Status, float]:
    """Status and value of the same problem by HiGHS through scipy."""
    import numpy as np
    from scipy.optimize import linprog  # type: ignore[import-untyped]

    problem, objective, maximise = item
    sign = -1 if maximise else 1
    costs = np.array([sign * float(objective.get(c.name, 0)) for c in problem.columns])
    upper: list[tuple[list[float], float]] = []
    equal: list[tuple[list[float], float]] = []
    for row, entries in zip(problem.rows, problem.matrix.rows, strict=True):
        line = [0.0] * len(costs)
        for j, value in entries:
            line[j] = float(value)
        low, high = row.bounds.low, row.bounds.high
        if row.bounds.fixed and low is not None:
            equal.append((line, float(low)))
            continue
        if high is not None:
            upper.append((line, float(high)))
        if low is not None:
            upper.append(([-entry for entry in line], -float(low)))

    def solve(costs: Any) -> Any:
        # Presolve may answer "infeasible or unbounded" without saying which, and without it the
        # solver gives up on a rare problem.
        tried = [
            linprog(
                costs,
                A_ub=[line for line, _ in upper] or None,
                b_ub=[side for _, side in upper] or None,
                A_eq=[line for line, _ in equal] or None,
                b_eq=[side for _, side in equal] or None,
                bounds=[
                    tuple(None if end is None else float(end) for end in (b.low, b.high))
                    for b in (column.bounds for column in problem.columns)
                ],
                method="highs",
                options={"presolve": presolve},
            )
            for presolve in (False, True)
        ]
        return min(tried, key=lambda found: found.status == GAVE_UP)

    if solve(0 * costs).status == 2:
        return Status.INFEASIBLE, 0.0
    found = solve(costs)
    statuses = {0: Status.OPTIMAL, 3: Status.UNBOUNDED}
    return statuses[found.status], sign * found.fun if found.status == 0 else 0.0


@given(linear_problems())
@settings(max_examples=200)
def test_status_and_value_agree_with_highs(item: LinearProblem) -> None:
    answer = _optimise(item)
    status, value = _highs(item)
    assert answer.status is status
    if status is Status.OPTIMAL:
        assert float(answer.value) == pytest.approx(value, abs=HIGHS_TOLERANCE)


def test_random_problems_are_of_every_kind() -> None:
    answers = [_optimise(random_problem(1 + seed % 8, seed)) for seed in range(150)]
    counts = {status: sum(item.status is status for item in answers) for status in Status}
    assert min(counts.values()) > 15, counts
    # A basic variable at a bound is what makes a corner degenerate.
    degenerate = 0
    for item in answers:
        if item.status is Status.OPTIMAL:
            values = [*item.primal, *_row_values(item)]
            bounds = item.problem.all_bounds()
            degenerate += any(
                values[j] in (bounds[j].low, bounds[j].high) for j in item.basis.basic
            )
    assert degenerate > 15


def _row_values(answer: Answer) -> list[Fraction]:
    return [
        sum((value * answer.primal[j] for j, value in row), Fraction(0))
        for row in answer.problem.matrix.rows
    ]


@given(linear_problems(), st.integers(0, 10**6))
@settings(max_examples=100)
def test_an_engine_that_lies_changes_no_answer(item: LinearProblem, seed: int) -> None:
    honest = _optimise(item)
    for lie in LIES:
        answer = Optimiser(LyingEngine(lie, seed)).optimise(*item)
        assert answer.status is honest.status, lie
        if answer.status is Status.INFEASIBLE:
            continue
        assert_proven(answer)
        if answer.status is Status.OPTIMAL:
            assert answer.value == honest.value, lie


@given(linear_problems(5), st.integers(0, 10**6))
@settings(max_examples=30)
def test_one_optimiser_may_be_asked_again_with_moved_bounds(item: LinearProblem, seed: int) -> None:
    # Sessions keep their matrix and the proof its factors: neither may remember old bounds.
    problem, objective, maximise = item
    kept = Optimiser(engine_named("glpk"))
    lying = Optimiser(LyingEngine(seed=seed))
    first = kept.optimise(problem, objective, maximise)
    moved = problem
    for column in problem.columns:
        moved = moved.with_columns({column.name: Bounds(Fraction(-1), Fraction(seed % 7))})
        fresh = _optimise((moved, objective, maximise))
        for optimiser in (kept, lying):
            answer = optimiser.optimise(moved, objective, maximise)
            assert answer.status is fresh.status
            if answer.status is not Status.INFEASIBLE:
                assert_proven(answer)
            if answer.status is Status.OPTIMAL:
                assert answer.value == fresh.value
    again = kept.optimise(problem, objective, maximise)
    assert again.status is first.status
    assert again.status is not Status.OPTIMAL or again.value == first.value


@given(linear_problems(6))
@settings(max_examples=80)
def test_the_optimal_face_holds_the_optimal_points_and_no_other(item: LinearProblem) -> None:
    problem, objective, maximise = item
    optimiser = Optimiser(engine_named("glpk"))
    best = optimiser.optimise(problem, objective, maximise)
    assume(best.status is Status.OPTIMAL)
    face = best.optimal_face()
    for column in problem.columns:
        for way in (True, False):
            end = optimiser.optimise(face, {column.name: Fraction(1)}, way)
            if end.status is Status.OPTIMAL:
                worth = sum((f * end[name] for name, f in objective.items()), Fraction(0))
                assert worth == best.value
    # The second way to the same points: the objective itself as a row, held at its best.
    builder = ProblemBuilder()
    for column in problem.columns:
        builder.add_column(column.name, column.bounds)
    for row, entries in zip(problem.rows, problem.matrix.rows, strict=True):
        line = {problem.columns[j].name: value for j, value in entries}
        builder.add_row(row.name, row.layer, row.bounds, line)
    builder.add_row("objective", "test", Bounds(best.value, best.value), objective)
    names = [column.name for column in problem.columns]
    by_row = column_ranges(Optimiser(engine_named("glpk")), builder.build(), names)
    assert column_ranges(optimiser, face, names) == by_row
    assert column_ranges(optimiser, face, names, (best,)) == by_row


@given(linear_problems(6), st.integers(0, 10**6))
@settings(max_examples=60)
def test_a_point_that_stays_best_is_best(item: LinearProblem, seed: int) -> None:
    problem, objective, maximise = item
    optimiser = Optimiser(engine_named("glpk"))
    best = optimiser.optimise(problem, objective, maximise)
    assume(best.status is Status.OPTIMAL)
    rng = Random(seed)
    assert best.stays_best(problem)
    for place, column in enumerate(problem.columns):
        low = best.primal[place] + rng.randint(-2, 1)
        bounds = Bounds(low, low + rng.randint(0, 3))
        changed = problem.with_columns({column.name: bounds})
        answer = optimiser.optimise(changed, objective, maximise)
        if best.stays_best(changed):
            assert answer.status is Status.OPTIMAL
            assert answer.value == best.value


@given(linear_problems(6))
@settings(max_examples=30)
def test_optlang_and_glpk_agree_exactly(item: LinearProblem) -> None:
    one, two = _optimise(item), _optimise(item, "optlang")
    assert one.status is two.status
    if two.status is not Status.INFEASIBLE:
        assert_proven(two)
    if two.status is Status.OPTIMAL:
        assert one.value == two.value


def _problem(rows: list[tuple[list[str], str]], columns: int) -> Problem:
    builder = ProblemBuilder()
    for j in range(columns):
        builder.add_column(f"x{j}", Bounds(Fraction(0), None))
    for i, (entries, high) in enumerate(rows):
        line = {f"x{j}": Fraction(entry) for j, entry in enumerate(entries)}
        builder.add_row(f"row {i}", "test", Bounds(None, Fraction(high)), line)
    return builder.build()


CYCLING = [
    pytest.param(
        # Beale (1955) Cycling in the dual simplex algorithm, Naval Research Logistics Quarterly
        # 2:269-275, in the form that textbooks print (from memory); the optimum is checked below.
        _problem(
            [
                (["1/4", "-60", "-1/25", "9"], "0"),
                (["1/2", "-90", "-1/50", "3"], "0"),
                (["0", "0", "1", "0"], "1"),
            ],
            4,
        ),
        ["3/4", "-150", "1/50", "-6"],
        "1/20",
        id="Beale",
    ),
    pytest.param(
        # Chvatal (1983) Linear Programming, chapter 3 (from memory); the optimum is checked below.
        _problem(
            [
                (["1/2", "-11/2", "-5/2", "9"], "0"),
                (["1/2", "-3/2", "-1/2", "1"], "0"),
                (["1", "0", "0", "0"], "1"),
            ],
            4,
        ),
        ["10", "-57", "-9", "-24"],
        "1",
        id="Chvatal",
    ),
]


@pytest.mark.parametrize(("problem", "costs", "value"), CYCLING)
def test_a_problem_on_which_the_simplex_method_can_cycle_ends(
    problem: Problem, costs: list[str], value: str
) -> None:
    objective = {f"x{j}": Fraction(cost) for j, cost in enumerate(costs)}
    for engine in (SlackEngine(), LyingEngine(), engine_named("glpk")):
        answer = Optimiser(engine).optimise(problem, objective)
        assert_proven(answer)
        assert answer.value == Fraction(value)
