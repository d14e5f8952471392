"""The overall equation filled in, and what is read off it: recoveries, RQ, carbon dioxide."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.elements import nitrogen_reference
from yieldnet.balance.statements import with_point, yield_column
from yieldnet.model.binding import bind
from yieldnet.model.network import Direction
from yieldnet.optimum.answer import Status
from yieldnet.optimum.problem import Bounds
from yieldnet.optimum.ranges import Range
from yieldnet.prediction.result import CarbonDioxideNeed, EquationTerm, Recovery

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.model.case import Case
    from yieldnet.optimum.proof import Optimiser
    from yieldnet.prediction.coefficients import AllRanges
    from yieldnet.prediction.ladder import Objective
    from yieldnet.prediction.layers import Layers
    from yieldnet.prediction.result import Prediction

__all__ = [
    "CARBON_DIOXIDE",
    "carbon_dioxide_need",
    "equation_terms",
    "one_equation",
    "recoveries_of",
    "respiratory_quotient",
]

CARBON_DIOXIDE = "carbon dioxide"
"""Name of carbon dioxide in the compound library."""
_OXYGEN = "oxygen"
_ZERO = Fraction(0)


def equation_terms(case: Case, ranges: AllRanges) -> tuple[EquationTerm, ...]:
    """Terms of the filled-in overall equation, basis first."""
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


def respiratory_quotient(
    case: Case, ranges: AllRanges, carbon_dioxide: Range | None
) -> Fraction | None:
    """Carbon dioxide given off per oxygen taken up, where both are unique [mol/mol]."""
    one = Fraction(1)
    oxygen = Range(one, one) if case.basis.name == _OXYGEN else ranges.filled.get(_OXYGEN)
    coefficient = case.coefficient(_OXYGEN)
    if oxygen is not None and coefficient is not None:
        oxygen = oxygen if coefficient.side is Direction.CONSUMED else oxygen.turned()
    if oxygen is None or carbon_dioxide is None or not (oxygen.single and carbon_dioxide.single):
        return None
    if oxygen.high is None or oxygen.high <= 0 or carbon_dioxide.low is None:
        return None
    return carbon_dioxide.low / oxygen.high


def recoveries_of(
    case: Case, terms: tuple[EquationTerm, ...], layers: Layers
) -> tuple[Recovery, ...]:
    """Carbon and available electrons found again, in the equation and in the measured products."""
    reference = nitrogen_reference(case)
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


def carbon_dioxide_need(
    layers: Layers,
    point: Mapping[str, Fraction],
    carbon_dioxide: Range | None,
    objective: Objective | None,
    optimiser: Optimiser,
) -> CarbonDioxideNeed | None:
    """Net uptake of carbon dioxide that every best point needs, and the best without it.

    Parameters
    ----------
    layers : Layers
        The problems.
    point : mapping of str to Fraction
        Reconciled point.
    carbon_dioxide : Range or None
        Net carbon dioxide at the aim, given off positive [mol/mol basis].
    objective : Objective or None
        The aim.
    optimiser : Optimiser
        Solves and proves.

    Returns
    -------
    CarbonDioxideNeed or None
        ``None`` if some best point takes none up.
    """
    if objective is None or carbon_dioxide is None:
        return None
    if carbon_dioxide.high is None or carbon_dioxide.high >= 0 or carbon_dioxide.low is None:
        return None
    problem = with_point(layers.final, layers.statements, point)
    high = problem.columns[problem.column(yield_column(CARBON_DIOXIDE))].bounds.high
    if high is not None and high < 0:
        return None
    answer = objective.best(
        optimiser, problem.with_columns({yield_column(CARBON_DIOXIDE): Bounds(_ZERO, high)})
    )
    return CarbonDioxideNeed(
        least=-carbon_dioxide.high,
        most=-carbon_dioxide.low,
        without=answer.value if answer.status is Status.OPTIMAL else None,
    )


def one_equation(
    case: Case, answer: Prediction
) -> tuple[tuple[tuple[str, Fraction], ...] | None, tuple[str, ...]]:
    """One overall equation of an answer that was solved.

    Parameters
    ----------
    case : Case
        The question.
    answer : Prediction
        Its answer, with fluxes where it has a network.

    Returns
    -------
    tuple of (str, Fraction) or None
        Amount of every compound, production positive, basis first: that of least total flux where
        there are fluxes [mol/mol basis]; ``None`` where none follows.
    tuple of str
        Compounds that other points as good have other amounts of.
    """
    several = tuple(item.compound for item in answer.terms if not item.range.single)
    if answer.fluxes is not None and case.network is not None:
        bound, _ = bind(case.network, case.overrides())
        total: dict[str, Fraction] = {}
        for item in answer.fluxes.answers:
            reaction = bound.reaction(item.reaction)
            assert reaction is not None
            for name, amount in reaction.coefficients:
                total[name] = total.get(name, _ZERO) + item.flux * amount
        return tuple((item.name, total.get(item.name, _ZERO)) for item in case.compounds), several
    if several:
        return None, several
    found = []
    for term in answer.terms:
        assert term.range.low is not None
        sign = -1 if term.side is Direction.CONSUMED else 1
        found.append((term.compound, sign * term.range.low))
    return tuple(found), ()
