"""What was given off as gas in a window, as observations with the covariance of all its readings.

Readings of one row share its inert gas and its flow; all rows may share the entering gas and a
meter. So the rates are turned into independent ones by the Cholesky factor of their covariance.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.rates.offgas import CARBON_DIOXIDE, gas_at, outlet_of
from yieldnet.rates.values import covariance, nominal
from yieldnet.rates.window_model import GasData

if TYPE_CHECKING:
    from collections.abc import Sequence

    import numpy as np
    from numpy.typing import NDArray

    from yieldnet.rates.growth_line import GrowthLine
    from yieldnet.rates.liquids import Liquids
    from yieldnet.rates.offgas import GasRow
    from yieldnet.rates.values import Listed, Notes, Quantity, Values

    Floats = NDArray[np.float64]

__all__ = ["find_gas_data"]

SINGULAR = 1e-9
"""Least eigenvalue of a correlation matrix that is inverted: below it half of the digits of a float
are lost [-]."""


def find_gas_data(
    values: Values,
    items: Sequence[Listed],
    line: GrowthLine,
    liquids: Liquids,
    notes: Notes,
    moved: Floats | None = None,
) -> GasData | None:
    """Gas rates of a window.

    Parameters
    ----------
    values : Values
        Values of the run.
    items : sequence of Listed
        Compounds.
    line : GrowthLine
        Window; the weight of stored inorganic carbon is taken at its growth rate.
    liquids : Liquids
        Volumes.
    notes : Notes
        Takes findings and assumptions.
    moved : ndarray or None
        By how much each rate differs from its reading for the errors to be taken there [mol/h].

    Returns
    -------
    GasData or None
        ``None`` where no row of the window has gas.

    Notes
    -----
    The inorganic carbon c of the broth follows the leaving gas, whose fraction beyond the entering
    one grows as the cells do. So mu V (c - c_in) is stored, and what flows in is brought to c.
    """
    import numpy as np

    names = tuple(item.name for item in items if item.in_gas)
    found = [(at, gas_at(values, row)) for at, row in enumerate(line.rows)]
    known = [(at, gas) for at, gas in found if gas is not None]
    if not names or not known:
        return None
    if CARBON_DIOXIDE in names and known[0][1].carbon_out is not None:
        notes.assume(
            "inorganic carbon in the broth beyond what the entering gas holds grows with the cells"
        )
    rates, storing = _observed(values, names, line, liquids, known)
    likely, likely_storing = rates, storing
    if moved is not None:
        there = [
            (at, _moved(values, line.rows[at], gas, names, step))
            for (at, gas), step in zip(known, moved.reshape(len(names), -1).T, strict=True)
        ]
        likely, likely_storing = _observed(values, names, line, liquids, there)
    spread = covariance(
        [rate + line.growth_rate * part for rate, part in zip(likely, likely_storing, strict=True)]
    )
    sds = np.sqrt(np.diag(spread))
    whitening = _whitening(spread, sds)
    if whitening is None:
        notes.findings.add(
            "YN833",
            "gas readings have too few errors of their own for a fit",
            values.run.span,
            left=f"gas rates {len(rates)}",
            right=f"smallest s.d. {sds.min():.2g} mol/h",
            hint="Give the fractions of the leaving gas their standard deviations.",
        )
        whitening = np.eye(len(rates))
    return GasData(
        names=names,
        which=np.repeat(np.arange(len(names)), len(known)),
        at=np.tile(np.array([at for at, _ in known], dtype=np.intp), len(names)),
        values=np.array([nominal(rate) for rate in rates]),
        storing=np.array([nominal(part) for part in storing]),
        whitening=whitening,
        sds=sds,
    )


def _moved(values: Values, row: int, gas: GasRow, names: Sequence[str], step: Floats) -> GasRow:
    """Gas of a row as it would be read if its rates were others."""
    rates = {name: nominal(rate) for name, rate in gas.rates.items()}
    for name, change in zip(names, step, strict=True):
        rates[name] += float(change)
    there = gas_at(values, row, outlet_of(values, row, rates))
    return gas if there is None else there


def _observed(
    values: Values,
    names: Sequence[str],
    line: GrowthLine,
    liquids: Liquids,
    known: Sequence[tuple[int, GasRow]],
) -> tuple[list[Quantity], list[Quantity]]:
    """Rates with what the inflow takes up [mol/h], and carbon in the broth that grows [mol]."""
    rates: list[Quantity] = []
    storing: list[Quantity] = []
    for name in names:
        for at, gas in known:
            row = line.rows[at]
            rate, stored = gas.rates[name], 0.0
            if name == CARBON_DIOXIDE and gas.carbon_out is not None:
                rate = rate + _inflow(values.run.times, liquids, row) * gas.carbon_out
                stored = nominal(liquids.volumes[row]) * (gas.carbon_out - gas.carbon_in)
            rates.append(rate)
            storing.append(stored)
    return rates, storing


def _inflow(times: Sequence[float], liquids: Liquids, row: int) -> float:
    """Liquid added per time at a row, mean of the steps before and after [L/h]."""
    rates = [
        sum(nominal(steps[step]) for _, steps in liquids.added) / (times[step + 1] - times[step])
        for step in (row - 1, row)
        if 0 <= step < len(times) - 1 and all(steps[step] is not None for _, steps in liquids.added)
    ]
    return sum(rates) / len(rates) if rates else 0.0


def _whitening(spread: Floats, sds: Floats) -> Floats | None:
    """Inverse of the Cholesky factor; ``None`` where the readings are not independent enough."""
    import numpy as np

    if not (sds > 0).all():
        return None
    correlation = spread / np.outer(sds, sds)
    if np.linalg.eigvalsh(correlation)[0] < SINGULAR:
        return None
    found: Floats = np.linalg.inv(np.linalg.cholesky(correlation)) / sds[None, :]
    return found
