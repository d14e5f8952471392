"""Recoveries at the values as measured, worked by hand."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from tests.unit.judged import FERMENTATION, TWO_PRODUCTS, case_from, correlated, measured
from yieldnet.balance.covariance import pool
from yieldnet.balance.elements import balances_by_name
from yieldnet.balance.recovery import measured_recoveries

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from tests.unit.judged import CaseOf
    from yieldnet.balance.recovery import MeasuredRecovery
    from yieldnet.model.case import Correlation, Measurement

F = Fraction


def _recoveries(
    case_of: CaseOf,
    text: str,
    values: Sequence[Measurement],
    exact: Mapping[str, Fraction],
    correlations: Sequence[Correlation] = (),
) -> dict[str, MeasuredRecovery]:
    case = case_from(case_of, text)
    found = measured_recoveries(case, balances_by_name(case), pool(values, correlations), exact)
    return {item.quantity: item for item in found}


def test_carbon_and_electrons_of_two_products(case_of: CaseOf) -> None:
    values = [measured("ethanol", "1.9", "0.1"), measured("carbon dioxide", "2.1", "0.1")]
    found = _recoveries(case_of, FERMENTATION, values, {})
    assert list(found) == ["carbon", "electrons", "oxygen", "hydrogen"]
    # 2 · 1.9 + 2.1 of 6; the variance is (4 + 1) · 0.01 / 36.
    assert found["carbon"].ratio == F("5.9") / 6
    assert [found["carbon"].supplied, found["carbon"].found] == [6, F("5.9")]
    assert float(found["carbon"].sd) == pytest.approx(0.05**0.5 / 6, rel=1e-12)
    # 12 · 1.9 of 24, with 12 · 0.1 of error.
    assert found["electrons"].ratio == F("0.95")
    assert found["electrons"].sd == F("0.05")
    assert found["oxygen"].ratio == F("6.1") / 6
    assert all(item.left_out == () for item in found.values())


def test_correlated_errors_add_up(case_of: CaseOf) -> None:
    values = [measured("ethanol", "1.9", "0.1"), measured("carbon dioxide", "2.1", "0.1")]
    ties = [correlated("ethanol", "carbon dioxide", "1/2")]
    found = _recoveries(case_of, FERMENTATION, values, {}, ties)
    # 4 + 1 + 2 · 2 · 1/2 = 7.
    assert float(found["carbon"].sd) == pytest.approx(0.07**0.5 / 6, rel=1e-12)


def test_what_is_not_measured_is_named(case_of: CaseOf) -> None:
    values = [measured("ethanol", "1.2", "0.2"), measured("lactate", "1.0", "0.1")]
    found = _recoveries(case_of, TWO_PRODUCTS, values, {})
    assert found["carbon"].left_out == ("carbon dioxide",)
    assert found["carbon"].ratio == F("5.4") / 6
    # Carbon dioxide and water hold no available electrons.
    assert found["electrons"].left_out == ()
    assert found["electrons"].ratio == F("1.1")
    assert found["hydrogen"].left_out == ("water",)
    assert found["oxygen"].left_out == ("carbon dioxide", "water")


def test_an_exact_value_counts_without_an_error(case_of: CaseOf) -> None:
    values = [measured("carbon dioxide", "2.1", "0.1")]
    found = _recoveries(case_of, FERMENTATION, values, {"ethanol": F(2)})
    assert found["carbon"].ratio == F("6.1") / 6
    assert found["carbon"].sd == F("0.1") / 6
    assert found["electrons"].ratio == 1
    assert found["electrons"].sd == 0


def test_oxygen_that_is_taken_up_finds_electrons(case_of: CaseOf) -> None:
    text = (
        "case: x\nequation: glucose + ? oxygen -> ? ethanol\neither side: [carbon dioxide, water]\n"
    )
    values = [measured("oxygen", "3.3", "0.3"), measured("ethanol", "1", "0.1")]
    electrons = _recoveries(case_of, text, values, {})["electrons"]
    # 12 · 1 + 4 · 3.3 of 24; variance (144 · 0.01 + 16 · 0.09) / 576.
    assert electrons.ratio == F("25.2") / 24
    assert float(electrons.sd) == pytest.approx(2.88**0.5 / 24, rel=1e-12)
    assert electrons.left_out == ()


def test_a_second_substrate_is_part_of_what_is_supplied(case_of: CaseOf) -> None:
    text = (
        "case: x\nequation: glucose + ? acetate -> ? ethanol\n"
        "either side: [carbon dioxide, water]\n"
    )
    values = [measured("acetate", "1", "0.1"), measured("ethanol", "2.5", "0.2")]
    electrons = _recoveries(case_of, text, values, {})["electrons"]
    # 30 of 24 + 8; an error of acetate moves the ratio by 8 · 30/32 / 32, of ethanol by 12 / 32.
    assert electrons.supplied == 32
    assert electrons.ratio == F(15, 16)
    variance = (7.5 * 0.1) ** 2 + (12 * 0.2) ** 2
    assert float(electrons.sd) == pytest.approx(variance**0.5 / 32, rel=1e-12)


def test_an_element_that_nothing_known_supplies_has_no_recovery(case_of: CaseOf) -> None:
    text = (
        "case: x\nequation: glucose + ? ammonia -> ? biomass\n"
        "either side: [carbon dioxide, water]\ncompounds: {biomass: CH1.8O0.5N0.2}\n"
    )
    values = [measured("biomass", "3", "0.1")]
    assert "nitrogen" not in _recoveries(case_of, text, values, {})
    both = _recoveries(case_of, text, values, {"ammonia": F("0.5")})
    # 3 · 0.2 of 0.5.
    assert both["nitrogen"].ratio == F("1.2")
