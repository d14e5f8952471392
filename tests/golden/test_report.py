"""The text of a report, word for word; ``pytest --accept`` rewrites the file."""

from __future__ import annotations

import difflib
from pathlib import Path
from typing import TYPE_CHECKING

from tests.unit.studied import page_at
from yieldnet.report.verify import page_texts

if TYPE_CHECKING:
    import pytest

ACCEPTED = Path(__file__).resolve().parent / "report" / "plant.txt"


def test_a_report_is_word_for_word_as_accepted(request: pytest.FixtureRequest) -> None:
    lines: list[str] = []
    before = ""
    for place, text in page_texts(page_at("examples/plant/case.yaml")):
        if "\n" in text:
            # A listing is an input, and the file of its own.
            continue
        # Cells of one row stand in one line.
        row = place.rpartition(", '")[0] if place.endswith("'") else ""
        if row and row == before:
            lines[-1] += f" | {text}"
        else:
            lines.append(text)
        before = row
    printed = "\n".join(lines) + "\n"
    if request.config.getoption("--accept"):
        ACCEPTED.write_text(printed, "utf-8")
    accepted = ACCEPTED.read_text("utf-8")
    changes = difflib.unified_diff(
        accepted.splitlines(), printed.splitlines(), "accepted", "printed", lineterm=""
    )
    assert accepted == printed, "\n".join(changes)
