"""Studies for several tests, each made once."""

from __future__ import annotations

from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING

from yieldnet.reading.study_inputs import InputText, StudyInputs, case_of_inputs, read_inputs
from yieldnet.report.html_page import page_of
from yieldnet.report.study import study_of

if TYPE_CHECKING:
    from yieldnet.report.study import Study

__all__ = ["SMALL", "VERSIONS", "page_at", "study_at", "study_of_text"]

CHECKOUT = Path(__file__).resolve().parent.parent.parent
SMALL = """\
case: Small
equation: glucose -> ? lactate + ? ethanol
either side: [carbon dioxide, water]
measured: {ethanol: 0.5 ± 0.1}
aim: most lactate
"""
"""A case of elements alone: of 24 electrons 12 go to each mol, so lactate is 1.5 mol/mol."""
VERSIONS = (("yieldnet", "0"), ("matplotlib", "0"))


@cache
def study_at(path: str) -> Study:
    """Study of a case file of the project."""
    inputs, findings = read_inputs(str(CHECKOUT / path))
    assert inputs is not None, findings.items
    case, findings = case_of_inputs(inputs)
    assert case is not None, findings.items
    return study_of(case, inputs, versions=VERSIONS)


@cache
def page_at(path: str) -> str:
    """Page of that study."""
    return page_of(study_at(path))


def study_of_text(text: str, network: str = "") -> Study:
    """Study of a case, and of its network, as texts."""
    inputs = StudyInputs(
        case=InputText(role="case", name="case.yaml", text=text),
        network=InputText(role="network", name="network.yaml", text=network) if network else None,
    )
    case, findings = case_of_inputs(inputs)
    assert case is not None, findings.items
    return study_of(case, inputs, versions=VERSIONS)
