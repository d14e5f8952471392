"""Engine on GLPK's own interface: one problem object, warm starts, bounds moved in place."""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.optimum.basis import Basis
from yieldnet.optimum.glpk_problem import GlpkProblem

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.optimum.problem import Bounds, Problem

__all__ = ["MAX_ITERATIONS", "MAX_MILLISECONDS", "GlpkEngine", "GlpkSession"]

MAX_ITERATIONS = 50_000
"""Most float pivots; badly scaled numbers can make them go round in circles, and exact pivots go
on from wherever they stopped [-]."""
MAX_MILLISECONDS = 5_000
"""Longest float solve, for the same reason [ms]."""


class GlpkEngine:
    """GLPK through ``swiglpk``."""

    name = "glpk"

    def session(self, problem: Problem) -> GlpkSession:
        """Load the matrix of a problem."""
        return GlpkSession(problem)


class GlpkSession(GlpkProblem):
    """One GLPK problem object.

    Parameters
    ----------
    problem : Problem
        Its matrix stays; later problems must share it.
    """

    def __init__(self, problem: Problem) -> None:
        super().__init__(problem, MAX_ITERATIONS)
        glpk = self._glpk
        self._matrix = problem.matrix
        self._control.meth = glpk.GLP_PRIMAL
        self._control.tm_lim = MAX_MILLISECONDS
        self._columns: list[Bounds | None] = [None] * len(problem.columns)
        self._rows: list[Bounds | None] = [None] * len(problem.rows)
        self._objective: Mapping[int, float] = {}
        if not problem.rows:
            glpk.glp_set_row_bnds(self._handle, 1, glpk.GLP_FR, 0.0, 0.0)
        glpk.glp_std_basis(self._handle)

    def suggest(self, problem: Problem, objective: Mapping[int, float], maximise: bool) -> Basis:
        """Basis at which GLPK's primal simplex stopped."""
        if problem.matrix is not self._matrix:
            raise ValueError("the problem has another matrix than the one loaded")
        glpk, handle = self._glpk, self._handle
        # Unchanged columns and rows are the same objects, so most of this is one comparison each.
        for j, column in enumerate(problem.columns):
            if column.bounds is not self._columns[j]:
                glpk.glp_set_col_bnds(handle, j + 1, *self._kind_of(column.bounds))
                self._columns[j] = column.bounds
        for i, row in enumerate(problem.rows):
            if row.bounds is not self._rows[i]:
                glpk.glp_set_row_bnds(handle, i + 1, *self._kind_of(row.bounds))
                self._rows[i] = row.bounds
        for j in self._objective:
            glpk.glp_set_obj_coef(handle, j + 1, 0.0)
        for j, value in objective.items():
            glpk.glp_set_obj_coef(handle, j + 1, value)
        self._objective = objective
        glpk.glp_set_obj_dir(handle, glpk.GLP_MAX if maximise else glpk.GLP_MIN)
        if glpk.glp_simplex(handle, self._control) != 0:
            # A warm basis can be singular or badly scaled for the moved bounds: start afresh.
            glpk.glp_std_basis(handle)
            glpk.glp_simplex(handle, self._control)
        return self._basis(len(problem.columns), len(problem.rows))

    def _kind_of(self, bounds: Bounds) -> tuple[int, float, float]:
        # Ends that differ by less than floats can tell are no fixed value.
        return self._kind(*bounds.as_floats(), bounds.fixed)

    def _basis(self, columns: int, rows: int) -> Basis:
        glpk, handle = self._glpk, self._handle
        status = [glpk.glp_get_col_stat(handle, j + 1) for j in range(columns)]
        status += [glpk.glp_get_row_stat(handle, i + 1) for i in range(rows)]
        return Basis(
            tuple(j for j, kind in enumerate(status) if kind == glpk.GLP_BS),
            frozenset(j for j, kind in enumerate(status) if kind == glpk.GLP_NU),
        )
