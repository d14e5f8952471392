"""What every run is checked for, and what is told of its rates."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

from tests.unit.cultivations import addition, cultivation, place, series
from yieldnet.foundation.catalogue import CATALOGUE
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Finding, Severity
from yieldnet.foundation.units import UnitError
from yieldnet.model.cultivation import Additions, Reading
from yieldnet.rates.rates import find_rates
from yieldnet.rates.values import Values, covariance, deviation, nominal

if TYPE_CHECKING:
    from pathlib import Path

    from yieldnet.model.cultivation import Cultivation


def _run(**more: Any) -> Cultivation:
    return cultivation(
        "batch",
        **{
            "method": "start and end",
            "times": [0.0, 10.0],
            "broth": {
                "biomass": ([0.5, 9.0], 0.1),
                "glucose": ([0.1, 0.01], 0.001),
                "ethanol": ([0.0, 0.12], 0.001),
            },
            **more,
        },
    )


def test_the_basis_must_be_measured() -> None:
    with pytest.raises(InputError, match="nothing was measured of glucose") as refused:
        find_rates(_run(broth={"ethanol": ([0.0, 0.12], 0.001)}))
    assert [item.code for item in refused.value.findings] == ["YN820"]


def test_all_errors_come_at_once() -> None:
    twice = (series("ethanol", [0.0, 0.1], 0.001), series("ethanol", [0.0, 0.2], 0.001))
    with pytest.raises(InputError, match="twice in the broth") as refused:
        find_rates(replace(_run(), broth=twice))
    assert {item.code for item in refused.value.findings} == {"YN820", "YN837"}
    (double,) = (item for item in refused.value.findings if item.code == "YN837")
    assert double.where is not None
    assert double.left
    assert double.right


def test_a_basis_that_is_not_consumed_has_no_yields() -> None:
    broth = {"glucose": ([0.01, 0.1], 0.001), "ethanol": ([0.0, 0.12], 0.001)}
    with pytest.raises(InputError, match="glucose is not consumed") as refused:
        find_rates(_run(broth=broth))
    assert [item.code for item in refused.value.findings] == ["YN832"]


def test_a_basis_lost_in_its_error_is_doubtful() -> None:
    broth = {"glucose": ([0.1, 0.099], 0.001), "ethanol": ([0.0, 0.12], 0.001)}
    (finding,) = find_rates(_run(broth=broth)).findings
    assert (finding.code, finding.severity) == ("YN832", Severity.WARNING)
    assert "s.d." in finding.right


def test_a_rate_on_the_other_side_is_told_and_negative() -> None:
    broth = {
        "glucose": ([0.1, 0.01], 0.001),
        "ethanol": ([0.05, 0.02], 0.001),
        "ammonia": ([0.05, 0.06], 0.001),
    }
    result = find_rates(_run(broth=broth))
    assert [item.code for item in result.findings] == ["YN825", "YN825"]
    told = {item.message.split(" is ")[0]: item for item in result.findings}
    assert told["ethanol"].left == "declared produced"
    assert told["ethanol"].right.startswith("consumed at 0.003 ±")
    assert told["ammonia"].right.startswith("produced at 0.001 ±")
    (state,) = result.states
    assert state.yield_of("ethanol").value == pytest.approx(-0.03 / 0.09)
    assert state.yield_of("ammonia").value == pytest.approx(-0.01 / 0.09)


def test_a_little_on_the_other_side_is_error() -> None:
    broth = {"glucose": ([0.1, 0.01], 0.001), "ethanol": ([0.051, 0.05], 0.001)}
    assert find_rates(_run(broth=broth)).findings == ()


def test_either_side_counts_given_off() -> None:
    broth = {
        "glucose": ([0.1, 0.01], 0.001),
        "ethanol": ([0.05, 0.02], 0.001),
        "acetate": ([0.0, 0.02], 0.001),
    }
    result = find_rates(_run(broth=broth, right=("biomass",), either=("acetate", "ethanol")))
    assert result.findings == ()
    (state,) = result.states
    # In the order of the run, whatever that of the sheet.
    assert state.compounds == ("glucose", "acetate", "ethanol")
    assert state.yield_of("ethanol").value == pytest.approx(-0.03 / 0.09)
    assert state.yield_of("acetate").value == pytest.approx(0.02 / 0.09)


def test_doubts_of_reading_travel_with_the_result() -> None:
    doubt = Finding(code="YN201", message="doubtful", severity=Severity.WARNING)
    result = find_rates(_run(findings=(doubt,)))
    assert result.findings == (doubt,)
    assert result.run.findings == (doubt,)


def test_what_is_taken_for_granted_is_listed() -> None:
    texts = [item.text for item in find_rates(_run()).assumptions]
    assert len(texts) == len(set(texts))
    assert any("ash" in text for text in texts)
    assert any("no volume is given" in text for text in texts)
    assert any("logarithmic mean" in text for text in texts)
    assert not any("window" in text for text in texts)
    named = find_rates(_run(window=(0.0, 5.0))).assumptions
    assert any("the window is not used" in item.text for item in named)


def test_a_feed_concentration_that_is_missing_in_a_row() -> None:
    feed = Additions(
        name="feed",
        contents_by_row=(series("glucose", [0.1, None], 0.001),),
        added=series("", [0.0, 0.1], 0.001),
    )
    with pytest.raises(InputError, match="glucose in feed is missing") as refused:
        find_rates(_run(additions=(feed,)))
    assert refused.value.findings[0].where == place(3)


def test_a_compound_without_carbon_has_no_carbon_yield() -> None:
    feed = addition("base", {"ammonia": (5.0, 0.05)}, added=([0.0, 0.01], 0.001))
    run = _run(volume=Reading(value=1.0, sd=0.0), additions=(feed,))
    (state,) = find_rates(run).states
    assert state.yield_in_grams("ammonia").value == pytest.approx(
        state.yield_of("ammonia").value * 17.031 / 180.156, rel=1e-4
    )
    with pytest.raises(UnitError, match="carbon"):
        state.yield_in_carbon("ammonia")


def test_matrices_are_symmetric_and_hold_no_negative_variance() -> None:
    (state,) = find_rates(_run()).states
    assert state.specific_covariance is not None
    for matrix in (
        state.specific_covariance,
        state.volumetric_covariance,
        state.yield_covariance,
    ):
        array = np.array(matrix)
        assert array == pytest.approx(array.T)
        assert np.linalg.eigvalsh(array).min() >= -1e-12 * np.trace(array)
    assert (state.basis, state.products) == ("glucose", ("biomass", "ethanol"))


def test_exact_yields_have_no_correlation() -> None:
    broth = {
        "biomass": ([0.5, 9.0], 0.0),
        "glucose": ([0.1, 0.01], 0.0),
        "ethanol": ([0.0, 0.12], 0.001),
    }
    (state,) = find_rates(_run(broth=broth)).states
    assert state.yield_of("biomass").sd == 0
    assert state.correlation("biomass", "ethanol") is None


def test_a_value_written_once_is_one_source() -> None:
    values = Values(_run())
    written = place(7, 3)
    one, same, other = (
        values.of(Reading(value=2.0, sd=0.1, span=span)) for span in (written, written, place(8, 3))
    )
    assert deviation(one - same) == 0
    assert deviation(one - other) == pytest.approx(0.1 * 2**0.5)
    assert values.of(Reading(value=2.0, sd=0.0)) == 2.0


def test_covariance_of_values_and_plain_numbers() -> None:
    values = Values(_run())
    first = values.of(Reading(value=2.0, sd=0.1, span=place(1)))
    second = values.of(Reading(value=3.0, sd=0.2, span=place(2)))
    matrix = covariance([first * second, first, 1.0])
    # Slopes 3 and 2 of the product.
    assert matrix[0, 0] == pytest.approx((3 * 0.1) ** 2 + (2 * 0.2) ** 2)
    assert matrix[0, 1] == pytest.approx(3 * 0.1 * 0.1)
    assert matrix[2].tolist() == [0.0, 0.0, 0.0]
    assert nominal(first * second) == 6.0


def test_every_code_of_rates_is_expected_by_a_test(checkout: Path) -> None:
    # Rates are found from runs made in tests, so their codes have no file of bad input.
    codes = {code for code in CATALOGUE if "YN820" <= code <= "YN849"}
    texts = "".join(
        path.read_text("utf-8") for path in sorted((checkout / "tests/unit").glob("test_rates*.py"))
    )
    assert len(codes) == 20
    assert {code for code in codes if texts.count(f'"{code}"') == 0} == set()
