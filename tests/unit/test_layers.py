"""Layers: which rungs there are, and what each adds to the problem of the network."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from yieldnet.balance.statements import statements_of, yield_column
from yieldnet.model.binding import bind
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.problem import FREE, Bounds
from yieldnet.optimum.proof import Optimiser
from yieldnet.prediction.layers import (
    Layers,
    MaintenanceRow,
    build_layers,
    exchange_column,
    flux_column,
    maintenance_row,
    off_entries,
    surplus_column,
    switch_kind,
    switched_off,
)

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.foundation.findings import Findings
    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem

    CaseOf = Callable[[str], tuple[Case | None, Findings]]
    LayersOf = Callable[..., Layers]

ZERO = Fraction(0)
SHUT = Bounds(ZERO, ZERO)
MADE = Bounds(ZERO, None)
CARRIERS = """
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
  ferredoxin: {kind: redox, formula: H4}
"""
NETWORK = """
network: Small
crossing:
  in: [glucose, oxygen, ammonia]
  out: [biomass, ethanol, lactate, hydrogen]
  either: [carbon dioxide, water]
reactions:
  glycolysis: glucose -> 2 pyruvate + 2 NADH + 2 ATP
  lactate dehydrogenase: pyruvate + NADH <-> lactate
  ethanol path: {equation: pyruvate + NADH -> ethanol + carbon dioxide, group: branch}
  burning: {equation: pyruvate + 3 water -> 3 carbon dioxide + 5 NADH, group: branch}
  respiration: NADH + 1/2 oxygen -> water + 2 ATP
  hydrogenase: ferredoxin -> 2 hydrogen
  growth path: pyruvate -> pyruvate in the cell
compounds: {pyruvate in the cell: C3H4O3}
strains:
  no branch: [branch]
growth:
  biomass: {formula: CH1.8O0.5N0.2, ash: 0.1}
  equation: 0.4 pyruvate + 0.2 ammonia + 2 ATP -> biomass + ? carbon dioxide + ? water + ? NADH
