"""``yieldnet balance``."""

from __future__ import annotations

import click

from yieldnet.cli.answer import show
from yieldnet.cli.options import (
    csv_option,
    engine_option,
    json_option,
    level_option,
    unit_option,
)

__all__ = ["command"]


@click.command("balance")
@click.argument("case", type=click.Path())
@unit_option
@level_option
@engine_option
@csv_option
@json_option
def command(case: str, unit: str, level: float, engine: str, as_csv: bool, as_json: bool) -> None:
    """Yield coefficients of CASE by elements alone; a network is not needed.

    Example: yieldnet balance examples/succinate-from-xylose/case.yaml
    """
    from yieldnet.verbs import balance

    show(lambda: balance(case, engine=engine, level=level), unit, as_csv, as_json)
