"""The view of plant sheets: streams, ions and figures, one plant or several side by side."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.report.figures import assumption_rows, figure
from yieldnet.report.table import Table

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.foundation.findings import Finding
    from yieldnet.plant.sheet import Figure, Input, PlantSheet, Stream

__all__ = ["PlantView", "plant_headline", "plant_view"]

_LETTERS = "ABCDEFGHIJKLMNOPQRSTUVWXYZ"


@dataclass(frozen=True, slots=True, kw_only=True)
class PlantView:
    """Plant sheets as texts.

    Parameters
    ----------
    headlines : tuple of (str, str)
        Title and first line of each plant.
    tables : tuple of Table
        Streams, ions, figures by section.
    formulas : tuple of str
        How each figure follows; empty if not asked for.
    balance : str
        That the streams close.
    findings : tuple of Finding
        Findings of all plants.
    assumptions : tuple of (str, str, str)
        Text, value with unit, source.
    cautions : tuple of str
        What stands under every sheet.
    """

    headlines: tuple[tuple[str, str], ...]
    tables: tuple[Table, ...]
    formulas: tuple[str, ...]
    balance: str
    findings: tuple[Finding, ...]
    assumptions: tuple[tuple[str, str, str], ...]
    cautions: tuple[str, ...]


def plant_headline(sheet: PlantSheet) -> str:
    """What is sold, and of how much substrate.

    Parameters
    ----------
    sheet : PlantSheet
        The sheet.

    Returns
    -------
    str
        ``20000 t/y succinate from 23600 t/y glucose, 0.846 g/g``.
    """
    sold = sheet.plant.output.value / 1000
    whole = sheet.figure("yield sold")
    substrate = sold / Fraction(whole.value or 0)
    return (
        f"{figure(sold)} t/y {sheet.plant.product} from {figure(substrate)} t/y"
        f" {sheet.case.basis.name}, {figure(whole.value)} g/g sold"
    )


def plant_view(sheets: Sequence[PlantSheet], *, formulas: bool = False) -> PlantView:
    """View of plant sheets, side by side where there are several.

    Parameters
    ----------
    sheets : sequence of PlantSheet
        One or several.
    formulas : bool
        Whether it says how each figure follows.

    Returns
    -------
    PlantView
        Texts in the order of showing.

    Raises
    ------
    ValueError
        If there are more plants than letters.
    """
    if not 1 <= len(sheets) <= len(_LETTERS):
        raise ValueError(f"{len(sheets)} plants cannot stand side by side")
    several = len(sheets) > 1
    letters = [f"{letter}: " if several else "" for letter in _LETTERS[: len(sheets)]]
    taken = dict.fromkeys(
        ((letter if several else "") + text, value, source)
        for letter, sheet in zip(letters, sheets, strict=True)
        for text, value, source in assumption_rows(sheet.assumptions)
    )
    worst = max(item.residual for sheet in sheets for item in sheet.balances)
    return PlantView(
        headlines=tuple(
            (letter + sheet.case.title, plant_headline(sheet))
            for letter, sheet in zip(letters, sheets, strict=True)
        ),
        tables=(
            _streams(sheets, "Enters", enters=True),
            _streams(sheets, "Leaves", enters=False),
            *_ions(sheets),
            *_figures(sheets),
        ),
        formulas=tuple(
            letter + _formula(item)
            for letter, sheet in zip(letters, sheets, strict=True)
            for item in sheet.figures
        )
        if formulas
        else (),
        balance="Every element, the charge of the ions and the mass close"
        + (" exactly." if not worst else f" within {float(worst):.0e}."),
        findings=tuple(dict.fromkeys(item for sheet in sheets for item in sheet.findings)),
        assumptions=tuple(taken),
        cautions=sheets[0].cautions,
    )


def _columns(sheets: Sequence[PlantSheet]) -> tuple[str, ...]:
    return tuple(_LETTERS[: len(sheets)])


def _streams(sheets: Sequence[PlantSheet], title: str, *, enters: bool) -> Table:
    found: list[dict[str, Stream]] = [
        {item.name: item for item in sheet.streams if item.enters is enters} for sheet in sheets
    ]
    names = dict.fromkeys(name for streams in found for name in streams)
    totals = [sum(item.kg_per_h for item in streams.values()) for streams in found]
    if len(sheets) == 1:
        rows = [(name, figure(one.kg_per_h), figure(one.t_per_y)) for name, one in found[0].items()]
        years = sum(item.t_per_y for item in found[0].values())
        rows.append(("total", figure(totals[0]), figure(years)))
        return Table(title=title, columns=("", "kg/h", "t/y"), rows=tuple(rows))
    cells = [
        (name, *(figure(one[name].t_per_y) if name in one else "" for one in found))
        for name in names
    ]
    years_of = [figure(sum(item.t_per_y for item in one.values())) for one in found]
    cells.append(("total", *years_of))
    return Table(title=f"{title}, t/y", columns=("", *_columns(sheets)), rows=tuple(cells))


def _ions(sheets: Sequence[PlantSheet]) -> tuple[Table, ...]:
    """Ions of the broth, where a plant holds its pH."""
    if not any(sheet.ions for sheet in sheets):
        return ()
    title = "Acids and their salt in the broth"
    note = "Product before recovery; the streams above tell acids undissociated."
    if len(sheets) == 1:
        rows = [
            (
                item.name,
                f"{item.formula.charge:+d}" if item.formula.charge else "0",
                figure(item.kg_per_h),
                figure(item.t_per_y),
            )
            for item in sheets[0].ions
        ]
        salt = [item for item in sheets[0].ions if item.formula.charge]
        rows.append(
            (
                "salt, all ions",
                "0",
                figure(sum(item.kg_per_h for item in salt)),
                figure(sum(item.t_per_y for item in salt)),
            )
        )
        columns = ("", "charge", "kg/h", "t/y")
        return (Table(title=title, columns=columns, rows=tuple(rows), note=note),)
    found = [{item.name: figure(item.t_per_y) for item in sheet.ions} for sheet in sheets]
    names = dict.fromkeys(name for ions in found for name in ions)
    cells = tuple((name, *(ions.get(name, "") for ions in found)) for name in names)
    return (Table(title=f"{title}, t/y", columns=("", *_columns(sheets)), rows=cells, note=note),)


def _figures(sheets: Sequence[PlantSheet]) -> tuple[Table, ...]:
    # A figure in another unit is another row: what stands in one row can be compared.
    found = [
        {(item.section, item.name, item.unit): item for item in sheet.figures} for sheet in sheets
    ]
    sections: dict[str, dict[tuple[str, str, str], None]] = {}
    for figures in found:
        for key in figures:
            sections.setdefault(key[0], {})[key] = None
    tables = []
    for section, keys in sections.items():
        rows = []
        for key in keys:
            cells = [_value(figures.get(key)) for figures in found]
            rows.append((key[1], *cells, "" if key[2] == "-" else key[2]))
        columns = ("", *(_columns(sheets) if len(sheets) > 1 else ("value",)), "unit")
        tables.append(Table(title=section, columns=columns, rows=tuple(rows)))
    return tuple(tables)


def _value(item: Figure | None) -> str:
    if item is None:
        return ""
    return "none" if item.value is None else figure(item.value)


def _formula(item: Figure) -> str:
    """How a figure follows, with its inputs and sources."""
    value = "none" if item.value is None else f"{figure(item.value)} {item.unit}".rstrip(" -")
    text = f"{item.name} = {value}: {item.formula}"
    if item.inputs:
        text += "; " + ", ".join(_input(one) for one in item.inputs)
    return text + (f" [{item.source}]" if item.source else "")


def _input(one: Input) -> str:
    words = f"{one.name} {figure(one.value)} {one.unit}".rstrip(" -")
    return words + (f" ({one.source})" if one.source else "")
