"""``yieldnet rates``."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import click

from yieldnet.cli.options import (
    check_picture,
    csv_option,
    force_option,
    json_option,
    picture_option,
    refuse,
    write_csv,
)

if TYPE_CHECKING:
    from yieldnet.rates.result import RateResult

__all__ = ["command"]


@click.command("rates")
@click.argument("run", type=click.Path())
@click.option("--state", default="", help="Steady state to take, where a run has several.")
@click.option(
    "--into",
    type=click.Path(path_type=Path),
    help="Case file that gets what was measured; all else in it stays.",
)
@click.option(
    "--out", type=click.Path(path_type=Path), help="Write that case here instead of changing it."
)
@click.option("--block", is_flag=True, help="Print the lines of a case file only.")
@picture_option
@force_option
@csv_option
@json_option
def command(
    run: str,
    state: str,
    into: Path | None,
    out: Path | None,
    block: bool,
    picture: Path | None,
    force: bool,
    as_csv: bool,
    as_json: bool,
) -> None:
    """Rates and yields of a cultivation RUN, and its sheet, with their errors.

    Example: yieldnet rates examples/batch/run.yaml
    """
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.report.case_block import chosen_state, fill_case
    from yieldnet.report.rates_view import refused_rates_form
    from yieldnet.verbs import rates

    if out is not None and into is None:
        raise click.UsageError("--out needs --into: the case that is to be filled.")
    if out is not None and out.exists() and not force:
        raise click.UsageError(f"'{out}' is there already; --force replaces it.")
    check_picture(picture, force)
    wanted = out or picture
    try:
        result = rates(run)
        if into is not None:
            fill_case(result, chosen_state(result, state), into, out, force)
        if picture is not None:
            from yieldnet.report.rates_pictures import save_rates

            save_rates(result, picture, replace=force)
        if block:
            _print_block(result, state)
            return
    except YieldnetError as error:
        refuse(error, as_json, refused_rates_form)
    except OSError as error:
        raise click.FileError(str(error.filename or wanted), error.strerror) from error
    if as_json:
        from yieldnet.report.json_form import as_text
        from yieldnet.report.rates_view import rates_form

        click.echo(as_text(rates_form(result)))
    elif as_csv:
        from yieldnet.report.rates_view import rates_records

        write_csv(*rates_records(result))
    else:
        from yieldnet.report.text import console, print_rates

        print_rates(console(), result)
        if into is not None:
            click.echo(f"\nWritten to {out or into}.")


def _print_block(result: RateResult, state: str) -> None:
    from yieldnet.report.case_block import block_lines, chosen_state

    for key, lines in block_lines(result, chosen_state(result, state)).items():
        if lines:
            click.echo(f"{key}:")
            for line in lines:
                click.echo(f"  {line}")
