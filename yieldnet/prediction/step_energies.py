"""Gibbs energy of the steps of a route: which cannot run at any concentration inside the bounds.

In: a prediction with fluxes. Out: each running step whose compounds all have a value. The inside of
the cell is taken at pH 7 and the temperature of the case. Growth is no step. Left out: what couples
steps through shared concentrations, and the voltage over the membrane.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.gibbs import STANDARD_PH, reaction_gibbs
from yieldnet.foundation.exact import decimal_text
from yieldnet.foundation.findings import Findings, Severity
from yieldnet.foundation.sourced import Assumption
from yieldnet.model.binding import bind
from yieldnet.model.network import GROWTH
from yieldnet.prediction.activities import INSIDE_DISSOLVED, INSIDE_PRESSURE

if TYPE_CHECKING:
    from yieldnet.chemistry.gibbs import Part, ReactionGibbs
    from yieldnet.foundation.findings import Finding
    from yieldnet.model.binding import BoundReaction
    from yieldnet.model.case import Case
    from yieldnet.prediction.activities import Activities
    from yieldnet.prediction.result import Prediction

__all__ = ["StepEnergies", "StepEnergy", "step_energies"]


@dataclass(frozen=True, slots=True, kw_only=True)
class StepEnergy:
    """Gibbs energy of one step of the route, in the direction in which it runs.

    Parameters
    ----------
    reaction : str
        Its name.
    flux : Fraction
        At the aim, backwards negative [mol/mol basis].
    gibbs : ReactionGibbs
        Per mol of the reaction as it runs [kJ/mol].
    """

    reaction: str
    flux: Fraction
    gibbs: ReactionGibbs

    @property
    def uphill(self) -> bool:
        """Whether it cannot run at any concentration inside the bounds."""
        return self.gibbs.low > 0


@dataclass(frozen=True, slots=True, kw_only=True)
class StepEnergies:
    """Steps of a route with what was said of them.

    Parameters
    ----------
    steps : tuple of StepEnergy
        Those that could be judged, in the order of the network.
    running : int
        Steps of the route, growth left out [-].
    findings : tuple of Finding
        Steps that run uphill.
    assumptions : tuple of Assumption
        Bounds that were used.
    """

    steps: tuple[StepEnergy, ...]
    running: int
    findings: tuple[Finding, ...] = ()
    assumptions: tuple[Assumption, ...] = ()


def step_energies(case: Case, answer: Prediction, activities: Activities) -> StepEnergies:
    """Gibbs energies of the steps of the route at the aim.

    Parameters
    ----------
    case : Case
        The question.
    answer : Prediction
        Its answer; without fluxes there is no route.
    activities : Activities
        Species and activities.

    Returns
    -------
    StepEnergies
        Steps of which every compound has a value [kJ/mol].
    """
    findings = Findings()
    if answer.fluxes is None or case.network is None:
        return StepEnergies(steps=(), running=0)
    bound, _ = bind(case.network, case.overrides())
    steps = []
    used: list[Part] = []
    running = 0
    for item in answer.fluxes.answers:
        reaction = bound.reaction(item.reaction)
        if not item.flux or reaction is None or reaction.name == GROWTH:
            continue
        running += 1
        parts = _parts(case, reaction, item.flux, activities)
        if parts is None:
            continue
        used += parts
        gibbs = reaction_gibbs(parts, STANDARD_PH, activities.kelvin)
        step = StepEnergy(reaction=item.reaction, flux=item.flux, gibbs=gibbs)
        steps.append(step)
        if step.uphill:
            findings.add(
                "YN867",
                f"{item.reaction!r} runs uphill as the best value uses it, at every concentration"
                " inside the bounds",
                case.aim.span if case.aim is not None else case.span,
                left=f"Gibbs energy at least {gibbs.low:.3g} kJ/mol",
                right=f"written at {reaction.span}" if reaction.span is not None else "",
                hint="Check its direction and what drives it; values are good to about 5 kJ.",
                severity=Severity.WARNING,
            )
    return StepEnergies(
        steps=tuple(steps),
        running=running,
        findings=tuple(findings),
        assumptions=_taken_for_granted(used) if steps else (),
    )


def _parts(
    case: Case, reaction: BoundReaction, flux: Fraction, activities: Activities
) -> list[Part] | None:
    """Species of a step as it runs; ``None`` if one of them has no value."""
    assert case.network is not None
    sign = 1 if flux > 0 else -1
    found = []
    for name, amount in reaction.coefficients:
        part = activities.inside(name, case.network.compound(name), sign * amount)
        if part is None:
            return None
        found.append(part)
    return found


def _taken_for_granted(used: list[Part]) -> tuple[Assumption, ...]:
    """What the energies of single steps take for granted."""
    low, high = (decimal_text(end * 1000) for end in INSIDE_DISSOLVED)
    least, most = (decimal_text(end) for end in INSIDE_PRESSURE)
    found = [
        Assumption(
            text=f"inside the cell, where not given: {low} to {high} mmol/L, gases {least} to"
            f" {most} bar, pH 7; at 25 degC where an enthalpy is missing",
            source="usual in thermodynamic studies of pathways (from memory)",
        )
    ]
    alike: dict[str, list[str]] = {}
    for item in {part.species.compound: part.species for part in used}.values():
        if item.state == "ratio" and item.low is not None and item.high is not None:
            ends = f"{decimal_text(item.low)} to {decimal_text(item.high)}"
            alike.setdefault(f"{ends} ({item.gibbs.note})", []).append(item.compound)
    found += [
        Assumption(text=f"{', '.join(names)}: {words}", source="bounds from memory")
        for words, names in alike.items()
    ]
    return tuple(found)
