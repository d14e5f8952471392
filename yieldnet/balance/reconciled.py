"""The reconciled point: the measured values moved as little as the balances demand.

Of all points of a problem with every measured coefficient inside its band, the one with the least
sum of squared deviations in standard deviations; where errors are correlated, the sum is that of
the inverse covariance. In the space of the measured coefficients the feasible points form a
polytope, and the sum is a squared distance in it: Wolfe's method finds the nearest point from a few
corners, each corner being the optimum of a linear problem. Its equations are solved in fractions,
so the point is exact, and it is unique.

References
----------
Wolfe, P. (1976) Finding the nearest point in a polytope, Mathematical Programming 11:128-149.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import side_sign, with_bands, yield_column
from yieldnet.foundation.errors import SolveError
from yieldnet.foundation.exact import eliminate
from yieldnet.optimum.proof import Status

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping, Sequence

    from yieldnet.balance.covariance import Pooled
    from yieldnet.balance.statements import Statements
    from yieldnet.foundation.exact import Matrix
    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Optimiser

__all__ = ["nearest_point", "reconciled_point"]

Vector = tuple[Fraction, ...]


def reconciled_point(
    optimiser: Optimiser, problem: Problem, case: Case, statements: Statements
) -> dict[str, Fraction] | None:
    """Reconciled value of every measured coefficient, or ``None`` if no point keeps all bands.

    Parameters
    ----------
    optimiser : Optimiser
        Solves the linear problems.
    problem : Problem
        Balances, demands and sides; the measured rows may have any bounds.
    case : Case
        Says on which side a coefficient is positive.
    statements : Statements
        Measured values.

    Returns
    -------
    dict of str to Fraction or None
        Value by compound, positive on its side [mol/mol].
    """
    point = nearest_point(optimiser, with_bands(problem, statements), case, statements.pooled())
    if point is None:
        return None
    for item in statements.measured:
        if not item.sd:
            point[item.compound] = item.value
    return point


def nearest_point(
    optimiser: Optimiser, problem: Problem, case: Case, targets: Pooled
) -> dict[str, Fraction] | None:
    """Point of a problem whose coefficients are nearest to what is wanted of them.

    Parameters
    ----------
    optimiser : Optimiser
        Solves the linear problems.
    problem : Problem
        What a point must keep.
    case : Case
        Says on which side a coefficient is positive.
    targets : Pooled
        What is wanted, and how much a deviation weighs.

    Returns
    -------
    dict of str to Fraction or None
        Value of each coefficient with a target, positive on its side [mol/mol]; ``None`` if no
        point keeps the problem.
    """
    signs = {item.name: side_sign(item.side) for item in case.coefficients if item.name in targets}
    names = targets.names
    weights = targets.precision()

    def corner(offset: Vector) -> Vector | None:
        objective = {
            yield_column(name): signs[name] * slope
            for name, slope in zip(names, _weighted(weights, offset), strict=True)
        }
        answer = optimiser.optimise(problem, objective, maximise=False)
        if answer.status is Status.INFEASIBLE:
            return None
        return tuple(
            signs[name] * answer[yield_column(name)] - target
            for name, target in zip(names, targets.values, strict=True)
        )

    start = corner(tuple(Fraction(0) for _ in names))
    if start is None:
        return None
    offset = _nearest(start, corner, weights) if names else ()
    return {
        name: target + move
        for name, target, move in zip(names, targets.values, offset, strict=True)
    }


def _weighted(weights: Matrix, vector: Vector) -> Vector:
    return tuple(
        sum((w * b for w, b in zip(row, vector, strict=True) if w), Fraction(0)) for row in weights
    )


def _dot(left: Vector, right: Vector, weights: Matrix) -> Fraction:
    pairs = zip(left, _weighted(weights, right), strict=True)
    return sum((a * b for a, b in pairs), Fraction(0))


def _nearest(start: Vector, corner: Callable[[Vector], Vector | None], weights: Matrix) -> Vector:
    """Point of the polytope nearest to the origin, by Wolfe's method in fractions."""
    corners: list[Vector] = [start]
    shares: list[Fraction] = [Fraction(1)]
    point = start
    while any(point):
        found = corner(point)
        if found is None:
            raise SolveError("a feasible problem became infeasible: a solver fault")
        if _dot(point, point, weights) <= _dot(point, found, weights):
            return point
        corners.append(found)
        shares.append(Fraction(0))
        while True:
            affine = _affine_nearest(corners, weights)
            if all(share > 0 for share in affine):
                shares = affine
                break
            # Walk towards the nearest point of the affine hull until a share runs out; drop it.
            step = min(
                old / (old - new)
                for old, new in zip(shares, affine, strict=True)
                if new <= 0 and old > new
            )
            shares = [old + step * (new - old) for old, new in zip(shares, affine, strict=True)]
            kept = [i for i, share in enumerate(shares) if share > 0]
            corners = [corners[i] for i in kept]
            shares = [shares[i] for i in kept]
        point = _combine(corners, shares)
    return point


def _combine(corners: Sequence[Vector], shares: Sequence[Fraction]) -> Vector:
    return tuple(
        sum((share * vector[i] for share, vector in zip(shares, corners, strict=True)), Fraction(0))
        for i in range(len(corners[0]))
    )


def _affine_nearest(corners: Sequence[Vector], weights: Matrix) -> list[Fraction]:
    """Shares, summing to 1, of the point of the affine hull nearest to the origin."""
    size = len(corners)
    rows = [[_dot(a, b, weights) for b in corners] + [Fraction(1), Fraction(0)] for a in corners]
    rows.append([Fraction(1)] * size + [Fraction(0), Fraction(1)])
    form = eliminate(rows, size + 2)
    found: Mapping[int, Fraction] = {
        pivot: row[-1] for pivot, row in zip(form.pivots, form.rows, strict=True)
    }
    return [found[i] for i in range(size)]
