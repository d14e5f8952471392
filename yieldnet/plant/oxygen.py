"""Oxygen of a plant: how fast it is taken up, and the kLa that passes it on.

In: the equations of the phases, productivity, aeration, temperature. Out: figures, and a warning
where no large vessel reaches them. The gas is taken as mixed: all of it has the oxygen with which
it leaves, which is safe for tall vessels.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from math import log
from typing import TYPE_CHECKING

from yieldnet.chemistry.thermochemistry import CALORIMETRIC_OXYGEN_HEAT, TEXTBOOK_OXYGEN_HEAT
from yieldnet.chemistry.vapour import MAGNUS_SOURCE
from yieldnet.foundation.findings import Findings, Severity
from yieldnet.model.network import BIOMASS
from yieldnet.plant.constants import (
    ATMOSPHERE,
    HENRY_CONSTANT,
    HIGHEST_KLA,
    HIGHEST_UPTAKE,
    MOLAR_VOLUME,
    OXYGEN_IN_AIR,
    henry_constant,
    vapour_pressure,
)
from yieldnet.plant.equation import product_mass
from yieldnet.plant.sheet import Figure, Input, of_value

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.model.case import Case
    from yieldnet.model.plant import Aeration, Plant
    from yieldnet.plant.equation import GrowthShare
    from yieldnet.plant.sheet import Number

__all__ = ["SECTION", "Demand", "air_per_broth", "demand_of", "driving_force", "oxygen_figures"]

SECTION = "Oxygen"
"""Heading of these figures."""
_MINUTES = 60
_SECONDS = 3600
_PASCAL = 100_000
_OXYGEN, _CARBON_DIOXIDE = "oxygen", "carbon dioxide"
_HINT = (
    "Lower the productivity or the dissolved oxygen, raise the pressure or vvm, enrich the air, or"
    " bound oxygen under 'demands'."
)


@dataclass(frozen=True, slots=True, kw_only=True)
class Demand:
    """Oxygen that the broth takes up where it takes up most.

    Parameters
    ----------
    uptake : Fraction or float
        Oxygen [mol/m3/h].
    given_off : Fraction or float
        Carbon dioxide at the same time; negative where it is taken up [mol/m3/h].
    phase : str
        ``production`` or ``growth``.
    formula : str
        How it follows, in words.
    inputs : tuple of Input
        What it is made from.
    """

    uptake: Number
    given_off: Number
    phase: str
    formula: str
    inputs: tuple[Input, ...]


def demand_of(
    case: Case,
    plant: Plant,
    production: Mapping[str, Fraction],
    growth: Mapping[str, Fraction] | None,
    share: GrowthShare | None,
    rate: Fraction | None,
) -> tuple[Demand, ...]:
    """Oxygen uptake of production, and of growth at its end.

    Parameters
    ----------
    case : Case
        The case.
    plant : Plant
        The plant.
    production, growth : mapping of str to Fraction
        Equations of the phases, production positive [mol/mol basis].
    share : GrowthShare or None
        How the phases share the substrate.
    rate : Fraction or None
        Product per volume and time of production [kg/m3/h].

    Returns
    -------
    tuple of Demand
        One a phase that takes oxygen up and whose speed is known.

    Notes
    -----
    Production: productivity / molar mass x oxygen / product. Growth, where the inoculum tells how
    often the cells double: growth rate x cells x oxygen / biomass, at the end of exponential
    growth.
    """
    found = []
    oxygen = -production.get(_OXYGEN, Fraction(0))
    if rate is not None and oxygen > 0:
        moles = rate * 1000 / product_mass(case, plant)
        per_product = oxygen / production[plant.product]
        given_off = production.get(_CARBON_DIOXIDE, Fraction(0)) / production[plant.product]
        found.append(
            Demand(
                uptake=moles * per_product,
                given_off=moles * given_off,
                phase="production",
                formula="productivity / molar mass of the product x oxygen / product",
                inputs=(
                    Input(name="productivity", value=rate, unit="kg/m3/h"),
                    Input(name="oxygen / product", value=per_product, unit="mol/mol"),
                ),
            )
        )
    phases = plant.phases
    if growth is None or share is None or phases is None or phases.inoculum is None:
        return tuple(found)
    oxygen = -growth.get(_OXYGEN, Fraction(0))
    if oxygen > 0 and 0 < phases.inoculum.value < 1:
        speed = log(1 / float(phases.inoculum.value)) / float(phases.growth.value)
        biomass = case.compound(BIOMASS)
        grams = growth[BIOMASS] * biomass.formula.molar_mass / (1 - biomass.ash)
        per_gram = oxygen / grams
        per_h = speed * float(share.cells) * 1000
        found.append(
            Demand(
                uptake=per_h * float(per_gram),
                given_off=per_h * float(growth.get(_CARBON_DIOXIDE, Fraction(0)) / grams),
                phase="growth",
                formula="growth rate x cells at the end of growth x oxygen / biomass",
                inputs=(
                    Input(name="growth rate that growth needs", value=speed, unit="1/h"),
                    Input(name="cells at the end of growth", value=share.cells, unit="kg/m3"),
                    Input(name="oxygen / biomass", value=per_gram, unit="mol/g"),
                ),
            )
        )
    return tuple(found)


def air_per_broth(vvm: Fraction) -> Fraction:
    """Dry air per volume of broth.

    Parameters
    ----------
    vvm : Fraction
        Gas at 0 degC and 1.01325 bar per volume of broth [1/min].

    Returns
    -------
    Fraction
        Air [mol/m3/h].

    Examples
    --------
    >>> round(float(air_per_broth(Fraction(1))))
    2677
    """
    return vvm * _MINUTES / MOLAR_VOLUME.value


def driving_force(celsius: float, pressure: float, oxygen_in_gas: float, dissolved: float) -> float:
    """Difference between the oxygen that the gas would dissolve and that in the broth.

    Parameters
    ----------
    celsius : float
        Temperature [degC].
    pressure : float
        Absolute pressure [bar].
    oxygen_in_gas : float
        Oxygen in the dry gas [mol/mol].
    dissolved : float
        Oxygen in the broth, over saturation with air at this pressure [-].

    Returns
    -------
    float
        Difference, negative where the gas has too little [mol/m3].

    Notes
    -----
    ``H (p - pw) (y - d y_air)``: Henry constant, pressure less that of water vapour, oxygen in the
    dry gas, dissolved oxygen, oxygen in dry air.

    Examples
    --------
    >>> round(driving_force(25.0, 1.01325, 0.209476, 0.0), 3)
    0.267
    """
    dry = (pressure - vapour_pressure(celsius)) * _PASCAL
    return henry_constant(celsius) * dry * (oxygen_in_gas - dissolved * float(OXYGEN_IN_AIR.value))


def oxygen_figures(
    plant: Plant,
    demands: tuple[Demand, ...],
    celsius: Fraction | None,
    findings: Findings,
) -> tuple[Figure, ...]:
    """Oxygen uptake, what it asks of a vessel, and warnings where none reaches it.

    Parameters
    ----------
    plant : Plant
        The plant.
    demands : tuple of Demand
        Oxygen uptake of the phases.
    celsius : Fraction or None
        Temperature of the broth [degC].
    findings : Findings
        Receives warnings.

    Returns
    -------
    tuple of Figure
        Uptake, heat that it implies, driving force, needed kLa.
    """
    if not demands:
        return ()
    figures = []
    for item in demands:
        figures.append(
            Figure(
                section=SECTION,
                name=f"oxygen uptake, {item.phase}",
                value=item.uptake,
                unit="mol/m3/h",
                formula=item.formula,
                inputs=item.inputs,
            )
        )
    most = max(demands, key=lambda item: item.uptake)
    figures += _heat_implied(most)
    if most.uptake > HIGHEST_UPTAKE.value:
        _warn(
            plant,
            findings,
            f"oxygen uptake in {most.phase}, {float(most.uptake):.0f} mol/m3/h, is beyond what"
            " large vessels pass on with air",
            f"usual reach {float(HIGHEST_UPTAKE.value):g} mol/m3/h ({HIGHEST_UPTAKE.source})",
        )
    if celsius is None:
        return tuple(figures)
    return (*figures, *_needed(plant, most, float(celsius), findings))


def _heat_implied(most: Demand) -> list[Figure]:
    """Heat that an oxygen uptake implies by the two rules."""
    found = []
    for rule, heat, source in (
        ("440", CALORIMETRIC_OXYGEN_HEAT, "Birou, Marison, von Stockar 1987"),
        ("460", TEXTBOOK_OXYGEN_HEAT, "textbook value, four electrons of 115 kJ"),
    ):
        found.append(
            Figure(
                section=SECTION,
                name=f"heat that this uptake implies, {rule} kJ/mol",
                value=most.uptake * heat / _SECONDS
                if isinstance(most.uptake, Fraction)
                else most.uptake * float(heat) / _SECONDS,
                unit="kW/m3",
                formula="largest oxygen uptake x heat per oxygen",
                inputs=(
                    Input(name=f"oxygen uptake, {most.phase}", value=most.uptake, unit="mol/m3/h"),
                    Input(name="heat per oxygen", value=heat, unit="kJ/mol", source=source),
                ),
            )
        )
    return found


def _needed(plant: Plant, most: Demand, celsius: float, findings: Findings) -> list[Figure]:
    """Driving force and kLa for the largest uptake."""
    aeration = plant.aeration
    pressure = float(_stated(aeration, "pressure") or ATMOSPHERE.value)
    dissolved = float(_stated(aeration, "dissolved_oxygen") or 0)
    vvm = _stated(aeration, "vvm")
    inlet = float(OXYGEN_IN_AIR.value)
    found: list[Figure] = []
    gas, words = inlet, "as it enters, since vvm is not given"
    if vvm is not None:
        air = float(air_per_broth(vvm))
        uptake, given_off = float(most.uptake), float(most.given_off)
        if uptake >= inlet * air:
            findings.add(
                "YN912",
                f"{float(vvm):g} vvm of air brings less oxygen than {most.phase} takes up",
                aeration.vvm.span if aeration is not None and aeration.vvm else plant.span,
                left=f"air brings {inlet * air:.1f} mol/m3/h",
                right=f"taken up {uptake:.1f} mol/m3/h",
                hint="Raise vvm, enrich the air, or lower the productivity.",
                severity=Severity.WARNING,
            )
            return found
        gas = (inlet * air - uptake) / (air - uptake + given_off)
        words = "as it leaves"
        found.append(
            Figure(
                section=SECTION,
                name="oxygen in the gas as it leaves",
                value=gas,
                unit="mol/mol",
                formula="(oxygen in - uptake) / (air - uptake + carbon dioxide), dry",
                inputs=(
                    Input(name="air", value=air, unit="mol/m3/h", source=MOLAR_VOLUME.source),
                    of_value("oxygen in air", OXYGEN_IN_AIR),
                ),
            )
        )
    force = driving_force(celsius, pressure, gas, dissolved)
    saturation = driving_force(celsius, pressure, inlet, 0.0)
    found.append(
        Figure(
            section=SECTION,
            name="saturation with air",
            value=saturation,
            unit="mol/m3",
            formula="Henry constant x (pressure - water vapour) x oxygen in dry air",
            inputs=(
                Input(name="temperature", value=celsius, unit="degC"),
                Input(name="pressure", value=pressure, unit="bar"),
            ),
            source=f"{HENRY_CONSTANT.source}; {MAGNUS_SOURCE}",
        )
    )
    found.append(
        Figure(
            section=SECTION,
            name="driving force",
            value=force,
            unit="mol/m3",
            formula=f"Henry constant x (pressure - water vapour) x (oxygen in dry gas, {words}"
            " - dissolved oxygen x oxygen in dry air)",
            inputs=(
                Input(name="oxygen in the gas", value=gas, unit="mol/mol"),
                Input(name="dissolved oxygen", value=dissolved, unit="-"),
            ),
            source=f"{HENRY_CONSTANT.source}; {MAGNUS_SOURCE}",
        )
    )
    if force <= 0:
        _warn(
            plant,
            findings,
            "the gas that leaves holds too little oxygen for the dissolved oxygen that is wanted",
            f"dissolved oxygen {dissolved:.3g} of saturation with air",
        )
        return found
    needed = float(most.uptake) / force
    found.append(
        Figure(
            section=SECTION,
            name="kLa needed",
            value=needed,
            unit="1/h",
            formula="largest oxygen uptake / driving force",
            inputs=(
                Input(name=f"oxygen uptake, {most.phase}", value=most.uptake, unit="mol/m3/h"),
                Input(name="driving force", value=force, unit="mol/m3"),
                of_value("usual reach of large vessels", HIGHEST_KLA),
            ),
        )
    )
    own = _stated(aeration, "kla")
    limit = float(own) if own is not None else float(HIGHEST_KLA.value)
    if needed > limit:
        whose = "of the vessel" if own is not None else f"usual reach ({HIGHEST_KLA.source})"
        _warn(
            plant,
            findings,
            f"{most.phase} needs a kLa of {needed:.0f} 1/h",
            f"{whose} {limit:.0f} 1/h",
        )
    if own is not None:
        found.append(
            Figure(
                section=SECTION,
                name="oxygen that the vessel passes on",
                value=float(own) * force,
                unit="mol/m3/h",
                formula="kLa of the vessel x driving force",
                inputs=(
                    Input(name="kLa of the vessel", value=own, unit="1/h"),
                    Input(name="driving force", value=force, unit="mol/m3"),
                ),
            )
        )
    return found


def _stated(aeration: Aeration | None, name: str) -> Fraction | None:
    found = None if aeration is None else getattr(aeration, name)
    return None if found is None else found.value


def _warn(plant: Plant, findings: Findings, message: str, left: str) -> None:
    span = plant.aeration.span if plant.aeration is not None else plant.span
    findings.add("YN911", message, span, left=left, hint=_HINT, severity=Severity.WARNING)
