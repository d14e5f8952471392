"""What both users of GLPK's own interface share: loading a matrix, kinds of bounds, release."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from yieldnet.optimum.problem import Problem

__all__ = ["GlpkProblem"]


class GlpkProblem:
    """A problem object of GLPK with the matrix of a problem, and its simplex settings.

    Parameters
    ----------
    problem : Problem
        Its matrix is loaded; its bounds are not.
    max_iterations : int
        Most pivots of one solve [-].
    """

    def __init__(self, problem: Problem, max_iterations: int) -> None:
        import swiglpk  # type: ignore[import-untyped]

        self._glpk: Any = swiglpk
        glpk = self._glpk
        self._handle = glpk.glp_create_prob()
        # GLPK refuses to add none of a kind, and an empty one changes nothing.
        glpk.glp_add_rows(self._handle, max(1, len(problem.rows)))
        glpk.glp_add_cols(self._handle, max(1, len(problem.columns)))
        size = sum(map(len, problem.matrix.rows))
        rows, columns = glpk.intArray(size + 1), glpk.intArray(size + 1)
        values = glpk.doubleArray(size + 1)
        place = 0
        for i, row in enumerate(problem.matrix.rows, 1):
            for j, value in row:
                place += 1
                # The same as float(value), in half the time.
                factor = value.numerator / value.denominator
                rows[place], columns[place], values[place] = i, j + 1, factor
        glpk.glp_load_matrix(self._handle, size, rows, columns, values)
        self._control = glpk.glp_smcp()
        glpk.glp_init_smcp(self._control)
        self._control.msg_lev = glpk.GLP_MSG_OFF
        self._control.it_lim = max_iterations

    def __del__(self) -> None:
        handle = getattr(self, "_handle", None)
        free = getattr(self._glpk, "glp_delete_prob", None) if handle is not None else None
        if free is not None:  # at the end of the interpreter the library may be gone already
            free(handle)

    def _kind(self, low: float | None, high: float | None, fixed: bool) -> tuple[int, float, float]:
        """Kind of bounds and their ends, as GLPK takes them."""
        glpk = self._glpk
        if low is None and high is None:
            return glpk.GLP_FR, 0.0, 0.0
        if high is None and low is not None:
            return glpk.GLP_LO, low, 0.0
        if low is None and high is not None:
            return glpk.GLP_UP, 0.0, high
        assert low is not None
        assert high is not None
        return (glpk.GLP_FX if fixed else glpk.GLP_DB), low, high
