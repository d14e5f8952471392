"""Start and end, worked by hand."""

from __future__ import annotations

from dataclasses import replace
from math import log, sqrt
from typing import TYPE_CHECKING, Any

import pytest

from tests.unit.cultivations import AIR, BIOMASS_MASS, addition, cultivation, gas, reading
from yieldnet.chemistry.vapour import saturation_pressure
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Severity
from yieldnet.model.cultivation import DissolvedCarbonDioxide
from yieldnet.rates.amounts import filled, log_mean
from yieldnet.rates.offgas import inorganic_carbon
from yieldnet.rates.rates import find_rates

if TYPE_CHECKING:
    from yieldnet.model.cultivation import Cultivation


def _run(kind: str = "batch", **more: Any) -> Cultivation:
    return cultivation(
        kind,
        **{
            "method": "start and end",
            "times": [0.0, 10.0],
            "broth": {
                "biomass": ([0.5, 9.0], [0.01, 0.2]),
                "glucose": ([0.1, 0.01], [0.001, 0.0005]),
                "ethanol": ([0.0, 0.12], [0.001, 0.002]),
            },
            **more,
        },
    )


def _refused(run: Cultivation) -> list[str]:
    with pytest.raises(InputError, match="error YN8") as refused:
        find_rates(run)
    return [item.code for item in refused.value.findings if item.severity is Severity.ERROR]


def test_two_rows_suffice() -> None:
    (state,) = find_rates(_run()).states
    assert state.yield_of("ethanol").value == pytest.approx(0.12 / 0.09)
    assert state.yield_of("biomass").value == pytest.approx(8.5 / BIOMASS_MASS / 0.09)
    assert state.yield_in_grams("biomass").value == pytest.approx(8.5 / (0.09 * 180.156))
    assert state.volumetric_rate("glucose").value == pytest.approx(0.009)
    # Growth from 0.5 to 9 in 10 h is ln(18)/10, by the logarithmic mean.
    assert state.growth_rate is not None
    assert state.growth_rate.value == pytest.approx(log(18) / 10)
    assert state.specific_rate("glucose").value == pytest.approx(0.09 / (8.5 / log(18) * 10))
    assert state.fit is None


def test_yields_share_the_error_of_the_substrate() -> None:
    (state,) = find_rates(_run()).states
    used = sqrt(0.001**2 + 0.0005**2) / 0.09
    ethanol = sqrt(0.001**2 + 0.002**2) / 0.12
    biomass = sqrt(0.01**2 + 0.2**2) / 8.5
    for name, own in (("ethanol", ethanol), ("biomass", biomass)):
        found = state.yield_of(name)
        assert found.sd / found.value == pytest.approx(sqrt(used**2 + own**2))
    assert state.correlation("biomass", "ethanol") == pytest.approx(
        used**2 / sqrt((used**2 + ethanol**2) * (used**2 + biomass**2))
    )


def test_a_calibration_counts_once() -> None:
    run = _run(
        broth={
            "biomass": ([1.0, 18.0], 0.0),
            "glucose": ([0.1, 0.01], 0.0),
        },
        calibration=(0.5, 0.01),
    )
    (state,) = find_rates(run).states
    found = state.yield_of("biomass")
    # 2 % of 8.5 g, not 2 % of each reading by itself; the growth rate does not feel it.
    assert found.value == pytest.approx(8.5 / BIOMASS_MASS / 0.09)
    assert found.sd / found.value == pytest.approx(0.02)
    assert state.growth_rate is not None
    assert state.growth_rate.sd == pytest.approx(0.0, abs=1e-12)


def _fed(**more: Any) -> Cultivation:
    return _run(
        "fed-batch",
        **{
            "times": [0.0, 4.0, 10.0],
            "broth": {
                "biomass": ([1.0, 4.0, 12.0], 0.1),
                "glucose": ([0.05, 0.04, 0.02], 0.001),
                "ethanol": ([0.0, 0.03, 0.09], 0.001),
            },
            "volume": ([2.0, 2.1, 2.5], 0.01),
            "sampled": ([0.1, 0.2, 0.3], 0.001),
            "additions": (
                addition("feed", {"glucose": (2.0, 0.02)}, added=([0.0, 0.2, 0.8], 0.002)),
                addition("base", {"ammonia": (5.0, 0.05)}, added=([0.0, 0.01, 0.04], 0.0005)),
            ),
            **more,
        },
    )


