"""The JSON: all keys always there, whatever the outcome; valid, exact, without NaN."""

from __future__ import annotations

import json
from fractions import Fraction
from typing import TYPE_CHECKING, Any

import pytest

from yieldnet.audit.audit import audit_network
from yieldnet.foundation.findings import Finding, SourceSpan
from yieldnet.report.json_form import (
    FORMAT,
    as_text,
    audit_form,
    findings_form,
    prediction_form,
    refused_form,
)

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.model.network import Network
    from yieldnet.prediction.result import Prediction

# The keys that the design fixes; more may be added.
KEYS = {
    "format",
    "case",
    "basis",
    "status",
    "aim",
    "freedom",
    "coefficients",
    "ladder",
    "relaxations",
    "limits",
    "equation",
    "conflict",
    "findings",
    "assumptions",
}
LISTS = KEYS & {
    "freedom",
    "coefficients",
    "ladder",
    "relaxations",
    "limits",
    "findings",
    "assumptions",
}
RANGE = {"low", "high", "exact_low", "exact_high"}
ENTRIES = {
    "freedom": {"layer", "unknowns", "rank", "free", "free_in_fact"},
    "coefficients": {
        "compound",
        "side",
        "unit",
        "measured",
        "reconciled",
        "elements",
        "network",
        "at_aim",
        "percent",
        "status",
    },
    "ladder": {"rung", "value", "exact", "loss", "exact_loss", "reason"},
    "relaxations": {"parts", "value", "exact", "gain", "exact_gain", "reason", "words"},
    "limits": {"kind", "name", "gain", "cost", "exact_gain", "exact_cost", "words"},
    "findings": {
        "code",
        "severity",
        "file",
        "line",
        "column",
        "message",
        "left",
        "right",
        "hint",
    },
    "assumptions": {"text", "value", "unit", "source"},
}
NAMES = (
    "solved",
    "no aim",
    "energy",
    "half open",
    "infeasible",
    "taken up",
    "runaway",
    "charged",
    "impossible",
)


def _form(result: Prediction) -> dict[str, Any]:
    """The form after a round trip through its text."""
    form = json.loads(as_text(prediction_form(result)))
    assert isinstance(form, dict)
    return form


@pytest.fixture(params=NAMES)
def form(request: pytest.FixtureRequest, answers: dict[str, Prediction]) -> dict[str, Any]:
    return _form(answers[request.param])


def test_all_keys_are_there_whatever_the_outcome(form: dict[str, Any]) -> None:
    assert set(form) >= KEYS
    assert form["format"] == FORMAT == 1
    assert form["basis"] == {"compound": "glucose", "unit": "mol"}
    assert form["status"] in {"solved", "infeasible", "unbounded"}
    for key in LISTS:
        assert isinstance(form[key], list), key


def test_every_entry_has_all_its_keys(form: dict[str, Any]) -> None:
    for key, wanted in ENTRIES.items():
        for entry in form[key]:
            assert set(entry) >= wanted, (key, entry)


def test_every_number_is_the_number_of_its_exact_text(form: dict[str, Any]) -> None:
    pairs: list[tuple[float | None, str | None]] = []
    for rung in form["ladder"]:
        pairs += [(rung["value"], rung["exact"]), (rung["loss"], rung["exact_loss"])]
    for coefficient in form["coefficients"]:
        for name in ("elements", "network", "at_aim"):
            ends = coefficient[name] or dict.fromkeys(RANGE)
            assert set(ends) == RANGE
            pairs += [(ends["low"], ends["exact_low"]), (ends["high"], ends["exact_high"])]
    for item in (*form["relaxations"], *form["limits"]):
        pairs.append((item["gain"], item["exact_gain"]))
    assert pairs or form["status"] == "infeasible"
    for value, exact in pairs:
        assert (value is None) == (exact is None)
        assert value == (None if exact is None else float(Fraction(exact)))


def test_an_answer_has_one_status_and_only_a_solved_one_has_an_aim_value(
    answers: dict[str, Prediction],
) -> None:
    forms = {name: _form(answers[name]) for name in NAMES}
    assert {name: item["status"] for name, item in forms.items()} == {
        "solved": "solved",
        "no aim": "solved",
        "energy": "solved",
        "half open": "solved",
        "infeasible": "infeasible",
        "taken up": "solved",
        "runaway": "unbounded",
        "charged": "solved",
        "impossible": "infeasible",
    }
    assert forms["no aim"]["aim"] is None
    assert forms["impossible"]["aim"] is None
    for name in ("infeasible", "runaway"):
        aim = forms[name]["aim"]
        assert set(aim) >= {"direction", "compound", "value", "exact", "within_bands"}
        assert (aim["value"], aim["exact"]) == (None, None)
    assert forms["taken up"]["aim"] == {
        "direction": "most",
        "compound": "succinate",
        "value": 12 / 7,
        "exact": "12/7",
        "within_bands": 12 / 7,
    }


def test_the_equation_tells_terms_with_their_sides(answers: dict[str, Prediction]) -> None:
    equation = _form(answers["taken up"])["equation"]
    assert equation["text"] == "glucose + 0.857 carbon dioxide -> 1.71 succinate + 0.857 water"
    terms = {term["compound"]: term for term in equation["terms"]}
    assert list(terms) == ["glucose", "succinate", "carbon dioxide", "water"]
    assert all(set(term) == {"compound", "side", *RANGE} for term in equation["terms"])
    assert terms["carbon dioxide"]["side"] == "consumed"
    assert terms["carbon dioxide"]["exact_low"] == terms["carbon dioxide"]["exact_high"] == "6/7"
    assert _form(answers["infeasible"])["equation"] is None


