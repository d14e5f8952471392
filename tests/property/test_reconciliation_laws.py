"""Judged measured values: against least squares of another kind, and against what chance does.

Limits of chance are those that a correct program passes with a probability of 0.999 or more; the
generators have seeds, so that a verdict does not change from run to run.
"""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from functools import cache
from itertools import combinations
from typing import TYPE_CHECKING

import pytest

from tests.property.measured_sets import (
    NAMED,
    case_of_text,
    judge,
    named_set,
    random_sets,
    simulated,
    with_values,
)
from yieldnet.balance.elements import balances_by_name
from yieldnet.balance.recovery import measured_recoveries
from yieldnet.balance.statements import side_sign, with_bands, with_point, yield_column
from yieldnet.model.binding import composition
from yieldnet.model.case import Correlation
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.problem import Bounds
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.prediction.ladder import objective_of
from yieldnet.prediction.next_measurement import next_measurements
from yieldnet.prediction.prepare import prepare
from yieldnet.prediction.reconcile import reconcile_case
from yieldnet.prediction.spread import worst_end
from yieldnet.verbs import read_case, reconcile

if TYPE_CHECKING:
    from pathlib import Path

    import numpy as np
    from numpy.typing import NDArray

    from tests.property.measured_sets import Judged
    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem
    from yieldnet.prediction.next_measurement import NextMeasurement
    from yieldnet.prediction.prepare import Prepared

    Floats = NDArray[np.float64]

ZERO = Fraction(0)
COUNT = 200
"""Random sets against which least squares are held [-]."""
IN_DEVIATIONS = 1e-7
"""How far floats may end from exact fractions [s.d.]: systems of condition up to 1e5 or so."""
DRAWS = 1000
"""Simulated sets: a sampled standard deviation is then good to 1/sqrt(2000), 2.2 % [-]."""
SAMPLING = 4 / (2 * DRAWS) ** 0.5
"""Four standard deviations of that [-]."""


@cache
def _sets() -> list[Judged]:
    return random_sets(COUNT)


def _equalities(judged: Judged) -> tuple[Floats, Floats]:
    """Rows and columns of the last layer that have one value only, as a system in floats."""
    import numpy as np

    problem = judged.layers.problem(judged.tested[-1].layer)
    lines, ends = [], []
    for j, column in enumerate(problem.columns):
        if column.bounds.fixed and column.bounds.low is not None:
            lines.append({j: 1.0})
            ends.append(float(column.bounds.low))
    for row, entries in zip(problem.rows, problem.matrix.rows, strict=True):
        if row.bounds.fixed and row.bounds.low is not None:
            lines.append({j: float(value) for j, value in entries})
            ends.append(float(row.bounds.low))
    table = np.zeros((len(lines), len(problem.columns)))
    for i, line in enumerate(lines):
        for j, value in line.items():
            table[i, j] = value
    return table, np.array(ends)


def _by_null_space(judged: Judged) -> tuple[Floats, Floats, float, int]:
    """Reconciled values, their covariance, the sum of squares and the degrees of freedom.

    Fluxes stay in: every point of the equalities is one of them plus a combination of directions
    that change none, and the combination is found by least squares of whitened values.
    """
    import numpy as np
    from scipy.linalg import solve_triangular  # type: ignore[import-untyped]
    from scipy.optimize import lsq_linear  # type: ignore[import-untyped]

    table, ends = _equalities(judged)
    problem = judged.layers.problem(judged.tested[-1].layer)
    _, sizes, ways = np.linalg.svd(table)
    directions = ways[int((sizes > 1e-9 * sizes[0]).sum()) :].T
    one = np.linalg.lstsq(table, ends, rcond=None)[0]
    measured = judged.data.measured
    pick = np.zeros((len(measured), len(problem.columns)))
    for i, item in enumerate(measured):
        coefficient = judged.case.coefficient(item.compound)
        assert coefficient is not None
        pick[i, problem.column(yield_column(item.compound))] = side_sign(coefficient.side)
    root = np.linalg.cholesky(_covariance(judged))
    short = np.array([float(item.value) for item in measured]) - pick @ one
    system = solve_triangular(root, pick @ directions, lower=True)
    wanted = solve_triangular(root, short, lower=True)
    # Combinations that change no measured value would make the least squares singular.
    left, lengths, right = np.linalg.svd(system, full_matrices=False)
    kept = lengths > 1e-9 * lengths.max(initial=1e-9)
    basis, moves = left[:, kept], right[kept].T / lengths[kept]
    shares = lsq_linear(basis, wanted).x if kept.any() else np.zeros(0)
    residual = wanted - basis @ shares
    return (
        pick @ (one + directions @ (moves @ shares)),
        root @ basis @ basis.T @ root.T,
        float(residual @ residual),
        len(measured) - basis.shape[1],
    )


