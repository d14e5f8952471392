"""``yieldnet explain``."""

from __future__ import annotations

import sys

import click

from yieldnet.cli.options import json_option

__all__ = ["command"]


@click.command("explain")
@click.argument("code", required=False)
@json_option
def command(code: str | None, as_json: bool) -> None:
    """What a finding CODE means, why it matters and what to do; without CODE, all of them.

    Example: yieldnet explain YN401
    """
    from yieldnet.foundation.catalogue import CATALOGUE
    from yieldnet.foundation.findings import near
    from yieldnet.report.json_form import FORMAT, as_text
    from yieldnet.report.text import console, wrapped

    chosen = list(CATALOGUE.values())
    if code is not None:
        entry = CATALOGUE.get(code.upper())
        if entry is None:
            hint = near(code.upper(), CATALOGUE) or "'yieldnet explain' lists all codes."
            click.echo(f"{code!r} is not a finding code. {hint}", err=True)
            sys.exit(1)
        chosen = [entry]
    if as_json:
        form = [
            {"code": item.code, "title": item.title, "why": item.why, "way_out": item.way_out}
            for item in chosen
        ]
        click.echo(as_text({"format": FORMAT, "codes": form}))
        return
    out = console()
    if code is None:
        for item in chosen:
            out.print(f"{item.code}  {item.title}")
        out.print("'yieldnet explain CODE' says why it matters and what to do.", style="dim")
        return
    for item in chosen:
        out.print(f"{item.code}  {item.title}", style="bold")
        out.print(wrapped(item.why, "  "))
        out.print(wrapped(f"What to do: {item.way_out}", "  "))
