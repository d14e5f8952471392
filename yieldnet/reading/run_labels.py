"""What a heading of a sheet, or a name under ``errors`` of a run file, stands for."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, field
from enum import StrEnum
from typing import TYPE_CHECKING

from yieldnet.chemistry.library import find_compound
from yieldnet.foundation.findings import near
from yieldnet.model.network import BIOMASS
from yieldnet.reading.measures import Measure

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Findings, SourceSpan
    from yieldnet.model.network import Compound
    from yieldnet.reading.names import NameBook

__all__ = ["INERT", "Label", "LabelBook", "Role", "Salt"]

INERT = "nitrogen"
"""Gas that may be listed in a gas without standing in the equation."""


class Role(StrEnum):
    """What a column or a setting is for."""

    TIME = "time"
    STATE = "state"
    DILUTION_RATE = "dilution rate"
    VOLUME = "volume"
    SAMPLED = "sampled"
    FED = "fed"
    FEED_RATE = "feed rate"
    BASE_ADDED = "base added"
    BASE_RATE = "base rate"
    OPTICAL_DENSITY = "optical density"
    WET_WEIGHT = "wet weight"
    FLOW_IN = "gas flow in"
    FLOW_OUT = "gas flow out"
    BROTH = "broth"
    FEED = "feed"
    BASE = "base"
    GAS_IN = "in"
    GAS_OUT = "out"


_PLAIN = {
    Role.TIME: Measure.TIME,
    Role.STATE: Measure.SIGNAL,
    Role.DILUTION_RATE: Measure.RATE,
    Role.VOLUME: Measure.VOLUME,
    Role.SAMPLED: Measure.VOLUME,
    Role.FED: Measure.VOLUME,
    Role.FEED_RATE: Measure.FLOW,
    Role.BASE_ADDED: Measure.VOLUME,
    Role.BASE_RATE: Measure.FLOW,
    Role.OPTICAL_DENSITY: Measure.SIGNAL,
    Role.WET_WEIGHT: Measure.WET_WEIGHT,
    Role.FLOW_IN: Measure.FLOW,
    Role.FLOW_OUT: Measure.FLOW,
}
_ROLE_WORDS = re.compile(r"^(feed|base) | (in|out)$", re.I)
_SIGNALS = (Role.OPTICAL_DENSITY, Role.WET_WEIGHT)


@dataclass(frozen=True, slots=True, kw_only=True)
class Salt:
    """A salt that was measured, and the acid that is meant.

    Parameters
    ----------
    salt : Compound
        The salt with its formula.
    acid : str
        Compound of the equation.
    multiple : int
        Acid in one mol of the salt [mol/mol].
    """

    salt: Compound
    acid: str
    multiple: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Label:
    """Meaning of a heading.

    Parameters
    ----------
    role : Role
        What it is for.
    name : str
        The heading in the words of the run.
    measure : Measure
        Kind of its numbers.
    compound : str
        Compound it belongs to; empty for volumes, flows and rates.
    weight : Compound or None
        Compound whose formula turns mass into mol: the salt where a salt was measured.
    multiple : int
        Compound in one mol of ``weight`` [mol/mol].
    """

    role: Role
    name: str
    measure: Measure
    compound: str = ""
    weight: Compound | None = None
    multiple: int = 1

    @property
    def thing(self) -> tuple[Role, str]:
        """What is measured, however: two columns of one thing contradict each other."""
        return (Role.BROTH if self.role in _SIGNALS else self.role), self.compound


@dataclass(slots=True, kw_only=True)
class LabelBook:
    """Finds what a name stands for.

    Parameters
    ----------
    compounds : mapping of str to Compound
        Compounds of the equation.
    book : NameBook
        How the run file spells them.
    salts : mapping of str to Salt
        Salts by their name.
    """

    compounds: Mapping[str, Compound]
    book: NameBook
    salts: Mapping[str, Salt] = field(default_factory=dict)

    def find(self, words: str) -> Label | None:
        """Meaning of a name, ``None`` if it has none."""
        name = " ".join(words.split())
        folded = name.casefold()
        for role, measure in _PLAIN.items():
            if folded == role.casefold():
                compound = BIOMASS if role in _SIGNALS else ""
                return Label(role=role, name=role.value, measure=measure, compound=compound)
        for role in (Role.FEED, Role.BASE):
            if folded.startswith(f"{role} "):
                return self._liquid(role, name[len(role) :].strip())
        for role in (Role.GAS_IN, Role.GAS_OUT):
            if folded.endswith(f" {role}"):
                return self._gas(role, name[: -len(role)].strip())
        return self._liquid(Role.BROTH, name)

    def named(self, words: str, span: SourceSpan) -> Label | None:
        """Meaning of a name in the run file, which spells a compound one way (YN303)."""
        label = self.find(words)
        if label is not None and label.compound in self.compounds and label.role not in _SIGNALS:
            bare = _ROLE_WORDS.sub("", " ".join(words.split()))
            if bare not in self.salts:
                self.book.resolve(bare, span)
        return label

    def _liquid(self, role: Role, word: str) -> Label | None:
        prefix = "" if role is Role.BROTH else f"{role} "
        for name, salt in self.salts.items():
            if name.casefold() == word.casefold():
                return Label(
                    role=role,
                    name=prefix + name,
                    measure=Measure.CONCENTRATION,
                    compound=salt.acid,
                    weight=salt.salt,
                    multiple=salt.multiple,
                )
        compound = self.compound(word)
        if compound is None:
            return None
        return Label(
            role=role,
            name=prefix + compound.name,
            measure=Measure.DRY_WEIGHT if compound.name == BIOMASS else Measure.CONCENTRATION,
            compound=compound.name,
            weight=compound,
        )

    def _gas(self, role: Role, word: str) -> Label | None:
        compound = self.compound(word)
        name = compound.name if compound else ""
        if compound is None and (inert := find_compound(word)) and inert.name == INERT:
            name = INERT
        if not name or name == BIOMASS:
            return None
        return Label(role=role, name=f"{name} {role}", measure=Measure.FRACTION, compound=name)

    def compound(self, word: str) -> Compound | None:
        """Compound of the equation by name or by a synonym of the library."""
        for name, compound in self.compounds.items():
            if name.casefold() == word.casefold():
                return compound
        entry = find_compound(word)
        if entry is None:
            return None
        return next(
            (item for name, item in self.compounds.items() if find_compound(name) is entry), None
        )

    def refuse(
        self, words: str, label: str, span: SourceSpan, findings: Findings, *, column: bool = False
    ) -> None:
        """Say that a name has no meaning, or that the equation lacks its compound."""
        bare = _ROLE_WORDS.sub("", " ".join(words.split()))
        entry = find_compound(bare)
        ignore = ", or list the column under 'ignore'" if column else ""
        if entry is not None or bare.casefold() == BIOMASS:
            findings.add(
                "YN503",
                f"{label} {words!r} names {bare!r}, which the equation does not list",
                span,
                hint=f"Add it to the equation or under 'either side'{ignore}.",
            )
            return
        findings.add(
            "YN126",
            f"{label} {words!r} is not known",
            span,
            hint=near(words, (*self.compounds, *self.salts))
            or near(words, self.names())
            or near(bare, self.names())
            or f"Name a compound of the equation{ignore}.",
        )

    def names(self) -> tuple[str, ...]:
        """Every name that has a meaning, for near matches."""
        liquids = (*self.compounds, *self.salts)
        gases = [name for name in (*self.compounds, INERT) if name != BIOMASS]
        return (
            *(role.value for role in _PLAIN),
            *liquids,
            *(f"feed {name}" for name in liquids),
            *(f"{name} {role}" for name in gases for role in (Role.GAS_IN, Role.GAS_OUT)),
        )
