"""The sheet ``inputs``: what the case says, prices, constants, and checks at its end.

In: a case with its plant. Out: named cells that every other sheet is made from.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry import vapour
from yieldnet.chemistry.bases import base_named
from yieldnet.chemistry.thermochemistry import CALORIMETRIC_OXYGEN_HEAT, TEXTBOOK_OXYGEN_HEAT
from yieldnet.foundation.findings import Findings
from yieldnet.model.network import BIOMASS, Direction
from yieldnet.plant import constants
from yieldnet.plant.base import feeds_of
from yieldnet.plant.equation import growth_case, settled_equation
from yieldnet.report.workbook_closing import closing_of
from yieldnet.report.workbook_live import all_of, if_then
from yieldnet.report.workbook_page import Kind

if TYPE_CHECKING:
    from yieldnet.chemistry.bases import Base, NitrogenFeed
    from yieldnet.foundation.sourced import SourcedValue
    from yieldnet.model.case import Case
    from yieldnet.model.plant import Plant, Stated
    from yieldnet.plant.sheet import PlantSheet
    from yieldnet.prediction.result import Prediction
    from yieldnet.report.workbook_closing import Closing
    from yieldnet.report.workbook_live import Live
    from yieldnet.report.workbook_page import Book, Page

__all__ = ["BANNER_OFF", "BANNER_ON", "Check", "Setting", "add_checks", "add_inputs", "setting_of"]

BANNER_ON = "All checks hold."
BANNER_OFF = "Not all checks hold: see 'Checks' at the end of the sheet 'inputs'."
_YES, _NO = "yes", "no"
_TONS = 1000
_OXYGEN = "oxygen"
_FREE = ("water", "oxygen", "carbon dioxide")
"""What is bought only where the case gives it a price."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Setting:
    """What a workbook is made from.

    Parameters
    ----------
    case : Case
        The question.
    prediction : Prediction
        Its answer.
    sheet : PlantSheet or None
        Its plant.
    production, growth : dict of str to Fraction
        Settled equations, production positive; empty if there is none [mol/mol basis].
    feeds : dict of str to NitrogenFeed
        Form in which each nitrogen source is fed.
    base : Base or None
        What holds the pH.
    closing : Closing
        Which yields follow the others.
    """

    case: Case
    prediction: Prediction
    sheet: PlantSheet | None
    production: dict[str, Fraction]
    growth: dict[str, Fraction]
    feeds: dict[str, NitrogenFeed]
    base: Base | None
    closing: Closing

    @property
    def plant(self) -> Plant:
        """The section ``plant``; only where there is a plant sheet."""
        assert self.sheet is not None
        return self.sheet.plant

    @property
    def aerated(self) -> bool:
        """Whether the equation lists oxygen."""
        return any(item.name == _OXYGEN for item in self.case.compounds)

    @property
    def elements(self) -> tuple[str, ...]:
        """Elements of all compounds, bases and feeds, in the order of the case."""
        formulas = [item.formula for item in self.case.compounds]
        if self.base is not None:
            formulas += [self.base.formula, self.base.cation]
        for feed in self.feeds.values():
            formulas += [feed.formula] + ([feed.counter_ion] if feed.counter_ion else [])
        return tuple(dict.fromkeys(symbol for item in formulas for symbol, _ in item.elements))


@dataclass(frozen=True, slots=True, kw_only=True)
class Check:
    """Something that must hold for the figures to mean anything.

    Parameters
    ----------
    name : str
        What must hold.
    holds : Live
        Whether it does.
    way_out : str
        What to do if not.
    """

    name: str
    holds: Live
    way_out: str


def setting_of(prediction: Prediction, sheet: PlantSheet | None) -> Setting:
    """What a workbook is made from.

    Parameters
    ----------
    prediction : Prediction
        The answer.
    sheet : PlantSheet or None
        Its plant, made of the same prediction.

    Returns
    -------
    Setting
        The parts.
    """
    case = prediction.case
    if sheet is None:
        settled = {}
        for term in prediction.terms:
            if term.range.single and term.range.low is not None:
                sign = -1 if term.side == "consumed" else 1
                settled[term.compound] = sign * term.range.low
        return Setting(
            case=case,
            prediction=prediction,
            sheet=None,
            production=settled,
            growth={},
            feeds={},
            base=None,
            closing=closing_of(case),
        )
    # What is doubtful about the equations was found when the plant was made.
    growth = {}
    if sheet.growth is not None:
        growth = dict(settled_equation(growth_case(case), sheet.growth, Findings()))
    plant = sheet.plant
    return Setting(
        case=case,
        prediction=sheet.prediction,
        sheet=sheet,
        production=dict(settled_equation(case, sheet.prediction, Findings())),
        growth=growth,
        feeds=feeds_of(case, plant),
        base=base_named(plant.base) if plant.base and plant.ph is not None else None,
        closing=closing_of(case, plant.product),
    )


