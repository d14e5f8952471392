"""Constants of gases and water that a plant sheet uses, each with its source."""

from __future__ import annotations

from fractions import Fraction
from math import exp

from yieldnet.chemistry.vapour import ICE_POINT, saturation_pressure
from yieldnet.foundation.sourced import SourcedValue
from yieldnet.plant.sheet import COMMON_PRACTICE

__all__ = [
    "AIR_MASS",
    "ATMOSPHERE",
    "HENRY_CONSTANT",
    "HENRY_REFERENCE",
    "HENRY_TEMPERATURE",
    "HIGHEST_KLA",
    "HIGHEST_UPTAKE",
    "MOLAR_VOLUME",
    "OXYGEN_IN_AIR",
    "SMALLEST_SEED",
    "USUAL_FILL",
    "VAPORISATION",
    "VAPORISATION_SLOPE",
    "henry_constant",
    "vaporisation_heat",
    "vapour_pressure",
]

_SANDER = (
    "Sander (2023) Atmospheric Chemistry and Physics 23:10901, oxygen, value of most reviews (seen"
    " at henrys-law.org)"
)
_STEAM = "straight line through the steam tables from 0 to 60 degC (from memory)"

HENRY_CONSTANT = SourcedValue(value=Fraction("1.3e-5"), unit="mol/m3/Pa", source=_SANDER)
"""Solubility of oxygen in water at the reference temperature (Sander 2023)."""
HENRY_TEMPERATURE = SourcedValue(value=Fraction(1500), unit="K", source=_SANDER)
"""Slope of ln(solubility) over 1/T (Sander 2023)."""
HENRY_REFERENCE = SourcedValue(value=Fraction("298.15"), unit="K", source=_SANDER)
"""Reference temperature of the solubility (Sander 2023)."""
ATMOSPHERE = SourcedValue(
    value=Fraction("1.01325"), unit="bar", source="standard atmosphere, by definition"
)
"""Pressure where none is given (by definition)."""
OXYGEN_IN_AIR = SourcedValue(
    value=Fraction("0.209476"), unit="mol/mol", source="US Standard Atmosphere 1976, dry air"
)
"""Oxygen in dry air (US Standard Atmosphere 1976)."""
AIR_MASS = SourcedValue(
    value=Fraction("28.9644"), unit="g/mol", source="US Standard Atmosphere 1976, dry air"
)
"""Molar mass of dry air (US Standard Atmosphere 1976)."""
MOLAR_VOLUME = SourcedValue(
    value=Fraction("0.02241396954"),
    unit="m3/mol",
    source="ideal gas at 273.15 K and 101.325 kPa, CODATA 2018",
)
"""Volume of a mole of gas at 0 degC and 1.01325 bar (CODATA 2018)."""
VAPORISATION = SourcedValue(value=Fraction("2500.8"), unit="kJ/kg", source=_STEAM)
"""Heat of vaporisation of water at 0 degC (steam tables, from memory)."""
VAPORISATION_SLOPE = SourcedValue(value=Fraction("2.38"), unit="kJ/kg/K", source=_STEAM)
"""What it loses with each degree (steam tables, from memory)."""
HIGHEST_UPTAKE = SourcedValue(value=Fraction(150), unit="mol/m3/h", source=COMMON_PRACTICE)
"""Oxygen uptake that large stirred vessels hardly pass with air (common practice, no source)."""
HIGHEST_KLA = SourcedValue(value=Fraction(720), unit="1/h", source=COMMON_PRACTICE)
"""kLa that large stirred vessels hardly pass, 0.2 1/s (common practice, no source)."""
USUAL_FILL = SourcedValue(value=Fraction(3, 4), unit="-", source=COMMON_PRACTICE)
"""Broth in a vessel over its volume where nothing is said (common practice, no source)."""
SMALLEST_SEED = SourcedValue(value=Fraction(1, 100), unit="m3", source=COMMON_PRACTICE)
"""Seed volume below which flasks take over (common practice, no source)."""


def henry_constant(celsius: float) -> float:
    """Solubility of oxygen in water.

    Parameters
    ----------
    celsius : float
        Temperature [degC].

    Returns
    -------
    float
        Concentration over partial pressure [mol/m3/Pa].

    Notes
    -----
    ``H = 1.3e-5 exp(1500 (1/T - 1/298.15))``, T in K. Salts and sugars, which lower it by some
    10 to 20 % in a broth, are left out.

    References
    ----------
    Sander (2023) Atmospheric Chemistry and Physics 23:10901.

    Examples
    --------
    >>> f"{henry_constant(37):.3g}"
    '1.07e-05'
    """
    kelvin = celsius + float(ICE_POINT.value)
    step = 1 / kelvin - 1 / float(HENRY_REFERENCE.value)
    return float(HENRY_CONSTANT.value) * exp(float(HENRY_TEMPERATURE.value) * step)


def vapour_pressure(celsius: float) -> float:
    """Saturation pressure of water vapour, in the units of a plant.

    Parameters
    ----------
    celsius : float
        Temperature [degC].

    Returns
    -------
    float
        Pressure [bar].

    Notes
    -----
    See :func:`yieldnet.chemistry.vapour.saturation_pressure`.

    Examples
    --------
    >>> f"{vapour_pressure(37):.4f}"
    '0.0627'
    """
    return saturation_pressure(celsius + float(ICE_POINT.value)) / 100


def vaporisation_heat(celsius: float) -> float:
    """Heat of vaporisation of water.

    Parameters
    ----------
    celsius : float
        Temperature [degC].

    Returns
    -------
    float
        Heat [kJ/kg].

    Notes
    -----
    ``2500.8 - 2.38 t``, t in degC: a straight line through the steam tables (from memory).

    Examples
    --------
    >>> round(vaporisation_heat(37))
    2413
    """
    return float(VAPORISATION.value) - float(VAPORISATION_SLOPE.value) * celsius
