"""Rates and yields from the amounts at start and end, and what went in and out between.

All amounts carry their errors, so what they share - above all the substrate that every yield is
divided by - correlates the yields.
"""

from __future__ import annotations

from itertools import pairwise
from math import sqrt
from typing import TYPE_CHECKING

from yieldnet.foundation.findings import Severity
from yieldnet.model.network import BIOMASS
from yieldnet.rates.liquids import find_liquids
from yieldnet.rates.offgas import CARBON_DIOXIDE, gas_at
from yieldnet.rates.outcome import state_rates
from yieldnet.rates.result import Estimate
from yieldnet.rates.values import covariance, deviation, nominal, place_of, row_count

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.rates.liquids import Liquids
    from yieldnet.rates.offgas import GasRow
    from yieldnet.rates.result import StateRates
    from yieldnet.rates.values import Listed, Notes, PerhapsQuantity, Quantity, Values

__all__ = ["amount_rates", "filled", "log_mean"]

NEAR = 1e-4
"""Relative difference below which the logarithmic mean is taken as the plain one; the error of
that is a twelfth of its square, 1e-9 [-]."""


def log_mean(first: Quantity, last: Quantity) -> Quantity:
    """Mean of a quantity that grows exponentially from one value to the other.

    Parameters
    ----------
    first, last : float or value with errors
        Positive, in one unit.

    Returns
    -------
    float or value with errors
        (last - first) / ln(last / first), in the same unit.

    Examples
    --------
    >>> round(log_mean(1.0, 2.718281828459045), 6)
    1.718282
    """
    from uncertainties import umath  # type: ignore[import-untyped]

    if abs(nominal(last) / nominal(first) - 1) < NEAR:
        return (first + last) / 2
    return (last - first) / umath.log(last / first)


def filled(times: Sequence[float], levels: Sequence[PerhapsQuantity]) -> list[PerhapsQuantity]:
    """Levels with those between two measured ones put on a straight line; ends stay as they are.

    Examples
    --------
    >>> filled([0.0, 1.0, 2.0], [1.0, None, 3.0])
    [1.0, 2.0, 3.0]
    """
    known = [at for at, level in enumerate(levels) if level is not None]
    found = list(levels)
    for before, after in pairwise(known):
        for at in range(before + 1, after):
            share = (times[at] - times[before]) / (times[after] - times[before])
            found[at] = levels[before] * (1 - share) + levels[after] * share
    return found


def amount_rates(values: Values, items: Sequence[Listed], notes: Notes) -> StateRates | None:
    """Yields and mean rates between the first and the last row.

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
    Given off: n_i = c V at the end - c V at the start + what all samples between took (the first
    row's own included, the last row's not) - what was added + what left as gas. Mean specific
    rates divide by the integral of biomass over time, by logarithmic means between the rows;
    volumetric rates divide by the integral of the volume.
    """
    run = values.run
    rows = row_count(run)
    if rows < 2:
        notes.findings.add(
            "YN822",
            "start and end need two rows",
            run.span,
            left=f"rows: {rows}",
            right="needed: 2",
            hint="Give a row at the start and one at the end.",
        )
        return None
    liquids = find_liquids(values, notes)
    if notes.findings.refused:
        return None
    liquids.check(values, range(rows), notes)
    if notes.findings.refused:
        return None
    gas = [gas_at(values, row) for row in range(rows)] if run.gas else []
    if gas and run.gas:
        notes.assume("gas rates are straight between the rows")
    kept: list[Listed] = []
    amounts: list[Quantity] = []
    for at, item in enumerate(items):
        found = _given_off(values, item, liquids, gas, notes, is_basis=at == 0)
        if found is not None:
            kept.append(item)
            amounts.append(found)
    if notes.findings.refused:
        return None
    litre_hours = sum(
        (
            (liquids.volumes[row] - liquids.sampled[row] + liquids.volumes[row + 1]) / 2 * span
            for row, span in enumerate(_spans(run.times))
        ),
        start=0.0,
    )
    gram_hours = _biomass_integral(values, liquids, notes)
    volumetric = [amount / litre_hours for amount in amounts]
    specific: list[Quantity] = []
    growth: list[Quantity] = []
    if gram_hours is not None:
        specific = [amount / gram_hours for amount in amounts]
        formed = _balance(values, BIOMASS, _levels(values, BIOMASS, notes), liquids)
        growth = [formed / gram_hours]
    quantities = [*volumetric, *specific, *growth]
    matrix = covariance(quantities)
    import numpy as np

    vector = np.array([nominal(item) for item in quantities])
    size = len(kept)
    return state_rates(
        run,
        kept,
        label="",
        where=place_of(run, 0),
        volumetric=vector[:size],
        volumetric_covariance=matrix[:size, :size],
        specific=vector[size : 2 * size] if growth else None,
        specific_covariance=matrix[size : 2 * size, size : 2 * size] if growth else None,
        growth_rate=Estimate(value=float(vector[-1]), sd=sqrt(matrix[-1, -1])) if growth else None,
        notes=notes,
    )


def _spans(times: Sequence[float]) -> list[float]:
    return [after - before for before, after in pairwise(times)]


