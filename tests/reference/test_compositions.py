"""Formulas give the printed degrees of reduction and masses; the library holds the same."""

from __future__ import annotations

import pytest

from tests.reference.compositions import COMPOSITIONS, Composition
from tests.reference.element_limits import PRODUCTS, Product
from tests.reference.rows import Printed
from yieldnet.chemistry.formula import read_formula
from yieldnet.chemistry.library import find_biomass, find_compound
from yieldnet.model.network import Compound


def _name(item: Composition) -> str:
    return f"{item.row} {item.formula} {item.nitrogen}"


@pytest.mark.parametrize("item", COMPOSITIONS, ids=_name)
def test_formula_gives_the_printed_numbers(item: Composition) -> None:
    formula = read_formula(item.formula)
    carbon = formula["C"]
    assert item.reduction.agrees(formula.degree_of_reduction(item.nitrogen) / carbon)
    if item.mass is not None:
        assert item.mass.agrees(formula.molar_mass / carbon)


@pytest.mark.parametrize("item", [item for item in COMPOSITIONS if item.library], ids=_name)
def test_library_holds_the_formula(item: Composition) -> None:
    entry = find_biomass(item.library)
    assert entry is not None
    assert dict(entry.formula.elements) == dict(read_formula(item.formula).elements)
    assert ("from memory" in entry.status) == (item.status == "from memory")


def test_every_biomass_of_the_library_has_a_row() -> None:
    from yieldnet.chemistry.library import biomass_entries

    assert {entry.name for entry in biomass_entries()} == {
        item.library for item in COMPOSITIONS if item.library
    }


def test_candida_utilis_weighs_with_its_ash() -> None:
    """C6: 5 % of the dry weight is ash, so a C-mol weighs 25.47/0.95 = 26.81 g."""
    entry = find_biomass("Candida utilis")
    assert entry is not None
    assert entry.ash is not None
    mass = Compound(name="biomass", formula=entry.formula, ash=entry.ash).weight.molar_mass
    assert mass is not None
    assert Printed("26.81").agrees(mass)


@pytest.mark.parametrize("item", PRODUCTS, ids=lambda item: f"{item.name} on {item.substrate}")
def test_product_holds_the_electrons_counted_by_hand(item: Product) -> None:
    """A2: the formulas of the library against the column of electrons."""
    entry = find_compound(item.name)
    assert entry is not None
    assert entry.formula.degree_of_reduction() == item.electrons
