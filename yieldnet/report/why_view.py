"""Views of why: relaxations, limits, conflict, fluxes, proof."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.report.figures import figure, range_text, with_sign
from yieldnet.report.table import Table

if TYPE_CHECKING:
    from yieldnet.prediction.conflict import ConflictMember
    from yieldnet.prediction.limits import Limit
    from yieldnet.prediction.relaxations import Relaxation
    from yieldnet.prediction.result import Prediction

__all__ = [
    "conflict_lines",
    "fluxes_table",
    "limit_words",
    "limits_table",
    "movement_lines",
    "proof_lines",
    "proof_tables",
    "relaxation_words",
    "relaxations_table",
]

_SHORT_FRACTION = 12
"""Longest fraction that is still checked by hand [characters]."""


def relaxation_words(item: Relaxation) -> str:
    """What giving something back brings, in words.

    Parameters
    ----------
    item : Relaxation
        The relaxation.

    Returns
    -------
    str
        ``undoing 'glyoxylate shunt' gives 1.20``.
    """
    if item.value is None:
        if item.unbounded:
            return f"{item.words} there is no best value: {item.reason}"
        return f"{item.words}, {item.reason}"
    return f"{item.words} gives {figure(item.value)}"


def relaxations_table(result: Prediction) -> Table | None:
    """What each thing given back would bring, best first; ``None`` if nothing was tried."""
    report = result.relaxations
    if report is None:
        return None
    endless = [item for item in report.helpful if item.unbounded]
    rows = [
        (item.words, figure(item.value), with_sign(item.gain))
        for item in report.helpful
        if item.value is not None
    ]
    notes = [f"{item.words} there is no best value: {item.reason}." for item in endless[:1]]
    if len(endless) > 1:
        notes.append(f"Nor is there one {', '.join(item.words for item in endless[1:])}.")
    notes += [
        f"{item.words}, {item.reason}."
        for item in report.helpful
        if item.value is None and not item.unbounded
    ]
    notes.append(f"{_counted(report.without_effect, 'other change')} would change nothing.")
    if report.not_offered:
        notes.append(
            f"{_counted(report.not_offered, 'reaction')} backwards would make ATP from nothing."
        )
    if report.pairs:
        notes.append("Nothing helps alone, so pairs were tried.")
    return Table(
        title="What would give it back, "
        + ("two changes" if report.pairs else "one change")
        + " at a time, mol/mol",
        columns=("change", "best", "gain"),
        rows=tuple(rows),
        note=" ".join(note[0].upper() + note[1:] for note in notes),
    )


def _counted(count: int, noun: str) -> str:
    return f"{count} {noun}{'' if count == 1 else 's'}"


def limit_words(item: Limit) -> str:
    """What a little more or less of something brings, in words.

    Parameters
    ----------
    item : Limit
        The limit.

    Returns
    -------
    str
        ``one mol/mol more ATP: +0.222; less: -0.222``.
    """
    more = "impossible" if item.gain is None else with_sign(item.gain)
    less = "impossible" if item.cost is None else with_sign(item.cost)
    return f"one {item.unit} more {item.name}: {more}; less: {less}"


def limits_table(result: Prediction) -> Table | None:
    """How the aim changes as balances and statements move; ``None`` if nothing limits."""
    felt = [item for item in result.limits if item.gain or item.cost]
    if not felt:
        return None
    rows = tuple(
        (
            item.name,
            item.unit,
            "impossible" if item.gain is None else with_sign(item.gain),
            _until(item.gain, item.gain_until),
            "impossible" if item.cost is None else with_sign(item.cost),
            _until(item.cost, item.cost_until),
        )
        for item in felt
    )
    idle = len(result.limits) - len(felt)
    note = "Change of the best value per unit; 'for': how far that holds."
    if idle:
        note += f" {_counted(idle, 'other')} would not be felt."
    return Table(
        title="What limits, mol/mol per unit",
        columns=("a little of", "unit", "more", "for", "less", "for"),
        rows=rows,
        note=note,
    )


def _until(slope: Fraction | None, until: Fraction | None) -> str:
    if not slope:
        return ""
    return "ever" if until is None else figure(until)


def conflict_lines(result: Prediction) -> tuple[str, ...]:
    """The statements that cannot hold together, one a line, with the way out of each."""
    conflict = result.conflict
    if conflict is None:
        return ()
    lacking = ""
    if conflict.lacking:
        lacking = f" It lacks a source of one of: {', '.join(conflict.lacking)}."
    if not conflict.members:
        return (f"With every statement given up the network still cannot do it.{lacking}",)
    count = len(conflict.members)
    few = "the least number" if conflict.least else "none of them can be spared"
    heading = f"These {count} statements cannot hold together ({few}):"
    if count == 1:
        who = (
            "The network"
            if any(item.layer == "pathways" for item in result.freedom)
            else "Elements"
        )
        heading = f"{who} cannot keep this statement at all.{lacking}"
    return (heading, *(f"- {_member(item)}" for item in conflict.members))


def _member(item: ConflictMember) -> str:
    known = item.kind in item.name or item.kind in ("measured", "condition")
    text = f"'{item.name}'" if known else f"{item.kind} '{item.name}'"
    if item.needs is not None and item.then is not None:
        way = "higher" if item.needs > 0 else "lower"
        size = f"{figure(abs(item.needs))} {item.unit}"
        if item.needs_sd is not None:
            size += f" or {abs(item.needs_sd):.1f} s.d."
        text += f": would have to be {figure(item.then)} {item.unit}, {size} {way}, if it alone"
        text += " gives way"
    return text


def movement_lines(result: Prediction) -> tuple[str, ...]:
    """Coefficients that are not unique, and how they trade against each other."""
    moves = result.movements
    if not moves:
        return ()
    if len(moves) == 1 and len(moves[0]) > 1:
        (first, _), *others = moves[0]
        unit = moves[0][0][1]
        changes = ", ".join(f"{with_sign(change / unit)} {name}" for name, change in others)
        return (f"Not unique: one mol more {first} goes with {changes}.",)
    names = dict.fromkeys(name for move in moves for name, _ in move)
    return (f"Not unique, with {len(moves)} degrees of freedom: {', '.join(names)}.",)


def fluxes_table(result: Prediction) -> Table | None:
    """Fluxes at the aim; ``None`` unless they were asked for."""
    fluxes = result.fluxes
    if fluxes is None:
        return None
    rows = tuple(
        (
            item.reaction,
            figure(item.flux),
            "unique" if item.range.single else range_text(item.range),
        )
        for item in fluxes.answers
        if item.flux or not item.range.single
    )
    idle = sum(1 for item in fluxes.answers if not item.flux and item.range.single)
    stand = "stands" if idle == 1 else "stand"
    notes = [f"{_counted(idle, 'reaction')} {stand} still in every best point."]
    notes += [
        f"Loop that could turn for nothing, left out: {', '.join(loop)}." for loop in fluxes.loops
    ]
    return Table(
        title=f"Fluxes at the aim, least total flux, mol/mol {result.case.basis.name}",
        columns=("reaction", "flux", "over all best points"),
        rows=rows,
        note=" ".join(notes),
    )


def _worth(value: Fraction) -> str:
    exact = str(value)
    return exact if len(exact) <= _SHORT_FRACTION else figure(value)


def proof_lines(result: Prediction) -> tuple[str, ...]:
    """The line of arithmetic that bounds the aim, and how to check it."""
    proof = result.certificate
    if proof is None or result.case.aim is None:
        return ()
    aim = result.case.aim
    sign = "<=" if aim.direction == "most" else ">="
    parts = []
    for place, term in enumerate(proof.terms):
        size = f"{_worth(abs(term.worth))} x {_worth(term.amount)} ({term.name})"
        minus = "- " if term.worth < 0 else ("+ " if place else "")
        parts.append(minus + size)
    makes = "makes" if aim.direction == "most" else "destroys"
    return (
        f"{aim.compound} {sign} {' '.join(parts)} = {_worth(proof.value)}",
        f"Each compound has a worth in mol {aim.compound}. No reaction that is allowed {makes}"
        " worth, so what leaves is bound by what enters and by the statements. Check: sum worth x"
        " coefficient over each equation; it is zero where the reaction runs.",
    )


def proof_tables(result: Prediction) -> tuple[Table, ...]:
    """Worths of compounds, and the reactions with their flux and the worth they make."""
    proof = result.certificate
    if proof is None or result.case.aim is None:
        return ()
    aim = result.case.aim.compound
    return (
        Table(
            title=f"Worths, mol {aim} per mol",
            columns=("compound", "worth"),
            rows=tuple((name, _worth(worth)) for name, worth in proof.worths),
            note="All others are worth nothing.",
        ),
        Table(
            title="Fluxes that reach it, and the worth each reaction makes per turn",
            columns=("reaction", "flux", "makes"),
            rows=tuple(
                (item.name, _worth(item.flux), _worth(item.made)) for item in proof.reactions
            ),
        ),
    )
