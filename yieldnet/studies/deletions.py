"""Best value after every set of deletions up to a depth, with almost all solves skipped.

A deletion that a solution does not use leaves that solution, and its value, as they are. So the
value of a set of deletions is that of any subset one smaller whose solution does not use the
deletion that is added; only where every such solution uses it is the problem solved.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import combinations
from typing import TYPE_CHECKING

from yieldnet.optimum.fast import FEASIBILITY, FastStatus
from yieldnet.optimum.problem import SHUT

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator, Sequence

    from yieldnet.optimum.fast import FastProblem
    from yieldnet.optimum.problem import Problem

__all__ = ["ACTIVE", "Deletion", "DeletionRun", "delete_all", "linear_chains"]

TICK = 256
"""Sets between two reports of progress [-]."""
_Known = tuple[FastStatus, "float | None", int]
"""Status, value, and the things that the solution uses, as bits."""

ACTIVE = FEASIBILITY / 100
"""Size from which a flux counts as used; smaller, it may still be zero, so it counts as used only
costs a solve [mol/mol]."""


@dataclass(frozen=True, slots=True)
class Deletion:
    """Best value without some columns.

    Parameters
    ----------
    members : tuple of int
        Places in the list of deletable things, ascending.
    value : float or None
        Best value; ``None`` unless optimal.
    status : FastStatus
        How it ended.
    solved : bool
        Whether the problem was solved, rather than a known solution kept.
    """

    members: tuple[int, ...]
    value: float | None
    status: FastStatus
    solved: bool


@dataclass(slots=True)
class DeletionRun:
    """What :func:`delete_all` needs to know.

    Parameters
    ----------
    problem : FastProblem
        The problem, its objective set.
    groups : sequence of sequence of int
        Columns that each deletable thing switches off.
    bounds : sequence of tuple
        Low and high of every column as it stands.
    evaluate : callable or None
        Solves the problem as it stands and gives status, value; the plain objective if ``None``.
    twins : sequence of int or None
        For each thing, the first thing that must stand still whenever it does, and the reverse;
        such twins are solved once.
    """

    problem: FastProblem
    groups: Sequence[Sequence[int]]
    bounds: Sequence[tuple[float | None, float | None]]
    evaluate: Callable[[], tuple[FastStatus, float | None]] | None = None
    twins: Sequence[int] | None = None

    def run(self, wants_use: bool) -> _Known:
        """Status, value and, if wanted, the things that the solution uses, as bits."""
        if self.evaluate is not None:
            status, value = self.evaluate()
        else:
            status = self.problem.solve(dual=True)
            value = self.problem.value if status is FastStatus.OPTIMAL else None
        used = 0
        if wants_use and status is FastStatus.OPTIMAL:
            fluxes = self.problem.values(range(self.problem.columns))
            for place, columns in enumerate(self.groups):
                for column in columns:
                    if not -ACTIVE < fluxes[column] < ACTIVE:
                        used |= 1 << place
                        break
        return status, value, used

    def switch_off(self, members: Sequence[int]) -> None:
        """Switch things off."""
        for place in members:
            for column in self.groups[place]:
                self.problem.bound_column(column, 0.0, 0.0)

    def forced(self) -> frozenset[int]:
        """Things with a flux that must run: switching those off gives something back."""
        return frozenset(
            place
            for place, columns in enumerate(self.groups)
            if any(_is_forced(self.bounds[column]) for column in columns)
        )


def _is_forced(bounds: tuple[float | None, float | None]) -> bool:
    low, high = bounds
    return (low is not None and low > 0) or (high is not None and high < 0)


def linear_chains(problem: Problem, columns: Sequence[int]) -> list[int]:
    """Place of the first column of the chain to which each column belongs.

    A balance of two columns that must be zero ties them: neither runs without the other. Columns
    that are forced to run are left out, since switching one off differs from stopping it.

    Parameters
    ----------
    problem : Problem
        The problem.
    columns : sequence of int
        Columns in question.

    Returns
    -------
    list of int
        For each of them, the place of the first of its chain.
    """
    place = {column: at for at, column in enumerate(columns)}
    parent = list(range(len(columns)))

    def root(at: int) -> int:
        while parent[at] != at:
            at = parent[at]
        return at

    for row, entries in zip(problem.rows, problem.matrix.rows, strict=True):
        if row.bounds.low != 0 or row.bounds.high != 0:
            continue
        open_entries = [j for j, _ in entries if problem.columns[j].bounds != SHUT]
        if len(open_entries) != 2 or not all(j in place for j in open_entries):
            continue
        if any(_is_forced(problem.columns[j].bounds.as_floats()) for j in open_entries):
            continue
        one, other = sorted(root(place[j]) for j in open_entries)
        parent[other] = one
    return [root(at) for at in range(len(columns))]


def delete_all(
    run: DeletionRun, depth: int, tick: Callable[[int], None] | None = None
) -> Iterator[Deletion]:
    """Best value after every set of up to ``depth`` deletions, smaller sets first.

    Parameters
    ----------
    run : DeletionRun
        Problem, deletable things, bounds.
    depth : int
        Largest number of deletions at once [-].
    tick : callable, optional
        Called with the number of sets done.

    Returns
    -------
    iterator of Deletion
        One a set, the empty set first.
    """
    twins = run.twins or range(len(run.groups))
    forced = run.forced()
    known: dict[tuple[int, ...], _Known] = {(): run.run(depth > 0)}
    status, value, _ = known[()]
    yield Deletion((), value, status, True)
    done = 1
    # Each set starts from the solution of the empty one: it is nearer than that of another set.
    start = run.problem.remember()
    for size in range(1, depth + 1):
        for members in combinations(range(len(run.groups)), size):
            first = tuple(sorted({twins[place] for place in members}))
            answer = known.get(first) or _kept(known, first, forced)
            solved = answer is None
            if answer is None:
                run.switch_off(first)
                try:
                    answer = run.run(size < depth)
                finally:
                    run.problem.return_to(start)
            known[first] = answer
            yield Deletion(members, answer[1], answer[0], solved)
            done += 1
            if tick is not None and done % TICK == 0:
                tick(done)
    if tick is not None:
        tick(done)


def _kept(
    known: dict[tuple[int, ...], _Known], members: tuple[int, ...], forced: frozenset[int]
) -> _Known | None:
    """Answer of a smaller set that settles a larger one, or ``None``."""
    for left_out, place in enumerate(members):
        answer = known[members[:left_out] + members[left_out + 1 :]]
        if answer[0] is FastStatus.INFEASIBLE and place not in forced:
            return answer
        if answer[0] is FastStatus.OPTIMAL and not answer[2] >> place & 1:
            return answer
    return None
