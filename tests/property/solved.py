"""Random cases that have a best value, each solved once for all tests that ask why it is so."""

from __future__ import annotations

import atexit
from dataclasses import dataclass
from functools import lru_cache
from itertools import count, islice
from typing import TYPE_CHECKING, TypeVar

from tests.property.answers import build
from tests.property.cases import random_case
from yieldnet.balance.statements import with_point
from yieldnet.optimum.proof import Status
from yieldnet.prediction.ladder import objective_of

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator
    from fractions import Fraction

    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.case import Case
    from yieldnet.optimum.proof import Answer, Optimiser
    from yieldnet.prediction.ladder import Objective
    from yieldnet.prediction.layers import Layers

__all__ = ["Solved", "remembered", "solved", "solved_cases"]

T = TypeVar("T")
KEPT = 300
"""Solved cases that are remembered: more than any test but the one of proofs goes through [-]."""


def remembered(function: Callable[..., T]) -> Callable[..., T]:
    """A function whose answers are kept until the end, and let go while the solver still stands."""
    found = lru_cache(KEPT)(function)
    atexit.register(found.cache_clear)
    return found


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Solved:
    """A case, its problems, and the proven optimum of the last at the reconciled point."""

    case: Case
    layers: Layers
    optimiser: Optimiser
    objective: Objective
    point: dict[str, Fraction]
    best: Answer

    def __repr__(self) -> str:
        return f"Solved({self.case.title})"

    @property
    def bound(self) -> BoundNetwork:
        """The network in numbers."""
        assert self.layers.bound is not None
        return self.layers.bound


def solved(case: Case) -> Solved | None:
    """A case with its optimum; ``None`` without an aim, a feasible point or a best value."""
    objective, built = objective_of(case), build(case)
    if objective is None or built.point is None:
        return None
    problem = with_point(built.layers.final, built.layers.statements, built.point)
    best = objective.best(built.optimiser, problem)
    if best.status is not Status.OPTIMAL:
        return None
    return Solved(
        case=case,
        layers=built.layers,
        optimiser=built.optimiser,
        objective=objective,
        point=built.point,
        best=best,
    )


@remembered
def _solved(seed: int) -> Solved | None:
    return solved(random_case(4 + seed % 4, seed))


def solved_cases(number: int) -> Iterator[Solved]:
    """The first so many random cases that have a best value."""
    found = (item for item in map(_solved, count()) if item is not None)
    return islice(found, number)
