"""Gas: the inert-gas balance, moisture, normal conditions and inorganic carbon, worked by hand."""

from __future__ import annotations

from math import exp
from typing import TYPE_CHECKING, Any

import pytest

from tests.unit.cultivations import addition, cultivation, gas, reading
from yieldnet.chemistry.vapour import saturation_pressure
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Severity
from yieldnet.model.cultivation import DissolvedCarbonDioxide, Moisture
from yieldnet.rates.offgas import (
    first_dissociation,
    gas_at,
    given_off,
    henry_constant,
    inorganic_carbon,
    molar_density,
    outlet_of,
)
from yieldnet.rates.rates import find_rates
from yieldnet.rates.values import Values, nominal

if TYPE_CHECKING:
    from yieldnet.model.cultivation import Cultivation, Gas
    from yieldnet.rates.result import RateResult

# Entering: 20.95 % oxygen, 0.04 % carbon dioxide, 79.01 % inert. Leaving: 19.00 and 2.10, so
# 78.90 % inert; 60 L/h at 0 degC and 101.325 kPa.
INLET = {"oxygen": (0.2095, 0.0), "carbon dioxide": (0.0004, 0.0)}
OUTLET = {"oxygen": ([0.19], 0.0001), "carbon dioxide": ([0.021], 0.0001)}
ENTERING = 60 * 101.325 / (8.314462618 * 273.15)
LEAVING = ENTERING * 0.7901 / 0.789
OXYGEN = LEAVING * 0.19 - ENTERING * 0.2095
CARBON = LEAVING * 0.021 - ENTERING * 0.0004


def _run(gas: Gas, **more: Any) -> Cultivation:
    return cultivation(
        "chemostat",
        **{
            "states": ["only"],
            "broth": {"biomass": ([5.0], 0.1), "glucose": ([0.001], 0.0001)},
            "volume": reading(1.5),
            "dilution_rate": ([0.1], 0.001),
            "additions": (addition("feed", {"glucose": (0.1, 0.001)}),),
            "gas": gas,
            **more,
        },
    )


def _rates(gas: Gas, row: int = 0) -> dict[str, float]:
    found = gas_at(Values(_run(gas)), row)
    assert found is not None
    return {name: nominal(rate) for name, rate in found.rates.items()}


def _codes(result: RateResult) -> list[str]:
    return [finding.code for finding in result.findings]


def _refused(run: Cultivation) -> list[str]:
    with pytest.raises(InputError, match="error YN8") as refused:
        find_rates(run)
    return [item.code for item in refused.value.findings if item.severity is Severity.ERROR]


def test_dry_gas_by_hand() -> None:
    rates = _rates(gas(flow_in=([60.0], 0.1), inlet=INLET, outlet=OUTLET))
    # 60 L/h over 22.41397 L/mol: 2.676902 mol/h enter, 2.680634 leave.
    assert pytest.approx(2.676902, rel=1e-6) == ENTERING
    assert rates["oxygen"] == pytest.approx(OXYGEN, rel=1e-12)
    assert rates["oxygen"] == pytest.approx(-0.051491, abs=1e-5)
    assert rates["carbon dioxide"] == pytest.approx(CARBON, rel=1e-12)


def test_the_flow_out_serves_as_well() -> None:
    litres = LEAVING / ENTERING * 60
    rates = _rates(gas(flow_out=([litres], 0.1), inlet=INLET, outlet=OUTLET))
    assert rates["oxygen"] == pytest.approx(OXYGEN, rel=1e-12)
    assert rates["carbon dioxide"] == pytest.approx(CARBON, rel=1e-12)


def test_normal_conditions_of_25_degrees_are_fewer_moles() -> None:
    cold = _rates(gas(flow_in=([60.0], 0.1), inlet=INLET, outlet=OUTLET))
    warm = _rates(gas(flow_in=([60.0], 0.1), inlet=INLET, outlet=OUTLET, normal_temperature=298.15))
    assert warm["oxygen"] / cold["oxygen"] == pytest.approx(273.15 / 298.15)
    half = _rates(
        gas(flow_in=([60.0], 0.1), inlet=INLET, outlet=OUTLET, normal_pressure=101.325 / 2)
    )
    assert half["oxygen"] / cold["oxygen"] == pytest.approx(0.5)


