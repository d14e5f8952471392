"""Deletions and float ranges against fractions with nothing skipped, and against cobra.

cobra solves the same columns and rows by its own ways, so it is a second opinion; it needs finite
bounds, so its problems are boxed, and bounded rows get a column of their own.
"""

from __future__ import annotations

from fractions import Fraction
from functools import lru_cache
from itertools import combinations, count, islice
from math import isnan
from random import Random
from typing import TYPE_CHECKING, Any

import pytest

from tests.property.cases import layers_of, random_case
from yieldnet.balance.statements import yield_column
from yieldnet.foundation.errors import SolveError
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.fast import FastProblem, FastStatus
from yieldnet.optimum.fast_ranges import fast_ranges
from yieldnet.optimum.problem import Bounds, Problem, ProblemBuilder
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.optimum.ranges import column_ranges
from yieldnet.studies.deletions import Deletion, DeletionRun, delete_all, linear_chains

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping, Sequence

    import pandas

EXACT_NETWORKS, COBRA_NETWORKS = 100, 300
"""Random networks for each comparison [-]."""
THINGS = 8
"""Deletable things of a random network: all triples of them are solved in fractions [-]."""
BOX = Fraction(1000)
"""Size of the box that cobra needs; no yield of these networks comes near it [mol/mol]."""
CLOSE = 1e-6
"""What the answers may differ by; both solvers keep balances to 1e-7 [mol/mol]."""
Floats = list[tuple[float | None, float | None]]


def floats(problem: Problem) -> Floats:
    """Bounds of all columns in floats."""
    return [
        (
            None if item.bounds.low is None else float(item.bounds.low),
            None if item.bounds.high is None else float(item.bounds.high),
        )
        for item in problem.columns
    ]


def aim_of(problem: Problem, rng: Random) -> dict[str, Fraction]:
    """An objective over one or two coefficients."""
    yields = [item.name for item in problem.columns if item.name.startswith("yield of ")]
    return {name: Fraction(rng.choice((1, 1, 2, -1))) for name in rng.sample(yields[1:], 2)}


def problems(small: bool) -> Iterator[tuple[Problem, Random]]:
    """Problems of random cases that can be run at all, some with a flux that must run."""
    optimiser = Optimiser(engine_named("glpk"))
    for seed in count():
        rng = Random(f"deletions {seed}")
        problem = layers_of(random_case(4 + seed % (2 if small else 5), seed)).final
        point = optimiser.optimise(problem, aim_of(problem, rng))
        if point.status is not Status.OPTIMAL:
            continue
        used = [
            item
            for j, item in enumerate(problem.columns)
            if item.name.startswith("flux of ") and point.primal[j] > 0
        ]
        if used and rng.random() < 0.4:
            forced = rng.choice(used)
            low = point[forced.name] * Fraction(rng.randint(1, 4), 4)
            problem = problem.with_columns({forced.name: Bounds(low, forced.bounds.high)})
        yield problem, rng


def boxed(problem: Problem) -> Problem:
    """The problem inside a box, each row an equation that is zero."""

    def within(bounds: Bounds) -> Bounds:
        low = -BOX if bounds.low is None else bounds.low
        return Bounds(low, BOX if bounds.high is None else bounds.high)

    builder = ProblemBuilder()
    for item in problem.columns:
        builder.add_column(item.name, within(item.bounds))
    zero = Bounds(Fraction(0), Fraction(0))
    for row, entries in zip(problem.rows, problem.matrix.rows, strict=True):
        sums = {problem.columns[j].name: value for j, value in entries}
        if row.bounds != zero:
            builder.add_column(f"sum of {row.name}", within(row.bounds))
            sums[f"sum of {row.name}"] = Fraction(-1)
        builder.add_row(row.name, row.layer, zero, sums)
    return builder.build()


def cobra_model(problem: Problem, objective: Mapping[str, Fraction]) -> Any:
    """The same columns and rows as a model of cobra."""
    import cobra  # type: ignore[import-untyped]

    model = cobra.Model("made by a test")
    rows = [cobra.Metabolite(f"r{i}", compartment="c") for i in range(len(problem.rows))]
    columns = [
        cobra.Reaction(f"c{j}", lower_bound=low, upper_bound=high)
        for j, (low, high) in enumerate(floats(problem))
    ]
    sums: list[dict[Any, float]] = [{} for _ in columns]
    for row, entries in zip(rows, problem.matrix.rows, strict=True):
        for j, value in entries:
            sums[j][row] = float(value)
    for column, entries_of in zip(columns, sums, strict=True):
        column.add_metabolites(entries_of)
    model.add_reactions(columns)
    model.objective = {
        columns[problem.column(name)]: float(value) for name, value in objective.items()
    }
    return model


