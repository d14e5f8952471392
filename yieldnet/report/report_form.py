"""What the verb ``report`` did, for JSON."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from yieldnet.report.json_form import FORMAT, findings_form
from yieldnet.report.study_sections import study_findings

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.foundation.findings import Finding
    from yieldnet.report.study import Study
    from yieldnet.report.verify import Verification

__all__ = ["refused_report_form", "refused_verify_form", "report_form", "verify_form"]


def report_form(study: Study, written: Sequence[str]) -> dict[str, Any]:
    """A study that was written.

    Parameters
    ----------
    study : Study
        The study.
    written : sequence of str
        Files that were written.

    Returns
    -------
    dict
        Keys of ``format: 1``.
    """
    return {
        "format": FORMAT,
        "status": str(study.prediction.outcome),
        "written": list(written),
        "not_told": [{"what": what, "why": why} for what, why in study.left_out],
        "findings": findings_form(study_findings(study)),
    }


def refused_report_form(findings: tuple[Finding, ...]) -> dict[str, Any]:
    """The same keys for a case that was refused."""
    return {
        "format": FORMAT,
        "status": "refused",
        "written": [],
        "not_told": [],
        "findings": findings_form(findings),
    }


def verify_form(result: Verification) -> dict[str, Any]:
    """A report compared with its repetition.

    Parameters
    ----------
    result : Verification
        What was found.

    Returns
    -------
    dict
        Keys of ``format: 1``.
    """
    return {
        "format": FORMAT,
        "status": "same" if result.same else "different",
        "compared": result.compared,
        "differences": [
            {"place": item.place, "report": item.report, "run": item.run}
            for item in result.differences
        ],
        "notes": list(result.notes),
        "findings": [],
    }


def refused_verify_form(findings: tuple[Finding, ...]) -> dict[str, Any]:
    """The same keys for a file that cannot be repeated."""
    return {
        "format": FORMAT,
        "status": "refused",
        "compared": 0,
        "differences": [],
        "notes": [],
        "findings": findings_form(findings),
    }
