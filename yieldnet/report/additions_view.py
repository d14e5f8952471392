"""View of additions: what each candidate brings, pairs, knock-outs on top, what was left out."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from yieldnet.report.figures import figure, with_sign
from yieldnet.report.json_form import FORMAT, findings_form
from yieldnet.report.table import Table

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from yieldnet.foundation.findings import Finding
    from yieldnet.prediction.ladder import LadderRung
    from yieldnet.studies.addition_result import Addition, AdditionResult, AdditionWithDeletion
    from yieldnet.studies.behaviour import Behaviour

__all__ = ["MOST_ROWS", "AdditionsView", "additions_form", "additions_view", "refused_additions"]

MOST_ROWS = 20
"""Most rows of a table in a text; the CSV and the JSON hold all [-]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class AdditionsView:
    """Everything a text shows of additions, in its order.

    Parameters
    ----------
    title, setting : str
        Heading and the line under it.
    headline : str
        The answer in one line.
    tables : tuple of Table
        Single additions, pairs, knock-outs on top.
    equations : tuple of str
        What the additions that help consist of.
    remarks : tuple of str
        Candidates that do not help or do not fit.
    """

    title: str
    setting: str
    headline: str
    tables: tuple[Table, ...]
    equations: tuple[str, ...]
    remarks: tuple[str, ...]


def additions_view(result: AdditionResult) -> AdditionsView:
    """View of additions.

    Parameters
    ----------
    result : AdditionResult
        The additions.

    Returns
    -------
    AdditionsView
        Texts in the order of showing; yields in mol/mol.
    """
    case = result.case
    network = "" if case.network is None else f"; network: {case.network.title}"
    strain = f"; strain: {case.strain.name}" if case.strain else ""
    tables = [_singles(result)]
    if result.pairs is not None:
        tables.append(_pairs(result.pairs, result.pairs_with_energy))
    if result.deletions is not None:
        tables.append(_deletions(result.deletions, result.guaranteed_before))
    fitting = len(result.merged.ideas)
    return AdditionsView(
        title=case.title,
        setting=f"per mol {case.basis.name}{network}{strain}; candidates: {result.source}",
        headline=(
            f"{case.aim}: {figure(result.before)} mol/mol as it stands;"
            f" {len(result.singles)} of {_counted(fitting, 'candidate')} that can be added"
            f" {'improves' if len(result.singles) == 1 else 'improve'} it alone"
        ),
        tables=tuple(tables),
        equations=_equations(result),
        remarks=_remarks(result),
    )


def _counted(count: int, noun: str) -> str:
    return f"{count} {noun}{'' if count == 1 else 's'}"


def _name(addition: Addition) -> str:
    return " + ".join(addition.names)


def _singles(result: AdditionResult) -> Table:
    rows = tuple(
        (
            _name(item),
            "none" if item.value is None else figure(item.value),
            "" if item.gain is None else with_sign(item.gain),
            ", ".join(relief.rung for relief in item.relieves),
        )
        for item in result.singles[:MOST_ROWS]
    )
    notes = _cut(len(result.singles))
    if any(item.relieves for item in result.singles):
        notes.append(
            "relieves: rungs of the ladder that cost less with it; others may cost more then."
        )
    notes += _endless(result.singles)
    if not rows:
        notes.append("No candidate improves the aim alone.")
    return Table(
        title=f"Additions, one at a time: {result.case.aim}, mol/mol",
        columns=("candidate", "best", "gain", "relieves"),
        rows=rows,
        note=" ".join(notes),
    )


def _pairs(pairs: Sequence[Addition], with_energy: int) -> Table:
    rows = tuple(
        (
            _name(item),
            "*" if item.only_together else "",
            "none" if item.value is None else figure(item.value),
            "" if item.gain is None else with_sign(item.gain),
            "" if item.beyond is None else with_sign(item.beyond),
        )
        for item in pairs[:MOST_ROWS]
    )
    notes = _cut(len(pairs))
    if rows:
        notes.append("beyond: more than the better of both alone.")
    else:
        notes.append("No pair brings more than the better of both alone.")
    if any(item.only_together for item in pairs):
        notes.append("* neither brings anything alone.")
    notes += _endless(pairs)
    if with_energy:
        notes.append(f"{_counted(with_energy, 'pair')} would make energy from nothing.")
    return Table(
        title="Additions, two at a time, mol/mol",
        columns=("candidates", "", "best", "gain", "beyond"),
        rows=rows,
        note=" ".join(notes),
    )


def _deletions(found: Sequence[AdditionWithDeletion], before: Fraction | None) -> Table:
    rows = tuple(
        (
            f"{item.addition}, without {item.deletion}",
            figure(item.guaranteed),
            _or_none(item.with_addition),
            _or_none(item.with_deletion),
            _or_none(item.behaviour.most_biomass),
        )
        for item in found[:MOST_ROWS]
    )
    notes = _cut(len(found))
    notes.append(f"As the case stands {_or_none(before)} is guaranteed.")
    if rows:
        notes.append(
            "Guaranteed: least product at most growth, statements about product and biomass given"
            " up; added, deleted: the same with the addition or the knock-out alone."
        )
    else:
        notes.append("No knock-out on top of the best additions raises what growth guarantees.")
    return Table(
        title="Additions with one knock-out on top, mol/mol",
        columns=("addition and knock-out", "guaranteed", "added", "deleted", "biomass"),
        rows=rows,
        note=" ".join(notes),
    )


def _or_none(value: Fraction | None) -> str:
    return "none" if value is None else figure(value)


def _cut(count: int) -> list[str]:
    return [f"The first {MOST_ROWS} of {count}."] if count > MOST_ROWS else []


