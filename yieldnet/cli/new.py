"""``yieldnet new``."""

from __future__ import annotations

import os
from pathlib import Path

import click

from yieldnet.cli.options import force_option, json_option, refuse

__all__ = ["command"]


@click.command("new")
@click.argument("folder", type=click.Path(path_type=Path))
@click.option(
    "--network",
    default="",
    help="Shipped network by its name, or a network file; else the one that is meant for it.",
)
@click.option("--substrate", default="", help="Basis of the case, by name or synonym.")
@click.option("--product", default="", help="Compound that is to be most.")
@click.option(
    "--plant/--no-plant", default=True, show_default=True, help="A plant in placeholders."
)
@click.option("--own-network", is_flag=True, help="Put a copy of the network beside the case.")
@click.option(
    "--run",
    type=click.Choice(["batch", "fed-batch", "chemostat"]),
    default=None,
    help="Add a run file and a sheet to fill in.",
)
@force_option
@json_option
def command(
    folder: Path,
    network: str,
    substrate: str,
    product: str,
    plant: bool,
    own_network: bool,
    run: str | None,
    force: bool,
    as_json: bool,
) -> None:
    """A commented case in FOLDER to start from; it has an answer as it stands.

    Every line is explained, and what else could be written stands there as offers. Placeholders
    are marked 'replace this'. Either all files are written or none.

    Example: yieldnet new lysine-study --network lysine-coryneform --force
    """
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.report.new_view import new_form, new_lines, refused_new_form
    from yieldnet.verbs import new

    try:
        study = new(
            folder,
            network=network,
            substrate=substrate,
            product=product,
            plant=plant,
            own_network=own_network,
            run=run or "",
            force=force,
        )
    except YieldnetError as error:
        refuse(error, as_json, refused_new_form)
    except OSError as error:
        raise click.FileError(os.fspath(error.filename or folder), error.strerror) from error
    if as_json:
        from yieldnet.report.json_form import as_text

        click.echo(as_text(new_form(study)))
        return
    from yieldnet.report.text import console, print_findings

    click.echo("\n".join(new_lines(study)))
    if study.findings:
        print_findings(console(), study.findings)
