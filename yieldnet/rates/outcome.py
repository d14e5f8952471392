"""From rates with a covariance matrix to the yields that follow, and to what is told of them."""

from __future__ import annotations

from math import sqrt
from typing import TYPE_CHECKING

from yieldnet.foundation.findings import Severity
from yieldnet.model.case import BAND
from yieldnet.model.network import Direction
from yieldnet.rates.offgas import CARBON_DIOXIDE, OXYGEN
from yieldnet.rates.result import Estimate, StateRates
from yieldnet.rates.values import own_side

if TYPE_CHECKING:
    from collections.abc import Sequence

    import numpy as np
    from numpy.typing import NDArray

    from yieldnet.foundation.findings import SourceSpan
    from yieldnet.model.cultivation import Cultivation
    from yieldnet.rates.result import Fit, Matrix, Scatter
    from yieldnet.rates.values import Listed, Notes

__all__ = ["as_matrix", "quotient", "state_rates"]


def as_matrix(array: NDArray[np.float64]) -> Matrix:
    """Rows of a matrix as tuples."""
    return tuple(tuple(float(value) for value in row) for row in array)


def quotient(
    rates: NDArray[np.float64], covariance: NDArray[np.float64], over: int, under: int
) -> Estimate:
    """Ratio of two rates, their correlation counted.

    Parameters
    ----------
    rates : ndarray
        Rates in one unit.
    covariance : ndarray
        Their covariance.
    over, under : int
        Which is divided by which [-].

    Returns
    -------
    Estimate
        Ratio with its standard deviation, to first order [-].
    """
    value = float(rates[over] / rates[under])
    slopes = [(over, 1 / rates[under]), (under, -value / rates[under])]
    variance = sum(a * b * covariance[i][j] for i, a in slopes for j, b in slopes)
    # Rounding may leave a variance of nothing just below zero.
    return Estimate(value=value, sd=sqrt(max(float(variance), 0.0)))


def state_rates(
    run: Cultivation,
    items: Sequence[Listed],
    *,
    label: str,
    where: SourceSpan | None,
    volumetric: NDArray[np.float64],
    volumetric_covariance: NDArray[np.float64],
    specific: NDArray[np.float64] | None,
    specific_covariance: NDArray[np.float64] | None,
    growth_rate: Estimate | None,
    notes: Notes,
    fit: Fit | None = None,
    scatter: tuple[Scatter, ...] = (),
) -> StateRates | None:
    """Rates on their declared sides, and yields, from rates given off.

    Parameters
    ----------
    run : Cultivation
        The run.
    items : sequence of Listed
        Compounds, the basis first.
    label : str
        Name of the state.
    where : SourceSpan or None
        Place for findings.
    volumetric, volumetric_covariance : ndarray
        Given off positive, with covariance [mol/L/h].
    specific, specific_covariance : ndarray or None
        The same per dry weight [mol/g/h].
    growth_rate : Estimate or None
        Specific growth rate [1/h].
    notes : Notes
        Takes findings.
    fit : Fit or None
        What belongs to the state.
    scatter : tuple of Scatter
        What belongs to the state.

    Returns
    -------
    StateRates or None
        ``None`` where the basis is not consumed, so that no yield exists.

    Notes
    -----
    Y_i = r_i / r_basis; its covariance is J C J^T with the derivatives 1/r_basis and
    -Y_i/r_basis, so the error of the common basis correlates all yields.
    """
    import numpy as np

    signs = own_side(items)
    rates = signs * volumetric
    spread = np.outer(signs, signs) * volumetric_covariance
    sds = np.sqrt(np.diag(spread))
    of_state = f" in state {label!r}" if label else ""
    if not rates[0] > 0:
        notes.findings.add(
            "YN832",
            f"{items[0].name} is not consumed{of_state}",
            where,
            left=f"consumption {rates[0]:.4g} mol/L/h",
            right=f"s.d. {sds[0]:.2g} mol/L/h",
            hint="Yields are counted per mol of it: check the basis and its data.",
        )
        return None
    if rates[0] <= BAND * sds[0]:
        notes.findings.add(
            "YN832",
            f"the consumption of {items[0].name} is lost in its error{of_state}",
            where,
            left=f"consumption {rates[0]:.4g} mol/L/h",
            right=f"s.d. {sds[0]:.2g} mol/L/h",
            hint="Yields mean little here: take a longer window or a better analysis.",
            severity=Severity.WARNING,
        )
    for item, rate, sd in zip(items[1:], rates[1:], sds[1:], strict=True):
        if item.side is not Direction.EITHER and rate < -BAND * sd - 1e-12 * rates[0]:
            other = "produced" if item.side is Direction.CONSUMED else "consumed"
            notes.findings.add(
                "YN825",
                f"{item.name} is {other}{of_state}, against the equation",
                where,
                left=f"declared {item.side}",
                right=f"{other} at {-rate:.4g} ± {sd:.2g} mol/L/h",
                hint="Check its data, or put it on the other side or under 'either side'.",
                severity=Severity.WARNING,
            )
    yields = rates[1:] / rates[0]
    slopes = np.hstack([-yields[:, None] / rates[0], np.eye(len(yields)) / rates[0]])
    places = {item.name: at for at, item in enumerate(items)}
    respiratory = None
    if CARBON_DIOXIDE in places and OXYGEN in places:
        gas, air = places[CARBON_DIOXIDE], places[OXYGEN]
        if -volumetric[air] > BAND * sds[air]:
            plain = quotient(volumetric, volumetric_covariance, gas, air)
            respiratory = Estimate(value=-plain.value, sd=plain.sd)
    return StateRates(
        label=label,
        growth_rate=growth_rate,
        compounds=tuple(item.name for item in items),
        weights=tuple(run.compound(item.name).weight for item in items),
        specific_rates=None if specific is None else tuple(map(float, signs * specific)),
        specific_covariance=None
        if specific_covariance is None
        else as_matrix(np.outer(signs, signs) * specific_covariance),
        volumetric_rates=tuple(map(float, rates)),
        volumetric_covariance=as_matrix(spread),
        yields=tuple(map(float, yields)),
        yield_covariance=as_matrix(slopes @ spread @ slopes.T),
        respiratory_quotient=respiratory,
        fit=fit,
        scatter=scatter,
    )
