"""Engines that lie: whatever basis they suggest, the proven answer must be the same."""

from __future__ import annotations

from dataclasses import dataclass, field
from random import Random
from typing import TYPE_CHECKING

from yieldnet.optimum.basis import Basis

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.optimum.problem import Problem

__all__ = ["LIES", "LyingEngine", "SlackEngine"]

LIES = ("any", "dependent", "too few", "too many", "all high", "twice", "activities")
"""Kinds of wrong bases."""


@dataclass(slots=True)
class LyingEngine:
    """Engine that never solves anything.

    Parameters
    ----------
    lie : str
        One of :data:`LIES`, or ``mixed``.
    seed : int
        Seed of its bases.
    """

    lie: str = "mixed"
    seed: int = 0
    name: str = "liar"
    rng: Random = field(init=False)

    def __post_init__(self) -> None:
        self.rng = Random(f"lies {self.seed}")

    def session(self, problem: Problem) -> LyingEngine:
        """Itself: it loads nothing."""
        return self

    def suggest(self, problem: Problem, objective: Mapping[int, float], maximise: bool) -> Basis:
        """A basis drawn from the air."""
        rng = self.rng
        columns, rows = len(problem.columns), len(problem.rows)
        everything = range(columns + rows)
        lie = rng.choice(LIES) if self.lie == "mixed" else self.lie
        basic = rng.sample(everything, rows)
        at_high = {j for j in everything if rng.random() < 0.5}
        if lie == "dependent":
            # As many columns as there are rows, whether or not they span anything.
            basic = list(everything)[:rows]
        elif lie == "too few":
            basic = basic[1:]
        elif lie == "too many":
            basic = list(everything)[: rows + 1]
        elif lie == "all high":
            at_high = set(everything)
        elif lie == "twice" and rows > 1:
            basic = [basic[0], basic[0], *basic[2:]]
        elif lie == "activities":
            basic = list(range(columns, columns + rows))
        return Basis(tuple(sorted(basic)), frozenset(at_high))


class SlackEngine:
    """Engine that always starts the proof at the basis of all row activities."""

    name = "slack"

    def session(self, problem: Problem) -> SlackEngine:
        """Itself: it loads nothing."""
        return self

    def suggest(self, problem: Problem, objective: Mapping[int, float], maximise: bool) -> Basis:
        """All row activities basic, every column at its lower end."""
        size = len(problem.columns)
        return Basis(tuple(range(size, size + len(problem.rows))), frozenset())
