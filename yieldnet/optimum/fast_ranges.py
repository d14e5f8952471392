"""Ranges of many columns in floats, for problems too large to prove.

One warm problem whose objective moves. Every solution is looked through: an end that rests at its
own bound of zero in any of them, as most do, is zero and is not solved for. Columns tied by
balances of two are asked for once. Nothing is proven here.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import SolveError
from yieldnet.optimum.fast import FEASIBILITY, FastStatus

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from yieldnet.optimum.fast import FastProblem

__all__ = ["AT_ZERO", "FastRange", "fast_ranges"]

AT_ZERO = FEASIBILITY / 100
"""How near zero a column rests there; a column outside the basis does so exactly [mol/mol]."""


@dataclass(frozen=True, slots=True)
class FastRange:
    """Lowest and highest value in floats; ``None`` where there is no bound.

    Parameters
    ----------
    low, high : float or None
        Ends of the range [mol/mol for coefficients].
    """

    low: float | None
    high: float | None


def fast_ranges(
    problem: FastProblem,
    bounds: Sequence[tuple[float | None, float | None]],
    columns: Sequence[int] | None = None,
    held: Mapping[int, float] | None = None,
    share: float = 1.0,
    maximise: bool = True,
) -> list[FastRange] | None:
    """Range of each column, or ``None`` if the problem is infeasible.

    Parameters
    ----------
    problem : FastProblem
        The problem; it is left as it was.
    bounds : sequence of tuple
        Low and high of every column.
    columns : sequence of int, optional
        Columns whose range is wanted; all if left out.
    held : mapping of int to float, optional
        Objective by column, to be held at a share of its best value.
    share : float
        Share of the best value that must be kept [-].
    maximise : bool
        Whether the best value of the held objective is its greatest.

    Returns
    -------
    list of FastRange or None
        Ranges, in the order asked.

    Raises
    ------
    SolveError
        If floats cannot solve a problem, or the held objective has no best value.
    """
    start = problem.remember()
    try:
        return _ranges(problem, bounds, columns, held, share, maximise)
    finally:
        problem.return_to(start)


def _ranges(
    problem: FastProblem,
    bounds: Sequence[tuple[float | None, float | None]],
    columns: Sequence[int] | None,
    held: Mapping[int, float] | None,
    share: float,
    maximise: bool,
) -> list[FastRange] | None:
    wanted = range(problem.columns) if columns is None else columns
    problem.aim(held or {}, maximise)
    status = problem.solve()
    if status is FastStatus.INFEASIBLE:
        return None
    if held:
        if status is not FastStatus.OPTIMAL:
            raise SolveError("the objective to be held has no best value")
        best = problem.value
        kept = share * best
        if (kept > best) == maximise and kept != best:
            return None
        problem.add_row(held, *((kept, None) if maximise else (None, kept)))
    # Columns in a fixed ratio to another have its range.
    ties = problem.ties()
    # Ends that are still to be found, each with its own bound.
    first = dict.fromkeys(ties[j][0] for j in wanted)
    ends = ({j: bounds[j][0] for j in first}, {j: bounds[j][1] for j in first})
    found: tuple[dict[int, float | None], ...] = ({}, {})
    _look_through(problem, ends, found)
    for high in (0, 1):
        while ends[high]:
            j = next(iter(ends[high]))
            del ends[high][j]
            problem.aim({j: 1.0}, bool(high))
            status = problem.solve()
            if status is FastStatus.INFEASIBLE:
                # A point was found above, so floats have lost their way.
                raise SolveError("floats cannot hold on to a feasible point of this problem")
            if status is FastStatus.UNBOUNDED:
                found[high][j] = None
                continue
            found[high][j] = problem.value
            _look_through(problem, ends, found)
    return [_tied(found[0][ties[j][0]], found[1][ties[j][0]], ties[j][1]) for j in wanted]


def _tied(low: float | None, high: float | None, ratio: float) -> FastRange:
    """Range of a column that stands in a ratio to one with a known range."""
    # Adding zero turns a negative zero into zero.
    one, other = (None if end is None else ratio * end + 0.0 for end in (low, high))
    return FastRange(one, other) if ratio > 0 else FastRange(other, one)


def _look_through(
    problem: FastProblem,
    ends: tuple[dict[int, float | None], ...],
    found: tuple[dict[int, float | None], ...],
) -> None:
    """Take out the ends at zero that the solution reaches.

    Other bounds are seldom reached; looking for them costs more than it saves.
    """
    value_of = problem.column
    for open_ends, done in zip(ends, found, strict=True):
        for j in [j for j, bound in open_ends.items() if bound == 0]:
            if -AT_ZERO < value_of(j) < AT_ZERO:
                done[j] = open_ends.pop(j)
