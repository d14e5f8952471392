"""The files that ``yieldnet new`` writes, line for line; ``pytest --accept`` rewrites them."""

from __future__ import annotations

import difflib
from pathlib import Path

import pytest

import yieldnet

HERE = Path(__file__).resolve().parent
FILES = {"case.yaml": "new.case.yaml", "run.yaml": "new.run.yaml", "sheet.csv": "new.sheet"}


@pytest.fixture(scope="module")
def written(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("new") / "study"
    study = yieldnet.new(
        folder,
        network="facultative-succinate",
        substrate="xylose",
        product="succinate",
        run="fed-batch",
    )
    assert set(study.files) == set(FILES)
    return folder


@pytest.mark.parametrize("name", FILES)
def test_a_file_is_line_for_line_as_accepted(
    written: Path, name: str, request: pytest.FixtureRequest
) -> None:
    text = (written / name).read_text("utf-8")
    path = HERE / FILES[name]
    if request.config.getoption("--accept"):
        path.write_text(text, "utf-8")
    accepted = path.read_text("utf-8")
    changes = difflib.unified_diff(
        accepted.splitlines(), text.splitlines(), "accepted", "written", lineterm=""
    )
    assert accepted == text, "\n".join(changes)
