"""How long all deletions and all ranges take, against cobra on the same model in the same run.

Run with ``pytest tests/benchmarks --benchmarks -s``. Both sides give a full table of value and
status, and the tables must agree. The models come with cobra and are read before the clock starts;
loading a problem into the solver is timed on our side, since cobra has its model loaded. The
fastest of some runs counts, since whatever else the machine does only adds time. No absolute time
is asserted.
"""

from __future__ import annotations

from fractions import Fraction
from itertools import count, islice
from math import isnan
from statistics import geometric_mean, median
from time import perf_counter
from typing import TYPE_CHECKING, Any

import pytest

from tests.property.cases import layers_of, random_case
from yieldnet.balance.statements import yield_column
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.fast import FastProblem
from yieldnet.optimum.fast_ranges import fast_ranges
from yieldnet.optimum.problem import Bounds, Problem, ProblemBuilder
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.studies.deletions import DeletionRun, delete_all, linear_chains

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator, Sequence

    import pandas

CLOSE = 1e-6
"""What the two tables may differ by; both solvers keep balances to 1e-7."""
PAIRS, RANGES, SINGLES = 20.0, 5.0, 5.0
"""How many times faster we must be [-]."""
CORE, LARGE = "textbook", "iJO1366"
"""Names under which cobra ships a core model and one of about 2,600 reactions."""
SIZES = (5, 10, 20, 40, 80)
"""Compounds of the random networks that show how time grows [-]."""
DEEPEST = {1: 80, 2: 80, 3: 20}
"""Largest of these networks that is looked at to each depth, so that all takes a minute [-]."""
NETWORKS = 3
"""Random networks of each size [-]."""
Table = dict[frozenset[str], tuple[float | None, str]]
Ends = list[tuple[float | None, float | None]]


def _read(name: str) -> tuple[Any, Problem, dict[int, float]]:
    """A model that cobra ships, with its problem and objective."""
    from cobra.io import load_model  # type: ignore[import-untyped]

    model = load_model(name)
    builder = ProblemBuilder()
    sums: dict[str, dict[str, Fraction]] = {item.id: {} for item in model.metabolites}
    for item in model.reactions:
        low, high = (Fraction(end) for end in item.bounds)
        builder.add_column(item.id, Bounds(low, high))
        for compound, value in item.metabolites.items():
            sums[compound.id][item.id] = Fraction(value)
    for compound_name, entries in sums.items():
        builder.add_row(compound_name, "", Bounds(Fraction(0), Fraction(0)), entries)
    problem = builder.build()
    objective = {
        problem.column(item.id): float(item.objective_coefficient)
        for item in model.reactions
        if item.objective_coefficient
    }
    return model, problem, objective


def _ends(problem: Problem) -> Ends:
    return [
        (
            None if item.bounds.low is None else float(item.bounds.low),
            None if item.bounds.high is None else float(item.bounds.high),
        )
        for item in problem.columns
    ]


def _deleted(
    problem: Problem, objective: dict[int, float], depth: int, columns: Sequence[int] | None = None
) -> Table:
    """Value and status without every set of columns, from loading the problem on."""
    places = range(len(problem.columns)) if columns is None else columns
    fast = FastProblem(problem)
    fast.aim(objective)
    run = DeletionRun(
        fast, [(j,) for j in places], _ends(problem), twins=linear_chains(problem, places)
    )
    names = [problem.columns[j].name for j in places]
    return {
        frozenset([names[place] for place in item.members]): (item.value, item.status.value)
        for item in delete_all(run, depth)
    }


def _fastest(run: Callable[[], Any], runs: int) -> tuple[float, Any]:
    """Least wall time of some runs, and what the last of them gave [s]."""
    times = []
    for _ in range(runs):
        start = perf_counter()
        found = run()
        times.append(perf_counter() - start)
    return min(times), found


def _compare(table: Table, other: pandas.DataFrame) -> None:
    assert len(table) == len(other) + 1  # cobra leaves the empty set out
    for names, value, status in zip(other["ids"], other["growth"], other["status"], strict=True):
        ours, how = table[frozenset(names)]
        assert how == status, names
        assert (ours is None) == isnan(value), names
        assert ours is None or abs(ours - value) <= CLOSE, names


def _say(capsys: pytest.CaptureFixture[str], what: str, ours: float, cobra: float) -> None:
    with capsys.disabled():
        print(
            f"\n{what}: {1e3 * ours:.1f} ms, cobra {1e3 * cobra:.1f} ms, ratio {cobra / ours:.1f}"
        )


