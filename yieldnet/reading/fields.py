"""Typed access to the nodes of a file: each wrong shape becomes a finding, reading goes on."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from yieldnet.chemistry.formula import FormulaTextError, read_formula
from yieldnet.foundation.exact import NumberTextError, WrittenNumber, read_number
from yieldnet.foundation.findings import Findings, near
from yieldnet.reading.nodes import Kind, Node

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.chemistry.formula import Formula
    from yieldnet.foundation.findings import SourceSpan

__all__ = [
    "MAX_COMMAS",
    "Fields",
    "entries",
    "formula",
    "number",
    "text",
    "text_list",
    "unsplit_pairs",
]

MAX_COMMAS = 4
"""Most commas in a compound name that a split is looked for: 1,2,3,4-tetra... [-]."""

_ARTICLE = {Kind.TEXT: "a text", Kind.LIST: "a list", Kind.MAPPING: "a mapping (name: value)"}


def _shape(node: Node) -> str:
    return "nothing" if node.empty else _ARTICLE[node.kind]


def _wrong(node: Node, label: str, wanted: str, findings: Findings) -> None:
    if node.broken:
        return
    hint = "Leave the entry out if there is nothing to say." if node.empty else ""
    findings.add(
        "YN112",
        f"{label} has the wrong shape",
        node.span,
        left=f"expected {wanted}",
        right=f"found {_shape(node)}",
        hint=hint,
    )


def text(node: Node, label: str, findings: Findings) -> str | None:
    """Text of a node, or ``None`` with a finding."""
    if node.kind is not Kind.TEXT or node.empty or node.broken:
        _wrong(node, label, "a text", findings)
        return None
    return node.text


def number(node: Node, label: str, findings: Findings) -> WrittenNumber | None:
    """Number of a node, or ``None`` with a finding."""
    if node.kind is not Kind.TEXT or node.empty or node.broken:
        _wrong(node, label, "a number", findings)
        return None
    try:
        return read_number(node.text)
    except NumberTextError as error:
        findings.add(error.code, f"{label}: {error.reason}", node.span, hint=error.hint)
        return None


def formula(node: Node, label: str, findings: Findings) -> Formula | None:
    """Formula of a node, or ``None`` with a finding."""
    written = text(node, label, findings)
    if written is None:
        return None
    try:
        return read_formula(written)
    except FormulaTextError as error:
        findings.add(error.code, f"{label}: {error.reason}", node.span, hint=error.hint)
        return None


def entries(node: Node, label: str, findings: Findings) -> tuple[tuple[Node, Node], ...]:
    """Pairs of a mapping, empty with a finding if it is none."""
    if node.kind is not Kind.MAPPING:
        _wrong(node, label, "a mapping (name: value)", findings)
        return ()
    return node.pairs


def text_list(
    node: Node, label: str, findings: Findings, known: Sequence[str] = ()
) -> tuple[Node, ...]:
    """Texts of a list; a name that a comma has split in two is recognised.

    Parameters
    ----------
    node : Node
        The list.
    label : str
        Its name in messages.
    findings : Findings
        Receives what is wrong.
    known : sequence of str
        Names that may be meant.

    Returns
    -------
    tuple of Node
        The text nodes.
    """
    if node.kind is not Kind.LIST:
        _wrong(node, label, "a list", findings)
        return ()
    kept: list[Node] = []
    split: set[int] = set()
    folded = {name.casefold(): name for name in known}
    if node.flow:
        for place in range(len(node.items) - 1):
            for count in range(2, MAX_COMMAS + 2):
                parts = node.items[place : place + count]
                joined = ",".join(item.text for item in parts)
                if len(parts) == count and joined.casefold() in folded:
                    split.update(range(place, place + count))
                    _split_name(joined, parts, findings, "a dash before it")
    for place, item in enumerate(node.items):
        if place in split:
            continue
        if text(item, f"an entry of {label}", findings) is not None:
            kept.append(item)
    return tuple(kept)


def _split_name(joined: str, parts: Sequence[Node], findings: Findings, how: str) -> None:
    findings.add(
        "YN114",
        f"a comma splits the name {joined!r}",
        parts[0].span,
        left=" and ".join(repr(item.text) for item in parts),
        hint=f'Write one name a line with {how}, or quote it: "{joined}".',
    )


def unsplit_pairs(
    node: Node, label: str, findings: Findings, known: Sequence[str]
) -> tuple[tuple[Node, Node], ...]:
    """Pairs of a mapping; a name in braces that its commas have split is reported and left out.

    Parameters
    ----------
    node : Node
        The mapping.
    label : str
        Its name in messages.
    findings : Findings
        Receives what is wrong.
    known : sequence of str
        Names that may be meant.

    Returns
    -------
    tuple of (Node, Node)
        Keys and values.
    """
    pairs = entries(node, label, findings)
    if not node.flow:
        return pairs
    folded = {name.casefold() for name in known}
    gone: set[int] = set()
    for place in range(len(pairs) - 1):
        for count in range(2, MAX_COMMAS + 2):
            keys = [key for key, _ in pairs[place : place + count]]
            joined = ",".join(key.text for key in keys)
            if len(keys) == count and joined.casefold() in folded:
                gone.update(range(place, place + count))
                _split_name(joined, keys, findings, "a colon behind it")
    return tuple(pair for place, pair in enumerate(pairs) if place not in gone)


@dataclass(slots=True)
class Fields:
    """A mapping whose keys are known.

    Parameters
    ----------
    node : Node
        The mapping.
    label : str
        Its name in messages.
    allowed : tuple of str
        Keys that may stand in it.
    findings : Findings
        Receives what is wrong.
    """

    node: Node
    label: str
    allowed: tuple[str, ...]
    findings: Findings

    def __post_init__(self) -> None:
        for key, _ in entries(self.node, self.label, self.findings):
            if key.text not in self.allowed:
                self.findings.add(
                    "YN110",
                    f"{key.text!r} is not a key of {self.label}",
                    key.span,
                    hint=near(key.text, self.allowed)
                    or "Known keys: " + ", ".join(self.allowed) + ".",
                )

    def get(self, key: str) -> Node | None:
        """Value of a key, or ``None``."""
        for name, value in self.node.pairs:
            if name.text == key:
                return value
        return None

    def span(self, key: str) -> SourceSpan:
        """Place of a key; of the mapping if the key is not there."""
        for name, _ in self.node.pairs:
            if name.text == key:
                return name.span
        return self.node.span

    def need(self, key: str, hint: str) -> Node | None:
        """Value of a key that must be there."""
        value = self.get(key)
        if value is None and self.node.kind is Kind.MAPPING:
            self.findings.add("YN111", f"{self.label} has no {key!r}", self.node.span, hint=hint)
        return value

    def text(self, key: str) -> str:
        """Text of a key; empty if it is not there or is no text."""
        value = self.get(key)
        if value is None:
            return ""
        return text(value, f"{key!r} of {self.label}", self.findings) or ""

    def number(self, key: str) -> WrittenNumber | None:
        """Number of a key; ``None`` if it is not there or is no number."""
        value = self.get(key)
        if value is None:
            return None
        return number(value, f"{key!r} of {self.label}", self.findings)
