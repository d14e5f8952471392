"""How far the errors of the measured values carry: to the reconciled values and to the best value.

Where only equalities tie the values together, everything is linear and the standard deviations are
in closed form. Where directions, one-way reactions or demands hold a value, or the best value has a
kink there, the reconciled point of many sets of values drawn from their errors is found instead,
in floats; how many is part of the answer.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from itertools import product as every
from typing import TYPE_CHECKING

from yieldnet.balance.statements import side_sign, with_bands, with_point, yield_column
from yieldnet.foundation.errors import SolveError
from yieldnet.foundation.exact import eliminate
from yieldnet.optimum.fast import FastProblem, FastStatus
from yieldnet.optimum.hull import affine_hull
from yieldnet.optimum.polygon import Axis, project
from yieldnet.optimum.problem import Bounds
from yieldnet.optimum.proof import Status
from yieldnet.optimum.slopes import slopes

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable, Mapping, Sequence

    import numpy as np
    from numpy.typing import NDArray

    from yieldnet.balance.covariance import Pooled
    from yieldnet.foundation.exact import Matrix
    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Answer, Optimiser
    from yieldnet.prediction.ladder import Objective
    from yieldnet.prediction.layers import Layers

__all__ = ["SEED", "Draws", "WorstEnd", "best_variance", "draw_values", "worst_end"]

Point = dict[str, Fraction]
SEED = 20_261
"""Seed of the generator, so that the same case gives the same answer [-]."""
_MOST_ROUNDS = 500
"""Corners after which the search for a nearest point is given up [-]."""
_MOST_CORNERS = 600
"""Corners of the bands after which the search for the worst of them is given up [-]."""
_CLOSE = 1e-9
"""Relative distance below which a facet of a hull counts as reached: far above the rounding of
double precision, far below any digit that is printed [-]."""
_WIDENED = 1.01
"""Factor on bounds that must not hold the point they are drawn round, whatever floats lose [-]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Draws:
    """Reconciled points of sets of values drawn from the errors.

    Parameters
    ----------
    names : tuple of str
        Measured coefficients.
    points : tuple of tuple of float
        Reconciled value of each, one row a set [mol/mol basis].
    best : tuple of float
        Best value of the aim at each point; empty without an aim [mol/mol basis].
    asked : int
        Sets drawn, from the seed :data:`SEED` [-].
    """

    names: tuple[str, ...]
    points: tuple[tuple[float, ...], ...]
    best: tuple[float, ...]
    asked: int

    def covariance(self) -> tuple[tuple[float, ...], ...]:
        """Covariance of the reconciled values [(mol/mol basis)^2]."""
        import numpy as np

        table = np.atleast_2d(np.cov(np.array(self.points), rowvar=False))
        return tuple(tuple(float(value) for value in row) for row in table)

    def best_sd(self) -> float:
        """Standard deviation of the best value [mol/mol basis]."""
        import numpy as np

        return float(np.std(np.array(self.best), ddof=1))


def draw_values(
    layers: Layers,
    targets: Pooled,
    centre: Mapping[str, Fraction],
    objective: Objective | None,
    draws: int,
    tick: Callable[[int, int], None] | None = None,
) -> Draws:
    """Reconciled point, and best value there, of values drawn from their errors.

    Parameters
    ----------
    layers : Layers
        The problems.
    targets : Pooled
        Measured values with their covariance.
    centre : mapping of str to Fraction
        Point round which values are drawn, the reconciled one [mol/mol basis].
    objective : Objective or None
        The aim.
    draws : int
        How many sets [-].
    tick : callable, optional
        Called with the sets done and the sets in all.

    Returns
    -------
    Draws
        One point a set; sets at which the aim has no best value have none.

    Notes
    -----
    A parametric bootstrap (Efron 1979): errors are normal with the stated covariance. Bands are
    left out, since they would move with each set.
    """
    import numpy as np

    generator = np.random.default_rng(SEED)
    spread = np.array([[float(value) for value in row] for row in targets.covariance])
    moves = generator.multivariate_normal(np.zeros(len(targets)), spread, size=draws)
    middle = np.array([float(centre[name]) for name in targets.names])
    exact = {name: float(value) for name, value in centre.items() if name not in targets}
    field = _Field(layers, targets, spread, exact)
    points: list[tuple[float, ...]] = []
    best: list[float] = []
    for count, move in enumerate(moves, 1):
        point = field.nearest(middle + move, middle)
        points.append(tuple(float(value) for value in point))
        if objective is not None:
            value = field.best(objective, point)
            if value is not None:
                best.append(value)
        if tick is not None:
            tick(count, draws)
    return Draws(names=targets.names, points=tuple(points), best=tuple(best), asked=draws)


