"""Units of instruments: factors worked by hand from the definitions of the units."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.chemistry.formula import read_formula
from yieldnet.foundation.units import UnitError
from yieldnet.model.network import Compound
from yieldnet.reading.measures import Measure, scale_of

GLUCOSE = Compound(name="glucose", formula=read_formula("C6H12O6"))
AMMONIA = Compound(name="ammonia", formula=read_formula("NH3"))
BIOMASS = Compound(name="biomass", formula=read_formula("CH2O"), ash=Fraction(1, 10))
# 6 x 12.011 + 12 x 1.008 + 6 x 15.999 (abridged standard atomic weights)
GLUCOSE_MASS = 180.156
# 12.011 + 2 x 1.008 + 15.999 over 0.9, as a tenth of the weight is ash
BIOMASS_MASS = 30.026 / 0.9


@pytest.mark.parametrize(
    ("unit", "measure", "factor"),
    [
        ("h", Measure.TIME, 1),
        ("min", Measure.TIME, 1 / 60),
        ("s", Measure.TIME, 1 / 3600),
        ("d", Measure.TIME, 24),
        ("hr", Measure.TIME, 1),
        ("L", Measure.VOLUME, 1),
        ("mL", Measure.VOLUME, 1e-3),
        ("m3", Measure.VOLUME, 1000),
        ("m³", Measure.VOLUME, 1000),
        ("1/h", Measure.RATE, 1),
        ("1/d", Measure.RATE, 1 / 24),
        ("L/h", Measure.FLOW, 1),
        ("L/min", Measure.FLOW, 60),
        ("mL/min", Measure.FLOW, 0.06),
        ("g/L", Measure.WET_WEIGHT, 1),
        ("mg/mL", Measure.WET_WEIGHT, 1),
        ("kPa", Measure.PRESSURE, 1),
        ("bar", Measure.PRESSURE, 100),
        ("mbar", Measure.PRESSURE, 0.1),
        ("atm", Measure.PRESSURE, 101.325),
        ("%", Measure.FRACTION, 0.01),
        ("mol/mol", Measure.FRACTION, 1),
        ("fraction", Measure.FRACTION, 1),
        ("ppm", Measure.FRACTION, 1e-6),
        ("%", Measure.HUMIDITY, 0.01),
        ("g/g", Measure.MASS_RATIO, 1),
        ("mg/g", Measure.MASS_RATIO, 1e-3),
        ("", Measure.SIGNAL, 1),
        ("-", Measure.SIGNAL, 1),
        ("", Measure.ACIDITY, 1),
    ],
)
def test_a_unit_has_its_factor(unit: str, measure: Measure, factor: float) -> None:
    scale = scale_of(unit, measure)
    assert scale.value(2.0) == pytest.approx(2 * factor, rel=1e-12)
    assert scale.sd(0.5) == pytest.approx(0.5 * factor, rel=1e-12)


@pytest.mark.parametrize(
    ("unit", "compound", "factor"),
    [
        ("mol/L", GLUCOSE, 1),
        ("mmol/L", GLUCOSE, 1e-3),
        ("mM", GLUCOSE, 1e-3),
        ("M", GLUCOSE, 1),
        ("µmol/L", GLUCOSE, 1e-6),
        ("g/L", GLUCOSE, 1 / GLUCOSE_MASS),
        ("g/l", GLUCOSE, 1 / GLUCOSE_MASS),
        ("mg/L", GLUCOSE, 1e-3 / GLUCOSE_MASS),
        ("kg/m3", GLUCOSE, 1 / GLUCOSE_MASS),
        ("g/mL", GLUCOSE, 1000 / GLUCOSE_MASS),
        ("C-mol/L", GLUCOSE, 1 / 6),
        ("Cmol/L", GLUCOSE, 1 / 6),
        ("C-mmol/L", GLUCOSE, 1e-3 / 6),
        ("mol/L", AMMONIA, 1),
    ],
)
def test_a_concentration_becomes_mol_per_litre(
    unit: str, compound: Compound, factor: float
) -> None:
    scale = scale_of(unit, Measure.CONCENTRATION, compound)
    assert scale.value(1.0) == pytest.approx(factor, rel=1e-12)


@pytest.mark.parametrize(
    ("unit", "factor"),
    [("g/L", 1), ("mg/L", 1e-3), ("C-mol/L", BIOMASS_MASS), ("mmol/L", BIOMASS_MASS / 1000)],
)
def test_dry_weight_becomes_gram_per_litre_with_ash(unit: str, factor: float) -> None:
    scale = scale_of(unit, Measure.DRY_WEIGHT, BIOMASS)
    assert scale.value(1.0) == pytest.approx(factor, rel=1e-12)


def test_a_salt_counts_for_all_its_acid() -> None:
    # Calcium lactate C6H10O6Ca has two lactate: 1 mol/L of it is 2 mol/L of the acid.
    salt = Compound(name="calcium lactate", formula=read_formula("C6H10O6Ca"))
    assert scale_of("mol/L", Measure.CONCENTRATION, salt, 2).value(0.5) == pytest.approx(1.0)
    mass = float(salt.formula.molar_mass)
    assert scale_of("g/L", Measure.CONCENTRATION, salt, 2).value(mass) == pytest.approx(2.0)


@pytest.mark.parametrize(
    ("unit", "value", "kelvin"),
    [("degC", 30.0, 303.15), ("°C", 0.0, 273.15), ("K", 310.15, 310.15), ("degF", 32.0, 273.15)],
)
def test_a_temperature_has_a_zero_of_its_own(unit: str, value: float, kelvin: float) -> None:
    assert scale_of(unit, Measure.TEMPERATURE).value(value) == pytest.approx(kelvin)


@pytest.mark.parametrize(
    ("unit", "measure"),
    [
        ("g/h", Measure.CONCENTRATION),
        ("mol/mol", Measure.CONCENTRATION),
        ("foo/L", Measure.CONCENTRATION),
        ("g/g", Measure.FRACTION),
        # Both have the dimension of 1/h, and are turns or cycles.
        ("rpm", Measure.RATE),
        ("Hz", Measure.RATE),
        ("h", Measure.RATE),
        ("L/h", Measure.VOLUME),
        ("C", Measure.TEMPERATURE),
        ("9**9**9", Measure.TIME),
        ("1", Measure.TIME),
        ("class", Measure.TIME),
        ("degC/L", Measure.CONCENTRATION),
        ("h" * 1000, Measure.TIME),
        ("%", Measure.SIGNAL),
    ],
)
def test_a_unit_of_another_kind_is_refused(unit: str, measure: Measure) -> None:
    with pytest.raises(UnitError, match=f"is no unit of {measure}") as caught:
        scale_of(unit, measure, GLUCOSE)
    assert caught.value.code == "YN203"
    assert caught.value.hint.startswith("Write it in ")


@pytest.mark.parametrize("unit", ["h-1", "h^-1"])
def test_powers_are_told_how_to_be_written(unit: str) -> None:
    with pytest.raises(UnitError, match="is no unit of a rate") as caught:
        scale_of(unit, Measure.RATE)
    assert caught.value.hint == "Write powers as a slash. Write it in 1/h."


def test_a_missing_unit_has_a_code_of_its_own() -> None:
    with pytest.raises(UnitError, match="no unit is written") as caught:
        scale_of(" ", Measure.VOLUME)
    assert caught.value.code == "YN130"


def test_c_mol_needs_carbon() -> None:
    with pytest.raises(UnitError, match="'ammonia' has no carbon") as caught:
        scale_of("C-mol/L", Measure.CONCENTRATION, AMMONIA)
    assert caught.value.code == "YN506"


def test_a_concentration_of_nothing_is_refused() -> None:
    with pytest.raises(UnitError, match="is no unit of a concentration"):
        scale_of("g/L", Measure.CONCENTRATION)
