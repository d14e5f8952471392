"""Showing an answer: run, then one renderer, then the exit code."""

from __future__ import annotations

from typing import TYPE_CHECKING

import click

from yieldnet.cli.options import end, refuse, write_csv

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.prediction.result import Prediction

__all__ = ["show"]


def show(run: Callable[[], Prediction], unit: str, as_csv: bool, as_json: bool) -> None:
    """Run a verb that answers a case and show what it says."""
    from yieldnet.foundation.errors import YieldnetError

    try:
        result = run()
    except YieldnetError as error:
        refuse(error, as_json)
    if as_json:
        from yieldnet.report.json_form import as_text, prediction_form

        click.echo(as_text(prediction_form(result)))
    elif as_csv:
        records = result.coefficient_records()
        header = tuple(records[0]) if records else ()
        rows = [
            tuple("" if cell is None else str(cell) for cell in row.values()) for row in records
        ]
        write_csv(header, rows)
    else:
        from yieldnet.report.text import console, print_prediction
        from yieldnet.report.view import view_of

        print_prediction(console(), view_of(result, unit), result.findings)
    end(result.outcome == "solved")
