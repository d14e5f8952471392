"""Input texts: read whole, kept to the byte, read back, and refused where they are no report's."""

from __future__ import annotations

import hashlib
import json
from typing import TYPE_CHECKING

import pytest

from tests.unit.studied import page_at, study_at
from yieldnet.reading.study_inputs import (
    MAX_REPORT_BYTES,
    InputText,
    StudyInputs,
    case_of_inputs,
    read_inputs,
    read_report,
)

if TYPE_CHECKING:
    from pathlib import Path

LYSINE = "examples/lysine/case.yaml"


def test_inputs_are_the_files_to_the_byte(checkout: Path) -> None:
    study = study_at(LYSINE)
    paths = (checkout / LYSINE, checkout / "models" / "lysine-coryneform.yaml")
    for item, path in zip(study.inputs.texts(), paths, strict=True):
        assert item.text.encode("utf-8") == path.read_bytes()
        assert item.digest == hashlib.sha256(path.read_bytes()).hexdigest()
        assert item.name == path.name


def test_a_case_of_texts_is_the_case_of_the_files(checkout: Path) -> None:
    inputs, _ = read_inputs(str(checkout / LYSINE))
    assert inputs is not None
    case, findings = case_of_inputs(inputs)
    assert case is not None
    assert not findings.items
    assert case.network is not None
    # Bare names: a report says nothing of the folders of whoever made it.
    assert (case.file, case.network.file) == ("case.yaml", "lysine-coryneform.yaml")


def test_a_shipped_network_is_kept_like_any_other(tmp_path: Path, checkout: Path) -> None:
    path = tmp_path / "case.yaml"
    text = (checkout / LYSINE).read_text("utf-8")
    path.write_text(text.replace("../../models/lysine-coryneform.yaml", "lysine-coryneform"))
    inputs, _ = read_inputs(str(path))
    assert inputs is not None
    assert inputs.network is not None
    assert inputs.network.name == "lysine-coryneform.yaml"
    case, _ = case_of_inputs(inputs)
    assert case is not None
    assert case.network is not None


def test_a_report_says_nothing_of_the_folders_it_was_made_in(checkout: Path) -> None:
    assert str(checkout) not in page_at(LYSINE)


def test_a_case_that_cannot_be_read_gives_its_findings(tmp_path: Path) -> None:
    inputs, findings = read_inputs(str(tmp_path / "none.yaml"))
    assert inputs is None
    assert [item.code for item in findings] == ["YN101"]


def _inputs(case: str, network: str = "") -> StudyInputs:
    return StudyInputs(
        case=InputText(role="case", name="c.yaml", text=case),
        network=InputText(role="network", name="n.yaml", text=network) if network else None,
    )


@pytest.mark.parametrize(
    ("inputs", "code"),
    [
        (_inputs("case: x\nnetwork: n.yaml\nequation: glucose -> ? lactate\n"), "YN931"),
        (_inputs("case: x\nnetwork: n.yaml\nequation: glucose -> ? lactate\n", "a: 1\n"), "YN110"),
        (_inputs("case: x\r\n"), "YN106"),
        (_inputs("case: \ud800\n"), "YN103"),
        (_inputs("case: x\n"), "YN111"),
    ],
)
def test_inputs_that_are_no_case_are_refused(inputs: StudyInputs, code: str) -> None:
    case, findings = case_of_inputs(inputs)
    assert case is None
    assert code in {item.code for item in findings}


def test_a_report_gives_back_what_it_was_made_from(tmp_path: Path) -> None:
    path = tmp_path / "study.html"
    path.write_text(page_at(LYSINE), "utf-8")
    told, findings = read_report(str(path))
    assert told is not None, findings.items
    study = study_at(LYSINE)
    assert told.inputs == study.inputs
    assert told.versions == study.versions
    assert told.engine == "glpk"
    assert [digest for _, digest in told.digests] == [item.digest for item in study.inputs.texts()]


def _element(form: object) -> bytes:
    text = form if isinstance(form, str) else json.dumps(form)
    return f'<script type="application/json" id="study-inputs">{text}</script>'.encode()


GOOD = {"format": 1, "versions": {}, "engine": "glpk", "date": "", "inputs": []}
CASE = {"role": "case", "name": "c", "sha256": "", "text": "case: x"}


@pytest.mark.parametrize(
    ("raw", "words"),
    [
        (b"<html></html>", "does not hold the inputs"),
        (b"\xff\xfe", "does not hold the inputs"),
        (_element(GOOD) * 2, "does not hold the inputs"),
        (_element("{"), "cut or changed"),
        (_element("[" * 100_000), "cut or changed"),
        (_element([]), "cut or changed"),
        (_element({}), "cut or changed"),
        (_element({**GOOD, "format": 2}), "format 2"),
        (_element(GOOD), "they are missing"),
        (_element({**GOOD, "inputs": [CASE, CASE]}), "they are case, case"),
        (_element({**GOOD, "inputs": [CASE], "engine": "abacus"}), "solver 'abacus'"),
        (_element({**GOOD, "inputs": [{**CASE, "text": 3}]}), "3 is not a text"),
        (_element({**GOOD, "inputs": [{**CASE, "text": "\ud800"}]}), "cut or changed"),
        (_element({**GOOD, "inputs": [CASE], "versions": []}), "no mapping"),
    ],
)
def test_a_file_that_is_no_report_is_refused(tmp_path: Path, raw: bytes, words: str) -> None:
    path = tmp_path / "study.html"
    path.write_bytes(raw)
    told, findings = read_report(str(path))
    assert told is None
    (finding,) = findings
    assert finding.code == "YN931"
    assert words in str(finding)


def test_a_file_that_cannot_be_opened_or_is_too_large(tmp_path: Path) -> None:
    told, findings = read_report(str(tmp_path / "none.html"))
    assert told is None
    assert [item.code for item in findings] == ["YN101"]
    large = tmp_path / "large.html"
    with large.open("wb") as file:
        file.truncate(MAX_REPORT_BYTES + 1)
    told, findings = read_report(str(large))
    assert told is None
    assert [item.code for item in findings] == ["YN108"]
