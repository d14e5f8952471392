"""Heats of combustion and Gibbs energies of formation of library compounds, each with its source.

In: the table ``data/thermochemistry.csv``. Out: values as fractions, and heats for compounds
without one by their degree of reduction, marked as estimated. Left out: heats of solution and of
mixing, a few kJ/mol for most compounds.

Convention of the heats: 298.15 K, from the state that is named to carbon dioxide gas, liquid water,
nitrogen gas, dissolved sulfuric and phosphoric acid. A value to ammonia instead of nitrogen is less
by :data:`AMMONIA_HEAT` for each nitrogen atom (:meth:`Heat.to_ammonia`).
"""

from __future__ import annotations

import csv
from dataclasses import dataclass
from fractions import Fraction
from functools import cache
from importlib.resources import files

from yieldnet.chemistry.acids import acid_named
from yieldnet.chemistry.formula import Formula, FormulaTextError, read_formula
from yieldnet.chemistry.library import find_compound

__all__ = [
    "AMMONIA_HEAT",
    "BIOMASS_ELECTRON_ENERGY",
    "BY_ELECTRONS",
    "CALORIMETRIC_OXYGEN_HEAT",
    "ELECTRON_HEAT",
    "GENERIC_BIOMASS",
    "STATES",
    "TEXTBOOK_OXYGEN_HEAT",
    "Heat",
    "KnownValue",
    "Species",
    "combustion_names",
    "estimated_heat",
    "gibbs_names",
    "heat_of_biomass",
    "heat_of_combustion",
    "species_of",
]

GENERIC_BIOMASS = "generic biomass"
"""Name of the biomass of the table, CH1.8O0.5N0.2."""
STATES = ("dissolved", "gas", "liquid", "solid", "cells", "ratio")
"""States of the table. The activity of ``dissolved`` is a concentration [mol/L], of ``gas`` a
pressure [bar], of ``ratio`` what its note says; the others have none."""

_BOOK = "Villadsen, Nielsen, Liden 2003, Table 4.3, p. 104"
ELECTRON_HEAT = Fraction(115)
"""Heat of combustion per electron equivalent, ammonia as nitrogen reference [kJ/mol].

Printed mean of Villadsen, Nielsen, Liden 2003, Table 4.3 (seen); standard deviation 6 to 7.
"""
AMMONIA_HEAT = Fraction(383)
"""Heat of combustion of ammonia gas to nitrogen gas [kJ/mol] (same table, seen)."""
TEXTBOOK_OXYGEN_HEAT = 4 * ELECTRON_HEAT
"""Heat per oxygen taken up: four electrons of 115 kJ [kJ/mol], the textbook value 460."""
CALORIMETRIC_OXYGEN_HEAT = Fraction(440)
"""Heat per oxygen taken up, by calorimetry of many strains [kJ/mol].

Birou, Marison, von Stockar 1987, Biotechnol Bioeng 30:650 (seen).
"""
BIOMASS_ELECTRON_ENERGY = Fraction("33.840")
"""Gibbs energy of an electron in biomass at pH 7, bicarbonate and ammonium as zero [kJ/mol].

Heijnen, Bioenergetics of microbial growth (Encyclopedia of Bioprocess Technology), Example 7b
(seen).
"""
BY_ELECTRONS = "115 kJ per electron equivalent; nitrogen as ammonia, 383 kJ each"
"""How a heat is estimated, in words."""


