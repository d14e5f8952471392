"""Acids in a broth: pKa and solubilities with their sources, and protons given off at a pH.

In: the tables ``data/acids.csv`` and ``data/solubilities.csv``. Out: how many protons one mol of a
compound has given off. Left out: ionic strength and temperature; constants are those of 25 degC in
dilute solution, and salts of tens of g/L move them by a few tenths.
"""

from __future__ import annotations

import csv
from dataclasses import dataclass
from fractions import Fraction
from functools import cache
from importlib.resources import files

from yieldnet.chemistry.library import find_compound

__all__ = [
    "HIGHEST_BROTH_PH",
    "LOWEST_BROTH_PH",
    "Acid",
    "Solubility",
    "acid_entries",
    "acid_named",
    "is_acid",
    "solubilities_of",
]

LOWEST_BROTH_PH = Fraction(3)
"""Lowest pH at which protons that stay free, 1 mmol/L, are nothing beside a product [-]."""
HIGHEST_BROTH_PH = Fraction(8)
"""Highest pH at which nearly all ammonia is ammonium, 5 % of it free by the pKa 9.25 [-]."""
_DIGITS = 15


@dataclass(frozen=True, slots=True, kw_only=True)
class Acid:
    """An acid with its dissociation constants.

    Parameters
    ----------
    compound : str
        Name in the library.
    constants : tuple of Fraction
        pKa, strongest first [-].
    source, status : str
        Where they come from, and ``seen`` or ``from memory``.
    """

    compound: str
    constants: tuple[Fraction, ...]
    source: str
    status: str

    def shares(self, ph: Fraction) -> tuple[Fraction, ...]:
        """Share of each species, from undissociated to fully dissociated.

        Parameters
        ----------
        ph : Fraction
            pH of the broth [-].

        Returns
        -------
        tuple of Fraction
            Shares, which sum to 1 exactly [mol/mol].

        Notes
        -----
        Species i holds ``10^(i pH - pKa1 - ... - pKai)`` parts. Each power is rounded to 15 digits
        and is the same number from then on.
        """
        parts = [Fraction(1)]
        exponent = Fraction(0)
        for constant in self.constants:
            exponent += ph - constant
            parts.append(Fraction(f"{10 ** float(exponent):.{_DIGITS}g}"))
        total = sum(parts, Fraction(0))
        return tuple(part / total for part in parts)

    def protons_given_off(self, ph: Fraction) -> Fraction:
        """Protons that one mol has given off at a pH.

        Parameters
        ----------
        ph : Fraction
            pH of the broth [-].

        Returns
        -------
        Fraction
            Mean over the species: the base that holds the pH, per mol of acid [mol/mol].

        Examples
        --------
        >>> round(float(acid_named("succinate").protons_given_off(Fraction("6.5"))), 2)
        1.88
        """
        return sum((i * share for i, share in enumerate(self.shares(ph))), Fraction(0))


@dataclass(frozen=True, slots=True, kw_only=True)
class Solubility:
    """How much of a compound water takes.

    Parameters
    ----------
    compound : str
        Name in the library.
    form : {"acid", "calcium salt", "compound"}
        What falls out: the undissociated acid, its calcium salt, or the compound itself.
    value : Fraction
        Solubility, of salts as free acid [g/L].
    temperature, source, status : str
        At which temperature, where it comes from, and how it was seen.
    """

    compound: str
    form: str
    value: Fraction
    temperature: str
    source: str
    status: str


def _rows(name: str) -> list[dict[str, str]]:
    text = files("yieldnet.chemistry").joinpath(f"data/{name}").read_text("utf-8")
    return list(csv.DictReader(text.splitlines()))


@cache
def _acids() -> dict[str, Acid]:
    return {
        row["compound"]: Acid(
            compound=row["compound"],
            constants=tuple(Fraction(text.strip()) for text in row["pka"].split(";")),
            source=row["source"],
            status=row["status"],
        )
        for row in _rows("acids.csv")
    }


def acid_entries() -> tuple[Acid, ...]:
    """All acids of the table, in its order."""
    return tuple(_acids().values())


def acid_named(word: str) -> Acid | None:
    """Acid by name or synonym, or ``None`` if the table has no pKa of it.

    Parameters
    ----------
    word : str
        Name or synonym in the library.

    Returns
    -------
    Acid or None
        Its constants.

    Examples
    --------
    >>> acid_named("lactic acid").compound
    'lactate'
    """
    entry = find_compound(word)
    return _acids().get(entry.name if entry is not None else word)


def is_acid(word: str) -> bool:
    """Whether the library marks a compound as an undissociated acid.

    Examples
    --------
    >>> is_acid("succinate"), is_acid("ethanol")
    (True, False)
    """
    entry = find_compound(word)
    return entry is not None and "undissociated acid" in entry.note


@cache
def solubilities_of(word: str) -> tuple[Solubility, ...]:
    """Solubilities of a compound that are known, in the order of the table; empty for none.

    Examples
    --------
    >>> [item.form for item in solubilities_of("succinic acid")]
    ['acid', 'calcium salt']
    """
    entry = find_compound(word)
    name = entry.name if entry is not None else word
    return tuple(
        Solubility(
            compound=name,
            form=row["form"],
            value=Fraction(row["g_per_l"]),
            temperature=row["temperature"],
            source=row["source"],
            status=row["status"],
        )
        for row in _rows("solubilities.csv")
        if row["compound"] == name
    )
