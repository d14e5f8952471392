"""Pictures: a trade-off drawn on its two axes, as SVG or PNG.

Every case has its own colour, line style and corner mark, and its name stands at its line, so that
no case is known by colour alone. Corners carry the numbers of the tables. What has no end is drawn
with arrows and says so.
"""

from __future__ import annotations

import textwrap
from dataclasses import dataclass, field
from itertools import pairwise
from math import hypot
from typing import TYPE_CHECKING, Any

from yieldnet.report.picture_file import COLOURS, INK, save_picture
from yieldnet.report.tradeoff_view import (
    axis_label,
    corner_name,
    edge_words,
    region_letter,
    tradeoff_title,
    turn_words,
)
from yieldnet.studies.tradeoff import Change

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence
    from pathlib import Path

    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from yieldnet.studies.tradeoff import Region, Tradeoff

__all__ = ["draw_tradeoff", "save_tradeoff"]

Place = tuple[float, float]
_Line = tuple[Place, Place]

_LINES: tuple[Any, ...] = (
    "-",
    (0, (6, 2)),
    (0, (1.5, 1.5)),
    (0, (7, 2, 1.5, 2)),
    (0, (3, 2)),
    (0, (7, 2, 1.5, 2, 1.5, 2)),
)
_MARKS = ("o", "s", "^", "D", "v", "P")
_SIZE = (6.4, 4.8)
_REACH = 0.35
"""Length of an arrow without end, as a share of what is drawn of the rest [-]."""
_FAR = 25.0
"""Distance from which a label is as clear of lines as need be [pt]."""


def save_tradeoff(result: Tradeoff, path: Path, replace: bool = False) -> None:
    """Draw a trade-off into a file, whole or not at all.

    Parameters
    ----------
    result : Tradeoff
        The trade-off.
    path : Path
        File that ends in one of :data:`~yieldnet.report.picture_file.PICTURES`.
    replace : bool
        Whether a file of that name may be replaced.

    Raises
    ------
    ValueError
        If the name ends otherwise.
    FileExistsError
        If there is such a file and it may not be replaced.
    """
    save_picture(lambda: draw_tradeoff(result), path, replace)


def draw_tradeoff(result: Tradeoff) -> Figure:
    """Picture of a trade-off.

    Parameters
    ----------
    result : Tradeoff
        The trade-off.

    Returns
    -------
    Figure
        The picture; no window is opened.
    """
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    # At 72 dots per inch a dot of the layout is a point of the fonts.
    figure = Figure(figsize=_SIZE, dpi=72, layout="constrained")
    FigureCanvasAgg(figure)
    axes = figure.add_subplot()
    axes.spines[["top", "right"]].set_visible(False)
    axes.set_xlabel(axis_label(result, result.x))
    axes.set_ylabel(axis_label(result, result.y))
    alone = len(result.regions) == 1
    pad = 22 if alone else 8
    axes.set_title(tradeoff_title(result), loc="left", fontweight="bold", color=INK, pad=pad)
    if alone:
        title = textwrap.shorten(result.regions[0].case.title, 90, placeholder=" …")
        axes.text(0, 1.02, title, transform=axes.transAxes, va="bottom", color=INK, fontsize=8.5)
    rims = _rims(result)
    _set_limits(axes, [at for rim in rims for at in rim])
    for place, (region, rim) in enumerate(zip(result.regions, rims, strict=True)):
        _draw_region(axes, region, rim, place)
    figure.draw_without_rendering()
    figure.set_layout_engine("none")
    _write_labels(axes, result, rims)
    return figure


def _rims(result: Tradeoff) -> list[list[Place]]:
    """Line of each region in the order of its corners, arrows without end included."""
    corners = [_places(region) for region in result.regions]
    every = [at for places in corners for at in places]
    spans = [
        max((at[axis] for at in every), default=0) - min((at[axis] for at in every), default=0)
        for axis in (0, 1)
    ]
    rims = []
    for region, places in zip(result.regions, corners, strict=True):
        rim = list(places)
        rays = [(float(ray[0]), float(ray[1])) for ray in region.polygon.rays]
        if rays and rim:
            # An arrow reaches about as far on the picture whatever the units of the axes.
            reach = _REACH * min(
                (span or 1) / abs(part)
                for ray in rays
                for span, part in zip(spans, ray, strict=True)
                if part
            )
            first, last = rim[0], rim[-1]
            rim.insert(0, (first[0] + reach * rays[0][0], first[1] + reach * rays[0][1]))
            rim.append((last[0] + reach * rays[1][0], last[1] + reach * rays[1][1]))
        elif len(rim) > 2:
            rim.append(rim[0])
        rims.append(rim)
    return rims