@dataclass(frozen=True, slots=True, kw_only=True)
class KnownValue:
    """A number of the table.

    Parameters
    ----------
    value : Fraction
        The number [kJ/mol].
    source, status : str
        Where it comes from, and ``seen``, ``from memory``, ``derived``, ``by definition`` or
        ``estimated``.
    note : str
        Remark.
    """

    value: Fraction
    source: str
    status: str
    note: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Heat:
    """Heat of combustion of one mol.

    Parameters
    ----------
    known : KnownValue
        To carbon dioxide gas, liquid water and nitrogen gas [kJ/mol].
    state : str
        State of the compound; empty for an estimate.
    nitrogen : Fraction
        Nitrogen atoms of one mol [mol/mol].
    """

    known: KnownValue
    state: str
    nitrogen: Fraction

    @property
    def value(self) -> Fraction:
        """Heat to nitrogen gas [kJ/mol]."""
        return self.known.value

    @property
    def estimated(self) -> bool:
        """Whether the degree of reduction stands in for a value."""
        return self.known.status == "estimated"

    def to_ammonia(self) -> Fraction:
        """Heat if the nitrogen is left as ammonia gas [kJ/mol].

        Examples
        --------
        >>> heat = heat_of_combustion("glycine")
        >>> float(heat.value), float(heat.to_ammonia())
        (973.0, 590.0)
        """
        return self.value - self.nitrogen * AMMONIA_HEAT


@dataclass(frozen=True, slots=True, kw_only=True)
class Species:
    """What stands for a compound in a Gibbs energy: an ion at pH 7, a gas, a liquid.

    Parameters
    ----------
    compound : str
        Compound of the library, or a carrier.
    formula : Formula or None
        Formula with its charge; ``None`` for a carrier.
    protons, waters : int
        One mol of the library compound is one of the species, ``protons`` H+ and ``waters`` water.
    state : str
        One of :data:`STATES`.
    gibbs : KnownValue
        Standard Gibbs energy of formation at 298.15 K, 1 mol/L or 1 bar; of ``ratio``, of the
        compound less what it is short of [kJ/mol].
    enthalpy : KnownValue or None
        Enthalpy of formation of the same species [kJ/mol].
    acid_constants : tuple of Fraction
        pKa of the compound, strongest acid first [-].
    low, high : Fraction or None
        Bounds of the activity of a ``ratio``.
    """

    compound: str
    formula: Formula | None
    protons: int
    waters: int
    state: str
    gibbs: KnownValue
    enthalpy: KnownValue | None = None
    acid_constants: tuple[Fraction, ...] = ()
    low: Fraction | None = None
    high: Fraction | None = None

    @property
    def text(self) -> str:
        """Species with its state, as ``C2H3O2- dissolved``."""
        return f"{self.formula} {self.state}" if self.formula is not None else self.state


@cache
def _table() -> dict[str, dict[str, list[dict[str, str]]]]:
    """Rows by compound and quantity."""
    text = files("yieldnet.chemistry").joinpath("data/thermochemistry.csv").read_text("utf-8")
    found: dict[str, dict[str, list[dict[str, str]]]] = {}
    for row in csv.DictReader(text.splitlines()):
        found.setdefault(row["compound"], {}).setdefault(row["quantity"], []).append(row)
    return found


def _known(row: dict[str, str]) -> KnownValue:
    return KnownValue(
        value=Fraction(row["value"]), source=row["source"], status=row["status"], note=row["note"]
    )


def _rows(name: str, quantity: str) -> list[dict[str, str]]:
    return _table().get(name, {}).get(quantity, [])


def combustion_names() -> tuple[str, ...]:
    """Compounds with a heat of combustion, in the order of the table."""
    return tuple(name for name, rows in _table().items() if "heat of combustion" in rows)


def gibbs_names() -> tuple[str, ...]:
    """Compounds and carriers with a Gibbs energy of formation, in the order of the table."""
    return tuple(name for name, rows in _table().items() if "Gibbs energy" in rows)


def _library_name(word: str) -> str:
    entry = find_compound(word)
    return entry.name if entry is not None else word


