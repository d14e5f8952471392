"""Polygons of trade-offs: no corner missing, none too many, every feasible point inside.

A polygon is the set of feasible points exactly if each corner is feasible, nothing lies beyond any
edge, and rays are ways on which the points run away. Small ones are also found by brute force.
"""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from itertools import combinations, count, islice
from random import Random
from typing import TYPE_CHECKING

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from tests.property.cases import random_case
from tests.property.engines import LyingEngine
from tests.property.lps import LinearProblem, assert_proven, linear_problems
from yieldnet.balance.statements import side_sign, yield_column
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.exact import eliminate
from yieldnet.model.case import Aim, AimDirection
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.polygon import Axis, Point, Polygon, project
from yieldnet.optimum.problem import Bounds, ProblemBuilder
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.studies.setting import set_up
from yieldnet.studies.tradeoff import trade_off

if TYPE_CHECKING:
    from collections.abc import Iterator

    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem
    from yieldnet.studies.tradeoff import Region

ZERO, ONE = Fraction(0), Fraction(1)
CASES = 60
"""Random cases that are looked at [-]."""


def _glpk() -> Optimiser:
    return Optimiser(engine_named("glpk"))


def _dot(way: Point, at: Point) -> Fraction:
    return way[0] * at[0] + way[1] * at[1]


def _cross(before: Point, here: Point, after: Point) -> Fraction:
    return (here[0] - before[0]) * (after[1] - here[1]) - (here[1] - before[1]) * (
        after[0] - here[0]
    )


def _most(problem: Problem, x: Axis, y: Axis, way: Point) -> Fraction | None:
    """Most along a direction, by a fresh optimiser; ``None`` without a bound."""
    objective = {x.column: way[0] * x.factor, y.column: way[1] * y.factor}
    answer = _glpk().optimise(problem, objective)
    assert_proven(answer)
    return answer.value if answer.status is Status.OPTIMAL else None


def _told(polygon: Polygon, way: Point) -> Fraction | None:
    """Most along a direction, as the polygon has it."""
    if any(_dot(way, ray) > 0 for ray in polygon.rays):
        return None
    return max(_dot(way, at) for at in polygon.corners)


def _normals(polygon: Polygon) -> Iterator[Point]:
    """Outward normals of all edges, the endless ones included; both sides of a segment."""
    for start, end in polygon.edges():
        (x0, y0), (x1, y1) = polygon.corners[start], polygon.corners[end]
        yield y1 - y0, x0 - x1
        if len(polygon.corners) == 2 and not polygon.rays:
            yield y0 - y1, x1 - x0
    if polygon.rays:
        coming, going = polygon.rays
        yield -coming[1], coming[0]
        yield going[1], -going[0]


def _assert_exact(problem: Problem, x: Axis, y: Axis, polygon: Polygon, rng: Random) -> None:
    for at in polygon.corners:
        held = {x.column: Bounds(at[0] / x.factor, at[0] / x.factor)}
        held[y.column] = Bounds(at[1] / y.factor, at[1] / y.factor)
        assert _glpk().optimise(problem.with_columns(held), {}).status is Status.OPTIMAL
    if polygon.corners:
        ways = [*_normals(polygon), (ONE, ZERO), (-ONE, ZERO), (ZERO, ONE), (ZERO, -ONE)]
        ways += [
            (Fraction(rng.randint(-9, 9)), Fraction(rng.randint(-9, 9), rng.randint(1, 9)))
            for _ in range(5)
        ]
        for way in ways:
            assert _most(problem, x, y, way) == _told(polygon, way)
    else:
        for ray in polygon.rays:
            assert _most(problem, x, y, ray) is None
    # Every corner turns to the left: none is in the middle of an edge, and none comes twice.
    for (start, middle), (_, end) in zip(polygon.edges(), polygon.edges()[1:], strict=False):
        corners = polygon.corners
        assert _cross(corners[start], corners[middle], corners[end]) > 0
    assert len(set(polygon.corners)) == len(polygon.corners)
    if polygon.corners and not polygon.rays:
        lowest = min(polygon.corners, key=lambda at: (at[1], at[0]))
        assert polygon.corners[0] == lowest


