"""Equations as values."""

from __future__ import annotations

from fractions import Fraction

from yieldnet.foundation.exact import WrittenNumber
from yieldnet.model.equation import UNKNOWN, Equation, Term
from yieldnet.model.expression import Expression, ParameterName

ONE = WrittenNumber(Fraction(1), "1")
HALF = WrittenNumber(Fraction(1, 2), "0.5", Fraction(1, 10))
RESPIRATION = Equation(
    left=(Term(name="NADH", coefficient=ONE), Term(name="oxygen", coefficient=HALF)),
    right=(
        Term(name="water", coefficient=UNKNOWN),
        Term(name="ATP", coefficient=Expression(ParameterName("po"))),
    ),
)


def test_an_equation_is_written_as_it_was_read() -> None:
    assert str(RESPIRATION) == "NADH + 0.5 oxygen -> ? water + (po) ATP"
    both_ways = Equation(left=RESPIRATION.left, right=(), reversible=True)
    assert str(both_ways) == "NADH + 0.5 oxygen <->"


def test_terms_carry_the_sign_of_their_side() -> None:
    assert [(sign, term.name) for sign, term in RESPIRATION.terms()] == [
        (-1, "NADH"),
        (-1, "oxygen"),
        (1, "water"),
        (1, "ATP"),
    ]


def test_names_stand_once_in_written_order() -> None:
    twice = Equation(left=RESPIRATION.left, right=RESPIRATION.left[:1] + RESPIRATION.right)
    assert twice.names() == ("NADH", "oxygen", "water", "ATP")