def test_unbounded_ends_are_null(answers: dict[str, Prediction]) -> None:
    form = _form(answers["runaway"])
    ethanol = form["coefficients"][0]
    assert ethanol["elements"] == {
        "low": 0,
        "high": None,
        "exact_low": "0",
        "exact_high": None,
    }
    assert ethanol["network"] is None
    (rung,) = form["ladder"]
    assert rung["value"] is None
    assert "can grow together without limit" in rung["reason"]


def test_measured_and_reconciled_values(answers: dict[str, Prediction]) -> None:
    rows = {item["compound"]: item for item in _form(answers["solved"])["coefficients"]}
    biomass, ethanol, oxygen = rows["biomass"], rows["ethanol"], rows["oxygen"]
    assert set(biomass["measured"]) >= {"value", "sd", "text"}
    assert biomass["measured"]["text"] == "0.3 ± 0.02; 0.1 ± 0.01 1/h / 13 mmol/g/h"
    assert set(biomass["reconciled"]) >= {"value", "exact", "moved_sd"}
    assert biomass["reconciled"]["value"] == float(Fraction(biomass["reconciled"]["exact"]))
    assert ethanol["measured"]["set_aside"] is True
    assert ethanol["measured"]["value"] == 1
    assert ethanol["reconciled"] is None
    assert (oxygen["measured"], oxygen["reconciled"]) == (None, None)
    assert {item["unit"] for item in rows.values()} == {"mol/mol"}
    assert rows["carbon dioxide"]["side"] == "either"
    assert 0 < ethanol["percent"] <= 100


def test_an_exact_measured_value_has_no_standard_deviation(
    answers: dict[str, Prediction],
) -> None:
    rows = {item["compound"]: item for item in _form(answers["charged"])["coefficients"]}
    assert rows["biomass"]["measured"]["sd"] is None
    assert rows["biomass"]["reconciled"] == {"value": 0.5, "exact": "1/2", "moved_sd": 0}


def test_a_conflict_names_its_members_and_what_each_needs(answers: dict[str, Prediction]) -> None:
    conflict = _form(answers["impossible"])["conflict"]
    assert set(conflict) >= {"least", "members"}
    (member,) = conflict["members"]
    assert set(member) >= {"kind", "name", "needs", "needs_sd"}
    # Glucose makes 2 ethanol; 2.5 ± 0.1 must come down to 2.2, the lower end then being 2.0.
    assert (member["kind"], member["name"]) == ("measured", "measured ethanol")
    assert member["needs"] == pytest.approx(-0.3)
    assert member["needs_sd"] == pytest.approx(-3)
    assert _form(answers["solved"])["conflict"] is None


FINDINGS = (
    Finding(
        code="YN201",
        message="'x' is not a number",
        where=SourceSpan(file="a.yaml", line=2, column=5),
        hint="Write 1.",
    ),
    Finding(code="YN601", message="infeasible", left="this", right="that"),
)


def test_findings_have_all_keys_with_null_for_what_is_not_there() -> None:
    first, second = findings_form(FINDINGS)
    assert first == {
        "code": "YN201",
        "severity": "error",
        "file": "a.yaml",
        "line": 2,
        "column": 5,
        "message": "'x' is not a number",
        "left": None,
        "right": None,
        "hint": "Write 1.",
    }
    assert (second["file"], second["line"], second["column"]) == (None, None, None)
    assert (second["left"], second["right"]) == ("this", "that")


def test_a_refused_case_has_the_same_keys_as_an_answer(answers: dict[str, Prediction]) -> None:
    form = json.loads(as_text(refused_form(FINDINGS)))
    assert list(form) == list(_form(answers["solved"]))
    assert form["status"] == "refused"
    assert [item["code"] for item in form["findings"]] == ["YN201", "YN601"]
    assert all(form[key] == [] for key in LISTS - {"findings"})
    assert all(form[key] is None for key in ("case", "basis", "aim", "equation", "conflict"))


def test_letters_stay_letters_and_nan_is_refused() -> None:
    assert as_text({"a": "± 1"}) == '{\n  "a": "± 1"\n}'
    with pytest.raises(ValueError, match="Out of range float values"):
        as_text({"a": float("nan")})


@pytest.mark.parametrize(
    ("addition", "status", "code"),
    [
        ("", "clean", None),
        ("  wrong: glucose -> lactate\n", "refused", "YN401"),
        ("  again: glucose -> 2 lactate\n", "doubtful", "YN409"),
    ],
)
def test_the_form_of_an_audit(
    network_of: Callable[[str], Network], addition: str, status: str, code: str | None
) -> None:
    text = (
        "network: Least\ncrossing: {in: [glucose], out: [lactate]}\n"
        "reactions:\n  fermentation: glucose -> 2 lactate\n"
    )
    form = audit_form(audit_network(network_of(text + addition)))
    assert set(form) == {"format", "network", "status", "reactions", "findings"}
    assert (form["format"], form["network"], form["status"]) == (FORMAT, "Least", status)
    assert form["reactions"] == 1 + bool(addition)
    assert (code in [item["code"] for item in form["findings"]]) == (code is not None)
