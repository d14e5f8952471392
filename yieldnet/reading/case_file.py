"""Case files (design of the format: README, "The case file")."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from fractions import Fraction
from pathlib import Path
from typing import TYPE_CHECKING

from yieldnet.chemistry.formula import Formula
from yieldnet.chemistry.library import find_biomass, find_compound, library_names
from yieldnet.foundation.exact import WrittenNumber
from yieldnet.foundation.findings import Findings, Severity, TooManyFindings, near
from yieldnet.model.case import Case, EnergySurplus, Named, OverallCoefficient
from yieldnet.model.equation import Unknown
from yieldnet.model.network import Compound, Direction
from yieldnet.reading.case_statements import StatementReader
from yieldnet.reading.equations import read_equation
from yieldnet.reading.fields import Fields, entries, number, text, text_list, unsplit_pairs
from yieldnet.reading.fields import formula as formula_of
from yieldnet.reading.names import NameBook
from yieldnet.reading.network_file import load_network
from yieldnet.reading.nodes import Kind, Node, compose
from yieldnet.reading.shipped import find_shipped, shipped_names
from yieldnet.reading.source import MAX_FINDINGS, near_file, read_text, too_many

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from yieldnet.foundation.findings import SourceSpan
    from yieldnet.model.equation import Equation, Term
    from yieldnet.model.network import Network

    NetworkLoader = Callable[[str], tuple[Network | None, Findings]]

__all__ = ["CASE_KEYS", "load_case"]

CASE_KEYS = (
    "case",
    "about",
    "network",
    "strain",
    "equation",
    "either side",
    "compounds",
    "conditions",
    "measured",
    "demands",
    "aim",
    "energy surplus",
    "knock-outs",
    "parameters",
)
"""Keys of a case file."""
_LOADERS: Mapping[str, NetworkLoader] = {".yaml": load_network, ".yml": load_network}


def load_case(
    path: str, loaders: Mapping[str, NetworkLoader] = _LOADERS
) -> tuple[Case | None, Findings]:
    """Case of a file with its network, ``None`` if anything is wrong, with all findings.

    Parameters
    ----------
    path : str
        Path of the file.
    loaders : mapping of str to callable
        Loader of a network file by the ending of its name.

    Returns
    -------
    Case or None
        The case as written.
    Findings
        Everything wrong or doubtful, in the case and in its network.
    """
    findings = Findings(limit=MAX_FINDINGS)
    try:
        case = _load(path, loaders, findings)
    except TooManyFindings:
        findings.items.append(too_many(path))
        return None, findings
    if case is None or findings.refused:
        return None, findings
    return replace(case, findings=findings.sorted()), findings


def _load(path: str, loaders: Mapping[str, NetworkLoader], findings: Findings) -> Case | None:
    source = read_text(path, findings)
    root = compose(source, path, findings) if source is not None else None
    if root is None:
        return None
    if root.kind is not Kind.MAPPING:
        entries(root, "the file", findings)
        return None
    keys = {key.text for key, _ in root.pairs}
    if keys & {"reactions", "crossing"} and "equation" not in keys:
        findings.add(
            "YN113",
            "this is a network file, and a case is wanted here",
            root.span,
            hint="Give a case file; its line 'network:' names this one.",
        )
        return None
    return _Reader(root, path, findings, loaders).case()


@dataclass(slots=True)
class _Reader:
    """Reads the sections of one case file; later sections use what earlier ones defined."""

    root: Node
    path: str
    findings: Findings
    loaders: Mapping[str, NetworkLoader]
    fields: Fields = field(init=False)
    book: NameBook = field(init=False)
    network: Network | None = None
    compounds: dict[str, Compound] = field(default_factory=dict)
    coefficients: dict[str, OverallCoefficient] = field(default_factory=dict)
    basis: Compound | None = None

    def __post_init__(self) -> None:
        self.fields = Fields(self.root, "the case file", CASE_KEYS, self.findings)
        self.book = NameBook(self.findings)

    def case(self) -> Case | None:
        fields = self.fields
        fields.need("case", "Begin the file with 'case: ' and a title.")
        self._network(fields.get("network"))
        self._own_compounds(fields.get("compounds"))
        equation = self._equation(
            fields.need("equation", "Write substrate + ? oxygen -> ? product + ? biomass.")
        )
        self._either_side(fields.get("either side"))
        if equation is not None and self.basis is not None:
            self._crossing_allowed()
        reader = StatementReader(
            fields=fields,
            book=self.book,
            findings=self.findings,
            network=self.network,
            basis=self.basis or Compound(name="", formula=Formula(())),
            known=self.basis is not None,
            coefficients=self.coefficients,
            compound=self._compound,
        )
        conditions = reader.conditions(fields.get("conditions"))
        measured = reader.measured(fields.get("measured"))
        demands = reader.demands(fields.get("demands"))
        aim = reader.aim(fields.get("aim"))
        surplus = self._surplus(fields.get("energy surplus"))
        strain = self._strain(fields.get("strain"))
        knock_outs = self._knock_outs(fields.get("knock-outs"), strain)
        parameters = self._parameters(fields.get("parameters"))
        if equation is None or self.basis is None:
            return None
        return Case(
            title=fields.text("case"),
            about=fields.text("about"),
            network=self.network,
            equation=equation,
            basis=self.basis,
            coefficients=tuple(self.coefficients.values()),
            compounds=(self.basis, *self.compounds.values()),
            strain=strain,
            growth_rate=conditions.get("growth rate"),
            substrate_uptake=conditions.get("substrate uptake"),
            temperature=conditions.get("temperature"),
            measured=measured,
            demands=demands,
            aim=aim,
            energy_surplus=surplus or EnergySurplus.LOST,
            energy_surplus_given=surplus is not None,
            knock_outs=knock_outs,
            parameters=tuple((name, value) for name, value, _ in parameters),
            parameter_spans=tuple((name, span) for name, _, span in parameters),
            file=self.path,
            span=self.root.span,
        )

    def _network(self, node: Node | None) -> None:
        if node is None:
            return
        written = text(node, "'network'", self.findings)
        if written is None:
            self.book.accept_all = True
            return
        beside = Path(self.path).parent / written
        shipped = find_shipped(written)
        if beside.suffix not in self.loaders and shipped is None:
            self.book.accept_all = True
            self.findings.add(
                "YN513",
                f"network {written!r} is neither a file nor a shipped network",
                node.span,
                hint=near(written, shipped_names())
                or f"Shipped networks: {', '.join(shipped_names())}.",
            )
            return
        if shipped is not None:
            network, findings = load_network(str(shipped))
        else:
            if not _exists(beside):
                self.book.accept_all = True
                self.findings.add(
                    "YN513",
                    f"network file {written!r} does not exist",
                    node.span,
                    left=f"looked for {beside}",
                    hint=near(Path(written).stem, shipped_names())
                    or near_file(beside)
                    or "The path counts from the folder of the case file.",
                )
                return
            network, findings = self.loaders[beside.suffix](str(beside))
        self.findings.extend(findings)
        if network is None:
            self.book.accept_all = True
            return
        self.network = network
        self.book.use_library = False
        self.book.own.update({item.name: item for item in network.compounds})
        self.book.inside = frozenset(item.name for item in network.carriers)

    def _own_compounds(self, node: Node | None) -> None:
        if node is None:
            return
        if self.fields.get("network") is not None:
            self.findings.add(
                "YN110",
                "'compounds' is for cases without a network",
                self.fields.span("compounds"),
                hint="Define the compound in the network file.",
            )
            return
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
            ash: WrittenNumber | None = None
            if value.kind is Kind.MAPPING:
                inner = Fields(value, label, ("formula", "ash", "about"), self.findings)
                ash = inner.number("ash")
                if ash is not None and not 0 <= ash.value < 1:
                    self.findings.add(
                        "YN210",
                        f"ash {ash.text} is not a fraction of the dry weight",
                        inner.span("ash"),
                        hint="Write 0.05 for 5 % of the dry weight.",
                    )
                    ash = None
                value_node = inner.need("formula", "Give its formula.")
            else:
                value_node = value
            organism = find_biomass(value_node.text) if value_node else None
            formula = organism.formula if organism else None
            if value_node is not None and organism is None:
                formula = formula_of(value_node, label, self.findings)
            if ash is None and organism is not None and organism.ash is not None:
                ash = WrittenNumber(organism.ash, str(organism.ash))
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
                name=key.text, formula=formula, ash=ash.value if ash else Fraction(0), span=key.span
            )

    def _compound(self, name: str) -> Compound:
        found = self.book.own.get(name) or self.book.taken.get(name)
        return found or Compound(name=name, formula=Formula(()))

    def _equation(self, node: Node | None) -> Equation | None:
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
        self.basis = self._compound(name)
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
        self.compounds[name] = self._compound(name)

    def _either_side(self, node: Node | None) -> None:
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

    def _crossing_allowed(self) -> None:
        network = self.network
        if network is None or self.basis is None:
            return
        asked = [(self.basis.name, Direction.CONSUMED, self.fields.span("equation"))]
        asked += [
            (item.name, item.side, item.span or self.root.span)
            for item in self.coefficients.values()
        ]
        words = {
            Direction.CONSUMED: "taken up",
            Direction.PRODUCED: "given off",
            Direction.EITHER: "either taken up or given off",
        }
        for name, side, span in asked:
            allowed = network.direction(name)
            if allowed is None:
                self.findings.add(
                    "YN505",
                    f"{name!r} does not cross the cell boundary in the network",
                    span,
                    hint="Add it to 'crossing' of the network, or leave it out of the equation.",
                )
            elif allowed not in (side, Direction.EITHER):
                self.findings.add(
                    "YN505",
                    f"{name!r} is {words[side]} here but not in the network",
                    span,
                    left=f"case: {words[side]}",
                    right=f"network: {words[allowed]}",
                    hint="A case may narrow the network's directions, not widen them:"
                    " move the compound, or change 'crossing' of the network.",
                )

    def _surplus(self, node: Node | None) -> EnergySurplus | None:
        written = text(node, "'energy surplus'", self.findings) if node else None
        if node is None or written is None:
            return None
        if written not in set(EnergySurplus):
            self.findings.add(
                "YN112",
                f"'energy surplus' {written!r} is not known",
                node.span,
                left="expected lost or none",
                hint=near(written, list(EnergySurplus)),
            )
            return None
        return EnergySurplus(written)

    def _strain(self, node: Node | None) -> Named | None:
        written = text(node, "'strain'", self.findings) if node else None
        if node is None or written is None:
            return None
        if self.network is not None and self.network.strain(written) is None:
            names = [item.name for item in self.network.strains]
            self.findings.add(
                "YN302",
                f"strain {written!r} is not in the network",
                node.span,
                hint=near(written, names)
                or ("Known strains: " + ", ".join(names) if names else "It has no strains."),
            )
            return None
        self._needs_network("strain", node)
        return Named(name=written, span=node.span)

    def _needs_network(self, what: str, node: Node) -> None:
        if self.fields.get("network") is None:
            self.findings.add(
                "YN111",
                f"{what!r} needs a 'network'",
                node.span,
                hint="Name a network, or leave this out.",
            )

    def _knock_outs(self, node: Node | None, strain: Named | None) -> tuple[Named, ...]:
        if node is None:
            return ()
        self._needs_network("knock-outs", node)
        network = self.network
        known: tuple[str, ...] = ()
        if network is not None:
            known = (*(item.name for item in network.reactions), *network.groups())
        found: dict[str, Named] = {}
        for item in text_list(node, "'knock-outs'", self.findings, known):
            if network is not None and not network.members(item.text):
                self.findings.add(
                    "YN302",
                    f"knock-out {item.text!r} is neither a reaction nor a group",
                    item.span,
                    hint=near(item.text, known) or "Write a name as in the network file.",
                )
                continue
            if item.text in found:
                self.findings.add(
                    "YN305",
                    f"{item.text!r} is knocked out twice",
                    item.span,
                    hint="Keep one.",
                    severity=Severity.WARNING,
                )
            found.setdefault(item.text, Named(name=item.text, span=item.span))
        if network is not None:
            preset = network.strain(strain.name) if strain else None
            gone = {
                member
                for name in (*found, *(preset.off if preset else ()))
                for member in network.members(name)
            }
            if all(item.name in gone for item in network.reactions):
                self.findings.add(
                    "YN508",
                    "no reaction is left after the knock-outs",
                    node.span,
                    hint="Take some of them out of the list.",
                )
        return tuple(found.values())

    def _parameters(self, node: Node | None) -> tuple[tuple[str, Fraction, SourceSpan], ...]:
        found: list[tuple[str, Fraction, SourceSpan]] = []
        if node is None:
            return ()
        self._needs_network("parameters", node)
        network = self.network
        for key, value in entries(node, "'parameters'", self.findings):
            written = number(value, f"parameter {key.text!r}", self.findings)
            known = {item.name: item for item in network.parameters} if network else {}
            if network is not None and key.text not in known:
                self.findings.add(
                    "YN302",
                    f"parameter {key.text!r} is not in the network",
                    key.span,
                    hint=near(key.text, known) or "Known: " + ", ".join(known) + ".",
                )
                continue
            if written is None:
                continue
            found.append((key.text, written.value, key.span))
        return tuple(found)


def _exists(path: Path) -> bool:
    try:
        return path.exists()
    except OSError:
        return False
