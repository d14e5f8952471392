"""ATP for making a cell: theory by macromolecule, and published yields on ATP.

References
----------
Stouthamer, A. H. (1973) A theoretical study on the amount of ATP required for synthesis of
microbial cell material, Antonie van Leeuwenhoek 39:545-565. Total, ATP per amino acid and the costs
of transport are from its abstract; the rows of its table are from memory, and sum to that total.
"""

from __future__ import annotations

import csv
from dataclasses import dataclass
from fractions import Fraction
from functools import cache
from importlib.resources import files
from typing import TYPE_CHECKING

from yieldnet.foundation.sourced import SourcedValue

if TYPE_CHECKING:
    from yieldnet.chemistry.macromolecules import BiomassComposition

__all__ = [
    "ATP_PER_AMMONIUM",
    "LEAST_SEEN",
    "MOST_IN_THEORY",
    "AtpStep",
    "PublishedAtpYield",
    "TheoreticalAtp",
    "published_atp_yields",
    "theoretical_atp",
]

ATP_PER_AMMONIUM = SourcedValue(
    value=Fraction(1, 2),
    unit="mol/mol",
    source="Stouthamer 1973, Antonie van Leeuwenhoek 39:545, abstract",
)
"""ATP for the uptake of one ammonium."""
MOST_IN_THEORY = SourcedValue(
    value=Fraction("28.8"),
    unit="g/mol ATP",
    source="Stouthamer 1973, Antonie van Leeuwenhoek 39:545, abstract: glucose and salts",
)
"""Yield on ATP of a cell that spends it on nothing but making itself from glucose and salts."""
LEAST_SEEN = SourcedValue(
    value=Fraction(4),
    unit="g/mol ATP",
    source="reviews give about 4 to 5 for bacteria that couple growth badly, from memory",
)
"""Yields on ATP below this are hardly ever reported, but for very slow growth."""
_PER_GRAM = Fraction(1, 10_000)
"""Unit of the table: 1e-4 mol ATP per g of cells [mol/g]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class AtpStep:
    """ATP for one step.

    Parameters
    ----------
    macromolecule : str
        For what, or ``transport``.
    step : str
        Which step.
    amount : Fraction
        ATP per dry weight of the whole cell [mol/g].
    source : str
        Where the number comes from.
    """

    macromolecule: str
    step: str
    amount: Fraction
    source: str


@dataclass(frozen=True, slots=True, kw_only=True)
class TheoreticalAtp:
    """ATP for making a cell from glucose and salts.

    Parameters
    ----------
    steps : tuple of AtpStep
        In the order of the table, those without an amount left out.
    not_counted : tuple of str
        Macromolecules for which no cost is known.
    """

    steps: tuple[AtpStep, ...]
    not_counted: tuple[str, ...]

    def of(self, step: str) -> Fraction:
        """Sum of all steps of a name [mol/g]."""
        return sum((item.amount for item in self.steps if item.step == step), Fraction(0))

    @property
    def polymerisation(self) -> Fraction:
        """ATP for joining monomers to protein, RNA and DNA [mol/g]."""
        return self.of("polymerisation")

    @property
    def transport(self) -> Fraction:
        """ATP for the uptake of ammonium, potassium and phosphate [mol/g]."""
        return sum(
            (item.amount for item in self.steps if item.macromolecule == "transport"), Fraction(0)
        )

    @property
    def total(self) -> Fraction:
        """ATP for the whole cell [mol/g]."""
        return sum((item.amount for item in self.steps), Fraction(0))


@dataclass(frozen=True, slots=True, kw_only=True)
class PublishedAtpYield:
    """A published yield of dry weight on ATP.

    Parameters
    ----------
    name : str
        Of what.
    low, high : Fraction
        Its ends, equal for one number [g/mol ATP].
    source, status : str
        Where it stands, and how it was seen.
    """

    name: str
    low: Fraction
    high: Fraction
    source: str
    status: str


def _rows(name: str) -> list[dict[str, str]]:
    text = files("yieldnet.chemistry").joinpath(f"data/{name}").read_text("utf-8")
    return list(csv.DictReader(text.splitlines()))


@cache
def published_atp_yields() -> tuple[PublishedAtpYield, ...]:
    """Published yields on ATP, in the order of the table.

    Examples
    --------
    >>> float(published_atp_yields()[0].high)
    28.8
    """
    return tuple(
        PublishedAtpYield(
            name=row["name"],
            low=Fraction(row["low"]),
            high=Fraction(row["high"]),
            source=row["source"],
            status=row["status"],
        )
        for row in _rows("atp_yields.csv")
    )


def theoretical_atp(cell: BiomassComposition) -> TheoreticalAtp:
    """ATP that theory asks for making a cell from glucose and salts.

    Parameters
    ----------
    cell : BiomassComposition
        The cell.

    Returns
    -------
    TheoreticalAtp
        ATP step by step [mol/g].

    Notes
    -----
    The cost of each macromolecule in the table is divided by its share in the cell of the table,
    and taken by its share here. Ammonium is taken by the nitrogen of the cell, half an ATP each;
    potassium and phosphate per g of cells as in the table. Costs are those of Escherichia coli on
    glucose; the ATP of making precursors, and spare losses, are not in them.
    """
    shares: dict[str, Fraction] = {}
    unknown: list[str] = []
    for part in cell.parts:
        word = part.macromolecule.atp_as
        if word:
            shares[word] = shares.get(word, Fraction(0)) + part.share
        else:
            unknown.append(part.macromolecule.name)
    steps = []
    for row in _rows("polymerisation_atp.csv"):
        table = Fraction(row["amount"]) * _PER_GRAM
        if row["scales_with"] == "share":
            amount = table / Fraction(row["share"]) * shares.get(row["macromolecule"], Fraction(0))
        elif row["scales_with"] == "nitrogen":
            amount = ATP_PER_AMMONIUM.value * cell.moles("N")
        else:
            amount = table
        if amount:
            steps.append(
                AtpStep(
                    macromolecule=row["macromolecule"],
                    step=row["step"],
                    amount=amount,
                    source=f"{row['source']}; {row['status']}",
                )
            )
    return TheoreticalAtp(steps=tuple(steps), not_counted=tuple(unknown))
