"""Conflicts against brute force: every subset of the statements, on a problem put together here.

The statements are listed from the case once more, and each becomes rows of its own, so that
keeping some of them is keeping some rows. A subset is known to fit where a point found for another
subset keeps it; else it is solved. The smallest subset that does not fit has the size that the
answer must have.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from fractions import Fraction
from itertools import combinations
from random import Random
from typing import TYPE_CHECKING

import pytest

from tests.property.answers import build
from tests.property.cases import random_case
from tests.property.solved import remembered
from yieldnet.balance.statements import statements_of, with_bands, yield_column
from yieldnet.model.case import BAND, Demand, EnergySurplus, Named
from yieldnet.model.network import BIOMASS, CarrierKind, Direction
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.problem import FREE, Bounds, ProblemBuilder
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.optimum.ranges import column_ranges
from yieldnet.prediction.conflict import find_conflict

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem
    from yieldnet.prediction.conflict import Conflict, ConflictMember

CASES = 200
"""Infeasible cases that are compared [-]."""
MOST = 13
"""Most statements of a case: one more than those for which the answer must be the least [-]."""
ZERO = Fraction(0)
LITTLE = Fraction(1, 1000)
"""Part of a change that is left out to see that the rest is too little [-]."""
_WAYS = {
    Direction.CONSUMED: Bounds(None, ZERO),
    Direction.PRODUCED: Bounds(ZERO, None),
    Direction.EITHER: FREE,
}


@dataclass(frozen=True, slots=True)
class Statement:
    """Something that could be given up: rows by name, each a sum of columns and its bounds."""

    kind: str
    name: str
    rows: tuple[tuple[dict[str, Fraction], Bounds], ...]
    factor: Fraction = Fraction(1)
    sd: Fraction | None = None


@dataclass(slots=True)
class Brute:
    """The feasible points of a case with any of its statements kept."""

    case: Case
    statements: list[Statement]
    base: Problem
    optimiser: Optimiser = field(default_factory=lambda: Optimiser(engine_named("glpk")))
    met: set[frozenset[int]] = field(default_factory=set)

    def problem(self, kept: Iterable[int], moves: Mapping[int, Fraction] | None = None) -> Problem:
        """The problem with some statements kept, the bounds of some of them shifted."""
        rows = {}
        for i in kept:
            by = (moves or {}).get(i, ZERO)
            for number, (_, bounds) in enumerate(self.statements[i].rows):
                low, high = (None if end is None else end + by for end in (bounds.low, bounds.high))
                rows[f"{i} {number}"] = Bounds(low, high)
        return self.base.with_rows(rows)

    def fits(self, kept: Iterable[int]) -> bool:
        """Whether some statements can hold together."""
        wanted = frozenset(kept)
        if any(wanted <= known for known in self.met):
            return True
        answer = self.optimiser.optimise(self.problem(wanted), {})
        if answer.status is Status.INFEASIBLE:
            return False
        self.met.add(
            frozenset(
                i
                for i, item in enumerate(self.statements)
                if all(
                    _inside(sum((n * answer[name] for name, n in form.items()), ZERO), bounds)
                    for form, bounds in item.rows
                )
            )
        )
        assert any(wanted <= known for known in self.met)
        return True

    def least(self) -> int:
        """Size of the smallest subset that does not fit; every smaller one has been tried."""
        everything = range(len(self.statements))
        for size in range(len(self.statements) + 1):
            if not all(self.fits(subset) for subset in combinations(everything, size)):
                return size
        raise AssertionError("the case is feasible")

    def place(self, member: ConflictMember) -> int:
        """Number of the statement that a member of an answer is."""
        (found,) = [
            i
            for i, item in enumerate(self.statements)
            if (item.kind, item.name) == (member.kind, member.name)
        ]
        return found


def _inside(value: Fraction, bounds: Bounds) -> bool:
    return (bounds.low is None or value >= bounds.low) and (
        bounds.high is None or value <= bounds.high
    )


def _brute(case: Case, bound: BoundNetwork) -> Brute:
    network = bound.network
    builder = ProblemBuilder()
    sums: dict[str, dict[str, Fraction]] = {}
    for reaction in bound.reactions:
        builder.add_column(
            f"flux {reaction.name}", FREE if reaction.reversible else Bounds(ZERO, None)
        )
        for name, amount in reaction.coefficients:
            sums.setdefault(name, {})[f"flux {reaction.name}"] = amount
    ways = {name: _WAYS[direction] for name, direction in network.crossing}
    ways[case.basis.name] = Bounds(Fraction(-1), Fraction(-1))
    for carrier in network.carriers:
        if carrier.kind is CarrierKind.ENERGY:
            ways[carrier.name] = Bounds(ZERO, None)
    for name, bounds in ways.items():
        builder.add_column(f"leaving {name}", bounds)
        sums.setdefault(name, {})[f"leaving {name}"] = Fraction(-1)
    for name, line in sums.items():
        builder.add_row(f"balance {name}", "test", Bounds(ZERO, ZERO), line)
    statements = _statements(case, bound)
    for i, item in enumerate(statements):
        for number, (form, _) in enumerate(item.rows):
            builder.add_row(f"{i} {number}", "test", FREE, form)
    return Brute(case=case, statements=statements, base=builder.build())


def _statements(case: Case, bound: BoundNetwork) -> list[Statement]:
    """Everything in a case that could be given up."""
    network = bound.network
    ways = dict(network.crossing)
    found = []

    def row(name: str, bounds: Bounds) -> tuple[dict[str, Fraction], Bounds]:
        item = case.coefficient(name)
        consumed = item is not None and item.side is Direction.CONSUMED
        return {f"leaving {name}": Fraction(-1 if consumed else 1)}, bounds

    for value in statements_of(case).measured:
        half = BAND * (value.sd or ZERO)
        kind = "written" if value.label.startswith("written") else "measured"
        band = Bounds(value.value - half, value.value + half)
        found.append(
            Statement(kind, value.label, (row(value.compound, band),), value.factor, value.sd)
        )
    for demand in case.demands:
        label, bounds = f"demand {demand.compound}", Bounds(demand.low, demand.high)
        found.append(Statement("demand", label, (row(demand.compound, bounds),), demand.factor))
    for item in case.coefficients:
        # The aim's own coefficient is set aside, exact or not.
        is_aim = case.aim is not None and case.aim.compound == item.name
        if item.written is not None and item.written.last_place is None and not is_aim:
            exact = Bounds(item.written.value, item.written.value)
            found.append(Statement("written", f"written {item.name}", (row(item.name, exact),)))
        if item.side is not Direction.EITHER and ways[item.name] is Direction.EITHER:
            found.append(Statement("side", item.name, (row(item.name, Bounds(ZERO, None)),)))
    shut = Bounds(ZERO, ZERO)
    listed = {item.name for item in case.compounds}
    found += [
        Statement("closed compound", name, (row(name, shut),))
        for name in ways
        if name not in listed
    ]
    strain = network.strain(case.strain.name) if case.strain else None
    entries = [*(strain.off if strain else ()), *(item.name for item in case.knock_outs)]
    own = {item.name for item in case.knock_outs}
    found += [
        Statement(
            "knock-out" if name in own else "strain entry",
            name,
            tuple(({f"flux {member}": Fraction(1)}, shut) for member in network.members(name)),
        )
        for name in dict.fromkeys(entries)
    ]
    return found + _energy_statements(case, bound)


def _energy_statements(case: Case, bound: BoundNetwork) -> list[Statement]:
    """Maintenance, and that nothing is left beyond it."""
    network = bound.network
    form: dict[str, Fraction] = {}
    need, factor = ZERO, Fraction(1)
    maintenance = network.maintenance
    if maintenance is not None:
        rate = maintenance.rate_mol_per_gram_hour
        if case.substrate_uptake is not None:
            need = rate / case.substrate_uptake.value
            factor = Fraction(1, 1000) / case.substrate_uptake.value
            form = {f"leaving {maintenance.carrier}": Fraction(1)}
        elif case.growth_rate is not None and case.coefficient(BIOMASS) is not None:
            mass = case.compound(BIOMASS).weight.molar_mass
            assert mass is not None
            kept = rate / case.growth_rate.value * mass
            form = {
                f"leaving {maintenance.carrier}": Fraction(1),
                f"leaving {BIOMASS}": -kept,
            }
    found = []
    energy = [item.name for item in network.carriers if item.kind is CarrierKind.ENERGY]
    if case.energy_surplus is EnergySurplus.NONE and energy:
        spared: list[tuple[dict[str, Fraction], Bounds]] = [
            ({f"leaving {name}": Fraction(1)}, Bounds(None, ZERO))
            for name in energy
            if f"leaving {name}" not in form
        ]
        spared += [(form, Bounds(None, need))] if form else []
        found.append(Statement("condition", "energy surplus: none", tuple(spared)))
    if form:
        found.append(Statement("condition", "maintenance", ((form, Bounds(need, None)),), factor))
    return found


def _spoilt(case: Case, rng: Random) -> Case:
    """The case with one or two things more that it may not be able to keep."""
    if rng.random() < 0.15:
        case = replace(case, energy_surplus=EnergySurplus.NONE)
    for _ in range(rng.randint(1, 2)):
        case = rng.choice((_out_of_reach, _out_of_reach, _mismeasured, _slow, _crippled))(case, rng)
    return case


def _out_of_reach(case: Case, rng: Random) -> Case:
    """A demand a little beyond what the case can keep, so that many statements may have a part."""
    built, item = build(case), rng.choice(case.coefficients)
    reach = column_ranges(
        built.optimiser,
        with_bands(built.layers.final, built.layers.statements),
        [yield_column(item.name)],
    )
    if reach is None or any(demand.compound == item.name for demand in case.demands):
        return case
    (found,) = reach.values()
    found = found if item.side is not Direction.CONSUMED else found.turned()
    step = Fraction(rng.randint(1, 40), 100)
    if found.low is not None and found.low > 0 and rng.random() < 0.5:
        demand = Demand(compound=item.name, low=None, high=found.low * (1 - step / 2), text="most")
    elif found.high is not None:
        demand = Demand(compound=item.name, low=found.high + step, high=None, text="least")
    else:
        return case
    return replace(case, demands=(*case.demands, demand))


def _mismeasured(case: Case, rng: Random) -> Case:
    if not case.measured:
        return case
    measured = list(case.measured)
    value = rng.choice(measured)
    wrong = replace(value, value=value.value * Fraction(rng.randint(2, 30), 10))
    measured[measured.index(value)] = wrong
    return replace(case, measured=tuple(measured))


def _slow(case: Case, rng: Random) -> Case:
    """Maintenance many times as dear, since it is paid by the hour."""
    if case.substrate_uptake is None:
        return case
    value = case.substrate_uptake.value / rng.randint(5, 60)
    return replace(case, substrate_uptake=replace(case.substrate_uptake, value=value))


def _crippled(case: Case, rng: Random) -> Case:
    assert case.network is not None
    name = rng.choice(case.network.reactions).name
    return replace(case, knock_outs=(*case.knock_outs, Named(name=name)))


@remembered
def _infeasible() -> tuple[tuple[Brute, Conflict], ...]:
    """Infeasible cases with not too many statements, and what is said of each."""
    found: list[tuple[Brute, Conflict]] = []
    seed = 0
    while len(found) < CASES:
        rng = Random(f"conflict {seed}")
        case = _spoilt(random_case(4 + seed % 3, seed), rng)
        seed += 1
        built = build(case)
        assert built.layers.bound is not None
        if built.point is not None:
            continue
        brute = _brute(case, built.layers.bound)
        if len(brute.statements) <= MOST:
            found.append((brute, find_conflict(built.optimiser, built.layers)))
    return tuple(found)


def test_conflicts_are_as_small_as_brute_force_finds() -> None:
    sizes: dict[int, int] = {}
    kinds: dict[str, int] = {}
    for brute, conflict in _infeasible():
        assert not brute.fits(range(len(brute.statements)))
        assert conflict.least
        size = len(conflict.members)
        assert size == brute.least(), brute.case
        sizes[size] = sizes.get(size, 0) + 1
        for member in conflict.members:
            kinds[member.kind] = kinds.get(member.kind, 0) + 1
    assert sum(count > 5 for count in sizes.values()) > 2, sizes
    assert set(kinds) == {
        *("measured", "written", "demand", "side", "condition"),
        *("closed compound", "knock-out", "strain entry"),
    }, kinds


def test_each_member_is_needed() -> None:
    for brute, conflict in _infeasible():
        places = [brute.place(member) for member in conflict.members]
        assert len(set(places)) == len(places)
        assert not brute.fits(places)
        for place in places:
            assert brute.fits(other for other in places if other != place)


def test_needs_is_the_least_change_that_resolves_the_whole_case() -> None:
    told = untold = 0
    for brute, conflict in _infeasible():
        everything = range(len(brute.statements))
        for member in conflict.members:
            place = brute.place(member)
            item = brute.statements[place]
            if member.needs is None:
                # Either it is no quantity, or giving it up altogether is not enough.
                quantity = item.kind in ("measured", "written", "demand") or (
                    item.name == "maintenance" and len(item.rows[0][0]) == 1
                )
                assert not quantity or not brute.fits(i for i in everything if i != place)
                assert member.needs_sd is None
                assert member.then is None
                untold += 1
                continue
            change = member.needs * item.factor
            for part, enough in ((Fraction(1), True), (1 - LITTLE, False)):
                problem = brute.problem(everything, {place: part * change})
                answer = brute.optimiser.optimise(problem, {})
                assert (answer.status is Status.OPTIMAL) is enough
            assert (member.needs_sd is None) == (item.sd is None)
            if item.sd is not None:
                assert member.needs_sd == pytest.approx(float(change / item.sd))
            (_, bounds), *_ = item.rows
            ends = [end + change for end in (bounds.low, bounds.high) if end is not None]
            if item.sd is not None:
                ends = [sum(ends, ZERO) / len(ends)]
            assert member.then is not None
            assert member.then * item.factor in ends
            told += 1
    assert told > CASES / 2
    assert untold > CASES / 10


def test_what_is_lacking_would_resolve_a_conflict_of_one_and_nothing_else_would() -> None:
    asked = named = 0
    for brute, conflict in _infeasible():
        if len(conflict.members) > 1:
            assert conflict.lacking == ()
            continue
        network = brute.case.network
        assert network is not None
        problem = brute.problem(map(brute.place, conflict.members))
        crossing = {name for name, _ in network.crossing}
        rows = {row.name for row in problem.rows}
        inside = [item.name for item in network.compounds if item.name not in crossing]
        found = []
        for name in (*inside, *(carrier.name for carrier in network.carriers)):
            if f"balance {name}" in rows:
                # Some of it from nowhere: more may be used than is made.
                source = problem.with_rows({f"balance {name}": Bounds(None, ZERO)})
                answer = brute.optimiser.optimise(source, {})
                found += [name] if answer.status is Status.OPTIMAL else []
        assert sorted(conflict.lacking) == sorted(found)
        asked += 1
        named += bool(found)
    assert asked > CASES / 5
    assert named > 5