@given(linear_problems(), st.integers(0, 10**6))
@settings(max_examples=250)
def test_polygons_of_random_problems_are_exact(drawn: LinearProblem, seed: int) -> None:
    problem, rng = drawn[0], Random(seed)
    assume(len(problem.columns) > 1)
    x, y = Axis("x0", Fraction(rng.choice((1, -1, 3)))), Axis("x1")
    polygon = project(_glpk(), problem, x, y)
    feasible = _glpk().optimise(problem, {}).status is Status.OPTIMAL
    assert (polygon is not None) == feasible
    if polygon is not None:
        _assert_exact(problem, x, y, polygon, rng)


@given(linear_problems(5), st.integers(0, 10**6))
@settings(max_examples=60)
def test_an_engine_that_lies_changes_no_polygon(drawn: LinearProblem, seed: int) -> None:
    problem = drawn[0]
    assume(len(problem.columns) > 1)
    honest = project(_glpk(), problem, Axis("x0"), Axis("x1"))
    assert project(Optimiser(LyingEngine(seed=seed)), problem, Axis("x0"), Axis("x1")) == honest


def _boxed(rng: Random) -> tuple[Problem, list[tuple[list[int], int]]]:
    """Three columns in a box, cut by a few planes; and all of it as a x <= b."""
    builder = ProblemBuilder()
    planes = []
    for j in range(3):
        low, high = sorted((rng.randint(-3, 3), rng.randint(-3, 3)))
        builder.add_column(f"x{j}", Bounds(Fraction(low), Fraction(high)))
        side = [int(j == k) for k in range(3)]
        planes += [(side, high), ([-a for a in side], -low)]
    for i in range(rng.randint(0, 4)):
        line, top = [rng.randint(-3, 3) for _ in range(3)], rng.randint(0, 6)
        builder.add_row(
            f"row {i}",
            "test",
            Bounds(None, Fraction(top)),
            {f"x{j}": Fraction(a) for j, a in enumerate(line)},
        )
        planes.append((line, top))
    return builder.build(), planes


def _brute_force(planes: list[tuple[list[int], int]]) -> set[Point]:
    """Corners of the hull of all vertices, each three planes that meet, seen on two axes."""
    points: set[Point] = set()
    for three in combinations(planes, 3):
        form = eliminate([tuple(map(Fraction, (*a, b))) for a, b in three], 4)
        if list(form.pivots) != [0, 1, 2]:
            continue
        vertex = [row[3] for row in form.rows]
        if all(
            sum((a * v for a, v in zip(line, vertex, strict=True)), ZERO) <= top
            for line, top in planes
        ):
            points.add((vertex[0], vertex[1]))
    # A point is no corner if it lies in a segment or triangle of others (Caratheodory).
    return {
        at
        for at in points
        if not any(_in_triangle(at, three) for three in combinations(sorted(points - {at}), 3))
        and not any(_in_segment(at, two) for two in combinations(sorted(points - {at}), 2))
    }


def _in_segment(at: Point, ends: tuple[Point, ...]) -> bool:
    one, two = ends
    return _cross(one, at, two) == 0 and one <= at <= two


def _in_triangle(at: Point, three: tuple[Point, ...]) -> bool:
    turns = [_cross(three[k], three[(k + 1) % 3], at) for k in range(3)]
    return any(turns) and (all(t >= 0 for t in turns) or all(t <= 0 for t in turns))


@pytest.mark.parametrize("seed", range(40))
def test_corners_are_those_of_brute_force(seed: int) -> None:
    problem, planes = _boxed(Random(f"box {seed}"))
    polygon = project(_glpk(), problem, Axis("x0"), Axis("x1"))
    assert set(() if polygon is None else polygon.corners) == _brute_force(planes)


# Random networks -----------------------------------------------------------------------------


