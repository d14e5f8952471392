"""The sheet ``cost``: raw materials per kg product and the break-even yield, as live numbers.

In: prices, streams, equations of the phases, protons. Out: the formulas of ``plant.cost``. A price
that is missing leaves its cost out, as the sheet says; without any price there is no cost.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.report.workbook_inputs import Check
from yieldnet.report.workbook_live import (
    Live,
    all_of,
    at_least_zero,
    count_of,
    if_then,
    is_number,
    live,
    sum_of,
)
from yieldnet.report.workbook_page import Kind

if TYPE_CHECKING:
    from collections.abc import Sequence
    from fractions import Fraction

    from yieldnet.report.workbook_base import Protons
    from yieldnet.report.workbook_coefficients import Amounts
    from yieldnet.report.workbook_inputs import Setting
    from yieldnet.report.workbook_page import Book, Page
    from yieldnet.report.workbook_streams import Bought

__all__ = ["add_cost"]

_NONE = "none"
_GRAMS = 1000
_LOW, _HIGH = "raw materials, low", "raw materials, high"


def add_cost(
    book: Book,
    setting: Setting,
    amounts: Amounts,
    protons: Protons | None,
    bought: Sequence[Bought],
    checks: list[Check],
) -> None:
    """The sheet ``cost``.

    Parameters
    ----------
    book : Book
        Receives the sheet and its names.
    setting : Setting
        What the workbook is made from.
    amounts : Amounts
        The equations.
    protons : Protons or None
        Protons and base.
    bought : sequence of Bought
        What may have a price.
    checks : list of Check
        Receives what must hold.
    """
    plant = setting.plant
    # Water, oxygen and carbon dioxide have no cell for a price where the case gives none.
    bought = [item for item in bought if f"price of {item.price}" in book]
    currency = plant.prices[0].currency if plant.prices else "money"
    page = book.page(
        "cost",
        (36, 13, 16, 22, 50, 16),
        "Raw materials alone: water, air, minerals, energy, labour, capital and what the downstream"
        " steps use are left out. Prices stand on the sheet 'inputs'.",
    )
    unit = f"{currency}/kg"
    prices = [book[f"price of {name}"] for name in dict.fromkeys(item.price for item in bought)]
    any_price = count_of(prices).above(0)
    _parts(page, bought, currency, prices)
    line = _line(page, setting, amounts, protons, currency)
    page.heading("Cost and break-even")
    page.list_header()

    def add(name: str, value: Live, of: str, how: str) -> Live:
        return page.entry(name, value, of, Kind.FORMULA, how, key=name)

    made = amounts.production[plant.product]
    add(
        "raw materials",
        if_then(any_price, line.per_kg(made), _NONE),
        unit,
        "sum of the costs: (a (1 - w g) / y + b w + c) / kg sold, y the yield of production",
    )
    for name, label, words in (
        (_LOW, "better end of the yield", "at the better end of the bands of the yields"),
        (_HIGH, "worse end of the yield", "at the worse end of the bands of the yields"),
    ):
        end = _end(setting, name)
        if end is None:
            add(name, live(_NONE), unit, f"no yield is known {words}")
            continue
        cell = page.entry(
            label,
            end,
            "mol/mol",
            Kind.PREDICTED,
            f"yield of production {words}; it stays when yields are changed",
            key=label,
        )
        add(name, if_then(any_price, line.per_kg(cell), _NONE), unit, f"the same, {words}")
    price = book[f"price of {plant.product}"]
    left = price * line.sold - line.fixed
    told = all_of([is_number(price), any_price, left.above(0)])
    even = add(
        "break-even yield",
        if_then(told, line.by_substrate / left, _NONE),
        "mol/mol",
        "a (1 - w g) / (price x kg sold per mol in the broth - b w - c)",
    )
    ratio = (
        book[f"molar mass of {plant.product}"] / book[f"molar mass of {setting.case.basis.name}"]
    )
    add(
        "break-even yield by mass",
        if_then(is_number(even), even * ratio, _NONE),
        "g/g",
        "break-even yield x molar mass of the product / that of the substrate",
    )
    add(
        "product less raw materials",
        if_then(is_number(price), price - line.per_kg(made), _NONE),
        unit,
        "price of the product - raw materials",
    )
    checks.append(
        Check(
            name="every price is given",
            holds=all_of([is_number(cell) for cell in (*prices, price)]),
            way_out="The cost leaves out what has no price: fill it in on this sheet.",
        )
    )


def _end(setting: Setting, name: str) -> Fraction | float | None:
    """Yield of production at an end of the bands, as the plant sheet found it [mol/mol]."""
    assert setting.sheet is not None
    for item in setting.sheet.figures:
        if item.name == name and item.value is not None:
            return item.inputs[0].value
    return None


def _parts(page: Page, bought: Sequence[Bought], currency: str, prices: list[Live]) -> None:
    """Cost of every raw material, with its share and a chart."""
    book = page.book
    page.heading("Raw materials")
    page.header(
        "", f"{currency}/kg product", "share of the cost, %", f"thousand {currency}/y", "how it"
        " follows"
    )  # fmt: skip
    first = page.row
    costs: list[Live] = []
    for item in bought:
        price = book[f"price of {item.price}"]
        page.write(1, item.name)
        costs.append(page.write(2, item.kg_per_h * price / book["product sold"]))
        page.write(4, item.kg_per_h * price * book["on-stream"] / _GRAMS, shown="#,##0")
        page.write(5, f"pure mass x price of {item.price} / product sold")
        book.define(f"{item.name}, cost", costs[-1])
        page.row += 1
    page.write(1, "sum", bold=True)
    page.write(2, sum_of(costs))
    for k, cost in enumerate(costs):
        whole = sum_of(costs)
        share = if_then(whole.above(0), cost / whole * 100, 0)
        page.write(3, share, row=first + k, shown="0.0")
    page.row += 1
    page.note("A raw material without a price counts as nothing here.")
    page.bars(f"Raw materials, {currency} per kg product", first, first + len(costs) - 1)


class _Line:
    """Cost of raw materials as a function of the yield of production."""

    def __init__(self, by_substrate: Live, fixed: Live, sold: Live) -> None:
        self.by_substrate = by_substrate
        self.fixed = fixed
        self.sold = sold

    def per_kg(self, yielded: Live) -> Live:
        """Cost per kg product sold."""
        return (self.by_substrate / yielded + self.fixed) / self.sold


def _line(
    page: Page, setting: Setting, amounts: Amounts, protons: Protons | None, currency: str
) -> _Line:
    """What falls with the yield, and what does not."""
    book, product = page.book, setting.plant.product
    base = setting.base
    page.heading("Cost as a function of the yield")
    page.list_header()

    def add(name: str, value: Live, unit: str, how: str) -> Live:
        return page.entry(name, value, unit, Kind.FORMULA, how, key=name)

    each: Live = live(0)
    if protons is not None and product in protons.each:
        each = add(
            "protons per mol product", protons.each[product], "mol/mol", "at the pH of the broth"
        )
    per_proton: Live = live(0)
    if protons is not None and base is not None:
        per_proton = add(
            "cost of base per proton",
            book[f"price of {base.name}"]
            * float(base.formula.molar_mass)
            / _GRAMS
            / book["protons taken up by one mol of base"],
            f"{currency}/mol",
            f"price x molar mass {float(base.formula.molar_mass):g} g/mol / protons taken up",
        )

    def cost(equation: dict[str, Live], phase: str) -> Live:
        """What one mol substrate uses, base for the product left out."""
        total: Live = live(0)
        for item in setting.case.compounds:
            feed = setting.feeds.get(item.name)
            key = f"price of {feed.name if feed is not None else item.name}"
            if key not in book:
                continue
            formula = feed.formula if feed is not None else item.formula
            kilograms = at_least_zero(-equation[item.name]) * (float(formula.molar_mass) / _GRAMS)
            total = total + kilograms * book[key]
        if protons is not None:
            own = at_least_zero(equation[product]) * each
            total = total + (protons.phases[phase] - own) * per_proton
        return total

    words = "cost of what one mol substrate uses, base for the protons of the product left out"
    a = add("a", cost(amounts.production, "production"), f"{currency}/mol", f"production: {words}")
    sold = add(
        "kg sold per mol in the broth",
        book[f"molar mass of {product}"] / _GRAMS * book["recovery"],
        "kg/mol",
        "molar mass x recovery",
    )
    c = add("c", each * per_proton, f"{currency}/mol", "base for the protons of one mol product")
    if not amounts.growth:
        return _Line(a, c, sold)
    b = add("b", cost(amounts.growth, "growth"), f"{currency}/mol", f"growth: {words}")
    of_growth, of_production = book["substrate of growth"], book["substrate of production"]
    made, grown = amounts.production[product], amounts.growth[product]
    w = add(
        "w",
        of_growth / (of_production * made + of_growth * grown),
        "mol/mol",
        "substrate of growth per mol product",
    )
    return _Line(
        add("a (1 - w g)", a * (1 - w * grown), f"{currency}/mol", "g: product per mol substrate"
            " of growth"),
        add("b w + c", b * w + c, f"{currency}/mol", "what does not fall with the yield"),
        sold,
    )  # fmt: skip
