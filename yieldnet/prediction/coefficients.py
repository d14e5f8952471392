"""The table of coefficients: ranges by elements and by network, freedom, status."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.freedom import Freedom, coefficient_equations
from yieldnet.balance.statements import side_sign, with_bands, with_point, yield_column
from yieldnet.foundation.exact import eliminate, root_of_square
from yieldnet.optimum.hull import affine_hull
from yieldnet.optimum.ranges import Range, column_ranges
from yieldnet.prediction.result import CoefficientAnswer, CoefficientStatus, Reconciled

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.balance.freedom import CoefficientEquations
    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Answer, Optimiser
    from yieldnet.prediction.layers import Layers

__all__ = [
    "AllRanges",
    "Ranges",
    "answers",
    "find_ranges",
    "freedom_of",
    "layer_equations",
    "movements",
    "own_side",
]

Ranges = dict[str, Range]


@dataclass(frozen=True, slots=True, kw_only=True)
class AllRanges:
    """Ranges of all coefficients, each positive on its declared side.

    Parameters
    ----------
    elements, network : dict of str to Range
        Over the bands of the measured values.
    elements_at_point, network_at_point : dict of str to Range
        At the reconciled point.
    at_aim : dict of str to Range or None
        Over the optimal points of the last rung.
    """

    elements: Ranges
    network: Ranges | None
    elements_at_point: Ranges
    network_at_point: Ranges | None
    at_aim: Ranges | None

    @property
    def filled(self) -> Ranges:
        """Ranges of the filled-in equation: at the aim, else at the reconciled point."""
        return self.at_aim or self.network_at_point or self.elements_at_point


def own_side(case: Case, ranges: Mapping[str, Range]) -> Ranges:
    """Ranges of columns as ranges of coefficients, positive on the declared side."""
    return {
        item.name: ranges[yield_column(item.name)]
        if side_sign(item.side) > 0
        else ranges[yield_column(item.name)].turned()
        for item in case.coefficients
    }


def find_ranges(
    optimiser: Optimiser,
    layers: Layers,
    point: Mapping[str, Fraction],
    best: Answer | None,
) -> AllRanges:
    """Ranges of all coefficients over bands, at the reconciled point and at the aim.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    layers : Layers
        The problems.
    point : mapping of str to Fraction
        Reconciled point.
    best : Answer or None
        Proven optimum of the last rung at the reconciled point.

    Returns
    -------
    AllRanges
        The ranges.
    """
    case, statements = layers.case, layers.statements
    columns = [yield_column(item.name) for item in case.coefficients]

    def over(problem: Problem, known: tuple[Answer, ...] = ()) -> Ranges:
        found = column_ranges(optimiser, problem, columns, known)
        # A point that keeps everything is known here, so a range cannot fail to exist.
        assert found is not None
        return own_side(case, found)

    banded = any(item.sd for item in statements.measured)
    elements = layers.elements_with_demands
    elements_at_point = over(with_point(elements, statements, point))
    elements_range = over(with_bands(elements, statements)) if banded else elements_at_point
    if layers.network is None:
        at_aim = over(best.optimal_face(), (best,)) if best is not None else None
        return AllRanges(
            elements=elements_range,
            network=None,
            elements_at_point=elements_at_point,
            network_at_point=None,
            at_aim=at_aim,
        )
    known = () if best is None else (best,)
    final = layers.final
    network_at_point = over(with_point(final, statements, point), known)
    network_range = over(with_bands(final, statements), known) if banded else network_at_point
    return AllRanges(
        elements=elements_range,
        network=network_range,
        elements_at_point=elements_at_point,
        network_at_point=network_at_point,
        at_aim=None if best is None else over(best.optimal_face(), known),
    )


def layer_equations(layers: Layers) -> dict[str, CoefficientEquations]:
    """Equations between coefficients that the equalities of each rung imply."""
    found: dict[str, CoefficientEquations] = {}
    before: CoefficientEquations | None = None
    for rung in layers.rungs:
        columns, rows = layers.tightened.get(rung, ({}, {}))
        adds_equality = rung in ("elements", "pathways") or any(
            bounds.fixed for bounds in (*columns.values(), *rows.values())
        )
        if rung == "demands":
            adds_equality = any(item.low == item.high for item in layers.statements.demands)
        if before is None or adds_equality:
            before = coefficient_equations(layers.case, layers.problem(rung))
        found[rung] = before
    return found


def freedom_of(
    optimiser: Optimiser,
    layers: Layers,
    equations: Mapping[str, CoefficientEquations],
    point: Mapping[str, Fraction] | None,
) -> tuple[Freedom, ...]:
    """Degrees of freedom of each rung; measured coefficients are known from their rung on.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    layers : Layers
        The problems.
    equations : mapping of str to CoefficientEquations
        Equalities of each rung.
    point : mapping of str to Fraction or None
        Reconciled point; without one nothing is said of signs.

    Returns
    -------
    tuple of Freedom
        One a rung.
    """
    measured = layers.statements.measured_compounds()
    found: list[Freedom] = []
    below: int | None = None
    for rung in reversed(layers.rungs):
        known = () if rung == "elements" else measured
        free = equations[rung].free(known)
        in_fact = None
        if point is not None:
            # Points of a lower rung are points of this one: what they can do, this one can.
            in_fact = (
                free
                if below == free
                else _free_in_fact(optimiser, layers, rung, equations[rung], known, point)
            )
            below = in_fact
        found.append(
            Freedom(
                layer=rung,
                unknowns=layers.case.unknowns(),
                free=free,
                free_in_fact=in_fact,
            )
        )
    return tuple(reversed(found))


def _free_in_fact(
    optimiser: Optimiser,
    layers: Layers,
    rung: str,
    equations: CoefficientEquations,
    known: tuple[str, ...],
    point: Mapping[str, Fraction],
) -> int | None:
    """Dimension of the coefficients that a rung leaves, signs counted too."""
    problem = layers.problem(rung)
    if rung != "elements":
        problem = with_point(problem, layers.statements, point)
    columns = [yield_column(name) for name in equations.names]
    hull = affine_hull(optimiser, problem, columns, equations.with_known(known))
    return None if hull is None else hull.dimension


def movements(
    optimiser: Optimiser,
    layers: Layers,
    ranges: AllRanges,
    point: Mapping[str, Fraction],
    best: Answer | None,
) -> tuple[tuple[tuple[str, Fraction], ...], ...]:
    """Directions in which coefficients that are not unique move together.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    layers : Layers
        The problems.
    ranges : AllRanges
        Says which coefficients are not unique.
    point : mapping of str to Fraction
        Reconciled point.
    best : Answer or None
        Proven optimum of the last rung.

    Returns
    -------
    tuple of tuple of (str, Fraction)
        Independent directions, positive on the declared side; empty if all are unique.
    """
    loose = [item for item in layers.case.coefficients if not ranges.filled[item.name].single]
    if not loose:
        return ()
    problem = (
        best.optimal_face()
        if best is not None
        else with_point(layers.final, layers.statements, point)
    )
    hull = affine_hull(optimiser, problem, [yield_column(item.name) for item in loose])
    assert hull is not None
    form = eliminate(hull.directions, len(loose))
    return tuple(
        tuple(
            (item.name, side_sign(item.side) * move)
            for item, move in zip(loose, row, strict=True)
            if move
        )
        for row in form.rows
    )


def _redundant(layers: Layers, equations: Mapping[str, CoefficientEquations]) -> frozenset[str]:
    """Measured coefficients that the equalities of some layer tell without their own value."""
    statements = layers.statements
    measured = statements.measured_compounds()
    found = {
        name for name in measured if sum(item.compound == name for item in statements.measured) > 1
    }
    distinct = {id(item): item for item in equations.values()}.values()
    for name in measured:
        others = [other for other in measured if other != name]
        if any(name in item.calculable(others) for item in distinct):
            found.add(name)
    return frozenset(found)


def answers(
    layers: Layers,
    ranges: AllRanges,
    equations: Mapping[str, CoefficientEquations],
    point: Mapping[str, Fraction],
    aim_percent: Fraction | None,
) -> tuple[CoefficientAnswer, ...]:
    """All that is said of each coefficient.

    Parameters
    ----------
    layers : Layers
        The problems.
    ranges : AllRanges
        Ranges of all coefficients.
    equations : mapping of str to CoefficientEquations
        Equalities of each rung.
    point : mapping of str to Fraction
        Reconciled point.
    aim_percent : Fraction or None
        Last rung over last rung before ``pathways`` [-].

    Returns
    -------
    tuple of CoefficientAnswer
        One a coefficient.
    """
    case, statements = layers.case, layers.statements
    redundant = _redundant(layers, equations)
    calculable = equations["elements"].calculable(statements.measured_compounds())
    unknown = equations["elements"].names
    targets = statements.pooled()
    found = []
    for item in case.coefficients:
        name = item.name
        measurements = statements.of(name)
        set_aside = bool(measurements) and name not in point
        reconciled = None
        if name in point:
            target = targets.of(name)
            reconciled = Reconciled(
                value=point[name],
                mean=target.value if target else point[name],
                sd=root_of_square(target.variance) if target else None,
            )
        at_point = (ranges.network_at_point or ranges.elements_at_point)[name]
        if name in redundant:
            status = CoefficientStatus.RECONCILED
        elif name in point:
            status = CoefficientStatus.MEASURED
        elif name in calculable or name not in unknown:
            status = CoefficientStatus.FIXED_BY_ELEMENTS
        elif at_point.single:
            status = (
                CoefficientStatus.FIXED_BY_NETWORK
                if layers.network
                else CoefficientStatus.FIXED_BY_ELEMENTS
            )
        elif at_point.low is not None and at_point.high is not None:
            status = CoefficientStatus.BRACKETED
        else:
            status = CoefficientStatus.OPEN
        is_aim = case.aim is not None and case.aim.compound == name
        found.append(
            CoefficientAnswer(
                compound=name,
                side=item.side,
                weight=case.compound(name).weight,
                basis_weight=case.basis.weight,
                measurements=measurements,
                set_aside=set_aside,
                reconciled=reconciled,
                elements=ranges.elements[name],
                network=ranges.network[name] if ranges.network else None,
                at_aim=ranges.at_aim[name] if ranges.at_aim else None,
                percent=aim_percent if is_aim else _percent(ranges, name),
                status=status,
            )
        )
    return tuple(found)


def _percent(ranges: AllRanges, name: str) -> Fraction | None:
    """Highest by network over highest by elements, at the reconciled point."""
    if ranges.network_at_point is None:
        return None
    over, under = ranges.network_at_point[name].high, ranges.elements_at_point[name].high
    if over is None or under is None or over < 0 or under <= 0:
        return None
    return over / under
