"""Yield against growth rate as tables, lines and JSON."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

from yieldnet.chemistry.growth_atp import published_atp_yields
from yieldnet.report.atp_yield_view import published_form, range_words
from yieldnet.report.figures import assumption_rows, figure
from yieldnet.report.json_form import FORMAT, findings_form
from yieldnet.report.table import Table

if TYPE_CHECKING:
    from collections.abc import Iterable

    from yieldnet.foundation.findings import Finding
    from yieldnet.prediction.growth import GrowthCurve, GrowthPoint, PirtPiece

__all__ = [
    "growth_assumptions",
    "growth_form",
    "growth_headline",
    "growth_records",
    "growth_setting",
    "growth_tables",
    "piece_words",
    "refused_growth_form",
]

_MILLI = 1000
_NAMES = 3
"""Names of a change that are shown; JSON has all [-]."""


def growth_setting(curve: GrowthCurve) -> str:
    """Line under the title: basis, network, strain."""
    case = curve.case
    parts = [f"per mol {case.basis.name}"]
    if case.network is not None:
        parts.append(f"network: {case.network.title}")
    if case.strain is not None:
        parts.append(f"strain: {case.strain.name}")
    if case.parameter_set is not None:
        parts.append(f"parameter set: {case.parameter_set.name}")
    return "; ".join(parts)


def growth_headline(curve: GrowthCurve) -> str:
    """The law of the fastest piece that holds a rate asked for, in one line."""
    if any(item.uptake == 0 for item in curve.points):
        return f"growth needs no {curve.case.basis.name}, so its yield on it has no end"
    place = next((item.piece for item in reversed(curve.points) if item.piece is not None), None)
    if place is None:
        return "no growth at any of these rates"
    piece = curve.pieces[place]
    law = f"m_S {figure(_MILLI * piece.maintenance)} mmol {curve.case.basis.name}/g/h"
    if piece.true_yield is not None:
        law = f"true yield {figure(curve.grams_per_gram(piece.true_yield))} g/g, {law}"
    more = len({item.piece for item in curve.points if item.piece is not None}) > 1
    return f"1/Y = 1/Y_true + m_S/mu: {law}" + (", at the fastest growth asked for" * more)


def growth_tables(curve: GrowthCurve) -> tuple[Table, ...]:
    """Yields by growth rate, straight pieces, and published yields on ATP.

    Parameters
    ----------
    curve : GrowthCurve
        What was found.

    Returns
    -------
    tuple of Table
        Empty ones left out.
    """
    most = max((item.yield_mol for item in curve.points if item.yield_mol), default=None)
    tables = [
        Table(
            title="Most biomass by growth rate",
            columns=("mu, 1/h", "mol/mol", "g/g", "uptake, mmol/g/h", "Y_ATP, g/mol", "piece"),
            rows=tuple(
                (
                    figure(item.rate),
                    _yield_words(item),
                    "" if item.yield_mol is None else figure(curve.grams_per_gram(item.yield_mol)),
                    "" if item.uptake is None else figure(_MILLI * item.uptake),
                    "" if item.y_atp is None else figure(item.y_atp),
                    "" if item.piece is None else str(item.piece + 1),
                )
                for item in curve.points
            ),
            note=_points_note(curve),
            bars=tuple(
                float(item.yield_mol / most) if item.yield_mol and most else 0.0
                for item in curve.points
            )
            if most
            else (),
        )
    ]
    if curve.pieces:
        tables.append(
            Table(
                title="Straight pieces: 1/Y = 1/Y_true + m_S/mu holds exactly on each",
                columns=("piece", "mu, 1/h", "Y_true, mol/mol", "g/g", "m_S, mmol/g/h", "mg/g/h"),
                rows=tuple(_piece_row(curve, at, item) for at, item in enumerate(curve.pieces)),
                note=" ".join(_breaks(curve)),
            )
        )
    tables.append(
        Table(
            title="Published yields on ATP, g biomass/mol ATP",
            columns=("", "", "source"),
            rows=tuple(
                (item.name, range_words(item.low, item.high), f"{item.source} ({item.status})")
                for item in published_atp_yields()
            ),
            note="S: seen in the source; S2: seen where it is quoted.",
        )
    )
    return tuple(tables)


def _yield_words(item: GrowthPoint) -> str:
    if item.yield_mol is not None:
        return figure(item.yield_mol)
    return "none" if item.uptake is None else "no end"


def _points_note(curve: GrowthCurve) -> str:
    spent = curve.atp_growth
    growth = (
        "growth spends no ATP in this network"
        if spent is None
        else f"growth spends {figure(_MILLI * spent)} mmol ATP/g"
    )
    note = f"{growth}, maintenance {figure(_MILLI * curve.atp_maintenance)} mmol ATP/g/h."
    note = note[0].upper() + note[1:]
    if any(item.uptake is None for item in curve.points):
        note += " none: maintenance takes more than there is, or a statement cannot hold."
    return note


def _ends(piece: PirtPiece) -> str:
    if piece.slowest is None and piece.fastest is None:
        return "all"
    if piece.fastest is None:
        return f"above {figure(piece.slowest)}"
    if piece.slowest is None:
        return f"below {figure(piece.fastest)}"
    return range_words(piece.slowest, piece.fastest)


def _piece_row(curve: GrowthCurve, at: int, piece: PirtPiece) -> tuple[str, ...]:
    basis = curve.basis_weight.molar_mass
    true = piece.true_yield
    return (
        str(at + 1),
        _ends(piece),
        "none" if true is None else figure(true),
        "" if true is None else figure(curve.grams_per_gram(true)),
        figure(_MILLI * piece.maintenance),
        "" if basis is None else figure(_MILLI * piece.maintenance * basis),
    )


def piece_words(piece: PirtPiece) -> str:
    """What changes where a piece begins, seen from faster growth."""
    parts = []
    for word, names in (("starts", piece.starts), ("stops", piece.stops)):
        more = len(names) - _NAMES
        if names:
            parts.append(f"{word}: " + ", ".join(names[:_NAMES]) + f" and {more} more" * (more > 0))
    return "; ".join(parts) or "another limit of the same flows"


def _breaks(curve: GrowthCurve) -> list[str]:
    return [
        f"Below {figure(item.fastest)} 1/h {piece_words(item)}."
        for item in curve.pieces[1:]
        if item.fastest is not None
    ]


def growth_assumptions(curve: GrowthCurve) -> tuple[tuple[str, str, str], ...]:
    """Assumptions as text, value with unit, source."""
    return assumption_rows(curve.assumptions)


def refused_growth_form(findings: Iterable[Finding]) -> dict[str, Any]:
    """Form of a case that was refused: all keys, no numbers."""
    return {
        "format": FORMAT,
        "case": None,
        "basis": None,
        "status": "refused",
        "rates": [],
        "pieces": [],
        "atp_of_growth_mmol_per_g": None,
        "atp_of_maintenance_mmol_per_g_h": None,
        "published_y_atp": [],
        "findings": findings_form(findings),
        "assumptions": [],
    }


def growth_form(curve: GrowthCurve) -> dict[str, Any]:
    """Form of yield against growth rate.

    Parameters
    ----------
    curve : GrowthCurve
        What was found.

    Returns
    -------
    dict
        Keys of ``format: 1``; ``status`` is ``grows`` or ``does not grow``.
    """

    def number(value: Fraction | None) -> float | None:
        return None if value is None else float(value)

    form = refused_growth_form(curve.findings)
    form.update(
        case=curve.case.title,
        basis={"compound": curve.case.basis.name, "unit": "mol"},
        status="grows" if curve.grows else "does not grow",
        rates=[
            {
                "growth_rate": float(item.rate),
                "mol_per_mol": number(item.yield_mol),
                "exact": None if item.yield_mol is None else str(item.yield_mol),
                "g_per_g": None
                if item.yield_mol is None
                else float(curve.grams_per_gram(item.yield_mol)),
                "uptake_mmol_per_g_h": None if item.uptake is None else float(_MILLI * item.uptake),
                "y_atp_g_per_mol": number(item.y_atp),
                "piece": None if item.piece is None else item.piece + 1,
            }
            for item in curve.points
        ],
        pieces=[
            {
                "fastest": number(item.fastest),
                "slowest": number(item.slowest),
                "true_yield_mol_per_mol": number(item.true_yield),
                "exact_true_yield": None if item.true_yield is None else str(item.true_yield),
                "true_yield_g_per_g": None
                if item.true_yield is None
                else float(curve.grams_per_gram(item.true_yield)),
                "maintenance_mmol_per_g_h": float(_MILLI * item.maintenance),
                "starts": list(item.starts),
                "stops": list(item.stops),
            }
            for item in curve.pieces
        ],
        atp_of_growth_mmol_per_g=None
        if curve.atp_growth is None
        else float(_MILLI * curve.atp_growth),
        atp_of_maintenance_mmol_per_g_h=float(_MILLI * curve.atp_maintenance),
        published_y_atp=[published_form(item) for item in published_atp_yields()],
        assumptions=[
            {
                "text": item.text,
                "value": number(item.value),
                "unit": item.unit or None,
                "source": item.source or None,
            }
            for item in curve.assumptions
        ],
    )
    return form


def growth_records(curve: GrowthCurve) -> tuple[tuple[str, ...], list[tuple[str, ...]]]:
    """Header and rows of the CSV: unrounded numbers, empty where there is no growth."""
    header = ("growth_rate", "mol_per_mol", "g_per_g", "uptake_mmol_per_g_h", "y_atp", "piece")

    def cell(value: object) -> str:
        return "" if value is None else str(value)

    rows: list[tuple[str, ...]] = [
        (
            cell(item["growth_rate"]),
            cell(item["mol_per_mol"]),
            cell(item["g_per_g"]),
            cell(item["uptake_mmol_per_g_h"]),
            cell(item["y_atp_g_per_mol"]),
            cell(item["piece"]),
        )
        for item in growth_form(curve)["rates"]
    ]
    return header, rows
