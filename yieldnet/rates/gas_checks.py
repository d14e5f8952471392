"""What is wrong with the gas data of a run, and what they take for granted."""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.chemistry.vapour import MAGNUS_FACTOR, MAGNUS_PRESSURE, MAGNUS_TEMPERATURE
from yieldnet.foundation.findings import Severity
from yieldnet.model.case import BAND
from yieldnet.rates.constants import (
    DISSOCIATION_CONSTANT,
    DISSOCIATION_INVERSE,
    DISSOCIATION_LINEAR,
    GAS_CONSTANT,
    HENRY_CONSTANT,
    HENRY_TEMPERATURE,
)
from yieldnet.rates.offgas import WATER, gas_flows, is_there, reacting, vapour_fractions
from yieldnet.rates.values import deviation, nominal, place_of, row_count

if TYPE_CHECKING:
    from yieldnet.model.cultivation import Cultivation, Gas
    from yieldnet.rates.values import Notes, Quantity, Values

__all__ = ["check_gas"]

MAGNUS_RANGE = (228.15, 333.15)
"""Where the Magnus form holds over water: -45 to 60 degC (WMO-No. 8) [K]."""
DISSOCIATION_RANGE = (273.15, 323.15)
"""Where pK1 was measured: 0 to 50 degC (Harned and Davis 1943) [K]."""
CARBONATE_PH = 8.3
"""Half of pK1 + pK2 near 25 degC (6.35 and 10.33); beyond it carbonate, which is left out, counts
more than dissolved carbon dioxide, which is not (Stumm and Morgan, Aquatic Chemistry) [-]."""


def check_gas(values: Values, notes: Notes) -> None:
    """Tell what is wrong with the gas data of a run, and what they take for granted.

    Parameters
    ----------
    values : Values
        Values of the run.
    notes : Notes
        Takes findings and assumptions.
    """
    run, gas = values.run, values.run.gas
    if gas is None:
        return
    inlet, outlet = (reacting(run, series) for series in (gas.inlet, gas.outlet))
    if gas.flow_in is None and gas.flow_out is None:
        notes.findings.add(
            "YN829",
            "there are gas fractions and no gas flow",
            run.span,
            hint="Give the flow in or the flow out.",
        )
        return
    leaving = {item.compound for item in outlet}
    for item in inlet:
        if item.compound not in leaving:
            notes.findings.add(
                "YN829",
                f"{item.compound} is measured in the entering gas and not in the leaving one",
                item.span or run.span,
                left=f"{item.heading or item.compound + ' in'} given",
                right=f"{item.compound} out missing",
                hint="Give its fraction in the leaving gas, too: the inert gas is what is left.",
            )
    for item in outlet:
        if item.compound not in {other.compound for other in inlet}:
            notes.assume(f"{item.compound} is not in the entering gas, which does not list it")
    if gas.moisture is not None and WATER in {item.compound for item in (*inlet, *outlet)}:
        notes.findings.add(
            "YN837",
            "water vapour is given as a gas fraction and as moisture",
            run.span,
            left="fraction of water",
            right="moisture",
            hint="Keep one of the two.",
        )
    if notes.findings.refused:
        return
    _check_ranges(gas, run, notes)
    _tell_constants(gas, notes)
    for row in range(row_count(run)):
        _check_row(values, row, notes)