def _covariance(judged: Judged) -> Floats:
    """Correlation times both standard deviations, from the case itself."""
    import numpy as np

    measured = judged.data.measured
    place = {item.compound: k for k, item in enumerate(measured)}
    assert len(place) == len(measured)
    table = np.eye(len(measured))
    for pair in judged.case.correlations:
        one, other = place[pair.first], place[pair.second]
        table[one, other] = table[other, one] = float(pair.value)
    sds = np.array([float(item.sd or 0) for item in measured])
    found: Floats = table * np.outer(sds, sds)
    return found


@pytest.mark.parametrize("place", range(COUNT))
def test_reconciled_values_are_those_of_least_squares_in_the_null_space(place: int) -> None:
    judged = _sets()[place]
    values, covariance, squares, degrees = _by_null_space(judged)
    data = judged.data
    assert data.degrees == degrees
    assert float(data.statistic) == pytest.approx(squares, rel=1e-7, abs=1e-9)
    sds = _covariance(judged).diagonal() ** 0.5
    adjusted = data.adjusted_covariance()
    for i, (item, move) in enumerate(zip(data.measured, data.adjustments(), strict=True)):
        assert float(item.value + move) == pytest.approx(values[i], abs=IN_DEVIATIONS * sds[i])
        for j in range(len(sds)):
            assert float(adjusted[i][j]) == pytest.approx(
                covariance[i, j], abs=IN_DEVIATIONS * sds[i] * sds[j]
            )


def test_random_sets_are_of_every_kind() -> None:
    sets = _sets()
    assert sum(bool(judged.case.correlations) for judged in sets) > 0.9 * COUNT
    assert {judged.data.degrees for judged in sets} >= {1, 2, 3, 4}
    # In a good part of them it is the network that ties, not the elements alone.
    assert sum(judged.tested[-1].layer != "elements" for judged in sets) > COUNT / 10


def test_shares_of_the_own_error_lie_between_nothing_and_all() -> None:
    for judged in _sets():
        for place in range(len(judged.data.measured)):
            share = judged.data.own_share(place)
            assert 0 <= share <= 1
            assert (share == 0) == (not any(judged.data.column(place)))


def test_without_correlations_the_own_shares_add_up_to_the_degrees() -> None:
    # The diagonal of V R' P^-1 R is that of a projection on as many dimensions.
    for judged in random_sets(15, correlated=False):
        data = judged.data
        total = sum((data.own_share(k) for k in range(len(data.measured))), ZERO)
        assert total == data.degrees


def test_correlations_of_zero_change_no_fraction() -> None:
    for judged in (named_set("aerobic yeast"), *random_sets(6, correlated=False)):
        names = [item.compound for item in judged.case.measured]
        zeros = tuple(
            Correlation(first=one, second=other, value=ZERO)
            for one, other in combinations(names, 2)
        )
        network = judged.case.network is not None
        plain = reconcile_case(judged.case, network=network, draws=20)
        same = reconcile_case(replace(judged.case, correlations=zeros), network=network, draws=20)
        assert replace(same, case=plain.case) == plain


@pytest.mark.parametrize("name", NAMED)
def test_statistic_is_chi_square(name: str) -> None:
    """At 95 % one set in twenty fails, and p values are spread evenly."""
    from scipy.stats import binom, kstest  # type: ignore[import-untyped]

    judged, count = named_set(name), 2000
    tests = [
        with_values(judged.data, values).test("all", 0.95)
        for values in simulated(judged.data, count, seed=1)
    ]
    p_values = [test.p_value for test in tests if test is not None]
    assert len(p_values) == count
    low, high = binom.interval(0.999, count, 0.05)
    assert low <= sum(not test.passed for test in tests if test is not None) <= high
    assert kstest(p_values, "uniform").pvalue > 1e-3


def _atoms_in_all(case: Case, values: dict[str, Fraction]) -> dict[str, Fraction]:
    """Net amount of each element in an equation, production positive."""
    total: dict[str, Fraction] = {}
    for item in case.compounds:
        amount = Fraction(-1)
        if item.name != case.basis.name:
            coefficient = case.coefficient(item.name)
            assert coefficient is not None
            amount = side_sign(coefficient.side) * values[item.name]
        for element, count in composition(item.formula).items():
            total[element] = total.get(element, ZERO) + amount * count
    return total


