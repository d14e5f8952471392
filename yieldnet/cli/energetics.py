"""``yieldnet energetics``."""

from __future__ import annotations

import click

from yieldnet.cli.options import csv_option, end, engine_option, json_option, refuse, write_csv

__all__ = ["command"]


@click.command("energetics")
@click.argument("case", type=click.Path())
@engine_option
@csv_option
@json_option
def command(case: str, engine: str, as_csv: bool, as_json: bool) -> None:
    """Heat and Gibbs energy of the predicted overall equation of CASE.

    Example: yieldnet energetics examples/energetics/case.yaml
    """
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.report.energetics_form import (
        energetics_form,
        energetics_records,
        refused_energetics_form,
    )
    from yieldnet.verbs import energetics

    try:
        result = energetics(case, engine=engine)
    except YieldnetError as error:
        refuse(error, as_json, refused_energetics_form)
    if as_json:
        from yieldnet.report.json_form import as_text

        click.echo(as_text(energetics_form(result)))
    elif as_csv:
        write_csv(*energetics_records(result))
    else:
        from yieldnet.report.energetics_view import energetics_view
        from yieldnet.report.text import console, print_prediction

        print_prediction(console(), energetics_view(result), result.findings)
    end(result.prediction.outcome == "solved")
