"""The reconciled point: the measured values moved as little as the balances demand.

Of all points of a problem with every measured coefficient inside its band, the one with the least
sum of squared deviations in standard deviations. In the space of the measured coefficients the
feasible points form a polytope, and the sum is a squared distance in it: Wolfe's method finds the
nearest point from a few corners, each corner being the optimum of a linear problem. Its equations
are solved in fractions, so the point is exact, and it is unique.

References
----------
Wolfe, P. (1976) Finding the nearest point in a polytope, Mathematical Programming 11:128-149.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import side_sign, with_bands, yield_column
from yieldnet.foundation.errors import SolveError
from yieldnet.foundation.exact import eliminate
from yieldnet.optimum.proof import Status

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping, Sequence

    from yieldnet.balance.statements import Statements
    from yieldnet.model.case import Case, Measurement
    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Optimiser

__all__ = ["Target", "pool", "reconciled_point"]

Vector = tuple[Fraction, ...]


@dataclass(frozen=True, slots=True)
class Target:
    """Where a measured coefficient wants to be, and how much it weighs.

    Parameters
    ----------
    value : Fraction
        Weighted mean of the measured values, positive on the declared side [mol/mol].
    weight : Fraction
        Sum of 1/s.d.^2 [(mol/mol)^-2].
    """

    value: Fraction
    weight: Fraction

    @property
    def variance(self) -> Fraction:
        """Square of the pooled standard deviation [(mol/mol)^2]."""
        return 1 / self.weight


def pool(measured: Sequence[Measurement]) -> dict[str, Target]:
    """Weighted mean of the values of each coefficient; exact values are left out.

    Parameters
    ----------
    measured : sequence of Measurement
        Measured values.

    Returns
    -------
    dict of str to Target
        By compound, in order of appearance.
    """
    sums: dict[str, tuple[Fraction, Fraction]] = {}
    exact = {item.compound for item in measured if not item.sd}
    for item in measured:
        if item.sd and item.compound not in exact:
            weight = 1 / item.sd**2
            total, moment = sums.get(item.compound, (Fraction(0), Fraction(0)))
            sums[item.compound] = (total + weight, moment + weight * item.value)
    return {name: Target(moment / total, total) for name, (total, moment) in sums.items()}


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
    banded = with_bands(problem, statements)
    targets = pool(statements.measured)
    signs = {item.name: side_sign(item.side) for item in case.coefficients if item.name in targets}
    names = tuple(targets)

    def corner(gradient: Vector) -> Vector | None:
        objective = {
            yield_column(name): signs[name] * targets[name].weight * slope
            for name, slope in zip(names, gradient, strict=True)
        }
        answer = optimiser.optimise(banded, objective, maximise=False)
        if answer.status is Status.INFEASIBLE:
            return None
        return tuple(
            signs[name] * answer[yield_column(name)] - targets[name].value for name in names
        )

    weights = tuple(targets[name].weight for name in names)
    start = corner(tuple(Fraction(0) for _ in names))
    if start is None:
        return None
    offset = _nearest(start, corner, weights) if names else ()
    point = {name: targets[name].value + move for name, move in zip(names, offset, strict=True)}
    for item in statements.measured:
        if not item.sd:
            point[item.compound] = item.value
    return point


def _dot(left: Vector, right: Vector, weights: Vector) -> Fraction:
    return sum((a * b * w for a, b, w in zip(left, right, weights, strict=True)), Fraction(0))


def _nearest(start: Vector, corner: Callable[[Vector], Vector | None], weights: Vector) -> Vector:
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


def _affine_nearest(corners: Sequence[Vector], weights: Vector) -> list[Fraction]:
    """Shares, summing to 1, of the point of the affine hull nearest to the origin."""
    size = len(corners)
    rows = [[_dot(a, b, weights) for b in corners] + [Fraction(1), Fraction(0)] for a in corners]
    rows.append([Fraction(1)] * size + [Fraction(0), Fraction(1)])
    form = eliminate(rows, size + 2)
    found: Mapping[int, Fraction] = {
        pivot: row[-1] for pivot, row in zip(form.pivots, form.rows, strict=True)
    }
    return [found[i] for i in range(size)]
