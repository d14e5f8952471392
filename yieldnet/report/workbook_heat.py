"""Oxygen and heat as live numbers on the sheet ``oxygen and heat``.

In: amounts, size, vessels, gas. Out: oxygen uptake, driving force, kLa, heat and cooling duty. The
formulas are those of ``plant.oxygen`` and ``plant.heat``. Where a number cannot be told, such as a
kLa without a driving force, the cell says ``none``.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.model.network import BIOMASS
from yieldnet.prediction.heat import heat_of_compound
from yieldnet.report.workbook_inputs import Check
from yieldnet.report.workbook_live import (
    Live,
    all_of,
    at_least_zero,
    exponential,
    if_then,
    is_number,
    largest,
    live,
    sum_of_products,
)
from yieldnet.report.workbook_page import Kind
from yieldnet.report.workbook_vessels import production_rate

if TYPE_CHECKING:
    from yieldnet.report.workbook_base import Protons
    from yieldnet.report.workbook_coefficients import Amounts
    from yieldnet.report.workbook_inputs import Setting
    from yieldnet.report.workbook_page import Book, Page

__all__ = ["add_heat", "add_oxygen"]

_NONE = "none"
_OXYGEN, _CARBON_DIOXIDE = "oxygen", "carbon dioxide"
_GRAMS = 1000
_MINUTES = 60
_SECONDS = 3600
_KILOPASCAL = 100
_PASCAL = 100_000
_WATER_MASS = 18.015
"""Molar mass of water [g/mol] (IUPAC 2021 atomic weights)."""
_AIR_WAY_OUT = "Raise vvm, enrich the air, or lower the productivity."


def _vapour_pressure(book: Book) -> Live:
    """Saturation pressure of water vapour by the Magnus form [bar]."""
    celsius = book["temperature"]
    exponent = book["Magnus factor"] * celsius / (book["Magnus temperature"] + celsius)
    return book["Magnus pressure"] * exponential(exponent) / _KILOPASCAL


def add_oxygen(page: Page, setting: Setting, amounts: Amounts, checks: list[Check]) -> None:
    """Oxygen uptake and what it asks of a vessel.

    Parameters
    ----------
    page : Page
        The sheet ``oxygen and heat``.
    setting : Setting
        What the workbook is made from.
    amounts : Amounts
        The equations.
    checks : list of Check
        Receives what must hold.
    """
    if not setting.aerated:
        return
    uptakes = _uptakes(page, setting, amounts)
    if not uptakes:
        return
    book = page.book
    given_off = uptakes[0][1]
    most = uptakes[0][0]
    if len(uptakes) > 1:
        # As much carbon dioxide as in the phase that takes up most.
        first, second = uptakes
        given_off = if_then(first[0].at_least(second[0]), first[1], second[1])
        most = largest([first[0], second[0]])

    def add(name: str, value: Live, unit: str, how: str, source: str = "") -> Live:
        return page.entry(name, value, unit, Kind.FORMULA, how, source, key=name)

    most = add("largest oxygen uptake", most, "mol/m3/h", "of both phases")
    for rule in ("440", "460"):
        add(
            f"heat that this uptake implies, {rule} kJ/mol",
            most * book[f"heat per oxygen, {rule}"] / _SECONDS,
            "kW/m3",
            "largest oxygen uptake x heat per oxygen",
        )
    checks.append(
        Check(
            name="oxygen uptake is within the usual reach of large vessels",
            holds=most.at_most(book["usual reach of oxygen uptake"]),
            way_out="Lower the productivity, or bound oxygen under 'demands' of the case.",
        )
    )
    if "temperature" in book:
        _needed(page, most, given_off, checks)


def _uptakes(page: Page, setting: Setting, amounts: Amounts) -> list[tuple[Live, Live]]:
    """Oxygen uptake of each phase whose speed is known, with carbon dioxide given off."""
    book, product = page.book, setting.plant.product
    has_carbon_dioxide = _CARBON_DIOXIDE in amounts.production
    rate = production_rate(page)
    growing = amounts.growth and "growth rate that growth needs" in book
    if rate is None and not growing:
        return []
    page.heading("Oxygen")
    page.list_header()
    found = []
    if rate is not None:
        per_hour = rate * _GRAMS / book[f"molar mass of {product}"] / amounts.production[product]
        uptake = page.entry(
            "oxygen uptake, production",
            at_least_zero(per_hour * -amounts.production[_OXYGEN]),
            "mol/m3/h",
            Kind.FORMULA,
            "productivity / molar mass of the product x oxygen / product",
            key="oxygen uptake, production",
        )
        made = amounts.production[_CARBON_DIOXIDE] if has_carbon_dioxide else live(0)
        found.append((uptake, per_hour * made))
    if growing:
        grams = amounts.growth[BIOMASS] * book[f"molar mass of {BIOMASS}"]
        cells = book["cells at the end of growth"] * _GRAMS
        per_hour = book["growth rate that growth needs"] * cells / grams
        uptake = page.entry(
            "oxygen uptake, growth",
            at_least_zero(per_hour * -amounts.growth[_OXYGEN]),
            "mol/m3/h",
            Kind.FORMULA,
            "growth rate x cells at the end of growth x oxygen / biomass",
            key="oxygen uptake, growth",
        )
        made = amounts.growth[_CARBON_DIOXIDE] if has_carbon_dioxide else live(0)
        found.append((uptake, per_hour * made))
    return found


def _needed(page: Page, most: Live, given_off: Live, checks: list[Check]) -> None:
    """Driving force and kLa for the largest uptake."""
    book = page.book
    inlet, pressure = book["oxygen in air"], book["pressure"]

    def add(name: str, value: Live, unit: str, how: str, key: str = "") -> Live:
        return page.entry(name, value, unit, Kind.FORMULA, how, key=key or name)

    gas, words = inlet, "as it enters, since vvm is not given"
    if "vvm" in book:
        words = "as it leaves"
        air = add(
            "air",
            book["vvm"] * _MINUTES / book["molar volume of gas"],
            "mol/m3/h",
            "vvm x 60 / molar volume",
            key="air per broth",
        )
        enough = most.below(inlet * air)
        gas = add(
            "oxygen in the gas as it leaves",
            if_then(enough, (inlet * air - most) / (air - most + given_off), _NONE),
            "mol/mol",
            "(oxygen in - uptake) / (air - uptake + carbon dioxide), dry",
        )
        checks.append(Check(name="air brings enough oxygen", holds=enough, way_out=_AIR_WAY_OUT))
    kelvin = book["temperature"] + book["ice point"]
    henry = add(
        "solubility of oxygen",
        book["Henry constant"]
        * exponential(book["Henry slope"] * (1 / kelvin - 1 / book["Henry reference"])),
        "mol/m3/Pa",
        "Henry constant x exp(slope x (1 / T - 1 / reference))",
    )
    vapour = add(
        "pressure of water vapour",
        _vapour_pressure(book),
        "bar",
        "Magnus form: pressure x exp(factor x t / (temperature + t))",
    )
    dry = henry * (pressure - vapour) * _PASCAL
    add(
        "saturation with air",
        dry * inlet,
        "mol/m3",
        "Henry constant x (pressure - water vapour) x oxygen in dry air",
    )
    difference = dry * (gas - book["dissolved oxygen"] * inlet)
    force = add(
        "driving force",
        if_then(is_number(gas), difference, _NONE),
        "mol/m3",
        f"Henry constant x (pressure - water vapour) x (oxygen in dry gas, {words} - dissolved"
        " oxygen x oxygen in dry air)",
    )
    # A text counts as larger than any number, so that it is asked for apart.
    there = all_of([is_number(force), force.above(0)])
    needed = add(
        "kLa needed",
        if_then(there, most / force, _NONE),
        "1/h",
        "largest oxygen uptake / driving force",
    )
    own = "kLa of the vessel" in book
    limit = book["kLa of the vessel"] if own else book["usual reach of kLa"]
    checks.append(
        Check(
            name=f"kLa needed is within {'that of the vessel' if own else 'the usual reach'}",
            holds=all_of([is_number(needed), needed.at_most(limit)]),
            way_out="Lower the productivity or the dissolved oxygen, raise the pressure or vvm.",
        )
    )
    if own:
        add(
            "oxygen that the vessel passes on",
            if_then(there, limit * force, _NONE),
            "mol/m3/h",
            "kLa of the vessel x driving force",
        )


def add_heat(
    page: Page,
    setting: Setting,
    amounts: Amounts,
    protons: Protons | None,
    air: Live | None,
    checks: list[Check],
) -> None:
    """Heat that is made, and what must be taken off.

    Parameters
    ----------
    page : Page
        The sheet ``oxygen and heat``.
    setting : Setting
        What the workbook is made from.
    amounts : Amounts
        The equations.
    protons : Protons or None
        Protons and base.
    air : Live or None
        Dry air blown in [mol/h].
    checks : list of Check
        Receives what must hold.
    """
    book = page.book
    cells_heat = _combustion(page, setting, amounts, checks)
    if cells_heat is None:
        return
    kilowatts = book["substrate used"] / _SECONDS
    page.heading("Heat")
    page.list_header()

    def add(name: str, value: Live, how: str, source: str = "") -> Live:
        return page.entry(name, value, "kW", Kind.FORMULA, how, source, key=name)

    parts = [
        add(
            "heat of the cells, by combustion",
            cells_heat * kilowatts,
            "heats of combustion of what is used less those of what is made",
        )
    ]
    if setting.aerated:
        used = at_least_zero(-amounts.overall[_OXYGEN])
        for rule in ("440", "460"):
            add(
                f"heat of the cells, {rule} kJ per oxygen",
                used * book[f"heat per oxygen, {rule}"] * kilowatts,
                "oxygen used x heat per oxygen; a second opinion, not in the cooling duty",
            )
    words = ["heat of the cells, by combustion"]
    if protons is not None:
        given = list(protons.phases.values())[-1]
        words.append("heat of neutralisation")
        parts.append(
            add(
                words[-1],
                given * book["heat per proton"] * kilowatts,
                "protons given off x heat per proton",
            )
        )
    if "power of the stirrer" in book and "broth in all vessels" in book:
        running = book["share of the time"] if "share of the time" in book else live(1)
        words.append("stirrer")
        parts.append(
            add(
                words[-1],
                book["power of the stirrer"] * book["broth in all vessels"] * running,
                "power per volume x broth in all vessels x share of the time that they run",
            )
        )
    if air is not None and "temperature" in book:
        words.append("evaporation")
        parts.append(_evaporation(page, amounts, air))
    total = parts[0]
    for part in parts[1:]:
        total = total + part
    add("cooling duty", total, " + ".join(words))


def _evaporation(page: Page, amounts: Amounts, air: Live) -> Live:
    """Heat that the gas takes along, negative [kW]."""
    book = page.book
    change: Live = amounts.overall[_OXYGEN]
    if _CARBON_DIOXIDE in amounts.overall:
        change = change + at_least_zero(amounts.overall[_CARBON_DIOXIDE])
    gas = page.entry(
        "dry gas that leaves",
        air + book["substrate used"] * change,
        "mol/h",
        Kind.FORMULA,
        "dry air blown in less oxygen used and with carbon dioxide given off",
        key="dry gas that leaves",
    )
    vapour = _vapour_pressure(book)
    if "pressure of water vapour" in book:
        vapour = book["pressure of water vapour"]
    water = gas * vapour / (book["pressure"] - vapour) * _WATER_MASS / _GRAMS
    heat = book["vaporisation at 0 degC"] - book["vaporisation slope"] * book["temperature"]
    return page.entry(
        "evaporation",
        -(water * heat / _SECONDS),
        "kW",
        Kind.FORMULA,
        "dry gas that leaves x pw / (p - pw) x heat of vaporisation, taken off",
        key="evaporation",
    )


def _combustion(page: Page, setting: Setting, amounts: Amounts, checks: list[Check]) -> Live | None:
    """Heat of the cells [kJ/mol basis]; ``None`` where a heat of combustion is not known."""
    known = {item.name: heat_of_compound(item) for item in setting.closing.order}
    unknown = [name for name, heat in known.items() if heat is None]
    page.heading("Heats of combustion")
    missing = [name for name in unknown if amounts.overall[name].number]
    if missing:
        page.note(f"Not known of {', '.join(missing)}, so no heat is told.")
        return None
    page.header("", "kJ/mol", "", "what it is", "", "source")
    heats = []
    for name, heat in known.items():
        page.write(1, name)
        page.write(4, str(Kind.CONSTANT), pale=True)
        source = f"{heat.known.source}, {heat.known.status}" if heat is not None else "not known"
        value = heat.value if heat is not None else 0
        heats.append(page.write(2, value, kind=Kind.CONSTANT, shown="General"))
        page.write(6, source, wrap=True)
        page.book.sources[f"heat of combustion of {name}", source] = None
        page.row += 1
    if unknown:
        checks.append(
            Check(
                name="every heat of combustion is known",
                holds=all_of([amounts.overall[name].same_as(0) for name in unknown]),
                way_out=f"That of {', '.join(unknown)} is not.",
            )
        )
    return -sum_of_products(list(amounts.overall.values()), heats)
