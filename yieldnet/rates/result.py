"""What rates answers: rates and yields of each state with their covariance, and the fit behind.

Compounds stand in one order everywhere: the basis first, then as in the run, biomass among them in
mol of its formula (weight with ash). Every number is positive on the declared side of its
compound; for a compound of either side, positive is given off.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from math import sqrt
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Finding
    from yieldnet.foundation.sourced import Assumption
    from yieldnet.foundation.units import Weight
    from yieldnet.model.cultivation import Cultivation

__all__ = [
    "Estimate",
    "Fit",
    "FittedSeries",
    "RateResult",
    "Scatter",
    "StateRates",
    "TriedWindow",
]

Matrix = tuple[tuple[float, ...], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Estimate:
    """A number with its standard deviation, both in the unit that its place says."""

    value: float
    sd: float


@dataclass(frozen=True, slots=True, kw_only=True)
class TriedWindow:
    """A run of samples that was tried as the phase of exponential growth.

    Parameters
    ----------
    start, end : float
        Times of its first and last sample [h].
    samples : int
        Samples with biomass in it [-].
    growth_rate : Estimate
        Slope of ln(biomass) over time [1/h].
    chi_square : float
        Of the straight line [-].
    degrees_of_freedom : int
        Of the straight line [-].
    p_value : float
        Chance of a larger chi-square [-].
    passes : bool
        Whether it is straight at 95 % and its slope is positive beyond two standard deviations.
    """

    start: float
    end: float
    samples: int
    growth_rate: Estimate
    chi_square: float
    degrees_of_freedom: int
    p_value: float
    passes: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class FittedSeries:
    """One measured series with what the fit says of it.

    Parameters
    ----------
    compound : str
        What is measured.
    place : str
        ``broth`` or ``gas``.
    unit : str
        ``g/L`` for biomass, ``mol/L`` in the broth, ``mol/h`` (given off) in the gas.
    times : tuple of float
        Of the samples in the window [h].
    values, sds : tuple of float
        Observed, in ``unit``; without the error of the calibration, which all samples share.
    fitted : tuple of float
        The fit at the same times, in ``unit``.
    residuals : tuple of float
        (observed - fitted) / s.d. [-].
    curve_times, curve_values : tuple of float
        The fit at close points, to be drawn [h], in ``unit``.
    """

    compound: str
    place: str
    unit: str
    times: tuple[float, ...]
    values: tuple[float, ...]
    sds: tuple[float, ...]
    fitted: tuple[float, ...]
    residuals: tuple[float, ...]
    curve_times: tuple[float, ...]
    curve_values: tuple[float, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Fit:
    """How well constant specific rates describe a window.

    Parameters
    ----------
    window : tuple of (float, float)
        First and last time [h].
    chosen : bool
        Whether the run names the window, rather than that it was found.
    tried : tuple of TriedWindow
        All windows that were tried, longest first; empty for a chosen one.
    chi_square : float
        Of all observations together [-].
    degrees_of_freedom : int
        Observations less parameters [-].
    p_value : float or None
        Chance of a larger chi-square if the errors are as stated; ``None`` without degrees of
        freedom [-].
    series : tuple of FittedSeries
        What was observed and what the fit says.
    """

    window: tuple[float, float]
    chosen: bool
    tried: tuple[TriedWindow, ...]
    chi_square: float
    degrees_of_freedom: int
    p_value: float | None
    series: tuple[FittedSeries, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Scatter:
    """How the replicates of a steady state scatter.

    Parameters
    ----------
    quantity : str
        ``growth rate``, ``specific rate of NAME`` or ``volumetric rate of NAME``.
    replicates : int
        Rows that were averaged [-].
    chi_square : float
        Of the differences between the rows [-].
    degrees_of_freedom : int
        Rows less one [-].
    p_value : float
        Chance of a larger chi-square [-].
    ratio : float
        By which the standard deviation of the mean was enlarged; 1 if it was not [-].
    """

    quantity: str
    replicates: int
    chi_square: float
    degrees_of_freedom: int
    p_value: float
    ratio: float


@dataclass(frozen=True, slots=True, kw_only=True)
class StateRates:
    """Rates and yields of one steady state, or of one window of a batch or a fed-batch.

    Parameters
    ----------
    label : str
        Name of the state; empty for batch and fed-batch.
    growth_rate : Estimate or None
        Specific growth rate [1/h]; ``None`` where biomass was not measured.
    compounds : tuple of str
        Measured compounds: the basis, then in the order of the run.
    weights : tuple of Weight
        What one mol of each weighs.
    specific_rates : tuple of float or None
        Of each compound, biomass as growth rate over molar mass [mol/g/h]; ``None`` where biomass
        was not measured.
    specific_covariance : tuple of tuple of float or None
        Their covariance [(mol/g/h)^2].
    volumetric_rates : tuple of float
        Of each compound [mol/L/h]; for a batch or a fed-batch, what was turned over in the window
        over the integral of the volume.
    volumetric_covariance : tuple of tuple of float
        Their covariance [(mol/L/h)^2].
    yields : tuple of float
        Of each compound but the basis [mol/mol basis].
    yield_covariance : tuple of tuple of float
        Their covariance [(mol/mol)^2].
    respiratory_quotient : Estimate or None
        Carbon dioxide given off per oxygen taken up [mol/mol].
    fit : Fit or None
        How well constant rates describe the window; ``None`` for other methods.
    scatter : tuple of Scatter
        How replicates scatter; empty where there is one row or no chemostat.
    """

    label: str
    growth_rate: Estimate | None
    compounds: tuple[str, ...]
    weights: tuple[Weight, ...]
    specific_rates: tuple[float, ...] | None
    specific_covariance: Matrix | None
    volumetric_rates: tuple[float, ...]
    volumetric_covariance: Matrix
    yields: tuple[float, ...]
    yield_covariance: Matrix
    respiratory_quotient: Estimate | None
    fit: Fit | None = None
    scatter: tuple[Scatter, ...] = ()

    @property
    def basis(self) -> str:
        """The basis compound."""
        return self.compounds[0]

    @property
    def products(self) -> tuple[str, ...]:
        """Compounds that have a yield: all but the basis, in the order of ``yields``."""
        return self.compounds[1:]

    def specific_rate(self, name: str) -> Estimate:
        """Specific rate of a compound [mol/g/h].

        Raises
        ------
        KeyError
            If the compound was not measured, or biomass was not.
        """
        if self.specific_rates is None or self.specific_covariance is None:
            raise KeyError(name)
        at = self._at(name, self.compounds)
        return Estimate(value=self.specific_rates[at], sd=sqrt(self.specific_covariance[at][at]))

    def volumetric_rate(self, name: str) -> Estimate:
        """Volumetric rate of a compound [mol/L/h].

        Raises
        ------
        KeyError
            If the compound was not measured.
        """
        at = self._at(name, self.compounds)
        return Estimate(
            value=self.volumetric_rates[at], sd=sqrt(self.volumetric_covariance[at][at])
        )

    def yield_of(self, name: str) -> Estimate:
        """Yield of a compound [mol/mol basis].

        Raises
        ------
        KeyError
            If the compound was not measured, or is the basis.
        """
        at = self._at(name, self.products)
        return Estimate(value=self.yields[at], sd=sqrt(self.yield_covariance[at][at]))

    def yield_in_grams(self, name: str) -> Estimate:
        """Yield of a compound by weight, biomass with its ash [g/g basis].

        Raises
        ------
        KeyError
            If the compound was not measured, or is the basis.
        """
        return self._scaled(name, "g")

    def yield_in_carbon(self, name: str) -> Estimate:
        """Yield of a compound by carbon [C-mol/C-mol basis].

        Raises
        ------
        KeyError
            If the compound was not measured, or is the basis.
        UnitError
            If the compound or the basis has no carbon.
        """
        return self._scaled(name, "C-mol")

    def correlation(self, first: str, second: str) -> float | None:
        """Correlation of two yields [-]; ``None`` where one of them is exact.

        Raises
        ------
        KeyError
            If a compound was not measured, or is the basis.
        """
        one, other = (self._at(name, self.products) for name in (first, second))
        scale = sqrt(self.yield_covariance[one][one] * self.yield_covariance[other][other])
        return self.yield_covariance[one][other] / scale if scale else None

    def _scaled(self, name: str, unit: str) -> Estimate:
        plain = self.yield_of(name)
        weight = self.weights[self._at(name, self.compounds)]
        factor = float(self.weights[0].mol_per(unit) / weight.mol_per(unit))
        return Estimate(value=plain.value * factor, sd=plain.sd * factor)

    @staticmethod
    def _at(name: str, names: tuple[str, ...]) -> int:
        if name not in names:
            raise KeyError(name)
        return names.index(name)


@dataclass(frozen=True, slots=True, kw_only=True)
class RateResult:
    """Rates and yields of a run.

    Parameters
    ----------
    run : Cultivation
        What they were found from.
    states : tuple of StateRates
        One for a batch or a fed-batch; one for each steady state of a chemostat, in the order of
        the sheet.
    findings : tuple of Finding
        What is doubtful: of the run when it was read, then of its rates.
    assumptions : tuple of Assumption
        What the numbers take for granted.
    """

    run: Cultivation = field(repr=False)
    states: tuple[StateRates, ...]
    findings: tuple[Finding, ...]
    assumptions: tuple[Assumption, ...]

    def state(self, label: str) -> StateRates:
        """State by its label.

        Raises
        ------
        KeyError
            If there is none of that name.
        """
        for item in self.states:
            if item.label == label:
                return item
        raise KeyError(label)
