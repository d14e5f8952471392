"""Units: what is known, and exact factors between mol, g, C-mol and rates."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.foundation.units import (
    AMOUNT_UNITS,
    TIME_UNITS,
    Unit,
    UnitError,
    Weight,
    per_hour,
    read_unit,
    specific_rate_mol_per_gram_hour,
    yield_factor,
)

F = Fraction
# Round masses, so that every factor can be worked by hand.
ETHANOL = Weight(name="ethanol", molar_mass=F(46), carbon=F(2))
GLUCOSE = Weight(name="glucose", molar_mass=F(180), carbon=F(6))
OXYGEN = Weight(name="oxygen", molar_mass=F(32), carbon=F(0))
TOKEN = Weight(name="ATP", molar_mass=None, carbon=None)


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        ("g/g", "g/g"),
        (" mmol / g / h ", "mmol/g/h"),
        ("1/h", "1/h"),
        ("/h", "1/h"),
        ("mol", "mol"),
        ("°C", "degC"),
        ("K", "K"),
        ("Cmol/cmol", "C-mol/C-mol"),
        ("g/gDW/hr", "g/g/h"),
        ("1/day", "1/d"),
        ("C-kmol/t", "C-kmol/t"),
    ],
)
def test_a_unit_is_read_in_all_its_spellings(text: str, shown: str) -> None:
    assert str(read_unit(text)) == shown


def test_a_unit_is_a_numerator_over_denominators() -> None:
    assert read_unit("mmol/g/h") == Unit("mmol", ("g", "h"))


@pytest.mark.parametrize(
    "text", ["", "1", "furlong", "g/", "g//g", "1/1", "mol/1", "g g", "G/G", "g/l", "exact"]
)
def test_an_unknown_unit_is_refused_with_those_that_are_known(text: str) -> None:
    with pytest.raises(UnitError, match="is not known") as caught:
        read_unit(text)
    assert caught.value.code == "YN203"
    assert all(unit in caught.value.hint for unit in (*AMOUNT_UNITS, *TIME_UNITS, "degC", "K"))


@pytest.mark.parametrize(
    ("unit", "amount"),
    [
        ("mol", F(1)),
        ("mmol", F(1, 1000)),
        ("kmol", F(1000)),
        ("g", F(1, 46)),
        ("mg", F(1, 46_000)),
        ("kg", F(1000, 46)),
        ("t", F(10**6, 46)),
        ("C-mol", F(1, 2)),
        ("C-mmol", F(1, 2000)),
        ("C-kmol", F(500)),
    ],
)
def test_moles_in_one_unit_of_ethanol(unit: str, amount: Fraction) -> None:
    assert ETHANOL.mol_per(unit) == amount


def test_every_amount_unit_is_tested_above() -> None:
    marker = next(
        item
        for item in test_moles_in_one_unit_of_ethanol.pytestmark  # type: ignore[attr-defined]
        if item.name == "parametrize"
    )
    assert tuple(unit for unit, _ in marker.args[1]) == AMOUNT_UNITS


@pytest.mark.parametrize(
    ("weight", "unit", "code", "reason"),
    [
        (OXYGEN, "C-mol", "YN506", "'oxygen' has no carbon"),
        (TOKEN, "C-mol", "YN506", "'ATP' has no carbon"),
        (TOKEN, "g", "YN203", "'ATP' has no formula"),
        (ETHANOL, "h", "YN203", "'h' is not an amount"),
        (ETHANOL, "1", "YN203", "'1' is not an amount"),
    ],
)
def test_an_amount_that_means_nothing_is_refused(
    weight: Weight, unit: str, code: str, reason: str
) -> None:
    with pytest.raises(UnitError, match=reason) as caught:
        weight.mol_per(unit)
    assert caught.value.code == code
    assert caught.value.hint


@pytest.mark.parametrize(
    ("unit", "factor"),
    [
        ("mol/mol", F(1)),
        ("mmol/mol", F(1, 1000)),
        ("mmol/mmol", F(1)),
        ("g/g", F(180, 46)),
        ("kg/t", F(180, 46) / 1000),
        ("g/mol", F(1, 46)),
        ("mol/g", F(180)),
        ("C-mol/C-mol", F(6, 2)),
        ("C-mol/mol", F(1, 2)),
    ],
)
def test_a_yield_in_any_unit_becomes_mol_per_mol(unit: str, factor: Fraction) -> None:
    assert yield_factor(read_unit(unit), ETHANOL, GLUCOSE) == factor


def test_a_theoretical_ethanol_yield_of_glucose_in_grams() -> None:
    # 2 mol ethanol per mol glucose are 92 g per 180 g.
    assert F(92, 180) * yield_factor(read_unit("g/g"), ETHANOL, GLUCOSE) == 2


@pytest.mark.parametrize("unit", ["mol", "1/h", "mmol/g/h", "degC", "mol/h"])
def test_a_unit_that_is_no_yield_is_refused(unit: str) -> None:
    with pytest.raises(UnitError, match=r"is not a yield|is not an amount") as caught:
        yield_factor(read_unit(unit), ETHANOL, GLUCOSE)
    assert caught.value.code == "YN203"


@pytest.mark.parametrize(
    ("unit", "factor"),
    [
        ("1/h", F(1)),
        ("1/d", F(1, 24)),
        ("1/min", F(60)),
        ("1/s", F(3600)),
        ("g/g/h", F(1)),
        ("mg/g/h", F(1, 1000)),
        ("g/kg/d", F(1, 24_000)),
    ],
)
def test_a_growth_rate_in_any_unit_becomes_per_hour(unit: str, factor: Fraction) -> None:
    assert per_hour(read_unit(unit)) == factor


@pytest.mark.parametrize("unit", ["h", "1/g", "1/h/h", "mmol/g/h", "g/g", "g/mol/h", "g/g/g"])
def test_a_unit_that_is_no_growth_rate_is_refused(unit: str) -> None:
    with pytest.raises(UnitError, match="is not a growth rate") as caught:
        per_hour(read_unit(unit))
    assert caught.value.hint == "Write it in 1/h."


@pytest.mark.parametrize(
    ("unit", "factor"),
    [
        ("mmol/g/h", F(1, 1000)),
        ("mol/kg/h", F(1, 1000)),
        ("g/g/h", F(1, 180)),
        ("kg/kg/d", F(1, 180) / 24),
        ("C-mol/g/min", F(60, 6)),
    ],
)
def test_a_specific_rate_in_any_unit_becomes_mol_per_gram_hour(unit: str, factor: Fraction) -> None:
    assert specific_rate_mol_per_gram_hour(read_unit(unit), GLUCOSE) == factor


@pytest.mark.parametrize("unit", ["mmol/g", "1/h", "mmol/mol/h", "mmol/g/g", "h/g/h"])
def test_a_unit_that_is_no_specific_rate_is_refused(unit: str) -> None:
    with pytest.raises(UnitError, match="is not a specific rate") as caught:
        specific_rate_mol_per_gram_hour(read_unit(unit), GLUCOSE)
    assert caught.value.hint == "Write it in mmol/g/h."


def test_a_rate_of_a_token_in_grams_is_refused() -> None:
    with pytest.raises(UnitError, match="'ATP' has no formula"):
        specific_rate_mol_per_gram_hour(read_unit("g/g/h"), TOKEN)
