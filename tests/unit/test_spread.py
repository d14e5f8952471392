"""How far errors carry: closed forms by hand, drawn sets against them, and ends over the bands."""

from __future__ import annotations

from fractions import Fraction
from math import pi, sqrt
from typing import TYPE_CHECKING

import pytest

from tests.unit.judged import case_from, two_products
from yieldnet.balance.statements import with_point
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser
from yieldnet.prediction.prepare import prepare
from yieldnet.prediction.spread import best_variance, draw_values, worst_end

if TYPE_CHECKING:
    from collections.abc import Mapping

    from tests.unit.judged import CaseOf
    from yieldnet.prediction.ladder import Objective
    from yieldnet.prediction.prepare import Prepared
    from yieldnet.prediction.spread import Draws

F = Fraction
THREE = (
    "case: x\nequation: glucose + ? oxygen -> ? ethanol + ? lactate + ? acetate\n"
    "either side: [carbon dioxide, water]\n"
)
HALF_CUT = sqrt(1 / 2 - 1 / (2 * pi))
"""Standard deviation of max(0, Z) with a standard normal Z: the mean square is 1/2, the mean
1/sqrt(2 pi)."""
DRAWS = 400
WITHIN = 0.15
"""Four times the relative error of a standard deviation from 400 draws, 1/sqrt(800)."""


def _prepared(case_of: CaseOf, text: str) -> Prepared:
    return prepare(case_from(case_of, text), Optimiser(engine_named("glpk")), network=False)


def _aimed(ready: Prepared) -> tuple[Objective, Mapping[str, Fraction]]:
    assert ready.objective is not None
    assert ready.point is not None
    return ready.objective, ready.point


def _drawn(ready: Prepared, draws: int = DRAWS) -> Draws:
    assert ready.point is not None
    pooled = ready.layers.statements.pooled()
    return draw_values(ready.layers, pooled, ready.point, ready.objective, draws)


def _variance(ready: Prepared, covariance: tuple[tuple[Fraction, ...], ...]) -> Fraction | None:
    objective, point = _aimed(ready)
    layers = ready.layers
    best = objective.best(ready.optimiser, with_point(layers.final, layers.statements, point))
    names = layers.statements.pooled().names
    return best_variance(ready.optimiser, layers, best, names, covariance)


# Closed form -------------------------------------------------------------------------------------


def test_a_best_value_that_follows_a_measured_one_has_its_variance(case_of: CaseOf) -> None:
    # Carbon dioxide is ethanol; the reconciled covariance is (0.008 -0.008; -0.008 0.008).
    ready = _prepared(case_of, two_products("1.2 ± 0.2", "1.0 ± 0.1", "aim: most carbon dioxide\n"))
    eight = F("0.008")
    assert _variance(ready, ((eight, -eight), (-eight, eight))) == eight


def test_factors_and_correlations_enter_the_variance(case_of: CaseOf) -> None:
    # Most carbon dioxide: 12 ethanol + 12 lactate + 8 acetate + 4 oxygen = 24 electrons, all carbon
    # not in ethanol or lactate, as acetate would only lower it: 6 - 2 ethanol - 3 lactate.
    ready = _prepared(
        case_of,
        f"{THREE}measured: {{ethanol: 0.5 ± 0.1, lactate: 0.5 ± 0.1}}\naim: most carbon dioxide\n",
    )
    variance, zero = F(1, 100), F(0)
    assert _variance(ready, ((variance, zero), (zero, variance))) == 13 * variance
    half = variance / 2
    assert _variance(ready, ((variance, half), (half, variance))) == 19 * variance


def test_a_value_without_an_error_left_adds_none(case_of: CaseOf) -> None:
    ready = _prepared(case_of, two_products("1.2 ± 0.2", "1.0 ± 0.1", "aim: most carbon dioxide\n"))
    zero = F(0)
    assert _variance(ready, ((zero, zero), (zero, zero))) == 0


