"""Rates of a chemostat from the general balance at steady state.

What leaves with broth and gas, less what comes with feed, base and gas, is what the cells give off.
Replicate rows of a state are averaged; where they scatter more than their errors allow, the
standard deviations are enlarged by the ratio (Birge), which is told.

References
----------
Birge, R. T. (1932) The calculation of errors by the method of least squares, Physical Review
40:207-227.
"""

from __future__ import annotations

from math import inf, sqrt
from typing import TYPE_CHECKING

from yieldnet.foundation.findings import Severity
from yieldnet.model.case import BAND
from yieldnet.model.network import BIOMASS
from yieldnet.rates.constants import CONFIDENCE
from yieldnet.rates.offgas import CARBON_DIOXIDE, gas_at
from yieldnet.rates.outcome import state_rates
from yieldnet.rates.result import Estimate, Scatter
from yieldnet.rates.straight_line import chance_beyond
from yieldnet.rates.values import covariance, deviation, nominal, place_of, row_count

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.foundation.findings import SourceSpan
    from yieldnet.model.cultivation import Additions
    from yieldnet.rates.result import StateRates
    from yieldnet.rates.values import Listed, Notes, PerhapsQuantity, Quantity, Values

__all__ = ["chemostat_rates", "steady_states"]


def steady_states(values: Values, notes: Notes) -> dict[str, list[int]]:
    """Rows of each steady state, in the order of the sheet; an unnamed row is a state of its own.

    Parameters
    ----------
    values : Values
        Values of a chemostat.
    notes : Notes
        Takes assumptions.

    Returns
    -------
    dict of str to list of int
        Rows by the label of the state.
    """
    names = values.run.states or ("",) * row_count(values.run)
    found: dict[str, list[int]] = {}
    for row, name in enumerate(names):
        if not name:
            notes.assume("a row that names no steady state is one of its own, not a replicate")
        found.setdefault(name or f"row {row + 1}", []).append(row)
    return found


def chemostat_rates(values: Values, items: Sequence[Listed], notes: Notes) -> list[StateRates]:
    """Rates and yields of each steady state.

    Parameters
    ----------
    values : Values
        Values of a chemostat.
    items : sequence of Listed
        Compounds with data, the basis first.
    notes : Notes
        Takes findings and assumptions.

    Returns
    -------
    list of StateRates
        In the order of the sheet; states that cannot be found have a finding instead.

    Notes
    -----
    Per broth volume r_i = D c_i - f c_feed,i - b c_base,i + gas_i/V, with the outflow D = f + b
    and all in 1/h; q_i = r_i/X. Growth is the same balance of biomass: mu = D - f X_feed/X.
    """
    run = values.run
    notes.assume("the broth volume is constant; nothing leaves it but outflow and gas")
    for item in items:
        if item.broth is not None and run.additions:
            notes.assume("what feed or base does not list is not in it")
    found = []
    for label, rows in steady_states(values, notes).items():
        state = _state(values, items, label, rows, notes)
        if state is not None:
            found.append(state)
    return found


def _addition(values: Values, name: str) -> Additions | None:
    return next((item for item in values.run.additions if item.name == name), None)


def _per_volume(values: Values, item: Additions | None, row: int) -> PerhapsQuantity:
    """Rate of an addition over the broth volume [1/h]; ``None`` where either is not known."""
    if item is None:
        return None
    rate, volume = values.cell(item.rate, row), values.volume_at(row)
    return None if rate is None or volume is None else rate / volume


