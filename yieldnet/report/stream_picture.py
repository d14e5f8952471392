"""The streams of a plant as a flow diagram: what enters on the left, what leaves on the right.

A band is as thick as its stream is large; one too thin to see is drawn as a thin line. The rest of
the air goes in and out as it is and would hide all others, so it is told in words.
"""

from __future__ import annotations

import textwrap
from typing import TYPE_CHECKING

from yieldnet.plant.streams import REST_OF_AIR
from yieldnet.report.figures import figure
from yieldnet.report.picture_file import COLOURS, INK

if TYPE_CHECKING:
    from collections.abc import Sequence

    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from yieldnet.plant.sheet import PlantSheet, Stream

__all__ = ["draw_streams", "stream_words"]

_WIDTH = 6.4
_LINE = 0.145
"""Height of a line of words [inch]."""
_LETTERS = 26
"""Letters of a name in one line [-]."""
_ALL = 2.6
"""Height of all streams of a side together [inch]."""
_THIN = 0.014
"""Least thickness of a band that can be seen [inch]."""
_REACH = 0.9
"""Length of the curve from a stream to the plant [inch]."""
_HALF = 0.42
"""Half the width of the plant [inch]."""


def _shown(sheet: PlantSheet, *, enters: bool) -> list[Stream]:
    """Streams of a side but air that passes through, largest first."""
    found = [
        item
        for item in sheet.streams
        if item.enters is enters and item.name != REST_OF_AIR and item.t_per_y
    ]
    return sorted(found, key=lambda item: -abs(item.t_per_y))


def stream_words(sheet: PlantSheet) -> str:
    """The flow diagram in words.

    Parameters
    ----------
    sheet : PlantSheet
        The sheet.

    Returns
    -------
    str
        Streams that enter and leave, with t/y.
    """
    sides = []
    for word, enters in (("enters", True), ("leaves", False)):
        parts = [f"{item.name} {figure(item.t_per_y)}" for item in _shown(sheet, enters=enters)]
        sides.append(f"{word}: {', '.join(parts)}")
    return f"{sides[0]}; {sides[1]}.{_air_words(sheet)}"


def _air_words(sheet: PlantSheet) -> str:
    air = [item for item in sheet.streams if item.name == REST_OF_AIR and item.enters]
    if not air:
        return ""
    return f" The rest of the air, {figure(air[0].t_per_y)} t/y, passes through and is not drawn."


def draw_streams(sheet: PlantSheet) -> Figure:
    """Flow diagram of a plant.

    Parameters
    ----------
    sheet : PlantSheet
        The sheet.

    Returns
    -------
    Figure
        The picture; no window is opened.
    """
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure
    from matplotlib.patches import Rectangle

    sides = [_shown(sheet, enters=True), _shown(sheet, enters=False)]
    largest = max(sum(abs(item.t_per_y) for item in side) for side in sides)
    scale = _ALL / float(largest) if largest else 0.0
    heights = [sum(_slot(item, scale) for item in side) for side in sides]
    height = max(_ALL, *heights)
    picture = Figure(figsize=(_WIDTH, height + 0.5))
    FigureCanvasAgg(picture)
    axes = picture.add_axes((0, 0, 1, 1))
    axes.set_axis_off()
    axes.set_xlim(0, _WIDTH)
    axes.set_ylim(-0.4, height + 0.1)
    middle = _WIDTH / 2
    for side, enters in zip(sides, (True, False), strict=True):
        _draw_side(axes, side, scale, height, enters=enters)
    axes.add_patch(
        Rectangle(
            (middle - _HALF, (height - _ALL) / 2),
            2 * _HALF,
            _ALL,
            facecolor="white",
            edgecolor=INK,
            linewidth=1.2,
            zorder=4,
        )
    )
    axes.text(middle, height / 2, "plant", ha="center", va="center", fontsize=10, zorder=5)
    words = "t/y; bands as thick as their stream." + _air_words(sheet)
    axes.text(0.05, -0.2, textwrap.fill(words, 110), va="center", fontsize=8, color=INK)
    return picture


def _thick(item: Stream, scale: float) -> float:
    return max(_THIN, abs(float(item.t_per_y)) * scale)


def _slot(item: Stream, scale: float) -> float:
    """Height that a stream takes at its outer end: its band or its words."""
    lines = len(textwrap.wrap(item.name, _LETTERS)) + 1
    return max(lines * _LINE + 0.1, _thick(item, scale))


def _draw_side(
    axes: Axes, streams: Sequence[Stream], scale: float, height: float, *, enters: bool
) -> None:
    from matplotlib.patches import PathPatch
    from matplotlib.path import Path

    slots = [_slot(item, scale) for item in streams]
    outside = height - (height - sum(slots)) / 2
    inside = height - (height - sum(_thick(item, scale) for item in streams)) / 2
    rim = _WIDTH / 2 + (-_HALF if enters else _HALF)
    start = rim + (-_REACH if enters else _REACH)
    bend = (start + rim) / 2
    for place, (item, slot) in enumerate(zip(streams, slots, strict=True)):
        thick = _thick(item, scale)
        at, to = outside - slot / 2, inside - thick / 2
        half = thick / 2
        axes.add_patch(
            PathPatch(
                Path(
                    [
                        (start, at + half),
                        (bend, at + half),
                        (bend, to + half),
                        (rim, to + half),
                        (rim, to - half),
                        (bend, to - half),
                        (bend, at - half),
                        (start, at - half),
                        (start, at + half),
                    ],
                    [
                        Path.MOVETO,
                        *[Path.CURVE4] * 3,
                        Path.LINETO,
                        *[Path.CURVE4] * 3,
                        Path.CLOSEPOLY,
                    ],
                ),
                facecolor=COLOURS[0 if enters else 5],
                alpha=0.75 if place % 2 else 0.95,
                linewidth=0,
            )
        )
        name = textwrap.fill(item.name, _LETTERS)
        axes.text(
            start + (-0.06 if enters else 0.06),
            at,
            f"{name}\n{figure(item.t_per_y)}",
            ha="right" if enters else "left",
            va="center",
            fontsize=8.5,
            linespacing=1.1,
            color="black",
        )
        outside -= slot
        inside -= thick
