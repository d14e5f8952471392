"""Network files (design of the format: README, "The network file")."""

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
from yieldnet.foundation.exact import WrittenNumber
from yieldnet.foundation.findings import Findings, TooManyFindings, near
from yieldnet.foundation.units import UnitError, Weight, specific_rate_mol_per_gram_hour
from yieldnet.model.expression import Expression
from yieldnet.model.network import (
    BIOMASS,
    GROWTH,
    Carrier,
    CarrierKind,
    Compound,
    Direction,
    Growth,
    Maintenance,
    Network,
    Parameter,
    Reaction,
    Strain,
)
from yieldnet.reading.equations import read_equation
from yieldnet.reading.fields import Fields, entries, number, text, text_list, unsplit_pairs
from yieldnet.reading.fields import formula as formula_of
from yieldnet.reading.names import NameBook
from yieldnet.reading.nodes import Kind, Node, compose
from yieldnet.reading.quantities import read_quantity
from yieldnet.reading.source import MAX_FINDINGS, read_text, too_many

if TYPE_CHECKING:
    from yieldnet.foundation.findings import SourceSpan
    from yieldnet.model.equation import Equation, Term

__all__ = ["MAX_CHARGE", "NETWORK_KEYS", "load_network", "parse_network"]

MAX_CHARGE = 50
"""Largest charge of a compound; beyond it is a slip [-]."""
NETWORK_KEYS = (
    "network",
    "about",
    "parameters",
    "compounds",
    "carriers",
    "crossing",
    "reactions",
    "strains",
    "growth",
    "maintenance",
)
"""Keys of a network file."""
_SIDES = {"in": Direction.CONSUMED, "out": Direction.PRODUCED, "either": Direction.EITHER}


def load_network(path: str) -> tuple[Network | None, Findings]:
    """Network of a file, ``None`` if anything in it is wrong, with all findings.

    Parameters
    ----------
    path : str
        Path of the file.

    Returns
    -------
    Network or None
        The network as written.
    Findings
        Everything wrong or doubtful.
    """
    findings = Findings()
    source = read_text(path, findings)
    if source is None:
        return None, findings
    return parse_network(source, path)


def parse_network(source: str, path: str = "") -> tuple[Network | None, Findings]:
    """Network of a YAML text, ``None`` if anything in it is wrong, with all findings.

    Parameters
    ----------
    source : str
        The text.
    path : str
        Its name in messages.

    Returns
    -------
    Network or None
        The network as written.
    Findings
        Everything wrong or doubtful.
    """
    findings = Findings(limit=MAX_FINDINGS)
    try:
        root = compose(source, path, findings)
    except TooManyFindings:
        findings.items.append(too_many(path))
        root = None
    if root is None:
        return None, findings
    if root.kind is not Kind.MAPPING:
        entries(root, "the file", findings)
        return None, findings
    if any(key.text in {"case", "equation", "aim"} for key, _ in root.pairs):
        findings.add(
            "YN113",
            "this is a case file, and a network is wanted here",
            root.span,
            hint="Give the network file, or give this file where a case is wanted.",
        )
        return None, findings
    try:
        network = _Reader(root, path, findings).network()
    except TooManyFindings:
        findings.items.append(too_many(path))
        network = None
    return (None if findings.refused else network), findings


