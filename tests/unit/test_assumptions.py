"""What an answer takes for granted."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from tests.unit.conftest import NETWORK

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.foundation.sourced import Assumption
    from yieldnet.prediction.result import Prediction

    AssumedIn = Callable[[str], dict[str, Assumption]]

F = Fraction
# 1 mol CH1.8O0.5N0.2 with 5 % ash [g/mol].
MASS = F("24.6263") / F("0.95")


@pytest.fixture
def assumed_in(predict: Callable[[str], Prediction]) -> AssumedIn:
    """Assumptions of a case by their text."""
    return lambda text: {item.text: item for item in predict(text).assumptions}


GROWING = "equation: glucose + ? ammonia + ? oxygen -> ? biomass + ? ethanol\n"


def test_the_default_of_the_surplus_is_told_as_one(assumed_in: AssumedIn) -> None:
    assert "spare ATP is lost (default of 'energy surplus')" in assumed_in(GROWING)
    assert "spare ATP is lost" in assumed_in(GROWING + "energy surplus: lost\n")
    none = assumed_in(GROWING + "energy surplus: none\n")
    assert "all ATP made goes to growth and maintenance" in none


def test_maintenance_per_substrate_where_the_uptake_is_given(assumed_in: AssumedIn) -> None:
    found = assumed_in(GROWING + "conditions: {substrate uptake: 10 mmol/g/h}\n")
    item = found["maintenance ATP from maintenance / substrate uptake"]
    # 2 mmol ATP/g/h over 10 mmol glucose/g/h.
    assert (item.value, item.unit) == (F(1, 5), "mol/mol basis")


def test_maintenance_per_biomass_where_only_the_growth_rate_is_given(
    assumed_in: AssumedIn,
) -> None:
    found = assumed_in(GROWING + "conditions: {growth rate: 0.1 1/h}\n")
    item = found["maintenance ATP from maintenance / growth rate"]
    # 2 mmol/g/h over 0.1 1/h is 20 mmol per g of biomass.
    assert (item.value, item.unit) == (F(1, 50) * MASS, "mol/mol biomass")


def test_maintenance_that_cannot_be_told_is_left_out_and_said(assumed_in: AssumedIn) -> None:
    found = assumed_in(GROWING)
    assert any(text.startswith("maintenance is left out: ") for text in found)


def test_values_exact_derived_and_set_aside(assumed_in: AssumedIn) -> None:
    found = assumed_in(
        GROWING + "conditions: {growth rate: 0.1 ± 0.01 1/h, substrate uptake: 13 mmol/g/h}\n"
        "measured: {ammonia: 0.06, ethanol: 1.5 ± 0.1}\naim: most ethanol\n"
    )
    assert found["measured ammonia is exact"].value == F("0.06")
    growth = found["biomass follows from growth rate / substrate uptake"]
    assert growth.value == F("0.1") / F("0.013") / MASS
    aside = found["measured ethanol is set aside, since ethanol is the aim"]
    assert aside.value == F(3, 2)


def test_a_value_without_a_unit_is_told_to_be_in_mol(assumed_in: AssumedIn) -> None:
    found = assumed_in(
        GROWING + "measured: {ethanol: 1.5 ± 0.1, biomass: 0.01 ± 0.01 g/g}\n"
        "demands: {oxygen: at most 3}\n"
    )
    (text,) = [text for text in found if "without a unit" in text]
    assert "measured ethanol" in text
    assert "demand oxygen" in text
    assert "biomass" not in text


def test_temperature_ash_parameters_and_closed_compounds(assumed_in: AssumedIn) -> None:
    found = assumed_in(GROWING + "conditions: {temperature: 303.15 K}\n")
    temperature = found["the temperature is kept and not used here"]
    assert (temperature.value, temperature.unit) == (F(30), "degC")
    ash = found["biomass is CH1.8O0.5N0.2; its dry weight holds ash"]
    assert (ash.value, ash.unit) == (F(1, 20), "g/g")
    po = found["parameter po"]
    assert (po.value, po.source) == (F(3, 2), "from memory")
    assert "not in the equation, so zero: lactate, hydrogen" in found


def test_a_parameter_set_in_the_case_is_told_as_such(assumed_in: AssumedIn) -> None:
    found = assumed_in(GROWING + "parameters: {po: 5/4}\n")
    po = found["parameter po (set in the case)"]
    assert (po.value, po.source) == (F(5, 4), "")


def test_a_parameter_that_is_switched_off_is_not_told(assumed_in: AssumedIn) -> None:
    found = assumed_in(GROWING + "knock-outs: [respiration]\n")
    assert not any(text.startswith("parameter") for text in found)


def test_elements_alone_assume_nothing_of_a_network(answers: dict[str, Prediction]) -> None:
    assert answers["taken up"].assumptions == ()
    words = " ".join(item.text for item in answers["charged"].assumptions)
    assert "measured biomass is exact" in words
    assert not any(word in words for word in ("ATP", "parameter", "not in the equation"))


SETS = """parameter sets:
  much pumping: {about: all of it, source: from a book, values: {po: 2}}
"""


def test_a_parameter_set_is_told_with_its_source(
    predict: Callable[[str], Prediction], tmp_path: Path
) -> None:
    (tmp_path / "network.yaml").write_text(NETWORK + SETS, "utf-8")
    asked = "equation: glucose + ? oxygen -> ? ethanol\nparameter set: much pumping\n"
    found = {item.text: item for item in predict(asked).assumptions}
    assert found["parameter set 'much pumping': all of it"].source == "from a book"
    value = found["parameter po (parameter set 'much pumping')"]
    assert (value.value, value.source) == (F(2), "from a book")


def test_a_value_of_the_case_comes_on_top_of_its_set(
    predict: Callable[[str], Prediction], tmp_path: Path
) -> None:
    (tmp_path / "network.yaml").write_text(NETWORK + SETS, "utf-8")
    asked = (
        "equation: glucose + ? oxygen -> ? ethanol\nparameter set: much pumping\n"
        "parameters: {po: 1}\naim: most ATP\n"
    )
    result = predict(asked)
    found = {item.text: item for item in result.assumptions}
    assert found["parameter po (set in the case)"].value == 1
    assert "parameter po (parameter set 'much pumping')" not in found
    assert "parameter set 'much pumping': all of it" in found
    # 2 ATP and 12 NADH at 1 each, the set would give 2 each.
    assert result.aim is not None
    assert result.aim.value == 14
