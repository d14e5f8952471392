"""The next measurement: which coefficient, if it were known, would narrow a range the most.

All that two coefficients can be together, within the bands of what is measured, is a polygon. If
the one were known, the other could only lie on a strip of it. The width of that strip, averaged
over all values the first could turn out to have, is what its measurement is expected to leave.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import side_sign, with_bands, yield_column
from yieldnet.model.case import BAND
from yieldnet.optimum.polygon import Axis, project
from yieldnet.optimum.ranges import Range

if TYPE_CHECKING:
    from yieldnet.optimum.polygon import Polygon
    from yieldnet.optimum.proof import Optimiser
    from yieldnet.prediction.layers import Layers

__all__ = ["DEFAULT_PRECISION", "NextMeasurement", "next_measurements"]

DEFAULT_PRECISION = Fraction(1, 20)
"""Standard deviation of a measurement that is thought of, as a share of its value [-]."""
_TRIALS = 200
"""Values, equally far apart, over which a width is averaged [-]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class NextMeasurement:
    """What knowing one coefficient would leave of the range of another.

    Parameters
    ----------
    compound : str
        The coefficient that would be measured.
    range : Range
        Values it could turn out to have, positive on its side [mol/mol basis].
    before : Fraction
        Width of the range that is to be narrowed [mol/mol basis].
    expected, worst : float or None
        Width that is left, on average and at most [mol/mol basis]; ``None`` where the coefficient
        has no end, so that no average exists.
    """

    compound: str
    range: Range
    before: Fraction
    expected: float | None
    worst: float | None

    @property
    def narrowing(self) -> float:
        """Share of the width that is expected to go [-]."""
        return 0.0 if self.expected is None else max(0.0, 1 - self.expected / float(self.before))


def next_measurements(
    optimiser: Optimiser, layers: Layers, column: str, precision: Fraction
) -> tuple[NextMeasurement, ...] | None:
    """Coefficients that are not measured, by how much knowing them would narrow a range.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    layers : Layers
        The problems.
    column : str
        Column of the coefficient, or of the surplus of an energy carrier, whose range is meant.
    precision : Fraction
        Standard deviation of the measurement as a share of its value [-].

    Returns
    -------
    tuple of NextMeasurement or None
        The most useful first; ``None`` if the range has no width or no end.

    Notes
    -----
    A value v that is measured leaves what lies within two standard deviations of it. Corners of
    the polygon are exact; the average is taken over 200 values of v from the middle of as many
    equal parts.
    """
    problem = with_bands(layers.final, layers.statements)
    measured = set(layers.statements.measured_compounds())
    found = []
    for item in layers.case.coefficients:
        own = yield_column(item.name)
        if own == column or item.name in measured:
            continue
        sign = Fraction(side_sign(item.side))
        polygon = project(optimiser, problem, Axis(own, sign), Axis(column))
        assert polygon is not None
        low, high = polygon.y.low, polygon.y.high
        if low is None or high is None or low == high:
            return None
        expected = worst = None
        if not polygon.rays:
            widths = _widths(polygon, float(precision))
            expected, worst = sum(widths) / len(widths), max(widths)
        found.append(
            NextMeasurement(
                compound=item.name,
                range=polygon.x,
                before=high - low,
                expected=expected,
                worst=worst,
            )
        )
    return tuple(sorted(found, key=lambda item: -item.narrowing))


def _widths(polygon: Polygon, precision: float) -> list[float]:
    """Width of the polygon seen along y, once x is known to be near each of many values."""
    assert polygon.x.low is not None
    assert polygon.x.high is not None
    places = [(float(x), float(y)) for x, y in polygon.corners]
    edges = [(places[start], places[end]) for start, end in polygon.edges()]
    least, most = float(polygon.x.low), float(polygon.x.high)
    step = (most - least) / _TRIALS
    found = []
    for k in range(_TRIALS):
        value = least + (k + 0.5) * step
        half = BAND * precision * abs(value)
        left, right = max(least, value - half), min(most, value + half)
        heights = [y for x, y in places if left <= x <= right]
        for wall in (left, right):
            heights += [
                y0 + (wall - x0) / (x1 - x0) * (y1 - y0)
                for (x0, y0), (x1, y1) in edges
                if min(x0, x1) <= wall <= max(x0, x1) and x0 != x1
            ]
        found.append(max(heights) - min(heights))
    return found
