"""The parser of equations: terms, coefficients, arrows, and every refusal."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from yieldnet.foundation.exact import WrittenNumber
from yieldnet.foundation.findings import Findings, SourceSpan
from yieldnet.model.equation import UNKNOWN
from yieldnet.model.expression import Expression
from yieldnet.reading.equations import MAX_LENGTH, MAX_TERMS, read_equation

if TYPE_CHECKING:
    from yieldnet.model.equation import Equation, Term


def _read(text: str, span: SourceSpan) -> tuple[Equation | None, Findings]:
    findings = Findings()
    return read_equation(text, span, "the thing", findings), findings


def _good(text: str, span: SourceSpan) -> Equation:
    equation, findings = _read(text, span)
    assert list(findings) == []
    assert equation is not None
    return equation


def _first(equation: Equation) -> Term:
    return equation.left[0]


@pytest.mark.parametrize(
    ("arrow", "reversible"), [("->", False), ("→", False), ("<->", True), ("⇌", True)]
)
def test_both_kinds_of_arrow(span: SourceSpan, arrow: str, reversible: bool) -> None:
    equation = _good(f"a {arrow} b", span)
    assert equation.reversible is reversible
    assert equation.names() == ("a", "b")


@pytest.mark.parametrize(
    ("term", "name", "value"),
    [
        ("glucose", "glucose", Fraction(1)),
        ("2 glucose", "glucose", Fraction(2)),
        ("0.5 glucose", "glucose", Fraction(1, 2)),
        (".5 glucose", "glucose", Fraction(1, 2)),
        ("1/2 oxygen", "oxygen", Fraction(1, 2)),
        ("2e-1 oxygen", "oxygen", Fraction(1, 5)),
        ("2   oxygen", "oxygen", Fraction(2)),
        # Names that begin with digits, or hold signs, are names.
        ("3-phosphoglycerate", "3-phosphoglycerate", Fraction(1)),
        ("2 3-phosphoglycerate", "3-phosphoglycerate", Fraction(2)),
        ("1,3-propanediol", "1,3-propanediol", Fraction(1)),
        ("2,3-butanediol", "2,3-butanediol", Fraction(1)),
        ("poly(3-hydroxybutyrate) unit", "poly(3-hydroxybutyrate) unit", Fraction(1)),
        ("(R)-lactate", "(R)-lactate", Fraction(1)),
        ("2 (R)-lactate", "(R)-lactate", Fraction(2)),
        ("H+", "H+", Fraction(1)),
        ("2 H+", "H+", Fraction(2)),
        ("NAD+", "NAD+", Fraction(1)),
    ],
)
def test_a_term_is_a_number_and_a_name(
    span: SourceSpan, term: str, name: str, value: Fraction
) -> None:
    found = _first(_good(f"{term} + water -> b", span))
    assert found.name == name
    assert isinstance(found.coefficient, WrittenNumber)
    assert found.coefficient.value == value
    assert found.span == span


def test_a_decimal_called_exact_spans_no_interval(span: SourceSpan) -> None:
    equation = _good("a -> 1.79 exact ethanol + 1.79 water", span)
    exact, written = (term.coefficient for term in equation.right)
    assert isinstance(exact, WrittenNumber)
    assert isinstance(written, WrittenNumber)
    assert (exact.value, exact.last_place) == (Fraction(179, 100), None)
    assert (written.value, written.last_place) == (Fraction(179, 100), Fraction(1, 100))
    assert equation.right[0].name == "ethanol"


def test_terms_may_have_places_of_their_own(span: SourceSpan) -> None:
    places = {"a": replace(span, line=7), "2 b": replace(span, line=8)}
    equation = read_equation("a -> 2 b", span, "it", Findings(), locate=places.__getitem__)
    assert equation is not None
    assert [term.span.line for _, term in equation.terms() if term.span] == [7, 8]


def test_a_question_mark_is_an_unknown(span: SourceSpan) -> None:
    equation = _good("a + ? water -> ? b", span)
    assert [term.coefficient for _, term in equation.terms()][1:] == [UNKNOWN, UNKNOWN]


@pytest.mark.parametrize(
    ("term", "shown"),
    [
        ("(po) ATP", "(po) ATP"),
        ("(2*po + 1) ATP", "(2*po + 1) ATP"),
        ("((a + b)*2) NADH", "((a + b)*2) NADH"),
        ("(1 + (a)) (R)-lactate", "(1 + a) (R)-lactate"),
    ],
)
def test_a_coefficient_may_be_an_expression(span: SourceSpan, term: str, shown: str) -> None:
    found = _first(_good(f"{term} + x -> y", span))
    assert isinstance(found.coefficient, Expression)
    assert str(found) == shown


def test_plus_signs_inside_parentheses_do_not_end_a_term(span: SourceSpan) -> None:
    assert _good("(a + b) x + y -> z", span).names() == ("x", "y", "z")


def test_an_equation_over_several_lines_is_one(span: SourceSpan) -> None:
    assert str(_good("a +\n  2 b\n  -> c", span)) == "a + 2 b -> c"


def test_names_go_through_the_resolver(span: SourceSpan) -> None:
    findings = Findings()
    asked: list[tuple[str, SourceSpan]] = []

    def resolve(name: str, place: SourceSpan) -> str | None:
        asked.append((name, place))
        return {"dextrose": "glucose"}.get(name)

    equation = read_equation("dextrose -> nothing", span, "it", findings, resolve)
    assert equation is None
    assert asked == [("dextrose", span), ("nothing", span)]
    # The resolver reports what it does not know; the equation adds nothing of its own.
    assert list(findings) == []
    equation = read_equation("dextrose -> 2 dextrose", span, "it", findings, resolve)
    assert str(equation) == "glucose -> 2 glucose"


@pytest.mark.parametrize(
    ("text", "code", "reason"),
    [
        ("a b", "YN208", "the equation has no arrow"),
        ("", "YN208", "the equation has no arrow"),
        ("a->b", "YN208", "the equation has no arrow"),
        ("a -> b -> c", "YN208", "the equation has 2 arrows"),
        ("a <=> b", "YN208", "the arrow '<=>' is not understood"),
        ("a --> b", "YN208", "the arrow '-->' is not understood"),
        ("a = b", "YN208", "the arrow '=' is not understood"),
        ("a => b", "YN208", "the arrow '=>' is not understood"),
        ("a <- b", "YN208", "the arrow '<-' is not understood"),
        ("a ↔ b", "YN208", "the arrow '↔' is not understood"),
        ("-> b", "YN208", "nothing stands on the left side"),
        ("a ->", "YN208", "nothing stands on the right side"),
        ("a + -> b", "YN208", "is no compound name"),
        ("a + + b -> c", "YN208", "'+ b' is no compound name"),
        ("+ -> b", "YN208", "a plus sign has nothing beside it"),
        ("+ a -> b", "YN208", "is no compound name"),
        ("a +b -> c", "YN208", "'a +b' is no compound name"),
        ("a+ b -> c", "YN208", "'a+ b' is no compound name"),
        ("2 -> b", "YN208", "'2' names no compound"),
        ("? -> b", "YN208", "'?' names no compound"),
        ("?a -> b", "YN208", "'?a' has no space after its ?"),
        ("? ?a -> b", "YN208", "is no compound name"),
        ("(a x -> b", "YN206", "a parenthesis that never closes"),
        ("(a,b) x -> b", "YN206", "belongs to no expression"),
        ("(1e99) x -> b", "YN202", "power of ten"),
        ("1,5 a -> b", "YN201", "decimal comma"),
        ("1e99 a -> b", "YN202", "power of ten"),
        ("1/0 a -> b", "YN207", "divides by zero"),
        ("0 a -> b", "YN210", "the coefficient 0 before 'a' is not positive"),
        ("-2 a -> b", "YN210", "the coefficient -2 before 'a' is not positive"),
        ("−2 a -> b", "YN210", "is not positive"),
    ],
)
def test_what_is_no_equation_says_why(span: SourceSpan, text: str, code: str, reason: str) -> None:
    equation, findings = _read(text, span)
    assert equation is None
    found = [(item.code, item.message) for item in findings]
    assert any(c == code and m.startswith("the thing: ") and reason in m for c, m in found), found
    assert {item.where for item in findings} == {span}


def test_all_mistakes_of_an_equation_are_told_at_once(span: SourceSpan) -> None:
    equation, findings = _read("1,5 a + 0 b + ?c -> 2", span)
    assert equation is None
    assert [item.code for item in findings] == ["YN201", "YN210", "YN208", "YN208"]


def test_length_and_terms_are_limited(span: SourceSpan) -> None:
    at_limit = " + ".join(f"a{i}" for i in range(MAX_TERMS))
    assert len(_good(f"{at_limit} -> b", span).left) == MAX_TERMS
    equation, findings = _read(f"{at_limit} + x -> b", span)
    assert equation is None
    assert [item.message for item in findings] == ["the thing: the left side has 201 terms"]
    equation, findings = _read("a" * MAX_LENGTH + " -> b", span)
    assert equation is None
    assert [item.message for item in findings] == ["the thing: the equation has 8,005 characters"]
