"""What the cell would do: at most growth, at most product, and what growth guarantees."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.optimum.problem import SHUT, Bounds
from yieldnet.optimum.proof import Status

if TYPE_CHECKING:
    from yieldnet.optimum.problem import Problem
    from yieldnet.studies.setting import Setting

__all__ = ["Behaviour", "Coupling", "behaviour"]


class Coupling(StrEnum):
    """Whether growth makes product."""

    NONE = "none"
    AT_HIGH_GROWTH = "only at high growth"
    ALWAYS = "always"


@dataclass(frozen=True, slots=True, kw_only=True)
class Behaviour:
    """Product and biomass at the ends of what the cell can do.

    Parameters
    ----------
    most_biomass : Fraction or None
        Most biomass; ``None`` without growth or without a bound [mol/mol basis].
    product_at_most_growth : Fraction or None
        Most product at most biomass [mol/mol basis].
    guaranteed : Fraction or None
        Least product at most biomass [mol/mol basis].
    most_product : Fraction or None
        Most product [mol/mol basis].
    biomass_at_most_product : Fraction or None
        Most biomass at most product [mol/mol basis].
    coupling : Coupling or None
        Whether growth makes product; ``None`` without growth.
    feasible : bool
        Whether the cell can take up the basis at all.
    """

    most_biomass: Fraction | None = None
    product_at_most_growth: Fraction | None = None
    guaranteed: Fraction | None = None
    most_product: Fraction | None = None
    biomass_at_most_product: Fraction | None = None
    coupling: Coupling | None = None
    feasible: bool = True


def behaviour(setting: Setting, problem: Problem) -> Behaviour:
    """Behaviour of a cell whose problem is given, exact.

    Parameters
    ----------
    setting : Setting
        Product, biomass, optimiser.
    problem : Problem
        The problem of the setting, perhaps with more switched off.

    Returns
    -------
    Behaviour
        Product and biomass [mol/mol basis].

    Notes
    -----
    The least product as a function of biomass is convex and starts at no growth. So growth always
    makes product if the least product is positive without growth, or rises from there at once; it
    does so only at high growth if the guaranteed product is positive all the same.
    """
    optimiser = setting.optimiser
    product = setting.product_objective()
    top = optimiser.optimise(problem, product)
    if top.status is Status.INFEASIBLE:
        return Behaviour(feasible=False)
    most_product = top.value if top.status is Status.OPTIMAL else None
    growth = setting.biomass_objective()
    if not growth:
        return Behaviour(most_product=most_product)
    biomass_at_top = None
    if top.status is Status.OPTIMAL:
        beside = optimiser.optimise(top.optimal_face(), growth)
        biomass_at_top = beside.value if beside.status is Status.OPTIMAL else None
    grown = optimiser.optimise(problem, growth)
    if grown.status is not Status.OPTIMAL:
        return Behaviour(most_product=most_product, biomass_at_most_product=biomass_at_top)
    face = grown.optimal_face()
    most, least = (optimiser.optimise(face, product, maximise) for maximise in (True, False))
    guaranteed = least.value if least.status is Status.OPTIMAL else None
    return Behaviour(
        most_biomass=grown.value,
        product_at_most_growth=most.value if most.status is Status.OPTIMAL else None,
        guaranteed=guaranteed,
        most_product=most_product,
        biomass_at_most_product=biomass_at_top,
        coupling=_coupling(setting, problem, grown.value, guaranteed),
    )


def _coupling(
    setting: Setting, problem: Problem, most_biomass: Fraction, guaranteed: Fraction | None
) -> Coupling | None:
    if not most_biomass:
        return None
    if not guaranteed or guaranteed < 0:
        return Coupling.NONE
    # The least product per biomass over all growth: convex, so its infimum is the slope at no
    # growth where the least product starts at zero. Scale so that biomass is the basis.
    standing = problem.with_columns({setting.biomass_column: SHUT})
    product = setting.product_objective()
    least = setting.optimiser.optimise(standing, product, maximise=False)
    if least.status is Status.INFEASIBLE or (least.status is Status.OPTIMAL and least.value > 0):
        return Coupling.ALWAYS
    if least.status is not Status.OPTIMAL:
        return Coupling.AT_HIGH_GROWTH
    # Just above no growth: the direction of least product per biomass, keeping what is touched.
    slope = _first_slope(setting, problem, least.value)
    return Coupling.ALWAYS if slope > 0 else Coupling.AT_HIGH_GROWTH


def _first_slope(setting: Setting, problem: Problem, start: Fraction) -> Fraction:
    """Least product per biomass as growth begins; positive if product comes with any growth.

    By convexity it is positive exactly if no positive growth is possible with the product of no
    growth, so one more problem settles it.
    """
    column = problem.column(setting.product_column)
    held = problem.columns[column].bounds
    value = start * setting.product_sign
    if (held.low is not None and value < held.low) or (held.high is not None and value > held.high):
        return Fraction(1)
    kept = problem.with_columns({setting.product_column: Bounds(value, value)})
    answer = setting.optimiser.optimise(kept, setting.biomass_objective())
    grows = answer.status is Status.UNBOUNDED or (
        answer.status is Status.OPTIMAL and answer.value > 0
    )
    return Fraction(0) if grows else Fraction(1)
