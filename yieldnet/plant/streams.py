"""Streams of a plant: what enters and leaves per hour and per year, and whether it closes.

In: the overall equation, its size, protons and base. Out: streams in exact fractions, ions of the
broth, balances of every element, of charge and of mass. Left out: the water of the feed and of
evaporation, and what the downstream steps add.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.formula import Formula
from yieldnet.chemistry.library import find_compound
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Findings
from yieldnet.model.network import BIOMASS
from yieldnet.plant.base import feeds_of
from yieldnet.plant.constants import AIR_MASS, OXYGEN_IN_AIR
from yieldnet.plant.equation import product_mass
from yieldnet.plant.sheet import Balance, Ion, Stream

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.model.case import Case
    from yieldnet.model.plant import Plant
    from yieldnet.plant.base import ProtonBalance

__all__ = [
    "CLOSES",
    "REST_OF_AIR",
    "Scale",
    "balances_of",
    "check_closed",
    "ions_of",
    "scale_of",
    "streams_of",
]

CLOSES = Fraction(1, 10**9)
"""Largest difference between what enters and what leaves, over the larger, that is let pass [-]."""
REST_OF_AIR = "rest of the air"
"""Name of the air that passes through, on both sides."""
_ZERO = Fraction(0)
_GRAMS = 1000
_WATER = Formula.of({"H": Fraction(2), "O": Fraction(1)})
_CARBON_DIOXIDE = Formula.of({"C": Fraction(1), "O": Fraction(2)})


@dataclass(frozen=True, slots=True, kw_only=True)
class Scale:
    """How large the plant is.

    Parameters
    ----------
    basis : Fraction
        Basis substrate used [mol/h].
    sold, made : Fraction
        Product sold, and in the broth [kg/h].
    hours : Fraction
        Time on stream [h/y].
    """

    basis: Fraction
    sold: Fraction
    made: Fraction
    hours: Fraction

    def per_year(self, kg_per_h: Fraction) -> Fraction:
        """Flow in a year [t/y]."""
        return kg_per_h * self.hours / _GRAMS


def scale_of(case: Case, plant: Plant, amounts: Mapping[str, Fraction]) -> Scale:
    """Size of a plant that sells what it is to sell.

    Parameters
    ----------
    case : Case
        The case.
    plant : Plant
        With output, time on stream and recovery.
    amounts : mapping of str to Fraction
        Overall equation, with product made [mol/mol basis].

    Returns
    -------
    Scale
        Its size.
    """
    sold = plant.output.value / plant.on_stream.value
    made = sold / plant.overall_recovery()
    moles = made * _GRAMS / product_mass(case, plant)
    return Scale(
        basis=moles / amounts[plant.product], sold=sold, made=made, hours=plant.on_stream.value
    )


class _Maker:
    """Makes streams of one scale."""

    def __init__(self, scale: Scale) -> None:
        self.scale = scale
        self.found: list[Stream] = []

    def moles(self, name: str, enters: bool, moles: Fraction, formula: Formula, rule: str) -> None:
        if moles:
            mass = moles * formula.molar_mass / _GRAMS
            self.add(name, enters, mass, rule, moles, formula)

    def add(
        self,
        name: str,
        enters: bool,
        kg_per_h: Fraction,
        rule: str,
        moles: Fraction | None = None,
        formula: Formula | None = None,
    ) -> None:
        self.found.append(
            Stream(
                name=name,
                enters=enters,
                kg_per_h=kg_per_h,
                t_per_y=self.scale.per_year(kg_per_h),
                mol_per_h=moles,
                formula=formula,
                rule=rule,
            )
        )


def streams_of(
    case: Case,
    plant: Plant,
    amounts: Mapping[str, Fraction],
    scale: Scale,
    protons: ProtonBalance | None,
    passing_air: Fraction | None,
) -> tuple[Stream, ...]:
    """Streams of a plant, those that enter first.

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
        Protons and base; ``None`` if no pH is held.
    passing_air : Fraction or None
        Dry air blown in [mol/h]; ``None`` if it is not known.

    Returns
    -------
    tuple of Stream
        Every compound of the equation with what comes along.
    """
    make = _Maker(scale)
    feeds = feeds_of(case, plant)
    base_amount = protons.base_amount if protons is not None else _ZERO
    extra = {
        "water": base_amount * protons.base.water if protons is not None else _ZERO,
        "carbon dioxide": base_amount * protons.base.carbon_dioxide
        if protons is not None
        else _ZERO,
    }
    for item in case.compounds:
        net = amounts[item.name] + extra.pop(_library_name(item.name), _ZERO)
        if item.name == BIOMASS or net >= 0:
            continue
        moles = -net * scale.basis
        feed = feeds.get(item.name)
        formula = feed.formula if feed is not None else item.formula
        name = item.name if feed is None else feed.name
        note = " as carbon dioxide net of what is given off" if name == "carbon dioxide" else ""
        make.moles(name, True, moles, formula, f"amount in the equation x size of the plant{note}")
        purity = plant.purity(item.name)
        if purity is not None and purity < 1:
            mass = moles * formula.molar_mass / _GRAMS * (1 / purity - 1)
            make.add(f"impurities with {name}", True, mass, "pure mass x (1 / purity - 1)")
    if protons is not None:
        make.moles(
            protons.base.name + (", as base" if protons.base.name in feeds else ""),
            True,
            base_amount * scale.basis,
            protons.base.formula,
            "protons given off / protons taken up by one mol of base",
        )
    ash = _ash(case, amounts) * scale.basis / _GRAMS
    if ash:
        make.add("minerals", True, ash, "as much as leaves as ash of biomass")
    rest = _rest_of_air(case, amounts, scale, passing_air)
    if rest is not None:
        make.add(REST_OF_AIR, True, rest, "dry air blown in less the oxygen used")
    _leaving(case, plant, amounts, scale, protons, make)
    for stream in tuple(make.found):
        if stream.enters and stream.name.startswith("impurities"):
            make.add(stream.name, False, stream.kg_per_h, "leave as they came")
    if ash:
        make.add("ash of biomass", False, ash, "dry weight of biomass x ash")
    if rest is not None:
        make.add(REST_OF_AIR, False, rest, "leaves as it came")
    return tuple(make.found)


def _library_name(name: str) -> str:
    entry = find_compound(name)
    return entry.name if entry is not None else name


def _ash(case: Case, amounts: Mapping[str, Fraction]) -> Fraction:
    """Ash of the biomass made [g/mol basis]."""
    if case.coefficient(BIOMASS) is None:
        return _ZERO
    biomass = case.compound(BIOMASS)
    return amounts[BIOMASS] * biomass.formula.molar_mass * biomass.ash / (1 - biomass.ash)


def _rest_of_air(
    case: Case, amounts: Mapping[str, Fraction], scale: Scale, passing: Fraction | None
) -> Fraction | None:
    """Dry air that is not used as oxygen [kg/h]; ``None`` where the air is not known."""
    used = sum(
        (-amounts[item.name] for item in case.compounds if _library_name(item.name) == "oxygen"),
        _ZERO,
    )
    if passing is None or used <= 0 or passing * OXYGEN_IN_AIR.value < used * scale.basis:
        return None
    oxygen = Formula.of({"O": Fraction(2)}).molar_mass
    return (passing * AIR_MASS.value - used * scale.basis * oxygen) / _GRAMS


def _leaving(
    case: Case,
    plant: Plant,
    amounts: Mapping[str, Fraction],
    scale: Scale,
    protons: ProtonBalance | None,
    make: _Maker,
) -> None:
    """What leaves, with a formula."""
    recovery = plant.overall_recovery()
    product = case.compound(plant.product)
    moles = amounts[plant.product] * scale.basis
    note = " without ash" if product.ash else ""
    rule = "made x recovery of all downstream steps"
    make.moles(f"{product.name}{note}, sold", False, moles * recovery, product.formula, rule)
    rule = "made x (1 - recovery)"
    make.moles(f"{product.name}{note}, lost", False, moles * (1 - recovery), product.formula, rule)
    extra = {"water": _ZERO, "carbon dioxide": _ZERO}
    if protons is not None:
        extra["water"] = protons.base_amount * protons.base.water
        extra["carbon dioxide"] = protons.base_amount * protons.base.carbon_dioxide
    for item in case.compounds:
        net = amounts[item.name] + extra.pop(_library_name(item.name), _ZERO)
        if net <= 0 or item.name == plant.product:
            continue
        name = f"{item.name}, net" if item.name in ("water", "carbon dioxide") else item.name
        if item.name == BIOMASS:
            name = "biomass without ash"
        rule = "amount in the equation x size of the plant"
        make.moles(name, False, net * scale.basis, item.formula, rule)
    # Base that makes water or carbon dioxide which the equation does not list.
    formulas = {"water": _WATER, "carbon dioxide": _CARBON_DIOXIDE}
    for name, amount in extra.items():
        make.moles(f"{name}, of the base", False, amount * scale.basis, formulas[name], "base used")
    if protons is not None:
        # Acids are told undissociated, so the protons that they gave off are counted there.
        held: dict[str, Fraction] = {"H": -protons.acid_protons}
        for _, formula, amount in protons.held_ions():
            for symbol, count in formula.elements:
                held[symbol] = held.get(symbol, _ZERO) + amount * count
        make.moles(
            "ions of base and feed, less the protons they replace",
            False,
            scale.basis,
            Formula.of(held),
            "cations and counter-ions left in the broth, since acids are told undissociated",
        )


def ions_of(protons: ProtonBalance | None, scale: Scale) -> tuple[Ion, ...]:
    """What acids, base and feed are in the broth; empty without a base."""
    if protons is None:
        return ()
    found = []
    for name, formula, amount in (*protons.held_ions(), *protons.acid_ions()):
        moles = amount * scale.basis
        mass = moles * formula.molar_mass / _GRAMS
        found.append(
            Ion(
                name=f"{formula} of {name}",
                formula=formula,
                mol_per_h=moles,
                kg_per_h=mass,
                t_per_y=scale.per_year(mass),
            )
        )
    return tuple(found)


def balances_of(streams: tuple[Stream, ...], ions: tuple[Ion, ...]) -> tuple[Balance, ...]:
    """Balance of every element, of the charge of the ions, and of mass.

    Parameters
    ----------
    streams : tuple of Stream
        All streams.
    ions : tuple of Ion
        Ions of the broth.

    Returns
    -------
    tuple of Balance
        Elements [mol/h], charge [mol/h], mass [kg/h].
    """
    enters: dict[str, Fraction] = {}
    leaves: dict[str, Fraction] = {}
    for item in streams:
        if item.formula is None or item.mol_per_h is None:
            continue
        side = enters if item.enters else leaves
        for symbol, count in item.formula.elements:
            side[symbol] = side.get(symbol, _ZERO) + item.mol_per_h * count
    names = tuple(dict.fromkeys((*enters, *leaves)))
    found = [
        Balance(
            of=name, enters=enters.get(name, _ZERO), leaves=leaves.get(name, _ZERO), unit="mol/h"
        )
        for name in names
    ]
    if ions:
        charges = [item.charge_per_h for item in ions]
        found.append(
            Balance(
                of="charge",
                enters=sum((item for item in charges if item > 0), _ZERO),
                leaves=-sum((item for item in charges if item < 0), _ZERO),
                unit="mol/h",
            )
        )
    found.append(
        Balance(
            of="mass",
            enters=sum((item.kg_per_h for item in streams if item.enters), _ZERO),
            leaves=sum((item.kg_per_h for item in streams if not item.enters), _ZERO),
            unit="kg/h",
        )
    )
    return tuple(found)


def check_closed(balances: tuple[Balance, ...], case: Case, findings: Findings) -> None:
    """Refuse streams that lose an element, charge or mass.

    Parameters
    ----------
    balances : tuple of Balance
        All balances.
    case : Case
        The case.
    findings : Findings
        Receives which do not close.

    Raises
    ------
    InputError
        If any is further off than :data:`CLOSES`.
    """
    off = [item for item in balances if item.residual > CLOSES]
    for item in off:
        findings.add(
            "YN914",
            f"the streams do not close in {item.of}",
            case.span,
            left=f"enters {float(item.enters):.9g} {item.unit}",
            right=f"leaves {float(item.leaves):.9g} {item.unit}",
            hint="A growth equation in few digits keeps a residual: write ? before what closes it.",
        )
    if off:
        raise InputError(findings.sorted())
