"""A network whose acids are ions, worked by hand: charge is one of the balances.

Reactions of ``networks/charged.yaml``, with pyruvate C3H3O3-, succinate C4H4O4(2-), lactate
C3H5O3-, acetate C2H3O2-, hydrogen carbonate HCO3-::

    glucose -> 2 pyruvate + 2 H+ + 2 NADH + 2 ATP
    pyruvate + NADH -> lactate
    pyruvate + 2 water -> acetate + hydrogen carbonate + H+ + NADH + ATP
    pyruvate + hydrogen carbonate + ATP -> oxaloacetate + water
    oxaloacetate + 2 NADH -> succinate + water

*By elements and charge.* Electrons follow from C, H, O and charge: glucose 24, succinate 16 + 4 - 8
+ 2 = 14, lactate 12, acetate 8, hydrogen carbonate 4 + 1 - 6 + 1 = 0, H+ 1 - 1 = 0. The limit is
24/14 = 12/7. It holds 48/7 carbon, so 6/7 hydrogen carbonate is taken up. Charge: -6/7 enters,
-24/7 leaves with succinate, so 18/7 H+ leave. Six coefficients in four independent balances leave
two free; without the charge balance it would be three.

*By the network.* Of two pyruvate, s become succinate, a acetate, l lactate: s + a + l = 2. NADH: 2
+ a = 2 s + l. With l = 0: a = 2 - s, so 4 - s = 2 s, s = 4/3, a = 2/3. Lactate only takes NADH and
pyruvate away. ATP: 2 + a - s = 4/3 is left, so energy costs nothing. Hydrogen carbonate: s - a =
2/3 taken up. H+: 2 + a = 8/3 made; by charge -8/3 - 2/3 + 8/3 = -2/3, what entered. Water: 2 s - 2
a = 4/3 made.

*With two measured products*, succinate 1 and acetate 1/2, by elements and charge: electrons 24 = 14
+ 4 + 12 l give lactate 1/2; carbon 6 + x = 4 + 1 + 3/2 gives x = 1/2 hydrogen carbonate taken up;
charge -1/2 = -2 - 1/2 - 1/2 + h gives 5/2 H+; hydrogen 12 + 1/2 = 4 + 3/2 + 5/2 + 5/2 + 2 w gives
one water.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from tests.reference.rows import Answered, Question, best, made

if TYPE_CHECKING:
    from collections.abc import Callable

    Ask = Callable[..., Answered]

NETWORK = Question(file="cases/mixed-ions.yaml")
ELEMENTS = Question(file="cases/mixed-ions-elements.yaml")


def test_ladder(answered: Ask) -> None:
    ladder = answered(NETWORK).prediction.ladder
    assert [(item.rung, item.value) for item in ladder] == [
        ("elements", Fraction(12, 7)),
        ("pathways", Fraction(4, 3)),
        ("redox", Fraction(4, 3)),
        ("energy", Fraction(4, 3)),
    ]


@pytest.mark.parametrize(
    ("compound", "value"),
    [
        ("glucose", "-1"),
        ("succinate ion", "4/3"),
        ("lactate ion", "0"),
        ("acetate ion", "2/3"),
        ("hydrogen carbonate", "-2/3"),
        ("H+", "8/3"),
        ("water", "4/3"),
    ],
)
def test_filled_in_equation(compound: str, value: str, answered: Ask) -> None:
    assert made(compound)(answered(NETWORK).prediction) == Fraction(value)


@pytest.mark.parametrize(
    ("compound", "value"),
    [
        ("lactate ion", "1/2"),
        ("hydrogen carbonate", "-1/2"),
        ("H+", "5/2"),
        ("water", "1"),
    ],
)
def test_elements_and_charge_give_the_rest(compound: str, value: str, answered: Ask) -> None:
    assert made(compound)(answered(ELEMENTS).prediction) == Fraction(value)


def test_charge_is_among_the_balances(answered: Ask) -> None:
    for question in (NETWORK, ELEMENTS):
        problems = [answer.problem for answer in answered(question).answers]
        balances = [
            [row.name for row in problem.rows if row.layer == "elements"] for problem in problems
        ]
        assert ["C balance", "H balance", "O balance", "charge balance"] in balances
    (freedom,) = [item for item in answered(NETWORK).prediction.freedom if item.layer == "elements"]
    assert (freedom.unknowns, freedom.rank, freedom.free) == (6, 4, 2)


def test_best_is_in_the_range_of_the_elements(answered: Ask) -> None:
    prediction = answered(NETWORK).prediction
    elements = prediction.coefficient("succinate ion").elements
    assert elements is not None
    assert elements.low == 0
    assert elements.high == Fraction(12, 7)
    assert best(prediction) == Fraction(4, 3)