@pytest.mark.parametrize(
    ("temperature", "pressure", "litres"),
    # Molar volumes of ideal gas, CODATA 2018: 22.413 969 54 L/mol and 22.710 954 64 L/mol; 25 degC
    # and 1 atm: 24.465 L/mol (from memory).
    [
        (273.15, 101.325, 22.41396954),
        (273.15, 100.0, 22.71095464),
        (298.15, 101.325, 24.46540),
    ],
)
def test_molar_volumes(temperature: float, pressure: float, litres: float) -> None:
    assert 1 / molar_density(temperature, pressure) == pytest.approx(litres, rel=1e-6)


def test_moist_gas_gives_the_rates_of_the_same_gas_dried() -> None:
    # The same gases as in OUTLET and INLET, with water at 40 % of saturation at 20 degC in, and
    # saturated at 30 degC out: all dry fractions shrink by 1 - water, the meter sees more.
    total = 101.3
    water_in = 0.4 * 0.6112 * exp(17.62 * 20 / (243.12 + 20)) / total
    water_out = 0.6112 * exp(17.62 * 30 / (243.12 + 30)) / total
    wet = gas(
        flow_in=([60.0 / (1 - water_in)], 0.1),
        inlet={name: (value * (1 - water_in), 0.0) for name, (value, _) in INLET.items()},
        outlet={name: ([value * (1 - water_out)], sd) for name, ((value,), sd) in OUTLET.items()},
        moisture=Moisture(
            inlet=0.4,
            outlet=1.0,
            temperature_inlet=293.15,
            temperature_outlet=303.15,
            pressure=total,
        ),
    )
    rates = _rates(wet)
    assert rates["oxygen"] == pytest.approx(OXYGEN, rel=1e-9)
    assert rates["carbon dioxide"] == pytest.approx(CARBON, rel=1e-9)
    # Water taken for inert gas would be a fault of half the uptake here.
    plain = _rates(gas(flow_in=wet.flow_in, inlet=INLET, outlet=OUTLET, moisture=None))
    assert abs(plain["oxygen"] / OXYGEN - 1) > 0.005


@pytest.mark.parametrize(
    # Vapour pressure of water: 2.339 kPa at 20 degC, 4.247 at 30, 6.282 at 37 (steam tables, from
    # memory; the Magnus form is good to 0.5 %).
    ("celsius", "pressure"),
    [(0.0, 0.6112), (20.0, 2.339), (30.0, 4.247), (37.0, 6.282)],
)
def test_vapour_pressure_of_water(celsius: float, pressure: float) -> None:
    assert saturation_pressure(273.15 + celsius) == pytest.approx(pressure, rel=0.005)


def test_any_gas_counts_and_the_rest_is_inert() -> None:
    # 0.02 hydrogen and 0.05 carbon dioxide out of pure nitrogen: inert 1 and 0.93.
    rates = given_off(
        {},
        {"hydrogen": 0.02, "carbon dioxide": 0.05},
        inert_in=1.0,
        inert_out=0.93,
        flow_in=2.0,
    )
    assert rates["hydrogen"] == pytest.approx(2 / 0.93 * 0.02)
    assert rates["carbon dioxide"] == pytest.approx(2 / 0.93 * 0.05)


def test_nitrogen_that_is_not_in_the_equation_is_inert() -> None:
    listed = gas(
        flow_in=([60.0], 0.1),
        inlet={**INLET, "nitrogen": (0.78, 0.001)},
        outlet={**OUTLET, "nitrogen": ([0.78], 0.001)},
    )
    assert _rates(listed)["oxygen"] == pytest.approx(OXYGEN, rel=1e-12)