def test_values_that_follow_close_every_element() -> None:
    closed = 0
    for judged in (*map(named_set, NAMED), *random_sets(15)):
        case = judged.case
        # One more draw of errors, so that the values do not agree before they are reconciled.
        if not any(judged.data.deviations):
            (values,) = simulated(judged.data, 1, seed=2)
            moved = with_values(judged.data, values).measured
            case = replace(case, measured=moved)
        result = reconcile_case(case, network=case.network is not None, draws=2)
        known = {item.compound: item.reconciled for item in result.values}
        known |= {item.compound: item.value for item in result.calculated}
        signs = {item.name: side_sign(item.side) for item in case.coefficients}
        for row, constant in zip(judged.last.rows, judged.last.constants, strict=True):
            terms = {name: f for name, f in zip(judged.last.names, row, strict=True) if f}
            if set(terms) <= set(known):
                assert sum((f * signs[n] * known[n] for n, f in terms.items()), ZERO) == constant
        if set(known) >= {item.name for item in case.coefficients}:
            closed += 1
            assert not any(_atoms_in_all(case, known).values())
    assert closed > 8


@pytest.mark.parametrize("name", NAMED)
def test_standard_deviations_are_those_of_simulated_sets(name: str) -> None:
    import numpy as np

    judged = named_set(name)
    result = reconcile_case(judged.case, network=judged.case.network is not None, draws=2)
    assert not result.held
    data = judged.data
    names = [item.compound for item in data.measured]
    signs = {item.name: side_sign(item.side) for item in judged.case.coefficients}
    expressed = judged.last.expressed(names)
    sampled: dict[str, list[float]] = {}
    for values in simulated(data, DRAWS, seed=3):
        drawn = with_values(data, values)
        moves = zip(drawn.measured, drawn.adjustments(), strict=True)
        known = {item.compound: float(item.value + move) for item, move in moves}
        for other, (factors, constant) in expressed.items():
            inside = sum(float(f) * signs[n] * known[n] for n, f in factors.items())
            known[other] = signs[other] * (inside + float(constant))
        for compound, value in known.items():
            sampled.setdefault(compound, []).append(value)
    stated = {item.compound: item.reconciled_sd for item in result.values}
    stated |= {item.compound: item.sd for item in result.calculated}
    assert set(stated) == set(sampled)
    assert result.calculated
    for compound, sd in stated.items():
        found = float(np.std(sampled[compound], ddof=1))
        assert found == pytest.approx(sd, rel=SAMPLING), compound


EQUATION = (
    "xylose + ? urea + ? oxygen -> ? biomass + ? succinate + ? formate + ? ethanol + ? acetate"
    " + ? lactate"
)
REDUNDANT = f"""
case: succinate, nitrogen measured as well
network: facultative-succinate
strain: carboxylase only
equation: {EQUATION}
either side: [carbon dioxide, water]
conditions:
  growth rate: 0.08 ± 0.004 1/h
  substrate uptake: 4.9 ± 0.2 mmol/g/h
measured:
  biomass: 0.11 ± 0.01 g/g
  urea: 0.073 ± 0.004
  acetate: 0.30 ± 0.02
demands:
  oxygen: at most 0.65
aim: most succinate
"""


def _best_in_floats(problem: Problem, column: str, fixed: dict[str, float]) -> float:
    """Most of a column by the simplex of another library, some columns held."""
    import numpy as np
    from scipy.optimize import linprog

    size = len(problem.columns)
    bounds = [
        (fixed[item.name],) * 2 if item.name in fixed else item.bounds.as_floats()
        for item in problem.columns
    ]
    table = np.zeros((len(problem.rows), size))
    for i, entries in enumerate(problem.matrix.rows):
        for j, value in entries:
            table[i, j] = float(value)
    equal, above, below = [], [], []
    for i, row in enumerate(problem.rows):
        low, high = row.bounds.as_floats()
        if low is not None and low == high:
            equal.append((table[i], low))
            continue
        if high is not None:
            above.append((table[i], high))
        if low is not None:
            below.append((-table[i], -low))
    less = above + below
    cost = np.zeros(size)
    cost[problem.column(column)] = -1
    answer = linprog(
        cost,
        A_ub=np.array([line for line, _ in less]) if less else None,
        b_ub=[end for _, end in less] if less else None,
        A_eq=np.array([line for line, _ in equal]),
        b_eq=[end for _, end in equal],
        bounds=bounds,
        method="highs",
    )
    assert answer.status == 0, answer.message
    return -float(answer.fun)


