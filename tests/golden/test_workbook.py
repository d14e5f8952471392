"""Cells of a workbook, one a line; ``pytest --accept`` rewrites the file."""

from __future__ import annotations

import difflib
from pathlib import Path
from typing import TYPE_CHECKING, Any

import openpyxl

from yieldnet.plant.plant import plant_case
from yieldnet.reading.case_file import load_case
from yieldnet.report.workbook import workbook_of
from yieldnet.report.workbook_file import write_book

if TYPE_CHECKING:
    import pytest

ACCEPTED = Path(__file__).resolve().parent / "workbook.txt"
_ROUNDING = 1e-9
"""What is smaller is what rounding leaves, and differs from machine to machine."""


def _text(value: Any) -> str:
    if not isinstance(value, int | float):
        return str(value)
    return f"{0.0 if abs(value) < _ROUNDING else value:.9g}"


def _lines(path: Path) -> list[str]:
    formulas = openpyxl.load_workbook(path)
    values = openpyxl.load_workbook(path, data_only=True)
    lines = [f"{name} = {item.attr_text}" for name, item in formulas.defined_names.items()]
    for sheet in formulas:
        for row in sheet.iter_rows():
            for cell in row:
                if cell.value is None:
                    continue
                text = _text(cell.value)
                if cell.data_type == "f":
                    text += f"  [{_text(values[sheet.title][cell.coordinate].value)}]"
                lines.append(f"{sheet.title} {cell.coordinate}: {text}")
    return lines


def test_the_cells_of_a_workbook_are_as_accepted(
    checkout: Path,
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
    request: pytest.FixtureRequest,
) -> None:
    monkeypatch.chdir(checkout)
    case, _ = load_case("examples/plant/case.yaml")
    assert case is not None
    sheet = plant_case(case)
    write_book(workbook_of(sheet.prediction, sheet), tmp_path / "a.xlsx")
    lines = _lines(tmp_path / "a.xlsx")
    if request.config.getoption("--accept"):
        ACCEPTED.write_text("\n".join(lines) + "\n", "utf-8")
    accepted = ACCEPTED.read_text("utf-8").splitlines()
    changes = difflib.unified_diff(accepted, lines, "accepted", "made", lineterm="")
    assert accepted == lines, "\n".join(changes)
