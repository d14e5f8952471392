"""What a network file says that it is meant for.

What it reproduces is read in :mod:`yieldnet.reading.reproductions`, since that takes cases.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.chemistry.library import library_names
from yieldnet.model.network import Direction, MeantFor
from yieldnet.reading.fields import Fields, text_list
from yieldnet.reading.nodes import Kind

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Findings
    from yieldnet.reading.names import NameBook
    from yieldnet.reading.nodes import Node

__all__ = ["MEANT_FOR_KEYS", "read_meant_for"]

MEANT_FOR_KEYS = ("substrates", "products")
"""Keys of 'meant for'."""
_WAYS = {
    "substrates": (Direction.CONSUMED, "taken up", "in"),
    "products": (Direction.PRODUCED, "given off", "out"),
}


def read_meant_for(
    node: Node | None,
    crossing: tuple[tuple[str, Direction], ...],
    book: NameBook,
    findings: Findings,
    complete: bool = True,
) -> MeantFor | None:
    """Substrates and products that a network is meant for.

    Parameters
    ----------
    node : Node or None
        The section.
    crossing : tuple of (str, Direction)
        Compounds that may enter or leave the cell, and which way.
    book : NameBook
        Names that may be used.
    findings : Findings
        Receives what is wrong.
    complete : bool
        Whether the file says what crosses; without it only names are checked.

    Returns
    -------
    MeantFor or None
        What was written; ``None`` if there is nothing.
    """
    if node is None:
        return None
    fields = Fields(node, "'meant for'", MEANT_FOR_KEYS, findings)
    ways = dict(crossing)
    known = (*book.own, *library_names())
    found: dict[str, dict[str, None]] = {}
    for key in MEANT_FOR_KEYS:
        way, words, listing = _WAYS[key]
        found[key] = {}
        value = fields.need(key, f"List its {key}, or leave 'meant for' out.")
        if value is None:
            continue
        names = text_list(value, f"{key!r} of 'meant for'", findings, known)
        for item in names:
            name = book.resolve(item.text, item.span)
            if name is None:
                continue
            if name in found[key]:
                findings.add(
                    "YN305",
                    f"{name!r} stands twice in {key!r} of 'meant for'",
                    item.span,
                    hint="Keep one.",
                )
            elif complete and ways.get(name) not in (way, Direction.EITHER):
                there = ways.get(name)
                findings.add(
                    "YN505",
                    f"the network is meant for {name!r}, which cannot be {words}",
                    item.span,
                    left=f"{key}: {words}",
                    right="crossing: not listed" if there is None else f"crossing: {there}",
                    hint=f"Add it to '{listing}' of 'crossing', or take it out here.",
                )
            else:
                found[key][name] = None
        if value.items == () and value.kind is Kind.LIST:
            findings.add(
                "YN111",
                f"{key!r} of 'meant for' is empty",
                value.span,
                hint=f"List its {key}, or leave 'meant for' out.",
            )
    return MeantFor(
        substrates=tuple(found["substrates"]), products=tuple(found["products"]), span=node.span
    )
