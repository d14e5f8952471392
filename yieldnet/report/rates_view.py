"""The view of rates: yields, specific and volumetric rates, the fit and the block for a case."""

from __future__ import annotations

from math import sqrt
from typing import TYPE_CHECKING, Any

from yieldnet.foundation.units import UnitError
from yieldnet.model.network import Direction
from yieldnet.report.figures import figure, p_words, probability, signed, with_error
from yieldnet.report.json_form import FORMAT, findings_form
from yieldnet.report.table import Table

if TYPE_CHECKING:
    from collections.abc import Iterable

    from yieldnet.foundation.findings import Finding
    from yieldnet.foundation.units import Weight
    from yieldnet.rates.result import Estimate, Fit, RateResult, StateRates

__all__ = [
    "fit_words",
    "rates_form",
    "rates_headline",
    "rates_records",
    "rates_tables",
    "refused_rates_form",
    "state_title",
]

_UNITS = ("mol", "g", "C-mol")
_WINDOWS = 6
"""Windows that are shown; JSON has all [-]."""


def _per_mol(weight: Weight, unit: str) -> float | None:
    """Amount of ``unit`` in one mol; ``None`` where the unit means nothing."""
    try:
        return float(1 / weight.mol_per(unit))
    except UnitError:
        return None


def state_title(result: RateResult, state: StateRates) -> str:
    """Heading of one state; empty where there is only one and it has no name."""
    return f"Steady state {state.label}" if state.label else ""


def rates_headline(result: RateResult, state: StateRates) -> str:
    """Growth rate, uptake of the basis and respiratory quotient in one line.

    Parameters
    ----------
    result : RateResult
        Rates of the run.
    state : StateRates
        One of its states.

    Returns
    -------
    str
        The line.
    """
    parts = []
    if state.growth_rate is not None:
        parts.append(f"growth rate {with_error(state.growth_rate.value, state.growth_rate.sd)} 1/h")
        uptake = state.specific_rate(state.basis)
        parts.append(
            f"{state.basis} uptake {with_error(1000 * uptake.value, 1000 * uptake.sd)} mmol/g/h"
        )
    if state.respiratory_quotient is not None:
        quotient = state.respiratory_quotient
        parts.append(f"RQ {with_error(quotient.value, quotient.sd)} mol/mol")
    return "; ".join(parts) or "biomass was not measured: volumetric rates and yields only"


def rates_tables(result: RateResult, state: StateRates) -> tuple[Table, ...]:
    """Tables of one state: yields, specific rates, volumetric rates, fit, replicates.

    Parameters
    ----------
    result : RateResult
        Rates of the run.
    state : StateRates
        One of its states.

    Returns
    -------
    tuple of Table
        Those that have rows.
    """
    sides = {item.name: item.side for item in result.run.coefficients}
    words = {Direction.CONSUMED: "taken up", Direction.PRODUCED: "given off"}
    tables = [_yields(state, sides, words)]
    if state.specific_rates is not None and state.specific_covariance is not None:
        tables.append(
            _rates("Specific rates", "/g/h", state, state.specific_rates, state.specific_covariance)
        )
    tables.append(
        _rates(
            "Volumetric rates", "/L/h", state, state.volumetric_rates, state.volumetric_covariance
        )
    )
    if state.fit is not None:
        tables += [_fit(state.fit), _windows(state.fit)]
    enlarged = tuple(item for item in state.scatter if item.ratio > 1)
    tables.append(
        Table(
            title="Replicates that scatter more than their stated errors",
            columns=("", "rows", "chi-square", "p", "s.d. enlarged by"),
            rows=tuple(
                (
                    item.quantity,
                    str(item.replicates),
                    figure(item.chi_square),
                    probability(item.p_value),
                    figure(item.ratio),
                )
                for item in enlarged
            ),
        )
    )
    return tuple(table for table in tables if table.rows)


