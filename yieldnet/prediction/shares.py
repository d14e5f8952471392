"""Shares: what each layer costs, whatever the order in which layers are added.

The ladder charges a loss to the layer added last; another order may charge another. The share of a
layer is its Shapley value: its loss averaged over all orders. For that, every set of layers needs a
problem of its own. A layer that is absent has its rows freed by columns that together carry no
element and no charge, so that nothing ever comes from nothing; an energy carrier is freed outright.

References
----------
Shapley, L. S. (1953) A value for n-person games, Contributions to the Theory of Games II,
pp. 307-317.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from itertools import combinations
from math import factorial
from typing import TYPE_CHECKING

from yieldnet.balance.elements import element_matrix
from yieldnet.balance.statements import yield_column
from yieldnet.model.binding import composition
from yieldnet.model.network import CarrierKind
from yieldnet.optimum.problem import FREE, SHUT, Bounds, Column, Matrix, Problem, Row
from yieldnet.optimum.proof import Status
from yieldnet.prediction.layers import exchange_column

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from yieldnet.optimum.proof import Answer, Optimiser
    from yieldnet.prediction.ladder import Objective
    from yieldnet.prediction.layers import Layers

__all__ = ["LayerShare", "Shares", "find_shares", "ladder_in_order"]

_ZERO = Fraction(0)


@dataclass(frozen=True, slots=True)
class LayerShare:
    """Share of one layer in the whole loss.

    Parameters
    ----------
    layer : str
        Its rung.
    share : Fraction
        Loss averaged over all orders [mol/mol basis].
    """

    layer: str
    share: Fraction


@dataclass(frozen=True, slots=True, kw_only=True)
class Shares:
    """Shares of all layers.

    Parameters
    ----------
    shares : tuple of LayerShare
        One a layer below ``elements``; they sum to the whole loss. Empty if there are none.
    reason : str
        Why there are none.
    """

    shares: tuple[LayerShare, ...] = ()
    reason: str = ""


class _Coalitions:
    """Best value of the aim for any set of layers."""

    def __init__(
        self,
        optimiser: Optimiser,
        layers: Layers,
        objective: Objective,
        point: Mapping[str, Fraction],
    ) -> None:
        self.optimiser = optimiser
        self.layers = layers
        self.objective = objective
        self.point = point
        self.players = layers.rungs[1:]
        self.base, self.freed = _with_free_layers(layers)
        self.found: dict[frozenset[str], Answer] = {}
        self.values: dict[frozenset[str], Fraction | None] = {}

    def problem(self, present: frozenset[str]) -> Problem:
        """Problem in which only some layers are present."""
        layers, statements = self.layers, self.layers.statements
        columns: dict[str, Bounds] = {}
        rows: dict[str, Bounds] = {}
        for layer, names in self.freed.items():
            columns.update(dict.fromkeys(names, SHUT if layer in present else FREE))
        if "measured" in present:
            for item in statements.measured:
                value = self.point[item.compound]
                rows[item.label] = Bounds(value, value)
        if "demands" in present:
            for demand in statements.demands:
                rows[f"demand {demand.compound}"] = Bounds(demand.low, demand.high)
        for layer in ("energy", "maintenance"):
            if layer in present and layer in layers.tightened:
                own_columns, own_rows = layers.tightened[layer]
                columns.update(own_columns)
                rows.update(own_rows)
        return self.base.with_columns(columns).with_rows(rows)

    def value(self, present: frozenset[str]) -> Fraction | None:
        """Best value for a set of layers; ``None`` if there is none."""
        if present not in self.values:
            self.values[present] = self._between(present) or self._solved(present)
        return self.values[present]

    def _between(self, present: frozenset[str]) -> Fraction | None:
        """Value that a set of fewer and a set of more layers share: then it is this one's, too."""
        fewer = {value for known, value in self.values.items() if known < present}
        more = {value for known, value in self.values.items() if known > present}
        shared = (fewer & more) - {None}
        return shared.pop() if shared else None

    def _solved(self, present: frozenset[str]) -> Fraction | None:
        problem = self.problem(present)
        answer: Answer | None = None
        for layer in present:
            # A layer less may have the same best point; its duals then prove it here too.
            less = self.found.get(present - {layer})
            if less is not None and less.status is Status.OPTIMAL and less.stays_best(problem):
                answer = less
                break
        else:
            answer = self.objective.best(self.optimiser, problem)
        self.found[present] = answer
        return answer.value if answer.status is Status.OPTIMAL else None


