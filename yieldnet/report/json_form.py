"""Results as JSON, ``format: 1``; keys are fixed, more may be added."""

from __future__ import annotations

import json
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from yieldnet.report.atp_yield_view import atp_yield_form
from yieldnet.report.view import equation_text
from yieldnet.report.why_view import limit_words, relaxation_words

if TYPE_CHECKING:
    from collections.abc import Iterable

    from yieldnet.audit.audit import AuditResult
    from yieldnet.balance.redundancy import DataTest
    from yieldnet.foundation.findings import Finding
    from yieldnet.optimum.ranges import Range
    from yieldnet.prediction.certificate import Certificate
    from yieldnet.prediction.result import CoefficientAnswer, Prediction

__all__ = [
    "FORMAT",
    "as_text",
    "audit_form",
    "findings_form",
    "form_of_test",
    "prediction_form",
    "range_form",
    "refused_form",
    "unread_audit_form",
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


def range_form(value: Range | None) -> dict[str, Any] | None:
    """Form of a range, floats beside fractions; ``None`` for no range."""
    if value is None:
        return None
    return {
        "low": _number(value.low),
        "high": _number(value.high),
        "exact_low": _exact(value.low),
        "exact_high": _exact(value.high),
    }


def form_of_test(test: DataTest) -> dict[str, Any]:
    """Form of a chi-square test of measured values."""
    return {
        "layer": test.layer,
        "statistic": float(test.statistic),
        "exact": str(test.statistic),
        "degrees": test.degrees,
        "level": test.level,
        "limit": test.limit,
        "p_value": test.p_value,
        "passed": test.passed,
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
        "movements": [],
        "shares": {"layers": [], "reason": None},
        "other_order": [],
        "without_effect": None,
        "not_offered": None,
        "fluxes": None,
        "proof": None,
        "data_tests": [],
        "y_atp": None,
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
                "free_in_fact": item.free_in_fact,
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
        net_carbon_dioxide=range_form(result.net_carbon_dioxide),
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
                {
                    "compound": term.compound,
                    "side": str(term.side),
                    **(range_form(term.range) or {}),
                }
                for term in result.terms
            ],
        }
    form.update(_why(result))
    form["data_tests"] = [form_of_test(item) for item in result.tests]
    if result.y_atp is not None:
        form["y_atp"] = {
            **(range_form(result.y_atp.range) or {}),
            **atp_yield_form(result.y_atp),
        }
    need = result.carbon_dioxide_need
    if need is not None:
        form["carbon_dioxide_need"] = {
            "least": float(need.least),
            "most": float(need.most),
            "without": _number(need.without),
        }
    return form


def _why(result: Prediction) -> dict[str, Any]:
    """Relaxations, limits, conflict, shares, and what was asked for besides."""
    form: dict[str, Any] = {
        "movements": [{name: float(change) for name, change in move} for move in result.movements],
        "limits": [
            {
                "kind": item.kind,
                "name": item.name,
                "unit": item.unit,
                "gain": _number(item.gain),
                "cost": _number(item.cost),
                "exact_gain": _exact(item.gain),
                "exact_cost": _exact(item.cost),
                "gain_until": _number(item.gain_until),
                "cost_until": _number(item.cost_until),
                "words": limit_words(item),
            }
            for item in result.limits
        ],
        "other_order": [
            {"rung": rung, "value": _number(value), "exact": _exact(value)}
            for rung, value in result.other_order
        ],
    }
    report = result.relaxations
    if report is not None:
        form["without_effect"] = report.without_effect
        form["not_offered"] = report.not_offered
        form["relaxations"] = [
            {
                "parts": [{"kind": kind, "name": name} for kind, name in item.parts],
                "value": _number(item.value),
                "exact": _exact(item.value),
                "gain": _number(item.gain),
                "exact_gain": _exact(item.gain),
                "reason": item.reason or None,
                "words": relaxation_words(item),
            }
            for item in report.helpful
        ]
    if result.shares is not None:
        form["shares"] = {
            "layers": [
                {"layer": item.layer, "share": float(item.share), "exact": str(item.share)}
                for item in result.shares.shares
            ],
            "reason": result.shares.reason or None,
        }
    if result.conflict is not None:
        form["conflict"] = {
            "least": result.conflict.least,
            "lacking": list(result.conflict.lacking),
            "members": [
                {
                    "kind": item.kind,
                    "name": item.name,
                    "needs": _number(item.needs),
                    "needs_sd": item.needs_sd,
                    "then": _number(item.then),
                    "unit": item.unit,
                }
                for item in result.conflict.members
            ],
        }
    if result.fluxes is not None:
        form["fluxes"] = {
            "reactions": [
                {
                    "reaction": item.reaction,
                    "flux": float(item.flux),
                    "exact": str(item.flux),
                    **(range_form(item.range) or {}),
                }
                for item in result.fluxes.answers
            ],
            "loops": [list(loop) for loop in result.fluxes.loops],
        }
    if result.certificate is not None:
        form["proof"] = _proof(result.certificate)
    return form


def _proof(proof: Certificate) -> dict[str, Any]:
    """The proof on paper, all numbers exact."""
    return {
        "value": str(proof.value),
        "terms": [
            {"name": item.name, "worth": str(item.worth), "amount": str(item.amount)}
            for item in proof.terms
        ],
        "worths": {name: str(worth) for name, worth in proof.worths},
        "reactions": [
            {"reaction": item.name, "flux": str(item.flux), "made": str(item.made)}
            for item in proof.reactions
        ],
    }


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
        "elements": range_form(item.elements),
        "network": range_form(item.network),
        "at_aim": range_form(item.at_aim),
        "percent": None if item.percent is None else float(100 * item.percent),
        "status": str(item.status),
    }


def unread_audit_form(findings: Iterable[Finding]) -> dict[str, Any]:
    """Form of an audit of a file that could not be read as a network."""
    return {
        "format": FORMAT,
        "network": None,
        "status": "refused",
        "reactions": None,
        "findings": findings_form(findings),
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
