"""The pictures of a study: ladder, ranges, relaxations; all of them with their words, and as files.

Nothing is told by colour alone: bars differ in hatching and marks in shape, and numbers stand
beside them. Each picture has a text that says the same to whoever cannot see it.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from yieldnet.model.case import BAND
from yieldnet.report.data_pictures import draw_data
from yieldnet.report.figures import figure, range_text, with_error
from yieldnet.report.picture_file import COLOURS, INK, PICTURES, save_picture
from yieldnet.report.pictures import draw_tradeoff
from yieldnet.report.stream_picture import draw_streams, stream_words
from yieldnet.report.tradeoff_view import region_headline, tradeoff_title

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence
    from pathlib import Path

    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from yieldnet.optimum.ranges import Range
    from yieldnet.prediction.result import CoefficientAnswer, Prediction
    from yieldnet.report.study import Study

__all__ = [
    "StudyPicture",
    "draw_ladder",
    "draw_ranges",
    "draw_relaxations",
    "save_study_pictures",
    "study_pictures",
]

_WIDTH = 5.2
"""Width of a picture; on a telephone it is still read at some three quarters of it [inch]."""
_ROW = 0.34
"""Height of a row of bars [inch]."""
_PANEL = 0.78
"""Height of the panel of one coefficient [inch]."""
_REST = 0.9
"""Height of heading and axis [inch]."""
_SHOWN = 12
"""Relaxations that are drawn; the table has all [-]."""
_PALE, _DARK, _MARK = "#a9cfe8", COLOURS[0], COLOURS[1]


@dataclass(frozen=True, slots=True, kw_only=True)
class StudyPicture:
    """A picture of a study.

    Parameters
    ----------
    name : str
        Name of its file, without ending.
    title : str
        What it shows.
    words : str
        The same in words, with the numbers.
    draw : callable
        Makes it.
    """

    name: str
    title: str
    words: str
    draw: Callable[[], Figure]


def study_pictures(study: Study) -> tuple[StudyPicture, ...]:
    """All pictures that a study has data for.

    Parameters
    ----------
    study : Study
        The study.

    Returns
    -------
    tuple of StudyPicture
        In the order of the report.
    """
    result = study.prediction
    found = []
    if result.coefficients:
        found.append(
            StudyPicture(
                name="ranges",
                title="Ranges of the coefficients, mol/mol",
                words="; ".join(_range_words(item) for item in result.coefficients) + ".",
                draw=lambda: draw_ranges(result),
            )
        )
    if any(item.value for item in result.ladder):
        found.append(
            StudyPicture(
                name="ladder",
                title=f"Ladder of {result.case.aim}, mol/mol",
                words="; ".join(
                    f"{item.rung} {'none' if item.value is None else figure(item.value)}"
                    + (f", costs {figure(item.loss)}" if item.loss else "")
                    for item in result.ladder
                )
                + ".",
                draw=lambda: draw_ladder(result),
            )
        )
    gains = _gains(result)
    if gains:
        found.append(
            StudyPicture(
                name="relaxations",
                title=f"One change at a time: gain for {result.case.aim}, mol/mol",
                words="; ".join(f"{words} +{figure(gain)}" for words, gain in gains) + ".",
                draw=lambda: draw_relaxations(result),
            )
        )
    judged = study.reconciliation
    if judged is not None and (judged.recoveries or judged.values or judged.next):
        words = "; ".join(
            f"recovery of {item.quantity} {with_error(100 * item.ratio, 100 * item.sd)} %"
            for item in judged.recoveries
        )
        found.append(
            StudyPicture(
                name="measured",
                title="Recoveries, residuals and the next measurement",
                words=f"{words or 'residuals and the next measurement, as in the tables'}.",
                draw=lambda: draw_data(judged),
            )
        )
    trade = study.tradeoff
    if trade is not None and trade.regions[0].corners:
        found.append(
            StudyPicture(
                name="tradeoff",
                title=tradeoff_title(trade),
                words=region_headline(trade, 0) + ".",
                draw=lambda: draw_tradeoff(trade),
            )
        )
    sheet = study.plant
    if sheet is not None:
        found.append(
            StudyPicture(
                name="streams",
                title="Streams of the plant, t/y",
                words=stream_words(sheet),
                draw=lambda: draw_streams(sheet),
            )
        )
    return tuple(found)


def save_study_pictures(study: Study, folder: Path, replace: bool = False) -> tuple[Path, ...]:
    """Write all pictures of a study into a folder, each as SVG and PNG.

    Parameters
    ----------
    study : Study
        The study.
    folder : Path
        The folder; it is made if it is not there.
    replace : bool
        Whether files of those names may be replaced.

    Returns
    -------
    tuple of Path
        The files.

    Raises
    ------
    FileExistsError
        If there is such a file and it may not be replaced; then nothing is written.
    """
    pictures = study_pictures(study)
    files = [(item, folder / f"{item.name}{ending}") for item in pictures for ending in PICTURES]
    for _, path in files:
        if path.exists() and not replace:
            raise FileExistsError(17, "it is there already", str(path))
    folder.mkdir(parents=True, exist_ok=True)
    for item, path in files:
        save_picture(item.draw, path, replace)
    return tuple(path for _, path in files)


def _canvas(height: float) -> Figure:
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    picture = Figure(figsize=(_WIDTH, height), layout="constrained")
    FigureCanvasAgg(picture)
    return picture


def _rows(axes: Axes, names: Sequence[str], label: str) -> None:
    """Names down the side, first on top."""
    import textwrap

    axes.set_yticks(range(len(names)), [textwrap.fill(name, 26) for name in names])
    axes.set_ylim(len(names) - 0.5, -0.5)
    axes.set_xlabel(label)
    axes.tick_params(axis="y", length=0)
    for side in ("top", "right", "left"):
        axes.spines[side].set_visible(False)


def _beside(axes: Axes, row: float, words: str) -> None:
    axes.annotate(
        words, (1.02, row), xycoords=("axes fraction", "data"), va="center", color=INK, fontsize=9
    )


def draw_ladder(result: Prediction) -> Figure:
    """Ladder as a waterfall: what is left after each rung, and hatched what the rung cost.

    Parameters
    ----------
    result : Prediction
        The answer.

    Returns
    -------
    Figure
        The picture; no window is opened.
    """
    picture = _canvas(len(result.ladder) * _ROW + _REST)
    axes = picture.add_subplot()
    before: float | None = None
    ends = [0.0]
    for row, item in enumerate(result.ladder):
        if item.value is None:
            _beside(axes, row, "none")
            continue
        value = float(item.value)
        axes.barh(row, value, height=0.62, color=_DARK)
        if before is not None and item.loss:
            axes.barh(
                row,
                before - value,
                left=value,
                height=0.62,
                color="white",
                edgecolor=_MARK,
                hatch="////",
                linewidth=0.8,
            )
        loss = f"  ({'-' if before is None or before > value else '+'}{figure(item.loss)})"
        _beside(axes, row, figure(item.value) + (loss if item.loss else ""))
        ends.append(value)
        before = value
    axes.set_xlim(1.02 * min(ends), 1.02 * max(ends) or (0 if min(ends) else 1))
    _rows(axes, [item.rung for item in result.ladder], f"{result.case.aim}, mol/mol")
    axes.set_title("Hatched: what the rung costs", loc="left", fontsize=9, color=INK)
    return picture


def _gains(result: Prediction) -> list[tuple[str, float]]:
    report = result.relaxations
    if report is None:
        return []
    return [
        (item.words, float(item.gain))
        for item in report.helpful
        if item.gain is not None and item.gain > 0
    ]


def draw_relaxations(result: Prediction) -> Figure:
    """What each thing given back would bring, as bars.

    Parameters
    ----------
    result : Prediction
        The answer.

    Returns
    -------
    Figure
        The picture; no window is opened.
    """
    gains = _gains(result)
    shown = gains[:_SHOWN]
    picture = _canvas(len(shown) * _ROW * 1.1 + _REST)
    axes = picture.add_subplot()
    for row, (_, gain) in enumerate(shown):
        axes.barh(row, gain, height=0.55, color=_DARK)
        _beside(axes, row, f"+{figure(gain)}")
    axes.set_xlim(0, 1.02 * max((gain for _, gain in shown), default=1))
    _rows(axes, [words for words, _ in shown], f"gain for {result.case.aim}, mol/mol")
    more = len(gains) - len(shown)
    if more:
        axes.set_title(f"{more} smaller gains in the table", loc="left", fontsize=9, color=INK)
    return picture


def _range_words(item: CoefficientAnswer) -> str:
    parts = [f"elements {range_text(item.elements)}"] if item.elements else []
    if item.network:
        parts.append(f"network {range_text(item.network)}")
    if item.at_aim:
        parts.append(f"at the aim {range_text(item.at_aim)}")
    if item.reconciled is not None:
        parts.append(f"measured {with_error(item.reconciled.mean, item.reconciled.sd or 0)}")
    return f"{item.compound}: {', '.join(parts) or 'nothing known'}"


def draw_ranges(result: Prediction) -> Figure:
    """Ranges of every coefficient on an axis of its own: elements, network, aim, measured.

    Parameters
    ----------
    result : Prediction
        The answer.

    Returns
    -------
    Figure
        The picture; no window is opened.
    """
    from matplotlib.lines import Line2D
    from matplotlib.patches import Patch

    items = result.coefficients
    picture = _canvas(len(items) * _PANEL + 0.75)
    panels = picture.subplots(len(items), 1, squeeze=False)[:, 0]
    for axes, item in zip(panels, items, strict=True):
        _panel(axes, item)
    panels[-1].set_xlabel("mol/mol, each coefficient on its own scale")
    keys: list[Patch | Line2D] = [Patch(facecolor=_PALE, edgecolor=INK, label="elements")]
    if any(item.network for item in items):
        keys.append(Patch(facecolor=_DARK, hatch="////", edgecolor="white", label="network"))
    if any(item.at_aim for item in items):
        keys.append(Line2D([], [], color=_MARK, marker="D", linewidth=2.5, label="at the aim"))
    if any(item.measurements for item in items):
        keys.append(
            Line2D(
                [],
                [],
                color="black",
                marker="o",
                markerfacecolor="white",
                linewidth=1.2,
                label=f"measured ± {BAND} s.d.",
            )
        )
    picture.legend(
        handles=keys, loc="outside upper center", ncols=len(keys), frameon=False, fontsize=8.5
    )
    return picture


def _panel(axes: Axes, item: CoefficientAnswer) -> None:
    ranges = [one for one in (item.elements, item.network, item.at_aim) if one is not None]
    ends = [float(end) for one in ranges for end in (one.low, one.high) if end is not None]
    bands = []
    for one in item.measurements:
        reach = BAND * float(one.sd or 0)
        bands.append((float(one.value), reach))
        ends += [float(one.value) - reach, float(one.value) + reach]
    low, high = min([0.0, *ends]), max([0.0, *ends])
    span = high - low or 1.0
    axes.set_xlim(low - 0.02 * span, high + 0.04 * span)
    _bar(axes, item.elements, 2, _PALE, "")
    _bar(axes, item.network, 1, _DARK, "////")
    if item.at_aim is not None:
        _span(axes, item.at_aim)
    for value, reach in bands:
        axes.errorbar(
            value,
            2.95,
            xerr=reach or None,
            fmt="o",
            color="black",
            markerfacecolor="white",
            markersize=4.5,
            capsize=2.5,
            linewidth=1.2,
        )
    axes.set_ylim(-0.55, 3.5)
    axes.set_yticks([1.5], [item.compound])
    axes.tick_params(axis="y", length=0)
    axes.tick_params(axis="x", labelsize=8, length=2, pad=1)
    axes.locator_params(axis="x", nbins=6)
    if low < 0:
        axes.axvline(0, color=INK, linewidth=0.6)
    for side in ("top", "right", "left"):
        axes.spines[side].set_visible(False)


def _reach(axes: Axes, value: Range) -> tuple[float, float]:
    """Ends inside the panel; what has no end goes to its rim and says so."""
    left, right = axes.get_xlim()
    low = left if value.low is None else float(value.low)
    high = right if value.high is None else float(value.high)
    return low, high


def _bar(axes: Axes, value: Range | None, row: float, colour: str, hatch: str) -> None:
    if value is None:
        return
    low, high = _reach(axes, value)
    thin = 0.004 * (axes.get_xlim()[1] - axes.get_xlim()[0])
    axes.barh(
        row,
        max(high - low, thin),
        left=low,
        height=0.8,
        color=colour,
        hatch=hatch,
        edgecolor=INK if not hatch else "white",
        linewidth=0.6,
    )
    if value.low is None or value.high is None:
        axes.annotate(
            "no end",
            (high, row),
            ha="right",
            va="center",
            fontsize=7.5,
            color="black",
            bbox={"facecolor": "white", "edgecolor": "none", "pad": 0.8},
        )


def _span(axes: Axes, value: Range) -> None:
    low, high = _reach(axes, value)
    axes.plot([low, high], [0, 0], color=_MARK, linewidth=2.5, solid_capstyle="butt")
    ends = [end for end, known in ((low, value.low), (high, value.high)) if known is not None]
    axes.plot(ends, [0] * len(ends), linestyle="none", marker="D", markersize=4.5, color=_MARK)
    if value.low is None or value.high is None:
        axes.annotate("no end", (high, 0), ha="right", va="bottom", fontsize=7.5, color=INK)
