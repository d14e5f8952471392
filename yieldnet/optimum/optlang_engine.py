"""Second engine, through optlang, so that any solver optlang finds can be used.

optlang shows values, not a basis: variables strictly between their bounds must be basic, and the
rest of the basis is chosen so that it can be inverted. The proof then pivots from there.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from yieldnet.optimum.basis import Basis

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.optimum.problem import Bounds, Problem

__all__ = ["AT_BOUND", "PRIME", "OptlangEngine", "OptlangSession"]

AT_BOUND = 1e-7
"""How near a float must come to a bound to count as resting there; solvers keep bounds to about
1e-7, and a wrong guess costs exact pivots, never a wrong answer [-]."""


PRIME = 2**61 - 1
"""A prime beyond any denominator that a network is written with [-]."""


class OptlangEngine:
    """The first solver that optlang finds."""

    name = "optlang"

    def session(self, problem: Problem) -> OptlangSession:
        """Load the matrix of a problem."""
        return OptlangSession(problem)


class OptlangSession:
    """One optlang model.

    Parameters
    ----------
    problem : Problem
        Its matrix stays; later problems must share it.
    """

    def __init__(self, problem: Problem) -> None:
        import optlang  # type: ignore[import-untyped]
        from optlang.symbolics import Zero  # type: ignore[import-untyped]

        self._matrix = problem.matrix
        model: Any = optlang.Model()
        self._optlang: Any = optlang
        self._zero: Any = Zero
        self._model = model
        self._variables = [optlang.Variable(f"x{j}") for j in range(len(problem.columns))]
        model.add(self._variables)
        self._constraints = [
            optlang.Constraint(Zero, name=f"r{i}", lb=None, ub=None)
            for i in range(len(problem.rows))
        ]
        model.add(self._constraints, sloppy=True)
        model.update()
        for constraint, row in zip(self._constraints, problem.matrix.rows, strict=True):
            constraint.set_linear_coefficients(
                {self._variables[j]: float(value) for j, value in row}
            )

    def suggest(self, problem: Problem, objective: Mapping[int, float], maximise: bool) -> Basis:
        """Basis guessed from the values at which the solver stopped."""
        if problem.matrix is not self._matrix:
            raise ValueError("the problem has another matrix than the one loaded")
        for variable, column in zip(self._variables, problem.columns, strict=True):
            _move(variable, column.bounds)
        for constraint, row in zip(self._constraints, problem.rows, strict=True):
            _move(constraint, row.bounds)
        target = self._optlang.Objective(
            self._zero, direction="max" if maximise else "min", sloppy=True
        )
        self._model.objective = target
        self._model.update()
        target.set_linear_coefficients(
            {self._variables[j]: value for j, value in objective.items()}
        )
        self._model.optimize()
        values = [item.primal for item in (*self._variables, *self._constraints)]
        bounds = problem.all_bounds()
        return _guess(problem, [value or 0.0 for value in values], bounds)


def _first_independent(problem: Problem, order: list[int]) -> list[int]:
    """Places in the order of the first columns and row activities that form a basis.

    Eliminated modulo a large prime: should a pivot vanish there by chance, the proof pivots it
    away.
    """
    from flint import nmod_mat

    size, count = len(problem.columns), len(problem.rows)
    place = {j: at for at, j in enumerate(order)}
    entries = [0] * (count * (size + count))
    for i, row in enumerate(problem.matrix.rows):
        start = i * (size + count)
        for j, value in row:
            entries[start + place[j]] = value.numerator * pow(value.denominator, -1, PRIME) % PRIME
        entries[start + place[size + i]] = PRIME - 1
    reduced, rank = nmod_mat(count, size + count, entries, PRIME).rref()
    found: list[int] = []
    at = 0
    for i in range(rank):
        while not int(reduced[i, at]):
            at += 1
        found.append(at)
        at += 1
    return found


def _move(item: Any, bounds: Bounds) -> None:
    low = None if bounds.low is None else float(bounds.low)
    high = None if bounds.high is None else float(bounds.high)
    if (item.lb, item.ub) == (low, high):
        return
    item.lb = None
    item.ub = high
    item.lb = low


def _guess(problem: Problem, values: list[float], bounds: list[Bounds]) -> Basis:
    size, count = len(problem.columns), len(problem.rows)

    def near(value: float, bound: object) -> bool:
        return bound is not None and abs(value - float(bound)) <= AT_BOUND  # type: ignore[arg-type]

    inner = [
        j
        for j, (value, limit) in enumerate(zip(values, bounds, strict=True))
        if not near(value, limit.low) and not near(value, limit.high)
    ]
    between = set(inner)
    order = [j for j in inner if j < size]
    order += [j for j in inner if j >= size]
    order += [size + i for i in range(count) if size + i not in between]
    order += [j for j in range(size) if j not in between]
    basic = sorted(order[at] for at in _first_independent(problem, order))
    chosen = set(basic)
    at_high = frozenset(
        j
        for j, (value, limit) in enumerate(zip(values, bounds, strict=True))
        if j not in chosen
        and limit.high is not None
        and (limit.low is None or abs(value - float(limit.high)) < abs(value - float(limit.low)))
    )
    return Basis(tuple(basic), at_high)
