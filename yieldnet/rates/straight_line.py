"""A straight line through points, by weighted least squares.

With known errors the standard deviations of slope and intercept follow from those alone, and the
sum of squares is tested by chi-square. Without them the errors come from the scatter.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import isinf
from typing import TYPE_CHECKING

from yieldnet.balance.chi_square import chi_square_tail

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = ["StraightLine", "chance_beyond", "fit_straight_line"]


@dataclass(frozen=True, slots=True, kw_only=True)
class StraightLine:
    """A line y = intercept + slope x with its errors.

    Parameters
    ----------
    slope, intercept : float
        In the units of y/x and of y; the intercept is 0 where the line is held to the origin.
    slope_sd, intercept_sd : float
        Standard deviations in the same units.
    chi_square : float
        Weighted sum of squares of the residuals; with weights of 1 the plain sum [-].
    degrees_of_freedom : int
        Points less the numbers fitted [-].
    residual_sd : float or None
        Root of sum of squares over degrees of freedom, in the unit of y where no errors were
        given; ``None`` without degrees of freedom.
    r_squared : float or None
        Share of the weighted sum of squares that the line explains, about the mean (about zero
        for a line through the origin) [-]; ``None`` where all y are alike.
    p_value : float or None
        Chance of a larger chi-square if the errors are as stated [-]; ``None`` without stated
        errors or degrees of freedom.
    """

    slope: float
    intercept: float
    slope_sd: float
    intercept_sd: float
    chi_square: float
    degrees_of_freedom: int
    residual_sd: float | None
    r_squared: float | None
    p_value: float | None


def chance_beyond(chi_square: float, degrees_of_freedom: int) -> float | None:
    """Chance that chi-square exceeds a value; ``None`` without degrees of freedom.

    Examples
    --------
    >>> round(chance_beyond(3.841458820694124, 1), 9)
    0.05
    """
    if degrees_of_freedom < 1:
        return None
    # Replicates that share all their errors and differ have no end to their chi-square.
    return 0.0 if isinf(chi_square) else chi_square_tail(chi_square, degrees_of_freedom)


def fit_straight_line(
    x: Sequence[float],
    y: Sequence[float],
    sds: Sequence[float] | None = None,
    *,
    through_origin: bool = False,
) -> StraightLine:
    """Straight line of least weighted squares.

    Parameters
    ----------
    x, y : sequence of float
        Points, in any units.
    sds : sequence of float or None
        Standard deviation of each y; ``None`` to take the errors from the scatter.
    through_origin : bool
        Whether the intercept is held at 0.

    Returns
    -------
    StraightLine
        Slope and intercept with their standard deviations, and the goodness of the fit.

    Raises
    ------
    ValueError
        If there are too few different x for a line, a standard deviation is not positive, or
        there is neither an error nor a scatter.

    Notes
    -----
    Sums are taken about the weighted mean of x, so that large x with little spread lose no
    digits.

    Examples
    --------
    >>> line = fit_straight_line([0, 1, 2], [1.0, 3.0, 5.0])
    >>> line.slope, line.intercept
    (2.0, 1.0)
    """
    import numpy as np

    fitted = 1 if through_origin else 2
    along, up = np.asarray(x, float), np.asarray(y, float)
    if sds is not None and min(sds) <= 0:
        raise ValueError("a standard deviation is not positive")
    weight = np.ones_like(along) if sds is None else 1 / np.asarray(sds, float) ** 2
    total = weight.sum()
    x_mean = 0.0 if through_origin else float(weight @ along / total)
    y_mean = 0.0 if through_origin else float(weight @ up / total)
    spread = float(weight @ (along - x_mean) ** 2)
    if len(along) < fitted or not spread > 0:
        raise ValueError("too few different x for a line")
    slope = float(weight @ ((along - x_mean) * (up - y_mean))) / spread
    residuals = (up - y_mean) - slope * (along - x_mean)
    chi_square = float(weight @ residuals**2)
    freedom = len(along) - fitted
    variance = chi_square / freedom if freedom else None
    if sds is None and variance is None:
        raise ValueError("neither errors nor a scatter to take them from")
    scale = 1.0 if sds is not None or variance is None else variance
    about_mean = float(weight @ (up - y_mean) ** 2)
    intercept_variance = 0.0 if through_origin else 1 / total + x_mean**2 / spread
    return StraightLine(
        slope=slope,
        intercept=y_mean - slope * x_mean,
        slope_sd=float(np.sqrt(scale / spread)),
        intercept_sd=float(np.sqrt(scale * intercept_variance)),
        chi_square=chi_square,
        degrees_of_freedom=freedom,
        residual_sd=None if variance is None else float(np.sqrt(variance)),
        r_squared=1 - chi_square / about_mean if about_mean > 0 else None,
        p_value=None if sds is None else chance_beyond(chi_square, freedom),
    )
