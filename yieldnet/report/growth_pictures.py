"""Yield against growth rate as a picture: the curve, and the straight pieces, as SVG or PNG."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.report.figures import figure
from yieldnet.report.picture_file import COLOURS, INK, save_picture

if TYPE_CHECKING:
    from pathlib import Path

    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from yieldnet.prediction.growth import GrowthCurve

__all__ = ["draw_growth", "save_growth"]

_SIZE = (6.4, 6.4)
_STEPS = 200
"""Points of a curve between the slowest and the fastest growth asked for [-]."""


def save_growth(curve: GrowthCurve, path: Path, replace: bool = False) -> None:
    """Draw yield against growth rate into a file, whole or not at all.

    Parameters
    ----------
    curve : GrowthCurve
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
    save_picture(lambda: draw_growth(curve), path, replace)


def draw_growth(curve: GrowthCurve) -> Figure:
    """Picture of yield against growth rate, and of its inverse against the inverse of the rate.

    Parameters
    ----------
    curve : GrowthCurve
        What was found.

    Returns
    -------
    Figure
        The picture; no window is opened.
    """
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    picture = Figure(figsize=_SIZE, layout="constrained")
    FigureCanvasAgg(picture)
    picture.suptitle(curve.case.title, x=0.01, ha="left", fontsize=11, color=INK)
    above, below = picture.subplots(2, 1)
    _against_rate(above, curve)
    _straight(below, curve)
    for axes in (above, below):
        for side in ("top", "right"):
            axes.spines[side].set_visible(False)
    return picture


def _grams(curve: GrowthCurve, rate: Fraction, at: int) -> float | None:
    """Yield on a piece [g/g]; ``None`` where its line gives none."""
    piece = curve.pieces[at]
    basis, mass = curve.basis_weight.molar_mass, curve.weight.molar_mass
    if not basis or not mass:
        return None
    constant = 0 if piece.true_yield is None else 1 / piece.true_yield
    inverse = constant + piece.maintenance * mass / rate
    return float(mass / basis / inverse) if inverse > 0 else None


def _lines(curve: GrowthCurve) -> list[tuple[int, list[float], list[float]]]:
    """Growth rates and yields of each piece, as far as rates were asked for."""
    slow, fast = curve.points[0].rate, curve.points[-1].rate
    found = []
    for at, piece in enumerate(curve.pieces):
        low = slow if piece.slowest is None else max(slow, piece.slowest)
        high = fast if piece.fastest is None else min(fast, piece.fastest)
        if low > high:
            continue
        rates = [low + (high - low) * step / _STEPS for step in range(_STEPS + 1)]
        pairs = [(float(rate), _grams(curve, rate, at)) for rate in rates]
        kept = [(rate, value) for rate, value in pairs if value is not None]
        found.append((at, [rate for rate, _ in kept], [value for _, value in kept]))
    return found


def _points(curve: GrowthCurve) -> tuple[list[float], list[float]]:
    grown = [item for item in curve.points if item.yield_mol is not None]
    return (
        [float(item.rate) for item in grown],
        [float(curve.grams_per_gram(item.yield_mol or Fraction(0))) for item in grown],
    )


def _against_rate(axes: Axes, curve: GrowthCurve) -> None:
    for at, rates, values in _lines(curve):
        axes.plot(rates, values, color=COLOURS[at % len(COLOURS)], label=_name(curve, at))
    rates, values = _points(curve)
    axes.plot(rates, values, "o", color=INK, markersize=4)
    for item in curve.points:
        if item.uptake is None:
            axes.axvline(float(item.rate), color=INK, linewidth=0.8, linestyle=(0, (4, 3)))
    axes.set_xlim(left=0)
    axes.set_ylim(bottom=0)
    axes.set_xlabel("growth rate, 1/h")
    axes.set_ylabel("biomass, g/g")
    title = f"Most biomass from {curve.case.basis.name}"
    if any(item.uptake is None for item in curve.points):
        title += "; broken line: no growth"
    axes.set_title(title, loc="left", fontsize=9, color=INK)
    if axes.get_legend_handles_labels()[0]:
        axes.legend(frameon=False, fontsize=8, loc="lower right")


def _straight(axes: Axes, curve: GrowthCurve) -> None:
    for at, rates, values in _lines(curve):
        axes.plot(
            [1 / rate for rate in rates],
            [1 / value for value in values],
            color=COLOURS[at % len(COLOURS)],
        )
    rates, values = _points(curve)
    axes.plot([1 / rate for rate in rates], [1 / value for value in values], "o", color=INK, ms=4)
    axes.set_xlim(left=0)
    axes.set_ylim(bottom=0)
    axes.set_xlabel("1/growth rate, h")
    axes.set_ylabel(f"{curve.case.basis.name}, g/g biomass")
    axes.set_title(
        "The same turned over: straight pieces, 1/Y = 1/Y_true + m_S/mu",
        loc="left",
        fontsize=9,
        color=INK,
    )


def _name(curve: GrowthCurve, at: int) -> str:
    piece = curve.pieces[at]
    maintenance = f"m_S {figure(1000 * piece.maintenance)} mmol/g/h"
    if piece.true_yield is None:
        return f"piece {at + 1}: {maintenance}"
    true = figure(curve.grams_per_gram(piece.true_yield))
    return f"piece {at + 1}: Y_true {true} g/g, {maintenance}"
