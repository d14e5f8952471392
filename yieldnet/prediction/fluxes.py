"""Fluxes at the aim: the pattern of least total flux, which fluxes are unique, idle loops."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.audit.flux import closed_network
from yieldnet.optimum.problem import FREE, MADE, SHUT, Bounds, Column, Matrix, Problem, Row
from yieldnet.optimum.proof import Status
from yieldnet.optimum.ranges import column_ranges
from yieldnet.prediction.layers import flux_column

if TYPE_CHECKING:
    from yieldnet.optimum.proof import Answer, Optimiser
    from yieldnet.optimum.ranges import Range
    from yieldnet.prediction.layers import Layers

__all__ = ["FluxAnswer", "Fluxes", "find_fluxes", "least_fluxes"]

_ONE = Fraction(1)


@dataclass(frozen=True, slots=True, kw_only=True)
class FluxAnswer:
    """Flux of one reaction at the aim.

    Parameters
    ----------
    reaction : str
        Its name.
    flux : Fraction
        In the pattern of least total flux, backwards negative [mol/mol basis].
    range : Range
        Over all optimal points [mol/mol basis].
    """

    reaction: str
    flux: Fraction
    range: Range


@dataclass(frozen=True, slots=True, kw_only=True)
class Fluxes:
    """Fluxes at the aim.

    Parameters
    ----------
    answers : tuple of FluxAnswer
        One a reaction that is not switched off.
    loops : tuple of tuple of str
        Reactions that can turn together for nothing, at any speed; they stand still in the pattern.
    """

    answers: tuple[FluxAnswer, ...]
    loops: tuple[tuple[str, ...], ...]


def least_fluxes(optimiser: Optimiser, layers: Layers, best: Answer) -> dict[str, Fraction]:
    """Fluxes of the optimal point with the least sum of their sizes.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    layers : Layers
        The problems.
    best : Answer
        Proven optimum of the final problem.

    Returns
    -------
    dict of str to Fraction
        Flux by reaction, backwards negative [mol/mol basis].
    """
    assert layers.bound is not None
    face = best.optimal_face()
    columns = list(face.columns)
    rows = list(face.rows)
    entries = list(face.matrix.rows)
    objective: dict[str, Fraction] = {}
    for item in layers.bound.reactions:
        name = flux_column(item.name)
        place = face.column(name)
        low = columns[place].bounds.low
        if low is not None and low >= 0:
            objective[name] = _ONE
            continue
        label = f"size of {name}"
        at = len(columns)
        columns.append(Column(name=label, bounds=MADE))
        for way in (_ONE, -_ONE):
            rows.append(Row(name=f"{label} {way}", layer="", bounds=MADE))
            entries.append(((at, _ONE), (place, way)))
        objective[label] = _ONE
    problem = Problem(
        columns=tuple(columns),
        rows=tuple(rows),
        matrix=Matrix(tuple(entries), len(columns)),
    )
    answer = optimiser.optimise(problem, objective, maximise=False)
    return {item.name: answer[flux_column(item.name)] for item in layers.bound.reactions}


def find_fluxes(optimiser: Optimiser, layers: Layers, best: Answer) -> Fluxes:
    """Pattern of least total flux, range of each flux at the aim, and idle loops.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    layers : Layers
        The problems.
    best : Answer
        Proven optimum of the final problem at the reconciled point.

    Returns
    -------
    Fluxes
        Fluxes of all reactions that are not switched off.
    """
    assert layers.bound is not None
    pattern = least_fluxes(optimiser, layers, best)
    face = best.optimal_face()
    names = [
        item.name
        for item in layers.bound.reactions
        if best.problem.columns[best.problem.column(flux_column(item.name))].bounds != SHUT
    ]
    ranges = column_ranges(optimiser, face, [flux_column(name) for name in names], (best,))
    assert ranges is not None
    return Fluxes(
        answers=tuple(
            FluxAnswer(reaction=name, flux=pattern[name], range=ranges[flux_column(name)])
            for name in names
        ),
        loops=_loops(optimiser, layers, names),
    )


def _loops(optimiser: Optimiser, layers: Layers, names: list[str]) -> tuple[tuple[str, ...], ...]:
    """Loops that turn with nothing crossing and no energy made or spent, each with least flux."""
    assert layers.bound is not None
    problem, backward = _one_way_loops(closed_network(layers.bound), frozenset(names))
    size = {column.name: _ONE for column in problem.columns if column.bounds == MADE}
    found: list[tuple[str, ...]] = []
    met: set[str] = set()
    for name in names:
        for way in (name, backward.get(name, "")):
            if name in met or not way:
                continue
            other = backward.get(name, "") if way == name else name
            turned = {way: Bounds(_ONE, _ONE), **({other: SHUT} if other else {})}
            answer = optimiser.optimise(problem.with_columns(turned), size, maximise=False)
            if answer.status is Status.OPTIMAL:
                loop = tuple(
                    item
                    for item in names
                    if answer[item] or (item in backward and answer[backward[item]])
                )
                met.update(loop)
                found.append(loop)
    return tuple(found)


def _one_way_loops(closed: Problem, allowed: frozenset[str]) -> tuple[Problem, dict[str, str]]:
    """Closed network with a column for each way of each reaction, so that sizes can be summed."""
    columns = []
    entries = [list(row) for row in closed.matrix.rows]
    backward: dict[str, str] = {}
    reversible = []
    for j, column in enumerate(closed.columns):
        # Crossing compounds and surpluses are no reactions, so they are shut with the rest.
        inside = column.name in allowed
        columns.append(Column(name=column.name, bounds=MADE if inside else SHUT))
        if inside and column.bounds == FREE:
            reversible.append(j)
    for j in reversible:
        name = closed.columns[j].name
        backward[name] = f"{name} backwards"
        at = len(columns)
        columns.append(Column(name=backward[name], bounds=MADE))
        for row in entries:
            row += [(at, -value) for k, value in row if k == j]
    matrix = Matrix(tuple(tuple(row) for row in entries), len(columns))
    return Problem(columns=tuple(columns), rows=closed.rows, matrix=matrix), backward
