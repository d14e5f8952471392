"""Problems with their rows and columns in another order, which must change no answer."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from yieldnet.optimum.problem import Matrix, Problem

if TYPE_CHECKING:
    from random import Random

    from yieldnet.prediction.layers import Layers

__all__ = ["reordered", "reordered_layers"]


def reordered(problem: Problem, rng: Random) -> Problem:
    """The same problem with columns, rows and the entries of each row in another order."""
    columns = rng.sample(range(len(problem.columns)), len(problem.columns))
    rows = rng.sample(range(len(problem.rows)), len(problem.rows))
    place = {old: new for new, old in enumerate(columns)}
    entries = []
    for i in rows:
        line = [(place[j], value) for j, value in problem.matrix.rows[i]]
        entries.append(tuple(rng.sample(line, len(line))))
    return Problem(
        columns=tuple(problem.columns[j] for j in columns),
        rows=tuple(problem.rows[i] for i in rows),
        matrix=Matrix(tuple(entries), len(columns)),
    )


def reordered_layers(layers: Layers, rng: Random) -> Layers:
    """The layers of a case with both problems in another order."""
    assert layers.network is not None
    return replace(
        layers,
        elements=reordered(layers.elements, rng),
        network=reordered(layers.network, rng),
    )
