"""Chemostats worked by hand."""

from __future__ import annotations

from math import sqrt
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

from tests.unit.cultivations import BIOMASS_MASS, addition, cultivation, reading, series, shared
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Severity
from yieldnet.model.cultivation import Additions
from yieldnet.rates.rates import find_rates

if TYPE_CHECKING:
    from yieldnet.model.cultivation import Cultivation

FEED = addition("feed", {"glucose": (0.1, 0.001)})


def _run(**more: Any) -> Cultivation:
    return cultivation(
        "chemostat",
        **{
            "states": ["slow"],
            "broth": {
                "biomass": ([8.0], 0.16),
                "glucose": ([0.004], 0.0002),
                "ethanol": ([0.05], 0.001),
            },
            "dilution_rate": ([0.1], 0.002),
            "additions": (FEED,),
            **more,
        },
    )


def _refused(run: Cultivation) -> list[str]:
    with pytest.raises(InputError, match="error YN8") as refused:
        find_rates(run)
    return [item.code for item in refused.value.findings if item.severity is Severity.ERROR]


def test_rates_and_yields_by_hand() -> None:
    (state,) = find_rates(_run()).states
    assert state.label == "slow"
    assert state.compounds == ("glucose", "biomass", "ethanol")
    assert state.growth_rate is not None
    assert state.growth_rate.value == pytest.approx(0.1)
    assert state.growth_rate.sd == pytest.approx(0.002)
    # 0.1 (0.1 - 0.004) = 0.0096 mol/L/h of glucose; 0.1 * 0.05 of ethanol; 0.1 * 8 g of biomass.
    assert state.volumetric_rate("glucose").value == pytest.approx(0.0096)
    assert state.volumetric_rate("ethanol").value == pytest.approx(0.005)
    assert state.volumetric_rate("biomass").value == pytest.approx(0.8 / BIOMASS_MASS)
    assert state.specific_rate("glucose").value == pytest.approx(0.0096 / 8)
    assert state.specific_rate("biomass").value == pytest.approx(0.1 / BIOMASS_MASS)
    assert state.yield_of("ethanol").value == pytest.approx(0.05 / 0.096)
    assert state.yield_of("biomass").value == pytest.approx(8 / BIOMASS_MASS / 0.096)
    # Weight: 8 g of biomass for 0.096 * 180.156 g of glucose, ash in it.
    assert state.yield_in_grams("biomass").value == pytest.approx(8 / (0.096 * 180.156))
    assert state.yield_in_carbon("ethanol").value == pytest.approx(0.05 * 2 / (0.096 * 6))


def test_errors_by_hand() -> None:
    (state,) = find_rates(_run()).states
    # Consumed per volume of feed: 0.096 with sqrt(0.001^2 + 0.0002^2).
    used = sqrt(0.001**2 + 0.0002**2) / 0.096
    ethanol, biomass = 0.001 / 0.05, 0.16 / 8
    found = state.yield_of("ethanol")
    assert found.sd / found.value == pytest.approx(sqrt(used**2 + ethanol**2))
    assert state.correlation("ethanol", "biomass") == pytest.approx(
        used**2 / sqrt((used**2 + ethanol**2) * (used**2 + biomass**2))
    )
    assert state.correlation("ethanol", "ethanol") == pytest.approx(1.0)
    # The dilution rate counts in the rate and cancels in the yield.
    rate = state.volumetric_rate("glucose")
    assert rate.sd / rate.value == pytest.approx(sqrt(used**2 + 0.02**2))
    specific = state.specific_rate("glucose")
    assert specific.sd / specific.value == pytest.approx(sqrt(used**2 + 0.02**2 + 0.02**2))


def test_yields_by_weight_and_carbon_keep_their_relative_error() -> None:
    (state,) = find_rates(_run()).states
    plain = state.yield_of("biomass")
    for other in (state.yield_in_grams("biomass"), state.yield_in_carbon("biomass")):
        assert other.sd / other.value == pytest.approx(plain.sd / plain.value)


def test_biomass_in_the_feed_is_not_grown() -> None:
    fed = addition("feed", {"glucose": (0.1, 0.001), "biomass": (2.0, 0.05)})
    (state,) = find_rates(_run(additions=(fed,))).states
    assert state.growth_rate is not None
    assert state.growth_rate.value == pytest.approx(0.1 - 0.1 * 2 / 8)
    assert state.volumetric_rate("biomass").value == pytest.approx(0.1 * 6 / BIOMASS_MASS)


