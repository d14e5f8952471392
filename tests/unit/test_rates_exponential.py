"""Exponential windows: exact data come back exactly, and what cannot be fitted is told."""

from __future__ import annotations

from dataclasses import replace
from math import exp, expm1
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest
from scipy.stats import chi2  # type: ignore[import-untyped]

from tests.unit.cultivations import AIR, BIOMASS_MASS, addition, cultivation, gas, reading, shared
from yieldnet.chemistry.vapour import saturation_pressure
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Severity
from yieldnet.model.cultivation import DissolvedCarbonDioxide
from yieldnet.rates.offgas import inorganic_carbon
from yieldnet.rates.rates import find_rates
from yieldnet.rates.window_model import slopes
from yieldnet.rates.windows import find_window

if TYPE_CHECKING:
    from yieldnet.model.cultivation import Cultivation
    from yieldnet.rates.result import StateRates

GROWTH, GLUCOSE, ETHANOL = 0.4, 0.006, 0.005
TIMES = [0.0, 1.0, 2.0, 3.0, 4.0, 5.0]


def _dry(time: float) -> float:
    return 0.3 * exp(GROWTH * time)


def _grown(time: float) -> float:
    return 0.3 * expm1(GROWTH * time) / GROWTH


def _columns(times: list[float] = TIMES) -> dict[str, Any]:
    return {
        "biomass": ([_dry(t) for t in times], [0.02 * _dry(t) for t in times]),
        "glucose": ([0.1 - GLUCOSE * _grown(t) for t in times], 0.0005),
        "ethanol": ([0.002 + ETHANOL * _grown(t) for t in times], 0.0005),
    }


def _run(kind: str = "batch", **more: Any) -> Cultivation:
    return cultivation(kind, **{"times": TIMES, "broth": _columns(), "window": (0.0, 5.0), **more})


def _state(run: Cultivation) -> StateRates:
    (state,) = find_rates(run).states
    return state


def _refused(run: Cultivation) -> list[str]:
    with pytest.raises(InputError, match="error YN8") as refused:
        find_rates(run)
    return [item.code for item in refused.value.findings if item.severity is Severity.ERROR]


def test_exact_data_come_back() -> None:
    state = _state(_run())
    assert state.compounds == ("glucose", "biomass", "ethanol")
    assert state.growth_rate is not None
    assert state.growth_rate.value == pytest.approx(GROWTH, rel=1e-8)
    assert state.specific_rate("glucose").value == pytest.approx(GLUCOSE, rel=1e-7)
    assert state.specific_rate("ethanol").value == pytest.approx(ETHANOL, rel=1e-7)
    assert state.specific_rate("biomass").value == pytest.approx(GROWTH / BIOMASS_MASS, rel=1e-8)
    assert state.yield_of("ethanol").value == pytest.approx(ETHANOL / GLUCOSE, rel=1e-7)
    # Over five hours: what was turned over, per litre and hour.
    assert state.volumetric_rate("glucose").value == pytest.approx(GLUCOSE * _grown(5) / 5)
    assert state.fit is not None
    assert state.fit.chi_square == pytest.approx(0.0, abs=1e-9)
    # 18 readings; mu, M0, and a level and a rate for each of two compounds.
    assert state.fit.degrees_of_freedom == 12
    assert state.fit.p_value == pytest.approx(1.0)


def test_the_deviation_of_the_growth_rate_is_near_that_of_the_line() -> None:
    # Biomass alone would give 0.02 / sqrt(sum of (t - 2.5)^2); glucose tells a little of growth,
    # too.
    state = _state(_run())
    assert state.growth_rate is not None
    alone = 0.02 / sum((t - 2.5) ** 2 for t in TIMES) ** 0.5
    assert 0.5 * alone < state.growth_rate.sd < alone


