"""What is written can be read back: parse(format(x)) == x."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from hypothesis import assume, given, settings
from hypothesis import strategies as st

from tests.property.networks import networks
from yieldnet.chemistry.formula import Formula, read_formula
from yieldnet.foundation.exact import (
    NumberTextError,
    WrittenNumber,
    decimal_text,
    read_number,
    root_of_square,
)
from yieldnet.foundation.findings import Findings, SourceSpan
from yieldnet.foundation.units import (
    AMOUNT_UNITS,
    TIME_UNITS,
    Unit,
    Weight,
    read_unit,
    yield_factor,
)
from yieldnet.model.equation import UNKNOWN, Equation, Term
from yieldnet.model.expression import Expression, Negation, Operation, ParameterName
from yieldnet.reading.equations import read_equation
from yieldnet.reading.expressions import MAX_LENGTH, read_expression
from yieldnet.reading.network_file import parse_network

if TYPE_CHECKING:
    from hypothesis.strategies import SearchStrategy

    from yieldnet.model.expression import Tree
    from yieldnet.model.network import Compound, Network

SPAN = SourceSpan(file="", line=1, column=1)

fractions = st.fractions(min_value=-(10**12), max_value=10**12, max_denominator=10**9)
integer_texts = st.integers(1, 10**6).map(str)
decimal_texts = st.builds("{}.{}".format, st.integers(0, 999), st.integers(1, 999))
power_texts = st.builds("{}e{}".format, decimal_texts, st.integers(-9, 9))
ratio_texts = st.builds("{}/{}".format, st.integers(1, 999), st.integers(1, 999))
written = st.one_of(integer_texts, decimal_texts, power_texts).map(read_number)
coefficients = st.one_of(written, ratio_texts.map(read_number))


@given(fractions)
@settings(max_examples=200)
def test_numbers(value: Fraction) -> None:
    assert read_number(str(value)).value == value
    decimal = decimal_text(value)
    ends = 10**12 % value.denominator == 0
    assert (decimal is not None) == ends
    if decimal is not None:
        assert read_number(decimal).value == value
        assert Fraction(decimal) == value


@given(st.one_of(integer_texts, decimal_texts, power_texts, ratio_texts))
@settings(max_examples=100)
def test_a_number_is_read_as_the_fraction_that_it_says(text: str) -> None:
    number = read_number(text)
    assert number.value == Fraction(text)
    assert number.text == text
    if number.last_place is not None:
        # One unit more in the last digit is the next number that could have been written.
        mantissa, _, power = text.partition("e")
        places = len(mantissa.partition(".")[2])
        assert number.last_place == Fraction(10) ** (int(power or 0) - places)


@given(st.one_of(st.text(max_size=12), st.text("0123456789.,/eE+- ", max_size=12)))
@settings(max_examples=200)
def test_any_text_is_a_number_or_is_refused_with_a_reason(text: str) -> None:
    read = _read_or_refused(text)
    if isinstance(read, NumberTextError):
        assert read.reason
        assert read.code in {"YN201", "YN202", "YN207"}
    else:
        assert Fraction(read.text) == read.value


def _read_or_refused(text: str) -> WrittenNumber | NumberTextError:
    try:
        return read_number(text)
    except NumberTextError as refused:
        return refused


@given(st.fractions(min_value=0, max_value=10**9, max_denominator=10**6))
@settings(max_examples=100)
def test_roots(value: Fraction) -> None:
    assert root_of_square(value * value) == value
    root = root_of_square(value)
    # Rounded down, and right to 14 digits at least.
    assert root * root <= value
    assert (root * (1 + Fraction(1, 10**14))) ** 2 >= value


amounts = st.one_of(
    st.integers(1, 400).map(Fraction),
    st.integers(1, 99_999).map(lambda n: Fraction(n, 1000)),
)
formulas = st.builds(
    Formula,
    st.dictionaries(
        st.sampled_from(("C", "H", "O", "N", "S", "P", "Na", "Ca", "Fe")), amounts, min_size=1
    ).map(lambda parts: tuple(parts.items())),
    st.integers(-4, 4),
)


@given(formulas)
@settings(max_examples=200)
def test_formulas(formula: Formula) -> None:
    assert read_formula(str(formula)) == formula


parameter_names = st.sampled_from(("po_nadh", "po_quinol", "growth_atp", "x", "e", "E5", "_1"))
trees: SearchStrategy[Tree] = st.recursive(
    st.one_of(written, parameter_names.map(ParameterName)),
    lambda inner: st.one_of(
        inner.map(Negation), st.builds(Operation, st.sampled_from("+-*/"), inner, inner)
    ),
    max_leaves=10,
)


@given(trees)
@settings(max_examples=300)
def test_expressions(tree: Tree) -> None:
    expression = Expression(tree)
    assume(len(str(expression)) <= MAX_LENGTH)
    again = read_expression(str(expression))
    assert again == expression
    values = {name: Fraction(place, 7) for place, name in enumerate(expression.names())}
    try:
        value = expression.value(values)
    except ZeroDivisionError:
        return
    assert again.value(values) == value


# Names as they are in files: digits, commas and brackets at the front, a charge at the end.
words = st.sampled_from(
    (
        "glucose",
        "6-phosphate",
        "3-phosphoglycerate",
        "1,3-propanediol",
        "(R)-lactate",
        "L-lysine",
        "acetyl-CoA",
        "in",
        "the",
        "cell",
        "N2O",
        "e",
    )
)
names = st.one_of(
    st.lists(words, min_size=1, max_size=3).map(" ".join), st.sampled_from(("NAD+", "H+", "Fe+3"))
)
terms = st.builds(
    lambda name, coefficient: Term(name=name, coefficient=coefficient),
    names,
    st.one_of(coefficients, st.just(UNKNOWN), trees.map(Expression)),
)
sides = st.lists(terms, min_size=1, max_size=4).map(tuple)
equations = st.builds(
    lambda left, right, reversible: Equation(left=left, right=right, reversible=reversible),
    sides,
    sides,
    st.booleans(),
)


@given(equations)
@settings(max_examples=300)
def test_equations(equation: Equation) -> None:
    assume(all(len(str(term.coefficient)) <= MAX_LENGTH for _, term in equation.terms()))
    findings = Findings()
    assert read_equation(str(equation), SPAN, "equation", findings) == _plain(equation)
    assert not list(findings)


def _plain(equation: Equation) -> Equation:
    """A coefficient of one is not written, and is read as the number 1."""
    one = read_number("1")

    def side(terms: tuple[Term, ...]) -> tuple[Term, ...]:
        return tuple(
            Term(name=term.name, coefficient=one)
            if isinstance(term.coefficient, WrittenNumber) and term.coefficient.text == "1"
            else term
            for term in terms
        )

    return Equation(
        left=side(equation.left), right=side(equation.right), reversible=equation.reversible
    )


@given(
    st.sampled_from((*AMOUNT_UNITS, "1")),
    st.lists(st.sampled_from((*AMOUNT_UNITS, *TIME_UNITS)), min_size=1, max_size=2),
)
@settings(max_examples=50)
def test_units(over: str, under: list[str]) -> None:
    unit = Unit(over, tuple(under))
    assert read_unit(str(unit)) == unit


weights = st.builds(
    lambda mass, carbon: Weight(name="something", molar_mass=mass, carbon=carbon), amounts, amounts
)
units = st.builds(
    lambda over, under: Unit(over, (under,)),
    st.sampled_from(AMOUNT_UNITS),
    st.sampled_from(AMOUNT_UNITS),
)


@given(units, units, weights, weights)
@settings(max_examples=50)
def test_a_yield_told_in_another_unit_and_back(
    one: Unit, two: Unit, compound: Weight, basis: Weight
) -> None:
    there = yield_factor(one, compound, basis) / yield_factor(two, compound, basis)
    back = yield_factor(two, compound, basis) / yield_factor(one, compound, basis)
    assert there * back == 1
    # What is lost per basis is gained turned round: compound per basis, basis per compound.
    turned = Unit(one.denominators[0], (one.numerator,))
    assert yield_factor(one, compound, basis) * yield_factor(turned, basis, compound) == 1


@given(networks())
@settings(max_examples=30)
def test_networks(network: Network) -> None:
    read, findings = parse_network(_network_text(network))
    assert read is not None, "\n".join(map(str, findings))
    # Compounds stand in the order of their first use, and the library adds a remark to its own.
    assert _told(read) == _told(network)
    assert dict(read.crossing) == dict(network.crossing)
    for name in (
        "title",
        "carriers",
        "reactions",
        "parameters",
        "strains",
        "growth",
        "maintenance",
    ):
        assert getattr(read, name) == getattr(network, name), name


def _told(network: Network) -> set[tuple[str, Formula, Fraction]]:
    return {(item.name, item.formula, item.ash) for item in network.compounds}


def _network_text(network: Network) -> str:
    """The network as somebody would write it in a file."""
    lines = [f"network: {network.title}"]
    lines += ["parameters:"] * bool(network.parameters)
    for parameter in network.parameters:
        lines.append(f"  {parameter.name}:")
        for key in ("value", "low", "high"):
            number = getattr(parameter, key)
            lines += [f"    {key}: {number}"] * (number is not None)
    lines.append("compounds:")
    lines += [f"  {item.name}: {item.formula}" for item in network.compounds if _own(item)]
    lines.append("carriers:")
    for carrier in network.carriers:
        formula = f", formula: {carrier.formula}" if carrier.formula.elements else ""
        lines.append(f"  {carrier.name}: {{kind: {carrier.kind}{formula}}}")
    lines.append("crossing:")
    ways = {"in": "consumed", "out": "produced", "either": "either"}
    for key, way in ways.items():
        lines += [f"  {key}:", *(f"  - {name}" for name, to in network.crossing if to == way)]
    lines.append("reactions:")
    for reaction in network.reactions:
        lines += [f"  {reaction.name}:", f'    equation: "{reaction.equation}"']
        lines += [f"    group: {reaction.group}"] * bool(reaction.group)
    lines.append("strains:")
    for strain in network.strains:
        lines += [f"  {strain.name}:", *(f"  - {name}" for name in strain.off)]
    if network.growth is not None:
        biomass = network.growth.biomass
        lines += ["growth:", f'  equation: "{network.growth.equation}"']
        lines.append(f"  biomass: {{formula: {biomass.formula}, ash: {biomass.ash}}}")
        lines += ["  per: g"] * network.growth.per_gram
    if network.maintenance is not None:
        kept = network.maintenance
        lines.append(f"maintenance: {{{kept.carrier}: {kept.written.text} {kept.unit}}}")
    return "\n".join(lines)


def _own(compound: Compound) -> bool:
    """Whether a compound is defined in the compounds of the file itself."""
    return compound.name.startswith("compound")