def test_a_flow_is_needed() -> None:
    with pytest.raises(ValueError, match="neither flow"):
        given_off({}, {}, inert_in=1.0, inert_out=1.0)
    assert _refused(_run(gas(inlet=INLET, outlet=OUTLET))) == ["YN829"]


def test_rates_of_the_run_and_the_respiratory_quotient() -> None:
    (state,) = find_rates(_run(gas(flow_in=([60.0], 0.1), inlet=INLET, outlet=OUTLET))).states
    assert state.volumetric_rate("oxygen").value == pytest.approx(-OXYGEN / 1.5)
    assert state.specific_rate("oxygen").value == pytest.approx(-OXYGEN / 1.5 / 5.0)
    assert state.respiratory_quotient is not None
    assert state.respiratory_quotient.value == pytest.approx(-CARBON / OXYGEN)
    # The flow cancels; oxygen out moves the rates of both. By differences:
    sd = 0.0
    for step_oxygen, step_carbon in ((1e-4, 0.0), (0.0, 1e-4)):
        oxygen, carbon = 0.19 + step_oxygen, 0.021 + step_carbon
        leaving = ENTERING * 0.7901 / (1 - oxygen - carbon)
        moved = -(leaving * carbon - ENTERING * 0.0004) / (leaving * oxygen - ENTERING * 0.2095)
        sd += (moved + CARBON / OXYGEN) ** 2
    assert state.respiratory_quotient.sd == pytest.approx(sd**0.5, rel=0.02)


def test_no_quotient_where_no_oxygen_is_taken_up() -> None:
    same = {"oxygen": ([0.2095], 0.0001), "carbon dioxide": ([0.0004], 0.0001)}
    (state,) = find_rates(_run(gas(flow_in=([60.0], 0.1), inlet=INLET, outlet=same))).states
    assert state.respiratory_quotient is None


def test_two_flows_are_checked_against_each_other() -> None:
    litres = LEAVING / ENTERING * 60
    good = find_rates(
        _run(gas(flow_in=([60.0], 0.1), flow_out=([litres], 0.1), inlet=INLET, outlet=OUTLET))
    )
    assert _codes(good) == []
    leak = find_rates(
        _run(gas(flow_in=([60.0], 0.1), flow_out=([litres - 1], 0.1), inlet=INLET, outlet=OUTLET))
    )
    assert _codes(leak) == ["YN835"]
    # The flow in is used either way.
    for name in ("oxygen", "carbon dioxide"):
        assert good.states[0].volumetric_rate(name) == leak.states[0].volumetric_rate(name)


PURE = {"oxygen": (0.6, 0.0), "carbon dioxide": (0.4, 0.0)}


def test_without_inert_gas_both_flows_are_needed() -> None:
    outlet = {"oxygen": ([0.5], 0.001), "carbon dioxide": ([0.45], 0.001)}
    assert _refused(_run(gas(flow_in=([60.0], 0.1), inlet=PURE, outlet=outlet))) == ["YN827"]
    alone = Values(_run(gas(flow_in=([60.0], 0.1), inlet=PURE, outlet=outlet)))
    assert gas_at(alone, 0) is None
    rates = _rates(gas(flow_in=([60.0], 0.1), flow_out=([66.0], 0.1), inlet=PURE, outlet=outlet))
    density = ENTERING / 60
    assert rates["oxygen"] == pytest.approx(density * (66 * 0.5 - 60 * 0.6))
    result = find_rates(
        _run(gas(flow_in=([60.0], 0.1), flow_out=([66.0], 0.1), inlet=PURE, outlet=outlet))
    )
    assert any("both measured flows" in item.text for item in result.assumptions)


def test_the_leaving_gas_needs_an_inert_part_as_well() -> None:
    full = {"oxygen": ([0.6], 0.001), "carbon dioxide": ([0.5], 0.001)}
    assert _refused(_run(gas(flow_in=([60.0], 0.1), inlet=INLET, outlet=full))) == ["YN828"]