class _Field:
    """Points that keep all balances, sides and demands, in floats, for many drawn sets.

    The nearest point by Wolfe's method, as in :mod:`yieldnet.balance.reconciled`. What rounding
    leaves here is far below the error of a sample.
    """

    def __init__(
        self,
        layers: Layers,
        targets: Pooled,
        spread: NDArray[np.float64],
        exact: Mapping[str, float],
    ) -> None:
        import numpy as np

        problem = layers.final
        self._problem = FastProblem(problem)
        self._column = {item.name: j for j, item in enumerate(problem.columns)}
        signs = {item.name: side_sign(item.side) for item in layers.case.coefficients}
        self._places = [self._column[yield_column(name)] for name in targets.names]
        self._signs = np.array([float(signs[name]) for name in targets.names])
        self._weights = np.linalg.inv(spread)
        self._variances = np.diag(spread)
        self._rows = [
            (problem.row(item.label), targets.names.index(item.compound))
            for item in layers.statements.measured
            if item.compound in targets
        ]
        for item in layers.statements.measured:
            if item.compound in exact:
                value = exact[item.compound]
                self._problem.bound_row(problem.row(item.label), value, value)

    def _corner(self, gradient: NDArray[np.float64]) -> NDArray[np.float64]:
        import numpy as np

        costs = zip(self._places, self._signs * gradient, strict=True)
        self._problem.aim({place: float(cost) for place, cost in costs}, maximise=False)
        if self._problem.solve() is not FastStatus.OPTIMAL:
            raise SolveError("a drawn set has no nearest point in floats")
        found: NDArray[np.float64] = self._signs * np.array(self._problem.values(self._places))
        return found

    def nearest(
        self, wanted: NDArray[np.float64], centre: NDArray[np.float64]
    ) -> NDArray[np.float64]:
        """Point nearest to values that are wanted; the centre is one of the points.

        Only points no farther off than the centre come into question, and within a squared distance
        d of the inverse covariance a value moves by no more than the root of its variance times d.
        Without these bounds, widened so that they hold nothing, a problem whose coefficients have
        no end would have no corner to start from.
        """
        import numpy as np

        weights, away = self._weights, centre - wanted
        reach = _WIDENED * np.sqrt(self._variances * (away @ weights @ away)) + _CLOSE
        for row, place in self._rows:
            low, high = wanted[place] - reach[place], wanted[place] + reach[place]
            self._problem.bound_row(row, float(low), float(high))
        corners = np.array([self._corner(-weights @ wanted) - wanted])
        shares = np.array([1.0])
        point: NDArray[np.float64] = corners[0]
        for _ in range(_MOST_ROUNDS):
            found = self._corner(weights @ point) - wanted
            if point @ weights @ (point - found) <= _CLOSE * (1 + point @ weights @ point):
                there: NDArray[np.float64] = point + wanted
                return there
            corners = np.vstack([corners, found])
            shares = np.append(shares, 0.0)
            while True:
                affine = _affine_shares(corners @ weights @ corners.T)
                if (affine > 0).all():
                    shares = affine
                    break
                falling = affine <= 0
                steps = shares[falling] / (shares[falling] - affine[falling])
                shares = shares + min(1.0, float(steps.min())) * (affine - shares)
                kept = shares > _CLOSE
                if kept.all() or not kept.any():
                    shares = np.clip(shares, 0, None) / np.clip(shares, 0, None).sum()
                    break
                corners, shares = corners[kept], shares[kept] / shares[kept].sum()
            point = shares @ corners
        raise SolveError("a drawn set has no nearest point in floats")

    def best(self, objective: Objective, point: NDArray[np.float64]) -> float | None:
        """Best value of the aim at a point; ``None`` if there is none."""
        for row, place in self._rows:
            value = float(point[place])
            room = _CLOSE * max(1.0, abs(value))
            self._problem.bound_row(row, value - room, value + room)
        self._problem.aim({self._column[objective.column]: objective.sign}, objective.maximise)
        if self._problem.solve(dual=True) is not FastStatus.OPTIMAL:
            return None
        return self._problem.value


