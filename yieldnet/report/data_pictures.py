"""Judged data as a picture: recoveries, residuals and the next measurement, as SVG or PNG.

Nothing is told by colour alone: each row has its name, its number and its mark.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.report.figures import figure, signed
from yieldnet.report.picture_file import COLOURS, INK, save_picture

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence
    from pathlib import Path

    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from yieldnet.prediction.reconciliation import Reconciliation

__all__ = ["draw_data", "save_data"]

_WIDTH = 6.4
_ROW = 0.3
"""Height of one row of a panel [inch]."""
_REST = 1.0
"""Height of a panel's heading and axis [inch]."""


def save_data(result: Reconciliation, path: Path, replace: bool = False) -> None:
    """Draw judged data into a file, whole or not at all.

    Parameters
    ----------
    result : Reconciliation
        What was found.
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
    save_picture(lambda: draw_data(result), path, replace)


def draw_data(result: Reconciliation) -> Figure:
    """Picture of judged data, one panel a question; a panel without rows is left out.

    Parameters
    ----------
    result : Reconciliation
        What was found.

    Returns
    -------
    Figure
        The picture; no window is opened.
    """
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    panels: list[tuple[int, Callable[[Axes], None]]] = []
    if result.recoveries:
        panels.append((len(result.recoveries), lambda axes: _recoveries(axes, result)))
    judged = [item for item in result.values if item.residual is not None]
    if judged:
        panels.append((len(judged), lambda axes: _residuals(axes, result)))
    if result.next:
        panels.append((len(result.next), lambda axes: _next(axes, result)))
    heights = [rows * _ROW + _REST for rows, _ in panels]
    picture = Figure(figsize=(_WIDTH, sum(heights)), layout="constrained")
    FigureCanvasAgg(picture)
    picture.suptitle(result.case.title, x=0.01, ha="left", fontsize=11, color=INK)
    for axes, (_, draw) in zip(
        picture.subplots(len(panels), 1, squeeze=False, height_ratios=heights)[:, 0],
        panels,
        strict=True,
    ):
        draw(axes)
    return picture


def _rows(axes: Axes, names: Sequence[str], title: str, label: str) -> None:
    """Names down the side, first on top."""
    axes.set_yticks(range(len(names)), names)
    axes.set_ylim(len(names) - 0.5, -0.5)
    axes.set_title(title, loc="left", fontsize=9, color=INK)
    axes.set_xlabel(label)
    axes.tick_params(axis="y", length=0)
    for side in ("top", "right", "left"):
        axes.spines[side].set_visible(False)


def _recoveries(axes: Axes, result: Reconciliation) -> None:
    axes.axvline(100, color=INK, linewidth=0.8)
    most = 100.0
    for row, item in enumerate(result.recoveries):
        found, sd = 100 * float(item.ratio), 100 * float(item.sd)
        # What is not measured is missing here: such a recovery cannot be 100 % and is drawn open.
        whole = not item.left_out
        axes.errorbar(
            found,
            row,
            xerr=2 * sd,
            fmt="o",
            color=COLOURS[0],
            markerfacecolor=COLOURS[0] if whole else "white",
            capsize=3,
        )
        most = max(most, found + 2 * sd)
        words = f"{figure(found)} ± {figure(sd)}" + ("" if whole else "  not all of it measured")
        axes.annotate(
            words, (1.02, row), xycoords=("axes fraction", "data"), va="center", color=INK
        )
    axes.set_xlim(0, 1.05 * most)
    _rows(
        axes,
        [item.quantity for item in result.recoveries],
        "Recovery at the values as measured, bars two standard deviations",
        "% of what is taken up",
    )


def _residuals(axes: Axes, result: Reconciliation) -> None:
    judged = [item for item in result.values if item.residual is not None]
    values = [item.residual or 0.0 for item in judged]
    axes.axvline(0, color=INK, linewidth=0.8)
    for limit in (-2, 2):
        axes.axvline(limit, color=INK, linewidth=0.8, linestyle=(0, (4, 3)))
    axes.barh(
        range(len(judged)),
        values,
        height=0.5,
        color=[COLOURS[1] if abs(value) > 2 else COLOURS[2] for value in values],
        hatch=["//" if abs(value) > 2 else "" for value in values],
        edgecolor=INK,
        linewidth=0.6,
    )
    for row, value in enumerate(values):
        axes.annotate(
            signed(value), (1.02, row), xycoords=("axes fraction", "data"), va="center", color=INK
        )
    reach = max(3.0, *(1.1 * abs(value) for value in values))
    axes.set_xlim(-reach, reach)
    _rows(
        axes,
        [item.compound for item in judged],
        "Normalised residuals; hatched beyond two",
        "adjustment over its own standard deviation",
    )


def _next(axes: Axes, result: Reconciliation) -> None:
    before = float(result.next[0].before)
    for row, item in enumerate(result.next):
        axes.barh(row, before, height=0.5, color="white", edgecolor=INK, linewidth=0.6)
        if item.expected is not None:
            axes.barh(
                row, item.expected, height=0.5, color=COLOURS[2], edgecolor=INK, linewidth=0.6
            )
        words = "has no end" if item.expected is None else figure(item.expected)
        axes.annotate(
            words, (1.02, row), xycoords=("axes fraction", "data"), va="center", color=INK
        )
    axes.set_xlim(0, before)
    _rows(
        axes,
        [item.compound for item in result.next],
        f"The next measurement: range of {result.target} left if this were known"
        f" within {100 * float(result.precision):g} %",
        f"mean width left of {figure(before)} mol/mol",
    )
