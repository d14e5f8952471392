"""Yield on ATP in predictions: worked by hand, and told where it is beyond what is known."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

import yieldnet
from tests.unit.cells import GRAMS, case_of
from yieldnet.foundation.findings import Severity
from yieldnet.optimum.ranges import Range
from yieldnet.prediction.growth_energy import AtpYield, doubtful_atp_yield

if TYPE_CHECKING:
    from pathlib import Path

M = Fraction(GRAMS)
AIM = "aim: most biomass\n"


def test_growth_alone_where_no_maintenance_is_known(tmp_path: Path) -> None:
    found = yieldnet.predict(case_of(tmp_path, AIM)).y_atp
    assert found is not None
    assert found.range == Range(M / 2, M / 2)
    assert not found.with_maintenance
    assert found.growth == 2 / M


def test_maintenance_per_mol_basis(tmp_path: Path) -> None:
    """1 mmol/g/h at 2 mmol/g/h is 1/2 ATP per glucose: 1 = Y/6 + r, 20 r = 2 Y + 1/2."""
    more = AIM + "conditions: {substrate uptake: 2 mmol/g/h}\n"
    result = yieldnet.predict(case_of(tmp_path, more))
    biomass = (20 - Fraction(1, 2)) / (2 + Fraction(20, 6))
    assert result.aim is not None
    assert result.aim.value == biomass
    assert result.y_atp is not None
    assert result.y_atp.range.low == M * biomass / (2 * biomass + Fraction(1, 2))
    assert result.y_atp.with_maintenance


def test_a_range_of_biomass_gives_a_range_on_atp(tmp_path: Path) -> None:
    more = "conditions: {substrate uptake: 2 mmol/g/h}\n"
    result = yieldnet.predict(case_of(tmp_path, more))
    assert result.y_atp is not None
    assert result.y_atp.range.low == 0
    high = result.y_atp.range.high
    assert high is not None
    assert 0 < high < M / 2


@pytest.mark.parametrize(
    "more", ["aim: most ethanol\n", "aim: least ethanol\ndemands: {biomass: at most 0}\n"]
)
def test_no_growth_has_no_yield_on_atp(tmp_path: Path, more: str) -> None:
    result = yieldnet.predict(case_of(tmp_path, more))
    assert result.y_atp is None
    assert yieldnet.balance(case_of(tmp_path, AIM)).y_atp is None


def _yield(low: str, high: str) -> AtpYield:
    return AtpYield(
        range=Range(Fraction(low), Fraction(high)), growth=Fraction(1, 10), with_maintenance=True
    )


@pytest.mark.parametrize(
    ("low", "high", "severity"),
    [
        ("28.9", "40", Severity.WARNING),
        ("28.8", "28.8", None),
        ("3", "30", None),
        ("4", "4", None),
        ("1", "3.9", Severity.NOTE),
    ],
)
def test_doubt_is_told_only_wholly_outside(low: str, high: str, severity: Severity | None) -> None:
    found = doubtful_atp_yield(_yield(low, high), None)
    assert [item.severity for item in found] == ([] if severity is None else [severity])
    assert all(item.code == "YN880" for item in found)
    assert doubtful_atp_yield(None, None) == ()


def test_a_prediction_tells_growth_that_is_too_cheap(tmp_path: Path) -> None:
    result = yieldnet.predict(case_of(tmp_path, AIM, growth="1"))
    (finding,) = [item for item in result.findings if item.code == "YN880"]
    assert "30 g/mol ATP" in finding.left
    assert finding.severity is Severity.WARNING
