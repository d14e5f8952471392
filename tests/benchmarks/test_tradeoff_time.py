"""The exact polygon of a trade-off against an envelope of 20 points by a modelling library.

Both look at the same network, the core model that ships with the library, in one process and in
turns, so that a slow spell of the machine hits both. The network is read through the library
straight into a problem of our own. As the library has its model, so the polygon has its problem;
loading it into the solver counts, and the time with reading is printed beside it. The envelope must
lie on the polygon, so that both did the same work; the polygon has its corners besides, proven.
"""

from __future__ import annotations

from fractions import Fraction
from statistics import median
from time import perf_counter
from typing import TYPE_CHECKING, Any

import pytest

from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.polygon import Axis, Polygon, Shape, project
from yieldnet.optimum.problem import Bounds, Problem, ProblemBuilder
from yieldnet.optimum.proof import Optimiser

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

RUNS = 15
"""Runs of each after one that warms everything up [-]."""
POINTS = 20
"""Points of the envelope [-]."""
AGREE = 1e-6
"""How far an envelope may lie off the polygon: the library solves in floats [mmol/g/h]."""


def _problem(model: Any) -> Problem:
    """Steady state of a model, its numbers taken as they are written."""
    builder = ProblemBuilder()
    rows: dict[str, dict[str, Fraction]] = {item.id: {} for item in model.metabolites}
    for reaction in model.reactions:
        low, high = (Fraction(str(end)) for end in reaction.bounds)
        builder.add_column(reaction.id, Bounds(low, high))
        for metabolite, amount in reaction.metabolites.items():
            rows[metabolite.id][reaction.id] = Fraction(str(amount))
    for name, entries in rows.items():
        builder.add_row(name, "steady state", Bounds(Fraction(0), Fraction(0)), entries)
    return builder.build()


def _reaction(model: Any, words: str) -> Any:
    (found,) = [item for item in model.reactions if words in item.name]
    return found


def _ends(polygon: Polygon, x: float) -> tuple[float, float]:
    """Least and most y of a polygon at an x."""
    corners = [(float(at[0]), float(at[1])) for at in polygon.corners]
    values = []
    for start, end in polygon.edges():
        (x0, y0), (x1, y1) = corners[start], corners[end]
        if x0 == x1:
            values += [y0, y1] if abs(x - x0) < AGREE else []
        elif min(x0, x1) - AGREE <= x <= max(x0, x1) + AGREE:
            values.append(y0 + (y1 - y0) * (x - x0) / (x1 - x0))
    return min(values), max(values)


def _seconds(runs: Sequence[Callable[[], object]]) -> list[float]:
    """Median time of each of some functions, called in turns."""
    times: list[list[float]] = [[] for _ in runs]
    for turn in range(RUNS + 1):
        for place, run in enumerate(runs):
            begin = perf_counter()
            run()
            if turn:
                times[place].append(perf_counter() - begin)
    return [median(item) for item in times]


@pytest.mark.parametrize("product", ["Succinate exchange", "Acetate exchange", "Ethanol exchange"])
def test_the_polygon_takes_less_time_than_an_envelope_of_twenty_points(
    product: str, capsys: pytest.CaptureFixture[str]
) -> None:
    from cobra.flux_analysis import production_envelope  # type: ignore[import-untyped]
    from cobra.io import load_model  # type: ignore[import-untyped]

    model = load_model("textbook")
    biomass, made = _reaction(model, "Biomass"), _reaction(model, product)

    problem = _problem(model)

    def polygon(problem: Problem = problem) -> Polygon:
        found = project(Optimiser(engine_named("glpk")), problem, Axis(biomass.id), Axis(made.id))
        assert found is not None
        return found

    def envelope() -> Any:
        return production_envelope(model, [biomass.id], objective=made.id, points=POINTS)

    exact, table = polygon(), envelope()
    assert exact.shape is Shape.POLYGON
    assert len(table) == POINTS
    for x, least, most in table[[biomass.id, "flux_minimum", "flux_maximum"]].itertuples(
        index=False
    ):
        assert _ends(exact, x) == pytest.approx((least, most), abs=AGREE)
    ours, theirs, reading = _seconds([polygon, envelope, lambda: polygon(_problem(model))])
    with capsys.disabled():
        print(
            f"\n{product} against biomass, {len(exact.corners)} corners: polygon"
            f" {1e3 * ours:.1f} ms ({1e3 * reading:.1f} ms with reading the model), envelope of"
            f" {POINTS} points {1e3 * theirs:.1f} ms, ratio {theirs / ours:.2f}"
            f" ({theirs / reading:.2f})"
        )
    assert ours < theirs
