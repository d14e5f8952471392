"""A second look at every answer of the solver: in fractions, and with no code of the solver.

An optimum is checked from the problem as it was posed: the point keeps all bounds, the reduced
costs follow from the duals, and the dual bound, in which each price meets the end its sign allows,
equals the value of the point. An unbounded problem must have a direction that runs away, and a
feasible point; an infeasible one must miss its bounds by a least total that is above zero and
proven in the same way. Over the cell each element, and charge, must close in every point that holds
coefficients: from the rung ``pathways`` on no row of the problem says so.
"""

from __future__ import annotations

from contextlib import contextmanager
from fractions import Fraction
from itertools import chain
from typing import TYPE_CHECKING

import pytest

from yieldnet.chemistry.library import find_compound
from yieldnet.model.network import Direction
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.problem import Bounds, Column, Matrix, Problem
from yieldnet.optimum.proof import Answer, Optimiser, Status

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping, Sequence

    from yieldnet.model.case import Case
    from yieldnet.prediction.result import Prediction

__all__ = [
    "check_answer",
    "check_equation",
    "check_optimum",
    "closes_over_the_cell",
    "recording",
]

ZERO = Fraction(0)
KINDS = frozenset({"yield", "flux", "surplus", "exchange"})
"""Kinds of columns that a point of the cell is made of; others are helpers of one question."""


@contextmanager
def recording() -> Iterator[list[Answer]]:
    """Every answer that optimisers give inside the block."""
    answers: list[Answer] = []
    optimise = Optimiser.optimise

    def keep(
        optimiser: Optimiser,
        problem: Problem,
        objective: Mapping[str, Fraction],
        maximise: bool = True,
    ) -> Answer:
        answer = optimise(optimiser, problem, objective, maximise)
        answers.append(answer)
        return answer

    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(Optimiser, "optimise", keep)
        yield answers


def check_answer(answer: Answer) -> None:
    """Check what an answer claims, whichever status it has."""
    if answer.status is Status.OPTIMAL:
        check_optimum(answer)
    elif answer.status is Status.UNBOUNDED:
        _check_runaway(answer)
        point = Optimiser(engine_named("glpk")).optimise(answer.problem, {})
        assert point.status is Status.OPTIMAL, "unbounded, and no point keeps the bounds"
        check_optimum(point)
    else:
        _check_infeasible(answer.problem)


def check_optimum(answer: Answer) -> None:
    """Check an optimum: feasible, prices that fit, primal = dual."""
    problem = answer.problem
    costs = _costs(answer)
    activities = _activities(problem, answer.primal)
    for value, item in _paired(answer.primal, activities, problem):
        assert _within(value, item), f"{value} lies outside {item}"
    reduced = list(costs)
    for row, price in zip(problem.matrix.rows, answer.duals, strict=True):
        for j, entry in row if price else ():
            reduced[j] -= entry * price
    assert tuple(reduced) == answer.reduced_costs, "the reduced costs do not follow from the duals"
    bound = ZERO
    for price, item in _paired(reduced, answer.duals, problem):
        if price:
            end = item.high if (price > 0) == answer.maximise else item.low
            assert end is not None, "a price stands on a side without a bound"
            bound += price * end
    value = sum((cost * x for cost, x in zip(costs, answer.primal, strict=True) if cost), ZERO)
    assert value == bound, f"primal {value}, dual {bound}"
    assert answer.value == value


def _costs(answer: Answer) -> list[Fraction]:
    objective = dict(answer.objective)
    assert set(objective) <= {column.name for column in answer.problem.columns}
    return [objective.get(column.name, ZERO) for column in answer.problem.columns]


def _activities(problem: Problem, point: Sequence[Fraction]) -> list[Fraction]:
    assert len(point) == len(problem.columns)
    return [
        sum((entry * point[j] for j, entry in row if point[j]), ZERO) for row in problem.matrix.rows
    ]


def _paired(
    columns: Sequence[Fraction], rows: Sequence[Fraction], problem: Problem
) -> Iterator[tuple[Fraction, Bounds]]:
    return zip(chain(columns, rows), problem.all_bounds(), strict=True)


