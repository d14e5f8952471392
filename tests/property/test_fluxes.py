"""The flux pattern of least total flux, the ranges of fluxes, and the loops left out of them."""

from __future__ import annotations

from fractions import Fraction
from random import Random
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

from tests.property.reordered import reordered_layers
from tests.property.solved import remembered, solved_cases
from yieldnet.balance.statements import with_point
from yieldnet.model.network import CarrierKind
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser
from yieldnet.prediction.fluxes import find_fluxes
from yieldnet.prediction.layers import flux_column

if TYPE_CHECKING:
    from collections.abc import Mapping

    from tests.property.solved import Solved
    from yieldnet.prediction.fluxes import Fluxes

CASES = 100
ZERO = Fraction(0)
HIGHS_TOLERANCE = 1e-6
"""Feasibility and optimality tolerance of HiGHS are 1e-7; fluxes here are of order 1 to 10 [-]."""


@remembered
def _fluxes(item: Solved) -> Fluxes:
    return find_fluxes(item.optimiser, item.layers, item.best)


def _pattern(item: Solved) -> dict[str, Fraction]:
    return {answer.reaction: answer.flux for answer in _fluxes(item).answers}


def test_the_pattern_is_an_optimal_point() -> None:
    for item in solved_cases(CASES):
        pattern = _pattern(item)
        made: dict[str, Fraction] = {}
        for reaction in item.bound.reactions:
            flux = pattern.get(reaction.name, ZERO)
            assert flux >= 0 or reaction.reversible
            for name, amount in reaction.coefficients:
                made[name] = made.get(name, ZERO) + amount * flux
        aim = item.case.aim
        assert aim is not None
        sign = item.objective.sign
        assert sign * made.get(aim.compound, ZERO) == item.best.value
        crossing = {name for name, _ in item.bound.network.crossing}
        energy = {
            carrier.name
            for carrier in item.bound.network.carriers
            if carrier.kind is CarrierKind.ENERGY
        }
        for name, amount in made.items():
            assert not amount or name in crossing or (name in energy and amount > 0)


def _least_sum(item: Solved) -> float:
    """Least total flux at the best value, by HiGHS on the problem as posed."""
    from scipy.optimize import linprog  # type: ignore[import-untyped]

    problem = item.best.problem
    size = len(problem.columns)
    fluxes = [problem.column(flux_column(reaction.name)) for reaction in item.bound.reactions]
    width = size + len(fluxes)
    equal: list[tuple[Any, float]] = []
    upper: list[tuple[Any, float]] = []

    def line(entries: Mapping[int, float]) -> Any:
        row = np.zeros(width)
        for j, value in entries.items():
            row[j] = value
        return row

    for row, entries in zip(problem.rows, problem.matrix.rows, strict=True):
        form = line({j: float(value) for j, value in entries})
        low, high = row.bounds.low, row.bounds.high
        if low is not None and low == high:
            equal.append((form, float(low)))
            continue
        upper += [] if high is None else [(form, float(high))]
        upper += [] if low is None else [(-form, -float(low))]
    place = problem.column(item.objective.column)
    equal.append((line({place: float(item.objective.sign)}), float(item.best.value)))
    for number, j in enumerate(fluxes):
        # The size of a flux is no less than the flux, and no less than its negative.
        upper += [(line({j: way, size + number: -1.0}), 0.0) for way in (1.0, -1.0)]
    costs = np.zeros(width)
    costs[size:] = 1
    found = linprog(
        costs,
        A_ub=np.array([form for form, _ in upper]),
        b_ub=[level for _, level in upper],
        A_eq=np.array([form for form, _ in equal]),
        b_eq=[level for _, level in equal],
        bounds=[
            tuple(None if end is None else float(end) for end in (b.low, b.high))
            for b in (column.bounds for column in problem.columns)
        ]
        + [(0, None)] * len(fluxes),
    )
    assert found.status == 0, found.message
    return float(found.fun)


def test_the_pattern_has_the_least_total_flux() -> None:
    for item in solved_cases(CASES):
        total = float(sum(abs(flux) for flux in _pattern(item).values()))
        assert total == pytest.approx(_least_sum(item), rel=HIGHS_TOLERANCE, abs=HIGHS_TOLERANCE)