def test_fed_batch_amounts_by_hand() -> None:
    result = find_rates(_fed())
    (state,) = result.states
    hours = (1.9 + 2.1) / 2 * 4 + (1.9 + 2.5) / 2 * 6
    # Start 0.1 + fed 1.6 - samples 0.1 * 0.05 + 0.2 * 0.04 - left 0.05; the last sample was taken
    # after the end.
    used = 2.0 * 0.05 + 0.8 * 2.0 - (0.1 * 0.05 + 0.2 * 0.04) - 2.5 * 0.02
    made = 2.5 * 0.09 + 0.2 * 0.03
    grown = 2.5 * 12 + 0.1 * 1.0 + 0.2 * 4.0 - 2.0
    assert state.volumetric_rate("glucose").value == pytest.approx(used / hours)
    assert state.yield_of("ethanol").value == pytest.approx(made / used)
    assert state.yield_of("biomass").value == pytest.approx(grown / BIOMASS_MASS / used)
    assert state.yield_of("ammonia").value == pytest.approx(0.04 * 5.0 / used)
    assert any("ammonia has no concentration" in item.text for item in result.assumptions)
    first, second = log_mean(1.9 * 1.0, 2.1 * 4.0), log_mean(1.9 * 4.0, 2.5 * 12.0)
    assert state.growth_rate is not None
    assert state.growth_rate.value == pytest.approx(grown / (first * 4 + second * 6))


def test_feed_by_its_rate() -> None:
    feed = addition("feed", {"glucose": (2.0, 0.02)}, rate=([0.02, 0.08, 0.12], 0.002))
    result = find_rates(_fed(additions=(feed,)))
    brought = 2.0 * (0.05 * 4 + 0.1 * 6)
    used = 2.0 * 0.05 + brought - (0.1 * 0.05 + 0.2 * 0.04) - 2.5 * 0.02
    hours = (1.9 + 2.1) / 2 * 4 + (1.9 + 2.5) / 2 * 6
    assert result.states[0].volumetric_rate("glucose").value == pytest.approx(used / hours)
    assert any("rate of feed is straight" in item.text for item in result.assumptions)


def test_one_volume_goes_on_by_what_is_sampled_and_added() -> None:
    result = find_rates(_fed(volume=reading(2.0, 0.01)))
    # 2 - 0.1 + 0.21 = 2.11, then 2.11 - 0.2 + 0.63 = 2.54.
    used = 2.0 * 0.05 + 1.6 - (0.1 * 0.05 + 0.2 * 0.04) - 2.54 * 0.02
    made = 2.54 * 0.09 + 0.2 * 0.03
    assert result.states[0].yield_of("ethanol").value == pytest.approx(made / used)
    assert any("that of the first row" in item.text for item in result.assumptions)


def test_a_sample_that_was_not_analysed_lies_between_its_neighbours() -> None:
    broth = {
        "biomass": ([1.0, 4.0, 12.0], 0.1),
        "glucose": ([0.05, 0.04, 0.02], 0.001),
        "ethanol": ([0.0, None, 0.09], 0.001),
    }
    result = find_rates(_fed(broth=broth))
    used = 2.0 * 0.05 + 1.6 - (0.1 * 0.05 + 0.2 * 0.04) - 2.5 * 0.02
    made = 2.5 * 0.09 + 0.2 * 0.09 * 4 / 10
    assert result.states[0].yield_of("ethanol").value == pytest.approx(made / used)
    assert any("ethanol is on a straight line" in item.text for item in result.assumptions)


def test_an_unknown_sample_is_said_to_be_none() -> None:
    result = find_rates(_fed(sampled=([0.1, None, 0.3], 0.001)))
    made = 2.5 * 0.09
    used = 2.0 * 0.05 + 1.6 - 0.1 * 0.05 - 2.5 * 0.02
    assert result.states[0].yield_of("ethanol").value == pytest.approx(made / used)
    assert any("no sample was withdrawn" in item.text for item in result.assumptions)


def _with_gas(**more: Any) -> Cultivation:
    return _run(
        "batch",
        **{
            "times": [0.0, 4.0, 10.0],
            "broth": {
                "biomass": ([1.0, 4.0, 12.0], 0.1),
                "glucose": ([0.1, 0.08, 0.02], 0.001),
            },
            "volume": reading(2.0),
            "gas": gas(
                flow_in=([60.0] * 3, 0.5),
                inlet={name: (value, 0.0) for name, value in AIR.items()},
                outlet={
                    "oxygen": ([0.208, 0.205, 0.195], 0.0001),
                    "carbon dioxide": ([0.002, 0.005, 0.016], 0.0001),
                },
            ),
            **more,
        },
    )


def _gas_rates() -> list[float]:
    entering = 60 * 101.325 / (8.314462618 * 273.15)
    inert = 1 - 0.2095 - 0.0004
    return [
        entering * (inert / (1 - oxygen - carbon) * carbon - 0.0004)
        for oxygen, carbon in ((0.208, 0.002), (0.205, 0.005), (0.195, 0.016))
    ]


def test_gas_is_summed_by_trapezoids() -> None:
    result = find_rates(_with_gas())
    first, second, third = _gas_rates()
    made = (first + second) / 2 * 4 + (second + third) / 2 * 6
    assert result.states[0].yield_of("carbon dioxide").value == pytest.approx(made / 0.16)
    assert any("gas rates are straight" in item.text for item in result.assumptions)
    assert result.states[0].respiratory_quotient is not None


