"""Design for coupling against every subset, each solved in fractions with nothing skipped."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from functools import lru_cache
from itertools import combinations, count, islice, product
from typing import TYPE_CHECKING

import pytest

from tests.property.cases import Wanted, random_case
from yieldnet.foundation.errors import InputError, SolveError
from yieldnet.model.case import Aim, AimDirection
from yieldnet.model.network import BIOMASS
from yieldnet.optimum.fast import FastProblem
from yieldnet.optimum.hitting_sets import HittingSets
from yieldnet.optimum.problem import Bounds
from yieldnet.optimum.proof import Status
from yieldnet.studies.coupling import CoupledSet, CouplingDesign, DesignStatus, couple
from yieldnet.studies.setting import Setting, set_up

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator
    from pathlib import Path

    from yieldnet.foundation.findings import Findings
    from yieldnet.model.case import Case

NUMBER = 24
"""Random networks with growth and a product that can be made [-]."""
DEPTH = 3
"""Largest set of knock-outs [-]."""
ALL = 10_000
"""More alternatives than any of the networks has [-]."""
Names = frozenset[str]
Forced = dict[Names, Fraction | None]


class Brute:
    """Least product at the stated growth for every set of knock-outs; absent without growth."""

    def __init__(self, setting: Setting, growth: Fraction) -> None:
        self.forced: Forced = {}
        for size in range(DEPTH + 1):
            for members in combinations(setting.candidates(), size):
                problem = setting.without(members)
                held = problem.columns[problem.column(setting.biomass_column)].bounds
                grown = problem.with_columns({setting.biomass_column: Bounds(growth, held.high)})
                answer = setting.optimiser.optimise(grown, setting.product_objective(), False)
                if answer.status is not Status.INFEASIBLE:
                    optimal = answer.status is Status.OPTIMAL
                    self.forced[frozenset(members)] = answer.value if optimal else None

    def couples(self, members: Names, least: Fraction) -> bool:
        value = self.forced.get(members)
        return value is not None and value >= least

    def irreducible(self, least: Fraction) -> Forced:
        """Sets that couple and none of whose parts does."""
        return {
            members: value
            for members, value in self.forced.items()
            if self.couples(members, least)
            and not any(
                self.couples(frozenset(part), least)
                for size in range(len(members))
                for part in combinations(members, size)
            )
        }

    def values(self) -> list[Fraction]:
        return sorted({value for value in self.forced.values() if value is not None})


@lru_cache(maxsize=1)
def subjects() -> tuple[tuple[Setting, Fraction, Brute], ...]:
    """Settings that grow, some growth to ask for, and what brute force says of them."""

    def found() -> Iterator[tuple[Setting, Fraction, Brute]]:
        for seed in count():
            case = random_case(4 + seed % 3, seed, Wanted(measured="none", conditions=False))
            products = [item.name for item in case.coefficients if item.name.startswith("compound")]
            if case.coefficient(BIOMASS) is None or not products:
                continue
            aim = Aim(direction=AimDirection.MOST, compound=products[seed % len(products)])
            try:
                setting = set_up(replace(case, aim=aim))
            except InputError:
                continue
            most = setting.optimiser.optimise(setting.problem, setting.biomass_objective())
            if most.status is not Status.OPTIMAL or not most.value:
                continue
            growth = most.value * Fraction(seed % 5, 6)
            brute = Brute(setting, growth)
            # Without a choice of yields there is nothing to design.
            if len(brute.values()) > 1:
                yield setting, growth, brute

    return tuple(islice(found(), NUMBER))


def _spelled_out(item: CoupledSet) -> Iterator[Names]:
    """Each set that an entry stands for, its chains written out."""
    choices = [(name, *same) for name, same in zip(item.members, item.same, strict=True)]
    return map(frozenset, product(*choices))


def _forced(design: CouplingDesign) -> Forced:
    return {names: item.forced for item in design.sets for names in _spelled_out(item)}


def test_the_networks_differ_in_what_can_be_forced() -> None:
    assert len(subjects()) == NUMBER
    sizes = {
        len(members)
        for _, _, brute in subjects()
        for level in brute.values()
        for members in brute.irreducible(level)
    }
    assert sizes == set(range(DEPTH + 1))


@pytest.mark.parametrize("place", range(NUMBER))
def test_designs_are_those_of_all_subsets(place: int) -> None:
    setting, growth, brute = subjects()[place]
    for level in brute.values():
        design = couple(setting, level, growth, DEPTH, ALL)
        expected = brute.irreducible(level)
        assert _forced(design) == expected
        assert design.status is DesignStatus.FOUND
        assert design.cut_short == ()
        ranks = [(len(item.members), -item.forced) for item in design.sets]
        assert ranks == sorted(ranks)
        for item in design.sets:
            guaranteed = item.behaviour.guaranteed
            assert guaranteed is None or guaranteed >= item.forced


@pytest.mark.parametrize("place", range(NUMBER))
def test_beyond_reach_the_best_is_that_of_all_subsets(place: int) -> None:
    setting, growth, brute = subjects()[place]
    highest = brute.values()[-1]
    design = couple(setting, highest + Fraction(1, 10**6), growth, DEPTH, ALL)
    assert design.status is DesignStatus.BEYOND_REACH
    assert design.sets == ()
    assert design.best is not None
    assert design.best.forced == highest
    for names in _spelled_out(design.best):
        assert brute.forced[names] == highest


@pytest.mark.parametrize("place", range(NUMBER))
def test_with_few_alternatives_no_larger_set_holds_a_smaller(place: int) -> None:
    setting, growth, brute = subjects()[place]
    for level in brute.values():
        expected = brute.irreducible(level)
        design = couple(setting, level, growth, DEPTH, 1)
        given = _forced(design)
        assert given.items() <= expected.items()
        sizes = [len(item.members) for item in design.sets]
        assert sizes == sorted({len(members) for members in expected})
        entries = couple(setting, level, growth, DEPTH, ALL).sets
        more = [size for size in sizes if [len(item.members) for item in entries].count(size) > 1]
        assert design.cut_short == tuple(more)


def _check(setting: Setting, growth: Fraction, brute: Brute) -> None:
    for level in brute.values():
        design = couple(setting, level, growth, DEPTH, ALL)
        assert _forced(design) == brute.irreducible(level)
    beyond = couple(setting, brute.values()[-1] + 1, growth, DEPTH, ALL)
    assert beyond.best is not None
    assert beyond.best.forced == brute.values()[-1]


def test_floats_that_fail_cost_requirements_and_no_set(monkeypatch: pytest.MonkeyPatch) -> None:
    def fails(problem: FastProblem, dual: bool = False) -> None:
        raise SolveError("a test says so")

    monkeypatch.setattr(FastProblem, "solve", fails)
    for subject in subjects()[:6]:
        _check(*subject)


def test_floats_that_are_wrong_cost_requirements_and_no_set(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    # Every way of growing seems to make too little.
    monkeypatch.setattr(FastProblem, "value", property(lambda problem: -1e9))
    for subject in subjects()[:6]:
        _check(*subject)


BURNT = """
network: Lactate made or burnt
carriers: {NADH: {kind: redox, formula: H2}, ATP: {kind: energy}}
crossing:
  in: [glucose, oxygen]
  out: [biomass]
  either: [lactate, carbon dioxide, water]