@pytest.mark.parametrize("which", ["example", "redundant"])
def test_error_of_the_best_value_is_that_of_simulated_sets(which: str, checkout: Path) -> None:
    """Each simulated set is reconciled by equalities and the best value there found in floats."""
    import numpy as np

    path = checkout / "examples/succinate-from-xylose/case.yaml"
    case = read_case(path) if which == "example" else case_of_text(REDUNDANT)
    result = reconcile(case, draws=2)
    assert result.optimum is not None
    assert not result.optimum.sampled
    assert not result.held
    judged = judge(case)
    assert judged.data.degrees == {"example": 1, "redundant": 2}[which]
    adjusted = zip(judged.data.measured, judged.data.adjustments(), strict=True)
    centre = [item.value + move for item, move in adjusted]
    middle = with_values(judged.data, centre)
    signs = {item.name: side_sign(item.side) for item in case.coefficients}
    count, best = 300, []
    for values in simulated(middle, count, seed=4):
        drawn = with_values(middle, values)
        moves = zip(drawn.measured, drawn.adjustments(), strict=True)
        fixed = {
            yield_column(item.compound): signs[item.compound] * float(item.value + move)
            for item, move in moves
        }
        best.append(_best_in_floats(judged.layers.final, yield_column("succinate"), fixed))
    assert np.mean(best) == pytest.approx(float(result.optimum.value), rel=0.01)
    assert np.std(best, ddof=1) == pytest.approx(result.optimum.sd, rel=4 / (2 * count) ** 0.5)


def test_where_a_side_holds_a_value_its_error_is_that_of_half_a_normal() -> None:
    """No more ethanol than 2, however the errors fall: half of the sets end there.

    Both errors are 0.1, and ethanol + lactate = 2: by equalities alone the sum of 2.06 is shared,
    2.02 and -0.02, each with an s.d. of 0.1/sqrt(2). Held at 2 and 0, lactate is the larger of 0
    and a normal variable, whose variance is 1/2 - 1/(2 pi) of that of the variable.
    """
    from math import pi

    count = 1000
    case = case_of_text(
        "case: x\nequation: glucose -> ? ethanol + ? lactate\n"
        "either side: [carbon dioxide, water]\n"
        "measured: {ethanol: 2.05 ± 0.1, lactate: 0.01 ± 0.1}\n"
    )
    result = reconcile(case, draws=count)
    assert result.held == ("ethanol", "lactate")
    assert result.draws is not None
    assert result.draws.asked == len(result.draws.points) == count
    closed_form = 0.1 / 2**0.5
    for item in result.values:
        assert 0 < item.reconciled_sd < closed_form
        assert item.reconciled_sd == pytest.approx(closed_form * (0.5 - 0.5 / pi) ** 0.5, rel=0.12)


@pytest.mark.parametrize("place", range(0, COUNT, 20))
def test_sampled_errors_are_no_larger_than_those_of_equalities(place: int) -> None:
    """Only the total is sure to be smaller: the nearest point of a convex set moves less far.

    In units in which the errors are independent and of 1, the variances of the reconciled values
    sum to the dimension of the equalities; moves to the nearest point never are larger than those
    of the drawn values on the equalities.
    """
    import numpy as np

    judged = _sets()[place]
    assert judged.case.network is not None
    result = reconcile_case(judged.case, draws=100)
    closed = np.array(
        [[float(value) for value in row] for row in judged.data.adjusted_covariance()]
    )
    precision = np.linalg.inv(_covariance(judged))
    free = len(closed) - judged.data.degrees
    assert np.trace(precision @ closed) == pytest.approx(free, rel=1e-6)
    total = float(np.trace(precision @ np.array(result.covariance)))
    if not result.held:
        assert total == pytest.approx(free, rel=1e-6)
        return
    # The sum of 100 sets' squares over their number has a relative s.d. of sqrt(2/(99 free)).
    # Signs may leave a single point, and then no error is left.
    assert 0 <= total <= free * (1 + 4 * (2 / (99 * max(free, 1))) ** 0.5)


def _prepared(text: str) -> Prepared:
    case = case_of_text(text)
    ready = prepare(case, Optimiser(engine_named("glpk")), case.network is not None)
    assert ready.objective is not None
    return ready


