"""Proof of optima in fractions: an engine suggests a basis, exact arithmetic decides."""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.optimum.answer import Answer, Status
from yieldnet.optimum.exact_simplex import ExactSimplex

if TYPE_CHECKING:
    from collections.abc import Mapping
    from fractions import Fraction

    from yieldnet.optimum.basis import Engine, Session
    from yieldnet.optimum.problem import Problem

__all__ = ["Answer", "Optimiser", "Status"]


class Optimiser:
    """Solves problems with an engine and proves the answers.

    Keeps one session and one set of exact factors per matrix; the factors of a basis are kept, so
    a basis met again costs two triangular solves.

    Parameters
    ----------
    engine : Engine
        Suggests bases.
    """

    def __init__(self, engine: Engine) -> None:
        self.engine = engine
        self._kept: dict[int, tuple[Session, ExactSimplex]] = {}

    def optimise(
        self, problem: Problem, objective: Mapping[str, Fraction], maximise: bool = True
    ) -> Answer:
        """Proven optimum of a problem.

        Parameters
        ----------
        problem : Problem
            The problem.
        objective : mapping of str to Fraction
            Coefficients by column.
        maximise : bool
            Direction.

        Returns
        -------
        Answer
            Optimal, infeasible or unbounded, proven.

        Raises
        ------
        SolveError
            If the problem is too large to prove.
        """
        session, exact = self._loaded(problem)
        costs = {problem.column(name): value for name, value in objective.items() if value}
        floats = {j: float(value) for j, value in costs.items()}
        basis = session.suggest(problem, floats, maximise)
        return exact.prove(problem, basis, costs, tuple(objective.items()), maximise)

    def _loaded(self, problem: Problem) -> tuple[Session, ExactSimplex]:
        key = id(problem.matrix)
        if key not in self._kept:
            self._kept[key] = (self.engine.session(problem), ExactSimplex(problem.matrix))
        return self._kept[key]
