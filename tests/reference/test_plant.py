"""Plant figures: rows G1 to G3, G7, D2, E10 to E12, E14 to E16, E18, E19, and two plants by hand.

Numbers marked "by hand" were worked out on paper with the atomic weights 12.011, 1.008, 15.999,
14.007 and 22.990; the steps stand beside them.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from tests.unit.plants import LACTATE, sheet_at
from yieldnet.chemistry.acids import acid_named
from yieldnet.plant.constants import henry_constant
from yieldnet.plant.oxygen import driving_force

if TYPE_CHECKING:
    from pathlib import Path

    from yieldnet.plant.sheet import PlantSheet

AQION = "aqion.de table of acids, 25 degC (seen)"
# Row G1, printed with two decimals.
PKA = {
    "formate": [3.75],
    "acetate": [4.76],
    "propionate": [4.87],
    "butyrate": [4.83],
    "lactate": [3.86],
    "3-hydroxypropionate": [4.51],
    "pyruvate": [2.5],
    "oxalate": [1.27, 4.26],
    "malonate": [2.83, 5.69],
    "fumarate": [3.02, 4.38],
    "succinate": [4.21, 5.64],
    "malate": [3.40, 5.20],
    "glycolate": [3.83],
    "crotonate": [4.62],
}
# Row G3: mol base per mol acid at pH 5, 6, 6.5, 7; derived from G1 and G2 at zero ionic strength.
BASE = {
    "succinate": [1.05, 1.69, 1.88, 1.96],
    "malate": [1.37, 1.86, 1.95, 1.98],
    "fumarate": [1.80, 1.98, 1.99, 2.00],
    "citrate": [1.66, 2.23, 2.55, 2.80],
    "lactate": [0.93, 0.99, 1.00, 1.00],
    "acetate": [0.64, 0.95, 0.98, 0.99],
    "3-hydroxypropionate": [0.76, 0.97, 0.99, 1.00],
    "propionate": [0.57, 0.93, 0.98, 0.99],
}
# Row G2: K of citric acid, Moresi and Parente 2014 (seen).
CITRIC = [7.45e-4, 1.73e-5, 4.02e-7]
ROUNDING = 0.005 + 1e-3
"""Half of the last printed place, and what two digits of a pKa leave open."""


@pytest.mark.parametrize(("name", "printed"), PKA.items())
def test_g1_constants(name: str, printed: list[float]) -> None:
    acid = acid_named(name)
    assert acid is not None
    assert [float(item) for item in acid.constants] == printed
    assert "aqion.de" in acid.source


def test_g2_citric_acid() -> None:
    acid = acid_named("citrate")
    assert acid is not None
    assert [10 ** -float(item) for item in acid.constants] == pytest.approx(CITRIC, rel=0.015)


@pytest.mark.parametrize(
    ("name", "ph", "printed"),
    [
        (name, ph, value)
        for name, values in BASE.items()
        for ph, value in zip(("5", "6", "6.5", "7"), values, strict=True)
    ],
)
def test_g3_base_per_acid(name: str, ph: str, printed: float) -> None:
    acid = acid_named(name)
    assert acid is not None
    assert float(acid.protons_given_off(Fraction(ph))) == pytest.approx(printed, abs=ROUNDING)


def _value(sheet: PlantSheet, name: str) -> float:
    value = sheet.figure(name).value
    assert value is not None
    return float(value)


def test_g7_and_d2_heat_of_an_oxygen_uptake(tmp_path: Path) -> None:
    # 100 mol/m3/h of oxygen are 12.2 kW/m3 at 440 kJ/mol (Birou, Marison, von Stockar 1987, seen)
    # and 12.8 kW/m3 at 460 kJ/mol (textbook). Acetate with one oxygen each: 100 mol/m3/h of it are
    # 100 x 60.052 g/mol = 6.0052 kg/m3/h.
    text = (
        "case: t\nequation: glucose + ? oxygen -> 2 acetate\n"
        "either side: [carbon dioxide, water]\nplant:\n  product: acetate\n  output: 8 t/y\n"
        "  on-stream: 8000 h/y\n  productivity: 6.0052 g/L/h\n"
    )
    sheet = sheet_at(tmp_path, text)
    assert _value(sheet, "oxygen uptake, production") == pytest.approx(100, rel=1e-12)
    by_440 = _value(sheet, "heat that this uptake implies, 440 kJ/mol")
    by_460 = _value(sheet, "heat that this uptake implies, 460 kJ/mol")
    assert by_440 == pytest.approx(12.2, abs=0.05)
    assert by_460 == pytest.approx(12.8, abs=0.05)


@pytest.mark.parametrize(
    ("celsius", "printed"),
    # Oxygen in water under air at 1 atm: 8.26 mg/L at 25 degC, 7.56 at 30, 6.73 at 37; Benson and
    # Krause tables (from memory). 4 % is what two digits of the Henry constant leave open.
    [(25, 8.26), (30, 7.56), (37, 6.73)],
)
def test_saturation_of_water_with_air(celsius: float, printed: float) -> None:
    found = driving_force(celsius, 1.01325, 0.209476, 0.0)
    assert found * 31.998 == pytest.approx(printed, rel=0.04)


def test_the_henry_constant_at_its_reference() -> None:
    # Sander 2023, oxygen: 1.3e-5 mol/m3/Pa at 298.15 K (seen at henrys-law.org).
    assert henry_constant(25) == pytest.approx(1.3e-5, rel=1e-12)


def _equation(tmp_path: Path, equation: str, measured: str, compounds: str = "") -> PlantSheet:
    product = "biomass" if "biomass" in equation else equation.split()[-1]
    text = (
        f"case: t\n{compounds}equation: {equation}\neither side: [carbon dioxide, water]\n"
        + (f"measured:\n{measured}" if measured else "")
        + f"plant:\n  product: {product}\n  output: 8000 t/y\n  on-stream: 8000 h/y\n"
    )
    return sheet_at(tmp_path, text)


@pytest.mark.parametrize(
    ("cells", "ethanol", "of_most"), [("0.11", 0.439, 85.9), ("0.05", 0.479, 93.6)]
)
def test_e10_ethanol_beside_cells(
    tmp_path: Path, cells: str, ethanol: float, of_most: float
) -> None:
    # Doran problem 4.10 (text seen), answers derived: CH1.8O0.5N0.2, no ash, ammonia.
    sheet = _equation(
        tmp_path,
        "glucose + ? ammonia -> ? biomass + ? ethanol",
        f"  biomass: {cells} exact g/g\n",
        "compounds: {biomass: CH1.8O0.5N0.2}\n",
    )
    glucose = sheet.stream("glucose").kg_per_h
    made = sheet.stream("ethanol").kg_per_h
    assert float(made / glucose) == pytest.approx(ethanol, abs=0.001)
    # 2 mol ethanol of 46.069 g from 180.156 g glucose are 0.5114 g/g.
    assert float(100 * made / glucose) / 0.5114 == pytest.approx(of_most, abs=0.15)


def test_e11_acetate_to_methane(tmp_path: Path) -> None:
    # Doran problem 4.8 (text seen), derived: 0.67 kg carbon dioxide and 0.244 kg methane per kg.
    sheet = _equation(
        tmp_path,
        "acetate + ? ammonia -> ? biomass + ? methane",
        "  carbon dioxide: 0.67 exact g/g\n",
        "compounds: {biomass: CH1.4O0.40N0.20}\n",
    )
    acetate = sheet.stream("acetate").kg_per_h
    assert float(sheet.stream("methane").kg_per_h / acetate) == pytest.approx(0.244, abs=0.001)
    made = dict(sheet.equation)
    assert float(made["methane"]) == pytest.approx(0.914, abs=0.001)
    assert float(made["biomass"]) == pytest.approx(0.172, abs=0.001)


UTILIS = "compounds: {biomass: {formula: CH1.84O0.55N0.2, ash: 0.05}}\n"


def test_e12_oxygen_of_fodder_yeast(tmp_path: Path) -> None:
    # Derived from the exercise (text seen): oxygen 2.52 mol/mol glucose, 42 % of full combustion.
    sheet = _equation(
        tmp_path,
        "glucose + ? ammonia + ? oxygen -> ? biomass",
        "  biomass: 0.5 exact g/g\n",
        UTILIS,
    )
    oxygen = -float(dict(sheet.equation)["oxygen"])
    assert oxygen == pytest.approx(2.52, abs=0.005)
    assert 100 * oxygen / 6 == pytest.approx(42, abs=0.5)


def test_e14_hexadecane(tmp_path: Path) -> None:
    # Derived from the exercise (text seen): RQ 0.43.
    compounds = "compounds: {biomass: CH1.66O0.27N0.20, hexadecane: C16H34}\n"
    sheet = _equation(
        tmp_path,
        "hexadecane + ? ammonia + ? oxygen -> ? biomass",
        "  carbon dioxide: 5.37 exact\n",
        compounds,
    )
    made = {name: float(amount) for name, amount in sheet.equation}
    assert made["oxygen"] == pytest.approx(-12.49, abs=0.02)
    assert made["ammonia"] == pytest.approx(-2.13, abs=0.01)
    assert made["biomass"] == pytest.approx(10.63, abs=0.01)
    assert made["water"] == pytest.approx(11.37, abs=0.02)


def test_e15_tetradecane(tmp_path: Path) -> None:
    # Derived from the exercise (text seen), RQ 0.5, g per g biomass. From the printed masses per
    # g biomass (21.124 g/C-mol): tetradecane 1.337 g is 6.739 mmol and 94.35 mmol carbon, biomass
    # 47.34 mmol, so 47.01 mmol carbon dioxide: 6.976 per tetradecane.
    compounds = "compounds: {biomass: CH1.5O0.3N0.2, tetradecane: C14H30}\n"
    sheet = _equation(
        tmp_path,
        "tetradecane + ? ammonia + ? oxygen -> ? biomass",
        "  carbon dioxide: 6.976 exact\n",
        compounds,
    )
    cells = sheet.stream("biomass, sold").kg_per_h
    for name, printed in (("tetradecane", 1.337), ("ammonia", 0.161), ("oxygen", 3.006)):
        found = float(sheet.stream(name).kg_per_h / cells)
        assert found == pytest.approx(printed, rel=0.01), name


def test_e16_oxygen_of_plant_cells(tmp_path: Path) -> None:
    # Derived from the exercise (text seen): 10 kg/h sucrose, 0.32 g cells and 0.2 g lysate per g
    # cells, CH1.63O0.80N0.13: 0.384 g/g in all; oxygen 3.78 mol/min.
    sheet = _equation(
        tmp_path,
        "sucrose + ? ammonia + ? oxygen -> ? biomass",
        "  biomass: 0.384 exact g/g\n",
        "compounds: {biomass: CH1.63O0.80N0.13}\n",
    )
    oxygen, sucrose = sheet.stream("oxygen"), sheet.stream("sucrose")
    assert oxygen.mol_per_h is not None
    per_minute = float(oxygen.mol_per_h / sucrose.kg_per_h) * 10 / 60
    assert per_minute == pytest.approx(3.78, abs=0.02)


def test_e18_citrate(tmp_path: Path) -> None:
    # Folia Microbiol doi 10.1007/BF02927594 (seen): 2/3 of the carbon to citrate, oxygen 42 % of
    # the sugar by mass; derived: 0.60 C-mol biomass and 1.40 carbon dioxide per glucose.
    sheet = _equation(
        tmp_path,
        "glucose + ? ammonia + ? oxygen -> ? biomass + 2/3 citrate",
        "  oxygen: 0.42 exact g/g\n",
        "compounds: {biomass: CH1.8O0.5N0.2}\n",
    )
    made = {name: float(amount) for name, amount in sheet.equation}
    assert made["biomass"] == pytest.approx(0.60, abs=0.03)
    assert made["carbon dioxide"] == pytest.approx(1.40, abs=0.03)


def test_e19_bakers_yeast(tmp_path: Path) -> None:
    # Printed equation (numerade exercise, seen): C6H12O6 + 3 O2 + 0.48 NH3 -> 0.48 C6H10NO3 +
    # 4.32 H2O + 3.12 CO2; 50 g/L cells in 1e5 L are 5000 kg of 144.15 g/mol, so 72.27 kmol
    # glucose, 13.02 t, by hand.
    text = (
        "case: t\ncompounds: {biomass: C6H10NO3}\n"
        "equation: glucose + ? ammonia + 3 oxygen -> ? biomass\n"
        "either side: [carbon dioxide, water]\nplant:\n  product: biomass\n  output: 5000 kg/h\n"
        "  on-stream: 8000 h/y\n"
    )
    sheet = sheet_at(tmp_path, text)
    made = {name: float(amount) for name, amount in sheet.equation}
    assert made == pytest.approx(
        {
            "glucose": -1,
            "ammonia": -0.48,
            "oxygen": -3,
            "biomass": 0.48,
            "water": 4.32,
            "carbon dioxide": 3.12,
        }
    )
    assert float(sheet.stream("glucose").kg_per_h) == pytest.approx(13_018, abs=3)


def test_lactate_by_hand(tmp_path: Path) -> None:
    # 8000 t/y in 8000 h are 1000 kg/h sold; over a recovery of 0.8, 1250 kg/h made. Lactic acid
    # 90.078 g/mol: 13876.9 mol/h. Glucose is two of it: 1250 kg/h, 6938.4 mol/h; at 90 % purity
    # 138.89 kg/h of other things. At pH 6 10^2.14 / (1 + 10^2.14) = 0.992808 of the acid is
    # dissociated: 13777.1 mol/h NaOH of 39.997 g/mol, 551.04 kg/h, which make 248.19 kg/h water.
    # Salt: 13777.1 x (22.990 + 89.070) g/mol = 1543.86 kg/h.
    # Heat: 2803 - 2 x 1367 = 69 kJ/mol glucose (Villadsen and others 2003, Table 4.3), 132.99 kW;
    # neutralisation 13777.1 mol/h x 55.84 kJ/mol / 3600 = 213.70 kW.
    sheet = sheet_at(
        tmp_path,
        LACTATE + "  recovery: 0.8\n  feedstock purity: {glucose: 0.9}\n"
        "  base: sodium hydroxide\n  pH: 6\n",
    )
    for name, kilograms in (
        ("glucose", 1250.0),
        ("impurities with glucose", 138.89),
        ("sodium hydroxide", 551.04),
        ("lactate, sold", 1000.0),
        ("lactate, lost", 250.0),
        ("water, of the base", 248.19),
    ):
        stream = sheet.stream(name)
        assert float(stream.kg_per_h) == pytest.approx(kilograms, abs=0.01), name
        assert float(stream.t_per_y) == pytest.approx(8 * kilograms, abs=0.08), name
    salt = sum(item.kg_per_h for item in sheet.ions if item.formula.charge)
    assert float(salt) == pytest.approx(1543.86, abs=0.01)
    assert _value(sheet, "heat of the cells, by combustion") == pytest.approx(132.99, abs=0.01)
    assert _value(sheet, "heat of neutralisation") == pytest.approx(213.70, abs=0.01)
    assert _value(sheet, "cooling duty") == pytest.approx(346.69, abs=0.02)


def test_fodder_yeast_by_hand(tmp_path: Path) -> None:
    # CH1.84O0.55N0.2 is 25.46657 g/C-mol, with 5 % ash 26.80692. 1000 kg/h of it are 37303.8 mol/h.
    # At 0.5 g/g 2000 kg/h glucose, 11101.5 mol/h: 3.360251 C-mol each. Ammonia 0.2 x 37303.8 =
    # 7460.8 mol/h, 127.07 kg/h. Electrons: (24 - 4.14 x 3.360251) / 4 = 2.522140 mol oxygen each,
    # 27999.5 mol/h, 895.93 kg/h. Carbon dioxide (6 - 3.360251) x 11101.5 = 29305.2 mol/h,
    # 1289.69 kg/h. Ash 5 % of 1000 kg/h.
    # Heat: glucose 2803; biomass by electrons 115 x 4.14 + 383 x 0.2 = 552.7 kJ/C-mol; ammonia
    # 383 x 0.2: (2803 + 383 x 0.672050 - 552.7 x 3.360251) x 11101.5 / 3600 = 3710.2 kW;
    # by oxygen 27999.5 x 440 / 3600 = 3422.2 kW.
    text = (
        f"case: t\n{UTILIS}equation: glucose + ? ammonia + ? oxygen -> ? biomass\n"
        "either side: [carbon dioxide, water]\nmeasured:\n  biomass: 0.5 exact g/g\n"
        "plant:\n  product: biomass\n  output: 8000 t/y\n  on-stream: 8000 h/y\n"
    )
    sheet = sheet_at(tmp_path, text)
    for name, kilograms in (
        ("glucose", 2000.0),
        ("ammonia", 127.07),
        ("oxygen", 895.93),
        ("carbon dioxide, net", 1289.69),
        ("minerals", 50.0),
        ("ash of biomass", 50.0),
        ("biomass without ash, sold", 950.0),
    ):
        assert float(sheet.stream(name).kg_per_h) == pytest.approx(kilograms, abs=0.03), name
    assert _value(sheet, "heat of the cells, by combustion") == pytest.approx(3710.2, abs=0.5)
    assert _value(sheet, "heat of the cells, 440 kJ per oxygen") == pytest.approx(3422.2, abs=0.2)
