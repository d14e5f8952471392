"""Affine hull of the feasible points of a problem, seen in some of its columns, exact.

Equalities that follow from signs alone (a flux that can only be zero) count too. Functionals on the
columns are tried one after the other: one that varies gives a direction, one that does not gives an
equation; after as many trials as there are columns nothing is left.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.exact import eliminate
from yieldnet.optimum.proof import Status

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Optimiser

__all__ = ["Hull", "affine_hull"]

Vector = tuple[Fraction, ...]


@dataclass(frozen=True, slots=True)
class Hull:
    """Affine hull in some columns.

    Parameters
    ----------
    columns : tuple of str
        The columns.
    directions : tuple of tuple of Fraction
        Independent directions in which the columns can move together.
    """

    columns: tuple[str, ...]
    directions: tuple[Vector, ...]

    @property
    def dimension(self) -> int:
        """Dimension of the hull [-]."""
        return len(self.directions)


def affine_hull(
    optimiser: Optimiser,
    problem: Problem,
    columns: Sequence[str],
    equations: Sequence[Vector] = (),
) -> Hull | None:
    """Affine hull of the feasible points in some columns, or ``None`` if there are none.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    problem : Problem
        The problem.
    columns : sequence of str
        Columns in which it is seen.
    equations : sequence of tuple of Fraction
        Equations between the columns that are known already.

    Returns
    -------
    Hull or None
        Directions of the hull.
    """
    first = optimiser.optimise(problem, {})
    if first.status is Status.INFEASIBLE:
        return None
    size = len(columns)
    start = tuple(first[name] for name in columns)
    known = [tuple(row) for row in equations]
    directions: list[Vector] = []
    while functional := _untried(known, directions, size):
        move = _move(optimiser, problem, columns, functional, start)
        if move is None:
            known.append(functional)
        else:
            directions.append(move)
    return Hull(tuple(columns), tuple(directions))


def _untried(known: Sequence[Vector], directions: Sequence[Vector], size: int) -> Vector | None:
    """A functional that vanishes on all directions and is no combination of known equations."""
    form = eliminate(directions, size)
    free = [j for j in range(size) if j not in form.pivots]
    rank = eliminate(known, size).rank
    if len(free) <= rank:
        return None
    for j in free:
        vector = [Fraction(0)] * size
        vector[j] = Fraction(1)
        for pivot, row in zip(form.pivots, form.rows, strict=True):
            vector[pivot] = -row[j]
        # The null space of the directions: orthogonal in the sense vector . direction = 0.
        candidate = tuple(vector)
        if eliminate([*known, candidate], size).rank > rank:
            return candidate
    return None


def _move(
    optimiser: Optimiser,
    problem: Problem,
    columns: Sequence[str],
    functional: Vector,
    start: Vector,
) -> Vector | None:
    """A direction along which the functional changes, or ``None`` if it cannot."""
    objective = {name: factor for name, factor in zip(columns, functional, strict=True) if factor}
    level = sum((a * b for a, b in zip(functional, start, strict=True)), Fraction(0))
    for maximise in (True, False):
        answer = optimiser.optimise(problem, objective, maximise)
        if answer.status is Status.UNBOUNDED:
            ray = dict(answer.direction)
            return tuple(ray.get(name, Fraction(0)) for name in columns)
        if answer.value != level:
            return tuple(answer[name] - before for name, before in zip(columns, start, strict=True))
    return None