def _levels(values: Values, name: str, notes: Notes) -> list[PerhapsQuantity]:
    """Concentrations of all rows, gaps between measured rows filled [mol/L], [g/L]."""
    run = values.run
    measured = [values.broth(name, row) for row in range(row_count(run))]
    found = filled(run.times, measured)
    if any(a is None and b is not None for a, b in zip(measured, found, strict=True)):
        notes.assume(f"{name} is on a straight line between the rows where it was measured")
    return found


def _balance(
    values: Values, name: str, levels: Sequence[PerhapsQuantity], liquids: Liquids
) -> Quantity:
    """Amount formed in the broth; levels may be missing only where nothing was sampled."""
    last = len(levels) - 1
    held = levels[last] * liquids.volumes[last] - levels[0] * liquids.volumes[0]
    taken = sum(
        (
            level * sample
            for level, sample in zip(levels[:last], liquids.sampled[:last], strict=True)
        ),
        start=0.0,
    )
    return held + taken - _brought(values, name, liquids)


def _brought(values: Values, name: str, liquids: Liquids) -> Quantity:
    """Amount that feed and base brought [mol], [g]."""
    return sum(
        (
            step * values.content(item, name, row + 1)
            for item, steps in liquids.added
            for row, step in enumerate(steps)
        ),
        start=0.0,
    )


def _given_off(
    values: Values,
    item: Listed,
    liquids: Liquids,
    gas: Sequence[GasRow | None],
    notes: Notes,
    *,
    is_basis: bool,
) -> PerhapsQuantity:
    """Amount given off between start and end [mol]."""
    run = values.run
    total: Quantity = 0.0
    gone = ""
    if item.broth is not None:
        levels = _levels(values, item.name, notes)
        gone = "in the broth of the first and of the last row"
        if levels[0] is not None and levels[-1] is not None:
            gone = ""
            total = _balance(values, item.name, levels, liquids)
    else:
        total = -_brought(values, item.name, liquids)
    if item.name == BIOMASS:
        total = total / float(run.compound(BIOMASS).weight.molar_mass or 1)
    if item.in_gas and not gone:
        ends = bool(gas) and gas[0] is not None and gas[-1] is not None
        gone = "" if ends else "in the gas of the first and of the last row"
        if ends:
            total = total + _of_gas(values, item.name, liquids, gas)
    if gone:
        notes.findings.add(
            "YN820" if is_basis else "YN834",
            f"{item.name} was not measured {gone}",
            place_of(run, 0),
            hint="Measure the basis there." if is_basis else "It is left out.",
            severity=Severity.ERROR if is_basis else Severity.WARNING,
        )
        return None
    return total


def _of_gas(values: Values, name: str, liquids: Liquids, gas: Sequence[GasRow | None]) -> Quantity:
    """Amount that left as gas, and what stays of it in the broth as inorganic carbon [mol]."""
    times = values.run.times
    known = [(at, row) for at, row in enumerate(gas) if row is not None]
    total: Quantity = 0.0
    for (before, first), (after, second) in pairwise(known):
        hours = times[after] - times[before]
        total = total + (first.rates[name] + second.rates[name]) / 2 * hours
    carbon = [row.carbon_out if row else None for row in gas]
    if name == CARBON_DIOXIDE and carbon[0] is not None:
        levels = filled(times, carbon)
        last = len(levels) - 1
        total = total + levels[last] * liquids.volumes[last] - levels[0] * liquids.volumes[0]
        for level, sample in zip(levels[:last], liquids.sampled[:last], strict=True):
            total = total + level * sample
    return total


def _biomass_integral(values: Values, liquids: Liquids, notes: Notes) -> PerhapsQuantity:
    """Integral of the dry weight in the vessel over time [g h]; ``None`` if it is not known."""
    levels = _levels(values, BIOMASS, notes)
    if not levels or levels[0] is None or levels[-1] is None:
        if any(series.compound == BIOMASS for series in values.run.broth):
            notes.findings.add(
                "YN834",
                "biomass was not measured at start and end, so there are no specific rates",
                place_of(values.run, 0),
                hint="Measure it in the first and in the last row.",
                severity=Severity.WARNING,
            )
        return None
    total: Quantity = 0.0
    for row, hours in enumerate(_spans(values.run.times)):
        first = levels[row] * (liquids.volumes[row] - liquids.sampled[row])
        last = levels[row + 1] * liquids.volumes[row + 1]
        if nominal(first) > 0 and nominal(last) > 0:
            mean = log_mean(first, last)
            notes.assume("biomass grows exponentially between two rows (logarithmic mean)")
        else:
            mean = (first + last) / 2
            notes.assume("biomass is straight between rows where it is not above zero")
        total = total + mean * hours
    if not nominal(total) > deviation(total):
        notes.findings.add(
            "YN821",
            "the biomass of the run is not above its error",
            place_of(values.run, 0),
            left=f"integral {nominal(total):.4g} g h",
            right=f"s.d. {deviation(total):.2g} g h",
            hint="Specific rates divide by it: leave biomass out, or measure it better.",
        )
        return None
    return total
