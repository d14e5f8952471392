"""Options and endings that verbs share."""

from __future__ import annotations

import sys
from typing import TYPE_CHECKING, Any, NoReturn

import click

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.foundation.findings import Finding

__all__ = [
    "csv_option",
    "end",
    "engine_option",
    "json_option",
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
