"""Feasible points on two axes: every shape, and points that run away."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.polygon import Axis, Point, Polygon, Shape, project
from yieldnet.optimum.problem import FREE, Bounds, ProblemBuilder
from yieldnet.optimum.proof import Optimiser
from yieldnet.optimum.ranges import Range

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

Pair = tuple[int | Fraction, int | Fraction]
Limit = tuple[int, int, int]
"""a, b, c of a x + b y <= c."""


def _polygon(
    limits: Sequence[Limit],
    x: Bounds = FREE,
    y: Bounds = FREE,
    factors: tuple[int, int] = (1, 1),
) -> Polygon | None:
    builder = ProblemBuilder()
    builder.add_column("x", x)
    builder.add_column("y", y)
    # A column that is on no axis, so that most points on the axes belong to many solutions.
    builder.add_column("z", Bounds(Fraction(0), Fraction(1)))
    builder.add_row("idle", "test", FREE, {"z": Fraction(1)})
    for number, (a, b, c) in enumerate(limits):
        builder.add_row(
            f"limit {number}",
            "test",
            Bounds(None, Fraction(c)),
            {"x": Fraction(a), "y": Fraction(b)},
        )
    axes = (Axis("x", Fraction(factors[0])), Axis("y", Fraction(factors[1])))
    return project(Optimiser(engine_named("glpk")), builder.build(), *axes)


def _exact(pairs: Iterable[Pair]) -> list[Point]:
    return [(Fraction(x), Fraction(y)) for x, y in pairs]


def _box(low: int, high: int) -> Bounds:
    return Bounds(Fraction(low), Fraction(high))


UP = Bounds(Fraction(0), None)
NO_END = Range(None, None)


@pytest.mark.parametrize(
    ("limits", "x", "y", "shape", "corners"),
    [
        ([], _box(2, 2), _box(3, 3), Shape.POINT, [(2, 3)]),
        ([], _box(2, 2), _box(0, 3), Shape.SEGMENT, [(2, 0), (2, 3)]),
        ([], _box(-1, 2), _box(3, 3), Shape.SEGMENT, [(-1, 3), (2, 3)]),
        ([(1, 1, 0), (-1, -1, 0)], _box(-1, 1), FREE, Shape.SEGMENT, [(1, -1), (-1, 1)]),
        ([(1, 1, 1)], UP, UP, Shape.POLYGON, [(0, 0), (1, 0), (0, 1)]),
        ([], _box(0, 1), _box(0, 2), Shape.POLYGON, [(0, 0), (1, 0), (1, 2), (0, 2)]),
        # One limit touches a corner only, another says the same twice.
        (
            [(1, 1, 2), (2, 2, 4)],
            _box(0, 1),
            _box(0, 1),
            Shape.POLYGON,
            [(0, 0), (1, 0), (1, 1), (0, 1)],
        ),
        # The lowest corner is neither the leftmost nor the rightmost one.
        (
            [(1, 1, 2), (1, -1, 2), (-1, 1, 2), (-1, -1, 2)],
            FREE,
            FREE,
            Shape.POLYGON,
            [(0, -2), (2, 0), (0, 2), (-2, 0)],
        ),
    ],
)
def test_bounded_shapes(
    limits: list[Limit], x: Bounds, y: Bounds, shape: Shape, corners: list[Pair]
) -> None:
    found = _polygon(limits, x, y)
    assert found is not None
    assert found.shape is shape
    assert list(found.corners) == _exact(corners)
    assert found.rays == ()
    xs, ys = zip(*corners, strict=True)
    assert found.x == Range(Fraction(min(xs)), Fraction(max(xs)))
    assert found.y == Range(Fraction(min(ys)), Fraction(max(ys)))


def test_the_edges_go_round_and_close_only_a_polygon() -> None:
    triangle, segment, point = (
        _polygon([(1, 1, 1)], UP, UP),
        _polygon([], _box(0, 1), _box(0, 0)),
        _polygon([], _box(0, 0), _box(0, 0)),
    )
    assert triangle is not None
    assert triangle.edges() == ((0, 1), (1, 2), (2, 0))
    assert segment is not None
    assert segment.edges() == ((0, 1),)
    assert point is not None
    assert point.edges() == ()


def test_nothing_feasible_is_no_polygon() -> None:
    assert _polygon([(1, 1, -1)], UP, UP) is None


def test_factors_turn_and_stretch_the_axes() -> None:
    found = _polygon([(1, 1, 1)], UP, UP, factors=(-1, 3))
    assert found is not None
    assert list(found.corners) == _exact([(-1, 0), (0, 0), (0, 3)])


@pytest.mark.parametrize(
    ("limits", "x", "y", "corners", "rays", "reach"),
    [
        # A quadrant, and one with its tip cut off.
        ([], UP, UP, [(0, 0)], [(0, 1), (1, 0)], ((0, None), (0, None))),
        ([(-1, -1, -2)], UP, UP, [(0, 2), (2, 0)], [(0, 1), (1, 0)], ((0, None), (0, None))),
        # One limit more, and one that only touches.
        (
            [(-1, -1, -2), (-1, 0, 0), (-3, -1, -3), (-1, -2, -3)],
            UP,
            UP,
            [(0, 3), (Fraction(1, 2), Fraction(3, 2)), (1, 1), (3, 0)],
            [(0, 1), (1, 0)],
            ((0, None), (0, None)),
        ),
        # Strips with one end, upwards and to the left.
        ([], _box(0, 2), UP, [(0, 0), (2, 0)], [(0, 1), (0, 1)], ((0, 2), (0, None))),
        (
            [],
            Bounds(None, Fraction(1)),
            _box(0, 2),
            [(1, 0), (1, 2)],
            [(-1, 0), (-1, 0)],
            ((None, 1), (0, 2)),
        ),
        # Half a line, along no axis.
        ([(1, -2, 0), (-1, 2, 0)], UP, FREE, [(0, 0)], [(1, Fraction(1, 2))] * 2, None),
        # A wedge wider than a quadrant, open downwards.
        (
            [(-1, 2, 0), (1, 2, 0)],
            FREE,
            FREE,
            [(0, 0)],
            [(1, Fraction(-1, 2)), (-1, Fraction(-1, 2))],
            ((None, None), (None, 0)),
        ),
    ],
)
def test_what_runs_away_is_told_and_not_cut_off(
    limits: list[Limit],
    x: Bounds,
    y: Bounds,
    corners: list[Pair],
    rays: list[Pair],
    reach: tuple[tuple[int | None, int | None], ...] | None,
) -> None:
    found = _polygon(limits, x, y)
    assert found is not None
    assert found.shape is Shape.UNBOUNDED
    assert list(found.corners) == _exact(corners)
    assert list(found.rays) == _exact(rays)
    assert len(found.edges()) == len(corners) - 1
    if reach is not None:
        assert ((found.x.low, found.x.high), (found.y.low, found.y.high)) == reach


@pytest.mark.parametrize(
    ("limits", "x", "y", "rays", "reach"),
    [
        ([], FREE, _box(0, 2), {(1, 0), (-1, 0)}, (NO_END, Range(Fraction(0), Fraction(2)))),
        ([], _box(1, 1), FREE, {(0, 1), (0, -1)}, (Range(Fraction(1), Fraction(1)), NO_END)),
        ([(1, 1, 0)], FREE, FREE, {(1, -1), (-1, 1), (-1, -1)}, None),
        ([], FREE, FREE, {(1, 0), (-1, 0), (0, 1), (0, -1)}, None),
    ],
)
def test_whole_lines_have_no_corner(
    limits: list[Limit],
    x: Bounds,
    y: Bounds,
    rays: set[Pair],
    reach: tuple[Range, Range] | None,
) -> None:
    found = _polygon(limits, x, y)
    assert found is not None
    assert found.shape is Shape.UNBOUNDED
    assert found.corners == ()
    assert found.edges() == ()
    assert set(found.rays) == set(_exact(rays))
    assert reach is None or (found.x, found.y) == reach
