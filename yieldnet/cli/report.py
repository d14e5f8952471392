"""``yieldnet report``."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import click

from yieldnet.cli.options import end, engine_option, force_option, json_option, refuse

if TYPE_CHECKING:
    from collections.abc import Iterator

__all__ = ["command"]

_FILE = click.Path(path_type=Path, dir_okay=False)


@click.command("report")
@click.argument("case", type=click.Path(), required=False)
@click.option("--out", type=_FILE, help="HTML file to write: the whole study.")
@click.option("--xlsx", type=_FILE, help="Workbook to write, with live formulas.")
@click.option(
    "--pictures",
    type=click.Path(path_type=Path, file_okay=False),
    help="Folder to write the pictures into, as SVG and PNG.",
)
@click.option("--date", default="", help="Date to print.  [default: none]")
@click.option(
    "--verify", type=click.Path(), help="Report to repeat from the inputs it holds, and compare."
)
@force_option
@engine_option
@json_option
def command(
    case: str | None,
    out: Path | None,
    xlsx: Path | None,
    pictures: Path | None,
    date: str,
    verify: str | None,
    force: bool,
    engine: str,
    as_json: bool,
) -> None:
    """The whole study of CASE as one HTML file, as a workbook, and as pictures.

    The HTML file needs nothing else, prints on A4, and holds its own inputs. With --verify the
    exit code is 1 if anything differs.

    Example: yieldnet report examples/plant/case.yaml --out study.html --force
    """
    if verify is not None:
        if case or out or xlsx or pictures:
            raise click.UsageError("--verify takes a report and stands alone.")
        _verify(verify, as_json)
        return
    if case is None:
        raise click.UsageError("Name a CASE, or a report with --verify.")
    if not (out or xlsx or pictures):
        raise click.UsageError("Say what to write: --out FILE, --xlsx FILE or --pictures FOLDER.")
    _check(out, (".html", ".htm"), "--out", force)
    _check(xlsx, (".xlsx",), "--xlsx", force)
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.report.report_form import refused_report_form, report_form
    from yieldnet.verbs import report

    try:
        study = report(
            case, out=out, xlsx=xlsx, pictures=pictures, date=date, force=force, engine=engine
        )
    except YieldnetError as error:
        refuse(error, as_json, refused_report_form)
    except OSError as error:
        place = error.filename or out or xlsx or pictures
        raise click.FileError(str(place), error.strerror or "cannot be written") from error
    written = [str(path) for path in (out, xlsx) if path is not None]
    if pictures is not None:
        from yieldnet.report.picture_file import PICTURES
        from yieldnet.report.study_pictures import study_pictures

        written += [
            str(pictures / f"{item.name}{ending}")
            for item in study_pictures(study)
            for ending in PICTURES
        ]
    if as_json:
        from yieldnet.report.json_form import as_text

        click.echo(as_text(report_form(study, written)))
    else:
        from yieldnet.report.study_sections import summary_lines
        from yieldnet.report.text import console, wrapped

        screen = console()
        screen.print(wrapped(study.case.title), style="bold")
        for word, line in summary_lines(study):
            screen.print(wrapped(f"{word}: {line}", "", "  "))
        for what, why in study.left_out:
            screen.print(wrapped(f"Not told, {what}: {why}", "", "  "))
        for path in written:
            screen.print(f"written: {path}")
    end(study.prediction.outcome == "solved")


def _check(path: Path | None, endings: tuple[str, ...], option: str, force: bool) -> None:
    """Names that cannot be written are told before the work, not after it."""
    if path is None:
        return
    if path.suffix.lower() not in endings:
        raise click.UsageError(f"{option} takes a name that ends in {' or '.join(endings)}.")
    if path.exists() and not force:
        raise click.UsageError(f"'{path}' is there already; --force replaces it.")


def _verify(file: str, as_json: bool) -> None:
    from yieldnet.foundation.errors import YieldnetError
    from yieldnet.report.report_form import refused_verify_form, verify_form
    from yieldnet.verbs import verify

    try:
        result = verify(file)
    except YieldnetError as error:
        refuse(error, as_json, refused_verify_form)
    if as_json:
        from yieldnet.report.json_form import as_text

        click.echo(as_text(verify_form(result)))
    else:
        from yieldnet.report.text import console, print_table, wrapped
        from yieldnet.report.verify import differences_table

        out = console()
        for line in _verdict(result.same, len(result.differences), result.compared):
            out.print(wrapped(line), style="bold")
        for note in result.notes:
            out.print(wrapped(note, "", "  "))
        if not result.same:
            print_table(out, differences_table(result))
    end(result.same)


def _verdict(same: bool, different: int, compared: int) -> Iterator[str]:
    if same:
        yield f"The report agrees with its repetition: {compared} figures and words compared."
    else:
        yield f"The report differs from its repetition at {different} of {compared} places."