def _affine_shares(products: NDArray[np.float64]) -> NDArray[np.float64]:
    """Shares, summing to 1, of the point of the affine hull nearest to the origin."""
    import numpy as np

    size = len(products)
    system = np.ones((size + 1, size + 1))
    system[:size, :size] = products
    system[size, size] = 0.0
    right = np.zeros(size + 1)
    right[size] = 1.0
    return np.asarray(np.linalg.lstsq(system, right, rcond=None)[0][:size], dtype=np.float64)


def best_variance(
    optimiser: Optimiser, layers: Layers, best: Answer, names: Sequence[str], covariance: Matrix
) -> Fraction | None:
    """Variance of the best value, if it changes linearly with the reconciled values.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    layers : Layers
        The problems.
    best : Answer
        Proven optimum at the reconciled point.
    names : sequence of str
        Measured coefficients.
    covariance : tuple of tuple of Fraction
        Of their reconciled values [(mol/mol basis)^2].

    Returns
    -------
    Fraction or None
        Variance [(mol/mol basis)^2]; ``None`` where the slope one way is not the slope back, or a
        move is impossible.

    Notes
    -----
    Reconciled values move in the span of their covariance only. With its reduced rows as
    directions and the slopes s along them, the variance is s' M s, where M is the covariance at the
    pivots of those rows.
    """
    form = eliminate(covariance, len(names))
    labels: dict[str, list[str]] = {}
    for item in layers.statements.measured:
        labels.setdefault(item.compound, []).append(item.label)
    moves: list[dict[str, Fraction]] = []
    for row in form.rows:
        move = {
            label: step
            for name, step in zip(names, row, strict=True)
            if step
            for label in labels[name]
        }
        moves += [move, {label: -step for label, step in move.items()}]
    found = [item.value for item in slopes(optimiser, best, moves)]
    there, back = found[::2], found[1::2]
    rates: list[Fraction] = []
    for one, other in zip(there, back, strict=True):
        if one is None or other is None or one != -other:
            return None
        rates.append(one)
    return sum(
        (
            a * b * covariance[i][j]
            for a, i in zip(rates, form.pivots, strict=True)
            for b, j in zip(rates, form.pivots, strict=True)
        ),
        Fraction(0),
    )


@dataclass(frozen=True, slots=True)
class WorstEnd:
    """Worst best value over the bands.

    Parameters
    ----------
    value : Fraction or None
        The worse end of the aim [mol/mol basis]; ``None`` if it was not found.
    corners : int
        Corners of the bands that were looked at [-].
    reason : str
        Why it was not found.
    """

    value: Fraction | None
    corners: int
    reason: str = ""


def worst_end(optimiser: Optimiser, layers: Layers, objective: Objective) -> WorstEnd:
    """Worst of the best values of the aim over all points of the bands that the balances allow.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    layers : Layers
        The problems.
    objective : Objective
        The aim.

    Returns
    -------
    WorstEnd
        The value at the worst corner, proven there.

    Notes
    -----
    The best value is concave in the measured values for a maximum and convex for a minimum, so the
    worst of it lies at a corner of the allowed set. With up to two directions the corners are
    exact; where all corners of the bands are allowed they are those; otherwise a convex hull is
    grown until no facet can be passed.
    """
    statements = layers.statements
    problem = with_bands(layers.final, statements)
    compounds = statements.measured_compounds()
    columns = [yield_column(name) for name in compounds]
    hull = affine_hull(optimiser, problem, columns)
    if hull is None:
        return WorstEnd(None, 0, "no point lies inside the bands")
    signs = {item.name: side_sign(item.side) for item in layers.case.coefficients}
    form = eliminate(hull.directions, len(columns))
    axes = [columns[pivot] for pivot in form.pivots]
    origin = optimiser.optimise(problem, {})
    base = [origin[name] for name in columns]

    def whole(corner: Sequence[Fraction]) -> Point:
        """Measured values at a corner that is told on the axes alone."""
        steps = [value - base[pivot] for value, pivot in zip(corner, form.pivots, strict=True)]
        found = {}
        for place, name in enumerate(compounds):
            moved = sum(
                (step * row[place] for step, row in zip(steps, form.rows, strict=True)), Fraction(0)
            )
            found[name] = signs[name] * (base[place] + moved)
        return found

    corners = _corners(optimiser, problem, axes)
    if corners is None:
        return WorstEnd(None, _MOST_CORNERS, f"the bands have more than {_MOST_CORNERS} corners")
    values = []
    for corner in corners:
        answer = objective.best(optimiser, with_point(layers.final, statements, whole(corner)))
        if answer.status is not Status.OPTIMAL:
            return WorstEnd(None, len(corners), "the aim has no best value at a corner")
        values.append(answer.value)
    return WorstEnd(min(values) if objective.maximise else max(values), len(corners))


