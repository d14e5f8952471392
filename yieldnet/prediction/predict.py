"""The main job: from a case and its network to predicted yield coefficients."""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import with_bands
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Finding, Findings, Severity
from yieldnet.model.case import EnergySurplus
from yieldnet.model.network import BIOMASS, Direction
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.prediction import checks
from yieldnet.prediction.assumptions import assumptions_of
from yieldnet.prediction.certificate import certificate
from yieldnet.prediction.coefficients import (
    AllRanges,
    answers,
    find_ranges,
    freedom_of,
    layer_equations,
    movements,
)
from yieldnet.prediction.conflict import find_conflict
from yieldnet.prediction.data_tests import (
    DEFAULT_LEVEL,
    failed_findings,
    judge_layers,
    stated_assumptions,
)
from yieldnet.prediction.fluxes import find_fluxes
from yieldnet.prediction.growth_energy import atp_yield, doubtful_atp_yield
from yieldnet.prediction.ladder import (
    climb_down,
    first_infeasible,
    runaway_words,
)
from yieldnet.prediction.limits import find_limits
from yieldnet.prediction.overall import (
    CARBON_DIOXIDE,
    carbon_dioxide_need,
    equation_terms,
    recoveries_of,
    respiratory_quotient,
)
from yieldnet.prediction.prepare import prepare
from yieldnet.prediction.relaxations import relax
from yieldnet.prediction.result import AimValue, Outcome, Prediction
from yieldnet.prediction.shares import find_shares, ladder_in_order

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.model.case import Case
    from yieldnet.optimum.proof import Answer
    from yieldnet.prediction.conflict import Conflict
    from yieldnet.prediction.ladder import LadderRung, Objective
    from yieldnet.prediction.layers import Layers
    from yieldnet.prediction.prepare import Prepared

