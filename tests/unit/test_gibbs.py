"""Gibbs energy of reactions: concentrations, pH, temperature, forms of acids."""

from __future__ import annotations

from dataclasses import replace
from math import log

import pytest

from yieldnet.chemistry.formula import Formula, read_formula
from yieldnet.chemistry.gibbs import (
    GAS_CONSTANT,
    STANDARD_KELVIN,
    Part,
    biomass_gibbs,
    electron_energy,
    proton_energy,
    reaction_gibbs,
)
from yieldnet.chemistry.library import find_compound
from yieldnet.chemistry.thermochemistry import species_of
from yieldnet.foundation.errors import SolveError

THERMAL = GAS_CONSTANT * STANDARD_KELVIN


def _part(name: str, amount: float, low: float = 1.0, high: float = 1.0) -> Part:
    return Part(species=species_of(name)[0], amount=amount, low=low, high=high)


FERMENTATION = [_part("glucose", -1), _part("ethanol", 2), _part("carbon dioxide", 2)]
OXIDATION = [
    _part("ethanol", -1),
    _part("oxygen", -1),
    _part("acetate", 1),
    _part("water", 1),
]


def test_concentrations_enter_with_their_logarithm() -> None:
    dilute = [_part("glucose", -1, 1e-3, 1e-3), _part("ethanol", 2, 1e-2, 1e-2), FERMENTATION[2]]
    found = reaction_gibbs(dilute)
    expected = found.standard + THERMAL * (2 * log(1e-2) - log(1e-3))
    assert found.middle == pytest.approx(expected)
    assert found.low == pytest.approx(found.high)


def test_bounds_give_a_range_and_each_side_takes_its_own_end() -> None:
    parts = [_part("glucose", -1, 1e-3, 1e-1), _part("ethanol", 2, 1e-4, 1e-2), FERMENTATION[2]]
    found = reaction_gibbs(parts)
    assert found.low == pytest.approx(found.standard + THERMAL * (2 * log(1e-4) - log(1e-1)))
    assert found.high == pytest.approx(found.standard + THERMAL * (2 * log(1e-2) - log(1e-3)))
    assert found.middle == pytest.approx((found.low + found.high) / 2)


def test_a_reaction_backwards_has_the_opposite_energy() -> None:
    forwards = reaction_gibbs(OXIDATION)
    backwards = reaction_gibbs([replace(item, amount=-item.amount) for item in OXIDATION])
    assert backwards.standard == pytest.approx(-forwards.standard)


def test_an_activity_of_zero_has_no_energy() -> None:
    with pytest.raises(SolveError, match="activity of glucose is not above zero"):
        reaction_gibbs([_part("glucose", -1, 0.0, 1.0)])
    # What takes no part is not looked at.
    assert reaction_gibbs([_part("glucose", 0, 0.0, 0.0)]).standard == 0


def test_a_proton_that_is_given_off_is_easier_to_give_at_high_ph() -> None:
    at_7, at_8 = (reaction_gibbs(OXIDATION, ph).standard for ph in (7.0, 8.0))
    assert at_8 - at_7 == pytest.approx(proton_energy(1.0), abs=0.05)
    assert proton_energy(0.0) == 0


def test_far_below_its_constant_an_acid_holds_its_proton() -> None:
    at_1, at_2 = (reaction_gibbs(OXIDATION, ph).standard for ph in (1.0, 2.0))
    assert at_2 == pytest.approx(at_1, abs=0.02)


def test_at_its_constant_half_of_an_acid_is_an_ion() -> None:
    (acetate,) = species_of("acetate")
    constant = float(acetate.acid_constants[0])
    alone = [Part(species=acetate, amount=1)]
    bare = [Part(species=replace(acetate, acid_constants=()), amount=1)]
    gap = reaction_gibbs(bare, constant).standard - reaction_gibbs(alone, constant).standard
    assert gap == pytest.approx(THERMAL * log(2))


def test_far_above_its_constant_ammonium_is_ammonia() -> None:
    (ammonium,) = species_of("ammonia")
    alone = [Part(species=ammonium, amount=1)]
    # Above 9.25 the compound is NH3 itself, whose energy no longer depends on the pH.
    high, higher = (reaction_gibbs(alone, ph).standard for ph in (12.0, 13.0))
    assert high == pytest.approx(higher, abs=0.02)
    # Ammonia dissolved: -26.57 kJ/mol (NBS, from memory), through the constant 9.25.
    assert high == pytest.approx(-26.57, abs=0.1)


def test_temperature_follows_from_enthalpies() -> None:
    cold = reaction_gibbs(FERMENTATION)
    warm = reaction_gibbs(FERMENTATION, kelvin=310.15)
    assert warm.kelvin == 310.15
    assert warm.without_enthalpy == ()
    # By hand: glucose -1262.19, ethanol -288.3, carbon dioxide -393.51 kJ/mol.
    enthalpy = 2 * -288.3 + 2 * -393.51 + 1262.19
    share = 310.15 / STANDARD_KELVIN
    assert warm.standard == pytest.approx(cold.standard * share + enthalpy * (1 - share))


def test_without_an_enthalpy_the_temperature_stays_and_is_told() -> None:
    parts = [_part("glucose", -1), _part("n-butanol", 1), _part("carbon dioxide", 2)]
    warm = reaction_gibbs(parts, kelvin=310.15)
    assert warm.kelvin == STANDARD_KELVIN
    assert warm.without_enthalpy == ("n-butanol",)
    assert warm.standard == reaction_gibbs(parts).standard


def test_bicarbonate_has_its_water_and_enthalpy() -> None:
    gas, ion = species_of("carbon dioxide")
    parts = [Part(species=gas, amount=-1), Part(species=ion, amount=1)]
    warm = reaction_gibbs(parts, kelvin=310.15)
    assert warm.without_enthalpy == ()
    # Dissolving gives off heat, so it is harder in the warm.
    assert warm.standard > reaction_gibbs(parts).standard


@pytest.mark.parametrize("formula", ["H2SO4", "NaOH", "CO2"])
def test_an_electron_has_an_energy_only_where_there_are_electrons(formula: str) -> None:
    (water,) = species_of("water")
    assert electron_energy(water, read_formula(formula), bicarbonate=True) is None


def test_an_ion_has_no_energy_per_electron_here() -> None:
    (acetate,) = species_of("acetate")
    assert electron_energy(acetate, Formula(read_formula("C2H3O2").elements, -1), True) is None


def test_energies_per_electron_make_the_energy_of_a_reaction() -> None:
    energies = []
    for name in ("glucose", "ethanol"):
        entry = find_compound(name)
        assert entry is not None
        energy = electron_energy(species_of(name)[0], entry.formula, bicarbonate=False)
        assert energy is not None
        energies.append(energy)
    fall = 24 * (energies[1] - energies[0])
    assert reaction_gibbs(FERMENTATION).standard == pytest.approx(fall)


def test_biomass_with_sulfur_is_not_estimated() -> None:
    assert biomass_gibbs(read_formula("CH1.8O0.5N0.2S0.01")) is None
    two = biomass_gibbs(read_formula("C2H3.6ON0.4"))
    one = biomass_gibbs(read_formula("CH1.8O0.5N0.2"))
    assert one is not None
    assert two == pytest.approx(2 * one)
