"""The matter of a network file: carriers, compounds and biomass, with their formulas."""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.formula import Formula
from yieldnet.chemistry.library import (
    biomass_entries,
    find_biomass,
    find_compound,
    library_names,
)
from yieldnet.foundation.findings import near
from yieldnet.model.network import BIOMASS, Carrier, CarrierKind, Compound
from yieldnet.reading.composition import COMPOSED_KEYS, is_composed, read_composed
from yieldnet.reading.fields import Fields, entries, text, unsplit_pairs
from yieldnet.reading.fields import formula as formula_of
from yieldnet.reading.nodes import Kind

if TYPE_CHECKING:
    from yieldnet.foundation.exact import WrittenNumber
    from yieldnet.foundation.findings import Findings, SourceSpan
    from yieldnet.reading.names import NameBook
    from yieldnet.reading.nodes import Node

__all__ = ["MAX_CHARGE", "MatterReader"]

MAX_CHARGE = 50
"""Largest charge of a compound; beyond it is a slip [-]."""


@dataclass(slots=True)
class MatterReader:
    """Reads what has a formula, and gives every name to the book.

    Parameters
    ----------
    findings : Findings
        Receives what is wrong.
    book : NameBook
        Receives the names.
    has_growth : bool
        Whether the file has growth, which alone defines biomass then.
    carriers : list of Carrier
        Carriers read so far.
    own : list of Compound
        Compounds that the file defines, biomass included.
    """

    findings: Findings
    book: NameBook
    has_growth: bool
    carriers: list[Carrier] = field(default_factory=list)
    own: list[Compound] = field(default_factory=list)

    def read_carriers(self, node: Node | None) -> None:
        """Carriers, energy and redox, into the book and the list."""
        for key, value in entries(node, "'carriers'", self.findings) if node else ():
            label = f"carrier {key.text!r}"
            fields = Fields(value, label, ("kind", "formula", "about"), self.findings)
            self.book.define(key.text, None, key.span)
            if key.text == BIOMASS:
                self.findings.add(
                    "YN305",
                    f"{BIOMASS!r} is what growth makes, and cannot be a carrier",
                    key.span,
                    hint="Rename the carrier.",
                )
            kind = fields.need("kind", "Say 'kind: energy' or 'kind: redox'.")
            if kind is None:
                continue
            if kind.text not in set(CarrierKind):
                self.findings.add(
                    "YN112",
                    f"{label} has an unknown kind",
                    kind.span,
                    left="expected energy or redox",
                    right=f"found {kind.text!r}",
                )
                continue
            written = fields.get("formula")
            formula = Formula(()) if written is None else formula_of(written, label, self.findings)
            if kind.text == CarrierKind.ENERGY and formula and formula.elements:
                self.findings.add(
                    "YN415",
                    f"{label} is an energy carrier with elements",
                    fields.span("formula"),
                    left=f"formula {formula}",
                    hint="Leave its formula out: phosphate and the spent half are not written.",
                )
            if kind.text == CarrierKind.REDOX and written is None:
                self.findings.add(
                    "YN111",
                    f"{label} has no 'formula'",
                    value.span,
                    hint="Give what it carries: 'formula: H2' for NADH.",
                )
            if formula is not None:
                self.carriers.append(
                    Carrier(
                        name=key.text,
                        kind=CarrierKind(kind.text),
                        formula=formula,
                        about=fields.text("about"),
                        span=key.span,
                    )
                )
                self._against_library(key, formula)

    def read_compounds(self, node: Node | None) -> None:
        """Compounds with the formulas that the file gives them."""
        known = library_names()
        pairs = unsplit_pairs(node, "'compounds'", self.findings, known) if node else ()
        for key, value in pairs:
            label = f"compound {key.text!r}"
            twin = self.book.twin(key.text)
            if twin is not None:
                self.findings.add(
                    "YN303",
                    f"{key.text!r} and {twin!r} are two names of one compound",
                    key.span,
                    hint="Define it once, and use one name throughout the file.",
                )
            if key.text == BIOMASS and self.has_growth:
                self.findings.add(
                    "YN305",
                    f"{BIOMASS!r} is defined here and under 'growth'",
                    key.span,
                    hint="Keep it under 'growth' alone.",
                )
                continue
            if key.text in self.book.own:
                self.findings.add(
                    "YN305",
                    f"{key.text!r} is a carrier and a compound",
                    key.span,
                    hint="Keep it in one of the two sections.",
                )
                continue
            about, charge, place = "", None, value
            if value.kind is Kind.MAPPING:
                fields = Fields(value, label, ("formula", "charge", "about"), self.findings)
                about, charge = fields.text("about"), fields.number("charge")
                inner = fields.need("formula", "Give its formula.")
                if inner is None:
                    self.book.define(key.text, None, key.span)
                    continue
                place = inner
            formula = formula_of(place, label, self.findings)
            if formula is not None and charge is not None:
                formula = self._charged(formula, charge, label, place.span)
            self._against_library(key, formula)
            compound = None
            if formula is not None:
                compound = Compound(name=key.text, formula=formula, about=about, span=key.span)
                self.own.append(compound)
            self.book.define(key.text, compound, key.span)

    def _charged(
        self, formula: Formula, charge: WrittenNumber, label: str, span: SourceSpan
    ) -> Formula:
        """Formula with the charge that stands beside it."""
        if formula.charge:
            self.findings.add(
                "YN305",
                f"{label} has a charge in its formula and another beside it",
                span,
                left=f"formula {formula.charge:+d}",
                right=f"charge {charge.text}",
                hint="Keep one.",
            )
        elif charge.value.denominator != 1:
            self.findings.add(
                "YN201",
                f"{label}: charge {charge.text} is not whole",
                span,
                hint="Write a whole number.",
            )
        elif abs(charge.value) > MAX_CHARGE:
            self.findings.add(
                "YN202",
                f"{label}: no compound has the charge {charge.text}",
                span,
                left=f"limit {MAX_CHARGE}",
            )
        else:
            return Formula(formula.elements, int(charge.value))
        return formula

    def _against_library(self, key: Node, formula: Formula | None) -> None:
        entry = find_compound(key.text)
        if entry is None or formula is None:
            return
        same = dict(entry.formula.elements) == dict(formula.elements)
        if not same or entry.formula.charge != formula.charge:
            self.findings.add(
                "YN304",
                f"{key.text!r} has another formula in the compound library",
                key.span,
                left=f"here {formula}",
                right=f"library {entry.formula}",
                hint="Leave the formula out to use the library's, or give the compound another name"
                " (acids are written undissociated there).",
            )

    def read_biomass(self, node: Node | None) -> Compound | None:
        """Biomass compound; read before the equations, which name it."""
        if node is None or node.kind is not Kind.MAPPING:
            return None
        value = next((item for key, item in node.pairs if key.text == BIOMASS), None)
        compound: Compound | None = None
        if value is not None and value.kind is Kind.MAPPING:
            compound = self._own_biomass(value)
        elif value is not None:
            word = text(value, "the biomass", self.findings)
            entry = find_biomass(word) if word else None
            if entry is not None:
                compound = Compound(
                    name=BIOMASS,
                    formula=entry.formula,
                    ash=entry.ash or Fraction(0),
                    about=f"{entry.name}: {entry.source}",
                    span=value.span,
                )
            elif word:
                self.findings.add(
                    "YN301",
                    f"biomass {word!r} is not in the library",
                    value.span,
                    hint=near(word, [item.name for item in biomass_entries()])
                    or "Write a mapping: {formula: CH1.8O0.5N0.2, ash: 0.05}.",
                )
        self.book.define(BIOMASS, compound, node.span)
        if compound is not None:
            self.own.append(compound)
            if compound.formula["P"]:
                self.findings.add(
                    "YN413",
                    f"the biomass formula {compound.formula} holds phosphorus",
                    compound.span,
                    hint="Phosphate is left out of these networks: leave P out of the biomass.",
                )
        return compound

    def _own_biomass(self, value: Node) -> Compound | None:
        """Biomass with a formula of its own, or put together from macromolecules."""
        keys = ("formula", "ash", "about", *COMPOSED_KEYS)
        fields = Fields(value, "the biomass", keys, self.findings)
        about = fields.text("about")
        if is_composed(fields):
            composed = read_composed(fields, "the biomass", self.findings)
            if composed is None:
                return None
            return Compound(
                name=BIOMASS,
                formula=composed.formula,
                ash=composed.minerals,
                about=f"{about}; {composed.about}" if about else composed.about,
                span=value.span,
            )
        written = fields.need("formula", "Give its ash-free formula, such as CH1.8O0.5N0.2.")
        formula = formula_of(written, "the biomass", self.findings) if written else None
        ash = fields.number("ash")
        if ash is not None and not 0 <= ash.value < 1:
            self.findings.add(
                "YN210",
                f"ash {ash.text} is not a fraction of the dry weight",
                fields.span("ash"),
                hint="Write 0.05 for 5 % of the dry weight.",
            )
            ash = None
        if formula is None:
            return None
        return Compound(
            name=BIOMASS,
            formula=formula,
            ash=ash.value if ash else Fraction(0),
            about=about,
            span=value.span,
        )
