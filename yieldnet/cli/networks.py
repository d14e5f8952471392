"""``yieldnet networks``."""

from __future__ import annotations

from typing import TYPE_CHECKING

import click

from yieldnet.cli.options import csv_option, end, json_option, refuse, write_csv

if TYPE_CHECKING:
    from yieldnet.report.table import Table

__all__ = ["command"]


@click.command("networks")
@click.argument("name", required=False)
@click.option(
    "--check", is_flag=True, help="Compare what NAME says it reproduces with what comes out."
)
@csv_option
@json_option
def command(name: str | None, check: bool, as_csv: bool, as_json: bool) -> None:
    """The networks that ship with yieldnet; with NAME, one of them, or a file, in full.

    Example: yieldnet networks facultative-succinate
    """
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.reading.shipped import shipped_names
    from yieldnet.report.json_form import FORMAT, as_text
    from yieldnet.report.library_view import network_form, network_lines, networks_table
    from yieldnet.report.text import console
    from yieldnet.verbs import read_reproducing_network

    if check:
        _check(name, as_csv, as_json)
        return
    try:
        chosen = [
            (item, *read_reproducing_network(item))
            for item in ([name] if name else shipped_names())
        ]
    except YieldnetError as error:
        refuse(error, as_json)
    if as_json:
        forms = [network_form(*item) for item in chosen]
        click.echo(as_text({"format": FORMAT, "networks": forms}))
    elif as_csv or name is None:
        _print(networks_table(chosen), as_csv)
    else:
        out = console()
        for text, style in network_lines(*chosen[0]):
            out.print(text, style=style)


def _print(table: Table, as_csv: bool) -> None:
    from yieldnet.report.text import console, print_table

    if as_csv:
        write_csv(table.columns, list(table.rows))
    else:
        print_table(console(), table)


def _check(name: str | None, as_csv: bool, as_json: bool) -> None:
    """Compare and end with 1 if a value does not come out."""
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.report.json_form import FORMAT, as_text, findings_form
    from yieldnet.report.library_view import reproduced_form, reproduced_table
    from yieldnet.report.text import console, print_findings
    from yieldnet.verbs import reproduce

    if name is None:
        raise click.UsageError("--check needs the NAME of a network.")
    try:
        found = reproduce(name)
    except YieldnetError as error:
        refuse(error, as_json)
    doubts = tuple(dict.fromkeys(doubt for item in found for doubt in item.findings))
    if as_json:
        form = {**reproduced_form(name, found), "findings": findings_form(doubts)}
        click.echo(as_text({"format": FORMAT, **form}))
    else:
        _print(reproduced_table(name, found), as_csv)
        if doubts:
            print_findings(console(stderr=as_csv), doubts)
    end(all(item.agrees for item in found))
