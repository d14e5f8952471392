"""Proven answers of linear problems: values, duals, and what they say of changed problems."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import SolveError
from yieldnet.optimum.problem import Bounds

if TYPE_CHECKING:
    from yieldnet.optimum.basis import Basis
    from yieldnet.optimum.problem import Problem

__all__ = ["Answer", "Status"]


class Status(StrEnum):
    """What is proven of a problem."""

    OPTIMAL = "optimal"
    INFEASIBLE = "infeasible"
    UNBOUNDED = "unbounded"


@dataclass(frozen=True, slots=True, kw_only=True)
class Answer:
    """A proven answer.

    Parameters
    ----------
    status : Status
        What is proven.
    problem : Problem
        The problem that was solved.
    basis : Basis
        Basis at the end.
    objective : tuple of (str, Fraction)
        Coefficients of the objective by column.
    maximise : bool
        Direction.
    primal : tuple of Fraction
        Value of each column; empty unless optimal.
    reduced_costs : tuple of Fraction
        Change of the objective per unit of each column; empty unless optimal.
    duals : tuple of Fraction
        Change of the objective per unit of each row's bound; empty unless optimal.
    direction : tuple of (str, Fraction)
        Columns that run away together, if unbounded.
    """

    status: Status
    problem: Problem
    basis: Basis
    objective: tuple[tuple[str, Fraction], ...]
    maximise: bool
    primal: tuple[Fraction, ...] = ()
    reduced_costs: tuple[Fraction, ...] = ()
    duals: tuple[Fraction, ...] = ()
    direction: tuple[tuple[str, Fraction], ...] = ()

    @property
    def value(self) -> Fraction:
        """Optimal value.

        Raises
        ------
        SolveError
            If there is none.
        """
        self._need_optimal()
        return sum(
            (factor * self.primal[self.problem.column(name)] for name, factor in self.objective),
            Fraction(0),
        )

    def __getitem__(self, column: str) -> Fraction:
        """Value of a column at the optimum."""
        self._need_optimal()
        return self.primal[self.problem.column(column)]

    def _need_optimal(self) -> None:
        if self.status is not Status.OPTIMAL:
            raise SolveError(f"the problem is {self.status}: it has no values")

    def stays_best(self, changed: Problem) -> bool:
        """Whether this point is still optimal once some bounds have changed, by the same duals.

        Parameters
        ----------
        changed : Problem
            The problem with other bounds.

        Returns
        -------
        bool
            ``True`` proves it; ``False`` says nothing.
        """
        self._need_optimal()
        sign = 1 if self.maximise else -1
        for j, (old, new) in enumerate(zip(self.problem.columns, changed.columns, strict=True)):
            if old is not new and not _rests(
                self.primal[j], sign * self.reduced_costs[j], new.bounds
            ):
                return False
        for i, (before, after) in enumerate(zip(self.problem.rows, changed.rows, strict=True)):
            if before is not after and not _rests(
                self.activity(i), sign * self.duals[i], after.bounds
            ):
                return False
        return True

    def activity(self, row: int) -> Fraction:
        """Sum of a row at the optimum."""
        return sum(
            (value * self.primal[j] for j, value in self.problem.matrix.rows[row]), Fraction(0)
        )

    def optimal_face(self) -> Problem:
        """The problem cut down to its optimal points.

        By complementary slackness a column or row with a reduced cost or dual that is not zero
        rests at the same bound in every optimal point; fixing those there leaves exactly the
        optimal points, without a row that holds a rounded optimum.
        """
        self._need_optimal()
        columns = {
            item.name: Bounds(self.primal[j], self.primal[j])
            for j, item in enumerate(self.problem.columns)
            if self.reduced_costs[j] and not item.bounds.fixed
        }
        rows: dict[str, Bounds] = {}
        for i, row in enumerate(self.problem.rows):
            if self.duals[i] and not row.bounds.fixed:
                # The dual's sign says at which end the row rests.
                upper = (self.duals[i] > 0) == self.maximise
                end = row.bounds.high if upper else row.bounds.low
                rows[row.name] = Bounds(end, end)
        return self.problem.with_columns(columns).with_rows(rows)


def _rests(value: Fraction, pull: Fraction, bounds: Bounds) -> bool:
    """Whether a variable may rest at a value: inside its bounds and not pulled off them."""
    low, high = bounds.low, bounds.high
    if (low is not None and value < low) or (high is not None and value > high):
        return False
    if pull > 0:
        return high is not None and value == high
    if pull < 0:
        return low is not None and value == low
    return True
