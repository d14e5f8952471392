"""What a law needs of an answer: the problems, the reconciled point, ladder and coefficients.

``predict`` also says what holds the aim back, which costs more than all the rest and is no part of
these laws, so most of them put an answer together from the same pieces without it.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from tests.property.cases import layers_of
from yieldnet.balance.missing import missing_compounds
from yieldnet.balance.reconciled import reconciled_point
from yieldnet.balance.statements import with_bands, with_point
from yieldnet.model.binding import bind
from yieldnet.model.case import AimDirection
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.optimum.ranges import Range
from yieldnet.prediction.coefficients import answers, find_ranges, layer_equations
from yieldnet.prediction.ladder import climb_down, objective_of
from yieldnet.prediction.layers import RUNGS

if TYPE_CHECKING:
    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Answer
    from yieldnet.prediction.coefficients import AllRanges
    from yieldnet.prediction.ladder import LadderRung
    from yieldnet.prediction.layers import Layers
    from yieldnet.prediction.result import CoefficientAnswer

__all__ = [
    "Built",
    "Told",
    "Worth",
    "assert_equal_up_to",
    "build",
    "lacks_nothing",
    "no_better",
    "tell",
    "within",
]


@dataclass(frozen=True, slots=True, kw_only=True)
class Built:
    """The problems of a case and its reconciled point, ``None`` if the case is infeasible."""

    case: Case
    layers: Layers
    optimiser: Optimiser
    point: dict[str, Fraction] | None

    def problem(self, rung: str) -> Problem:
        """Problem of a rung, its measured values at the point or, without one, in their bands."""
        problem = self.layers.problem(rung)
        if rung == "elements":
            return problem
        if self.point is None:
            return with_bands(problem, self.layers.statements)
        return with_point(problem, self.layers.statements, self.point)


@dataclass(frozen=True, slots=True, kw_only=True)
class Worth:
    """What a rung gives the aim: no point, a best value, or more than any value."""

    status: Status
    value: Fraction | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Told:
    """Answer to a case; without ranges and coefficients if it is infeasible."""

    built: Built
    ladder: tuple[LadderRung, ...]
    worth: dict[str, Worth]
    best: Answer | None
    ranges: AllRanges | None
    coefficients: tuple[CoefficientAnswer, ...]


def build(case: Case) -> Built:
    """Problems of a case."""
    layers = layers_of(case)
    optimiser = Optimiser(engine_named("glpk"))
    point = reconciled_point(optimiser, layers.final, case, layers.statements)
    return Built(case=case, layers=layers, optimiser=optimiser, point=point)


def tell(case: Case) -> Told:
    """Answer to a case, each value of its ladder checked against the problem of its rung."""
    built = build(case)
    layers, optimiser, point = built.layers, built.optimiser, built.point
    objective = objective_of(case)
    ladder: tuple[LadderRung, ...] = ()
    worth: dict[str, Worth] = {}
    best: Answer | None = None
    if objective is not None:
        ladder, best = climb_down(optimiser, layers, objective, point)
        for rung in ladder:
            above_energy = RUNGS.index(rung.rung) < RUNGS.index("energy")
            if case.aim is not None and case.aim.is_energy and above_energy:
                # Nothing bounds the energy that could be made there, whatever the problem says.
                assert rung.value is None
                worth[rung.rung] = Worth(status=Status.UNBOUNDED, value=None)
                continue
            answer = objective.best(optimiser, built.problem(rung.rung))
            value = answer.value if answer.status is Status.OPTIMAL else None
            assert rung.value == value
            worth[rung.rung] = Worth(status=answer.status, value=value)
    if point is None:
        return Told(
            built=built, ladder=ladder, worth=worth, best=None, ranges=None, coefficients=()
        )
    if best is not None and best.status is not Status.OPTIMAL:
        best = None
    ranges = find_ranges(optimiser, layers, point, best)
    return Told(
        built=built,
        ladder=ladder,
        worth=worth,
        best=best,
        ranges=ranges,
        coefficients=answers(layers, ranges, layer_equations(layers), point, None),
    )


def lacks_nothing(case: Case) -> bool:
    """Whether the equation of a case can close, so that it is answered and not refused."""
    assert case.network is not None
    bound, _ = bind(case.network, dict(case.parameters))
    optimiser = Optimiser(engine_named("glpk"))
    return not missing_compounds(case, optimiser, bound.growth_residual()).refused


def within(inner: Range | None, outer: Range | None) -> bool:
    """Whether a range lies inside another one; an end that is ``None`` is without bound."""
    assert inner is not None
    assert outer is not None
    low = outer.low is None or (inner.low is not None and inner.low >= outer.low)
    high = outer.high is None or (inner.high is not None and inner.high <= outer.high)
    return low and high


_ORDER = (Status.INFEASIBLE, Status.OPTIMAL, Status.UNBOUNDED)


def no_better(case: Case, one: Worth, other: Worth) -> bool:
    """Whether one rung is worth no more to the aim of a case than another."""
    assert case.aim is not None
    if one.value is None or other.value is None:
        return _ORDER.index(one.status) <= _ORDER.index(other.status)
    if case.aim.direction is AimDirection.MOST:
        return one.value <= other.value
    return one.value >= other.value


def assert_equal_up_to(factor: int, one: Told, two: Told) -> None:
    """Check that all numbers of the second answer are those of the first times a factor."""

    def times(value: Fraction | None) -> Fraction | None:
        return None if value is None else factor * value

    def stretched(value: Range | None) -> Range | None:
        return None if value is None else Range(times(value.low), times(value.high))

    assert [(item.rung, times(item.value), times(item.loss)) for item in one.ladder] == [
        (item.rung, item.value, item.loss) for item in two.ladder
    ]
    assert [item.status for item in one.worth.values()] == [
        item.status for item in two.worth.values()
    ]
    assert (one.built.point is None) == (two.built.point is None)
    others = {item.compound: item for item in two.coefficients}
    assert len(others) == len(one.coefficients)
    for old in one.coefficients:
        new = others[old.compound]
        assert (old.status, old.percent, old.side) == (new.status, new.percent, new.side)
        assert old.set_aside is new.set_aside
        assert stretched(old.elements) == new.elements
        assert stretched(old.network) == new.network
        assert stretched(old.at_aim) == new.at_aim
        assert (old.reconciled is None) == (new.reconciled is None)
        if old.reconciled is not None and new.reconciled is not None:
            assert times(old.reconciled.value) == new.reconciled.value
            assert times(old.reconciled.mean) == new.reconciled.mean
