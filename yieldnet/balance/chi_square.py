"""The chi-square distribution for whole degrees of freedom, in closed form.

Only the two things that a test of data needs, without loading a statistics library on the way to a
prediction; a test holds them against one.

References
----------
Abramowitz, M., Stegun, I. A. (1964) Handbook of Mathematical Functions, 26.4.4 and 26.4.5.
"""

from __future__ import annotations

from math import erfc, exp, lgamma, log, sqrt

__all__ = ["chi_square_limit", "chi_square_tail"]


def chi_square_tail(value: float, degrees: int) -> float:
    """Probability that a chi-square variable exceeds a value.

    Parameters
    ----------
    value : float
        The value, not negative [-].
    degrees : int
        Degrees of freedom, at least 1 [-].

    Returns
    -------
    float
        The probability, the p value of a test [-].

    Raises
    ------
    ValueError
        If there are no degrees of freedom or the value is negative.

    Examples
    --------
    >>> round(chi_square_tail(5.99, 2), 3)
    0.05
    """
    if degrees < 1 or value < 0:
        raise ValueError("a chi-square test needs a degree of freedom and a sum of squares")
    if value == 0:
        return 1.0
    half = value / 2
    # Each term by its logarithm: a product of them would vanish before it grows.
    odd = degrees % 2
    total = erfc(sqrt(half)) if odd else 0.0
    for k in range(degrees // 2):
        power = k + 0.5 * odd
        total += exp(power * log(half) - half - lgamma(power + 1))
    return min(1.0, total)


def chi_square_limit(level: float, degrees: int) -> float:
    """Value that a chi-square variable stays below with a given probability.

    Parameters
    ----------
    level : float
        The probability, between 0 and 1 [-].
    degrees : int
        Degrees of freedom, at least 1 [-].

    Returns
    -------
    float
        The value, found by halving an interval [-].

    Raises
    ------
    ValueError
        If the level is not between 0 and 1.

    Examples
    --------
    >>> round(chi_square_limit(0.95, 3), 2)
    7.81
    """
    if not 0 < level < 1:
        raise ValueError(f"a level of {level} is no probability between 0 and 1")
    low, high = 0.0, 1.0
    while chi_square_tail(high, degrees) > 1 - level:
        low, high = high, 2 * high
    for _ in range(100):
        middle = (low + high) / 2
        if chi_square_tail(middle, degrees) > 1 - level:
            low = middle
        else:
            high = middle
    return (low + high) / 2
