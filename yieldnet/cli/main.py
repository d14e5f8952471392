"""The command ``yieldnet``: verbs are imported when they are called."""

from __future__ import annotations

from importlib import import_module

import click

import yieldnet

__all__ = ["main"]

_VERBS = {
    "predict": "Yield coefficients by elements and by network.",
    "balance": "Yield coefficients by elements alone.",
    "rates": "Rates and yields of a cultivation run, with their errors.",
    "reconcile": "Whether measured values agree, which is wrong, what to measure next.",
    "energetics": "Heat and Gibbs energy of the predicted equation.",
    "growth": "Biomass yield against growth rate, and yield on ATP.",
    "audit": "What is wrong or doubtful in a network.",
    "knockout": "One idea, before and after.",
    "screen": "All knock-outs to a depth, ranked.",
    "additions": "What added reactions would bring.",
    "tradeoff": "What two coefficients can be together, as a polygon.",
    "couple": "Smallest knock-out sets that force product.",
    "plant": "Streams, base, oxygen, heat, vessels and raw materials of a plant.",
    "report": "The whole study as one HTML file, workbook and pictures.",
    "new": "A commented case to start from, with a plant, a network, a run.",
    "compounds": "The compound and biomass library.",
    "networks": "The networks that ship with yieldnet.",
    "explain": "What a word or a finding code means.",
    "schema": "JSON Schema of the two files, for editors.",
}


class _Verbs(click.Group):
    """Group that knows its verbs by name and loads one at a time."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        return list(_VERBS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        if cmd_name not in _VERBS:
            return None
        command: click.Command = import_module(f"yieldnet.cli.{cmd_name}").command
        return command

    def resolve_command(
        self, ctx: click.Context, args: list[str]
    ) -> tuple[str | None, click.Command | None, list[str]]:
        from yieldnet.foundation.findings import near

        name = args[0] if args else ""
        if name and name not in _VERBS and not name.startswith("-"):
            hint = near(name, _VERBS) or "Verbs: " + ", ".join(_VERBS) + "."
            raise click.UsageError(f"{name!r} is not a verb. {hint}", ctx)
        return super().resolve_command(ctx, args)

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:
        with formatter.section("Verbs"):
            formatter.write_dl(list(_VERBS.items()))


@click.command(cls=_Verbs, context_settings={"help_option_names": ["-h", "--help"]})
@click.version_option(yieldnet.__version__, prog_name="yieldnet", message="%(prog)s %(version)s")
def main() -> None:
    """What a mole of substrate becomes, from elements and from a network.

    Example: yieldnet predict examples/succinate-from-xylose/case.yaml
    """