def test_a_calibration_is_one_source() -> None:
    columns = _columns()
    signal, sds = columns["biomass"]
    columns["biomass"] = ([value / 0.4 for value in signal], [sd / 0.4 for sd in sds])
    plain, sure, doubtful = (
        _state(run)
        for run in (
            _run(),
            _run(broth=columns, calibration=(0.4, 0.0)),
            _run(broth=columns, calibration=(0.4, 0.02)),
        )
    )
    for state in (sure, doubtful):
        assert state.yield_of("biomass").value == pytest.approx(plain.yield_of("biomass").value)
    assert sure.yield_of("biomass").sd == pytest.approx(plain.yield_of("biomass").sd, rel=1e-6)
    # 5 % of the whole, added as variance.
    relative = [
        state.yield_of("biomass").sd / state.yield_of("biomass").value for state in (sure, doubtful)
    ]
    assert relative[1] ** 2 - relative[0] ** 2 == pytest.approx(0.05**2, rel=1e-3)
    assert doubtful.growth_rate is not None
    assert sure.growth_rate is not None
    assert doubtful.growth_rate.sd == pytest.approx(sure.growth_rate.sd, rel=1e-6)
    # The ratio of two compounds of the broth does not feel it.
    assert doubtful.yield_of("ethanol").sd == pytest.approx(sure.yield_of("ethanol").sd, rel=1e-6)


def test_samples_leave_the_concentrations_of_a_batch_as_they_are() -> None:
    sampled = _run(volume=reading(1.0), sampled=([0.05] * 6, 0.001))
    state = _state(sampled)
    assert state.growth_rate is not None
    assert state.growth_rate.value == pytest.approx(GROWTH, rel=1e-8)
    assert state.specific_rate("glucose").value == pytest.approx(GLUCOSE, rel=1e-7)


def _fed(**more: Any) -> Cultivation:
    # 0.1 L an hour of glucose 1 mol/L and ammonia 0.5 mol/L into 1 L; no samples.
    volumes = [1 + 0.1 * t for t in TIMES]
    columns = {
        "biomass": ([_dry(t) / v for t, v in zip(TIMES, volumes, strict=True)], 0.02),
        "glucose": (
            [
                (0.05 + 0.1 * t - GLUCOSE * _grown(t)) / v
                for t, v in zip(TIMES, volumes, strict=True)
            ],
            0.0005,
        ),
    }
    feed = addition(
        "feed",
        {"glucose": (1.0, 0.005), "ammonia": (0.5, 0.005)},
        added=([0.1 * t for t in TIMES], 0.001),
    )
    return _run(
        "fed-batch",
        **{"broth": columns, "volume": (volumes, 0.002), "additions": (feed,), **more},
    )


def test_a_fed_batch_comes_back() -> None:
    result = find_rates(_fed())
    (state,) = result.states
    assert state.growth_rate is not None
    assert state.growth_rate.value == pytest.approx(GROWTH, rel=1e-7)
    assert state.specific_rate("glucose").value == pytest.approx(GLUCOSE, rel=1e-6)
    # Ammonia has no concentration, so 0.05 mol/h was taken up, and that is said.
    ammonia = 0.5 * 0.5 / _grown(5)
    assert state.specific_rate("ammonia").value == pytest.approx(ammonia, rel=1e-6)
    assert any("ammonia has no concentration" in item.text for item in result.assumptions)
    hours = (1 + 1.5) / 2 * 5
    assert state.volumetric_rate("glucose").value == pytest.approx(GLUCOSE * _grown(5) / hours)
    found = state.specific_rate("ammonia")
    assert 0.01 < found.sd / found.value < 0.1


def test_the_volume_may_follow_from_one_and_what_was_added() -> None:
    state = _state(_fed(volume=reading(1.0, 0.001)))
    assert state.specific_rate("glucose").value == pytest.approx(GLUCOSE, rel=1e-6)


def test_the_curve_goes_through_the_fit() -> None:
    for run in (_run(volume=reading(1.0), sampled=([0.05] * 6, 0.001)), _fed()):
        fit = _state(run).fit
        assert fit is not None
        assert fit.window == (0.0, 5.0)
        assert fit.chosen
        for series in fit.series:
            assert series.place == "broth"
            assert series.unit == ("g/L" if series.compound == "biomass" else "mol/L")
            for time, fitted in zip(series.times, series.fitted, strict=True):
                near = [
                    value
                    for at, value in zip(series.curve_times, series.curve_values, strict=True)
                    if abs(at - time) < 1e-9
                ]
                # Just before and just after a sample, whose concentration is the same.
                assert 1 <= len(near) <= 2
                assert near == pytest.approx([fitted] * len(near), rel=1e-9)


