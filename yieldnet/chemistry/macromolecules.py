"""Biomass from its macromolecules: from shares of the dry weight to a formula per mol of carbon.

What comes in is a share for each macromolecule, ash, and the make-up of the polymers from their
monomers. What comes out is exact. Phosphorus and sulphur are weighed, but left out of the formula
that balances use: networks here leave phosphate and sulphate out. Each phosphorus goes with HPO3,
as which phosphate joins a polymer, so that no electron goes with it; each sulphur goes alone. Both
then weigh with the ash.
"""

from __future__ import annotations

import csv
from dataclasses import dataclass
from fractions import Fraction
from functools import cache
from importlib.resources import files
from typing import TYPE_CHECKING

from yieldnet.chemistry.formula import Formula, read_formula

if TYPE_CHECKING:
    from collections.abc import Mapping

__all__ = [
    "DEFAULT_MAKE_UP",
    "PLACES",
    "BiomassComposition",
    "Macromolecule",
    "MakeUp",
    "Monomer",
    "Part",
    "compose",
    "find_macromolecule",
    "find_make_up",
    "macromolecules",
    "make_ups",
    "monomers",
]

DEFAULT_MAKE_UP = "Escherichia coli"
"""Make-up of the polymers where none is said."""
PLACES = 6
"""Decimals to which a formula and an ash are rounded before a balance uses them [-]."""
_WATER = read_formula("H2O")
_PHOSPHATE = read_formula("HPO3")
_SULPHUR = read_formula("S")
_ZERO = Fraction(0)


@dataclass(frozen=True, slots=True, kw_only=True)
class Monomer:
    """A building block as a free molecule.

    Parameters
    ----------
    name : str
        Its name.
    kind : str
        ``amino acids``, ``ribonucleotides``, ``deoxyribonucleotides`` or ``lipids``.
    formula : Formula
        Elements of the free, undissociated molecule.
    """

    name: str
    kind: str
    formula: Formula