def add_inputs(book: Book, setting: Setting) -> Page:
    """The sheet ``inputs``, without its checks.

    Parameters
    ----------
    book : Book
        Receives the sheet and its names.
    setting : Setting
        What the workbook is made from.

    Returns
    -------
    Page
        The sheet.
    """
    page = book.page(
        "inputs",
        (36, 12, 12, 22, 36, 50),
        "Change yellow cells: all sheets follow. Blue cells are answers of the linear problem, grey"
        " ones constants.",
    )
    _case(page, setting)
    if setting.sheet is not None:
        _plant(page, setting)
        _prices(page, setting)
        _constants(page, setting)
    return page


def _case(page: Page, setting: Setting) -> None:
    case = setting.case
    page.heading("Case")
    rows = [
        ("case", case.title),
        ("file", case.file),
        ("overall equation", str(case.equation)),
        ("basis", f"1 mol {case.basis.name}"),
        ("aim", str(case.aim) if case.aim is not None else "none"),
        ("network", case.network.title if case.network is not None else "none: elements alone"),
        ("strain", case.strain.name if case.strain is not None else ""),
        ("knock-outs", ", ".join(item.name for item in case.knock_outs)),
        ("parameter set", case.parameter_set.name if case.parameter_set is not None else ""),
        ("either side", ", ".join(n.name for n in case.coefficients if n.side == "either")),
        ("status", str(setting.prediction.outcome)),
    ]
    if setting.sheet is not None:
        rows.append(("product", setting.plant.product))
        if setting.base is not None:
            rows.append(("base", setting.base.name))
        rows += [(f"{name} is fed as", feed.name) for name, feed in setting.feeds.items()]
    for name, text in rows:
        if text:
            page.write(1, name)
            page.write(2, text)
            page.row += 1


def _source(item: Stated) -> str:
    place = f", line {item.span.line}" if item.span is not None else ""
    return f"case{place}: {item.text}"


def _plant(page: Page, setting: Setting) -> None:
    plant = setting.plant
    page.heading("Plant")
    page.list_header()

    def stated(name: str, item: Stated | None, unit: str, how: str = "") -> None:
        if item is not None:
            page.entry(name, item.value, unit, Kind.YOURS, how, _source(item), key=name)

    def usual(name: str, known: SourcedValue) -> None:
        page.entry(
            name, known.value, known.unit, Kind.YOURS, "not in the case", known.source, key=name
        )

    output = plant.output
    page.entry(
        "output",
        output.value / _TONS,
        "t/y",
        Kind.YOURS,
        f"{plant.product} sold",
        _source(output),
        key="output",
    )
    stated("on-stream", plant.on_stream, "h/y", "hours of work in a year")
    for item in plant.recovery:
        stated(f"recovery of {item.name}", item, "-", "product kept by this step")
    for item in plant.purities:
        stated(f"purity of {item.name}", item, "g/g", "pure compound per feedstock")
    stated("titre", plant.titre, "kg/m3", f"{plant.product} in the broth, as free acid")
    stated("productivity", plant.productivity, "kg/m3/h", "with phases, of production")
    phases = plant.phases
    if phases is not None:
        stated("time of growth", phases.growth, "h")
        if plant.productivity is None:
            stated("time of production", phases.production, "h")
        stated("turnaround", phases.turnaround, "h")
        stated("inoculum", phases.inoculum, "-", "volume of the seed over that of the vessel")
        stated("cells at the end of growth", phases.cells, "kg/m3")
        uptake = setting.case.substrate_uptake
        if phases.cells is None and uptake is not None:
            page.entry(
                "substrate uptake",
                uptake.value,
                "mol/g/h",
                Kind.YOURS,
                "of the cells in production",
                "case, conditions",
                key="substrate uptake",
            )
    stated("pH of the broth", plant.ph if setting.base is not None else None, "-")
    if plant.temperature is not None:
        stated("temperature", plant.temperature, "degC")
    elif setting.case.temperature is not None:
        page.entry(
            "temperature",
            setting.case.temperature.value,
            "degC",
            Kind.YOURS,
            "of the broth",
            "case, conditions",
            key="temperature",
        )
    aeration = plant.aeration
    if setting.aerated:
        if aeration is not None and aeration.pressure is not None:
            stated("pressure", aeration.pressure, "bar", "absolute, in the vessel")
        else:
            usual("pressure", constants.ATMOSPHERE)
        if aeration is not None and aeration.dissolved_oxygen is not None:
            stated("dissolved oxygen", aeration.dissolved_oxygen, "-", "over saturation with air")
        else:
            page.entry(
                "dissolved oxygen",
                Fraction(0),
                "-",
                Kind.YOURS,
                "over saturation with air; not in the case, so none",
                key="dissolved oxygen",
            )
    if aeration is not None:
        stated("vvm", aeration.vvm, "1/min", "dry air at 0 degC and 1.01325 bar over broth")
        stated("kLa of the vessel", aeration.kla, "1/h")
    stated("power of the stirrer", plant.stirrer, "kW/m3")
    stated("volume of one vessel", plant.vessel, "m3")
    if plant.vessel is not None:
        if plant.fill is not None:
            stated("fill", plant.fill, "-", "broth over volume of a vessel")
        else:
            usual("fill", constants.USUAL_FILL)


