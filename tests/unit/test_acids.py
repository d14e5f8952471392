"""Acids: dissociation at a pH, and tables that agree with each other."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.chemistry.acids import acid_entries, acid_named, is_acid, solubilities_of
from yieldnet.chemistry.library import compound_entries, find_compound
from yieldnet.chemistry.thermochemistry import species_of


def test_half_is_dissociated_at_the_pka() -> None:
    acid = acid_named("acetate")
    assert acid is not None
    assert acid.protons_given_off(acid.constants[0]) == Fraction(1, 2)


@pytest.mark.parametrize("ph", ["3", "4.5", "5.64", "6.5", "8"])
def test_shares_sum_to_one_exactly(ph: str) -> None:
    for acid in acid_entries():
        shares = acid.shares(Fraction(ph))
        assert sum(shares) == 1
        assert len(shares) == len(acid.constants) + 1
        assert all(share > 0 for share in shares)


def test_more_protons_are_given_off_at_a_higher_ph() -> None:
    for acid in acid_entries():
        given = [acid.protons_given_off(Fraction(ph)) for ph in range(3, 9)]
        assert given == sorted(given)
        assert given[-1] < len(acid.constants)


def test_every_acid_is_one_of_the_library_with_enough_hydrogen() -> None:
    for acid in acid_entries():
        entry = find_compound(acid.compound)
        assert entry is not None
        assert entry.name == acid.compound
        assert is_acid(acid.compound)
        assert entry.formula["H"] >= len(acid.constants)
        assert list(acid.constants) == sorted(acid.constants)
        assert acid.status in {"seen", "from memory"}


def test_the_two_tables_of_pka_agree() -> None:
    both = 0
    for acid in acid_entries():
        species = species_of(acid.compound)
        known = species[0].acid_constants if species else ()
        if known:
            both += 1
            assert known == acid.constants, acid.compound
    assert both > 8


def test_an_unknown_acid_has_none_and_a_sugar_is_no_acid() -> None:
    assert acid_named("muconate") is None
    assert acid_named("nobody knows it") is None
    assert is_acid("muconate")
    assert not is_acid("glucose")
    assert not is_acid("nobody knows it")


def test_solubilities_name_compounds_of_the_library() -> None:
    forms = {item.form for entry in compound_entries() for item in solubilities_of(entry.name)}
    assert forms == {"acid", "calcium salt", "compound"}
    assert solubilities_of("nobody knows it") == ()