def test_feed_and_base_rates_give_the_dilution_rate() -> None:
    # 0.15 L/h feed and 0.01 L/h base in 1.6 L: D = 0.1 1/h, and the base dilutes the feed.
    feed = addition("feed", {"glucose": (0.1, 0.001)}, rate=([0.15], 0.001))
    base = addition("base", {"ammonia": (5.0, 0.05)}, rate=([0.01], 0.0002))
    run = _run(dilution_rate=None, additions=(feed, base), volume=reading(1.6, 0.01))
    result = find_rates(run)
    (state,) = result.states
    assert state.growth_rate is not None
    assert state.growth_rate.value == pytest.approx(0.16 / 1.6)
    used = 0.15 / 1.6 * 0.1 - 0.1 * 0.004
    assert state.volumetric_rate("glucose").value == pytest.approx(used)
    # Nothing is known of ammonia in the broth, so all of it was taken up, and that is said.
    assert state.volumetric_rate("ammonia").value == pytest.approx(0.01 / 1.6 * 5)
    assert any("ammonia has no concentration" in item.text for item in result.assumptions)
    broth = {
        "biomass": ([8.0], 0.16),
        "glucose": ([0.004], 0.0002),
        "ammonia": ([0.002], 0.0001),
    }
    (other,) = find_rates(
        _run(
            dilution_rate=None,
            additions=(feed, base),
            volume=reading(1.6, 0.01),
            broth=broth,
        )
    ).states
    assert other.volumetric_rate("ammonia").value == pytest.approx(0.01 / 1.6 * 5 - 0.1 * 0.002)


def test_dilution_rate_less_base_is_feed() -> None:
    base = addition("base", {"ammonia": (5.0, 0.05)}, rate=([0.016], 0.0002))
    (state,) = find_rates(_run(additions=(FEED, base), volume=reading(1.6, 0.01))).states
    assert state.volumetric_rate("glucose").value == pytest.approx(0.09 * 0.1 - 0.1 * 0.004)


def test_dilution_rate_and_feed_rate_that_disagree_are_told() -> None:
    feed = addition("feed", {"glucose": (0.1, 0.001)}, rate=([0.2], 0.001))
    result = find_rates(_run(additions=(feed,), volume=reading(1.6, 0.01)))
    assert [item.code for item in result.findings] == ["YN835"]
    assert "0.1 1/h" in result.findings[0].left
    assert "0.125 1/h" in result.findings[0].right


@pytest.mark.parametrize(
    "more",
    [
        {"dilution_rate": None},
        {"additions": (FEED, addition("base", {"ammonia": (5.0, 0.05)}))},
        {
            "additions": (
                Additions(name="feed", contents_by_row=(series("glucose", [None], 0.001),)),
            )
        },
    ],
    ids=["no dilution rate", "no base rate", "no feed concentration in a row"],
)
def test_a_flow_that_is_missing(more: dict[str, Any]) -> None:
    assert _refused(_run(**more)) == ["YN831"]


def test_feed_concentrations_row_by_row() -> None:
    feed = Additions(name="feed", contents_by_row=(series("glucose", [0.1, 0.2], 0.001),))
    run = _run(
        states=["low", "high"],
        broth={"biomass": ([8.0, 16.0], 0.1), "glucose": ([0.004, 0.004], 0.0002)},
        dilution_rate=([0.1, 0.1], 0.002),
        additions=(feed,),
    )
    low, high = find_rates(run).states
    assert low.volumetric_rate("glucose").value == pytest.approx(0.0096)
    assert high.volumetric_rate("glucose").value == pytest.approx(0.0196)


def _replicates(glucose: list[float | None], **more: Any) -> Cultivation:
    rows = len(glucose)
    return _run(
        **{
            "states": ["slow"] * rows,
            "broth": {
                "biomass": ([8.0] * rows, 0.16),
                "glucose": (glucose, 0.0002),
            },
            "dilution_rate": ([0.1] * rows, 0.0),
            **more,
        }
    )


def test_replicates_are_averaged() -> None:
    (state,) = find_rates(_replicates([0.0039, 0.0041])).states
    rate = state.volumetric_rate("glucose")
    assert rate.value == pytest.approx(0.0096)
    # Of the readings the mean halves the variance; the feed is one source for both.
    assert rate.sd == pytest.approx(0.1 * sqrt(0.001**2 + 0.0002**2 / 2))
    (scatter,) = (x for x in state.scatter if x.quantity == "volumetric rate of glucose")
    # The difference, 0.0002, over sqrt(2) 0.0002.
    assert scatter.chi_square == pytest.approx(0.5)
    assert (scatter.degrees_of_freedom, scatter.replicates, scatter.ratio) == (1, 2, 1.0)


def test_replicates_that_scatter_too_much_enlarge_the_error() -> None:
    result = find_rates(_replicates([0.0030, 0.0040, 0.0056]))
    (state,) = result.states
    # Deviations from the mean 0.0042 in units of 0.0002: -6, -1, 7.
    (scatter,) = (x for x in state.scatter if x.quantity == "volumetric rate of glucose")
    assert scatter.chi_square == pytest.approx(36 + 1 + 49)
    assert scatter.ratio == pytest.approx(sqrt(86 / 2))
    plain = 0.1 * sqrt(0.001**2 + 0.0002**2 / 3)
    assert state.volumetric_rate("glucose").sd == pytest.approx(plain * sqrt(43))
    (finding,) = result.findings
    assert finding.code == "YN826"
    assert "volumetric rate of glucose" in finding.message
    assert "6.56" in finding.hint
    matrix = np.array(state.volumetric_covariance)
    assert np.linalg.eigvalsh(matrix).min() > -1e-18


