"""``yieldnet additions``."""

from __future__ import annotations

import click

from yieldnet.cli.options import csv_option, end, engine_option, json_option, refuse, write_csv

__all__ = ["command"]


@click.command("additions")
@click.argument("case", type=click.Path())
@click.option(
    "--from",
    "candidates",
    type=click.Path(),
    help="Candidate file; without it the one that ships with yieldnet.",
)
@click.option("--pairs", is_flag=True, help="Try two candidates together as well.")
@click.option(
    "--with-deletions",
    is_flag=True,
    help="Try every knock-out on top of the best additions.",
)
@click.option(
    "--top",
    type=click.IntRange(min=1),
    default=5,
    show_default=True,
    help="How many of the best additions get knock-outs.",
)
@engine_option
@csv_option
@json_option
def command(
    case: str,
    candidates: str | None,
    pairs: bool,
    with_deletions: bool,
    top: int,
    engine: str,
    as_csv: bool,
    as_json: bool,
) -> None:
    """What added reactions would bring to the aim of CASE, and which rung each relieves.

    Example: yieldnet additions examples/lysine/case.yaml
    """
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.report.additions_view import additions_form, additions_view, refused_additions
    from yieldnet.verbs import additions

    try:
        result = additions(
            case,
            candidates=candidates,
            pairs=pairs,
            with_deletions=with_deletions,
            top=top,
            engine=engine,
        )
    except YieldnetError as error:
        refuse(error, as_json, refused_additions)
    if as_json:
        from yieldnet.report.json_form import as_text

        click.echo(as_text(additions_form(result)))
    elif as_csv:
        from yieldnet.studies.addition_result import COLUMNS

        rows = [
            tuple("" if cell is None else str(cell) for cell in row.values())
            for row in result.records()
        ]
        write_csv(COLUMNS, rows)
    else:
        from yieldnet.report.text import console, print_findings, print_table, wrapped

        view = additions_view(result)
        out = console()
        out.print(wrapped(view.title), style="bold")
        out.print(wrapped(view.setting), style="dim")
        out.print()
        out.print(wrapped(view.headline, "", "  "), style="bold")
        for table in view.tables:
            print_table(out, table)
        for texts in (view.equations, view.remarks):
            if texts:
                out.print()
            for text in texts:
                out.print(wrapped(text, "- ", "  "))
        # Notes about candidates stand in the remarks already.
        kept = [item for item in result.findings if item.severity != "note"]
        if kept:
            out.print()
            print_findings(out, kept)
    end(result.clean)
