"""Constant specific rates in a window of exponential growth, by weighted least squares.

All samples of all compounds in the window, and the gas, are fitted together with the model of
:mod:`yieldnet.rates.window_model`. The covariance is that of the stated errors alone; whether the
errors explain the scatter is asked of chi-square, and told.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import islice
from math import sqrt
from typing import TYPE_CHECKING, Any

from yieldnet.foundation.findings import Severity
from yieldnet.model.network import BIOMASS
from yieldnet.rates.constants import CONFIDENCE
from yieldnet.rates.fitted import fitted_series
from yieldnet.rates.growth_line import find_growth_line, shorter_growth_lines
from yieldnet.rates.liquids import find_liquids
from yieldnet.rates.outcome import state_rates
from yieldnet.rates.result import Estimate, Fit
from yieldnet.rates.straight_line import chance_beyond
from yieldnet.rates.values import Notes, place_of
from yieldnet.rates.window_gas import find_gas_data
from yieldnet.rates.window_model import BrothData, WindowModel, slopes

if TYPE_CHECKING:
    from collections.abc import Sequence

    import numpy as np
    from numpy.typing import NDArray

    from yieldnet.model.cultivation import Series
    from yieldnet.rates.growth_line import GrowthLine
    from yieldnet.rates.liquids import Liquids
    from yieldnet.rates.result import StateRates
    from yieldnet.rates.values import Listed, Values

    Floats = NDArray[np.float64]

__all__ = ["exponential_rates"]

LEAST_READINGS = 2
"""Fewest readings of a compound in the window: one cannot tell its level from its rate [-]."""
SINGULAR = 1e-9
"""Ratio of singular values, columns scaled to length 1, below which parameters cannot be told
apart: beyond it the covariance keeps fewer than half of the digits of a float [-]."""


MOST_FITS = 50
"""Most windows that are fitted to find a better one: a fraction of a second [-]."""
KEPT_SHARE = 2 / 3
"""Share of the samples that a window which was looked for must keep when it is shortened: where
stated errors are too small, only a few samples would ever agree, and that must show [-]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class _Fitted:
    """A window with its parameters and their covariance."""

    model: WindowModel
    point: Floats
    matrix: Floats
    chi_square: float
    kept: list[Listed]

    @property
    def p_value(self) -> float | None:
        """Chance of a larger chi-square; ``None`` without degrees of freedom [-]."""
        return chance_beyond(self.chi_square, self.model.degrees_of_freedom)

    @property
    def fails(self) -> bool:
        """Whether the stated errors do not explain the scatter, at 95 %."""
        return self.p_value is not None and self.p_value < 1 - CONFIDENCE


