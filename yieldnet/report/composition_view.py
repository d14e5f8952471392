"""Biomass put together from its macromolecules, as tables, lines and JSON."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

from yieldnet.chemistry.growth_atp import MOST_IN_THEORY, theoretical_atp
from yieldnet.report.figures import figure
from yieldnet.report.json_form import FORMAT, findings_form
from yieldnet.report.table import Table

if TYPE_CHECKING:
    from collections.abc import Iterable

    from yieldnet.chemistry.formula import Formula
    from yieldnet.chemistry.macromolecules import BiomassComposition
    from yieldnet.foundation.findings import Finding

__all__ = [
    "composition_form",
    "composition_lines",
    "composition_tables",
    "refused_composition_form",
    "short_formula",
]

_MILLI = 1000
_PLACES = 3


def short_formula(formula: Formula) -> str:
    """Formula with three decimals.

    Examples
    --------
    >>> from yieldnet.chemistry.formula import read_formula
    >>> short_formula(read_formula("CH1.66666O0.83333"))
    'CH1.667O0.833'
    """
    parts = []
    for name, amount in formula.elements:
        rounded = f"{float(amount):.{_PLACES}f}".rstrip("0").rstrip(".")
        parts.append(name + ("" if amount == 1 else rounded))
    return "".join(parts)


def composition_lines(cell: BiomassComposition) -> tuple[str, ...]:
    """Formula, degree of reduction, masses, and what was left out of the formula.

    Parameters
    ----------
    cell : BiomassComposition
        The biomass.

    Returns
    -------
    tuple of str
        One fact a line.
    """
    formula = cell.formula
    lines = [
        f"formula {short_formula(formula)} per C-mol, without HPO3 and sulphur",
        f"with them {short_formula(cell.whole_formula)}",
        f"degree of reduction {figure(cell.degree_of_reduction)} per C-mol (ammonia)",
        f"{figure(formula.molar_mass)} g/C-mol without minerals,"
        f" {figure(cell.grams_per_carbon_mol)} g/C-mol of dry weight",
        f"{figure(_MILLI * cell.moles('C'))} mmol C and {figure(_MILLI * cell.moles('N'))} mmol N"
        " per g of dry weight",
        f"counted as ash {figure(cell.minerals)} g/g: ash {figure(cell.ash)}, HPO3"
        f" {figure(cell.phosphate)}, sulphur {figure(cell.sulphur)}",
        f"monomers of {cell.make_up.name}: {'; '.join(cell.make_up.sources)}",
    ]
    if cell.scaled_from is not None:
        lines.append(f"all shares were divided by their sum, {figure(cell.scaled_from)}")
    atp = theoretical_atp(cell)
    lines.append(
        f"ATP in theory: {figure(_MILLI * atp.polymerisation)} mmol/g for polymerisation,"
        f" {figure(_MILLI * atp.total)} mmol/g in all from glucose and salts, which is"
        f" {figure(1 / atp.total)} g/mol ATP; published {figure(MOST_IN_THEORY.value)}"
        f" ({MOST_IN_THEORY.source})"
    )
    if atp.not_counted:
        lines.append(f"no ATP is known for {', '.join(atp.not_counted)}, so none is counted")
    return tuple(lines)


def _of_all(value: Fraction, total: Fraction) -> str:
    return figure(100 * value / total) if total else ""


def composition_tables(cell: BiomassComposition) -> tuple[Table, ...]:
    """What each part brings, and the ATP of theory step by step.

    Parameters
    ----------
    cell : BiomassComposition
        The biomass.

    Returns
    -------
    tuple of Table
        Both tables.
    """
    electrons = sum((part.electrons() for part in cell.parts), Fraction(0))
    atp = theoretical_atp(cell)
    return (
        Table(
            title="What each part brings",
            columns=("", "g/g", "unit per C", "% of C", "% of N", "% of electrons"),
            rows=tuple(
                (
                    part.macromolecule.name,
                    figure(part.share),
                    short_formula(_per_carbon(part.unit)),
                    _of_all(part.moles("C"), cell.moles("C")),
                    _of_all(part.moles("N"), cell.moles("N")),
                    _of_all(part.electrons(), electrons),
                )
                for part in cell.parts
            ),
        ),
        Table(
            title="ATP for making it from glucose and salts, in theory",
            columns=("", "step", "mmol/g of cells"),
            rows=tuple(
                (item.macromolecule, item.step, figure(_MILLI * item.amount)) for item in atp.steps
            ),
            note="Stouthamer 1973, Antonie van Leeuwenhoek 39:545; the rows are from memory, their"
            " sum is that of the abstract.",
        ),
    )


def _per_carbon(formula: Formula) -> Formula:
    from yieldnet.chemistry.formula import Formula

    carbon = formula["C"]
    return Formula(tuple((name, amount / carbon) for name, amount in formula.elements))


def refused_composition_form(findings: Iterable[Finding]) -> dict[str, Any]:
    """Form of a composition that was refused."""
    return {"format": FORMAT, "biomass": None, "findings": findings_form(findings)}


def composition_form(cell: BiomassComposition) -> dict[str, Any]:
    """Form of a biomass that was put together.

    Parameters
    ----------
    cell : BiomassComposition
        The biomass.

    Returns
    -------
    dict
        Keys of ``format: 1``, exact numbers beside rounded ones.
    """
    atp = theoretical_atp(cell)
    rounded, minerals = cell.rounded
    return {
        "format": FORMAT,
        "biomass": {
            "formula": str(rounded),
            "ash_in_networks": str(minerals),
            "elements_per_carbon": {
                name: {"value": float(amount), "exact": str(amount)}
                for name, amount in cell.formula.elements
            },
            "with_phosphorus_and_sulphur": {
                name: float(amount) for name, amount in cell.whole_formula.elements
            },
            "degree_of_reduction": float(cell.degree_of_reduction),
            "g_per_c_mol": float(cell.formula.molar_mass),
            "g_per_c_mol_dry_weight": float(cell.grams_per_carbon_mol),
            "mmol_c_per_g": float(_MILLI * cell.moles("C")),
            "ash": float(cell.ash),
            "phosphate": float(cell.phosphate),
            "sulphur": float(cell.sulphur),
            "monomers": cell.make_up.name,
            "sources": list(cell.make_up.sources),
            "scaled_from": None if cell.scaled_from is None else float(cell.scaled_from),
            "parts": [
                {
                    "name": part.macromolecule.name,
                    "share": float(part.share),
                    "mmol_c_per_g": float(_MILLI * part.moles("C")),
                    "mmol_n_per_g": float(_MILLI * part.moles("N")),
                    "mmol_electrons_per_g": float(_MILLI * part.electrons()),
                }
                for part in cell.parts
            ],
            "atp_in_theory": {
                "polymerisation_mmol_per_g": float(_MILLI * atp.polymerisation),
                "total_mmol_per_g": float(_MILLI * atp.total),
                "g_per_mol_atp": float(1 / atp.total),
                "not_counted": list(atp.not_counted),
                "steps": [
                    {
                        "macromolecule": item.macromolecule,
                        "step": item.step,
                        "mmol_per_g": float(_MILLI * item.amount),
                        "source": item.source,
                    }
                    for item in atp.steps
                ],
            },
        },
        "findings": [],
    }
