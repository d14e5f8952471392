"""The layers: the elements problem and the network problem, and the bounds of every rung.

The network problem holds everything at once; a rung frees what lies below it. ATP is freed by a
surplus of either sign; redox carriers by exchanges that together carry no element and no charge, so
that they can turn into each other and never into nothing.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.elements import element_problem
from yieldnet.balance.statements import (
    add_coefficient_columns,
    add_statement_rows,
    with_demands,
    yield_column,
)
from yieldnet.model.binding import composition
from yieldnet.model.case import EnergySurplus
from yieldnet.model.network import BIOMASS, CarrierKind
from yieldnet.optimum.problem import FREE, MADE, SHUT, Bounds, ProblemBuilder, flux_bounds

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.balance.statements import Statements
    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem

__all__ = [
    "RUNGS",
    "Layers",
    "MaintenanceRow",
    "build_layers",
    "exchange_column",
    "flux_column",
    "maintenance_row",
    "off_entries",
    "surplus_column",
    "switch_kind",
    "switched_off",
]

RUNGS = ("elements", "measured", "demands", "pathways", "redox", "energy", "maintenance")
"""Rungs from the top of the ladder to its foot."""
_ZERO = Fraction(0)


def flux_column(reaction: str) -> str:
    """Name of the column that holds a reaction's flux per mol basis."""
    return f"flux of {reaction}"


def surplus_column(carrier: str) -> str:
    """Name of the column that holds what is made of an energy carrier beyond what is used."""
    return f"surplus of {carrier}"


def exchange_column(carrier: str) -> str:
    """Name of the column that lets a redox carrier turn into the others."""
    return f"exchange of {carrier}"


def switched_off(case: Case) -> dict[str, str]:
    """Reactions that strain and knock-outs switch off, with the entry that names each first."""
    off: dict[str, str] = {}
    for name, members in off_entries(case).items():
        for member in members:
            off.setdefault(member, name)
    return off


def off_entries(case: Case) -> dict[str, tuple[str, ...]]:
    """Entries of strain and knock-outs, each with the reactions it switches off."""
    network = case.network
    if network is None:
        return {}
    preset = network.strain(case.strain.name) if case.strain else None
    names = (*(preset.off if preset else ()), *(item.name for item in case.knock_outs))
    return {name: network.members(name) for name in names}


def switch_kind(case: Case, name: str) -> str:
    """``knock-out`` for an entry of the case, ``strain entry`` for one of its strain."""
    return "knock-out" if any(item.name == name for item in case.knock_outs) else "strain entry"


@dataclass(frozen=True, slots=True)
class MaintenanceRow:
    """ATP that must be left over.

    Parameters
    ----------
    carrier : str
        Energy carrier.
    constant : Fraction
        Per mol basis, whatever grows [mol/mol basis].
    per_biomass : Fraction
        Per mol biomass [mol/mol biomass].
    words : str
        How it was found.
    """

    carrier: str
    constant: Fraction
    per_biomass: Fraction
    words: str


def maintenance_row(case: Case) -> MaintenanceRow | None:
    """Maintenance per mol basis, or ``None`` if it cannot be told or there is none.

    Notes
    -----
    m/q_S at the written uptake q_S whenever it is given; else m/mu times the biomass coefficient
    at the written growth rate mu.
    """
    network = case.network
    if network is None or network.maintenance is None:
        return None
    rate = network.maintenance.rate_mol_per_gram_hour
    carrier = network.maintenance.carrier
    if case.substrate_uptake is not None:
        per_basis = rate / case.substrate_uptake.value
        return MaintenanceRow(carrier, per_basis, _ZERO, "maintenance / substrate uptake")
    if case.growth_rate is not None and case.coefficient(BIOMASS) is not None:
        mass = case.compound(BIOMASS).weight.molar_mass or _ZERO
        per_biomass = rate / case.growth_rate.value * mass
        return MaintenanceRow(carrier, _ZERO, per_biomass, "maintenance / growth rate")
    return None


@dataclass(frozen=True, slots=True, kw_only=True)
class Layers:
    """The two problems of a case, statements free, and what each rung adds.

    Parameters
    ----------
    case : Case
        The case.
    statements : Statements
        Its quantitative statements.
    elements : Problem
        Elements alone.
    network : Problem
        Everything; energy, redox and maintenance freed. ``None`` for elements alone.
    bound : BoundNetwork or None
        The network in numbers, all reactions.
    rungs : tuple of str
        Rungs that the case has.
    tightened : mapping of str to (mapping, mapping)
        Column and row bounds that each rung from ``redox`` on adds.
    growth_residual : mapping of str to Fraction
        Elements that one mol of growth makes from nothing within its written digits [mol/mol].
    """

    case: Case
    statements: Statements
    elements: Problem
    network: Problem | None
    bound: BoundNetwork | None
    rungs: tuple[str, ...]
    tightened: Mapping[str, tuple[Mapping[str, Bounds], Mapping[str, Bounds]]]
    growth_residual: Mapping[str, Fraction]

    def problem(self, rung: str) -> Problem:
        """Problem of a rung, demands in from their rung on, measured rows still free."""
        place = RUNGS.index(rung)
        if rung in ("elements", "measured"):
            return self.elements
        if rung == "demands":
            return with_demands(self.elements, self.statements)
        assert self.network is not None
        problem = with_demands(self.network, self.statements)
        for lower in RUNGS[RUNGS.index("redox") : place + 1]:
            if lower in self.rungs:
                columns, rows = self.tightened[lower]
                problem = problem.with_columns(columns).with_rows(rows)
        return problem

    @property
    def final(self) -> Problem:
        """All layers and demands, measured rows still free."""
        if self.network is None:
            return with_demands(self.elements, self.statements)
        return self.problem(self.rungs[-1])

    @property
    def elements_with_demands(self) -> Problem:
        """Elements and demands, measured rows still free."""
        return with_demands(self.elements, self.statements)

    @property
    def last_over_the_cell(self) -> str:
        """Last rung before ``pathways``."""
        return [rung for rung in self.rungs if RUNGS.index(rung) < RUNGS.index("pathways")][-1]


