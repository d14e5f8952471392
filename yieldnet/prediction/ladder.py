"""The ladder: best value of the aim as one layer after the other is added."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import side_sign, with_bands, with_point, yield_column
from yieldnet.model.case import AimDirection
from yieldnet.optimum.proof import Status
from yieldnet.prediction.layers import RUNGS, surplus_column

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Answer, Optimiser
    from yieldnet.prediction.layers import Layers

__all__ = [
    "LadderRung",
    "Objective",
    "climb_down",
    "first_infeasible",
    "objective_of",
    "runaway_words",
]


@dataclass(frozen=True, slots=True, kw_only=True)
class LadderRung:
    """One rung.

    Parameters
    ----------
    rung : str
        Its name.
    value : Fraction or None
        Best value of the aim once the rung is added [mol/mol basis].
    loss : Fraction or None
        What the rung costs, never negative [mol/mol basis]; ``None`` at the top.
    reason : str
        Why there is no value.
    """

    rung: str
    value: Fraction | None
    loss: Fraction | None
    reason: str = ""


@dataclass(frozen=True, slots=True)
class Objective:
    """The aim as an objective.

    Parameters
    ----------
    column : str
        Column of the coefficient, or of the surplus of an energy carrier.
    sign : int
        +1 where the aim counts production, -1 where it counts consumption.
    maximise : bool
        Whether the most is looked for.
    """

    column: str
    sign: int
    maximise: bool

    def best(self, optimiser: Optimiser, problem: Problem) -> Answer:
        """Best point of a problem."""
        return optimiser.optimise(problem, {self.column: Fraction(self.sign)}, self.maximise)


def objective_of(case: Case) -> Objective | None:
    """Objective of a case, or ``None`` without an aim."""
    aim = case.aim
    if aim is None:
        return None
    maximise = aim.direction is AimDirection.MOST
    if aim.is_energy:
        return Objective(surplus_column(aim.compound), 1, maximise)
    coefficient = case.coefficient(aim.compound)
    assert coefficient is not None
    return Objective(yield_column(aim.compound), side_sign(coefficient.side), maximise)


def climb_down(
    optimiser: Optimiser,
    layers: Layers,
    objective: Objective,
    point: Mapping[str, Fraction] | None,
) -> tuple[tuple[LadderRung, ...], Answer | None]:
    """Ladder of a case and the proven answer of its last rung.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    layers : Layers
        The problems.
    objective : Objective
        The aim.
    point : mapping of str to Fraction or None
        Reconciled point; without one the measured values may move in their bands, and the rung
        that cannot be reached is named.

    Returns
    -------
    tuple of LadderRung
        One a rung.
    Answer or None
        Answer of the last rung; ``None`` if the aim has no meaning there.
    """
    rungs: list[LadderRung] = []
    last: Answer | None = None
    before: Fraction | None = None
    broken = ""
    for rung in layers.rungs:
        problem = layers.problem(rung)
        if not problem.has_column(objective.column) or _energy_is_free(rung, objective):
            rungs.append(
                LadderRung(
                    rung=rung,
                    value=None,
                    loss=None,
                    reason="energy carriers are not balanced above the rung 'energy'",
                )
            )
            continue
        if broken:
            rungs.append(
                LadderRung(rung=rung, value=None, loss=None, reason=f"infeasible since '{broken}'")
            )
            continue
        if rung != "elements":
            problem = (
                with_bands(problem, layers.statements)
                if point is None
                else with_point(problem, layers.statements, point)
            )
        answer = last = objective.best(optimiser, problem)
        if answer.status is Status.OPTIMAL:
            value = answer.value
            loss = None if before is None else abs(before - value)
            rungs.append(LadderRung(rung=rung, value=value, loss=loss))
            before = value
            continue
        before = None
        if answer.status is Status.INFEASIBLE:
            broken = rung
            reason = "no point keeps all balances and statements from here on"
        else:
            reason = runaway_words(answer)
        rungs.append(LadderRung(rung=rung, value=None, loss=None, reason=reason))
    return tuple(rungs), last


def _energy_is_free(rung: str, objective: Objective) -> bool:
    return objective.column.startswith(surplus_column("")) and RUNGS.index(rung) < RUNGS.index(
        "energy"
    )


def first_infeasible(optimiser: Optimiser, layers: Layers) -> str | None:
    """First rung at which no point keeps all statements within their bands, if there is one."""
    for rung in layers.rungs:
        problem = layers.problem(rung)
        if rung != "elements":
            problem = with_bands(problem, layers.statements)
        if optimiser.optimise(problem, {}).status is Status.INFEASIBLE:
            return rung
    return None


def runaway_words(answer: Answer) -> str:
    """What runs away in an unbounded problem, in words."""
    prefix = yield_column("")
    parts = [
        f"{name.removeprefix(prefix)} {'made' if amount > 0 else 'taken up'}"
        for name, amount in answer.direction
        if name.startswith(prefix) and amount
    ]
    if not parts:
        parts = [name for name, amount in answer.direction if amount][:4]
    return ", ".join(parts) + " can grow together without limit"