def _within(value: Fraction, bounds: Bounds) -> bool:
    return (bounds.low is None or bounds.low <= value) and (
        bounds.high is None or value <= bounds.high
    )


def _check_runaway(answer: Answer) -> None:
    """Check that the direction keeps every bound for ever and improves the objective."""
    moves = dict(answer.direction)
    direction = [moves.get(column.name, ZERO) for column in answer.problem.columns]
    activities = _activities(answer.problem, direction)
    for move, bounds in _paired(direction, activities, answer.problem):
        assert bounds.high is None or move <= 0, "the direction runs into a bound"
        assert bounds.low is None or move >= 0, "the direction runs into a bound"
    gain = sum((c * d for c, d in zip(_costs(answer), direction, strict=True)), ZERO)
    assert gain > 0 if answer.maximise else gain < 0, "the direction leads nowhere"


def _check_infeasible(problem: Problem) -> None:
    """Check that the least total by which rows miss their bounds is above zero."""
    size = len(problem.columns)
    columns = list(problem.columns)
    entries = []
    for i, row in enumerate(problem.matrix.rows):
        over, under = size + 2 * i, size + 2 * i + 1
        columns.append(Column(name=f"over {i}", bounds=Bounds(ZERO, None)))
        columns.append(Column(name=f"under {i}", bounds=Bounds(ZERO, None)))
        entries.append((*row, (over, Fraction(-1)), (under, Fraction(1))))
    elastic = Problem(
        columns=tuple(columns),
        rows=problem.rows,
        matrix=Matrix(tuple(entries), len(columns)),
    )
    missed = {column.name: Fraction(1) for column in columns[size:]}
    answer = Optimiser(engine_named("glpk")).optimise(elastic, missed, maximise=False)
    check_optimum(answer)
    assert answer.value > 0, "infeasible, and yet a point keeps all bounds"


def closes_over_the_cell(case: Case, answer: Answer) -> bool:
    """Check that a point's coefficients close every element and charge.

    Returns
    -------
    bool
        Whether that could be asked: not of a problem of fluxes alone, nor of one in which a
        carrier may come from outside, as when a free source of it is tried.
    """
    problem = answer.problem
    shut = Bounds(ZERO, ZERO)
    balances = [row for row in problem.rows if row.name.endswith((" balance", " carriers"))]
    if any(row.bounds != shut for row in balances):
        return False
    total: dict[str, Fraction] = {}
    held = False
    for column, amount in zip(problem.columns, answer.primal, strict=True):
        kind, _, name = column.name.partition(" of ")
        if kind == "yield":
            held = True
            if amount:
                _add(total, amount, _atoms(case, name))
        elif kind not in KINDS and amount:
            return False
    assert not any(total.values()), f"the coefficients do not close: {total}"
    return held


def check_equation(prediction: Prediction) -> None:
    """Check that the filled-in equation closes, if all its coefficients are unique."""
    total: dict[str, Fraction] = {}
    for term in prediction.terms:
        if not term.range.single:
            return
        assert term.range.low is not None
        sign = -1 if term.side is Direction.CONSUMED else 1
        _add(total, sign * term.range.low, _atoms(prediction.case, term.compound))
    assert not any(total.values()), f"the filled-in equation does not close: {total}"


def _atoms(case: Case, name: str) -> dict[str, Fraction]:
    """Elements and charge of a compound of the case, of its network, or of the library."""
    known = (*case.compounds, *(case.network.compounds if case.network else ()))
    formula = next((item.formula for item in known if item.name == name), None)
    if formula is None:
        entry = find_compound(name)
        assert entry is not None, f"{name} has no formula"
        formula = entry.formula
    return dict(formula.elements) | {"charge": Fraction(formula.charge)}


def _add(total: dict[str, Fraction], amount: Fraction, atoms: Mapping[str, Fraction]) -> None:
    for element, count in atoms.items():
        total[element] = total.get(element, ZERO) + amount * count
