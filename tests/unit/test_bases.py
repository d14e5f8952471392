"""Bases and nitrogen feeds: every reaction with protons closes."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.chemistry.bases import (
    NITROGEN_FEEDS,
    NitrogenFeed,
    base_named,
    base_names,
    usual_feed,
)
from yieldnet.chemistry.formula import Formula, read_formula
from yieldnet.chemistry.library import find_compound


def _sum(*parts: tuple[Formula, Fraction | int]) -> tuple[dict[str, Fraction], Fraction]:
    elements: dict[str, Fraction] = {}
    charge = Fraction(0)
    for formula, times in parts:
        charge += formula.charge * times
        for symbol, amount in formula.elements:
            elements[symbol] = elements.get(symbol, Fraction(0)) + amount * times
    return {symbol: amount for symbol, amount in elements.items() if amount}, charge


PROTON = read_formula("H+")


@pytest.mark.parametrize("name", base_names())
def test_a_base_and_its_protons_become_cations_water_and_carbon_dioxide(name: str) -> None:
    base = base_named(name)
    assert base is not None
    left = _sum((base.formula, 1), (PROTON, base.equivalents))
    right = _sum(
        (base.cation, base.cations),
        (read_formula("H2O"), base.water),
        (read_formula("CO2"), base.carbon_dioxide),
    )
    assert left == right
    entry = find_compound(name)
    assert entry is not None
    assert dict(entry.formula.elements) == dict(base.formula.elements)


@pytest.mark.parametrize("feed", NITROGEN_FEEDS, ids=lambda feed: feed.name)
def test_a_feed_becomes_what_is_taken_up_protons_and_its_counter_ion(feed: NitrogenFeed) -> None:
    taken = find_compound(feed.compound)
    assert taken is not None
    left = _sum((feed.formula, 1))
    parts: list[tuple[Formula, Fraction | int]] = [(taken.formula, 1), (PROTON, feed.protons)]
    if feed.counter_ion is not None:
        parts.append((feed.counter_ion, feed.counter_ions))
    assert left == _sum(*parts)


def test_the_usual_feed() -> None:
    ammonia, other = usual_feed("ammonia"), usual_feed("glucose")
    assert ammonia is not None
    assert (ammonia.name, ammonia.protons) == ("ammonia", 0)
    assert other is None


# Enthalpies of formation, NBS tables (Wagman et al. 1982), from memory [kJ/mol].
WATER = -285.83


@pytest.mark.parametrize(
    ("name", "base", "left_over"),
    [
        ("ammonia", -80.29, -132.51),
        ("calcium hydroxide", -986.09, -542.83 + 2 * WATER),
        ("magnesium hydroxide", -924.5, -466.85 + 2 * WATER),
        ("sodium carbonate", -1130.68, 2 * -240.12 + WATER - 393.51),
        ("sodium hydroxide", -229.99 - 240.12, -240.12 + WATER),
    ],
)
def test_the_heat_of_a_base_follows_from_enthalpies(
    name: str, base: float, left_over: float
) -> None:
    known = base_named(name)
    assert known is not None
    assert float(known.heat) == pytest.approx((base - left_over) / known.equivalents, abs=0.02)