def build_layers(
    case: Case,
    statements: Statements,
    bound: BoundNetwork | None,
    growth_residual: Mapping[str, Fraction],
) -> Layers:
    """Problems of a case.

    Parameters
    ----------
    case : Case
        The case.
    statements : Statements
        Its quantitative statements.
    bound : BoundNetwork or None
        The network in numbers; ``None`` for elements alone.
    growth_residual : mapping of str to Fraction
        Elements that one mol of growth makes from nothing within its written digits.

    Returns
    -------
    Layers
        Both problems and the rungs.
    """
    rungs = ["elements"]
    rungs += ["measured"] if statements.measured else []
    rungs += ["demands"] if statements.demands else []
    elements = element_problem(case, statements, growth_residual)
    if bound is None:
        return Layers(
            case=case,
            statements=statements,
            elements=elements,
            network=None,
            bound=None,
            rungs=tuple(rungs),
            tightened={},
            growth_residual=growth_residual,
        )
    carriers = bound.network.carriers
    energy = [item.name for item in carriers if item.kind is CarrierKind.ENERGY]
    redox = [item for item in carriers if item.kind is CarrierKind.REDOX]
    maintenance = maintenance_row(case)
    builder = ProblemBuilder()
    add_coefficient_columns(builder, case)
    listed = {case.basis.name, *(item.name for item in case.coefficients)}
    for name, _ in bound.network.crossing:
        if name not in listed:
            builder.add_column(yield_column(name), SHUT)
    off = switched_off(case)
    for reaction in bound.reactions:
        open_bounds = flux_bounds(reaction.reversible)
        builder.add_column(
            flux_column(reaction.name), SHUT if reaction.name in off else open_bounds
        )
    for name in energy:
        builder.add_column(surplus_column(name), FREE)
    for item in redox:
        builder.add_column(exchange_column(item.name), FREE)
    _add_balances(builder, bound)
    _add_exchange_rows(builder, [(item.name, composition(item.formula)) for item in redox])
    if maintenance is not None:
        builder.add_row(
            "maintenance",
            "maintenance",
            FREE,
            {
                surplus_column(maintenance.carrier): Fraction(1),
                **(
                    {yield_column(BIOMASS): -maintenance.per_biomass}
                    if maintenance.per_biomass
                    else {}
                ),
            },
        )
    add_statement_rows(builder, case, statements)
    rungs.append("pathways")
    tightened: dict[str, tuple[Mapping[str, Bounds], Mapping[str, Bounds]]] = {}
    if redox:
        rungs.append("redox")
        tightened["redox"] = ({exchange_column(item.name): SHUT for item in redox}, {})
    if energy:
        rungs.append("energy")
        exact = case.energy_surplus is EnergySurplus.NONE
        spent = maintenance.carrier if maintenance else None
        tightened["energy"] = (
            {surplus_column(name): SHUT if exact and name != spent else MADE for name in energy},
            {},
        )
        if maintenance is not None:
            rungs.append("maintenance")
            need = maintenance.constant
            tightened["maintenance"] = (
                {},
                {"maintenance": Bounds(need, need if exact else None)},
            )
    return Layers(
        case=case,
        statements=statements,
        elements=elements,
        network=builder.build(),
        bound=bound,
        rungs=tuple(rungs),
        tightened=tightened,
        growth_residual=growth_residual,
    )


def _add_balances(builder: ProblemBuilder, bound: BoundNetwork) -> None:
    """Steady state of every compound and carrier: made by reactions = leaving the cell."""
    sums: dict[str, dict[str, Fraction]] = {}
    for reaction in bound.reactions:
        for name, amount in reaction.coefficients:
            sums.setdefault(name, {})[flux_column(reaction.name)] = amount
    for name, _ in bound.network.crossing:
        sums.setdefault(name, {})[yield_column(name)] = Fraction(-1)
    layer = {}
    for item in bound.network.carriers:
        if item.kind is CarrierKind.ENERGY:
            layer[item.name] = "energy"
            sums.setdefault(item.name, {})[surplus_column(item.name)] = Fraction(-1)
        else:
            layer[item.name] = "redox"
            sums.setdefault(item.name, {})[exchange_column(item.name)] = Fraction(1)
    for name, entries in sums.items():
        builder.add_row(f"{name} balance", layer.get(name, "pathways"), SHUT, entries)


def _add_exchange_rows(
    builder: ProblemBuilder, redox: list[tuple[str, dict[str, Fraction]]]
) -> None:
    """The exchanges of the redox carriers together carry no element and no charge."""
    conserved = dict.fromkeys(element for _, parts in redox for element in parts)
    for element in conserved:
        builder.add_row(
            f"{element} of exchanged carriers",
            "pathways",
            SHUT,
            {exchange_column(name): parts[element] for name, parts in redox if element in parts},
        )
