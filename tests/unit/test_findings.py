"""Findings: their text, their order, near matches, and the exception that carries them."""

from __future__ import annotations

import pytest

from yieldnet.foundation.errors import InputError, SolveError, YieldnetError
from yieldnet.foundation.findings import (
    Finding,
    Findings,
    Severity,
    SourceSpan,
    TooManyFindings,
    near,
)


def _at(line: int, column: int = 1, file: str = "a.yaml") -> SourceSpan:
    return SourceSpan(file=file, line=line, column=column)


@pytest.mark.parametrize(
    ("finding", "text"),
    [
        (
            Finding(
                code="YN201",
                message="'x' is not a number",
                where=_at(2, 5),
                left="here",
                right="there",
                hint="Write 1.",
            ),
            "a.yaml:2:5: error YN201: 'x' is not a number (here; there). Write 1.",
        ),
        (
            Finding(code="YN416", message="it costs", left="so much", severity=Severity.NOTE),
            "note YN416: it costs (so much)",
        ),
        (
            Finding(code="YN410", message="it", right="that", severity=Severity.WARNING),
            "warning YN410: it (that)",
        ),
        (Finding(code="YN102", message="the file is empty"), "error YN102: the file is empty"),
    ],
)
def test_a_finding_reads_place_severity_code_message_sides_hint(
    finding: Finding, text: str
) -> None:
    assert str(finding) == text


def test_a_code_outside_the_catalogue_is_our_mistake() -> None:
    with pytest.raises(KeyError, match="'YN999' is not in the catalogue"):
        Finding(code="YN999", message="x")


def test_findings_are_sorted_by_place_and_those_without_one_come_last() -> None:
    findings = Findings()
    findings.add("YN601", "no place")
    findings.add("YN201", "late", _at(9))
    findings.add("YN201", "other file", _at(1, file="b.yaml"))
    findings.add("YN201", "right", _at(2, 8))
    findings.add("YN201", "left", _at(2, 3))
    findings.add("YN201", "tenth line", _at(10))
    assert [item.message for item in findings.sorted()] == [
        "left",
        "right",
        "late",
        "tenth line",
        "other file",
        "no place",
    ]
    assert next(item.message for item in findings) == "no place"


def test_findings_of_one_place_keep_the_order_in_which_they_were_made() -> None:
    findings = Findings()
    findings.add("YN202", "first", _at(1))
    findings.add("YN201", "second", _at(1))
    assert [item.message for item in findings.sorted()] == ["first", "second"]


def test_the_same_finding_is_kept_once() -> None:
    findings = Findings()
    for _ in range(2):
        findings.add("YN201", "x", _at(1))
        findings.extend([Finding(code="YN202", message="y")])
    findings.add("YN201", "x", _at(2))
    assert [item.message for item in findings] == ["x", "y", "x"]


def test_beyond_its_limit_a_list_of_findings_stops_the_reading() -> None:
    findings = Findings(limit=2)
    findings.add("YN201", "x", _at(1))
    findings.add("YN201", "x", _at(2))
    # The same once more is no further finding.
    findings.add("YN201", "x", _at(1))
    with pytest.raises(TooManyFindings, match=r"^$"):
        findings.add("YN201", "x", _at(3))
    assert len(findings.items) == 2


def test_findings_given_at_the_start_count_as_seen() -> None:
    first = Finding(code="YN201", message="x")
    findings = Findings([first])
    findings.extend([first])
    assert findings.items == [first]


def test_only_an_error_refuses() -> None:
    findings = Findings()
    assert not findings.refused
    findings.add("YN410", "x", severity=Severity.WARNING)
    findings.add("YN416", "y", severity=Severity.NOTE)
    assert not findings.refused
    findings.add("YN201", "z")
    assert findings.refused


@pytest.mark.parametrize(
    ("name", "known", "hint"),
    [
        ("ethanoll", ["water", "ethanol"], "Did you mean 'ethanol'?"),
        ("ETHANOL", ["ethanol"], "Did you mean 'ethanol'?"),
        ("nadh", ["NADH", "NADPH", "water"], "Did you mean 'NADH' or 'NADPH'?"),
        ("zzz", ["ethanol"], ""),
        ("x", [], ""),
        ("", ["ethanol"], ""),
    ],
)
def test_near_matches_keep_the_spelling_of_the_file(name: str, known: list[str], hint: str) -> None:
    assert near(name, known) == hint


def test_at_most_three_near_matches_are_named() -> None:
    hint = near("acetate", [f"acetate{i}" for i in range(9)])
    assert hint.count("'acetate") == 3


def test_an_input_error_carries_its_findings_and_is_a_value_error() -> None:
    first = Finding(code="YN201", message="x", where=_at(1))
    second = Finding(code="YN202", message="y")
    error = InputError(item for item in (first, second))
    assert error.findings == (first, second)
    assert str(error) == f"{first}\n{second}"
    assert isinstance(error, ValueError)


@pytest.mark.parametrize("kind", [InputError, SolveError])
def test_all_errors_are_of_one_family(kind: type[Exception]) -> None:
    assert issubclass(kind, YieldnetError)
