"""``yieldnet predict``."""

from __future__ import annotations

import click

from yieldnet.cli.answer import show
from yieldnet.cli.options import csv_option, engine_option, json_option, unit_option

__all__ = ["command"]


@click.command("predict")
@click.argument("case", type=click.Path())
@unit_option
@engine_option
@csv_option
@json_option
def command(case: str, unit: str, engine: str, as_csv: bool, as_json: bool) -> None:
    """Yield coefficients of CASE by elements and by its network, side by side.

    Example: yieldnet predict examples/succinate-from-xylose/case.yaml --unit g/g
    """
    from yieldnet.verbs import predict

    show(lambda: predict(case, engine=engine), unit, as_csv, as_json)
