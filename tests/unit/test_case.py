"""Cases as values: words and copies that no file is needed for."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import pytest

from yieldnet.chemistry.formula import read_formula
from yieldnet.foundation.exact import read_number
from yieldnet.model.case import Aim, AimDirection, Case, OverallCoefficient
from yieldnet.model.equation import UNKNOWN, Equation, Term
from yieldnet.model.network import Compound, Direction

GLUCOSE = Compound(name="glucose", formula=read_formula("C6H12O6"))


def _case(*coefficients: OverallCoefficient) -> Case:
    term = Term(name="glucose", coefficient=UNKNOWN)
    return Case(
        title="x",
        network=None,
        equation=Equation(left=(term,), right=()),
        basis=GLUCOSE,
        coefficients=coefficients,
        compounds=(GLUCOSE,),
    )


def _written(text: str) -> OverallCoefficient:
    return OverallCoefficient(name=text, side=Direction.PRODUCED, written=read_number(text))


def test_a_written_decimal_is_unknown_and_an_exact_number_is_not() -> None:
    question_mark = OverallCoefficient(name="a", side=Direction.EITHER)
    assert _case().unknowns() == 0
    assert _case(question_mark, _written("1.79"), _written("2"), _written("1/3")).unknowns() == 2


def test_an_aim_is_written_as_in_a_case() -> None:
    assert str(Aim(direction=AimDirection.LEAST, compound="acetate")) == "least acetate"


def test_two_cases_differ_by_what_they_ask_and_not_by_their_place() -> None:
    case = _case()
    assert replace(case, file="elsewhere.yaml") == case
    assert replace(case, title="y") != case
    assert case.with_knock_outs() == case


def test_without_a_network_there_is_nothing_to_change() -> None:
    with pytest.raises(KeyError, match="po"):
        _case().with_parameter("po", Fraction(1))
    with pytest.raises(KeyError, match="respiration"):
        _case().with_knock_outs("respiration")


def test_a_notebook_shows_a_case_with_its_letters_escaped() -> None:
    aim = Aim(direction=AimDirection.MOST, compound="a<b>")
    assert replace(_case(), title="A & B", aim=aim)._repr_html_() == (
        "<p><b>A &amp; B</b><br>? glucose -&gt;<br>most a&lt;b&gt;</p>"
    )
