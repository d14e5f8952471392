"""Parser for equations, ``glucose + 2 ATP -> 2 pyruvate + (po_nadh) ATP + ? water``."""

from __future__ import annotations

import re
from dataclasses import replace
from typing import TYPE_CHECKING

from yieldnet.foundation.exact import NumberTextError, read_number
from yieldnet.model.equation import UNKNOWN, Equation, Term
from yieldnet.reading.expressions import ExpressionTextError, read_expression

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.foundation.findings import Findings, SourceSpan
    from yieldnet.model.equation import Coefficient

__all__ = ["MAX_TERMS", "read_equation"]

MAX_TERMS = 200
"""Most terms of an equation; a growth equation has about 20 [-]."""
MAX_LENGTH = 8_000
"""Longest equation [characters]."""

_ARROW = re.compile(r"(?:^|(?<=\s))(<->|->|→|⇌)(?=\s|$)")
_OTHER_ARROW = re.compile(r"<=>|-->|<--|=>|<-(?!>)|←|↔|(?<=\s)=(?=\s)")
_NUMBER_LIKE = re.compile(r"[-+−]?(?:\d[\d.,]*|\.\d+)(?:[eE][+-]?\d+)?(?:/\d+)?")
_SHORT = 60


def read_equation(
    text: str,
    span: SourceSpan,
    label: str,
    findings: Findings,
    resolve: Callable[[str, SourceSpan], str | None] = lambda name, _: name,
    locate: Callable[[str], SourceSpan] | None = None,
) -> Equation | None:
    """Equation from its text, or ``None`` with findings.

    Parameters
    ----------
    text : str
        Terms separated by `` + `` round one arrow.
    span : SourceSpan
        Where the text begins.
    label : str
        What the equation belongs to, for messages.
    findings : Findings
        Receives what is wrong.
    resolve : callable
        Turns a compound name as written into the name used everywhere, or reports it.
    locate : callable, optional
        Finds the place of a term in a text of several lines.

    Returns
    -------
    Equation or None
        The equation.
    """

    def refuse(reason: str, hint: str = "", code: str = "YN208", left: str = "") -> None:
        findings.add(code, f"{label}: {reason}", span, left=left, hint=hint)

    if len(text) > MAX_LENGTH:
        refuse(f"the equation has {len(text):,} characters", f"The limit is {MAX_LENGTH:,}.")
        return None
    folded = " ".join(text.split())
    arrows = list(_ARROW.finditer(folded))
    if len(arrows) != 1:
        other = _OTHER_ARROW.search(folded)
        if other and not arrows:
            refuse(f"the arrow {other[0]!r} is not understood", "Write -> or <-> with spaces.")
        elif not arrows:
            hint = "Write -> for one way or <-> for both ways, with a space on either side."
            refuse("the equation has no arrow", hint, left=folded[:_SHORT])
        else:
            refuse(f"the equation has {len(arrows)} arrows", "Keep one.", left=folded[:_SHORT])
        return None
    sides: list[tuple[Term, ...]] = []
    whole = True
    for name, part in (
        ("left", folded[: arrows[0].start()].strip()),
        ("right", folded[arrows[0].end() :].strip()),
    ):
        pieces = _split_terms(part)
        if not part:
            refuse(f"nothing stands on the {name} side", "Name at least one compound there.")
            whole = False
        if len(pieces) > MAX_TERMS:
            refuse(f"the {name} side has {len(pieces)} terms", f"The limit is {MAX_TERMS}.")
            return None
        terms: list[Term] = []
        for piece in pieces if part else []:
            place = locate(piece) if locate is not None else span
            term = _read_term(piece, place, label, findings, resolve)
            if term is None:
                whole = False
            else:
                terms.append(term)
        sides.append(tuple(terms))
    if not whole:
        return None
    return Equation(left=sides[0], right=sides[1], reversible=arrows[0][1] in {"<->", "⇌"})


def _split_terms(side: str) -> list[str]:
    """Pieces between `` + `` outside parentheses."""
    pieces: list[str] = []
    depth = start = at = 0
    while at < len(side):
        depth += {"(": 1, ")": -1}.get(side[at], 0)
        if depth <= 0 and side.startswith(" + ", at):
            pieces.append(side[start:at].strip())
            start = at + 3
            at = start
            continue
        at += 1
    pieces.append(side[start:].strip())
    return pieces


def _read_term(
    piece: str,
    span: SourceSpan,
    label: str,
    findings: Findings,
    resolve: Callable[[str, SourceSpan], str | None],
) -> Term | None:
    def refuse(reason: str, hint: str = "", code: str = "YN208") -> None:
        findings.add(code, f"{label}: {reason}", span, hint=hint)

    if not piece or piece == "+":
        refuse("a plus sign has nothing beside it", "Name a compound on both sides of it.")
        return None
    coefficient: Coefficient
    name = piece
    if piece.startswith("?"):
        coefficient, name = UNKNOWN, piece[1:].strip()
        if piece[1:2] != " " and name:
            refuse(f"{piece!r} has no space after its ?", f"Write '? {name}'.")
            return None
    elif piece.startswith("(") and (end := _closing(piece)) and piece[end + 1 : end + 2] == " ":
        try:
            coefficient = read_expression(piece[: end + 1])
        except ExpressionTextError as error:
            refuse(error.reason, error.hint, error.code)
            return None
        name = piece[end + 1 :].strip()
    else:
        first, _, rest = piece.partition(" ")
        if not _NUMBER_LIKE.fullmatch(first):
            if piece.startswith("(") and not _closing(piece):
                refuse(f"{piece[:_SHORT]!r} has a parenthesis that never closes", code="YN206")
                return None
            first, rest = "1", piece
        try:
            coefficient = read_number(first)
        except NumberTextError as error:
            refuse(error.reason, error.hint, error.code)
            return None
        if coefficient.value <= 0:
            refuse(
                f"the coefficient {first} before {rest.strip()!r} is not positive",
                "Coefficients are positive on the side where the compound stands.",
                "YN210",
            )
            return None
        name = rest.strip()
        if name.startswith("exact "):
            # A decimal that is no measurement: its last digit spans no interval.
            coefficient = replace(coefficient, last_place=None)
            name = name.removeprefix("exact ").strip()
    if not name:
        refuse(f"{piece[:_SHORT]!r} names no compound", "Write a compound after the coefficient.")
        return None
    words = name.split()
    glued = any(word.startswith("+") for word in words) or any(
        word.endswith("+") for word in words[:-1]
    )
    if glued or name.startswith("?"):
        refuse(f"{name[:_SHORT]!r} is no compound name", "Put one space on either side of each +.")
        return None
    known = resolve(name, span)
    return None if known is None else Term(name=known, coefficient=coefficient, span=span)


def _closing(piece: str) -> int | None:
    """Place of the parenthesis that closes the first one."""
    depth = 0
    for place, letter in enumerate(piece):
        depth += {"(": 1, ")": -1}.get(letter, 0)
        if depth == 0:
            return place
    return None
