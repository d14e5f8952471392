"""Engine on GLPK's own interface: one problem object, warm starts, bounds moved in place."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from yieldnet.optimum.basis import Basis

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


class GlpkSession:
    """One GLPK problem object.

    Parameters
    ----------
    problem : Problem
        Its matrix stays; later problems must share it.
    """

    def __init__(self, problem: Problem) -> None:
        import swiglpk  # type: ignore[import-untyped]

        self._glpk: Any = swiglpk
        self._matrix = problem.matrix
        glpk = self._glpk
        self._handle = glpk.glp_create_prob()
        glpk.glp_add_rows(self._handle, max(1, len(problem.rows)))
        glpk.glp_add_cols(self._handle, max(1, len(problem.columns)))
        entries = [
            (i + 1, j + 1, float(value))
            for i, row in enumerate(problem.matrix.rows)
            for j, value in row
        ]
        size = len(entries)
        rows, columns = glpk.intArray(size + 1), glpk.intArray(size + 1)
        values = glpk.doubleArray(size + 1)
        for place, (i, j, value) in enumerate(entries, 1):
            rows[place], columns[place], values[place] = i, j, value
        glpk.glp_load_matrix(self._handle, size, rows, columns, values)
        self._control = glpk.glp_smcp()
        glpk.glp_init_smcp(self._control)
        self._control.msg_lev = glpk.GLP_MSG_OFF
        self._control.meth = glpk.GLP_PRIMAL
        self._control.it_lim = MAX_ITERATIONS
        self._control.tm_lim = MAX_MILLISECONDS
        self._columns: list[Bounds | None] = [None] * len(problem.columns)
        self._rows: list[Bounds | None] = [None] * len(problem.rows)
        self._objective: Mapping[int, float] = {}
        if not problem.rows:
            glpk.glp_set_row_bnds(self._handle, 1, glpk.GLP_FR, 0.0, 0.0)
        glpk.glp_std_basis(self._handle)

    def __del__(self) -> None:
        handle = getattr(self, "_handle", None)
        free = getattr(self._glpk, "glp_delete_prob", None) if handle is not None else None
        if free is not None:  # at the end of the interpreter the library may be gone already
            free(handle)

    def suggest(self, problem: Problem, objective: Mapping[int, float], maximise: bool) -> Basis:
        """Basis at which GLPK's primal simplex stopped."""
        if problem.matrix is not self._matrix:
            raise ValueError("the problem has another matrix than the one loaded")
        glpk, handle = self._glpk, self._handle
        # Unchanged columns and rows are the same objects, so most of this is one comparison each.
        for j, column in enumerate(problem.columns):
            if column.bounds is not self._columns[j]:
                glpk.glp_set_col_bnds(handle, j + 1, *self._kind(column.bounds))
                self._columns[j] = column.bounds
        for i, row in enumerate(problem.rows):
            if row.bounds is not self._rows[i]:
                glpk.glp_set_row_bnds(handle, i + 1, *self._kind(row.bounds))
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

    def _kind(self, bounds: Bounds) -> tuple[int, float, float]:
        low, high = bounds.low, bounds.high
        glpk = self._glpk
        if low is None and high is None:
            return glpk.GLP_FR, 0.0, 0.0
        if high is None and low is not None:
            return glpk.GLP_LO, float(low), 0.0
        if low is None and high is not None:
            return glpk.GLP_UP, 0.0, float(high)
        assert low is not None
        assert high is not None
        kind = glpk.GLP_FX if low == high else glpk.GLP_DB
        return kind, float(low), float(high)

    def _basis(self, columns: int, rows: int) -> Basis:
        glpk, handle = self._glpk, self._handle
        status = [glpk.glp_get_col_stat(handle, j + 1) for j in range(columns)]
        status += [glpk.glp_get_row_stat(handle, i + 1) for i in range(rows)]
        return Basis(
            tuple(j for j, kind in enumerate(status) if kind == glpk.GLP_BS),
            frozenset(j for j, kind in enumerate(status) if kind == glpk.GLP_NU),
        )
