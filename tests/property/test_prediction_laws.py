"""Laws that every prediction keeps, on random networks whose reactions all close."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from itertools import pairwise
from typing import TYPE_CHECKING

from hypothesis import assume, given, settings

from tests.property.answers import build, lacks_nothing, no_better, tell, within
from tests.property.cases import Wanted, cases, random_case
from tests.property.lps import assert_proven
from tests.property.networks import networks
from yieldnet.balance.statements import yield_column
from yieldnet.model.binding import bind, composition
from yieldnet.model.case import AimDirection
from yieldnet.model.network import CarrierKind, Direction
from yieldnet.optimum.proof import Status
from yieldnet.optimum.ranges import Range
from yieldnet.prediction.ladder import objective_of
from yieldnet.prediction.layers import RUNGS, flux_column, surplus_column
from yieldnet.prediction.predict import balance_case, predict_case
from yieldnet.prediction.result import CoefficientStatus, Outcome

if TYPE_CHECKING:
    from yieldnet.model.case import Case
    from yieldnet.model.network import Network
    from yieldnet.optimum.proof import Answer
    from yieldnet.prediction.layers import Layers
    from yieldnet.prediction.result import CoefficientAnswer, EquationTerm, Prediction

ZERO = Fraction(0)


def test_random_cases_are_of_every_kind() -> None:
    # A law on cases that are all alike, all infeasible or all zero would hold for nothing.
    told = [tell(random_case(4 + seed % 9, seed)) for seed in range(90)]
    ends = [list(item.worth.values())[-1] for item in told if item.worth]
    assert sum(item.status is Status.OPTIMAL for item in ends) > 45
    assert sum(bool(item.value) for item in ends) > 30
    assert sum(item.status is Status.INFEASIBLE for item in ends) > 4
    assert sum(item.status is Status.UNBOUNDED for item in ends) > 3
    statuses = [coefficient.status for item in told for coefficient in item.coefficients]
    for status in CoefficientStatus:
        assert statuses.count(status) > 8, status
    rungs = [rung for item in told for rung in item.ladder]
    for name in RUNGS[1:]:
        assert sum(bool(rung.loss) for rung in rungs if rung.rung == name) > 0, name
    seen = [item.built.case for item in told]
    networks = [item.network for item in seen if item.network is not None]
    for found in (
        [item.measured for item in seen],
        [item.demands for item in seen],
        [item.knock_outs for item in seen],
        [item.strain for item in seen],
        [item.growth_rate for item in seen],
        [item.growth for item in networks],
        [item.maintenance for item in networks],
        [item.groups() for item in networks],
        [item.parameters for item in networks],
    ):
        assert sum(map(bool, found)) > 4


@given(networks())
@settings(max_examples=60)
def test_every_question_mark_closes_its_reaction(network: Network) -> None:
    bound, findings = bind(network)
    assert not findings.refused
    assert len(bound.reactions) == len(network.reactions) + bool(network.growth)
    for reaction in bound.reactions:
        assert not bound.residual(reaction)


@given(cases())
@settings(max_examples=120)
def test_each_rung_is_worth_no_more_than_the_one_before(case: Case) -> None:
    told = tell(case)
    worth = list(told.worth.values())
    for above, below in pairwise(worth):
        assert no_better(case, below, above)
    for upper, rung in pairwise(told.ladder):
        if upper.value is None or rung.value is None:
            assert rung.loss is None
            continue
        assert case.aim is not None
        falls = case.aim.direction is AimDirection.MOST
        assert rung.loss == (upper.value - rung.value if falls else rung.value - upper.value)
        assert rung.loss >= 0
    for rung in told.ladder:
        assert (rung.value is None) == bool(rung.reason)


@given(cases())
@settings(max_examples=80)
def test_ranges_lie_within_each_other_and_statuses_say_what_they_show(case: Case) -> None:
    assume(lacks_nothing(case))
    answer = predict_case(case)
    assert bool(answer.coefficients) == (answer.outcome is not Outcome.INFEASIBLE)
    for item in answer.coefficients:
        assert within(item.network, item.elements)
        assert item.at_aim is None or within(item.at_aim, item.network)
        if item.side is not Direction.EITHER:
            assert within(item.elements, Range(ZERO, None))
            assert item.percent is None or item.percent >= 0
        is_aim = case.aim is not None and case.aim.compound == item.compound
        assert item.percent is None or is_aim or item.percent <= 1
        _check_status(item)
    _check_aim(answer)
    if answer.terms and all(term.range.single for term in answer.terms):
        _assert_equation_closes(case, answer.terms)


def _check_status(item: CoefficientAnswer) -> None:
    assert item.network is not None
    if item.status in (CoefficientStatus.RECONCILED, CoefficientStatus.MEASURED):
        assert item.reconciled is not None
        value = Range(item.reconciled.value, item.reconciled.value)
        assert within(value, item.network)
        assert item.at_aim in (None, value)
        return
    assert item.reconciled is None
    if item.status is CoefficientStatus.OPEN:
        assert item.network.low is None or item.network.high is None
    elif item.status is CoefficientStatus.BRACKETED:
        assert not item.network.single
    else:
        assert item.at_aim is None or item.at_aim.single


def _check_aim(answer: Prediction) -> None:
    aim = answer.case.aim
    if answer.aim is None or answer.aim.value is None or aim is None or aim.is_energy:
        return
    most = aim.direction is AimDirection.MOST
    value, within_bands = answer.aim.value, answer.aim.within_bands
    own = answer.coefficient(aim.compound)
    assert own.at_aim == Range(value, value)
    assert own.network is not None
    assert within_bands == (own.network.high if most else own.network.low)
    assert within_bands is None or (within_bands >= value if most else within_bands <= value)
    above = [item.value for item in answer.ladder if RUNGS.index(item.rung) < 3][-1]
    assert answer.ladder[-1].value == value
    # Beyond zero a quotient says nothing: what is taken up is no share of what is given off.
    share = value / above if above is not None and above > 0 and value >= 0 else None
    assert own.percent == share
    if own.percent is not None and own.side is not Direction.EITHER:
        assert own.percent <= 1 if most else own.percent >= 1


def _assert_equation_closes(case: Case, terms: tuple[EquationTerm, ...]) -> None:
    total: dict[str, Fraction] = {}
    for term in terms:
        sign = -1 if term.side is Direction.CONSUMED else 1
        assert term.range.low is not None
        for element, atoms in composition(case.compound(term.compound).formula).items():
            total[element] = total.get(element, ZERO) + sign * term.range.low * atoms
    assert not any(total.values())


@given(cases())
@settings(max_examples=80)
def test_each_solution_closes_every_element(case: Case) -> None:
    built = build(case)
    objective = objective_of(case)
    assume(built.point is not None)
    for rung in built.layers.rungs:
        problem = built.problem(rung)
        answer = built.optimiser.optimise(problem, {})
        assert_proven(answer)
        if objective is not None and problem.has_column(objective.column):
            best = objective.best(built.optimiser, problem)
            assert_proven(best)
            answer = best if best.status is Status.OPTIMAL else answer
        _assert_closed(case, answer)
        if RUNGS.index(rung) >= RUNGS.index("pathways"):
            _assert_steady(built.layers, answer, rung)


def _assert_closed(case: Case, answer: Answer) -> None:
    """Elements over the cell, added up from the coefficients alone."""
    total: dict[str, Fraction] = {}
    for item in case.compounds:
        for element, atoms in composition(item.formula).items():
            amount = answer[yield_column(item.name)] * atoms
            total[element] = total.get(element, ZERO) + amount
    assert not any(total.values())


def _assert_steady(layers: Layers, answer: Answer, rung: str) -> None:
    """What the reactions make of every compound is what leaves the cell, and nothing stays."""
    assert layers.bound is not None
    made: dict[str, Fraction] = {}
    for reaction in layers.bound.reactions:
        flux = answer[flux_column(reaction.name)]
        assert flux >= 0 or reaction.reversible
        for name, amount in reaction.coefficients:
            made[name] = made.get(name, ZERO) + flux * amount
    network = layers.bound.network
    listed = {item.name for item in layers.case.compounds}
    for compound in network.compounds:
        leaves = answer[yield_column(compound.name)] if compound.name in listed else ZERO
        assert made.get(compound.name, ZERO) == leaves
    place = RUNGS.index(rung)
    hydrogen = ZERO
    for carrier in network.carriers:
        spare = made.get(carrier.name, ZERO)
        hydrogen += spare * carrier.formula["H"]
        if carrier.kind is CarrierKind.ENERGY:
            assert spare == answer[surplus_column(carrier.name)]
            assert spare >= 0 or place < RUNGS.index("energy")
        else:
            assert not spare or place < RUNGS.index("redox")
    # Freed redox carriers turn into each other, never into nothing.
    assert not hydrogen


@given(cases(Wanted(measured="none", conditions=False)))
@settings(max_examples=40)
def test_elements_say_the_same_with_and_without_a_network(case: Case) -> None:
    # Without measured values the reconciled point is empty, so the network can move nothing.
    assume(lacks_nothing(case))
    told = tell(case)
    energy = case.aim is not None and case.aim.is_energy
    alone = balance_case(replace(case, aim=None if energy else case.aim))
    for with_network, without in zip(told.coefficients, alone.coefficients, strict=False):
        assert with_network.elements == without.elements
        assert without.network is None
    if not energy:
        above = [item for item in told.ladder if RUNGS.index(item.rung) < RUNGS.index("pathways")]
        assert [(item.rung, item.value) for item in above] == [
            (item.rung, item.value) for item in alone.ladder
        ]