PRODUCTS = {"acetate": "0.5", "ethanol": "0.4", "biomass": "0.8", "lactate": "0.3"}
MADE = "? biomass + ? succinate + ? acetate + ? ethanol + ? lactate + ? carbon dioxide"
HOLDING = f"""
case: x
equation: glucose + ? ammonia + ? oxygen -> {MADE}
either side: [water]
compounds:
  biomass: CH1.8O0.5N0.2
"""


def _with_measured(count: int, sd: str, aim: str) -> str:
    lines = [f"  {name}: {value} ± {sd}\n" for name, value in list(PRODUCTS.items())[:count]]
    return f"{HOLDING}measured:\n{''.join(lines)}aim: {aim}\n"


@pytest.mark.parametrize("aim", ["most succinate", "least carbon dioxide", "most carbon dioxide"])
@pytest.mark.parametrize("sd", ["0.05", "0.4"], ids=["whole bands", "bands cut by balances"])
@pytest.mark.parametrize("count", [1, 2, 3, 4])
def test_no_point_of_the_bands_has_a_worse_best_value(count: int, sd: str, aim: str) -> None:
    _check_worst_end(_prepared(_with_measured(count, sd, aim)), count, sets=40)


def test_no_point_of_the_bands_has_a_worse_best_value_with_a_network(checkout: Path) -> None:
    case = read_case(checkout / "examples/succinate-from-xylose/case.yaml")
    ready = prepare(case, Optimiser(engine_named("glpk")))
    _check_worst_end(ready, 2, sets=20)


def _check_worst_end(ready: Prepared, count: int, sets: int) -> None:
    """Corners in random directions hold the worst end; no mixture of them goes below it.

    The directions are all sides of the box round the bands, its corners, and random ones.
    """
    import numpy as np

    optimiser, layers, objective = ready.optimiser, ready.layers, ready.objective
    assert objective is not None
    found = worst_end(optimiser, layers, objective)
    assert found.value is not None, found.reason
    assert not found.reason
    names = layers.statements.measured_compounds()
    assert len(names) == count
    banded = with_bands(layers.final, layers.statements)
    signs = {item.name: side_sign(item.side) for item in layers.case.coefficients}
    rng = np.random.default_rng(5)
    ways = [*np.eye(count), *-np.eye(count), *rng.choice([-1.0, 1.0], (3 * 2**count, count))]
    ways += list(rng.normal(size=(60 * count, count)))
    corners: dict[tuple[Fraction, ...], None] = {}
    for way in ways:
        aimed = {
            yield_column(name): Fraction(round(1000 * x), 1000)
            for name, x in zip(names, way, strict=True)
        }
        answer = optimiser.optimise(banded, aimed)
        corners[tuple(signs[name] * answer[yield_column(name)] for name in names)] = None
    listed = list(corners)
    assert len(listed) >= min(2**count, count + 1)
    points = list(listed)
    for _ in range(sets):
        parts = [int(x) for x in rng.integers(0, 5, len(listed)) ** 2]
        total = sum(parts) or 1
        if sum(parts):
            points.append(
                tuple(
                    sum((p * c[k] for p, c in zip(parts, listed, strict=True)), ZERO) / total
                    for k in range(count)
                )
            )
    best = []
    for point in points:
        held = with_point(layers.final, layers.statements, dict(zip(names, point, strict=True)))
        answer = objective.best(optimiser, held)
        assert answer.status is Status.OPTIMAL
        best.append(answer.value)
    worst = min if objective.maximise else max
    assert worst(best) == found.value
    assert worst(best[: len(listed)]) == found.value


def _width(
    ready: Prepared, item: NextMeasurement, column: str, place: int, precision: Fraction = ZERO
) -> float:
    """Width of a range once another coefficient is known to two s.d., by two linear problems.

    The coefficient is found in the middle of one of the 200 equal parts of what it can be.
    """
    low, high = item.range.low, item.range.high
    assert low is not None
    assert high is not None
    value = low + (high - low) * Fraction(2 * place + 1, 400)
    away = 2 * precision * abs(value)
    coefficient = ready.case.coefficient(item.compound)
    assert coefficient is not None
    ends = sorted(side_sign(coefficient.side) * end for end in (value - away, value + away))
    banded = with_bands(ready.layers.final, ready.layers.statements)
    (own,) = [c for c in banded.columns if c.name == yield_column(item.compound)]
    # The sides go on to count: a coefficient near zero is not taken to the other side by its error.
    if own.bounds.low is not None:
        ends[0] = max(ends[0], own.bounds.low)
    if own.bounds.high is not None:
        ends[1] = min(ends[1], own.bounds.high)
    held = banded.with_columns({own.name: Bounds(*ends)})
    found = [
        ready.optimiser.optimise(held, {column: Fraction(1)}, way).value for way in (True, False)
    ]
    return float(found[0] - found[1])


