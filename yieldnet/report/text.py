"""The view on a terminal, 80 columns wide; colour only where the terminal takes it."""

from __future__ import annotations

import textwrap
from contextlib import contextmanager
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable, Iterator

    from rich.console import Console

    from yieldnet.foundation.findings import Finding
    from yieldnet.report.table import Table
    from yieldnet.report.view import PredictionView

__all__ = [
    "WIDTH",
    "console",
    "print_findings",
    "print_prediction",
    "print_table",
    "progress",
    "wrapped",
]

WIDTH = 80
"""Widest line [characters]."""
_BAR = 8
_STYLE = {"error": "bold red", "warning": "yellow", "note": "dim"}


def console(stderr: bool = False) -> Console:
    """Console of the width used everywhere; honours ``NO_COLOR``.

    Parameters
    ----------
    stderr : bool
        Whether it writes to the error stream.

    Returns
    -------
    Console
        The console.
    """
    from rich.console import Console

    return Console(width=WIDTH, stderr=stderr, highlight=False, soft_wrap=True, markup=False)


def wrapped(text: str, indent: str = "", then: str | None = None) -> str:
    """Text broken into lines of at most 80 characters, names never broken."""
    return textwrap.fill(
        text,
        WIDTH,
        initial_indent=indent,
        subsequent_indent=indent if then is None else then,
        break_long_words=False,
        break_on_hyphens=False,
    )


def _heading(out: Console, text: str) -> None:
    out.print()
    out.print(text, style="bold")


def print_table(out: Console, table: Table) -> None:
    """Print a table: first column and texts to the left, numbers to the right.

    Parameters
    ----------
    out : Console
        Where to.
    table : Table
        What.
    """
    _heading(out, table.title)
    if not table.rows:
        if table.note:
            out.print(wrapped(table.note, "  "), style="dim")
        return
    widths = [
        max(len(cell) for cell in (heading, *(row[j] for row in table.rows)))
        for j, heading in enumerate(table.columns)
    ]
    # The widest column gives way where the table would not fit.
    widest = widths.index(max(widths))
    taken = sum(widths) + 2 * len(widths) - 1 + (_BAR + 2 if table.bars else 0)
    widths[widest] -= max(0, taken - WIDTH)
    right = [
        bool(heading) and all(_is_figure(row[j]) for row in table.rows)
        for j, heading in enumerate(table.columns)
    ]

    def line(cells: tuple[str, ...]) -> str:
        return " " + "  ".join(
            cell.rjust(width) if to_right else cell.ljust(width)
            for cell, width, to_right in zip(cells, widths, right, strict=True)
        )

    if any(table.columns):
        out.print(line(table.columns).rstrip(), style="dim")
    for i, row in enumerate(table.rows):
        pieces = textwrap.wrap(row[widest], widths[widest]) or [""]
        text = line((*row[:widest], pieces[0], *row[widest + 1 :]))
        if table.bars:
            text += "  " + "▪" * round(_BAR * table.bars[i])
        out.print(text.rstrip())
        for piece in pieces[1:]:
            blank = ("",) * len(row)
            out.print(line((*blank[:widest], piece, *blank[widest + 1 :])).rstrip())
    if table.note:
        out.print(wrapped(table.note, "  "), style="dim")


def _is_figure(cell: str) -> bool:
    words = ("unbounded", "impossible", "none", "ever")
    return not cell or cell[0].isdigit() or cell[0] in "+-(" or cell.startswith(words)


@contextmanager
def progress(label: str) -> Iterator[Callable[[int, int], None]]:
    """Progress bar on the error stream, as a function of what is done and what there is in all.

    Parameters
    ----------
    label : str
        What is counted.

    Returns
    -------
    context manager
        Gives the function to call.
    """
    from rich.progress import BarColumn, Progress, TextColumn, TimeRemainingColumn

    columns = (TextColumn(label), BarColumn(), TimeRemainingColumn())
    with Progress(*columns, console=console(stderr=True), transient=True) as bar:
        task = bar.add_task(label)
        yield lambda done, total: bar.update(task, completed=done, total=total)


def print_findings(out: Console, findings: Iterable[Finding]) -> None:
    """Print findings, each with its place, both sides and the way out.

    Parameters
    ----------
    out : Console
        Where to.
    findings : iterable of Finding
        What.
    """
    for item in findings:
        place = f"{item.where}: " if item.where else ""
        out.print(
            wrapped(f"{place}{item.severity} {item.code}: {item.message}", "", "    "),
            style=_STYLE[str(item.severity)],
        )
        for side in (item.left, item.right):
            if side:
                out.print(wrapped(side, "      ", "        "))
        if item.hint:
            out.print(wrapped(item.hint, "    "))


def print_prediction(out: Console, view: PredictionView, findings: Iterable[Finding]) -> None:
    """Print a prediction.

    Parameters
    ----------
    out : Console
        Where to.
    view : PredictionView
        What.
    findings : iterable of Finding
        Its findings.
    """
    out.print(wrapped(view.title), style="bold")
    out.print(wrapped(view.setting), style="dim")
    out.print()
    out.print(wrapped(view.headline, "", "  "), style="bold")
    if view.equation:
        out.print()
        out.print(wrapped(view.equation, "  ", "    "))
    if view.conflict:
        out.print()
        for text in view.conflict:
            out.print(wrapped(text, "", "  "))
    for table in view.tables:
        print_table(out, table)
    if view.proof:
        _heading(out, "Proof that nothing better is possible")
        for text in view.proof:
            out.print(wrapped(text, "  "))
        for table in view.proof_tables:
            print_table(out, table)
    if view.remarks:
        out.print()
        for remark in view.remarks:
            out.print(wrapped(remark, "", "  "))
    kept = list(findings)
    if kept:
        _heading(out, "Findings")
        print_findings(out, kept)
    if view.assumptions:
        _heading(out, "Assumptions")
        for text, value, source in view.assumptions:
            words = f"{text}: {value}" if value else text
            out.print(wrapped(f"- {words}" + (f" [{source}]" if source else ""), "  ", "    "))
