"""Rates as a picture: the fit of a window, or the steady states over their growth rate.

Samples inside the window are filled, those outside are open; the window has a tint and its ends are
drawn, so that nothing is told by colour alone.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Finding
from yieldnet.model.network import BIOMASS
from yieldnet.report.picture_file import COLOURS, INK, save_picture
from yieldnet.report.rates_view import fit_words

if TYPE_CHECKING:
    from pathlib import Path

    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from yieldnet.model.cultivation import Reading, Series
    from yieldnet.rates.result import Fit, FittedSeries, RateResult

__all__ = ["draw_rates", "save_rates"]

_SIZE = (3.4, 2.3)
"""Width and height of one panel [inch]."""
_ACROSS = 2
_UNIT_WORDS = {"mol/L": "mmol/L", "g/L": "g/L", "mol/h": "mmol/h"}
_UNIT_SCALE = {"mol/L": 1000.0, "g/L": 1.0, "mol/h": 1000.0}


def save_rates(result: RateResult, path: Path, replace: bool = False) -> None:
    """Draw rates into a file, whole or not at all.

    Parameters
    ----------
    result : RateResult
        Rates of a run.
    path : Path
        File that ends in one of :data:`~yieldnet.report.picture_file.PICTURES`.
    replace : bool
        Whether a file of that name may be replaced.

    Raises
    ------
    InputError
        If there is nothing to draw: neither a fit nor steady states with growth rates.
    ValueError
        If the name ends otherwise.
    FileExistsError
        If there is such a file and it may not be replaced.
    """
    if all(state.fit is None and state.growth_rate is None for state in result.states) or (
        result.states[0].fit is None and not result.states[0].label
    ):
        raise InputError(
            [
                Finding(
                    code="YN853",
                    message="these rates come from amounts at start and end, so there is no fit",
                    where=result.run.span,
                    hint="Leave --picture out, or take the method exponential.",
                )
            ]
        )
    save_picture(lambda: draw_rates(result), path, replace)


def draw_rates(result: RateResult) -> Figure:
    """Picture of rates.

    Parameters
    ----------
    result : RateResult
        Rates of a run with a fit, or with steady states.

    Returns
    -------
    Figure
        The picture; no window is opened.
    """
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    fit = result.states[0].fit
    panels = len(fit.series) if fit is not None else len(result.states[0].compounds)
    down = -(-panels // _ACROSS)
    picture = Figure(
        figsize=(_SIZE[0] * min(_ACROSS, panels), _SIZE[1] * down + 0.6), layout="constrained"
    )
    FigureCanvasAgg(picture)
    picture.suptitle(result.run.title, x=0.01, ha="left", fontsize=11, color=INK)
    grid = picture.subplots(down, min(_ACROSS, panels), squeeze=False)
    places = [axes for row in grid for axes in row]
    for axes in places[panels:]:
        axes.set_axis_off()
    if fit is not None:
        for axes, series in zip(places, fit.series, strict=False):
            _fitted(axes, result, fit, series)
        picture.supxlabel(f"time, h. Window tinted; fit: {fit_words(fit)}", fontsize=8, color=INK)
    else:
        for axes, name in zip(places, result.states[0].compounds, strict=False):
            _states(axes, result, name)
        picture.supxlabel("growth rate, 1/h; bars two standard deviations", fontsize=8, color=INK)
    return picture


def _fitted(axes: Axes, result: RateResult, fit: Fit, series: FittedSeries) -> None:
    from matplotlib.ticker import LogLocator, NullFormatter

    scale = _UNIT_SCALE[series.unit]
    start, end = fit.window
    axes.axvspan(start, end, color=COLOURS[2], alpha=0.12, linewidth=0)
    for edge in fit.window:
        axes.axvline(edge, color=INK, linewidth=0.6, linestyle=(0, (4, 3)))
    outside = _outside(result, fit, series)
    if outside:
        axes.plot(
            [time for time, _ in outside],
            [scale * value for _, value in outside],
            "o",
            color=INK,
            markerfacecolor="white",
            markersize=4,
        )
    axes.errorbar(
        series.times,
        [scale * value for value in series.values],
        yerr=[2 * scale * sd for sd in series.sds],
        fmt="o",
        color=COLOURS[0],
        markersize=4,
        capsize=2,
        linewidth=0.8,
    )
    axes.plot(
        series.curve_times, [scale * value for value in series.curve_values], color=COLOURS[1]
    )
    if series.compound == BIOMASS and min(series.values) > 0:
        # On a logarithmic axis exponential growth is a straight line.
        axes.set_yscale("log")
        axes.yaxis.set_major_locator(LogLocator(subs=(1.0, 2.0, 5.0)))
        axes.yaxis.set_major_formatter("{x:g}")
        axes.yaxis.set_minor_formatter(NullFormatter())
    place = "" if series.place == "broth" else ", gas"
    axes.set_title(
        f"{series.compound}{place}, {_UNIT_WORDS[series.unit]}", loc="left", fontsize=9, color=INK
    )
    _plain(axes)


def _outside(result: RateResult, fit: Fit, series: FittedSeries) -> list[tuple[float, float]]:
    """Samples of a broth series that the window leaves out, in the unit of the series."""
    run = result.run
    if series.place != "broth":
        return []
    found: Series | None = next(
        (item for item in run.broth if item.compound == series.compound), None
    )
    if found is None:
        return []
    factor = 1.0
    if series.compound == BIOMASS and run.calibration is not None:
        factor = run.calibration.factor.value
    readings: list[tuple[float, Reading | None]] = list(zip(run.times, found.readings, strict=True))
    start, end = fit.window
    return [
        (time, factor * reading.value)
        for time, reading in readings
        if reading is not None and not start <= time <= end
    ]


def _states(axes: Axes, result: RateResult, name: str) -> None:
    for place, state in enumerate(result.states):
        if state.growth_rate is None or name not in state.compounds:
            continue
        rate = state.specific_rate(name)
        axes.errorbar(
            state.growth_rate.value,
            1000 * rate.value,
            xerr=2 * state.growth_rate.sd,
            yerr=2000 * rate.sd,
            fmt="o",
            color=COLOURS[0],
            markersize=4,
            capsize=2,
            linewidth=0.8,
        )
        axes.annotate(
            state.label or str(place + 1),
            (state.growth_rate.value, 1000 * rate.value),
            xytext=(4, 4),
            textcoords="offset points",
            fontsize=7,
            color=INK,
        )
    axes.set_title(f"{name}, mmol/g/h", loc="left", fontsize=9, color=INK)
    axes.margins(0.15)
    axes.autoscale_view()
    axes.set_xlim(left=0)
    axes.set_ylim(bottom=min(0, axes.get_ylim()[0]))
    _plain(axes)


def _plain(axes: Axes) -> None:
    for side in ("top", "right"):
        axes.spines[side].set_visible(False)
    axes.tick_params(labelsize=7)
