"""The reconciled point: against another method in floats, and its own conditions in fractions.

Each with independent errors and with correlated ones.
"""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from random import Random
from typing import TYPE_CHECKING

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from tests.property.answers import build
from tests.property.cases import cases, random_case
from tests.property.lps import assert_proven
from tests.property.measured_sets import random_correlations
from yieldnet.balance.statements import band, side_sign, with_bands, with_point, yield_column
from yieldnet.foundation.exact import eliminate
from yieldnet.optimum.proof import Status

if TYPE_CHECKING:
    from collections.abc import Mapping

    from tests.property.answers import Built
    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Bounds, Problem
    from yieldnet.optimum.proof import Optimiser

Form = dict[int, Fraction]
"""A linear form over the columns of a problem."""
RIDGE = 1e-5
"""Weight of all directions beside the measured ones, without which the least squares have no single
answer. It moves the measured values by about its square [1/(mol/mol)]."""
IN_DEVIATIONS = 1e-6
"""How far the other method may end from the exact point [s.d.]: the ridge moves it by 1e-10 times
the size of the fluxes, and floats in a system of condition 1e5 to 1e8 hold about 1e-8."""
ZERO = Fraction(0)


def _sign(case: Case, name: str) -> int:
    coefficient = case.coefficient(name)
    assert coefficient is not None
    return side_sign(coefficient.side)


def _value(form: Mapping[int, Fraction], point: Mapping[int, Fraction]) -> Fraction:
    return sum((value * point[j] for j, value in form.items()), ZERO)


def _forms(problem: Problem) -> list[tuple[Form, Bounds]]:
    """Columns and rows alike: linear forms with bounds."""
    found = [({j: Fraction(1)}, item.bounds) for j, item in enumerate(problem.columns)]
    for row, entries in zip(problem.rows, problem.matrix.rows, strict=True):
        found.append((dict(entries), row.bounds))
    return found


def _inner_point(optimiser: Optimiser, problem: Problem) -> tuple[dict[int, Fraction], list[Form]]:
    """A point that keeps a distance from every bound that allows one, and the forms that are held.

    A method that walks through an interior needs one, and a random network seldom leaves all its
    inequalities room: a loop that can only turn one way stands still.
    """
    first = optimiser.optimise(problem, {})
    assert first.status is Status.OPTIMAL
    points = [dict(enumerate(first.primal))]
    held: list[Form] = []
    for form, bounds in _forms(problem):
        for sign, end in ((1, bounds.low), (-1, bounds.high)):
            if end is None or any(sign * (_value(form, p) - end) > 0 for p in points):
                continue
            objective = {problem.columns[j].name: sign * value for j, value in form.items()}
            answer = optimiser.optimise(problem, objective)
            if answer.status is Status.UNBOUNDED:
                moves = dict(answer.direction)
                points.append(
                    {j: x + moves.get(problem.columns[j].name, ZERO) for j, x in points[0].items()}
                )
            elif answer.value == sign * end:
                held.append(form)
            else:
                points.append(dict(enumerate(answer.primal)))
    return {j: sum((p[j] for p in points), ZERO) / len(points) for j in points[0]}, held


