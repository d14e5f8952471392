"""Plants for tests of the workbook, what Python tells of them, and how a workbook is read."""

from __future__ import annotations

import re
from fractions import Fraction
from math import isclose
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

from tests.unit.plants import AEROBIC, LACTATE, NETWORK
from yieldnet.chemistry.library import find_compound
from yieldnet.model.network import Direction
from yieldnet.report.workbook_page import defined_name

if TYPE_CHECKING:
    from openpyxl import Workbook

    from yieldnet.model.case import Case
    from yieldnet.plant.sheet import PlantSheet

__all__ = ["PLANTS", "closed", "differences", "named", "numbers_of", "set_cell"]

_SMALL = Path(__file__).resolve().parent.parent / "bad_inputs" / "networks" / "small.yaml"
_PHASED = NETWORK.replace("NETWORK", str(_SMALL))
_GROWS = "  phases: {growth: 10 h, turnaround: 6 h, inoculum: 5 %, cells: 4 g/L}\n"
_AIR = (
    "  temperature: 30 degC\n  stirrer: 2 kW/m3\n"
    "  aeration: {vvm: 1, pressure: 2 bar, kLa: 300 1/h, dissolved oxygen: 0.3}\n"
)
# Each shows another part: nitrogen sources, bases, phases, gas, prices that are missing.
PLANTS = {
    "bare": LACTATE,
    "base that gives off carbon dioxide": LACTATE
    + "  base: sodium carbonate\n  pH: 5\n  recovery: {a: 0.8, b: 0.5}\n",
    "base of two equivalents": LACTATE
    + "  base: calcium hydroxide\n  pH: 5.5\n  feedstock purity: {glucose: 0.8}\n"
    "  titre: 100 g/L\n  productivity: 2 g/L/h\n  vessel: 100 m3\n  fill: 0.8\n",
    "base that costs too much": LACTATE + "  base: ammonia\n  pH: 6\n  prices: {glucose: 0.3"
    " EUR/kg, ammonia: 5 EUR/kg, lactate: 0.1 EUR/kg}\n",
    "cells": AEROBIC + "  productivity: 3 g/L/h\n" + _AIR,
    "cells without a gas flow": AEROBIC.replace(
        "plant:", "conditions: {temperature: 35 degC}\nplant:"
    )
    + "  productivity: 3 g/L/h\n",
    "cells with too little oxygen": AEROBIC + "  productivity: 3 g/L/h\n  temperature: 30 degC\n"
    "  aeration: {vvm: 1, dissolved oxygen: 1}\n",
    "cells with too little air": AEROBIC + "  productivity: 9 g/L/h\n  temperature: 30 degC\n"
    "  aeration: {vvm: 0.1}\n",
    "ammonium sulfate": AEROBIC + "  base: sodium hydroxide\n  pH: 6\n  nitrogen feed: ammonium"
    " sulfate\n  prices: {ammonium sulfate: 0.2 EUR/kg, oxygen: 0.1 EUR/kg}\n",
    "sodium nitrate": AEROBIC.replace("ammonia", "nitrate")
    .replace("-> ? biomass", "-> ? biomass + 1/4 acetate")
    .replace("0.5 exact", "0.1 exact")
    + "  base: ammonia\n  pH: 6\n  nitrogen feed: sodium nitrate\n",
    "nothing to neutralise": LACTATE.replace("-> ? lactate", "-> 2 ethanol + ? palmitate")
    .replace("product: lactate", "product: ethanol")
    .replace("plant:", "either side: [carbon dioxide]\nmeasured: {palmitate: 0 exact}\nplant:")
    + "  base: ammonia\n  pH: 6\n",
    "a salt that is not made": LACTATE.replace("? lactate", "? lactate + ? salt")
    .replace("equation:", "compounds: {salt: NaCl}\nequation:")
    .replace("plant:", "measured: {salt: 0 exact}\nplant:")
    + "  base: ammonia\n  pH: 6\n  productivity: 2 g/L/h\n",
    "a salt without a heat": "case: t\ncompounds: {sodium lactate: C3H5O3Na}\nequation: glucose +"
    " ? sodium hydroxide -> ? sodium lactate + ? water\nplant:\n  product: sodium lactate\n"
    "  output: 9 t/y\n  on-stream: 8000 h/y\n",
    "vessels that are not counted": _PHASED.replace("  productivity: 3 g/L/h\n", "")
    + "  phases: {growth: 9 h, production: 20 h, cells: 3 g/L}\n",
    "urea": AEROBIC.replace("ammonia", "urea") + "  prices: {urea: 0.4 EUR/kg}\n",
    "phases": _PHASED + _GROWS + "  vessel: 100 m3\n  fill: 1\n  base: ammonia\n  pH: 6\n"
    "  prices: {glucose: 0.3 EUR/kg, ammonia: 0.5 EUR/kg, lactate: 1.5 EUR/kg}\n" + _AIR,
    "phases whose cells follow": _PHASED + "  phases: {growth: 10 h}\n" + _AIR,
    "phases of known time": _PHASED.replace("  productivity: 3 g/L/h\n", "")
    + "  phases: {growth: 9 h, production: 20 h, inoculum: 10 %, cells: 3 g/L}\n"
    "  vessel: 400 m3\n  base: sodium hydroxide\n  pH: 5\n" + _AIR,
}