def heat_of_combustion(name: str) -> Heat | None:
    """Heat of combustion of a library compound, or ``None`` if the table has none.

    Parameters
    ----------
    name : str
        Name or synonym in the library.

    Returns
    -------
    Heat or None
        Value with source [kJ/mol].

    Examples
    --------
    >>> float(heat_of_combustion("glucose").value)
    2803.0
    """
    found = _rows(_library_name(name), "heat of combustion")
    if not found:
        return None
    entry = find_compound(name)
    nitrogen = entry.formula["N"] if entry is not None else _generic()["N"]
    return Heat(known=_known(found[0]), state=found[0]["state"], nitrogen=nitrogen)


def estimated_heat(formula: Formula) -> Heat | None:
    """Heat of combustion by the degree of reduction, or ``None`` where that is not defined.

    Parameters
    ----------
    formula : Formula
        Elements and charge.

    Returns
    -------
    Heat or None
        To nitrogen gas, marked as estimated [kJ/mol].

    Examples
    --------
    >>> from yieldnet.chemistry.formula import read_formula
    >>> float(estimated_heat(read_formula("C6H12O6")).value)
    2760.0
    """
    try:
        electrons = formula.degree_of_reduction()
    except FormulaTextError:
        return None
    value = ELECTRON_HEAT * electrons + AMMONIA_HEAT * formula["N"]
    known = KnownValue(value=value, source=_BOOK, status="estimated", note=BY_ELECTRONS)
    return Heat(known=known, state="", nitrogen=formula["N"])


@cache
def _generic() -> Formula:
    return read_formula("CH1.8O0.5N0.2")


def heat_of_biomass(formula: Formula) -> Heat | None:
    """Heat of combustion of biomass of a formula.

    Parameters
    ----------
    formula : Formula
        Ash-free formula of any number of carbon atoms.

    Returns
    -------
    Heat or None
        The published 560 kJ/C-mol for CH1.8O0.5N0.2, else by the degree of reduction [kJ/mol].

    Examples
    --------
    >>> from yieldnet.chemistry.formula import read_formula
    >>> heat_of_biomass(read_formula("C2H3.6ON0.4")).estimated
    False
    """
    carbon = formula["C"]
    known = heat_of_combustion(GENERIC_BIOMASS)
    if carbon and known is not None and not formula.charge:
        per_carbon = {symbol: amount / carbon for symbol, amount in formula.elements}
        if per_carbon == dict(_generic().elements):
            value = KnownValue(
                value=known.value * carbon,
                source=known.known.source,
                status=known.known.status,
                note=known.known.note,
            )
            return Heat(known=value, state=known.state, nitrogen=formula["N"])
    return estimated_heat(formula)


@cache
def species_of(name: str) -> tuple[Species, ...]:
    """Species that can stand for a compound, the usual one first; empty if none is known.

    Parameters
    ----------
    name : str
        Name or synonym in the library, or a carrier of the table.

    Returns
    -------
    tuple of Species
        With their Gibbs energies [kJ/mol].

    Examples
    --------
    >>> [item.text for item in species_of("carbon dioxide")]
    ['CO2 gas', 'HCO3- dissolved']
    """
    library = _library_name(name)
    acid = acid_named(library)
    # Those of organic acids stand with the acids; here are only what that table leaves out.
    constants = (
        acid.constants
        if acid is not None
        else tuple(Fraction(row["value"]) for row in _rows(library, "acid constant"))
    )
    found = []
    for row in _rows(library, "Gibbs energy"):
        same = [
            item
            for item in _rows(library, "enthalpy")
            if (item["species"], item["state"]) == (row["species"], row["state"])
        ]
        found.append(
            Species(
                compound=library,
                formula=read_formula(row["species"]) if row["species"] else None,
                protons=int(row["protons"] or 0),
                waters=int(row["waters"] or 0),
                state=row["state"],
                gibbs=_known(row),
                enthalpy=_known(same[0]) if same else None,
                acid_constants=constants,
                low=Fraction(row["low"]) if row["low"] else None,
                high=Fraction(row["high"]) if row["high"] else None,
            )
        )
    return tuple(found)