def test_a_fraction_that_is_only_in_the_entering_gas_is_refused() -> None:
    half = {"carbon dioxide": ([0.021], 0.0001)}
    assert _refused(_run(gas(flow_in=([60.0], 0.1), inlet=INLET, outlet=half))) == ["YN829"]


def test_a_fraction_that_is_only_in_the_leaving_gas_is_told() -> None:
    result = find_rates(
        _run(
            gas(flow_in=([60.0], 0.1), inlet={"oxygen": (0.2095, 0.0)}, outlet=OUTLET),
        )
    )
    assert any("carbon dioxide is not in the entering gas" in x.text for x in result.assumptions)


def test_water_counts_once() -> None:
    wet = gas(
        flow_in=([60.0], 0.1),
        inlet=INLET,
        outlet={**OUTLET, "water": ([0.02], 0.001)},
        moisture=Moisture(
            inlet=0.0,
            outlet=1.0,
            temperature_inlet=293.15,
            temperature_outlet=303.15,
            pressure=101.3,
        ),
    )
    assert _refused(_run(wet)) == ["YN837"]


@pytest.mark.parametrize(
    # Henry's constant 0.0339 mol/L/atm at 25 degC, 0.0251 at 37 (chemistry texts, from memory), and
    # pK1 6.352 at 25 degC, 6.309 at 35 (Harned and Davis 1943, from memory).
    ("celsius", "solubility", "dissociation"),
    [(25.0, 0.0339, 6.352), (35.0, 0.0260, 6.309)],
)
def test_constants_of_carbon_dioxide(
    celsius: float, solubility: float, dissociation: float
) -> None:
    kelvin = 273.15 + celsius
    assert henry_constant(kelvin) * 101.325 == pytest.approx(solubility, rel=0.02)
    assert first_dissociation(kelvin) == pytest.approx(dissociation, abs=0.01)


def test_inorganic_carbon_by_hand() -> None:
    # 25 degC, pH 7.0: pK1 = 3404.71/298.15 + 0.032786 * 298.15 - 14.8435 = 6.35109, so
    # 10^0.64891 = 4.4556 bicarbonate per carbon dioxide; 3.3e-4 mol/L/kPa * 2 kPa * 5.4556.
    assert inorganic_carbon(2.0, 7.0, 298.15) == pytest.approx(3.6007e-3, rel=2e-4)


def test_inorganic_carbon_leaves_with_the_broth() -> None:
    plain = gas(flow_in=([60.0], 0.1), inlet=INLET, outlet=OUTLET)
    counted = gas(
        flow_in=([60.0], 0.1),
        inlet=INLET,
        outlet=OUTLET,
        dissolved=DissolvedCarbonDioxide(ph=reading(7.0, 0.05), temperature=303.15, pressure=101.3),
    )
    before, after = (find_rates(_run(item)) for item in (plain, counted))
    pressure = 0.021 * (101.3 - 0.6112 * exp(17.62 * 30 / (243.12 + 30)))
    bicarbonate = 10 ** (7 - (3404.71 / 303.15 + 0.032786 * 303.15 - 14.8435))
    henry = 3.3e-4 * exp(2400 * (1 / 303.15 - 1 / 298.15))
    more = 0.1 * henry * pressure * (1 + bicarbonate)
    rates = [item.states[0].volumetric_rate("carbon dioxide") for item in (before, after)]
    assert rates[1].value - rates[0].value == pytest.approx(more, rel=1e-9)
    # 0.05 in pH moves what is dissolved as bicarbonate by 12 %.
    assert rates[1].sd > rates[0].sd
    texts = {item.text: item for item in after.assumptions}
    henry_told = texts["solubility of carbon dioxide at 25 degC"]
    assert "Sander" in henry_told.source
    assert float(henry_told.value or 0) == 3.3e-4
    assert any("Harned" in item.source for item in after.assumptions)
    left_out = "carbon dioxide dissolved in the broth is left out"
    assert left_out in {item.text for item in before.assumptions}
    assert left_out not in texts


