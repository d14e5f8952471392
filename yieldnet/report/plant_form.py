"""Plant sheets as JSON and CSV."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from yieldnet.plant.sheet import CAUTIONS
from yieldnet.report.json_form import FORMAT, findings_form

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from yieldnet.foundation.findings import Finding
    from yieldnet.plant.sheet import Figure, PlantSheet

__all__ = ["plant_form", "plant_records", "refused_plant_form"]


def refused_plant_form(findings: Iterable[Finding]) -> dict[str, Any]:
    """Form of plants that were refused: all keys, no numbers."""
    return {
        "format": FORMAT,
        "status": "refused",
        "plants": [],
        "findings": findings_form(findings),
        "cautions": list(CAUTIONS),
    }


def plant_form(sheets: Sequence[PlantSheet]) -> dict[str, Any]:
    """Form of plant sheets.

    Parameters
    ----------
    sheets : sequence of PlantSheet
        What was found.

    Returns
    -------
    dict
        Keys of ``format: 1``; ``findings`` are those of all plants.
    """
    findings = dict.fromkeys(item for sheet in sheets for item in sheet.findings)
    form = refused_plant_form(findings)
    form.update(status="solved", plants=[_sheet(sheet) for sheet in sheets])
    return form


def _sheet(sheet: PlantSheet) -> dict[str, Any]:
    return {
        "case": sheet.case.title,
        "basis": {"compound": sheet.case.basis.name, "unit": "mol"},
        "product": sheet.plant.product,
        "phases": sheet.growth is not None,
        "equation": {name: float(amount) for name, amount in sheet.equation},
        "streams": [
            {
                "name": item.name,
                "enters": item.enters,
                "kg_per_h": float(item.kg_per_h),
                "t_per_y": float(item.t_per_y),
                "mol_per_h": None if item.mol_per_h is None else float(item.mol_per_h),
                "formula": item.rule,
            }
            for item in sheet.streams
        ],
        "ions": [
            {
                "name": item.name,
                "charge": item.formula.charge,
                "kg_per_h": float(item.kg_per_h),
                "t_per_y": float(item.t_per_y),
                "mol_per_h": float(item.mol_per_h),
            }
            for item in sheet.ions
        ],
        "figures": [_figure(item) for item in sheet.figures],
        "balances": [
            {
                "of": item.of,
                "enters": float(item.enters),
                "leaves": float(item.leaves),
                "unit": item.unit,
                "residual": float(item.residual),
            }
            for item in sheet.balances
        ],
        "findings": findings_form(sheet.findings),
        "assumptions": [
            {
                "text": item.text,
                "value": None if item.value is None else float(item.value),
                "unit": item.unit or None,
                "source": item.source or None,
            }
            for item in sheet.assumptions
        ],
    }


def _figure(item: Figure) -> dict[str, Any]:
    return {
        "section": item.section,
        "name": item.name,
        "value": None if item.value is None else float(item.value),
        "unit": item.unit,
        "formula": item.formula,
        "inputs": [
            {
                "name": one.name,
                "value": float(one.value),
                "unit": one.unit,
                "source": one.source or None,
            }
            for one in item.inputs
        ],
        "source": item.source or None,
    }


def plant_records(
    sheets: Sequence[PlantSheet],
) -> tuple[tuple[str, ...], list[tuple[str, ...]]]:
    """Header and rows of the CSV: every stream, ion and figure with its unit and formula."""
    header = ("case", "section", "name", "value", "unit", "formula", "source")
    rows: list[tuple[str, ...]] = []
    for sheet in sheets:
        title = sheet.case.title
        for item in sheet.streams:
            side = "enters" if item.enters else "leaves"
            flows = ((item.kg_per_h, "kg/h"), (item.t_per_y, "t/y"))
            rows += [
                (title, side, item.name, str(float(value)), unit, item.rule, "")
                for value, unit in flows
            ]
        for ion in sheet.ions:
            pairs = ((ion.kg_per_h, "kg/h"), (ion.t_per_y, "t/y"))
            rows += [
                (title, "in the broth", ion.name, str(float(value)), unit, "", "")
                for value, unit in pairs
            ]
        for figure in sheet.figures:
            value = "" if figure.value is None else str(float(figure.value))
            rows.append(
                (
                    title,
                    figure.section,
                    figure.name,
                    value,
                    figure.unit,
                    figure.formula,
                    figure.source,
                )
            )
    return header, rows
