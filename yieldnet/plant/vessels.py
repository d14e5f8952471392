"""Vessels of a plant: volume of broth, cycle, number of vessels, seed vessels.

In: size, titre, productivity, phases. Out: figures, each left out where what it needs is not said.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from math import ceil, log
from typing import TYPE_CHECKING

from yieldnet.plant.constants import SMALLEST_SEED, USUAL_FILL
from yieldnet.plant.sheet import COMMON_PRACTICE, Figure, Input, of_value

if TYPE_CHECKING:
    from yieldnet.model.plant import Plant
    from yieldnet.plant.equation import GrowthShare
    from yieldnet.plant.streams import Scale

__all__ = ["SECTION", "Vessels", "production_rate", "vessels_of"]

SECTION = "Vessels"
"""Heading of these figures."""
_MOST_SEEDS = 10
_ZERO = Fraction(0)


@dataclass(frozen=True, slots=True, kw_only=True)
class Vessels:
    """Vessels and what follows from them.

    Parameters
    ----------
    figures : tuple of Figure
        What is told.
    volume : Fraction or None
        Broth in all vessels [m3].
    running : Fraction
        Share of the time in which a vessel runs rather than being turned round [-].
    """

    figures: tuple[Figure, ...]
    volume: Fraction | None
    running: Fraction


def production_rate(plant: Plant) -> Fraction | None:
    """Product per volume and time of the production phase; ``None`` if not known [kg/m3/h]."""
    if plant.productivity is not None:
        return plant.productivity.value
    if plant.phases is not None and plant.phases.production is not None and plant.titre is not None:
        return plant.titre.value / plant.phases.production.value
    return None


def vessels_of(plant: Plant, scale: Scale, growth: GrowthShare | None) -> Vessels:
    """Volume, number and seed of the vessels.

    Parameters
    ----------
    plant : Plant
        The plant.
    scale : Scale
        Its size.
    growth : GrowthShare or None
        How growth and production share the substrate; ``None`` without phases.

    Returns
    -------
    Vessels
        Figures, volume of broth, share of the time that they run.
    """
    figures: list[Figure] = []

    def add(name: str, value: Fraction | float, unit: str, formula: str, *inputs: Input) -> Figure:
        one = Figure(
            section=SECTION, name=name, value=value, unit=unit, formula=formula, inputs=inputs
        )
        figures.append(one)
        return one

    made = Input(name="product in the broth", value=scale.made, unit="kg/h")
    rate = production_rate(plant)
    volume: Fraction | None = None
    running = Fraction(1)
    if plant.titre is not None:
        titre = Input(name="titre", value=plant.titre.value, unit="kg/m3")
        add(
            "broth harvested",
            scale.made / titre.value,
            "m3/h",
            "product in the broth / titre",
            made,
            titre,
        )
    phases = plant.phases
    if phases is not None and growth is not None:
        cells = add(
            "cells at the end of growth",
            growth.cells,
            "kg/m3",
            growth.cells_rule,
            *growth.cells_inputs,
        )
        add(
            "substrate used by growth",
            growth.share,
            "-",
            "substrate of growth / substrate of growth and production, mol/mol",
            cells.as_input(),
            Input(name="substrate of growth", value=growth.growth, unit="mol/m3"),
            Input(name="substrate of production", value=growth.production, unit="mol/m3"),
        )
        if rate is not None and plant.titre is not None:
            volume, running = _cycle(plant, scale, rate, add)
    elif rate is not None:
        volume = scale.made / rate
        add(
            "broth in all vessels",
            volume,
            "m3",
            "product in the broth / productivity",
            made,
            Input(name="productivity", value=rate, unit="kg/m3/h"),
        )
    if volume is not None and plant.vessel is not None:
        fill = plant.fill.value if plant.fill is not None else USUAL_FILL.value
        broth = plant.vessel.value * fill
        number = ceil(volume / broth)
        source = "" if plant.fill is not None else COMMON_PRACTICE
        add(
            "vessels",
            Fraction(number),
            "-",
            "broth in all vessels / (volume of one x fill), rounded up",
            Input(name="broth in all vessels", value=volume, unit="m3"),
            Input(name="volume of one", value=plant.vessel.value, unit="m3"),
            Input(name="fill", value=fill, unit="-", source=source),
        )
        if phases is not None and phases.inoculum is not None:
            _seeds(volume / number, phases.inoculum.value, add)
    if phases is not None and phases.inoculum is not None and phases.inoculum.value < 1:
        add(
            "growth rate that growth needs",
            log(1 / float(phases.inoculum.value)) / float(phases.growth.value),
            "1/h",
            "ln(1 / inoculum) / time of growth: from the cells of the seed to those of the vessel",
            Input(name="inoculum", value=phases.inoculum.value, unit="-"),
            Input(name="time of growth", value=phases.growth.value, unit="h"),
        )
    return Vessels(figures=tuple(figures), volume=volume, running=running)


def _cycle(plant: Plant, scale: Scale, rate: Fraction, add: object) -> tuple[Fraction, Fraction]:
    """Volume of broth, and share of the cycle in which a vessel runs."""
    assert callable(add)
    phases, titre = plant.phases, plant.titre
    assert phases is not None
    assert titre is not None
    production = titre.value / rate
    turnaround = phases.turnaround.value if phases.turnaround is not None else _ZERO
    cycle = phases.growth.value + production + turnaround
    times = (
        Input(name="time of growth", value=phases.growth.value, unit="h"),
        Input(name="time of production", value=production, unit="h"),
        Input(name="turnaround", value=turnaround, unit="h"),
    )
    add(
        "time of production",
        production,
        "h",
        "titre / productivity of the production phase",
        Input(name="titre", value=titre.value, unit="kg/m3"),
        Input(name="productivity", value=rate, unit="kg/m3/h"),
    )
    one = add("cycle", cycle, "h", "growth + production + turnaround", *times)
    volume = scale.made / titre.value * cycle
    add(
        "broth in all vessels",
        volume,
        "m3",
        "product in the broth / titre x cycle",
        Input(name="product in the broth", value=scale.made, unit="kg/h"),
        Input(name="titre", value=titre.value, unit="kg/m3"),
        one.as_input(),
    )
    add(
        "productivity over the cycle",
        titre.value / cycle,
        "kg/m3/h",
        "titre / cycle",
        Input(name="titre", value=titre.value, unit="kg/m3"),
        one.as_input(),
    )
    return volume, (cycle - turnaround) / cycle


def _seeds(broth: Fraction, inoculum: Fraction, add: object) -> None:
    """Seed vessels before one vessel, largest first."""
    assert callable(add)
    seed = broth * inoculum
    for step in range(1, _MOST_SEEDS + 1):
        if seed < SMALLEST_SEED.value:
            break
        add(
            f"seed {step}, broth",
            seed,
            "m3",
            "broth in one vessel x inoculum^step, down to a flask",
            Input(name="broth in one vessel", value=broth, unit="m3"),
            Input(name="inoculum", value=inoculum, unit="-"),
            of_value("flask", SMALLEST_SEED),
        )
        seed *= inoculum