def _regions() -> Iterator[tuple[Case, Region, str, str]]:
    """Trade-offs of random cases, two coefficients drawn for each."""
    for seed in count():
        rng = Random(f"trade-off {seed}")
        case = random_case(4 + seed % 5, seed)
        names = [item.name for item in case.coefficients]
        if len(names) < 2:
            continue
        x, y = rng.sample(names, 2)
        try:
            result = trade_off([case], x=x, y=y)
        except InputError as error:
            # Some random cases cannot be answered as they stand; nothing else may refuse them.
            if not {item.code for item in error.findings} & {"YN408", "YN507", "YN702"}:
                raise
            continue
        yield case, result.regions[0], x, y


def _axis(case: Case, name: str) -> Axis:
    item = case.coefficient(name)
    assert item is not None
    return Axis(yield_column(name), Fraction(side_sign(item.side)))


@pytest.fixture(scope="module")
def regions() -> list[tuple[Case, Region, str, str]]:
    return list(islice(_regions(), CASES))


def _problem(case: Case, x: str, y: str) -> Problem:
    """The problem of a trade-off, put together by the setting of a case with another aim."""
    studied = replace(case, aim=Aim(direction=AimDirection.LEAST, compound=y))
    return set_up(studied, freed=[x]).problem


def test_polygons_of_random_networks_are_exact(
    regions: list[tuple[Case, Region, str, str]],
) -> None:
    for number, (case, region, x, y) in enumerate(regions):
        problem = _problem(case, x, y)
        _assert_exact(problem, _axis(case, x), _axis(case, y), region.polygon, Random(number))
    shapes = {str(region.polygon.shape) for _, region, _, _ in regions}
    assert shapes == {"point", "segment", "polygon", "unbounded"}


def test_every_feasible_point_lies_inside(regions: list[tuple[Case, Region, str, str]]) -> None:
    inside = 0
    for number, (case, region, x, y) in enumerate(regions):
        if region.polygon.rays:
            continue
        problem, rng, optimiser = _problem(case, x, y), Random(f"in {number}"), _glpk()
        axes = _axis(case, x), _axis(case, y)
        for _ in range(4):
            # Anywhere in the cell, not only at the rim: a mean of corners of the whole problem.
            names = [yield_column(item.name) for item in case.coefficients]
            found = [
                optimiser.optimise(problem, {name: Fraction(rng.randint(-3, 3)) for name in names})
                for _ in range(2)
            ]
            if any(answer.status is not Status.OPTIMAL for answer in found):
                continue
            at = tuple(
                sum((answer[axis.column] for answer in found), ZERO) * axis.factor / 2
                for axis in axes
            )
            for normal in _normals(region.polygon):
                top = max(_dot(normal, corner) for corner in region.polygon.corners)
                assert _dot(normal, (at[0], at[1])) <= top
            inside += 1
    assert inside > CASES


def test_coefficients_at_a_corner_stand_on_their_side_and_hold_the_axes(
    regions: list[tuple[Case, Region, str, str]],
) -> None:
    for case, region, x, y in regions:
        for corner in region.corners:
            ranges = dict(corner.coefficients)
            assert list(ranges) == [item.name for item in case.coefficients]
            assert (ranges[x].low, ranges[x].high) == (corner.x, corner.x)
            assert (ranges[y].low, ranges[y].high) == (corner.y, corner.y)


def test_switches_are_what_the_corners_say(regions: list[tuple[Case, Region, str, str]]) -> None:
    kinds = set()
    for _, region, x, y in regions:
        for edge in region.edges:
            here, there = (dict(region.corners[at].coefficients) for at in (edge.start, edge.end))
            told = {item.compound: item for item in edge.switches}
            for name in here:
                none = [ends.low == 0 == ends.high for ends in (here[name], there[name])]
                changes = name not in (x, y) and none[0] != none[1]
                if changes:
                    kinds.add(str(told[name].change))
                    assert told[name].change == ("appears" if none[0] else "vanishes")
                    assert told[name].places == ()
                elif name in told:
                    assert told[name].change == "turns"
                    kinds.add("turns")
                    start, end = region.corners[edge.start], region.corners[edge.end]
                    for at in told[name].places:
                        assert _cross((start.x, start.y), at, (end.x, end.y)) == 0
    assert kinds == {"appears", "vanishes", "turns"}
