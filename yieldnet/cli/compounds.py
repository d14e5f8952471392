"""``yieldnet compounds``."""

from __future__ import annotations

import sys

import click

from yieldnet.cli.options import csv_option, json_option, refuse, write_csv

__all__ = ["command"]


@click.command("compounds")
@click.argument("name", required=False)
@click.option(
    "--biomass-from",
    default="",
    metavar="SHARES",
    help="Put biomass together from shares of its dry weight, such as"
    " 'protein 0.5, RNA 0.2, lipid 0.1, carbohydrate 0.15, ash 0.05'.",
)
@click.option(
    "--monomers",
    default="Escherichia coli",
    show_default=True,
    help="Organism whose amino acids, nucleotides and lipids are taken.",
)
@click.option("--normalise", is_flag=True, help="Divide all shares by their sum.")
@csv_option
@json_option
def command(
    name: str | None,
    biomass_from: str,
    monomers: str,
    normalise: bool,
    as_csv: bool,
    as_json: bool,
) -> None:
    """The compound and biomass library; NAME is a compound, a synonym, a biomass or a part of one.

    Example: yieldnet compounds succinate
    """
    if biomass_from:
        if name:
            raise click.UsageError("Give a NAME or --biomass-from, not both.")
        _put_together(biomass_from, monomers, normalise, as_csv, as_json)
        return
    if normalise or monomers != "Escherichia coli":
        raise click.UsageError("--monomers and --normalise go with --biomass-from.")
    from yieldnet.foundation.findings import near
    from yieldnet.report.json_form import FORMAT, as_text
    from yieldnet.report.library_view import (
        compound_form,
        compound_lines,
        compounds_table,
        find_entries,
    )
    from yieldnet.report.text import console, print_table, wrapped

    entries, names = find_entries(name)
    if not entries:
        hint = near(name or "", names) or "'yieldnet compounds' lists all."
        click.echo(wrapped(f"{name!r} is not in the library. {hint}"), err=True)
        if as_json:
            click.echo(as_text({"format": FORMAT, "compounds": []}))
        sys.exit(1)
    if as_json:
        forms = [compound_form(item) for item in entries]
        click.echo(as_text({"format": FORMAT, "compounds": forms}))
        return
    table = compounds_table(entries)
    if as_csv:
        write_csv(table.columns, list(table.rows))
    elif len(entries) == 1:
        out = console()
        for text, style in compound_lines(entries[0]):
            out.print(text, style=style)
    else:
        print_table(console(), table)


def _put_together(line: str, monomers: str, normalise: bool, as_csv: bool, as_json: bool) -> None:
    """Biomass from its macromolecules."""
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.report.composition_view import (
        composition_form,
        composition_lines,
        composition_tables,
        refused_composition_form,
    )
    from yieldnet.report.json_form import as_text
    from yieldnet.report.text import console, print_table, wrapped
    from yieldnet.verbs import biomass_from

    try:
        cell = biomass_from(line, monomers=monomers, normalise=normalise)
    except YieldnetError as error:
        refuse(error, as_json, refused_composition_form)
    if as_json:
        click.echo(as_text(composition_form(cell)))
        return
    tables = composition_tables(cell)
    if as_csv:
        write_csv(tables[0].columns, list(tables[0].rows))
        return
    out = console()
    for text in composition_lines(cell):
        out.print(wrapped(text, "", "  "))
    for table in tables:
        print_table(out, table)
