"""The feasible points of a problem seen in two of its columns: an exact polygon.

Each corner is the proven optimum of a linear problem. Between two points of the rim the outward
normal is tried: a point beyond is another point of the rim, none beyond proves the edge. So a
polygon of n corners takes about 2n problems, and no grid decides what is found. Where the points
run away, the directions in which they do are found the same way and told; nothing is cut off.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from enum import StrEnum
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.optimum.problem import FREE, Bounds
from yieldnet.optimum.proof import Status
from yieldnet.optimum.ranges import Range

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Optimiser

__all__ = ["Axis", "Point", "Polygon", "Shape", "project"]

Point = tuple[Fraction, Fraction]
"""Place on both axes, or a direction."""

_ZERO, _ONE = Fraction(0), Fraction(1)
_RIGHT, _LEFT, _UP, _DOWN = (_ONE, _ZERO), (-_ONE, _ZERO), (_ZERO, _ONE), (_ZERO, -_ONE)


@dataclass(frozen=True, slots=True)
class Axis:
    """A column seen along an axis.

    Parameters
    ----------
    column : str
        The column.
    factor : Fraction
        Length on the axis per unit of the column; not zero.
    """

    column: str
    factor: Fraction = _ONE


class Shape(StrEnum):
    """What the feasible points look like."""

    POINT = "point"
    SEGMENT = "segment"
    POLYGON = "polygon"
    UNBOUNDED = "unbounded"


@dataclass(frozen=True, slots=True, kw_only=True)
class Polygon:
    """Feasible points on two axes.

    Parameters
    ----------
    corners : tuple of Point
        Every corner, counter-clockwise. A bounded polygon begins at its lowest corner, the leftmost
        of two. An unbounded one begins at the corner where its rim comes in; it has no corner if
        its points fill whole lines.
    rays : tuple of Point
        Directions without end. With corners: the way the rim comes from infinity to the first one,
        seen from there, and the way it leaves the last one. Without: directions whose sums are all
        directions in which the points run away. Empty if bounded.
    x, y : Range
        Least and most on each axis; ``None`` where there is no bound.
    """

    corners: tuple[Point, ...]
    rays: tuple[Point, ...]
    x: Range
    y: Range

    @property
    def shape(self) -> Shape:
        """What it looks like."""
        if self.rays:
            return Shape.UNBOUNDED
        return {1: Shape.POINT, 2: Shape.SEGMENT}.get(len(self.corners), Shape.POLYGON)

    def edges(self) -> tuple[tuple[int, int], ...]:
        """Places of the corners at both ends of each edge, in the order of the corners."""
        last = len(self.corners) - 1
        found = [(place, place + 1) for place in range(last)]
        if self.shape is Shape.POLYGON:
            found.append((last, 0))
        return tuple(found)


class _Empty(Exception):
    """There is no feasible point."""


class _Runaway(Exception):
    """There is no bound in a direction that was tried."""


@dataclass(frozen=True, slots=True)
class _Plane:
    """A problem seen on two axes."""

    optimiser: Optimiser
    problem: Problem
    x: Axis
    y: Axis

    def _objective(self, way: Point) -> dict[str, Fraction]:
        return {self.x.column: way[0] * self.x.factor, self.y.column: way[1] * self.y.factor}

    def furthest(self, way: Point) -> Point:
        """A point furthest along a direction."""
        return self.corner(way, None)

    def corner(self, way: Point, then: Point | None) -> Point:
        """A point furthest along a direction and, among those, along another one."""
        answer = self.optimiser.optimise(self.problem, self._objective(way))
        if answer.status is Status.INFEASIBLE:
            raise _Empty
        if answer.status is Status.OPTIMAL and then is not None:
            answer = self.optimiser.optimise(answer.optimal_face(), self._objective(then))
        if answer.status is not Status.OPTIMAL:
            raise _Runaway
        return (
            answer[self.x.column] * self.x.factor,
            answer[self.y.column] * self.y.factor,
        )


def project(optimiser: Optimiser, problem: Problem, x: Axis, y: Axis) -> Polygon | None:
    """Feasible points of a problem on two axes, or ``None`` if there are none.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    problem : Problem
        The problem.
    x, y : Axis
        Two different columns.

    Returns
    -------
    Polygon or None
        Every corner, exact.
    """
    plane = _Plane(optimiser, problem, x, y)
    try:
        corners = _rim(plane)
    except _Empty:
        return None
    except _Runaway:
        return _open_polygon(plane)
    return Polygon(
        corners=corners,
        rays=(),
        x=Range(min(at[0] for at in corners), max(at[0] for at in corners)),
        y=Range(min(at[1] for at in corners), max(at[1] for at in corners)),
    )


def _rim(plane: _Plane) -> tuple[Point, ...]:
    """Corners of a bounded polygon, from the lowest."""
    right, left = plane.furthest(_RIGHT), plane.furthest(_LEFT)
    if right[0] == left[0]:
        bottom, top = plane.furthest(_DOWN), plane.furthest(_UP)
        return (bottom,) if bottom == top else (bottom, top)
    points = [*_between(plane, left, right), *_between(plane, right, left)]
    if len(points) > 2:
        points = [
            here
            for before, here, after in zip(
                [points[-1], *points], points, [*points[1:], points[0]], strict=False
            )
            if _turn(before, here, after)
        ]
    first = min(range(len(points)), key=lambda place: (points[place][1], points[place][0]))
    return (*points[first:], *points[:first])


def _between(plane: _Plane, start: Point, end: Point) -> list[Point]:
    """Points of the rim after one of its points up to another, counter-clockwise."""
    found: list[Point] = []
    here, ahead = start, [end]
    while ahead:
        there = ahead[-1]
        outward = (there[1] - here[1], here[0] - there[0])
        beyond = plane.furthest(outward)
        if _along(outward, beyond) > _along(outward, here):
            ahead.append(beyond)
        else:
            found.append(there)
            here = ahead.pop()
    return found


def _along(way: Point, at: Point) -> Fraction:
    return way[0] * at[0] + way[1] * at[1]


def _turn(before: Point, here: Point, after: Point) -> Fraction:
    """Positive if the way turns left at the middle point, zero if it goes straight on or back."""
    return (here[0] - before[0]) * (after[1] - here[1]) - (here[1] - before[1]) * (
        after[0] - here[0]
    )


def _open_polygon(plane: _Plane) -> Polygon:
    """Corners and rays of points that run away."""
    cone = _rim(replace(plane, problem=_directions(plane)))
    origin = (_ZERO, _ZERO)
    if origin not in cone:
        # Both ways along a line: the points have no corner.
        return Polygon(
            corners=(),
            rays=_lines(cone),
            x=Range(_end(plane, _LEFT, 0), _end(plane, _RIGHT, 0)),
            y=Range(_end(plane, _DOWN, 1), _end(plane, _UP, 1)),
        )
    place = cone.index(origin)
    coming = _unit(cone[place - 1])
    going = _unit(cone[(place + 1) % len(cone)])
    # The first edge comes in against its ray, the last one leaves along its own.
    first = plane.corner((-coming[1], coming[0]), (-coming[0], -coming[1]))
    last = plane.corner((going[1], -going[0]), (-going[0], -going[1]))
    corners = [first]
    if first != last:
        points = [first, *_between(plane, first, last)]
        corners += [
            here
            for before, here, after in zip(points, points[1:], points[2:], strict=False)
            if _turn(before, here, after)
        ]
        corners.append(last)
    return Polygon(
        corners=tuple(corners),
        rays=(coming, going),
        x=_reach(corners, (coming, going), 0),
        y=_reach(corners, (coming, going), 1),
    )


def _directions(plane: _Plane) -> Problem:
    """The problem whose points are the directions in which the points can run away, cut short."""

    def ends(bounds: Bounds) -> Bounds:
        if bounds.low is None and bounds.high is None:
            return FREE
        return Bounds(None if bounds.low is None else _ZERO, None if bounds.high is None else _ZERO)

    problem = plane.problem
    cone = replace(
        problem,
        columns=tuple(replace(item, bounds=ends(item.bounds)) for item in problem.columns),
        rows=tuple(replace(item, bounds=ends(item.bounds)) for item in problem.rows),
    )
    short = {}
    for name in (plane.x.column, plane.y.column):
        bounds = cone.columns[cone.column(name)].bounds
        short[name] = Bounds(
            -_ONE if bounds.low is None else bounds.low,
            _ONE if bounds.high is None else bounds.high,
        )
    return cone.with_columns(short)


def _unit(way: Point) -> Point:
    size = max(abs(way[0]), abs(way[1]))
    return way[0] / size, way[1] / size


def _lines(cone: Sequence[Point]) -> tuple[Point, ...]:
    """Directions of a cone that holds a line, from the corners of the cone cut short."""
    edges = zip(cone, [*cone[1:], cone[0]], strict=True)
    for start, end in edges:
        if not _turn(start, (_ZERO, _ZERO), end):
            # The rim passes through the origin: a line or a half-plane to the left of it.
            way = _unit(end)
            both = (way, (-way[0], -way[1]))
            return both if len(cone) == 2 else (*both, (-way[1], way[0]))
    return _RIGHT, _UP, _LEFT, _DOWN


def _end(plane: _Plane, way: Point, axis: int) -> Fraction | None:
    try:
        return plane.furthest(way)[axis]
    except _Runaway:
        return None


def _reach(corners: Sequence[Point], rays: Sequence[Point], axis: int) -> Range:
    values = [at[axis] for at in corners]
    return Range(
        None if any(ray[axis] < 0 for ray in rays) else min(values),
        None if any(ray[axis] > 0 for ray in rays) else max(values),
    )
