"""Sheets: a .csv or .xlsx file as a grid of text cells that know their places.

Nothing is turned into a number here: the column that a cell belongs to decides what it means. In a
place of a sheet the line is the row and the column is counted as a spreadsheet counts, from 1.
"""

from __future__ import annotations

import csv
import re
from dataclasses import dataclass
from itertools import pairwise
from pathlib import Path
from typing import TYPE_CHECKING

from yieldnet.foundation.exact import NumberTextError, read_number
from yieldnet.foundation.findings import Findings, SourceSpan, near
from yieldnet.reading.cells import MAX_COLUMNS, MAX_ROWS, Cell, cell_of
from yieldnet.reading.source import read_text
from yieldnet.reading.workbook import read_workbook

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

__all__ = ["ENDINGS", "Sheet", "read_sheet"]

ENDINGS = (".csv", ".xlsx")
"""Endings of the files that are read."""

_BRACKETS = re.compile(r"\[[^\]]*\]|\s\([^()]*\)\s*$")
_SEPARATORS = ("\t", ";", ",")


@dataclass(frozen=True, slots=True, kw_only=True)
class Sheet:
    """A table with its headings.

    Parameters
    ----------
    file : str
        Path as the user gave it.
    headings : tuple of Cell
        First row that is no comment.
    units : tuple of Cell
        Row of units under the headings; empty if the headings hold the units.
    rows : tuple of tuple of Cell
        All rows below, each as long as the headings.
    """

    file: str
    headings: tuple[Cell, ...]
    units: tuple[Cell, ...]
    rows: tuple[tuple[Cell, ...], ...]


def read_sheet(
    path: str,
    findings: Findings,
    *,
    named_at: SourceSpan | None = None,
    tab: str = "",
    tab_at: SourceSpan | None = None,
    known: Iterable[str] = (),
) -> Sheet | None:
    """Sheet of a file, or ``None`` with findings.

    Parameters
    ----------
    path : str
        Path of a .csv or .xlsx file.
    findings : Findings
        Receives what is wrong.
    named_at : SourceSpan or None
        Where the file is named.
    tab : str
        Tab of a workbook; empty for the first one.
    tab_at : SourceSpan or None
        Where the tab is named.
    known : iterable of str
        Names that a comma may have split.

    Returns
    -------
    Sheet or None
        Headings and rows.
    """
    top = SourceSpan(file=path, line=1, column=1)
    ending = Path(path).suffix.casefold()
    if ending not in ENDINGS:
        findings.add(
            "YN121",
            f"a sheet is a .csv or a .xlsx file, not {ending or 'a file without ending'}",
            named_at or top,
            hint="Save the table in one of these forms.",
        )
        return None
    if not _exists(Path(path)):
        findings.add(
            "YN120",
            f"the sheet {Path(path).name!r} does not exist",
            named_at or top,
            left=f"looked for {path}",
            hint=_near_sheet(Path(path)) or "The path counts from the folder of the run file.",
        )
        return None
    if ending == ".csv":
        if tab:
            findings.add(
                "YN122",
                f"a .csv file has no tab {tab!r}",
                tab_at or top,
                hint="Leave 'tab' out, or name a .xlsx file.",
            )
        grid = _csv_grid(path, findings, top)
    else:
        grid = read_workbook(path, tab, tab_at or top, findings)
        known = ()  # Cells of a workbook are not split by commas.
    return _Table(path, findings, known).sheet(grid) if grid is not None else None


