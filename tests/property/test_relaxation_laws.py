"""Laws of the relaxations: each is the answer to a changed case, and none is lost or made up."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from random import Random
from typing import TYPE_CHECKING

from tests.property.answers import build
from tests.property.cases import Wanted, random_case
from tests.property.reordered import reordered_layers
from tests.property.solved import remembered, solved, solved_cases
from yieldnet.audit.audit import refusing_rules
from yieldnet.balance.statements import GROWTH_OVER_UPTAKE, statements_of, with_point
from yieldnet.foundation.exact import WrittenNumber
from yieldnet.model.binding import BoundReaction, bind
from yieldnet.model.case import EnergySurplus, Named, OverallCoefficient
from yieldnet.model.equation import Equation, Term
from yieldnet.model.network import BIOMASS, GROWTH, CarrierKind, Direction, Reaction
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.prediction.layers import build_layers, switched_off
from yieldnet.prediction.relaxations import candidates_of, relax

if TYPE_CHECKING:
    from collections.abc import Iterator

    from tests.property.solved import Solved
    from yieldnet.model.case import Case
    from yieldnet.model.network import Network
    from yieldnet.prediction.relaxations import Candidate, Relaxation, RelaxationReport

CASES = 150
EXACT = Wanted(measured="exact")
ZERO = Fraction(0)
Outcome = tuple[Status, Fraction | None]


@remembered
def _report(item: Solved) -> RelaxationReport:
    return relax(item.optimiser, item.layers, item.objective, item.best)


def _helps(found: Relaxation) -> bool:
    return found.unbounded or (found.gain is not None and found.gain > 0)


def _is_tightening(found: Relaxation) -> bool:
    return any(kind == "tightening" for kind, _ in found.parts)


def test_giving_back_never_worsens_and_tightening_never_improves() -> None:
    tightened = 0
    for item in solved_cases(CASES):
        sign = 1 if item.objective.maximise else -1
        for found in _report(item).helpful:
            if found.value is None:
                assert found.gain is None
                assert found.reason
                assert found.unbounded or _is_tightening(found)
            else:
                assert found.gain == sign * (found.value - item.best.value)
                assert not found.reason
            if _is_tightening(found):
                assert not _helps(found)
                tightened += 1
            else:
                assert _helps(found)
    assert tightened > 10


def test_endless_ones_stand_first_then_the_largest_gain_then_the_impossible() -> None:
    for item in solved_cases(CASES):
        helpful = _report(item).helpful
        places = [0 if found.unbounded else 1 if found.gain is not None else 2 for found in helpful]
        assert places == sorted(places)
        gains = [found.gain for found in helpful if found.gain is not None]
        assert gains == sorted(gains, reverse=True)


def test_counts_add_up() -> None:
    for item in solved_cases(CASES):
        report = _report(item)
        singles = sum(len(found.parts) == 1 for found in report.helpful)
        candidates = candidates_of(item.layers)
        assert singles + report.without_effect + report.not_offered == len(candidates)
        names = [(candidate.kind, candidate.name) for candidate in candidates]
        assert len(set(names)) == len(names)


def test_pairs_are_tried_only_where_nothing_helps_alone() -> None:
    tried = paired = 0
    for item in solved_cases(CASES):
        report = _report(item)
        alone = [found for found in report.helpful if len(found.parts) == 1 and _helps(found)]
        pairs = [found for found in report.helpful if len(found.parts) == 2]
        assert report.pairs is not bool(alone)
        assert report.pairs or not pairs
        assert not any(map(_is_tightening, pairs))
        tried += report.pairs
        paired += bool(pairs)
    assert tried > 10
    assert paired > 5


def test_order_of_rows_and_columns_changes_no_relaxation() -> None:
    rng = Random("relaxations")

    def told(report: RelaxationReport) -> dict[tuple[tuple[str, str], ...], object]:
        # Which carriers a free source supplies may differ between points that are equally good.
        return {
            tuple((kind, "" if kind == "source" else name) for kind, name in found.parts): (
                found.value,
                found.gain,
            )
            for found in report.helpful
        }

    for item in solved_cases(CASES):
        layers = reordered_layers(item.layers, rng)
        optimiser = Optimiser(engine_named("glpk"))
        problem = with_point(layers.final, layers.statements, item.point)
        best = item.objective.best(optimiser, problem)
        one, two = _report(item), relax(optimiser, layers, item.objective, best)
        assert told(one) == told(two)
        assert (one.without_effect, one.not_offered, one.pairs) == (
            two.without_effect,
            two.not_offered,
            two.pairs,
        )


def _makes_energy(item: Solved, *names: str) -> bool:
    """Whether the audit finds energy from nothing once some reactions may run backwards."""
    network = item.case.network
    assert network is not None
    left = network.without(*switched_off(item.case))
    _, findings = refusing_rules(
        _both_ways(left, *names), dict(item.case.parameters), item.optimiser
    )
    return any(finding.code == "YN408" for finding in findings)


def test_nothing_is_offered_that_makes_energy_from_nothing() -> None:
    backwards = 0
    for item in solved_cases(CASES):
        for found in _report(item).helpful:
            names = [name for kind, name in found.parts if kind == "reaction"]
            if names:
                assert not _makes_energy(item, *names), found.parts
                backwards += 1
    assert backwards > 20


def _exact_cases(number: int) -> Iterator[Solved]:
    """Cases whose reconciled point no change can move, since every measured value is exact."""
    found = 0
    for seed in range(10 * number):
        case = _overlapping(random_case(4 + seed % 3, seed, EXACT), seed)
        rates = (case.growth_rate, case.substrate_uptake)
        growth, uptake = (rate and replace(rate, sd=None) for rate in rates)
        item = solved(replace(case, growth_rate=growth, substrate_uptake=uptake))
        if item is not None:
            found += 1
            yield item
        if found == number:
            return


def _overlapping(case: Case, seed: int) -> Case:
    """Now and then a case that knocks out a group and, once more, a reaction of it."""
    assert case.network is not None
    groups = case.network.groups()
    if seed % 4 or not groups:
        return case
    member = case.network.members(groups[0])[-1]
    return case.with_knock_outs(groups[0], member)


def test_each_is_the_answer_to_a_changed_case() -> None:
    seen: dict[str, int] = {}
    for item in _exact_cases(100):
        report = _report(item)
        not_offered = 0
        for candidate in candidates_of(item.layers):
            outcome = _changed(item, candidate)
            if outcome is None:
                continue
            told = [
                found
                for found in report.helpful
                if found.parts == ((candidate.kind, candidate.name),)
                or (candidate.kind == "source" and [kind for kind, _ in found.parts] == ["source"])
            ]
            if told:
                (found,) = told
                seen[candidate.kind] = seen.get(candidate.kind, 0) + 1
                assert outcome[1] == found.value
                assert (outcome[0] is Status.OPTIMAL) == (found.value is not None)
                assert (outcome[0] is Status.UNBOUNDED) is found.unbounded
            elif outcome != (Status.OPTIMAL, item.best.value):
                assert candidate.kind == "reaction"
                assert _makes_energy(item, candidate.name)
                not_offered += 1
        assert report.not_offered == not_offered
    # Every kind must have been met, or the law says nothing of it.
    assert min(seen.values()) > 0
    assert set(seen) == {
        *("carrier", "condition", "exchange", "source", "compound", "reaction"),
        *("knock-out", "strain entry", "measured", "written", "demand", "tightening"),
    }


def _changed(item: Solved, candidate: Candidate) -> Outcome | None:
    """Best value of the case changed as a candidate says, or ``None`` if no case says the same."""
    case, name = item.case, candidate.name
    network = case.network
    assert network is not None
    if candidate.kind == "source":
        return _with_sources(item)
    if candidate.kind in ("knock-out", "strain entry"):
        strain = network.strain(case.strain.name) if case.strain else None
        entries = [*(strain.off if strain else ()), *(entry.name for entry in case.knock_outs)]
        others = tuple(Named(name=entry) for entry in entries if entry != name)
        return _best(replace(case, strain=None, knock_outs=others))
    if candidate.kind == "compound":
        direction, compound = network.direction(name), network.compound(name)
        assert direction is not None
        assert compound is not None
        if name == BIOMASS:
            # Listed, it would bring growth rate and maintenance with it.
            return None
        opened = OverallCoefficient(name=name, side=direction)
        return _best(
            replace(
                case,
                coefficients=(*case.coefficients, opened),
                compounds=(*case.compounds, compound),
            )
        )
    if candidate.kind == "reaction":
        return _best(replace(case, network=_both_ways(network, name)))
    if candidate.kind == "written":
        free = tuple(
            replace(entry, written=None) if name == f"written {entry.name}" else entry
            for entry in case.coefficients
        )
        assert free != case.coefficients
        return _best(replace(case, coefficients=free))
    if candidate.kind == "demand":
        kept = tuple(demand for demand in case.demands if name != f"demand {demand.compound}")
        assert len(kept) == len(case.demands) - 1
        return _best(replace(case, demands=kept))
    if candidate.kind == "condition":
        return _best(replace(case, energy_surplus=EnergySurplus.LOST))
    if candidate.kind == "measured":
        return _best(_without_measured(case, name))
    if candidate.kind == "carrier":
        return _best(replace(case, network=_without_energy(network, name)))
    if candidate.kind == "exchange":
        return _best(replace(case, network=_with_exchanges(network)))
    assert candidate.kind == "tightening"
    given_off = tuple(
        replace(entry, side=Direction.PRODUCED) if entry.name == "carbon dioxide" else entry
        for entry in case.coefficients
    )
    return _best(replace(case, coefficients=given_off))


def _best(case: Case) -> Outcome:
    item = solved(case)
    if item is not None:
        return Status.OPTIMAL, item.best.value
    built = build(case)
    return (Status.INFEASIBLE if built.point is None else Status.UNBOUNDED), None


def _both_ways(network: Network, *names: str) -> Network:
    return replace(
        network,
        reactions=tuple(
            replace(entry, equation=replace(entry.equation, reversible=True))
            if entry.name in names
            else entry
            for entry in network.reactions
        ),
    )


def _without_measured(case: Case, name: str) -> Case:
    compound = name.removeprefix("all values of ")
    if compound != name:
        kept = tuple(entry for entry in case.measured if entry.compound != compound)
        return replace(case, measured=kept, growth_rate=None)
    if name == GROWTH_OVER_UPTAKE:
        return replace(case, growth_rate=None)
    kept = tuple(entry for entry in case.measured if entry.label != name)
    assert len(kept) == len(case.measured) - 1
    return replace(case, measured=kept)


def _without_energy(network: Network, name: str) -> Network:
    """The network in which an energy carrier is no longer counted."""

    def less(equation: Equation) -> Equation:
        left, right = (
            tuple(term for term in side if term.name != name)
            for side in (equation.left, equation.right)
        )
        return replace(equation, left=left, right=right)

    growth = network.growth
    return replace(
        network,
        carriers=tuple(entry for entry in network.carriers if entry.name != name),
        reactions=tuple(
            replace(entry, equation=less(entry.equation)) for entry in network.reactions
        ),
        growth=None if growth is None else replace(growth, equation=less(growth.equation)),
        maintenance=None,
    )


def _with_exchanges(network: Network) -> Network:
    """The network with reactions that turn every redox carrier into the first, both ways."""
    first, *others = [item for item in network.carriers if item.kind is CarrierKind.REDOX]

    def term(name: str, amount: Fraction) -> Term:
        return Term(name=name, coefficient=WrittenNumber(amount, str(amount)))

    added = tuple(
        Reaction(
            name=f"{first.name} to {other.name}",
            equation=Equation(
                left=(term(first.name, other.formula["H"]),),
                right=(term(other.name, first.formula["H"]),),
                reversible=True,
            ),
        )
        for other in others
    )
    return replace(network, reactions=(*network.reactions, *added))


def _with_sources(item: Solved) -> Outcome:
    """Best value with a reaction that makes each redox carrier from nothing."""
    case = item.case
    assert case.network is not None
    bound, _ = bind(case.network, dict(case.parameters))
    sources = tuple(
        BoundReaction(
            name=f"source of {carrier.name}",
            coefficients=((carrier.name, Fraction(1)),),
            reversible=False,
        )
        for carrier in case.network.carriers
        if carrier.kind is CarrierKind.REDOX
    )
    # Growth stays last, as binding leaves it.
    growth = tuple(entry for entry in bound.reactions if entry.name == GROWTH)
    others = tuple(entry for entry in bound.reactions if entry.name != GROWTH)
    layers = build_layers(
        case,
        statements_of(case),
        replace(bound, reactions=(*others, *sources, *growth)),
        bound.growth_residual(),
    )
    problem = with_point(layers.final, layers.statements, item.point)
    answer = item.objective.best(Optimiser(engine_named("glpk")), problem)
    return answer.status, answer.value if answer.status is Status.OPTIMAL else None
