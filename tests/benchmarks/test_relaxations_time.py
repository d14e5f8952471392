"""All relaxations of the first example together take no longer than the process's own start-up.

Both are the best of several runs, since whatever else the machine does only adds time.
"""

from __future__ import annotations

import subprocess
import sys
from time import perf_counter
from typing import TYPE_CHECKING

import pytest

from yieldnet.balance.reconciled import reconciled_point
from yieldnet.balance.statements import statements_of
from yieldnet.model.binding import bind
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser
from yieldnet.prediction.ladder import climb_down, objective_of
from yieldnet.prediction.layers import build_layers
from yieldnet.prediction.relaxations import candidates_of, relax
from yieldnet.verbs import read_case

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.model.case import Case

RUNS = 7
"""Runs of which the fastest counts [-]."""
EXAMPLES = ("succinate-from-xylose", "lysine")
"""The first example of the README, and one with another network."""


def _fastest(run: Callable[[], float]) -> float:
    return min(run() for _ in range(RUNS))


def _start_up(arguments: list[str], folder: Path) -> float:
    """Wall time of a process that does nothing but start [s]."""
    start = perf_counter()
    subprocess.run([sys.executable, *arguments], cwd=folder, check=True, capture_output=True)
    return perf_counter() - start


def _relaxing(case: Case) -> float:
    """Wall time of all relaxations, the ladder climbed down and nothing else solved before [s]."""
    assert case.network is not None
    bound, _ = bind(case.network, dict(case.parameters))
    statements = statements_of(case)
    layers = build_layers(case, statements, bound, bound.growth_residual())
    optimiser = Optimiser(engine_named("glpk"))
    point = reconciled_point(optimiser, layers.final, case, statements)
    objective = objective_of(case)
    assert point is not None
    assert objective is not None
    _, best = climb_down(optimiser, layers, objective, point)
    assert best is not None
    start = perf_counter()
    report = relax(optimiser, layers, objective, best)
    taken = perf_counter() - start
    assert len(report.helpful) > 3
    assert len(candidates_of(layers)) > 20
    return taken


@pytest.mark.parametrize("name", EXAMPLES)
def test_all_relaxations_take_no_longer_than_starting_up(
    name: str, checkout: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    path = checkout / "examples" / name / "case.yaml"
    case = read_case(path)
    relaxing = _fastest(lambda: _relaxing(case))
    version = _fastest(lambda: _start_up(["-m", "yieldnet", "--version"], checkout))
    reading = f"from yieldnet.verbs import predict, read_case; read_case({str(path)!r})"
    read = _fastest(lambda: _start_up(["-c", reading], checkout))
    with capsys.disabled():
        print(
            f"\n{name}: relaxations {1e3 * relaxing:.1f} ms; start-up {1e3 * version:.1f} ms "
            f"(ratio {relaxing / version:.2f}); with the files read {1e3 * read:.1f} ms "
            f"(ratio {relaxing / read:.2f})"
        )
    assert relaxing <= version
