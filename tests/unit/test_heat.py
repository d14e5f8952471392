"""Heat of an equation, from heats of combustion and from oxygen."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.chemistry.formula import Formula, read_formula
from yieldnet.model.network import Compound
from yieldnet.prediction.heat import heat_of, heat_of_compound, same_formula


def _compound(name: str, formula: str, ash: str = "0") -> Compound:
    return Compound(name=name, formula=read_formula(formula), ash=Fraction(ash))


GLUCOSE = _compound("glucose", "C6H12O6")
ETHANOL = _compound("ethanol", "C2H6O")
OXYGEN = _compound("oxygen", "O2")
CARBON_DIOXIDE = _compound("carbon dioxide", "CO2")
WATER = _compound("water", "H2O")
BIOMASS = _compound("biomass", "CH1.8O0.5N0.2", "1/20")


def test_combustion_gives_off_the_heat_of_combustion() -> None:
    amounts = [(GLUCOSE, -1), (OXYGEN, -6), (CARBON_DIOXIDE, 6), (WATER, 6)]
    heat, unknown = heat_of([(one, Fraction(n)) for one, n in amounts])
    assert heat is not None
    assert unknown == ()
    assert heat.by_combustion == 2803
    assert heat.by_oxygen() == 2640
    assert heat.by_oxygen(Fraction(460)) == 2760
    assert heat.apart() == 163
    assert heat.apart(Fraction(460)) == 43
    assert heat.estimated == ()
    assert not heat.disagree
    assert heat.biomass_grams == 0


def test_without_oxygen_there_is_one_heat_alone() -> None:
    heat, _ = heat_of(
        [(GLUCOSE, Fraction(-1)), (ETHANOL, Fraction(2)), (CARBON_DIOXIDE, Fraction(2))]
    )
    assert heat is not None
    # 2803 - 2 x 1367, by hand.
    assert heat.by_combustion == 69
    assert heat.by_oxygen() is None
    assert heat.apart() is None
    assert not heat.disagree


def test_a_fermentation_with_little_oxygen_makes_the_heats_disagree() -> None:
    amounts = [(GLUCOSE, Fraction(-1)), (OXYGEN, Fraction(-1, 10)), (ETHANOL, Fraction(59, 30))]
    heat, _ = heat_of(amounts)
    assert heat is not None
    assert heat.disagree


def test_no_heat_at_all_cannot_disagree() -> None:
    heat, _ = heat_of([(OXYGEN, Fraction(-1))])
    assert heat is not None
    assert heat.by_combustion == 0
    assert not heat.disagree


def test_biomass_is_weighed_with_its_ash() -> None:
    heat, _ = heat_of([(GLUCOSE, Fraction(-1)), (BIOMASS, Fraction(2))])
    assert heat is not None
    assert heat.biomass_grams == 2 * BIOMASS.formula.molar_mass / Fraction(19, 20)
    assert heat.by_combustion == 2803 - 2 * 560


def test_what_is_neither_known_nor_estimated_is_named() -> None:
    caustic = _compound("sodium hydroxide", "NaOH")
    heat, unknown = heat_of([(GLUCOSE, Fraction(-1)), (caustic, Fraction(-1))])
    assert heat is None
    assert unknown == ("sodium hydroxide",)
    # What takes no part keeps nothing from being told.
    heat, unknown = heat_of([(GLUCOSE, Fraction(-1)), (caustic, Fraction(0))])
    assert heat is not None
    assert unknown == ()


def test_another_formula_under_a_known_name_is_estimated() -> None:
    ion = Compound(name="acetate", formula=Formula(read_formula("C2H3O2").elements, -1))
    known = heat_of_compound(_compound("acetate", "C2H4O2"))
    other = heat_of_compound(ion)
    assert known is not None
    assert other is not None
    assert not known.estimated
    assert other.estimated
    assert other.value == 8 * 115


@pytest.mark.parametrize(
    ("first", "second", "same"),
    [("C2H4O2", "H4C2O2", True), ("C2H4O2", "C2H4O", False)],
)
def test_the_order_of_elements_does_not_count(first: str, second: str, same: bool) -> None:
    assert same_formula(read_formula(first), read_formula(second)) is same


def test_the_charge_counts() -> None:
    neutral = read_formula("C2H4O2")
    assert not same_formula(neutral, Formula(neutral.elements, charge=1))
