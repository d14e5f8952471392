"""Yield on ATP in a line and for JSON, beside the published ones."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

from yieldnet.chemistry.growth_atp import published_atp_yields
from yieldnet.report.figures import figure, range_text

if TYPE_CHECKING:
    from yieldnet.chemistry.growth_atp import PublishedAtpYield
    from yieldnet.prediction.growth_energy import AtpYield

__all__ = ["atp_yield_form", "atp_yield_line", "published_form", "range_words"]


def atp_yield_line(found: AtpYield) -> str:
    """Yield on ATP in one line, beside the published ones.

    Examples
    --------
    >>> from yieldnet.optimum.ranges import Range
    >>> from yieldnet.prediction.growth_energy import AtpYield
    >>> ten = Range(Fraction(10), Fraction(10))
    >>> line = atp_yield_line(AtpYield(range=ten, growth=Fraction(1, 10), with_maintenance=False))
    >>> line.split(";")[0]
    'Y_ATP: 10 g biomass/mol ATP of growth alone (no maintenance is known here)'
    """
    spent = "of growth and maintenance"
    if not found.with_maintenance:
        spent = "of growth alone (no maintenance is known here)"
    theory, *others = published_atp_yields()
    seen = [end for item in others for end in (item.low, item.high)]
    return (
        f"Y_ATP: {range_text(found.range)} g biomass/mol ATP {spent}; published"
        f" {range_words(min(seen), max(seen))}, in theory at most {figure(theory.high)}."
    )


def range_words(low: Fraction, high: Fraction) -> str:
    """Two ends as a range, one number where they agree."""
    return figure(low) if low == high else f"{figure(low)}…{figure(high)}"


def atp_yield_form(found: AtpYield) -> dict[str, Any]:
    """Yield on ATP for JSON, without its ends, which every range has alike."""
    return {
        "unit": "g/mol ATP",
        "atp_of_growth_mmol_per_g": float(1000 * found.growth),
        "with_maintenance": found.with_maintenance,
        "published": [published_form(item) for item in published_atp_yields()],
    }


def published_form(item: PublishedAtpYield) -> dict[str, Any]:
    """A published yield on ATP for JSON."""
    return {
        "name": item.name,
        "low": float(item.low),
        "high": float(item.high),
        "source": item.source,
        "status": item.status,
    }