def _yields(state: StateRates, sides: dict[str, Direction], words: dict[Direction, str]) -> Table:
    rows = []
    for name in state.products:
        cells = []
        for unit, find in (
            ("mol", state.yield_of),
            ("g", state.yield_in_grams),
            ("C-mol", state.yield_in_carbon),
        ):
            try:
                found = find(name)
            except UnitError:
                cells.append(f"no {unit}")
                continue
            cells.append(with_error(found.value, found.sd))
        side = words.get(sides[name], "given off is +")
        rows.append((name, side, *cells))
    return Table(
        title=f"Yields on {state.basis}, with one standard deviation",
        columns=("", "", *(f"{unit}/{unit}" for unit in _UNITS)),
        rows=tuple(rows),
    )


def _rates(
    title: str,
    unit: str,
    state: StateRates,
    values: tuple[float, ...],
    covariance: tuple[tuple[float, ...], ...],
) -> Table:
    rows = []
    for k, name in enumerate(state.compounds):
        sd = sqrt(covariance[k][k])
        cells = []
        # Millimoles and grams: numbers near 1 in usual cultivations.
        for amount, scale in (("mol", 1000.0), ("g", 1.0), ("C-mol", 1000.0)):
            factor = _per_mol(state.weights[k], amount)
            if factor is None:
                cells.append(f"no {amount}")
            else:
                cells.append(with_error(values[k] * factor * scale, sd * factor * scale))
        rows.append((name, *cells))
    return Table(
        title=f"{title}, each on its side of the equation",
        columns=("", f"mmol{unit}", f"g{unit}", f"C-mmol{unit}"),
        rows=tuple(rows),
    )


def fit_words(fit: Fit) -> str:
    """Goodness of a fit in words.

    Parameters
    ----------
    fit : Fit
        The fit.

    Returns
    -------
    str
        ``chi-square 12.1 with 10 degrees of freedom, p = 0.28``.
    """
    if fit.p_value is None:
        return "as many parameters as observations: the fit cannot be judged"
    plural = "s" * (fit.degrees_of_freedom != 1)
    return (
        f"chi-square {figure(fit.chi_square)} with {fit.degrees_of_freedom} degree{plural} of"
        f" freedom, {p_words(fit.p_value)}"
    )


def _fit(fit: Fit) -> Table:
    start, end = fit.window
    how = "chosen" if fit.chosen else "found"
    rows = []
    for item in fit.series:
        worst = max(item.residuals, key=abs)
        squares = sum(residual**2 for residual in item.residuals)
        rows.append(
            (
                f"{item.compound} in the {item.place}",
                str(len(item.times)),
                figure(sqrt(squares / len(item.residuals))),
                signed(worst),
            )
        )
    return Table(
        title=f"Fit of constant rates from {figure(start)} to {figure(end)} h ({how} window)",
        columns=("", "samples", "r.m.s. residual, s.d.", "largest, s.d."),
        rows=tuple(rows),
        note=f"All together: {fit_words(fit)}.",
    )


def _windows(fit: Fit) -> Table:
    # Up to the first that passes; shorter ones than that are tried for the whole fit only.
    taken = next((k for k, item in enumerate(fit.tried) if item.passes), len(fit.tried) - 1)
    shown = fit.tried[max(0, taken - _WINDOWS + 1) : taken + 1]
    more = len(fit.tried) - len(shown)
    return Table(
        title="Windows tried: is ln(biomass) straight over time, and does it grow?",
        columns=("from, h", "to, h", "samples", "slope, 1/h", "p", "verdict"),
        rows=tuple(
            (
                figure(item.start),
                figure(item.end),
                str(item.samples),
                with_error(item.growth_rate.value, item.growth_rate.sd),
                probability(item.p_value),
                "passes" if item.passes else "fails",
            )
            for item in shown
        ),
        note=f"{more} more were tried." if more > 0 else "",
    )


