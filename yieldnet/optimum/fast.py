"""A linear problem in floats, moved in place: for long studies that cannot be proven as a whole.

One GLPK object; bounds and objective change, the basis stays warm. Answers are floating-point and
carry their residual; whoever prints them says so, and proves those that matter.
"""

from __future__ import annotations

from enum import StrEnum
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import SolveError
from yieldnet.optimum.glpk_problem import GlpkProblem

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from yieldnet.optimum.problem import Problem

__all__ = ["FEASIBILITY", "MAX_ITERATIONS", "FastProblem", "FastStatus"]

FEASIBILITY = 1e-7
"""How far a float solution may miss a bound or balance; GLPK's own limit [mol/mol]."""
MAX_ITERATIONS = 200_000
"""Most pivots of one solve; beyond it the problem is declared unsolvable in floats [-]."""


class FastStatus(StrEnum):
    """How a float solve ended."""

    OPTIMAL = "optimal"
    INFEASIBLE = "infeasible"
    UNBOUNDED = "unbounded"


class FastProblem(GlpkProblem):
    """A problem loaded once into GLPK.

    Parameters
    ----------
    problem : Problem
        Columns, rows and bounds at the start.
    """

    def __init__(self, problem: Problem) -> None:
        super().__init__(problem, MAX_ITERATIONS)
        self.columns = len(problem.columns)
        self.rows = len(problem.rows)
        self._entries = problem.matrix.rows
        # The basis that GLPK builds to begin with is announced on the terminal otherwise.
        self._glpk.glp_term_out(self._glpk.GLP_OFF)
        for j, column in enumerate(problem.columns):
            self.bound_column(j, *column.bounds.as_floats())
        for i, balance in enumerate(problem.rows):
            self.bound_row(i, *balance.bounds.as_floats())
        self._objective: dict[int, float] = {}
        self._fresh()

    def remember(self) -> FastProblem:
        """The problem as it stands, bounds, objective and basis, to return to."""
        kept = object.__new__(FastProblem)
        kept.__dict__.update(self.__dict__, _handle=self._glpk.glp_create_prob())
        kept.return_to(self)
        return kept

    def return_to(self, kept: FastProblem) -> None:
        """Bounds, objective and basis as they were when remembered.

        The way back from a problem far off costs more pivots than this copy costs time.
        """
        self._glpk.glp_copy_prob(self._handle, kept._handle, self._glpk.GLP_OFF)
        self._objective = dict(kept._objective)

    def _fresh(self) -> None:
        self._glpk.glp_adv_basis(self._handle, 0)

    def _ends(self, low: float | None, high: float | None) -> tuple[int, float, float]:
        return self._kind(low, high, low == high)

    def bound_column(self, column: int, low: float | None, high: float | None) -> None:
        """Move the bounds of a column; ``None`` for none."""
        self._glpk.glp_set_col_bnds(self._handle, column + 1, *self._ends(low, high))

    def bound_row(self, row: int, low: float | None, high: float | None) -> None:
        """Move the bounds of a row; ``None`` for none."""
        self._glpk.glp_set_row_bnds(self._handle, row + 1, *self._ends(low, high))

    def add_row(
        self, coefficients: Mapping[int, float], low: float | None, high: float | None
    ) -> None:
        """Add a row below the others; :meth:`return_to` takes it away again."""
        glpk = self._glpk
        size = len(coefficients)
        columns, values = glpk.intArray(size + 1), glpk.doubleArray(size + 1)
        for place, (j, value) in enumerate(coefficients.items(), 1):
            columns[place], values[place] = j + 1, value
        row = glpk.glp_add_rows(self._handle, 1)
        glpk.glp_set_mat_row(self._handle, row, size, columns, values)
        glpk.glp_set_row_bnds(self._handle, row, *self._ends(low, high))

    def ties(self) -> list[tuple[int, float]]:
        """For each column, the first to which balances of two tie it, and its ratio to that."""
        glpk = self._glpk
        tied = [(j, 1.0) for j in range(self.columns)]
        members = {j: [j] for j in range(self.columns)}
        for i, entries in enumerate(self._entries):
            if len(entries) != 2 or glpk.glp_get_row_type(self._handle, i + 1) != glpk.GLP_FX:
                continue
            if glpk.glp_get_row_lb(self._handle, i + 1) != 0:
                continue
            (one, a), (other, b) = entries
            (first, of_one), (second, of_other) = tied[one], tied[other]
            if first == second:
                continue
            # a one + b other = 0, so second = -(a of_one) / (b of_other) first.
            ratio = -float(a) * of_one / (float(b) * of_other)
            if second < first:
                first, second, ratio = second, first, 1 / ratio
            for j in members.pop(second):
                tied[j] = (first, tied[j][1] * ratio)
                members[first].append(j)
        return tied

    def aim(self, objective: Mapping[int, float], maximise: bool = True) -> None:
        """Set the objective: coefficient by column."""
        glpk = self._glpk
        for j in self._objective:
            if j not in objective:
                glpk.glp_set_obj_coef(self._handle, j + 1, 0.0)
        for j, value in objective.items():
            glpk.glp_set_obj_coef(self._handle, j + 1, value)
        self._objective = dict(objective)
        glpk.glp_set_obj_dir(self._handle, glpk.GLP_MAX if maximise else glpk.GLP_MIN)

    def solve(self, dual: bool = False) -> FastStatus:
        """Solve from the basis that is there.

        Parameters
        ----------
        dual : bool
            Whether to start with the dual simplex method, which suits moved bounds; the primal
            suits a new objective.

        Returns
        -------
        FastStatus
            How it ended.

        Raises
        ------
        SolveError
            If floats cannot solve the problem.
        """
        glpk = self._glpk
        for attempt in range(3):
            self._control.meth = glpk.GLP_DUALP if dual and not attempt else glpk.GLP_PRIMAL
            code = glpk.glp_simplex(self._handle, self._control)
            status = glpk.glp_get_status(self._handle)
            if code == 0 and status == glpk.GLP_OPT:
                return FastStatus.OPTIMAL
            if code == 0 and status == glpk.GLP_NOFEAS:
                return FastStatus.INFEASIBLE
            if code == 0 and status == glpk.GLP_UNBND:
                return FastStatus.UNBOUNDED
            if attempt:
                self._fresh()
        raise SolveError("floats cannot solve this problem; the exact path can, if it is small")

    @property
    def value(self) -> float:
        """Objective at the solution."""
        return float(self._glpk.glp_get_obj_val(self._handle))

    def column(self, column: int) -> float:
        """Value of a column at the solution."""
        return float(self._glpk.glp_get_col_prim(self._handle, column + 1))

    def values(self, columns: Iterable[int]) -> list[float]:
        """Values of several columns at the solution."""
        get, handle = self._glpk.glp_get_col_prim, self._handle
        return [get(handle, j + 1) for j in columns]

    def residual(self) -> float:
        """Largest amount by which a row's bounds are missed at the solution."""
        worst = 0.0
        for i in range(self.rows):
            activity = sum(float(value) * self.column(j) for j, value in self._entries[i])
            low = self._glpk.glp_get_row_lb(self._handle, i + 1)
            high = self._glpk.glp_get_row_ub(self._handle, i + 1)
            worst = max(worst, low - activity, activity - high)
        return worst
