"""``yieldnet couple``."""

from __future__ import annotations

import click

from yieldnet.cli.options import end, engine_option, json_option, refuse

__all__ = ["command"]


@click.command("couple")
@click.argument("case", type=click.Path())
@click.option(
    "--yield",
    "least_yield",
    required=True,
    help="Product to force, in mol/mol or with a unit: '0.3 g/g'.",
)
@click.option(
    "--growth-share",
    type=click.FloatRange(0, 1),
    default=0.1,
    show_default=True,
    help="Growth from which on it is forced, as a share of the most.",
)
@click.option("--depth", type=click.IntRange(0, 6), default=3, show_default=True)
@click.option("--alternatives", type=click.IntRange(1, 100), default=10, show_default=True)
@click.option("--groups", is_flag=True, help="Knock out groups as wholes.")
@engine_option
@json_option
def command(
    case: str,
    least_yield: str,
    growth_share: float,
    depth: int,
    alternatives: int,
    groups: bool,
    engine: str,
    as_json: bool,
) -> None:
    """Smallest knock-out sets of CASE that force product whenever the cell grows.

    Example: yieldnet couple examples/succinate-from-xylose/case.yaml --yield 0.4
    """
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.verbs import couple

    try:
        result = couple(
            case,
            least_yield=least_yield,
            growth_share=growth_share,
            depth=depth,
            alternatives=alternatives,
            groups=groups,
            engine=engine,
        )
    except YieldnetError as error:
        refuse(error, as_json)
    if as_json:
        from yieldnet.report.coupling_view import coupling_form
        from yieldnet.report.json_form import as_text

        click.echo(as_text(coupling_form(result)))
    else:
        from yieldnet.report.coupling_view import coupling_headline, coupling_notes, coupling_table
        from yieldnet.report.text import console, print_table, wrapped

        out = console()
        out.print(wrapped(coupling_headline(result), "", "  "), style="bold")
        print_table(out, coupling_table(result))
        for note in coupling_notes(result):
            out.print(wrapped(note, "  "), style="dim")
    end(bool(result.sets))