def refused_rates_form(findings: Iterable[Finding]) -> dict[str, Any]:
    """Form of a run that was refused: all keys, no numbers."""
    return {
        "format": FORMAT,
        "run": None,
        "kind": None,
        "basis": None,
        "status": "refused",
        "states": [],
        "findings": findings_form(findings),
        "assumptions": [],
    }


def _estimate(value: Estimate | None) -> dict[str, float] | None:
    return None if value is None else {"value": value.value, "sd": value.sd}


def rates_form(result: RateResult) -> dict[str, Any]:
    """Form of rates: yields in mol/mol, specific rates in mol/g/h, volumetric in mol/L/h.

    Parameters
    ----------
    result : RateResult
        Rates of the run.

    Returns
    -------
    dict
        Keys of ``format: 1``.
    """
    form = refused_rates_form(result.findings)
    form.update(
        run=result.run.title,
        kind=str(result.run.kind),
        basis=result.run.basis.name,
        status="found",
        states=[_state_form(state) for state in result.states],
        assumptions=[
            {
                "text": item.text,
                "value": None if item.value is None else float(item.value),
                "unit": item.unit or None,
                "source": item.source or None,
            }
            for item in result.assumptions
        ],
    )
    return form


def _state_form(state: StateRates) -> dict[str, Any]:
    def matrix(rows: tuple[tuple[float, ...], ...] | None) -> list[list[float]] | None:
        return None if rows is None else [list(row) for row in rows]

    fit = state.fit
    return {
        "state": state.label or None,
        "growth_rate": _estimate(state.growth_rate),
        "respiratory_quotient": _estimate(state.respiratory_quotient),
        "compounds": list(state.compounds),
        "specific_rates": None if state.specific_rates is None else list(state.specific_rates),
        "specific_covariance": matrix(state.specific_covariance),
        "volumetric_rates": list(state.volumetric_rates),
        "volumetric_covariance": matrix(state.volumetric_covariance),
        "yields": dict(zip(state.products, state.yields, strict=True)),
        "yield_covariance": matrix(state.yield_covariance),
        "fit": None
        if fit is None
        else {
            "window": list(fit.window),
            "chosen": fit.chosen,
            "chi_square": fit.chi_square,
            "degrees": fit.degrees_of_freedom,
            "p_value": fit.p_value,
            "tried": [
                {
                    "start": item.start,
                    "end": item.end,
                    "samples": item.samples,
                    "growth_rate": _estimate(item.growth_rate),
                    "p_value": item.p_value,
                    "passes": item.passes,
                }
                for item in fit.tried
            ],
        },
        "scatter": [
            {
                "quantity": item.quantity,
                "replicates": item.replicates,
                "chi_square": item.chi_square,
                "p_value": item.p_value,
                "ratio": item.ratio,
            }
            for item in state.scatter
        ],
    }


def rates_records(result: RateResult) -> tuple[tuple[str, ...], list[tuple[str, ...]]]:
    """Header and rows of the CSV: one row a state and compound."""
    header = (
        "state",
        "compound",
        "yield mol/mol",
        "s.d.",
        "yield g/g",
        "s.d. g/g",
        "specific rate mol/g/h",
        "s.d. mol/g/h",
        "volumetric rate mol/L/h",
        "s.d. mol/L/h",
    )
    rows: list[tuple[str, ...]] = []
    for state in result.states:
        for name in state.compounds:
            cells: list[float | None] = [1.0, 0.0, 1.0, 0.0]
            if name != state.basis:
                plain, grams = state.yield_of(name), state.yield_in_grams(name)
                cells = [plain.value, plain.sd, grams.value, grams.sd]
            specific = None if state.specific_rates is None else state.specific_rate(name)
            cells += [None, None] if specific is None else [specific.value, specific.sd]
            volumetric = state.volumetric_rate(name)
            cells += [volumetric.value, volumetric.sd]
            texts = ("" if cell is None else repr(cell) for cell in cells)
            rows.append((state.label, name, *texts))
    return header, rows
