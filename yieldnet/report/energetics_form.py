"""Heat and Gibbs energy as JSON and CSV."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from yieldnet.report.energetics_view import heat_rows
from yieldnet.report.json_form import FORMAT, findings_form

if TYPE_CHECKING:
    from collections.abc import Iterable

    from yieldnet.chemistry.gibbs import ReactionGibbs
    from yieldnet.foundation.findings import Finding
    from yieldnet.prediction.energetics import Energetics

__all__ = ["energetics_form", "energetics_records", "refused_energetics_form"]


def refused_energetics_form(findings: Iterable[Finding]) -> dict[str, Any]:
    """Form of a case that was refused: all keys, no numbers."""
    return {
        "format": FORMAT,
        "case": None,
        "basis": None,
        "status": "refused",
        "equation": [],
        "not_unique": [],
        "recoveries": [],
        "heat": None,
        "gibbs_energy": None,
        "dissipation": None,
        "steps": {"running": 0, "judged": []},
        "biomass_yields": [],
        "findings": findings_form(findings),
        "assumptions": [],
    }


def _gibbs(value: ReactionGibbs | None) -> dict[str, Any] | None:
    if value is None:
        return None
    return {
        "unit": "kJ/mol",
        "standard": value.standard,
        "middle": value.middle,
        "low": value.low,
        "high": value.high,
        "temperature": value.kelvin,
        "without_enthalpy": list(value.without_enthalpy),
    }


def energetics_form(result: Energetics) -> dict[str, Any]:
    """Form of heat and Gibbs energy, in kJ and mol.

    Parameters
    ----------
    result : Energetics
        What was found.

    Returns
    -------
    dict
        Keys of :func:`refused_energetics_form`.
    """
    form = refused_energetics_form(result.findings)
    heat = result.heat
    form.update(
        case=result.case.title,
        basis={"compound": result.case.basis.name, "unit": "mol"},
        status=str(result.prediction.outcome),
        equation=[
            {"compound": name, "amount": float(amount), "exact": str(amount)}
            for name, amount in result.amounts
        ],
        not_unique=list(result.not_unique),
        recoveries=[
            {
                "quantity": item.quantity,
                "ratio": None if item.ratio is None else float(item.ratio),
                "closes": item.closes,
                "reason": item.reason or None,
            }
            for item in result.closures
        ],
        gibbs_energy=_gibbs(result.gibbs),
        dissipation=result.dissipation_kj_per_cmol,
        steps={
            "running": result.running,
            "judged": [
                {
                    "reaction": item.reaction,
                    "flux": float(item.flux),
                    "uphill": item.uphill,
                    "gibbs_energy": _gibbs(item.gibbs),
                }
                for item in result.steps
            ],
        },
        biomass_yields=[
            {
                "method": item.method,
                "value": item.value,
                "unit": "C-mol/mol",
                "reason": item.reason or None,
                "source": item.source or None,
            }
            for item in result.opinions
        ],
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
    if heat is not None:
        by = dict(heat_rows(heat))
        form["heat"] = {
            "unit": "kJ/mol",
            "given_off": [{"by": way, "value": float(value)} for way, value in by.items()],
            "oxygen": float(heat.oxygen),
            "biomass_grams": float(heat.biomass_grams),
            "estimated": list(heat.estimated),
            "compounds": [
                {
                    "compound": item.compound,
                    "amount": float(item.amount),
                    "heat_of_combustion": float(item.heat.value),
                    "to_ammonia": float(item.heat.to_ammonia()),
                    "state": item.heat.state or None,
                    "source": item.heat.known.source,
                    "status": item.heat.known.status,
                }
                for item in heat.terms
            ],
        }
    return form


def energetics_records(result: Energetics) -> tuple[tuple[str, ...], list[tuple[str, ...]]]:
    """Header and rows of the CSV: heat by each way and Gibbs energy, kJ/mol basis."""
    rows: list[tuple[str, ...]] = []
    if result.heat is not None:
        rows += [(f"heat by {way}", str(float(value))) for way, value in heat_rows(result.heat)]
    if result.gibbs is not None:
        rows += [
            ("Gibbs energy, standard", str(result.gibbs.standard)),
            ("Gibbs energy", str(result.gibbs.middle)),
            ("Gibbs energy, low", str(result.gibbs.low)),
            ("Gibbs energy, high", str(result.gibbs.high)),
        ]
    return ("quantity", "kJ/mol"), rows
