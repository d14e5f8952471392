"""``yieldnet plant``."""

from __future__ import annotations

import click

from yieldnet.cli.options import csv_option, engine_option, json_option, refuse, write_csv

__all__ = ["command"]


@click.command("plant")
@click.argument("cases", nargs=-1, required=True, type=click.Path())
@click.option("--formulas", is_flag=True, help="Show how each figure follows, and its source.")
@engine_option
@csv_option
@json_option
def command(
    cases: tuple[str, ...], formulas: bool, engine: str, as_csv: bool, as_json: bool
) -> None:
    """Streams, base, oxygen, heat, vessels and raw materials of the plant of CASES.

    Each case needs a section 'plant'. Several cases stand side by side.

    Example: yieldnet plant examples/plant/case.yaml
    """
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.report.plant_form import plant_form, plant_records, refused_plant_form
    from yieldnet.verbs import plant

    try:
        sheets = plant(cases, engine=engine)
    except YieldnetError as error:
        refuse(error, as_json, refused_plant_form)
    if as_json:
        from yieldnet.report.json_form import as_text

        click.echo(as_text(plant_form(sheets)))
    elif as_csv:
        write_csv(*plant_records(sheets))
    else:
        from yieldnet.report.plant_view import plant_view
        from yieldnet.report.text import console, print_plant

        print_plant(console(), plant_view(sheets, formulas=formulas))