def test_a_kink_has_no_closed_form(case_of: CaseOf) -> None:
    # Most lactate is the less of 2 - ethanol and the demand of 1: they meet where ethanol is 1.
    text = (
        "case: x\nequation: glucose + ? oxygen -> ? ethanol + ? lactate\n"
        "either side: [carbon dioxide, water]\nmeasured: {ethanol: 1.0 ± 0.1}\n"
        "demands: {lactate: at most 1}\naim: most lactate\n"
    )
    ready = _prepared(case_of, text)
    assert _variance(ready, ((F(1, 100),),)) is None
    drawn = _drawn(ready)
    assert drawn.names == ("ethanol",)
    assert len(drawn.best) == len(drawn.points) == drawn.asked == DRAWS
    assert max(drawn.best) == pytest.approx(1, abs=1e-9)
    assert drawn.best_sd() == pytest.approx(0.1 * HALF_CUT, rel=WITHIN)


# Drawn sets --------------------------------------------------------------------------------------


def test_drawn_sets_have_the_covariance_of_the_closed_form(case_of: CaseOf) -> None:
    # Both are far from every side, so that nothing holds them: 0.008 as by hand.
    ready = _prepared(case_of, two_products("1.2 ± 0.2", "1.0 ± 0.1"))
    drawn = _drawn(ready)
    assert drawn.best == ()
    (first, across), (back, second) = drawn.covariance()
    assert sqrt(first) == pytest.approx(sqrt(0.008), rel=WITHIN)
    assert second == pytest.approx(first, rel=1e-9)
    assert across == back == pytest.approx(-first, rel=1e-9)
    assert all(sum(point) == pytest.approx(2, abs=1e-12) for point in drawn.points)


def test_a_side_cuts_the_drawn_points(case_of: CaseOf) -> None:
    # Lactate is at its side: of a normal spread with s.d. 0.1/sqrt(2) only the upper half is left.
    ready = _prepared(case_of, two_products("2.05 ± 0.1", "0.01 ± 0.1"))
    assert ready.point == {"ethanol": F(2), "lactate": F(0)}
    drawn = _drawn(ready)
    assert min(point[1] for point in drawn.points) == pytest.approx(0, abs=1e-9)
    assert sqrt(drawn.covariance()[1][1]) == pytest.approx(0.1 / sqrt(2) * HALF_CUT, rel=WITHIN)


def test_the_same_case_gives_the_same_sets(case_of: CaseOf) -> None:
    ready = _prepared(case_of, two_products("1.2 ± 0.2", "1.0 ± 0.1"))
    assert _drawn(ready, 5) == _drawn(ready, 5)


def test_one_coefficient_has_a_covariance_too(case_of: CaseOf) -> None:
    text = (
        "case: x\nequation: glucose + ? oxygen -> ? ethanol\n"
        "either side: [carbon dioxide, water]\nmeasured: {ethanol: 1.0 ± 0.1}\n"
    )
    ((variance,),) = _drawn(_prepared(case_of, text)).covariance()
    assert sqrt(variance) == pytest.approx(0.1, rel=WITHIN)


def test_an_exact_value_is_kept_in_every_set(case_of: CaseOf) -> None:
    ready = _prepared(case_of, two_products("1 exact", "0.9 ± 0.1"))
    assert ready.point == {"ethanol": F(1), "lactate": F(1)}
    drawn = _drawn(ready, 20)
    assert drawn.names == ("lactate",)
    assert [point[0] for point in drawn.points] == pytest.approx([1.0] * 20, abs=1e-9)


def test_progress_is_told_for_every_set(case_of: CaseOf) -> None:
    ready = _prepared(case_of, two_products("1.2 ± 0.2", "1.0 ± 0.1"))
    told: list[tuple[int, int]] = []
    assert ready.point is not None
    draw_values(
        ready.layers,
        ready.layers.statements.pooled(),
        ready.point,
        None,
        3,
        lambda done, all_of_them: told.append((done, all_of_them)),
    )
    assert told == [(1, 3), (2, 3), (3, 3)]


# The worse end over the bands --------------------------------------------------------------------