def exponential_rates(values: Values, items: Sequence[Listed], notes: Notes) -> StateRates | None:
    """Rates and yields of the window of exponential growth.

    Parameters
    ----------
    values : Values
        Values of a batch or a fed-batch.
    items : sequence of Listed
        Compounds with data, the basis first.
    notes : Notes
        Takes findings and assumptions.

    Returns
    -------
    StateRates or None
        ``None`` where a finding says why not.

    Notes
    -----
    Volumetric rates are what was turned over in the window over the integral of the volume.
    """
    run = values.run
    series = next((item for item in run.broth if item.compound == BIOMASS), None)
    if series is None:
        notes.findings.add(
            "YN821",
            "biomass is not measured, so there is no growth rate",
            run.span,
            hint="Give a column of biomass, or take the method 'start and end'.",
        )
        return None
    if any(name == BIOMASS for item in run.additions for name, _ in item.contents):
        notes.findings.add(
            "YN836",
            "biomass is in what is added",
            run.span,
            left="method exponential",
            right="biomass added",
            hint="Take the method 'start and end', which counts it.",
        )
    liquids = find_liquids(values, notes)
    if notes.findings.refused:
        return None
    line = find_growth_line(values, series, liquids, notes)
    if line is None:
        return None
    fitted = _fitted(values, items, series, liquids, line, notes)
    if fitted is None:
        return None
    better = _better_window(values, items, series, liquids, line) if fitted.fails else None
    if better is not None and run.window is None:
        shorter = better.rows
        if len(shorter) >= KEPT_SHARE * len(line.rows):
            notes.assume(
                f"the window was shortened from {run.times[line.rows[0]]:g} to"
                f" {run.times[line.rows[-1]]:g} h until all rates, not growth alone, are constant"
            )
            line = replace(better, tried=line.tried)
            again = _fitted(values, items, series, liquids, line, notes)
            assert again is not None, "a window that was fitted once can be fitted again"
            fitted = again
    model, point, kept = fitted.model, fitted.point, fitted.kept
    fit = Fit(
        window=(run.times[line.rows[0]], run.times[line.rows[-1]]),
        chosen=run.window is not None,
        tried=line.tried,
        chi_square=fitted.chi_square,
        degrees_of_freedom=model.degrees_of_freedom,
        p_value=fitted.p_value,
        series=fitted_series(model, point),
    )
    if fitted.fails:
        _tell_misfit(values, line, fit, better, notes)
    names = [item.name for item in kept]
    mass = float(run.compound(BIOMASS).weight.molar_mass or 1) if BIOMASS in names else 1.0
    found = model.outcomes(names, mass, point[None, :])[0]
    turned = slopes(lambda points: model.outcomes(names, mass, points), point)
    spread = turned @ fitted.matrix @ turned.T
    size = len(kept)
    notes.assume("specific rates are constant in the window")
    return state_rates(
        run,
        kept,
        label="",
        where=place_of(run, line.rows[0]),
        volumetric=found[size : 2 * size],
        volumetric_covariance=spread[size : 2 * size, size : 2 * size],
        specific=found[:size],
        specific_covariance=spread[:size, :size],
        growth_rate=Estimate(value=float(found[-1]), sd=sqrt(spread[-1, -1])),
        notes=notes,
        fit=fit,
    )


def _fitted(
    values: Values,
    items: Sequence[Listed],
    series: Series,
    liquids: Liquids,
    line: GrowthLine,
    notes: Notes,
) -> _Fitted | None:
    """Constant rates fitted to all readings of a window."""
    import numpy as np

    run = values.run
    liquids.check(values, line.rows, notes)
    broth, kept = _broth_data(values, items, line.rows, notes)
    biomass = _data(BIOMASS, series, line.rows)
    _check_errors(values, [biomass, *broth], notes)
    if notes.findings.refused:
        return None
    gas = find_gas_data(values, kept, line, liquids, notes)
    if gas is None:
        for item in kept:
            if item.in_gas:
                _leave_out(values, item, "was not measured in the gas of the window", notes)
        kept = [item for item in kept if not item.in_gas]
    if notes.findings.refused:
        return None
    model = WindowModel(values, line.rows, liquids, biomass, broth, gas)
    answer = _solved(model, model.start(line.growth_rate, line.biomass))
    if gas is not None:
        # What gas readings share is a factor of them. Weighed by the readings as they fell, low
        # ones would weigh more and pull the rates down; so weigh them as the fit says they are.
        fitted = model.gas_rates(model.path(answer.x[None, :]), answer.x[None, :])[0]
        moved = fitted - gas.values
        gas = find_gas_data(values, kept, line, liquids, notes, moved)
        model = WindowModel(values, line.rows, liquids, biomass, broth, gas)
        answer = _solved(model, answer.x)
    point: Floats = answer.x
    matrix = _covariance(np.asarray(answer.jac))
    if not answer.success or matrix is None or not np.isfinite(point).all():
        notes.findings.add(
            "YN838",
            "the readings of the window do not determine its rates",
            place_of(run, line.rows[0]),
            left=f"readings {model.observations}",
            right=f"parameters {model.first_score}",
            hint="Take a longer window, or leave out a compound that was measured once.",
        )
        return None
    if not point[1] > 0:
        notes.findings.add(
            "YN821",
            "the fit finds no biomass above zero in the window",
            place_of(run, line.rows[0]),
            left=f"at its start {point[1]:.3g} g",
            right=f"s.d. {sqrt(matrix[1, 1]):.2g} g",
            hint="Take a window in which biomass is well above its error.",
        )
        return None
    return _Fitted(
        model=model, point=point, matrix=matrix, chi_square=float(2 * answer.cost), kept=kept
    )


