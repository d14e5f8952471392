"""Errors of measured values together: their covariance, and several values of one coefficient."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.exact import inverse, product

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from yieldnet.foundation.exact import Matrix
    from yieldnet.model.case import Correlation, Measurement

__all__ = ["Pooled", "Target", "covariance_of", "pool"]


@dataclass(frozen=True, slots=True)
class Target:
    """Where a measured coefficient wants to be, and how far it is believed.

    Parameters
    ----------
    value : Fraction
        Weighted mean of the measured values, positive on the declared side [mol/mol].
    variance : Fraction
        Square of its standard deviation [(mol/mol)^2].
    """

    value: Fraction
    variance: Fraction


@dataclass(frozen=True, slots=True, kw_only=True)
class Pooled:
    """One value for each measured coefficient, with the covariance of all.

    Parameters
    ----------
    names : tuple of str
        Coefficients that have measured values with errors.
    values : tuple of Fraction
        Their weighted means, positive on the declared side [mol/mol].
    covariance : tuple of tuple of Fraction
        Of those means [(mol/mol)^2].
    """

    names: tuple[str, ...]
    values: tuple[Fraction, ...]
    covariance: Matrix

    def __len__(self) -> int:
        return len(self.names)

    def __iter__(self) -> Iterator[str]:
        return iter(self.names)

    def __contains__(self, name: object) -> bool:
        return name in self.names

    def __getitem__(self, name: str) -> Target:
        place = self.names.index(name)
        return Target(self.values[place], self.covariance[place][place])

    def of(self, name: str) -> Target | None:
        """Target of a coefficient, ``None`` if it has no value with an error."""
        return self[name] if name in self.names else None

    def items(self) -> Iterator[tuple[str, Target]]:
        """Name and target of each coefficient."""
        return ((name, self[name]) for name in self.names)

    def precision(self) -> Matrix:
        """Inverse of the covariance [(mol/mol)^-2]."""
        return inverse(self.covariance)


def covariance_of(measured: Sequence[Measurement], correlations: Sequence[Correlation]) -> Matrix:
    """Covariance of measured values.

    Parameters
    ----------
    measured : sequence of Measurement
        Values with errors.
    correlations : sequence of Correlation
        Correlations of the values under ``measured`` of a case; written decimals and the biomass
        coefficient that follows from growth rate and uptake are independent of all others.

    Returns
    -------
    tuple of tuple of Fraction
        In the order of ``measured`` [(mol/mol)^2].

    Notes
    -----
    The covariance of two values is their correlation times both standard deviations.
    """
    known = {frozenset((item.first, item.second)): item.value for item in correlations}
    zero = Fraction(0)

    def entry(one: Measurement, other: Measurement) -> Fraction:
        assert one.sd is not None
        assert other.sd is not None
        if one is other:
            return one.sd**2
        if not (one.is_direct and other.is_direct):
            return zero
        return known.get(frozenset((one.compound, other.compound)), zero) * one.sd * other.sd

    return tuple(tuple(entry(one, other) for other in measured) for one in measured)


def pool(measured: Sequence[Measurement], correlations: Sequence[Correlation] = ()) -> Pooled:
    """Best single value of each coefficient; coefficients with an exact value are left out.

    Parameters
    ----------
    measured : sequence of Measurement
        Measured values.
    correlations : sequence of Correlation
        Correlations of their errors.

    Returns
    -------
    Pooled
        Coefficients in order of appearance.

    Notes
    -----
    Generalised least squares (Aitken 1935): with the covariance V of the values m and the matrix J
    that says which value speaks of which coefficient, the covariance of the means is
    (J' V^-1 J)^-1 and the means are that times J' V^-1 m. Without correlations it is the mean
    weighted by 1/s.d.^2.
    """
    exact = {item.compound for item in measured if not item.sd}
    items = [item for item in measured if item.sd and item.compound not in exact]
    names = tuple(dict.fromkeys(item.compound for item in items))
    spread = covariance_of(items, correlations)
    if len(names) == len(items):
        return Pooled(names=names, values=tuple(item.value for item in items), covariance=spread)
    precision = inverse(spread)
    belongs = [[Fraction(item.compound == name) for item in items] for name in names]
    weighted = product(belongs, precision)
    covariance = inverse(product(weighted, tuple(zip(*belongs, strict=True))))
    means = product(covariance, product(weighted, [[item.value] for item in items]))
    return Pooled(names=names, values=tuple(row[0] for row in means), covariance=covariance)
