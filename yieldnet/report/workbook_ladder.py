"""The sheets ``ladder`` and ``sources``: answers of the linear problem, and their sources.

In: a prediction, findings, assumptions. Out: values that no formula of a spreadsheet could give,
each marked so.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.report.figures import figure
from yieldnet.report.view import view_of
from yieldnet.report.workbook_page import Kind

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.report.workbook_inputs import Setting
    from yieldnet.report.workbook_page import Book, Page

__all__ = ["add_ladder", "add_sources"]

_YIELD = "0.0000"


def add_ladder(book: Book, setting: Setting) -> None:
    """The sheet ``ladder``; none without an aim.

    Parameters
    ----------
    book : Book
        Receives the sheet.
    setting : Setting
        What the workbook is made from.
    """
    prediction = setting.prediction
    if not prediction.ladder:
        return
    page = book.page(
        "ladder",
        (36, 11, 11, 11, 40, 44),
        "All numbers are from the linear problem, with the inputs of the case: they stay when a"
        " cell is changed. Run the case again for others.",
    )
    page.heading(f"Ladder: {prediction.case.aim}, mol/mol {prediction.case.basis.name}")
    page.header("rung", "best", "costs", "share", "what it adds", "why there is none")
    words = _words(setting)
    shares = {}
    if prediction.shares is not None:
        shares = {item.layer: item.share for item in prediction.shares.shares}
    first = page.row
    for item in prediction.ladder:
        page.write(1, item.rung)
        best = page.write(
            2, "none" if item.value is None else item.value, kind=Kind.PREDICTED, shown=_YIELD
        )
        book.define(f"best at {item.rung}", best)
        for column, value in ((3, item.loss), (4, shares.get(item.rung))):
            if value is not None:
                page.write(column, value, kind=Kind.PREDICTED, shown=_YIELD)
        page.write(5, words.get(item.rung, ""), wrap=True)
        page.write(6, item.reason, wrap=True)
        page.row += 1
    page.bars(f"Ladder: {prediction.case.aim}, mol/mol", first, page.row - 1)
    _relaxations(page, setting)


def _words(setting: Setting) -> dict[str, str]:
    """What each rung adds, as the text output says it."""
    tables = view_of(setting.prediction).tables
    ladders = [table for table in tables if table.title.startswith("Ladder:")]
    return {row[0]: row[1] for table in ladders for row in table.rows}


def _relaxations(page: Page, setting: Setting) -> None:
    report = setting.prediction.relaxations
    if report is None or not report.helpful:
        return
    page.heading("What would give it back, mol/mol")
    page.header("", "best", "gain", "", "change", "why there is none")
    for item in report.helpful:
        page.write(1, " + ".join(name for _, name in item.parts))
        for column, value in ((2, item.value), (3, item.gain)):
            if value is not None:
                page.write(column, value, kind=Kind.PREDICTED, shown=_YIELD)
        page.write(5, item.words, wrap=True)
        page.write(6, item.reason, wrap=True)
        page.row += 1


def add_sources(book: Book, setting: Setting, origin: Sequence[tuple[str, str]]) -> None:
    """The sheet ``sources``: assumptions, findings, cautions, and the source of every constant.

    Parameters
    ----------
    book : Book
        Receives the sheet.
    setting : Setting
        What the workbook is made from.
    origin : sequence of (str, str)
        Versions, files and what could not be told.
    """
    page = book.page(
        "sources",
        (64, 20, 84),
        f"Made by yieldnet from {setting.case.file or 'a case'}.",
    )
    sheet = setting.sheet
    if sheet is not None:
        page.heading("Cautions")
        for text in sheet.cautions:
            page.note(text)
    findings = sheet.findings if sheet is not None else setting.prediction.findings
    if origin:
        page.heading("Made from")
        for name, text in origin:
            page.write(1, name)
            page.write(2, text)
            page.row += 1
    page.heading("Findings, of the case as it was")
    page.header("finding", "", "way out")
    for item in findings:
        place = f" (line {item.where.line})" if item.where is not None else ""
        page.write(1, f"{item.severity} {item.code}{place}: {item.message}", wrap=True)
        page.write(3, item.hint, wrap=True)
        page.row += 1
    if not findings:
        page.note("none")
    page.heading("Assumptions")
    page.header("assumption", "value", "source")
    assumptions = sheet.assumptions if sheet is not None else setting.prediction.assumptions
    for one in assumptions:
        page.write(1, one.text, wrap=True)
        if one.value is not None:
            page.write(2, f"{figure(one.value)} {one.unit}".strip())
        page.write(3, " ".join(one.source.split()), wrap=True)
        page.row += 1
    page.heading("Sources of constants")
    page.header("constant", "", "source")
    for name, source in book.sources:
        page.write(1, name)
        page.write(3, source, wrap=True)
        page.row += 1
