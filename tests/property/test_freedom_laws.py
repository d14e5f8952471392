"""Laws about degrees of freedom, on random networks."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from hypothesis import assume, given, settings

from tests.property.answers import build, tell
from tests.property.cases import cases
from yieldnet.balance.statements import side_sign, yield_column
from yieldnet.foundation.exact import eliminate
from yieldnet.optimum.ranges import column_ranges
from yieldnet.prediction.coefficients import freedom_of, layer_equations
from yieldnet.prediction.result import CoefficientStatus

if TYPE_CHECKING:
    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem


@given(cases())
@settings(max_examples=60)
def test_freedom_never_rises_down_the_ladder(case: Case) -> None:
    built = build(case)
    layers = built.layers
    equations = layer_equations(layers)
    freedom = freedom_of(built.optimiser, layers, equations, built.point)
    assert [item.layer for item in freedom] == list(layers.rungs)
    frees = [item.free for item in freedom]
    assert frees == sorted(frees, reverse=True)
    for item in freedom:
        assert item.unknowns == case.unknowns()
        assert item.rank == item.unknowns - item.free
        assert 0 <= item.free <= item.unknowns
        assert (item.free_in_fact is None) == (built.point is None)
        assert item.free_in_fact is None or 0 <= item.free_in_fact <= item.free
    in_fact = [item.free_in_fact for item in freedom if item.free_in_fact is not None]
    assert in_fact == sorted(in_fact, reverse=True)


@given(cases())
@settings(max_examples=60)
def test_what_the_elements_fix_has_one_value_in_every_rung(case: Case) -> None:
    told = tell(case)
    built = told.built
    assume(built.point is not None)
    fixed = {
        yield_column(item.compound): item
        for item in told.coefficients
        if item.status is CoefficientStatus.FIXED_BY_ELEMENTS
    }
    for rung in built.layers.rungs[1:]:
        ranges = column_ranges(built.optimiser, built.problem(rung), list(fixed))
        assert ranges is not None
        for column, item in fixed.items():
            own = ranges[column]
            assert own.single
            assert item.at_aim in (None, own if side_sign(item.side) > 0 else own.turned())


@given(cases())
@settings(max_examples=60)
def test_freedom_agrees_with_ranks_of_the_whole_problem(case: Case) -> None:
    """A second way to the dimension of a projection, without eliminating in any order.

    The points of all columns have the dimension columns - rank; those of them that leave the
    unknown coefficients at zero have the dimension others - rank of the others' columns; the
    difference of the two is the dimension of what is seen of the points in the coefficients.
    """
    layers = build(case).layers
    for rung, equations in layer_equations(layers).items():
        assert equations.free() == _dimension(layers.problem(rung), equations.names)


def _dimension(problem: Problem, names: tuple[str, ...]) -> int:
    unknown = [problem.column(yield_column(name)) for name in names]
    others = [
        j
        for j, column in enumerate(problem.columns)
        if j not in unknown and not column.bounds.fixed
    ]
    rows = [
        dict(entries)
        for row, entries in zip(problem.rows, problem.matrix.rows, strict=True)
        if row.bounds.fixed
    ]

    def rank(columns: list[int]) -> int:
        zero = Fraction(0)
        return eliminate([[row.get(j, zero) for j in columns] for row in rows], len(columns)).rank

    return len(unknown) - rank([*unknown, *others]) + rank(others)
