"""Raw materials of a plant: what they cost per kg product, and the yield that breaks even.

In: prices as given, equations of the phases, protons. Out: cost at the best yield, at both ends of
the bands, and the break-even yield. No price is built in. Left out: water, air, minerals, energy,
labour, capital, and what the downstream steps use.

With y mol product per mol substrate in production, per mol product in the broth::

    cost(y) = a (1 - w g) / y + b w + c

a and b: cost of what one mol substrate of production and of growth uses, base for the protons of
the product left out; w: substrate of growth per mol product; g: product per mol substrate of
growth; c: base for the protons of one mol product. What is used per mol substrate is held while y
moves.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.findings import Findings, Severity
from yieldnet.plant.base import feeds_of
from yieldnet.plant.equation import product_mass
from yieldnet.plant.sheet import Figure, Input

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.model.case import Case
    from yieldnet.model.plant import Plant
    from yieldnet.plant.base import ProtonBalance
    from yieldnet.plant.equation import GrowthShare
    from yieldnet.plant.sheet import Stream

__all__ = ["SECTION", "CostLine", "Ends", "cost_figures", "cost_line"]

SECTION = "Raw materials"
"""Heading of these figures."""
_ZERO = Fraction(0)
_GRAMS = 1000
_FREE = ("water", "oxygen", "carbon dioxide")


@dataclass(frozen=True, slots=True, kw_only=True)
class Ends:
    """Best yield and its ends over the bands of the measured values.

    Parameters
    ----------
    best : Fraction
        At the reconciled point [mol/mol].
    better, worse : Fraction or None
        Over the bands [mol/mol]; ``None`` if not known.
    """

    best: Fraction
    better: Fraction | None
    worse: Fraction | None


@dataclass(frozen=True, slots=True, kw_only=True)
class CostLine:
    """Cost of raw materials as a function of the yield of production.

    Parameters
    ----------
    by_substrate : Fraction
        What falls with the yield, times the yield: a (1 - w g) [1/mol].
    fixed : Fraction
        What does not: b w + c [1/mol].
    sold : Fraction
        Product sold per mol in the broth [kg/mol].
    """

    by_substrate: Fraction
    fixed: Fraction
    sold: Fraction

    def per_kg(self, yielded: Fraction) -> Fraction:
        """Cost per kg product sold at a yield of production.

        Examples
        --------
        >>> line = CostLine(by_substrate=Fraction(2), fixed=Fraction(1), sold=Fraction(1, 10))
        >>> line.per_kg(Fraction(2))
        Fraction(20, 1)
        """
        return (self.by_substrate / yielded + self.fixed) / self.sold

    def break_even(self, price: Fraction) -> Fraction | None:
        """Yield of production at which raw materials cost as much as the product brings.

        Examples
        --------
        >>> line = CostLine(by_substrate=Fraction(2), fixed=Fraction(1), sold=Fraction(1, 10))
        >>> line.break_even(Fraction(20)), line.break_even(Fraction(10))
        (Fraction(2, 1), None)
        """
        left = price * self.sold - self.fixed
        return self.by_substrate / left if left > 0 else None


def cost_line(
    case: Case,
    plant: Plant,
    production: Mapping[str, Fraction],
    growth: Mapping[str, Fraction] | None,
    share: GrowthShare | None,
    protons: tuple[ProtonBalance | None, ProtonBalance | None],
) -> CostLine:
    """Cost of raw materials as a function of the yield of production.

    Parameters
    ----------
    case : Case
        The case.
    plant : Plant
        With prices.
    production, growth : mapping of str to Fraction
        Equations of the phases, production positive [mol/mol basis].
    share : GrowthShare or None
        How the phases share the substrate.
    protons : tuple of (ProtonBalance or None, ProtonBalance or None)
        Of production and of growth.

    Returns
    -------
    CostLine
        The line.
    """
    of_production, of_growth = protons
    base_price = _ZERO
    product_protons = _ZERO
    if of_production is not None:
        base = of_production.base
        found = plant.price(base.name)
        if found is not None:
            base_price = found.value * base.formula.molar_mass / _GRAMS / base.equivalents
        product_protons = sum(
            (item.each for item in of_production.terms if item.compound == plant.product), _ZERO
        )
    mass = product_mass(case, plant) / _GRAMS
    made = production[plant.product]

    def cost(amounts: Mapping[str, Fraction], balance: ProtonBalance | None) -> Fraction:
        """What one mol substrate uses, base for the product left out."""
        others = _ZERO
        if balance is not None:
            others = balance.protons - amounts[plant.product] * product_protons
        return _feeds_cost(case, plant, amounts) + others * base_price

    a = cost(production, of_production)
    fixed = product_protons * base_price
    if growth is None or share is None:
        by_substrate = a
    else:
        per_product = share.growth / (
            share.production * made + share.growth * growth[plant.product]
        )
        by_substrate = a * (1 - per_product * growth[plant.product])
        fixed += cost(growth, of_growth) * per_product
    return CostLine(by_substrate=by_substrate, fixed=fixed, sold=mass * plant.overall_recovery())


def _feeds_cost(case: Case, plant: Plant, amounts: Mapping[str, Fraction]) -> Fraction:
    """Cost of what one mol substrate takes up, where it has a price [1/mol]."""
    total = _ZERO
    feeds = feeds_of(case, plant)
    for item in case.compounds:
        feed = feeds.get(item.name)
        found = plant.price(feed.name if feed is not None else item.name)
        if found is not None and amounts[item.name] < 0:
            formula = feed.formula if feed is not None else item.formula
            total -= amounts[item.name] * formula.molar_mass / _GRAMS * found.value
    return total


def cost_figures(
    case: Case,
    plant: Plant,
    line: CostLine,
    ends: Ends,
    streams: tuple[Stream, ...],
    findings: Findings,
) -> tuple[Figure, ...]:
    """Cost per kg product, at the best yield and at the ends of the bands, and break-even.

    Parameters
    ----------
    case : Case
        The case.
    plant : Plant
        With prices.
    line : CostLine
        Cost as a function of the yield.
    ends : Ends
        Yields of production.
    streams : tuple of Stream
        All streams.
    findings : Findings
        Receives prices that are missing.

    Returns
    -------
    tuple of Figure
        Costs per kg product sold.
    """
    currency = plant.prices[0].currency
    unit = f"{currency}/kg"
    found: list[Figure] = []
    bought = [item for item in streams if item.enters and item.mol_per_h is not None]
    sold = Input(name="product sold", value=plant.output.value / plant.on_stream.value, unit="kg/h")
    missing, parts = [], []
    for item in bought:
        name = item.name.removesuffix(", as base")
        price = plant.price(name)
        if price is None:
            if name not in _FREE:
                missing.append(name)
            continue
        figure = Figure(
            section=SECTION,
            name=f"{item.name}, cost",
            value=item.kg_per_h * price.value / sold.value,
            unit=unit,
            formula="pure mass x price / product sold",
            inputs=(
                Input(name=item.name, value=item.kg_per_h, unit="kg/h"),
                Input(name=f"price of {name}", value=price.value, unit=unit),
                sold,
            ),
        )
        found.append(figure)
        parts.append(figure.as_input())
    if missing:
        findings.add(
            "YN909",
            f"no price is given for {', '.join(missing)}, and the cost leaves it out",
            plant.prices[0].span,
            hint="Add it under 'prices'.",
            severity=Severity.WARNING,
        )

    def add(name: str, yielded: Fraction | None, words: str) -> None:
        value = line.per_kg(yielded) if yielded is not None and yielded > 0 else None
        found.append(
            Figure(
                section=SECTION,
                name=name,
                value=value,
                unit=unit,
                formula=f"sum of the costs, {words}"
                if value is not None
                else f"not told: no yield is known {words}",
                inputs=tuple(parts)
                if words.startswith("at the best")
                else (Input(name="yield of production", value=yielded, unit="mol/mol"),)
                if yielded is not None
                else (),
            )
        )

    add("raw materials", ends.best, "at the best yield")
    add("raw materials, low", ends.better, "at the better end of the bands of the yields")
    add("raw materials, high", ends.worse, "at the worse end of the bands of the yields")
    price = plant.price(plant.product)
    if price is None:
        findings.add(
            "YN909",
            f"no price is given for the product {plant.product}, so no break-even yield is told",
            plant.prices[0].span,
            hint=f"Add '{plant.product}' under 'prices'.",
            severity=Severity.NOTE,
        )
        return tuple(found)
    even = line.break_even(price.value)
    ratio = product_mass(case, plant) / case.basis.formula.molar_mass
    asked = Input(name=f"price of {plant.product}", value=price.value, unit=unit)
    rule = (
        "a (1 - w g) / (price x kg sold per mol in the broth - b w - c)"
        if even is not None
        else "none: what does not fall with the yield costs more than the product brings"
    )
    for name, value, of in (
        ("break-even yield", even, "mol/mol"),
        ("break-even yield by mass", None if even is None else even * ratio, "g/g"),
    ):
        found.append(
            Figure(section=SECTION, name=name, value=value, unit=of, formula=rule, inputs=(asked,))
        )
    return tuple(found)