def _by_least_distance(built: Built) -> dict[str, float]:
    """The measured coefficients by an active-set method of another kind, from scipy's parts.

    Equalities are put in exactly. What is left, least squares under inequalities, becomes a least
    distance by a QR factorisation, and that is solved as non-negative least squares.

    References
    ----------
    Lawson, C. L., Hanson, R. J. (1974) Solving Least Squares Problems, chapter 23.
    """
    import numpy as np
    from scipy.linalg import qr, solve_triangular  # type: ignore[import-untyped]
    from scipy.optimize import nnls  # type: ignore[import-untyped]

    case, statements = built.case, built.layers.statements
    problem = with_bands(built.layers.final, statements)
    inner, held = _inner_point(built.optimiser, problem)
    size = len(problem.columns)
    solved = eliminate([[form.get(j, ZERO) for j in range(size)] for form in held], size)
    loose = [j for j in range(size) if j not in solved.pivots]
    pivots = dict(zip(solved.pivots, solved.rows, strict=True))

    def changes(form: Form) -> list[float]:
        """How a form changes with the columns that the equalities leave."""
        line = dict.fromkeys(loose, ZERO)
        for j, value in form.items():
            if j not in pivots:
                line[j] += value
                continue
            for k in loose:
                line[k] -= value * pivots[j][k]
        return [float(value) for value in line.values()]

    targets = statements.pooled()
    columns = [problem.column(yield_column(name)) for name in targets]
    signs = [_sign(case, name) for name in targets]
    at_inner = [sign * inner[j] for sign, j in zip(signs, columns, strict=True)]
    moved = np.zeros(len(columns))
    if loose:
        lines, room = [], []
        for form, bounds in _forms(problem):
            for sign, end in ((1, bounds.low), (-1, bounds.high)):
                if end is not None and any(line := changes(form)):
                    lines.append([sign * value for value in line])
                    room.append(float(sign * (_value(form, inner) - end)))
        pulls = np.array([changes({j: Fraction(s)}) for s, j in zip(signs, columns, strict=True)])
        weights = np.array([[float(value) for value in row] for row in targets.precision()])
        root = np.linalg.cholesky(weights).T
        short = np.array(
            [float(x - value) for x, value in zip(at_inner, targets.values, strict=True)]
        )
        count = len(loose)
        factor, triangle = qr(np.vstack([root @ pulls, RIDGE * np.eye(count)]), mode="economic")
        shift = factor.T @ np.concatenate([root @ short, np.zeros(count)])
        rows = solve_triangular(triangle, np.array(lines).T, trans="T").T
        system = np.vstack([rows.T, rows @ shift - np.array(room)]) / np.linalg.norm(rows, axis=1)
        aim = np.append(np.zeros(count), 1.0)
        residual = system @ nnls(system, aim)[0] - aim
        moved = pulls @ solve_triangular(triangle, -residual[:-1] / residual[-1] - shift)
    return {
        name: float(start) + float(move)
        for name, start, move in zip(targets, at_inner, moved, strict=True)
    }


def _correlated(case: Case, seed: int) -> Case:
    """The case with random correlations between all its measured values that have errors."""
    names = [item.compound for item in case.measured if item.sd]
    return replace(case, correlations=random_correlations(Random(f"pairs {seed}"), names))


correlated_cases = st.builds(_correlated, cases(), st.integers(0, 10**6))


@given(cases() | correlated_cases)
@settings(max_examples=200)
def test_the_point_is_where_another_method_ends(case: Case) -> None:
    built = build(case)
    assume(built.point is not None)
    assert built.point is not None
    targets = built.layers.statements.pooled()
    assume(len(targets))
    for name, value in _by_least_distance(built).items():
        deviation = float(targets[name].variance) ** 0.5
        assert value == pytest.approx(float(built.point[name]), abs=IN_DEVIATIONS * deviation)


@given(cases() | correlated_cases)
@settings(max_examples=200)
def test_the_point_satisfies_its_conditions_exactly(case: Case) -> None:
    """Inside every band and on every balance; and no feasible point lies down the gradient there.

    A convex sum of squares is least at a feasible point exactly if its own gradient is a linear
    objective whose least value is at that point. The duals of that problem are the multipliers of
    the optimality conditions of Karush, Kuhn and Tucker, and they are checked from scratch.
    """
    built = build(case)
    statements = built.layers.statements
    banded = with_bands(built.layers.final, statements)
    if built.point is None:
        assert built.optimiser.optimise(banded, {}).status is Status.INFEASIBLE
        return
    assert set(built.point) == set(statements.measured_compounds())
    for item in statements.measured:
        limits = band(item)
        assert limits.low is not None
        assert limits.high is not None
        assert limits.low <= built.point[item.compound] <= limits.high
    there = built.optimiser.optimise(with_point(banded, statements, built.point), {})
    assert_proven(there)
    targets = statements.pooled()
    offsets = [built.point[name] - target.value for name, target in targets.items()]
    gradient = {
        yield_column(name): 2
        * _sign(case, name)
        * sum((weight * x for weight, x in zip(row, offsets, strict=True)), ZERO)
        for name, row in zip(targets.names, targets.precision(), strict=True)
    }
    least = built.optimiser.optimise(banded, gradient, maximise=False)
    assert_proven(least)
    assert least.value == sum((slope * there[name] for name, slope in gradient.items()), ZERO)


def test_random_points_are_moved_and_correlations_count() -> None:
    # Where every point is its target, the tests above would hold for a method that does nothing.
    moved = otherwise = 0
    for seed in range(60):
        case = random_case(4 + seed % 9, seed)
        built, other = build(case), build(_correlated(case, seed))
        assert (built.point is None) == (other.point is None)
        if built.point is None or other.point is None:
            continue
        for name, target in built.layers.statements.pooled().items():
            moved += built.point[name] != target.value
        otherwise += built.point != other.point
    assert moved > 20
    assert otherwise > 5
