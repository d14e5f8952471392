"""Rules that solve a linear problem: energy from nothing, reactions that stand still."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

from yieldnet.audit import flux
from yieldnet.audit.audit import audit_network, refusing_rules
from yieldnet.foundation.findings import Findings, Severity
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.network import Network

    BoundOf = Callable[[str], tuple[BoundNetwork, Findings]]

HEAD = """
network: Small
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
crossing: {in: [glucose, oxygen], out: [lactate], either: [water, carbon dioxide]}
reactions:
  glycolysis: glucose -> 2 pyruvate + 2 NADH + 2 ATP
  lactate dehydrogenase: pyruvate + NADH <-> lactate
  respiration: NADH + 1/2 oxygen -> water + 1.5 ATP
  burning: pyruvate + 3 water -> 3 carbon dioxide + 5 NADH
"""
# Water splits into NADH and oxygen for less ATP than respiration gives.
LOOP = "  splitting: water + ATP -> NADH + 1/2 oxygen\n"
# A step with a pump that also runs for nothing, backwards.
BACKWARDS = "  pump: pyruvate + 2 ATP <-> pyruvate + ATP\n"


@pytest.fixture
def optimiser() -> Optimiser:
    return Optimiser(engine_named("glpk"))


def test_a_sound_network_makes_no_energy_from_nothing(
    bound_of: BoundOf, optimiser: Optimiser
) -> None:
    bound, _ = bound_of(HEAD)
    assert list(flux.energy_from_nothing(bound, optimiser)) == []
    assert list(flux.blocked_reactions(bound, optimiser)) == []


@pytest.mark.parametrize(
    ("addition", "loop", "made", "line"),
    [
        (LOOP, "respiration, splitting", "0.5 ATP a turn", 10),
        (BACKWARDS, "pump backwards", "1 ATP a turn", 12),
    ],
)
def test_a_loop_that_makes_energy_is_named(
    bound_of: BoundOf, optimiser: Optimiser, addition: str, loop: str, made: str, line: int
) -> None:
    bound, _ = bound_of(HEAD + addition)
    (finding,) = flux.energy_from_nothing(bound, optimiser)
    assert (finding.code, finding.severity) == ("YN408", Severity.ERROR)
    assert finding.message == f"ATP comes from nothing in the loop {loop}"
    assert finding.left.startswith(made)
    assert finding.where is not None
    assert finding.where.line == line


def test_redox_alone_can_leave_a_reaction_standing_still(
    bound_of: BoundOf, optimiser: Optimiser
) -> None:
    # Without burning, both NADH of glycolysis go into lactate and none is left to be respired.
    bound, _ = bound_of("".join(line for line in HEAD.splitlines(True) if "burning" not in line))
    found = list(flux.blocked_reactions(bound, optimiser))
    assert [item.message for item in found] == ["'respiration' can never carry flux"]


def test_a_loop_that_costs_energy_is_none(bound_of: BoundOf, optimiser: Optimiser) -> None:
    bound, _ = bound_of(HEAD + LOOP.replace("water + ATP", "water + 2 ATP"))
    assert list(flux.energy_from_nothing(bound, optimiser)) == []


def test_a_loop_that_only_spends_energy_is_a_note(bound_of: BoundOf, optimiser: Optimiser) -> None:
    bound, _ = bound_of(HEAD + "  waste: pyruvate + ATP -> pyruvate\n")
    (finding,) = flux.energy_for_nothing(bound, optimiser)
    assert (finding.code, finding.severity) == ("YN417", Severity.NOTE)
    assert finding.message == "ATP can be spent for nothing in the loop waste"
    assert finding.where is not None
    assert finding.where.line == 12
    sound, _ = bound_of(HEAD)
    assert list(flux.energy_for_nothing(sound, optimiser)) == []


@pytest.mark.parametrize(
    ("addition", "messages"),
    [
        ("", []),
        (
            "  exchange: NADH <-> NADPH\n",
            ["NADH can turn into NADPH at no cost", "NADPH can turn into NADH at no cost"],
        ),
        ("  exchange: NADH + 1/4 ATP -> NADPH\n", ["NADH can turn into NADPH for 0.25 ATP"]),
        ("  exchange: NADPH -> NADH + 1/2 ATP\n", ["NADPH can turn into NADH and makes 0.5 ATP"]),
    ],
)
def test_redox_carriers_that_turn_into_each_other_are_a_note(
    bound_of: BoundOf, optimiser: Optimiser, addition: str, messages: list[str]
) -> None:
    text = HEAD.replace("  NADH: {", "  NADPH: {kind: redox, formula: H2}\n  NADH: {")
    bound, _ = bound_of(text + "  oxidase: NADPH + 1/2 oxygen -> water\n" + addition)
    found = list(flux.tied_carriers(bound, optimiser))
    assert sorted(item.message for item in found) == sorted(messages)
    assert all((item.code, item.severity) == ("YN418", Severity.NOTE) for item in found)


def test_carriers_of_different_formulas_or_without_reactions_are_not_tied(
    bound_of: BoundOf, optimiser: Optimiser
) -> None:
    text = HEAD.replace(
        "  NADH: {",
        "  idle: {kind: redox, formula: H2}\n  ferredoxin: {kind: redox, formula: H4}\n  NADH: {",
    )
    bound, _ = bound_of(text + "  ferry: ferredoxin <-> 2 NADH\n")
    assert list(flux.tied_carriers(bound, optimiser)) == []


@pytest.mark.parametrize(
    ("addition", "names"),
    [
        ("  dead end: pyruvate -> acetaldehyde + carbon dioxide\n", ["dead end"]),
        ("  dead end: pyruvate <-> acetaldehyde + carbon dioxide\n", ["dead end"]),
        ("  only back: lactate <-> pyruvate + NADH\n", []),
    ],
)
def test_a_reaction_that_stands_still_is_named(
    bound_of: BoundOf, optimiser: Optimiser, addition: str, names: list[str]
) -> None:
    bound, _ = bound_of(HEAD + addition)
    found = list(flux.blocked_reactions(bound, optimiser))
    assert [item.message for item in found] == [f"{name!r} can never carry flux" for name in names]
    assert all((item.code, item.severity) == ("YN407", Severity.WARNING) for item in found)


def test_a_reaction_that_runs_backwards_only_does_not_stand_still(
    bound_of: BoundOf, optimiser: Optimiser
) -> None:
    text = HEAD.replace("lactate dehydrogenase: pyruvate + NADH <->", "x: pyruvate + NADH ->")
    bound, _ = bound_of(text + "  made backwards: lactate + water <-> pyruvate + NADH + water\n")
    assert list(flux.blocked_reactions(bound, optimiser)) == []


@pytest.mark.parametrize("engine", ["glpk", "optlang"])
def test_an_audit_gathers_all_rules_in_the_order_of_the_file(
    network_of: Callable[[str], Network], engine: str
) -> None:
    text = HEAD + LOOP + "  dead end: pyruvate -> acetaldehyde + water\n"
    result = audit_network(network_of(text), engine)
    assert [(item.code, item.where.line if item.where else 0) for item in result.findings] == [
        ("YN408", 10),
        ("YN401", 13),
        ("YN406", 13),
        ("YN407", 13),
    ]
    assert result.refused
    assert not result.clean


def test_an_audit_with_notes_alone_is_clean(network_of: Callable[[str], Network]) -> None:
    result = audit_network(network_of(HEAD))
    assert result.findings == ()
    assert result.clean
    assert not result.refused
    assert next(item.name for item in result.bound.reactions) == "glycolysis"


def test_warnings_alone_are_neither_clean_nor_refused(
    network_of: Callable[[str], Network],
) -> None:
    text = HEAD + "  dead end: pyruvate -> acetaldehyde + carbon dioxide\n"
    result = audit_network(network_of(text))
    assert {item.severity for item in result.findings} == {Severity.WARNING}
    assert not result.clean
    assert not result.refused


def test_a_prediction_needs_only_the_rules_that_refuse(
    network_of: Callable[[str], Network], optimiser: Optimiser
) -> None:
    doubtful = HEAD + "  dead end: pyruvate -> acetaldehyde + carbon dioxide\n"
    bound, findings = refusing_rules(network_of(doubtful), {}, optimiser)
    assert list(findings) == []
    assert len(bound.reactions) == 5
    _, findings = refusing_rules(network_of(HEAD + LOOP), {}, optimiser)
    assert [item.code for item in findings] == ["YN408"]
    # A loop is not looked for in a network whose reactions do not close.
    open_loop = HEAD + LOOP + "  it: glucose -> lactate\n"
    _, findings = refusing_rules(network_of(open_loop), {}, optimiser)
    assert [item.code for item in findings] == ["YN401"]


def test_an_unknown_engine_is_our_callers_mistake(network_of: Callable[[str], Network]) -> None:
    with pytest.raises(ValueError, match="engine 'abacus' is not known; known: glpk, optlang"):
        audit_network(network_of(HEAD), "abacus")
