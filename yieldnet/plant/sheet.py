"""What a plant sheet holds, as values: figures with their formula, streams, ions, balances."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from yieldnet.chemistry.formula import Formula
    from yieldnet.foundation.findings import Finding
    from yieldnet.foundation.sourced import Assumption, SourcedValue
    from yieldnet.model.case import Case
    from yieldnet.model.plant import Plant
    from yieldnet.prediction.result import Prediction

__all__ = [
    "CAUTIONS",
    "COMMON_PRACTICE",
    "Balance",
    "Figure",
    "Input",
    "Ion",
    "Number",
    "PlantSheet",
    "Stream",
    "of_value",
]

Number = Fraction | float
"""Exact until a root, a logarithm or a power is taken."""
COMMON_PRACTICE = "common practice, no source"
"""Where a number comes from that engineers use without one."""
CAUTIONS = (
    "Figures are for screening only: check them against experiments before anything is built, run"
    " or bought.",
    "Handling of gases (carbon dioxide and nitrogen suffocate, oxygen feeds fire), ammonia,"
    " caustic, pressure, heat and genetically modified organisms is governed by local codes and"
    " needs licensed practice.",
)
"""What stands under every sheet."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Input:
    """A number that a figure is made from.

    Parameters
    ----------
    name : str
        Its name.
    value : Fraction or float
        In ``unit``.
    unit : str
        Unit as text.
    source : str
        Where it comes from; empty for what the case or another figure says.
    """

    name: str
    value: Number
    unit: str
    source: str = ""


def of_value(name: str, known: SourcedValue) -> Input:
    """Input made of a constant with its source."""
    return Input(name=name, value=known.value, unit=known.unit, source=known.source)


@dataclass(frozen=True, slots=True, kw_only=True)
class Figure:
    """A number of the sheet.

    Parameters
    ----------
    section : str
        Heading under which it stands.
    name : str
        Its name, once in a sheet.
    value : Fraction, float or None
        In ``unit``; ``None`` where there is none, and ``formula`` says why.
    unit : str
        Unit as text.
    formula : str
        How it follows, in words.
    inputs : tuple of Input
        What it is made from.
    source : str
        Of the formula, where it has one.
    """

    section: str
    name: str
    value: Number | None
    unit: str
    formula: str
    inputs: tuple[Input, ...] = ()
    source: str = ""

    def as_input(self) -> Input:
        """The figure as an input of another.

        Raises
        ------
        ValueError
            If it has no value.
        """
        if self.value is None:
            raise ValueError(f"{self.name} has no value")
        return Input(name=self.name, value=self.value, unit=self.unit)


@dataclass(frozen=True, slots=True, kw_only=True)
class Stream:
    """Something that enters or leaves the plant.

    Parameters
    ----------
    name : str
        What it is.
    enters : bool
        Whether it enters.
    kg_per_h : Fraction
        Flow while on stream [kg/h].
    t_per_y : Fraction
        Flow in a year [t/y].
    mol_per_h : Fraction or None
        Flow; ``None`` for impurities, minerals and air, which have no formula [mol/h].
    formula : Formula or None
        Of one mol; it may hold fractions and negative amounts where one thing replaces another.
    rule : str
        How it follows, in words.
    """

    name: str
    enters: bool
    kg_per_h: Fraction
    t_per_y: Fraction
    mol_per_h: Fraction | None
    formula: Formula | None
    rule: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Ion:
    """What a dissolved acid, base or salt is in the broth.

    Parameters
    ----------
    name : str
        Compound and formula.
    formula : Formula
        Elements and charge.
    mol_per_h, kg_per_h, t_per_y : Fraction
        Flow [mol/h], [kg/h], [t/y].
    """

    name: str
    formula: Formula
    mol_per_h: Fraction
    kg_per_h: Fraction
    t_per_y: Fraction

    @property
    def charge_per_h(self) -> Fraction:
        """Charge that it carries [mol/h]."""
        return self.mol_per_h * self.formula.charge


@dataclass(frozen=True, slots=True, kw_only=True)
class Balance:
    """What enters and what leaves of one thing.

    Parameters
    ----------
    of : str
        Element, charge or mass.
    enters, leaves : Fraction
        In ``unit``; of charge, positive and negative.
    unit : str
        Unit as text.
    """

    of: str
    enters: Fraction
    leaves: Fraction
    unit: str

    @property
    def residual(self) -> Fraction:
        """Difference over the larger side; 0 where nothing flows [-]."""
        size = max(abs(self.enters), abs(self.leaves))
        return abs(self.enters - self.leaves) / size if size else Fraction(0)


@dataclass(frozen=True, slots=True, kw_only=True)
class PlantSheet:
    """Answer to what a plant needs.

    Parameters
    ----------
    case : Case
        The question.
    plant : Plant
        Its section ``plant``.
    prediction : Prediction
        Answer of the case.
    growth : Prediction or None
        Answer of the growth phase.
    equation : tuple of (str, Fraction)
        Overall equation of all phases, production positive, basis first [mol/mol basis].
    streams : tuple of Stream
        What enters, then what leaves.
    ions : tuple of Ion
        Acids and salts in the broth; empty without a base.
    figures : tuple of Figure
        By section.
    balances : tuple of Balance
        Elements, charge of the ions, mass.
    findings : tuple of Finding
        What is doubtful.
    assumptions : tuple of Assumption
        What was taken for granted.
    cautions : tuple of str
        What stands under every sheet.
    """

    case: Case
    plant: Plant
    prediction: Prediction
    growth: Prediction | None
    equation: tuple[tuple[str, Fraction], ...]
    streams: tuple[Stream, ...]
    ions: tuple[Ion, ...]
    figures: tuple[Figure, ...]
    balances: tuple[Balance, ...]
    findings: tuple[Finding, ...]
    assumptions: tuple[Assumption, ...]
    cautions: tuple[str, ...] = CAUTIONS

    def __repr__(self) -> str:
        sold = float(self.plant.output.value) / 1000
        return f"PlantSheet({self.case.title!r}: {sold:.4g} t/y {self.plant.product})"

    def figure(self, name: str) -> Figure:
        """Figure by name.

        Raises
        ------
        KeyError
            If the sheet has none of that name.
        """
        for item in self.figures:
            if item.name == name:
                return item
        raise KeyError(name)

    def stream(self, name: str) -> Stream:
        """Stream by name.

        Raises
        ------
        KeyError
            If the sheet has none of that name.
        """
        for item in self.streams:
            if item.name == name:
                return item
        raise KeyError(name)
