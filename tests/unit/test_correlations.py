"""The section ``correlations`` of a case file."""

from __future__ import annotations

import time
from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

if TYPE_CHECKING:
    from tests.unit.judged import CaseOf

F = Fraction
HEAD = (
    "case: x\nequation: glucose + ? oxygen -> ? ethanol + ? lactate + ? acetate\n"
    "either side: [carbon dioxide, water]\n"
    "measured: {ethanol: 1 ± 0.1, lactate: 0.5 ± 0.1, acetate: 0.2 ± 0.1, oxygen: 1}\n"
)


def _found(case_of: CaseOf, text: str) -> list[tuple[str, str, Fraction]]:
    case, findings = case_of(HEAD + text)
    assert case is not None, findings.items
    return [(item.first, item.second, item.value) for item in case.correlations]


def _told(case_of: CaseOf, text: str) -> list[tuple[str, str]]:
    _, findings = case_of(HEAD + text)
    return [(item.code, str(item)) for item in findings]


def test_a_pair_is_read_with_its_place(case_of: CaseOf) -> None:
    text = "correlations:\n  ethanol:\n    lactate: 0.4\n    acetate: -1/4\n"
    assert _found(case_of, text) == [
        ("ethanol", "lactate", F(2, 5)),
        ("ethanol", "acetate", F(-1, 4)),
    ]
    case, _ = case_of(HEAD + text)
    assert case is not None
    span = case.correlations[0].span
    assert span is not None
    assert (span.line, span.column) == (7, 14)


@pytest.mark.parametrize("text", ["", "correlations: {}\n", "correlations: {ethanol: {}}\n"])
def test_no_correlations_are_none(case_of: CaseOf, text: str) -> None:
    assert _found(case_of, text) == []


@pytest.mark.parametrize(
    ("pairs", "code", "words"),
    [
        ("ethanol: {water: 0.4}", "YN503", "correlation of 'water', which is not measured"),
        ("water: {ethanol: 0.4}", "YN503", "correlation of 'water', which is not measured"),
        ("ethanol: {oxygen: 0.4}", "YN503", "'oxygen', which has no error that could be"),
        ("ethanol: {etanol: 0.4}", "YN301", "'etanol'"),
        ("ethanol: {ethanol: 0.4}", "YN210", "'ethanol' is set against itself"),
        ("ethanol: {lactate: 1}", "YN210", "correlation 1 of ethanol and lactate"),
        ("ethanol: {lactate: -1}", "YN210", "expected a number between -1 and 1"),
        ("ethanol: {lactate: 40}", "YN210", "correlation 40 of ethanol and lactate"),
        ("ethanol: {lactate: high}", "YN201", "'high' is not a number"),
        ("ethanol: {lactate: 40 %}", "YN201", ""),
        ("ethanol: {lactate: }", "YN112", "correlation of ethanol and lactate"),
        ("ethanol: 0.4", "YN112", "correlations of 'ethanol'"),
        ("ethanol: {lactate: 0.4}, lactate: {ethanol: 0.4}", "YN504", "is written twice"),
    ],
)
def test_each_mistake_is_told_once(case_of: CaseOf, pairs: str, code: str, words: str) -> None:
    told = _told(case_of, f"correlations: {{{pairs}}}\n")
    assert [item[0] for item in told] == [code]
    assert words in told[0][1]


def test_a_pair_under_a_synonym_is_the_same_pair(case_of: CaseOf) -> None:
    told = _told(case_of, "correlations: {ethanol: {lactate: 0.4, lactic acid: 0.4}}\n")
    # One compound under two names is a mistake of its own.
    assert [code for code, _ in told] == ["YN303", "YN504"]


def test_a_value_without_an_error_is_not_taken_for_a_slip_of_the_pen(case_of: CaseOf) -> None:
    ((_, words),) = _told(case_of, "correlations: {ethanol: {oxygen: 0.4}}\n")
    assert words.endswith("Write it with its error under 'measured', or leave the correlation out.")


def test_all_mistakes_are_told_at_once(case_of: CaseOf) -> None:
    told = _told(
        case_of, "correlations: {ethanol: {ethanol: 0.4, lactate: 2, water: 0.1, acetate: x}}\n"
    )
    assert sorted(code for code, _ in told) == ["YN201", "YN210", "YN210", "YN503"]


def test_only_those_that_contradict_each_other_are_named(case_of: CaseOf) -> None:
    # Ethanol goes with lactate and lactate with acetate, so ethanol cannot go against acetate:
    # 1 + 2 · 0.9 · 0.9 · (-0.9) - 3 · 0.81 < 0.
    ((code, words),) = _told(
        case_of,
        "correlations:\n  ethanol: {lactate: 0.9, acetate: -0.9}\n  lactate: {acetate: 0.9}\n",
    )
    assert code == "YN810"
    assert "ethanol, lactate, acetate" in words
    assert "not positive definite" in words


def test_what_is_not_to_blame_is_left_out(case_of: CaseOf) -> None:
    # Acetate comes first and goes with all the others, which contradict each other without it.
    head = HEAD.replace("oxygen: 1}", "oxygen: 1 ± 0.1}")
    case, findings = case_of(
        head + "correlations:\n  acetate: {ethanol: 0.1}\n"
        "  ethanol: {lactate: 0.9, oxygen: -0.9}\n  lactate: {oxygen: 0.9}\n"
    )
    assert case is None
    (finding,) = findings
    assert finding.message.endswith("these correlations: ethanol, lactate, oxygen")


def test_many_values_that_contradict_only_all_together(case_of: CaseOf) -> None:
    # With the correlation -1/15 between each two of 16 values their sum has no variance left, and
    # of any 15 it has: to try all sets of them would take minutes.
    names = [
        "ethanol",
        "lactate",
        "acetate",
        "formate",
        "succinate",
        "pyruvate",
        "glycerol",
        "fumarate",
        "malate",
        "citrate",
        "propionate",
        "butyrate",
        "acetoin",
        "acetone",
        "2,3-butanediol",
        "1,3-propanediol",
    ]
    pairs = "".join(
        f"  {one}:\n" + "".join(f"    {other}: -1/15\n" for other in names[place + 1 :])
        for place, one in enumerate(names[:-1])
    )
    text = (
        f"case: x\nequation: glucose + ? oxygen -> ? {' + ? '.join(names)}\n"
        "either side: [carbon dioxide, water]\nmeasured:\n"
        + "".join(f"  {name}: 0.1 ± 0.01\n" for name in names)
    )
    begin = time.perf_counter()
    case, findings = case_of(f"{text}correlations:\n{pairs}")
    assert time.perf_counter() - begin < 5
    assert case is None
    assert [item.code for item in findings] == ["YN810"]
    assert all(name in findings.items[0].message for name in names)
    good, _ = case_of(f"{text}correlations:\n{pairs.replace('-1/15', '-1/16')}")
    assert good is not None
    assert len(good.correlations) == 120


def test_three_that_just_hold_together(case_of: CaseOf) -> None:
    # 1 + 2 · 0.9 · 0.9 · 0.63 - 2 · 0.81 - 0.63² = 0.0037 > 0, and with 0.62 it is -0.0000 < 0: the
    # least that goes with 0.9 twice is 2 · 0.81 - 1 = 0.62, where it is exactly zero.
    text = "correlations:\n  ethanol: {{lactate: 0.9, acetate: {}}}\n  lactate: {{acetate: 0.9}}\n"
    assert len(_found(case_of, text.format("0.63"))) == 3
    assert [code for code, _ in _told(case_of, text.format("0.62"))] == ["YN810"]