def from_cobra(model: Any) -> tuple[Problem, dict[int, float]]:
    """Problem and objective of a model of cobra."""
    builder = ProblemBuilder()
    sums: dict[str, dict[str, Fraction]] = {item.id: {} for item in model.metabolites}
    for item in model.reactions:
        low, high = (Fraction(end) for end in item.bounds)
        builder.add_column(item.id, Bounds(low, high))
        for compound, value in item.metabolites.items():
            sums[compound.id][item.id] = Fraction(value)
    for name, entries in sums.items():
        builder.add_row(name, "", Bounds(Fraction(0), Fraction(0)), entries)
    problem = builder.build()
    return problem, {
        problem.column(item.id): float(item.objective_coefficient)
        for item in model.reactions
        if item.objective_coefficient
    }


def deletions(
    problem: Problem,
    objective: Mapping[int, float],
    groups: Sequence[Sequence[int]],
    depth: int,
    chains: bool,
) -> list[Deletion]:
    """All deletions of some things."""
    fast = FastProblem(problem)
    fast.aim(objective)
    twins = linear_chains(problem, [columns[0] for columns in groups]) if chains else None
    before = (fast.solve(), fast.value)
    run = DeletionRun(fast, groups, floats(problem), twins=twins)
    found = list(delete_all(run, depth))
    # What was moved is put back.
    assert fast.solve() is before[0]
    assert before[0] is not FastStatus.OPTIMAL or fast.value == pytest.approx(before[1], abs=CLOSE)
    return found


@pytest.mark.parametrize("chains", [False, True], ids=["groups", "chains"])
def test_deletions_are_those_of_exact_problems_without_skipping(chains: bool) -> None:
    optimiser = Optimiser(engine_named("glpk"))
    shut = Bounds(Fraction(0), Fraction(0))
    solved = skipped = changed = revived = 0
    statuses = set()
    for place, (problem, rng) in enumerate(islice(problems(small=True), EXACT_NETWORKS)):
        depth = 1 + place % 3
        fluxes = [j for j, item in enumerate(problem.columns) if item.name.startswith("flux of ")]
        rng.shuffle(fluxes)
        if chains:
            groups = [[j] for j in sorted(fluxes[:THINGS])]
        else:
            groups = [
                fluxes[start : start + 1 + start % 2] for start in range(min(THINGS, len(fluxes)))
            ]
        objective = aim_of(problem, rng)
        if optimiser.optimise(problem, objective).status is not Status.OPTIMAL:
            objective = {name: -value for name, value in objective.items()}
        floating = {problem.column(name): float(value) for name, value in objective.items()}
        found = deletions(problem, floating, groups, depth, chains)
        places = range(len(groups))
        wanted = [item for size in range(depth + 1) for item in combinations(places, size)]
        assert [item.members for item in found] == wanted
        for item in found:
            off = {problem.columns[j].name: shut for at in item.members for j in groups[at]}
            exact = optimiser.optimise(problem.with_columns(off), objective)
            assert item.status.value == exact.status.value, (place, item)
            if exact.status is Status.OPTIMAL:
                assert item.value == pytest.approx(float(exact.value), abs=CLOSE), (place, item)
                best = found[0].value
                assert best is not None
                changed += abs(best - float(exact.value)) > CLOSE
                revived += float(exact.value) > best + CLOSE
            solved += item.solved
            skipped += not item.solved
            statuses.add(item.status)
    # None of this is idle: most is skipped, much matters, a forced flux gives something back.
    assert skipped > solved > 100
    assert changed > 100
    assert statuses >= {FastStatus.OPTIMAL, FastStatus.INFEASIBLE}
    assert revived or chains


def _check_table(table: pandas.DataFrame, found: Mapping[frozenset[str], Deletion]) -> None:
    """Compare status and value of every set of cobra's table."""
    for names, value, status in zip(table["ids"], table["growth"], table["status"], strict=True):
        item = found[frozenset(names)]
        assert item.status.value == status, names
        assert (item.value is None) == isnan(value), names
        if item.value is not None:
            assert item.value == pytest.approx(value, abs=CLOSE), names