def _flows(values: Values, row: int, notes: Notes) -> tuple[Quantity, Quantity, Quantity] | None:
    """Outflow, feed and base per broth volume [1/h]."""
    feed, base = _addition(values, "feed"), _addition(values, "base")
    feed_rate = _per_volume(values, feed, row)
    base_rate = _per_volume(values, base, row)
    if base is not None and base_rate is None:
        notes.findings.add(
            "YN831",
            "base is added, and its rate or the broth volume is missing",
            place_of(values.run, row),
            hint="Give 'base rate' and 'volume', or leave the base out.",
        )
        return None
    given = values.cell(values.run.dilution_rate, row)
    if given is None and feed_rate is None:
        notes.findings.add(
            "YN831",
            "neither a dilution rate nor feed rate and volume are given",
            place_of(values.run, row),
            hint="Give the dilution rate of the row.",
        )
        return None
    added = 0.0 if base_rate is None else base_rate
    if given is None:
        return feed_rate + added, feed_rate, added
    if feed_rate is not None:
        gap = given - feed_rate - added
        if abs(nominal(gap)) > BAND * deviation(gap) + 1e-9 * nominal(given):
            notes.findings.add(
                "YN835",
                "dilution rate and feed rate over volume do not agree",
                place_of(values.run, row),
                left=f"dilution rate {nominal(given):.4g} 1/h",
                right=f"feed and base over volume {nominal(feed_rate + added):.4g} 1/h",
                hint="Check volume and rates; the dilution rate was used.",
                severity=Severity.WARNING,
            )
    return given, given - added, added


def _row(
    values: Values, items: Sequence[Listed], row: int, notes: Notes
) -> tuple[list[PerhapsQuantity], PerhapsQuantity, PerhapsQuantity] | None:
    """Volumetric rates given off [mol/L/h], growth rate [1/h] and dry weight [g/L] of one row."""
    flows = _flows(values, row, notes)
    if flows is None:
        return None
    outflow, feed_flow, base_flow = flows
    sources = [(_addition(values, "feed"), feed_flow), (_addition(values, "base"), base_flow)]

    def balance(name: str, level: Quantity) -> Quantity:
        brought = sum(
            (flow * values.content(item, name, row) for item, flow in sources if item), start=0.0
        )
        return outflow * level - brought

    gas, volume = gas_at(values, row), values.volume_at(row)
    found: list[PerhapsQuantity] = []
    for item in items:
        level = values.broth(item.name, row) if item.broth else 0.0
        if level is None or (item.in_gas and (gas is None or volume is None)):
            found.append(None)
            continue
        rate = balance(item.name, level)
        if item.name == BIOMASS:
            mass = values.run.compound(BIOMASS).weight.molar_mass
            rate = rate / float(mass or 1)
        if item.in_gas and gas is not None:
            rate = rate + gas.rates[item.name] / volume
            if item.name == CARBON_DIOXIDE and gas.carbon_out is not None:
                rate = rate + outflow * gas.carbon_out
        found.append(rate)
    biomass = values.broth(BIOMASS, row)
    growth = None if biomass is None else balance(BIOMASS, biomass) / biomass
    return found, growth, biomass


def _state(
    values: Values, items: Sequence[Listed], label: str, rows: list[int], notes: Notes
) -> StateRates | None:
    import numpy as np

    where = place_of(values.run, rows[0])
    balances = [_row(values, items, row, notes) for row in rows]
    usable = [item for item in balances if item is not None]
    if len(usable) < len(balances):
        return None
    kept: list[Listed] = []
    volumetric: list[list[Quantity]] = []
    specific: list[list[Quantity]] = []
    for at, item in enumerate(items):
        present = [(rates[at], mass) for rates, _, mass in usable if rates[at] is not None]
        if not present:
            basis = at == 0
            notes.findings.add(
                "YN820" if basis else "YN834",
                f"{item.name} was not measured in state {label!r}",
                where,
                hint="Measure the basis." if basis else "It is left out of this state.",
                severity=Severity.ERROR if basis else Severity.WARNING,
            )
            if basis:
                return None
            continue
        kept.append(item)
        volumetric.append([rate for rate, _ in present])
        specific.append([rate / mass for rate, mass in present if mass is not None])
    growth = [rate for _, rate, _ in usable if rate is not None]
    with_mass = all(specific) and bool(growth)
    named = [(f"volumetric rate of {i.name}", row) for i, row in zip(kept, volumetric, strict=True)]
    if with_mass:
        named += [
            (f"specific rate of {i.name}", row) for i, row in zip(kept, specific, strict=True)
        ]
        named.append(("growth rate", growth))
    means = [sum(row[1:], start=row[0]) / len(row) for _, row in named]
    scatter = [_scatter(name, row, where, notes) for name, row in named]
    ratios = np.array([item.ratio if item else 1.0 for item in scatter])
    matrix = np.outer(ratios, ratios) * covariance(means)
    vector = np.array([nominal(item) for item in means])
    told = tuple(item for item in scatter if item is not None)
    _tell_scatter(label, told, where, notes)
    size = len(kept)
    return state_rates(
        values.run,
        kept,
        label=label,
        where=where,
        volumetric=vector[:size],
        volumetric_covariance=matrix[:size, :size],
        specific=vector[size : 2 * size] if with_mass else None,
        specific_covariance=matrix[size : 2 * size, size : 2 * size] if with_mass else None,
        growth_rate=Estimate(value=float(vector[-1]), sd=sqrt(matrix[-1, -1]))
        if with_mass
        else None,
        notes=notes,
        scatter=told,
    )


