"""The main job: from a case and its network to predicted yield coefficients."""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.audit.audit import refusing_rules
from yieldnet.balance.missing import missing_compounds
from yieldnet.balance.reconciled import reconciled_point
from yieldnet.balance.statements import statements_of, with_bands, with_point, yield_column
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Findings
from yieldnet.model.binding import bind
from yieldnet.model.network import Direction
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.problem import Bounds
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.optimum.ranges import Range
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
from yieldnet.prediction.fluxes import find_fluxes
from yieldnet.prediction.ladder import (
    climb_down,
    first_infeasible,
    objective_of,
    runaway_words,
)
from yieldnet.prediction.layers import build_layers
from yieldnet.prediction.limits import find_limits
from yieldnet.prediction.relaxations import relax
from yieldnet.prediction.result import (
    AimValue,
    CarbonDioxideNeed,
    EquationTerm,
    Outcome,
    Prediction,
    Recovery,
)
from yieldnet.prediction.shares import find_shares, ladder_in_order

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.case import Case
    from yieldnet.optimum.proof import Answer
    from yieldnet.prediction.conflict import Conflict
    from yieldnet.prediction.ladder import LadderRung, Objective
    from yieldnet.prediction.layers import Layers

__all__ = ["Wanted", "balance_case", "predict_case"]

