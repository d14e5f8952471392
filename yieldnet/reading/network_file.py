"""Network files (design of the format: README, "The network file")."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from yieldnet.chemistry.library import (
    library_names,
)
from yieldnet.foundation.exact import WrittenNumber
from yieldnet.foundation.findings import Findings, TooManyFindings, near
from yieldnet.model.expression import Expression
from yieldnet.model.network import (
    BIOMASS,
    GROWTH,
    CarrierKind,
    Compound,
    Direction,
    Growth,
    Network,
    Parameter,
    Reaction,
    Strain,
)
from yieldnet.reading.equations import read_equation
from yieldnet.reading.fields import Fields, entries, text, text_list
from yieldnet.reading.maintenance import read_maintenance
from yieldnet.reading.names import NameBook
from yieldnet.reading.network_matter import MatterReader
from yieldnet.reading.network_meaning import read_meant_for
from yieldnet.reading.network_parameters import read_parameter_sets, read_parameters
from yieldnet.reading.nodes import Kind, Node, compose
from yieldnet.reading.source import MAX_FINDINGS, read_text, too_many

if TYPE_CHECKING:
    from yieldnet.foundation.findings import SourceSpan
    from yieldnet.model.equation import Equation, Term

__all__ = ["NETWORK_KEYS", "compose_network", "load_network", "parse_network"]

NETWORK_KEYS = (
    "network",
    "about",
    "meant for",
    "parameters",
    "parameter sets",
    "compounds",
    "carriers",
    "crossing",
    "reactions",
    "strains",
    "growth",
    "maintenance",
    "reproduces",
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
        _, network = compose_network(source, path, findings)
    except TooManyFindings:
        findings.items.append(too_many(path))
        network = None
    return (None if findings.refused else network), findings


def compose_network(
    source: str, path: str, findings: Findings
) -> tuple[Node | None, Network | None]:
    """Top node of a YAML text and the network in it, for readers of its other sections.

    Parameters
    ----------
    source : str
        The text.
    path : str
        Its name in messages.
    findings : Findings
        Receives what is wrong or doubtful.

    Returns
    -------
    Node or None
        The mapping of the file; ``None`` if it is none.
    Network or None
        The network as written; ``None`` if the file is no network. It may be wrong in parts, which
        the findings say.
    """
    root = compose(source, path, findings)
    if root is None:
        return None, None
    if root.kind is not Kind.MAPPING:
        entries(root, "the file", findings)
        return None, None
    if any(key.text in {"case", "equation", "aim"} for key, _ in root.pairs):
        findings.add(
            "YN113",
            "this is a case file, and a network is wanted here",
            root.span,
            hint="Give the network file, or give this file where a case is wanted.",
        )
        return None, None
    return root, _Reader(root, path, findings).network()


@dataclass(slots=True)
class _Reader:
    """Reads the sections of one network file in the order in which they need each other."""

    root: Node
    path: str
    findings: Findings
    book: NameBook = field(init=False)
    matter: MatterReader = field(init=False)
    parameters: tuple[Parameter, ...] = ()
    declared: tuple[str, ...] = ()
    crossing_spans: dict[str, SourceSpan] = field(default_factory=dict)

    def __post_init__(self) -> None:
        self.book = NameBook(self.findings)
        has_growth = any(name.text == "growth" for name, _ in self.root.pairs)
        self.matter = MatterReader(self.findings, self.book, has_growth)

    def network(self) -> Network:
        fields = Fields(self.root, "the network file", NETWORK_KEYS, self.findings)
        fields.need("network", "Begin the file with 'network: ' and a title.")
        self.parameters, self.declared = read_parameters(fields.get("parameters"), self.findings)
        matter = self.matter
        matter.read_carriers(fields.get("carriers"))
        matter.read_compounds(fields.get("compounds"))
        biomass = matter.read_biomass(fields.get("growth"))
        crossing_node = fields.need(
            "crossing", "Say which compounds cross the cell: in, out, either."
        )
        crossing = self._crossing(crossing_node)
        reactions = self._reactions(fields.need("reactions", "Write at least one reaction."))
        growth = self._growth(fields.get("growth"), biomass)
        inside = {item.name for item in matter.carriers}
        allowed = crossing_node is None or BIOMASS in dict(crossing) or BIOMASS in inside
        if biomass is not None and not allowed:
            self.findings.add(
                "YN305",
                "growth makes 'biomass', which does not cross the cell boundary",
                fields.span("growth"),
                hint="Add 'biomass' to the 'out' list of 'crossing'.",
            )
        meant_for = read_meant_for(
            fields.get("meant for"), crossing, self.book, self.findings, crossing_node is not None
        )
        strains = self._strains(fields.get("strains"), reactions)
        energy = [item.name for item in matter.carriers if item.kind is CarrierKind.ENERGY]
        maintenance = read_maintenance(fields.get("maintenance"), energy, self.findings)
        parameter_sets = read_parameter_sets(
            fields.get("parameter sets"), self.parameters, self.declared, energy, self.findings
        )
        listed = {item.name for item in matter.own}
        library = self.book.taken
        return Network(
            title=fields.text("network"),
            about=fields.text("about"),
            compounds=(
                *self.matter.own,
                *(library[name] for name in library if name not in listed),
            ),
            carriers=tuple(self.matter.carriers),
            crossing=crossing,
            reactions=reactions,
            parameters=self.parameters,
            parameter_sets=parameter_sets,
            meant_for=meant_for,
            strains=strains,
            growth=growth,
            maintenance=maintenance,
            file=self.path,
            crossing_spans=tuple(self.crossing_spans.items()),
            span=self.root.span,
        )

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
                if name in {carrier.name for carrier in self.matter.carriers}:
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


def _is_one(term: Term) -> bool:
    number = term.coefficient
    return isinstance(number, WrittenNumber) and number.value == 1
