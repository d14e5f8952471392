"""YAML text to a tree of our own in which every piece of text knows its place.

Only the node tree of the YAML library is used, so no text is turned into a boolean, a date or a
float on the way: the field that reads a piece decides what it means.
"""

from __future__ import annotations

import re
import warnings
from dataclasses import dataclass
from enum import StrEnum
from typing import TYPE_CHECKING, Any

from yieldnet.foundation.findings import SourceSpan

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Findings

__all__ = ["MAX_NESTING", "Kind", "Node", "compose"]

MAX_NESTING = 12
"""Deepest nesting of a file; the formats need 4 [-]."""


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
    """

    kind: Kind
    span: SourceSpan
    text: str = ""
    plain: bool = True
    items: tuple[Node, ...] = ()
    pairs: tuple[tuple[Node, Node], ...] = ()
    flow: bool = False

    @property
    def empty(self) -> bool:
        """Whether nothing was written."""
        return self.kind is Kind.TEXT and self.plain and self.text in {"", "~", "null"}


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
    except RecursionError:
        findings.add(
            "YN108",
            "brackets are nested too deep to be read",
            SourceSpan(file=path, line=1, column=1),
            left=f"limit {MAX_NESTING} levels",
            hint="Write the file flat, as in the examples.",
        )
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
    return _convert(root, path, findings, 0)


def _syntax(error: Any, text: str, path: str, findings: Findings) -> None:
    mark = error.problem_mark or error.context_mark
    line = mark.line + 1 if mark else 1
    column = mark.column + 1 if mark else 1
    span = SourceSpan(file=path, line=line, column=column)
    lines = text.split("\n")
    written = lines[line - 1].rstrip() if line <= len(lines) else ""
    if re.search(r"(^\s*-|:)\s+\?\s", written):
        findings.add(
            "YN115",
            "a text that begins with ? means something else in YAML",
            span,
            left=written.strip(),
            hint='Put the equation in double quotes: "? xylose -> ...".',
        )
        return
    hint = "Check indentation, brackets and quotes near this place."
    if re.search(r":\s[^\"'#]*:\s", written):
        hint = "Put the text after the first colon in quotes: it holds another colon."
    findings.add(
        "YN104",
        f"the file is not YAML here: {error.problem or error.context}",
        span,
        left=written.strip()[:60],
        hint=hint,
    )


def _convert(raw: Any, path: str, findings: Findings, depth: int) -> Node | None:
    mark = raw.start_mark
    span = SourceSpan(file=path, line=mark.line + 1, column=mark.column + 1)
    if raw.anchor is not None:
        findings.add(
            "YN107",
            f"anchors and aliases are not used here (&{raw.anchor})",
            span,
            hint="Write the value out where it is needed.",
        )
        return None
    if depth > MAX_NESTING:
        findings.add(
            "YN108",
            "the file is nested too deep",
            span,
            left=f"limit {MAX_NESTING} levels",
            hint="Write the file flat, as in the examples.",
        )
        return None
    if isinstance(raw.value, str):
        return Node(kind=Kind.TEXT, span=span, text=raw.value.strip(), plain=raw.style is None)
    if raw.value and isinstance(raw.value[0], tuple):
        return _mapping(raw, span, path, findings, depth)
    if type(raw).__name__ == "MappingNode":
        return Node(kind=Kind.MAPPING, span=span, flow=bool(raw.flow_style))
    items = [_convert(item, path, findings, depth + 1) for item in raw.value]
    return Node(
        kind=Kind.LIST,
        span=span,
        items=tuple(item for item in items if item is not None),
        flow=bool(raw.flow_style),
    )


def _mapping(raw: Any, span: SourceSpan, path: str, findings: Findings, depth: int) -> Node:
    pairs: list[tuple[Node, Node]] = []
    first: dict[str, SourceSpan] = {}
    for raw_key, raw_value in raw.value:
        key = _convert(raw_key, path, findings, depth + 1)
        value = _convert(raw_value, path, findings, depth + 1)
        if key is None or value is None:
            continue
        if key.kind is not Kind.TEXT:
            code, reason = "YN112", f"a {key.kind} cannot be a name"
            if key.span.column > 1 or raw_value.value == "":
                reason += "; a text that begins with ? needs quotes"
            findings.add(code, reason, key.span, hint="Write a text followed by a colon.")
            continue
        if key.text in first:
            findings.add(
                "YN109",
                f"{key.text!r} is written twice",
                key.span,
                left=f"first at line {first[key.text].line}",
                right=f"again at line {key.span.line}",
                hint="Keep one of them.",
            )
            continue
        first[key.text] = key.span
        pairs.append((key, value))
    return Node(kind=Kind.MAPPING, span=span, pairs=tuple(pairs), flow=bool(raw.flow_style))
