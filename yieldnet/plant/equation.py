"""The overall equation of a plant: of production, and of growth before it.

In: a case with its prediction. Out: one exact equation, of which everything else in the plant is a
multiple. Where several points are equally good it is that of least total flux, and a note says so.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Findings, Severity
from yieldnet.foundation.sourced import Assumption
from yieldnet.model.case import Aim, AimDirection, EnergySurplus
from yieldnet.model.network import BIOMASS
from yieldnet.plant.sheet import Input
from yieldnet.prediction.overall import one_equation
from yieldnet.prediction.result import Outcome

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.model.case import Case
    from yieldnet.model.plant import Plant
    from yieldnet.prediction.result import Prediction

__all__ = [
    "GROWTH_ASSUMPTIONS",
    "GrowthShare",
    "growth_case",
    "growth_share",
    "product_mass",
    "settled_equation",
    "together",
]

_ZERO = Fraction(0)
_GRAMS = 1000
# Fluxes are asked for by the plant and not by the user, who need not hear of them.
_ASKED_IN_VAIN = "YN607"
Amounts = tuple[tuple[str, Fraction], ...]


def product_mass(case: Case, plant: Plant) -> Fraction:
    """Molar mass of the product as it is sold: of biomass with its ash [g/mol]."""
    mass = case.compound(plant.product).weight.molar_mass
    assert mass is not None
    return mass


def settled_equation(case: Case, answer: Prediction, findings: Findings) -> Amounts:
    """One overall equation of an answer, production positive, basis first.

    Parameters
    ----------
    case : Case
        The question.
    answer : Prediction
        Its answer, with fluxes where it has a network.
    findings : Findings
        Receives what is doubtful.

    Returns
    -------
    tuple of (str, Fraction)
        Amount of every compound of the case [mol/mol basis].

    Raises
    ------
    InputError
        If there is no answer, or no one equation follows from it.
    """
    if answer.outcome is not Outcome.SOLVED:
        findings.extend(item for item in answer.findings if item.code != _ASKED_IN_VAIN)
        findings.add(
            "YN913",
            f"the case is {answer.outcome}, so a plant has no equation",
            case.span,
            hint="Run 'yieldnet predict' on it: the reason is named there.",
        )
        raise InputError(findings.sorted())
    found, several = one_equation(case, answer)
    if found is None:
        findings.extend(item for item in answer.findings if item.code != _ASKED_IN_VAIN)
        findings.add(
            "YN913",
            f"the overall equation is not settled: {', '.join(several)} can take many values",
            case.span,
            hint="Measure or fix these"
            + (", or give the case an aim." if case.network is not None else "."),
        )
        raise InputError(findings.sorted())
    if several:
        findings.add(
            "YN869",
            f"other best points have other {', '.join(several)}",
            case.span,
            hint="The plant is that of the point of least total flux; measure or demand these to"
            " settle them.",
            severity=Severity.NOTE,
        )
    return found


def growth_case(case: Case) -> Case:
    """The case of the growth phase: most biomass, without what was said of production.

    Parameters
    ----------
    case : Case
        Case of production, with a network.

    Returns
    -------
    Case
        Same network, strain, knock-outs, parameters and uptake; no measured values, demands,
        written coefficients or growth rate.
    """
    return replace(
        case,
        title=f"{case.title}, growth phase",
        aim=Aim(direction=AimDirection.MOST, compound=BIOMASS, span=case.span),
        coefficients=tuple(replace(item, written=None) for item in case.coefficients),
        growth_rate=None,
        measured=(),
        correlations=(),
        demands=(),
        energy_surplus=EnergySurplus.LOST,
        plant=None,
        findings=(),
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class GrowthShare:
    """How growth and production share the substrate.

    Parameters
    ----------
    cells : Fraction
        Dry weight at the end of growth [kg/m3].
    cells_rule : str
        Where it comes from, in words.
    cells_inputs : tuple of Input
        What it is made from; empty if it is stated.
    growth, production : Fraction
        Substrate of each phase [mol/m3].
    """

    cells: Fraction
    cells_rule: str
    cells_inputs: tuple[Input, ...]
    growth: Fraction
    production: Fraction

    @property
    def share(self) -> Fraction:
        """Substrate of growth over all substrate [mol/mol]."""
        return self.growth / (self.growth + self.production)


def growth_share(
    case: Case,
    plant: Plant,
    production: Mapping[str, Fraction],
    growth: Mapping[str, Fraction],
    productivity: Fraction | None,
    findings: Findings,
) -> GrowthShare:
    """Substrate of growth and of production for one m3 of broth.

    Parameters
    ----------
    case : Case
        The case.
    plant : Plant
        With phases and a titre.
    production, growth : mapping of str to Fraction
        The two equations, production positive [mol/mol basis].
    productivity : Fraction or None
        Of the production phase [kg/m3/h].
    findings : Findings
        Receives why it cannot be.

    Returns
    -------
    GrowthShare
        Substrate of both [mol/m3].

    Raises
    ------
    InputError
        If growth makes no biomass, or leaves no substrate for production.

    Notes
    -----
    All cells at the end of growth were grown by the equation of growth, in the vessel or in the
    seed vessels: what the inoculum brings is made of the same substrate.
    """
    phases = plant.phases
    assert phases is not None
    assert plant.titre is not None
    mass = product_mass(case, plant)
    grams = growth[BIOMASS] * (case.compound(BIOMASS).weight.molar_mass or _ZERO)
    if grams <= 0:
        findings.add(
            "YN916",
            "the growth phase makes no biomass",
            phases.span,
            hint="Let growth run in the network, and list what it needs in the equation.",
        )
        raise InputError(findings.sorted())
    if phases.cells is not None:
        cells, rule = phases.cells.value, "as stated"
        inputs: tuple[Input, ...] = ()
    else:
        assert productivity is not None
        assert case.substrate_uptake is not None
        per_hour = productivity * _GRAMS / mass / production[plant.product]
        cells = per_hour / case.substrate_uptake.value / _GRAMS
        inputs = (
            Input(name="substrate used by production", value=per_hour, unit="mol/m3/h"),
            Input(name="substrate uptake", value=case.substrate_uptake.value, unit="mol/g/h"),
        )
        rule = "substrate used per volume and h of production / substrate uptake of the cells"
    of_growth = cells * _GRAMS / grams
    titre = plant.titre.value * _GRAMS / mass
    of_production = (titre - of_growth * growth[plant.product]) / production[plant.product]
    if of_production <= 0:
        findings.add(
            "YN916",
            "growth alone makes more product than the titre",
            phases.span,
            hint="Lower the cells or raise the titre.",
        )
        raise InputError(findings.sorted())
    return GrowthShare(
        cells=cells,
        cells_rule=rule,
        cells_inputs=inputs,
        growth=of_growth,
        production=of_production,
    )


def together(production: Amounts, growth: Mapping[str, Fraction], share: Fraction) -> Amounts:
    """Equation over both phases per mol of all substrate.

    Examples
    --------
    >>> made = (("glucose", Fraction(-1)), ("lactate", Fraction(2)))
    >>> together(made, {"glucose": Fraction(-1)}, Fraction(1, 2))
    (('glucose', Fraction(-1, 1)), ('lactate', Fraction(1, 1)))
    """
    return tuple(
        (name, (1 - share) * amount + share * growth.get(name, _ZERO))
        for name, amount in production
    )


GROWTH_ASSUMPTIONS = (
    Assumption(
        text="growth phase: same network, strain, knock-outs, parameters and uptake, at most"
        " biomass; measured values, demands, written coefficients and growth rate describe"
        " production alone"
    ),
    Assumption(
        text="seed vessels grow by the equation of the growth phase and start from next to nothing"
    ),
)
"""What is taken for granted where there are phases."""