@dataclass(slots=True)
class _Reader:
    """Reads the sections of one network file in the order in which they need each other."""

    root: Node
    path: str
    findings: Findings
    book: NameBook = field(init=False)
    carriers: list[Carrier] = field(default_factory=list)
    own: list[Compound] = field(default_factory=list)
    parameters: list[Parameter] = field(default_factory=list)
    declared: list[str] = field(default_factory=list)
    crossing_spans: dict[str, SourceSpan] = field(default_factory=dict)

    def __post_init__(self) -> None:
        self.book = NameBook(self.findings)

    def network(self) -> Network:
        fields = Fields(self.root, "the network file", NETWORK_KEYS, self.findings)
        fields.need("network", "Begin the file with 'network: ' and a title.")
        self._parameters(fields.get("parameters"))
        self._carriers(fields.get("carriers"))
        self._compounds(fields.get("compounds"))
        biomass = self._biomass(fields.get("growth"))
        crossing_node = fields.need(
            "crossing", "Say which compounds cross the cell: in, out, either."
        )
        crossing = self._crossing(crossing_node)
        reactions = self._reactions(fields.need("reactions", "Write at least one reaction."))
        growth = self._growth(fields.get("growth"), biomass)
        inside = {item.name for item in self.carriers}
        allowed = crossing_node is None or BIOMASS in dict(crossing) or BIOMASS in inside
        if biomass is not None and not allowed:
            self.findings.add(
                "YN305",
                "growth makes 'biomass', which does not cross the cell boundary",
                fields.span("growth"),
                hint="Add 'biomass' to the 'out' list of 'crossing'.",
            )
        strains = self._strains(fields.get("strains"), reactions)
        maintenance = self._maintenance(fields.get("maintenance"))
        listed = dict.fromkeys([item.name for item in self.own])
        library = self.book.taken
        return Network(
            title=fields.text("network"),
            about=fields.text("about"),
            compounds=(*self.own, *(library[name] for name in library if name not in listed)),
            carriers=tuple(self.carriers),
            crossing=crossing,
            reactions=reactions,
            parameters=tuple(self.parameters),
            strains=strains,
            growth=growth,
            maintenance=maintenance,
            file=self.path,
            crossing_spans=tuple(self.crossing_spans.items()),
            span=self.root.span,
        )

    def root_has(self, key: str) -> bool:
        """Whether the file has a section."""
        return any(name.text == key for name, _ in self.root.pairs)

    def _parameters(self, node: Node | None) -> None:
        for key, value in entries(node, "'parameters'", self.findings) if node else ():
            label = f"parameter {key.text!r}"
            self.declared.append(key.text)
            if not key.text.isidentifier():
                self.findings.add(
                    "YN206",
                    f"{label} cannot be used in an expression",
                    key.span,
                    hint="Use letters, digits and underscores, a letter first.",
                )
            if value.kind is not Kind.MAPPING:
                plain = number(value, label, self.findings)
                if plain is not None:
                    self.parameters.append(
                        Parameter(name=key.text, value=plain.value, span=value.span)
                    )
                continue
            fields = Fields(
                value, label, ("value", "low", "high", "unit", "about", "source"), self.findings
            )
            fields.need("value", "Give its value.")
            main, low, high = (fields.number(name) for name in ("value", "low", "high"))
            if low and high and low.value > high.value:
                self.findings.add(
                    "YN511",
                    f"{label} has its low end above its high end",
                    fields.span("low"),
                    left=f"low {low.text}",
                    right=f"high {high.text}",
                    hint="Exchange them.",
                )
            if main is not None:
                self.parameters.append(
                    Parameter(
                        name=key.text,
                        value=main.value,
                        low=low.value if low else None,
                        high=high.value if high else None,
                        unit=fields.text("unit"),
                        about=fields.text("about"),
                        source=fields.text("source"),
                        span=fields.span("value"),
                    )
                )

    def _carriers(self, node: Node | None) -> None:
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

    def _compounds(self, node: Node | None) -> None:
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
            if key.text == BIOMASS and self.root_has("growth"):
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

    def _biomass(self, node: Node | None) -> Compound | None:
        """Biomass compound; read before the equations, which name it."""
        if node is None or node.kind is not Kind.MAPPING:
            return None
        value = next((item for key, item in node.pairs if key.text == BIOMASS), None)
        compound: Compound | None = None
        if value is not None and value.kind is Kind.MAPPING:
            fields = Fields(value, "the biomass", ("formula", "ash", "about"), self.findings)
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
            if formula is not None:
                compound = Compound(
                    name=BIOMASS,
                    formula=formula,
                    ash=ash.value if ash else Fraction(0),
                    about=fields.text("about"),
                    span=value.span,
                )
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

    def _crossing(self, node: Node | None) -> tuple[tuple[str, Direction], ...]:
        found: dict[str, tuple[Direction, SourceSpan]] = {}
        if node is None:
            return ()
        Fields(node, "'crossing'", tuple(_SIDES), self.findings)
        known = (*self.book.own, *library_names())
        for key, value in node.pairs:
            if key.text not in _SIDES:
                continue
            for item in text_list(value, f"'{key.text}' of 'crossing'", self.findings, known):
                name = self.book.resolve(item.text, item.span)
                if name is None:
                    continue
                if name in {carrier.name for carrier in self.carriers}:
                    self.findings.add(
                        "YN305",
                        f"the carrier {name!r} cannot cross the cell boundary",
                        item.span,
                        hint="Carriers stay inside; write a reaction that makes or uses it.",
                    )
                elif name in found:
                    self.findings.add(
                        "YN305",
                        f"{name!r} crosses twice",
                        item.span,
                        left=f"first at line {found[name][1].line}",
                        hint="List it once; 'either' lets it go both ways.",
                    )
                else:
                    found[name] = (_SIDES[key.text], item.span)
                    self.crossing_spans[name] = item.span
        return tuple((name, direction) for name, (direction, _) in found.items())

    def _equation(self, node: Node, label: str) -> Equation | None:
        written = text(node, f"the equation of {label}", self.findings)
        if written is None:
            return None
        equation = read_equation(
            written, node.span, label, self.findings, self.book.resolve, node.locate
        )
        known = self.declared
        for _, term in equation.terms() if equation else ():
            if not isinstance(term.coefficient, Expression):
                continue
            for name in term.coefficient.names():
                if name not in known:
                    self.findings.add(
                        "YN302",
                        f"{label}: parameter {name!r} is not known",
                        node.span,
                        hint=near(name, known) or "Define it in 'parameters'.",
                    )
        return equation

    def _reactions(self, node: Node | None) -> tuple[Reaction, ...]:
        found: list[Reaction] = []
        for key, value in entries(node, "'reactions'", self.findings) if node else ():
            label = f"reaction {key.text!r}"
            place, group, about, source = value, "", "", ""
            if key.text == GROWTH:
                self.findings.add(
                    "YN305",
                    f"{key.text!r} is the name of the growth equation",
                    key.span,
                    hint="Move it to 'growth', or rename the reaction.",
                )
            if value.kind is Kind.MAPPING:
                fields = Fields(
                    value, label, ("equation", "group", "about", "source"), self.findings
                )
                inner = fields.need("equation", "Write its equation.")
                group, about, source = (fields.text(name) for name in ("group", "about", "source"))
                if inner is None:
                    continue
                place = inner
            equation = self._equation(place, label)
            if equation is not None:
                found.append(
                    Reaction(
                        name=key.text,
                        equation=equation,
                        group=group,
                        about=about,
                        source=source,
                        span=key.span,
                    )
                )
        if node is not None and node.kind is Kind.MAPPING and not node.pairs:
            self.findings.add(
                "YN111", "'reactions' is empty", node.span, hint="Write at least one reaction."
            )
        names = {item.name for item in found}
        for group in dict.fromkeys(item.group for item in found):
            members = [item for item in found if item.group == group]
            if group in names and [item.name for item in members] != [group]:
                self.findings.add(
                    "YN305",
                    f"{group!r} is the name of a reaction and of a group",
                    members[0].span,
                    hint="Rename one of them, so that a knock-out means one thing.",
                )
        return tuple(found)

    def _growth(self, node: Node | None, biomass: Compound | None) -> Growth | None:
        if node is None:
            return None
        fields = Fields(
            node, "'growth'", ("biomass", "per", "equation", "about", "source"), self.findings
        )
        fields.need("biomass", "Give its formula and ash.")
        per = fields.text("per") or "mol"
        if per not in {"mol", "g"}:
            self.findings.add(
                "YN112",
                "'per' of 'growth' is not known",
                fields.span("per"),
                left="expected mol or g",
                right=f"found {per!r}",
            )
        place = fields.need("equation", "Write precursors -> biomass.")
        equation = self._equation(place, "growth") if place else None
        if equation is None or biomass is None or place is None:
            return None
        if equation.reversible:
            self.findings.add(
                "YN208",
                "the growth equation runs one way",
                place.span,
                left="found <->",
                hint="Write ->.",
            )
        made = [term for term in equation.right if term.name == BIOMASS]
        if len(made) != 1 or not _is_one(made[0]):
            self.findings.add(
                "YN414",
                "the growth equation must make 'biomass' once, with coefficient 1",
                place.span,
                hint=f"End it with '-> {BIOMASS} + ...'.",
            )
            return None
        return Growth(
            biomass=biomass,
            equation=equation,
            per_gram=per == "g",
            about=fields.text("about"),
            source=fields.text("source"),
            span=place.span,
        )

    def _strains(self, node: Node | None, reactions: tuple[Reaction, ...]) -> tuple[Strain, ...]:
        known = tuple(
            dict.fromkeys(name for item in reactions for name in (item.name, item.group) if name)
        )
        known += (GROWTH,)
        strains: list[Strain] = []
        for key, value in entries(node, "'strains'", self.findings) if node else ():
            off = text_list(value, f"strain {key.text!r}", self.findings, known)
            for item in off:
                if item.text not in known:
                    self.findings.add(
                        "YN302",
                        f"strain {key.text!r} switches off {item.text!r}, which is not known",
                        item.span,
                        hint=near(item.text, known) or "Name a reaction or a group.",
                    )
            strains.append(
                Strain(name=key.text, off=tuple(item.text for item in off), span=key.span)
            )
        return tuple(strains)

    def _maintenance(self, node: Node | None) -> Maintenance | None:
        if node is None:
            return None
        pairs = entries(node, "'maintenance'", self.findings)
        if len(pairs) != 1:
            if node.kind is Kind.MAPPING:
                self.findings.add(
                    "YN112",
                    f"'maintenance' names {len(pairs)} carriers",
                    node.span,
                    left="expected one",
                    hint="Write {ATP: 2.5 mmol/g/h}.",
                )
            return None
        key, value = pairs[0]
        energy = [item.name for item in self.carriers if item.kind is CarrierKind.ENERGY]
        if key.text not in energy:
            self.findings.add(
                "YN302",
                f"maintenance is told in {key.text!r}, which is no energy carrier",
                key.span,
                hint=near(key.text, energy) or "Name a carrier of kind energy.",
            )
        source = ""
        if value.kind is Kind.MAPPING:
            fields = Fields(value, "'maintenance'", ("value", "source"), self.findings)
            source = fields.text("source")
            inner = fields.need("value", "Give the rate.")
            if inner is None:
                return None
            value = inner
        written = text(value, "'maintenance'", self.findings)
        quantity = (
            read_quantity(written, value.span, "maintenance", self.findings) if written else None
        )
        if quantity is None or written is None:
            return None
        try:
            if quantity.unit is None:
                raise UnitError("the unit is missing", "Write it in mmol/g/h.")
            factor = specific_rate_mol_per_gram_hour(
                quantity.unit, Weight(name=key.text, molar_mass=None, carbon=None)
            )
        except UnitError as error:
            self.findings.add(
                error.code, f"maintenance: {error.reason}", value.span, hint=error.hint
            )
            return None
        if quantity.sd is not None:
            self.findings.add(
                "YN112",
                "maintenance has an error, which nothing here would use",
                value.span,
                hint="Write the value alone; a parameter may have a low and a high.",
            )
        if quantity.number.value < 0:
            self.findings.add(
                "YN210",
                f"maintenance {quantity.number.text} is negative",
                value.span,
                hint="Maintenance spends energy: write its size.",
            )
        return Maintenance(
            carrier=key.text,
            rate_mol_per_gram_hour=quantity.number.value * factor,
            written=quantity.number,
            unit=str(quantity.unit),
            source=source,
            span=value.span,
        )


def _is_one(term: Term) -> bool:
    number = term.coefficient
    return isinstance(number, WrittenNumber) and number.value == 1
