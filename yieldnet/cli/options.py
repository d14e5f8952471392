"""Options and endings that verbs share."""

from __future__ import annotations

import sys
from contextlib import nullcontext
from pathlib import Path
from typing import TYPE_CHECKING, Any, NoReturn

import click

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence
    from contextlib import AbstractContextManager

    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.foundation.findings import Finding

__all__ = [
    "check_picture",
    "csv_option",
    "end",
    "engine_option",
    "force_option",
    "json_option",
    "level_option",
    "picture_option",
    "progress_if_watched",
    "refuse",
    "unit_option",
    "write_csv",
]

json_option = click.option(
    "--json", "as_json", is_flag=True, help="Print JSON (format 1) instead of text."
)
csv_option = click.option("--csv", "as_csv", is_flag=True, help="Print the table as CSV.")
engine_option = click.option(
    "--engine",
    type=click.Choice(["glpk", "optlang"]),
    default="glpk",
    show_default=True,
    help="Solver that suggests; its answer is proven in fractions.",
)
unit_option = click.option(
    "--unit",
    type=click.Choice(["mol/mol", "g/g", "C-mol/C-mol"]),
    default="mol/mol",
    show_default=True,
    help="Unit of the coefficient table.",
)

picture_option = click.option(
    "--picture", type=click.Path(path_type=Path), help="Draw it, .svg or .png."
)
force_option = click.option("--force", is_flag=True, help="Let what is written replace a file.")
level_option = click.option(
    "--level",
    type=click.FloatRange(0, 1, min_open=True, max_open=True),
    default=0.95,
    show_default=True,
    help="Probability with which the test of the data passes correct ones.",
)


def refuse(
    error: YieldnetError,
    as_json: bool,
    form: Callable[[tuple[Finding, ...]], dict[str, Any]] | None = None,
) -> NoReturn:
    """Show why there is no answer, and end with exit code 1."""
    from yieldnet.foundation.errors import InputError
    from yieldnet.foundation.findings import Finding
    from yieldnet.report.json_form import as_text, refused_form

    if isinstance(error, InputError):
        findings = error.findings
    else:
        findings = (Finding(code="YN605", message=str(error), hint="Take a smaller network."),)
    if as_json:
        click.echo(as_text(refused_form(findings) if form is None else form(findings)))
    else:
        from yieldnet.report.text import console, print_findings

        print_findings(console(stderr=True), findings)
        count = len(findings)
        click.echo(f"{count} finding{'s' if count != 1 else ''}; no answer.", err=True)
    sys.exit(1)


def end(good: bool) -> None:
    """End with exit code 0 for an answer, 1 for none."""
    if not good:
        sys.exit(1)


def write_csv(header: Sequence[str], rows: Sequence[Sequence[str]]) -> None:
    """Write a table as CSV to the standard output."""
    import csv

    writer = csv.writer(sys.stdout, lineterminator="\n")
    writer.writerow(header)
    writer.writerows(rows)


def progress_if_watched(
    label: str,
) -> AbstractContextManager[Callable[[int, int], None] | None]:
    """Progress on the error stream, if somebody is looking."""
    if not sys.stderr.isatty():
        return nullcontext(None)
    from yieldnet.report.text import progress

    return progress(label)


def check_picture(picture: Path | None, force: bool) -> None:
    """Wrong names of pictures are told before the work, not after it."""
    if picture is None:
        return
    from yieldnet.report.picture_file import PICTURES

    if picture.suffix not in PICTURES:
        raise click.UsageError(f"--picture takes a name that ends in {' or '.join(PICTURES)}.")
    if picture.exists() and not force:
        raise click.UsageError(f"'{picture}' is there already; --force replaces it.")
