"""What an answer takes for granted, gathered so that it can be shown beside the numbers."""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.balance.statements import GROWTH_OVER_UPTAKE
from yieldnet.foundation.sourced import Assumption
from yieldnet.model.case import DEFAULT_YIELD_UNIT, EnergySurplus
from yieldnet.model.expression import Expression
from yieldnet.model.network import BIOMASS, CarrierKind
from yieldnet.prediction.layers import maintenance_row, switched_off

if TYPE_CHECKING:
    from yieldnet.balance.statements import Statements
    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.case import Case

__all__ = ["KEPT", "assumptions_of"]

KEPT = {
    "temperature": "the temperature is kept and not used here",
    "pH": "the pH is kept and not used here",
    "concentrations": "the concentrations are kept and not used here",
    "plant": "the section 'plant' is kept and not used here",
}
"""What balances and network do not look at, in words."""


def assumptions_of(
    case: Case, statements: Statements, bound: BoundNetwork | None
) -> tuple[Assumption, ...]:
    """Assumptions of a case, defaults that were used among them.

    Parameters
    ----------
    case : Case
        The case.
    statements : Statements
        Its quantitative statements.
    bound : BoundNetwork or None
        The network in numbers.

    Returns
    -------
    tuple of Assumption
        In the order: measurements, energy, network.
    """
    found: list[Assumption] = []
    for item in statements.measured:
        if item.sd is None:
            found.append(
                Assumption(text=f"{item.label} is exact", value=item.value, unit="mol/mol")
            )
        elif item.label == GROWTH_OVER_UPTAKE:
            found.append(
                Assumption(
                    text="biomass follows from growth rate / substrate uptake",
                    value=item.value,
                    unit="mol/mol",
                )
            )
    for item in statements.set_aside:
        found.append(
            Assumption(
                text=f"{item.label} is set aside, since {item.compound} is the aim",
                value=item.value,
                unit="mol/mol",
            )
        )
    if case.temperature is not None:
        found.append(
            Assumption(
                text=KEPT["temperature"],
                value=case.temperature.value,
                unit="degC",
            )
        )
    if case.ph is not None:
        found.append(Assumption(text=KEPT["pH"], value=case.ph.value))
    if case.concentrations:
        found.append(Assumption(text=KEPT["concentrations"]))
    if case.plant is not None:
        found.append(Assumption(text=KEPT["plant"]))
    bare = [f"measured {item.compound}" for item in case.measured if not item.unit_given]
    bare += [f"demand {item.compound}" for item in case.demands if not item.unit_given]
    if bare:
        found.append(
            Assumption(text=f"without a unit, so in {DEFAULT_YIELD_UNIT}: {', '.join(bare)}")
        )
    if case.coefficient(BIOMASS) is not None and not case.compound(BIOMASS).ash:
        found.append(Assumption(text="biomass has no ash given, so it weighs its formula alone"))
    if case.coefficient(BIOMASS) is not None and case.compound(BIOMASS).ash:
        biomass = case.compound(BIOMASS)
        found.append(
            Assumption(
                text=f"biomass is {biomass.formula}; its dry weight holds ash",
                value=biomass.ash,
                unit="g/g",
                source=biomass.about,
            )
        )
    if bound is not None:
        found.extend(_of_network(case, bound))
    return tuple(found)


def _of_network(case: Case, bound: BoundNetwork) -> list[Assumption]:
    found: list[Assumption] = []
    network = bound.network
    energy = [item.name for item in network.carriers if item.kind is CarrierKind.ENERGY]
    if energy:
        spare = f"spare {' and '.join(energy)} is lost"
        if case.energy_surplus is EnergySurplus.NONE:
            spare = f"all {' and '.join(energy)} made goes to growth and maintenance"
        by_default = "" if case.energy_surplus_given else " (default of 'energy surplus')"
        found.append(Assumption(text=spare + by_default))
    row = maintenance_row(case)
    if network.maintenance is not None:
        source = network.maintenance.source
        if row is None:
            found.append(
                Assumption(
                    text="maintenance is left out: neither substrate uptake nor growth rate"
                    " with biomass is given"
                )
            )
        elif row.constant:
            found.append(
                Assumption(
                    text=f"maintenance {row.carrier} from {row.words}",
                    value=row.constant,
                    unit="mol/mol basis",
                    source=source,
                )
            )
        else:
            found.append(
                Assumption(
                    text=f"maintenance {row.carrier} from {row.words}",
                    value=row.per_biomass,
                    unit="mol/mol biomass",
                    source=source,
                )
            )
    off = switched_off(case)
    used = {
        name
        for reaction in network.reactions
        if reaction.name not in off
        for _, term in reaction.equation.terms()
        if isinstance(term.coefficient, Expression)
        for name in term.coefficient.names()
    }
    if network.growth is not None and case.coefficient(BIOMASS) is not None:
        used |= {
            name
            for _, term in network.growth.equation.terms()
            if isinstance(term.coefficient, Expression)
            for name in term.coefficient.names()
        }
    chosen = network.parameter_set(case.parameter_set.name) if case.parameter_set else None
    if chosen is not None:
        about = f": {' '.join(chosen.about.split())}" if chosen.about else ""
        found.append(Assumption(text=f"parameter set '{chosen.name}'{about}", source=chosen.source))
    own = dict(case.parameters)
    of_the_set = dict(chosen.values) if chosen is not None else {}
    for parameter in network.parameters:
        if parameter.name not in used:
            continue
        here, source = "", parameter.source
        if parameter.name in own:
            here, source = " (set in the case)", ""
        elif chosen is not None and parameter.name in of_the_set:
            here, source = f" (parameter set '{chosen.name}')", chosen.source
        found.append(
            Assumption(
                text=f"parameter {parameter.name}{here}",
                value=parameter.value,
                unit=parameter.unit,
                source=source,
            )
        )
    listed = {item.name for item in case.compounds}
    closed = [name for name, _ in network.crossing if name not in listed]
    if closed:
        found.append(Assumption(text="not in the equation, so zero: " + ", ".join(closed)))
    return found
