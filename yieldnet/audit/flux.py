"""Rules that need a linear problem: energy from nothing, reactions that can never carry flux."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.findings import Findings, Severity
from yieldnet.model.network import CarrierKind
from yieldnet.optimum.problem import FREE, MADE, SHUT, Bounds, ProblemBuilder, crossing_bounds
from yieldnet.optimum.proof import Status

if TYPE_CHECKING:
    from yieldnet.model.binding import BoundNetwork
    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Optimiser

__all__ = [
    "blocked_reactions",
    "closed_network",
    "energy_for_nothing",
    "energy_from_nothing",
    "energy_loop",
    "tied_carriers",
]

_ZERO = Fraction(0)
_ONE = Fraction(1)


def closed_network(bound: BoundNetwork) -> Problem:
    """Steady state of a network with nothing crossing the cell boundary."""
    return _steady_state(bound, crossing_open=False, largest=None)


def energy_loop(optimiser: Optimiser, closed: Problem, carrier: str) -> dict[str, Fraction] | None:
    """Fluxes that make an energy carrier from nothing, or ``None`` if there are none.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    closed : Problem
        Steady state with nothing crossing.
    carrier : str
        Energy carrier.

    Returns
    -------
    dict of str to Fraction or None
        Direction in which the surplus grows without limit, by column.
    """
    answer = optimiser.optimise(closed, {f"surplus {carrier}": _ONE})
    return dict(answer.direction) if answer.status is Status.UNBOUNDED else None


def _steady_state(bound: BoundNetwork, crossing_open: bool, largest: Fraction | None) -> Problem:
    """Steady state of the network alone: fluxes, crossing rates, surplus of energy carriers."""
    builder = ProblemBuilder()
    sums: dict[str, dict[str, Fraction]] = {}
    for reaction in bound.reactions:
        least = None if reaction.reversible and largest is None else _ZERO
        if reaction.reversible and largest is not None:
            least = -largest
        builder.add_column(reaction.name, Bounds(least, largest))
        for name, amount in reaction.coefficients:
            sums.setdefault(name, {})[reaction.name] = amount
    for name, direction in bound.network.crossing:
        builder.add_column(
            f"crossing {name}", crossing_bounds(direction) if crossing_open else SHUT
        )
        sums.setdefault(name, {})[f"crossing {name}"] = -_ONE
    for item in bound.network.carriers:
        if item.kind is CarrierKind.ENERGY:
            builder.add_column(f"surplus {item.name}", MADE)
            sums.setdefault(item.name, {})[f"surplus {item.name}"] = -_ONE
    for name, entries in sums.items():
        builder.add_row(name, "pathways", SHUT, entries)
    return builder.build()


def energy_from_nothing(bound: BoundNetwork, optimiser: Optimiser) -> Findings:
    """Loops that make an energy carrier with nothing crossing the cell boundary."""
    findings = Findings()
    problem = closed_network(bound)
    for item in bound.network.carriers:
        if item.kind is not CarrierKind.ENERGY:
            continue
        fluxes = energy_loop(optimiser, problem, item.name)
        if fluxes is None:
            continue
        made = fluxes.get(f"surplus {item.name}", _ONE)
        loop = [
            f"{name}{' backwards' if fluxes[name] < 0 else ''}"
            for name in (reaction.name for reaction in bound.reactions)
            if fluxes.get(name)
        ]
        spans = [
            reaction.span
            for reaction in bound.reactions
            if fluxes.get(reaction.name) and reaction.span
        ]
        findings.add(
            "YN408",
            f"{item.name} comes from nothing in the loop " + ", ".join(loop),
            spans[0] if spans else None,
            left=f"{float(made):.3g} {item.name} a turn, nothing taken up",
            hint="Make one of these reactions one-way, or correct its ATP.",
        )
    return findings


def energy_for_nothing(bound: BoundNetwork, optimiser: Optimiser) -> Findings:
    """Loops that spend an energy carrier for nothing; they let any surplus vanish."""
    findings = Findings()
    closed = closed_network(bound)
    for item in bound.network.carriers:
        if item.kind is not CarrierKind.ENERGY:
            continue
        column = f"surplus {item.name}"
        problem = closed.with_columns({column: Bounds(-_ONE, _ZERO)})
        answer = optimiser.optimise(problem, {column: _ONE}, maximise=False)
        if answer.status is not Status.OPTIMAL or not answer.value:
            continue
        loop = [
            f"{reaction.name}{' backwards' if answer[reaction.name] < 0 else ''}"
            for reaction in bound.reactions
            if answer[reaction.name]
        ]
        spans = [
            reaction.span for reaction in bound.reactions if answer[reaction.name] and reaction.span
        ]
        findings.add(
            "YN417",
            f"{item.name} can be spent for nothing in the loop " + ", ".join(loop),
            spans[0] if spans else None,
            hint="With 'energy surplus: none' a case should knock one of these out.",
            severity=Severity.NOTE,
        )
    return findings


def tied_carriers(bound: BoundNetwork, optimiser: Optimiser) -> Findings:
    """Redox carriers that turn into each other with nothing crossing, and what that costs."""
    findings = Findings()
    redox = [item for item in bound.network.carriers if item.kind is CarrierKind.REDOX]
    energy = [item.name for item in bound.network.carriers if item.kind is CarrierKind.ENERGY]
    free = closed_network(bound).with_columns({f"surplus {name}": FREE for name in energy})
    for source in redox:
        for target in redox:
            same = dict(source.formula.elements) == dict(target.formula.elements)
            if source is target or not same or source.formula.charge != target.formula.charge:
                continue
            # The source's balance gains one mol, the target's must give one up.
            rows = {source.name: Bounds(-_ONE, -_ONE), target.name: Bounds(_ONE, _ONE)}
            if any(not _has_row(free, name) for name in rows):
                continue
            costs = {f"surplus {name}": _ONE for name in energy}
            answer = optimiser.optimise(free.with_rows(rows), costs)
            if answer.status is Status.INFEASIBLE:
                continue
            words = "at no cost"
            if answer.status is Status.OPTIMAL and answer.value < 0:
                words = f"for {float(-answer.value):.3g} {' and '.join(energy)}"
            elif answer.status is Status.OPTIMAL and answer.value > 0:
                words = f"and makes {float(answer.value):.3g} {' and '.join(energy)}"
            findings.add(
                "YN418",
                f"{source.name} can turn into {target.name} {words}",
                source.span,
                hint="Where that should not be, one of the reactions between them is too free.",
                severity=Severity.NOTE,
            )
    return findings


def _has_row(problem: Problem, name: str) -> bool:
    return any(row.name == name for row in problem.rows)


def blocked_reactions(bound: BoundNetwork, optimiser: Optimiser) -> Findings:
    """Reactions that can carry no flux at steady state, whatever crosses the boundary."""
    findings = Findings()
    problem = _steady_state(bound, crossing_open=True, largest=_ONE)
    moving: set[str] = set()
    for reaction in bound.reactions:
        if reaction.name in moving:
            continue
        for maximise in (True, False):
            answer = optimiser.optimise(problem, {reaction.name: _ONE}, maximise)
            if answer.status is Status.OPTIMAL:
                moving.update(item.name for item in bound.reactions if answer[item.name])
            if reaction.name in moving or not reaction.reversible:
                break
        if reaction.name not in moving:
            findings.add(
                "YN407",
                f"{reaction.name!r} can never carry flux",
                reaction.span,
                hint="Something it needs is never made, or something it makes never used.",
                severity=Severity.WARNING,
            )
    return findings
