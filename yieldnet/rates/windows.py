"""Where growth is exponential: the longest run of samples on one straight line.

The line is that of ln(biomass) over time, biomass being the whole of the vessel with what the
samples took put back, so that feed and samples do not bend it. A window passes when chi-square,
with the stated errors, is not beyond its 95 % limit, and when its slope is positive beyond two
standard deviations. The longest window that passes is taken; of several as long, the one that
grows fastest. Four samples are the least, since two degrees of freedom are the fewest with which a
bend and a single outlier can both show.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.model.case import BAND
from yieldnet.rates.constants import CONFIDENCE
from yieldnet.rates.result import Estimate, TriedWindow
from yieldnet.rates.straight_line import fit_straight_line

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = ["LEAST_SAMPLES", "find_window", "try_windows"]

LEAST_SAMPLES = 4
"""Fewest samples of a window that is looked for [-]."""


def find_window(
    times: Sequence[float], logarithms: Sequence[float], sds: Sequence[float]
) -> tuple[TriedWindow | None, tuple[TriedWindow, ...]]:
    """Longest window of straight growth, and all that were tried.

    Parameters
    ----------
    times : sequence of float
        Times of the samples [h].
    logarithms : sequence of float
        ln(biomass) [-].
    sds : sequence of float
        Standard deviations of those, each positive and independent [-].

    Returns
    -------
    tuple of (TriedWindow or None, tuple of TriedWindow)
        The window, if one passes, and all windows tried, longest first; shorter ones than the
        window found are not tried.

    Examples
    --------
    >>> found, tried = find_window([0, 1, 2, 3, 4], [0, 0.5, 1, 1.5, 1.5], [0.01] * 5)
    >>> found.start, found.end, len(tried)
    (0, 3, 3)
    """
    tried: list[TriedWindow] = []
    for size in range(len(times), LEAST_SAMPLES - 1, -1):
        of_size = try_windows(times, logarithms, sds, size)
        tried += of_size
        passing = [item for item in of_size if item.passes]
        if passing:
            return max(passing, key=lambda item: item.growth_rate.value), tuple(tried)
    return None, tuple(tried)


def try_windows(
    times: Sequence[float], logarithms: Sequence[float], sds: Sequence[float], samples: int
) -> list[TriedWindow]:
    """All windows of so many samples.

    Parameters
    ----------
    times : sequence of float
        Times of the samples [h].
    logarithms : sequence of float
        ln(biomass) [-].
    sds : sequence of float
        Standard deviations of those [-].
    samples : int
        Samples in a window, at least two [-].

    Returns
    -------
    list of TriedWindow
        In the order of time.
    """
    return [
        _try(times[at : at + samples], logarithms[at : at + samples], sds[at : at + samples])
        for at in range(len(times) - samples + 1)
    ]


def _try(times: Sequence[float], logarithms: Sequence[float], sds: Sequence[float]) -> TriedWindow:
    line = fit_straight_line(times, logarithms, sds)
    chance = 0.0 if line.p_value is None else line.p_value
    return TriedWindow(
        start=times[0],
        end=times[-1],
        samples=len(times),
        growth_rate=Estimate(value=line.slope, sd=line.slope_sd),
        chi_square=line.chi_square,
        degrees_of_freedom=line.degrees_of_freedom,
        p_value=chance,
        passes=chance >= 1 - CONFIDENCE and line.slope > BAND * line.slope_sd,
    )