@dataclass(slots=True)
class _Table:
    """Splits a grid into headings, units and rows."""

    path: str
    findings: Findings
    known: Iterable[str]

    def sheet(self, grid: list[list[Cell]]) -> Sheet | None:
        rows = [
            row
            for row in grid
            if any(cell.text or cell.fault for cell in row) and not row[0].text.startswith("#")
        ]
        top = SourceSpan(file=self.path, line=1, column=1)
        if not rows:
            self._no_table(top, "no cell of the sheet holds anything", "Write headings and rows.")
            return None
        # A heading may be missing over the last columns, if cells were left for it.
        widest = max((len(_trimmed(row)) for row in rows[1:]), default=0)
        headings = _trimmed(rows[0], least=min(len(rows[0]), widest))
        if self._names_split(headings):
            return None
        if len(headings) > MAX_COLUMNS or len(rows) > MAX_ROWS:
            self.findings.add(
                "YN108",
                f"the sheet has {len(rows):,} rows and {len(headings):,} columns",
                top,
                left=f"limit {MAX_ROWS:,} rows and {MAX_COLUMNS} columns",
                hint="Is this the right file? Thin out what is logged every second.",
            )
            return None
        if len(headings) < 2:
            self._no_table(
                headings[0].span,
                "the headings are a single column",
                "Separate columns with a comma, a semicolon or a tab.",
            )
            return None
        body = rows[1:]
        units: tuple[Cell, ...] = ()
        if body and _is_units(body[0], headings):
            units, body = tuple(_filled(_trimmed(body[0]), headings)), body[1:]
        kept = [self._row(row, headings) for row in body]
        if not body:
            self._no_table(
                headings[0].span, "no row stands under the headings", "Add the measured rows."
            )
            return None
        if None in kept:
            return None
        return Sheet(
            file=self.path,
            headings=tuple(headings),
            units=units,
            rows=tuple(row for row in kept if row is not None),
        )

    def _no_table(self, span: SourceSpan, reason: str, hint: str) -> None:
        self.findings.add("YN121", reason, span, hint=hint)

    def _row(self, row: list[Cell], headings: Sequence[Cell]) -> tuple[Cell, ...] | None:
        cells = _trimmed(row, least=len(headings))
        if len(cells) == len(headings):
            return tuple(cells)
        found, wanted = len(cells), len(headings)
        hint = "Give every column a cell; write n/a where nothing was measured."
        if found > wanted:
            hint = "Give every column a heading, and leave no cell beyond the last one."
            # Half a decimal comma looks like a short whole number after another one.
            pairs = pairwise(cells)
            if any(
                re.fullmatch(r"-?\d+", one.text) and re.fullmatch(r"\d+", two.text)
                for one, two in pairs
            ):
                hint = "A decimal comma splits a number in two: write decimal points."
        self.findings.add(
            "YN123",
            f"the row has {found} {'cell' if found == 1 else 'cells'}, the heading {wanted}",
            row[0].span,
            hint=hint,
        )
        return None

    def _names_split(self, headings: Sequence[Cell]) -> bool:
        """Whether commas have split a name of several numbers, such as 1,3-propanediol."""
        known = {name.casefold() for name in self.known if "," in name}
        told = False
        for first in range(len(headings) - 1) if known else ():
            for count in (2, 3, 4):
                parts = headings[first : first + count]
                joined = _BRACKETS.sub("", ",".join(cell.text for cell in parts)).strip()
                if len(parts) == count and joined.casefold() in known:
                    told = True
                    self.findings.add(
                        "YN114",
                        f"a comma splits the name {joined!r}",
                        parts[0].span,
                        left=" and ".join(repr(cell.text) for cell in parts),
                        hint='Put the heading in double quotes, or separate columns with ";".',
                    )
        return told


def _exists(place: Path) -> bool:
    try:
        return place.exists()
    except (OSError, ValueError):
        return False


def _near_sheet(place: Path) -> str:
    try:
        names = [item.name for item in place.parent.iterdir()]
    except (OSError, ValueError):
        return ""
    return near(place.name, [name for name in names if name.casefold().endswith(ENDINGS)])


def _trimmed(row: list[Cell], least: int = 1) -> list[Cell]:
    """Cells without the empty ones at the end, but not fewer than a number of them."""
    end = len(row)
    while end > least and not row[end - 1].text and not row[end - 1].fault:
        end -= 1
    return row[:end]


def _filled(row: list[Cell], headings: Sequence[Cell]) -> list[Cell]:
    """Row of units, filled up with empty cells under the last headings."""
    line = row[0].span.line
    missing = [heading.span for heading in headings[len(row) :]]
    return row + [
        Cell(text="", span=SourceSpan(file=span.file, line=line, column=span.column))
        for span in missing
    ]


def _is_number(text: str) -> bool:
    try:
        read_number(text.replace(",", "."))
    except NumberTextError:
        return False
    return True


def _is_units(row: list[Cell], headings: Sequence[Cell]) -> bool:
    if any(_BRACKETS.search(cell.text) for cell in headings):
        return False
    cells = _trimmed(row)
    if len(cells) > len(headings) or any(cell.fault for cell in cells):
        return False
    # A bare 1 is the unit of an optical density; alone it would make no row a row of units.
    return not any(_is_number(cell.text) for cell in cells if cell.text != "1") and any(
        re.search("[A-Za-z%°]", cell.text) for cell in cells
    )


def _csv_grid(path: str, findings: Findings, top: SourceSpan) -> list[list[Cell]] | None:
    text = read_text(path, findings, indented_by_tabs=True)
    if text is None:
        return None
    lines = text.rstrip("\n").split("\n")
    # Comments may hold quotes and separators of their own; blank lines keep the count of rows.
    lines = ["" if line.lstrip().startswith("#") else line for line in lines]
    first = next((line for line in lines if line.strip()), "")
    if not first:
        findings.add(
            "YN121", "the sheet holds nothing but comments", top, hint="Write headings and rows."
        )
        return None
    bare = re.sub(r'"[^"]*"', "", first)
    separator = next((sign for sign in _SEPARATORS if sign in bare), ",")
    grid: list[list[Cell]] = []
    broken = False
    # Line by line, so that a stray quote cannot swallow the rows below it, and every row keeps the
    # number of cells that it was written with.
    for number, line in enumerate(lines, 1):
        if not line.strip():
            continue
        try:
            (texts,) = csv.reader([line], delimiter=separator, skipinitialspace=True, strict=True)
        except csv.Error:
            broken = True
            findings.add(
                "YN121",
                "the quotes of this row do not pair",
                SourceSpan(file=path, line=number, column=1),
                hint="A quoted cell begins and ends with one, and stands on one line.",
            )
            continue
        grid.append(
            [
                cell_of(text, SourceSpan(file=path, line=number, column=place))
                for place, text in enumerate(texts, 1)
            ]
        )
    return None if broken else grid
