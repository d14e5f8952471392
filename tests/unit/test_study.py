"""A study: which answers it holds, and what it says where there is none."""

from __future__ import annotations

from dataclasses import replace

from tests.unit.conftest import CASES, NETWORK
from tests.unit.studied import study_at, study_of_text
from yieldnet.prediction.result import CoefficientStatus, Outcome
from yieldnet.report.study_sections import (
    MARKS,
    marked_equation,
    study_findings,
    study_sections,
    study_sources,
    summary_lines,
)

PLANT = "examples/plant/case.yaml"
ALONE = "case: Alone\nequation: glucose -> ? lactate\n"
NO_PLANT = (
    ALONE.replace("? lactate", "? lactate + ? ethanol + ? acetate")
    + "either side: [carbon dioxide, water, hydrogen]\n"
    + "plant: {product: lactate, output: 10 t/y, on-stream: 8000 h/y}\n"
)


def _names(text: str, network: str = "") -> list[str]:
    return [item.name for item in study_sections(study_of_text(text, network))]


def test_the_example_has_every_section_but_ideas() -> None:
    assert [item.name for item in study_sections(study_at(PLANT))] == [
        "equation",
        "coefficients",
        "ladder",
        "relaxations",
        "limits",
        "measured",
        "trade-off",
        "energy",
        "plant",
        "later",
        "findings",
        "assumptions",
        "sources",
        "inputs",
    ]


def test_a_case_of_elements_alone_has_few_sections() -> None:
    study = study_of_text(ALONE)
    assert study.tradeoff is None
    assert study.plant is None
    assert study.ideas is None
    assert study.reconciliation is None
    found = _names(ALONE)
    assert "plant" not in found
    assert "trade-off" not in found
    assert "relaxations" not in found
    assert found[0] == "equation"


def test_the_knock_outs_of_a_case_are_its_ideas() -> None:
    study = study_of_text(CASES["solved"], NETWORK)
    assert study.ideas is not None
    assert study.ideas.names == ("hydrogenase",)
    assert study.ideas.after.aim == study.prediction.aim
    assert "ideas" in _names(CASES["solved"], NETWORK)


def test_an_infeasible_case_tells_its_conflict_and_goes_on() -> None:
    study = study_of_text(CASES["infeasible"], NETWORK)
    assert study.prediction.outcome is Outcome.INFEASIBLE
    assert study.tradeoff is None
    sections = {item.name: item for item in study_sections(study)}
    assert "cannot hold together" in " ".join(block.text for block in sections["equation"].blocks)
    assert not any(block.terms for block in sections["equation"].blocks)
    assert "ladder" in sections


def test_what_is_refused_is_told_with_its_reason() -> None:
    study = study_of_text(NO_PLANT)
    assert study.plant is None
    ((name, reason),) = study.left_out
    assert name == "plant"
    assert "YN913" in reason
    (section,) = [item for item in study_sections(study) if item.name == "left-out"]
    assert section.blocks[0].lines[0].startswith("plant: ")


def test_each_coefficient_is_marked_by_how_it_is_known() -> None:
    study = study_at(PLANT)
    marks = {item.compound: item.mark for item in marked_equation(study.prediction)}
    assert marks["glucose"] == "basis"
    assert marks["biomass"] == "measured"
    assert marks["ammonia"] == "fixed"
    assert marks["succinate"] == "predicted"
    assert set(marks.values()) <= set(MARKS)
    # Zero: it is not in the filled-in equation.
    assert "oxygen" not in marks
    left = [item.left for item in marked_equation(study.prediction)]
    assert left == sorted(left, reverse=True)


def test_what_is_not_unique_stands_in_brackets() -> None:
    study = study_of_text(CASES["no aim"], NETWORK)
    terms = {item.compound: item for item in marked_equation(study.prediction)}
    assert terms["ethanol"].mark == "bracketed"
    assert terms["ethanol"].amount.startswith("[0…")
    item = study.prediction.coefficient("ethanol")
    assert item.status is CoefficientStatus.BRACKETED


def test_findings_stand_once_and_are_counted() -> None:
    study = study_at(PLANT)
    findings = study_findings(study)
    assert len(set(findings)) == len(findings)
    assert {"YN805", "YN863", "YN868"} <= {item.code for item in findings}
    short = dict(summary_lines(study))
    assert short["Findings"] == "1 warning, 2 notes"
    assert short["Plant"].startswith("20000 t/y succinate")
    assert "screening only" in short["Caution"]


def test_what_another_answer_used_is_not_called_unused() -> None:
    rows = [
        row
        for section in study_sections(study_at(PLANT))
        if section.name == "assumptions"
        for block in section.blocks
        if block.table is not None
        for row in block.table.rows
    ]
    assert rows
    assert not [row for row in rows if "kept and not used" in row[0]]
    bare = study_of_text("case: T\nequation: glucose -> ? lactate\nconditions: {pH: 6}\n")
    kept = replace(bare, energetics=None)
    texts = [
        row[0]
        for section in study_sections(kept)
        for block in section.blocks
        if block.table is not None and section.name == "assumptions"
        for row in block.table.rows
    ]
    assert "the pH is kept and not used here" in texts


def test_every_source_that_was_used_is_listed_once_with_its_uses() -> None:
    sources = dict(study_sources(study_at(PLANT)))
    assert any("aqion.de" in source for source in sources)
    heat = next(use for source, use in sources.items() if "Villadsen" in source)
    assert "heat of combustion of glucose" in heat
    assert all(source == " ".join(source.split()) for source in sources)
