"""Water vapour over water: its saturation pressure, with the constants and their source."""

from __future__ import annotations

from fractions import Fraction
from math import exp

from yieldnet.foundation.sourced import SourcedValue

__all__ = [
    "ICE_POINT",
    "MAGNUS_FACTOR",
    "MAGNUS_PRESSURE",
    "MAGNUS_SOURCE",
    "MAGNUS_TEMPERATURE",
    "saturation_pressure",
]

MAGNUS_SOURCE = (
    "WMO-No. 8, Guide to Instruments and Methods of Observation, annex 4.B: over water, -45 to"
    " 60 degC, pure vapour"
)
"""Source of the saturation pressure."""
ICE_POINT = SourcedValue(
    value=Fraction("273.15"), unit="K", source="definition of the degree Celsius (SI)"
)
"""0 degC in kelvin (SI)."""
MAGNUS_PRESSURE = SourcedValue(value=Fraction("0.6112"), unit="kPa", source=MAGNUS_SOURCE)
"""Saturation pressure of water at 0 degC in the Magnus form (WMO-No. 8)."""
MAGNUS_FACTOR = SourcedValue(value=Fraction("17.62"), unit="-", source=MAGNUS_SOURCE)
"""Factor of the exponent in the Magnus form (WMO-No. 8)."""
MAGNUS_TEMPERATURE = SourcedValue(value=Fraction("243.12"), unit="degC", source=MAGNUS_SOURCE)
"""Temperature in the divisor of the Magnus form (WMO-No. 8)."""


def saturation_pressure(temperature: float) -> float:
    """Saturation pressure of water vapour over water.

    Parameters
    ----------
    temperature : float
        Temperature [K].

    Returns
    -------
    float
        Pressure [kPa].

    Notes
    -----
    Magnus form of WMO-No. 8, annex 4.B: 0.6112 kPa exp(17.62 t / (243.12 + t)), t in degC. The
    excess of moist air over pure vapour, 0.4 % near atmospheric pressure, is left out.

    Examples
    --------
    >>> round(saturation_pressure(303.15), 3)
    4.234
    """
    celsius = temperature - float(ICE_POINT.value)
    power = float(MAGNUS_FACTOR.value) * celsius / (float(MAGNUS_TEMPERATURE.value) + celsius)
    return float(MAGNUS_PRESSURE.value) * exp(power)