def _with_free_layers(layers: Layers) -> tuple[Problem, dict[str, tuple[str, ...]]]:
    """Network problem with columns that free each layer, and those columns by layer."""
    problem, bound = layers.network, layers.bound
    if problem is None or bound is None:
        return layers.elements, {}
    formulas = {name: composition(formula) for name, formula in bound.formulas}
    for element, line in element_matrix(layers.case, bound.growth_residual()).items():
        for name, atoms in line.items():
            formulas[name][element] = atoms
    carriers = {item.name: item.kind for item in bound.network.carriers}
    columns = list(problem.columns)
    entries = [list(row) for row in problem.matrix.rows]
    rows = list(problem.rows)
    freed: dict[str, list[str]] = {"pathways": [], "redox": [], "energy": []}
    conserved: dict[str, list[tuple[int, Fraction]]] = {}
    for i, row in enumerate(problem.rows):
        name = row.name.removesuffix(" balance")
        if name == row.name or name not in formulas:
            continue
        kind = carriers.get(name)
        if kind is CarrierKind.REDOX:
            place = problem.column(exchange_column(name))
            freed["redox"].append(exchange_column(name))
        else:
            place = len(columns)
            label = f"free {name}"
            columns.append(Column(name=label, bounds=FREE))
            entries[i].append((place, Fraction(1)))
            freed["energy" if kind is CarrierKind.ENERGY else "pathways"].append(label)
            if kind is CarrierKind.ENERGY:
                continue
        for element, atoms in formulas[name].items():
            conserved.setdefault(element, []).append((place, atoms))
    exchange_rows = {i for i, row in enumerate(rows) if row.name.endswith("of exchanged carriers")}
    for i in exchange_rows:
        rows[i] = Row(name=rows[i].name, layer=rows[i].layer, bounds=FREE)
    for element, line_entries in conserved.items():
        rows.append(Row(name=f"{element} of all that is freed", layer="pathways", bounds=SHUT))
        entries.append(line_entries)
    matrix = Matrix(tuple(tuple(row) for row in entries), len(columns))
    return (
        Problem(columns=tuple(columns), rows=tuple(rows), matrix=matrix),
        {layer: tuple(names) for layer, names in freed.items()},
    )


def _coalitions(
    optimiser: Optimiser,
    layers: Layers,
    objective: Objective,
    point: Mapping[str, Fraction],
) -> _Coalitions | str:
    """Coalitions of a case, or why it has none."""
    if layers.network is None:
        return "elements alone have one layer"
    if not objective.column.startswith(yield_column("")):
        return "the aim is an energy carrier, which has no meaning without the energy layer"
    return _Coalitions(optimiser, layers, objective, point)


def find_shares(
    optimiser: Optimiser,
    layers: Layers,
    objective: Objective,
    point: Mapping[str, Fraction],
) -> Shares:
    """Share of each layer in the whole loss, exact.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    layers : Layers
        The problems.
    objective : Objective
        The aim.
    point : mapping of str to Fraction
        Reconciled point.

    Returns
    -------
    Shares
        Shapley values, or why there are none.

    Notes
    -----
    Formula: share of i = sum over sets S without i of |S|! (n - |S| - 1)! / n! times the loss that
    i adds to S, n being the number of layers below ``elements``.
    """
    game = _coalitions(optimiser, layers, objective, point)
    if isinstance(game, str):
        return Shares(reason=game)
    players = game.players
    size = len(players)
    sign = 1 if objective.maximise else -1
    values: dict[frozenset[str], Fraction] = {}
    # From both ends to the middle: what lies between two equal values is settled without a solve.
    for count in sorted(range(size + 1), key=lambda count: min(count, size - count)):
        for members in combinations(players, count):
            value = game.value(frozenset(members))
            if value is None:
                who = " and ".join(("elements", *members))
                return Shares(reason=f"with {who} alone the aim has no best value")
            values[frozenset(members)] = value
    found = []
    for player in players:
        share = _ZERO
        for present, value in values.items():
            if player not in present:
                count = len(present)
                weight = Fraction(factorial(count) * factorial(size - count - 1), factorial(size))
                share += weight * sign * (value - values[present | {player}])
        found.append(LayerShare(player, share))
    return Shares(shares=tuple(found))


def ladder_in_order(
    optimiser: Optimiser,
    layers: Layers,
    objective: Objective,
    point: Mapping[str, Fraction],
    order: Sequence[str],
) -> tuple[tuple[str, Fraction | None], ...] | str:
    """Best value rung by rung in another order, or why there is none.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    layers : Layers
        The problems.
    objective : Objective
        The aim.
    point : mapping of str to Fraction
        Reconciled point.
    order : sequence of str
        Layers below ``elements`` in the order in which they are added.

    Returns
    -------
    tuple of (str, Fraction or None), or str
        Rung and best value [mol/mol basis].
    """
    game = _coalitions(optimiser, layers, objective, point)
    if isinstance(game, str):
        return game
    rungs = ["elements", *order]
    return tuple(
        (rung, game.value(frozenset(rungs[1 : place + 1]))) for place, rung in enumerate(rungs)
    )
