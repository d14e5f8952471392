"""Round trips: simulate a cultivation, add noise as stated, and get its rates back.

Each run is integrated by ``scipy`` from rates that are known, every reading gets Gaussian noise
with the standard deviation it states, and the rates and yields that come back are judged by their
own stated errors: (found - true) / s.d. must be standard normal. What the program takes from the
run is never what made it: samples, feed and gas are integrated here, in closed form there.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import log, sqrt
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest
from scipy.integrate import solve_ivp  # type: ignore[import-untyped]
from scipy.stats import binom, chi2, norm  # type: ignore[import-untyped]

from tests.unit.cultivations import AIR, BIOMASS_MASS, addition, cultivation, gas, reading
from yieldnet.chemistry.vapour import saturation_pressure
from yieldnet.model.cultivation import DissolvedCarbonDioxide, Series
from yieldnet.rates.offgas import inorganic_carbon
from yieldnet.rates.rates import find_rates

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from yieldnet.model.cultivation import Cultivation, Gas
    from yieldnet.rates.result import StateRates

    Floats = NDArray[np.float64]

DRAWS = 500
"""Runs with noise of each kind [-]."""
WITHIN_TWO = 0.9545
"""Share of a normal distribution within two standard deviations [-]."""
RARE = 1e-3
"""Chance at which a single quantity would fail though all is well; the draws are fixed [-]."""


class Noise:
    """Readings that are off by their stated errors."""

    def __init__(self, seed: int) -> None:
        self.generator = np.random.default_rng(seed)

    def column(self, true: Any, sd: Any) -> tuple[list[float], list[float]]:
        """A column: values off by noise, and their standard deviations."""
        exact = np.asarray(true, float)
        sds = np.broadcast_to(np.asarray(sd, float), exact.shape)
        return [float(v) for v in self.generator.normal(exact, sds)], [float(s) for s in sds]

    def value(self, true: float, sd: float) -> float:
        """One value off by noise."""
        return float(self.generator.normal(true, sd))


@dataclass(frozen=True)
class Draws:
    """What came back from the draws of one kind of run."""

    labels: tuple[str, ...]
    scores: Floats
    yields: Floats
    covariances: Floats


@dataclass(frozen=True)
class Truth:
    """What a run was made from."""

    growth: float
    specific: dict[str, float]
    quotient: float | None = None


def _collect(make: Callable[[Noise], Cultivation], truths: dict[str, Truth], seed: int) -> Draws:
    noise = Noise(seed)
    labels: tuple[str, ...] = ()
    scores: list[list[float]] = []
    yields: list[tuple[float, ...]] = []
    covariances: list[Any] = []
    for _ in range(DRAWS):
        row: list[float] = []
        names: list[str] = []
        result = find_rates(make(noise))
        assert [state.label for state in result.states] == list(truths)
        for state in result.states:
            found = _scores(state, truths[state.label])
            names += [f"{state.label} {name}".strip() for name in found]
            row += found.values()
        labels = tuple(names)
        scores.append(row)
        yields.append(result.states[0].yields)
        covariances.append(result.states[0].yield_covariance)
    return Draws(labels, np.array(scores), np.array(yields), np.array(covariances))


def _scores(state: StateRates, truth: Truth) -> dict[str, float]:
    assert state.growth_rate is not None
    assert set(state.compounds) == {*truth.specific, "biomass"}
    specific = {**truth.specific, "biomass": truth.growth / BIOMASS_MASS}
    pairs = {"growth rate": (state.growth_rate, truth.growth)}
    for name in state.compounds:
        pairs[f"q {name}"] = (state.specific_rate(name), specific[name])
    for name in state.products:
        pairs[f"yield {name}"] = (state.yield_of(name), specific[name] / specific[state.basis])
    if truth.quotient is not None:
        assert state.respiratory_quotient is not None
        pairs["respiratory quotient"] = (state.respiratory_quotient, truth.quotient)
    # Biomass follows from the growth rate by a factor, and would only count twice.
    del pairs["q biomass"]
    return {name: (found.value - true) / found.sd for name, (found, true) in pairs.items()}


HOURS = np.arange(0.0, 8.5, 1.0)
GROWTH, UPTAKE, ETHANOL = 0.35, 0.006, 0.004


def _solved(slope: Callable[[float, Floats], Any], start: Any, times: Floats) -> Floats:
    answer = solve_ivp(
        slope, (times[0], times[-1]), start, t_eval=times, rtol=1e-10, atol=1e-12, method="LSODA"
    )
    assert answer.success
    found: Floats = answer.y
    return found


def _batch() -> tuple[Callable[[Noise], Cultivation], dict[str, Truth]]:
    def slope(_: float, y: Floats) -> list[float]:
        return [GROWTH * y[0], -UPTAKE * y[0], ETHANOL * y[0]]

    dry, glucose, ethanol = _solved(slope, [0.2, 0.1, 0.001], HOURS)
    factor, factor_sd = 0.4, 0.006

    def make(noise: Noise) -> Cultivation:
        return cultivation(
            "batch",
            times=list(HOURS),
            broth={
                "biomass": noise.column(dry / factor, 0.02 * dry / factor),
                "glucose": noise.column(glucose, 0.0006),
                "ethanol": noise.column(ethanol, 0.0004),
            },
            calibration=(noise.value(factor, factor_sd), factor_sd),
            window=(0.0, 8.0),
        )

    return make, {"": Truth(GROWTH, {"glucose": UPTAKE, "ethanol": ETHANOL})}


def _start_and_end() -> tuple[Callable[[Noise], Cultivation], dict[str, Truth]]:
    # Growth that slows down as glucose runs out; yields stay. Samples are withdrawn.
    per_glucose, ethanol_yield, sample, affinity = 90.0, 0.7, 0.03, 0.004

    def slope(_: float, y: Floats) -> list[float]:
        growth = GROWTH * y[1] / (affinity * 2.0 + y[1]) * y[0]
        used = growth / per_glucose
        return [growth, -used, ethanol_yield * used, y[0]]

    volume, state = 2.0, np.array([0.4, 0.12, 0.0, 0.0])
    rows, volumes = [state / volume], [volume]
    for _ in HOURS[1:]:
        share = 1 - sample / volume
        state = np.array([*(state[:3] * share), state[3]])
        volume -= sample
        state = _solved(slope, state, np.array([0.0, 1.0]))[:, -1]
        rows.append(state / volume)
        volumes.append(volume)
    dry, glucose, ethanol, _ = np.array(rows).T
    taken = sample * dry[:-1].sum()
    mean = (dry[-1] * volumes[-1] - dry[0] * volumes[0] + taken) / state[3]
    used = mean / per_glucose

    def make(noise: Noise) -> Cultivation:
        return cultivation(
            "batch",
            method="start and end",
            times=list(HOURS),
            broth={
                "biomass": noise.column(dry, 0.02 * dry),
                "glucose": noise.column(glucose, 0.001),
                "ethanol": noise.column(ethanol, 0.0006),
            },
            volume=noise.column(volumes, 0.005),
            sampled=noise.column([sample] * len(HOURS), 0.0005),
        )

    return make, {"": Truth(mean, {"glucose": used, "ethanol": ethanol_yield * used})}


def _fed_batch() -> tuple[Callable[[Noise], Cultivation], dict[str, Truth]]:
    fed, fed_sd, sample = 1.5, 0.01, 0.02
    # Just what the cells take up, at first.
    first = UPTAKE * 1.0 / fed

    def slope(time: float, y: Floats) -> list[float]:
        flow = first * np.exp(GROWTH * time)
        return [GROWTH * y[0], flow * fed - UPTAKE * y[0], ETHANOL * y[0], flow, flow]

    state = np.array([1.0, 0.02, 0.0, 1.0, 0.0])
    rows = [state]
    for start in HOURS[:-1]:
        share = 1 - sample / state[3]
        state = np.array([*(state[:3] * share), state[3] - sample, state[4]])
        state = _solved(slope, state, np.array([start, start + 1.0]))[:, -1]
        rows.append(state)
    dry, glucose, ethanol, volume, added = np.array(rows).T

    def make(noise: Noise) -> Cultivation:
        return cultivation(
            "fed-batch",
            times=list(HOURS),
            broth={
                "biomass": noise.column(dry / volume, 0.02 * dry / volume),
                "glucose": noise.column(glucose / volume, 0.0006),
                "ethanol": noise.column(ethanol / volume, 0.0004),
            },
            volume=noise.column(volume, 0.005),
            sampled=noise.column([sample] * len(HOURS), 0.0003),
            additions=(
                addition(
                    "feed",
                    {"glucose": (noise.value(fed, fed_sd), fed_sd)},
                    added=noise.column(added, 0.0004),
                ),
            ),
            window=(0.0, 8.0),
        )

    return make, {"": Truth(GROWTH, {"glucose": UPTAKE, "ethanol": ETHANOL})}


MOLAR_DENSITY = 101.325 / (8.314462618 * 273.15)
"""Ideal gas at the normal conditions of the tests [mol/L]."""


def _chemostat() -> tuple[Callable[[Noise], Cultivation], dict[str, Truth]]:
    fed, fed_sd, volume, flow = 0.11, 0.0008, 1.2, 60.0
    per_glucose, oxygen_yield, carbon_yield = 85.0, 2.0, 2.1
    air_in, carbon_in = AIR["oxygen"], AIR["carbon dioxide"]
    states: list[dict[str, float]] = []
    for dilution in (0.1, 0.2):

        def slope(_: float, y: Floats, dilution: float = dilution) -> list[float]:
            growth = 0.4 * y[1] / (0.002 + y[1]) * y[0]
            return [growth - dilution * y[0], dilution * (fed - y[1]) - growth / per_glucose]

        dry, left = _solved(slope, [1.0, 0.01], np.array([0.0, 400.0]))[:, -1]
        used = dilution * (fed - left) * volume
        entering = flow * MOLAR_DENSITY
        oxygen = entering * air_in - oxygen_yield * used
        carbon = entering * carbon_in + carbon_yield * used
        leaving = entering * (1 - air_in - carbon_in) + oxygen + carbon
        states.append(
            {
                "dilution": dilution,
                "dry": dry,
                "glucose": left,
                "oxygen": oxygen / leaving,
                "carbon dioxide": carbon / leaving,
            }
        )
    truths = {
        f"D {item['dilution']}": Truth(
            item["dilution"],
            {
                "glucose": item["dilution"] / per_glucose,
                "oxygen": oxygen_yield * item["dilution"] / per_glucose,
                "carbon dioxide": carbon_yield * item["dilution"] / per_glucose,
            },
            carbon_yield / oxygen_yield,
        )
        for item in states
    }

    def column(name: str) -> list[float]:
        return [item[name] for item in states]

    def make(noise: Noise) -> Cultivation:
        return cultivation(
            "chemostat",
            states=list(truths),
            broth={
                "biomass": noise.column(column("dry"), 0.1),
                "glucose": noise.column(column("glucose"), 0.0002),
            },
            volume=reading(noise.value(volume, 0.01), 0.01),
            dilution_rate=noise.column(column("dilution"), 0.001),
            additions=(addition("feed", {"glucose": (noise.value(fed, fed_sd), fed_sd)}),),
            gas=_gas(noise, noise.column([flow, flow], 0.4), column, 0.0001),
        )

    return make, truths


def _gas(noise: Noise, flows: Any, column: Callable[[str], Any], sd: float) -> Gas:
    """Air in, one reading of it for all rows, and what leaves."""
    names = ("oxygen", "carbon dioxide")
    return gas(
        flow_in=flows,
        inlet={name: (noise.value(AIR[name], 0.00005), 0.00005) for name in names},
        outlet={name: noise.column(column(name), sd) for name in names},
    )


def _off_gas() -> tuple[Callable[[Noise], Cultivation], dict[str, Truth]]:
    # The gas of the vessel follows the cells with a delay of holdup / flow, 0.3 min here.
    volume, flow, holdup, oxygen_rate, carbon_rate = 1.0, 60.0, 0.3, 0.008, 0.0084
    entering, held = flow * MOLAR_DENSITY, holdup * MOLAR_DENSITY

    def slope(_: float, y: Floats) -> list[float]:
        # Pressure is constant, so what the cells add to the gas leaves at once.
        leaving = entering + (carbon_rate - oxygen_rate) * y[0]
        rates = {"oxygen": -oxygen_rate * y[0], "carbon dioxide": carbon_rate * y[0]}
        fractions = {"oxygen": y[2], "carbon dioxide": y[3]}
        turned = [
            (entering * AIR[name] + rates[name] - leaving * fractions[name]) / held
            for name in rates
        ]
        return [GROWTH * y[0], -UPTAKE * y[0], *turned]

    # Start one hour before, so that the gas has found its course at the first row.
    times = np.concatenate([[-1.0], HOURS])
    start = [0.5 * np.exp(-GROWTH), 0.2, AIR["oxygen"], AIR["carbon dioxide"]]
    dry, glucose, oxygen, carbon = _solved(slope, start, times)[:, 1:]
    fractions = {"oxygen": oxygen, "carbon dioxide": carbon}

    def make(noise: Noise) -> Cultivation:
        meter = reading(noise.value(flow, 0.6), 0.6)
        return cultivation(
            "batch",
            times=list(HOURS),
            broth={
                "biomass": noise.column(dry, 0.02 * dry),
                "glucose": noise.column(glucose, 0.0006),
            },
            volume=reading(volume),
            gas=_gas(
                noise,
                Series(compound="", heading="", readings=(meter,) * len(HOURS)),
                fractions.__getitem__,
                0.0003,
            ),
            window=(0.0, 8.0),
        )

    return make, {
        "": Truth(
            GROWTH,
            {"glucose": UPTAKE, "oxygen": oxygen_rate, "carbon dioxide": carbon_rate},
            carbon_rate / oxygen_rate,
        )
    }


KINDS = {
    "batch": _batch,
    "start and end": _start_and_end,
    "fed-batch": _fed_batch,
    "chemostat": _chemostat,
    "off-gas": _off_gas,
}


@pytest.fixture(scope="module")
def draws() -> dict[str, Draws]:
    """All draws, made once."""
    return {kind: _collect(*make(), seed=20 + at) for at, (kind, make) in enumerate(KINDS.items())}


def test_rates_lie_within_two_of_their_deviations_as_often_as_they_should(
    draws: dict[str, Draws],
) -> None:
    inside = [np.abs(found.scores) <= 2 for found in draws.values()]
    assert sum(item.size for item in inside) > 15_000
    pooled = sum(int(item.sum()) for item in inside) / sum(item.size for item in inside)
    assert pooled >= 0.95
    # Nor may the errors be said too large: then more than a few in a thousand lie inside.
    assert pooled <= 0.96


@pytest.mark.parametrize("kind", KINDS)
def test_no_single_rate_lies_outside_too_often(draws: dict[str, Draws], kind: str) -> None:
    found = draws[kind]
    least = binom.ppf(RARE, DRAWS, WITHIN_TWO)
    counts = (np.abs(found.scores) <= 2).sum(axis=0)
    assert dict(zip(found.labels, counts, strict=True)) == {
        name: count for name, count in zip(found.labels, counts, strict=True) if count >= least
    }


@pytest.mark.parametrize("kind", KINDS)
def test_errors_have_no_lean(draws: dict[str, Draws], kind: str) -> None:
    # The mean of N standard normal scores has a deviation of 1/sqrt(N); a tenth of a standard
    # deviation is left for what linear propagation cannot see (curvature of the ratios).
    means = draws[kind].scores.mean(axis=0)
    assert np.abs(means).max() < norm.isf(RARE / 2) / sqrt(DRAWS) + 0.1
    assert means.shape == (len(draws[kind].labels),)


@pytest.mark.parametrize("kind", KINDS)
def test_the_stated_covariance_is_that_of_the_draws(draws: dict[str, Draws], kind: str) -> None:
    found = draws[kind]
    sample = np.cov(found.yields.T, ddof=1)
    stated = found.covariances.mean(axis=0)
    size = len(sample)
    assert size >= 2
    # A sample variance over the true one is chi-square over its degrees of freedom.
    freedom = DRAWS - 1
    low, high = (chi2.ppf(chance, freedom) / freedom for chance in (RARE / 2, 1 - RARE / 2))
    ratios = np.diag(sample) / np.diag(stated)
    assert ratios.min() > low
    assert ratios.max() < high
    # Fisher's transformation of a correlation has a deviation of 1/sqrt(N - 3).
    for first in range(size):
        for second in range(first):
            said, seen = (
                matrix[first, second] / sqrt(matrix[first, first] * matrix[second, second])
                for matrix in (stated, sample)
            )
            gap = abs(log((1 + seen) / (1 - seen)) - log((1 + said) / (1 - said))) / 2
            assert gap < norm.isf(RARE / 2) / sqrt(DRAWS - 3)


def test_yields_share_the_error_of_the_basis(draws: dict[str, Draws]) -> None:
    # Else the test above could be passed by matrices without anything beside their diagonal.
    for found in draws.values():
        stated = found.covariances.mean(axis=0)
        scale = np.sqrt(np.outer(np.diag(stated), np.diag(stated)))
        assert np.abs(stated / scale)[~np.eye(len(stated), dtype=bool)].max() > 0.1


def test_a_window_is_found_where_growth_ends() -> None:
    # Growth stops at 6 h; samples every half hour.
    times = np.arange(0.0, 9.1, 0.5)
    dry = 0.2 * np.exp(GROWTH * np.minimum(times, 6.0))
    grown = (dry - 0.2) / GROWTH
    ends = []
    for seed in range(20):
        noise = Noise(seed)
        run = cultivation(
            "batch",
            times=list(times),
            broth={
                "biomass": noise.column(dry, 0.02 * dry),
                "glucose": noise.column(0.1 - UPTAKE * grown, 0.0006),
            },
        )
        (state,) = find_rates(run).states
        assert state.fit is not None
        assert not state.fit.chosen
        ends.append(state.fit.window[1])
        assert state.growth_rate is not None
        assert state.growth_rate.value == pytest.approx(GROWTH, abs=0.02)
    # A sample too many may hide in the errors now and then; a missing one as well.
    assert np.median(ends) == 6.0
    assert max(ends) <= 7.0


def test_inorganic_carbon_of_a_fed_broth_is_counted() -> None:
    # Integrated without noise: carbon dioxide of the gas, with the broth at equilibrium with it.
    # At pH 6.8 and 20 L/h a tenth of it stays in the broth, and the feed takes up another part.
    rate, oxygen_rate, flow, feed = 0.0084, 0.008, 20.0, 0.2
    entering = flow * MOLAR_DENSITY
    air, carbon_in = AIR["oxygen"], AIR["carbon dioxide"]
    held = float(inorganic_carbon(101.3 - saturation_pressure(303.15), 6.8, 303.15))

    def leaving(dry: Floats, carbon: Floats) -> Floats:
        found: Floats = (entering * (1 - carbon_in) - oxygen_rate * dry) / (1 - carbon)
        return found

    def slope(time: float, y: Floats) -> list[float]:
        dry, carbon = y[:1], y[1:]
        given = rate * dry - (leaving(dry, carbon) * carbon - entering * carbon_in)
        turned = (given - held * carbon * feed) / (held * (2.0 + feed * time))
        return [GROWTH * y[0], float(turned[0])]

    times = np.concatenate([[-3.0], HOURS])
    start = [0.5 * np.exp(-3 * GROWTH), carbon_in + 0.0009]
    dry, carbon = _solved(slope, start, times)[:, 1:]
    volumes = 2.0 + feed * HOURS
    out = leaving(dry, carbon)
    fractions = {"oxygen": (entering * air - oxygen_rate * dry) / out, "carbon dioxide": carbon}
    rows = len(HOURS)
    used = UPTAKE * (dry - dry[0]) / GROWTH
    run = cultivation(
        "fed-batch",
        times=list(HOURS),
        broth={
            "biomass": (list(dry / volumes), 0.01),
            "glucose": (list((0.2 + 0.3 * feed * HOURS - used) / volumes), 0.0006),
        },
        volume=(list(volumes), 0.001),
        additions=(addition("feed", {"glucose": (0.3, 0.001)}, added=(list(feed * HOURS), 0.001)),),
        gas=gas(
            flow_in=([flow] * rows, 0.1),
            inlet={name: (AIR[name], 0.00001) for name in fractions},
            outlet={name: (list(column), 0.0001) for name, column in fractions.items()},
            dissolved=DissolvedCarbonDioxide(
                ph=reading(6.8, 0.01), temperature=303.15, pressure=101.3
            ),
        ),
        window=(0.0, 8.0),
    )
    assert run.gas is not None
    (counted,) = find_rates(run).states
    (left_out,) = find_rates(replace(run, gas=replace(run.gas, dissolved=None))).states
    # What is stored follows the cells only if the volume keeps still, hence half a percent.
    assert counted.specific_rate("carbon dioxide").value == pytest.approx(rate, rel=0.005)
    assert counted.specific_rate("oxygen").value == pytest.approx(oxygen_rate, rel=0.001)
    assert left_out.specific_rate("carbon dioxide").value < 0.92 * rate
