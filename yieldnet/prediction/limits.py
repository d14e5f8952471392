"""What limits: how the aim changes as a balance or a statement is moved by a little."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from itertools import combinations
from typing import TYPE_CHECKING

from yieldnet.balance.statements import is_exact, kind_of
from yieldnet.model.network import CarrierKind
from yieldnet.optimum.slopes import slopes
from yieldnet.prediction.layers import maintenance_row

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.optimum.proof import Answer, Optimiser
    from yieldnet.prediction.layers import Layers

__all__ = ["Limit", "find_limits"]

_ONE = Fraction(1)


@dataclass(frozen=True, slots=True, kw_only=True)
class Limit:
    """Change of the aim per unit of a balance or statement.

    Parameters
    ----------
    kind : str
        ``carrier``, ``exchange``, ``measured``, ``demand`` or ``condition``.
    name : str
        Its name.
    gain : Fraction or None
        Change of the aim as there is more of it, signed [mol/mol basis per unit]; ``None`` if that
        is impossible.
    cost : Fraction or None
        Change of the aim as there is less of it, signed [mol/mol basis per unit].
    gain_until, cost_until : Fraction or None
        How far the slope holds [unit].
    unit : str
        Unit of the move.
    """

    kind: str
    name: str
    gain: Fraction | None
    cost: Fraction | None
    gain_until: Fraction | None
    cost_until: Fraction | None
    unit: str


def find_limits(optimiser: Optimiser, layers: Layers, best: Answer) -> tuple[Limit, ...]:
    """Gain and cost of every carrier, exchange between carriers and quantitative statement.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    layers : Layers
        The problems.
    best : Answer
        Proven optimum of the final problem at the reconciled point.

    Returns
    -------
    tuple of Limit
        Exact slopes over all optimal duals, in the order: carriers, exchanges, statements.
    """
    targets = [*_carriers(layers), *_statements(layers)]
    moves: list[Mapping[str, Fraction]] = []
    for _, _, move, _ in targets:
        moves += [move, {name: -amount for name, amount in move.items()}]
    found = slopes(optimiser, best, moves)
    return tuple(
        Limit(
            kind=kind,
            name=name,
            gain=found[2 * k].value,
            cost=found[2 * k + 1].value,
            gain_until=found[2 * k].until,
            cost_until=found[2 * k + 1].until,
            unit=unit,
        )
        for k, (kind, name, _, unit) in enumerate(targets)
    )


Target = tuple[str, str, "dict[str, Fraction]", str]


def _carriers(layers: Layers) -> list[Target]:
    bound = layers.bound
    if bound is None:
        return []
    # One mol more from outside: its balance may use one more than the reactions make.
    found: list[Target] = [
        ("carrier", item.name, {f"{item.name} balance": -_ONE}, "mol/mol")
        for item in bound.network.carriers
    ]
    redox = [item for item in bound.network.carriers if item.kind is CarrierKind.REDOX]
    for one, other in combinations(redox, 2):
        same = dict(one.formula.elements) == dict(other.formula.elements)
        if same and one.formula.charge == other.formula.charge:
            move = {f"{one.name} balance": _ONE, f"{other.name} balance": -_ONE}
            found.append(("exchange", f"{one.name} to {other.name}", move, "mol/mol"))
    return found


def _statements(layers: Layers) -> list[Target]:
    found: list[Target] = []
    statements = layers.statements
    for name in statements.measured_compounds():
        # Several values of one coefficient are held at one point: they move together.
        own = [item for item in statements.measured if item.compound == name]
        move = {item.label: own[0].factor for item in own}
        found.append((kind_of(own[0]), own[0].label, move, own[0].unit))
    aim = layers.case.aim.compound if layers.case.aim else ""
    for coefficient in layers.case.coefficients:
        if is_exact(coefficient) and coefficient.name != aim:
            label = f"written {coefficient.name}"
            found.append(("written", label, {label: _ONE}, "mol/mol"))
    for item in statements.demands:
        label = f"demand {item.compound}"
        found.append(("demand", label, {label: item.factor}, item.unit))
    row = maintenance_row(layers.case)
    network = layers.case.network
    if "maintenance" in layers.rungs and row is not None and row.constant:
        assert network is not None
        assert network.maintenance is not None
        one = row.constant / network.maintenance.written.value
        found.append(("condition", "maintenance", {"maintenance": one}, network.maintenance.unit))
    return found
