"""The sheets ``compounds`` and ``coefficients``: formulas, yields, and the equations they make.

In: settled equations. Out: a cell ``yield of X`` for every compound, from which all else is made.
Compounds that close the elements follow the others by a formula, so that a changed yield leaves no
balance open; where they are not enough, a check says so.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from yieldnet.chemistry.atomic_weights import atomic_weight
from yieldnet.model.network import BIOMASS, Direction
from yieldnet.report.workbook_inputs import Check
from yieldnet.report.workbook_live import (
    Live,
    all_of,
    live,
    magnitude,
    sum_of_magnitudes,
    sum_of_products,
)
from yieldnet.report.workbook_page import Kind

if TYPE_CHECKING:
    from fractions import Fraction

    from yieldnet.optimum.ranges import Range
    from yieldnet.prediction.result import CoefficientAnswer
    from yieldnet.report.workbook_inputs import Setting
    from yieldnet.report.workbook_page import Book, Page

__all__ = ["Amounts", "Compounds", "add_coefficients", "add_compounds"]

_SIDES = {
    Direction.CONSUMED: "taken up",
    Direction.PRODUCED: "given off",
    Direction.EITHER: "either way",
}
_CLOSES = 1e-9
"""Largest residual of an element, over all of its atoms on both sides, that is let pass [-]."""
_COUNTS = 'General;-General;"–"'
"""Format of atoms in a formula."""
_YIELD = "0.0000"
"""Format of a yield, which is changed in its last digits."""
_GRAMS = 1000
_ATOMS = 7
"""Column of the first element."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Compounds:
    """Cells of the sheet ``compounds``, in the order of the workbook.

    Parameters
    ----------
    elements : tuple of str
        Elements in the order of the columns.
    weights : tuple of Live
        Atomic weights [g/mol].
    atoms : dict of str to tuple of Live
        By element, atoms in every compound [mol/mol].
    ratios : tuple of tuple of Live
        By closing compound, what is made of it per mol made of every free one [mol/mol].
    """

    elements: tuple[str, ...]
    weights: tuple[Live, ...]
    atoms: dict[str, tuple[Live, ...]]
    ratios: tuple[tuple[Live, ...], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Amounts:
    """Equations as cells in the order of the workbook, production positive [mol/mol basis].

    Parameters
    ----------
    production, growth, overall : dict of str to Live
        Of each phase and of both; ``growth`` is empty without phases, all are empty where the
        equation is not settled.
    checks : tuple of Check
        What must hold.
    """

    production: dict[str, Live]
    growth: dict[str, Live]
    overall: dict[str, Live]
    checks: tuple[Check, ...]


def add_compounds(book: Book, setting: Setting) -> Compounds:
    """The sheet ``compounds``: formulas, masses, and what closes the elements.

    Parameters
    ----------
    book : Book
        Receives the sheet, and names for the masses.
    setting : Setting
        What the workbook is made from.

    Returns
    -------
    Compounds
        Its cells.
    """
    elements = setting.elements
    page = book.page(
        "compounds",
        (26, 16, 12, 14, 14, 3, *(9,) * (len(elements) + 1)),
        "Formulas as the case and the library have them; masses follow from atomic weights.",
    )
    page.heading("Compounds")
    page.header("", "formula", "ash, g/g", "formula mass, g/mol", "molar mass with ash, g/mol", "",
                *elements)  # fmt: skip
    page.write(1, "atomic weight, g/mol")
    known = [atomic_weight(symbol) for symbol in elements]
    weights = []
    for k, (symbol, item) in enumerate(zip(elements, known, strict=True)):
        weights.append(page.write(_ATOMS + k, item.value, kind=Kind.CONSTANT, shown="General"))
        book.sources[f"atomic weight of {symbol}", item.source] = None
    page.row += 1
    atoms: dict[str, list[Live]] = {symbol: [] for symbol in elements}
    for compound in setting.closing.order:
        name = compound.name
        page.write(1, name)
        page.write(2, str(compound.formula))
        row = []
        for k, symbol in enumerate(elements):
            cell = page.write(
                _ATOMS + k, compound.formula[symbol], kind=Kind.CONSTANT, shown=_COUNTS
            )
            atoms[symbol].append(cell)
            row.append(cell)
        ash = page.write(3, compound.ash, kind=Kind.CONSTANT, shown=_COUNTS)
        dry = page.write(4, sum_of_products(row, weights), shown="0.000")
        whole = page.write(5, dry / (1 - ash), shown="0.000")
        book.define(f"ash of {name}", ash)
        book.define(f"formula mass of {name}", dry)
        book.define(f"molar mass of {name}", whole)
        page.row += 1
    return Compounds(
        elements=elements,
        weights=tuple(weights),
        atoms={symbol: tuple(cells) for symbol, cells in atoms.items()},
        ratios=_ratios(page, setting),
    )


def _ratios(page: Page, setting: Setting) -> tuple[tuple[Live, ...], ...]:
    closing = setting.closing
    page.heading("What closes the elements")
    if not closing.closing:
        page.note("Nothing: the equation lists no carbon dioxide, water, oxygen, nitrogen source.")
        return ()
    page.note(
        "Made of the compound in the column per mol made of that in the row, from the formulas;"
        f" closes {', '.join(closing.elements)}."
    )
    page.header("mol/mol", *(item.name for item in closing.closing))
    columns: list[list[Live]] = [[] for _ in closing.closing]
    for item, ratios in zip(closing.free, closing.ratios, strict=True):
        page.write(1, item.name)
        for k, ratio in enumerate(ratios):
            shown = '0.0000;-0.0000;"–"'
            columns[k].append(page.write(2 + k, ratio, kind=Kind.CONSTANT, shown=shown))
        page.row += 1
    return tuple(tuple(cells) for cells in columns)


def add_coefficients(book: Book, setting: Setting, compounds: Compounds) -> Amounts:
    """The sheet ``coefficients``.

    Parameters
    ----------
    book : Book
        Receives the sheet and its names.
    setting : Setting
        What the workbook is made from.
    compounds : Compounds
        Cells of the sheet ``compounds``.

    Returns
    -------
    Amounts
        The equations as cells.
    """
    page = book.page(
        "coefficients",
        (26, 10, 11, 23, *(10,) * 8, 10, 30),
        f"Per mol {setting.case.basis.name}, positive on the declared side; either way: given off"
        " positive. Yields that close the elements stand last and follow the others.",
    )
    production = _yields(page, setting, compounds)
    growth = _growth_yields(page, setting, compounds) if setting.growth else {}
    checks: list[Check] = [
        _sides(setting, phase, words)
        for words, phase in (("production", production), ("growth", growth))
        if phase
    ]
    if len(production) < len(setting.closing.order):
        page.note("The equation is not settled, so nothing follows from it.")
        return Amounts(production={}, growth={}, overall={}, checks=tuple(checks))
    columns = {"production": production}
    if growth:
        share = _share(page, setting, production, growth, checks)
        columns["growth"] = growth
        columns["over all phases"] = {
            name: (1 - share) * production[name] + share * growth[name] for name in production
        }
    cells = _amounts(page, setting, columns)
    closed = _balances(page, compounds, cells)
    # Growth equations in few digits keep a residual; of these a plant is refused anyway.
    checks += [closed] if setting.sheet is not None else []
    return Amounts(
        production=cells["production"],
        growth=cells.get("growth", {}),
        overall=cells.get("over all phases", cells["production"]),
        checks=tuple(checks),
    )


def _sign(setting: Setting, name: str) -> int:
    """-1 where a yield counts what is taken up."""
    found = setting.case.coefficient(name)
    return -1 if found is None or found.side is Direction.CONSUMED else 1


def _signed(sign: int, value: Live) -> Live:
    return value if sign > 0 else -value


def _range(page: Page, column: int, value: Range | None) -> None:
    if value is not None:
        for k, end in enumerate((value.low, value.high)):
            told: Fraction | str = "unbounded" if end is None else end
            page.write(column + k, told, kind=Kind.PREDICTED, shown=_YIELD)


def _yields(page: Page, setting: Setting, compounds: Compounds) -> dict[str, Live]:
    """Table of yields of production; gives what is settled, production positive."""
    case, book = setting.case, page.book
    page.heading(f"Yields of production, mol/mol {case.basis.name}")
    page.header("", "yield", "side", "what it is", "from the linear problem", "change, made is"
                " positive", "low at the aim", "high at the aim", "low by network", "high by"
                " network", "low by elements", "high by elements", "yield, g/g",
                "measured; status")  # fmt: skip
    answers = {item.compound: item for item in setting.prediction.coefficients}
    found = _yield_rows(page, setting, compounds, setting.production, "yield")
    for compound, row in found.rows:
        answer = answers.get(compound)
        page.row = row
        if answer is not None:
            _range(page, 7, answer.at_aim)
            _range(page, 9, answer.network)
            _range(page, 11, answer.elements)
        if compound in found.cells and case.compound(compound).weight.molar_mass:
            masses = book[f"molar mass of {compound}"] / book[f"molar mass of {case.basis.name}"]
            page.write(13, found.cells[compound] * masses)
        page.write(14, _measured(answer), wrap=True)
        page.row += 1
    return found.amounts


def _measured(answer: CoefficientAnswer | None) -> str:
    """Measured values as they were written, and how the coefficient is known."""
    if answer is None:
        return "basis"
    texts = ", ".join(item.text for item in answer.measurements)
    away = " (set aside)" if answer.set_aside else ""
    return f"{texts}{away}; {answer.status}" if texts else str(answer.status)


@dataclass(frozen=True, slots=True, kw_only=True)
class _Table:
    """A table of yields: cells as they stand, the same with production positive, and rows."""

    cells: dict[str, Live]
    amounts: dict[str, Live]
    rows: tuple[tuple[str, int], ...]


def _yield_rows(
    page: Page, setting: Setting, compounds: Compounds, settled: dict[str, Fraction], key: str
) -> _Table:
    """Yield, side, what it is, predicted value and change of every compound."""
    case, closing = setting.case, setting.closing
    cells: dict[str, Live] = {}
    rows: list[tuple[str, int]] = []
    changes: list[Live] = []
    followers = [item.name for item in closing.closing]
    for compound in closing.order:
        name = compound.name
        rows.append((name, page.row))
        sign, side = _sign(setting, name), case.coefficient(name)
        page.write(1, name)
        page.write(3, _SIDES[Direction.CONSUMED if side is None else side.side])
        if name not in settled:
            page.write(4, "not settled: see its range", pale=True)
            page.row += 1
            continue
        predicted = page.write(5, sign * settled[name], kind=Kind.PREDICTED, shown=_YIELD)
        kind, words = Kind.YOURS, str(Kind.YOURS)
        value: Live | Fraction = sign * settled[name]
        if name == case.basis.name:
            kind, words = Kind.CONSTANT, "basis"
        elif name in followers and len(changes) == len(closing.free):
            ratios = compounds.ratios[followers.index(name)]
            value = predicted + _signed(sign, sum_of_products(changes, ratios))
            kind, words = Kind.FORMULA, "closes the elements"
        page.write(4, words, pale=True)
        cell = page.write(2, value, kind=kind, shown=_YIELD)
        cells[name] = page.book.define(f"{key} of {name}", cell)
        change = page.write(6, _signed(sign, cell) - _signed(sign, predicted), shown="General")
        if name not in followers:
            changes.append(change)
        page.row += 1
    return _Table(
        cells=cells,
        amounts={name: _signed(_sign(setting, name), cell) for name, cell in cells.items()},
        rows=tuple(rows),
    )


def _growth_yields(page: Page, setting: Setting, compounds: Compounds) -> dict[str, Live]:
    """Table of yields of growth; production positive."""
    page.heading(f"Yields of growth at most biomass, mol/mol {setting.case.basis.name}")
    page.header("", "yield", "side", "what it is", "from the linear problem",
                "change, made is positive")  # fmt: skip
    return _yield_rows(page, setting, compounds, setting.growth, "growth yield").amounts


def _sides(setting: Setting, amounts: dict[str, Live], phase: str) -> Check:
    """That no yield is negative on its declared side."""
    conditions = []
    for name, amount in amounts.items():
        found = setting.case.coefficient(name)
        if found is not None and found.side is not Direction.EITHER:
            conditions.append(_signed(_sign(setting, name), amount).at_least(-_CLOSES))
    return Check(
        name=f"no yield of {phase} is on the wrong side",
        holds=all_of(conditions),
        way_out="A negative yield means that what you put in needs more than there is: lower it.",
    )


def _share(
    page: Page,
    setting: Setting,
    production: dict[str, Live],
    growth: dict[str, Live],
    checks: list[Check],
) -> Live:
    """How growth and production share the substrate."""
    book, product = page.book, setting.plant.product
    page.heading("Growth and production")
    page.list_header()
    mass = book[f"molar mass of {product}"]
    titre = book["titre"]
    if "cells at the end of growth" not in book:
        rate = (
            book["productivity"] if "productivity" in book else titre / book["time of production"]
        )
        page.entry(
            "cells at the end of growth",
            rate / mass / production[product] / book["substrate uptake"],
            "kg/m3",
            Kind.FORMULA,
            "substrate used per volume and h of production / substrate uptake of the cells",
            key="cells at the end of growth",
        )
    grams = growth[BIOMASS] * book[f"molar mass of {BIOMASS}"]
    of_growth = page.entry(
        "substrate of growth",
        book["cells at the end of growth"] * _GRAMS / grams,
        "mol/m3",
        Kind.FORMULA,
        "cells at the end of growth / biomass per substrate",
        key="substrate of growth",
    )
    of_production = page.entry(
        "substrate of production",
        (titre * _GRAMS / mass - of_growth * growth[product]) / production[product],
        "mol/m3",
        Kind.FORMULA,
        "(titre - product of growth) / yield of production",
        key="substrate of production",
    )
    checks.append(
        Check(
            name="growth leaves substrate for production",
            holds=all_of([of_growth.above(0), of_production.above(0)]),
            way_out="Lower the cells or raise the titre.",
        )
    )
    return page.entry(
        "substrate used by growth",
        of_growth / (of_growth + of_production),
        "-",
        Kind.FORMULA,
        "substrate of growth / substrate of growth and production, mol/mol",
        key="substrate used by growth",
    )


def _amounts(
    page: Page, setting: Setting, columns: dict[str, dict[str, Live]]
) -> dict[str, dict[str, Live]]:
    """Equations with production positive."""
    page.heading(f"Equations, made is positive, mol/mol {setting.case.basis.name}")
    page.header("", *columns)
    cells: dict[str, dict[str, Live]] = {title: {} for title in columns}
    for compound in setting.closing.order:
        page.write(1, compound.name)
        for k, (title, amounts) in enumerate(columns.items()):
            cells[title][compound.name] = page.write(2 + k, amounts[compound.name], shown=_YIELD)
        page.row += 1
    return cells


def _balances(page: Page, compounds: Compounds, cells: dict[str, dict[str, Live]]) -> Check:
    """Made less used of every element, for each equation."""
    page.heading("Elements, made less used, mol/mol")
    page.header("", *cells)
    conditions = []
    for symbol in compounds.elements:
        atoms = compounds.atoms[symbol]
        if not any(cell.number for cell in atoms):
            continue
        page.write(1, symbol)
        for k, amounts in enumerate(cells.values()):
            column = list(amounts.values())
            left = page.write(2 + k, sum_of_products(column, atoms), shown="0.00E+00")
            size = sum_of_magnitudes(column, atoms)
            conditions.append(magnitude(left).at_most(live(_CLOSES) * size))
        page.row += 1
    return Check(
        name="the elements of the yields close",
        holds=all_of(conditions),
        way_out="Change another yield until 'Elements' on the sheet 'coefficients' is nothing.",
    )
