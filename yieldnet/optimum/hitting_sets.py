"""Smallest sets that meet some sets and hold none of others, one mixed-integer problem.

A column of zero or one for each thing; optlang hands the problem to whatever solver it finds. Every
coefficient is a small whole number, so a rounded solution is checked in whole numbers.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from yieldnet.foundation.errors import SolveError

if TYPE_CHECKING:
    from collections.abc import Iterable

__all__ = ["HittingSets"]


class HittingSets:
    """Sets of things, smallest first, under requirements that are added one by one.

    Parameters
    ----------
    count : int
        Number of things; they are called 0 to ``count - 1`` [-].
    """

    def __init__(self, count: int) -> None:
        import optlang  # type: ignore[import-untyped]
        from optlang.symbolics import Zero  # type: ignore[import-untyped]

        self._optlang: Any = optlang
        self._zero: Any = Zero
        self._model: Any = optlang.Model()
        self._chosen = [optlang.Variable(f"x{place}", type="binary") for place in range(count)]
        self._model.add(self._chosen)
        self._size = self._add(range(count), 0, count)
        self._requirements: list[tuple[frozenset[int], int, int]] = []
        self._possible = True
        target = optlang.Objective(Zero, direction="min", sloppy=True)
        self._model.objective = target
        self._model.update()
        target.set_linear_coefficients(dict.fromkeys(self._chosen, 1))

    def _add(self, places: Iterable[int], low: int, high: int) -> Any:
        constraint = self._optlang.Constraint(self._zero, lb=low, ub=high, sloppy=True)
        self._model.add(constraint, sloppy=True)
        self._model.update()
        constraint.set_linear_coefficients({self._chosen[place]: 1 for place in places})
        return constraint

    def _require(self, places: frozenset[int], low: int, high: int) -> None:
        if not places:
            # Nothing cannot be met, and every set holds it.
            self._possible = False
            return
        self._add(places, low, high)
        self._requirements.append((places, low, high))

    def meet(self, places: frozenset[int]) -> None:
        """Ask that at least one of some things is in the set."""
        self._require(places, 1, len(places))

    def avoid(self, places: frozenset[int]) -> None:
        """Ask that the set does not hold all of some things."""
        self._require(places, 0, len(places) - 1)

    def limit(self, least: int, most: int) -> None:
        """Ask for a size of the set [-]."""
        self._size.ub = None
        self._size.lb = least
        self._size.ub = most

    def next(self) -> frozenset[int] | None:
        """A smallest set that keeps all requirements, or ``None`` if there is none.

        Raises
        ------
        SolveError
            If the solver cannot tell, or says what is not so.
        """
        if not self._possible:
            return None
        status = self._model.optimize()
        if status == "infeasible":
            return None
        if status != "optimal":
            raise SolveError(f"the mixed-integer solver stopped with '{status}'")
        found = frozenset(
            place for place, column in enumerate(self._chosen) if round(column.primal) == 1
        )
        if not all(low <= len(found & places) <= high for places, low, high in self._requirements):
            raise SolveError("the mixed-integer solver gave a set that breaks a requirement")
        return found