def test_deletions_of_random_networks_are_those_of_cobra() -> None:
    from cobra.flux_analysis import (  # type: ignore[import-untyped]
        double_reaction_deletion,
        single_reaction_deletion,
    )

    infeasible = forced = 0
    for original, rng in islice(problems(small=True), COBRA_NETWORKS):
        problem, objective = boxed(original), aim_of(original, rng)
        model = cobra_model(problem, objective)
        floating = {problem.column(name): float(value) for name, value in objective.items()}
        chosen = sorted(rng.sample(range(len(problem.columns)), THINGS // 2))
        chains = rng.random() < 0.5
        found = {
            frozenset(f"c{chosen[at]}" for at in item.members): item
            for item in deletions(problem, floating, [[j] for j in chosen], 2, chains)
        }
        names = [f"c{j}" for j in chosen]
        _check_table(single_reaction_deletion(model, names, processes=1), found)
        _check_table(double_reaction_deletion(model, names, names, processes=1), found)
        infeasible += sum(item.status is FastStatus.INFEASIBLE for item in found.values())
        lows = [problem.columns[j].bounds for j in chosen]
        forced += sum((item.low or 0) > 0 or (item.high or 0) < 0 for item in lows)
    assert infeasible > 100
    assert forced > 20


@lru_cache(maxsize=1)
def core() -> Any:
    """The core model that cobra ships."""
    from cobra.io import load_model  # type: ignore[import-untyped]

    return load_model("textbook")


def test_deletions_of_the_core_model_are_those_of_cobra() -> None:
    from cobra.flux_analysis import double_reaction_deletion, single_reaction_deletion

    problem, objective = from_cobra(core())
    groups = [[j] for j in range(len(problem.columns))]
    found = {
        frozenset(problem.columns[at].name for at in item.members): item
        for item in deletions(problem, objective, groups, 2, chains=True)
    }
    single = single_reaction_deletion(core(), processes=1)
    double = double_reaction_deletion(core(), processes=1)
    assert len(found) == 1 + len(double)
    assert len(double) == len(groups) * (len(groups) + 1) // 2
    _check_table(single, found)
    _check_table(double, found)


@pytest.mark.parametrize("share", [None, 0.9, 1.0])
def test_ranges_of_the_core_model_are_those_of_cobra(share: float | None) -> None:
    from cobra.flux_analysis import flux_variability_analysis

    problem, objective = from_cobra(core())
    held = objective if share else None
    found = fast_ranges(FastProblem(problem), floats(problem), held=held, share=share or 0)
    table = flux_variability_analysis(core(), fraction_of_optimum=share or 0, processes=1)
    assert found is not None
    assert list(table.index) == [item.name for item in problem.columns]
    for name, item, low, high in zip(table.index, found, table.minimum, table.maximum, strict=True):
        assert item.low == pytest.approx(low, abs=CLOSE), name
        assert item.high == pytest.approx(high, abs=CLOSE), name


def test_float_ranges_are_those_of_fractions() -> None:
    optimiser = Optimiser(engine_named("glpk"))
    unbounded = 0
    for problem, rng in islice(problems(small=False), EXACT_NETWORKS):
        fast = FastProblem(problem)
        objective = aim_of(problem, rng)
        floating = {problem.column(name): float(value) for name, value in objective.items()}
        best = optimiser.optimise(problem, objective)
        held = best.status is Status.OPTIMAL and rng.random() < 0.5
        names = [item.name for item in problem.columns]
        exact = column_ranges(optimiser, best.optimal_face() if held else problem, names)
        found = fast_ranges(fast, floats(problem), held=floating if held else None)
        assert exact is not None
        assert found is not None
        for name, item in zip(names, found, strict=True):
            ends = ((item.low, exact[name].low), (item.high, exact[name].high))
            for end, true in ends:
                unbounded += true is None
                assert (end is None) == (true is None), name
                assert true is None or end == pytest.approx(float(true), abs=CLOSE, rel=CLOSE), name
        some = rng.sample(range(len(names)), 3)
        again = fast_ranges(fast, floats(problem), some, floating if held else None)
        assert again is not None
        for j, item in zip(some, again, strict=True):
            for end, whole in ((item.low, found[j].low), (item.high, found[j].high)):
                assert (end is None) == (whole is None)
                assert whole is None or end == pytest.approx(whole, abs=CLOSE, rel=CLOSE)
    assert unbounded > 20


def test_a_held_objective_must_have_a_best_value_that_can_be_kept() -> None:
    builder = ProblemBuilder()
    builder.add_column(yield_column("a"), Bounds(Fraction(0), None))
    builder.add_column(yield_column("b"), Bounds(Fraction(0), Fraction(2)))
    fast = FastProblem(builder.build())
    bounds = [(0.0, None), (0.0, 2.0)]
    with pytest.raises(SolveError, match="no best value"):
        fast_ranges(fast, bounds, held={0: 1.0})
    assert fast_ranges(fast, bounds, held={1: 1.0}, share=1.5) is None
    half = fast_ranges(fast, bounds, held={1: 1.0}, share=0.5)
    assert half is not None
    assert [(item.low, item.high) for item in half] == [(0.0, None), (1.0, 2.0)]
    least = fast_ranges(fast, bounds, [1], held={1: 1.0}, maximise=False)
    assert least is not None
    assert [(item.low, item.high) for item in least] == [(0.0, 0.0)]
    with pytest.MonkeyPatch.context() as patch:
        answers = iter((FastStatus.OPTIMAL, FastStatus.INFEASIBLE))
        patch.setattr(FastProblem, "solve", lambda problem: next(answers))
        with pytest.raises(SolveError, match="hold on to a feasible point"):
            fast_ranges(fast, bounds)
    fast.bound_column(1, 3.0, 4.0)
    fast.add_row({1: 1.0}, None, 1.0)
    assert fast_ranges(fast, [(0.0, None), (3.0, 4.0)]) is None


def test_chains_and_ties_of_a_small_problem_worked_by_hand() -> None:
    builder = ProblemBuilder()
    zero, forward = Bounds(Fraction(0), Fraction(0)), Bounds(Fraction(0), Fraction(6))
    for name in "abcdef":
        builder.add_column(name, forward)
    builder.add_row("a = 2 b", "", zero, {"a": Fraction(1), "b": Fraction(-2)})
    builder.add_row("3 b = c", "", zero, {"b": Fraction(3), "c": Fraction(-1)})
    builder.add_row("2 c = 3 a", "", zero, {"a": Fraction(3), "c": Fraction(-2)})
    builder.add_row(
        "d + e = 1", "", Bounds(Fraction(1), Fraction(1)), dict.fromkeys("de", Fraction(1))
    )
    builder.add_row(
        "e - f >= 0", "", Bounds(Fraction(0), None), {"e": Fraction(1), "f": Fraction(-1)}
    )
    builder.add_row("c - d - f", "", zero, {"c": Fraction(1), "d": Fraction(-1), "f": Fraction(-1)})
    problem = builder.build()
    columns = range(len(problem.columns))
    assert linear_chains(problem, columns) == [0, 0, 0, 3, 4, 5]
    # A flux that must run is not one of a chain; one that is shut leaves a chain of two.
    forced = problem.with_columns({"a": Bounds(Fraction(1, 2), Fraction(6))})
    assert linear_chains(forced, columns) == [0, 1, 1, 3, 4, 5]
    closed = problem.with_columns({"f": zero})
    assert linear_chains(closed, columns) == [0, 0, 0, 0, 4, 5]
    # Only columns in question can be tied to each other.
    assert linear_chains(problem, [0, 3, 2]) == [0, 1, 0]
    fast = FastProblem(problem)
    assert fast.ties() == [(0, 1.0), (0, 0.5), (0, 1.5), (3, 1.0), (4, 1.0), (5, 1.0)]
    found = fast_ranges(fast, floats(problem))
    exact = column_ranges(Optimiser(engine_named("glpk")), problem, list("abcdef"))
    assert found is not None
    assert exact is not None
    for item, true in zip(found, exact.values(), strict=True):
        assert item.low == true.low == 0
        assert true.high is not None
        assert item.high == pytest.approx(float(true.high))
    # Of c, which d and f share, at most 1 runs: d + e = 1 and f no more than e.
    assert [exact[name].high for name in "abc"] == [Fraction(2, 3), Fraction(1, 3), Fraction(1)]