def numbers_of(sheet: PlantSheet) -> dict[str, float | str]:
    """Every number of a plant sheet by the name that its cell has."""
    found: dict[str, float | str] = {}
    for figure in sheet.figures:
        found[figure.name] = "none" if figure.value is None else float(figure.value)
    for stream in sheet.streams:
        side = "enters" if stream.enters else "leaves"
        found[f"{side} {stream.name}"] = float(stream.kg_per_h)
    for ion in sheet.ions:
        found[f"in the broth {ion.name}"] = float(ion.kg_per_h)
    return {defined_name(name): value for name, value in found.items()}


def named(book: Workbook) -> dict[str, Any]:
    """What every named cell holds."""
    return {name: _cell(book, name).value for name in book.defined_names}


def _cell(book: Workbook, name: str) -> Any:
    address = book.defined_names[name].attr_text or ""
    match = re.fullmatch(r"'?([^']+)'?!\$([A-Z]+)\$(\d+)", address)
    assert match is not None, address
    return book[match[1]][f"{match[2]}{match[3]}"]


def set_cell(book: Workbook, name: str, value: float) -> None:
    """Put a number into a named cell."""
    _cell(book, name).value = value


def differences(cells: dict[str, Any], sheet: PlantSheet, within: float = 1e-9) -> list[str]:
    """Where a workbook says something else than Python; cells that are 0 or none may be more."""
    wanted = numbers_of(sheet)
    wrong = []
    for name, value in wanted.items():
        other = cells.get(name)
        same = (
            isinstance(other, int | float) and isclose(other, value, rel_tol=within, abs_tol=1e-9)
            if isinstance(value, float)
            else other == value
        )
        if not same:
            wrong.append(f"{name}: {other} and not {value}")
    for name, other in cells.items():
        side = name.startswith(("enters_", "leaves_", "in_the_broth_"))
        if side and name not in wanted and not name.endswith("_in_all") and abs(other) > 1e-9:
            wrong.append(f"{name}: {other} and not there")
    return wrong


def closed(
    case: Case, settled: dict[str, Fraction], changes: dict[str, float]
) -> dict[str, Fraction]:
    """Equation with other yields, its elements closed by least squares and not as the sheet does.

    Carbon dioxide, water, oxygen and the nitrogen source follow; ``changes`` are positive on the
    declared side.
    """
    names = {"carbon dioxide", "water", "oxygen", "ammonia"}
    followers = [
        item
        for item in case.compounds
        if (entry := find_compound(item.name)) is not None and entry.name in names
    ]
    equation = {name: float(value) for name, value in settled.items()}
    for name, value in changes.items():
        coefficient = case.coefficient(name)
        assert coefficient is not None
        equation[name] = -value if coefficient.side is Direction.CONSUMED else value
    elements = list(dict.fromkeys(s for item in case.compounds for s, _ in item.formula.elements))
    matrix = np.array([[float(item.formula[s]) for item in followers] for s in elements])
    others = [item for item in case.compounds if item not in followers]
    right = [
        -sum(equation[item.name] * float(item.formula[s]) for item in others) for s in elements
    ]
    solved, *_ = np.linalg.lstsq(matrix, np.array(right), rcond=None)
    equation |= {item.name: float(x) for item, x in zip(followers, solved, strict=True)}
    return {name: Fraction(value) for name, value in equation.items()}