reactions:
  glycolysis: glucose -> 2 pyruvate + 2 NADH + 2 ATP
  lactate dehydrogenase: pyruvate + NADH <-> lactate
  pyruvate oxidation: pyruvate + 5/2 oxygen -> 3 carbon dioxide + 2 water
  NADH oxidation: NADH + 1/2 oxygen -> water
growth:
  biomass: {formula: CH2O}
  equation: 1/6 glucose + 1/6 ATP -> biomass
"""


def test_a_product_that_can_be_taken_up_without_end(
    tmp_path: Path, case_of: Callable[[str], tuple[Case | None, Findings]]
) -> None:
    (tmp_path / "network.yaml").write_text(BURNT, "utf-8")
    case, findings = case_of(
        "case: Burnt\nnetwork: network.yaml\nequation: glucose + ? oxygen -> ? biomass\n"
        "either side: [lactate, carbon dioxide, water]\naim: most lactate\n"
    )
    assert case is not None, findings.items
    setting, growth = set_up(case), Fraction(1, 2)
    brute = Brute(setting, growth)
    assert brute.forced[frozenset()] is None
    assert len(brute.values()) > 1
    _check(setting, growth, brute)
    # Where the level is zero, no lactate need be made, only none taken up.
    assert brute.irreducible(Fraction(0))[frozenset({"lactate dehydrogenase"})] == 0
    # Nothing that may be knocked out sets a bound.
    design = couple(setting, Fraction(0), growth, things=["glycolysis"])
    assert (design.status, design.best) == (DesignStatus.BEYOND_REACH, None)


def test_without_biomass_there_is_nothing_to_couple_to(
    tmp_path: Path, case_of: Callable[[str], tuple[Case | None, Findings]]
) -> None:
    (tmp_path / "network.yaml").write_text(BURNT, "utf-8")
    case, _ = case_of(
        "case: Burnt\nnetwork: network.yaml\nequation: glucose + ? oxygen -> ? lactate\n"
        "either side: [carbon dioxide, water]\naim: most lactate\n"
    )
    assert case is not None
    with pytest.raises(SolveError, match="biomass is not in the equation"):
        couple(set_up(case), Fraction(1), Fraction(0))


def test_more_growth_than_there_is_is_said() -> None:
    for setting, _, _ in subjects():
        most = setting.optimiser.optimise(setting.problem, setting.biomass_objective()).value
        design = couple(setting, Fraction(1), most + Fraction(1, 10**6), DEPTH)
        assert design.status is DesignStatus.TOO_MUCH_GROWTH
        assert design.most_biomass == most
        assert design.sets == ()


def test_progress_counts_the_sets_that_were_tried() -> None:
    setting, growth, brute = subjects()[0]
    seen: list[int] = []
    couple(setting, brute.values()[-1], growth, DEPTH, tick=seen.append)
    assert seen == list(range(1, len(seen) + 1))
    assert len(seen) > DEPTH


def test_what_makes_no_sense_is_refused() -> None:
    setting, growth, _ = subjects()[0]
    with pytest.raises(ValueError, match="no reaction or group is called 'nothing'"):
        couple(setting, Fraction(1), growth, things=["nothing"])
    with pytest.raises(ValueError, match="must not be negative"):
        couple(setting, Fraction(1), Fraction(-1))


def test_smallest_sets_are_those_of_all_subsets() -> None:
    places = range(6)
    meet = [frozenset({0, 1}), frozenset({1, 2, 3}), frozenset({4, 5})]
    avoid = [frozenset({1, 4}), frozenset({5})]
    wanted = {
        frozenset(members)
        for size in range(len(places) + 1)
        for members in combinations(places, size)
        if all(part & set(members) for part in meet)
        and not any(part <= set(members) for part in avoid)
    }
    sets = HittingSets(len(places))
    for part in meet:
        sets.meet(part)
    for part in avoid:
        sets.avoid(part)
    found: list[frozenset[int]] = []
    while (members := sets.next()) is not None:
        found.append(members)
        sets.avoid(members)
    smallest = {item for item in wanted if not any(other < item for other in wanted)}
    assert set(found) == smallest
    assert [len(item) for item in found] == sorted(map(len, found))
    assert smallest == {frozenset({0, 2, 4}), frozenset({0, 3, 4})}


def test_nothing_meets_an_empty_set() -> None:
    sets = HittingSets(3)
    assert sets.next() == frozenset()
    sets.meet(frozenset())
    assert sets.next() is None


def test_a_solver_that_stops_or_errs_is_not_believed(monkeypatch: pytest.MonkeyPatch) -> None:
    sets = HittingSets(2)
    assert sets.next() == frozenset()
    sets.meet(frozenset({0}))
    monkeypatch.setattr(type(sets._model), "optimize", lambda model: "time_limit")
    with pytest.raises(SolveError, match="stopped with 'time_limit'"):
        sets.next()
    # It says that all is well and leaves the old values.
    monkeypatch.setattr(type(sets._model), "optimize", lambda model: "optimal")
    with pytest.raises(SolveError, match="breaks a requirement"):
        sets.next()
