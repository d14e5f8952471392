"""Parts of the plant that a whole sheet hardly shows: cost line, gas, evaporation, balances."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.chemistry.formula import read_formula
from yieldnet.plant.cost import CostLine
from yieldnet.plant.heat import evaporation_kw
from yieldnet.plant.oxygen import air_per_broth, driving_force
from yieldnet.plant.sheet import Balance, Figure, Ion, Stream
from yieldnet.plant.streams import balances_of


def test_the_cost_at_the_break_even_yield_is_the_price() -> None:
    line = CostLine(by_substrate=Fraction(3), fixed=Fraction(1, 7), sold=Fraction(1, 11))
    even = line.break_even(Fraction(13))
    assert even is not None
    assert line.per_kg(even) == 13


def test_more_pressure_and_less_dissolved_oxygen_drive_more() -> None:
    usual = driving_force(37.0, 1.0, 0.2, 0.2)
    assert driving_force(37.0, 2.0, 0.2, 0.2) > 2 * usual
    assert driving_force(37.0, 1.0, 0.2, 0.1) > usual
    assert driving_force(37.0, 1.0, 0.04, 0.2) < 0


def test_a_volume_of_air_a_minute() -> None:
    # 60 L/h per L over 22.414 L/mol are 2.677 mol/L/h.
    assert float(air_per_broth(Fraction(1))) == pytest.approx(2677, abs=0.5)


def test_warm_gas_takes_more_heat_along_and_pressure_less() -> None:
    usual = evaporation_kw(1000.0, 30.0, 1.0)
    assert evaporation_kw(1000.0, 40.0, 1.0) > usual
    assert 0 < evaporation_kw(1000.0, 30.0, 2.0) < usual


def _stream(enters: bool, formula: str, moles: int) -> Stream:
    read = read_formula(formula)
    mass = moles * read.molar_mass / 1000
    return Stream(
        name=formula,
        enters=enters,
        kg_per_h=mass,
        t_per_y=mass * 8,
        mol_per_h=Fraction(moles),
        formula=read,
        rule="by hand",
    )


def test_what_is_lost_shows_in_its_balance() -> None:
    streams = (_stream(True, "C6H12O6", 1), _stream(False, "C2H6O", 2), _stream(False, "CO2", 1))
    ion = Ion(
        name="Na+",
        formula=read_formula("Na+"),
        mol_per_h=Fraction(1),
        kg_per_h=Fraction(0),
        t_per_y=Fraction(0),
    )
    found = {item.of: item for item in balances_of(streams, (ion,))}
    assert found["C"].residual == Fraction(1, 6)
    assert found["H"].residual == 0
    assert found["O"].residual == Fraction(2, 6)
    assert found["charge"].residual == 1
    assert found["mass"].enters > found["mass"].leaves


def test_nothing_flowing_closes() -> None:
    empty = Balance(of="S", enters=Fraction(0), leaves=Fraction(0), unit="mol/h")
    assert empty.residual == 0


def test_a_figure_without_value_is_no_input() -> None:
    figure = Figure(section="s", name="yield", value=None, unit="-", formula="none")
    with pytest.raises(ValueError, match="yield has no value"):
        figure.as_input()
