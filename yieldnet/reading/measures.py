"""Units of instruments: factors from what a sheet or a run file writes to the units of a run.

Cases keep exact fractions (``yieldnet.foundation.units``). What an instrument shows is no exact
number, so here a table of units known to everybody does the work, behind a small grammar: words and
slashes, nothing that is evaluated.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from enum import StrEnum
from functools import cache
from typing import TYPE_CHECKING, Any

from yieldnet.foundation.units import UnitError

if TYPE_CHECKING:
    from yieldnet.model.network import Compound

__all__ = ["MAX_UNIT_LENGTH", "PERCENT", "Measure", "Scale", "scale_of"]

MAX_UNIT_LENGTH = 30
"""Longest text of a unit [characters]."""
PERCENT = ("%", "percent", "vol%", "mol%")
"""Spellings of a hundredth as the unit of a mole fraction."""


class Measure(StrEnum):
    """What a number measures, which decides the units it may have."""

    TIME = "a time"
    VOLUME = "a volume"
    RATE = "a rate"
    FLOW = "a flow"
    CONCENTRATION = "a concentration"
    DRY_WEIGHT = "a dry weight"
    WET_WEIGHT = "a wet weight"
    SIGNAL = "an optical density"
    MASS_RATIO = "a ratio of weights"
    FRACTION = "a mole fraction"
    HUMIDITY = "a relative humidity"
    TEMPERATURE = "a temperature"
    PRESSURE = "a pressure"
    ACIDITY = "a pH"


_UNIT_HINT = {
    Measure.TIME: "h, min, s or d",
    Measure.VOLUME: "L, mL or m3",
    Measure.RATE: "1/h",
    Measure.FLOW: "L/h, L/min or mL/min",
    Measure.CONCENTRATION: "g/L, mg/L, mol/L, mmol/L or C-mol/L",
    Measure.DRY_WEIGHT: "g/L",
    Measure.WET_WEIGHT: "g/L",
    Measure.SIGNAL: "-, or no unit at all",
    Measure.MASS_RATIO: "g/g",
    Measure.FRACTION: "%, mol/mol or ppm",
    Measure.HUMIDITY: "%",
    Measure.TEMPERATURE: "degC or K",
    Measure.PRESSURE: "kPa, bar, mbar or atm",
    Measure.ACIDITY: "no unit",
}
_TARGET = {
    Measure.TIME: "hour",
    Measure.VOLUME: "liter",
    Measure.RATE: "1 / hour",
    Measure.FLOW: "liter / hour",
    Measure.WET_WEIGHT: "gram / liter",
    Measure.TEMPERATURE: "kelvin",
    Measure.PRESSURE: "kilopascal",
}
_BARE = {"": 1.0, "-": 1.0, "1": 1.0}
_FRACTIONS = {
    **dict.fromkeys(PERCENT, 1e-2),
    **dict.fromkeys(("mol/mol", "fraction", "L/L"), 1.0),
    "mmol/mol": 1e-3,
    "ppm": 1e-6,
}
# Measures whose units are too few, or too easily confused, to leave them to the registry.
_TABLES = {
    Measure.SIGNAL: _BARE,
    Measure.ACIDITY: _BARE,
    Measure.FRACTION: _FRACTIONS,
    Measure.HUMIDITY: {**dict.fromkeys(PERCENT, 1e-2), "fraction": 1.0},
    Measure.MASS_RATIO: {"g/g": 1.0, "kg/kg": 1.0, "mg/g": 1e-3, "mg/mg": 1.0},
}
_WORD = re.compile(r"(1|[A-Za-zµμ°][A-Za-zµμ°_-]*[A-Za-z]|[A-Za-z])(?:\^|\*\*)?([23]?)")
_CARBON = re.compile(r"C-?(|m|k|µ|μ|u)mol")
_PREFIX = {"": "", "m": "milli", "k": "kilo", "µ": "micro", "μ": "micro", "u": "micro"}
_SPELLINGS = {"°C": "degC", "cmol": "Cmol", "gDW": "g", "hr": "h"}


@dataclass(frozen=True, slots=True, kw_only=True)
class Scale:
    """How a number in a unit becomes one in the unit of the run.

    Parameters
    ----------
    factor : float
        What one unit is worth [-].
    offset : float
        What zero of the unit is [-]; only temperatures have one.
    """

    factor: float
    offset: float = 0.0

    def value(self, number: float) -> float:
        """Value in the unit of the run."""
        return number * self.factor + self.offset

    def sd(self, number: float) -> float:
        """Standard deviation in the unit of the run."""
        return number * self.factor


def scale_of(
    text: str, measure: Measure, compound: Compound | None = None, multiple: int = 1
) -> Scale:
    """Scale of a unit for what is measured.

    Parameters
    ----------
    text : str
        ``g/L``, ``mmol/L``, ``L/min``, ``%``, ``degC``.
    measure : Measure
        What the number measures.
    compound : Compound or None
        Compound of a concentration or a dry weight, for its molar mass and carbon.
    multiple : int
        What one mol of it counts for: acid in one mol of its salt [mol/mol].

    Returns
    -------
    Scale
        To h, L, 1/h, L/h, mol/L, g/L (dry and wet weight), mol/mol, K or kPa.

    Raises
    ------
    UnitError
        If the unit is unknown, of the wrong kind, or needs a formula that is not there.

    Examples
    --------
    >>> scale_of("min", Measure.TIME).value(90.0)
    1.5
    >>> scale_of("%", Measure.FRACTION).sd(0.5)
    0.005
    """
    written = text.strip()
    table = _TABLES.get(measure)
    if table is not None:
        if written not in table:
            raise _wrong(written, measure)
        return Scale(factor=table[written])
    parts = _parts(written, measure)
    if measure is Measure.RATE and parts[0] != "1":
        # rpm and Hz have the same dimension, and are not per hour.
        raise _wrong(written, measure)
    unit = _unit(parts, written, measure)
    if measure in (Measure.CONCENTRATION, Measure.DRY_WEIGHT):
        return Scale(factor=_concentration(unit, written, measure, compound) * multiple)
    try:
        zero, one = (
            float(_registry().Quantity(number, unit).to(_TARGET[measure]).magnitude)
            for number in (0.0, 1.0)
        )
    except _pint_errors():
        raise _wrong(written, measure) from None
    return Scale(factor=one - zero if zero else one, offset=zero)


def _wrong(written: str, measure: Measure) -> UnitError:
    if not written:
        return UnitError("no unit is written", f"Write it in {_UNIT_HINT[measure]}.", "YN130")
    return UnitError(f"{written!r} is no unit of {measure}", f"Write it in {_UNIT_HINT[measure]}.")


def _parts(written: str, measure: Measure) -> list[str]:
    """Numerator and denominators in the spelling of the registry."""
    if not written or len(written) > MAX_UNIT_LENGTH:
        raise _wrong(written[:MAX_UNIT_LENGTH], measure)
    found: list[str] = []
    for place, part in enumerate(written.split("/")):
        word = part.strip().replace("³", "3").replace("²", "2")
        word = _SPELLINGS.get(word, word)
        if carbon := _CARBON.fullmatch(word):
            found.append(_PREFIX[carbon[1]] + "carbon_mole")
            continue
        known = _WORD.fullmatch(word)
        if known is None or (known[1] == "1" and (place or known[2])):
            error = _wrong(written, measure)
            if re.search(r"[-−^]\s*1", written):
                error.hint = f"Write powers as a slash. {error.hint}"
            raise error
        found.append(known[1] + (f"**{known[2]}" if known[2] else ""))
    return found


def _unit(parts: list[str], written: str, measure: Measure) -> Any:
    try:
        return _registry().Unit(" / ".join(parts))
    except _no_unit():
        raise _wrong(written, measure) from None


def _concentration(unit: Any, written: str, measure: Measure, compound: Compound | None) -> float:
    """Factor to mol/L, or for a dry weight to g/L."""
    registry = _registry()
    for base, weight_unit in (("gram", "g"), ("mole", "mol"), ("carbon_mole", "C-mol")):
        try:
            in_base = float(registry.Quantity(1.0, unit).to(f"{base} / liter").magnitude)
        except _pint_errors():
            continue
        if measure is Measure.DRY_WEIGHT and base == "gram":
            return in_base
        if compound is None:
            raise _wrong(written, measure)
        in_mol = in_base * float(compound.weight.mol_per(weight_unit))
        if measure is Measure.DRY_WEIGHT:
            return in_mol / float(compound.weight.mol_per("g"))
        return in_mol
    raise _wrong(written, measure)


@cache
def _registry() -> Any:
    import pint

    registry: Any = pint.UnitRegistry()
    # A mole of carbon is an amount of its own kind: it turns into mol only with a formula.
    registry.define("carbon_mole = [amount_of_carbon]")
    return registry


@cache
def _pint_errors() -> tuple[type[Exception], ...]:
    import pint

    return (pint.DimensionalityError, pint.UndefinedUnitError, pint.OffsetUnitCalculusError)


@cache
def _no_unit() -> tuple[type[Exception], ...]:
    """What the registry raises on a word it does not know, words of Python among them."""
    return (*_pint_errors(), ValueError, TypeError, AttributeError, SyntaxError)
