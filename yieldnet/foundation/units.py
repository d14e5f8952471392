"""Exact units: the small table that reading and prediction need.

An amount can be told in mol, in g or in C-mol of a compound; which of them are meaningful depends
on its formula, so conversion takes the :class:`Weight` of that compound. All factors are fractions.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from yieldnet.foundation.errors import TextError

__all__ = [
    "AMOUNT_UNITS",
    "TIME_UNITS",
    "Unit",
    "UnitError",
    "Weight",
    "per_hour",
    "read_unit",
    "specific_rate_mol_per_gram_hour",
    "yield_factor",
]

_MOL = {"mol": Fraction(1), "mmol": Fraction(1, 1000), "kmol": Fraction(1000)}
_GRAM = {"g": Fraction(1), "mg": Fraction(1, 1000), "kg": Fraction(1000), "t": Fraction(10**6)}
_CARBON = {"C-mol": Fraction(1), "C-mmol": Fraction(1, 1000), "C-kmol": Fraction(1000)}
AMOUNT_UNITS = (*_MOL, *_GRAM, *_CARBON)
"""Units in which an amount of a compound can be told."""
TIME_UNITS = {"h": Fraction(1), "min": Fraction(1, 60), "s": Fraction(1, 3600), "d": Fraction(24)}
"""Units of time [h]."""
_TEMPERATURE = ("degC", "K")
_SPELLINGS = {"°C": "degC", "Cmol": "C-mol", "cmol": "C-mol", "hr": "h", "gDW": "g", "day": "d"}


class UnitError(TextError):
    """A unit that is unknown, or of the wrong kind for the place where it stands."""

    usual_code = "YN203"


@dataclass(frozen=True, slots=True)
class Unit:
    """A unit as a numerator over denominators, ``mmol/g/h``.

    Parameters
    ----------
    numerator : str
        First unit, ``1`` where there is none.
    denominators : tuple of str
        The units below the line.
    """

    numerator: str
    denominators: tuple[str, ...] = ()

    def __str__(self) -> str:
        return "/".join((self.numerator, *self.denominators))


@dataclass(frozen=True, slots=True, kw_only=True)
class Weight:
    """What one mol of a compound weighs.

    Parameters
    ----------
    name : str
        The compound.
    molar_mass : Fraction or None
        Mass of one mol, ash included for biomass [g/mol]; ``None`` without a formula.
    carbon : Fraction or None
        Carbon atoms per formula [mol/mol]; ``None`` without a formula.
    """

    name: str
    molar_mass: Fraction | None
    carbon: Fraction | None

    def mol_per(self, unit: str) -> Fraction:
        """Moles of the compound in one ``unit`` of it.

        Parameters
        ----------
        unit : str
            One of :data:`AMOUNT_UNITS`.

        Returns
        -------
        Fraction
            Amount [mol].

        Raises
        ------
        UnitError
            If the unit is no amount, or the compound has no carbon or no formula for it.
        """
        if unit in _MOL:
            return _MOL[unit]
        if unit in _GRAM:
            if not self.molar_mass:
                raise UnitError(
                    f"{self.name!r} has no formula, so {unit} of it cannot be turned into mol",
                    "Give it in mol, or give the compound a formula.",
                )
            return _GRAM[unit] / self.molar_mass
        if unit in _CARBON:
            if not self.carbon:
                raise UnitError(
                    f"{self.name!r} has no carbon, so {unit} of it means nothing",
                    "Give it in mol or g.",
                    "YN506",
                )
            return _CARBON[unit] / self.carbon
        raise UnitError(
            f"{unit!r} is not an amount", "Known amounts: " + ", ".join(AMOUNT_UNITS) + "."
        )


def read_unit(text: str) -> Unit:
    """Unit from its text.

    Parameters
    ----------
    text : str
        ``g/g``, ``mmol/g/h``, ``1/h``, ``degC``.

    Returns
    -------
    Unit
        Numerator and denominators.

    Raises
    ------
    UnitError
        If a part is not known.

    Examples
    --------
    >>> str(read_unit("mmol/g/h"))
    'mmol/g/h'
    """
    known = (*AMOUNT_UNITS, *TIME_UNITS, *_TEMPERATURE)
    parts = [part.strip() for part in text.strip().split("/")]
    parts = [_SPELLINGS.get(part, part) for part in parts]
    if parts and parts[0] in {"", "1"}:
        parts[0] = "1"
    for place, part in enumerate(parts):
        if part not in known and not (place == 0 and part == "1" and len(parts) > 1):
            hint = "Known: " + ", ".join(known) + "."
            if "-1" in text:
                hint = "Write powers as a slash: 1/h, mmol/g/h."
            raise UnitError(f"unit {text.strip()!r} is not known", hint)
    return Unit(parts[0], tuple(parts[1:]))


def yield_factor(unit: Unit, compound: Weight, basis: Weight) -> Fraction:
    """Factor from a yield in ``unit`` to mol/mol.

    Parameters
    ----------
    unit : Unit
        Amount over amount, ``g/g``.
    compound, basis : Weight
        Weights of the compound and of the basis substrate.

    Returns
    -------
    Fraction
        mol/mol in one ``unit`` [mol/mol].

    Raises
    ------
    UnitError
        If the unit is not an amount over an amount.

    Examples
    --------
    >>> ethanol = Weight(name="ethanol", molar_mass=Fraction(46), carbon=Fraction(2))
    >>> glucose = Weight(name="glucose", molar_mass=Fraction(180), carbon=Fraction(6))
    >>> yield_factor(read_unit("g/g"), ethanol, glucose)
    Fraction(90, 23)
    """
    if unit.numerator not in AMOUNT_UNITS or len(unit.denominators) != 1:
        raise UnitError(
            f"'{unit}' is not a yield",
            "Write an amount over an amount: mol/mol, g/g, C-mol/C-mol, g/mol.",
        )
    return compound.mol_per(unit.numerator) / basis.mol_per(unit.denominators[0])


def per_hour(unit: Unit) -> Fraction:
    """Factor from a growth rate in ``unit`` to 1/h.

    Examples
    --------
    >>> per_hour(read_unit("1/d"))
    Fraction(1, 24)
    """
    if unit.numerator == "1" and len(unit.denominators) == 1:
        if unit.denominators[0] in TIME_UNITS:
            return 1 / TIME_UNITS[unit.denominators[0]]
    elif unit.numerator in _GRAM and len(unit.denominators) == 2:
        mass, time = unit.denominators
        if mass in _GRAM and time in TIME_UNITS:
            return _GRAM[unit.numerator] / _GRAM[mass] / TIME_UNITS[time]
    raise UnitError(f"'{unit}' is not a growth rate", "Write it in 1/h.")


def specific_rate_mol_per_gram_hour(unit: Unit, compound: Weight) -> Fraction:
    """Factor from a specific rate in ``unit`` to mol per g dry weight and h.

    Parameters
    ----------
    unit : Unit
        Amount per mass and time, ``mmol/g/h``.
    compound : Weight
        Weight of the compound taken up or made.

    Returns
    -------
    Fraction
        mol/(g h) in one ``unit`` [mol/g/h].

    Raises
    ------
    UnitError
        If the unit is not an amount per mass and time.

    Examples
    --------
    >>> atp = Weight(name="ATP", molar_mass=None, carbon=None)
    >>> specific_rate_mol_per_gram_hour(read_unit("mmol/g/h"), atp)
    Fraction(1, 1000)
    """
    if unit.numerator in AMOUNT_UNITS and len(unit.denominators) == 2:
        mass, time = unit.denominators
        if mass in _GRAM and time in TIME_UNITS:
            return compound.mol_per(unit.numerator) / _GRAM[mass] / TIME_UNITS[time]
    raise UnitError(f"'{unit}' is not a specific rate", "Write it in mmol/g/h.")
