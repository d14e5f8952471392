"""Putting measured values into the text of a case file, everything else left as it stands."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from yieldnet.foundation.findings import Findings
from yieldnet.reading.nodes import Kind, compose

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from yieldnet.reading.nodes import Node

__all__ = ["splice", "stated_already"]

_INDENT = "  "


def _top(source: str, path: str) -> Node | None:
    root = compose(source, path, Findings())
    return root if root is not None and root.kind is Kind.MAPPING else None


def stated_already(source: str, path: str, keys: Sequence[str]) -> tuple[str, ...]:
    """Which of some keys the text of a case file has.

    Parameters
    ----------
    source : str
        Text of the file.
    path : str
        Its path, for places.
    keys : sequence of str
        Keys to look for.

    Returns
    -------
    tuple of str
        Those that are there, in the order of the file.
    """
    root = _top(source, path)
    return tuple(key.text for key, _ in root.pairs if key.text in keys) if root else ()


def splice(
    source: str, path: str, blocks: Mapping[str, Sequence[str]], condition: Sequence[str] = ()
) -> str:
    r"""Text of a case file with some of its sections written anew.

    Parameters
    ----------
    source : str
        Text of a case file that can be read.
    path : str
        Its path, for places.
    blocks : mapping of str to sequence of str
        Lines of each section without its key; a section that is there is replaced, one that is
        not is put at the end, and one without lines is taken out.
    condition : sequence of str
        Lines to put under ``conditions``; a line there with the same key is replaced.

    Returns
    -------
    str
        The new text; comments and order of all else are kept.

    Examples
    --------
    >>> print(splice("case: A\nequation: b -> c\n", "a", {"measured": ["c: 1 ± 0.1"]}), end="")
    case: A
    equation: b -> c
    measured:
      c: 1 ± 0.1
    """
    root = _top(source, path)
    assert root is not None, "a case file that can be read is a mapping"
    lines = source.splitlines()
    starts = [key.span.line - 1 for key, _ in root.pairs]
    stops = [*starts[1:], len(lines)]
    # A section ends where the next one begins, less the comments and blanks that introduce it.
    ends = [_end(lines, start, stop) for start, stop in zip(starts, stops, strict=True)]
    kept: list[str] = []
    done: set[str] = set()
    last = 0
    for (key, value), start, end in zip(root.pairs, starts, ends, strict=True):
        kept += lines[last:start]
        last = end
        if key.text in blocks:
            done.add(key.text)
            kept += _section(key.text, blocks[key.text])
        elif key.text == "conditions" and condition:
            done.add("conditions")
            kept += _conditions(lines[start:end], value, start, condition)
        else:
            kept += lines[start:end]
    kept += lines[last:]
    if condition and "conditions" not in done:
        kept += _section("conditions", condition)
    for name, block in blocks.items():
        if name not in done:
            kept += _section(name, block)
    return "\n".join(kept) + "\n"


def _end(lines: Sequence[str], start: int, stop: int) -> int:
    while stop > start + 1 and (not lines[stop - 1].strip() or lines[stop - 1].startswith("#")):
        stop -= 1
    return stop


def _section(name: str, block: Sequence[str]) -> list[str]:
    return [f"{name}:", *(_INDENT + line for line in block)] if block else []


def _conditions(old: Sequence[str], value: Node, start: int, condition: Sequence[str]) -> list[str]:
    """The section ``conditions`` with new lines in it, those of the same key taken out."""
    if value.kind is not Kind.MAPPING or value.flow:
        texts = [f"{key.text}: {item.text}" for key, item in value.pairs]
        old = _section("conditions", texts)
        start_of = {key.text: place for place, (key, _) in enumerate(value.pairs, 1)}
    else:
        start_of = {key.text: key.span.line - 1 - start for key, _ in value.pairs}
    names = {line.partition(":")[0] for line in condition if not line.startswith("#")}
    gone = {place for name, place in start_of.items() if name in names}
    # A remark that is written anew replaces the one that differs in its numbers only.
    remarks = {_shape(line) for line in condition if line.startswith("#")}
    kept = [
        line for place, line in enumerate(old) if place not in gone and _shape(line) not in remarks
    ]
    return [*kept, *(_INDENT + line for line in condition)]


def _shape(line: str) -> str:
    return re.sub(r"[\d.]+", "0", line.strip())
