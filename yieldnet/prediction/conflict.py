"""Conflict: fewest statements of an infeasible case that cannot hold together, and the way out.

A set of statements that cannot hold together must share a member with every set whose giving up
makes the case feasible. The smallest set that meets all such sets found so far is tried; if its
members can hold together, giving up the rest yields one more set to meet, else it is the answer.

References
----------
Ignatiev, A., Previti, A., Liffiton, M., Marques-Silva, J. (2015) Smallest MUS extraction with
minimal hitting set dualization, Principles and Practice of Constraint Programming, pp. 173-182.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import band, is_exact, kind_of, side_sign, with_bands, yield_column
from yieldnet.model.case import EnergySurplus
from yieldnet.model.network import Direction
from yieldnet.optimum.problem import FREE, MADE, SHUT, Bounds, crossing_bounds, flux_bounds
from yieldnet.optimum.proof import Status
from yieldnet.optimum.ranges import column_ranges
from yieldnet.prediction.layers import (
    flux_column,
    maintenance_row,
    off_entries,
    surplus_column,
    switch_kind,
)

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping, Sequence

    from yieldnet.model.binding import BoundNetwork
    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Optimiser
    from yieldnet.prediction.layers import Layers

__all__ = ["Conflict", "ConflictMember", "find_conflict"]

MAX_ROUNDS = 400
"""Most sets tried for the least number of statements; beyond it the set is only irreducible [-]."""
_ZERO = Fraction(0)


@dataclass(frozen=True, slots=True, kw_only=True)
class ConflictMember:
    """One statement of a conflict.

    Parameters
    ----------
    kind, name : str
        What it is.
    needs : Fraction or None
        Least change of it alone that makes the case feasible, signed [unit]; ``None`` if it is not
        quantitative, or no change of it alone suffices.
    needs_sd : float or None
        The same in standard deviations [-].
    then : Fraction or None
        What it would have to say [unit].
    unit : str
        Unit of ``needs``.
    """

    kind: str
    name: str
    needs: Fraction | None
    needs_sd: float | None
    unit: str
    then: Fraction | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Conflict:
    """Statements that cannot hold together.

    Parameters
    ----------
    least : bool
        Whether no smaller set exists; else it is only irreducible.
    members : tuple of ConflictMember
        The statements; empty if the network alone is the reason.
    lacking : tuple of str
        Compounds or carriers a free source of any of which would resolve it, where the network
        cannot do a thing at all.
    """

    least: bool
    members: tuple[ConflictMember, ...]
    lacking: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class _Statement:
    """A statement that could be given up, and the bounds it holds while it is kept."""

    kind: str
    name: str
    columns: Mapping[str, Bounds] = field(default_factory=dict)
    rows: Mapping[str, Bounds] = field(default_factory=dict)
    compound: str = ""
    unit: str = "mol/mol"
    factor: Fraction = Fraction(1)
    sd: Fraction | None = None

    @property
    def held(self) -> Bounds:
        """Bounds of a statement that holds one column or row."""
        return next(iter((*self.columns.values(), *self.rows.values())), FREE)


def find_conflict(optimiser: Optimiser, layers: Layers) -> Conflict:
    """Fewest statements of an infeasible case that cannot hold together.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    layers : Layers
        The problems of an infeasible case.

    Returns
    -------
    Conflict
        Its members with the least change of each.
    """
    search = _Search(optimiser, layers)
    if not search.feasible(()):
        return Conflict(least=True, members=(), lacking=search.lacking(()))
    chosen, least = search.smallest()
    members = tuple(search.member(place) for place in chosen)
    lacking = search.lacking(chosen) if len(chosen) == 1 else ()
    return Conflict(least=least, members=members, lacking=lacking)


class _Search:
    def __init__(self, optimiser: Optimiser, layers: Layers) -> None:
        self.optimiser = optimiser
        self.layers = layers
        self.held = with_bands(layers.final, layers.statements)
        self.statements = _statements(layers)
        self.open = _open_columns(layers, self.statements)

    def problem(self, kept: Iterable[int]) -> Problem:
        """The final problem with only some statements kept."""
        columns = dict(self.open)
        rows = {name: FREE for item in self.statements for name in item.rows}
        for place in kept:
            for name, bounds in self.statements[place].columns.items():
                columns[name] = _meet(columns[name], bounds)
            for name, bounds in self.statements[place].rows.items():
                rows[name] = _meet(rows[name], bounds)
        return self.held.with_columns(columns).with_rows(rows)

    def feasible(self, kept: Iterable[int]) -> bool:
        """Whether some statements can hold together."""
        answer = self.optimiser.optimise(self.problem(kept), {})
        return answer.status is not Status.INFEASIBLE

    def smallest(self) -> tuple[tuple[int, ...], bool]:
        """Members of a smallest conflict, and whether it is proven smallest."""
        everything = range(len(self.statements))
        to_meet: list[frozenset[int]] = []
        for _ in range(MAX_ROUNDS):
            chosen = _smallest_meeting(to_meet)
            if not self.feasible(chosen):
                return tuple(sorted(chosen)), True
            kept = set(chosen)
            for place in everything:
                if place not in kept and self.feasible(kept | {place}):
                    kept.add(place)
            to_meet.append(frozenset(everything) - kept)
        left = list(everything)
        for place in everything:
            fewer = [item for item in left if item != place]
            if not self.feasible(fewer):
                left = fewer
        return tuple(left), False

    def member(self, place: int) -> ConflictMember:
        """A member with the least change of it alone that resolves the whole case."""
        item = self.statements[place]
        needs = None
        if item.kind in ("measured", "demand", "written") or item.name == "maintenance":
            needs = self._needs(place, item)
        return ConflictMember(
            kind=item.kind,
            name=item.name,
            needs=None if needs is None else needs / item.factor,
            needs_sd=float(needs / item.sd) if needs is not None and item.sd else None,
            unit=item.unit,
            then=None if needs is None else self._then(item, needs) / item.factor,
        )

    def _then(self, item: _Statement, needs: Fraction) -> Fraction:
        """What a statement would have to say: its value, or the bound that gives way."""
        low, high = item.held.low, item.held.high
        if item.sd is not None and low is not None and high is not None:
            return (low + high) / 2 + needs
        end = high if needs > 0 else low
        return (end or _ZERO) + needs

    def _needs(self, place: int, item: _Statement) -> Fraction | None:
        others = self.problem(i for i in range(len(self.statements)) if i != place)
        if item.name == "maintenance":
            row = maintenance_row(self.layers.case)
            if row is None or not row.constant:
                return None
            column, sign = surplus_column(row.carrier), 1
        else:
            coefficient = self.layers.case.coefficient(item.compound)
            assert coefficient is not None
            column, sign = yield_column(item.compound), side_sign(coefficient.side)
        found = column_ranges(self.optimiser, others, [column])
        if found is None:
            return None
        reach = found[column] if sign > 0 else found[column].turned()
        held = item.held
        if held.high is not None and reach.low is not None and reach.low > held.high:
            return reach.low - held.high
        if held.low is not None and reach.high is not None and reach.high < held.low:
            return reach.high - held.low
        return None

    def lacking(self, kept: Sequence[int]) -> tuple[str, ...]:
        """Inside compounds and carriers of which a free source alone would resolve it."""
        bound = self.layers.bound
        if bound is None:
            return ()
        problem = self.problem(kept)
        crossing = {name for name, _ in bound.network.crossing}
        found = []
        for name, _ in bound.formulas:
            row = f"{name} balance"
            if name in crossing or not any(item.name == row for item in problem.rows):
                continue
            # A source: the reactions may use more of it than they make.
            source = problem.with_rows({row: Bounds(None, _ZERO)})
            if self.optimiser.optimise(source, {}).status is not Status.INFEASIBLE:
                found.append(name)
        return tuple(found)


def _meet(one: Bounds, other: Bounds) -> Bounds:
    """Bounds that keep both; both come from one feasible case, so some value is left."""
    lows = [low for low in (one.low, other.low) if low is not None]
    highs = [high for high in (one.high, other.high) if high is not None]
    return Bounds(max(lows, default=None), min(highs, default=None))


def _open_columns(layers: Layers, statements: Sequence[_Statement]) -> dict[str, Bounds]:
    """Bounds of every column that a statement holds, once all of them are given up."""
    bound = layers.bound
    found: dict[str, Bounds] = {name: FREE for item in statements for name in item.columns}
    if bound is None:
        return found
    for name, direction in bound.network.crossing:
        if yield_column(name) in found:
            found[yield_column(name)] = crossing_bounds(direction)
    for reaction in bound.reactions:
        if flux_column(reaction.name) in found:
            found[flux_column(reaction.name)] = flux_bounds(reaction.reversible)
    for carrier in bound.network.carriers:
        if surplus_column(carrier.name) in found:
            found[surplus_column(carrier.name)] = MADE
    return found


def _smallest_meeting(sets: Sequence[frozenset[int]]) -> frozenset[int]:
    """A smallest set that shares a member with each of several sets."""
    best: list[frozenset[int]] = []

    def extend(chosen: frozenset[int], limit: int) -> bool:
        open_set = next((item for item in sets if not item & chosen), None)
        if open_set is None:
            best.append(chosen)
            return True
        if len(chosen) == limit:
            return False
        return any(extend(chosen | {place}, limit) for place in sorted(open_set))

    size = 0
    while not extend(frozenset(), size):
        size += 1
    return best[0]


def _statements(layers: Layers) -> list[_Statement]:
    """Everything in a case that could be given up."""
    found = [
        _Statement(
            kind_of(item),
            item.label,
            rows={item.label: band(item)},
            compound=item.compound,
            unit=item.unit,
            factor=item.factor,
            sd=item.sd,
        )
        for item in layers.statements.measured
    ]
    for demand in layers.statements.demands:
        label = f"demand {demand.compound}"
        found.append(
            _Statement(
                "demand",
                label,
                rows={label: Bounds(demand.low, demand.high)},
                compound=demand.compound,
                unit=demand.unit,
                factor=demand.factor,
            )
        )
    found += _coefficient_statements(layers)
    if layers.bound is not None:
        found += _network_statements(layers, layers.bound)
    return found


def _coefficient_statements(layers: Layers) -> list[_Statement]:
    """Exact coefficients, and sides where the network would allow both ways."""
    found = []
    for item in layers.case.coefficients:
        column = yield_column(item.name)
        direction = layers.bound.network.direction(item.name) if layers.bound else None
        if is_exact(item) and item.name != (layers.case.aim.compound if layers.case.aim else ""):
            assert item.written is not None
            value = item.written.value
            label = f"written {item.name}"
            found.append(
                _Statement("written", label, rows={label: Bounds(value, value)}, compound=item.name)
            )
        if item.side is not Direction.EITHER and direction in (None, Direction.EITHER):
            found.append(_Statement("side", item.name, {column: crossing_bounds(item.side)}))
    return found


def _network_statements(layers: Layers, bound: BoundNetwork) -> list[_Statement]:
    """Closed compounds, entries of strain and knock-outs, energy."""
    case = layers.case
    listed = {item.name for item in case.compounds}
    found = [
        _Statement("closed compound", name, {yield_column(name): SHUT})
        for name, _ in bound.network.crossing
        if name not in listed
    ]
    here = {item.name for item in bound.reactions}
    found += [
        _Statement(
            switch_kind(case, name),
            name,
            {flux_column(member): SHUT for member in members if member in here},
        )
        for name, members in off_entries(case).items()
    ]
    need = layers.tightened.get("maintenance", ({}, {}))[1].get("maintenance")
    if case.energy_surplus is EnergySurplus.NONE:
        energy = layers.tightened.get("energy", ({}, {}))[0]
        found.append(
            _Statement(
                "condition",
                "energy surplus: none",
                {name: bounds for name, bounds in energy.items() if bounds.fixed},
                {"maintenance": Bounds(None, need.low)} if need else {},
            )
        )
    network = case.network
    if need is not None and network is not None and network.maintenance is not None:
        row = maintenance_row(case)
        factor = Fraction(1)
        if row is not None and row.constant:
            factor = row.constant / network.maintenance.written.value
        found.append(
            _Statement(
                "condition",
                "maintenance",
                rows={"maintenance": Bounds(need.low, None)},
                unit=network.maintenance.unit,
                factor=factor,
            )
        )
    return found
