"""Plant sheets: from a case to streams, heat, vessels and cost."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from math import log
from pathlib import Path
from typing import TYPE_CHECKING

import pytest

from tests.unit.plants import AEROBIC, LACTATE, NETWORK, case_at, sheet_at
from yieldnet.foundation.errors import InputError
from yieldnet.plant.plant import plant_case, plant_cases, plant_of
from yieldnet.prediction.predict import balance_case

if TYPE_CHECKING:
    from yieldnet.plant.sheet import PlantSheet

SMALL = Path(__file__).resolve().parent.parent / "bad_inputs" / "networks" / "small.yaml"
PHASES = "  phases: {growth: 10 h, turnaround: 6 h, inoculum: 5 %, cells: 4 g/L}\n"


def _value(sheet: PlantSheet, name: str) -> float:
    value = sheet.figure(name).value
    assert value is not None
    return float(value)


def _codes(sheet: PlantSheet) -> set[str]:
    return {item.code for item in sheet.findings}


def _network(more: str = "") -> str:
    return NETWORK.replace("NETWORK", str(SMALL)) + more


def test_every_number_has_unit_formula_and_closes(tmp_path: Path) -> None:
    sheet = sheet_at(tmp_path, _network(PHASES + "  base: ammonia\n  pH: 6\n"))
    assert all(item.unit and item.formula for item in sheet.figures)
    assert all(item.rule for item in sheet.streams)
    assert len({item.name for item in sheet.figures}) == len(sheet.figures)
    assert {item.residual for item in sheet.balances} == {0}
    assert {item.of for item in sheet.balances} >= {"C", "H", "O", "N", "charge", "mass"}
    assert repr(sheet) == "PlantSheet('Grow, then make lactate': 8000 t/y lactate)"
    with pytest.raises(KeyError, match="nothing"):
        sheet.figure("nothing")
    with pytest.raises(KeyError, match="nothing"):
        sheet.stream("nothing")


def test_a_case_without_the_section_is_refused(tmp_path: Path) -> None:
    case = replace(case_at(tmp_path, LACTATE), plant=None)
    with pytest.raises(InputError, match="YN913"):
        plant_case(case)
    with pytest.raises(ValueError, match="no section 'plant'"):
        plant_of(case, balance_case(case))


def test_an_infeasible_case_is_refused(tmp_path: Path) -> None:
    text = LACTATE.replace("-> ? lactate", "-> 3 lactate")
    with pytest.raises(InputError, match=r"YN601[\s\S]*YN913: the case is infeasible"):
        sheet_at(tmp_path, text)


def test_an_equation_without_product_is_refused(tmp_path: Path) -> None:
    text = (
        _network()
        .replace("most lactate", "most biomass")
        .replace("plant:\n", "plant:\n  product: lactate\n")
    )
    with pytest.raises(InputError, match="makes no lactate"):
        sheet_at(tmp_path, text)


def test_the_recovery_takes_from_the_product_alone(tmp_path: Path) -> None:
    whole = sheet_at(tmp_path, LACTATE)
    part = sheet_at(tmp_path, LACTATE + "  recovery: {a: 0.8, b: 0.5}\n")
    assert part.stream("lactate, sold").kg_per_h == whole.stream("lactate, sold").kg_per_h == 1000
    assert part.stream("lactate, lost").kg_per_h == 1500
    assert part.stream("glucose").kg_per_h == Fraction(5, 2) * whole.stream("glucose").kg_per_h


def test_impurities_come_and_go(tmp_path: Path) -> None:
    sheet = sheet_at(tmp_path, LACTATE + "  feedstock purity: {glucose: 0.8}\n")
    found = [item for item in sheet.streams if item.name.startswith("impurities")]
    assert [item.enters for item in found] == [True, False]
    assert all(item.kg_per_h == sheet.stream("glucose").kg_per_h / 4 for item in found)


@pytest.mark.parametrize(
    ("feed", "protons"), [("ammonia", 0), ("ammonium sulfate", 1)], ids=["water", "sulfate"]
)
def test_ammonium_that_is_taken_up_gives_a_proton_unless_it_came_as_ammonia(
    tmp_path: Path, feed: str, protons: int
) -> None:
    text = AEROBIC + f"  base: sodium hydroxide\n  pH: 6\n  nitrogen feed: {feed}\n"
    sheet = sheet_at(tmp_path, text)
    used = -dict(sheet.equation)["ammonia"]
    assert sheet.figure("protons of ammonia").value == protons * used
    assert sheet.figure("sodium hydroxide as base").value == protons * used
    assert {item.residual for item in sheet.balances} == {0}


def test_urea_gives_no_proton(tmp_path: Path) -> None:
    text = AEROBIC.replace("ammonia", "urea") + "  base: sodium hydroxide\n  pH: 6\n"
    sheet = sheet_at(tmp_path, text)
    assert sheet.figure("protons of urea").value == 0


@pytest.mark.parametrize("feed", ["sodium nitrate", "nitric acid"])
def test_nitrate_takes_a_proton_unless_it_came_as_acid(tmp_path: Path, feed: str) -> None:
    text = AEROBIC.replace("ammonia", "nitrate").replace(
        "-> ? biomass", "-> ? biomass + 1/4 acetate"
    )
    text = text.replace("0.5 exact", "0.1 exact")
    text += f"  base: ammonia\n  pH: 6\n  nitrogen feed: {feed}\n"
    sheet = sheet_at(tmp_path, text)
    used = -dict(sheet.equation)["nitrate"]
    assert used > 0
    each = -1 if feed == "sodium nitrate" else 0
    assert sheet.figure("protons of nitrate").value == each * used
    assert {item.residual for item in sheet.balances} == {0}


@pytest.mark.parametrize(
    "base",
    ["sodium hydroxide", "ammonia", "calcium hydroxide", "magnesium hydroxide", "sodium carbonate"],
)
def test_streams_and_charge_close_with_every_base(tmp_path: Path, base: str) -> None:
    sheet = sheet_at(tmp_path, LACTATE + f"  base: {base}\n  pH: 5\n")
    assert {item.residual for item in sheet.balances} == {0}
    assert sum(item.charge_per_h for item in sheet.ions) == 0
    gas = any(item.name.startswith("carbon dioxide") for item in sheet.streams)
    assert gas is (base == "sodium carbonate")


def test_without_phases_the_volume_is_product_over_productivity(tmp_path: Path) -> None:
    more = "  titre: 100 g/L\n  productivity: 2 g/L/h\n  vessel: 100 m3\n  fill: 0.8\n"
    sheet = sheet_at(tmp_path, LACTATE + more)
    assert sheet.figure("broth in all vessels").value == 500
    assert sheet.figure("broth harvested").value == 10
    # 500 m3 over 80 m3 is 6.25.
    assert sheet.figure("vessels").value == 7


def test_phases_by_hand(tmp_path: Path) -> None:
    # Growth of the network at most biomass, 4 kg/m3 of cells; titre 90 kg/m3 at 3 kg/m3/h.
    sheet = sheet_at(tmp_path, _network(PHASES + "  vessel: 100 m3\n  fill: 1\n"))
    assert sheet.growth is not None
    assert sheet.figure("time of production").value == 30
    assert sheet.figure("cycle").value == 46
    # 1000 kg/h / 90 kg/m3 x 46 h = 511 m3 in 6 vessels; seed 5 % of 85.2 m3.
    assert _value(sheet, "broth in all vessels") == pytest.approx(511.1, abs=0.1)
    assert sheet.figure("vessels").value == 6
    assert _value(sheet, "seed 1, broth") == pytest.approx(4.259, abs=0.001)
    assert _value(sheet, "growth rate that growth needs") == pytest.approx(log(20) / 10)
    share = sheet.figure("substrate used by growth").value
    assert isinstance(share, Fraction)
    over_all = dict(sheet.equation)["lactate"]
    of_production = sheet.prediction.best_yield_mol_per_mol()
    assert float(over_all) == pytest.approx(of_production * float(1 - share))
    # All the cells: 4 kg for 90 kg lactate in the broth, 24.6 / 0.95 g/mol with ash.
    made = sheet.stream("biomass without ash").kg_per_h / Fraction(95, 100)
    before = dict(sheet.equation)["biomass"]
    assert before > 0
    assert made >= sheet.stream("lactate, sold").kg_per_h * 4 / 90


def test_cells_follow_from_the_uptake(tmp_path: Path) -> None:
    phases = "  phases: {growth: 10 h}\n"
    sheet = sheet_at(tmp_path, _network(phases))
    # Productivity over molar mass, yield and uptake: 3 / 90.078 / y / 5 kg/m3, times 1000.
    made = sheet.prediction.best_yield_mol_per_mol()
    assert _value(sheet, "cells at the end of growth") == pytest.approx(
        3 / 90.078 / made / 5 * 1000, rel=1e-9
    )


def test_growth_that_makes_more_than_the_titre_is_refused(tmp_path: Path) -> None:
    # Without oxygen the cells that grow make lactate, too.
    text = _network(PHASES).replace("? oxygen", "0 oxygen").replace(" + 0 oxygen", "")
    assert dict(sheet_at(tmp_path, text).equation)["biomass"] > 0
    with pytest.raises(InputError, match="growth alone makes more product than the titre"):
        sheet_at(tmp_path, text.replace("titre: 90", "titre: 1"))


def test_growth_that_makes_no_biomass_is_refused(tmp_path: Path) -> None:
    text = _network(PHASES).replace("aim:", "knock-outs: [growth]\naim:")
    with pytest.raises(InputError, match="the growth phase makes no biomass"):
        sheet_at(tmp_path, text)


def test_the_cost_is_the_sum_of_its_parts_and_breaks_even(tmp_path: Path) -> None:
    prices = "  prices: {glucose: 0.3 EUR/kg, ammonia: 0.5 EUR/kg, lactate: 1.5 EUR/kg}\n"
    text = _network(PHASES + "  base: ammonia\n  pH: 6\n" + prices)
    sheet = sheet_at(tmp_path, text)
    parts = [item for item in sheet.figures if item.name.endswith(", cost")]
    total = sheet.figure("raw materials").value
    # The line of the cost and the streams are two ways to the same number.
    assert sum(Fraction(item.value or 0) for item in parts) == total
    even = sheet.figure("break-even yield").value
    assert isinstance(even, Fraction)
    assert even < Fraction(sheet.prediction.best_yield_mol_per_mol())
    assert "YN909" not in _codes(sheet)


def test_the_cost_at_both_ends_of_the_bands(tmp_path: Path) -> None:
    text = _network("  prices: {glucose: 0.3 EUR/kg}\n").replace(
        "aim:", "measured:\n  biomass: 0.05 ± 0.01 g/g\naim:"
    )
    sheet = sheet_at(tmp_path, text)
    low, best, high = (
        _value(sheet, name)
        for name in ("raw materials, low", "raw materials", "raw materials, high")
    )
    assert low < best < high
    # Glucose alone is priced, so cost times yield is the same at every end.
    assert sheet.prediction.aim is not None
    assert sheet.prediction.aim.within_bands is not None
    assert low * float(sheet.prediction.aim.within_bands) == pytest.approx(
        best * sheet.prediction.best_yield_mol_per_mol(), rel=1e-9
    )
    assert "YN909" in _codes(sheet)


def test_nothing_breaks_even_below_the_cost_of_the_base(tmp_path: Path) -> None:
    prices = "  prices: {glucose: 0.3 EUR/kg, ammonia: 5 EUR/kg, lactate: 0.1 EUR/kg}\n"
    sheet = sheet_at(tmp_path, LACTATE + "  base: ammonia\n  pH: 6\n" + prices)
    figure = sheet.figure("break-even yield")
    assert figure.value is None
    assert figure.formula.startswith("none")


def test_air_that_passes_closes_too(tmp_path: Path) -> None:
    more = (
        "  productivity: 3 g/L/h\n  temperature: 30 degC\n  stirrer: 2 kW/m3\n"
        "  aeration: {vvm: 1, pressure: 2 bar, kLa: 300 1/h, dissolved oxygen: 0.3}\n"
    )
    sheet = sheet_at(tmp_path, AEROBIC + more)
    rest = [item for item in sheet.streams if item.name == "rest of the air"]
    assert [item.enters for item in rest] == [True, False]
    assert {item.residual for item in sheet.balances} == {0}
    assert _value(sheet, "stirrer") == pytest.approx(2 * 1000 / 3)
    parts = (
        _value(sheet, "heat of the cells, by combustion")
        + _value(sheet, "stirrer")
        + _value(sheet, "evaporation")
    )
    assert _value(sheet, "evaporation") < 0
    assert _value(sheet, "cooling duty") == pytest.approx(parts)
    assert _value(sheet, "kLa needed") * _value(sheet, "driving force") == pytest.approx(
        _value(sheet, "oxygen uptake, production")
    )
    dry = dict.fromkeys(["oxygen in the gas as it leaves", "saturation with air"])
    assert all(_value(sheet, name) > 0 for name in dry)


def test_a_demand_for_more_oxygen_than_the_gas_holds_is_told(tmp_path: Path) -> None:
    more = (
        "  productivity: 3 g/L/h\n  temperature: 30 degC\n"
        "  aeration: {vvm: 1, dissolved oxygen: 1}\n"
    )
    sheet = sheet_at(tmp_path, AEROBIC + more)
    assert "YN911" in _codes(sheet)
    with pytest.raises(KeyError, match="kLa needed"):
        sheet.figure("kLa needed")


def test_the_temperature_of_the_conditions_serves_the_plant(tmp_path: Path) -> None:
    text = AEROBIC.replace("plant:", "conditions: {temperature: 30 degC}\nplant:")
    sheet = sheet_at(tmp_path, text + "  productivity: 3 g/L/h\n")
    texts = [item.text for item in sheet.assumptions]
    assert "temperature of the broth from the conditions" in texts
    assert not any("kept and not used" in text for text in texts)
    assert _value(sheet, "kLa needed") > 0


def test_a_sparingly_soluble_acid_is_told_where_it_is_undissociated(tmp_path: Path) -> None:
    text = (
        "case: t\nequation: glucose + ? oxygen -> 1 fumarate\n"
        "either side: [carbon dioxide, water]\nplant:\n  product: fumarate\n  output: 9 t/y\n"
        "  on-stream: 8000 h/y\n  titre: 60 g/L\n"
    )
    assert "YN910" in _codes(sheet_at(tmp_path, text))
    held = sheet_at(tmp_path, text + "  base: sodium hydroxide\n  pH: 6\n")
    assert "YN910" not in _codes(held)


def test_predict_says_that_it_does_not_use_the_section(tmp_path: Path) -> None:
    answer = balance_case(case_at(tmp_path, LACTATE))
    texts = [item.text for item in answer.assumptions]
    assert "the section 'plant' is kept and not used here" in texts


def test_two_cases_in_two_currencies_are_not_put_side_by_side(tmp_path: Path) -> None:
    texts = [LACTATE + f"  prices: {{glucose: 0.3 {name}/kg}}\n" for name in ("EUR", "EUR", "USD")]
    cases = [case_at(tmp_path, text) for text in (LACTATE, *texts)]
    assert len(plant_cases(cases[:3])) == 3
    with pytest.raises(InputError, match="YN907: 'Lactate' has its prices in another currency"):
        plant_cases(cases)


def test_all_cases_that_are_refused_are_told(tmp_path: Path) -> None:
    bare = replace(case_at(tmp_path, LACTATE), plant=None)
    other = replace(bare, title="Other", span=None)
    with pytest.raises(InputError, match=r"YN913[\s\S]*YN913"):
        plant_cases([bare, other])


def test_the_ends_of_a_product_that_is_not_the_aim_are_those_of_its_range(tmp_path: Path) -> None:
    text = (
        "case: t\nequation: glucose + ? oxygen -> ? acetate\n"
        "either side: [carbon dioxide, water]\nmeasured:\n  acetate: 1.5 ± 0.1\n"
        "plant:\n  product: acetate\n  output: 100 t/y\n  on-stream: 8000 h/y\n"
        "  prices: {glucose: 0.3 EUR/kg, acetate: 1 EUR/kg}\n"
    )
    sheet = sheet_at(tmp_path, text)
    # Glucose 180.156 g/mol at 0.3 EUR/kg; acetic acid 60.052 g/mol; 1.3 to 1.7 mol/mol.
    for name, made in (("low", 1.7), ("high", 1.3)):
        assert _value(sheet, f"raw materials, {name}") == pytest.approx(
            0.3 * 180.156 / 60.052 / made
        )
    assert _value(sheet, "break-even yield") == pytest.approx(0.9)
    assert _value(sheet, "break-even yield by mass") == pytest.approx(0.3)


def test_a_second_liquid_is_told(tmp_path: Path) -> None:
    text = (
        "case: t\nequation: glucose -> ? n-butanol\neither side: [carbon dioxide, water]\n"
        "plant:\n  product: n-butanol\n  output: 9 t/y\n  on-stream: 8000 h/y\n  titre: 90 g/L\n"
    )
    sheet = sheet_at(tmp_path, text)
    (told,) = [item for item in sheet.findings if item.code == "YN910"]
    assert "falls out as a phase of its own" in told.message
    assert "73 g/L" in told.right


def test_a_salt_in_the_equation_leaves_no_heat(tmp_path: Path) -> None:
    text = (
        "case: t\ncompounds: {sodium lactate: C3H5O3Na}\n"
        "equation: glucose + ? sodium hydroxide -> ? sodium lactate + ? water\n"
        "plant:\n  product: sodium lactate\n  output: 9 t/y\n  on-stream: 8000 h/y\n"
    )
    sheet = sheet_at(tmp_path, text)
    assert "YN864" in _codes(sheet)
    assert not any(item.section == "Heat" for item in sheet.figures)
    assert dict(sheet.equation)["sodium lactate"] == 2


def test_phases_without_a_speed_tell_no_volume(tmp_path: Path) -> None:
    text = _network("  phases: {growth: 10 h, cells: 4 g/L}\n").replace(
        "  productivity: 3 g/L/h\n", ""
    )
    sheet = sheet_at(tmp_path, text)
    assert sheet.figure("cells at the end of growth").value == 4
    assert not any(item.name == "broth in all vessels" for item in sheet.figures)


def test_a_time_of_production_stands_for_a_productivity(tmp_path: Path) -> None:
    by_time = _network("  phases: {growth: 10 h, production: 30 h, cells: 4 g/L}\n").replace(
        "  productivity: 3 g/L/h\n", ""
    )
    by_rate = _network("  phases: {growth: 10 h, cells: 4 g/L}\n")
    volumes = [
        sheet_at(tmp_path, text).figure("broth in all vessels").value for text in (by_time, by_rate)
    ]
    assert volumes[0] == volumes[1] == Fraction(1000, 90) * 40