def test_residuals_are_in_standard_deviations_and_make_up_chi_square() -> None:
    columns = _columns()
    generator = np.random.default_rng(7)
    for name, (values, sds) in columns.items():
        columns[name] = (list(generator.normal(values, sds)), sds)
    fit = _state(_run(broth=columns)).fit
    assert fit is not None
    total = sum(score**2 for series in fit.series for score in series.residuals)
    assert total == pytest.approx(fit.chi_square, rel=1e-9)
    assert fit.p_value == pytest.approx(chi2.sf(fit.chi_square, fit.degrees_of_freedom))
    for series in fit.series:
        for value, sd, fitted, score in zip(
            series.values, series.sds, series.fitted, series.residuals, strict=True
        ):
            assert score == pytest.approx((value - fitted) / sd)


def test_rates_that_change_in_the_window_are_told() -> None:
    columns = _columns()
    values, sd = columns["glucose"]
    # From the third hour on twice as much is used.
    columns["glucose"] = (
        [v - GLUCOSE * max(_grown(t) - _grown(3), 0) for t, v in zip(TIMES, values, strict=True)],
        sd,
    )
    result = find_rates(_run(broth=columns))
    (finding,) = result.findings
    assert finding.code == "YN824"
    assert finding.severity is Severity.WARNING
    assert "From 0 to 3 h they are constant" in finding.hint
    assert "12 degrees of freedom" in finding.right


def test_errors_that_are_too_small_everywhere_have_no_better_window() -> None:
    columns = _columns()
    values, sd = columns["glucose"]
    columns["glucose"] = ([v + 0.004 * (-1) ** at for at, v in enumerate(values)], sd)
    (finding,) = find_rates(_run(broth=columns)).findings
    assert finding.code == "YN824"
    assert finding.hint.startswith("Take a shorter window")


def _early_use(times: list[float], until: float) -> dict[str, tuple[list[float], float]]:
    """Columns in which glucose is used six times as fast at first; biomass does not show it."""
    columns = _columns(times)
    values, sd = columns["glucose"]
    columns["glucose"] = (
        [v - GLUCOSE * _grown(min(t, until)) * 5 for t, v in zip(times, values, strict=True)],
        sd,
    )
    return columns


def test_a_window_that_was_looked_for_is_shortened_until_all_rates_are_constant() -> None:
    times = [float(t) for t in range(9)]
    result = find_rates(_run(times=times, broth=_early_use(times, 2), window=None))
    assert result.findings == ()
    fit = result.states[0].fit
    assert fit is not None
    assert fit.window == (2.0, 8.0)
    assert any("was shortened from 0 to 8 h" in item.text for item in result.assumptions)
    named = find_rates(_run(times=times, broth=_early_use(times, 2), window=(2.0, 8.0)))
    assert result.states[0].yields == pytest.approx(named.states[0].yields)


def test_a_window_that_would_lose_too_many_samples_is_named_and_not_taken() -> None:
    times = [float(t) for t in range(9)]
    result = find_rates(_run(times=times, broth=_early_use(times, 4), window=None))
    (finding,) = result.findings
    assert finding.code == "YN824"
    assert "h they are constant: name that window" in finding.hint
    fit = result.states[0].fit
    assert fit is not None
    assert fit.window == (0.0, 8.0)


