"""What an engine is: it takes a problem and suggests a basis, in floats.

An engine is never believed: :mod:`yieldnet.optimum.proof` solves its basis again in fractions.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Protocol

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.optimum.problem import Problem

__all__ = ["Basis", "Engine", "Session"]


@dataclass(frozen=True, slots=True)
class Basis:
    """A basis: which variables are basic, and which of the others rest at their upper bound.

    Columns are numbered from 0; the activity of row ``i`` is variable ``columns + i``.

    Parameters
    ----------
    basic : tuple of int
        As many variables as there are rows, sorted.
    at_high : frozenset of int
        Variables that are not basic and rest at their upper bound.
    """

    basic: tuple[int, ...]
    at_high: frozenset[int]


class Session(Protocol):
    """A matrix loaded into a solver; bounds and objective move from call to call."""

    def suggest(self, problem: Problem, objective: Mapping[int, float], maximise: bool) -> Basis:
        """Basis at which the solver stopped, whatever it thinks of it."""
        ...


class Engine(Protocol):
    """A solver that can load problems."""

    name: str

    def session(self, problem: Problem) -> Session:
        """Load the matrix of a problem."""
        ...