_CARBON_DIOXIDE = "carbon dioxide"
_OXYGEN = "oxygen"
_ZERO = Fraction(0)


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
    """

    fluxes: bool = False
    proof: bool = False
    order: tuple[str, ...] = ()


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
    findings = Findings(list(case.findings))
    if case.network is None:
        findings.add(
            "YN512",
            "the case names no network",
            case.span,
            hint="Add 'network: ' with a file or a shipped name, or run 'yieldnet balance'.",
        )
        raise InputError(findings)
    optimiser = Optimiser(engine_named(engine))
    bound, doubts = refusing_rules(
        case.network, dict(case.parameters), optimiser, dict(case.parameter_spans)
    )
    findings.extend(doubts)
    findings.extend(checks.growth_conditions(case))
    residual = bound.growth_residual()
    return _answer(case, bound, residual, optimiser, findings, wanted or Wanted())


def balance_case(case: Case, engine: str = "glpk") -> Prediction:
    """Yield coefficients of a case by elements alone.

    Parameters
    ----------
    case : Case
        The question; its network, if any, is left out.
    engine : {"glpk", "optlang"}
        Engine whose bases are proven.

    Returns
    -------
    Prediction
        The answer, without network ranges.

    Raises
    ------
    InputError
        If the equation lacks a compound without which it cannot close.
    """
    optimiser = Optimiser(engine_named(engine))
    residual: Mapping[str, Fraction] = {}
    if case.network is not None:
        # The element layer charges the residual of growth, so that both verbs say the same.
        residual = bind(case.network, dict(case.parameters))[0].growth_residual()
    return _answer(case, None, residual, optimiser, Findings(list(case.findings)), Wanted())


def _answer(
    case: Case,
    bound: BoundNetwork | None,
    residual: Mapping[str, Fraction],
    optimiser: Optimiser,
    findings: Findings,
    wanted: Wanted,
) -> Prediction:
    findings.extend(missing_compounds(case, optimiser, residual))
    if findings.refused:
        raise InputError(findings.sorted())
    statements = statements_of(case)
    layers = build_layers(case, statements, bound, residual)
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
    objective = objective_of(case) if bound or not (case.aim and case.aim.is_energy) else None
    point = reconciled_point(optimiser, layers.final, case, statements)
    ladder: tuple[LadderRung, ...] = ()
    best: Answer | None = None
    if objective is not None:
        ladder, best = climb_down(optimiser, layers, objective, point)
    equations = layer_equations(layers)
    answer = Prediction(
        case=case,
        outcome=Outcome.INFEASIBLE,
        aim=_aim_without_value(case),
        freedom=freedom_of(optimiser, layers, equations, point),
        ladder=ladder,
        findings=(),
        assumptions=assumptions_of(case, statements, bound),
    )
    if point is None:
        conflict = find_conflict(optimiser, layers)
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
    ranges = find_ranges(optimiser, layers, point, best)
    findings.extend(checks.standing_still(case, ranges.filled))
    aim_percent = _aim_percent(layers, ladder)
    coefficients = answers(layers, ranges, equations, point, aim_percent)
    terms = _terms(case, ranges)
    carbon_dioxide = ranges.filled.get(_CARBON_DIOXIDE)
    coefficient = case.coefficient(_CARBON_DIOXIDE)
    if carbon_dioxide and coefficient and coefficient.side is Direction.CONSUMED:
        carbon_dioxide = carbon_dioxide.turned()
    if best is not None and objective is not None and bound is not None:
        answer = _why(answer, layers, objective, best, point, optimiser, wanted)
    return replace(
        answer,
        outcome=outcome,
        aim=_aim_value(case, layers, ranges, best, objective, optimiser),
        coefficients=coefficients,
        terms=terms,
        recoveries=_recoveries(case, terms, layers),
        respiratory_quotient=_respiratory_quotient(case, ranges, carbon_dioxide),
        net_carbon_dioxide=carbon_dioxide,
        movements=movements(optimiser, layers, ranges, point, best),
        carbon_dioxide_need=_carbon_dioxide_need(
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
) -> Prediction:
    """What holds the best value back, and what was asked for besides."""
    order: tuple[tuple[str, Fraction | None], ...] | str = ()
    if wanted.order:
        order = ladder_in_order(optimiser, layers, objective, point, wanted.order)
    return replace(
        answer,
        relaxations=relax(optimiser, layers, objective, best),
        limits=find_limits(optimiser, layers, best),
        shares=find_shares(optimiser, layers, objective, point),
        other_order=() if isinstance(order, str) else order,
        fluxes=find_fluxes(optimiser, layers, best) if wanted.fluxes else None,
        certificate=certificate(optimiser, layers, best) if wanted.proof else None,
    )


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
    return None if last is None or not first else last / first


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


def _terms(case: Case, ranges: AllRanges) -> tuple[EquationTerm, ...]:
    one = Fraction(1)
    found = [EquationTerm(compound=case.basis.name, side=Direction.CONSUMED, range=Range(one, one))]
    for item in case.coefficients:
        value = ranges.filled[item.name]
        side = item.side
        if side is Direction.EITHER and value.high is not None and value.high <= 0:
            side, value = Direction.CONSUMED, value.turned()
        elif side is Direction.EITHER and value.low is not None and value.low >= 0:
            side = Direction.PRODUCED
        found.append(EquationTerm(compound=item.name, side=side, range=value))
    return tuple(found)


def _respiratory_quotient(
    case: Case, ranges: AllRanges, carbon_dioxide: Range | None
) -> Fraction | None:
    one = Fraction(1)
    oxygen = Range(one, one) if case.basis.name == _OXYGEN else ranges.filled.get(_OXYGEN)
    if oxygen is None or carbon_dioxide is None or not (oxygen.single and carbon_dioxide.single):
        return None
    if not oxygen.high or carbon_dioxide.low is None:
        return None
    return carbon_dioxide.low / oxygen.high


def _recoveries(
    case: Case, terms: tuple[EquationTerm, ...], layers: Layers
) -> tuple[Recovery, ...]:
    """Carbon and available electrons found again, in the equation and in the measured products."""
    reference = _nitrogen_reference(case)
    found = []
    for quantity in ("carbon", "electrons"):
        content: dict[str, Fraction] = {}
        for item in case.compounds:
            if quantity == "carbon":
                content[item.name] = item.formula["C"]
            elif any(s not in ("C", "H", "O", "N", "S", "P") for s, _ in item.formula.elements):
                break
            else:
                content[item.name] = item.formula.degree_of_reduction(reference)
        if len(content) < len(case.compounds) or not any(content.values()):
            continue
        found.append(_recovery(quantity, case, terms, layers, content))
    return tuple(found)


def _nitrogen_reference(case: Case) -> str:
    """Nitrogen source whose degree of reduction counts as zero: nitrate if only that is fed."""
    fed = {item.name for item in case.coefficients if item.side is not Direction.PRODUCED}
    if "nitrate" in fed and not fed & {"ammonia", "urea"}:
        return "nitrate"
    if "nitrogen" in fed and not fed & {"ammonia", "urea", "nitrate"}:
        return "nitrogen"
    return "ammonia"


def _recovery(
    quantity: str,
    case: Case,
    terms: tuple[EquationTerm, ...],
    layers: Layers,
    content: Mapping[str, Fraction],
) -> Recovery:
    """Share of what goes in that is found in what comes out.

    A compound that is taken up with a negative content (oxygen, -4 electrons) counts as an outlet:
    it carries off what is given to it.
    """
    consumed = outlet = _ZERO
    shares: list[tuple[str, Fraction]] = []
    unique = True
    for term in terms:
        if not term.range.single or term.range.low is None:
            unique = unique and not content[term.compound]
            continue
        amount = term.range.low * content[term.compound]
        flow = amount if term.side is Direction.CONSUMED else -amount
        if flow > 0:
            consumed += flow
        elif flow < 0:
            outlet -= flow
            shares.append((term.compound, -flow))
    measured = _ZERO
    any_measured = False
    for item in case.coefficients:
        values = [m for m in layers.statements.of(item.name) if m in case.measured]
        if values and item.side is Direction.PRODUCED and content[item.name] > 0:
            any_measured = True
            measured += values[0].value * content[item.name]
    return Recovery(
        quantity=quantity,
        measured=measured / content[case.basis.name]
        if any_measured and content[case.basis.name] > 0
        else None,
        total=outlet / consumed if unique and consumed else None,
        shares=tuple((name, share / consumed) for name, share in shares)
        if unique and consumed
        else (),
    )


def _carbon_dioxide_need(
    layers: Layers,
    point: Mapping[str, Fraction],
    carbon_dioxide: Range | None,
    objective: Objective | None,
    optimiser: Optimiser,
) -> CarbonDioxideNeed | None:
    """Net uptake of carbon dioxide that every best point needs, and the best without it."""
    if objective is None or carbon_dioxide is None:
        return None
    if carbon_dioxide.high is None or carbon_dioxide.high >= 0 or carbon_dioxide.low is None:
        return None
    problem = with_point(layers.final, layers.statements, point)
    high = problem.columns[problem.column(yield_column(_CARBON_DIOXIDE))].bounds.high
    if high is not None and high < 0:
        return None
    answer = objective.best(
        optimiser, problem.with_columns({yield_column(_CARBON_DIOXIDE): Bounds(_ZERO, high)})
    )
    return CarbonDioxideNeed(
        least=-carbon_dioxide.high,
        most=-carbon_dioxide.low,
        without=answer.value if answer.status is Status.OPTIMAL else None,
    )