@pytest.mark.parametrize(
    ("ph", "temperature", "words"),
    [(8.6, 303.15, "carbonate is left out"), (7.0, 343.15, "outside its range")],
)
def test_formulas_have_their_range(ph: float, temperature: float, words: str) -> None:
    counted = gas(
        flow_in=([60.0], 0.1),
        inlet=INLET,
        outlet=OUTLET,
        dissolved=DissolvedCarbonDioxide(
            ph=reading(ph, 0.05), temperature=temperature, pressure=101.3
        ),
    )
    (finding,) = find_rates(_run(counted)).findings
    assert finding.code == "YN839"
    assert words in finding.message


def test_moisture_beyond_its_formula_is_told() -> None:
    wet = gas(
        flow_in=([60.0], 0.1),
        inlet=INLET,
        outlet=OUTLET,
        moisture=Moisture(
            inlet=0.0,
            outlet=0.1,
            temperature_inlet=293.15,
            temperature_outlet=340.0,
            pressure=101.3,
        ),
    )
    (finding,) = find_rates(_run(wet)).findings
    assert finding.code == "YN839"
    assert "340 K" in finding.left


def test_carbon_dioxide_is_measured_or_calculated_not_both() -> None:
    counted = gas(
        flow_in=([60.0], 0.1),
        inlet=INLET,
        outlet=OUTLET,
        dissolved=DissolvedCarbonDioxide(ph=reading(7.0, 0.05), temperature=303.15, pressure=101.3),
    )
    broth = {
        "biomass": ([5.0], 0.1),
        "glucose": ([0.001], 0.0001),
        "carbon dioxide": ([0.002], 0.0001),
    }
    assert _refused(_run(counted, broth=broth)) == ["YN837"]


def test_a_row_without_a_fraction_has_no_gas_rates() -> None:
    gappy = gas(
        flow_in=([60.0, 60.0], 0.1),
        inlet=INLET,
        outlet={"oxygen": ([0.19, None], 0.0001), "carbon dioxide": ([0.021, 0.021], 0.0001)},
    )
    run = _run(
        gappy,
        states=["only", "only"],
        broth={"biomass": ([5.0, 5.0], 0.1), "glucose": ([0.001, 0.001], 0.0001)},
        dilution_rate=([0.1, 0.1], 0.001),
    )
    assert gas_at(Values(run), 1) is None
    (state,) = find_rates(run).states
    assert state.volumetric_rate("oxygen").value == pytest.approx(-OXYGEN / 1.5)


@pytest.mark.parametrize("meter", ["flow_in", "flow_out"])
def test_fractions_follow_back_from_the_rates(meter: str) -> None:
    flows: dict[str, Any] = {meter: ([60.0], 0.1)}
    values = Values(_run(gas(inlet=INLET, outlet=OUTLET, **flows)))
    found = gas_at(values, 0)
    assert found is not None
    back = outlet_of(values, 0, {name: nominal(rate) for name, rate in found.rates.items()})
    assert back == pytest.approx({"oxygen": 0.19, "carbon dioxide": 0.021})
    moved = gas_at(values, 0, {"oxygen": 0.18})
    assert moved is not None
    assert nominal(moved.rates["oxygen"]) < nominal(found.rates["oxygen"])


def test_gas_needs_a_volume() -> None:
    run = _run(gas(flow_in=([60.0], 0.1), inlet=INLET, outlet=OUTLET), volume=None)
    assert _refused(run) == ["YN830"]


def test_a_run_without_gas_has_none() -> None:
    run = cultivation("chemostat", states=["only"], broth={"glucose": ([0.1], 0.001)})
    assert gas_at(Values(run), 0) is None


def test_no_gas_holds_more_than_all_of_itself() -> None:
    full = {"oxygen": ([0.6], 0.001), "carbon dioxide": ([0.5], 0.001)}
    run = _run(gas(flow_in=([60.0], 0.1), flow_out=([60.0], 0.1), inlet=INLET, outlet=full))
    assert _refused(run) == ["YN828"]
