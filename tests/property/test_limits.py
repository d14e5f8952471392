"""Laws of the limits: slopes are what the moved problem gains, whatever corner and order."""

from __future__ import annotations

from fractions import Fraction
from random import Random
from typing import TYPE_CHECKING

from tests.property.engines import LyingEngine
from tests.property.lps import random_problem
from tests.property.reordered import reordered, reordered_layers
from tests.property.solved import solved_cases
from yieldnet.balance.statements import with_point
from yieldnet.model.case import EnergySurplus
from yieldnet.model.network import CarrierKind
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.problem import Bounds
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.optimum.slopes import slopes
from yieldnet.prediction.limits import find_limits

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping

    from tests.property.solved import Solved
    from yieldnet.model.network import Carrier
    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Answer
    from yieldnet.prediction.limits import Limit

CASES = 100
ZERO = Fraction(0)
TINY = Fraction(1, 10**9)
"""A step that ends before any corner of these problems, whose numbers have few digits [-]."""


def _moved(problem: Problem, move: Mapping[str, Fraction], step: Fraction) -> Problem:
    """The problem with the bounds of some rows shifted."""

    def shifted(end: Fraction | None, by: Fraction) -> Fraction | None:
        return None if end is None else end + by

    rows = {}
    for name, amount in move.items():
        bounds = problem.rows[problem.row(name)].bounds
        by = amount * step
        rows[name] = Bounds(shifted(bounds.low, by), shifted(bounds.high, by))
    return problem.with_rows(rows)


def _change(
    optimiser: Optimiser, best: Answer, move: Mapping[str, Fraction], step: Fraction
) -> Fraction | None:
    """Change of the best value by a step along a move; ``None`` where no point is left."""
    problem = _moved(best.problem, move, step)
    answer = optimiser.optimise(problem, dict(best.objective), best.maximise)
    return answer.value - best.value if answer.status is Status.OPTIMAL else None


def _assert_slope(
    optimiser: Optimiser,
    best: Answer,
    move: Mapping[str, Fraction],
    slope: Fraction | None,
    until: Fraction | None,
) -> None:
    """Check a slope and its length by solving the moved problem again."""
    if slope is None:
        assert until is None
        assert _change(optimiser, best, move, TINY) is None
        return
    if until is None:
        far = TINY if slope == 0 else Fraction(10**6)
        assert _change(optimiser, best, move, far) == slope * far
        return
    assert slope
    assert until > 0
    for part in (Fraction(1, 7), Fraction(1, 2), Fraction(1)):
        assert _change(optimiser, best, move, part * until) == slope * part * until
    for beyond in (until + TINY, until * Fraction(11, 10)):
        change = _change(optimiser, best, move, beyond)
        # The best value bends for the worse only: it is concave for the most, convex for the least.
        worse = change is None or (
            change < slope * beyond if best.maximise else change > slope * beyond
        )
        assert worse


def _optima(number: int) -> Iterator[Answer]:
    """Optima of random linear problems, many of them degenerate."""
    found = 0
    for seed in range(20 * number):
        problem, objective, maximise = random_problem(2 + seed % 6, seed)
        answer = Optimiser(engine_named("glpk")).optimise(problem, objective, maximise)
        if answer.status is Status.OPTIMAL and problem.rows:
            found += 1
            yield answer
        if found == number:
            return


def _moves(answer: Answer) -> list[dict[str, Fraction]]:
    """Every row up and down by itself, and the first two equalities together."""
    moves = [{row.name: Fraction(way)} for row in answer.problem.rows for way in (1, -1)]
    fixed = [row.name for row in answer.problem.rows if row.bounds.fixed]
    if len(fixed) > 1:
        moves.append({fixed[0]: Fraction(1), fixed[1]: Fraction(-2)})
    return moves


def test_slopes_of_any_problem_are_those_of_the_moved_problem() -> None:
    seen = dict.fromkeys(("impossible", "flat", "ends", "endless"), 0)
    for best in _optima(120):
        optimiser = Optimiser(engine_named("glpk"))
        moves = _moves(best)
        for move, found in zip(moves, slopes(optimiser, best, moves), strict=True):
            _assert_slope(optimiser, best, move, found.value, found.until)
            if found.value is None:
                seen["impossible"] += 1
            elif not found.value:
                seen["flat"] += 1
            else:
                seen["endless" if found.until is None else "ends"] += 1
    assert min(seen.values()) > 10, seen