"""
KEPT = "maintenance: {ATP: 3 mmol/g/h}\n"
CASE = """
case: x
network: network.yaml
equation: glucose + ? oxygen + ? ammonia -> ? biomass + ? ethanol + ? lactate
either side: [carbon dioxide, water]
"""


@pytest.fixture
def case(case_of: CaseOf, tmp_path: Path) -> Callable[..., Case]:
    """Reads a case on the small network, with lines added to either."""

    def _case(text: str = "", network: str = NETWORK + CARRIERS) -> Case:
        (tmp_path / "network.yaml").write_text(network, "utf-8")
        case, findings = case_of(CASE + text)
        assert case is not None, findings.items
        return case

    return _case


def _layers(case: Case) -> Layers:
    assert case.network is not None
    bound, findings = bind(case.network, dict(case.parameters))
    assert not findings.refused
    return build_layers(case, statements_of(case), bound, bound.growth_residual())


def _bounds(problem: Problem, column: str) -> Bounds:
    return problem.columns[problem.column(column)].bounds


def _row(problem: Problem, name: str) -> dict[str, Fraction]:
    entries = problem.matrix.rows[problem.row(name)]
    return {problem.columns[j].name: value for j, value in entries}


@pytest.mark.parametrize(
    ("text", "network", "rungs"),
    [
        ("", NETWORK + CARRIERS, ("elements", "pathways", "redox", "energy")),
        (
            "measured: {ethanol: 1 ± 0.1}\ndemands: {lactate: at most 1}\n"
            "conditions: {substrate uptake: 5 mmol/g/h}\n",
            NETWORK + CARRIERS + KEPT,
            ("elements", "measured", "demands", "pathways", "redox", "energy", "maintenance"),
        ),
        # Maintenance that cannot be told has no rung.
        ("", NETWORK + CARRIERS + KEPT, ("elements", "pathways", "redox", "energy")),
        # The only measured value is that of the aim, and so set aside.
        (
            "measured: {ethanol: 1 ± 0.1}\naim: most ethanol\n",
            NETWORK + CARRIERS,
            ("elements", "pathways", "redox", "energy"),
        ),
    ],
)
def test_a_rung_is_there_only_if_there_is_something_on_it(
    case: Callable[..., Case], text: str, network: str, rungs: tuple[str, ...]
) -> None:
    layers = _layers(case(text, network))
    assert layers.rungs == rungs
    assert layers.last_over_the_cell == rungs[rungs.index("pathways") - 1]
    assert layers.final == layers.problem(rungs[-1])


def test_without_a_network_there_are_elements_only(case: Callable[..., Case]) -> None:
    question = case("demands: {lactate: at most 1}\n")
    layers = build_layers(question, statements_of(question), None, {})
    assert layers.network is None
    assert layers.rungs == ("elements", "demands")
    assert layers.final == layers.elements_with_demands == layers.problem("demands")
    place = layers.final.row("demand lactate")
    assert layers.final.rows[place].bounds == Bounds(None, Fraction(1))
    assert layers.problem("elements").rows[place].bounds == FREE


def test_compounds_that_the_equation_leaves_out_are_shut(case: Callable[..., Case]) -> None:
    final = _layers(case()).final
    assert _bounds(final, yield_column("hydrogen")) == SHUT
    assert _bounds(final, yield_column("glucose")) == Bounds(Fraction(-1), Fraction(-1))
    assert _bounds(final, yield_column("oxygen")) == Bounds(None, ZERO)
    assert _bounds(final, yield_column("ethanol")) == MADE
    assert _bounds(final, yield_column("water")) == FREE


def test_reactions_run_the_ways_they_are_written(case: Callable[..., Case]) -> None:
    final = _layers(case("strain: no branch\nknock-outs: [respiration]\n")).final
    assert _bounds(final, flux_column("glycolysis")) == MADE
    assert _bounds(final, flux_column("lactate dehydrogenase")) == FREE
    for name in ("ethanol path", "burning", "respiration"):
        assert _bounds(final, flux_column(name)) == SHUT


def test_what_switches_a_reaction_off(case: Callable[..., Case]) -> None:
    question = case("strain: no branch\nknock-outs: [respiration, burning]\n")
    assert off_entries(question) == {
        "branch": ("ethanol path", "burning"),
        "respiration": ("respiration",),
        "burning": ("burning",),
    }
    # A reaction that is off twice is off by the entry that comes first.
    assert switched_off(question) == {
        "ethanol path": "branch",
        "burning": "branch",
        "respiration": "respiration",
    }
    assert switch_kind(question, "respiration") == "knock-out"
    assert switch_kind(question, "branch") == "strain entry"
    assert switched_off(case()) == {}


def test_carriers_are_freed_above_their_rungs(case: Callable[..., Case]) -> None:
    layers = _layers(case())
    surplus, exchanges = surplus_column("ATP"), ("NADH", "ferredoxin")
    for rung, spare, exchange in (
        ("pathways", FREE, FREE),
        ("redox", FREE, SHUT),
        ("energy", MADE, SHUT),
    ):
        problem = layers.problem(rung)
        assert _bounds(problem, surplus) == spare
        for name in exchanges:
            assert _bounds(problem, exchange_column(name)) == exchange


def test_exchanged_carriers_carry_no_element_together(case: Callable[..., Case]) -> None:
    final = _layers(case()).final
    # H2 against H4: two of the one for one of the other.
    assert _row(final, "H of exchanged carriers") == {
        exchange_column("NADH"): Fraction(2),
        exchange_column("ferredoxin"): Fraction(4),
    }
    assert final.rows[final.row("H of exchanged carriers")].bounds == SHUT


def test_freed_carriers_turn_into_each_other_and_never_into_nothing(
    case: Callable[..., Case],
) -> None:
    # Without oxygen the NADH of burning can leave as lactate or ethanol only, whatever is freed.
    layers = _layers(case("demands: {oxygen: at most 0}\n"))
    optimiser = Optimiser(engine_named("glpk"))
    for rung in ("pathways", "redox"):
        best = optimiser.optimise(
            layers.problem(rung), {yield_column("carbon dioxide"): Fraction(1)}
        )
        # 24 electrons of glucose: 2 ethanol hold them all, and leave 2 carbon dioxide.
        assert best.value == 2


def test_balances_are_those_of_the_reactions(case: Callable[..., Case]) -> None:
    final = _layers(case()).final
    assert _row(final, "pyruvate balance") == {
        flux_column("glycolysis"): Fraction(2),
        flux_column("lactate dehydrogenase"): Fraction(-1),
        flux_column("ethanol path"): Fraction(-1),
        flux_column("burning"): Fraction(-1),
        flux_column("growth path"): Fraction(-1),
        flux_column("growth"): Fraction(-2, 5),
    }
    assert _row(final, "ethanol balance") == {
        flux_column("ethanol path"): Fraction(1),
        yield_column("ethanol"): Fraction(-1),
    }
    # 0.4 C3H4O3 + 0.2 NH3 to CH1.8O0.5N0.2: 0.2 carbon dioxide, 0.3 water, and -0.1 NADH: used.
    assert _row(final, "NADH balance")[flux_column("growth")] == Fraction(-1, 10)
    layer = {row.name: row.layer for row in final.rows}
    assert layer["pyruvate balance"] == layer["ethanol balance"] == "pathways"
    assert layer["NADH balance"] == layer["ferredoxin balance"] == "redox"
    assert layer["ATP balance"] == "energy"
    assert all(item.bounds == SHUT for item in final.rows if item.name.endswith(" balance"))


UPTAKE = "substrate uptake: 5 mmol/g/h"
RATE = "growth rate: 0.1 1/h"
MASS = Fraction(10, 9) * (
    Fraction("12.011")
    + Fraction("1.8") * Fraction("1.008")
    + Fraction("15.999") / 2
    + Fraction("14.007") / 5
)
"""One mol of biomass with a tenth of ash, abridged standard atomic weights of IUPAC [g/mol]."""


@pytest.mark.parametrize(
    ("conditions", "row"),
    [
        ((), None),
        # 3 mmol/g/h over 5 mmol/g/h.
        (
            (UPTAKE,),
            MaintenanceRow("ATP", Fraction(3, 5), ZERO, "maintenance / substrate uptake"),
        ),
        (
            (UPTAKE, RATE),
            MaintenanceRow("ATP", Fraction(3, 5), ZERO, "maintenance / substrate uptake"),
        ),
        # 0.003 mol/g/h over 0.1 1/h is 0.03 mol/g.
        (
            (RATE,),
            MaintenanceRow("ATP", ZERO, Fraction(3, 100) * MASS, "maintenance / growth rate"),
        ),
    ],
)
def test_maintenance_by_uptake_else_by_growth(
    case: Callable[..., Case], conditions: tuple[str, ...], row: MaintenanceRow | None
) -> None:
    text = f"conditions: {{{', '.join(conditions)}}}\n" if conditions else ""
    question = case(text, NETWORK + CARRIERS + KEPT)
    assert maintenance_row(question) == row
    layers = _layers(question)
    assert ("maintenance" in layers.rungs) is (row is not None)
    if row is None:
        return
    final, above = layers.final, layers.problem("energy")
    expected = {surplus_column("ATP"): Fraction(1), yield_column("biomass"): -row.per_biomass}
    place = final.row("maintenance")
    assert _row(final, "maintenance") == {name: x for name, x in expected.items() if x}
    assert final.rows[place].bounds == Bounds(row.constant, None)
    assert above.rows[place].bounds == FREE


def test_no_maintenance_where_the_network_tells_none(case: Callable[..., Case]) -> None:
    assert maintenance_row(case(f"conditions: {{{UPTAKE}}}\n")) is None


@pytest.mark.parametrize("conditions", ["", f"conditions: {{{UPTAKE}}}\n"])
def test_without_surplus_the_last_energy_rung_is_an_equality(
    case: Callable[..., Case], conditions: str
) -> None:
    layers = _layers(case("energy surplus: none\n" + conditions, NETWORK + CARRIERS + KEPT))
    surplus = surplus_column("ATP")
    if not conditions:
        assert layers.rungs[-1] == "energy"
        assert _bounds(layers.final, surplus) == SHUT
        return
    # What maintenance takes is not spare: the equality waits for its rung.
    need = Fraction(3, 5)
    assert _bounds(layers.problem("energy"), surplus) == MADE
    assert layers.final.rows[layers.final.row("maintenance")].bounds == Bounds(need, need)


def test_a_residual_of_growth_is_charged_to_biomass(case: Callable[..., Case]) -> None:
    question = case()
    residual = {"H": Fraction(1, 100)}
    layers = build_layers(question, statements_of(question), None, residual)
    row = _row(layers.elements, "H balance")
    assert row[yield_column("biomass")] == Fraction("1.8") - Fraction(1, 100)
    assert row[yield_column("ethanol")] == 6
