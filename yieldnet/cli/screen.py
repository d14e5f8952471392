"""``yieldnet screen``."""

from __future__ import annotations

import sys

import click

from yieldnet.cli.options import (
    csv_option,
    engine_option,
    json_option,
    progress_if_watched,
    refuse,
    write_csv,
)

__all__ = ["command"]


@click.command("screen")
@click.argument("case", type=click.Path())
@click.option("--depth", type=click.IntRange(1, 3), default=1, show_default=True)
@click.option("--groups", is_flag=True, help="Switch off groups as wholes.")
@click.option(
    "--score",
    type=click.Choice(["guaranteed", "product", "product-growth"]),
    default="guaranteed",
    show_default=True,
    help="Rank by product guaranteed at most growth, by most product at a required growth, or by"
    " guaranteed product x biomass.",
)
@click.option(
    "--growth-share",
    type=click.FloatRange(0, 1),
    default=0.1,
    show_default=True,
    help="Required growth for 'product', as a share of the most.",
)
@click.option("--yes", is_flag=True, help="Run even if it takes longer than a minute.")
@engine_option
@csv_option
@json_option
def command(
    case: str,
    depth: int,
    groups: bool,
    score: str,
    growth_share: float,
    yes: bool,
    engine: str,
    as_csv: bool,
    as_json: bool,
) -> None:
    """All knock-outs of CASE to a depth, ranked by what they do for the product.

    Example: yieldnet screen examples/succinate-from-xylose/case.yaml --depth 2
    """
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.verbs import screen

    try:
        with progress_if_watched("knock-outs") as tick:
            result = screen(
                case,
                depth=depth,
                groups=groups,
                score=score,
                growth_share=growth_share,
                yes=yes,
                engine=engine,
                tick=tick,
            )
    except YieldnetError as error:
        refuse(error, as_json)
    if as_json:
        from yieldnet.report.json_form import as_text
        from yieldnet.report.study_view import screen_form

        click.echo(as_text(screen_form(result)))
    elif as_csv:
        header = ("knock-outs", "score", "together")
        rows = [
            ("; ".join(item.names), repr(item.score), "yes" if item.together else "")
            for item in result.entries
        ]
        write_csv(header, rows)
    else:
        from yieldnet.report.study_view import screen_headline, screen_notes, screen_table
        from yieldnet.report.text import console, print_findings, print_table, wrapped

        out = console()
        out.print(wrapped(result.case.title), style="bold")
        out.print(wrapped(screen_headline(result), "", "  "))
        print_table(out, screen_table(result))
        for note in screen_notes(result):
            out.print(wrapped(note, "  "), style="dim")
        if result.findings:
            out.print()
            print_findings(out, result.findings)
    if result.interrupted:
        sys.exit(1)
