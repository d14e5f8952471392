"""Audit rules: each fires where it should, and only there."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from yieldnet.audit import rules
from yieldnet.foundation.findings import Findings, Severity
from yieldnet.model.binding import bind

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.network import Network

    BoundOf = Callable[[str], tuple[BoundNetwork, Findings]]

HEAD = """
network: Small
parameters: {po: {value: 1.5, low: 1, high: 2, unit: mol/mol}}
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
crossing: {in: [glucose, oxygen], out: [lactate], either: [water, carbon dioxide]}
reactions:
  glycolysis: glucose <-> 2 pyruvate + 2 NADH + 2 ATP
  lactate dehydrogenase: pyruvate + NADH <-> lactate
  respiration: NADH + 1/2 oxygen -> water + (po) ATP
  burning: pyruvate + ? water -> ? carbon dioxide + ? NADH
"""
GROWTH = """growth:
  biomass: {formula: CH1.8O0.5N0.2, ash: 0.05}
  equation: 0.2 glucose + 0.2 ammonia + 2 ATP -> biomass + ? carbon dioxide + ? water + ? NADH
"""
GROWING = HEAD.replace("oxygen], out: [", "oxygen, ammonia], out: [biomass, ") + GROWTH
RULES = (
    rules.closure,
    rules.duplicates,
    rules.negative_coefficients,
    rules.one_sided_compounds,
    rules.parameter_ranges,
    rules.untouched_crossing,
    rules.unused_parameters,
)


@pytest.mark.parametrize("text", [HEAD, GROWING], ids=["no growth", "growth"])
@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.__name__)
def test_no_rule_fires_on_a_sound_network(
    bound_of: BoundOf, rule: Callable[[BoundNetwork], Findings], text: str
) -> None:
    bound, findings = bound_of(text)
    assert list(findings) == []
    assert list(rule(bound)) == []


def _told(bound_of: BoundOf, text: str, rule: Callable[[BoundNetwork], Findings]) -> Findings:
    bound, findings = bound_of(text)
    assert not findings.refused, findings.items
    return rule(bound)


# Closure -----------------------------------------------------------------------------------------


def test_a_reaction_that_does_not_close_shows_only_the_failing_elements(bound_of: BoundOf) -> None:
    text = HEAD.replace("pyruvate + NADH <-> lactate", "pyruvate <-> lactate")
    (finding,) = _told(bound_of, text, rules.closure)
    assert (finding.code, finding.severity) == ("YN401", Severity.ERROR)
    assert finding.message == ("'lactate dehydrogenase' does not close: 2 H too many on the right")
    assert (finding.left, finding.right) == ("left 4 H", "right 6 H")
    assert finding.where is not None
    assert finding.where.line == 10
    assert "1 NADH more on the left" in finding.hint
    # A slip of the pen is mended by an exchange: what is written twice was meant once.
    assert "lactate in place of pyruvate" in finding.hint


@pytest.mark.parametrize(
    ("equation", "message", "mend"),
    [
        ("glucose -> 2 lactate + water", "2 H too many, 1 O too many", "1 water less on the right"),
        ("glucose + water -> 2 lactate", "2 H too few, 1 O too few", "1 water less on the left"),
        ("glucose + 1/2 oxygen -> 2 lactate", "1 O too few on", "0.5 oxygen less on the left"),
        (
            "glucose -> lactate",
            "3 C too few, 6 H too few, 3 O too few",
            "1 lactate more on the right",
        ),
        ("glucose -> 2 pyruvate", "4 H too few", "2 lactate in place of 2 pyruvate"),
        (
            "glucose -> 2 carbon dioxide + lactate",
            "1 C too few, 6 H too few, 1 O too many",
            "No single compound would close it",
        ),
        (
            "glucose + 1/3 ammonia -> 2 lactate",
            "0.333333 N too few, 1 H too few",
            "0.333333 ammonia less on the left",
        ),
    ],
)
def test_the_compound_that_would_mend_it_is_named(
    bound_of: BoundOf, equation: str, message: str, mend: str
) -> None:
    text = HEAD.replace("oxygen], out", "oxygen, ammonia], out") + f"  it: {equation}\n"
    (finding,) = _told(bound_of, text, rules.closure)
    for words in message.split(", "):
        assert words in finding.message
    assert mend in finding.hint


def test_where_no_compound_of_the_network_helps_the_library_is_asked(bound_of: BoundOf) -> None:
    text = HEAD + "  it: pyruvate + NADH -> alanine + water\n"
    (finding,) = _told(bound_of, text, rules.closure)
    assert finding.hint.startswith("It would close with 1 ammonia more on the left")
    assert finding.hint.endswith(", which the network would have to know.")


@pytest.mark.parametrize(
    ("carbon_dioxide", "code", "severity"),
    [("0.2", "YN405", Severity.WARNING), ("0.200", "YN401", Severity.ERROR)],
)
def test_growth_may_be_off_within_its_written_digits_only(
    bound_of: BoundOf, carbon_dioxide: str, code: str, severity: Severity
) -> None:
    # 0.2 glucose would close exactly; 0.201 brings 0.006 C. The digits of 0.201 allow 0.003 C,
    # those of 0.2 carbon dioxide 0.05 C, those of 0.200 only 0.0005 C.
    text = GROWING.replace(
        "0.2 glucose + 0.2 ammonia + 2 ATP -> biomass + ? carbon dioxide + ? water + ? NADH",
        "0.201 glucose + 0.2 ammonia + 2 ATP"
        f" -> biomass + {carbon_dioxide} carbon dioxide + 0.3 water + 0.3 NADH",
    )
    (finding,) = _told(bound_of, text, rules.closure)
    assert (finding.code, finding.severity) == (code, severity)
    assert "0.006 C too few, 0.012 H too few, 0.006 O too few" in finding.message
    assert finding.left == "left 1.206 C 3.012 H 1.206 O"
    assert finding.right == "right 1.2 C 3 H 1.2 O"


# Compounds ---------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("addition", "message"),
    [
        ("  it: pyruvate -> acetaldehyde + carbon dioxide\n", "'acetaldehyde' is only made"),
        ("  it: acetaldehyde + carbon dioxide -> pyruvate\n", "'acetaldehyde' is only used"),
    ],
)
def test_a_compound_only_made_or_only_used(bound_of: BoundOf, addition: str, message: str) -> None:
    (finding,) = _told(bound_of, HEAD + addition, rules.one_sided_compounds)
    assert (finding.code, finding.severity) == ("YN406", Severity.WARNING)
    assert message in finding.message
    assert finding.where is not None
    assert finding.where.line == HEAD.count("\n") + 1


def test_a_compound_of_a_reversible_reaction_is_made_and_used(bound_of: BoundOf) -> None:
    text = HEAD + "  it: pyruvate <-> acetaldehyde + carbon dioxide\n"
    assert list(_told(bound_of, text, rules.one_sided_compounds)) == []


def test_an_energy_carrier_may_be_only_made_and_a_redox_carrier_not(bound_of: BoundOf) -> None:
    only_made = HEAD.replace("glucose <->", "glucose ->")
    assert list(_told(bound_of, only_made, rules.one_sided_compounds)) == []
    text = only_made.replace("+ NADH <->", "<->").replace("NADH + 1/2 oxygen", "H2 + 1/2 oxygen")
    text = text.replace("reactions:", "compounds: {H2: H2}\nreactions:")
    found = [item.message for item in _told(bound_of, text, rules.one_sided_compounds)]
    assert "'NADH' is only made, so its reactions stand still" in found


def test_an_energy_carrier_that_is_only_used(bound_of: BoundOf) -> None:
    text = HEAD.replace(" + 2 ATP", "").replace(" + (po) ATP", "") + "  it: pyruvate + ATP -> x\n"
    text = text.replace("reactions:", "compounds: {x: C3H4O3}\nreactions:")
    found = [item.message for item in _told(bound_of, text, rules.one_sided_compounds)]
    assert found[0] == "'x' is only made, so its reactions stand still"
    assert found[1] == "'ATP' is only used, so its reactions stand still"


@pytest.mark.parametrize(
    ("old", "new", "line"),
    [
        ("carriers:", "compounds:\n  spare: C\ncarriers:", 5),
        ("  NADH: {", "  NADPH: {kind: redox, formula: H2}\n  NADH: {", 6),
    ],
)
def test_what_takes_part_in_no_reaction(bound_of: BoundOf, old: str, new: str, line: int) -> None:
    text = HEAD.replace(old, new)
    (finding,) = _told(bound_of, text, rules.one_sided_compounds)
    assert finding.code == "YN406"
    assert "takes part in no reaction" in finding.message
    assert finding.where is not None
    assert finding.where.line == line


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (
            "in: [glucose",
            "in: [ammonia, glucose",
            "'ammonia' may cross, and no reaction touches it",
        ),
        ("out: [lactate", "out: [ethanol, lactate", "'ethanol' may cross, and no reaction"),
        (
            "in: [glucose, oxygen], out: [lactate",
            "in: [glucose], out: [oxygen, lactate",
            "'oxygen' may leave the cell, and no reaction makes it",
        ),
        (
            "pyruvate + NADH <-> lactate",
            "pyruvate + NADH -> lactate\n  x: 2 lactate <-> glucose",
            "",
        ),
    ],
)
def test_a_crossing_compound_that_nothing_moves(
    bound_of: BoundOf, old: str, new: str, message: str
) -> None:
    found = list(_told(bound_of, HEAD.replace(old, new), rules.untouched_crossing))
    assert [item.code for item in found] == ["YN410"] * bool(message)
    assert message in "".join(item.message for item in found)


def test_a_compound_that_may_enter_and_is_only_made(bound_of: BoundOf) -> None:
    text = HEAD.replace("in: [glucose", "in: [ethanol, glucose")
    text += "  it: pyruvate + NADH -> ethanol + carbon dioxide\n"
    (finding,) = _told(bound_of, text, rules.untouched_crossing)
    assert finding.message == "'ethanol' may enter the cell, and no reaction uses it"


# Duplicates --------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("addition", "severity"),
    [
        ("  it: NADH + 1/2 oxygen -> water + 1.5 ATP\n", Severity.WARNING),
        ("  it: 2 NADH + oxygen -> 2 water + 3 ATP\n", Severity.WARNING),
        ("  it: lactate <-> pyruvate + NADH\n", Severity.WARNING),
        ("  it: lactate -> pyruvate + NADH\n", Severity.WARNING),
        ("  it: NADH + 1/2 oxygen -> water\n", None),
        # The other direction of a one-way step is a step of its own.
        ("  it: water + 1.5 ATP -> NADH + 1/2 oxygen\n", None),
        # Something that cancels to nothing is like nothing.
        ("  it: water -> water\n  that: lactate -> lactate\n", None),
    ],
)
def test_a_reaction_written_twice(
    bound_of: BoundOf, addition: str, severity: Severity | None
) -> None:
    found = list(_told(bound_of, HEAD + addition, rules.duplicates))
    assert [item.severity for item in found] == [severity] * (severity is not None)
    assert all(item.code == "YN409" for item in found)


def test_two_of_one_group_fall_together_and_are_a_note(bound_of: BoundOf) -> None:
    text = HEAD + (
        "  one: {equation: 'lactate -> 2 pyruvate', group: both}\n"
        "  two: {equation: '1/2 lactate -> pyruvate', group: both}\n"
    )
    (finding,) = _told(bound_of, text, rules.duplicates)
    assert finding.severity is Severity.NOTE
    assert finding.message == "'two' does the same as 'one'"
    assert finding.left == "'one' at line 13"
    assert finding.hint == "Both fall with their group."


# Parameters --------------------------------------------------------------------------------------


def test_a_negative_bare_parameter_is_refused_wherever_it_stands(
    network_of: Callable[[str], Network],
) -> None:
    network = network_of(GROWING.replace("2 ATP -> biomass", "(po) ATP -> biomass"))
    bound, _ = bind(network, {"po": Fraction(-1, 2)})
    found = list(rules.negative_coefficients(bound))
    assert [item.code for item in found] == ["YN210", "YN210"]
    assert found[0].message == (
        "parameter 'po' is -1/2, so the coefficient of 'ATP' in 'respiration' is negative"
    )
    assert "'growth'" in found[1].message


def test_a_negative_value_inside_an_expression_may_be_meant(
    network_of: Callable[[str], Network],
) -> None:
    bound, _ = bind(network_of(HEAD.replace("(po)", "(po + 2)")), {"po": Fraction(-1)})
    assert list(rules.negative_coefficients(bound)) == []


def test_an_unused_parameter(bound_of: BoundOf) -> None:
    (finding,) = _told(bound_of, HEAD.replace("(po) ATP", "1.5 ATP"), rules.unused_parameters)
    assert (finding.code, finding.severity) == ("YN411", Severity.WARNING)
    assert "'po'" in finding.message


def test_a_parameter_used_by_growth_alone_is_used(bound_of: BoundOf) -> None:
    text = GROWING.replace("(po) ATP", "1.5 ATP").replace("2 ATP -> biomass", "(po) ATP -> biomass")
    assert list(_told(bound_of, text, rules.unused_parameters)) == []


@pytest.mark.parametrize(
    ("value", "right"),
    [
        (Fraction(1, 2), "low 1 mol/mol"),
        (Fraction(5, 2), "high 2 mol/mol"),
        (Fraction(1), ""),
        (Fraction(2), ""),
    ],
)
def test_a_parameter_outside_its_own_range(
    network_of: Callable[[str], Network], value: Fraction, right: str
) -> None:
    bound, _ = bind(network_of(HEAD), {"po": value})
    found = list(rules.parameter_ranges(bound))
    assert [item.right for item in found] == ([right] if right else [])
    assert all((item.code, item.left) == ("YN412", f"value {float(value):g}") for item in found)


# Growth ------------------------------------------------------------------------------------------


def test_what_growth_costs_is_told_in_three_ways(bound_of: BoundOf) -> None:
    bound, _ = bound_of(GROWING)
    (finding,) = rules.growth_energy(bound)
    assert (finding.code, finding.severity) == ("YN416", Severity.NOTE)
    # 2 ATP per C-mol; 24.6263/0.95 = 25.92 g, so 77.2 mmol/g and 12.96 g/mol.
    assert "2 mol ATP per C-mol biomass, 77.2 mmol per g" in finding.message
    assert "13 g biomass per mol ATP" in finding.left


@pytest.mark.parametrize(
    "text",
    [HEAD, GROWING.replace(" + 2 ATP -> biomass", " -> biomass")],
    ids=["no growth", "growth without ATP"],
)
def test_without_growth_or_without_its_cost_there_is_nothing_to_tell(
    bound_of: BoundOf, text: str
) -> None:
    bound, _ = bound_of(text)
    assert list(rules.growth_energy(bound)) == []
