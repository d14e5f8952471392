"""YAML text to a tree of our own in which every piece of text knows its place.

Only the node tree of the YAML library is used, so no text is turned into a boolean, a date or a
float on the way: the field that reads a piece decides what it means.
"""

from __future__ import annotations

import re
import unicodedata
import warnings
from dataclasses import dataclass, replace
from enum import StrEnum
from typing import TYPE_CHECKING, Any

from yieldnet.foundation.findings import SourceSpan

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Findings

__all__ = ["MAX_NESTING", "Kind", "Node", "compose"]

MAX_NESTING = 12
"""Deepest nesting of a file; the formats need 4 [-]."""
_DEEPEST = 60
"""Brackets beyond which a text is not handed to the parser, which calls itself [-]."""
_CORE_TAGS = tuple(
    f"tag:yaml.org,2002:{kind}"
    for kind in ("str", "int", "float", "bool", "null", "map", "seq", "timestamp", "merge", "value")
)


class Kind(StrEnum):
    """What a node is."""

    TEXT = "text"
    LIST = "list"
    MAPPING = "mapping"


@dataclass(frozen=True, slots=True, kw_only=True)
class Node:
    """A piece of a file.

    Parameters
    ----------
    kind : Kind
        Text, list or mapping.
    span : SourceSpan
        Where it begins.
    text : str
        Raw text of a text node, stripped.
    plain : bool
        Whether a text stands without quotes.
    items : tuple of Node
        Entries of a list.
    pairs : tuple of (Node, Node)
        Keys and values of a mapping, each key once.
    flow : bool
        Whether a list or mapping is written in brackets.
    lines : tuple of str
        Lines of the file over which a text goes.
    broken : bool
        Whether the value was refused already, so that nothing more need be said of it.
    """

    kind: Kind
    span: SourceSpan
    text: str = ""
    plain: bool = True
    items: tuple[Node, ...] = ()
    pairs: tuple[tuple[Node, Node], ...] = ()
    flow: bool = False
    lines: tuple[str, ...] = ()
    broken: bool = False

    def locate(self, piece: str) -> SourceSpan:
        """Place of a piece of a text, down to its line and column; of the node if it is not found.

        Parameters
        ----------
        piece : str
            Part of the text.

        Returns
        -------
        SourceSpan
            Where it stands.
        """
        for words in (piece, piece.rsplit(" ", 1)[-1]):
            for number, line in enumerate(self.lines):
                start = self.span.column - 1 if number == 0 else 0
                at = line.find(words, start) if words else -1
                if at >= 0:
                    return SourceSpan(
                        file=self.span.file, line=self.span.line + number, column=at + 1
                    )
        return self.span

    @property
    def empty(self) -> bool:
        """Whether nothing was written."""
        return (
            self.kind is Kind.TEXT
            and self.plain
            and not self.broken
            and self.text in {"", "~", "null"}
        )


def compose(text: str, path: str, findings: Findings) -> Node | None:
    """Node tree of a YAML text, or ``None`` with findings.

    Parameters
    ----------
    text : str
        The text of the file.
    path : str
        Path as the user gave it.
    findings : Findings
        Receives syntax errors, anchors, duplicate keys.

    Returns
    -------
    Node or None
        The tree.
    """
    if (deep := _too_deep(text)) is not None:
        line, column = deep
        findings.add(
            "YN108",
            "the file is nested too deep",
            SourceSpan(file=path, line=line, column=column),
            left=f"limit {MAX_NESTING} levels",
            hint="Write the file flat, as in the examples.",
        )
        return None
    from ruamel.yaml import YAML
    from ruamel.yaml.error import MarkedYAMLError, YAMLError
    from ruamel.yaml.reader import ReaderError

    try:
        with warnings.catch_warnings():
            # The library warns of reused anchors; every anchor is refused below anyway.
            warnings.simplefilter("ignore")
            root = YAML(typ="safe", pure=True).compose(text)
    except MarkedYAMLError as error:
        _syntax(error, text, path, findings)
        return None
    except ReaderError as error:
        before = text[: error.position]
        span = SourceSpan(
            file=path, line=before.count("\n") + 1, column=len(before) - before.rfind("\n")
        )
        findings.add("YN104", "a control character stands in the text", span, hint="Delete it.")
        return None
    except (YAMLError, ValueError) as error:
        span = SourceSpan(file=path, line=1, column=1)
        reason = str(error).split("\n", 1)[0]
        findings.add("YN104", f"the file is not YAML: {reason}", span, hint="Check its syntax.")
        return None
    if root is None:
        findings.add(
            "YN102",
            "the file holds nothing but comments",
            SourceSpan(file=path, line=1, column=1),
            hint="Start from a shipped example.",
        )
        return None
    return _Converter(path, text.split("\n"), findings).convert(root, 0)


