"""``yieldnet audit``."""

from __future__ import annotations

import click

from yieldnet.cli.options import end, engine_option, json_option, refuse

__all__ = ["command"]


@click.command("audit")
@click.argument("network", type=click.Path())
@engine_option
@json_option
def command(network: str, engine: str, as_json: bool) -> None:
    """Everything wrong or doubtful in NETWORK, a file or the name of a shipped network.

    Example: yieldnet audit facultative-succinate
    """
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.report.json_form import unread_audit_form
    from yieldnet.verbs import audit

    try:
        result = audit(network, engine=engine)
    except YieldnetError as error:
        refuse(error, as_json, unread_audit_form)
    if as_json:
        from yieldnet.report.json_form import as_text, audit_form

        click.echo(as_text(audit_form(result)))
    else:
        from yieldnet.report.text import console, print_findings

        out = console()
        out.print(result.network.title, style="bold")
        print_findings(out, result.findings)
        count = sum(item.severity != "note" for item in result.findings)
        verdict = "clean" if result.clean else f"{count} finding{'s' if count != 1 else ''}"
        growth = " and growth" if result.network.growth is not None else ""
        out.print(f"{len(result.network.reactions)} reactions{growth} audited: {verdict}.")
    end(not result.refused)
