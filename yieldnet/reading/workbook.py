"""Workbooks: one tab of a .xlsx file as a grid of cells.

The values are those that the spreadsheet program calculated last. Beside them the cells are looked
at as written, so that a formula without a value, an error, a date or a percentage that is only
shown so is told and not taken for something else.
"""

from __future__ import annotations

import io
import warnings
import zipfile
from pathlib import Path
from typing import TYPE_CHECKING, Any

from yieldnet.foundation.findings import SourceSpan, near
from yieldnet.reading.cells import MAX_COLUMNS, MAX_ROWS, Cell, cell_of
from yieldnet.reading.source import near_file

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Findings

__all__ = ["MAX_UNPACKED_BYTES", "MAX_WORKBOOK_BYTES", "read_workbook"]

MAX_WORKBOOK_BYTES = 2_000_000
"""Largest workbook that is read [byte]."""
MAX_UNPACKED_BYTES = 10_000_000
"""Largest size of a workbook once its parts are unpacked [byte]."""


def read_workbook(
    path: str, tab: str, tab_span: SourceSpan, findings: Findings
) -> list[list[Cell]] | None:
    """Grid of the cells of one tab, or ``None`` with findings.

    Parameters
    ----------
    path : str
        Path of a .xlsx file.
    tab : str
        Name of the tab; empty for the first one.
    tab_span : SourceSpan
        Where the tab is named.
    findings : Findings
        Receives what is wrong.

    Returns
    -------
    list of list of Cell or None
        All rows, those that are empty among them.
    """
    top = SourceSpan(file=path, line=1, column=1)
    raw = _bytes(path, findings, top)
    if raw is None:
        return None
    import openpyxl

    with warnings.catch_warnings():
        # What a workbook holds beside its cells, such as validation, is left out by the library.
        warnings.simplefilter("ignore")
        try:
            # Once with the values that were calculated last, once with the formulas behind them.
            calculated, written = (
                openpyxl.load_workbook(io.BytesIO(raw), data_only=only) for only in (True, False)
            )
        except Exception as error:  # The library raises anything at all on a broken workbook.
            _broken(error, findings, top)
            return None
    names = [sheet.title for sheet in written.worksheets]
    if not names or (tab and tab not in names):
        findings.add(
            "YN122",
            f"the workbook has no tab {tab!r}" if tab else "the workbook has no tab with cells",
            tab_span,
            hint=near(tab, names) or "Its tabs: " + (", ".join(names) or "none") + ".",
        )
        return None
    chosen = tab or names[0]
    values, sources = calculated[chosen], written[chosen]
    if sources.max_column > MAX_COLUMNS or sources.max_row > MAX_ROWS:
        findings.add(
            "YN108",
            f"the tab has {sources.max_row:,} rows and {sources.max_column:,} columns",
            top,
            left=f"limit {MAX_ROWS:,} rows and {MAX_COLUMNS} columns",
            hint="Is this the right tab? Delete stray cells far from the table.",
        )
        return None
    return [
        [
            _cell(
                values.cell(row=row, column=column),
                sources.cell(row=row, column=column),
                SourceSpan(file=path, line=row, column=column),
            )
            for column in range(1, sources.max_column + 1)
        ]
        for row in range(1, sources.max_row + 1)
    ]


def _broken(error: Exception, findings: Findings, top: SourceSpan) -> None:
    reason = "".join(letter for letter in str(error) if letter.isprintable())[:80]
    findings.add(
        "YN121",
        f"the workbook cannot be read: {type(error).__name__}: {reason}",
        top,
        hint="Open it in a spreadsheet program and save it again.",
    )


def _bytes(path: str, findings: Findings, top: SourceSpan) -> bytes | None:
    place = Path(path)
    try:
        if place.is_dir():
            findings.add("YN101", f"{path!r} is a directory", top, hint="Name the file inside it.")
            return None
        size = place.stat().st_size
        raw = place.read_bytes() if size <= MAX_WORKBOOK_BYTES else b""
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or "the name cannot be used"
        findings.add(
            "YN101",
            f"cannot read {path!r}: {reason.lower()}",
            top,
            hint=near_file(place) or "Check the path.",
        )
        return None
    limit = MAX_WORKBOOK_BYTES
    if raw:
        try:
            with zipfile.ZipFile(io.BytesIO(raw)) as packed:
                size, limit = sum(item.file_size for item in packed.infolist()), MAX_UNPACKED_BYTES
        except zipfile.BadZipFile:
            findings.add(
                "YN121",
                "the file is named .xlsx and is no workbook",
                top,
                hint="Open it in a spreadsheet program and save it as .xlsx or .csv.",
            )
            return None
    if size > limit:
        findings.add(
            "YN108",
            f"the workbook has {size:,} bytes",
            top,
            left=f"limit {limit:,} bytes",
            hint="Is this the right file? Copy the measured rows to a workbook of their own.",
        )
        return None
    return raw


def _cell(calculated: Any, written: Any, span: SourceSpan) -> Cell:
    """Text of a cell: its value as calculated last, its formula and number format as written."""
    value = calculated.value
    if calculated.data_type == "e":
        return Cell(text=str(value), span=span, fault=f"the formula gives {value}, not a value")
    if value is None:
        fault = "the formula has no value: open the workbook, let it calculate, and save it"
        return Cell(text="", span=span, fault=fault if written.data_type == "f" else "")
    if isinstance(value, str):
        return cell_of(value, span)
    if isinstance(value, bool):
        return Cell(text=str(value), span=span, fault="a yes or no stands where a number belongs")
    if not isinstance(value, int | float):
        return Cell(text=str(value), span=span, fault="a date or a time of day stands in the cell")
    fault = ""
    if "%" in str(written.number_format):
        fault = f"the cell shows a percentage and holds {value!r}: format it as a plain number"
    return Cell(text=repr(value), span=span, fault=fault)
