"""The compound and biomass library: names, synonyms, formulas."""

from __future__ import annotations

from collections import Counter
from fractions import Fraction

import pytest

from yieldnet.chemistry.library import (
    biomass_entries,
    compound_entries,
    find_biomass,
    find_compound,
    library_names,
)


@pytest.mark.parametrize(
    ("word", "name", "formula"),
    [
        ("succinate", "succinate", "C4H6O4"),
        ("succinic acid", "succinate", "C4H6O4"),
        ("SUCCINIC ACID", "succinate", "C4H6O4"),
        ("D-glucose", "glucose", "C6H12O6"),
        ("dextrose", "glucose", "C6H12O6"),
        ("carbon dioxide", "carbon dioxide", "CO2"),
        ("oxygen", "oxygen", "O2"),
        ("urea", "urea", "CH4N2O"),
        ("1,3-propanediol", "1,3-propanediol", "C3H8O2"),
        # The short style of networks: phosphate and CoA are left out (design, bookkeeping).
        ("glucose 6-phosphate", "glucose 6-phosphate", "C6H12O6"),
        ("phosphoenolpyruvate", "phosphoenolpyruvate", "C3H4O3"),
        ("3-phosphoglycerate", "3-phosphoglycerate", "C3H6O4"),
        ("acetyl-CoA", "acetyl-CoA", "C2H2O"),
        ("succinyl-CoA", "succinyl-CoA", "C4H4O3"),
    ],
)
def test_a_compound_is_found_by_name_or_synonym(word: str, name: str, formula: str) -> None:
    entry = find_compound(word)
    assert entry is not None
    assert entry.name == name
    assert str(entry.formula) == formula


@pytest.mark.parametrize("word", ["", "unobtainium", "succin", " succinate"])
def test_a_word_that_is_no_name_is_not_found(word: str) -> None:
    assert find_compound(word) is None


def test_every_name_and_synonym_leads_to_its_own_compound() -> None:
    for entry in compound_entries():
        for word in (entry.name, *entry.synonyms):
            assert find_compound(word) is entry, word


def test_no_word_stands_for_two_compounds() -> None:
    counted = Counter(word.casefold() for word in library_names())
    assert [word for word, count in counted.items() if count > 1] == []
    assert len(counted) > 300


def test_every_formula_parses_and_has_mass_kind_and_source() -> None:
    entries = compound_entries()
    assert len(entries) > 200
    for entry in entries:
        assert entry.formula.molar_mass > 0, entry.name
        assert entry.kind in {"crossing", "inside"}, entry.name
        assert entry.source, entry.name
        assert all(amount.denominator == 1 for _, amount in entry.formula.elements), entry.name


def test_acids_are_undissociated_and_only_protons_and_the_like_are_charged() -> None:
    charged = [entry.name for entry in compound_entries() if entry.formula.charge]
    assert charged == ["H+"]


@pytest.mark.parametrize(
    ("anion", "formula"),
    [
        ("formate", "CH2O2"),
        ("acetate", "C2H4O2"),
        ("lactate", "C3H6O3"),
        ("pyruvate", "C3H4O3"),
        ("fumarate", "C4H4O4"),
        ("malate", "C4H6O5"),
        ("citrate", "C6H8O7"),
        ("glutamate", "C5H9NO4"),
        ("itaconate", "C5H6O4"),
    ],
)
def test_formulas_of_acids_against_structures_drawn_by_hand(anion: str, formula: str) -> None:
    entry = find_compound(anion)
    assert entry is not None
    assert str(entry.formula) == formula


def test_biomass_compositions_are_per_carbon_with_ash_below_one() -> None:
    entries = biomass_entries()
    assert len(entries) > 10
    assert len({entry.name.casefold() for entry in entries}) == len(entries)
    for entry in entries:
        assert entry.formula["C"] > 0
        assert 0 <= (entry.ash or 0) < 1
        assert entry.source
        assert entry.status
        # Per mol of carbon a dry biomass weighs 20 to 30 g and holds 3.5 to 5.5 electrons.
        carbon = entry.formula["C"]
        assert 19 < entry.formula.molar_mass / carbon < 30, entry.name
        assert 3.5 < entry.formula.degree_of_reduction() / carbon < 5.5, entry.name


def test_a_biomass_is_found_by_name_whatever_its_capitals() -> None:
    entry = find_biomass("GENERIC biomass")
    assert entry is not None
    assert str(entry.formula) == "CH1.8O0.5N0.2"
    assert entry.ash is None
    assert find_biomass("biomass of nobody") is None


def test_ash_is_read_exactly() -> None:
    found = {entry.ash for entry in biomass_entries()} - {None}
    assert found == {Fraction(1, 20), Fraction(11, 200), Fraction(3, 40)}
