"""Judged data as JSON and CSV."""

from __future__ import annotations

import json
from math import sqrt
from typing import TYPE_CHECKING

import pytest

from tests.unit.judged import fermentation, judge, two_products
from yieldnet.foundation.findings import Finding, Severity
from yieldnet.report.data_form import data_form, data_records, refused_data_form
from yieldnet.report.json_form import as_text

if TYPE_CHECKING:
    from pathlib import Path
    from typing import Any

    from yieldnet.prediction.reconciliation import Reconciliation


@pytest.fixture
def agreeing(tmp_path: Path) -> Reconciliation:
    text = two_products("1.2 ± 0.2", "1.0 ± 0.1", "aim: most carbon dioxide\n")
    return judge(tmp_path, text)


def _refuse_constant(name: str) -> float:
    raise AssertionError(f"{name} is not JSON")


def _read(result: Reconciliation) -> dict[str, Any]:
    """The form as whoever reads the JSON sees it."""
    form = json.loads(as_text(data_form(result)), parse_constant=_refuse_constant)
    assert isinstance(form, dict)
    return form


def test_refused_data_have_all_keys_and_no_numbers(agreeing: Reconciliation) -> None:
    finding = Finding(code="YN111", message="nothing", severity=Severity.ERROR)
    form = refused_data_form([finding])
    assert form["status"] == "refused"
    assert form.keys() == data_form(agreeing).keys()
    assert [item["code"] for item in form["findings"]] == ["YN111"]
    filled = {key for key, value in form.items() if value}
    assert filled == {"format", "status", "findings", "next"}
    assert not any(form["next"].values())
    assert form["next"].keys() == data_form(agreeing)["next"].keys()


def test_the_form_of_values_that_agree(agreeing: Reconciliation) -> None:
    form = _read(agreeing)
    assert form["format"] == 1
    assert (form["case"], form["status"], form["feasible"]) == ("Two products", "agrees", True)
    assert form["basis"] == {"compound": "glucose", "unit": "mol"}
    assert form["coefficients"][0] == {
        "compound": "ethanol",
        "side": "produced",
        "known": "measured",
        "redundant": "elements",
        "calculable": None,
    }
    assert form["coefficients"][2]["calculable"] == "elements"
    assert form["equations"] == [
        {
            "name": "electron balance",
            "terms": {"measured ethanol": 12.0, "measured lactate": 12.0},
            "constant": 24.0,
            "measured": pytest.approx(26.4),
        }
    ]
    (test,) = form["tests"]
    assert test["layer"] == "elements"
    assert test["statistic"] == 0.8
    assert test["exact"] == "4/5"
    assert (test["degrees"], test["level"], test["passed"]) == (1, 0.95, True)
    assert test["limit"] == pytest.approx(3.841458820694)
    electrons = next(item for item in form["recoveries"] if item["of"] == "electrons")
    assert electrons == {
        "of": "electrons",
        "ratio": 1.1,
        "sd": pytest.approx(12 * sqrt(0.05) / 24),
        "left_out": [],
    }
    (suspect,) = form["suspects"]
    assert suspect["names"] == ["measured ethanol", "measured lactate"]
    assert suspect["bias"] == [0.2, 0.2]
    assert suspect["p_left"] is None
    assert form["eliminations"] == []
    assert form["values"][0] == {
        "compound": "ethanol",
        "measured": 1.2,
        "measured_sd": 0.2,
        "reconciled": 1.04,
        "exact": "26/25",
        "reconciled_sd": pytest.approx(sqrt(0.008)),
        "moved_sd": pytest.approx(-0.8),
        "residual": pytest.approx(-0.2 / sqrt(0.05)),
        "own_share": 0.8,
    }
    assert form["covariance"] == [
        [pytest.approx(0.008), pytest.approx(-0.008)],
        [pytest.approx(-0.008), pytest.approx(0.008)],
    ]
    assert form["held"] == []
    assert form["calculated"][0] == {
        "compound": "carbon dioxide",
        "layer": "elements",
        "value": 1.04,
        "exact": "26/25",
        "sd": pytest.approx(sqrt(0.008)),
    }
    assert form["draws"] is None


