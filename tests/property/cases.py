"""Random cases on random networks; their measured values come from a feasible point, with noise."""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from random import Random
from typing import TYPE_CHECKING

from hypothesis import strategies as st

from tests.property.networks import (
    AMMONIA,
    ATP,
    CARBON_DIOXIDE,
    OXYGEN,
    WATER,
    random_network,
)
from yieldnet.balance.statements import side_sign, statements_of, yield_column
from yieldnet.foundation.exact import WrittenNumber, read_number
from yieldnet.model.binding import bind
from yieldnet.model.case import (
    Aim,
    AimDirection,
    Case,
    Condition,
    Demand,
    EnergySurplus,
    Measurement,
    Named,
    OverallCoefficient,
)
from yieldnet.model.equation import UNKNOWN, Equation, Term
from yieldnet.model.network import BIOMASS, Direction
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.prediction.layers import build_layers

if TYPE_CHECKING:
    from collections.abc import Mapping

    from hypothesis.strategies import SearchStrategy

    from yieldnet.model.network import Network
    from yieldnet.prediction.layers import Layers

__all__ = ["Wanted", "cases", "layers_of", "random_case"]

TRIES = 5
"""Networks that are tried for a case until one can be run at all [-]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Wanted:
    """What a random case may hold, for laws that hold under conditions.

    Parameters
    ----------
    measured : {"none", "exact", "any"}
        Measured values and conditions: none measured, exact ones only, or any.
    demands : bool
        Whether there may be demands.
    conditions : bool
        Whether there may be conditions, and so maintenance.
    """

    measured: str = "any"
    demands: bool = True
    conditions: bool = True


EVERYTHING = Wanted()


def cases(wanted: Wanted = EVERYTHING) -> SearchStrategy[Case]:
    """Random cases, each with its network; a failing one is made smaller by its size."""
    return st.builds(random_case, st.integers(4, 12), st.integers(0, 10**6), wanted=st.just(wanted))


def random_case(size: int, seed: int, wanted: Wanted = EVERYTHING) -> Case:
    """Case on a random network; its measured values come from a feasible point, with noise."""
    rng = Random(f"case {seed}")
    # Most random networks have nowhere to put their electrons: a few tries, and some stay so.
    for attempt in range(TRIES):
        case = _bare_case(rng, random_network(size, seed * TRIES + attempt), wanted)
        point = _feasible_point(rng, case)
        if point is not None or rng.random() < 0.3:
            break
    case = replace(case, title=f"size {size}, seed {seed}")
    if point is None:
        return case
    if wanted.conditions and BIOMASS in point and rng.random() < 0.5:
        case = replace(case, growth_rate=_growth_rate(rng, case, point[BIOMASS], wanted))
    if wanted.measured != "none":
        case = _with_measured(rng, case, point, wanted.measured == "any")
    if wanted.demands:
        case = _with_demands(rng, case, point)
    return case


def _bare_case(rng: Random, network: Network, wanted: Wanted) -> Case:
    compounds = {item.name: item for item in network.compounds}
    basis = compounds["compound 1"]
    listed = _listed(rng, network)
    uptake = None
    if wanted.conditions and rng.random() < 0.6:
        uptake = _condition(rng, Fraction(rng.randint(20, 90), 10_000), wanted)
    return Case(
        title="",
        network=network,
        equation=Equation(
            left=(Term(name=basis.name, coefficient=read_number("1")),),
            right=tuple(Term(name=item.name, coefficient=UNKNOWN) for item in listed),
        ),
        basis=basis,
        coefficients=listed,
        compounds=(basis, *(compounds[item.name] for item in listed)),
        strain=Named(name="mutant") if rng.random() < 0.3 else None,
        substrate_uptake=uptake,
        energy_surplus=EnergySurplus.NONE if rng.random() < 0.15 else EnergySurplus.LOST,
        knock_outs=_knock_outs(rng, network),
        aim=_aim(rng, network, listed),
    )


def _listed(rng: Random, network: Network) -> tuple[OverallCoefficient, ...]:
    """Coefficients of the overall equation; a few crossing compounds stay closed."""
    found = []
    for name, way in network.crossing:
        always = name in (CARBON_DIOXIDE, WATER, AMMONIA)
        likely = 0.4 if way is Direction.CONSUMED and name != OXYGEN else 0.85
        if name == "compound 1" or not (always or rng.random() < likely):
            continue
        if way is Direction.EITHER and rng.random() < 0.2 and name != WATER:
            way = rng.choice((Direction.PRODUCED, Direction.CONSUMED, Direction.EITHER))
        found.append(OverallCoefficient(name=name, side=way))
    return tuple(found)


def _aim(rng: Random, network: Network, listed: tuple[OverallCoefficient, ...]) -> Aim | None:
    if rng.random() < 0.05:
        return None
    if rng.random() < 0.06 and any(item.name == ATP for item in network.carriers):
        return Aim(direction=AimDirection.MOST, compound=ATP, is_energy=True)
    products = [item.name for item in listed if item.name.startswith("compound")]
    others = [item.name for item in listed]
    name = rng.choice(products if products and rng.random() < 0.75 else others)
    most = rng.random() < 0.75
    return Aim(direction=AimDirection.MOST if most else AimDirection.LEAST, compound=name)


def _knock_outs(rng: Random, network: Network) -> tuple[Named, ...]:
    if rng.random() < 0.75:
        return ()
    names = [item.name for item in network.reactions] + list(network.groups())
    return tuple(Named(name=name) for name in rng.sample(names, rng.randint(1, 2)))


def _condition(rng: Random, value: Fraction, wanted: Wanted) -> Condition:
    inexact = rng.random() < 0.7 and wanted.measured == "any"
    sd = value * Fraction(rng.randint(2, 8), 100) if inexact else None
    return Condition(value=value, sd=sd, text=str(value))


def _growth_rate(rng: Random, case: Case, biomass: Fraction, wanted: Wanted) -> Condition | None:
    """Growth rate that fits a biomass coefficient and the uptake, or any without an uptake."""
    if case.substrate_uptake is None:
        return _condition(rng, Fraction(rng.randint(5, 40), 100), wanted)
    mass = case.compound(BIOMASS).weight.molar_mass
    assert mass is not None
    value = biomass * mass * case.substrate_uptake.value
    return _condition(rng, value, wanted) if value else None


def layers_of(case: Case) -> Layers:
    """Problems of a case, whose network closes and need not be audited."""
    assert case.network is not None
    bound, findings = bind(case.network, dict(case.parameters))
    assert not findings.refused
    return build_layers(case, statements_of(case), bound, bound.growth_residual())


def _feasible_point(rng: Random, case: Case) -> dict[str, Fraction] | None:
    """Mean of a few corners of the final problem, each coefficient positive on its side."""
    problem = layers_of(case).final
    optimiser = Optimiser(engine_named("glpk"))
    corners = []
    for _ in range(3):
        objective = {
            yield_column(item.name): Fraction(rng.randint(-3, 3)) for item in case.coefficients
        }
        answer = optimiser.optimise(problem, objective)
        if answer.status is Status.UNBOUNDED:
            answer = optimiser.optimise(problem, {})
        if answer.status is Status.INFEASIBLE:
            return None
        corners.append(answer)
    return {
        item.name: side_sign(item.side)
        * sum((corner[yield_column(item.name)] for corner in corners), Fraction(0))
        / len(corners)
        for item in case.coefficients
    }


def _with_measured(rng: Random, case: Case, point: Mapping[str, Fraction], inexact: bool) -> Case:
    measured: list[Measurement] = []
    coefficients = list(case.coefficients)
    for place, item in enumerate(case.coefficients):
        chance = rng.random()
        if chance < 0.3:
            sd = None
            value = point[item.name]
            if inexact and rng.random() < 0.8:
                sd = max(abs(value) * Fraction(rng.randint(2, 10), 100), Fraction(1, 100))
                value += sd * Fraction(round(100 * rng.gauss(0, 1)), 100)
            measured.append(
                Measurement(
                    compound=item.name,
                    value=value,
                    sd=sd,
                    text=str(value),
                    label=f"measured {item.name}",
                )
            )
        elif chance < 0.36 and item.side is not Direction.EITHER and point[item.name]:
            coefficients[place] = replace(item, written=_written(rng, point[item.name], inexact))
    return replace(case, measured=tuple(measured), coefficients=tuple(coefficients))


def _written(rng: Random, value: Fraction, inexact: bool) -> WrittenNumber | None:
    """Coefficient as somebody would write it: a fraction, or a decimal of a few digits."""
    if not inexact or rng.random() < 0.3:
        return WrittenNumber(value, str(value))
    text = f"{float(value):.{rng.randint(1, 3)}f}"
    return read_number(text) if float(text) else None


def _with_demands(rng: Random, case: Case, point: Mapping[str, Fraction]) -> Case:
    demands = []
    for name, value in point.items():
        if rng.random() < 0.88:
            continue
        size = abs(value) + Fraction(1, 10)
        low, high = value - size * Fraction(rng.randint(-2, 9), 10), value + size / 2
        kind = rng.choice(("least", "most", "range"))
        demands.append(
            Demand(
                compound=name,
                low=None if kind == "most" else min(low, high),
                high=None if kind == "least" else high,
                text=kind,
            )
        )
    return replace(case, demands=tuple(demands))
