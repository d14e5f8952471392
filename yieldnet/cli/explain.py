"""``yieldnet explain``."""

from __future__ import annotations

import sys

import click

from yieldnet.cli.options import json_option

__all__ = ["command"]


@click.command("explain")
@click.argument("word", required=False)
@json_option
def command(word: str | None, as_json: bool) -> None:
    """What a WORD or finding code means; without WORD, all of them.

    Example: yieldnet explain YN401
    """
    from yieldnet.foundation.catalogue import CATALOGUE
    from yieldnet.foundation.findings import near
    from yieldnet.foundation.glossary import GLOSSARY
    from yieldnet.report.json_form import FORMAT, as_text
    from yieldnet.report.text import console, wrapped

    codes = list(CATALOGUE.values())
    words = list(GLOSSARY)
    if word is not None:
        codes = [item for item in codes if item.code == word.upper()]
        words = [item for item in words if item.casefold() == word.casefold()]
        if not codes and not words:
            known = (*GLOSSARY, *CATALOGUE)
            hint = near(word, known) or "'yieldnet explain' lists all words and codes."
            click.echo(wrapped(f"{word!r} is neither a word nor a code. {hint}"), err=True)
            if as_json:
                click.echo(as_text({"format": FORMAT, "codes": [], "words": {}}))
            sys.exit(1)
    if as_json:
        form = {
            "format": FORMAT,
            "codes": [
                {"code": item.code, "title": item.title, "why": item.why, "way_out": item.way_out}
                for item in codes
            ],
            "words": {item: GLOSSARY[item] for item in words},
        }
        click.echo(as_text(form))
        return
    out = console()
    if word is None:
        out.print(wrapped(", ".join(words), "", "  "))
        out.print()
        for item in codes:
            out.print(f"{item.code}  {item.title}")
        out.print("'yieldnet explain WORD-OR-CODE' says what it means.", style="dim")
        return
    for name in words:
        out.print(name, style="bold")
        out.print(wrapped(GLOSSARY[name], "  "))
    for item in codes:
        out.print(f"{item.code}  {item.title}", style="bold")
        out.print(wrapped(item.why, "  "))
        out.print(wrapped(f"What to do: {item.way_out}", "  "))