def _gas(dry: list[float], volume: float, ph: float | None = None) -> tuple[Any, float, float]:
    """Gas of cells that take up 0.003 and give off 0.004 mol/g/h, with carbon that stays."""
    oxygen, carbon = 0.003, 0.004
    entering = 60 * 101.325 / (8.314462618 * 273.15)
    dissolved = None
    outlet: dict[str, list[float]] = {"oxygen": [], "carbon dioxide": []}
    if ph is not None:
        dissolved = DissolvedCarbonDioxide(ph=reading(ph, 0.02), temperature=303.15, pressure=101.3)
    for mass in dry:
        given = carbon * mass * volume
        taken = oxygen * mass * volume
        leaving = entering + given - taken
        fraction = (entering * AIR["carbon dioxide"] + given) / leaving
        for _ in range(200 if ph is not None else 0):
            # What is stored is mu V (c - c_in), with c from the leaving gas.
            dry_pressure = 101.3 - saturation_pressure(303.15)
            stored = (
                GROWTH
                * volume
                * inorganic_carbon((fraction - AIR["carbon dioxide"]) * dry_pressure, ph, 303.15)
            )
            leaving = entering + given - stored - taken
            fraction = (entering * AIR["carbon dioxide"] + given - stored) / leaving
        outlet["carbon dioxide"].append(fraction)
        outlet["oxygen"].append((entering * AIR["oxygen"] - taken) / leaving)
    found = gas(
        flow_in=([60.0] * len(dry), 0.3),
        inlet={name: (value, 0.00005) for name, value in AIR.items()},
        outlet={name: (values, 0.0002) for name, values in outlet.items()},
        dissolved=dissolved,
    )
    return found, oxygen, carbon


@pytest.mark.parametrize("ph", [None, 6.8])
def test_gas_joins_the_fit(ph: float | None) -> None:
    found, oxygen, carbon = _gas([_dry(t) for t in TIMES], 2.0, ph)
    result = find_rates(_run(volume=reading(2.0), gas=found))
    (state,) = result.states
    assert state.specific_rate("oxygen").value == pytest.approx(oxygen, rel=1e-6)
    assert state.specific_rate("carbon dioxide").value == pytest.approx(carbon, rel=1e-6)
    assert state.respiratory_quotient is not None
    assert state.respiratory_quotient.value == pytest.approx(carbon / oxygen, rel=1e-6)
    assert state.fit is not None
    gases = [item for item in state.fit.series if item.place == "gas"]
    assert [item.compound for item in gases] == ["oxygen", "carbon dioxide"]
    assert {item.unit for item in gases} == {"mol/h"}
    assert gases[1].fitted == pytest.approx([carbon * 2 * _dry(t) for t in TIMES], rel=1e-6)
    assert state.fit.degrees_of_freedom == 12 + 10
    # Without counting what stays dissolved, a part of the carbon dioxide would be lost.
    if ph is not None:
        bare = _state(_run(volume=reading(2.0), gas=replace(found, dissolved=None)))
        assert bare.specific_rate("carbon dioxide").value < 0.99 * carbon


def test_gas_without_errors_cannot_be_weighed() -> None:
    found, _, _ = _gas([_dry(t) for t in TIMES], 2.0)
    exact = gas(
        flow_in=([60.0] * 6, 0.3),
        inlet={name: (value, 0.0) for name, value in AIR.items()},
        outlet={
            item.compound: ([r.value for r in item.readings if r], 0.0) for item in found.outlet
        },
    )
    assert _refused(_run(volume=reading(2.0), gas=exact)) == ["YN833"]
    assert exact.flow_in is not None
    steady = replace(exact, flow_in=shared("", 60.0, 0.0, 6))
    assert _refused(_run(volume=reading(2.0), gas=steady)) == ["YN833"]


def test_gas_that_no_row_of_the_window_has_is_left_out() -> None:
    gone = gas(
        flow_in=([None] * 6, 0.3),
        inlet={name: (value, 0.0) for name, value in AIR.items()},
        outlet={"oxygen": ([0.2] * 6, 0.001), "carbon dioxide": ([0.01] * 6, 0.001)},
    )
    result = find_rates(_run(volume=reading(2.0), gas=gone))
    assert {item.code for item in result.findings} == {"YN834"}
    assert result.states[0].compounds == ("glucose", "biomass", "ethanol")


# Windows


def test_the_longest_straight_run_is_taken() -> None:
    times = [float(t) for t in range(10)]
    logarithms = [0.4 * min(max(t - 1, 0), 5) for t in times]
    found, tried = find_window(times, logarithms, [0.02] * 10)
    assert found is not None
    assert (found.start, found.end, found.samples) == (1.0, 6.0, 6)
    assert found.growth_rate.value == pytest.approx(0.4)
    # All of 10, 9, 8, 7 and 6 samples: 1 + 2 + 3 + 4 + 5.
    assert len(tried) == 15
    assert [item.samples for item in tried] == sorted((x.samples for x in tried), reverse=True)
    assert [item for item in tried if item.passes] == [found]


