"""Degrees of freedom and what is calculable, on equations small enough to count by hand."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from yieldnet.balance.elements import element_problem
from yieldnet.balance.freedom import CoefficientEquations, Freedom, coefficient_equations
from yieldnet.balance.statements import statements_of
from yieldnet.model.binding import bind
from yieldnet.optimum.problem import Bounds
from yieldnet.prediction.layers import build_layers

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.foundation.findings import Findings
    from yieldnet.model.case import Case

    CaseOf = Callable[[str], tuple[Case | None, Findings]]

EITHER = "either side: [carbon dioxide, water]\n"
NETWORK = """
network: Small
carriers:
  ATP: {kind: energy}
crossing:
  in: [glucose, oxygen]
  out: [ethanol, lactate]
  either: [carbon dioxide, water]
reactions:
  lactate path: glucose -> 2 lactate + 2 ATP
  ethanol path: lactate -> ethanol + carbon dioxide
  one way round: lactate -> pyruvate + X
  and back: pyruvate + X -> lactate
  burning: lactate + 3 oxygen -> 3 carbon dioxide + 3 water + 15 ATP
compounds: {X: H2}
"""


def _case(case_of: CaseOf, text: str) -> Case:
    case, findings = case_of("case: x\n" + text)
    assert case is not None, findings.items
    return case


def _by_elements(case_of: CaseOf, text: str) -> CoefficientEquations:
    case = _case(case_of, text)
    return coefficient_equations(case, element_problem(case, statements_of(case)))


def test_three_elements_among_four_coefficients_leave_one(case_of: CaseOf) -> None:
    equations = _by_elements(case_of, f"equation: glucose -> ? ethanol + ? lactate\n{EITHER}")
    assert equations.names == ("ethanol", "lactate", "carbon dioxide", "water")
    # Lactate is ethanol and carbon dioxide together: one may stand for the others, water is left.
    assert equations.free() == 1
    assert equations.calculable() == {"water"}
    assert equations.free(["ethanol"]) == 0
    assert equations.calculable(["ethanol"]) == set(equations.names)
    # Water told as well adds nothing that the elements do not say.
    assert equations.free(["water"]) == 1


def test_a_third_product_leaves_two(case_of: CaseOf) -> None:
    text = f"equation: glucose + ? oxygen -> ? ethanol + ? lactate\n{EITHER}"
    equations = _by_elements(case_of, text)
    assert equations.free() == 2
    assert equations.calculable() == set()
    assert equations.free(["ethanol", "lactate"]) == 0
    # The same one told twice is told once.
    assert equations.free(["ethanol", "ethanol"]) == 1


@pytest.mark.parametrize(
    ("written", "unknown", "free"),
    [
        ("?", 4, 1),
        # A decimal is measured, and so an unknown; an integer or a fraction is a given number.
        ("0.50", 4, 1),
        ("1/2", 3, 0),
        ("1", 3, 0),
    ],
)
def test_what_counts_as_unknown(case_of: CaseOf, written: str, unknown: int, free: int) -> None:
    text = f"equation: glucose -> {written} ethanol + ? lactate\n{EITHER}"
    case = _case(case_of, text)
    equations = coefficient_equations(case, element_problem(case, statements_of(case)))
    assert case.unknowns() == len(equations.names) == unknown
    assert equations.free() == free
    # A name that is no unknown is known already.
    assert equations.free(["ethanol"]) == 0


def test_fluxes_are_projected_out(case_of: CaseOf, tmp_path: Path) -> None:
    (tmp_path / "network.yaml").write_text(NETWORK, "utf-8")
    text = "network: network.yaml\nequation: glucose + ? oxygen -> ? ethanol + ? lactate\n"
    case = _case(case_of, text + EITHER)
    assert case.network is not None
    bound, _ = bind(case.network)
    layers = build_layers(case, statements_of(case), bound, {})
    # The elements leave two. The paths to ethanol and to carbon dioxide are two as well, and a
    # loop that moves no coefficient is none.
    for rung in ("elements", "pathways", "energy"):
        assert coefficient_equations(case, layers.problem(rung)).free() == 2
    shut = Bounds(Fraction(0), Fraction(0))
    without = layers.problem("pathways").with_columns({"flux of burning": shut})
    equations = coefficient_equations(case, without)
    assert equations.free() == 1
    assert equations.calculable() == {"oxygen", "water"}
    # An inequality ties nothing, an equality ties one more.
    held = without.with_columns({"surplus of ATP": Bounds(Fraction(2), Fraction(2))})
    assert coefficient_equations(case, held).free() == 1
    balanced = layers.problem("pathways").with_columns({"surplus of ATP": shut})
    assert coefficient_equations(case, balanced).free() == 1


def test_a_coefficient_held_by_a_row_is_known(case_of: CaseOf) -> None:
    text = f"equation: glucose -> ? ethanol + ? lactate\n{EITHER}demands: {{ethanol: at most 1}}\n"
    case = _case(case_of, text)
    problem = element_problem(case, statements_of(case))
    one = Fraction(1)
    held = problem.with_rows({"demand ethanol": Bounds(one, one)})
    assert coefficient_equations(case, held).free() == 0
    above = problem.with_rows({"demand ethanol": Bounds(None, one)})
    assert coefficient_equations(case, above).free() == 1


def test_rank_is_what_is_not_free() -> None:
    assert Freedom(layer="elements", unknowns=10, free=6).rank == 4
    assert CoefficientEquations((), ()).free() == 0
    assert CoefficientEquations(("a",), ()).calculable() == set()
