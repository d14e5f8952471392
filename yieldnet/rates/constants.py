"""Constants of gases and of dissolved carbon dioxide, each with its source."""

from __future__ import annotations

from fractions import Fraction

from yieldnet.foundation.sourced import SourcedValue

__all__ = [
    "CONFIDENCE",
    "DISSOCIATION_CONSTANT",
    "DISSOCIATION_INVERSE",
    "DISSOCIATION_LINEAR",
    "GAS_CONSTANT",
    "HENRY_CONSTANT",
    "HENRY_REFERENCE",
    "HENRY_TEMPERATURE",
]

CONFIDENCE = 0.95
"""Level of the chi-square tests: what chance does less often than once in twenty is told [-]."""

_CODATA = (
    "CODATA 2018: Tiesinga, Mohr, Newell and Taylor (2021) Reviews of Modern Physics 93:025010"
)
_SANDER = "Sander (2015) Atmospheric Chemistry and Physics 15:4399, carbon dioxide"
_HARNED = (
    "Harned and Davis (1943) Journal of the American Chemical Society 65:2030, 0 to 50 degC, no"
    " salt: pK1 = 3404.71 / T + 0.032786 T - 14.8435"
)

GAS_CONSTANT = SourcedValue(value=Fraction("8.314462618"), unit="J/mol/K", source=_CODATA)
"""Molar gas constant; the exact product of two defined constants, rounded (CODATA 2018)."""
HENRY_CONSTANT = SourcedValue(value=Fraction("3.3e-4"), unit="mol/m3/Pa", source=_SANDER)
"""Solubility of carbon dioxide in water at the reference temperature (Sander 2015)."""
HENRY_TEMPERATURE = SourcedValue(value=Fraction(2400), unit="K", source=_SANDER)
"""Slope of ln(solubility) over 1/T (Sander 2015)."""
HENRY_REFERENCE = SourcedValue(value=Fraction("298.15"), unit="K", source=_SANDER)
"""Reference temperature of the solubility (Sander 2015)."""
DISSOCIATION_INVERSE = SourcedValue(value=Fraction("3404.71"), unit="K", source=_HARNED)
"""Term in 1/T of pK1 of carbonic acid (Harned and Davis 1943)."""
DISSOCIATION_LINEAR = SourcedValue(value=Fraction("0.032786"), unit="1/K", source=_HARNED)
"""Term in T of pK1 of carbonic acid (Harned and Davis 1943)."""
DISSOCIATION_CONSTANT = SourcedValue(value=Fraction("14.8435"), unit="-", source=_HARNED)
"""What is subtracted in pK1 of carbonic acid (Harned and Davis 1943)."""
