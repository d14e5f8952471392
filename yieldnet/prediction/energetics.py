"""Heat and Gibbs energy of the predicted overall equation.

In: a case. Out: whether its equation closes, its heat two ways, its Gibbs energy, steps that run
uphill, and third opinions on the biomass yield. The equation is that of the best value; where
several fluxes give it, that of the least total flux.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.elements import nitrogen_reference
from yieldnet.chemistry.formula import FormulaTextError
from yieldnet.chemistry.gibbs import STANDARD_PH, reaction_gibbs
from yieldnet.foundation.findings import Findings, Severity
from yieldnet.model.network import BIOMASS
from yieldnet.prediction.activities import Activities
from yieldnet.prediction.assumptions import KEPT
from yieldnet.prediction.biomass_methods import yield_opinions
from yieldnet.prediction.heat import heat_of, tell_heat
from yieldnet.prediction.overall import one_equation
from yieldnet.prediction.predict import Wanted, balance_case, predict_case
from yieldnet.prediction.result import Outcome
from yieldnet.prediction.step_energies import step_energies

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.chemistry.gibbs import Part, ReactionGibbs
    from yieldnet.foundation.findings import Finding
    from yieldnet.foundation.sourced import Assumption
    from yieldnet.model.case import Case
    from yieldnet.prediction.biomass_methods import YieldOpinion
    from yieldnet.prediction.heat import HeatAnswer
    from yieldnet.prediction.result import Prediction
    from yieldnet.prediction.step_energies import StepEnergy

__all__ = ["CLOSES", "Closure", "Energetics", "energetics_case"]

CLOSES = Fraction(1, 100)
"""How far a recovery may be from one before an equation is said not to close [-].

