"""``yieldnet networks``."""

from __future__ import annotations

import click

from yieldnet.cli.options import csv_option, json_option, refuse, write_csv

__all__ = ["command"]


@click.command("networks")
@click.argument("name", required=False)
@csv_option
@json_option
def command(name: str | None, as_csv: bool, as_json: bool) -> None:
    """The networks that ship with yieldnet; with NAME, one of them in full.

    Example: yieldnet networks facultative-succinate
    """
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.reading.shipped import shipped_names
    from yieldnet.report.json_form import FORMAT, as_text
    from yieldnet.report.library_view import network_form, network_lines, networks_table
    from yieldnet.report.text import console, print_table
    from yieldnet.verbs import read_network

    try:
        chosen = [(item, read_network(item)) for item in ([name] if name else shipped_names())]
    except YieldnetError as error:
        refuse(error, as_json)
    if as_json:
        forms = [network_form(item, network) for item, network in chosen]
        click.echo(as_text({"format": FORMAT, "networks": forms}))
        return
    table = networks_table(chosen)
    if as_csv:
        write_csv(table.columns, list(table.rows))
    elif name is None:
        print_table(console(), table)
    else:
        out = console()
        for text, style in network_lines(*chosen[0]):
            out.print(text, style=style)
