"""Exact sparse factors of a basis: triangular factors in rational arithmetic, both ways solved."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

__all__ = ["Factors", "SingularBasis"]

Rational = Any
"""A rational of python-flint, which ships no types that say so."""


class SingularBasis(ArithmeticError):
    """The columns offered as a basis depend on each other."""


class Factors:
    """Factors of a square sparse matrix.

    Pivots are taken from the row with the fewest entries, in it from the column with the fewest;
    a network's basis is nearly triangular, so hardly any entry fills in.

    Parameters
    ----------
    rows : sequence of mapping of int to rational
        The matrix, row by row, columns numbered from 0.

    Raises
    ------
    SingularBasis
        If the matrix has no inverse.
    """

    def __init__(self, rows: Sequence[Mapping[int, Rational]]) -> None:
        work: dict[int, dict[int, Rational]] = {i: dict(row) for i, row in enumerate(rows)}
        users: dict[int, set[int]] = {j: set() for j in range(len(rows))}
        for i, row in work.items():
            for j in row:
                users[j].add(i)
        self._steps: list[tuple[int, int, Rational, list[tuple[int, Rational]]]] = []
        self._lower: list[tuple[int, int, Rational]] = []
        singles = [i for i, row in work.items() if len(row) == 1]
        while work:
            # A row with one entry fills nothing in; only without one is the sparsest looked for.
            p = -1
            while singles and p not in work:
                p = singles.pop()
            if p not in work:
                p = min(work, key=lambda i: len(work[i]))
            row = work.pop(p)
            if not row:
                raise SingularBasis
            q = min(row, key=lambda j: len(users[j])) if len(row) > 1 else next(iter(row))
            pivot = row.pop(q)
            others = list(row.items())
            for j in row:
                users[j].discard(p)
            users[q].discard(p)
            for i in users.pop(q):
                target = work[i]
                ratio = target.pop(q) / pivot
                self._lower.append((p, i, ratio))
                for j, value in others:
                    old = target.get(j)
                    new = -ratio * value if old is None else old - ratio * value
                    if new:
                        target[j] = new
                        users[j].add(i)
                    elif old is not None:
                        del target[j]
                        users[j].discard(i)
                if len(target) == 1:
                    singles.append(i)
            self._steps.append((p, q, pivot, others))

    def solve(self, right: Sequence[Rational]) -> list[Rational]:
        """Solution x of K x = right."""
        side = list(right)
        for p, i, ratio in self._lower:
            if side[p]:
                side[i] -= ratio * side[p]
        found: list[Rational] = [0] * len(side)
        for p, q, pivot, others in reversed(self._steps):
            value = side[p]
            for j, entry in others:
                if found[j]:
                    value -= entry * found[j]
            found[q] = value / pivot if value else value
        return found

    def solve_transposed(self, right: Sequence[Rational]) -> list[Rational]:
        """Solution y of K' y = right, K' being the transpose."""
        side = list(right)
        found: list[Rational] = [0] * len(side)
        for p, q, pivot, others in self._steps:
            value = side[q]
            if value:
                value = value / pivot
                for j, entry in others:
                    side[j] -= entry * value
            found[p] = value
        for p, i, ratio in reversed(self._lower):
            if found[i]:
                found[p] -= ratio * found[i]
        return found