def test_replicates_that_share_all_their_errors_go_by_their_scatter() -> None:
    # Feed concentration and nothing else has an error, and the dilution rate was set twice.
    broth = {"biomass": ([8.0, 8.0], 0.0), "glucose": ([0.0, 0.0], 0.0)}
    exact = {"broth": broth, "dilution_rate": ([0.1, 0.102], 0.0)}
    assert set(_refused(_replicates([0.0, 0.0], **exact))) == {"YN833"}
    same = {"broth": broth, "dilution_rate": ([0.1, 0.1], 0.0)}
    (state,) = find_rates(_replicates([0.0, 0.0], **same)).states
    assert {item.ratio for item in state.scatter} == {1.0}
    assert state.volumetric_rate("glucose").sd == pytest.approx(0.1 * 0.001)


def test_scatter_without_errors_of_the_rows_is_the_error() -> None:
    # One reading of the dilution rate for both rows; the broth is declared exact and differs.
    columns = {
        "biomass": ([8.0, 8.0], 0.0),
        "glucose": ([0.003, 0.005], 0.0),
    }
    run = _replicates([0.0, 0.0], broth=columns)
    (state,) = find_rates(run).states
    (scatter,) = (x for x in state.scatter if x.quantity == "volumetric rate of glucose")
    assert scatter.p_value == 0
    # The mean of 0.00970 and 0.00950 mol/L/h: 0.0001 from the scatter, 0.0001 from the feed.
    assert state.volumetric_rate("glucose").sd == pytest.approx(0.0001)


def test_a_row_without_a_reading_is_left_out_of_that_mean() -> None:
    result = find_rates(_replicates([0.0040, None]))
    (state,) = result.states
    assert state.volumetric_rate("glucose").value == pytest.approx(0.0096)
    assert {item.quantity for item in state.scatter} == {
        "volumetric rate of biomass",
        "specific rate of biomass",
        "growth rate",
    }


def test_a_compound_that_a_state_lacks_is_told() -> None:
    broth = {
        "biomass": ([8.0, 8.0], 0.1),
        "glucose": ([0.004, 0.004], 0.0002),
        "ethanol": ([0.05, None], 0.001),
    }
    run = _run(states=["slow", "fast"], broth=broth, dilution_rate=([0.1, 0.2], 0.002))
    result = find_rates(run)
    assert result.state("slow").compounds == ("glucose", "biomass", "ethanol")
    assert result.state("fast").compounds == ("glucose", "biomass")
    (finding,) = result.findings
    assert finding.code == "YN834"
    assert "ethanol was not measured in state 'fast'" in finding.message
    with pytest.raises(KeyError, match="other"):
        result.state("other")


def test_a_state_without_the_basis_is_refused() -> None:
    assert _refused(_replicates([None])) == ["YN820"]


def test_rows_without_a_name_are_no_replicates() -> None:
    run = _run(
        states=["", ""],
        broth={"biomass": ([8.0, 9.0], 0.1), "glucose": ([0.004, 0.004], 0.0002)},
        dilution_rate=([0.1, 0.2], 0.002),
    )
    result = find_rates(run)
    assert [state.label for state in result.states] == ["row 1", "row 2"]
    assert any("names no steady state" in item.text for item in result.assumptions)


def test_without_biomass_there_are_yields_and_no_specific_rates() -> None:
    run = _run(broth={"glucose": ([0.004], 0.0002), "ethanol": ([0.05], 0.001)})
    (state,) = find_rates(run).states
    assert state.growth_rate is None
    assert state.specific_rates is None
    assert state.yield_of("ethanol").value == pytest.approx(0.05 / 0.096)
    with pytest.raises(KeyError, match="ethanol"):
        state.specific_rate("ethanol")
    with pytest.raises(KeyError, match="biomass"):
        state.volumetric_rate("biomass")
    with pytest.raises(KeyError, match="glucose"):
        state.yield_of("glucose")


def test_one_reading_in_two_rows_is_one_source() -> None:
    # The same concentration of the feed, once as one reading for both rows, once as two.
    one = Additions(name="feed", contents_by_row=(shared("glucose", 0.1, 0.001, 2),))
    two = Additions(name="feed", contents_by_row=(series("glucose", [0.1, 0.1], 0.001),))
    sds = []
    for item in (one, two):
        run = _run(
            states=["slow", "slow"],
            broth={"biomass": ([8.0, 8.0], 0.16), "glucose": ([0.004, 0.004], 0.0)},
            dilution_rate=([0.1, 0.1], 0.0),
            additions=(item,),
        )
        sds.append(find_rates(run).states[0].volumetric_rate("glucose").sd)
    assert sds[0] == pytest.approx(0.1 * 0.001)
    assert sds[1] == pytest.approx(0.1 * 0.001 / sqrt(2))
