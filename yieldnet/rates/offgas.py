"""Oxygen uptake, carbon dioxide given off and the like, by the balance of the inert gas.

What the cells neither use nor make leaves as it came, so the ratio of its fractions in both gases
is the ratio of their flows. The inert fraction is 1 less the compounds of the equation less water
vapour. Dissolved carbon dioxide and bicarbonate follow from the carbon dioxide of the leaving gas.

Rates are given off positive, in mol/h for the whole vessel.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import exp
from typing import TYPE_CHECKING

from yieldnet.chemistry.vapour import saturation_pressure
from yieldnet.model.case import BAND
from yieldnet.rates.constants import (
    DISSOCIATION_CONSTANT,
    DISSOCIATION_INVERSE,
    DISSOCIATION_LINEAR,
    GAS_CONSTANT,
    HENRY_CONSTANT,
    HENRY_REFERENCE,
    HENRY_TEMPERATURE,
)
from yieldnet.rates.values import deviation, nominal

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.model.cultivation import Cultivation, Gas, Series
    from yieldnet.rates.values import PerhapsQuantity, Quantity, Values

__all__ = [
    "CARBON_DIOXIDE",
    "OXYGEN",
    "WATER",
    "GasRow",
    "first_dissociation",
    "gas_at",
    "gas_flows",
    "given_off",
    "henry_constant",
    "inorganic_carbon",
    "is_there",
    "molar_density",
    "outlet_of",
    "reacting",
    "vapour_fractions",
]

CARBON_DIOXIDE = "carbon dioxide"
"""Name of the compound whose dissolved share can be counted."""
OXYGEN = "oxygen"
"""Name of the compound that the respiratory quotient divides by."""
WATER = "water"
"""Name of the compound that moisture stands for."""


def molar_density(temperature: float, pressure: float) -> float:
    """Amount in one litre of ideal gas, p / (R T).

    Parameters
    ----------
    temperature : float
        Temperature [K].
    pressure : float
        Pressure [kPa].

    Returns
    -------
    float
        Amount per volume [mol/L].

    Examples
    --------
    >>> round(1 / molar_density(273.15, 101.325), 3)
    22.414
    """
    return pressure / (float(GAS_CONSTANT.value) * temperature)


def henry_constant(temperature: float) -> float:
    """Solubility of carbon dioxide in water.

    Parameters
    ----------
    temperature : float
        Temperature [K].

    Returns
    -------
    float
        Dissolved carbon dioxide per partial pressure [mol/L/kPa].

    Notes
    -----
    3.3e-4 mol/m3/Pa exp(2400 K (1/T - 1/298.15 K)), Sander (2015). Salts, which lower it, are
    left out.

    Examples
    --------
    >>> round(henry_constant(298.15), 6)
    0.00033
    """
    inverse = 1 / temperature - 1 / float(HENRY_REFERENCE.value)
    # mol/m3/Pa and mol/L/kPa are the same number.
    return float(HENRY_CONSTANT.value) * exp(float(HENRY_TEMPERATURE.value) * inverse)


def first_dissociation(temperature: float) -> float:
    """The value pK1 of dissolved carbon dioxide, 3404.71/T + 0.032786 T - 14.8435.

    Parameters
    ----------
    temperature : float
        Temperature [K].

    Returns
    -------
    float
        Negative decimal logarithm of the first dissociation constant [-].

    References
    ----------
    Harned and Davis (1943) Journal of the American Chemical Society 65:2030.

    Examples
    --------
    >>> round(first_dissociation(298.15), 3)
    6.351
    """
    return (
        float(DISSOCIATION_INVERSE.value) / temperature
        + float(DISSOCIATION_LINEAR.value) * temperature
        - float(DISSOCIATION_CONSTANT.value)
    )


def inorganic_carbon(pressure: Quantity, ph: Quantity, temperature: float) -> Quantity:
    """Dissolved carbon dioxide with bicarbonate at equilibrium with a gas.

    Parameters
    ----------
    pressure : float or value with errors
        Partial pressure of carbon dioxide [kPa].
    ph : float or value with errors
        Of the broth [-].
    temperature : float
        Of the broth [K].

    Returns
    -------
    float or value with errors
        Total concentration [mol/L].

    Notes
    -----
    c = H p (1 + 10^(pH - pK1)); carbonate and the activity of ions are left out.

    Examples
    --------
    >>> round(inorganic_carbon(5.0, first_dissociation(298.15), 298.15), 6)
    0.0033
    """
    bicarbonate = 10 ** (ph - first_dissociation(temperature))
    return henry_constant(temperature) * pressure * (1 + bicarbonate)


def given_off(
    inlet: Mapping[str, Quantity],
    outlet: Mapping[str, Quantity],
    *,
    inert_in: Quantity,
    inert_out: Quantity,
    flow_in: PerhapsQuantity = None,
    flow_out: PerhapsQuantity = None,
) -> dict[str, Quantity]:
    """What each compound of the gas gains on its way through the vessel.

    Parameters
    ----------
    inlet, outlet : mapping of str to float or value with errors
        Mole fractions; what the inlet does not list is not in it [mol/mol].
    inert_in, inert_out : float or value with errors
        Fractions of the inert gas; not used where both flows are given [mol/mol].
    flow_in, flow_out : float, value with errors or None
        Flows of the whole gas; the one not given follows from the inert gas [mol/h].

    Returns
    -------
    dict of str to float or value with errors
        Rate by compound of the outlet, given off positive [mol/h].

    Raises
    ------
    ValueError
        If neither flow is given.

    Notes
    -----
    F_out y_out - F_in y_in with F_in inert_in = F_out inert_out.

    Examples
    --------
    >>> rates = given_off(
    ...     {"oxygen": 0.21}, {"oxygen": 0.19, "carbon dioxide": 0.02},
    ...     inert_in=0.79, inert_out=0.79, flow_in=1.0)
    >>> {name: round(rate, 4) for name, rate in rates.items()}
    {'oxygen': -0.02, 'carbon dioxide': 0.02}
    """
    if flow_in is None and flow_out is None:
        raise ValueError("neither flow is given")
    if flow_in is None:
        flow_in = flow_out * inert_out / inert_in
    elif flow_out is None:
        flow_out = flow_in * inert_in / inert_out
    return {
        name: flow_out * fraction - flow_in * inlet.get(name, 0.0)
        for name, fraction in outlet.items()
    }


@dataclass(frozen=True, slots=True, kw_only=True)
class GasRow:
    """Gas of one row.

    Parameters
    ----------
    rates : dict of str to float or value with errors
        By compound, given off positive [mol/h].
    inert_in, inert_out : float or value with errors
        Fractions of the inert gas [mol/mol].
    flow_in, flow_out : float, value with errors or None
        As measured [mol/h].
    carbon_out, carbon_in : float, value with errors or None
        Inorganic carbon dissolved at equilibrium with the leaving and the entering gas [mol/L];
        ``None`` where it is not counted.
    """

    rates: dict[str, Quantity]
    inert_in: Quantity
    inert_out: Quantity
    flow_in: PerhapsQuantity
    flow_out: PerhapsQuantity
    carbon_out: PerhapsQuantity
    carbon_in: PerhapsQuantity


def vapour_fractions(gas: Gas) -> tuple[float, float]:
    """Fractions of water vapour in the entering and the leaving gas [mol/mol]."""
    wet = gas.moisture
    if wet is None:
        return 0.0, 0.0
    return (
        wet.inlet * saturation_pressure(wet.temperature_inlet) / wet.pressure,
        wet.outlet * saturation_pressure(wet.temperature_outlet) / wet.pressure,
    )


def reacting(run: Cultivation, series: tuple[Series, ...]) -> tuple[Series, ...]:
    """Series of compounds that the equation lists; all others are part of the inert gas."""
    names = {run.basis.name, *(item.name for item in run.coefficients)}
    return tuple(item for item in series if item.compound in names)


def gas_flows(gas: Gas, values: Values, row: int) -> tuple[PerhapsQuantity, PerhapsQuantity]:
    """Flow in and flow out of a row, ``None`` where it was not measured [mol/h]."""
    density = molar_density(gas.normal_temperature, gas.normal_pressure)
    found = (values.cell(series, row) for series in (gas.flow_in, gas.flow_out))
    flow_in, flow_out = (None if flow is None else flow * density for flow in found)
    return flow_in, flow_out


def is_there(fraction: Quantity) -> bool:
    """Whether a fraction is beyond zero by more than its band; exact ones by rounding."""
    return nominal(fraction) > max(BAND * deviation(fraction), 1e-9)


def outlet_of(values: Values, row: int, rates: Mapping[str, float]) -> dict[str, float]:
    """Fractions of the leaving gas that rates would give, the entering gas as it was measured.

    Parameters
    ----------
    values : Values
        Values of a run that has gas.
    row : int
        Row, from 0; one for which :func:`gas_at` gives rates [-].
    rates : mapping of str to float
        Given off positive, for every compound of the outlet [mol/h].

    Returns
    -------
    dict of str to float
        Fraction by compound [mol/mol].
    """
    run, gas = values.run, values.run.gas
    assert gas is not None
    entering = {item.compound: nominal(values.cell(item, row)) for item in reacting(run, gas.inlet)}
    flow_in, flow_out = (
        None if flow is None else nominal(flow) for flow in gas_flows(gas, values, row)
    )
    water_in, water_out = vapour_fractions(gas)
    gained = sum(rates.values())
    if flow_in is None:
        assert flow_out is not None
        flow_in = (flow_out * (1 - water_out) - gained) / (1 - water_in)
    leaving = (flow_in * (1 - water_in) + gained) / (1 - water_out)
    return {
        name: (rate + flow_in * entering.get(name, 0.0)) / leaving for name, rate in rates.items()
    }


def gas_at(
    values: Values, row: int, outlet_levels: Mapping[str, float] | None = None
) -> GasRow | None:
    """Rates from the gas of one row; ``None`` where a reading that they need is missing.

    Parameters
    ----------
    values : Values
        Values of a run that has gas.
    row : int
        Row, from 0 [-].
    outlet_levels : mapping of str to float or None
        Other values of the leaving fractions, their errors kept [mol/mol].

    Returns
    -------
    GasRow or None
        Rates in mol/h, given off positive.
    """
    run, gas = values.run, values.run.gas
    if gas is None:
        return None
    sides = [
        {item.compound: values.cell(item, row) for item in reacting(run, series)}
        for series in (gas.inlet, gas.outlet)
    ]
    inlet, outlet = sides
    flow_in, flow_out = gas_flows(gas, values, row)
    missing = any(value is None for side in sides for value in side.values())
    if missing or (flow_in is None and flow_out is None):
        return None
    for name, level in (outlet_levels or {}).items():
        outlet[name] = outlet[name] - nominal(outlet[name]) + level
    water_in, water_out = vapour_fractions(gas)
    inert_in = 1 - sum(inlet.values(), start=water_in)
    inert_out = 1 - sum(outlet.values(), start=water_out)
    balanced = is_there(inert_in) and is_there(inert_out)
    if not balanced and (flow_in is None or flow_out is None):
        return None
    rates = given_off(
        inlet,
        outlet,
        inert_in=inert_in,
        inert_out=inert_out,
        flow_in=flow_in,
        flow_out=flow_out if flow_in is None or not balanced else None,
    )
    carbon_out = carbon_in = None
    if gas.dissolved is not None and CARBON_DIOXIDE in outlet:
        broth = gas.dissolved
        dry = broth.pressure - saturation_pressure(broth.temperature)
        ph = values.of(broth.ph)
        carbon_out, carbon_in = (
            inorganic_carbon(fraction / (1 - water) * dry, ph, broth.temperature)
            for fraction, water in (
                (outlet[CARBON_DIOXIDE], water_out),
                (inlet.get(CARBON_DIOXIDE, 0.0), water_in),
            )
        )
    return GasRow(
        rates=rates,
        inert_in=inert_in,
        inert_out=inert_out,
        flow_in=flow_in,
        flow_out=flow_out,
        carbon_out=carbon_out,
        carbon_in=carbon_in,
    )
