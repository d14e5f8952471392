"""The statements of a case file: conditions, measured values, demands, aim."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.library import library_names
from yieldnet.foundation.findings import near
from yieldnet.foundation.units import (
    Unit,
    UnitError,
    per_hour,
    read_unit,
    specific_rate_mol_per_gram_hour,
    yield_factor,
)
from yieldnet.model.case import (
    BAND,
    DEFAULT_YIELD_UNIT,
    Aim,
    AimDirection,
    Condition,
    Demand,
    EnergySurplus,
    Measurement,
)
from yieldnet.model.network import CarrierKind, Direction
from yieldnet.reading.fields import Fields, text, unsplit_pairs
from yieldnet.reading.quantities import read_quantity, read_range

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from yieldnet.foundation.findings import Findings
    from yieldnet.model.case import OverallCoefficient
    from yieldnet.model.network import Compound, Network
    from yieldnet.reading.names import NameBook
    from yieldnet.reading.nodes import Node

__all__ = ["ABSOLUTE_ZERO", "CONDITION_KEYS", "StatementReader"]

CONDITION_KEYS = ("growth rate", "substrate uptake", "temperature", "pH")
"""Keys of 'conditions'."""
ABSOLUTE_ZERO = Fraction("-273.15")
"""Lowest temperature [degC]."""
HIGHEST_PH = 14
"""Highest pH that is believed [-]."""


@dataclass(slots=True, kw_only=True)
class StatementReader:
    """Reads what a case says about its coefficients.

    Parameters
    ----------
    fields : Fields
        The case file.
    book : NameBook
        Names that may be used.
    findings : Findings
        Receives what is wrong.
    network : Network or None
        The network, if it could be read.
    basis : Compound
        The basis substrate.
    known : bool
        Whether the equation could be read; without it only numbers and words are checked.
    coefficients : mapping of str to OverallCoefficient
        The coefficients that can be spoken of.
    compound : callable
        Compound by name.
    """

    fields: Fields
    book: NameBook
    findings: Findings
    network: Network | None
    basis: Compound
    known: bool
    coefficients: Mapping[str, OverallCoefficient]
    compound: Callable[[str], Compound]

    def _pairs(self, node: Node | None, label: str) -> tuple[tuple[Node, Node], ...]:
        if node is None:
            return ()
        known = (*self.coefficients, *library_names())
        return unsplit_pairs(node, label, self.findings, known)

    def conditions(self, node: Node | None) -> dict[str, Condition]:
        found: dict[str, Condition] = {}
        if node is None:
            return found
        Fields(node, "'conditions'", CONDITION_KEYS, self.findings)
        for key, value in node.pairs:
            if key.text not in CONDITION_KEYS:
                continue
            written = text(value, f"condition {key.text!r}", self.findings)
            quantity = (
                read_quantity(written, value.span, key.text, self.findings) if written else None
            )
            if quantity is None or written is None:
                continue
            try:
                shift, factor = self._condition_factor(key.text, quantity.unit)
            except UnitError as error:
                self.findings.add(
                    error.code, f"{key.text}: {error.reason}", value.span, hint=error.hint
                )
                continue
            amount = quantity.number.value * factor + shift
            if key.text in ("growth rate", "substrate uptake") and amount <= 0:
                self.findings.add(
                    "YN210",
                    f"{key.text} {quantity.number.text} is not positive",
                    value.span,
                    hint="Leave the condition out if it is not known.",
                )
                continue
            if key.text == "temperature" and amount < ABSOLUTE_ZERO:
                self.findings.add(
                    "YN210",
                    f"temperature {written} is below absolute zero",
                    value.span,
                    hint="Write it in degC or K.",
                )
                continue
            if key.text == "pH" and not 0 <= amount <= HIGHEST_PH:
                self.findings.add(
                    "YN210",
                    f"pH {quantity.number.text} lies outside 0 to {HIGHEST_PH}",
                    value.span,
                    hint="Write the pH of the broth, such as 7.0.",
                )
                continue
            found[key.text] = Condition(
                value=amount,
                sd=quantity.sd * factor if quantity.sd else None,
                text=written,
                span=value.span,
            )
        if "growth rate" in found and self.network is not None and self.network.growth is None:
            self.findings.add(
                "YN510",
                "a growth rate is given, and the network has no 'growth'",
                found["growth rate"].span,
                hint="Add 'growth' to the network, or leave the growth rate out.",
            )
        return found

    def _condition_factor(self, name: str, unit: Unit | None) -> tuple[Fraction, Fraction]:
        """Shift and factor to 1/h, mol/g/h or degC; a pH has no unit."""
        if name == "pH":
            if unit is not None:
                raise UnitError(f"a pH has no unit, and '{unit}' is written", "Leave it out.")
            return Fraction(0), Fraction(1)
        if unit is None:
            wanted = {"growth rate": "1/h", "substrate uptake": "mmol/g/h"}.get(name, "degC")
            raise UnitError("the unit is missing", f"Write it in {wanted}.")
        if name == "growth rate":
            return Fraction(0), per_hour(unit)
        if name == "substrate uptake":
            weight = self.basis.weight
            return Fraction(0), specific_rate_mol_per_gram_hour(unit, weight)
        if str(unit) == "degC":
            return Fraction(0), Fraction(1)
        if str(unit) == "K":
            return ABSOLUTE_ZERO, Fraction(1)
        raise UnitError(f"'{unit}' is not a temperature", "Write it in degC or K.")

    def _own_coefficient(self, key: Node, what: str) -> str | None:
        """Name of a coefficient that a statement speaks of, or ``None`` with a finding."""
        name = self.book.resolve(key.text, key.span) if self.known else None
        if name is None or not self.compound(name).formula.elements:
            # A compound whose network could not be read has no formula; that is told there.
            return None
        if name == self.basis.name:
            self.findings.add(
                "YN503",
                f"{what} {name!r} speaks of the basis, whose coefficient is 1",
                key.span,
                hint="State another coefficient.",
            )
            return None
        if name not in self.coefficients:
            self.findings.add(
                "YN503",
                f"{what} {key.text!r} is not in the overall equation",
                key.span,
                hint=near(key.text, self.coefficients)
                or f"Add '+ ? {name}' to the equation, or leave this out.",
            )
            return None
        return name

    def _yield(self, name: str, unit: Unit | None) -> Fraction:
        weight = self.compound(name).weight
        return yield_factor(unit or read_unit(DEFAULT_YIELD_UNIT), weight, self.basis.weight)

    def measured(self, node: Node | None) -> tuple[Measurement, ...]:
        found: dict[str, Measurement] = {}
        for key, value in self._pairs(node, "'measured'"):
            name = self._own_coefficient(key, "measured")
            written = text(value, f"measured {key.text!r}", self.findings)
            if written is None:
                continue
            quantity = read_quantity(written, value.span, f"measured {key.text}", self.findings)
            if quantity is None or name is None:
                continue
            try:
                factor = self._yield(name, quantity.unit)
            except UnitError as error:
                self.findings.add(
                    error.code, f"measured {key.text}: {error.reason}", value.span, hint=error.hint
                )
                continue
            if name in found:
                self.findings.add(
                    "YN504",
                    f"{name!r} is measured twice",
                    key.span,
                    left=f"first {found[name].text}",
                    right=f"again {written}",
                    hint="Keep one, or give their weighted mean.",
                )
                continue
            exact = self.coefficients[name].written
            if exact is not None and exact.last_place is None:
                self.findings.add(
                    "YN504",
                    f"{name!r} is measured, and the equation fixes it",
                    key.span,
                    left=f"equation {exact.text}",
                    right=f"measured {written}",
                    hint="Write ? in the equation.",
                )
                continue
            reach = quantity.number.value + BAND * (quantity.sd or 0)
            if reach < 0 and self.coefficients[name].side is not Direction.EITHER:
                self.findings.add(
                    "YN210",
                    f"measured {key.text} {written} is negative beyond its error",
                    value.span,
                    left=f"positive means {self.coefficients[name].side}",
                    hint="Write its size, or list the compound under 'either side'.",
                )
                continue
            found[name] = Measurement(
                compound=name,
                value=quantity.number.value * factor,
                sd=quantity.sd * factor if quantity.sd else None,
                text=written,
                label=f"measured {name}",
                unit=str(quantity.unit or DEFAULT_YIELD_UNIT),
                unit_given=quantity.unit is not None,
                factor=factor,
                span=key.span,
            )
        return tuple(found.values())

    def demands(self, node: Node | None) -> tuple[Demand, ...]:
        found: dict[str, Demand] = {}
        for key, value in self._pairs(node, "'demands'"):
            name = self._own_coefficient(key, "demand")
            written = text(value, f"demand {key.text!r}", self.findings)
            if written is None:
                continue
            bounds = read_range(written, value.span, f"demand {key.text}", self.findings)
            if bounds is None or name is None:
                continue
            try:
                factor = self._yield(name, bounds.unit)
            except UnitError as error:
                self.findings.add(
                    error.code, f"demand {key.text}: {error.reason}", value.span, hint=error.hint
                )
                continue
            if name in found:
                self.findings.add(
                    "YN504",
                    f"{name!r} is demanded twice",
                    key.span,
                    hint="Write one range: 0.05 to 0.30.",
                )
                continue
            high = bounds.high.value if bounds.high else None
            if (
                high is not None
                and high < 0
                and self.coefficients[name].side is not Direction.EITHER
            ):
                self.findings.add(
                    "YN210",
                    f"demand {key.text} {written} asks for a negative amount",
                    value.span,
                    left=f"positive means {self.coefficients[name].side}",
                    hint="Write its size, or list the compound under 'either side'.",
                )
                continue
            found[name] = Demand(
                compound=name,
                low=bounds.low.value * factor if bounds.low else None,
                high=bounds.high.value * factor if bounds.high else None,
                text=written,
                unit=str(bounds.unit or DEFAULT_YIELD_UNIT),
                unit_given=bounds.unit is not None,
                factor=factor,
                span=key.span,
            )
        return tuple(found.values())

    def aim(self, node: Node | None) -> Aim | None:
        written = text(node, "'aim'", self.findings) if node else None
        if node is None or written is None:
            return None
        word, _, rest = written.partition(" ")
        rest = rest.strip()
        if word not in set(AimDirection) or not rest:
            self.findings.add(
                "YN112",
                f"the aim {written!r} is not understood",
                node.span,
                left="expected 'most ...' or 'least ...'",
                hint="Write 'most succinate'.",
            )
            return None
        direction = AimDirection(word)
        carriers = self.network.carriers if self.network else ()
        energy = [item.name for item in carriers if item.kind is CarrierKind.ENERGY]
        if rest in energy and self.fields.get("energy surplus") is not None:
            surplus = self.fields.get("energy surplus")
            if surplus is not None and surplus.text == EnergySurplus.NONE:
                self.findings.add(
                    "YN515",
                    f"the aim is spare {rest}, and 'energy surplus: none' says there is none",
                    node.span,
                    hint="Leave 'energy surplus' out, or take another aim.",
                )
        if rest in energy:
            if direction is AimDirection.LEAST:
                self.findings.add(
                    "YN503",
                    f"the least {rest} is no question: what is made can be wasted",
                    node.span,
                    hint=f"Write 'most {rest}'.",
                )
            return Aim(direction=direction, compound=rest, is_energy=True, span=node.span)
        name = self.book.resolve(rest, node.span) if self.known else None
        if name is None:
            return None
        if name == self.basis.name:
            self.findings.add(
                "YN502",
                f"the aim is the basis {name!r} itself, whose coefficient is 1",
                node.span,
                hint="Aim at another coefficient, or take another compound as basis.",
            )
            return None
        if name not in self.coefficients:
            self.findings.add(
                "YN503",
                f"the aim {rest!r} is not in the overall equation",
                node.span,
                hint=near(rest, self.coefficients) or f"Add '+ ? {name}' to the equation.",
            )
            return None
        return Aim(direction=direction, compound=name, span=node.span)
