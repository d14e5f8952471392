"""Biomass from macromolecules: repeat units, shares, what is left out of the formula."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.chemistry.formula import read_formula
from yieldnet.chemistry.library import find_compound
from yieldnet.chemistry.macromolecules import (
    DEFAULT_MAKE_UP,
    MakeUp,
    compose,
    find_macromolecule,
    find_make_up,
    macromolecules,
    make_ups,
    monomers,
)

HALF = Fraction(1, 2)


def _made_of(**amounts: int) -> MakeUp:
    return MakeUp(
        name="by hand",
        amounts=tuple((name, Fraction(amount)) for name, amount in amounts.items()),
        sources=(),
    )


def test_monomers_that_are_in_the_compound_library_have_its_formula() -> None:
    shared = [
        (monomer, entry)
        for monomer in monomers().values()
        if (entry := find_compound(f"L-{monomer.name}") or find_compound(monomer.name)) is not None
        and monomer.kind == "amino acids"
    ]
    assert len(shared) > 15
    for monomer, entry in shared:
        assert dict(monomer.formula.elements) == dict(entry.formula.elements), monomer.name


@pytest.mark.parametrize(
    ("name", "make_up", "unit"),
    [
        # Residues drawn by hand: glycine C2H5NO2 less water; adenylate C10H14N5O7P less water.
        ("protein", _made_of(glycine=1), "C2H3NO"),
        ("protein", _made_of(glycine=1, alanine=1), "C2.5H4NO"),
        ("free amino acids", _made_of(glycine=1), "C2H5NO2"),
        ("RNA", _made_of(AMP=2), "C10H12N5O6P"),
        ("DNA", _made_of(dTMP=1), "C10H13N2O7P"),
        ("lipid", _made_of(triacylglycerol=1), "C55H102O6"),
        ("glycogen", _made_of(), "C6H10O5"),
    ],
)
def test_a_repeat_unit_is_its_monomers_less_water(name: str, make_up: MakeUp, unit: str) -> None:
    item = find_macromolecule(name)
    assert item is not None
    assert dict(item.unit(make_up).elements) == dict(read_formula(unit).elements)


def test_peptidoglycan_is_its_monomers_less_six_water() -> None:
    # N-acetylglucosamine, N-acetylmuramic acid, two alanine, glutamate, diaminopimelate.
    parts = ["C8H15NO6", "C11H19NO8", "C3H7NO2", "C3H7NO2", "C5H9NO4", "C7H14N2O4"]
    item = find_macromolecule("peptidoglycan")
    assert item is not None
    assert item.formula is not None
    for element in "CHNO":
        water = {"H": 12, "O": 6}.get(element, 0)
        whole = sum(read_formula(part)[element] for part in parts)
        assert item.formula[element] == whole - water


def test_every_macromolecule_can_be_made_of_every_make_up() -> None:
    for item in macromolecules():
        for make_up in make_ups():
            assert item.unit(make_up)["C"] > 0
        assert item.source


def test_names_and_synonyms_lead_to_one_macromolecule() -> None:
    words = [word.casefold() for item in macromolecules() for word in (item.name, *item.synonyms)]
    assert len(words) == len(set(words))
    assert find_macromolecule("Murein") is find_macromolecule("peptidoglycan")
    assert find_macromolecule("concrete") is None


def test_phosphate_and_sulphur_are_weighed_and_left_out_of_the_formula() -> None:
    """Poly-A and polycysteine, half and half, worked by hand.

    AMP residue C10H12N5O6P, 329.209 g; without HPO3 (79.979 g) C10H11N5O3. Cysteine residue
    C3H5NOS, 103.139 g; without sulphur C3H5NO.
    """
    cell = compose({"RNA": HALF, "protein": HALF}, make_up=_made_of(AMP=1, cysteine=1))
    rna, protein = read_formula("C10H12N5O6P"), read_formula("C3H5NOS")
    a, b = HALF / rna.molar_mass, HALF / protein.molar_mass
    carbon = 10 * a + 3 * b
    assert cell.moles("C") == carbon
    assert cell.grams_per_carbon_mol == 1 / carbon
    assert cell.formula["H"] == (11 * a + 5 * b) / carbon
    assert cell.formula["O"] == (3 * a + b) / carbon
    assert cell.formula["N"] == (5 * a + b) / carbon
    assert {name for name, _ in cell.formula.elements} == {"C", "H", "O", "N"}
    assert cell.whole_formula["P"] == a / carbon
    assert cell.phosphate == a * read_formula("HPO3").molar_mass
    assert cell.sulphur == b * read_formula("S").molar_mass
    # Formula and minerals together are the whole dry weight.
    assert cell.formula.molar_mass * carbon + cell.minerals == 1


def test_leaving_out_phosphate_moves_no_electron() -> None:
    cell = compose({"RNA": Fraction(1)}, make_up=_made_of(AMP=1, GMP=1, CMP=1, UMP=1))
    assert cell.degree_of_reduction == cell.whole_formula.degree_of_reduction()


def test_shares_add_up_part_by_part() -> None:
    shares = {"protein": Fraction("0.6"), "glycogen": Fraction("0.35")}
    cell = compose(shares, Fraction("0.05"))
    assert sum(part.moles("C") for part in cell.parts) == cell.moles("C")
    assert sum(part.electrons() for part in cell.parts) == (
        cell.degree_of_reduction * cell.moles("C")
    )
    assert cell.make_up.name == DEFAULT_MAKE_UP


def test_normalising_divides_shares_and_ash() -> None:
    whole = compose({"protein": HALF, "glycogen": Fraction("0.4")}, Fraction("0.1"))
    half = compose(
        {"protein": HALF / 2, "glycogen": Fraction("0.2")}, Fraction("0.05"), normalise=True
    )
    assert half.formula == whole.formula
    assert half.ash == whole.ash
    assert (half.scaled_from, whole.scaled_from) == (HALF, None)


def test_rounding_keeps_mass_and_carbon_to_a_millionth() -> None:
    cell = compose({"protein": Fraction("0.7"), "RNA": Fraction("0.2")}, Fraction("0.1"))
    formula, minerals = cell.rounded
    assert formula["C"] == 1
    assert all((amount * 10**6).denominator == 1 for _, amount in formula.elements)
    mass = formula.molar_mass / (1 - minerals)
    assert abs(mass - cell.grams_per_carbon_mol) < Fraction(1, 10**4)


def test_own_amounts_replace_the_whole_list_of_their_kind() -> None:
    base = find_make_up("yeast")
    assert base is not None
    changed = base.with_amounts({"glycine": Fraction(3)})
    assert changed.of_kind("amino acids") == ((monomers()["glycine"], Fraction(3)),)
    assert changed.of_kind("ribonucleotides") == base.of_kind("ribonucleotides")
    assert "own amino acids" in changed.name


@pytest.mark.parametrize(
    ("shares", "ash", "reason"),
    [
        ({"protein": HALF}, 0, "sum to 0.5, not to 1"),
        ({"protein": Fraction(3, 2)}, 0, "share of protein is not between"),
        ({"protein": Fraction(2)}, -1, "share of protein is not between"),
        ({"protein": Fraction(1)}, -1, "share of ash is not between"),
        ({"protein": Fraction(0)}, 1, "there is no carbon"),
    ],
)
def test_shares_that_make_no_cell_are_refused(
    shares: dict[str, Fraction], ash: int, reason: str
) -> None:
    with pytest.raises(ValueError, match=reason):
        compose(shares, Fraction(ash))


def test_an_unknown_macromolecule_and_a_polymer_of_nothing_are_refused() -> None:
    with pytest.raises(KeyError, match="concrete"):
        compose({"concrete": Fraction(1)})
    with pytest.raises(ValueError, match="by hand has no amino acids"):
        compose({"protein": Fraction(1)}, make_up=_made_of(AMP=1))


def test_make_ups_name_their_sources_and_what_is_from_memory() -> None:
    for item in make_ups():
        assert item.sources
        assert {name for name, _ in item.amounts} <= set(monomers())
    bacterium = find_make_up(DEFAULT_MAKE_UP)
    assert bacterium is not None
    assert all("from memory" in source for source in bacterium.sources)
