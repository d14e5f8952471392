"""What was written for a new study, as text and as JSON."""

from __future__ import annotations

from pathlib import PurePath
from typing import TYPE_CHECKING, Any

from yieldnet.report.figures import figure
from yieldnet.report.json_form import FORMAT, findings_form
from yieldnet.report.new_folder import CASE, RUN
from yieldnet.report.text import wrapped

if TYPE_CHECKING:
    from collections.abc import Iterable

    from yieldnet.foundation.findings import Finding
    from yieldnet.report.new_folder import NewStudy

__all__ = ["new_form", "new_lines", "refused_new_form"]


def new_lines(study: NewStudy) -> list[str]:
    """Lines that say what was written, what it answers and what to do next.

    Parameters
    ----------
    study : NewStudy
        What was written.

    Returns
    -------
    list of str
        Lines of at most 80 characters where names allow it.
    """
    folder = PurePath(study.folder)
    case, run = (folder / name for name in (CASE, RUN))
    lines = [f"Written to {folder.as_posix()}: {', '.join(study.files)}"]
    lines += [wrapped(words, "  ", "    ") for words in study.chosen]
    lines += [
        "",
        wrapped(
            f"most {study.product} from {study.substrate} with {study.network}:"
            f" {figure(study.best)} mol/mol"
        ),
        "",
        "Next: read the comments, replace the placeholders, then",
        f"  yieldnet predict {case.as_posix()}",
    ]
    if study.plant:
        lines.append(f"  yieldnet plant {case.as_posix()}")
    if RUN in study.files:
        lines.append(f"  yieldnet rates {run.as_posix()}")
    return lines


def refused_new_form(findings: Iterable[Finding]) -> dict[str, Any]:
    """Form of a study that was not written: all keys, no answer."""
    return {
        "format": FORMAT,
        "status": "refused",
        "folder": None,
        "files": [],
        "network": None,
        "substrate": None,
        "product": None,
        "best": None,
        "plant": None,
        "chosen": [],
        "findings": findings_form(findings),
    }


def new_form(study: NewStudy) -> dict[str, Any]:
    """Form of a study that was written.

    Parameters
    ----------
    study : NewStudy
        What was written.

    Returns
    -------
    dict
        Keys of ``format: 1``; the best value in mol/mol basis.
    """
    return {
        **refused_new_form(study.findings),
        "status": "written",
        "folder": study.folder,
        "files": list(study.files),
        "network": study.network,
        "substrate": study.substrate,
        "product": study.product,
        "best": {"value": float(study.best), "exact": str(study.best), "unit": "mol/mol"},
        "plant": study.plant,
        "chosen": list(study.chosen),
    }