def test_the_aim_and_the_next_measurement(agreeing: Reconciliation) -> None:
    form = _read(agreeing)
    assert form["aim"] == {
        "direction": "most",
        "compound": "carbon dioxide",
        "value": 1.04,
        "exact": "26/25",
        "sd": pytest.approx(sqrt(0.008)),
        "sampled": False,
        "better": 1.2,
        "worse": 0.8,
        "reason": None,
    }
    assert form["next"]["of"] == "carbon dioxide"
    assert form["next"]["precision"] == 0.05
    assert form["next"]["width"] == pytest.approx(0.4)
    (water,) = form["next"]["measurements"]
    assert water["compound"] == "water"
    assert (water["range"]["low"], water["range"]["high"]) == (0.0, 0.0)
    assert (water["expected"], water["worst"]) == (pytest.approx(0.4), pytest.approx(0.4))
    assert water["narrowing"] == 0


@pytest.mark.parametrize(
    ("text", "status"),
    [
        (fermentation("1.9 ± 0.1", "2.1 ± 0.1"), "agrees"),
        (fermentation("1.5 ± 0.1", "2.1 ± 0.1"), "fails"),
        (two_products("1.2", "0.9, water: 0.1 ± 0.1"), "fails"),
        (two_products("1.2 ± 0.1", "0.9").replace(", lactate: 0.9", ""), "untested"),
    ],
    ids=["agrees", "fails", "exact values contradict", "untested"],
)
def test_the_status_is_the_verdict(tmp_path: Path, text: str, status: str) -> None:
    assert _read(judge(tmp_path, text))["status"] == status


def test_values_that_fail_name_their_suspects(tmp_path: Path) -> None:
    form = _read(judge(tmp_path, fermentation("1.5 ± 0.05", "2.04 ± 0.05")))
    assert [item["names"] for item in form["suspects"]] == [
        ["measured ethanol"],
        ["measured carbon dioxide"],
    ]
    assert {item["layer"] for item in form["suspects"]} == {"elements"}
    (step,) = form["eliminations"]
    assert step["names"] == ["measured ethanol"]
    assert step["statistic_left"] == 0.64
    assert step["p_left"] == pytest.approx(0.4237, rel=1e-3)
    assert form["missing_products"][0]["compounds"]
    assert {"YN801", "YN802"} <= {item["code"] for item in form["findings"]}


def test_the_suspects_are_those_of_the_layer_that_failed(tmp_path: Path) -> None:
    text = two_products("1.5 ± 0.1", "0.8 ± 0.1", "network: network.yaml\n")
    form = _read(judge(tmp_path, text))
    assert [item["passed"] for item in form["tests"]] == [False, False]
    assert {item["layer"] for item in form["suspects"]} == {"elements"}


def test_how_many_sets_were_drawn(tmp_path: Path) -> None:
    form = _read(judge(tmp_path, two_products("2.05 ± 0.1", "0.01 ± 0.1"), draws=7))
    assert form["draws"] == 7
    assert form["held"] == ["ethanol", "lactate"]


def test_the_table_has_measured_and_calculated_values(agreeing: Reconciliation) -> None:
    header, rows = data_records(agreeing)
    form = _read(agreeing)
    assert header[:4] == ("compound", "kind", "measured", "s.d.")
    assert {len(row) for row in rows} == {len(header)}
    assert [row[:2] for row in rows] == [
        ("ethanol", "measured"),
        ("lactate", "measured"),
        ("carbon dioxide", "calculated"),
        ("water", "calculated"),
    ]
    for row, item in zip(rows[:2], form["values"], strict=True):
        assert [float(cell) for cell in row[2:]] == [
            item[key]
            for key in ("measured", "measured_sd", "reconciled", "reconciled_sd", "residual")
        ]
    assert rows[2][2:4] == ("", "")
    assert float(rows[2][4]) == form["calculated"][0]["value"]
    assert float(rows[2][5]) == form["calculated"][0]["sd"]


def test_a_value_that_nothing_checks_has_an_empty_residual(tmp_path: Path) -> None:
    text = two_products("1.2 ± 0.1", "0.9").replace(", lactate: 0.9", "")
    _, rows = data_records(judge(tmp_path, text))
    assert rows[0][:2] == ("ethanol", "measured")
    assert rows[0][-1] == ""