A heat is known to about this share at best.
"""
_PH_REACH = 1.0
"""How far the pH may be from 7 before an ion without a pKa is doubted [-]."""
_ZERO = Fraction(0)


@dataclass(frozen=True, slots=True, kw_only=True)
class Closure:
    """What comes out of the equation over what goes in.

    Parameters
    ----------
    quantity : {"carbon", "electrons"}
        What is counted.
    ratio : Fraction or None
        Out over in, 1 where it closes [-]; ``None`` where it cannot be counted.
    reason : str
        Why not, where it cannot.
    """

    quantity: str
    ratio: Fraction | None
    reason: str = ""

    @property
    def closes(self) -> bool:
        """Whether it is within 1 % of one."""
        return self.ratio is not None and abs(self.ratio - 1) <= CLOSES


@dataclass(frozen=True, slots=True, kw_only=True)
class Energetics:
    """Heat and Gibbs energy of a case.

    Parameters
    ----------
    case : Case
        The question.
    prediction : Prediction
        Its answer.
    amounts : tuple of (str, Fraction)
        Overall equation, production positive, basis first; empty if there is none [mol/mol basis].
    not_unique : tuple of str
        Coefficients that other best points change.
    closures : tuple of Closure
        Carbon and electrons.
    heat : HeatAnswer or None
        Heat given off; ``None`` where it cannot be told.
    gibbs : ReactionGibbs or None
        Gibbs energy of the overall equation [kJ/mol basis].
    biomass_carbon : Fraction
        Biomass made [C-mol/mol basis].
    steps : tuple of StepEnergy
        Steps of the route that could be judged.
    running : int
        Steps of the route, growth left out [-].
    opinions : tuple of YieldOpinion
        Biomass yield by several ways [C-mol/mol basis].
    findings : tuple of Finding
        What is doubtful.
    assumptions : tuple of Assumption
        What was taken for granted.
    """

    case: Case
    prediction: Prediction
    amounts: tuple[tuple[str, Fraction], ...]
    not_unique: tuple[str, ...]
    closures: tuple[Closure, ...]
    heat: HeatAnswer | None
    gibbs: ReactionGibbs | None
    biomass_carbon: Fraction
    steps: tuple[StepEnergy, ...]
    running: int
    opinions: tuple[YieldOpinion, ...]
    findings: tuple[Finding, ...]
    assumptions: tuple[Assumption, ...]

    @property
    def dissipation_kj_per_cmol(self) -> float | None:
        """Gibbs energy dissipated per C-mol of biomass; ``None`` without biomass [kJ/C-mol]."""
        if self.gibbs is None or self.biomass_carbon <= 0:
            return None
        return -self.gibbs.middle / float(self.biomass_carbon)

    def __repr__(self) -> str:
        heat = "" if self.heat is None else f", {float(self.heat.by_combustion):.4g} kJ/mol of heat"
        return f"Energetics({self.case.title!r}: {self.prediction.outcome}{heat})"


def energetics_case(case: Case, engine: str = "glpk") -> Energetics:
    """Heat and Gibbs energy of the predicted overall equation of a case.

    Parameters
    ----------
    case : Case
        The question; without a network its elements alone must tell every coefficient.
    engine : {"glpk", "optlang"}
        Engine whose bases are proven.

    Returns
    -------
    Energetics
        The answer; what cannot be told is ``None`` with a finding.

    Raises
    ------
    InputError
        If the case must be refused.
    """
    if case.network is None:
        answer = balance_case(case, engine)
    else:
        answer = predict_case(case, engine, Wanted(fluxes=case.aim is not None))
    # Fluxes are asked for by this function and not by the user, who need not hear of them.
    findings = Findings([item for item in answer.findings if item.code != "YN607"])
    amounts = _amounts(case, answer, findings)
    by_name = dict(amounts)
    compounds = {item.name: item for item in case.compounds}
    listed = [(compounds[name], amount) for name, amount in amounts]
    closures = _closures(case, by_name) if amounts else ()
    _tell_closures(closures, case, findings)
    heat, unknown = heat_of(listed) if amounts else (None, ())
    tell_heat(heat, unknown, case, findings)
    activities = Activities(case)
    gibbs, parts = _overall(case, by_name, activities, findings)
    route = step_energies(case, answer, activities)
    findings.extend(route.findings)
    names = tuple(name for name, amount in amounts if amount)
    assumptions = [item for item in answer.assumptions if item.text not in KEPT.values()]
    if gibbs is not None:
        assumptions += activities.assumptions(parts, names)
    assumptions += route.assumptions
    biomass = compounds.get(BIOMASS)
    made = by_name.get(BIOMASS, _ZERO)
    return Energetics(
        case=case,
        prediction=answer,
        amounts=amounts,
        not_unique=tuple(item.compound for item in answer.terms if not item.range.single)
        if amounts
        else (),
        closures=closures,
        heat=heat,
        gibbs=gibbs,
        biomass_carbon=made * biomass.formula["C"] if biomass is not None else _ZERO,
        steps=route.steps,
        running=route.running,
        opinions=yield_opinions(case, by_name, engine) if amounts else (),
        findings=findings.sorted(),
        assumptions=tuple(assumptions),
    )


def _amounts(
    case: Case, answer: Prediction, findings: Findings
) -> tuple[tuple[str, Fraction], ...]:
    """One overall equation that is best, production positive; empty with a finding."""
    if answer.outcome is not Outcome.SOLVED:
        return ()
    found, several = one_equation(case, answer)
    if found is None:
        findings.add(
            "YN870",
            f"the overall equation is not settled: {', '.join(several)} can take many values",
            case.span,
            hint="Measure or fix these"
            + (" or give the case an aim." if case.network is not None else "."),
            severity=Severity.WARNING,
        )
        return ()
    if several:
        findings.add(
            "YN869",
            f"other best points have other {', '.join(several)}",
            case.span,
            hint="Heat and Gibbs energy are those of the point of least total flux; measure or"
            " demand these to settle them.",
            severity=Severity.NOTE,
        )
    return found


def _closures(case: Case, amounts: Mapping[str, Fraction]) -> tuple[Closure, ...]:
    """Carbon and electrons of what comes out over what goes in."""
    found = []
    reference = nitrogen_reference(case)
    for quantity in ("carbon", "electrons"):
        inlet = outlet = _ZERO
        reason = ""
        for item in case.compounds:
            try:
                content = (
                    item.formula["C"]
                    if quantity == "carbon"
                    else item.formula.degree_of_reduction(reference)
                )
            except FormulaTextError as error:
                reason = error.reason
                break
            # Oxygen that is taken up carries electrons off: a negative content turns the side.
            flow = -amounts[item.name] * content
            if flow > 0:
                inlet += flow
            else:
                outlet -= flow
        if not reason and not inlet:
            reason = f"no {quantity} go in" if quantity == "electrons" else "no carbon goes in"
        ratio = None if reason else outlet / inlet
        found.append(Closure(quantity=quantity, ratio=ratio, reason=reason))
    return tuple(found)


def _tell_closures(closures: tuple[Closure, ...], case: Case, findings: Findings) -> None:
    for item in closures:
        if item.ratio is not None and not item.closes:
            findings.add(
                "YN862",
                f"the overall equation does not close: {float(100 * item.ratio):.1f} % of its"
                f" {item.quantity} come out",
                case.span,
                left="expected 100 % within 1 %",
                hint="A heat would hold the error too: write the growth equation in more digits.",
                severity=Severity.WARNING,
            )


def _overall(
    case: Case, amounts: Mapping[str, Fraction], activities: Activities, findings: Findings
) -> tuple[ReactionGibbs | None, tuple[Part, ...]]:
    """Gibbs energy of the overall equation; ``None`` with a finding where a value is missing."""
    found = [
        (item.name, activities.outside(item, amounts[item.name]))
        for item in case.compounds
        if amounts.get(item.name)
    ]
    if not found:
        return None, ()
    unknown = [name for name, part in found if part is None]
    if unknown:
        findings.add(
            "YN865",
            f"the Gibbs energy cannot be told: none is known for {', '.join(unknown)}",
            case.span,
            hint="It is not guessed. 'yieldnet compounds NAME' shows what is known.",
            severity=Severity.WARNING,
        )
        return None, ()
    parts = tuple(part for _, part in found if part is not None)
    gibbs = reaction_gibbs(parts, activities.ph, activities.kelvin)
    _tell_gibbs(gibbs, parts, activities, case, findings)
    return gibbs, parts


def _tell_gibbs(
    gibbs: ReactionGibbs,
    parts: tuple[Part, ...],
    activities: Activities,
    case: Case,
    findings: Findings,
) -> None:
    if gibbs.middle > 0:
        always = "at every concentration inside the bounds"
        findings.add(
            "YN866",
            "the overall equation runs uphill "
            + (always if gibbs.low > 0 else "at the middle of the bounds"),
            case.span,
            left=f"Gibbs energy {gibbs.low:.4g} to {gibbs.high:.4g} kJ/mol basis"
            if gibbs.low < gibbs.high
            else f"Gibbs energy {gibbs.middle:.4g} kJ/mol basis",
            hint="No cell can do this without another source of energy, such as light; check the"
            " concentrations and pressures.",
            severity=Severity.WARNING,
        )
    if abs(activities.ph - STANDARD_PH) > _PH_REACH:
        doubtful = [
            item.species.compound
            for item in parts
            if item.species.protons
            and item.species.state == "dissolved"
            and not item.species.acid_constants
        ]
        if doubtful:
            findings.add(
                "YN871",
                f"at pH {activities.ph:g} still taken as the ion of pH 7: {', '.join(doubtful)}",
                case.ph.span if case.ph else case.span,
                hint="Their pKa are not in the table; near them the Gibbs energy is off.",
                severity=Severity.NOTE,
            )
    if gibbs.without_enthalpy:
        findings.add(
            "YN872",
            f"Gibbs energy at 25 degC instead of {activities.kelvin - 273.15:.1f}: no enthalpy"
            f" is known for {', '.join(gibbs.without_enthalpy)}",
            case.temperature.span if case.temperature else case.span,
            hint="Between 25 and 40 degC most reactions change by a few percent.",
            severity=Severity.NOTE,
        )
