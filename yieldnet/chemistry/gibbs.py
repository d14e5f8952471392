"""Gibbs energy of a reaction at a pH, a temperature, concentrations and pressures.

In: species with their amounts and activities. Out: Gibbs energies in kJ. An acid counts with all
its forms where its pKa are known, else with the one ion of the table. Left out: ionic strength
(some kJ for ions of charge 2 and more), heat capacities, change of pKa with temperature.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import log
from typing import TYPE_CHECKING

from yieldnet.chemistry.thermochemistry import BIOMASS_ELECTRON_ENERGY, Species, species_of
from yieldnet.foundation.errors import SolveError

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.chemistry.formula import Formula

__all__ = [
    "GAS_CONSTANT",
    "STANDARD_KELVIN",
    "STANDARD_PH",
    "Part",
    "ReactionGibbs",
    "biomass_gibbs",
    "electron_energy",
    "proton_energy",
    "reaction_gibbs",
]

GAS_CONSTANT = 8.314462618e-3
"""Gas constant [kJ/mol/K] (CODATA 2018, exact by definition of the units)."""
STANDARD_KELVIN = 298.15
"""Temperature of the tables [K]."""
STANDARD_PH = 7.0
"""pH of the tables of biochemical energies [-]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Part:
    """One compound of a reaction.

    Parameters
    ----------
    species : Species
        What stands for it.
    amount : float
        Amount, production positive [mol].
    low, high : float
        Bounds of its activity: concentration [mol/L], pressure [bar] or ratio; 1 where it has none.
    """

    species: Species
    amount: float
    low: float = 1.0
    high: float = 1.0


@dataclass(frozen=True, slots=True, kw_only=True)
class ReactionGibbs:
    """Gibbs energy of a reaction; negative runs by itself.

    Parameters
    ----------
    standard : float
        At the pH, every activity 1 [kJ].
    middle : float
        At the geometric means of the bounds [kJ].
    low, high : float
        Over all activities inside their bounds [kJ].
    kelvin : float
        Temperature it holds at [K].
    without_enthalpy : tuple of str
        Compounds whose missing enthalpy keeps it at 298.15 K; empty where none is needed.
    """

    standard: float
    middle: float
    low: float
    high: float
    kelvin: float
    without_enthalpy: tuple[str, ...] = ()


def proton_energy(ph: float, kelvin: float = STANDARD_KELVIN) -> float:
    """Gibbs energy of formation of H+ at a pH [kJ/mol].

    Parameters
    ----------
    ph : float
        pH [-].
    kelvin : float
        Temperature [K].

    Returns
    -------
    float
        -R T ln(10) pH [kJ/mol].

    Examples
    --------
    >>> round(proton_energy(7.0), 2)
    -39.96
    """
    return -GAS_CONSTANT * kelvin * log(10) * ph


def _water() -> Species:
    (water,) = species_of("water")
    return water


def _formation(species: Species, ph: float, kelvin: float, warmed: bool) -> float:
    """Gibbs energy of the library compound, as its species with protons and waters [kJ/mol]."""
    water = _water()
    gibbs = float(species.gibbs.value) + species.waters * float(water.gibbs.value)
    if warmed:
        assert species.enthalpy is not None
        assert water.enthalpy is not None
        enthalpy = float(species.enthalpy.value) + species.waters * float(water.enthalpy.value)
        share = kelvin / STANDARD_KELVIN
        gibbs = gibbs * share + enthalpy * (1 - share)
    gibbs += species.protons * proton_energy(ph, kelvin)
    return gibbs - GAS_CONSTANT * kelvin * log(_forms(species, ph))


def _forms(species: Species, ph: float) -> float:
    """All forms of an acid over the one of the table; 1 where no pKa is known [-].

    Forms by protons lost j: 10^(j pH - pKa1 - ... - pKaj). An ammonium ion has lost none.
    """
    if not species.acid_constants or species.state != "dissolved":
        return 1.0
    weights = [0.0]
    for constant in species.acid_constants:
        weights.append(weights[-1] + ph - float(constant))
    # Of a base (ammonia) the fully protonated form has one proton more than the compound.
    own = weights[max(species.protons, 0)]
    return float(sum(10 ** (weight - own) for weight in weights))


