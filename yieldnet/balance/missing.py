"""Compounds without which the overall equation cannot close, with the line to add."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.elements import element_matrix
from yieldnet.balance.statements import (
    Statements,
    add_coefficient_columns,
    add_statement_rows,
    yield_column,
)
from yieldnet.chemistry.library import find_compound
from yieldnet.foundation.findings import Findings
from yieldnet.model.binding import composition
from yieldnet.model.network import Compound, Direction
from yieldnet.optimum.problem import SHUT, ProblemBuilder, crossing_bounds
from yieldnet.optimum.proof import Status

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Optimiser

__all__ = ["missing_compounds"]

_USUAL = ("carbon dioxide", "water", "ammonia", "oxygen")
_Elements = dict[str, dict[str, Fraction]]


def missing_compounds(
    case: Case, optimiser: Optimiser, growth_residual: Mapping[str, Fraction]
) -> Findings:
    """Findings for coefficients that the elements force to zero, or that make closure impossible.

    Parameters
    ----------
    case : Case
        The case.
    optimiser : Optimiser
        Solves and proves.
    growth_residual : mapping of str to Fraction
        Elements that one mol of growth makes from nothing within its written digits.

    Returns
    -------
    Findings
        One for each coefficient that a missing compound would free, or one for the whole equation.

    Notes
    -----
    Only the elements, the declared sides and the exact coefficients count; a candidate is a
    crossing compound of the network that the case does not list, or without a network carbon
    dioxide, water, ammonia or oxygen.
    """
    findings = Findings()
    candidates = _candidates(case)
    matrix = element_matrix(case, growth_residual)
    bare = _problem(case, matrix, [])
    if optimiser.optimise(bare, {}).status is Status.INFEASIBLE:
        mends = _mends(case, matrix, optimiser, candidates, None)
        if mends:
            findings.add(
                "YN507",
                f"the elements of {case.basis.name!r} cannot all go somewhere in this equation",
                case.span,
                hint=_line(mends, case),
            )
        return findings
    for item in case.coefficients:
        if item.side is not Direction.PRODUCED or item.written is not None:
            continue
        column = yield_column(item.name)
        answer = optimiser.optimise(bare, {column: Fraction(1)})
        if answer.status is not Status.OPTIMAL or answer.value > 0:
            continue
        mends = _mends(case, matrix, optimiser, candidates, item.name)
        if mends:
            findings.add(
                "YN507",
                f"{item.name!r} is forced to zero, since the equation lacks what it needs",
                item.span or case.span,
                left=f"{item.name} is {case.compound(item.name).formula}",
                hint=_line(mends, case),
            )
    return findings


def _candidates(case: Case) -> list[tuple[Compound, Direction]]:
    listed = {item.name for item in case.compounds}
    if case.network is not None:
        found = []
        for name, direction in case.network.crossing:
            compound = case.network.compound(name)
            if name not in listed and compound is not None:
                found.append((compound, direction))
        # What cells exchange anyway comes first in the hint.
        found.sort(key=lambda pair: (pair[0].name not in _USUAL, pair[1] is Direction.PRODUCED))
        return found
    entries = [entry for name in _USUAL if (entry := find_compound(name)) is not None]
    ways = {"ammonia": Direction.CONSUMED, "oxygen": Direction.CONSUMED}
    return [
        (Compound(name=entry.name, formula=entry.formula), ways.get(entry.name, Direction.EITHER))
        for entry in entries
        if entry.name not in listed
    ]


def _problem(case: Case, elements: _Elements, added: list[tuple[Compound, Direction]]) -> Problem:
    builder = ProblemBuilder()
    add_coefficient_columns(builder, case)
    matrix = {element: dict(line) for element, line in elements.items()}
    for compound, direction in added:
        builder.add_column(yield_column(compound.name), crossing_bounds(direction))
        for element, atoms in composition(compound.formula).items():
            matrix.setdefault(element, {})[compound.name] = atoms
    for element, line in matrix.items():
        builder.add_row(
            f"{element} balance",
            "elements",
            SHUT,
            {yield_column(name): value for name, value in line.items()},
        )
    # Exact coefficients alone: measured values and demands may contradict for other reasons.
    add_statement_rows(builder, case, Statements(measured=(), set_aside=(), demands=()))
    return builder.build()


def _helps(
    case: Case,
    elements: _Elements,
    optimiser: Optimiser,
    added: list[tuple[Compound, Direction]],
    name: str | None,
) -> bool:
    problem = _problem(case, elements, added)
    if name is None:
        return optimiser.optimise(problem, {}).status is not Status.INFEASIBLE
    answer = optimiser.optimise(problem, {yield_column(name): Fraction(1)})
    return answer.status is Status.UNBOUNDED or (
        answer.status is Status.OPTIMAL and answer.value > 0
    )


def _mends(
    case: Case,
    elements: _Elements,
    optimiser: Optimiser,
    candidates: list[tuple[Compound, Direction]],
    name: str | None,
) -> list[tuple[Compound, Direction]]:
    """Fewest candidates that help: one, else all less those not needed."""
    for candidate in candidates:
        if _helps(case, elements, optimiser, [candidate], name):
            return [candidate]
    kept = list(candidates)
    if not kept or not _helps(case, elements, optimiser, kept, name):
        return []
    for candidate in reversed(candidates):
        fewer = [item for item in kept if item is not candidate]
        if _helps(case, elements, optimiser, fewer, name):
            kept = fewer
    return kept


def _line(mends: list[tuple[Compound, Direction]], case: Case) -> str:
    either = [item.name for item, way in mends if way is Direction.EITHER]
    left = [item.name for item, way in mends if way is Direction.CONSUMED]
    right = [item.name for item, way in mends if way is Direction.PRODUCED]
    parts = []
    if left:
        parts.append("'" + " ".join(f"+ ? {name}" for name in left) + "' to the left side")
    if right:
        parts.append("'" + " ".join(f"+ ? {name}" for name in right) + "' to the right side")
    if either:
        now = [item.name for item in case.coefficients if item.side is Direction.EITHER]
        parts.append(f"the line 'either side: [{', '.join((*now, *either))}]'")
    return "Add " + " and ".join(parts) + "."
