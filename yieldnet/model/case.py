"""A case: one question with an overall equation, conditions, measurements, demands and an aim."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from enum import StrEnum
from fractions import Fraction
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from yieldnet.foundation.exact import WrittenNumber
    from yieldnet.foundation.findings import Finding, SourceSpan
    from yieldnet.model.equation import Equation
    from yieldnet.model.network import Compound, Direction, Network
    from yieldnet.model.plant import Plant

__all__ = [
    "BAND",
    "DEFAULT_YIELD_UNIT",
    "Aim",
    "AimDirection",
    "Case",
    "Concentration",
    "Condition",
    "Correlation",
    "Demand",
    "EnergySurplus",
    "Measurement",
    "Named",
    "OverallCoefficient",
]


BAND = 2
"""Half width of a measured value's band in standard deviations [-]."""


DEFAULT_YIELD_UNIT = "mol/mol"
"""Unit of a measured value or demand that is written without one."""


class AimDirection(StrEnum):
    """Whether the aim is the most or the least of a coefficient."""

    MOST = "most"
    LEAST = "least"


class EnergySurplus(StrEnum):
    """What happens to ATP that neither growth nor maintenance needs."""

    LOST = "lost"
    NONE = "none"


@dataclass(frozen=True, slots=True, kw_only=True)
class OverallCoefficient:
    """One crossing compound of the overall equation besides the basis.

    Parameters
    ----------
    name : str
        Compound.
    side : Direction
        Side on which it is positive.
    written : WrittenNumber or None
        Coefficient as written [mol/mol basis]; ``None`` for ``?`` and either-side compounds.
    span : SourceSpan or None
        Where it was written.
    """

    name: str
    side: Direction
    written: WrittenNumber | None = None
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Condition:
    """A measured condition with its standard deviation, in the unit that its name says.

    Parameters
    ----------
    value : Fraction
        Growth rate [1/h], substrate uptake [mol/g/h], temperature [degC] or pH [-].
    sd : Fraction or None
        Standard deviation in the same unit; ``None`` if exact.
    text : str
        As written.
    span : SourceSpan or None
        Where it was written.
    """

    value: Fraction
    sd: Fraction | None
    text: str
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Concentration:
    """How much of a compound there is, for the Gibbs energy of reactions.

    Parameters
    ----------
    compound : str
        Which compound.
    low, high : Fraction
        Least and most; the same where one value is written [mol/L], of a gas [bar].
    gas : bool
        Whether it is the partial pressure of a gas.
    text : str
        As written.
    span : SourceSpan or None
        Where it was written.
    """

    compound: str
    low: Fraction
    high: Fraction
    gas: bool
    text: str
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Measurement:
    """A measured coefficient.

    Parameters
    ----------
    compound : str
        Which coefficient.
    value : Fraction
        Positive on the compound's side [mol/mol basis].
    sd : Fraction or None
        Standard deviation; ``None`` if exact [mol/mol basis].
    text : str
        As written.
    label : str
        Name of the statement.
    unit : str
        Unit in which it was written.
    factor : Fraction
        mol/mol basis in one ``unit`` [mol/mol].
    unit_given : bool
        Whether the unit was written, rather than the default taken.
    span : SourceSpan or None
        Where it was written.
    """

    compound: str
    value: Fraction
    sd: Fraction | None
    text: str
    label: str
    unit: str = "mol/mol"
    factor: Fraction = Fraction(1)
    unit_given: bool = True
    span: SourceSpan | None = field(default=None, compare=False, repr=False)

    @property
    def is_direct(self) -> bool:
        """Whether it stands under ``measured`` in the case, rather than following from others."""
        return self.label == f"measured {self.compound}"


@dataclass(frozen=True, slots=True, kw_only=True)
class Correlation:
    """Correlation of the errors of two measured values.

    Parameters
    ----------
    first, second : str
        The two coefficients by compound.
    value : Fraction
        Correlation coefficient of their errors, between -1 and 1 [-].
    span : SourceSpan or None
        Where it was written.
    """

    first: str
    second: str
    value: Fraction
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Demand:
    """A bound that the answer must keep.

    Parameters
    ----------
    compound : str
        Which coefficient.
    low, high : Fraction or None
        Least and most, positive on the compound's side [mol/mol basis].
    text : str
        As written.
    unit : str
        Unit in which it was written.
    factor : Fraction
        mol/mol basis in one ``unit`` [mol/mol].
    unit_given : bool
        Whether the unit was written, rather than the default taken.
    span : SourceSpan or None
        Where it was written.
    """

    compound: str
    low: Fraction | None
    high: Fraction | None
    text: str
    unit: str = "mol/mol"
    factor: Fraction = Fraction(1)
    unit_given: bool = True
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Aim:
    """What is to be most or least: a coefficient, or the surplus of an energy carrier."""

    direction: AimDirection
    compound: str
    is_energy: bool = False
    span: SourceSpan | None = field(default=None, compare=False, repr=False)

    def __str__(self) -> str:
        return f"{self.direction} {self.compound}"