def _places(region: Region) -> list[Place]:
    return [(float(corner.x), float(corner.y)) for corner in region.corners]


def _set_limits(axes: Axes, places: Sequence[Place]) -> None:
    for axis, limit in ((0, axes.set_xlim), (1, axes.set_ylim)):
        values = [at[axis] for at in places] or [0.0]
        low, high = min(values), max(values)
        # Yields are read from zero, and what lies far from it would else be one flat line.
        if low > 0 and low < high:
            low = 0.0
        span = (high - low) or abs(high) or 1.0
        limit(low if low == 0 else low - 0.08 * span, high + 0.12 * span)
    for axis, line in ((0, axes.axvline), (1, axes.axhline)):
        if (axes.get_xlim(), axes.get_ylim())[axis][0] < 0:
            line(0, color=INK, linewidth=0.6, zorder=1)


def _draw_region(axes: Axes, region: Region, rim: Sequence[Place], place: int) -> None:
    colour, line = COLOURS[place % 6], _LINES[(place + place // 6) % 6]
    xs, ys = [at[0] for at in rim], [at[1] for at in rim]
    if len(rim) > 2 and not region.polygon.rays:
        axes.fill(xs, ys, color=colour, alpha=0.07, linewidth=0, zorder=2)
    axes.plot(xs, ys, color=colour, linestyle=line, linewidth=1.7, clip_on=False, zorder=3)
    if region.polygon.rays and rim:
        for tail, tip in ((rim[1], rim[0]), (rim[-2], rim[-1])):
            axes.annotate(
                "", tip, tail, arrowprops={"arrowstyle": "-|>", "color": colour, "linewidth": 1.7}
            )
    corners = _places(region)
    axes.plot(
        [at[0] for at in corners],
        [at[1] for at in corners],
        linestyle="none",
        marker=_MARKS[place % 6],
        markersize=5.5,
        markerfacecolor="white",
        markeredgecolor=colour,
        markeredgewidth=1.4,
        clip_on=False,
        zorder=4,
    )


@dataclass(slots=True)
class _Labels:
    """Writes labels where they cover neither a line nor each other, if there is such a place."""

    axes: Axes
    lines: list[_Line]
    boxes: list[Any] = field(default_factory=list)

    def write(
        self,
        text: str,
        anchors: Iterable[Place],
        gap: float,
        must: bool = True,
        away: Sequence[_Line] | None = None,
        **style: Any,
    ) -> None:
        """Write a label beside the best of some points of the picture, near the first if equal.

        It stands as far as it can from the lines ``away``, which are all lines unless told.
        """
        from matplotlib.patheffects import withStroke

        # Told in shares of the axes, which stay where they are when the margins are cut to size.
        made = self.axes.text(
            0,
            0,
            text,
            transform=self.axes.transAxes,
            ha="center",
            va="center",
            linespacing=1.25,
            path_effects=[withStroke(linewidth=2.5, foreground="white")],
            zorder=5,
            **style,
        )
        own = made.get_window_extent()
        best: tuple[float, Any, Place] | None = None
        for anchor in anchors:
            for way in _WAYS:
                middle = (
                    anchor[0] + way[0] * (gap + own.width / 2),
                    anchor[1] + way[1] * (gap + own.height / 2),
                )
                box = own.translated(
                    middle[0] - (own.x0 + own.x1) / 2, middle[1] - (own.y0 + own.y1) / 2
                )
                room = self._room(box, self.lines if away is None else away)
                if best is None or room > best[0] + 2:
                    best = (room, box, middle)
        if best is None or (best[0] < 0 and not must):
            made.remove()
            return
        x, y = self.axes.transAxes.inverted().transform(best[2])
        made.set_position((float(x), float(y)))
        self.boxes.append(best[1])

    def _room(self, box: Any, away: Sequence[_Line]) -> float:
        """Distance to the nearest of some lines; negative where something would be covered."""
        frame = self.axes.get_window_extent()
        aside = box.x0 < frame.x0 + 3 or box.x1 > frame.x1 + 12
        if aside or box.y0 < frame.y0 + 3 or box.y1 > frame.y1 + 12:
            return -3 * _FAR
        if any(box.overlaps(other.padded(4)) for other in self.boxes):
            return -2 * _FAR
        if any(_gap(box, line) <= 0 for line in self.lines):
            return -_FAR
        return min(min((_gap(box, line) for line in away), default=_FAR), _FAR)


_WAYS = ((1, 0), (1, 1), (0, 1), (-1, 1), (-1, 0), (1, -1), (0, -1), (-1, -1))
"""Sides of a point on which a label can stand."""


def _gap(box: Any, line: _Line) -> float:
    """Distance between a box and a line between two points, about; 0 where they cross."""
    (x0, y0), (x1, y1) = line
    steps = max(2, int(hypot(x1 - x0, y1 - y0) / 6))
    nearest = float("inf")
    for step in range(steps + 1):
        x, y = x0 + (x1 - x0) * step / steps, y0 + (y1 - y0) * step / steps
        aside = max(box.x0 - x, 0.0, x - box.x1)
        above = max(box.y0 - y, 0.0, y - box.y1)
        nearest = min(nearest, hypot(aside, above))
    return nearest


def _write_labels(axes: Axes, result: Tradeoff, rims: Sequence[Sequence[Place]]) -> None:
    """Corner numbers, names of cases, switches, and what has no end."""
    drawn = [_points(axes, rim) for rim in rims]
    pieces = [list(pairwise(rim)) for rim in drawn]
    labels = _Labels(axes, [line for lines in pieces for line in lines])
    names: dict[tuple[int, int], list[tuple[str, Place, str]]] = {}
    for place, region in enumerate(result.regions):
        for number, at in enumerate(_points(axes, _places(region))):
            # Corners that cases share are named together.
            entry = (corner_name(result, place, number), at, COLOURS[place % 6])
            names.setdefault((round(at[0]), round(at[1])), []).append(entry)
    for shared in names.values():
        text, colours = " ".join(name for name, _, _ in shared), {item[2] for item in shared}
        colour = colours.pop() if len(colours) == 1 else INK
        labels.write(text, [shared[0][1]], 5.5, color=colour, fontsize=8)
    for place, (region, rim) in enumerate(zip(result.regions, drawn, strict=True)):
        colour = COLOURS[place % 6]
        if region.polygon.rays:
            if not rim:
                frame = axes.get_window_extent()
                rim = [((frame.x0 + frame.x1) / 2, (frame.y0 + frame.y1) / 2)]
            for tip in dict.fromkeys((rim[0], rim[-1])):
                labels.write("unbounded", [tip], 8, color=colour, fontsize=8)
        if len(result.regions) > 1:
            title = textwrap.fill(region.case.title, 30, break_long_words=False)
            name = f"{region_letter(result, place)}: {title}"
            away = [line for at, lines in enumerate(pieces) if at != place for line in lines]
            style: dict[str, Any] = {"color": colour, "fontsize": 8.5, "fontweight": "bold"}
            labels.write(name, _along(rim), 6, away=away, **style)
    if len(result.regions) == 1:
        _write_switches(axes, labels, result.regions[0])


def _write_switches(axes: Axes, labels: _Labels, region: Region) -> None:
    """What appears, vanishes or turns along the edges of the only case."""
    places = _places(region)
    style: dict[str, Any] = {"color": INK, "fontsize": 7.5}
    for edge in region.edges:
        for item in edge.switches:
            if item.change is Change.TURNS:
                at = (float(item.places[0][0]), float(item.places[0][1]))
                axes.plot(*at, marker="d", markersize=5, color=COLOURS[0], zorder=4)
                drawn = _points(axes, [at])
                labels.write(turn_words(region, edge, item), drawn, 6, must=False, **style)
    for edge in region.edges:
        text = edge_words(region, edge)
        if text:
            ends = _points(axes, [places[edge.start], places[edge.end]])
            labels.write(text, _along(ends), 6, must=False, **style)
    if any(edge.switches for edge in region.edges):
        axes.annotate(
            "changes along an edge: read to the right or upwards",
            (1, 0),
            (0, -40),
            xycoords="axes fraction",
            textcoords="offset points",
            ha="right",
            color=INK,
            fontsize=7,
            fontstyle="italic",
        )


def _points(axes: Axes, places: Sequence[Place]) -> list[Place]:
    """Places on the axes as points of the picture."""
    if not places:
        return []
    return [(float(x), float(y)) for x, y in axes.transData.transform(places)]


def _along(rim: Sequence[Place]) -> list[Place]:
    """Points on a line, from the middle of each piece outwards."""
    found = list(rim[:1])
    for share in (0.5, 0.35, 0.65, 0.2, 0.8):
        for start, end in pairwise(rim):
            found.append(
                (start[0] + share * (end[0] - start[0]), start[1] + share * (end[1] - start[1]))
            )
    return found[1:] or found
