"""The view on a terminal, 80 columns wide; colour only where the terminal takes it."""

from __future__ import annotations

import textwrap
from contextlib import contextmanager
from itertools import zip_longest
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable, Iterator

    from rich.console import Console

    from yieldnet.foundation.findings import Finding
    from yieldnet.rates.result import RateResult
    from yieldnet.report.data_view import DataView
    from yieldnet.report.plant_view import PlantView
    from yieldnet.report.table import Table
    from yieldnet.report.view import PredictionView

__all__ = [
    "WIDTH",
    "console",
    "print_data",
    "print_findings",
    "print_growth",
    "print_prediction",
    "print_rates",
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
    taken = sum(widths) + 2 * len(widths) - 1 + (_BAR + 2 if table.bars else 0)
    _narrow(widths, _longest_words(table), taken - WIDTH)
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
        cells = [
            textwrap.wrap(cell, width, break_on_hyphens=False) if len(cell) > width else [cell]
            for cell, width in zip(row, widths, strict=True)
        ]
        for place, pieces in enumerate(zip_longest(*cells, fillvalue="")):
            text = line(pieces)
            if table.bars and place == 0:
                text += "  " + "▪" * round(_BAR * table.bars[i])
            out.print(text.rstrip())
    if table.note:
        out.print(wrapped(table.note, "  "), style="dim")


def _longest_words(table: Table) -> list[int]:
    return [
        max(
            len(word)
            for cell in (heading, *(row[j] for row in table.rows))
            for word in [*cell.split(), ""]
        )
        for j, heading in enumerate(table.columns)
    ]


def _narrow(widths: list[int], least: list[int], excess: int) -> None:
    """Take width from the widest column that can give way without breaking a word, step by step."""
    for _ in range(excess):
        able = [j for j, width in enumerate(widths) if width > least[j]] or range(len(widths))
        widths[max(able, key=lambda j: widths[j])] -= 1


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
    _print_end(out, findings, view.assumptions)


def _print_end(
    out: Console, findings: Iterable[Finding], assumptions: Iterable[tuple[str, str, str]]
) -> None:
    """Findings and assumptions, where there are any."""
    kept = list(findings)
    if kept:
        _heading(out, "Findings")
        print_findings(out, kept)
    taken = list(assumptions)
    if taken:
        _heading(out, "Assumptions")
        for text, value, source in taken:
            words = f"{text}: {value}" if value else text
            out.print(wrapped(f"- {words}" + (f" [{source}]" if source else ""), "  ", "    "))


def print_data(out: Console, view: DataView, findings: Iterable[Finding]) -> None:
    """Print judged data.

    Parameters
    ----------
    out : Console
        Where to.
    view : DataView
        What.
    findings : iterable of Finding
        Its findings.
    """
    out.print(wrapped(view.title), style="bold")
    out.print(wrapped(view.setting), style="dim")
    out.print()
    out.print(wrapped(view.headline, "", "  "), style="bold")
    if view.aim:
        out.print(wrapped(view.aim, "", "  "), style="bold")
    if view.equations:
        _heading(out, "Equations in which only measured values stand, mol/mol")
        for text in view.equations:
            out.print(wrapped(text, "  ", "    "))
    for table in view.tables:
        print_table(out, table)
    if view.next is not None:
        print_table(out, view.next)
    if view.remarks:
        out.print()
        for remark in view.remarks:
            out.print(wrapped(remark, "", "  "))
    _print_end(out, findings, view.assumptions)


def print_growth(
    out: Console,
    head: tuple[str, str, str],
    tables: Iterable[Table],
    findings: Iterable[Finding],
    assumptions: Iterable[tuple[str, str, str]],
) -> None:
    """Print yield against growth rate.

    Parameters
    ----------
    out : Console
        Where to.
    head : tuple of (str, str, str)
        Title, setting and headline.
    tables : iterable of Table
        Tables in their order.
    findings : iterable of Finding
        What is doubtful.
    assumptions : iterable of (str, str, str)
        Text, value with unit, source.
    """
    title, setting, headline = head
    out.print(wrapped(title), style="bold")
    out.print(wrapped(setting), style="dim")
    out.print()
    out.print(wrapped(headline, "", "  "), style="bold")
    for table in tables:
        print_table(out, table)
    _print_end(out, findings, assumptions)


def print_rates(out: Console, result: RateResult) -> None:
    """Print the rates of a run.

    Parameters
    ----------
    out : Console
        Where to.
    result : RateResult
        What was found.
    """
    from yieldnet.report.figures import assumption_rows
    from yieldnet.report.rates_view import rates_headline, rates_tables, state_title

    run = result.run
    out.print(wrapped(run.title), style="bold")
    out.print(wrapped(f"{run.kind}; {run.equation}", "", "  "), style="dim")
    for state in result.states:
        out.print()
        title = state_title(result, state)
        if title:
            out.print(title, style="bold")
        out.print(wrapped(rates_headline(result, state), "", "  "), style="bold")
        for table in rates_tables(result, state):
            print_table(out, table)
    taken = assumption_rows(result.assumptions)
    _print_end(out, result.findings, taken)


def print_plant(out: Console, view: PlantView) -> None:
    """Print plant sheets.

    Parameters
    ----------
    out : Console
        Where to.
    view : PlantView
        What.
    """
    for title, headline in view.headlines:
        out.print(wrapped(title), style="bold")
        out.print(wrapped(headline, "  ", "  "))
    for table in view.tables:
        print_table(out, table)
    out.print()
    out.print(wrapped(view.balance))
    if view.formulas:
        _heading(out, "How each figure follows")
        for text in view.formulas:
            out.print(wrapped(f"- {text}", "  ", "    "))
    _print_end(out, view.findings, view.assumptions)
    _heading(out, "Cautions")
    for text in view.cautions:
        out.print(wrapped(f"- {text}", "  ", "    "))
