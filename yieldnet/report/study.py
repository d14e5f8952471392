"""A feasibility study as one value: everything that is said of a case, and what it was made from.

In: a case and its input texts. Out: each answer once, so that page, workbook and pictures tell the
same. Left out: screens and searches, which may take minutes.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import YieldnetError
from yieldnet.model.network import BIOMASS
from yieldnet.prediction.energetics import energetics_case
from yieldnet.prediction.predict import balance_case, predict_case
from yieldnet.prediction.reconcile import reconcile_case
from yieldnet.prediction.result import Outcome
from yieldnet.studies.knockout import knock_out
from yieldnet.studies.tradeoff import trade_off

if TYPE_CHECKING:
    from collections.abc import Callable
    from typing import TypeVar

    from yieldnet.model.case import Case
    from yieldnet.plant.sheet import PlantSheet
    from yieldnet.prediction.energetics import Energetics
    from yieldnet.prediction.reconciliation import Reconciliation
    from yieldnet.prediction.result import Prediction
    from yieldnet.reading.study_inputs import StudyInputs
    from yieldnet.studies.knockout import KnockOutResult
    from yieldnet.studies.tradeoff import Tradeoff

    Answer = TypeVar("Answer")

__all__ = ["Study", "study_of"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Study:
    """Everything that a report tells.

    Parameters
    ----------
    case : Case
        The question.
    inputs : StudyInputs
        The files it was made from.
    prediction : Prediction
        Its answer, by elements alone where it has no network.
    reconciliation : Reconciliation or None
        What the balances say of its measured values; ``None`` where nothing is measured.
    energetics : Energetics or None
        Heat and Gibbs energy; ``None`` without a settled overall equation.
    tradeoff : Tradeoff or None
        The aim against biomass, where the equation has both.
    plant : PlantSheet or None
        Where the case has a section ``plant``.
    ideas : KnockOutResult or None
        The knock-outs of the case, before and after.
    left_out : tuple of (str, str)
        What was asked for and could not be told, and why.
    engine : {"glpk", "optlang"}
        Solver that suggested.
    versions : tuple of (str, str)
        Programs that made it.
    """

    case: Case
    inputs: StudyInputs
    prediction: Prediction
    reconciliation: Reconciliation | None
    energetics: Energetics | None
    tradeoff: Tradeoff | None
    plant: PlantSheet | None
    ideas: KnockOutResult | None
    left_out: tuple[tuple[str, str], ...]
    engine: str
    versions: tuple[tuple[str, str], ...]

    def __repr__(self) -> str:
        return f"Study({self.case.title!r}: {self.prediction.outcome})"


def study_of(
    case: Case,
    inputs: StudyInputs,
    engine: str = "glpk",
    versions: tuple[tuple[str, str], ...] = (),
) -> Study:
    """Everything that is said of a case.

    Parameters
    ----------
    case : Case
        The question.
    inputs : StudyInputs
        The files it was made from.
    engine : {"glpk", "optlang"}
        Solver that suggests.
    versions : tuple of (str, str)
        Names and versions of the programs that make it.

    Returns
    -------
    Study
        Each answer, ``None`` where the case has nothing to ask.

    Raises
    ------
    InputError
        If the case must be refused.
    """
    left_out: list[tuple[str, str]] = []

    def told(name: str, ask: Callable[[], Answer]) -> Answer | None:
        """An answer; where it is refused, the reason is kept for the reader."""
        try:
            return ask()
        except YieldnetError as error:
            left_out.append((name, str(error)))
            return None

    prediction = (balance_case if case.network is None else predict_case)(case, engine)
    solved = prediction.outcome is Outcome.SOLVED
    measured = any(item.measurements for item in prediction.coefficients) or case.measured
    energetics = told("heat and Gibbs energy", lambda: energetics_case(case, engine))
    return Study(
        case=case,
        inputs=inputs,
        prediction=prediction,
        reconciliation=told("measured values", lambda: reconcile_case(case, engine=engine))
        if measured
        else None,
        energetics=energetics if energetics is not None and energetics.amounts else None,
        tradeoff=told("trade-off", lambda: trade_off([case], engine=engine))
        if solved and _has_two_axes(case)
        else None,
        plant=told("plant", lambda: _plant(case, engine)) if case.plant is not None else None,
        ideas=told("ideas tried", lambda: _ideas(case, engine)) if case.knock_outs else None,
        left_out=tuple(left_out),
        engine=engine,
        versions=versions,
    )


def _has_two_axes(case: Case) -> bool:
    """Whether the aim is a coefficient beside biomass, and there is biomass."""
    aim = case.aim
    if case.network is None or aim is None or aim.is_energy or aim.compound == BIOMASS:
        return False
    return case.coefficient(BIOMASS) is not None


def _plant(case: Case, engine: str) -> PlantSheet:
    from yieldnet.plant.plant import plant_case

    return plant_case(case, engine)


def _ideas(case: Case, engine: str) -> KnockOutResult:
    names = [item.name for item in case.knock_outs]
    return knock_out(replace(case, knock_outs=()), names, engine)