def _better_window(
    values: Values,
    items: Sequence[Listed],
    series: Series,
    liquids: Liquids,
    line: GrowthLine,
) -> GrowthLine | None:
    """Longest window inside another in which all rates are constant."""
    for other in islice(shorter_growth_lines(values, series, liquids, line), MOST_FITS):
        fitted = _fitted(values, items, series, liquids, other, Notes())
        if fitted is not None and not fitted.fails:
            return other
    return None


def _solved(model: WindowModel, start: Floats) -> Any:
    """Least squares from a start, with exact derivatives."""
    from scipy.optimize import least_squares  # type: ignore[import-untyped]

    return least_squares(
        lambda point: model.residuals(point[None, :])[0],
        start,
        jac=lambda point: slopes(model.residuals, point),
        method="lm",
        x_scale="jac",
        ftol=1e-12,
        xtol=1e-12,
    )


def _covariance(jacobian: Floats) -> Floats | None:
    """Inverse of J^T J; ``None`` where parameters cannot be told apart."""
    import numpy as np

    lengths = np.linalg.norm(jacobian, axis=0)
    if not (np.isfinite(lengths).all() and (lengths > 0).all()):
        return None
    _, sizes, turned = np.linalg.svd(jacobian / lengths, full_matrices=False)
    if sizes[-1] <= SINGULAR * sizes[0]:
        return None
    half = turned.T / sizes / lengths[:, None]
    found: Floats = half @ half.T
    return found


def _data(name: str, series: Series, rows: range) -> BrothData:
    """Readings of a column in the window."""
    import numpy as np

    known = [
        (at, reading)
        for at, row in enumerate(rows)
        if (reading := series.readings[row]) is not None
    ]
    return BrothData(
        name=name,
        at=np.array([at for at, _ in known], dtype=np.intp),
        values=np.array([reading.value for _, reading in known]),
        sds=np.array([reading.sd for _, reading in known]),
    )


def _broth_data(
    values: Values, items: Sequence[Listed], rows: range, notes: Notes
) -> tuple[list[BrothData], list[Listed]]:
    """Readings of the compounds in the broth, and the compounds that stay."""
    broth: list[BrothData] = []
    kept: list[Listed] = []
    for item in items:
        if item.name == BIOMASS or item.broth is None:
            kept.append(item)
            continue
        data = _data(item.name, item.broth, rows)
        if len(data.at) >= LEAST_READINGS:
            broth.append(data)
            kept.append(item)
        else:
            _leave_out(values, item, f"was measured {len(data.at)} times in the window", notes)
    return broth, kept


def _leave_out(values: Values, item: Listed, why: str, notes: Notes) -> None:
    is_basis = item.name == values.run.basis.name
    notes.findings.add(
        "YN820" if is_basis else "YN834",
        f"{item.name} {why}",
        item.broth.span if item.broth else values.run.span,
        hint="Yields are counted per mol of it: take a window with more readings."
        if is_basis
        else "It is left out; take a window with more readings.",
        severity=Severity.ERROR if is_basis else Severity.WARNING,
    )


def _check_errors(values: Values, data: Sequence[BrothData], notes: Notes) -> None:
    """A reading without an error would outweigh all others."""
    for item in data:
        if not (item.sds > 0).all():
            series = next(one for one in values.run.broth if one.compound == item.name)
            notes.findings.add(
                "YN833",
                f"{item.name} has a reading without an error, which no fit can weigh",
                series.span or values.run.span,
                left="s.d. 0",
                right="above 0",
                hint="Give the column its standard deviation.",
            )


def _tell_misfit(
    values: Values,
    line: GrowthLine,
    fit: Fit,
    better: GrowthLine | None,
    notes: Notes,
) -> None:
    way_out = "Take a shorter window, or the method 'start and end'; look at the residuals."
    if better is not None:
        start, *_, end = (values.run.times[row] for row in better.rows)
        way_out = (
            f"From {start:g} to {end:g} h they are constant: name that window, or take"
            " the method 'start and end'."
        )
    notes.findings.add(
        "YN824",
        "rates are not constant in the window, or the errors are larger than stated",
        place_of(values.run, line.rows[0]),
        left=f"chi-square {fit.chi_square:.4g}",
        right=f"{fit.degrees_of_freedom} degrees of freedom, p = {fit.p_value:.2g}",
        hint=way_out,
        severity=Severity.WARNING,
    )
