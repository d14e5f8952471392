"""Design for coupling: the smallest knock-out sets that force product once the cell grows.

A set couples if some growth of at least the stated biomass yield is left and every such growth
makes at least the stated product yield. A mixed-integer problem proposes smallest sets; a linear
problem, proven in fractions, finds what each leaves possible and so what the next must hit. Only
sets none of whose members can be spared are given; what a larger set adds to one of them is a
matter of asking for a higher yield.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from enum import StrEnum
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import SolveError
from yieldnet.optimum.fast import FEASIBILITY, FastProblem, FastStatus
from yieldnet.optimum.hitting_sets import HittingSets
from yieldnet.optimum.problem import SHUT, Bounds
from yieldnet.optimum.proof import Status
from yieldnet.prediction.layers import flux_column
from yieldnet.studies.behaviour import Behaviour, behaviour
from yieldnet.studies.deletions import ACTIVE, linear_chains

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Answer
    from yieldnet.studies.setting import Setting

__all__ = ["CoupledSet", "CouplingDesign", "DesignStatus", "couple"]


class DesignStatus(StrEnum):
    """How a design for coupling ended."""

    FOUND = "found"
    BEYOND_REACH = "no set of that size forces that yield"
    TOO_MUCH_GROWTH = "that growth is not possible even without knock-outs"


@dataclass(frozen=True, slots=True, kw_only=True)
class CoupledSet:
    """A knock-out set and what it forces, exact.

    Parameters
    ----------
    members : tuple of str
        Reactions or groups, in the order of the file; empty if nothing need be knocked out.
    same : tuple of tuple of str
        For each of them, other reactions of its linear chain, any of which does as well.
    forced : Fraction
        Least product at the stated growth or more [mol/mol basis].
    behaviour : Behaviour
        What the cell would do, its guaranteed product at most growth included.
    """

    members: tuple[str, ...]
    same: tuple[tuple[str, ...], ...]
    forced: Fraction
    behaviour: Behaviour


@dataclass(frozen=True, slots=True, kw_only=True)
class CouplingDesign:
    """Answer of a design for coupling.

    Parameters
    ----------
    status : DesignStatus
        Whether there are such sets.
    product : str
        The product.
    least_yield, least_growth : Fraction
        Product to force, and biomass from which on [mol/mol basis].
    most_deletions : int
        Largest set that was looked for [-].
    sets : tuple of CoupledSet
        Sets by size; of one size, the largest forced yield first.
    cut_short : tuple of int
        Sizes of which there are more sets than were asked for [-].
    best : CoupledSet or None
        If there are no such sets, the one of at most ``most_deletions`` that forces most;
        ``None`` if the least product has no bound whatever is knocked out.
    most_biomass : Fraction or None
        Most biomass without knock-outs; ``None`` without a bound [mol/mol basis].
    """

    status: DesignStatus
    product: str
    least_yield: Fraction
    least_growth: Fraction
    most_deletions: int
    sets: tuple[CoupledSet, ...] = ()
    cut_short: tuple[int, ...] = ()
    best: CoupledSet | None = None
    most_biomass: Fraction | None = None


def couple(
    setting: Setting,
    least_yield: Fraction,
    least_growth: Fraction,
    most_deletions: int = 3,
    alternatives: int = 10,
    things: Sequence[str] = (),
    tick: Callable[[int], None] | None = None,
) -> CouplingDesign:
    """Smallest knock-out sets that force product whenever the cell grows.

    Parameters
    ----------
    setting : Setting
        Case, product, biomass.
    least_yield : Fraction
        Product to force [mol/mol basis].
    least_growth : Fraction
        Biomass from which on it is forced; such growth must stay possible [mol/mol basis].
    most_deletions : int
        Largest set to look for [-].
    alternatives : int
        Most sets of one size [-].
    things : sequence of str
        Reactions and groups that may be knocked out; all reactions if empty.
    tick : callable, optional
        Called with the number of sets tried so far.

    Returns
    -------
    CouplingDesign
        The sets, or how much can be forced at best.

    Raises
    ------
    SolveError
        If biomass is not in the equation.
    ValueError
        If a thing is unknown, or a number makes no sense.

    Notes
    -----
    A set that still lets the cell grow with too little product must hit the reactions which that
    way of growing uses; a set that stops growth must not be held by any other. The master problem
    of ones and zeros gathers these requirements [1]_. Ways of growing are thinned to few reactions
    in floats and proven in fractions, so no requirement is wrong and no set is missed.

    References
    ----------
    .. [1] Codato and Fischetti 2006, Combinatorial Benders' cuts for mixed-integer linear
       programming, Operations Research 54:756 (volume and page from memory).
    """
    if not setting.biomass_column:
        raise SolveError("biomass is not in the equation, so nothing can be coupled to growth")
    if least_growth < 0 or most_deletions < 0 or alternatives < 1:
        raise ValueError("growth and deletions must not be negative, and one set must be wanted")
    most = setting.optimiser.optimise(setting.problem, setting.biomass_objective())
    asked = CouplingDesign(
        status=DesignStatus.TOO_MUCH_GROWTH,
        product=setting.product,
        least_yield=least_yield,
        least_growth=least_growth,
        most_deletions=most_deletions,
        most_biomass=most.value if most.status is Status.OPTIMAL else None,
    )
    if most.status is Status.OPTIMAL and most.value < least_growth:
        return asked
    search = _Search(setting, least_growth, _Things.of(setting, things), tick)
    found: list[CoupledSet] = []
    cut_short: list[int] = []
    for size in range(min(most_deletions, len(search.things.names)) + 1):
        sets, more = search.of_size(size, least_yield, alternatives, bool(cut_short))
        found += sets
        cut_short += [size] if more else []
    if found:
        return replace(
            asked, status=DesignStatus.FOUND, sets=tuple(found), cut_short=tuple(cut_short)
        )
    return replace(asked, status=DesignStatus.BEYOND_REACH, best=search.best(most_deletions))


@dataclass(frozen=True, slots=True)
class _Things:
    """What may be knocked out, one for each linear chain."""

    names: tuple[str, ...]
    columns: tuple[tuple[int, ...], ...]
    same: tuple[tuple[str, ...], ...]

    @classmethod
    def of(cls, setting: Setting, wanted: Sequence[str]) -> _Things:
        network, problem = setting.bound.network, setting.problem
        members = {name: network.members(name) for name in wanted or setting.candidates()}
        unknown = [name for name, reactions in members.items() if not reactions]
        if unknown:
            raise ValueError(f"no reaction or group is called {unknown[0]!r}")
        columns = {
            name: tuple(
                problem.column(flux_column(item)) for item in reactions if not setting.is_off(item)
            )
            for name, reactions in members.items()
        }
        names = [name for name in columns if columns[name]]
        # Chains are of reactions; a group of several is a thing of its own.
        alone = [name for name in names if len(columns[name]) == 1]
        chains = linear_chains(problem, [columns[name][0] for name in alone])
        first = {name: alone[chain] for name, chain in zip(alone, chains, strict=True)}
        kept = [name for name in names if first.get(name, name) == name]
        return cls(
            names=tuple(kept),
            columns=tuple(columns[name] for name in kept),
            same=tuple(
                tuple(other for other in alone if first[other] == name and other != name)
                for name in kept
            ),
        )

    def used(
        self, fluxes: Sequence[Fraction] | Sequence[float], least: float = 0.0
    ) -> frozenset[int]:
        """Things with a flux above a size."""
        return frozenset(
            place
            for place, columns in enumerate(self.columns)
            if any(not -least <= fluxes[column] <= least for column in columns)
        )


@dataclass(frozen=True, slots=True)
class _Bar:
    """Product that a set must force: at least a level, or more than it."""

    level: Fraction | None
    beyond: bool = False

    def missed_by(self, value: Fraction) -> bool:
        """Whether a product is too little."""
        if self.level is None:
            return False
        return value <= self.level if self.beyond else value < self.level

    def seems_missed_by(self, value: float) -> bool:
        """Whether a float product is likely too little, once some product was."""
        assert self.level is not None
        margin = FEASIBILITY if self.beyond else -FEASIBILITY
        return value <= float(self.level) + margin


class _Search:
    """The master problem of ones and zeros, and the problem that teaches it."""

    def __init__(
        self,
        setting: Setting,
        least_growth: Fraction,
        things: _Things,
        tick: Callable[[int], None] | None,
    ) -> None:
        self.setting = setting
        self.things = things
        self.tick = tick
        self.tried = 0
        problem = setting.problem
        held = problem.columns[problem.column(setting.biomass_column)].bounds
        low = least_growth if held.low is None else max(held.low, least_growth)
        self.grown = problem.with_columns({setting.biomass_column: Bounds(low, held.high)})
        self.fast = FastProblem(self.grown)
        self.fast.aim(
            {problem.column(setting.product_column): float(setting.product_sign)}, maximise=False
        )
        self.shut: set[int] = set()
        self.master = HittingSets(len(things.names))
        self.stopping: list[frozenset[int]] = []

    def without(self, places: frozenset[int]) -> Problem:
        """The problem at the stated growth or more, some things knocked out."""
        return self.grown.with_columns(
            {
                self.grown.columns[column].name: SHUT
                for place in places
                for column in self.things.columns[place]
            }
        )

    def least_product(self, places: frozenset[int]) -> Answer:
        """Least product at the stated growth or more, some things knocked out."""
        return self.setting.optimiser.optimise(
            self.without(places), self.setting.product_objective(), maximise=False
        )

    def of_size(
        self, size: int, least_yield: Fraction, alternatives: int, check_smaller: bool
    ) -> tuple[list[CoupledSet], bool]:
        """Sets of one size that couple, and whether there are more; no later set holds them.

        With ``check_smaller`` smaller sets may have gone unlisted, so that members may be spared.
        """
        bar = _Bar(least_yield)
        self.master.limit(size, size)
        found: list[tuple[frozenset[int], CoupledSet]] = []
        more = False
        while not more and (places := self._propose()) is not None:
            answer = self._judge(places, bar)
            if answer is None:
                continue
            kernel = self._spared(places, bar) if check_smaller else places
            if kernel == places and len(found) == alternatives:
                more = True
                continue
            self.master.avoid(kernel)
            if kernel == places:
                found.append((places, self._described(places, answer.value)))
        # What is equal stands in the order of the file.
        found.sort(
            key=lambda item: (
                -item[1].forced,
                -(item[1].behaviour.guaranteed or 0),
                sorted(item[0]),
            )
        )
        return [item for _, item in found], more

    def best(self, most_deletions: int) -> CoupledSet | None:
        """The set that forces most: each that is found must be beaten by the next."""
        # A set that stops growth does so whatever is asked for; the rest is learnt anew.
        self.master = HittingSets(len(self.things.names))
        self.master.limit(0, min(most_deletions, len(self.things.names)))
        for places in self.stopping:
            self.master.avoid(places)
        best: tuple[frozenset[int], Fraction] | None = None
        bar = _Bar(None)
        while (proposed := self._propose()) is not None:
            answer = self._judge(proposed, bar)
            if answer is not None:
                best = (proposed, answer.value)
                bar = _Bar(answer.value, beyond=True)
        return self._described(*best) if best else None

    def _propose(self) -> frozenset[int] | None:
        self.tried += 1
        if self.tick is not None:
            self.tick(self.tried)
        return self.master.next()

    def _judge(self, places: frozenset[int], bar: _Bar) -> Answer | None:
        """Least product if a set lets the cell grow and forces enough; else the master learns."""
        answer = self.least_product(places)
        if answer.status is Status.INFEASIBLE:
            stopping = self._stopping(places)
            self.stopping.append(stopping)
            self.master.avoid(stopping)
            return None
        if answer.status is Status.UNBOUNDED:
            # Some point, and the direction of ever less product, are there together.
            point = self.setting.optimiser.optimise(answer.problem, {})
            running = [Fraction(0)] * len(point.primal)
            for name, value in answer.direction:
                running[answer.problem.column(name)] = value
            self.master.meet(self.things.used(point.primal) | self.things.used(running))
            return None
        if bar.missed_by(answer.value):
            self.master.meet(self._thinned(self.things.used(answer.primal), bar))
            return None
        return answer

    def _stopping(self, places: frozenset[int]) -> frozenset[int]:
        """A part of a set that stops growth and none of which can be spared."""
        kept = places
        for place in sorted(places):
            if self.least_product(kept - {place}).status is Status.INFEASIBLE:
                kept -= {place}
        return kept

    def _spared(self, places: frozenset[int], bar: _Bar) -> frozenset[int]:
        """A part of a set that couples and none of which can be spared."""
        kept = places
        for place in sorted(places):
            answer = self.least_product(kept - {place})
            if answer.status is Status.OPTIMAL and not bar.missed_by(answer.value):
                kept -= {place}
        return kept

    def _thinned(self, used: frozenset[int], bar: _Bar) -> frozenset[int]:
        """Few things that suffice for growth with too little product, proven.

        Fewer things make a stronger requirement. Each is tried in floats; at the end fractions
        decide, and if floats were wrong the things that were there at first stay.
        """
        everything = frozenset(range(len(self.things.names)))
        left, settled = used, frozenset[int]()
        while left - settled:
            place = min(left - settled)
            smaller = self._float_use(everything - left | {place}, bar)
            if smaller is None:
                settled |= {place}
            else:
                left = smaller & left
        self._switch(frozenset())
        answer = self.least_product(everything - left)
        if answer.status is Status.OPTIMAL and bar.missed_by(answer.value):
            return self.things.used(answer.primal)
        return used

    def _float_use(self, off: frozenset[int], bar: _Bar) -> frozenset[int] | None:
        """Things used, in floats, if product seems too little with some off; ``None`` if not."""
        self._switch(off)
        try:
            status = self.fast.solve(dual=True)
        except SolveError:
            return None
        if status is not FastStatus.OPTIMAL or not bar.seems_missed_by(self.fast.value):
            return None
        return self.things.used(self.fast.values(range(self.fast.columns)), ACTIVE)

    def _switch(self, off: frozenset[int]) -> None:
        """Let the float problem stand with some things off, moving only what changes."""
        wanted = {column for place in off for column in self.things.columns[place]}
        for column in sorted(self.shut ^ wanted):
            if column in wanted:
                self.fast.bound_column(column, 0.0, 0.0)
            else:
                bounds = self.grown.columns[column].bounds
                self.fast.bound_column(
                    column,
                    None if bounds.low is None else float(bounds.low),
                    None if bounds.high is None else float(bounds.high),
                )
        self.shut = wanted

    def _described(self, places: frozenset[int], forced: Fraction) -> CoupledSet:
        members = [self.things.names[place] for place in sorted(places)]
        problem = self.setting.problem.with_columns(
            {
                self.grown.columns[column].name: SHUT
                for place in places
                for column in self.things.columns[place]
            }
        )
        return CoupledSet(
            members=tuple(members),
            same=tuple(self.things.same[place] for place in sorted(places)),
            forced=forced,
            behaviour=behaviour(self.setting, problem),
        )
