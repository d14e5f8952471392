"""Results as JSON, ``format: 1``; keys are fixed, more may be added."""

from __future__ import annotations

import json
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from yieldnet.report.view import equation_text

if TYPE_CHECKING:
    from collections.abc import Iterable

    from yieldnet.audit.audit import AuditResult
    from yieldnet.foundation.findings import Finding
    from yieldnet.optimum.ranges import Range
    from yieldnet.prediction.result import CoefficientAnswer, Prediction

__all__ = [
    "FORMAT",
    "as_text",
    "audit_form",
    "findings_form",
    "prediction_form",
    "refused_form",
]

FORMAT = 1
"""Version of the JSON; raised when a key changes its meaning or goes [-]."""


def as_text(form: Any) -> str:
    """JSON text of a form; never NaN or infinity."""
    return json.dumps(form, indent=2, ensure_ascii=False, allow_nan=False)


def _number(value: Fraction | None) -> float | None:
    return None if value is None else float(value)


def _exact(value: Fraction | None) -> str | None:
    return None if value is None else str(value)


def _range(value: Range | None) -> dict[str, Any] | None:
    if value is None:
        return None
    return {
        "low": _number(value.low),
        "high": _number(value.high),
        "exact_low": _exact(value.low),
        "exact_high": _exact(value.high),
    }


def findings_form(findings: Iterable[Finding]) -> list[dict[str, Any]]:
    """Findings as a list of mappings.

    Parameters
    ----------
    findings : iterable of Finding
        The findings.

    Returns
    -------
    list of dict
        Code, severity, place, message, both sides, hint.
    """
    return [
        {
            "code": item.code,
            "severity": str(item.severity),
            "file": item.where.file if item.where else None,
            "line": item.where.line if item.where else None,
            "column": item.where.column if item.where else None,
            "message": item.message,
            "left": item.left or None,
            "right": item.right or None,
            "hint": item.hint or None,
        }
        for item in findings
    ]


def refused_form(findings: Iterable[Finding]) -> dict[str, Any]:
    """Form of a case that was refused: all keys, no numbers."""
    return {
        "format": FORMAT,
        "case": None,
        "basis": None,
        "status": "refused",
        "aim": None,
        "freedom": [],
        "coefficients": [],
        "ladder": [],
        "relaxations": [],
        "limits": [],
        "equation": None,
        "conflict": None,
        "recoveries": [],
        "respiratory_quotient": None,
        "net_carbon_dioxide": None,
        "carbon_dioxide_need": None,
        "findings": findings_form(findings),
        "assumptions": [],
    }


def prediction_form(result: Prediction) -> dict[str, Any]:
    """Form of a prediction; all numbers in mol/mol.

    Parameters
    ----------
    result : Prediction
        The answer.

    Returns
    -------
    dict
        The keys of ``format: 1``; lists are empty and objects ``None`` where there is no answer.
    """
    form = refused_form(result.findings)
    form.update(
        case=result.case.title,
        basis={"compound": result.case.basis.name, "unit": "mol"},
        status=str(result.outcome),
        freedom=[
            {
                "layer": item.layer,
                "unknowns": item.unknowns,
                "rank": item.rank,
                "free": item.free,
                "free_in_fact": None,
            }
            for item in result.freedom
        ],
        coefficients=[_coefficient(item) for item in result.coefficients],
        ladder=[
            {
                "rung": item.rung,
                "value": _number(item.value),
                "exact": _exact(item.value),
                "loss": _number(item.loss),
                "exact_loss": _exact(item.loss),
                "reason": item.reason or None,
            }
            for item in result.ladder
        ],
        recoveries=[
            {
                "of": item.quantity,
                "measured": _number(item.measured),
                "total": _number(item.total),
                "shares": {name: float(share) for name, share in item.shares},
            }
            for item in result.recoveries
        ],
        respiratory_quotient=_number(result.respiratory_quotient),
        net_carbon_dioxide=_range(result.net_carbon_dioxide),
        assumptions=[
            {
                "text": item.text,
                "value": _number(item.value),
                "unit": item.unit or None,
                "source": item.source or None,
            }
            for item in result.assumptions
        ],
    )
    if result.aim is not None:
        form["aim"] = {
            "direction": result.aim.direction,
            "compound": result.aim.compound,
            "value": _number(result.aim.value),
            "exact": _exact(result.aim.value),
            "within_bands": _number(result.aim.within_bands),
        }
    if result.terms:
        form["equation"] = {
            "text": equation_text(result),
            "terms": [
                {"compound": term.compound, "side": str(term.side), **(_range(term.range) or {})}
                for term in result.terms
            ],
        }
    need = result.carbon_dioxide_need
    if need is not None:
        form["carbon_dioxide_need"] = {
            "least": float(need.least),
            "most": float(need.most),
            "without": _number(need.without),
        }
    return form


def _coefficient(item: CoefficientAnswer) -> dict[str, Any]:
    known = item.reconciled
    measured = None
    if item.measurements:
        own = item.measurements[0]
        mean = known.mean if known else own.value
        sd = known.sd if known else own.sd
        measured = {
            "value": float(mean),
            "sd": _number(sd),
            "text": "; ".join(entry.text for entry in item.measurements),
            "set_aside": item.set_aside,
            "values": [
                {
                    "name": entry.label,
                    "value": float(entry.value),
                    "sd": _number(entry.sd),
                    "text": entry.text,
                }
                for entry in item.measurements
            ],
        }
    reconciled = None
    if known is not None:
        reconciled = {
            "value": float(known.value),
            "exact": str(known.value),
            "moved_sd": known.moved_sd,
        }
    return {
        "compound": item.compound,
        "side": str(item.side),
        "unit": "mol/mol",
        "measured": measured,
        "reconciled": reconciled,
        "elements": _range(item.elements),
        "network": _range(item.network),
        "at_aim": _range(item.at_aim),
        "percent": None if item.percent is None else float(100 * item.percent),
        "status": str(item.status),
    }


def audit_form(result: AuditResult) -> dict[str, Any]:
    """Form of an audit.

    Parameters
    ----------
    result : AuditResult
        The audit.

    Returns
    -------
    dict
        Network, verdict, findings.
    """
    return {
        "format": FORMAT,
        "network": result.network.title,
        "status": "refused" if result.refused else "clean" if result.clean else "doubtful",
        "reactions": len(result.bound.reactions),
        "findings": findings_form(result.findings),
    }
