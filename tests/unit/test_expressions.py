"""The parser of parameter expressions and its limits."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.reading.expressions import (
    MAX_DEPTH,
    MAX_LENGTH,
    ExpressionTextError,
    read_expression,
)

F = Fraction
VALUES = {"po": F(3, 2), "po_nadh": F(5, 2), "_a1": F(7)}


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("(2*po - 1)", F(2)),
        ("2*po - 1", F(2)),
        ("(po)", F(3, 2)),
        ("( po )", F(3, 2)),
        ("po_nadh - po", F(1)),
        ("_a1", F(7)),
        ("1 - 2 - 3", F(-4)),
        ("1 - (2 - 3)", F(2)),
        ("8/4/2", F(1)),
        ("8/(4/2)", F(4)),
        ("2 + 3*4", F(14)),
        ("(2 + 3)*4", F(20)),
        ("-po", F(-3, 2)),
        ("--po", F(3, 2)),
        ("−po", F(-3, 2)),
        ("2*-3", F(-6)),
        ("1 - -1", F(2)),
        (".5*po", F(3, 4)),
        ("5.*po", F(15, 2)),
        ("2.5e-1", F(1, 4)),
        ("1e3", F(1000)),
        ("1/3", F(1, 3)),
        ("(" * MAX_DEPTH + "1" + ")" * MAX_DEPTH, F(1)),
        ("1" + " " * (MAX_LENGTH - 2) + " ", F(1)),
    ],
)
def test_an_expression_has_its_value(text: str, value: Fraction) -> None:
    assert read_expression(text).value(VALUES) == value


@pytest.mark.parametrize(
    "text", ["(2*po - 1)", "(-(po + 1))", "((1 + po)*2)", "(1 - (2 - po))", "(po/(2*po))", "(--po)"]
)
def test_an_expression_is_written_so_that_it_reads_the_same(text: str) -> None:
    expression = read_expression(text)
    assert read_expression(str(expression)) == expression
    assert str(expression) == text


@pytest.mark.parametrize(
    ("text", "code", "reason"),
    [
        ("", "YN206", "ends too early"),
        ("()", "YN206", r"has '\)' where a value belongs"),
        ("1 +", "YN206", "ends too early"),
        ("+1", "YN206", r"has '\+' where a value belongs"),
        ("*2", "YN206", r"has '\*' where a value belongs"),
        ("(1", "YN206", "never closes"),
        ("1)", "YN206", r"goes on after its end with '\)'"),
        ("2po", "YN206", "goes on after its end with 'po'"),
        ("po po", "YN206", "goes on after its end with 'po'"),
        ("(1 po)", "YN206", "has 'po' where an operator belongs"),
        ("po**2", "YN206", r"has '\*' where a value belongs"),
        ("po^2", "YN206", r"'\^' in 'po\^2' belongs to no expression"),
        ("max(1, 2)", "YN206", "',' in"),
        ("__import__('os')", "YN206", '"\'" in'),
        ("po.real", "YN206", "'.' in"),
        ("1,5", "YN206", "',' in"),
        ("po % 2", "YN206", "'%' in"),
        ("1e99", "YN202", "power of ten beyond"),
        ("1" * 41, "YN202", "more than 40 digits"),
        ("1" * (MAX_LENGTH + 1), "YN206", "too long"),
        ("(" * (MAX_DEPTH + 1) + "1" + ")" * (MAX_DEPTH + 1), "YN206", "nested more than"),
        ("-" * (MAX_DEPTH + 2) + "1", "YN206", "nested more than"),
    ],
)
def test_what_is_no_expression_says_why(text: str, code: str, reason: str) -> None:
    with pytest.raises(ExpressionTextError, match=reason) as caught:
        read_expression(text)
    assert caught.value.code == code


def test_the_way_out_names_what_is_understood() -> None:
    with pytest.raises(ExpressionTextError, match="belongs to no expression") as caught:
        read_expression("po ^ 2")
    assert caught.value.hint == (
        "Only numbers, parameters, + - * / and parentheses are understood."
    )
