"""Slopes of the optimal value when bounds of rows move, exact, over all optimal duals.

At an optimal point the slope in a direction is itself a linear problem: the best move among those
that keep, to first order, every bound that the point touches. By duality its value is the least
(for a maximum) over all optimal duals, so the slope does not depend on which optimal point or basis
was found. How far a slope holds is one more linear problem.

References
----------
Gauvin, J. (2001) Formulae for the sensitivity analysis of linear programming problems, in
Approximation, Optimization and Mathematical Economics, Physica, pp. 117-120 (from memory).
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.optimum.problem import MADE, SHUT, Bounds, Column, Matrix, Problem, Row
from yieldnet.optimum.proof import Status

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from yieldnet.optimum.proof import Answer, Optimiser

__all__ = ["Slope", "slopes"]

_ZERO = Fraction(0)
_ONE = Fraction(1)


@dataclass(frozen=True, slots=True)
class Slope:
    """Change of the optimal value per unit of a move.

    Parameters
    ----------
    value : Fraction or None
        The slope; ``None`` if the move is impossible however short.
    until : Fraction or None
        Length of the move up to which the slope holds; ``None`` if it never ends or does not exist.
    """

    value: Fraction | None
    until: Fraction | None


def slopes(
    optimiser: Optimiser, best: Answer, moves: Sequence[Mapping[str, Fraction]]
) -> tuple[Slope, ...]:
    """Slopes of the optimal value along several moves of row bounds.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    best : Answer
        Proven optimum.
    moves : sequence of mapping of str to Fraction
        For each move, how far both bounds of each row shift per unit: a statement moves whole.

    Returns
    -------
    tuple of Slope
        One a move.
    """
    tangent = _tangent(best)
    objective = dict(best.objective)
    found: list[Fraction | None] = []
    for move in moves:
        if not any(move.values()):
            found.append(_ZERO)
            continue
        shifted = tangent.with_rows(
            {
                name: _shifted(tangent.rows[tangent.row(name)].bounds, amount)
                for name, amount in move.items()
            }
        )
        answer = optimiser.optimise(shifted, objective, best.maximise)
        found.append(answer.value if answer.status is Status.OPTIMAL else None)
    ends = _ends(optimiser, best, moves, found)
    return tuple(Slope(value, end) for value, end in zip(found, ends, strict=True))


def _shifted(bounds: Bounds, amount: Fraction) -> Bounds:
    return Bounds(
        None if bounds.low is None else bounds.low + amount,
        None if bounds.high is None else bounds.high + amount,
    )


def _touching(value: Fraction, bounds: Bounds) -> Bounds:
    """Moves that a bound allows to first order."""
    return Bounds(_ZERO if bounds.low == value else None, _ZERO if bounds.high == value else None)


def _tangent(best: Answer) -> Problem:
    problem = best.problem
    return problem.with_columns(
        {
            item.name: _touching(best.primal[j], item.bounds)
            for j, item in enumerate(problem.columns)
        }
    ).with_rows(
        {item.name: _touching(best.activity(i), item.bounds) for i, item in enumerate(problem.rows)}
    )


def _ends(
    optimiser: Optimiser,
    best: Answer,
    moves: Sequence[Mapping[str, Fraction]],
    values: Sequence[Fraction | None],
) -> list[Fraction | None]:
    """Longest step along each move on which its slope still holds.

    One matrix serves all: a column of steps for each move, of which one is open at a time, and a
    row that keeps the objective on its line.
    """
    problem = best.problem
    size = len(problem.columns)
    wanted = [
        k
        for k, (move, value) in enumerate(zip(moves, values, strict=True))
        if value and any(move.values())
    ]
    ends: list[Fraction | None] = [None] * len(moves)
    if not wanted:
        return ends
    place = {k: size + at for at, k in enumerate(wanted)}
    entries = [list(row) for row in problem.matrix.rows]
    for k in wanted:
        for name, amount in moves[k].items():
            entries[problem.row(name)].append((place[k], -amount))
    line = [(problem.column(name), factor) for name, factor in best.objective if factor]
    line += [(place[k], -(values[k] or _ZERO)) for k in wanted]
    level = Bounds(best.value, best.value)
    extended = Problem(
        columns=(
            *problem.columns,
            *(Column(name=f"step {k}", bounds=SHUT) for k in wanted),
        ),
        rows=(*problem.rows, Row(name="objective on its line", layer="", bounds=level)),
        matrix=Matrix(tuple(tuple(row) for row in (*entries, line)), size + len(wanted)),
    )
    for k in wanted:
        opened = extended.with_columns({f"step {k}": MADE})
        answer = optimiser.optimise(opened, {f"step {k}": _ONE})
        ends[k] = answer.value if answer.status is Status.OPTIMAL else None
    return ends
