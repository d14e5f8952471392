"""Doubts about a case that only the solved problems can show."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.reconciled import reconciled_point
from yieldnet.balance.statements import GROWTH_OVER_UPTAKE, band
from yieldnet.foundation.exact import root_of_square
from yieldnet.foundation.findings import Findings, Severity
from yieldnet.model.case import AimDirection
from yieldnet.model.network import BIOMASS, GROWTH, Direction
from yieldnet.optimum.problem import flux_bounds
from yieldnet.optimum.proof import Status
from yieldnet.prediction.layers import flux_column, switched_off

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Optimiser
    from yieldnet.optimum.ranges import Range
    from yieldnet.prediction.layers import Layers

__all__ = [
    "beyond_the_best",
    "beyond_the_scope",
    "growth_conditions",
    "idle_switches",
    "moved_values",
    "standing_still",
]


def growth_conditions(case: Case) -> Findings:
    """A growth rate that ties nothing together, because biomass is not in the equation."""
    findings = Findings()
    if case.growth_rate is not None and case.coefficient(BIOMASS) is None:
        findings.add(
            "YN510",
            "a growth rate is given, and biomass is not in the overall equation",
            case.growth_rate.span,
            hint="Add '+ ? biomass' to the right side, or leave the growth rate out.",
        )
    return findings


def beyond_the_scope(case: Case) -> Findings:
    """A basis or an aim that the network was not written for, where it says what it is meant for.

    An aim at a compound that is taken up asks how much is needed, not for a product, and an aim at
    an energy carrier names no crossing compound; neither is judged.
    """
    findings = Findings()
    network, aim = case.network, case.aim
    if network is None or network.meant_for is None:
        return findings
    meant = network.meant_for
    way_out = (
        "Take a network that is meant for it ('yieldnet networks' lists those that ship), or check"
        f" that this one holds what {{}} needs and add it to '{{}}' under 'meant for' of"
        f" '{network.title}'."
    )
    # The basis is written where the coefficients of the equation are.
    equation = (item.span for item in case.coefficients if item.side is not Direction.EITHER)
    if case.basis.name not in meant.substrates:
        findings.add(
            "YN516",
            f"the network is not meant for the substrate {case.basis.name!r}",
            next(equation, case.span),
            left=f"basis {case.basis.name}",
            right=f"meant for the substrates {', '.join(meant.substrates)}",
            hint=way_out.format(case.basis.name, "substrates"),
            severity=Severity.WARNING,
        )
    coefficient = case.coefficient(aim.compound) if aim is not None else None
    if (
        aim is not None
        and coefficient is not None
        and coefficient.side is not Direction.CONSUMED
        and aim.compound not in meant.products
    ):
        findings.add(
            "YN516",
            f"the network is not meant for the product {aim.compound!r}",
            aim.span,
            left=f"aim {aim}",
            right=f"meant for the products {', '.join(meant.products)}",
            hint=way_out.format(aim.compound, "products"),
            severity=Severity.WARNING,
        )
    return findings


def standing_still(case: Case, filled: Mapping[str, Range]) -> Findings:
    """Maintenance told per biomass formed, in an answer that forms none."""
    findings = Findings()
    network = case.network
    if network is None or network.maintenance is None or case.growth_rate is None:
        return findings
    if case.substrate_uptake is not None or BIOMASS not in filled:
        return findings
    if filled[BIOMASS].high == 0:
        findings.add(
            "YN510",
            "the answer does not grow, so maintenance per growth rate is zero in it",
            case.growth_rate.span,
            hint="Give the substrate uptake: then maintenance is told per substrate.",
            severity=Severity.WARNING,
        )
    return findings


def beyond_the_best(layers: Layers, best: Fraction | None) -> Findings:
    """Measured values of the aim that are better than the best, beyond their band."""
    findings = Findings()
    aim = layers.case.aim
    if aim is None or best is None:
        return findings
    for item in layers.statements.set_aside:
        reach = band(item)
        assert reach.low is not None
        assert reach.high is not None
        most = aim.direction is AimDirection.MOST
        if reach.low > best if most else reach.high < best:
            findings.add(
                "YN606",
                f"{item.label} is better than the best that the case allows",
                item.span,
                left=f"measured {float(item.value):.4g} mol/mol",
                right=f"best {float(best):.4g} mol/mol",
                hint="Check this measurement, the others, and the reactions of the network.",
                severity=Severity.WARNING,
            )
    return findings


def moved_values(optimiser: Optimiser, layers: Layers, point: Mapping[str, Fraction]) -> Findings:
    """Measured values that the reconciled point had to move, and which layer moved them."""
    findings = Findings()
    statements = layers.statements
    targets = statements.pooled()
    moved = {
        name: (point[name] - target.value) / root_of_square(target.variance)
        for name, target in targets.items()
        if point[name] != target.value
    }
    if not moved:
        return findings
    by_elements = reconciled_point(optimiser, layers.elements_with_demands, layers.case, statements)
    for name, distance in moved.items():
        item = statements.of(name)[0]
        network_alone = by_elements is not None and by_elements[name] == targets[name].value
        # The growth relation has its place in 'conditions'; say so, since the row says 'biomass'.
        label = item.label if item.label == GROWTH_OVER_UPTAKE else f"measured {name}"
        findings.add(
            "YN603" if network_alone else "YN604",
            f"{label} is moved by {float(distance):+.2f} s.d."
            + (" by the network; the elements alone would not" if network_alone else ""),
            item.span,
            left=f"measured {float(targets[name].value):.4g} mol/mol",
            right=f"reconciled {float(point[name]):.4g} mol/mol",
            hint="Check the measurement"
            + (", the network and its parameters." if network_alone else "."),
            severity=Severity.WARNING if network_alone or abs(distance) > 1 else Severity.NOTE,
        )
    return findings


def idle_switches(optimiser: Optimiser, layers: Layers) -> Findings:
    """Knock-outs and strains that cannot change this case: nothing could flow there anyway."""
    findings = Findings()
    case, bound = layers.case, layers.bound
    network = case.network
    if bound is None or network is None:
        return findings
    off = switched_off(case)
    if not off:
        return findings
    ways = {item.name: flux_bounds(item.reversible) for item in bound.reactions}
    everything = layers.problem("pathways").with_columns(
        {flux_column(name): ways[name] for name in off if name in ways}
    )
    preset = network.strain(case.strain.name) if case.strain else None
    moving: set[str] = set()

    def can_move(name: str) -> bool:
        return any(
            _moves(optimiser, everything, member, moving) for member in network.members(name)
        )

    if preset is not None and not any(can_move(name) for name in preset.off):
        findings.add(
            "YN509",
            f"strain {preset.name!r} cannot change this case: nothing it switches off could run",
            case.strain.span if case.strain else None,
            hint="Check substrate and products, or leave the strain out.",
            severity=Severity.WARNING,
        )
    already = {
        member for name in (preset.off if preset else ()) for member in network.members(name)
    }
    for item in case.knock_outs:
        members = network.members(item.name)
        if all(member in already for member in members):
            reason = f"the strain already switches off {item.name!r}"
        elif item.name == GROWTH or can_move(item.name):
            continue
        else:
            reason = f"{item.name!r} could not run in this case anyway"
        findings.add(
            "YN509",
            f"knock-out without effect: {reason}",
            item.span,
            hint="Leave it out, or check that you meant it.",
            severity=Severity.WARNING,
        )
    return findings


def _moves(optimiser: Optimiser, problem: Problem, reaction: str, moving: set[str]) -> bool:
    if reaction in moving:
        return True
    column = flux_column(reaction)
    for maximise in (True, False):
        answer = optimiser.optimise(problem, {column: Fraction(1)}, maximise)
        if answer.status is Status.UNBOUNDED or (
            answer.status is Status.OPTIMAL and answer[column]
        ):
            moving.add(reaction)
            return True
    return False