def _scatter(
    quantity: str, rows: list[Quantity], where: SourceSpan | None, notes: Notes
) -> Scatter | None:
    """Chi-square of the differences between replicates; what they share cancels in it."""
    import numpy as np

    if len(rows) < 2:
        return None
    stated = covariance(rows)
    levels = np.array([nominal(row) for row in rows])
    gaps = levels[1:] - levels[0]
    turn = np.hstack([-np.ones((len(gaps), 1)), np.eye(len(gaps))])
    spread = turn @ stated @ turn.T
    scale = max(float(np.abs(levels).max()) ** 2, 1e-300)
    freedom = len(gaps)
    if np.linalg.eigvalsh(spread)[0] > 1e-20 * scale:
        chi_square = float(gaps @ np.linalg.solve(spread, gaps))
        ratio = sqrt(chi_square / freedom)
    elif float(gaps @ gaps) <= 1e-20 * scale:
        chi_square, ratio = 0.0, 1.0
    else:
        # The rows share all their errors, and differ: only the scatter itself is left to go by.
        chi_square = inf
        of_mean = sqrt(float(np.ones(len(rows)) @ stated @ np.ones(len(rows)))) / len(rows)
        from_scatter = float(levels.std(ddof=1)) / sqrt(len(rows))
        is_exact = of_mean**2 <= 1e-20 * scale
        if is_exact:
            notes.findings.add(
                "YN833",
                f"{quantity}: replicates differ, and their values are declared exact",
                where,
                left=f"lowest {levels.min():.4g}",
                right=f"highest {levels.max():.4g}",
                hint="Give the readings their standard deviations.",
            )
        ratio = 1.0 if is_exact else from_scatter / of_mean
    chance = chance_beyond(chi_square, freedom)
    p_value = 1.0 if chance is None else chance
    return Scatter(
        quantity=quantity,
        replicates=len(rows),
        chi_square=chi_square,
        degrees_of_freedom=freedom,
        p_value=p_value,
        ratio=max(ratio, 1.0) if p_value < 1 - CONFIDENCE else 1.0,
    )


def _tell_scatter(
    label: str, scatter: tuple[Scatter, ...], where: SourceSpan | None, notes: Notes
) -> None:
    beyond = [item for item in scatter if item.p_value < 1 - CONFIDENCE]
    if not beyond:
        return
    worst = min(beyond, key=lambda item: (item.p_value, -item.ratio))
    notes.findings.add(
        "YN826",
        f"replicates of state {label!r} scatter more than their errors: "
        + ", ".join(item.quantity for item in beyond),
        where,
        left=f"{worst.quantity}: chi-square {worst.chi_square:.3g}",
        right=f"{worst.degrees_of_freedom} degrees of freedom, p = {worst.p_value:.2g}",
        hint="Their standard deviations were enlarged by up to a factor of"
        f" {max(item.ratio for item in beyond):.3g}; check the errors and the steady state.",
        severity=Severity.WARNING,
    )
