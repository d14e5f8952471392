"""``yieldnet knockout``."""

from __future__ import annotations

import click

from yieldnet.cli.options import end, engine_option, json_option, refuse

__all__ = ["command"]


@click.command("knockout")
@click.argument("case", type=click.Path())
@click.argument("names", nargs=-1, required=True)
@engine_option
@json_option
def command(case: str, names: tuple[str, ...], engine: str, as_json: bool) -> None:
    """CASE before and after switching off NAMES, reactions or groups of its network.

    Example: yieldnet knockout examples/lysine/case.yaml 'malic enzyme'
    """
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.verbs import knockout

    try:
        result = knockout(case, names, engine=engine)
    except YieldnetError as error:
        refuse(error, as_json)
    if as_json:
        from yieldnet.report.json_form import as_text
        from yieldnet.report.study_view import knockout_form

        click.echo(as_text(knockout_form(result)))
    else:
        from yieldnet.report.study_view import knockout_headline, knockout_tables
        from yieldnet.report.text import console, print_findings, print_table, wrapped

        out = console()
        out.print(wrapped(result.case.title), style="bold")
        out.print(wrapped(knockout_headline(result), "", "  "))
        for table in knockout_tables(result):
            print_table(out, table)
        if result.after.findings:
            out.print()
            print_findings(out, result.after.findings)
    end(result.after.outcome == "solved")