def _turning(item: Solved, caps: Mapping[str, tuple[Fraction, Fraction]]) -> float:
    """How much can turn between caps with nothing crossing and no energy made or spent."""
    from scipy.optimize import linprog

    names = list(caps)
    place = {name: j for j, name in enumerate(names)}
    rows: dict[str, Any] = {}
    for reaction in item.bound.reactions:
        if reaction.name in place:
            for name, amount in reaction.coefficients:
                row = rows.setdefault(name, np.zeros(2 * len(names)))
                row[place[reaction.name]] = float(amount)
                row[len(names) + place[reaction.name]] = -float(amount)
    # Forwards and backwards apart, so that what turns can be added up.
    bounds = [(0, float(caps[name][1])) for name in names]
    bounds += [(0, -float(caps[name][0])) for name in names]
    if not names:
        return 0.0
    costs = -np.ones(2 * len(names))
    forms = np.array(list(rows.values()))
    found = linprog(costs, A_eq=forms, b_eq=np.zeros(len(forms)), bounds=bounds)
    assert found.status == 0, found.message
    return float(-found.fun)


def test_nothing_in_the_pattern_turns_for_nothing() -> None:
    for item in solved_cases(CASES):
        caps = {
            name: (min(flux, ZERO), max(flux, ZERO))
            for name, flux in _pattern(item).items()
            if flux
        }
        assert _turning(item, caps) <= HIGHS_TOLERANCE


def test_each_loop_is_one_loop_and_none_is_missed() -> None:
    loops = 0
    for item in solved_cases(CASES):
        fluxes = _fluxes(item)
        names = [answer.reaction for answer in fluxes.answers]
        for loop in fluxes.loops:
            assert set(loop) <= set(names)
            # One way to turn, in which every member takes part: two loops would have two ways.
            directions = _still(item, loop)
            assert len(directions) == 1, loop
            (turn,) = directions
            assert np.abs(turn).min() > HIGHS_TOLERANCE
            ways = {reaction.name: reaction.reversible for reaction in item.bound.reactions}
            signs = {np.sign(x) for name, x in zip(loop, turn, strict=True) if not ways[name]}
            assert len(signs) < 2
            loops += 1
        looped = {name for loop in fluxes.loops for name in loop}
        assert looped == {name for name in names if _turns(item, names, name)}
    assert loops > 5


def _still(item: Solved, names: tuple[str, ...]) -> Any:
    """Fluxes of some reactions that change nothing: a basis of them, one a row."""
    rows: dict[str, Any] = {}
    for reaction in item.bound.reactions:
        if reaction.name in names:
            for name, amount in reaction.coefficients:
                row = rows.setdefault(name, np.zeros(len(names)))
                row[names.index(reaction.name)] = float(amount)
    _, sizes, directions = np.linalg.svd(np.array(list(rows.values())))
    return directions[int((sizes > HIGHS_TOLERANCE).sum()) :]


def _turns(item: Solved, names: list[str], asked: str) -> bool:
    """Whether a reaction can turn while nothing crosses the boundary and no energy is spent."""
    from scipy.optimize import linprog

    place = {name: j for j, name in enumerate(names)}
    rows: dict[str, Any] = {}
    low = np.zeros(len(names))
    for reaction in item.bound.reactions:
        if reaction.name in place:
            low[place[reaction.name]] = -1.0 if reaction.reversible else 0.0
            for name, amount in reaction.coefficients:
                rows.setdefault(name, np.zeros(len(names)))[place[reaction.name]] = float(amount)
    forms = np.array(list(rows.values()))
    most = 0.0
    for way in (-1.0, 1.0):
        costs = np.zeros(len(names))
        costs[place[asked]] = way
        found = linprog(
            costs, A_eq=forms, b_eq=np.zeros(len(forms)), bounds=[(end, 1) for end in low]
        )
        assert found.status == 0, found.message
        most = max(most, -float(found.fun))
    return most > HIGHS_TOLERANCE


def test_order_of_rows_and_columns_changes_no_range_and_no_total() -> None:
    rng = Random("fluxes")
    for item in solved_cases(40):
        layers = reordered_layers(item.layers, rng)
        optimiser = Optimiser(engine_named("glpk"))
        problem = with_point(layers.final, layers.statements, item.point)
        best = item.objective.best(optimiser, problem)
        one, two = _fluxes(item), find_fluxes(optimiser, layers, best)
        assert [answer.range for answer in one.answers] == [answer.range for answer in two.answers]
        totals = [sum(abs(answer.flux) for answer in found.answers) for found in (one, two)]
        assert totals[0] == totals[1]
        for answer in one.answers:
            low, high = answer.range.low, answer.range.high
            assert low is None or low <= answer.flux
            assert high is None or answer.flux <= high