def _prices(page: Page, setting: Setting) -> None:
    """Prices of what is bought and of the product; those that are missing may be filled in."""
    plant = setting.plant
    currency = plant.prices[0].currency if plant.prices else "money"
    page.heading("Prices")
    page.list_header()
    names = [item.name for item in plant.prices]
    for item in setting.case.compounds:
        side = setting.case.coefficient(item.name)
        feed = setting.feeds.get(item.name)
        name = feed.name if feed is not None else item.name
        taken_up = side is None or side.side is not Direction.PRODUCED
        if taken_up and name not in (*_FREE, BIOMASS):
            names.append(name)
    if setting.base is not None:
        names.append(setting.base.name)
    names.append(plant.product)
    for name in dict.fromkeys(names):
        price = plant.price(name)
        source = ""
        if price is not None:
            source = "case" + (f", line {price.span.line}" if price.span is not None else "")
        page.entry(
            f"price of {name}",
            None if price is None else price.value,
            f"{currency}/kg",
            Kind.YOURS,
            "pure" if price is not None else "not in the case: the cost leaves it out while empty",
            source,
            key=f"price of {name}",
        )


def _constants(page: Page, setting: Setting) -> None:
    page.heading("Constants")
    page.list_header()

    def constant(name: str, value: Fraction | float, unit: str, source: str) -> None:
        page.entry(name, value, unit, Kind.CONSTANT, "", source, key=name)

    def known(name: str, item: SourcedValue) -> None:
        constant(name, item.value, item.unit, item.source)

    base = setting.base
    if base is not None:
        reaction = f"reaction of {base.name}"
        constant("protons taken up by one mol of base", base.equivalents, "mol/mol", reaction)
        constant("cations of one mol of base", base.cations, "mol/mol", reaction)
        constant("water made by one mol of base", base.water, "mol/mol", reaction)
        constant("carbon dioxide made by one mol of base", base.carbon_dioxide, "mol/mol", reaction)
        constant("heat per proton", base.heat, "kJ/mol", f"{base.source}, {base.status}")
    if setting.plant.phases is not None and setting.plant.phases.inoculum is not None:
        known("flask", constants.SMALLEST_SEED)
    if not setting.aerated:
        return
    known("oxygen in air", constants.OXYGEN_IN_AIR)
    known("molar mass of air", constants.AIR_MASS)
    known("molar volume of gas", constants.MOLAR_VOLUME)
    known("Henry constant", constants.HENRY_CONSTANT)
    known("Henry slope", constants.HENRY_TEMPERATURE)
    known("Henry reference", constants.HENRY_REFERENCE)
    known("ice point", vapour.ICE_POINT)
    known("Magnus pressure", vapour.MAGNUS_PRESSURE)
    known("Magnus factor", vapour.MAGNUS_FACTOR)
    known("Magnus temperature", vapour.MAGNUS_TEMPERATURE)
    known("vaporisation at 0 degC", constants.VAPORISATION)
    known("vaporisation slope", constants.VAPORISATION_SLOPE)
    constant("heat per oxygen, 440", CALORIMETRIC_OXYGEN_HEAT, "kJ/mol", "Birou, Marison, von"
             " Stockar 1987")  # fmt: skip
    constant("heat per oxygen, 460", TEXTBOOK_OXYGEN_HEAT, "kJ/mol", "textbook value, four"
             " electrons of 115 kJ")  # fmt: skip
    known("usual reach of oxygen uptake", constants.HIGHEST_UPTAKE)
    known("usual reach of kLa", constants.HIGHEST_KLA)


def add_checks(page: Page, checks: list[Check]) -> Live:
    """The checks, and the line that stands on every sheet.

    Parameters
    ----------
    page : Page
        The sheet ``inputs``.
    checks : list of Check
        What must hold.

    Returns
    -------
    Live
        The line.
    """
    from openpyxl.formatting.rule import CellIsRule
    from openpyxl.styles import Font, PatternFill

    page.heading("Checks")
    page.header("what must hold", "holds", "", "", "way out", "")
    cells = []
    for item in checks:
        page.write(1, item.name)
        cells.append(page.write(2, if_then(item.holds, _YES, _NO)))
        page.write(5, item.way_out, wrap=True)
        page.row += 1
    page.write(1, "all checks", bold=True)
    every = all_of([cell.same_as(_YES) for cell in cells])
    whole = page.book.define("all checks", page.write(2, if_then(every, _YES, _NO), bold=True))
    first = cells[0].place
    assert first is not None
    assert whole.place is not None
    page.sheet.conditional_formatting.add(
        f"B{first.row}:B{whole.place.row}",
        CellIsRule(  # type: ignore[no-untyped-call]
            operator="equal",
            formula=[f'"{_NO}"'],
            fill=PatternFill("solid", bgColor="F8CBAD"),
            font=Font(bold=True, color="9C0006"),
        ),
    )
    page.row += 1
    return if_then(whole.same_as(_YES), BANNER_ON, BANNER_OFF)
