"""Bases that hold the pH of a broth, and the forms in which a nitrogen source is fed.

In: the table ``data/bases.csv``. Out: what one mol of a base leaves in the broth, with its heat of
neutralisation and source. Left out: heat of dilution, and of dissolving ammonia gas in water.
"""

from __future__ import annotations

import csv
from dataclasses import dataclass
from fractions import Fraction
from functools import cache
from importlib.resources import files

from yieldnet.chemistry.formula import Formula, read_formula
from yieldnet.chemistry.library import find_compound

__all__ = [
    "NITROGEN_FEEDS",
    "NITROGEN_SOURCES",
    "Base",
    "NitrogenFeed",
    "base_named",
    "base_names",
    "usual_feed",
]


@dataclass(frozen=True, slots=True, kw_only=True)
class Base:
    """A base: one mol takes up ``equivalents`` protons and leaves cations, water, carbon dioxide.

    Parameters
    ----------
    name : str
        Its name.
    formula, cation : Formula
        Of the base and of the cation that stays in the broth.
    cations, equivalents, water, carbon_dioxide : int
        In one mol of base [mol/mol].
    heat : Fraction
        Heat given off per proton taken up [kJ/mol].
    source, status : str
        Of the heat, and how it was seen.
    """

    name: str
    formula: Formula
    cation: Formula
    cations: int
    equivalents: int
    water: int
    carbon_dioxide: int
    heat: Fraction
    source: str
    status: str


@dataclass(frozen=True, slots=True, kw_only=True)
class NitrogenFeed:
    """Form in which the nitrogen source of an equation is bought.

    Parameters
    ----------
    name : str
        Its name.
    compound : str
        Compound of the equation that it stands for.
    formula : Formula
        What holds one mol of that compound.
    counter_ion : Formula or None
        Ion that stays in the broth.
    counter_ions : Fraction
        How many of them [mol/mol].
    protons : int
        Protons given off by feeding and taking up one mol [mol/mol].
    """

    name: str
    compound: str
    formula: Formula
    counter_ion: Formula | None
    counter_ions: Fraction
    protons: int


def _feed(
    name: str, compound: str, formula: str, ion: str = "", ions: str = "0", protons: int = 0
) -> NitrogenFeed:
    return NitrogenFeed(
        name=name,
        compound=compound,
        formula=read_formula(formula),
        counter_ion=read_formula(ion) if ion else None,
        counter_ions=Fraction(ions),
        protons=protons,
    )


# Ammonia that dissolves takes up a proton, and gives it off again when the cell takes up ammonium;
# of ammonium sulfate only the second is left. Nitrate takes a proton along into the cell; nitric
# acid brought it, sodium nitrate did not. Urea is no ion.
NITROGEN_FEEDS = (
    _feed("ammonia", "ammonia", "NH3"),
    _feed("ammonium sulfate", "ammonia", "NH4S0.5O2", "SO4^2-", "1/2", 1),
    _feed("urea", "urea", "CH4N2O"),
    _feed("sodium nitrate", "nitrate", "NaNO3", "Na+", "1", -1),
    _feed("nitric acid", "nitrate", "HNO3"),
)
"""Forms that can be chosen; of each compound the first is the usual one."""
NITROGEN_SOURCES = ("ammonia", "urea", "nitrate")
"""Compounds of an equation that count as nitrogen source."""


def usual_feed(compound: str) -> NitrogenFeed | None:
    """Form in which a nitrogen source is fed where nothing is said; ``None`` for other compounds.

    Examples
    --------
    >>> usual_feed("nitrate").name
    'sodium nitrate'
    """
    return next((item for item in NITROGEN_FEEDS if item.compound == compound), None)


@cache
def _bases() -> dict[str, Base]:
    text = files("yieldnet.chemistry").joinpath("data/bases.csv").read_text("utf-8")
    return {
        row["name"]: Base(
            name=row["name"],
            formula=read_formula(row["formula"]),
            cation=read_formula(row["cation"]),
            cations=int(row["cations"]),
            equivalents=int(row["equivalents"]),
            water=int(row["water"]),
            carbon_dioxide=int(row["carbon_dioxide"]),
            heat=Fraction(row["heat"]),
            source=row["source"],
            status=row["status"],
        )
        for row in csv.DictReader(text.splitlines())
    }


def base_names() -> tuple[str, ...]:
    """Names of all bases, in the order of the table."""
    return tuple(_bases())


def base_named(word: str) -> Base | None:
    """Base by name or synonym, or ``None`` if it is not known.

    Parameters
    ----------
    word : str
        Name or synonym in the library.

    Returns
    -------
    Base or None
        What one mol of it does.

    Examples
    --------
    >>> base_named("caustic soda").equivalents
    1
    """
    entry = find_compound(word)
    return _bases().get(entry.name if entry is not None else word)