def _too_deep(text: str) -> tuple[int, int] | None:
    """Line and column where brackets or dashes go deeper than any parser should follow."""
    depth = 0
    for number, line in enumerate(text.split("\n"), 1):
        dashes = re.match(r"\s*(?:-\s+)*", line)
        if dashes and dashes[0].count("-") > MAX_NESTING:
            return number, 1
        for column, letter in enumerate(line, 1):
            depth = max(0, depth + {"[": 1, "{": 1, "]": -1, "}": -1}.get(letter, 0))
            if depth > _DEEPEST:
                return number, column
    return None


def _syntax(error: Any, text: str, path: str, findings: Findings) -> None:
    mark = error.problem_mark or error.context_mark
    line = mark.line + 1 if mark else 1
    column = mark.column + 1 if mark else 1
    span = SourceSpan(file=path, line=line, column=column)
    lines = text.split("\n")
    written = " ".join(lines[line - 1].split()) if line <= len(lines) else ""
    if re.search(r"(^-|:)\s+\?\s", written):
        findings.add(
            "YN115",
            "a text that begins with ? means something else in YAML",
            span,
            left=written,
            hint='Put the equation in double quotes: "? xylose -> ...".',
        )
        return
    hint = "Check indentation, brackets and quotes near this place."
    if re.search(r":\s[^\"'#]*:\s", written):
        hint = "Put the text after the first colon in quotes: it holds another colon."
    opened = error.context_mark
    since = f" {error.context}" if error.context else ""
    if opened is not None and opened.line + 1 != line:
        since += f" that begins at line {opened.line + 1}"
    findings.add(
        "YN104",
        f"the file is not YAML here{since}: {error.problem or 'nothing more can be read'}",
        span,
        left=written[:60],
        hint=hint,
    )


@dataclass(slots=True)
class _Converter:
    """Turns the nodes of the YAML library into our own."""

    path: str
    lines: list[str]
    findings: Findings

    def convert(self, raw: Any, depth: int) -> Node | None:
        mark = raw.start_mark
        span = SourceSpan(file=self.path, line=mark.line + 1, column=mark.column + 1)
        if raw.anchor is not None:
            self.findings.add(
                "YN107",
                f"anchors and aliases are not used here (&{raw.anchor})",
                span,
                hint="Write the value out where it is needed.",
            )
            return None
        if not str(raw.tag).startswith(_CORE_TAGS) or "/" in str(raw.tag):
            self.findings.add(
                "YN112",
                "a YAML tag stands before the value",
                span,
                hint="Write the value alone; the place where it stands says what it is.",
            )
            return None
        if depth > MAX_NESTING:
            self.findings.add(
                "YN108",
                "the file is nested too deep",
                span,
                left=f"limit {MAX_NESTING} levels",
                hint="Write the file flat, as in the examples.",
            )
            return None
        if isinstance(raw.value, str):
            return self._text(raw, span)
        if type(raw).__name__ == "MappingNode":
            return self._mapping(raw, span, depth)
        items = [self.convert(item, depth + 1) for item in raw.value]
        if items and None in items and len(items) == 1:
            return None
        return Node(
            kind=Kind.LIST,
            span=span,
            items=tuple(item for item in items if item is not None),
            flow=bool(raw.flow_style),
        )

    def _text(self, raw: Any, span: SourceSpan) -> Node | None:
        if any(
            unicodedata.category(letter) in ("Cc", "Cs") for letter in raw.value.replace("\n", "")
        ):
            self.findings.add(
                "YN104", "the text holds a control character", span, hint="Delete it."
            )
            return None
        last = max(span.line, raw.end_mark.line + (1 if raw.end_mark.column else 0))
        return Node(
            kind=Kind.TEXT,
            span=span,
            text=raw.value.strip(),
            plain=raw.style is None,
            lines=tuple(self.lines[span.line - 1 : last]),
        )

    def _mapping(self, raw: Any, span: SourceSpan, depth: int) -> Node:
        pairs: list[tuple[Node, Node]] = []
        first: dict[str, SourceSpan] = {}
        for raw_key, raw_value in raw.value:
            key = self.convert(raw_key, depth + 1)
            value = self.convert(raw_value, depth + 1)
            if key is None:
                continue
            if value is None:
                value = Node(kind=Kind.TEXT, span=key.span, broken=True)
            if key.kind is not Kind.TEXT:
                self.findings.add(
                    "YN112",
                    f"a {key.kind} cannot be a name",
                    key.span,
                    hint="Write a text followed by a colon; one that begins with ? needs quotes.",
                )
                continue
            if key.text in first:
                self.findings.add(
                    "YN109",
                    f"{key.text!r} is written twice",
                    key.span,
                    left=f"first at line {first[key.text].line}",
                    right=f"again at line {key.span.line}",
                    hint="Keep one of them.",
                )
                continue
            if value.empty:
                # Nothing was written: the parser places it at whatever comes next.
                value = replace(value, span=key.span)
            first[key.text] = key.span
            pairs.append((key, value))
        return Node(kind=Kind.MAPPING, span=span, pairs=tuple(pairs), flow=bool(raw.flow_style))