__all__ = ["Wanted", "balance_case", "predict_case"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Wanted:
    """What else a prediction should hold.

    Parameters
    ----------
    fluxes : bool
        Fluxes at the aim.
    proof : bool
        The proof on paper.
    order : tuple of str
        Another order of the rungs below ``elements``; empty for none.
    level : float
        Probability with which the test of the measured values passes correct ones [-].

    Raises
    ------
    ValueError
        If the level is no probability between 0 and 1.
    """

    fluxes: bool = False
    proof: bool = False
    order: tuple[str, ...] = ()
    level: float = DEFAULT_LEVEL

    def __post_init__(self) -> None:
        if not 0 < self.level < 1:
            raise ValueError(f"a level of {self.level} is no probability between 0 and 1")


def predict_case(case: Case, engine: str = "glpk", wanted: Wanted | None = None) -> Prediction:
    """Yield coefficients of a case by elements and by network.

    Parameters
    ----------
    case : Case
        The question, with a network.
    engine : {"glpk", "optlang"}
        Engine whose bases are proven.
    wanted : Wanted, optional
        What else the answer should hold.

    Returns
    -------
    Prediction
        The answer; infeasible and unbounded are answers too.

    Raises
    ------
    InputError
        If the case has no network, the network must be refused, or the order of the rungs is not
        one of this case.
    """
    return _answer(prepare(case, Optimiser(engine_named(engine))), wanted or Wanted())


def balance_case(case: Case, engine: str = "glpk", level: float = DEFAULT_LEVEL) -> Prediction:
    """Yield coefficients of a case by elements alone.

    Parameters
    ----------
    case : Case
        The question; its network, if any, is left out.
    engine : {"glpk", "optlang"}
        Engine whose bases are proven.
    level : float
        Probability with which the test of the measured values passes correct ones [-].

    Returns
    -------
    Prediction
        The answer, without network ranges.

    Raises
    ------
    InputError
        If the equation lacks a compound without which it cannot close.
    """
    ready = prepare(case, Optimiser(engine_named(engine)), network=False)
    return _answer(ready, Wanted(level=level))


def _answer(ready: Prepared, wanted: Wanted) -> Prediction:
    case, layers, point, optimiser = ready.case, ready.layers, ready.point, ready.optimiser
    bound = layers.bound
    findings = Findings(list(ready.findings))
    if wanted.order and sorted(wanted.order) != sorted(layers.rungs[1:]):
        findings.add(
            "YN514",
            "the order names other rungs than the case has",
            case.span,
            left=f"asked {', '.join(wanted.order)}",
            right=f"has {', '.join(layers.rungs[1:])}",
            hint="Name each of these once, in any order.",
        )
        raise InputError(findings.sorted())
    findings.extend(checks.idle_switches(optimiser, layers))
    objective = ready.objective
    ladder: tuple[LadderRung, ...] = ()
    best: Answer | None = None
    if objective is not None:
        ladder, best = climb_down(optimiser, layers, objective, point)
    equations = layer_equations(layers)
    tested = judge_layers(layers, equations, wanted.level)
    findings.extend(failed_findings(tested, case))
    answer = Prediction(
        case=case,
        outcome=Outcome.INFEASIBLE,
        aim=_aim_without_value(case),
        freedom=freedom_of(optimiser, layers, equations, point),
        ladder=ladder,
        findings=(),
        assumptions=(
            *stated_assumptions(tested),
            *assumptions_of(case, layers.statements, bound),
        ),
        tests=tuple(item.test for item in tested if item.test is not None),
    )
    if point is None:
        conflict = find_conflict(optimiser, layers)
        if wanted.fluxes or wanted.proof or wanted.order:
            findings.extend(_asked_in_vain(case, wanted))
        findings.extend(_why_infeasible(layers, optimiser, conflict))
        return replace(answer, findings=findings.sorted(), conflict=conflict)
    if best is not None and best.status is Status.UNBOUNDED:
        findings.add(
            "YN602",
            f"the aim '{case.aim}' has no best value: {runaway_words(best)}",
            case.aim.span if case.aim else None,
            hint="Bound one of these: measure it, demand a limit, or take it off the equation.",
        )
        best = None
        outcome = Outcome.UNBOUNDED
    else:
        outcome = Outcome.SOLVED
    findings.extend(checks.moved_values(optimiser, layers, point))
    findings.extend(checks.beyond_the_best(layers, best.value if best is not None else None))
    ranges = find_ranges(optimiser, layers, point, best)
    findings.extend(checks.standing_still(case, ranges.filled))
    aim_percent = _aim_percent(layers, ladder)
    coefficients = answers(layers, ranges, equations, point, aim_percent)
    terms = equation_terms(case, ranges)
    carbon_dioxide = ranges.filled.get(CARBON_DIOXIDE)
    coefficient = case.coefficient(CARBON_DIOXIDE)
    if carbon_dioxide and coefficient and coefficient.side is Direction.CONSUMED:
        carbon_dioxide = carbon_dioxide.turned()
    y_atp = atp_yield(case, bound, ranges.filled.get(BIOMASS))
    findings.extend(doubtful_atp_yield(y_atp, case.span))
    if best is None and (wanted.fluxes or wanted.proof or wanted.order):
        findings.extend(_asked_in_vain(case, wanted))
    if best is not None and objective is not None and bound is not None:
        answer = _why(answer, layers, objective, best, point, optimiser, wanted, findings)
    return replace(
        answer,
        outcome=outcome,
        aim=_aim_value(case, layers, ranges, best, objective, optimiser),
        coefficients=coefficients,
        terms=terms,
        recoveries=recoveries_of(case, terms, layers),
        respiratory_quotient=respiratory_quotient(case, ranges, carbon_dioxide),
        net_carbon_dioxide=carbon_dioxide,
        y_atp=y_atp,
        movements=movements(optimiser, layers, ranges, point, best),
        carbon_dioxide_need=carbon_dioxide_need(
            layers, point, carbon_dioxide, objective if best else None, optimiser
        ),
        findings=findings.sorted(),
    )


def _why(
    answer: Prediction,
    layers: Layers,
    objective: Objective,
    best: Answer,
    point: Mapping[str, Fraction],
    optimiser: Optimiser,
    wanted: Wanted,
    findings: Findings,
) -> Prediction:
    """What holds the best value back, and what was asked for besides."""
    order: tuple[tuple[str, Fraction | None], ...] | str = ()
    if wanted.order:
        order = ladder_in_order(optimiser, layers, objective, point, wanted.order)
        if isinstance(order, str):
            doubt = Finding(
                code="YN607",
                message=f"another order of the rungs cannot be shown: {order}",
                where=answer.case.span,
                severity=Severity.WARNING,
            )
            findings.extend([doubt])
    return replace(
        answer,
        relaxations=relax(optimiser, layers, objective, best),
        limits=find_limits(optimiser, layers, best),
        shares=find_shares(optimiser, layers, objective, point),
        other_order=() if isinstance(order, str) else order,
        fluxes=find_fluxes(optimiser, layers, best) if wanted.fluxes else None,
        certificate=certificate(optimiser, layers, best) if wanted.proof else None,
    )


def _asked_in_vain(case: Case, wanted: Wanted) -> Findings:
    """Say that what was asked for needs a best value, and there is none."""
    findings = Findings()
    asked = [
        name
        for name, given in (
            ("fluxes", wanted.fluxes),
            ("proof", wanted.proof),
            ("order", bool(wanted.order)),
        )
        if given
    ]
    findings.add(
        "YN607",
        f"{' and '.join(asked)} asked for, and there is no best value to show them at",
        case.span,
        hint="Give the case an aim that has a best value.",
        severity=Severity.WARNING,
    )
    return findings


def _aim_without_value(case: Case) -> AimValue | None:
    aim = case.aim
    if aim is None:
        return None
    return AimValue(
        direction=str(aim.direction), compound=aim.compound, value=None, within_bands=None
    )


def _why_infeasible(layers: Layers, optimiser: Optimiser, conflict: Conflict) -> Findings:
    findings = Findings()
    rung = first_infeasible(optimiser, layers) or layers.rungs[-1]
    words = {
        "elements": "the elements cannot close with the sides and coefficients as written",
        "measured": "the measured values cannot all lie within two standard deviations",
        "demands": "the demands cannot be met",
        "pathways": "the reactions that are left cannot make this equation",
        "redox": "the redox carriers cannot be balanced",
        "energy": "more ATP is needed than can be made",
        "maintenance": "maintenance cannot be paid",
    }
    if layers.case.energy_surplus is EnergySurplus.NONE:
        # Then too much is as wrong as too little.
        words["energy"] = words["maintenance"] = "the ATP made cannot equal the ATP used"
    findings.add(
        "YN601",
        f"infeasible from the rung '{rung}' on: {words[rung]}",
        layers.case.span,
        hint="Give up or correct one statement of the conflict."
        if conflict.members
        else "The network itself cannot do it: add what it lacks.",
    )
    return findings


def _aim_percent(layers: Layers, ladder: tuple[LadderRung, ...]) -> Fraction | None:
    values = {item.rung: item.value for item in ladder}
    if layers.network is None or not ladder:
        return None
    last, first = values[layers.rungs[-1]], values[layers.last_over_the_cell]
    # Beyond zero a quotient says nothing: what is taken up is no share of what is given off.
    return None if last is None or last < 0 or not first or first < 0 else last / first


def _aim_value(
    case: Case,
    layers: Layers,
    ranges: AllRanges,
    best: Answer | None,
    objective: Objective | None,
    optimiser: Optimiser,
) -> AimValue | None:
    if case.aim is None:
        return None
    value = within = None
    if best is not None and objective is not None:
        value = best.value
        over_bands = (ranges.network or ranges.elements).get(case.aim.compound)
        if over_bands is not None:
            within = over_bands.high if objective.maximise else over_bands.low
        else:
            banded = objective.best(optimiser, with_bands(layers.final, layers.statements))
            within = banded.value if banded.status is Status.OPTIMAL else None
    return AimValue(
        direction=str(case.aim.direction),
        compound=case.aim.compound,
        value=value,
        within_bands=within,
    )
