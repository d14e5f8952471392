"""Tables of a page: the same texts as everywhere, one number a cell, as a spreadsheet wants them.

A text output writes ``0.216…0.361``, ``0.288±0.0361``, ``(1.2)``, ``3 (2)`` and ``57 %`` in one
cell. Here low and high, value and error stand in columns of their own, and percent in the heading,
so that a cell is a number or a word. No figure is rounded again.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.report.table import Table

__all__ = ["PageColumn", "PageTable", "page_table"]

_NUMBER = r"[+-]?\d+(?:\.\d+)?"
_PLAIN = re.compile(_NUMBER)
_RANGE = re.compile(rf"({_NUMBER}|unbounded)…({_NUMBER}|unbounded)")
_SPACED_RANGE = re.compile(rf"({_NUMBER}) … ({_NUMBER})")
_ERROR = re.compile(rf"({_NUMBER})±({_NUMBER})")
_EXACT = re.compile(rf"({_NUMBER}) exact")
_SET_ASIDE = re.compile(rf"\(({_NUMBER})\)")
_IN_FACT = re.compile(r"(\d+) \((\d+)\)")
_PERCENT = re.compile(rf"({_NUMBER}) %")
_UNIT = re.compile(r", (mol/mol|g/g|C-mol/C-mol)\b")
_IN_UNIT = frozenset(
    {
        "measured",
        "elements",
        "network",
        "reconciled",
        "predicted",
        "best",
        "costs",
        "share",
        "gain",
        "before",
        "after",
        "at aim before",
        "wrong by",
        "amount",
        "value",
        "it could be",
        "left, mean",
        "at worst",
    }
)
"""Headings whose unit a text output tells in the title of the table."""
_SIDES = frozenset({"taken up", "given off", "either way", "none"})
_VERDICTS = frozenset({"uphill", "possible"})
_TOTALS = ("total", "salt, all ions")


@dataclass(frozen=True, slots=True, kw_only=True)
class PageColumn:
    """A column of a page.

    Parameters
    ----------
    name : str
        Heading, with the unit where the column has one.
    numeric : bool
        Whether its cells are numbers.
    """

    name: str
    numeric: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class PageTable:
    """A table of a page.

    Parameters
    ----------
    title : str
        Caption.
    columns : tuple of PageColumn
        Columns.
    rows : tuple of tuple of str
        Cells; the first names the row.
    note : str
        Line under the table.
    bars : bool
        Whether the last column is drawn as bars, too; its cells are shares of the whole [%].
    sums : bool
        Whether its last row is a sum, so that its order has a meaning.
    """

    title: str
    columns: tuple[PageColumn, ...]
    rows: tuple[tuple[str, ...], ...]
    note: str = ""
    bars: bool = False
    sums: bool = False


def page_table(table: Table) -> PageTable:
    """Table of a page.

    Parameters
    ----------
    table : Table
        As a text output has it.

    Returns
    -------
    PageTable
        The same figures, one a cell.
    """
    unit = _UNIT.search(table.title)
    names: list[str] = []
    cells: list[tuple[str, ...]] = []
    for place, heading in enumerate(table.columns):
        column = [row[place] for row in table.rows]
        if place and not heading and not any(column):
            continue
        for name, texts in _split(heading, column):
            known = name or _unnamed(place, texts)
            bare = re.sub(r",? (low|high)$", "", known)
            if unit is not None and bare in _IN_UNIT:
                known += f" [{unit[1]}]"
            names.append(known)
            cells.append(tuple(texts))
    # Bars that a picture draws as well need no column; those that the note speaks of do.
    bars = bool(table.bars) and "Bars:" in table.note
    if bars:
        names.append("bar [%]")
        cells.append(tuple(f"{100 * share:.0f}" for share in table.bars))
    rows = tuple(zip(*cells, strict=True)) if table.rows else ()
    return PageTable(
        title=table.title,
        columns=tuple(
            PageColumn(name=name, numeric=place > 0 and _numeric(texts))
            for place, (name, texts) in enumerate(zip(names, cells, strict=True))
        ),
        rows=rows,
        note=table.note,
        bars=bars,
        sums=bool(rows) and rows[-1][0] in _TOTALS,
    )


def _numeric(texts: Sequence[str]) -> bool:
    return any(_PLAIN.fullmatch(text) for text in texts)


def _unnamed(place: int, texts: Sequence[str]) -> str:
    """Heading of a column that a text output leaves without one."""
    if place == 0:
        return "name"
    found = {text for text in texts if text}
    if found and found <= _SIDES:
        return "side"
    if found and found <= _VERDICTS:
        return "verdict"
    return "equation" if any("->" in text for text in found) else "remark"


def _split(heading: str, column: Sequence[str]) -> list[tuple[str, list[str]]]:
    """Columns of plain texts that hold what one column holds."""
    for pattern in (_RANGE, _SPACED_RANGE):
        if any(pattern.fullmatch(text) for text in column):
            pairs = [_ends(pattern, text) for text in column]
            comma = f"{heading} " if heading else ""
            return [
                (f"{comma}low", [low for low, _ in pairs]),
                (f"{comma}high", [high for _, high in pairs]),
            ]
    if any(_ERROR.fullmatch(text) or _EXACT.fullmatch(text) for text in column) or any(
        _SET_ASIDE.fullmatch(text) for text in column
    ):
        pairs = [_with_error(text) for text in column]
        return [(heading, [value for value, _ in pairs]), ("s.d.", [sd for _, sd in pairs])]
    if any(_IN_FACT.fullmatch(text) for text in column):
        pairs = [_in_fact(text) for text in column]
        return [
            (heading, [free for free, _ in pairs]),
            (f"{heading}, in fact", [fact for _, fact in pairs]),
        ]
    told = [text for text in column if text]
    if told and all(_PERCENT.fullmatch(text) for text in told):
        bare = [text.removesuffix(" %") for text in column]
        return [(f"{heading} [%]" if heading else "%", bare)]
    return [(heading, list(column))]


def _ends(pattern: re.Pattern[str], text: str) -> tuple[str, str]:
    found = pattern.fullmatch(text)
    if found:
        return found[1], found[2]
    # One number, or "unbounded", is both ends; a word such as "unique" is none.
    return (text, text) if _PLAIN.fullmatch(text) or text == "unbounded" else (text, "")


def _with_error(text: str) -> tuple[str, str]:
    if found := _ERROR.fullmatch(text):
        return found[1], found[2]
    if found := _EXACT.fullmatch(text):
        return found[1], "exact"
    if found := _SET_ASIDE.fullmatch(text):
        # A spreadsheet would take a number in brackets as negative.
        return found[1], "set aside"
    return text, ""


def _in_fact(text: str) -> tuple[str, str]:
    found = _IN_FACT.fullmatch(text)
    return (found[1], found[2]) if found else (text, text)
