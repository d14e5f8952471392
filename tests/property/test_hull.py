"""Affine hulls: the dimension that matrices and corners say, signs included."""

from __future__ import annotations

from fractions import Fraction
from random import Random
from typing import TYPE_CHECKING

import numpy as np
from hypothesis import given, settings

from tests.property.answers import build
from tests.property.cases import cases
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.hull import affine_hull
from yieldnet.optimum.problem import FREE, Bounds, ProblemBuilder
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.prediction.coefficients import freedom_of, layer_equations

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem

ZERO = Fraction(0)


def _rank(rows: Sequence[Sequence[int]]) -> int:
    """Rank of a small matrix of small integers, for which floats are good enough."""
    return int(np.linalg.matrix_rank(np.array(rows, dtype=float))) if len(rows) else 0


def _hull_dimension(problem: Problem, columns: Sequence[str]) -> int:
    hull = affine_hull(Optimiser(engine_named("glpk")), problem, columns)
    assert hull is not None
    assert hull.columns == tuple(columns)
    assert _rank([[int(x * 10**6) for x in row] for row in hull.directions]) == hull.dimension
    return hull.dimension


def _equalities(rng: Random, size: int, rows: int) -> tuple[Problem, list[list[int]]]:
    """Random equalities through a point that lies inside all bounds."""
    point = [rng.randint(-3, 3) for _ in range(size)]
    matrix = [[rng.choice((0, 0, 1, -1, 2)) for _ in range(size)] for _ in range(rows)]
    if rows > 1:
        matrix[-1] = [a + b for a, b in zip(matrix[0], matrix[1 % rows], strict=True)]
    builder = ProblemBuilder()
    for j in range(size):
        box = Bounds(Fraction(point[j] - 1), Fraction(point[j] + 2))
        builder.add_column(f"x{j}", rng.choice((FREE, box, Bounds(Fraction(-4), None))))
    for i, line in enumerate(matrix):
        level = Fraction(sum(a * x for a, x in zip(line, point, strict=True)))
        builder.add_row(
            f"row {i}",
            "test",
            Bounds(level, level),
            {f"x{j}": Fraction(a) for j, a in enumerate(line)},
        )
    return builder.build(), matrix


def test_dimension_is_what_the_rank_of_the_equalities_leaves() -> None:
    rng = Random("ranks")
    for size in range(1, 8):
        for rows in range(size):
            problem, matrix = _equalities(rng, size, rows)
            names = [f"x{j}" for j in range(size)]
            assert _hull_dimension(problem, names) == size - _rank(matrix)
            # Seen in some columns: the rank of the null space there, by the rank of what remains.
            seen = sorted(rng.sample(range(size), rng.randint(1, size)))
            hidden = [j for j in range(size) if j not in seen]
            left = [[line[j] for j in hidden] for line in matrix] if hidden else []
            expected = len(seen) - (_rank(matrix) - (_rank(left) if left else 0))
            assert _hull_dimension(problem, [names[j] for j in seen]) == expected


def test_dimension_is_that_of_the_corners_whatever_bounds_imply_them() -> None:
    rng = Random("corners")
    for size in range(1, 7):
        for corners in range(1, size + 3):
            points = [[rng.randint(-2, 2) for _ in range(size)] for _ in range(corners)]
            builder = ProblemBuilder()
            for j in range(size):
                builder.add_column(f"x{j}", FREE)
            for k in range(corners):
                builder.add_column(f"part {k}", Bounds(ZERO, None))
            for j in range(size):
                line = {f"part {k}": Fraction(point[j]) for k, point in enumerate(points)}
                builder.add_row(
                    f"row {j}", "test", Bounds(ZERO, ZERO), {**line, f"x{j}": Fraction(-1)}
                )
            one = Bounds(Fraction(1), Fraction(1))
            builder.add_row("sum", "test", one, {f"part {k}": Fraction(1) for k in range(corners)})
            moves = [[a - b for a, b in zip(point, points[0], strict=True)] for point in points[1:]]
            names = [f"x{j}" for j in range(size)]
            assert _hull_dimension(builder.build(), names) == _rank(moves)
            # The parts themselves fill a simplex, of which the corners are the shadow.
            parts = [f"part {k}" for k in range(corners)]
            assert _hull_dimension(builder.build(), parts) == corners - 1


def test_signs_alone_can_leave_one_point() -> None:
    builder = ProblemBuilder()
    for name in ("a", "b", "c"):
        builder.add_column(name, Bounds(ZERO, None))
    builder.add_row("sum", "test", Bounds(None, ZERO), {"a": Fraction(1), "b": Fraction(2)})
    problem = builder.build()
    # No equality is written, and yet a + 2 b <= 0 leaves both at zero and c alone free.
    assert _hull_dimension(problem, ["a", "b"]) == 0
    assert _hull_dimension(problem, ["a", "b", "c"]) == 1


def test_without_a_point_there_is_no_hull() -> None:
    builder = ProblemBuilder()
    builder.add_column("a", Bounds(ZERO, None))
    builder.add_row("less", "test", Bounds(None, Fraction(-1)), {"a": Fraction(1)})
    assert affine_hull(Optimiser(engine_named("glpk")), builder.build(), ["a"]) is None


@given(cases())
@settings(max_examples=40)
def test_free_in_fact_is_never_more_than_free(case: Case) -> None:
    built = build(case)
    equations = layer_equations(built.layers)
    found = freedom_of(built.optimiser, built.layers, equations, built.point)
    assert [item.layer for item in found] == list(built.layers.rungs)
    if built.point is None:
        assert all(item.free_in_fact is None for item in found)
        return
    before: int | None = None
    for item in found:
        assert item.free_in_fact is not None
        assert 0 <= item.free_in_fact <= item.free <= item.unknowns
        assert before is None or item.free_in_fact <= before
        before = item.free_in_fact
        # The second way: every coefficient that can move at all moves in some direction.
        assert (item.free_in_fact == 0) == _all_fixed(case, built.problem(item.layer))


def _all_fixed(case: Case, problem: Problem) -> bool:
    optimiser = Optimiser(engine_named("glpk"))
    for item in case.coefficients:
        if item.written is not None and item.written.last_place is None:
            continue
        ends = [
            optimiser.optimise(problem, {f"yield of {item.name}": Fraction(1)}, way)
            for way in (True, False)
        ]
        if any(end.status is not Status.OPTIMAL for end in ends) or ends[0].value != ends[1].value:
            return False
    return True
