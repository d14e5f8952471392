"""The table of heats and Gibbs energies, and what stands in where it has no value."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.chemistry.formula import Formula, read_formula
from yieldnet.chemistry.library import compound_entries
from yieldnet.chemistry.thermochemistry import (
    STATES,
    combustion_names,
    estimated_heat,
    gibbs_names,
    heat_of_biomass,
    heat_of_combustion,
    species_of,
)

STATUS = ("seen", "from memory", "derived", "by definition")


def test_every_value_has_a_source_and_a_status() -> None:
    for name in combustion_names():
        heat = heat_of_combustion(name)
        assert heat is not None
        assert heat.known.source
        assert heat.known.status.startswith(STATUS), name
        assert heat.state in STATES, name
        assert not heat.estimated
    for name in gibbs_names():
        for item in species_of(name):
            for known in (item.gibbs, item.enthalpy):
                assert known is None or known.source
                assert known is None or known.status.startswith(STATUS), name
            assert item.state in STATES, name


def test_a_synonym_is_understood_and_an_unknown_name_is_not() -> None:
    by_synonym = heat_of_combustion("Succinic acid")
    assert by_synonym is not None
    assert by_synonym == heat_of_combustion("succinate")
    assert species_of("succinic acid") == species_of("succinate")
    assert heat_of_combustion("nothing of the kind") is None
    assert species_of("nothing of the kind") == ()


def test_what_has_no_value_is_none_and_not_guessed() -> None:
    assert heat_of_combustion("shikimate") is None
    assert species_of("shikimate") == ()
    estimate = estimated_heat(read_formula("C7H10O5"))
    assert estimate is not None
    assert estimate.estimated
    # 4 x 7 + 10 - 2 x 5 electrons of 115 kJ, by hand.
    assert estimate.value == 28 * 115


def test_an_estimate_needs_a_degree_of_reduction() -> None:
    assert estimated_heat(read_formula("NaOH")) is None


def test_an_estimate_counts_nitrogen_to_nitrogen_gas() -> None:
    estimate = estimated_heat(read_formula("C2H5NO2"))
    assert estimate is not None
    # Glycine: 6 electrons of 115 kJ, and ammonia burnt with 383.
    assert estimate.value == 6 * 115 + 383
    assert estimate.to_ammonia() == 690


def test_the_published_biomass_is_scaled_and_another_is_estimated() -> None:
    one = heat_of_biomass(read_formula("CH1.8O0.5N0.2"))
    five = heat_of_biomass(read_formula("C5H9O2.5N"))
    other = heat_of_biomass(read_formula("CH1.77O0.49N0.24"))
    charged = heat_of_biomass(Formula(read_formula("CH1.8O0.5N0.2").elements, charge=-1))
    empty = heat_of_biomass(read_formula("H2O"))
    assert one is not None
    assert five is not None
    assert other is not None
    assert charged is not None
    assert empty is not None
    assert one.value == 560
    assert not one.estimated
    assert five.value == 2800
    assert not five.estimated
    assert other.estimated
    assert charged.estimated
    assert empty.value == 0
    assert five.nitrogen == 1
    assert one.to_ammonia() == Fraction("483.4")


def test_species_carry_their_constants_and_bounds() -> None:
    (succinate,) = species_of("succinate")
    assert succinate.acid_constants == (Fraction("4.21"), Fraction("5.64"))
    (ammonium,) = species_of("ammonia")
    assert (ammonium.protons, ammonium.acid_constants) == (-1, (Fraction("9.25"),))
    (atp,) = species_of("ATP")
    assert atp.formula is None
    assert atp.low == 50
    assert atp.high == 10_000
    assert atp.text == "ratio"
    assert succinate.text == "C4H4O4-2 dissolved"


@pytest.mark.parametrize("name", [item.name for item in compound_entries()])
def test_a_species_is_one_of_the_forms_that_its_constants_make(name: str) -> None:
    for item in species_of(name):
        if item.acid_constants and item.state == "dissolved" and name != "carbon dioxide":
            assert max(item.protons, 0) <= len(item.acid_constants)
        assert (item.low is None) == (item.state != "ratio")