def test_inorganic_carbon_that_stays_in_the_broth_counts() -> None:
    plain = _with_gas()
    assert plain.gas is not None
    dissolved = DissolvedCarbonDioxide(ph=reading(7.0), temperature=303.15, pressure=101.3)
    more = _with_gas(gas=replace(plain.gas, dissolved=dissolved))
    before, after = (
        find_rates(run).states[0].yield_of("carbon dioxide").value * 0.16 for run in (plain, more)
    )
    dry = 101.3 - saturation_pressure(303.15)
    rise = inorganic_carbon(0.016 * dry, 7.0, 303.15) - inorganic_carbon(0.002 * dry, 7.0, 303.15)
    assert after - before == pytest.approx(2.0 * rise, rel=1e-9)


def test_gas_is_needed_at_both_ends() -> None:
    run = _with_gas(
        gas=gas(
            flow_in=([60.0, 60.0, None], 0.5),
            inlet={name: (value, 0.0) for name, value in AIR.items()},
            outlet={
                "oxygen": ([0.208, 0.205, 0.195], 0.0001),
                "carbon dioxide": ([0.002, 0.005, 0.016], 0.0001),
            },
        )
    )
    result = find_rates(run)
    assert {item.code for item in result.findings} == {"YN834"}
    assert result.states[0].compounds == ("glucose", "biomass")


def test_a_compound_without_an_end_is_left_out_and_told() -> None:
    broth = {
        "biomass": ([0.5, 9.0], 0.1),
        "glucose": ([0.1, 0.01], 0.001),
        "ethanol": ([0.0, None], 0.001),
    }
    result = find_rates(_run(broth=broth))
    assert result.states[0].compounds == ("glucose", "biomass")
    (finding,) = result.findings
    assert finding.code == "YN834"
    broth["glucose"] = ([0.1, None], 0.001)
    assert _refused(_run(broth=broth)) == ["YN820"]


def test_without_biomass_there_are_yields() -> None:
    broth: dict[str, Any] = {"glucose": ([0.1, 0.01], 0.001), "ethanol": ([0.0, 0.12], 0.001)}
    result = find_rates(_run(broth=broth))
    assert result.findings == ()
    assert result.states[0].growth_rate is None
    assert result.states[0].yield_of("ethanol").value == pytest.approx(0.12 / 0.09)
    broth["biomass"] = ([0.5, None], 0.1)
    result = find_rates(_run(broth=broth))
    assert {item.code for item in result.findings} == {"YN834"}
    assert result.states[0].specific_rates is None


def test_biomass_lost_in_its_error_is_refused() -> None:
    broth = {"biomass": ([0.01, 0.02], 0.1), "glucose": ([0.1, 0.01], 0.001)}
    assert _refused(_run(broth=broth)) == ["YN821"]


def test_biomass_that_begins_at_zero_has_no_logarithm() -> None:
    broth = {"biomass": ([0.0, 8.0], 0.1), "glucose": ([0.1, 0.01], 0.001)}
    result = find_rates(_run(broth=broth))
    growth = result.states[0].growth_rate
    assert growth is not None
    assert growth.value == pytest.approx(8 / (4 * 10))
    assert any("not above zero" in item.text for item in result.assumptions)


@pytest.mark.parametrize(
    ("more", "codes"),
    [
        ({"times": [0.0], "broth": {"glucose": ([0.1], 0.001)}}, ["YN822"]),
        ({"sampled": ([0.1, 0.1], 0.001)}, ["YN830"]),
        ({"volume": ([2.0, None], 0.01)}, ["YN831"]),
        (
            {"volume": reading(2.0), "additions": (addition("feed", {"glucose": (1.0, 0.1)}),)},
            ["YN831"],
        ),
        (
            {
                "volume": reading(2.0),
                "additions": (
                    addition("feed", {"glucose": (1.0, 0.1)}, added=([0.0, None], 0.01)),
                ),
            },
            ["YN831", "YN831"],
        ),
        (
            {
                "volume": ([2.0, 2.0], 0.1),
                "additions": (addition("feed", {"glucose": (1.0, 0.1)}, rate=([0.0, None], 0.01)),),
            },
            ["YN831"],
        ),
    ],
    ids=["one row", "samples of no volume", "volume", "feed of no amount", "added", "feed rate"],
)
def test_what_is_missing_is_named(more: dict[str, Any], codes: list[str]) -> None:
    assert _refused(_run(**more)) == codes


def test_logarithmic_means() -> None:
    assert log_mean(1.0, 4.0) == pytest.approx(3 / log(4))
    # Where both are nearly alike the quotient would be nothing over nothing.
    assert log_mean(2.0, 2.0) == 2.0
    assert log_mean(2.0, 2.0 + 1e-6) == pytest.approx(2.0 + 5e-7, rel=1e-12)
    assert log_mean(2.0, 2.0 * (1 + 1.01e-4)) == pytest.approx(
        2.0 * (1 + 1.01e-4 / 2 - 1.01e-4**2 / 12), rel=1e-11
    )


def test_gaps_are_filled_only_between_readings() -> None:
    found = filled([0.0, 1.0, 4.0, 5.0], [None, 2.0, None, 6.0])
    assert found == [None, 2.0, pytest.approx(5.0), 6.0]
