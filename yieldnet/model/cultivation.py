"""A cultivation run: what was fed, sampled and gassed, as written, in one set of units.

Times are in h, volumes in L, amounts in mol, biomass in g dry weight with ash. Values are floats:
they come from instruments, and every one of them carries its standard deviation. What several rows
share, such as the slope of a calibration or the concentration of one feed, is one :class:`Reading`,
so that its error is counted once.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from enum import StrEnum
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Finding, SourceSpan
    from yieldnet.model.case import OverallCoefficient
    from yieldnet.model.equation import Equation
    from yieldnet.model.network import Compound

__all__ = [
    "Additions",
    "Calibration",
    "Cultivation",
    "CultivationKind",
    "DissolvedCarbonDioxide",
    "Gas",
    "Method",
    "Moisture",
    "Reading",
    "Series",
]


class CultivationKind(StrEnum):
    """How the vessel is run."""

    BATCH = "batch"
    FED_BATCH = "fed-batch"
    CHEMOSTAT = "chemostat"


class Method(StrEnum):
    """How rates are found from a batch or a fed-batch."""

    EXPONENTIAL = "exponential"
    """Constant specific rates within a window, by weighted least squares over all samples in it."""
    START_AND_END = "start and end"
    """Amounts at the first and at the last sample, and what went in and out between."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """One measured value.

    Parameters
    ----------
    value : float
        In the unit that its place says.
    sd : float
        Standard deviation in the same unit; 0 for what is declared exact.
    span : SourceSpan or None
        Where it was written.
    """

    value: float
    sd: float
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Series:
    """One column of a sheet, in the order of its rows.

    Parameters
    ----------
    compound : str
        What is measured: a compound, or empty for a volume or a flow.
    readings : tuple of Reading or None
        A value for each row; ``None`` where the sheet says that nothing was measured.
    heading : str
        Heading as written, for messages.
    span : SourceSpan or None
        Place of the heading.
    """

    compound: str
    readings: tuple[Reading | None, ...]
    heading: str
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Calibration:
    """What turns another signal into dry weight.

    Parameters
    ----------
    signal : str
        ``optical density`` or ``wet weight``.
    factor : Reading
        Dry weight in g/L for one unit of the signal (wet weight: g dry in g wet).
    """

    signal: str
    factor: Reading


@dataclass(frozen=True, slots=True, kw_only=True)
class Additions:
    """A liquid that is added: the feed, or the base.

    Parameters
    ----------
    name : str
        ``feed`` or ``base``.
    contents : tuple of (str, Reading)
        Concentration of each compound in it, one value for the whole run; biomass in g/L, all
        others in mol/L.
    contents_by_row : tuple of Series
        The same where the sheet gives them row by row (chemostat).
    added : Series or None
        Volume added from the start until each row [L].
    rate : Series or None
        Rate of addition at each row [L/h].
    """

    name: str
    contents: tuple[tuple[str, Reading], ...] = ()
    contents_by_row: tuple[Series, ...] = ()
    added: Series | None = None
    rate: Series | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Moisture:
    """Water vapour in gas that is not dried before it is analysed.

    Parameters
    ----------
    inlet, outlet : float
        Relative humidity as a fraction of 1 [-].
    temperature_inlet, temperature_outlet : float
        Where that humidity holds [K].
    pressure : float
        Total pressure there [kPa].
    """

    inlet: float
    outlet: float
    temperature_inlet: float
    temperature_outlet: float
    pressure: float


@dataclass(frozen=True, slots=True, kw_only=True)
class DissolvedCarbonDioxide:
    """What is needed to count carbon dioxide and bicarbonate in the broth.

    Parameters
    ----------
    ph : Reading
        pH of the broth [-].
    temperature : float
        Of the broth [K].
    pressure : float
        Of the gas leaving the vessel [kPa].
    """

    ph: Reading
    temperature: float
    pressure: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Gas:
    """Gas flows and compositions.

    Parameters
    ----------
    flow_in, flow_out : Series or None
        Gas flow at the stated normal conditions [L/h]; as the meter sees it, moisture included
        where ``moisture`` is given.
    inlet, outlet : tuple of Series
        Mole fraction of each compound [mol/mol], as the analyser sees it.
    normal_temperature : float
        Temperature of the flow's unit [K].
    normal_pressure : float
        Pressure of the flow's unit [kPa].
    moisture : Moisture or None
        ``None`` where analyser and meter see dried gas.
    dissolved : DissolvedCarbonDioxide or None
        ``None`` where dissolved carbon dioxide is left out.
    """

    flow_in: Series | None
    flow_out: Series | None
    inlet: tuple[Series, ...]
    outlet: tuple[Series, ...]
    normal_temperature: float
    normal_pressure: float
    moisture: Moisture | None = None
    dissolved: DissolvedCarbonDioxide | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Cultivation:
    """One run with its sheet.

    Parameters
    ----------
    title, about : str
        As written.
    kind : CultivationKind
        How the vessel was run.
    method : Method
        How rates are found; a chemostat has none to choose.
    equation : Equation
        Overall equation, which says on which side each compound is positive.
    basis : Compound
        First compound on its left.
    coefficients : tuple of OverallCoefficient
        All others, equation first, then those of either side.
    compounds : tuple of Compound
        Every compound with its formula, biomass among them where it is listed.
    times : tuple of float
        Time of each row [h]; empty for a chemostat without a time column.
    states : tuple of str
        Name of the steady state of each row; empty texts where the sheet names none.
    rows : tuple of SourceSpan
        Where each row begins.
    broth : tuple of Series
        Concentrations in the broth: compounds [mol/L], biomass [g/L], or its signal in the unit
        of the calibration.
    calibration : Calibration or None
        If given, the series of biomass is that signal.
    volume : Series or Reading or None
        Broth volume, row by row or constant [L].
    sampled : Series or None
        Volume withdrawn at each row, just after it was measured [L].
    dilution_rate : Series or None
        Outflow per broth volume [1/h].
    additions : tuple of Additions
        Feed and base.
    gas : Gas or None
        Gas flows and compositions.
    window : tuple of (float, float) or None
        Chosen window of exponential growth [h]; ``None`` to look for it.
    file, sheet : str
        Paths as the user gave them.
    findings : tuple of Finding
        What was doubtful on reading.
    span : SourceSpan or None
        Top of the file.
    """

    title: str
    about: str = ""
    kind: CultivationKind
    method: Method = Method.EXPONENTIAL
    equation: Equation
    basis: Compound
    coefficients: tuple[OverallCoefficient, ...]
    compounds: tuple[Compound, ...]
    times: tuple[float, ...]
    states: tuple[str, ...]
    rows: tuple[SourceSpan, ...] = field(compare=False, repr=False)
    broth: tuple[Series, ...]
    calibration: Calibration | None = None
    volume: Series | Reading | None = None
    sampled: Series | None = None
    dilution_rate: Series | None = None
    additions: tuple[Additions, ...] = ()
    gas: Gas | None = None
    window: tuple[float, float] | None = None
    file: str = field(default="", compare=False)
    sheet: str = field(default="", compare=False)
    findings: tuple[Finding, ...] = field(default=(), compare=False, repr=False)
    span: SourceSpan | None = field(default=None, compare=False, repr=False)

    def compound(self, name: str) -> Compound:
        """Compound of the run by name.

        Raises
        ------
        KeyError
            If the equation does not list it.
        """
        for item in self.compounds:
            if item.name == name:
                return item
        raise KeyError(name)
