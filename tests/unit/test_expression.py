"""Parameter expressions as trees: value, names, text."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.foundation.exact import WrittenNumber
from yieldnet.model.expression import Expression, Negation, Operation, ParameterName, Tree

F = Fraction
A, B, C = ParameterName("a"), ParameterName("b"), ParameterName("c")
TWO = WrittenNumber(F(2), "2")
VALUES = {"a": F(3), "b": F(1, 2), "c": F(5)}


def _op(sign: str, left: Tree, right: Tree) -> Operation:
    return Operation(sign, left, right)


@pytest.mark.parametrize(
    ("tree", "text", "value"),
    [
        (TWO, "(2)", F(2)),
        (A, "(a)", F(3)),
        (Negation(A), "(-a)", F(-3)),
        (Negation(_op("+", A, B)), "(-(a + b))", F(-7, 2)),
        (_op("+", A, B), "(a + b)", F(7, 2)),
        (_op("-", A, B), "(a - b)", F(5, 2)),
        (_op("*", A, B), "(a*b)", F(3, 2)),
        (_op("/", A, B), "(a/b)", F(6)),
        (_op("-", _op("*", TWO, A), TWO), "(2*a - 2)", F(4)),
        (_op("*", _op("+", A, B), C), "((a + b)*c)", F(35, 2)),
        (_op("*", C, _op("+", A, B)), "(c*(a + b))", F(35, 2)),
        (_op("-", A, _op("-", B, C)), "(a - (b - c))", F(15, 2)),
        (_op("-", _op("-", A, B), C), "(a - b - c)", F(-5, 2)),
        (_op("/", A, _op("*", B, C)), "(a/(b*c))", F(6, 5)),
        (_op("*", _op("/", A, B), C), "(a/b*c)", F(30)),
        (_op("+", A, _op("*", B, C)), "(a + b*c)", F(11, 2)),
    ],
)
def test_text_and_value_agree_on_what_binds_first(tree: Tree, text: str, value: Fraction) -> None:
    expression = Expression(tree)
    assert str(expression) == text
    assert expression.value(VALUES) == value


def test_names_stand_in_order_of_appearance_and_once() -> None:
    tree = _op("+", _op("*", B, Negation(A)), _op("-", TWO, B))
    assert Expression(tree).names() == ("b", "a")
    assert Expression(TWO).names() == ()


def test_a_parameter_without_a_value_is_our_mistake() -> None:
    with pytest.raises(KeyError, match="'a'"):
        Expression(A).value({})


def test_a_division_by_zero_is_raised() -> None:
    with pytest.raises(ZeroDivisionError, match="Fraction"):
        Expression(_op("/", A, _op("-", B, B))).value(VALUES)
