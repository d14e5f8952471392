"""What a case chooses of its network: strain, knock-outs, parameter set, parameters."""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.findings import Severity, near
from yieldnet.model.case import Named
from yieldnet.reading.fields import entries, number, text, text_list

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Findings, SourceSpan
    from yieldnet.model.network import Network
    from yieldnet.reading.nodes import Node

__all__ = ["ChoiceReader"]


@dataclass(frozen=True, slots=True, kw_only=True)
class ChoiceReader:
    """Reads what a case chooses among the things that its network names.

    Parameters
    ----------
    network : Network or None
        The network, if it could be read; without it only shapes are checked.
    has_network : bool
        Whether the case names one.
    findings : Findings
        Receives what is wrong or doubtful.
    """

    network: Network | None
    has_network: bool
    findings: Findings

    def strain(self, node: Node | None) -> Named | None:
        """The preset that the case chooses."""
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

    def chosen_network(self, chosen: Named | None) -> Network | None:
        """The network, with the maintenance of the parameter set that is chosen."""
        if self.network is None or chosen is None:
            return self.network
        preset = self.network.parameter_set(chosen.name)
        if preset is None or preset.maintenance is None:
            return self.network
        return replace(self.network, maintenance=preset.maintenance)

    def parameter_set(self, node: Node | None) -> Named | None:
        """The parameter set that the case chooses."""
        written = text(node, "'parameter set'", self.findings) if node else None
        if node is None or written is None:
            return None
        if self.network is not None and self.network.parameter_set(written) is None:
            names = [item.name for item in self.network.parameter_sets]
            self.findings.add(
                "YN302",
                f"parameter set {written!r} is not in the network",
                node.span,
                hint=near(written, names)
                or (
                    "Known parameter sets: " + ", ".join(names)
                    if names
                    else "It has no parameter sets."
                ),
            )
            return None
        self._needs_network("parameter set", node)
        return Named(name=written, span=node.span)

    def _needs_network(self, what: str, node: Node) -> None:
        if not self.has_network:
            self.findings.add(
                "YN111",
                f"{what!r} needs a 'network'",
                node.span,
                hint="Name a network, or leave this out.",
            )

    def knock_outs(self, node: Node | None, strain: Named | None) -> tuple[Named, ...]:
        """Reactions and groups that the case switches off besides its strain."""
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

    def parameters(self, node: Node | None) -> tuple[tuple[str, Fraction, SourceSpan], ...]:
        """Other values of parameters, with their places."""
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