def _endless(items: Sequence[Addition]) -> list[str]:
    return [
        f"With {_name(item)} there is no best value: {item.reason}."
        for item in items[:MOST_ROWS]
        if item.value is None
    ]


def _equations(result: AdditionResult) -> tuple[str, ...]:
    helpful = (*result.singles[:MOST_ROWS], *(result.pairs or ())[:MOST_ROWS])
    ideas = dict.fromkeys(idea for item in helpful for idea in item.ideas)
    lines = []
    for idea in ideas:
        back = f" (brings back {', '.join(map(repr, idea.undoes))})" if idea.undoes else ""
        lines.append(f"{idea.name}{back}: {'; '.join(idea.equations)}")
    return tuple(lines)


def _remarks(result: AdditionResult) -> tuple[str, ...]:
    merged = result.merged
    found = []
    if result.without_effect:
        found.append(f"{_counted(len(result.without_effect), 'candidate')} would change nothing.")
    if result.makes_energy:
        found.append(
            f"Would make energy from nothing, not offered: {', '.join(result.makes_energy)}."
        )
    if merged.already_there:
        found.append(f"Already in the network: {', '.join(merged.already_there)}.")
    reasons: dict[str, list[str]] = {}
    for name, reason in merged.not_applicable:
        reasons.setdefault(reason, []).append(name)
    found += [f"Cannot be added, {why}: {', '.join(names)}." for why, names in reasons.items()]
    if merged.refused:
        found.append(f"Refused, because they are wrong: {', '.join(merged.refused)}.")
    return tuple(found)


def _number(value: Fraction | None) -> float | None:
    return None if value is None else float(value)


def _exact(value: Fraction | None) -> str | None:
    return None if value is None else str(value)


def refused_additions(findings: Iterable[Finding]) -> dict[str, Any]:
    """Form of additions that were refused: all keys, no numbers."""
    return {
        "format": FORMAT,
        "case": None,
        "basis": None,
        "status": "refused",
        "aim": None,
        "candidates": None,
        "before": None,
        "exact_before": None,
        "ladder": [],
        "singles": [],
        "pairs": None,
        "with_deletions": None,
        "guaranteed_before": None,
        "without_effect": [],
        "makes_energy": [],
        "pairs_with_energy": None,
        "already_there": [],
        "not_applicable": [],
        "refused": [],
        "findings": findings_form(findings),
    }


def additions_form(result: AdditionResult) -> dict[str, Any]:
    """Form of additions; all numbers in mol/mol.

    Parameters
    ----------
    result : AdditionResult
        The additions.

    Returns
    -------
    dict
        The keys of ``format: 1``; ``pairs`` and ``with_deletions`` are ``None`` unless asked for.
    """
    form = refused_additions(result.findings)
    aim = result.case.aim
    assert aim is not None
    form.update(
        case=result.case.title,
        basis={"compound": result.case.basis.name, "unit": "mol"},
        status="solved",
        aim={"direction": str(aim.direction), "compound": aim.compound},
        candidates=result.source,
        before=float(result.before),
        exact_before=str(result.before),
        ladder=_ladder(result.ladder),
        singles=[_addition(item) for item in result.singles],
        without_effect=list(result.without_effect),
        makes_energy=list(result.makes_energy),
        already_there=list(result.merged.already_there),
        not_applicable=[
            {"name": name, "reason": reason} for name, reason in result.merged.not_applicable
        ],
        refused=list(result.merged.refused),
    )
    if result.pairs is not None:
        form["pairs"] = [_addition(item) for item in result.pairs]
        form["pairs_with_energy"] = result.pairs_with_energy
    if result.deletions is not None:
        form["guaranteed_before"] = _number(result.guaranteed_before)
        form["with_deletions"] = [
            {
                "addition": item.addition,
                "deletion": item.deletion,
                "guaranteed": float(item.guaranteed),
                "exact_guaranteed": str(item.guaranteed),
                "gain": float(item.gain),
                "with_addition_alone": _number(item.with_addition),
                "with_deletion_alone": _number(item.with_deletion),
                "behaviour": _behaviour(item.behaviour),
            }
            for item in result.deletions
        ]
    return form


def _ladder(rungs: Sequence[LadderRung]) -> list[dict[str, Any]]:
    return [
        {
            "rung": item.rung,
            "value": _number(item.value),
            "exact": _exact(item.value),
            "loss": _number(item.loss),
            "exact_loss": _exact(item.loss),
            "reason": item.reason or None,
        }
        for item in rungs
    ]


def _addition(item: Addition) -> dict[str, Any]:
    return {
        "candidates": [
            {
                "name": idea.name,
                "reactions": list(idea.reactions),
                "equations": list(idea.equations),
                "brings_back": list(idea.undoes),
                "about": idea.about or None,
                "source": idea.source or None,
            }
            for idea in item.ideas
        ],
        "value": _number(item.value),
        "exact": _exact(item.value),
        "gain": _number(item.gain),
        "exact_gain": _exact(item.gain),
        "beyond": _number(item.beyond),
        "only_together": item.only_together,
        "reason": item.reason or None,
        "relieves": [
            {
                "rung": relief.rung,
                "before": float(relief.before),
                "after": float(relief.after),
                "exact_before": str(relief.before),
                "exact_after": str(relief.after),
            }
            for relief in item.relieves
        ],
        "ladder": _ladder(item.ladder),
    }


def _behaviour(item: Behaviour) -> dict[str, Any]:
    return {
        "most_biomass": _number(item.most_biomass),
        "product_at_most_growth": _number(item.product_at_most_growth),
        "guaranteed": _number(item.guaranteed),
        "most_product": _number(item.most_product),
        "biomass_at_most_product": _number(item.biomass_at_most_product),
        "coupling": None if item.coupling is None else str(item.coupling),
    }
