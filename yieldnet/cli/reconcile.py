"""``yieldnet reconcile``."""

from __future__ import annotations

from typing import TYPE_CHECKING

import click

from yieldnet.cli.options import (
    check_picture,
    csv_option,
    engine_option,
    force_option,
    json_option,
    level_option,
    picture_option,
    progress_if_watched,
    refuse,
    unit_option,
    write_csv,
)

if TYPE_CHECKING:
    from pathlib import Path

__all__ = ["command"]


@click.command("reconcile")
@click.argument("case", type=click.Path())
@click.option("--elements", is_flag=True, help="Judge by the elements alone, without the network.")
@click.option("--of", default="", help="Whose range to narrow next.  [default: the aim]")
@click.option(
    "--precision",
    type=click.FloatRange(0, 1, max_open=True),
    default=0.05,
    show_default=True,
    help="S.d. of the next measurement, as a share of its value.",
)
@click.option(
    "--draws",
    type=click.IntRange(min=2),
    default=400,
    show_default=True,
    help="Sets drawn where there is no closed form.",
)
@level_option
@unit_option
@picture_option
@force_option
@engine_option
@csv_option
@json_option
def command(
    case: str,
    elements: bool,
    of: str,
    precision: float,
    draws: int,
    level: float,
    unit: str,
    picture: Path | None,
    force: bool,
    engine: str,
    as_csv: bool,
    as_json: bool,
) -> None:
    """Judge the measured values of CASE: do they agree, which is wrong, what to measure next.

    All measured values count, those of the aim too. The exit code is 1 if they fail their test,
    or if those without an error contradict the balances.

    Example: yieldnet reconcile examples/succinate-from-xylose/case.yaml
    """
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.report.data_form import data_form, data_records, refused_data_form
    from yieldnet.verbs import reconcile

    check_picture(picture, force)
    try:
        with progress_if_watched("drawn sets") as tick:
            result = reconcile(
                case,
                elements=elements,
                level=level,
                of=of,
                precision=precision,
                draws=draws,
                engine=engine,
                tick=tick,
            )
        if picture is not None:
            from yieldnet.report.data_pictures import save_data

            save_data(result, picture, replace=force)
    except YieldnetError as error:
        refuse(error, as_json, refused_data_form)
    except OSError as error:
        raise click.FileError(str(picture), error.strerror) from error
    if as_json:
        from yieldnet.report.json_form import as_text

        click.echo(as_text(data_form(result)))
    elif as_csv:
        write_csv(*data_records(result))
    else:
        from yieldnet.report.data_view import data_view
        from yieldnet.report.text import console, print_data

        print_data(console(), data_view(result, unit), result.findings)
    if result.failed is not None or result.contradictory:
        raise SystemExit(1)
