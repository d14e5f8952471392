"""The overall equation of a file, its own compounds and those of either side.

Case files and cultivation runs say these three things alike, so they are read in one place.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.formula import Formula
from yieldnet.chemistry.library import find_biomass, find_compound, library_names
from yieldnet.foundation.exact import WrittenNumber
from yieldnet.model.case import OverallCoefficient
from yieldnet.model.equation import Unknown
from yieldnet.model.network import Compound, Direction
from yieldnet.reading.composition import COMPOSED_KEYS, is_composed, read_composed
from yieldnet.reading.equations import read_equation
from yieldnet.reading.fields import Fields, text, text_list, unsplit_pairs
from yieldnet.reading.fields import formula as formula_of
from yieldnet.reading.nodes import Kind, Node

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Findings, SourceSpan
    from yieldnet.model.equation import Equation, Term
    from yieldnet.reading.names import NameBook

__all__ = ["OverallReader"]


@dataclass(slots=True, kw_only=True)
class OverallReader:
    """Reads what a file says about its overall equation; later calls use what earlier ones took.

    Parameters
    ----------
    book : NameBook
        Names that may be used.
    findings : Findings
        Receives what is wrong.
    compounds : dict of str to Compound
        Every compound besides the basis, in written order; filled by reading.
    coefficients : dict of str to OverallCoefficient
        The same as coefficients.
    basis : Compound or None
        First compound on the left, once the equation was read.
    """

    book: NameBook
    findings: Findings
    compounds: dict[str, Compound] = field(default_factory=dict)
    coefficients: dict[str, OverallCoefficient] = field(default_factory=dict)
    basis: Compound | None = None

    def own_compounds(self, node: Node) -> None:
        """Take the compounds that the file defines with their formulas."""
        for key, value in unsplit_pairs(node, "'compounds'", self.findings, library_names()):
            label = f"compound {key.text!r}"
            twin = self.book.twin(key.text)
            if twin is not None:
                self.findings.add(
                    "YN303",
                    f"{key.text!r} and {twin!r} are two names of one compound",
                    key.span,
                    hint="Define it once, and use one name throughout the file.",
                )
            formula, ash, about = self._own_formula(value, label)
            self.book.define(key.text, None, key.span)
            if formula is None:
                continue
            entry = find_compound(key.text)
            if entry and (
                dict(entry.formula.elements) != dict(formula.elements)
                or entry.formula.charge != formula.charge
            ):
                self.findings.add(
                    "YN304",
                    f"{key.text!r} has another formula in the compound library",
                    key.span,
                    left=f"here {formula}",
                    right=f"library {entry.formula}",
                    hint="Leave it out to use the library's, or give it another name.",
                )
            self.book.own[key.text] = Compound(
                name=key.text, formula=formula, ash=ash, about=about, span=key.span
            )

    def _own_formula(self, value: Node, label: str) -> tuple[Formula | None, Fraction, str]:
        """Formula, ash [g/g] and remark of a compound that the file defines."""
        ash: Fraction | None = None
        written: Node | None = value
        if value.kind is Kind.MAPPING:
            keys = ("formula", "ash", "about", *COMPOSED_KEYS)
            inner = Fields(value, label, keys, self.findings)
            if is_composed(inner):
                composed = read_composed(inner, label, self.findings)
                if composed is None:
                    return None, Fraction(0), ""
                return composed.formula, composed.minerals, composed.about
            share = inner.number("ash")
            if share is not None and not 0 <= share.value < 1:
                self.findings.add(
                    "YN210",
                    f"ash {share.text} is not a fraction of the dry weight",
                    inner.span("ash"),
                    hint="Write 0.05 for 5 % of the dry weight.",
                )
            elif share is not None:
                ash = share.value
            written = inner.need("formula", "Give its formula.")
        organism = find_biomass(written.text) if written else None
        if organism is not None:
            known = organism.ash or Fraction(0)
            return organism.formula, known if ash is None else ash, ""
        formula = formula_of(written, label, self.findings) if written is not None else None
        return formula, ash or Fraction(0), ""

    def compound(self, name: str) -> Compound:
        """Compound by a name that :class:`NameBook` gave."""
        found = self.book.own.get(name) or self.book.taken.get(name)
        return found or Compound(name=name, formula=Formula(()))

    def equation(self, node: Node | None) -> Equation | None:
        """Overall equation, whose first compound becomes the basis; ``None`` with findings."""
        if node is None:
            return None
        written = text(node, "the equation", self.findings)
        if written is None:
            return None
        equation = read_equation(
            written, node.span, "overall equation", self.findings, self.book.resolve, node.locate
        )
        if equation is None:
            return None
        if equation.reversible:
            self.findings.add(
                "YN208",
                "the overall equation runs one way",
                node.span,
                left="found <->",
                hint="Write ->; list a compound under 'either side' if its side is not known.",
            )
        basis, *others = equation.terms()
        self._take_basis(basis[1], node)
        for sign, term in others:
            side = Direction.CONSUMED if sign < 0 else Direction.PRODUCED
            if self.basis is not None and term.name == self.basis.name:
                self.findings.add(
                    "YN501",
                    f"the basis {term.name!r} stands twice in the equation",
                    node.span,
                    hint="The first compound on the left is the basis; it stands there alone.",
                )
                continue
            if term.name in self.coefficients:
                self.findings.add(
                    "YN305",
                    f"{term.name!r} stands twice in the equation",
                    node.span,
                    hint="Keep one; list it under 'either side' if its side is not known.",
                )
                continue
            written_number: WrittenNumber | None = None
            if isinstance(term.coefficient, WrittenNumber):
                written_number = term.coefficient
            elif not isinstance(term.coefficient, Unknown):
                self.findings.add(
                    "YN208",
                    f"the coefficient {term.coefficient} of {term.name!r} is an expression",
                    node.span,
                    hint="Write a number or ? in the overall equation.",
                )
            self._list(term.name, side, written_number, node.span)
        return equation

    def _take_basis(self, term: Term, node: Node) -> None:
        name, coefficient = term.name, term.coefficient
        self.basis = self.compound(name)
        exact_one = isinstance(coefficient, WrittenNumber) and coefficient.value == 1
        shown = coefficient.text if isinstance(coefficient, WrittenNumber) else str(coefficient)
        if not exact_one:
            self.findings.add(
                "YN501",
                f"the basis {name!r} has the coefficient {shown}",
                node.span,
                left="expected 1 or none",
                hint="All other coefficients are told per mol of it: divide them.",
            )

    def _list(
        self, name: str, side: Direction, written: WrittenNumber | None, span: SourceSpan
    ) -> None:
        self.coefficients[name] = OverallCoefficient(
            name=name, side=side, written=written, span=span
        )
        self.compounds[name] = self.compound(name)

    def either_side(self, node: Node | None) -> None:
        """Take the compounds whose side is not known."""
        if node is None:
            return
        known = (*self.book.own, *library_names())
        for item in text_list(node, "'either side'", self.findings, known):
            name = self.book.resolve(item.text, item.span)
            if name is None:
                continue
            if name in self.coefficients or (self.basis and name == self.basis.name):
                self.findings.add(
                    "YN305",
                    f"{name!r} stands in the equation and under 'either side'",
                    item.span,
                    hint="Keep it in one of them.",
                )
                continue
            self._list(name, Direction.EITHER, None, item.span)
