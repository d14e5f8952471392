"""Judged data as JSON and CSV."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from yieldnet.report.json_form import FORMAT, findings_form, form_of_test, range_form

if TYPE_CHECKING:
    from collections.abc import Iterable

    from yieldnet.foundation.findings import Finding
    from yieldnet.prediction.reconciliation import Reconciliation

__all__ = ["data_form", "data_records", "refused_data_form"]


def refused_data_form(findings: Iterable[Finding]) -> dict[str, Any]:
    """Form of data that were refused: all keys, no numbers."""
    return {
        "format": FORMAT,
        "case": None,
        "basis": None,
        "status": "refused",
        "feasible": None,
        "coefficients": [],
        "recoveries": [],
        "equations": [],
        "tests": [],
        "suspects": [],
        "eliminations": [],
        "missing_products": [],
        "values": [],
        "held": [],
        "covariance": [],
        "calculated": [],
        "aim": None,
        "draws": None,
        "next": {"of": None, "precision": None, "width": None, "measurements": []},
        "findings": findings_form(findings),
        "assumptions": [],
    }


def data_form(result: Reconciliation) -> dict[str, Any]:
    """Form of judged data; all numbers in mol/mol.

    Parameters
    ----------
    result : Reconciliation
        What was found.

    Returns
    -------
    dict
        Keys of ``format: 1``; ``status`` is ``agrees``, ``fails`` or ``untested``.
    """
    form = refused_data_form(result.findings)
    last = result.tested[-1]
    judge = result.failed or last
    if result.contradictory or result.failed is not None:
        status = "fails"
    else:
        status = "agrees" if last.test is not None else "untested"
    form.update(
        case=result.case.title,
        basis={"compound": result.case.basis.name, "unit": "mol"},
        status=status,
        feasible=result.feasible,
        coefficients=[
            {
                "compound": item.compound,
                "side": str(item.side),
                "known": item.known,
                "redundant": item.redundant or None,
                "calculable": item.calculable or None,
            }
            for item in result.classified
        ],
        recoveries=[
            {
                "of": item.quantity,
                "ratio": float(item.ratio),
                "sd": float(item.sd),
                "left_out": list(item.left_out),
            }
            for item in result.recoveries
        ],
        equations=[
            {
                "name": item.name or None,
                "terms": {entry.label: float(factor) for entry, factor in item.terms},
                "constant": float(item.constant),
                "measured": float(item.sum()),
            }
            for item in last.redundancy.equations()
        ],
        tests=[form_of_test(item.test) for item in result.tested if item.test is not None],
        suspects=[
            {
                "layer": judge.layer,
                "names": [entry.label for entry in item.members],
                "bias": [float(value) for value in item.bias],
                "bias_sd": [float(value) for value in item.bias_sd],
                "statistic": float(item.statistic),
                "p_value": item.p_value,
                "statistic_left": float(item.statistic_left),
                "p_left": item.p_left,
            }
            for item in judge.suspects()
        ],
        eliminations=[
            {
                "names": [entry.label for entry in item.members],
                "statistic_left": None if item.test is None else float(item.test.statistic),
                "p_left": None if item.test is None else item.test.p_value,
            }
            for item in result.eliminations
        ],
        missing_products=[
            {
                "compounds": list(item.compounds),
                "amounts": [float(value) for value in item.amounts],
                "amount_sd": [float(value) for value in item.amount_sd],
                "statistic": float(item.statistic),
                "statistic_left": float(item.statistic_left),
                "p_left": item.p_left,
            }
            for item in result.missing
        ],
        values=[
            {
                "compound": item.compound,
                "measured": float(item.measured),
                "measured_sd": float(item.measured_sd),
                "reconciled": float(item.reconciled),
                "exact": str(item.reconciled),
                "reconciled_sd": item.reconciled_sd,
                "moved_sd": item.moved_sd,
                "residual": item.residual,
                "own_share": float(item.own_share),
            }
            for item in result.values
        ],
        held=list(result.held),
        covariance=[list(row) for row in result.covariance],
        calculated=[
            {
                "compound": item.compound,
                "layer": item.layer,
                "value": float(item.value),
                "exact": str(item.value),
                "sd": item.sd,
            }
            for item in result.calculated
        ],
        draws=None if result.draws is None else result.draws.asked,
        next={
            "of": result.target or None,
            "precision": float(result.precision),
            "width": float(result.next[0].before) if result.next else None,
            "measurements": [
                {
                    "compound": item.compound,
                    "range": range_form(item.range),
                    "expected": item.expected,
                    "worst": item.worst,
                    "narrowing": item.narrowing,
                }
                for item in result.next
            ],
        },
        assumptions=[
            {
                "text": item.text,
                "value": None if item.value is None else float(item.value),
                "unit": item.unit or None,
                "source": item.source or None,
            }
            for item in result.assumptions
        ],
    )
    optimum = result.optimum
    if optimum is not None:
        form["aim"] = {
            "direction": optimum.direction,
            "compound": optimum.compound,
            "value": float(optimum.value),
            "exact": str(optimum.value),
            "sd": optimum.sd,
            "sampled": optimum.sampled,
            "better": None if optimum.better is None else float(optimum.better),
            "worse": None if optimum.worse.value is None else float(optimum.worse.value),
            "reason": optimum.worse.reason or None,
        }
    return form


def data_records(result: Reconciliation) -> tuple[tuple[str, ...], list[tuple[str, ...]]]:
    """Header and rows of the CSV: measured, reconciled and calculated values in mol/mol."""
    header = ("compound", "kind", "measured", "s.d.", "reconciled", "reconciled s.d.", "residual")
    rows: list[tuple[str, ...]] = [
        (
            item.compound,
            "measured",
            str(float(item.measured)),
            str(float(item.measured_sd)),
            str(float(item.reconciled)),
            str(item.reconciled_sd),
            "" if item.residual is None else str(item.residual),
        )
        for item in result.values
    ]
    rows += [
        (item.compound, "calculated", "", "", str(float(item.value)), str(item.sd), "")
        for item in result.calculated
    ]
    return header, rows
