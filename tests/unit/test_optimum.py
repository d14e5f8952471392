"""Problems, engines and answers: what a property test cannot name."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from tests.property.engines import SlackEngine
from tests.property.lps import assert_proven
from yieldnet.foundation.errors import SolveError
from yieldnet.optimum import exact_simplex
from yieldnet.optimum.basis import Basis
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.problem import FREE, Bounds, ProblemBuilder
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.optimum.ranges import Range, column_ranges

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.optimum.basis import Session
    from yieldnet.optimum.problem import Problem

ZERO, ONE = Fraction(0), Fraction(1)
MADE = Bounds(ZERO, None)
BOTH = ("glpk", "optlang")


def _problem(
    columns: Mapping[str, Bounds], rows: Mapping[str, tuple[Bounds, Mapping[str, int]]]
) -> Problem:
    builder = ProblemBuilder()
    for name, bounds in columns.items():
        builder.add_column(name, bounds)
    for name, (bounds, entries) in rows.items():
        line = {column: Fraction(value) for column, value in entries.items()}
        builder.add_row(name, "test", bounds, line)
    return builder.build()


@pytest.fixture
def diet() -> Problem:
    """Most 3 x + 2 y with x + y at most 4 and x at most 3: by hand x = 3, y = 1, value 11."""
    return _problem(
        {"x": Bounds(ZERO, Fraction(3)), "y": MADE},
        {"sum": (Bounds(None, Fraction(4)), {"x": 1, "y": 1})},
    )


WORTH = {"x": Fraction(3), "y": Fraction(2)}


@pytest.mark.parametrize("engine", BOTH)
def test_an_optimum_with_prices_by_hand(diet: Problem, engine: str) -> None:
    answer = Optimiser(engine_named(engine)).optimise(diet, WORTH)
    assert answer.status is Status.OPTIMAL
    assert answer.value == 11
    assert answer["x"] == 3
    assert answer["y"] == 1
    # One more in the sum is one more y; one more x in its place is worth 3 - 2.
    assert answer.duals == (Fraction(2),)
    assert answer.reduced_costs == (ONE, ZERO)
    assert answer.activity(0) == 4


@pytest.mark.parametrize("engine", BOTH)
def test_a_minimum_has_prices_of_the_other_sign(diet: Problem, engine: str) -> None:
    least = {name: -value for name, value in WORTH.items()}
    answer = Optimiser(engine_named(engine)).optimise(diet, least, maximise=False)
    assert answer.value == -11
    assert answer.duals == (Fraction(-2),)
    assert answer.reduced_costs == (-ONE, ZERO)


@pytest.mark.parametrize("engine", BOTH)
def test_an_infeasible_problem_has_no_values(diet: Problem, engine: str) -> None:
    narrowed = diet.with_columns({"y": Bounds(Fraction(5), None)})
    answer = Optimiser(engine_named(engine)).optimise(narrowed, WORTH)
    assert answer.status is Status.INFEASIBLE
    for ask in (lambda: answer.value, lambda: answer["x"], answer.optimal_face):
        with pytest.raises(SolveError, match="the problem is infeasible: it has no values"):
            ask()


@pytest.mark.parametrize("engine", BOTH)
def test_an_unbounded_problem_says_what_runs_away(diet: Problem, engine: str) -> None:
    opened = diet.with_rows({"sum": FREE})
    answer = Optimiser(engine_named(engine)).optimise(opened, WORTH)
    assert answer.status is Status.UNBOUNDED
    assert dict(answer.direction) == {"y": 1}
    with pytest.raises(SolveError, match="the problem is unbounded: it has no values"):
        answer.stays_best(diet)


@pytest.mark.parametrize("engine", BOTH)
def test_bounds_nearer_than_floats_can_tell_are_told_apart(engine: str) -> None:
    hair = Fraction(1, 10**25)
    columns = {"x": Bounds(ONE, 1 + hair), "y": FREE}
    same = {"difference": (Bounds(ZERO, ZERO), {"x": 1, "y": -1})}
    optimiser = Optimiser(engine_named(engine))
    problem = _problem(columns, same)
    assert optimiser.optimise(problem, {"y": ONE})["y"] == 1 + hair
    assert optimiser.optimise(problem, {"y": ONE}, maximise=False)["y"] == 1
    apart = problem.with_columns({"y": Bounds(1 + 2 * hair, None)})
    assert optimiser.optimise(apart, {}).status is Status.INFEASIBLE


@pytest.mark.parametrize("engine", BOTH)
def test_numbers_of_very_different_size(engine: str) -> None:
    large = 10**12
    problem = _problem(
        {"small": MADE, "large": MADE},
        {
            "first": (Bounds(None, ONE), {"small": large, "large": 1}),
            "second": (Bounds(None, ONE), {"small": 1, "large": 3}),
        },
    )
    answer = Optimiser(engine_named(engine)).optimise(problem, {"small": ONE, "large": ONE})
    assert_proven(answer)
    # Both rows touched: large = (10^12 - 1)/(3 10^12 - 1), small = 2/(3 10^12 - 1).
    assert answer["large"] == Fraction(large - 1, 3 * large - 1)
    assert answer["small"] == Fraction(2, 3 * large - 1)


@pytest.mark.parametrize("engine", BOTH)
def test_a_problem_without_rows(engine: str) -> None:
    problem = _problem({"x": Bounds(-ONE, Fraction(2)), "y": Bounds(None, Fraction(5))}, {})
    optimiser = Optimiser(engine_named(engine))
    assert optimiser.optimise(problem, {"x": ONE, "y": ONE}).value == 7
    assert optimiser.optimise(problem, {"x": ONE}, maximise=False).value == -1
    assert optimiser.optimise(problem, {"y": ONE}, maximise=False).status is Status.UNBOUNDED


@pytest.mark.parametrize("engine", BOTH)
def test_a_row_without_entries_is_zero(engine: str) -> None:
    problem = _problem({"x": Bounds(ZERO, ONE)}, {"empty": (Bounds(ZERO, None), {"x": 0})})
    optimiser = Optimiser(engine_named(engine))
    assert optimiser.optimise(problem, {"x": ONE}).value == 1
    impossible = problem.with_rows({"empty": Bounds(ONE, None)})
    assert optimiser.optimise(impossible, {"x": ONE}).status is Status.INFEASIBLE


@pytest.mark.parametrize("engine", BOTH)
def test_a_session_serves_one_matrix(diet: Problem, engine: str) -> None:
    session = engine_named(engine).session(diet)
    other = _problem({"x": MADE, "y": MADE}, {"sum": (FREE, {"x": 1})})
    with pytest.raises(ValueError, match="another matrix than the one loaded"):
        session.suggest(other, {}, True)


def test_the_exact_method_gives_up_on_a_problem_too_large(
    diet: Problem, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(exact_simplex, "MAX_PIVOTS", 1)
    with pytest.raises(SolveError, match="more than 1 exact pivots: this problem is too large"):
        Optimiser(SlackEngine()).optimise(diet, WORTH)


def test_one_session_a_matrix(diet: Problem) -> None:
    loaded: list[Problem] = []

    class Counting(SlackEngine):
        def session(self, problem: Problem) -> Session:  # type: ignore[override]
            loaded.append(problem)
            return super().session(problem)

    optimiser = Optimiser(Counting())
    optimiser.optimise(diet, WORTH)
    optimiser.optimise(diet.with_columns({"x": MADE}), WORTH)
    assert loaded == [diet]


def test_an_engine_by_its_name() -> None:
    assert [engine_named(name).name for name in BOTH] == ["glpk", "optlang"]
    with pytest.raises(ValueError, match="engine 'simplex' is not known; known: glpk, optlang"):
        engine_named("simplex")


def test_bounds_in_the_wrong_order_are_refused() -> None:
    assert Bounds(ONE, ONE).fixed
    assert not FREE.fixed
    assert not MADE.fixed
    with pytest.raises(ValueError, match="low 2 is above high 1"):
        Bounds(Fraction(2), ONE)


def test_two_columns_or_rows_of_one_name_are_refused() -> None:
    builder = ProblemBuilder()
    builder.add_column("x", FREE)
    builder.add_column("x", FREE)
    with pytest.raises(ValueError, match="two columns or two rows have the same name"):
        builder.build()
    builder = ProblemBuilder()
    builder.add_row("r", "test", FREE, {})
    builder.add_row("r", "test", FREE, {})
    with pytest.raises(ValueError, match="two columns or two rows have the same name"):
        builder.build()


def test_a_changed_problem_is_a_new_one(diet: Problem) -> None:
    changed = diet.with_columns({"x": FREE}).with_rows({"sum": FREE})
    assert changed.matrix is diet.matrix
    assert changed.all_bounds() == [FREE, MADE, FREE]
    assert diet.all_bounds() == [Bounds(ZERO, Fraction(3)), MADE, Bounds(None, Fraction(4))]
    assert changed.has_column("x")
    assert not changed.has_column("z")
    assert (changed.column("y"), changed.row("sum")) == (1, 0)


def test_an_optimal_face_is_an_edge() -> None:
    # Every point of the edge x + y = 4 is best; z is worth nothing and stays as free as it was.
    problem = _problem(
        {"x": Bounds(ZERO, Fraction(3)), "y": MADE, "z": Bounds(ZERO, ONE)},
        {"sum": (Bounds(None, Fraction(4)), {"x": 1, "y": 1})},
    )
    optimiser = Optimiser(engine_named("glpk"))
    best = optimiser.optimise(problem, {"x": ONE, "y": ONE})
    face = best.optimal_face()
    assert face.rows[0].bounds == Bounds(Fraction(4), Fraction(4))
    assert column_ranges(optimiser, face, ["x", "y", "z"], (best,)) == {
        "x": Range(ZERO, Fraction(3)),
        "y": Range(ONE, Fraction(4)),
        "z": Range(ZERO, ONE),
    }


def test_a_least_rests_on_the_lower_side_of_a_row() -> None:
    problem = _problem(
        {"x": MADE, "y": MADE},
        {"sum": (Bounds(Fraction(2), Fraction(9)), {"x": 1, "y": 1})},
    )
    best = Optimiser(engine_named("glpk")).optimise(problem, {"x": ONE, "y": ONE}, maximise=False)
    assert best.value == 2
    assert best.optimal_face().rows[0].bounds == Bounds(Fraction(2), Fraction(2))


def test_ranges_of_columns(diet: Problem) -> None:
    optimiser = Optimiser(engine_named("glpk"))
    assert column_ranges(optimiser, diet, ["y", "x"]) == {
        "y": Range(ZERO, Fraction(4)),
        "x": Range(ZERO, Fraction(3)),
    }
    opened = diet.with_rows({"sum": FREE})
    assert column_ranges(optimiser, opened, ["y"]) == {"y": Range(ZERO, None)}
    impossible = diet.with_columns({"y": Bounds(Fraction(5), None)})
    assert column_ranges(optimiser, impossible, ["x"]) is None


def test_an_end_that_a_known_point_reaches_is_not_solved_again(diet: Problem) -> None:
    asked = 0

    class Counting(SlackEngine):
        def suggest(
            self, problem: Problem, objective: Mapping[int, float], maximise: bool
        ) -> Basis:
            nonlocal asked
            asked += 1
            return super().suggest(problem, objective, maximise)

    optimiser = Optimiser(Counting())
    best = optimiser.optimise(diet, WORTH)
    assert best["x"] == 3
    asked = 0
    assert column_ranges(optimiser, diet, ["x"], (best,)) == {"x": Range(ZERO, Fraction(3))}
    # The high end is where the known point rests; the low end had to be looked for.
    assert asked == 1


def test_a_range_seen_from_the_other_side() -> None:
    assert Range(ONE, None).turned() == Range(None, -ONE)
    assert Range(None, None).turned() == Range(None, None)
    assert Range(ONE, ONE).single
    assert not Range(None, None).single
    assert not Range(ZERO, ONE).single
