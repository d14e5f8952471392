"""A value to reproduce: what counts as the same."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.chemistry.formula import read_formula
from yieldnet.foundation.exact import read_number
from yieldnet.model.case import Case
from yieldnet.model.equation import UNKNOWN, Equation, Term
from yieldnet.model.network import Compound
from yieldnet.model.reproduction import Reproduction

F = Fraction


def _reproduction(text: str) -> Reproduction:
    glucose = Compound(name="glucose", formula=read_formula("C6H12O6"))
    term = Term(name="glucose", coefficient=UNKNOWN)
    case = Case(
        title="x",
        network=None,
        equation=Equation(left=(term,), right=()),
        basis=glucose,
        coefficients=(),
        compounds=(glucose,),
    )
    return Reproduction(
        name="x",
        case=case,
        written=read_number(text),
        unit="mol/mol",
        factor=F(1),
        source="derived by hand",
    )


@pytest.mark.parametrize(
    ("written", "found", "agrees"),
    [
        ("2", F(2), True),
        ("2", F(2) + F(1, 10**9), False),
        ("12/7", F(12, 7), True),
        ("12/7", F("1.714285714"), False),
        # Half a unit of the last digit: 1.71 is 1.705 to 1.715.
        ("1.71", F(12, 7), True),
        ("1.71", F("1.705"), True),
        ("1.71", F("1.7049"), False),
        ("1.71", F("1.7151"), False),
        ("1.710", F(12, 7), False),
        ("2.0", F("2.04"), True),
        ("2.0", F("1.94"), False),
    ],
)
def test_whole_numbers_and_fractions_are_exact_and_decimals_are_not(
    written: str, found: Fraction, agrees: bool
) -> None:
    assert _reproduction(written).agrees(found) is agrees


def test_the_value_is_what_was_written() -> None:
    item = _reproduction("0.511")
    assert (item.value, item.last_place) == (F(511, 1000), F(1, 1000))
    assert _reproduction("3/4").last_place is None