def test_of_two_runs_as_long_the_faster_is_taken() -> None:
    times = [float(t) for t in range(9)]
    logarithms = [0.2 * t if t <= 4 else 0.8 + 0.5 * (t - 4) for t in times]
    found, _ = find_window(times, logarithms, [0.005] * 9)
    assert found is not None
    assert (found.start, found.end) == (4.0, 8.0)


@pytest.mark.parametrize(
    "logarithms",
    [[1.0] * 6, [2.0 - 0.2 * t for t in range(6)], [float(t % 2) for t in range(6)]],
    ids=["stands", "falls", "swings"],
)
def test_what_does_not_grow_has_no_window(logarithms: list[float]) -> None:
    found, tried = find_window([float(t) for t in range(6)], logarithms, [0.02] * 6)
    assert found is None
    assert len(tried) == 6


def test_a_window_is_found_in_a_run_and_told() -> None:
    times = [float(t) for t in range(10)]
    dry = [0.3 * exp(GROWTH * min(t, 6)) for t in times]
    columns = {
        "biomass": (dry, [0.02 * x for x in dry]),
        "glucose": ([0.1 - GLUCOSE * _grown(min(t, 6)) for t in times], 0.0005),
    }
    result = find_rates(_run(times=times, broth=columns, window=None))
    fit = result.states[0].fit
    assert fit is not None
    assert fit.window == (0.0, 6.0)
    assert not fit.chosen
    assert len(fit.tried) == 1 + 2 + 3 + 4
    assert any("was looked for" in item.text for item in result.assumptions)


def test_samples_and_feed_bend_no_line() -> None:
    # A tenth is withdrawn each hour, and none of it is made up for.
    sampled = _run(volume=reading(1.0), sampled=([0.1] * 6, 0.001), window=None)
    fed = _fed(window=None)
    for run in (sampled, fed):
        fit = _state(run).fit
        assert fit is not None
        assert fit.window == (0.0, 5.0)
        (tried,) = fit.tried
        assert tried.growth_rate.value == pytest.approx(GROWTH, rel=1e-9)
        assert tried.chi_square == pytest.approx(0.0, abs=1e-9)


def test_no_growth_has_a_finding_with_the_best_try() -> None:
    flat = {"biomass": ([0.3] * 6, 0.006), "glucose": ([0.1 - 0.001 * t for t in TIMES], 0.0005)}
    with pytest.raises(InputError, match="no run of samples grows exponentially") as refused:
        find_rates(_run(broth=flat, window=None))
    (finding,) = refused.value.findings
    assert finding.code == "YN823"
    assert "windows of 4 samples or more: 6" in finding.left
    short = {"biomass": ([0.3, None, None, 0.4, None, 0.5], 0.006), "glucose": flat["glucose"]}
    with pytest.raises(InputError, match="samples with biomass above zero: 3"):
        find_rates(_run(broth=short, window=None))


@pytest.mark.parametrize("window", [(0.0, 1.0), (0.2, 0.8)])
def test_a_window_of_two_points_or_none_is_refused(window: tuple[float, float]) -> None:
    assert _refused(_run(window=window)) == ["YN822"]


def test_a_sample_without_biomass_above_zero_counts_in_the_fit_alone() -> None:
    columns = _columns()
    values, sds = columns["biomass"]
    columns["biomass"] = ([-0.001, *values[1:]], [0.3, *sds[1:]])
    result = find_rates(_run(broth=columns))
    assert result.states[0].fit is not None
    assert result.states[0].fit.degrees_of_freedom == 12
    assert any("not in the straight line" in item.text for item in result.assumptions)


# What cannot be fitted


def test_biomass_is_needed() -> None:
    columns = _columns()
    del columns["biomass"]
    assert _refused(_run(broth=columns)) == ["YN821"]


