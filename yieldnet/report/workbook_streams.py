"""The sheet ``streams``: what enters and leaves, ions of the broth, balances, as live numbers.

In: amounts, size, protons. Out: a cell for every stream and every balance. The formulas are those
of ``plant.streams``; a stream that nothing flows in shows 0, since a changed yield may open it.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.formula import Formula
from yieldnet.chemistry.library import find_compound
from yieldnet.model.network import BIOMASS, Direction
from yieldnet.plant.streams import CLOSES
from yieldnet.report.workbook_inputs import Check
from yieldnet.report.workbook_live import (
    Live,
    all_of,
    any_of,
    at_least_zero,
    if_then,
    largest,
    live,
    magnitude,
    sum_of,
    sum_of_products,
)
from yieldnet.report.workbook_page import Kind

if TYPE_CHECKING:
    from yieldnet.report.workbook_base import Protons
    from yieldnet.report.workbook_coefficients import Amounts, Compounds
    from yieldnet.report.workbook_inputs import Setting
    from yieldnet.report.workbook_page import Page

__all__ = ["Bought", "add_streams", "passing_air"]

_GRAMS = 1000
_ATOMS = 7
_COUNTS = 'General;-General;"–"'
_FLOW = '#,##0.0;-#,##0.0;"–"'
_SMALL_FLOW = '0.00;-0.00;"–"'
_WATER = Formula.of({"H": Fraction(2), "O": Fraction(1)})
_CARBON_DIOXIDE = Formula.of({"C": Fraction(1), "O": Fraction(2)})
_OXYGEN = Formula.of({"O": Fraction(2)})
_IONS = "ions of base and feed, less the protons they replace"


@dataclass(frozen=True, slots=True, kw_only=True)
class Bought:
    """A stream that enters and may have a price.

    Parameters
    ----------
    name : str
        Of the stream.
    price : str
        Of what is bought.
    kg_per_h : Live
        Pure mass [kg/h].
    """

    name: str
    price: str
    kg_per_h: Live


def passing_air(page: Page, setting: Setting) -> Live | None:
    """Dry air blown in, as a mean over the time on stream [mol/h]; ``None`` if it is not known."""
    book = page.book
    if "vvm" not in book or "broth in all vessels" not in book or not setting.aerated:
        return None
    running = book["share of the time"] if "share of the time" in book else live(1)
    return page.entry(
        "dry air blown in",
        book["vvm"] * 60 / book["molar volume of gas"] * book["broth in all vessels"] * running,
        "mol/h",
        Kind.FORMULA,
        "vvm x 60 / molar volume x broth in all vessels x share of the time that they run",
        key="dry air blown in",
    )


class _Table:
    """Streams of one side, and what they hold of each element."""

    def __init__(self, page: Page, compounds: Compounds, side: str) -> None:
        self.page = page
        self.compounds = compounds
        self.side = side
        self.moles: list[Live] = []
        self.kilograms: list[Live] = []
        self.tons: list[Live] = []
        self.atoms: dict[str, list[Live]] = {symbol: [] for symbol in compounds.elements}
        page.heading(side.capitalize())
        page.header("", "kg/h", "t/y", "mol/h", "g/mol", "formula", *compounds.elements,
                    "how it follows")  # fmt: skip

    def formula(self, name: str, moles: Live, formula: Formula, how: str) -> Live:
        """A stream of one formula; gives its mass [kg/h]."""
        counts = {symbol: live(formula[symbol]) for symbol in self.compounds.elements}
        return self.add(name, moles, counts, how, str(formula))

    def add(
        self, name: str, moles: Live, counts: dict[str, Live], how: str, formula: str = ""
    ) -> Live:
        """A stream with its atoms per mol; gives its mass [kg/h]."""
        page, kind = self.page, Kind.CONSTANT if formula else None
        row = []
        for k, symbol in enumerate(self.compounds.elements):
            value = counts[symbol]
            plain = value.number if formula else value
            cell = page.write(_ATOMS + k, plain, kind=kind, shown=_COUNTS if formula else "0.000")
            self.atoms[symbol].append(cell)
            row.append(cell)
        flow = page.write(4, moles, shown=_FLOW)
        mass = page.write(5, sum_of_products(row, self.compounds.weights), shown="0.000")
        page.write(6, formula or "per mol of substrate")
        self.moles.append(flow)
        return self._masses(name, flow * mass / _GRAMS, how)

    def mass(self, name: str, kilograms: Live, how: str) -> Live:
        """A stream without a formula; gives its mass [kg/h]."""
        for k, symbol in enumerate(self.compounds.elements):
            cell = self.page.write(_ATOMS + k, 0, shown=_COUNTS)
            self.atoms[symbol].append(cell)
        self.moles.append(self.page.write(4, 0, shown=_FLOW))
        return self._masses(name, kilograms, how)

    def _masses(self, name: str, kilograms: Live, how: str) -> Live:
        page = self.page
        page.write(1, name)
        small = abs(kilograms.number) < 10
        shown = _SMALL_FLOW if small else _FLOW
        found = page.write(2, kilograms, shown=shown)
        year = page.write(3, found * page.book["on-stream"] / _GRAMS, shown=shown)
        page.write(_ATOMS + len(self.compounds.elements), how, wrap=True)
        self.kilograms.append(found)
        self.tons.append(year)
        page.row += 1
        return page.book.define(f"{self.side} {name}", found)

    def total(self) -> Live:
        """The last row; gives all mass [kg/h]."""
        page = self.page
        page.write(1, "total", bold=True)
        found = page.write(2, sum_of(self.kilograms), shown=_FLOW)
        page.write(3, sum_of(self.tons), shown=_FLOW)
        page.row += 1
        return page.book.define(f"{self.side} in all", found)

    def element(self, symbol: str) -> Live:
        """What all streams hold of an element [mol/h]."""
        return sum_of_products(self.moles, self.atoms[symbol])


def _library_name(name: str) -> str:
    entry = find_compound(name)
    return entry.name if entry is not None else name


def _nets(
    setting: Setting, amounts: Amounts, protons: Protons | None
) -> tuple[dict[str, Live], dict[str, Live]]:
    """What is made of every compound with what the base makes of it, and what is left of that."""
    extra: dict[str, Live] = {}
    base = setting.base
    if protons is not None and base is not None:
        if base.water:
            extra["water"] = protons.base * base.water
        if base.carbon_dioxide:
            extra["carbon dioxide"] = protons.base * base.carbon_dioxide
    nets = {}
    for item in setting.case.compounds:
        made = amounts.overall[item.name]
        more = extra.pop(_library_name(item.name), None)
        nets[item.name] = made if more is None else made + more
    return nets, extra


def add_streams(
    page: Page,
    setting: Setting,
    compounds: Compounds,
    amounts: Amounts,
    protons: Protons | None,
    air: Live | None,
    checks: list[Check],
) -> tuple[Bought, ...]:
    """Streams, ions and balances.

    Parameters
    ----------
    page : Page
        The sheet ``streams``.
    setting : Setting
        What the workbook is made from.
    compounds : Compounds
        Cells of the sheet ``compounds``.
    amounts : Amounts
        The equations.
    protons : Protons or None
        Protons and base.
    air : Live or None
        Dry air blown in [mol/h].
    checks : list of Check
        Receives what must hold.

    Returns
    -------
    tuple of Bought
        What may have a price.
    """
    basis = page.book["substrate used"]
    nets, extra = _nets(setting, amounts, protons)
    enters = _Table(page, compounds, "enters")
    bought, impurities = _entering(enters, setting, nets, protons)
    ash = _ash(setting, page, amounts)
    if ash is not None:
        ash_mass = enters.mass("minerals", ash * basis / _GRAMS, "as much as leaves as ash")
    rest = _rest_of_air(page, setting, amounts, air)
    if rest is not None:
        rest_mass = enters.mass("rest of the air", rest, "dry air blown in less the oxygen used")
    all_in = enters.total()
    leaves = _Table(page, compounds, "leaves")
    _leaving(leaves, setting, amounts, nets, extra, protons)
    for name, mass in impurities:
        leaves.mass(name, mass, "leave as they came")
    if ash is not None:
        leaves.mass("ash of biomass", ash_mass, "dry weight of biomass x ash")
    if rest is not None:
        leaves.mass("rest of the air", rest_mass, "leaves as it came")
    all_out = leaves.total()
    charges = _ions(page, setting, compounds, protons)
    _balances(page, enters, leaves, (all_in, all_out), charges, checks)
    return bought


def _entering(
    table: _Table, setting: Setting, nets: dict[str, Live], protons: Protons | None
) -> tuple[tuple[Bought, ...], list[tuple[str, Live]]]:
    """What enters with a formula, and the impurities that come along."""
    book, plant = table.page.book, setting.plant
    basis = book["substrate used"]
    bought, impurities = [], []
    for item in setting.case.compounds:
        side = setting.case.coefficient(item.name)
        net = nets[item.name]
        given_off = side is not None and side.side is Direction.PRODUCED
        if item.name == BIOMASS or (given_off and net.number >= 0):
            continue
        feed = setting.feeds.get(item.name)
        formula = feed.formula if feed is not None else item.formula
        name = item.name if feed is None else feed.name
        note = " as carbon dioxide net of what is given off" if name == "carbon dioxide" else ""
        mass = table.formula(
            name,
            at_least_zero(-net) * basis,
            formula,
            f"amount in the equation x substrate used{note}",
        )
        bought.append(Bought(name=name, price=name, kg_per_h=mass))
        if plant.purity(item.name) is not None:
            label = f"impurities with {name}"
            purity = book[f"purity of {item.name}"]
            rule = "pure mass x (1 / purity - 1)"
            impurities.append((label, table.mass(label, mass * (1 / purity - 1), rule)))
    base = setting.base
    if protons is not None and base is not None:
        name = base.name + (", as base" if base.name in setting.feeds else "")
        rule = "protons given off / protons taken up by one mol of base"
        mass = table.formula(name, protons.base * basis, base.formula, rule)
        bought.append(Bought(name=name, price=base.name, kg_per_h=mass))
    return tuple(bought), impurities


def _ash(setting: Setting, page: Page, amounts: Amounts) -> Live | None:
    """Ash of the biomass made [g/mol basis]."""
    if setting.case.coefficient(BIOMASS) is None or not setting.case.compound(BIOMASS).ash:
        return None
    return (
        amounts.overall[BIOMASS]
        * page.book[f"molar mass of {BIOMASS}"]
        * page.book[f"ash of {BIOMASS}"]
    )


def _rest_of_air(page: Page, setting: Setting, amounts: Amounts, air: Live | None) -> Live | None:
    """Dry air that is not used as oxygen [kg/h]; 0 where there is not enough of it."""
    if air is None:
        return None
    names = [n.name for n in setting.case.compounds if _library_name(n.name) == "oxygen"]
    book = page.book
    used = -amounts.overall[names[0]] * book["substrate used"]
    rest = (air * book["molar mass of air"] - used * float(_OXYGEN.molar_mass)) / _GRAMS
    unknown = any_of([used.at_most(0), (air * book["oxygen in air"]).below(used)])
    return if_then(unknown, 0, rest)


def _leaving(
    table: _Table,
    setting: Setting,
    amounts: Amounts,
    nets: dict[str, Live],
    extra: dict[str, Live],
    protons: Protons | None,
) -> None:
    """What leaves with a formula."""
    book, plant = table.page.book, setting.plant
    basis, recovery = book["substrate used"], book["recovery"]
    product = setting.case.compound(plant.product)
    moles = amounts.overall[plant.product] * basis
    note = " without ash" if product.ash else ""
    for word, share, rule in (
        ("sold", recovery, "made x recovery of all downstream steps"),
        ("lost", 1 - recovery, "made x (1 - recovery)"),
    ):
        table.formula(f"{product.name}{note}, {word}", moles * share, product.formula, rule)
    for item in setting.case.compounds:
        side = setting.case.coefficient(item.name)
        net = nets[item.name]
        taken_up = side is None or side.side is Direction.CONSUMED
        if item.name == plant.product or (
            taken_up and net.number <= 0 and net is amounts.overall[item.name]
        ):
            continue
        name = f"{item.name}, net" if item.name in ("water", "carbon dioxide") else item.name
        if item.name == BIOMASS:
            name = "biomass without ash"
        rule = "amount in the equation x substrate used"
        table.formula(name, at_least_zero(net) * basis, item.formula, rule)
    formulas = {"water": _WATER, "carbon dioxide": _CARBON_DIOXIDE}
    for name, amount in extra.items():
        table.formula(f"{name}, of the base", amount * basis, formulas[name], "base used")
    base = setting.base
    if protons is None or base is None:
        return
    counts: dict[str, Live] = {}
    for _, formula, amount in _held(setting, protons):
        for symbol, count in formula.elements:
            more = amount * float(count)
            counts[symbol] = counts[symbol] + more if symbol in counts else more
    counts["H"] = counts.get("H", live(0)) - protons.of_acids
    table.add(
        _IONS,
        basis,
        {symbol: counts.get(symbol, live(0)) for symbol in table.compounds.elements},
        "cations and counter-ions left in the broth, since acids are told undissociated",
    )


def _held(setting: Setting, protons: Protons) -> list[tuple[str, Formula, Live]]:
    """Name, formula and amount of what base and nitrogen feed leave [mol/mol basis]."""
    base = setting.base
    assert base is not None
    found = [(base.name, base.cation, protons.base * base.cations)]
    for name, feed in setting.feeds.items():
        if feed.counter_ion is not None:
            found.append(
                (feed.name, feed.counter_ion, protons.taken[name] * float(feed.counter_ions))
            )
    return found


def _ions(
    page: Page, setting: Setting, compounds: Compounds, protons: Protons | None
) -> list[Live]:
    """Table of ions; gives the charge that each carries [mol/h]."""
    if protons is None:
        return []
    page.heading("Acids and their salt in the broth")
    page.note("Product before recovery; the streams above tell acids undissociated.")
    elements = compounds.elements
    page.header("", "kg/h", "t/y", "mol/h", "g/mol", "formula", *elements, "charge",
                "charge, mol/h")  # fmt: skip
    book = page.book
    listed = _held(setting, protons)
    listed += [
        (item.compound, item.formula, protons.taken[item.compound] * item.share)
        for item in protons.species
    ]
    charges = []
    for name, formula, amount in listed:
        page.write(1, f"{formula} of {name}")
        row = [
            page.write(_ATOMS + k, formula[symbol], kind=Kind.CONSTANT, shown=_COUNTS)
            for k, symbol in enumerate(elements)
        ]
        moles = page.write(4, amount * book["substrate used"], shown=_FLOW)
        mass = page.write(5, sum_of_products(row, compounds.weights), shown="0.000")
        page.write(6, str(formula))
        shown = _SMALL_FLOW if abs(moles.number * mass.number) < 10 * _GRAMS else _FLOW
        kilograms = page.write(2, moles * mass / _GRAMS, shown=shown)
        page.write(3, kilograms * book["on-stream"] / _GRAMS, shown=shown)
        book.define(f"in the broth {formula} of {name}", kilograms)
        own = page.write(
            _ATOMS + len(elements), formula.charge, kind=Kind.CONSTANT, shown="+0;-0;0"
        )
        charges.append(page.write(_ATOMS + len(elements) + 1, moles * own, shown=_FLOW))
        page.row += 1
    return charges


def _balances(
    page: Page,
    enters: _Table,
    leaves: _Table,
    masses: tuple[Live, Live],
    charges: list[Live],
    checks: list[Check],
) -> None:
    """Balance of every element, of charge and of mass."""
    page.heading("Balances")
    page.header("", "enters", "leaves", "unit", "difference / larger", "closes")
    conditions = []

    def add(of: str, first: Live, second: Live, unit: str) -> None:
        page.write(1, of)
        one = page.write(2, first, shown=_FLOW)
        other = page.write(3, second, shown=_FLOW)
        page.write(4, unit)
        size = largest([magnitude(one), magnitude(other)])
        off = page.write(
            5, if_then(size.above(0), magnitude(one - other) / size, 0), shown="0.0E+00"
        )
        holds = off.at_most(live(float(CLOSES)))
        page.write(6, if_then(holds, "yes", "no"))
        conditions.append(holds)
        page.row += 1

    for symbol in enters.compounds.elements:
        if any(cell.number for cell in (*enters.atoms[symbol], *leaves.atoms[symbol])):
            add(symbol, enters.element(symbol), leaves.element(symbol), "mol/h")
    if charges:
        positive = [at_least_zero(cell) for cell in charges]
        negative = [at_least_zero(-cell) for cell in charges]
        add("charge", _added(positive), _added(negative), "mol/h")
    add("mass", *masses, "kg/h")
    checks.append(
        Check(
            name="every stream closes in elements, charge and mass",
            holds=all_of(conditions),
            way_out="Change another yield until 'Balances' on the sheet 'streams' close.",
        )
    )


def _added(items: list[Live]) -> Live:
    found = items[0]
    for item in items[1:]:
        found = found + item
    return found
