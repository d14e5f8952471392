"""Vessels as live numbers on the sheet ``oxygen and heat``.

In: size, titre, productivity, phases. Out: volume of broth, cycle, number of vessels, seed vessels.
The formulas are those of ``plant.vessels``.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.report.workbook_inputs import Check
from yieldnet.report.workbook_live import Live, if_then, live, logarithm, rounded_up
from yieldnet.report.workbook_page import Kind

if TYPE_CHECKING:
    from yieldnet.report.workbook_inputs import Setting
    from yieldnet.report.workbook_page import Page

__all__ = ["add_vessels", "production_rate"]

_MORE_SEEDS = 2
_MOST_SEEDS = 10
_NONE = "none"


def production_rate(page: Page) -> Live | None:
    """Product per volume and time of the production phase [kg/m3/h]; ``None`` if not known."""
    book = page.book
    if "productivity" in book:
        return book["productivity"]
    if "time of production" in book and "titre" in book:
        return book["titre"] / book["time of production"]
    return None


def add_vessels(page: Page, setting: Setting, checks: list[Check]) -> None:
    """Volume, number and seed of the vessels.

    Parameters
    ----------
    page : Page
        The sheet ``oxygen and heat``.
    setting : Setting
        What the workbook is made from.
    checks : list of Check
        Receives what must hold.
    """
    book, phases = page.book, setting.plant.phases
    rate = production_rate(page)
    inoculum = phases is not None and phases.inoculum is not None
    if rate is None and "titre" not in book and not inoculum:
        return
    page.heading("Vessels")
    page.list_header()

    def add(name: str, value: Live, unit: str, how: str) -> Live:
        return page.entry(name, value, unit, Kind.FORMULA, how, key=name)

    if "titre" in book:
        how = "product in the broth / titre"
        add("broth harvested", book["product in the broth"] / book["titre"], "m3/h", how)
    volume: Live | None = None
    if phases is not None:
        if rate is not None and "titre" in book:
            volume = _cycle(page, rate)
    elif rate is not None:
        volume = add(
            "broth in all vessels",
            book["product in the broth"] / rate,
            "m3",
            "product in the broth / productivity",
        )
    if volume is not None and "volume of one vessel" in book:
        number = page.entry(
            "vessels",
            rounded_up(volume / (book["volume of one vessel"] * book["fill"])),
            "-",
            Kind.FORMULA,
            "broth in all vessels / (volume of one x fill), rounded up",
            key="vessels",
            shown="0",
        )
        if inoculum:
            _seeds(page, volume / number, checks)
    if inoculum and book["inoculum"].number < 1:
        add(
            "growth rate that growth needs",
            logarithm(1 / book["inoculum"]) / book["time of growth"],
            "1/h",
            "ln(1 / inoculum) / time of growth: from the cells of the seed to those of the vessel",
        )


def _cycle(page: Page, rate: Live) -> Live:
    """Volume of broth of plants with phases [m3]."""
    book = page.book

    def add(name: str, value: Live, unit: str, how: str) -> Live:
        return page.entry(name, value, unit, Kind.FORMULA, how, key=name)

    titre = book["titre"]
    if "time of production" in book:
        production = book["time of production"]
    else:
        how = "titre / productivity of the production phase"
        production = add("time of production", titre / rate, "h", how)
    turnaround = book["turnaround"] if "turnaround" in book else live(0)
    cycle = add(
        "cycle",
        book["time of growth"] + production + turnaround,
        "h",
        "growth + production + turnaround",
    )
    volume = add(
        "broth in all vessels",
        book["product in the broth"] / titre * cycle,
        "m3",
        "product in the broth / titre x cycle",
    )
    add("productivity over the cycle", titre / cycle, "kg/m3/h", "titre / cycle")
    add(
        "share of the time",
        (cycle - turnaround) / cycle,
        "-",
        "in which a vessel runs rather than being turned round",
    )
    return volume


def _seeds(page: Page, broth: Live, checks: list[Check]) -> None:
    """Seed vessels before one vessel, largest first, down to a flask."""
    book = page.book
    seeds: list[Live] = []
    seed = broth.number * book["inoculum"].number
    needed = 0
    while seed >= book["flask"].number and needed < _MOST_SEEDS:
        seed *= book["inoculum"].number
        needed += 1
    for step in range(1, min(needed + _MORE_SEEDS, _MOST_SEEDS) + 1):
        volume = broth
        for _ in range(step):
            volume = volume * book["inoculum"]
        name = f"seed {step}, broth"
        seeds.append(
            page.entry(
                name,
                if_then(volume.below(book["flask"]), _NONE, volume),
                "m3",
                Kind.FORMULA,
                "broth in one vessel x inoculum^step, down to a flask",
                key=name,
            )
        )
    if len(seeds) < _MOST_SEEDS:
        checks.append(
            Check(
                name="the list of seed vessels goes down to a flask",
                holds=seeds[-1].same_as(_NONE),
                way_out="More steps are needed than are listed: make the workbook again.",
            )
        )
