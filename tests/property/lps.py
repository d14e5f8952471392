"""Random linear problems, and a check of an answer that trusts nothing but the problem itself."""

from __future__ import annotations

from fractions import Fraction
from random import Random
from typing import TYPE_CHECKING

from hypothesis import strategies as st

from yieldnet.optimum.problem import FREE, Bounds, ProblemBuilder
from yieldnet.optimum.proof import Status

if TYPE_CHECKING:
    from collections.abc import Sequence

    from hypothesis.strategies import SearchStrategy

    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Answer

__all__ = ["LinearProblem", "assert_proven", "linear_problems", "random_problem"]

LinearProblem = tuple["Problem", dict[str, Fraction], bool]
"""A problem, its objective, and whether to maximise."""
_ZERO = Fraction(0)


def linear_problems(largest: int = 8) -> SearchStrategy[LinearProblem]:
    """Random problems with an objective; a failing one is made smaller by its size."""
    return st.builds(random_problem, st.integers(1, largest), st.integers(0, 10**6))


def random_problem(size: int, seed: int) -> LinearProblem:
    """Problem of every kind: bounded, free, fixed, degenerate, infeasible, unbounded.

    Half of the problems have their bounds drawn round a point, so that they are feasible; in
    every third one most bounds pass through the point, so that its corners are degenerate.
    """
    rng = Random(f"problem {seed}")
    columns, rows = size, rng.randint(0, size + 2)
    point = [Fraction(rng.randint(-4, 4), rng.choice((1, 1, 2, 3))) for _ in range(columns)]
    feasible, degenerate = rng.random() < 0.7, rng.random() < 0.35
    builder = ProblemBuilder()
    for j in range(columns):
        middle = point[j] if feasible else Fraction(rng.randint(-4, 4))
        kind = rng.choice(("free", "low", "low", "high", "both", "both", "fixed"))
        builder.add_column(f"x{j}", _bounds(rng, kind, middle, degenerate))
    lines: list[dict[str, Fraction]] = []
    for i in range(rows):
        if lines and rng.random() < 0.1:
            line = {name: 2 * value for name, value in rng.choice(lines).items()}
        else:
            line = {
                f"x{j}": Fraction(rng.randint(-3, 3), rng.choice((1, 1, 1, 2, 7)))
                for j in range(columns)
                if rng.random() < 0.6
            }
        lines.append(line)
        middle = sum((value * point[int(name[1:])] for name, value in line.items()), _ZERO)
        if not feasible:
            middle += rng.randint(-3, 3)
        kind = rng.choice(("free", "low", "low", "high", "high", "both", "fixed"))
        builder.add_row(f"row {i}", "test", _bounds(rng, kind, middle, degenerate), line)
    objective = {
        f"x{j}": Fraction(rng.randint(-3, 3), rng.choice((1, 1, 5)))
        for j in range(columns)
        if rng.random() < 0.7
    }
    return builder.build(), objective, rng.random() < 0.5


def _bounds(rng: Random, kind: str, middle: Fraction, degenerate: bool) -> Bounds:
    if kind == "free":
        return FREE
    if kind == "fixed":
        return Bounds(middle, middle)
    below, above = (
        _ZERO if degenerate and rng.random() < 0.8 else Fraction(rng.randint(0, 6), 2)
        for _ in range(2)
    )
    return Bounds(
        None if kind == "high" else middle - below, None if kind == "low" else middle + above
    )


def _activities(problem: Problem, values: Sequence[Fraction]) -> list[Fraction]:
    return [sum((entry * values[j] for j, entry in row), _ZERO) for row in problem.matrix.rows]


def assert_proven(answer: Answer) -> None:
    """Check an answer against its problem in fractions: primal, dual and what lies between.

    Optimal: every bound is kept; reduced costs are costs less what the duals of the rows take;
    what has a price rests at the bound that the price names; so both objectives are equal.
    Unbounded: the direction leaves through no bound and improves the objective without end.
    """
    problem, objective = answer.problem, dict(answer.objective)
    costs = [objective.get(column.name, _ZERO) for column in problem.columns]
    bounds = problem.all_bounds()
    if answer.status is Status.UNBOUNDED:
        moves = dict(answer.direction)
        steps = [moves.get(column.name, _ZERO) for column in problem.columns]
        for step, limit in zip([*steps, *_activities(problem, steps)], bounds, strict=True):
            assert step >= 0 or limit.low is None
            assert step <= 0 or limit.high is None
        gain = sum((cost * step for cost, step in zip(costs, steps, strict=True)), _ZERO)
        assert gain > 0 if answer.maximise else gain < 0
        return
    assert answer.status is Status.OPTIMAL
    values = [*answer.primal, *_activities(problem, answer.primal)]
    prices = [*answer.reduced_costs, *answer.duals]
    assert len(values) == len(prices) == len(bounds)
    paid = [_ZERO] * len(costs)
    for dual, row in zip(answer.duals, problem.matrix.rows, strict=True):
        for j, entry in row:
            paid[j] += dual * entry
    assert list(answer.reduced_costs) == [
        cost - part for cost, part in zip(costs, paid, strict=True)
    ]
    told = _ZERO
    for value, price, limit in zip(values, prices, bounds, strict=True):
        assert limit.low is None or value >= limit.low
        assert limit.high is None or value <= limit.high
        if price:
            at = limit.high if (price > 0) == answer.maximise else limit.low
            assert at is not None, "a price on a bound that is not there"
            assert value == at
            told += price * at
    assert answer.value == told