def test_the_worse_end_on_a_line(case_of: CaseOf) -> None:
    # Lactate may be 0.8 to 1.2, ethanol 0.8 to 1.6, together 2; carbon dioxide is ethanol.
    ready = _prepared(case_of, two_products("1.2 ± 0.2", "1.0 ± 0.1", "aim: most carbon dioxide\n"))
    objective, _ = _aimed(ready)
    found = worst_end(ready.optimiser, ready.layers, objective)
    assert (found.value, found.corners, found.reason) == (F("0.8"), 2, "")


@pytest.mark.parametrize(
    ("measured", "aim", "value", "corners"),
    [
        # 6 - 2 · 0.6 - 3 · 0.4.
        ("ethanol: 0.5 ± 0.05, lactate: 0.3 ± 0.05", "most carbon dioxide", F("3.6"), 4),
        # The least is worse where it is more. Acetate takes all the electrons that are left, 3 -
        # 1.5 (ethanol + lactate); what is left of the carbon is 6 - 2 e - 3 l - 6 + 3 e + 3 l = e.
        ("ethanol: 0.5 ± 0.05, lactate: 0.3 ± 0.05", "least carbon dioxide", F("0.6"), 4),
        # 6 - 2 · 0.6 - 3 · 0.4 - 2 · 0.3.
        (
            "ethanol: 0.5 ± 0.05, lactate: 0.3 ± 0.05, acetate: 0.2 ± 0.05",
            "most carbon dioxide",
            F(3),
            8,
        ),
        ("ethanol: 1 exact", "most carbon dioxide", F(4), 1),
    ],
    ids=["two axes", "least", "three axes", "no axis"],
)
def test_the_worse_end_over_a_box(
    case_of: CaseOf, measured: str, aim: str, value: Fraction, corners: int
) -> None:
    ready = _prepared(case_of, f"{THREE}measured: {{{measured}}}\naim: {aim}\n")
    objective, _ = _aimed(ready)
    found = worst_end(ready.optimiser, ready.layers, objective)
    assert (found.value, found.corners, found.reason) == (value, corners, "")


def test_a_box_that_a_balance_cuts_is_searched_corner_by_corner(case_of: CaseOf) -> None:
    # Electrons, 12 ethanol + 12 lactate + 8 acetate <= 24, cut the corner (1.1, 0.8, 0.4) of the
    # box. Least carbon dioxide is 6 less the carbon 2 e + 3 l + 2 a; the most carbon an electron is
    # in lactate and acetate, so l = 0.8, a = 0.4 and e = (24 - 9.6 - 3.2)/12 = 14/15. That
    # leaves carbon dioxide of 6 - 28/15 - 2.4 - 0.8 = 14/15.
    text = (
        f"{THREE}measured: {{ethanol: 1.0 ± 0.05, lactate: 0.7 ± 0.05, acetate: 0.3 ± 0.05}}\n"
        "aim: most carbon dioxide\n"
    )
    ready = _prepared(case_of, text)
    objective, _ = _aimed(ready)
    found = worst_end(ready.optimiser, ready.layers, objective)
    assert found.value == F(14, 15)
    assert found.corners > 8


def test_a_best_value_without_an_end_is_not_told(case_of: CaseOf) -> None:
    text = (
        "case: x\nequation: glucose -> ? ethanol + ? lactate\n"
        "either side: [carbon dioxide, water, hydrogen]\nmeasured: {lactate: 1 ± 0.1}\n"
        "aim: most ethanol\n"
    )
    ready = _prepared(case_of, text)
    objective, _ = _aimed(ready)
    found = worst_end(ready.optimiser, ready.layers, objective)
    assert found.value is None
    assert found.reason == "the aim has no best value at a corner"


def test_too_many_corners_are_not_searched(
    case_of: CaseOf, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr("yieldnet.prediction.spread._MOST_CORNERS", 7)
    text = (
        f"{THREE}measured: {{ethanol: 0.5 ± 0.05, lactate: 0.3 ± 0.05, acetate: 0.2 ± 0.05}}\n"
        "aim: most carbon dioxide\n"
    )
    ready = _prepared(case_of, text)
    objective, _ = _aimed(ready)
    found = worst_end(ready.optimiser, ready.layers, objective)
    assert found.value is None
    assert "more than 7 corners" in found.reason
