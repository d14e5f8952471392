"""Formulas: text to exact amounts, charge, limits, molar mass, degree of reduction."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.chemistry.formula import (
    MAX_ATOMS,
    MAX_DEPTH,
    MAX_LENGTH,
    Formula,
    FormulaTextError,
    read_formula,
)

F = Fraction


@pytest.mark.parametrize(
    ("text", "amounts"),
    [
        ("C6H12O6", {"C": 6, "H": 12, "O": 6}),
        ("CH1.8O0.5N0.2", {"C": 1, "H": F(9, 5), "O": F(1, 2), "N": F(1, 5)}),
        ("NaCl", {"Na": 1, "Cl": 1}),
        ("CO", {"C": 1, "O": 1}),
        ("Co", {"Co": 1}),
        ("CH3CH2OH", {"C": 2, "H": 6, "O": 1}),
        ("Ca(OH)2", {"Ca": 1, "O": 2, "H": 2}),
        ("Al2(SO4)3", {"Al": 2, "S": 3, "O": 12}),
        ("((CH2)2)3", {"C": 6, "H": 12}),
        ("{C2[H5(OH)2]3}2", {"C": 4, "H": 42, "O": 12}),
        ("(CH2O)0.5", {"C": F(1, 2), "H": 1, "O": F(1, 2)}),
        ("C0H2", {"H": 2}),
        ("  H2O ", {"H": 2, "O": 1}),
        (f"C{MAX_ATOMS}", {"C": MAX_ATOMS}),
        ("(" * MAX_DEPTH + "C" + ")" * MAX_DEPTH, {"C": 1}),
        ("C" * MAX_LENGTH, {"C": MAX_LENGTH}),
    ],
)
def test_a_formula_is_read_exactly(text: str, amounts: dict[str, Fraction]) -> None:
    formula = read_formula(text)
    assert dict(formula.elements) == amounts
    assert formula.charge == 0


def test_elements_keep_the_order_in_which_they_were_first_written() -> None:
    assert [symbol for symbol, _ in read_formula("CH3CO2H").elements] == ["C", "H", "O"]


@pytest.mark.parametrize(
    ("text", "charge", "shown"),
    [
        ("HCO3-", -1, "HCO3-"),
        ("HCO3−", -1, "HCO3-"),
        ("HCO3⁻", -1, "HCO3-"),
        ("NH4⁺", 1, "NH4+"),
        ("NH4^+", 1, "NH4+"),
        ("H+", 1, "H+"),
        ("Ca+2", 2, "Ca+2"),
        ("Fe+3", 3, "Fe+3"),
        ("SO4-2", -2, "SO4-2"),
        ("SO4^2-", -2, "SO4-2"),
        ("SO4^-2", -2, "SO4-2"),
        ("[Fe(CN)6]-4", -4, "FeC6N6-4"),
        ("C-0", 0, "C"),
    ],
)
def test_a_charge_at_the_end_is_understood(text: str, charge: int, shown: str) -> None:
    formula = read_formula(text)
    assert formula.charge == charge
    assert str(formula) == shown
    assert read_formula(shown) == formula


@pytest.mark.parametrize(
    ("text", "code", "reason"),
    [
        ("", "YN204", "is empty"),
        ("   ", "YN204", "is empty"),
        ("()", "YN204", "has no atoms"),
        ("C0", "YN204", "has no atoms"),
        ("+", "YN204", "has no atoms"),
        ("(C", "YN204", "never closed"),
        ("C)", "YN204", "opens nowhere"),
        ("(C]", "YN204", "opens nowhere"),
        ("([C)]", "YN204", "opens nowhere"),
        ("2H2O", "YN204", "number '2' where an element belongs"),
        ("(2C)", "YN204", "number '2' where an element belongs"),
        ("Xx2", "YN204", "'Xx' in 'Xx2' is not an element"),
        ("D2O", "YN204", "'D' in 'D2O' is not an element"),
        ("Tc", "YN204", "not an element with a standard atomic weight"),
        ("c6h12o6", "YN204", "'c' in 'c6h12o6' belongs to no formula"),
        ("C6 H12", "YN204", "belongs to no formula"),
        ("e-", "YN204", "belongs to no formula"),
        ("C/2", "YN204", "belongs to no formula"),
        ("CuSO4·5H2O", "YN204", "hydrate dot"),
        ("CuSO4•5H2O", "YN204", "hydrate dot"),
        ("CuSO4*5H2O", "YN204", "hydrate dot"),
        ("Fe+1000", "YN204", "charge of 'Fe\\+1000' is too large"),
        ("(" * (MAX_DEPTH + 1) + "C" + ")" * (MAX_DEPTH + 1), "YN204", "nested more than"),
        ("C" * (MAX_LENGTH + 1), "YN204", "too long"),
        (f"C{MAX_ATOMS + 1}", "YN205", "is more than 100000 atoms"),
        ("(C1000)1000", "YN205", "1000000 C in .* is more than"),
        ("C" + "9" * 41, "YN205", "more than 40 digits"),
    ],
)
def test_a_text_that_is_no_usable_formula_says_why(text: str, code: str, reason: str) -> None:
    with pytest.raises(FormulaTextError, match=reason) as caught:
        read_formula(text)
    assert caught.value.code == code


@pytest.mark.parametrize(
    ("text", "hint"),
    [
        ("CH1,8", "Amounts are written with a point: CH1.8."),
        ("CuSO4·5H2O", "Write the sum instead: CuSO4·5H2O is CuSO9H10."),
        ("", "Write it as C6H12O6."),
    ],
)
def test_a_refused_formula_comes_with_a_way_out(text: str, hint: str) -> None:
    with pytest.raises(FormulaTextError, match=r".") as caught:
        read_formula(text)
    assert caught.value.hint == hint


def test_the_sum_that_the_hint_on_hydrates_names_is_right() -> None:
    copper_sulfate, water = read_formula("CuSO4"), read_formula("H2O")
    for element in "Cu", "S", "O", "H":
        assert read_formula("CuSO9H10")[element] == copper_sulfate[element] + 5 * water[element]


@pytest.mark.parametrize("text", ["C6H12O6", "CH1.8O0.5N0.2", "CaO2H2", "C2H4O2S"])
def test_a_formula_is_written_as_it_is_read(text: str) -> None:
    assert str(read_formula(text)) == text


def test_an_amount_without_decimals_is_written_in_parentheses() -> None:
    assert str(Formula.of({"C": F(1), "H": F(1, 3)})) == "CH(1/3)"


def test_zero_amounts_are_left_out_and_missing_elements_are_zero() -> None:
    formula = Formula.of({"C": F(2), "N": F(0)}, charge=-1)
    assert formula.elements == (("C", F(2)),)
    assert formula["N"] == formula["Au"] == 0
    assert formula.charge == -1


# IUPAC 2021 abridged standard atomic weights (Prohaska et al. 2022, Pure Appl. Chem. 94:573),
# written out here so that a wrong digit in the table of the program shows.
W = {
    symbol: F(weight)
    for symbol, weight in (
        ("H", "1.0080"),
        ("C", "12.011"),
        ("N", "14.007"),
        ("O", "15.999"),
        ("Na", "22.990"),
        ("P", "30.974"),
        ("S", "32.06"),
        ("Cl", "35.45"),
        ("Ca", "40.078"),
    )
}


@pytest.mark.parametrize(
    ("text", "atoms"),
    [
        ("C6H12O6", {"C": 6, "H": 12, "O": 6}),
        ("C5H10O5", {"C": 5, "H": 10, "O": 5}),
        ("CH4N2O", {"C": 1, "H": 4, "N": 2, "O": 1}),
        ("O2", {"O": 2}),
        ("C4H6O4", {"C": 4, "H": 6, "O": 4}),
        ("CH1.8O0.5N0.2", {"C": F(1), "H": F(9, 5), "O": F(1, 2), "N": F(1, 5)}),
        ("C3H7NO2S", {"C": 3, "H": 7, "N": 1, "O": 2, "S": 1}),
        ("H3PO4", {"H": 3, "P": 1, "O": 4}),
        ("Ca(OH)2", {"Ca": 1, "O": 2, "H": 2}),
        ("NaCl", {"Na": 1, "Cl": 1}),
        ("HCO3-", {"H": 1, "C": 1, "O": 3}),
    ],
)
def test_molar_mass_against_arithmetic_with_weights_of_its_own(
    text: str, atoms: dict[str, Fraction]
) -> None:
    assert read_formula(text).molar_mass == sum(W[symbol] * n for symbol, n in atoms.items())


@pytest.mark.parametrize(
    ("text", "grams"),
    # Molar masses as printed on labels, from memory; the tolerance is their last digit.
    [("C6H12O6", 180.16), ("C4H6O4", 118.09), ("CH4N2O", 60.06), ("CO2", 44.01), ("H2O", 18.015)],
)
def test_molar_mass_against_handbook_values(text: str, grams: float) -> None:
    assert float(read_formula(text).molar_mass) == pytest.approx(grams, abs=0.006)


@pytest.mark.parametrize(
    ("text", "nitrogen", "electrons"),
    [
        # Roels 1983: glucose 24, biomass CH1.8O0.5N0.2 4.2 with ammonia and 5.8 with nitrate.
        ("C6H12O6", "ammonia", F(24)),
        ("CH1.8O0.5N0.2", "ammonia", F(21, 5)),
        ("CH1.8O0.5N0.2", "nitrogen", F(24, 5)),
        ("CH1.8O0.5N0.2", "nitrate", F(29, 5)),
        ("O2", "ammonia", F(-4)),
        ("CO2", "ammonia", F(0)),
        ("H2O", "ammonia", F(0)),
        ("H+", "ammonia", F(0)),
        ("NH3", "ammonia", F(0)),
        ("NH4+", "ammonia", F(0)),
        ("HNO3", "nitrate", F(0)),
        ("NO3-", "nitrate", F(0)),
        ("N2", "nitrogen", F(0)),
        ("H3PO4", "ammonia", F(0)),
        ("H2SO4", "ammonia", F(0)),
        ("HCO3-", "ammonia", F(0)),
        ("C2H6O", "ammonia", F(12)),
        ("H2", "ammonia", F(2)),
    ],
)
def test_degree_of_reduction(text: str, nitrogen: str, electrons: Fraction) -> None:
    assert read_formula(text).degree_of_reduction(nitrogen) == electrons


def test_degree_of_reduction_with_sulfide_as_reference() -> None:
    assert read_formula("H2S").degree_of_reduction(sulphur="sulfide") == 0
    assert read_formula("H2S").degree_of_reduction() == 8


def test_an_element_without_an_agreed_valence_has_no_degree_of_reduction() -> None:
    with pytest.raises(FormulaTextError, match="element Fe in FeS has no agreed valence"):
        read_formula("FeS").degree_of_reduction()