def test_a_reading_without_an_error_is_refused() -> None:
    columns = _columns()
    columns["ethanol"] = (columns["ethanol"][0], [0.0, *[0.0005] * 5])
    assert _refused(_run(broth=columns)) == ["YN833"]


def test_biomass_that_is_fed_is_refused() -> None:
    feed = addition("feed", {"biomass": (1.0, 0.1)}, added=([0.0] * 6, 0.001))
    assert _refused(_run("fed-batch", volume=reading(1.0), additions=(feed,))) == ["YN836"]


@pytest.mark.parametrize(("name", "refused"), [("ethanol", False), ("glucose", True)])
def test_a_compound_that_was_measured_once(name: str, refused: bool) -> None:
    columns = _columns()
    columns[name] = ([columns[name][0][0], *[None] * 5], 0.0005)
    run = _run(broth=columns)
    if refused:
        assert _refused(run) == ["YN820"]
        return
    result = find_rates(run)
    assert [item.code for item in result.findings] == ["YN834"]
    assert result.states[0].compounds == ("glucose", "biomass")


def test_a_compound_that_was_measured_twice_has_a_rate_and_no_test() -> None:
    columns = _columns()
    values = columns["ethanol"][0]
    columns["ethanol"] = ([values[0], *[None] * 4, values[-1]], 0.0005)
    state = _state(_run(broth=columns))
    assert state.specific_rate("ethanol").value == pytest.approx(ETHANOL, rel=1e-7)
    assert state.fit is not None
    assert state.fit.degrees_of_freedom == 8


def test_a_volume_that_is_missing_in_the_window() -> None:
    run = _run(volume=([1.0, 1.0, None, 1.0, 1.0, 1.0], 0.01))
    assert _refused(run) == ["YN831"]
    # Outside of it nobody misses it.
    later = _run(volume=([None, 1.0, 1.0, 1.0, 1.0, 1.0], 0.01), window=(1.0, 5.0))
    assert _state(later).specific_rate("glucose").value == pytest.approx(GLUCOSE, rel=1e-6)


def test_derivatives_by_complex_steps() -> None:
    point = np.array([0.3, 2.0])
    found = slopes(lambda p: np.stack([np.exp(p[:, 0] * p[:, 1]), p[:, 1] ** 3], axis=1), point)
    assert found == pytest.approx(np.array([[2 * exp(0.6), 0.3 * exp(0.6)], [0.0, 12.0]]))


def test_no_growth_at_all_is_still_a_window_that_can_be_named() -> None:
    # (exp(mu t) - 1) / mu where mu is nothing: the biomass times the hours.
    columns = {
        "biomass": ([2.0] * 6, 0.02),
        "glucose": ([0.1 - 0.004 * 2 * t for t in TIMES], 0.0005),
    }
    state = _state(_run(broth=columns))
    assert state.growth_rate is not None
    assert state.growth_rate.value == pytest.approx(0.0, abs=1e-9)
    assert state.specific_rate("glucose").value == pytest.approx(0.004, rel=1e-6)
    assert state.fit is not None
    assert all(np.isfinite(series.curve_values).all() for series in state.fit.series)


def test_readings_that_say_the_same_do_not_determine_a_rate() -> None:
    # Cells that vanish within the first hour: after it nothing tells a level from a rate.
    dry = [exp(-25 * t) for t in TIMES]
    columns = {
        "biomass": (dry, [0.02 * x for x in dry]),
        "glucose": ([None, None, None, 0.09, 0.09, 0.09], 0.0005),
    }
    assert _refused(_run(broth=columns)) == ["YN838"]


def test_biomass_below_zero_is_refused() -> None:
    # Three good samples make a line; three far below zero pull the fit under it.
    columns = {
        "biomass": ([0.01, -0.05, 0.01, -0.06, 0.01, -0.07], 0.02),
        "glucose": ([0.1, 0.09, 0.08, 0.07, 0.06, 0.05], 1.0),
    }
    with pytest.raises(InputError, match="biomass above zero") as refused:
        find_rates(_run(broth=columns))
    assert [item.code for item in refused.value.findings] == ["YN821"]
