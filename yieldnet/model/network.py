"""A network of reactions as its author wrote it."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from enum import StrEnum
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.formula import Formula
from yieldnet.foundation.units import Weight

if TYPE_CHECKING:
    from yieldnet.foundation.exact import WrittenNumber
    from yieldnet.foundation.findings import SourceSpan
    from yieldnet.model.equation import Equation

__all__ = [
    "BIOMASS",
    "GROWTH",
    "Carrier",
    "CarrierKind",
    "Compound",
    "Direction",
    "Growth",
    "Maintenance",
    "MeantFor",
    "Network",
    "Parameter",
    "ParameterSet",
    "Reaction",
    "Strain",
]

BIOMASS = "biomass"
"""Name of the compound that growth makes."""
GROWTH = "growth"
"""Name of the growth reaction."""


class Direction(StrEnum):
    """Which way a compound may cross the cell boundary."""

    CONSUMED = "consumed"
    PRODUCED = "produced"
    EITHER = "either"


class CarrierKind(StrEnum):
    """What a carrier moves."""

    ENERGY = "energy"
    REDOX = "redox"


@dataclass(frozen=True, slots=True, kw_only=True)
class Compound:
    """A compound with its formula.

    Parameters
    ----------
    name : str
        Name used in the equations.
    formula : Formula
        Elements and charge; without elements for an energy carrier.
    ash : Fraction
        Mass fraction of ash in the whole weight; 0 for all but biomass [g/g].
    about : str
        Remark.
    span : SourceSpan or None
        Where it was written; ``None`` for a library compound.
    """

    name: str
    formula: Formula
    ash: Fraction = Fraction(0)
    about: str = ""
    span: SourceSpan | None = field(default=None, compare=False, repr=False)

    @property
    def weight(self) -> Weight:
        """Mass with ash, and carbon, of one mol."""
        mass = self.formula.molar_mass / (1 - self.ash)
        return Weight(name=self.name, molar_mass=mass or None, carbon=self.formula["C"])


@dataclass(frozen=True, slots=True, kw_only=True)
class Carrier:
    """An inside compound that moves energy or reducing equivalents."""

    name: str
    kind: CarrierKind
    formula: Formula
    about: str = ""
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Parameter:
    """A number with a name that coefficients use.

    Parameters
    ----------
    name : str
        Name in expressions.
    value : Fraction
        Its value, in ``unit``.
    low, high : Fraction or None
        Range in which it is believed to lie, in ``unit``.
    unit, about, source : str
        As written.
    span : SourceSpan or None
        Where it was written.
    """

    name: str
    value: Fraction
    low: Fraction | None = None
    high: Fraction | None = None
    unit: str = ""
    about: str = ""
    source: str = ""
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class ParameterSet:
    """Values of some parameters that a case can choose together by a name.

    Parameters
    ----------
    name : str
        Name by which a case chooses it.
    values : tuple of (str, Fraction)
        Value of each parameter, in the unit of that parameter.
    maintenance : Maintenance or None
        Maintenance that goes with them; ``None`` to keep that of the network.
    about, source : str
        As written.
    span : SourceSpan or None
        Where it was written.
    """

    name: str
    values: tuple[tuple[str, Fraction], ...]
    maintenance: Maintenance | None = None
    about: str = ""
    source: str = ""
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class MeantFor:
    """What a network was written to answer; beyond it an answer carries a warning.

    Parameters
    ----------
    substrates, products : tuple of str
        Crossing compounds, in written order.
    span : SourceSpan or None
        Where it was written.
    """

    substrates: tuple[str, ...]
    products: tuple[str, ...]
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Reaction:
    """A named equation.

    Parameters
    ----------
    name : str
        Enzyme or step.
    equation : Equation
        What it turns into what.
    group : str
        Name under which it can be switched off with others; empty if none.
    about, source : str
        As written.
    span : SourceSpan or None
        Where it was written.
    """

    name: str
    equation: Equation
    group: str = ""
    about: str = ""
    source: str = ""
    span: SourceSpan | None = field(default=None, compare=False, repr=False)

    def __repr__(self) -> str:
        return f"Reaction({self.name!r}: {self.equation})"


@dataclass(frozen=True, slots=True, kw_only=True)
class Strain:
    """A preset: reactions or groups that are switched off."""

    name: str
    off: tuple[str, ...]
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Growth:
    """How biomass is made.

    Parameters
    ----------
    biomass : Compound
        The biomass with formula and ash.
    equation : Equation
        Precursors to biomass.
    per_gram : bool
        Whether the equation makes 1 g with its other coefficients in mmol, rather than 1 mol.
    about, source : str
        As written.
    span : SourceSpan or None
        Where it was written.
    """

    biomass: Compound
    equation: Equation
    per_gram: bool = False
    about: str = ""
    source: str = ""
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Maintenance:
    """Energy carrier spent on staying alive.

    Parameters
    ----------
    carrier : str
        Energy carrier.
    rate_mol_per_gram_hour : Fraction
        Specific rate [mol/g/h].
    written : WrittenNumber
        The number as written.
    unit : str
        Its unit as written.
    source : str
        Where it comes from.
    span : SourceSpan or None
        Where it was written.
    """

    carrier: str
    rate_mol_per_gram_hour: Fraction
    written: WrittenNumber
    unit: str
    source: str = ""
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Network:
    """Reactions with compounds, carriers, crossing directions, parameters and growth.

    Parameters
    ----------
    title, about : str
        As written.
    compounds : tuple of Compound
        Every compound that is not a carrier, in order of appearance, biomass included.
    carriers : tuple of Carrier
        Energy and redox carriers.
    crossing : tuple of (str, Direction)
        Compounds that may enter or leave the cell, and which way.
    reactions : tuple of Reaction
        In written order, growth not included.
    parameters : tuple of Parameter
        In written order.
    parameter_sets : tuple of ParameterSet
        Values of some parameters that a case can choose together.
    meant_for : MeantFor or None
        Substrates and products that it was written for; ``None`` if it does not say.
    strains : tuple of Strain
        Named presets.
    growth : Growth or None
        How biomass is made.
    maintenance : Maintenance or None
        Energy for staying alive.
    file : str
        Path as the user gave it; empty if it came from no file.
    crossing_spans : tuple of (str, SourceSpan)
        Where each crossing compound was written.
    span : SourceSpan or None
        Top of the file.
    """

    title: str
    compounds: tuple[Compound, ...]
    carriers: tuple[Carrier, ...]
    crossing: tuple[tuple[str, Direction], ...]
    reactions: tuple[Reaction, ...]
    about: str = ""
    parameters: tuple[Parameter, ...] = ()
    parameter_sets: tuple[ParameterSet, ...] = ()
    meant_for: MeantFor | None = None
    strains: tuple[Strain, ...] = ()
    growth: Growth | None = None
    maintenance: Maintenance | None = None
    file: str = field(default="", compare=False)
    crossing_spans: tuple[tuple[str, SourceSpan], ...] = field(
        default=(), compare=False, repr=False
    )
    span: SourceSpan | None = field(default=None, compare=False, repr=False)

    def __repr__(self) -> str:
        return f"Network({self.title!r}: {len(self.reactions)} reactions)"

    def _repr_html_(self) -> str:
        """Title and equations, for a notebook."""
        from html import escape

        rows = "".join(
            f"<tr><td>{escape(item.name)}</td><td>{escape(str(item.equation))}</td>"
            f"<td>{escape(item.group)}</td></tr>"
            for item in self.reactions
        )
        heads = "<tr><th>reaction</th><th>equation</th><th>group</th></tr>"
        return f"<p><b>{escape(self.title)}</b></p><table>{heads}{rows}</table>"

    def direction(self, name: str) -> Direction | None:
        """Which way a compound may cross; ``None`` for an inside compound."""
        return dict(self.crossing).get(name)

    def compound(self, name: str) -> Compound | None:
        """Compound by name, carriers not included."""
        return next((item for item in self.compounds if item.name == name), None)

    def groups(self) -> tuple[str, ...]:
        """Groups in order of appearance."""
        return tuple(dict.fromkeys(item.group for item in self.reactions if item.group))

    def members(self, name: str) -> tuple[str, ...]:
        """Reactions that a reaction or group name stands for; empty if it is unknown."""
        if name == GROWTH and self.growth is not None:
            return (GROWTH,)
        if any(item.name == name for item in self.reactions):
            return (name,)
        return tuple(item.name for item in self.reactions if item.group == name)

    def strain(self, name: str) -> Strain | None:
        """Strain by name."""
        return next((item for item in self.strains if item.name == name), None)

    def parameter_set(self, name: str) -> ParameterSet | None:
        """Parameter set by name."""
        return next((item for item in self.parameter_sets if item.name == name), None)

    def without(self, *names: str) -> Network:
        """The network with reactions or groups taken out.

        Parameters
        ----------
        *names : str
            Reactions or groups.

        Returns
        -------
        Network
            A new network.

        Raises
        ------
        KeyError
            If a name is neither a reaction nor a group.
        """
        gone: set[str] = set()
        for name in names:
            members = self.members(name)
            if not members:
                raise KeyError(name)
            gone.update(members)
        return replace(
            self,
            reactions=tuple(item for item in self.reactions if item.name not in gone),
            growth=None if GROWTH in gone else self.growth,
        )

    def with_parameter(self, name: str, value: Fraction, span: SourceSpan | None = None) -> Network:
        """The network with another value of one parameter, written elsewhere if a span says so.

        Raises
        ------
        KeyError
            If there is no such parameter.
        """
        if all(item.name != name for item in self.parameters):
            raise KeyError(name)
        return replace(
            self,
            parameters=tuple(
                replace(item, value=value, span=span or item.span) if item.name == name else item
                for item in self.parameters
            ),
        )