def test_order_and_corner_change_no_slope_of_any_problem() -> None:
    rng = Random("slopes")
    bent = 0
    for best in _optima(120):
        moves = _moves(best)
        known = slopes(Optimiser(engine_named("glpk")), best, moves)
        for engine in (engine_named("glpk"), LyingEngine(), LyingEngine(seed=rng.randint(0, 99))):
            optimiser = Optimiser(engine)
            problem = reordered(best.problem, rng)
            other = optimiser.optimise(problem, dict(best.objective), best.maximise)
            assert other.value == best.value
            assert slopes(optimiser, other, moves) == known
        pairs = zip(known[::2], known[1::2], strict=False)
        bent += any(
            up.value is not None and down.value is not None and up.value != -down.value
            for up, down in pairs
        )
    # A slope that differs to both sides is what a degenerate corner has.
    assert bent > 10


def _limits(item: Solved) -> dict[tuple[str, str], Limit]:
    found = find_limits(item.optimiser, item.layers, item.best)
    limits = {(limit.kind, limit.name): limit for limit in found}
    assert len(limits) == len(found)
    return limits


def _move(item: Solved, limit: Limit) -> dict[str, Fraction]:
    """Rows that a limit moves by one unit as printed, written out once more."""
    case, network = item.case, item.case.network
    assert network is not None
    if limit.kind == "carrier":
        # One mol from outside: the reactions may use one more than they make.
        return {f"{limit.name} balance": Fraction(-1)}
    if limit.kind == "exchange":
        one, other = limit.name.split(" to ")
        return {f"{one} balance": Fraction(1), f"{other} balance": Fraction(-1)}
    if limit.kind == "demand":
        (demand,) = [item for item in case.demands if limit.name == f"demand {item.compound}"]
        return {limit.name: demand.factor}
    if limit.kind == "condition":
        assert network.maintenance is not None
        assert case.substrate_uptake is not None
        # One unit is one mmol/g/h, and the uptake is in mol/g/h.
        return {"maintenance": Fraction(1, 1000) / case.substrate_uptake.value}
    statements = item.layers.statements
    values = {entry.label: entry for entry in (*statements.measured, *statements.set_aside)}
    if limit.name not in values:
        assert limit.kind == "written"
        return {limit.name: Fraction(1)}
    own = values[limit.name]
    return {label: own.factor for label, entry in values.items() if entry.compound == own.compound}


def test_limits_are_those_of_the_moved_case() -> None:
    seen: dict[str, int] = {}
    for item in solved_cases(CASES):
        for limit in _limits(item).values():
            move = _move(item, limit)
            back = {name: -amount for name, amount in move.items()}
            _assert_slope(item.optimiser, item.best, move, limit.gain, limit.gain_until)
            _assert_slope(item.optimiser, item.best, back, limit.cost, limit.cost_until)
            if limit.gain or limit.cost:
                seen[limit.kind] = seen.get(limit.kind, 0) + 1
    assert set(seen) == {"carrier", "exchange", "measured", "written", "demand", "condition"}
    assert min(seen.values()) > 2, seen


def test_order_and_corner_change_no_limit() -> None:
    rng = Random("limits")
    for item in solved_cases(CASES):
        known = _limits(item)
        for engine in (engine_named("glpk"), LyingEngine(seed=rng.randint(0, 99))):
            layers = reordered_layers(item.layers, rng)
            optimiser = Optimiser(engine)
            problem = with_point(layers.final, layers.statements, item.point)
            best = item.objective.best(optimiser, problem)
            assert best.value == item.best.value
            found = find_limits(optimiser, layers, best)
            assert {(limit.kind, limit.name): limit for limit in found} == known


def test_gain_and_cost_bend_for_the_worse() -> None:
    # Over all optimal duals the most that more brings is the least of them, and less the greatest.
    for item in solved_cases(CASES):
        sign = 1 if item.objective.maximise else -1
        for limit in _limits(item).values():
            if limit.gain is not None and limit.cost is not None:
                assert sign * (limit.gain + limit.cost) <= 0
            if limit.kind == "carrier" and item.case.energy_surplus is EnergySurplus.LOST:
                energy = limit.name not in {carrier.name for carrier in _redox(item)}
                # Spare energy is lost, so more of it never hurts.
                assert not energy or sign * (limit.gain or ZERO) >= 0


def _redox(item: Solved) -> Iterator[Carrier]:
    assert item.case.network is not None
    return (carrier for carrier in item.case.network.carriers if carrier.kind is CarrierKind.REDOX)
