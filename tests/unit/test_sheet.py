"""Sheets: files to grids of text with their places."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import openpyxl
import pytest

from yieldnet.foundation.findings import Findings, SourceSpan
from yieldnet.reading.cells import MAX_COLUMNS, MAX_ROWS
from yieldnet.reading.sheet import Sheet, read_sheet
from yieldnet.reading.workbook import MAX_WORKBOOK_BYTES

if TYPE_CHECKING:
    from pathlib import Path


def _csv(folder: Path, text: str, **options: Any) -> tuple[Sheet | None, Findings]:
    path = folder / "a.csv"
    path.write_text(text, "utf-8")
    findings = Findings()
    return read_sheet(str(path), findings, **options), findings


def _xlsx(folder: Path, tabs: dict[str, Any], tab: str = "") -> tuple[Any, Findings]:
    book = openpyxl.Workbook()
    book.remove(book.worksheets[0])
    for name, rows in tabs.items():
        sheet = book.create_sheet(name)
        for row in rows:
            sheet.append(row)
    path = folder / "a.xlsx"
    book.save(path)
    findings = Findings()
    return read_sheet(str(path), findings, tab=tab), findings


def _texts(sheet: Sheet) -> list[list[str]]:
    return [[cell.text for cell in row] for row in (sheet.headings, *sheet.rows)]


@pytest.mark.parametrize("separator", [",", ";", "\t"])
def test_the_separator_is_that_of_the_headings(tmp_path: Path, separator: str) -> None:
    lines = ["time [h],biomass [g/L]", "0,0.1", " 2 ,n/a"]
    sheet, findings = _csv(tmp_path, "\n".join(lines).replace(",", separator))
    assert findings.items == []
    assert sheet is not None
    assert _texts(sheet) == [["time [h]", "biomass [g/L]"], ["0", "0.1"], ["2", "n/a"]]


def test_places_count_comments_and_blank_lines(tmp_path: Path) -> None:
    sheet, findings = _csv(
        tmp_path, '# "open, quote\n\ntime [h],biomass [g/L]\n0,0.1\n# more\n\n,\n2,0.2\n\n'
    )
    assert findings.items == []
    assert sheet is not None
    path = str(tmp_path / "a.csv")
    assert sheet.headings[1].span == SourceSpan(file=path, line=3, column=2)
    assert [row[0].span.line for row in sheet.rows] == [4, 8]
    assert sheet.rows[1][1].span == SourceSpan(file=path, line=8, column=2)


def test_a_quoted_cell_may_hold_the_separator(tmp_path: Path) -> None:
    sheet, findings = _csv(tmp_path, 'time [h], "1,3-propanediol [g/L]"\n0,"1,5"\n')
    assert findings.items == []
    assert sheet is not None
    assert _texts(sheet) == [["time [h]", "1,3-propanediol [g/L]"], ["0", "1,5"]]


def test_words_that_look_like_missing_values_stay_as_written(tmp_path: Path) -> None:
    words = ["NA", "nan", "NULL", "None", "1e5", "007", "-"]
    sheet, _ = _csv(tmp_path, ",".join("abcdefg") + "\n" + ",".join(words) + "\n")
    assert sheet is not None
    assert _texts(sheet)[1] == words


@pytest.mark.parametrize(
    ("text", "units"),
    [
        ("time,biomass\nh,g/L\n0,0.1\n", ["h", "g/L"]),
        # An optical density has no unit, or 1.
        ("time,optical density,state\nh,1,\n0,0.1,A\n", ["h", "1", ""]),
        ("time,notes\nh\n0,\n", ["h", ""]),
        ("time [h],state\nA,B\n", []),
        ("time,state\n0,A\n", []),
    ],
)
def test_a_row_of_units_is_recognised(tmp_path: Path, text: str, units: list[str]) -> None:
    sheet, findings = _csv(tmp_path, text)
    assert findings.items == []
    assert sheet is not None
    assert [cell.text for cell in sheet.units] == units
    assert [cell.span.column for cell in sheet.units] == list(range(1, len(units) + 1))


def test_rows_of_another_length_are_all_told(tmp_path: Path) -> None:
    sheet, findings = _csv(tmp_path, "time [h],biomass [g/L]\n0,0,1\n1,0.2\n2\n3,0.3,x\n")
    assert sheet is None
    told = [(f.code, f.where.line if f.where else 0, f.message) for f in findings]
    assert told == [
        ("YN123", 2, "the row has 3 cells, the heading 2"),
        ("YN123", 4, "the row has 1 cell, the heading 2"),
        ("YN123", 5, "the row has 3 cells, the heading 2"),
    ]
    hints = [finding.hint for finding in findings]
    assert "decimal comma" in hints[0]
    assert "n/a" in hints[1]
    assert "heading" in hints[2]


@pytest.mark.parametrize(
    ("text", "code"),
    [
        ("\n \n", "YN102"),
        ("# nothing\n", "YN121"),
        ("time [h],biomass [g/L]\n", "YN121"),
        ("time\n1\n", "YN121"),
        ('time [h],"biomass\n0,1\n', "YN121"),
        ("time [h],b\r\n0,1\r\n", "YN106"),
        ("\ufefftime [h],b\n0,1\n", "YN103"),
        ("a,b\n" + "1,2\n" * (MAX_ROWS + 1), "YN108"),
        ("a," * (MAX_COLUMNS + 1) + "\n" + "1," * (MAX_COLUMNS + 1) + "\n", "YN108"),
        ("," * 10_000 + "\n", "YN121"),
        ("x" * 400_000, "YN108"),
    ],
)
def test_what_is_no_table_is_refused(tmp_path: Path, text: str, code: str) -> None:
    sheet, findings = _csv(tmp_path, text)
    assert sheet is None
    assert {finding.code for finding in findings} == {code}


def test_a_name_split_by_a_comma_is_recognised(tmp_path: Path) -> None:
    text = "time [h],1,3-propanediol [g/L]\n0,1.5\n"
    sheet, findings = _csv(tmp_path, text, known=["1,3-propanediol"])
    assert sheet is None
    (finding,) = findings
    assert finding.code == "YN114"
    assert "'1,3-propanediol'" in finding.message
    text = "time [h];1,3-propanediol [g/L]\n0;1.5\n"
    sheet, findings = _csv(tmp_path, text, known=["1,3-propanediol"])
    assert findings.items == []
    assert sheet is not None


def test_files_that_are_not_there_or_no_sheets(tmp_path: Path) -> None:
    (tmp_path / "day-3.csv").write_text("a,b\n1,2\n", "utf-8")
    (tmp_path / "folder.csv").mkdir()
    (tmp_path / "folder.xlsx").mkdir()
    (tmp_path / "large.xlsx").write_bytes(b"0" * (MAX_WORKBOOK_BYTES + 1))
    here = SourceSpan(file="run.yaml", line=4, column=8)
    found = {}
    for name in (
        "day-4.csv",
        "day.ods",
        "day",
        "folder.csv",
        "folder.xlsx",
        "large.xlsx",
        "a" * 400 + ".csv",
    ):
        findings = Findings()
        assert read_sheet(str(tmp_path / name), findings, named_at=here) is None
        (finding,) = findings
        found[name[:10]] = (finding.code, finding.where == here)
        if name == "day-4.csv":
            assert finding.hint == "Did you mean 'day-3.csv'?"
    assert found == {
        "day-4.csv": ("YN120", True),
        "day.ods": ("YN121", True),
        "day": ("YN121", True),
        "folder.csv": ("YN101", False),
        "folder.xls": ("YN101", False),
        "large.xlsx": ("YN108", False),
        "a" * 10: ("YN120", True),
    }


def test_a_workbook_gives_its_first_tab_as_text(tmp_path: Path) -> None:
    rows = [["time [h]", "biomass [g/L]", "notes"], [0, 0.1, "n/a"], [2.0, 1e-05, None]]
    sheet, findings = _xlsx(tmp_path, {"day 3": rows, "day 4": [["a", "b"], [1, 2]]})
    assert findings.items == []
    assert _texts(sheet) == [
        ["time [h]", "biomass [g/L]", "notes"],
        ["0", "0.1", "n/a"],
        ["2", "1e-05", ""],
    ]
    assert sheet.rows[1][2].span == SourceSpan(file=str(tmp_path / "a.xlsx"), line=3, column=3)


def test_a_workbook_keeps_its_places_below_empty_and_comment_rows(tmp_path: Path) -> None:
    rows = [[], ["# measured twice"], ["time", "biomass"], ["h", "g/L"], [], [0, 0.1], [2, 0.2]]
    sheet, findings = _xlsx(tmp_path, {"day 3": rows})
    assert findings.items == []
    assert [cell.text for cell in sheet.units] == ["h", "g/L"]
    assert sheet.headings[0].span.line == 3
    assert [row[0].span.line for row in sheet.rows] == [6, 7]


def test_a_tab_is_found_by_its_name_or_told(tmp_path: Path) -> None:
    tabs = {"day 3": [["a", "b"], [1, 2]], "day 4": [["c", "d"], [3, 4]]}
    sheet, _ = _xlsx(tmp_path, tabs, tab="day 4")
    assert _texts(sheet) == [["c", "d"], ["3", "4"]]
    sheet, findings = _xlsx(tmp_path, tabs, tab="night")
    assert sheet is None
    assert [(f.code, f.hint) for f in findings] == [("YN122", "Its tabs: day 3, day 4.")]
    _, findings = _csv(tmp_path, "a,b\n1,2\n", tab="day 4")
    assert [finding.code for finding in findings] == ["YN122"]


def test_an_empty_tab_is_no_table(tmp_path: Path) -> None:
    sheet, findings = _xlsx(tmp_path, {"day 3": []})
    assert sheet is None
    assert [finding.code for finding in findings] == ["YN121"]


def test_a_file_that_must_not_be_opened_says_why(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def _denied(self: Path) -> bytes:
        raise PermissionError(13, "Permission denied")

    (tmp_path / "a.xlsx").write_bytes(b"PK")
    monkeypatch.setattr("pathlib.Path.read_bytes", _denied)
    findings = Findings()
    assert read_sheet(str(tmp_path / "a.xlsx"), findings) is None
    (finding,) = findings
    assert finding.code == "YN101"
    assert finding.message.endswith("permission denied")


def test_a_sheet_in_a_folder_that_is_not_there(tmp_path: Path) -> None:
    findings = Findings()
    assert read_sheet(str(tmp_path / "no" / "a.csv"), findings) is None
    (finding,) = findings
    assert finding.code == "YN120"
    assert finding.hint == "The path counts from the folder of the run file."
