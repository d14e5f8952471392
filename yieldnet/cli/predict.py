"""``yieldnet predict``."""

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


@click.command("predict")
@click.argument("case", type=click.Path())
@unit_option
@click.option("--fluxes", is_flag=True, help="Show the fluxes at the aim.")
@click.option("--proof", is_flag=True, help="Show the proof that nothing better is possible.")
@click.option("--order", default="", help="Second ladder: rungs below elements, comma between.")
@level_option
@engine_option
@csv_option
@json_option
def command(
    case: str,
    unit: str,
    fluxes: bool,
    proof: bool,
    order: str,
    level: float,
    engine: str,
    as_csv: bool,
    as_json: bool,
) -> None:
    """Yield coefficients of CASE by elements and by its network, side by side.

    Example: yieldnet predict examples/succinate-from-xylose/case.yaml --unit g/g
    """
    from yieldnet.verbs import predict

    rungs = [rung.strip() for rung in order.split(",") if rung.strip()]
    show(
        lambda: predict(case, engine=engine, fluxes=fluxes, proof=proof, order=rungs, level=level),
        unit,
        as_csv,
        as_json,
    )
