"""Case files (design of the format: README, "The case file")."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import TYPE_CHECKING

from yieldnet.chemistry.formula import Formula
from yieldnet.foundation.findings import Findings, TooManyFindings, near
from yieldnet.model.case import Case, EnergySurplus
from yieldnet.model.network import Compound, Direction
from yieldnet.reading.case_choices import ChoiceReader
from yieldnet.reading.case_statements import StatementReader
from yieldnet.reading.concentrations import read_concentrations
from yieldnet.reading.correlations import read_correlations
from yieldnet.reading.fields import Fields, entries, text
from yieldnet.reading.names import NameBook
from yieldnet.reading.network_file import load_network
from yieldnet.reading.nodes import Kind, Node, compose
from yieldnet.reading.overall import OverallReader
from yieldnet.reading.shipped import find_shipped, shipped_names
from yieldnet.reading.source import MAX_FINDINGS, near_file, read_text, too_many

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from yieldnet.model.network import Network

    NetworkLoader = Callable[[str], tuple[Network | None, Findings]]

__all__ = ["CASE_KEYS", "CaseReader", "load_case", "parse_case"]

CASE_KEYS = (
    "case",
    "about",
    "network",
    "strain",
    "parameter set",
    "equation",
    "either side",
    "compounds",
    "conditions",
    "concentrations",
    "measured",
    "correlations",
    "demands",
    "aim",
    "energy surplus",
    "knock-outs",
    "parameters",
    "plant",
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
    source = read_text(path, findings)
    if source is None:
        return None, findings
    return _whole(source, path, lambda reader: reader.take_named_network(loaders), findings)


def parse_case(
    source: str, path: str, take: Callable[[CaseReader], None]
) -> tuple[Case | None, Findings]:
    """Case of a YAML text, ``None`` if anything is wrong, with all findings.

    Parameters
    ----------
    source : str
        The text.
    path : str
        Its name in messages.
    take : callable
        Gives the reader its network, if the case names one.

    Returns
    -------
    Case or None
        The case as written.
    Findings
        Everything wrong or doubtful, in the case and in its network.
    """
    return _whole(source, path, take, Findings(limit=MAX_FINDINGS))


def _whole(
    source: str, path: str, take: Callable[[CaseReader], None], findings: Findings
) -> tuple[Case | None, Findings]:
    try:
        case = _parse(source, path, take, findings)
    except TooManyFindings:
        findings.items.append(too_many(path))
        return None, findings
    if case is None or findings.refused:
        return None, findings
    return replace(case, findings=findings.sorted()), findings


def _parse(
    source: str, path: str, take: Callable[[CaseReader], None], findings: Findings
) -> Case | None:
    root = compose(source, path, findings)
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
    fields = Fields(root, "the case file", CASE_KEYS, findings)
    fields.need("case", "Begin the file with 'case: ' and a title.")
    reader = CaseReader(fields=fields, path=path, findings=findings)
    take(reader)
    return reader.case(fields.text("case"))


@dataclass(slots=True, kw_only=True)
class CaseReader:
    """Reads the sections of one case; later sections use what earlier ones defined.

    Parameters
    ----------
    fields : Fields
        The mapping that holds the case: a whole file, or an entry of a network file.
    path : str
        Path of the file.
    findings : Findings
        Receives what is wrong or doubtful.
    """

    fields: Fields
    path: str
    findings: Findings
    book: NameBook = field(init=False)
    overall: OverallReader = field(init=False)
    network: Network | None = None
    has_network: bool = False

    def __post_init__(self) -> None:
        self.book = NameBook(self.findings)
        self.overall = OverallReader(book=self.book, findings=self.findings)

    def case(self, title: str) -> Case | None:
        """The case, ``None`` if it has no equation that could be read.

        Parameters
        ----------
        title : str
            Title of the case.

        Returns
        -------
        Case or None
            The case as written; the findings say what is wrong in it.
        """
        fields = self.fields
        self._own_compounds(fields.get("compounds"))
        equation = self.overall.equation(
            fields.need("equation", "Write substrate + ? oxygen -> ? product + ? biomass.")
        )
        self.overall.either_side(fields.get("either side"))
        if equation is not None and self.overall.basis is not None:
            self._crossing_allowed()
        reader = StatementReader(
            fields=fields,
            book=self.book,
            findings=self.findings,
            network=self.network,
            basis=self.overall.basis or Compound(name="", formula=Formula(())),
            known=self.overall.basis is not None,
            coefficients=self.overall.coefficients,
            compound=self.overall.compound,
        )
        conditions = reader.conditions(fields.get("conditions"))
        concentrations = read_concentrations(
            fields.get("concentrations"),
            self.book.resolve,
            self._all_compounds(),
            self.book.inside,
            self.findings,
        )
        measured = reader.measured(fields.get("measured"))
        correlations = read_correlations(
            fields.get("correlations"),
            {item.compound: item for item in measured},
            self.book.resolve,
            self.findings,
        )
        demands = reader.demands(fields.get("demands"))
        aim = reader.aim(fields.get("aim"))
        surplus = self._surplus(fields.get("energy surplus"))
        choices = ChoiceReader(
            network=self.network, has_network=self.has_network, findings=self.findings
        )
        strain = choices.strain(fields.get("strain"))
        knock_outs = choices.knock_outs(fields.get("knock-outs"), strain)
        parameter_set = choices.parameter_set(fields.get("parameter set"))
        parameters = choices.parameters(fields.get("parameters"))
        plant = None
        if (section := fields.get("plant")) is not None:
            # Most cases have none, and its tables need not be loaded then.
            from yieldnet.reading.plant_section import PlantReader

            plant = PlantReader(
                findings=self.findings,
                resolve=self.book.resolve,
                basis=self.overall.basis.name if self.overall.basis is not None else "",
                coefficients=self.overall.coefficients,
                aim=aim,
                has_network=self.has_network,
                ph=conditions.get("pH"),
                uptake=conditions.get("substrate uptake"),
            ).plant(section)
        if equation is None or self.overall.basis is None:
            return None
        return Case(
            title=title,
            about=fields.text("about"),
            network=choices.chosen_network(parameter_set),
            equation=equation,
            basis=self.overall.basis,
            coefficients=tuple(self.overall.coefficients.values()),
            compounds=(self.overall.basis, *self.overall.compounds.values()),
            strain=strain,
            growth_rate=conditions.get("growth rate"),
            substrate_uptake=conditions.get("substrate uptake"),
            temperature=conditions.get("temperature"),
            ph=conditions.get("pH"),
            concentrations=concentrations,
            measured=measured,
            correlations=correlations,
            demands=demands,
            aim=aim,
            energy_surplus=surplus or EnergySurplus.LOST,
            energy_surplus_given=surplus is not None,
            knock_outs=knock_outs,
            parameter_set=parameter_set,
            parameters=tuple((name, value) for name, value, _ in parameters),
            parameter_spans=tuple((name, span) for name, _, span in parameters),
            plant=plant,
            file=self.path,
            span=fields.node.span,
        )

    def _all_compounds(self) -> dict[str, Compound]:
        """Compounds of the equation and of the network; empty if either cannot be read."""
        if self.overall.basis is None or self.book.accept_all:
            return {}
        listed = (self.overall.basis, *self.overall.compounds.values())
        inside = self.network.compounds if self.network is not None else ()
        return {item.name: item for item in (*inside, *listed)}

    def take_named_network(self, loaders: Mapping[str, NetworkLoader]) -> None:
        """Read the network that the case names, if it names one."""
        node = self.fields.get("network")
        if node is None:
            return
        self.has_network = True
        written = text(node, "'network'", self.findings)
        if written is None:
            self.book.accept_all = True
            return
        beside = Path(self.path).parent / written
        shipped = find_shipped(written)
        if beside.suffix not in loaders and shipped is None:
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
            network, findings = loaders[beside.suffix](str(beside))
        self.findings.extend(findings)
        if network is None:
            self.book.accept_all = True
            return
        self.take_network(network)

    def take_network(self, network: Network) -> None:
        """Take a network that was read already; its compounds are those of the case."""
        self.has_network = True
        self.network = network
        self.book.use_library = False
        self.book.own.update({item.name: item for item in network.compounds})
        self.book.inside = frozenset(item.name for item in network.carriers)

    def _own_compounds(self, node: Node | None) -> None:
        if node is None:
            return
        if self.has_network:
            self.findings.add(
                "YN110",
                "'compounds' is for cases without a network",
                self.fields.span("compounds"),
                hint="Define the compound in the network file.",
            )
            return
        self.overall.own_compounds(node)

    def _crossing_allowed(self) -> None:
        network = self.network
        if network is None or self.overall.basis is None:
            return
        asked = [(self.overall.basis.name, Direction.CONSUMED, self.fields.span("equation"))]
        asked += [
            (item.name, item.side, item.span or self.fields.node.span)
            for item in self.overall.coefficients.values()
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


def _exists(path: Path) -> bool:
    try:
        return path.exists()
    except OSError:
        return False
