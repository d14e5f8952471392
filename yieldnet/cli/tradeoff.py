"""``yieldnet tradeoff``."""

from __future__ import annotations

from typing import TYPE_CHECKING

import click

from yieldnet.cli.options import (
    check_picture,
    csv_option,
    end,
    engine_option,
    force_option,
    json_option,
    picture_option,
    refuse,
    write_csv,
)

if TYPE_CHECKING:
    from pathlib import Path

__all__ = ["command"]


@click.command("tradeoff")
@click.argument("cases", metavar="CASE...", type=click.Path(), nargs=-1, required=True)
@click.option("--x", default="", help="Coefficient along x.  [default: biomass]")
@click.option("--y", default="", help="Coefficient along y.  [default: the aim]")
@click.option(
    "--over",
    type=click.Choice(["growth-rate", "oxygen"]),
    help="Another axis along x: growth rates at the uptake of the case, or oxygen.",
)
@picture_option
@force_option
@engine_option
@csv_option
@json_option
def command(
    cases: tuple[str, ...],
    x: str,
    y: str,
    over: str | None,
    picture: Path | None,
    force: bool,
    engine: str,
    as_csv: bool,
    as_json: bool,
) -> None:
    """All that two coefficients of each CASE can be together: a polygon, every corner exact.

    Statements about the two coefficients are given up; the rest of a case holds.

    Example: yieldnet tradeoff examples/succinate-from-xylose/case.yaml
    """
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.verbs import tradeoff

    if over and x:
        raise click.UsageError("--over is an axis along x: leave --x out beside it.")
    check_picture(picture, force)
    try:
        result = tradeoff(cases, x=x, y=y, over=over or "", engine=engine)
        if picture is not None:
            from yieldnet.report.pictures import save_tradeoff

            save_tradeoff(result, picture, replace=force)
    except YieldnetError as error:
        refuse(error, as_json)
    except OSError as error:
        raise click.FileError(str(picture), error.strerror) from error
    from yieldnet.report.tradeoff_view import (
        region_headline,
        region_notes,
        region_tables,
        tradeoff_findings,
        tradeoff_form,
        tradeoff_records,
        tradeoff_title,
    )

    if as_json:
        from yieldnet.report.json_form import as_text

        click.echo(as_text(tradeoff_form(result)))
    elif as_csv:
        write_csv(*tradeoff_records(result))
    else:
        from yieldnet.report.text import console, print_findings, print_table, wrapped

        out = console()
        out.print(wrapped(tradeoff_title(result)), style="bold")
        for place, region in enumerate(result.regions):
            out.print()
            out.print(wrapped(region.case.title), style="bold")
            out.print(wrapped(region_headline(result, place), "", "  "))
            for table in region_tables(result, place):
                print_table(out, table)
            for note in region_notes(result, place):
                out.print()
                out.print(wrapped(note, "", "  "))
        findings = tradeoff_findings(result)
        if findings:
            out.print()
            print_findings(out, findings)
    end(all(not region.polygon.rays for region in result.regions))