def test_all_pairs_of_the_core_model(capsys: pytest.CaptureFixture[str]) -> None:
    from cobra.flux_analysis import (  # type: ignore[import-untyped]
        double_reaction_deletion,
    )

    model, problem, objective = _read(CORE)
    ours, table = _fastest(lambda: _deleted(problem, objective, 2), 7)
    cobra, other = _fastest(lambda: double_reaction_deletion(model, processes=1), 3)
    _compare(table, other)
    _say(capsys, f"{len(other):,} single and double deletions of the core model", ours, cobra)
    assert cobra / ours >= PAIRS


@pytest.mark.parametrize("share", [0.0, 1.0], ids=["free", "at most growth"])
def test_ranges_of_the_core_model(share: float, capsys: pytest.CaptureFixture[str]) -> None:
    from cobra.flux_analysis import flux_variability_analysis

    model, problem, objective = _read(CORE)
    held = objective if share else None
    # In turns, so that a slow spell of the machine hits both.
    times: tuple[list[float], list[float]] = ([], [])
    for _ in range(15):
        taken, found = _fastest(
            lambda: fast_ranges(FastProblem(problem), _ends(problem), held=held, share=share), 1
        )
        times[0].append(taken)
        taken, table = _fastest(
            lambda: flux_variability_analysis(model, fraction_of_optimum=share, processes=1), 1
        )
        times[1].append(taken)
    for item, low, high in zip(found, table.minimum, table.maximum, strict=True):
        assert abs(item.low - low) <= CLOSE
        assert abs(item.high - high) <= CLOSE
    ours, cobra = min(times[0]), min(times[1])
    what = "at most growth" if share else "with nothing held"
    _say(capsys, f"{len(found)} ranges of the core model, {what}", ours, cobra)
    assert cobra / ours >= RANGES


def test_all_single_deletions_of_the_large_model(capsys: pytest.CaptureFixture[str]) -> None:
    from cobra.flux_analysis import single_reaction_deletion

    model, problem, objective = _read(LARGE)
    ours, table = _fastest(lambda: _deleted(problem, objective, 1), 2)
    cobra, other = _fastest(lambda: single_reaction_deletion(model, processes=1), 1)
    _compare(table, other)
    _say(capsys, f"{len(other):,} single deletions of the large model", ours, cobra)
    assert cobra / ours >= SINGLES


def _networks(size: int) -> Iterator[tuple[Problem, dict[int, float]]]:
    """Problems of random networks of a size, each with an objective that has a best value."""
    optimiser = Optimiser(engine_named("glpk"))
    for seed in count():
        case = random_case(size, seed)
        problem = layers_of(case).final
        for item in case.coefficients:
            objective = {yield_column(item.name): Fraction(1)}
            answer = optimiser.optimise(problem, objective)
            if answer.status is Status.OPTIMAL and answer.value:
                yield problem, {problem.column(yield_column(item.name)): 1.0}
                break


def test_time_against_size_and_depth(capsys: pytest.CaptureFixture[str]) -> None:
    import numpy as np

    lines = ["compounds  reactions  depth      sets    time/ms  time per set/us"]
    points: dict[int, list[tuple[float, float]]] = {depth: [] for depth in DEEPEST}
    for size in SIZES:
        chosen = list(islice(_networks(size), NETWORKS))
        for depth, largest in DEEPEST.items():
            if size > largest:
                continue
            reactions, sets, times = [], [], []
            for problem, objective in chosen:
                fluxes = [
                    j for j, item in enumerate(problem.columns) if item.name.startswith("flux of ")
                ]
                taken, table = _fastest(
                    lambda p=problem, o=objective, d=depth, f=fluxes: _deleted(p, o, d, f),  # type: ignore[misc]
                    3 if depth < 3 else 1,
                )
                reactions.append(len(fluxes))
                sets.append(len(table))
                times.append(taken)
            points[depth].append((geometric_mean(reactions), geometric_mean(times)))
            lines.append(
                f"{size:9d}  {median(reactions):9.0f}  {depth:5d}  {median(sets):8,.0f}"
                f"  {1e3 * median(times):9.2f}  {1e6 * median(times) / median(sets):15.1f}"
            )
    exponents = {}
    for depth, found in points.items():
        sizes, times_taken = np.log(np.array(found)).T
        exponents[depth] = float(np.polyfit(sizes, times_taken, 1)[0])
        lines.append(f"depth {depth}: time grows as reactions ^ {exponents[depth]:.2f}")
    with capsys.disabled():
        print("\n" + "\n".join(lines))
    # A solve alone grows faster than in proportion; skipping must keep the whole near the number
    # of sets.
    for depth, exponent in exponents.items():
        assert 0 < exponent <= depth + 1
