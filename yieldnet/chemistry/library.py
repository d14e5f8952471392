"""The compound and biomass library: formulas with their sources, found by name or synonym."""

from __future__ import annotations

import csv
from dataclasses import dataclass
from fractions import Fraction
from functools import cache
from importlib.resources import files

from yieldnet.chemistry.formula import Formula, read_formula

__all__ = [
    "BiomassEntry",
    "CompoundEntry",
    "biomass_entries",
    "compound_entries",
    "find_biomass",
    "find_compound",
    "library_names",
]


@dataclass(frozen=True, slots=True, kw_only=True)
class CompoundEntry:
    """A compound of the library.

    Parameters
    ----------
    name : str
        Name used everywhere in yieldnet.
    formula : Formula
        Elements and charge.
    synonyms : tuple of str
        Other names that are understood.
    kind : str
        ``crossing`` or ``inside``: where the compound usually stands.
    source : str
        Where the formula comes from.
    note : str
        Remark, such as a caution.
    """

    name: str
    formula: Formula
    synonyms: tuple[str, ...]
    kind: str
    source: str
    note: str


@dataclass(frozen=True, slots=True, kw_only=True)
class BiomassEntry:
    """A biomass composition of the library.

    Parameters
    ----------
    name : str
        Organism or class of organisms.
    formula : Formula
        Ash-free formula, usually per mol of carbon.
    ash : Fraction or None
        Mass fraction of ash in the whole dry weight; ``None`` where the source gives none [g/g].
    source : str
        Where the composition comes from.
    status : str
        How the source was seen, or ``from memory``.
    note : str
        Remark.
    """

    name: str
    formula: Formula
    ash: Fraction | None
    source: str
    status: str
    note: str


def _rows(name: str) -> list[dict[str, str]]:
    text = files("yieldnet.chemistry").joinpath(f"data/{name}").read_text("utf-8")
    return list(csv.DictReader(text.splitlines()))


@cache
def _raw_compounds() -> dict[str, dict[str, str]]:
    return {row["name"]: row for row in _rows("compounds.csv")}


@cache
def _name_index() -> dict[str, str]:
    """Folded name or synonym to name; reading the formulas waits until one is asked for."""
    index: dict[str, str] = {}
    for name, row in _raw_compounds().items():
        for word in (name, *_split(row["synonyms"])):
            index.setdefault(word.casefold(), name)
    return index


def _split(text: str) -> tuple[str, ...]:
    return tuple(part.strip() for part in text.split(";") if part.strip())


@cache
def _compound(name: str) -> CompoundEntry:
    row = _raw_compounds()[name]
    formula = read_formula(row["formula"])
    return CompoundEntry(
        name=name,
        formula=Formula(formula.elements, int(row["charge"] or 0)),
        synonyms=_split(row["synonyms"]),
        kind=row["kind"],
        source=row["source"],
        note=row["note"],
    )


def find_compound(word: str) -> CompoundEntry | None:
    """Compound of the library by name or synonym; capitals do not count.

    Parameters
    ----------
    word : str
        Name or synonym.

    Returns
    -------
    CompoundEntry or None
        The entry, or ``None`` if the library does not know the word.

    Examples
    --------
    >>> find_compound("succinic acid").name
    'succinate'
    """
    name = _name_index().get(word.casefold())
    return None if name is None else _compound(name)


def compound_entries() -> tuple[CompoundEntry, ...]:
    """All compounds of the library, in the order of the table."""
    return tuple(_compound(name) for name in _raw_compounds())


def library_names() -> tuple[str, ...]:
    """Names and synonyms of all compounds, for near matches."""
    return tuple(
        word for name, row in _raw_compounds().items() for word in (name, *_split(row["synonyms"]))
    )


@cache
def biomass_entries() -> tuple[BiomassEntry, ...]:
    """All biomass compositions of the library, in the order of the table."""
    return tuple(
        BiomassEntry(
            name=row["name"],
            formula=read_formula(row["formula"]),
            ash=Fraction(row["ash"]) if row["ash"] else None,
            source=row["source"],
            status=row["status"],
            note=row["note"],
        )
        for row in _rows("biomass.csv")
    )


def find_biomass(word: str) -> BiomassEntry | None:
    """Biomass composition of the library by name; capitals do not count.

    Examples
    --------
    >>> str(find_biomass("generic biomass").formula)
    'CH1.8O0.5N0.2'
    """
    for entry in biomass_entries():
        if entry.name.casefold() == word.casefold():
            return entry
    return None
