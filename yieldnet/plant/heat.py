"""Heat of a plant: of the cells, of neutralisation, of stirring, less what evaporation takes.

In: overall equation, size, base, stirrer, gas. Out: figures in kW, means over the time on stream.
Left out: heat of dilution, of the feed, through the wall, and of condensing the vapour.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.thermochemistry import CALORIMETRIC_OXYGEN_HEAT, TEXTBOOK_OXYGEN_HEAT
from yieldnet.chemistry.vapour import MAGNUS_SOURCE
from yieldnet.foundation.findings import Findings
from yieldnet.plant.constants import (
    ATMOSPHERE,
    VAPORISATION,
    vaporisation_heat,
    vapour_pressure,
)
from yieldnet.plant.sheet import Figure, Input
from yieldnet.prediction.heat import heat_of, tell_heat

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.model.case import Case
    from yieldnet.model.plant import Plant
    from yieldnet.plant.base import ProtonBalance
    from yieldnet.plant.sheet import Number
    from yieldnet.plant.streams import Scale
    from yieldnet.plant.vessels import Vessels

__all__ = ["SECTION", "evaporation_kw", "heat_figures"]

SECTION = "Heat"
"""Heading of these figures."""
_SECONDS = 3600
_GRAMS = 1000
_WATER_MASS = 18.015
"""Molar mass of water [g/mol] (IUPAC 2021 atomic weights)."""


def evaporation_kw(dry_gas: float, celsius: float, pressure: float) -> float:
    """Heat that dry gas takes along as it leaves saturated with water.

    Parameters
    ----------
    dry_gas : float
        Gas that leaves [mol/h].
    celsius : float
        Temperature of the broth [degC].
    pressure : float
        Absolute pressure [bar].

    Returns
    -------
    float
        Heat [kW].

    Notes
    -----
    Water: dry gas x pw / (p - pw), times the heat of vaporisation. The gas enters dry.

    Examples
    --------
    >>> round(evaporation_kw(3600.0, 37.0, 1.01325), 2)
    2.86
    """
    vapour = vapour_pressure(celsius)
    water = dry_gas * vapour / (pressure - vapour) * _WATER_MASS / _GRAMS
    return water * vaporisation_heat(celsius) / _SECONDS


def heat_figures(
    case: Case,
    plant: Plant,
    amounts: Mapping[str, Fraction],
    scale: Scale,
    protons: ProtonBalance | None,
    vessels: Vessels,
    celsius: Fraction | None,
    passing_air: Fraction | None,
    findings: Findings,
) -> tuple[Figure, ...]:
    """Heat that is made, and what must be taken off.

    Parameters
    ----------
    case : Case
        The case.
    plant : Plant
        The plant.
    amounts : mapping of str to Fraction
        Overall equation, production positive [mol/mol basis].
    scale : Scale
        Its size.
    protons : ProtonBalance or None
        Protons and base.
    vessels : Vessels
        Volume of broth.
    celsius : Fraction or None
        Temperature of the broth [degC].
    passing_air : Fraction or None
        Dry air blown in [mol/h].
    findings : Findings
        Receives what is doubtful.

    Returns
    -------
    tuple of Figure
        Heat of the cells two ways, its parts, cooling duty.
    """
    heat, unknown = heat_of([(item, amounts[item.name]) for item in case.compounds])
    tell_heat(heat, tuple(unknown), case, findings)
    if heat is None:
        return ()
    found: list[Figure] = []

    def add(
        name: str, value: Number, formula: str, *inputs: Input, source: str = ""
    ) -> tuple[str, Number]:
        found.append(
            Figure(
                section=SECTION,
                name=name,
                value=value,
                unit="kW",
                formula=formula,
                inputs=inputs,
                source=source,
            )
        )
        return name, value

    basis = Input(name=f"{case.basis.name} used", value=scale.basis, unit="mol/h")
    kilowatts = scale.basis / _SECONDS
    parts = [
        add(
            "heat of the cells, by combustion",
            heat.by_combustion * kilowatts,
            "heats of combustion of what is used less those of what is made",
            basis,
            *(
                Input(
                    name=f"heat of combustion of {item.compound} ({item.heat.known.status})",
                    value=item.heat.value,
                    unit="kJ/mol",
                    source=item.heat.known.source,
                )
                for item in heat.terms
                if item.amount
            ),
        )
    ]
    for words, rule in (
        ("440 kJ per oxygen", CALORIMETRIC_OXYGEN_HEAT),
        ("460 kJ per oxygen", TEXTBOOK_OXYGEN_HEAT),
    ):
        by_oxygen = heat.by_oxygen(rule)
        if by_oxygen is not None:
            add(
                f"heat of the cells, {words}",
                by_oxygen * kilowatts,
                "oxygen used x heat per oxygen; a second opinion, not in the cooling duty",
                Input(name="oxygen used", value=heat.oxygen, unit="mol/mol"),
                Input(name="heat per oxygen", value=rule, unit="kJ/mol"),
                source="Birou, Marison, von Stockar 1987"
                if rule == CALORIMETRIC_OXYGEN_HEAT
                else "textbook value",
            )
    if protons is not None:
        parts.append(
            add(
                "heat of neutralisation",
                protons.protons * protons.base.heat * kilowatts,
                "protons given off x heat per proton",
                Input(name="protons given off", value=protons.protons, unit="mol/mol"),
                Input(
                    name=f"heat per proton, {protons.base.name}",
                    value=protons.base.heat,
                    unit="kJ/mol",
                    source=f"{protons.base.source}, {protons.base.status}",
                ),
            )
        )
    if plant.stirrer is not None and vessels.volume is not None:
        parts.append(
            add(
                "stirrer",
                plant.stirrer.value * vessels.volume * vessels.running,
                "power per volume x broth in all vessels x share of the time that they run",
                Input(name="power per volume", value=plant.stirrer.value, unit="kW/m3"),
                Input(name="broth in all vessels", value=vessels.volume, unit="m3"),
                Input(name="share of the time", value=vessels.running, unit="-"),
            )
        )
    total: Number = Fraction(0)
    for _, value in parts:
        total += value
    names = " + ".join(name for name, _ in parts)
    aeration = plant.aeration
    if passing_air is not None and celsius is not None:
        pressure = ATMOSPHERE.value
        if aeration is not None and aeration.pressure is not None:
            pressure = aeration.pressure.value
        leaves = passing_air + scale.basis * (
            amounts.get("oxygen", Fraction(0))
            + max(amounts.get("carbon dioxide", Fraction(0)), Fraction(0))
        )
        taken = evaporation_kw(float(leaves), float(celsius), float(pressure))
        add(
            "evaporation",
            -taken,
            "dry gas that leaves x pw / (p - pw) x heat of vaporisation, taken off",
            Input(name="dry gas that leaves", value=leaves, unit="mol/h"),
            Input(name="temperature", value=celsius, unit="degC"),
            Input(name="pressure", value=pressure, unit="bar"),
            source=f"{MAGNUS_SOURCE}; {VAPORISATION.source}",
        )
        total = float(total) - taken
        names += " - evaporation"
    add(
        "cooling duty",
        total,
        names,
        *(Input(name=name, value=value, unit="kW") for name, value in parts),
    )
    return tuple(found)