def reaction_gibbs(
    parts: Sequence[Part], ph: float = STANDARD_PH, kelvin: float = STANDARD_KELVIN
) -> ReactionGibbs:
    """Gibbs energy of a reaction.

    Parameters
    ----------
    parts : sequence of Part
        The compounds, protons left out: they follow from the species and the pH.
    ph : float
        pH [-].
    kelvin : float
        Temperature [K].

    Returns
    -------
    ReactionGibbs
        Standard, at the activities, and its range [kJ].

    Raises
    ------
    SolveError
        If an activity is not above zero.

    Notes
    -----
    Gibbs and Helmholtz: G(T) = G(T0) T/T0 + H (1 - T/T0), the enthalpy H taken as constant. Where
    an enthalpy is missing all terms stay at 298.15 K, and the result says so.

    Examples
    --------
    Ethanol fermentation, published -235.0 kJ/mol glucose at pH 7:

    >>> amounts = {"glucose": -1, "ethanol": 2, "carbon dioxide": 2}
    >>> parts = [Part(species=species_of(name)[0], amount=n) for name, n in amounts.items()]
    >>> round(reaction_gibbs(parts).standard, 1)
    -235.0
    """
    kept = [item for item in parts if item.amount]
    for item in kept:
        if not 0 < item.low <= item.high:
            raise SolveError(f"the activity of {item.species.compound} is not above zero")
    warmed = abs(kelvin - STANDARD_KELVIN) > 1e-9
    missing: tuple[str, ...] = ()
    if warmed:
        missing = tuple(item.species.compound for item in kept if item.species.enthalpy is None)
    if missing:
        warmed, kelvin = False, STANDARD_KELVIN
    standard = sum(item.amount * _formation(item.species, ph, kelvin, warmed) for item in kept)
    thermal = GAS_CONSTANT * kelvin
    ends = [sorted((item.amount * log(item.low), item.amount * log(item.high))) for item in kept]
    low = standard + thermal * sum(pair[0] for pair in ends)
    high = standard + thermal * sum(pair[1] for pair in ends)
    return ReactionGibbs(
        standard=standard,
        middle=(low + high) / 2,
        low=low,
        high=high,
        kelvin=kelvin,
        without_enthalpy=missing,
    )


def electron_energy(species: Species, formula: Formula, bicarbonate: bool) -> float | None:
    """Gibbs energy of one electron in a compound at pH 7, 298.15 K, all activities 1.

    Parameters
    ----------
    species : Species
        What stands for the compound.
    formula : Formula
        Library formula of the compound: C, H, O and N, no charge.
    bicarbonate : bool
        Whether all carbon becomes bicarbonate; else only as much as balances the charges, the rest
        carbon dioxide gas, as in tables of half reactions.

    Returns
    -------
    float or None
        Energy of the half reaction from bicarbonate, ammonium, water and protons to the compound,
        per electron, higher for a better donor; ``None`` where it is not defined [kJ/mol].

    References
    ----------
    Heijnen, Bioenergetics of microbial growth: oxalate 52.522, oxygen -78.719, biomass 33.840
    kJ/mol. McCarty 1971: tables of half reactions with the opposite sign convention of a donor.

    Examples
    --------
    >>> from yieldnet.chemistry.library import find_compound
    >>> oxygen = find_compound("oxygen")
    >>> round(electron_energy(species_of("oxygen")[0], oxygen.formula, bicarbonate=True), 1)
    -78.6
    """
    if formula.charge or any(symbol not in "CHON" for symbol, _ in formula.elements):
        return None
    electrons = float(formula.degree_of_reduction())
    if not electrons:
        return None
    carbon, nitrogen = float(formula["C"]), float(formula["N"])
    waters = 2 * carbon - float(formula["O"])
    half = _end_products(carbon, nitrogen, waters, electrons, species.protons, bicarbonate)
    half -= float(species.gibbs.value) + species.protons * proton_energy(STANDARD_PH)
    return -half / electrons


def _end_products(
    carbon: float,
    nitrogen: float,
    waters: float,
    electrons: float,
    protons: int,
    bicarbonate: bool,
) -> float:
    """Energy of what one mol becomes when all its electrons are taken [kJ/mol]."""
    proton = proton_energy(STANDARD_PH)
    gas, ion = species_of("carbon dioxide")
    water = float(_water().gibbs.value)
    (ammonium,) = species_of("ammonia")
    ions = carbon if bicarbonate else min(max(protons + nitrogen, 0.0), carbon)
    # Carbon dioxide with water is bicarbonate and a proton, so the water is counted once more.
    as_ion = float(ion.gibbs.value) + proton - water
    total = ions * as_ion + (carbon - ions) * float(gas.gibbs.value)
    total += nitrogen * (float(ammonium.gibbs.value) - proton)
    return total + electrons * proton - waters * water


def biomass_gibbs(formula: Formula) -> float | None:
    """Gibbs energy of formation of biomass of any composition, estimated by its electrons.

    Parameters
    ----------
    formula : Formula
        Ash-free formula of C, H, O and N.

    Returns
    -------
    float or None
        From 33.840 kJ per electron; ``None`` where the electrons are not defined [kJ/mol].

    Examples
    --------
    >>> from yieldnet.chemistry.formula import read_formula
    >>> round(biomass_gibbs(read_formula("CH1.8O0.5N0.2")))
    -67
    """
    if formula.charge or any(symbol not in "CHON" for symbol, _ in formula.elements):
        return None
    electrons = float(formula.degree_of_reduction())
    carbon, nitrogen = float(formula["C"]), float(formula["N"])
    waters = 2 * carbon - float(formula["O"])
    refs = _end_products(carbon, nitrogen, waters, electrons, 0, bicarbonate=True)
    return refs + electrons * float(BIOMASS_ELECTRON_ENERGY)
