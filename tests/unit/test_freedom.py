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


# Right sides -------------------------------------------------------------------------------------


def test_the_equations_have_the_basis_on_their_right_side(case_of: CaseOf) -> None:
    equations = _by_elements(case_of, f"equation: glucose -> ? ethanol + ? lactate\n{EITHER}")
    # Any answer keeps them: 2 ethanol and 2 carbon dioxide, or 2 lactate.
    for point in ({"ethanol": 2, "carbon dioxide": 2}, {"lactate": 2}):
        for row, constant in zip(equations.rows, equations.constants, strict=True):
            pairs = zip(equations.names, row, strict=True)
            assert sum(factor * point.get(name, 0) for name, factor in pairs) == constant
    assert any(equations.constants)


def test_a_given_coefficient_moves_to_the_right_side(case_of: CaseOf) -> None:
    text = f"equation: glucose -> 1/2 ethanol + ? lactate\n{EITHER}"
    equations = _by_elements(case_of, text)
    assert equations.expressed([]) == {
        "lactate": ({}, Fraction(3, 2)),
        "carbon dioxide": ({}, Fraction(1, 2)),
        "water": ({}, Fraction(0)),
    }


def test_what_follows_is_expressed_by_what_is_known(case_of: CaseOf) -> None:
    equations = _by_elements(case_of, f"equation: glucose -> ? ethanol + ? lactate\n{EITHER}")
    one = Fraction(1)
    assert equations.expressed(["ethanol"]) == {
        "lactate": ({"ethanol": -one}, Fraction(2)),
        "carbon dioxide": ({"ethanol": one}, Fraction(0)),
        "water": ({}, Fraction(0)),
    }
    # Without anything known only water follows, and a name from elsewhere adds nothing.
    assert equations.expressed(["acetate"]) == {"water": ({}, Fraction(0))}


def test_only_what_follows_is_expressed(case_of: CaseOf) -> None:
    text = f"equation: glucose + ? oxygen -> ? ethanol + ? lactate\n{EITHER}"
    equations = _by_elements(case_of, text)
    assert equations.expressed([]) == {}
    # Oxygen is positive where it is made: 4 oxygen = 12 ethanol + 12 lactate - 24.
    found = equations.expressed(["ethanol", "lactate"])
    assert found["oxygen"] == ({"ethanol": Fraction(3), "lactate": Fraction(3)}, Fraction(-6))
    assert equations.expressed(["ethanol"]) == {}
    assert found.keys() == {"oxygen", "carbon dioxide", "water"}


def test_values_that_are_told_as_well_are_not_expressed(case_of: CaseOf) -> None:
    equations = _by_elements(case_of, f"equation: glucose -> ? ethanol + ? lactate\n{EITHER}")
    # Redundant values: carbon dioxide follows from either of them, so from both.
    found = equations.expressed(["ethanol", "lactate"])
    assert set(found) == {"carbon dioxide", "water"}
    factors, constant = found["carbon dioxide"]
    values = {"ethanol": Fraction(5, 4), "lactate": Fraction(3, 4)}
    assert sum(factor * values[name] for name, factor in factors.items()) + constant == Fraction(
        5, 4
    )