@dataclass(frozen=True, slots=True, kw_only=True)
class MakeUp:
    """Amounts of the monomers in the polymers of one organism.

    Parameters
    ----------
    name : str
        Organism.
    amounts : tuple of (str, Fraction)
        Amount of each monomer; only ratios within a kind count [mol].
    sources : tuple of str
        Where the amounts come from, with ``from memory`` where that is so.
    """

    name: str
    amounts: tuple[tuple[str, Fraction], ...]
    sources: tuple[str, ...]

    def of_kind(self, kind: str) -> tuple[tuple[Monomer, Fraction], ...]:
        """Monomers of a kind with their amounts, zeros left out."""
        known = monomers()
        return tuple(
            (known[name], amount)
            for name, amount in self.amounts
            if amount and known[name].kind == kind
        )

    def with_amounts(self, amounts: Mapping[str, Fraction]) -> MakeUp:
        """The make-up with the whole list of every kind that ``amounts`` names replaced.

        Parameters
        ----------
        amounts : mapping of str to Fraction
            Amount by monomer [mol].

        Returns
        -------
        MakeUp
            A new make-up; kinds that are not named stay.
        """
        known = monomers()
        kinds = {known[name].kind for name in amounts}
        kept = tuple(pair for pair in self.amounts if known[pair[0]].kind not in kinds)
        return MakeUp(
            name=f"{self.name}, with own {' and '.join(sorted(kinds))}",
            amounts=(*kept, *amounts.items()),
            sources=self.sources,
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class Macromolecule:
    """A part of biomass with a formula of its own, or made of monomers.

    Parameters
    ----------
    name : str
        Its name.
    synonyms : tuple of str
        Other names that are understood.
    made_of : str
        Kind of its monomers; empty if it has a formula.
    formula : Formula or None
        Repeat unit.
    water_lost : int
        Water that each monomer gives off as it joins [mol/mol].
    atp_as : str
        Row of the table of ATP costs that it is counted under; empty for none.
    source, note : str
        Where the formula comes from, and a remark.
    """

    name: str
    synonyms: tuple[str, ...]
    made_of: str
    formula: Formula | None
    water_lost: int
    atp_as: str
    source: str
    note: str

    def unit(self, make_up: MakeUp) -> Formula:
        """Elements of one mean repeat unit.

        Parameters
        ----------
        make_up : MakeUp
            Amounts of the monomers.

        Returns
        -------
        Formula
            Elements per mol of repeat units [mol/mol].

        Raises
        ------
        ValueError
            If the make-up has none of its monomers.

        Examples
        --------
        >>> glycine = MakeUp(name="", amounts=(("glycine", Fraction(1)),), sources=())
        >>> str(find_macromolecule("protein").unit(glycine))
        'C2H3NO'
        """
        if self.formula is not None:
            return self.formula
        members = make_up.of_kind(self.made_of)
        total = sum((amount for _, amount in members), _ZERO)
        if not total:
            raise ValueError(f"{make_up.name} has no {self.made_of}, of which {self.name} is made")
        found: dict[str, Fraction] = {}
        for monomer, amount in members:
            _add(found, monomer.formula, amount / total)
        _add(found, _WATER, Fraction(-self.water_lost))
        return Formula.of(found)


@dataclass(frozen=True, slots=True, kw_only=True)
class Part:
    """What one macromolecule brings to the biomass.

    Parameters
    ----------
    macromolecule : Macromolecule
        Which.
    share : Fraction
        Share of the dry weight [g/g].
    unit : Formula
        One repeat unit.
    """

    macromolecule: Macromolecule
    share: Fraction
    unit: Formula

    def moles(self, element: str) -> Fraction:
        """Amount of an element that it brings to one gram of dry weight [mol/g]."""
        return self.share * self.unit[element] / self.unit.molar_mass

    def electrons(self) -> Fraction:
        """Available electrons that it brings to one gram, sulphur left out [mol/g]."""
        unit = Formula(tuple(pair for pair in self.unit.elements if pair[0] != "S"))
        return self.share * unit.degree_of_reduction() / self.unit.molar_mass


@dataclass(frozen=True, slots=True, kw_only=True)
class BiomassComposition:
    """Biomass that is put together from its macromolecules; all numbers exact.

    Parameters
    ----------
    parts : tuple of Part
        In written order.
    ash : Fraction
        Ash as given [g/g].
    make_up : MakeUp
        Amounts of the monomers.
    scaled_from : Fraction or None
        Sum of the shares as given, if they were scaled to 1 [g/g].
    """

    parts: tuple[Part, ...]
    ash: Fraction
    make_up: MakeUp
    scaled_from: Fraction | None = None

    def moles(self, element: str) -> Fraction:
        """Amount of an element in one gram of dry weight, ash not counted [mol/g]."""
        return sum((part.moles(element) for part in self.parts), _ZERO)

    @property
    def whole_formula(self) -> Formula:
        """Elements per mol of carbon, phosphorus and sulphur with them [mol/C-mol]."""
        carbon = self.moles("C")
        return Formula.of(
            {name: self.moles(name) / carbon for name in ("C", "H", "O", "N", "P", "S")}
        )

    @property
    def formula(self) -> Formula:
        """Elements per mol of carbon without HPO3 and sulphur, as balances use them [mol/C-mol]."""
        found = dict(self.whole_formula.elements)
        phosphorus = found.pop("P", _ZERO)
        found.pop("S", None)
        for name, amount in _PHOSPHATE.elements:
            if name != "P":
                found[name] = found.get(name, _ZERO) - phosphorus * amount
        return Formula.of(found)

    @property
    def phosphate(self) -> Fraction:
        """Weight of the HPO3 that the formula leaves out [g/g]."""
        return self.moles("P") * _PHOSPHATE.molar_mass

    @property
    def sulphur(self) -> Fraction:
        """Weight of the sulphur that the formula leaves out [g/g]."""
        return self.moles("S") * _SULPHUR.molar_mass

    @property
    def minerals(self) -> Fraction:
        """What of the dry weight the formula does not hold: ash, HPO3 and sulphur [g/g]."""
        return self.ash + self.phosphate + self.sulphur

    @property
    def grams_per_carbon_mol(self) -> Fraction:
        """Dry weight with all minerals that holds one mol of carbon [g/C-mol]."""
        return 1 / self.moles("C")

    @property
    def degree_of_reduction(self) -> Fraction:
        """Available electrons per mol of carbon, ammonia as reference, no sulphur [mol/C-mol]."""
        return self.formula.degree_of_reduction()

    @property
    def rounded(self) -> tuple[Formula, Fraction]:
        """Formula and minerals in six decimals: what a network or case then takes as exact.

        Endless fractions would make every later number endless without saying more: the shares
        are known to two or three digits.
        """
        formula = Formula(
            tuple((name, round(amount, PLACES)) for name, amount in self.formula.elements)
        )
        return formula, round(self.minerals, PLACES)


def _add(total: dict[str, Fraction], formula: Formula, times: Fraction) -> None:
    for name, amount in formula.elements:
        total[name] = total.get(name, _ZERO) + times * amount


def _rows(name: str) -> list[dict[str, str]]:
    text = files("yieldnet.chemistry").joinpath(f"data/{name}").read_text("utf-8")
    return list(csv.DictReader(text.splitlines()))


@cache
def monomers() -> dict[str, Monomer]:
    """All monomers by name."""
    return {
        row["name"]: Monomer(
            name=row["name"], kind=row["kind"], formula=read_formula(row["formula"])
        )
        for row in _rows("monomers.csv")
    }


@cache
def macromolecules() -> tuple[Macromolecule, ...]:
    """All macromolecules, in the order of the table."""
    return tuple(
        Macromolecule(
            name=row["name"],
            synonyms=tuple(word.strip() for word in row["synonyms"].split(";") if word.strip()),
            made_of=row["made_of"],
            formula=read_formula(row["formula"]) if row["formula"] else None,
            water_lost=int(row["water_lost"]),
            atp_as=row["atp_as"],
            source=f"{row['source']}; {row['status']}",
            note=row["note"],
        )
        for row in _rows("macromolecules.csv")
    )


@cache
def make_ups() -> tuple[MakeUp, ...]:
    """All make-ups, in the order of the table."""
    found: dict[str, list[dict[str, str]]] = {}
    for row in _rows("monomer_amounts.csv"):
        found.setdefault(row["make_up"], []).append(row)
    return tuple(
        MakeUp(
            name=name,
            amounts=tuple((row["monomer"], Fraction(row["amount"])) for row in rows),
            sources=tuple(
                dict.fromkeys(
                    row["source"] + (" (from memory)" * (row["status"] == "from memory"))
                    for row in rows
                )
            ),
        )
        for name, rows in found.items()
    )


def find_macromolecule(word: str) -> Macromolecule | None:
    """Macromolecule by name or synonym; capitals do not count.

    Examples
    --------
    >>> find_macromolecule("murein").name
    'peptidoglycan'
    """
    folded = word.casefold()
    for item in macromolecules():
        if folded in (name.casefold() for name in (item.name, *item.synonyms)):
            return item
    return None


def find_make_up(word: str) -> MakeUp | None:
    """Make-up by the name of its organism; capitals do not count.

    Examples
    --------
    >>> find_make_up("YEAST").name
    'yeast'
    """
    return next((item for item in make_ups() if item.name.casefold() == word.casefold()), None)


def compose(
    shares: Mapping[str, Fraction],
    ash: Fraction = _ZERO,
    make_up: MakeUp | None = None,
    *,
    normalise: bool = False,
) -> BiomassComposition:
    """Biomass from shares of its dry weight.

    Parameters
    ----------
    shares : mapping of str to Fraction
        Share of the dry weight by macromolecule [g/g].
    ash : Fraction
        Share of ash [g/g].
    make_up : MakeUp, optional
        Amounts of the monomers; of :data:`DEFAULT_MAKE_UP` if left out.
    normalise : bool
        Whether shares and ash are divided by their sum; else that sum must be 1.

    Returns
    -------
    BiomassComposition
        Formula per mol of carbon and all that follows from it.

    Raises
    ------
    KeyError
        If a macromolecule is not known.
    ValueError
        If a share is not between 0 and 1, the sum is not 1, or nothing holds carbon.

    Examples
    --------
    >>> from fractions import Fraction
    >>> half = Fraction(1, 2)
    >>> cell = compose({"glycogen": half, "polyhydroxybutyrate": half})
    >>> round(float(cell.grams_per_carbon_mol), 2), cell.minerals
    (23.96, Fraction(0, 1))
    """
    chosen = make_up if make_up is not None else find_make_up(DEFAULT_MAKE_UP)
    if chosen is None:
        raise KeyError(DEFAULT_MAKE_UP)
    for name, share in (*shares.items(), ("ash", ash)):
        if not 0 <= share <= 1:
            raise ValueError(f"the share of {name} is not between 0 and 1")
    total = sum(shares.values(), ash)
    if total != 1 and not normalise:
        raise ValueError(f"the shares sum to {float(total):g}, not to 1")
    parts = []
    for name, share in shares.items():
        item = find_macromolecule(name)
        if item is None:
            raise KeyError(name)
        if share:
            parts.append(Part(macromolecule=item, share=share / total, unit=item.unit(chosen)))
    if not parts:
        raise ValueError("no macromolecule has a share, so there is no carbon")
    return BiomassComposition(
        parts=tuple(parts),
        ash=ash / total,
        make_up=chosen,
        scaled_from=None if total == 1 else total,
    )
