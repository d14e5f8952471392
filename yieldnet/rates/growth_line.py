"""The straight line of ln(biomass) over time: where the window is, and where the fit starts."""

from __future__ import annotations

from dataclasses import dataclass
from math import exp, log, sqrt
from typing import TYPE_CHECKING

from yieldnet.model.cultivation import Reading
from yieldnet.model.network import BIOMASS
from yieldnet.rates.straight_line import fit_straight_line
from yieldnet.rates.values import Notes, deviation, nominal
from yieldnet.rates.windows import LEAST_SAMPLES, find_window, try_windows

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from yieldnet.model.cultivation import Series
    from yieldnet.rates.liquids import Liquids
    from yieldnet.rates.result import TriedWindow
    from yieldnet.rates.values import Values

__all__ = ["GrowthLine", "find_growth_line", "shorter_growth_lines"]

LEAST_CHOSEN = 3
"""Fewest samples of biomass in a window that the run names: two always lie on a line [-]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class GrowthLine:
    """Window with its straight line.

    Parameters
    ----------
    rows : range
        Rows of the window, without a gap.
    growth_rate : float
        Slope [1/h].
    biomass : float
        In the vessel at the first row of the window [g].
    tried : tuple of TriedWindow
        All windows that were tried; empty for a chosen one.
    """

    rows: range
    growth_rate: float
    biomass: float
    tried: tuple[TriedWindow, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class _Point:
    """ln(biomass in the vessel, with what the samples took put back) of one row."""

    row: int
    time: float
    logarithm: float
    sd: float


def _shares(liquids: Liquids) -> list[float]:
    """Share of everything that the samples before each row have left [-]."""
    shares = [1.0]
    for volume, sample in zip(liquids.volumes, liquids.sampled, strict=True):
        taken = 0.0 if volume is None else nominal(sample) / nominal(volume)
        shares.append(shares[-1] * (1 - taken))
    return shares


def _points(
    values: Values, series: Series, liquids: Liquids, shares: Sequence[float], notes: Notes
) -> list[_Point]:
    run = values.run
    found = []
    for row, reading in enumerate(series.readings):
        volume = liquids.volumes[row]
        if reading is None or volume is None:
            continue
        if reading.value <= 0 or not reading.sd:
            notes.assume(
                "a sample without biomass above zero, or without an error, is not in the straight"
                " line of ln(biomass)"
            )
            continue
        # What all samples share, such as the calibration, moves no slope.
        variance = (reading.sd / reading.value) ** 2
        if run.volume is not None and not isinstance(run.volume, Reading):
            variance += (deviation(volume) / nominal(volume)) ** 2
        amount = nominal(values.broth(BIOMASS, row)) * nominal(volume) / shares[row]
        found.append(_Point(row=row, time=run.times[row], logarithm=log(amount), sd=sqrt(variance)))
    return found


def _line(
    points: Sequence[_Point],
    rows: range,
    values: Values,
    shares: Sequence[float],
    tried: tuple[TriedWindow, ...],
) -> GrowthLine:
    line = fit_straight_line(
        [point.time for point in points],
        [point.logarithm for point in points],
        [point.sd for point in points],
    )
    start = line.intercept + line.slope * values.run.times[rows[0]]
    return GrowthLine(
        rows=rows, growth_rate=line.slope, biomass=shares[rows[0]] * exp(start), tried=tried
    )


def find_growth_line(
    values: Values, series: Series, liquids: Liquids, notes: Notes
) -> GrowthLine | None:
    """Window of exponential growth: as the run names it, or the longest that is straight.

    Parameters
    ----------
    values : Values
        Values of the run.
    series : Series
        Readings of biomass.
    liquids : Liquids
        Volumes.
    notes : Notes
        Takes findings and assumptions.

    Returns
    -------
    GrowthLine or None
        ``None`` where a finding says why not.
    """
    run = values.run
    shares = _shares(liquids)
    points = _points(values, series, liquids, shares, notes)
    if run.window is not None:
        first, last = run.window
        inside = [row for row, time in enumerate(run.times) if first <= time <= last]
        usable = [point for point in points if first <= point.time <= last]
        if len(usable) < LEAST_CHOSEN:
            notes.findings.add(
                "YN822",
                f"the window from {first:g} to {last:g} h has too few samples of biomass",
                run.span,
                left=f"samples with biomass above zero: {len(usable)}",
                right=f"needed: {LEAST_CHOSEN}",
                hint="Take a longer window, let it be looked for, or take the method"
                " 'start and end'.",
            )
            return None
        return _line(usable, range(inside[0], inside[-1] + 1), values, shares, ())
    found, tried = find_window(
        [point.time for point in points],
        [point.logarithm for point in points],
        [point.sd for point in points],
    )
    if found is None:
        best = max(tried, key=lambda item: item.p_value, default=None)
        notes.findings.add(
            "YN823",
            "no run of samples grows exponentially within its errors",
            series.span or run.span,
            left=f"windows of {LEAST_SAMPLES} samples or more: {len(tried)}",
            right=f"best p = {best.p_value:.2g} from {best.start:g} to {best.end:g} h, slope"
            f" {best.growth_rate.value:.3g} ± {best.growth_rate.sd:.2g} 1/h"
            if best
            else f"samples with biomass above zero: {len(points)}",
            hint="Check the errors of biomass, name a window, or take the method 'start and end'.",
        )
        return None
    notes.assume(
        f"the window was looked for: the longest run of {LEAST_SAMPLES} samples or more whose"
        " ln(biomass) is straight at 95 % and rises"
    )
    within = [point for point in points if found.start <= point.time <= found.end]
    rows = range(within[0].row, within[-1].row + 1)
    return _line(within, rows, values, shares, tried)


def shorter_growth_lines(
    values: Values, series: Series, liquids: Liquids, line: GrowthLine
) -> Iterator[GrowthLine]:
    """Windows inside another whose ln(biomass) is straight: longest first, then fastest.

    Parameters
    ----------
    values : Values
        Values of the run.
    series : Series
        Readings of biomass.
    liquids : Liquids
        Volumes.
    line : GrowthLine
        The window they lie in.

    Returns
    -------
    iterator of GrowthLine
        Each with at least the samples that a window needs which is looked for.
    """
    shares = _shares(liquids)
    points = [
        point
        for point in _points(values, series, liquids, shares, Notes())
        if point.row in line.rows
    ]
    columns = (
        [point.time for point in points],
        [point.logarithm for point in points],
        [point.sd for point in points],
    )
    for samples in range(len(points) - 1, LEAST_SAMPLES - 1, -1):
        passing = [item for item in try_windows(*columns, samples) if item.passes]
        for item in sorted(passing, key=lambda window: -window.growth_rate.value):
            within = [point for point in points if item.start <= point.time <= item.end]
            rows = range(within[0].row, within[-1].row + 1)
            yield _line(within, rows, values, shares, ())
