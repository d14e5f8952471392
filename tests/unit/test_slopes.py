"""Slopes by hand: how far they hold, and bounds that stay."""

from __future__ import annotations

from fractions import Fraction

from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.problem import Bounds, ProblemBuilder
from yieldnet.optimum.proof import Optimiser
from yieldnet.optimum.slopes import Slope, slopes

ONE = Fraction(1)


def test_a_range_moves_as_a_whole() -> None:
    # Most x with x in 0...10 and a row 1 <= x <= 3: moved down by 3, the range is -2...0.
    builder = ProblemBuilder()
    builder.add_column("x", Bounds(Fraction(0), Fraction(10)))
    builder.add_row("range", "demands", Bounds(ONE, Fraction(3)), {"x": ONE})
    optimiser = Optimiser(engine_named("glpk"))
    best = optimiser.optimise(builder.build(), {"x": ONE})
    more, less = slopes(optimiser, best, [{"range": ONE}, {"range": -ONE}])
    assert more == Slope(Fraction(1), Fraction(7))
    assert less == Slope(Fraction(-1), Fraction(3))


def test_a_corner_has_two_slopes() -> None:
    # Most x with x <= a and x <= 2 at a = 2: more a brings nothing, less a takes as much.
    builder = ProblemBuilder()
    builder.add_column("x", Bounds(Fraction(0), Fraction(2)))
    builder.add_row("limit", "demands", Bounds(None, Fraction(2)), {"x": ONE})
    optimiser = Optimiser(engine_named("glpk"))
    best = optimiser.optimise(builder.build(), {"x": ONE})
    more, less = slopes(optimiser, best, [{"limit": ONE}, {"limit": -ONE}])
    assert more == Slope(Fraction(0), None)
    assert less == Slope(Fraction(-1), Fraction(2))
