"""Laws about two cases that differ in one thing: a reaction, the order, the size of the feed."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from random import Random
from typing import TYPE_CHECKING, TypeVar

from hypothesis import assume, given, settings
from hypothesis import strategies as st

from tests.property.answers import assert_equal_up_to, lacks_nothing, no_better, tell, within
from tests.property.cases import Wanted, cases
from tests.property.networks import AMMONIA, CARBON_DIOXIDE, WATER
from yieldnet.chemistry.formula import Formula
from yieldnet.foundation.exact import WrittenNumber, eliminate, read_number
from yieldnet.model.equation import Equation, Term
from yieldnet.model.network import CarrierKind, Compound, Direction, Reaction
from yieldnet.prediction.layers import RUNGS, switched_off
from yieldnet.prediction.predict import predict_case

if TYPE_CHECKING:
    from yieldnet.model.case import Case, Measurement, OverallCoefficient
    from yieldnet.model.network import Network

T = TypeVar("T")
HELD = Wanted(measured="exact")
"""Measured values that no reconciled point can move."""
SEEDS = st.integers(0, 10**6)
BARE = Wanted(demands=False, conditions=False)


@given(cases(HELD), SEEDS)
@settings(max_examples=80)
def test_a_knock_out_improves_nothing(case: Case, seed: int) -> None:
    network = case.network
    assert network is not None
    before = tell(case)
    name = Random(seed).choice([*(item.name for item in network.reactions), *network.groups()])
    changed = case.with_knock_outs(name)
    after = tell(changed)
    for rung, worth in after.worth.items():
        assert no_better(case, worth, before.worth[rung])
        assert worth == before.worth[rung] or RUNGS.index(rung) >= RUNGS.index("pathways")
    for old, new in zip(before.coefficients, after.coefficients, strict=False):
        assert old.elements == new.elements
        assert within(new.network, old.network)
    # The same reactions taken out of the network for good: the second way to the same answer.
    off = tuple(switched_off(changed))
    without = replace(case, network=network.without(*off), strain=None, knock_outs=())
    assert_equal_up_to(1, after, tell(without))


@given(cases(HELD), SEEDS)
@settings(max_examples=60)
def test_an_added_reaction_worsens_nothing(case: Case, seed: int) -> None:
    network = case.network
    assert network is not None
    before = tell(case)
    bigger = replace(
        network, reactions=(*network.reactions, _another_reaction(network, Random(seed)))
    )
    after = tell(replace(case, network=bigger))
    for rung, worth in before.worth.items():
        assert no_better(case, worth, after.worth[rung])
    for old, new in zip(before.coefficients, after.coefficients, strict=False):
        assert old.elements == new.elements
        assert within(old.network, new.network)


def _another_reaction(network: Network, rng: Random) -> Reaction:
    """A one-way reaction between compounds of the network that closes and spends ATP."""
    own = [item.name for item in network.compounds if item.name.startswith("compound")]
    redox = [item for item in network.carriers if item.kind is CarrierKind.REDOX]
    formulas = {item.name: item.formula for item in network.compounds}
    formulas |= {item.name: item.formula for item in redox}
    names = [*rng.sample(own, 2), CARBON_DIOXIDE, WATER, rng.choice(redox).name]
    names += [AMMONIA] if AMMONIA in formulas else []
    elements = ("C", "H", "O", "N")
    form = eliminate([[formulas[name][e] for name in names] for e in elements], len(names))
    free = next(j for j in range(len(names)) if j not in form.pivots)
    amounts = {names[free]: Fraction(1)}
    for pivot, row in zip(form.pivots, form.rows, strict=True):
        amounts[names[pivot]] = -row[free]
    sides: tuple[list[Term], list[Term]] = ([], [])
    for name, amount in amounts.items():
        if amount:
            number = WrittenNumber(abs(amount), str(abs(amount)))
            sides[amount > 0].append(Term(name=name, coefficient=number))
    spent = read_number(str(rng.randint(0, 8)))
    for item in network.carriers:
        if item.kind is CarrierKind.ENERGY and spent.value:
            sides[0].append(Term(name=item.name, coefficient=spent))
    return Reaction(name="added", equation=Equation(left=tuple(sides[0]), right=tuple(sides[1])))


@given(cases(), SEEDS)
@settings(max_examples=80)
def test_order_changes_no_value(case: Case, seed: int) -> None:
    assert_equal_up_to(1, tell(case), tell(_mixed(case, Random(seed))))


@given(cases(), SEEDS)
@settings(max_examples=30)
def test_order_changes_nothing_that_is_told_of_the_whole(case: Case, seed: int) -> None:
    assume(lacks_nothing(case))
    one = predict_case(case)
    two = predict_case(_mixed(case, Random(seed)))
    assert one.outcome is two.outcome
    assert one.aim == two.aim
    assert one.freedom == two.freedom
    assert sorted(item.code for item in one.findings) == sorted(item.code for item in two.findings)
    assert {item.compound: item for item in one.terms} == {
        item.compound: item for item in two.terms
    }
    assert len(one.movements) == len(two.movements)
    assert one.respiratory_quotient == two.respiratory_quotient
    assert one.net_carbon_dioxide == two.net_carbon_dioxide
    assert one.carbon_dioxide_need == two.carbon_dioxide_need
    for old, new in zip(one.recoveries, two.recoveries, strict=True):
        assert (old.quantity, old.measured, old.total) == (new.quantity, new.measured, new.total)
        assert dict(old.shares) == dict(new.shares)


def _mixed(case: Case, rng: Random) -> Case:
    """The case with everything that has an order in another one."""

    def shuffled(items: tuple[T, ...]) -> tuple[T, ...]:
        return tuple(rng.sample(items, len(items)))

    def turned(equation: Equation) -> Equation:
        return replace(equation, left=shuffled(equation.left), right=shuffled(equation.right))

    network = case.network
    assert network is not None
    growth = network.growth
    network = replace(
        network,
        compounds=shuffled(network.compounds),
        carriers=shuffled(network.carriers),
        crossing=shuffled(network.crossing),
        reactions=shuffled(
            tuple(replace(item, equation=turned(item.equation)) for item in network.reactions)
        ),
        growth=None if growth is None else replace(growth, equation=turned(growth.equation)),
        parameters=shuffled(network.parameters),
    )
    return replace(
        case,
        network=network,
        coefficients=shuffled(case.coefficients),
        compounds=(case.basis, *shuffled(case.compounds[1:])),
        measured=shuffled(case.measured),
        demands=shuffled(case.demands),
        knock_outs=shuffled(case.knock_outs),
    )


@given(cases(BARE))
@settings(max_examples=60)
def test_twice_the_feed_gives_twice_of_everything(case: Case) -> None:
    assert_equal_up_to(2, tell(case), tell(_doubled(case)))


def _doubled(case: Case) -> Case:
    """The case told per mol of a compound that is two of the basis, split before all else."""
    network = case.network
    assert network is not None
    basis = case.basis
    pair = Compound(
        name="pair",
        formula=Formula(tuple((element, 2 * n) for element, n in basis.formula.elements)),
    )
    splitting = Equation(
        left=(Term(name=pair.name, coefficient=read_number("1")),),
        right=(Term(name=basis.name, coefficient=read_number("2")),),
    )
    return replace(
        case,
        network=replace(
            network,
            compounds=(*network.compounds, pair),
            crossing=((pair.name, Direction.CONSUMED), *network.crossing),
            reactions=(Reaction(name="splitting", equation=splitting), *network.reactions),
        ),
        basis=pair,
        compounds=(pair, *case.compounds[1:]),
        coefficients=tuple(map(_twice_written, case.coefficients)),
        measured=tuple(map(_twice_measured, case.measured)),
    )


def _twice_measured(item: Measurement) -> Measurement:
    return replace(item, value=2 * item.value, sd=None if item.sd is None else 2 * item.sd)


def _twice_written(item: OverallCoefficient) -> OverallCoefficient:
    number = item.written
    if number is None:
        return item
    place = None if number.last_place is None else 2 * number.last_place
    return replace(item, written=WrittenNumber(2 * number.value, "twice", place))
