"""``yieldnet compounds``."""

from __future__ import annotations

import sys

import click

from yieldnet.cli.options import csv_option, json_option, write_csv

__all__ = ["command"]


@click.command("compounds")
@click.argument("name", required=False)
@csv_option
@json_option
def command(name: str | None, as_csv: bool, as_json: bool) -> None:
    """The compound and biomass library; NAME is a compound, a synonym, a biomass or a part of one.

    Example: yieldnet compounds succinate
    """
    from yieldnet.foundation.findings import near
    from yieldnet.report.json_form import FORMAT, as_text
    from yieldnet.report.library_view import (
        compound_form,
        compound_lines,
        compounds_table,
        find_entries,
    )
    from yieldnet.report.text import console, print_table, wrapped

    entries, names = find_entries(name)
    if not entries:
        hint = near(name or "", names) or "'yieldnet compounds' lists all."
        click.echo(wrapped(f"{name!r} is not in the library. {hint}"), err=True)
        if as_json:
            click.echo(as_text({"format": FORMAT, "compounds": []}))
        sys.exit(1)
    if as_json:
        forms = [compound_form(item) for item in entries]
        click.echo(as_text({"format": FORMAT, "compounds": forms}))
        return
    table = compounds_table(entries)
    if as_csv:
        write_csv(table.columns, list(table.rows))
    elif len(entries) == 1:
        out = console()
        for text, style in compound_lines(entries[0]):
            out.print(text, style=style)
    else:
        print_table(console(), table)
