"""``yieldnet schema``."""

from __future__ import annotations

import click

from yieldnet.cli.options import json_option

__all__ = ["command"]


@click.command("schema")
@click.argument("file", type=click.Choice(["case", "network"]))
@json_option
def command(file: str, as_json: bool) -> None:
    """JSON Schema of case or network files, for editors; always JSON.

    Example: yieldnet schema case
    """
    from yieldnet.report.json_form import as_text
    from yieldnet.verbs import schema

    click.echo(as_text(schema(file)))
