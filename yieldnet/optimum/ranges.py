"""Ranges: lowest and highest value of many columns over one problem, each end proven.

An end that rests at its own bound in a point already proven is that bound, and is not solved for
again: with many by-products at zero this saves most of the work.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.optimum.proof import Status

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Answer, Optimiser

__all__ = ["Range", "column_ranges"]


@dataclass(frozen=True, slots=True)
class Range:
    """Lowest and highest value; ``None`` where there is no bound.

    Parameters
    ----------
    low, high : Fraction or None
        Ends of the range [mol/mol for coefficients].
    """

    low: Fraction | None
    high: Fraction | None

    @property
    def single(self) -> bool:
        """Whether there is one value only."""
        return self.low is not None and self.low == self.high

    def turned(self) -> Range:
        """The range seen from the other side, all signs changed."""
        return Range(
            None if self.high is None else -self.high, None if self.low is None else -self.low
        )


def column_ranges(
    optimiser: Optimiser,
    problem: Problem,
    columns: Sequence[str],
    known: Sequence[Answer] = (),
) -> dict[str, Range] | None:
    """Range of each column, or ``None`` if the problem is infeasible.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    problem : Problem
        The problem.
    columns : sequence of str
        Columns whose range is wanted.
    known : sequence of Answer
        Optimal answers that are feasible in ``problem`` too.

    Returns
    -------
    dict of str to Range or None
        Range by column, in the order asked.
    """
    points = [answer.primal for answer in known if answer.status is Status.OPTIMAL]
    found: dict[str, Range] = {}
    for name in columns:
        j = problem.column(name)
        bounds = problem.columns[j].bounds
        ends: list[Fraction | None] = []
        for maximise, bound in ((False, bounds.low), (True, bounds.high)):
            if bound is not None and any(point[j] == bound for point in points):
                ends.append(bound)
                continue
            answer = optimiser.optimise(problem, {name: Fraction(1)}, maximise)
            if answer.status is Status.INFEASIBLE:
                return None
            if answer.status is Status.UNBOUNDED:
                ends.append(None)
                continue
            points.append(answer.primal)
            ends.append(answer[name])
        found[name] = Range(ends[0], ends[1])
    return found
