"""The model behind an exponential window: constant specific rates between samples, closed form.

With biomass M [g], dM/dt = mu M, and amounts dn/dt = q M + what is added; a sample takes the same
share of everything. With S the share that the samples so far have left, and t from the start of
the window,

    M = S M0 exp(mu t),    n = S (n0 + q M0 (exp(mu t) - 1) / mu + sum of added / S then),

whatever the course of the feed between two samples. Concentrations are n / V.

Parameters are mu, M0, then n0 and q of each compound in the broth, q of each compound in the gas,
and one standard score for each source of error that several observations share: the factor of a
calibration, the concentration of a feed, a volume. Each score is observed to be 0 with a standard
deviation of 1, which counts each shared error once. Derivatives are exact by complex steps.

References
----------
Squire and Trapp (1998) Using complex variables to estimate derivatives of real functions, SIAM
Review 40:110-112.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from yieldnet.model.network import BIOMASS
from yieldnet.rates.values import deviation, nominal

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    import numpy as np
    from numpy.typing import NDArray

    from yieldnet.rates.liquids import Liquids
    from yieldnet.rates.values import Quantity, Values

    Floats = NDArray[np.float64]
    Numbers = NDArray[Any]

__all__ = ["BrothData", "GasData", "Linear", "Path", "WindowModel", "slopes"]

STEP = 1e-30
"""Imaginary step: so small that its square is nothing, and no difference is taken [-]."""


def slopes(function: Callable[[Numbers], Numbers], point: Floats) -> Floats:
    """Derivatives of a function at a point by complex steps, exact to rounding.

    Parameters
    ----------
    function : callable
        Takes points as rows and gives values as rows; analytic.
    point : ndarray
        Where.

    Returns
    -------
    ndarray
        Derivative of each value (rows) by each coordinate (columns).
    """
    import numpy as np

    steps = point[None, :] + 1j * STEP * np.eye(len(point))
    found: Floats = np.imag(function(steps)).T / STEP
    return found


@dataclass(slots=True)
class Linear:
    """Quantities that are straight functions of the shared sources of error.

    Parameters
    ----------
    level : ndarray
        Values where all scores are 0.
    slopes : ndarray
        Change of each value (columns) for a score of 1 of each source (rows).
    """

    level: Floats
    slopes: Floats

    def at(self, scores: Numbers) -> Numbers:
        """Values for rows of scores."""
        return self.level + scores @ self.slopes


@dataclass(frozen=True, slots=True, kw_only=True)
class BrothData:
    """Readings of one compound in the broth.

    Parameters
    ----------
    name : str
        Compound.
    at : ndarray
        Which rows of the window were measured, from 0 [-].
    values, sds : ndarray
        As read, biomass before its calibration [mol/L], [g/L] or the unit of the signal.
    """

    name: str
    at: NDArray[np.intp]
    values: Floats
    sds: Floats


@dataclass(frozen=True, slots=True, kw_only=True)
class GasData:
    """What was given off as gas, all compounds and rows together.

    Parameters
    ----------
    names : tuple of str
        Compounds.
    which, at : ndarray
        Compound and row of the window of each observation, from 0 [-].
    values : ndarray
        Rates; with what the inflow takes up as inorganic carbon [mol/h].
    storing : ndarray
        Inorganic carbon in the broth beyond the equilibrium with the entering gas, which grows
        with the cells: it adds to the rate times mu [mol].
    whitening : ndarray
        Turns deviations into independent ones with a standard deviation of 1 [h/mol].
    sds : ndarray
        Standard deviations [mol/h].
    """

    names: tuple[str, ...]
    which: NDArray[np.intp]
    at: NDArray[np.intp]
    values: Floats
    storing: Floats
    whitening: Floats
    sds: Floats


@dataclass(frozen=True, slots=True, kw_only=True)
class Path:
    """The course of the window for rows of parameters.

    Parameters
    ----------
    growth_rate : ndarray
        mu, a column [1/h].
    biomass : ndarray
        M at each row of the window, before its sample [g].
    left : ndarray
        Share S that the samples before each row have left; one more for after the last [-].
    grown : ndarray
        M0 (exp(mu t) - 1) / mu at each row [g h].
    volume, sampled : ndarray
        At each row [L].
    added : tuple of ndarray
        Volume of each liquid added between rows [L].
    biomass_hours : ndarray
        Integral of M over the window, a column [g h].
    litre_hours : ndarray
        Integral of the volume over the window, a column [L h].
    """

    growth_rate: Numbers
    biomass: Numbers
    left: Numbers
    grown: Numbers
    volume: Numbers
    sampled: Numbers
    added: tuple[Numbers, ...]
    biomass_hours: Numbers
    litre_hours: Numbers


def _growth_integral(rate: Numbers, hours: Numbers) -> Numbers:
    """(exp(rate hours) - 1) / rate, also where the rate is next to nothing [h]."""
    import numpy as np

    power = rate * hours
    small = np.abs(power) < 1e-7
    safe = np.where(small, 1.0, power)
    result: Numbers = hours * np.where(small, 1 + power / 2, np.expm1(safe) / safe)
    return result


class WindowModel:
    """Residuals and outcomes of an exponential window.

    Parameters
    ----------
    values : Values
        Values of the run.
    rows : range
        Rows of the window.
    liquids : Liquids
        Volumes, all known in the window.
    biomass : BrothData
        Readings of biomass.
    broth : sequence of BrothData
        Readings of the other compounds.
    gas : GasData or None
        What was given off as gas.
    """

    def __init__(
        self,
        values: Values,
        rows: range,
        liquids: Liquids,
        biomass: BrothData,
        broth: Sequence[BrothData],
        gas: GasData | None,
    ) -> None:
        import numpy as np

        run = values.run
        self.biomass, self.broth, self.gas = biomass, tuple(broth), gas
        self.times = np.array([run.times[row] for row in rows])
        self.hours = np.diff(self.times)
        self._columns: dict[Any, int] = {}
        steps = range(rows[0], rows[-1])
        lists: list[list[Quantity]] = [
            [liquids.volumes[row] for row in rows],
            [liquids.sampled[row] for row in rows],
            [values.of(run.calibration.factor) if run.calibration else 1.0],
        ]
        brought: dict[str, list[int]] = {}
        self._liquid_of: dict[int, int] = {}
        for liquid, (item, amounts) in enumerate(liquids.added):
            lists.append([amounts[row] for row in steps])
            names = [name for name, _ in item.contents]
            names += [series.compound for series in item.contents_by_row]
            for name in dict.fromkeys(names):
                self._liquid_of[len(lists)] = liquid
                brought.setdefault(name, []).append(len(lists))
                lists.append([values.content(item, name, row + 1) for row in steps])
        self._liquids = [at for at in range(3, len(lists)) if at not in self._liquid_of]
        self._brought = brought
        for quantities in lists:
            for quantity in quantities:
                for source in getattr(quantity, "derivatives", {}):
                    self._columns.setdefault(source, len(self._columns))
        self._linear = [self._as_linear(quantities) for quantities in lists]
        self.first_score = 2 + 2 * len(self.broth) + (len(gas.names) if gas else 0)
        self.size = self.first_score + len(self._columns)
        self.observations = sum(len(item.at) for item in (biomass, *self.broth))
        self.observations += len(gas.values) if gas else 0
        self.degrees_of_freedom = self.observations - self.first_score

    def _as_linear(self, quantities: Sequence[Quantity]) -> Linear:
        import numpy as np

        level = np.array([nominal(item) for item in quantities])
        turned = np.zeros((len(self._columns), len(quantities)))
        for at, quantity in enumerate(quantities):
            for source, slope in getattr(quantity, "derivatives", {}).items():
                turned[self._columns[source], at] = slope * deviation(source)
        return Linear(level=level, slopes=turned)

    def calibration(self, points: Numbers) -> Numbers:
        """Dry weight for one unit of the signal, a column."""
        return self._linear[2].at(points[:, self.first_score :])

    def path(self, points: Numbers) -> Path:
        """Course of biomass and volumes for rows of parameters."""
        import numpy as np

        scores = points[:, self.first_score :]
        rate, start = points[:, :1], points[:, 1:2]
        volume, sampled = self._linear[0].at(scores), self._linear[1].at(scores)
        left = np.cumprod(np.hstack([np.ones_like(rate), 1 - sampled / volume]), axis=1)
        past = self.times - self.times[0]
        growth = start * np.exp(rate * past)
        after = growth[:, :-1] * left[:, 1:-1]
        levels = (volume[:, :-1] - sampled[:, :-1] + volume[:, 1:]) / 2
        return Path(
            growth_rate=rate,
            biomass=growth * left[:, :-1],
            left=left,
            grown=start * _growth_integral(rate, past[None, :]),
            volume=volume,
            sampled=sampled,
            added=tuple(self._linear[at].at(scores) for at in self._liquids),
            biomass_hours=(after * _growth_integral(rate, self.hours[None, :])).sum(
                axis=1, keepdims=True
            ),
            litre_hours=(levels * self.hours).sum(axis=1, keepdims=True),
        )

    def steps(self, path: Path, points: Numbers, name: str) -> Numbers | None:
        """Amount of a compound added between rows [mol]; ``None`` if it is in no addition."""
        scores = points[:, self.first_score :]
        found: Numbers | None = None
        for at in self._brought.get(name, ()):
            part = path.added[self._liquid_of[at]] * self._linear[at].at(scores)
            found = part if found is None else found + part
        return found

    def brought(self, path: Path, points: Numbers, name: str) -> Numbers:
        """What is there at each row of all that was added since the start [mol]."""
        import numpy as np

        steps = self.steps(path, points, name)
        if steps is None:
            return np.zeros_like(path.biomass)
        summed = np.cumsum(steps / path.left[:, 1:-1], axis=1)
        found: Numbers = path.left[:, :-1] * np.hstack([np.zeros_like(path.growth_rate), summed])
        return found

    def amounts(self, path: Path, points: Numbers, which: int) -> Numbers:
        """Amount of a compound of the broth at each row [mol]."""
        start, rate = points[:, 2 + 2 * which, None], points[:, 3 + 2 * which, None]
        own: Numbers = path.left[:, :-1] * (start + rate * path.grown)
        return own + self.brought(path, points, self.broth[which].name)

    def gas_rates(self, path: Path, points: Numbers) -> Numbers:
        """Rates in the gas less what the model says of inorganic carbon stored [mol/h]."""
        assert self.gas is not None
        first = 2 + 2 * len(self.broth)
        rates = points[:, first : self.first_score][:, self.gas.which]
        return rates * path.biomass[:, self.gas.at] - path.growth_rate * self.gas.storing

    def residuals(self, points: Numbers) -> Numbers:
        """(observed - model) / s.d. for rows of parameters, scores last [-]."""
        import numpy as np

        path = self.path(points)
        signal = path.biomass / path.volume / self.calibration(points)
        parts = [(self.biomass.values - signal[:, self.biomass.at]) / self.biomass.sds]
        for which, data in enumerate(self.broth):
            level = self.amounts(path, points, which) / path.volume
            parts.append((data.values - level[:, data.at]) / data.sds)
        if self.gas is not None:
            gap = self.gas.values - self.gas_rates(path, points)
            parts.append(gap @ self.gas.whitening.T)
        parts.append(points[:, self.first_score :])
        return np.hstack(parts)

    def start(self, growth_rate: float, biomass: float) -> Floats:
        """Parameters to start from: growth as given, all else by linear least squares.

        Parameters
        ----------
        growth_rate : float
            From the straight line of ln(biomass) [1/h].
        biomass : float
            In the vessel at the first row [g].

        Returns
        -------
        ndarray
            Parameters, all scores 0.
        """
        import numpy as np

        point = np.zeros(self.size)
        point[:2] = growth_rate, biomass
        row = point[None, :]
        path = self.path(row)
        for which, data in enumerate(self.broth):
            known = self.brought(path, row, data.name)[0]
            share = (path.left[0, :-1] / path.volume[0])[data.at]
            design = np.stack([share, share * path.grown[0][data.at]], axis=1)
            aim = data.values - (known / path.volume[0])[data.at]
            found, *_ = np.linalg.lstsq(design / data.sds[:, None], aim / data.sds, rcond=None)
            point[2 + 2 * which : 4 + 2 * which] = found
        if self.gas is not None:
            first = 2 + 2 * len(self.broth)
            rates = self.gas.values + growth_rate * self.gas.storing
            for which in range(len(self.gas.names)):
                mine = self.gas.which == which
                mass = path.biomass[0][self.gas.at[mine]]
                point[first + which] = (mass @ rates[mine]) / (mass @ mass)
        return point

    def outcomes(self, names: Sequence[str], molar_mass: float, points: Numbers) -> Numbers:
        """Specific rates [mol/g/h], volumetric rates [mol/L/h] and growth rate [1/h], side by side.

        Parameters
        ----------
        names : sequence of str
            Compounds; one that is neither in broth nor gas is taken up as it is added.
        molar_mass : float
            Of biomass [g/mol].
        points : ndarray
            Rows of parameters.

        Returns
        -------
        ndarray
            A row for each row of parameters, given off positive.
        """
        import numpy as np

        path = self.path(points)
        in_broth = {data.name: 3 + 2 * at for at, data in enumerate(self.broth)}
        first = 2 + 2 * len(self.broth)
        in_gas = {name: first + at for at, name in enumerate(self.gas.names if self.gas else ())}
        specific: list[Numbers] = []
        for name in names:
            if name == BIOMASS:
                specific.append(path.growth_rate / molar_mass)
                continue
            parts = [points[:, at[name], None] for at in (in_broth, in_gas) if name in at]
            added = None if name in in_broth else self.steps(path, points, name)
            if added is not None:
                parts.append(-added.sum(axis=1, keepdims=True) / path.biomass_hours)
            specific.append(sum(parts[1:], start=parts[0]))
        rates = np.hstack(specific)
        mean = path.biomass_hours / path.litre_hours
        return np.hstack([rates, rates * mean, path.growth_rate])
