"""``yieldnet growth``."""

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
    from fractions import Fraction
    from pathlib import Path

__all__ = ["command"]


def _rates(written: str) -> list[Fraction]:
    """Growth rates of the option, each above zero."""
    from yieldnet.foundation.exact import NumberTextError, read_number

    found = []
    for piece in written.split(","):
        try:
            value = read_number(piece.strip()).value
        except NumberTextError as error:
            raise click.UsageError(f"--rates: {error.reason}. {error.hint}".strip()) from error
        if value <= 0:
            raise click.UsageError(f"--rates: {piece.strip()} 1/h is not above zero.")
        found.append(value)
    return found


@click.command("growth")
@click.argument("case", type=click.Path())
@click.option(
    "--rates",
    default="",
    help="Growth rates in 1/h, comma between.  [default: a series round that of the case]",
)
@picture_option
@force_option
@engine_option
@csv_option
@json_option
def command(
    case: str,
    rates: str,
    picture: Path | None,
    force: bool,
    engine: str,
    as_csv: bool,
    as_json: bool,
) -> None:
    """Most biomass of CASE by growth rate: true yield, maintenance coefficient, yield on ATP.

    Growth rate, uptake and aim of the case are set aside; all else is kept. The exit code is 1 if
    there is no growth at any of the rates.

    Example: yieldnet growth examples/growth/case.yaml --rates 0.02,0.05,0.1,0.2
    """
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.report.growth_view import (
        growth_assumptions,
        growth_form,
        growth_headline,
        growth_records,
        growth_setting,
        growth_tables,
        refused_growth_form,
    )
    from yieldnet.verbs import growth

    check_picture(picture, force)
    wanted = _rates(rates) if rates.strip() else []
    try:
        result = growth(case, rates=wanted, engine=engine)
        if picture is not None:
            from yieldnet.report.growth_pictures import save_growth

            save_growth(result, picture, replace=force)
    except YieldnetError as error:
        refuse(error, as_json, refused_growth_form)
    except OSError as error:
        raise click.FileError(str(picture), error.strerror) from error
    if as_json:
        from yieldnet.report.json_form import as_text

        click.echo(as_text(growth_form(result)))
    elif as_csv:
        write_csv(*growth_records(result))
    else:
        from yieldnet.report.text import console, print_growth

        print_growth(
            console(),
            (result.case.title, growth_setting(result), growth_headline(result)),
            growth_tables(result),
            result.findings,
            growth_assumptions(result),
        )
    end(result.grows)