@pytest.mark.parametrize("which", ["elements", "network"])
def test_widths_after_a_next_measurement_are_chords(which: str, checkout: Path) -> None:
    """Known without an error, a coefficient leaves a chord of what both can be together.

    Chords are concave along the polygon: the longest of the 200 looked at lies within one step of
    the longest of every tenth.
    """
    case = read_case(checkout / "examples/succinate-from-xylose/case.yaml")
    ready = prepare(case, Optimiser(engine_named("glpk")))
    if which == "elements":
        ready = _prepared(_with_measured(2, "0.1", "most succinate"))
    objective = objective_of(ready.case)
    assert objective is not None
    column = objective.column
    sharp = next_measurements(ready.optimiser, ready.layers, column, ZERO)
    blunt = next_measurements(ready.optimiser, ready.layers, column, Fraction(1, 10))
    assert sharp
    assert blunt
    wider = {item.compound: item for item in blunt}
    finite = [item for item in sharp if item.expected is not None]
    assert len(finite) >= 3
    for item in finite:
        assert item.expected is not None
        assert item.worst is not None
        before = float(item.before)
        assert -1e-12 <= item.expected <= item.worst * (1 + 1e-12) <= before * (1 + 1e-9)
        other = wider[item.compound]
        assert other.expected is not None
        assert other.worst is not None
        assert item.expected <= other.expected * (1 + 1e-9) <= before * (1 + 1e-9)
        assert item.worst <= other.worst * (1 + 1e-9) <= before * (1 + 1e-9)
    assert [item.narrowing for item in sharp] == sorted(
        (item.narrowing for item in sharp), reverse=True
    )
    for item in finite[:2]:
        chords = {k: _width(ready, item, column, k) for k in range(4, 200, 10)}
        assert len(chords) == 20
        assert item.worst is not None
        assert max(chords.values()) <= item.worst + 1e-9
        longest = max(chords, key=lambda k: chords[k])
        near = range(max(0, longest - 10), min(200, longest + 11))
        assert max(_width(ready, item, column, k) for k in near) == pytest.approx(
            item.worst, abs=1e-9
        )


@pytest.mark.parametrize("precision", [ZERO, Fraction(1, 50), Fraction(1, 5)], ids=str)
def test_expected_width_is_the_mean_of_two_hundred(precision: Fraction) -> None:
    ready = _prepared(_with_measured(2, "0.1", "most succinate"))
    column = yield_column("succinate")
    found = next_measurements(ready.optimiser, ready.layers, column, precision)
    assert found
    item = next(item for item in found if item.compound == "carbon dioxide")
    widths = [_width(ready, item, column, k, precision) for k in range(200)]
    assert item.expected == pytest.approx(sum(widths) / 200, abs=1e-9)
    assert item.worst == pytest.approx(max(widths), abs=1e-9)


@pytest.mark.parametrize("name", NAMED)
def test_error_of_a_recovery_follows_from_its_slopes(name: str) -> None:
    """Slopes by differences over a millionth of a variance, in fractions."""
    judged = named_set(name)
    pooled = judged.layers.statements.pooled()
    contents = balances_by_name(judged.case, judged.layers.growth_residual)

    def ratios(values: tuple[Fraction, ...]) -> dict[str, Fraction]:
        rows = measured_recoveries(judged.case, contents, replace(pooled, values=values), {})
        return {row.quantity: row.ratio for row in rows}

    there = measured_recoveries(judged.case, contents, pooled, {})
    assert {"carbon", "electrons"} <= {row.quantity for row in there}
    slopes: dict[str, list[float]] = {row.quantity: [] for row in there}
    for place, (_, target) in enumerate(pooled.items()):
        step = target.variance / 10**6
        values = list(pooled.values)
        values[place] += step
        for quantity, ratio in ratios(tuple(values)).items():
            (before,) = [row.ratio for row in there if row.quantity == quantity]
            slopes[quantity].append(float((ratio - before) / step))
    for row in there:
        variance = sum(
            a * b * float(entry)
            for a, line in zip(slopes[row.quantity], pooled.covariance, strict=True)
            for b, entry in zip(slopes[row.quantity], line, strict=True)
        )
        assert float(row.sd) == pytest.approx(variance**0.5, rel=1e-5)