def _corners(
    optimiser: Optimiser, problem: Problem, axes: Sequence[str]
) -> list[tuple[Fraction, ...]] | None:
    """Corners of the points of a problem on some columns in which they have an inside."""
    if not axes:
        return [()]
    if len(axes) == 1:
        ends = [
            optimiser.optimise(problem, {axes[0]: Fraction(1)}, maximise)[axes[0]]
            for maximise in (False, True)
        ]
        return [(end,) for end in ends]
    if len(axes) == 2:
        polygon = project(optimiser, problem, Axis(axes[0]), Axis(axes[1]))
        assert polygon is not None
        return list(polygon.corners)
    if 2 ** len(axes) > _MOST_CORNERS:
        return None
    return _box_corners(optimiser, problem, axes) or _grown_hull(optimiser, problem, axes)


def _box_corners(
    optimiser: Optimiser, problem: Problem, axes: Sequence[str]
) -> list[tuple[Fraction, ...]] | None:
    """Corners of the smallest box round the points, if all of them are points."""
    ends = [
        [
            optimiser.optimise(problem, {name: Fraction(1)}, maximise)[name]
            for maximise in (False, True)
        ]
        for name in axes
    ]
    found = []
    for corner in every(*ends):
        held = problem.with_columns(
            {name: Bounds(value, value) for name, value in zip(axes, corner, strict=True)}
        )
        if optimiser.optimise(held, {}).status is not Status.OPTIMAL:
            return None
        found.append(corner)
    return found


def _grown_hull(
    optimiser: Optimiser, problem: Problem, axes: Sequence[str]
) -> list[tuple[Fraction, ...]] | None:
    """Points on the rim whose convex hull no facet's outward direction passes."""
    import numpy as np
    from scipy.spatial import ConvexHull  # type: ignore[import-untyped]

    def furthest(way: Iterable[float]) -> tuple[Fraction, ...]:
        objective = {
            name: Fraction(f"{factor:.12g}") for name, factor in zip(axes, way, strict=True)
        }
        answer = optimiser.optimise(problem, objective)
        return tuple(answer[name] for name in axes)

    size = len(axes)
    points: dict[tuple[Fraction, ...], None] = {}
    for way in np.vstack([np.eye(size), -np.eye(size), np.ones((1, size)), -np.ones((1, size))]):
        points[furthest(way)] = None
    scale = [float(max(p[k] for p in points) - min(p[k] for p in points)) for k in range(size)]
    # A body has points off every plane: directions orthogonal to what is there are tried first.
    while True:
        table = np.array([[float(x) / s for x, s in zip(p, scale, strict=True)] for p in points])
        centred = table - table[0]
        _, sizes, ways = np.linalg.svd(centred)
        rank = int((sizes > _CLOSE).sum())
        if rank == size:
            break
        way = ways[-1] / np.array(scale)
        before = len(points)
        points[furthest(way)] = points[furthest(-way)] = None
        if len(points) == before:  # pragma: no cover - the axes come from the affine hull
            return None
    tried: set[tuple[int, ...]] = set()
    while len(points) <= _MOST_CORNERS:
        listed = list(points)
        table = np.array([[float(x) / s for x, s in zip(p, scale, strict=True)] for p in listed])
        grown = False
        for *normal, offset in ConvexHull(table).equations:
            key = tuple(round(x * 1e9) for x in (*normal, offset))
            if key in tried:
                continue
            tried.add(key)
            corner = furthest(np.array(normal) / np.array(scale))
            reach = sum(n * float(x) / s for n, x, s in zip(normal, corner, scale, strict=True))
            if reach + offset > _CLOSE and corner not in points:
                points[corner] = None
                grown = True
        if not grown:
            return list(points)
    return None