def _check_row(values: Values, row: int, notes: Notes) -> None:
    run, gas = values.run, values.run.gas
    if gas is None:
        return
    water = vapour_fractions(gas)
    flows = gas_flows(gas, values, row)
    where = place_of(run, row)
    inert: list[Quantity] = []
    for series, vapour, word in zip(
        (gas.inlet, gas.outlet), water, ("entering", "leaving"), strict=True
    ):
        cells = [values.cell(item, row) for item in reacting(run, series)]
        if any(cell is None for cell in cells):
            return
        rest = 1 - sum(cells, start=vapour)
        inert.append(rest)
        # Two meters serve without inert gas, but no gas holds more than all of itself.
        too_much = is_there(-rest)
        if is_there(rest) or (None not in flows and not too_much):
            continue
        notes.findings.add(
            "YN827" if word == "entering" else "YN828",
            f"the {word} gas has no inert part",
            where,
            left=f"listed compounds and water sum to {1 - nominal(rest):.4g}",
            right=f"inert part {nominal(rest):.3g} ± {deviation(rest):.2g}",
            hint="Give both gas flows, or check the fractions and their units.",
        )
    if None in flows:
        return
    flow_in, flow_out = flows
    if not all(is_there(rest) for rest in inert):
        notes.assume("the gas has no inert part, so both measured flows are used as they are")
        return
    notes.assume("both gas flows are given: the flow out is checked and not used")
    gap = flow_in * inert[0] - flow_out * inert[1]
    if abs(nominal(gap)) > BAND * deviation(gap) + 1e-9 * nominal(flow_in):
        notes.findings.add(
            "YN835",
            "the two gas flows do not carry the same inert gas",
            where,
            left=f"in {nominal(flow_in * inert[0]):.4g} mol/h",
            right=f"out {nominal(flow_out * inert[1]):.4g} mol/h",
            hint="Check both meters and look for a leak; the flow in was used.",
            severity=Severity.WARNING,
        )


def _check_ranges(gas: Gas, run: Cultivation, notes: Notes) -> None:
    """Formulas used where they were not measured."""
    wet, broth = gas.moisture, gas.dissolved
    asked: list[tuple[str, float, tuple[float, float]]] = []
    if wet is not None:
        asked.append(("saturation pressure", wet.temperature_inlet, MAGNUS_RANGE))
        asked.append(("saturation pressure", wet.temperature_outlet, MAGNUS_RANGE))
    if broth is not None:
        asked.append(("dissociation of carbon dioxide", broth.temperature, DISSOCIATION_RANGE))
        if broth.ph.value > CARBONATE_PH:
            notes.findings.add(
                "YN839",
                "carbonate is left out, and counts at this pH",
                broth.ph.span or run.span,
                left=f"pH {broth.ph.value:g}",
                right=f"good up to {CARBONATE_PH:g}",
                hint="Measure inorganic carbon in the broth instead.",
                severity=Severity.WARNING,
            )
    for what, temperature, (low, high) in asked:
        if not low <= temperature <= high:
            notes.findings.add(
                "YN839",
                f"the formula for the {what} is used outside its range",
                run.span,
                left=f"{temperature:g} K",
                right=f"good from {low:g} to {high:g} K",
                hint="Check the temperature.",
                severity=Severity.WARNING,
            )


def _tell_constants(gas: Gas, notes: Notes) -> None:
    notes.assume_constant("gas flows are turned into mol as ideal gas", GAS_CONSTANT)
    notes.assume("gas of the vessel is well mixed, and what it holds is constant (steady gas)")
    if gas.moisture is not None or gas.dissolved is not None:
        notes.assume_constant("saturation pressure of water at 0 degC (Magnus)", MAGNUS_PRESSURE)
        notes.assume_constant("factor of the exponent (Magnus)", MAGNUS_FACTOR)
        notes.assume_constant("temperature in the divisor (Magnus)", MAGNUS_TEMPERATURE)
    if gas.dissolved is None:
        return
    notes.assume("broth is at equilibrium with the leaving gas, which is moist in the vessel")
    notes.assume("what flows in brings inorganic carbon only if the run lists it")
    notes.assume_constant("solubility of carbon dioxide at 25 degC", HENRY_CONSTANT)
    notes.assume_constant("slope of its logarithm over 1/T", HENRY_TEMPERATURE)
    notes.assume_constant("pK1 of carbonic acid, term in 1/T", DISSOCIATION_INVERSE)
    notes.assume_constant("pK1 of carbonic acid, term in T", DISSOCIATION_LINEAR)
    notes.assume_constant("pK1 of carbonic acid, subtracted", DISSOCIATION_CONSTANT)
