"""The text of a first plant: the section ``plant`` of a case with placeholders, each explained.

Figures are common practice of the trade in round numbers, so that a sheet comes out; every one is
marked to be replaced. Prices are offers only, since none is a fact.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.chemistry.acids import acid_named
from yieldnet.model.network import BIOMASS
from yieldnet.report.new_case import GASES, REPLACE, explained, trailing

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.studies.starting_case import StartingCase

__all__ = ["plant_lines"]

_BASE = "ammonia"


def plant_lines(start: StartingCase) -> list[str]:
    """Lines of the section ``plant``.

    Parameters
    ----------
    start : StartingCase
        What the case is made of.

    Returns
    -------
    list of str
        The lines, the key first after its comment.
    """
    product, substrate = start.product, start.substrate
    liquid = product not in GASES
    lines = [
        "",
        *explained(
            "The plant: 'yieldnet plant case.yaml' gives streams, base, oxygen, heat, vessels and"
            " raw materials. Figures for screening only."
        ),
        "plant:",
        _figure("output", "10000 t/y", f"{product} sold in a year"),
        _figure("on-stream", "8000 h/y", "hours of work in a year"),
        "  # Share of the product that each downstream step keeps.",
        "  recovery:",
        _figure("cell separation", "0.98", "first step", deep=True),
        _figure("purification", "0.90", "all that follows", deep=True),
    ]
    if substrate not in GASES:
        lines += [
            "  # Pure compound in what is bought, by weight.",
            "  feedstock purity:",
            _figure(substrate, "0.95", "over the weight that is paid for", deep=True),
        ]
    if liquid:
        lines.append(_figure("titre", "40 g/L", f"{product} in the broth at harvest"))
    lines += [
        # A gas weighs little: at the rate of a liquid no vessel would bring oxygen enough.
        _figure(
            "productivity",
            "0.5 g/L/h" if liquid else "0.05 g/L/h",
            f"{product} per volume of broth and hour",
        ),
        _figure("temperature", "35 degC", "of the broth"),
        *_acidity(start),
        *_aeration(start),
        _figure("stirrer", "1.0 kW/m3", "power per volume of broth"),
        _figure("vessel", "100 m3", "whole volume of one vessel"),
        _offer("fill", "0.75", "broth over whole volume"),
    ]
    if liquid and BIOMASS in start.shape.made and product != BIOMASS:
        lines += [
            "  # Growth at most biomass before production.",
            "  #phases:",
            _offer("growth", "12 h", "time of growth", deep=True),
            _offer("turnaround", "8 h", "harvest, cleaning, sterilising, filling", deep=True),
            _offer("inoculum", "5 %", "volume of the seed over that of the vessel", deep=True),
            _offer("cells", "5 g/L", "dry weight when growth ends", deep=True),
        ]
    return [*lines, *_prices((substrate, *_bought(start), product))]


def _figure(key: str, value: str, words: str, *, deep: bool = False) -> str:
    indent = "    " if deep else "  "
    return trailing(f"{indent}{key}: {value}", f"{words}; {REPLACE}")


def _offer(key: str, value: str, words: str, *, deep: bool = False) -> str:
    return _figure(f"#{key}", value, words, deep=deep)


def _acidity(start: StartingCase) -> list[str]:
    """Base and pH: stated where the product is an acid of known pKa, else offered."""
    if acid_named(start.product) is None:
        return []
    lines = [
        _figure("pH", "6.5", "of the broth"),
        _figure("base", _BASE, "what holds the pH"),
    ]
    if start.shape.nitrogen == "ammonia":
        lines.append(
            _offer("nitrogen feed", "ammonium sulfate", "form in which nitrogen is bought")
        )
    return lines


def _aeration(start: StartingCase) -> list[str]:
    if "oxygen" not in start.shape.fed:
        return []
    return [
        "  # How air is given.",
        "  aeration:",
        _figure("pressure", "1.5 bar", "absolute, in the vessel", deep=True),
        _figure("vvm", "1.0", "volumes of air per volume of broth and minute", deep=True),
        _figure("kLa", "300 1/h", "what the vessel reaches", deep=True),
        _figure("dissolved oxygen", "0.2", "what the cells need, over saturation", deep=True),
    ]


def _bought(start: StartingCase) -> tuple[str, ...]:
    names = [start.shape.nitrogen] if start.shape.nitrogen else []
    if acid_named(start.product) is not None and _BASE not in names:
        names.append(_BASE)
    return tuple(names)


def _prices(names: Sequence[str]) -> list[str]:
    return [
        "  # Prices per kg of pure compound, all in one currency; without them no cost is told.",
        "  #prices:",
        *(_offer(name, "1.00 EUR/kg", "no price of any market", deep=True) for name in names),
    ]