@dataclass(frozen=True, slots=True, kw_only=True)
class Named:
    """A name with the place where it was written: a knock-out, a strain, a parameter set."""

    name: str
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Case:
    """One question.

    Parameters
    ----------
    title, about : str
        As written.
    network : Network or None
        The network; ``None`` for a case of elements alone.
    equation : Equation
        The overall equation as written.
    basis : Compound
        The basis substrate.
    coefficients : tuple of OverallCoefficient
        All other crossing compounds, equation first, then those of either side.
    compounds : tuple of Compound
        Every compound of the equation, in its order.
    strain : Named or None
        Chosen preset.
    growth_rate, substrate_uptake, temperature, ph : Condition or None
        Conditions [1/h], [mol/g/h], [degC], [-].
    concentrations : tuple of Concentration
        In written order.
    measured : tuple of Measurement
        In written order.
    correlations : tuple of Correlation
        Of the errors of measured values; those of all other pairs are independent.
    demands : tuple of Demand
        In written order.
    aim : Aim or None
        What to look for.
    energy_surplus : EnergySurplus
        What happens to spare ATP.
    energy_surplus_given : bool
        Whether the file says so, rather than the default.
    knock_outs : tuple of Named
        Reactions or groups switched off.
    parameter_set : Named or None
        Chosen parameter set of the network.
    parameters : tuple of (str, Fraction)
        Other values of network parameters; they count before those of the set.
    parameter_spans : tuple of (str, SourceSpan)
        Where those were written.
    plant : Plant or None
        What a plant is to make.
    file : str
        Path as the user gave it.
    findings : tuple of Finding
        What was doubtful when the case and its network were read.
    span : SourceSpan or None
        Top of the file.
    """

    title: str
    network: Network | None
    equation: Equation
    basis: Compound
    coefficients: tuple[OverallCoefficient, ...]
    compounds: tuple[Compound, ...]
    about: str = ""
    strain: Named | None = None
    growth_rate: Condition | None = None
    substrate_uptake: Condition | None = None
    temperature: Condition | None = None
    ph: Condition | None = None
    concentrations: tuple[Concentration, ...] = ()
    measured: tuple[Measurement, ...] = ()
    correlations: tuple[Correlation, ...] = ()
    demands: tuple[Demand, ...] = ()
    aim: Aim | None = None
    energy_surplus: EnergySurplus = EnergySurplus.LOST
    energy_surplus_given: bool = False
    knock_outs: tuple[Named, ...] = ()
    parameter_set: Named | None = None
    parameters: tuple[tuple[str, Fraction], ...] = ()
    parameter_spans: tuple[tuple[str, SourceSpan], ...] = field(
        default=(), compare=False, repr=False
    )
    plant: Plant | None = None
    file: str = field(default="", compare=False)
    findings: tuple[Finding, ...] = field(default=(), compare=False, repr=False)
    span: SourceSpan | None = field(default=None, compare=False, repr=False)

    def __repr__(self) -> str:
        return f"Case({self.title!r}: {self.equation})"

    def _repr_html_(self) -> str:
        """Title, equation and aim, for a notebook."""
        from html import escape

        aim = f"<br>{escape(str(self.aim))}" if self.aim else ""
        return f"<p><b>{escape(self.title)}</b><br>{escape(str(self.equation))}{aim}</p>"

    def coefficient(self, name: str) -> OverallCoefficient | None:
        """Coefficient of the overall equation by compound."""
        return next((item for item in self.coefficients if item.name == name), None)

    def compound(self, name: str) -> Compound:
        """Compound of the overall equation by name.

        Raises
        ------
        KeyError
            If the equation does not list it.
        """
        for item in self.compounds:
            if item.name == name:
                return item
        raise KeyError(name)

    def unknowns(self) -> int:
        """How many coefficients are unknown: ``?``, written decimals, either-side compounds [-]."""
        return sum(
            item.written is None or item.written.last_place is not None
            for item in self.coefficients
        )

    def overrides(self) -> dict[str, Fraction]:
        """Parameter values that replace those of the network: of the set, then the case's own."""
        chosen = None
        if self.network is not None and self.parameter_set is not None:
            chosen = self.network.parameter_set(self.parameter_set.name)
        return {**dict(chosen.values if chosen else ()), **dict(self.parameters)}

    def override_spans(self) -> dict[str, SourceSpan]:
        """Where the case wrote each value of :meth:`overrides`, or chose its set."""
        own = dict(self.parameter_spans)
        by_set = self.parameter_set.span if self.parameter_set else None
        places = {name: own.get(name, by_set) for name in self.overrides()}
        return {name: span for name, span in places.items() if span is not None}

    def with_parameter(self, name: str, value: Fraction) -> Case:
        """The case with another value of one network parameter.

        Raises
        ------
        KeyError
            If the network has no such parameter.
        """
        if self.network is None or all(item.name != name for item in self.network.parameters):
            raise KeyError(name)
        kept = tuple(pair for pair in self.parameters if pair[0] != name)
        return replace(self, parameters=(*kept, (name, value)))

    def with_knock_outs(self, *names: str) -> Case:
        """The case with further reactions or groups switched off.

        Raises
        ------
        KeyError
            If a name is neither a reaction nor a group of the network.
        """
        for name in names:
            if self.network is None or not self.network.members(name):
                raise KeyError(name)
        return replace(self, knock_outs=(*self.knock_outs, *(Named(name=name) for name in names)))
