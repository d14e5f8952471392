"""Heat of an overall equation, by heats of combustion and by the oxygen taken up.

In: compounds with their amounts. Out: heat given off per mol of basis, two ways, and how far they
are apart. Left out: heats of solution and of neutralisation, and heat from stirring or evaporation.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.library import find_compound
from yieldnet.chemistry.thermochemistry import (
    CALORIMETRIC_OXYGEN_HEAT,
    TEXTBOOK_OXYGEN_HEAT,
    estimated_heat,
    heat_of_biomass,
    heat_of_combustion,
)
from yieldnet.foundation.findings import Severity
from yieldnet.model.network import BIOMASS

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.chemistry.formula import Formula
    from yieldnet.chemistry.thermochemistry import Heat
    from yieldnet.foundation.findings import Findings
    from yieldnet.model.case import Case
    from yieldnet.model.network import Compound

__all__ = [
    "DISAGREEMENT",
    "HeatAnswer",
    "HeatTerm",
    "heat_of",
    "heat_of_compound",
    "same_formula",
    "tell_heat",
]

DISAGREEMENT = Fraction(1, 10)
"""Share of the heat from which on two ways to it are said to disagree [-].

Twice the difference between 440 and 460 kJ per mol oxygen.
"""
_OXYGEN = "oxygen"
_ZERO = Fraction(0)


@dataclass(frozen=True, slots=True, kw_only=True)
class HeatTerm:
    """One compound of the equation.

    Parameters
    ----------
    compound : str
        Which compound.
    amount : Fraction
        Production positive [mol/mol basis].
    heat : Heat
        Its heat of combustion [kJ/mol].
    """

    compound: str
    amount: Fraction
    heat: Heat

    @property
    def given(self) -> Fraction:
        """What it adds to the heat given off; what is made takes its heat along [kJ/mol basis]."""
        return -self.amount * self.heat.value


@dataclass(frozen=True, slots=True, kw_only=True)
class HeatAnswer:
    """Heat of an overall equation.

    Parameters
    ----------
    terms : tuple of HeatTerm
        Every compound of it.
    oxygen : Fraction
        Oxygen taken up [mol/mol basis].
    biomass_grams : Fraction
        Dry weight made, ash included [g/mol basis].
    """

    terms: tuple[HeatTerm, ...]
    oxygen: Fraction
    biomass_grams: Fraction

    @property
    def by_combustion(self) -> Fraction:
        """Heat given off, from heats of combustion [kJ/mol basis]."""
        return sum((item.given for item in self.terms), _ZERO)

    @property
    def estimated(self) -> tuple[str, ...]:
        """Compounds whose heat of combustion follows from the degree of reduction."""
        return tuple(item.compound for item in self.terms if item.amount and item.heat.estimated)

    def by_oxygen(self, heat_per_oxygen: Fraction = CALORIMETRIC_OXYGEN_HEAT) -> Fraction | None:
        """Heat given off, from the oxygen taken up.

        Parameters
        ----------
        heat_per_oxygen : Fraction
            440 by calorimetry, 460 in textbooks [kJ/mol].

        Returns
        -------
        Fraction or None
            Heat [kJ/mol basis]; ``None`` where no oxygen is taken up.
        """
        return self.oxygen * heat_per_oxygen if self.oxygen > 0 else None

    def apart(self, heat_per_oxygen: Fraction = CALORIMETRIC_OXYGEN_HEAT) -> Fraction | None:
        """Heat from combustion less heat from oxygen [kJ/mol basis]."""
        other = self.by_oxygen(heat_per_oxygen)
        return None if other is None else self.by_combustion - other

    @property
    def disagree(self) -> bool:
        """Whether neither rule for oxygen comes near the heat from combustion."""
        if not self.by_combustion:
            return False
        rules = (CALORIMETRIC_OXYGEN_HEAT, TEXTBOOK_OXYGEN_HEAT)
        gaps = [gap for rule in rules if (gap := self.apart(rule)) is not None]
        return bool(gaps) and min(map(abs, gaps)) > DISAGREEMENT * abs(self.by_combustion)


def same_formula(first: Formula, second: Formula) -> bool:
    """Whether two formulas hold the same atoms and charge, in whatever order."""
    return dict(first.elements) == dict(second.elements) and first.charge == second.charge


def heat_of_compound(compound: Compound) -> Heat | None:
    """Heat of combustion of a compound of a case: of the table, else estimated.

    Parameters
    ----------
    compound : Compound
        Compound with its formula; of biomass, without ash.

    Returns
    -------
    Heat or None
        Heat of combustion [kJ/mol]; ``None`` where not even an estimate is possible.
    """
    if compound.name == BIOMASS:
        return heat_of_biomass(compound.formula)
    entry = find_compound(compound.name)
    # Another formula under the name of the library is another compound, such as an ion.
    if entry is not None and same_formula(entry.formula, compound.formula):
        known = heat_of_combustion(entry.name)
        if known is not None:
            return known
    return estimated_heat(compound.formula)


def heat_of(
    amounts: Sequence[tuple[Compound, Fraction]],
) -> tuple[HeatAnswer | None, tuple[str, ...]]:
    """Heat of an equation, or the compounds that keep it from being told.

    Parameters
    ----------
    amounts : sequence of (Compound, Fraction)
        Production positive [mol/mol basis].

    Returns
    -------
    HeatAnswer or None
        The heat.
    tuple of str
        Compounds without a heat of combustion, of which not even an estimate is possible.
    """
    terms = []
    unknown = []
    for compound, amount in amounts:
        heat = heat_of_compound(compound)
        if heat is not None:
            terms.append(HeatTerm(compound=compound.name, amount=amount, heat=heat))
        elif amount:
            unknown.append(compound.name)
    if unknown:
        return None, tuple(unknown)
    by_name = {compound.name: (compound, amount) for compound, amount in amounts}
    grams = _ZERO
    if BIOMASS in by_name:
        biomass, amount = by_name[BIOMASS]
        grams = amount * biomass.formula.molar_mass / (1 - biomass.ash)
    oxygen = -by_name[_OXYGEN][1] if _OXYGEN in by_name else _ZERO
    return HeatAnswer(terms=tuple(terms), oxygen=oxygen, biomass_grams=grams), ()


def tell_heat(
    heat: HeatAnswer | None, unknown: tuple[str, ...], case: Case, findings: Findings
) -> None:
    """Say what of a heat is estimated, in doubt or not to be had.

    Parameters
    ----------
    heat : HeatAnswer or None
        The heat.
    unknown : tuple of str
        Compounds without a heat of combustion.
    case : Case
        Where the finding stands.
    findings : Findings
        Receives it.
    """
    if unknown:
        findings.add(
            "YN864",
            f"the heat cannot be told: {', '.join(unknown)} has neither a heat of combustion nor"
            " a degree of reduction",
            case.span,
            hint="Leave salts and bases out of the equation.",
            severity=Severity.WARNING,
        )
    if heat is None:
        return
    if heat.estimated:
        findings.add(
            "YN863",
            f"heat of combustion estimated by the degree of reduction: {', '.join(heat.estimated)}",
            case.span,
            hint="Expect an error of some 5 %, of small molecules more.",
            severity=Severity.NOTE,
        )
    apart = heat.apart()
    if heat.disagree and apart is not None:
        share = float(100 * apart / abs(heat.by_combustion))
        findings.add(
            "YN868",
            f"heat by combustion and heat by oxygen are {share:+.0f} % apart",
            case.span,
            left=f"by combustion {float(heat.by_combustion):.4g} kJ/mol",
            right=f"by oxygen {float(heat.by_oxygen() or 0):.4g} kJ/mol",
            hint="The rule for oxygen holds where nearly all electrons go to it; trust combustion.",
            severity=Severity.WARNING,
        )
