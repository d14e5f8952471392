"""Binding: parameters put in, every ``?`` solved, checked against sums done by hand."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from yieldnet.chemistry.formula import read_formula
from yieldnet.foundation.findings import Findings, Severity
from yieldnet.model.binding import CHARGE, bind, composition

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.network import Network

    BoundOf = Callable[[str], tuple[BoundNetwork, Findings]]

F = Fraction
HEAD = """
network: Small
parameters: {po: 1.5, none: 0}
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
compounds:
  Fe2: Fe+2
  Fe3: Fe+3
crossing:
  in: [glucose, oxygen, ammonia]
  out: [ethanol, lactate, urea]
  either: [water, carbon dioxide, H+, Fe2, Fe3]
reactions:
"""
GROWING = (
    HEAD.replace("out: [", "out: [biomass, ")
    + """  it: glucose -> 2 lactate
growth:
  biomass: {formula: CH1.8O0.5N0.2, ash: 0.05}
"""
)


def _one(bound_of: BoundOf, equation: str) -> tuple[dict[str, Fraction], Findings]:
    """Net coefficients of a single reaction."""
    bound, findings = bound_of(f"{HEAD}  it: '{equation}'\n")
    reaction = bound.reaction("it")
    return ({} if reaction is None else dict(reaction.coefficients)), findings


@pytest.mark.parametrize(
    ("equation", "net"),
    [
        # Written numbers and parameter expressions.
        ("glucose -> 2 lactate", {"glucose": -1, "lactate": 2}),
        (
            "NADH + 1/2 oxygen -> water + (2*po - 1) ATP",
            {"NADH": -1, "oxygen": F(-1, 2), "water": 1, "ATP": 2},
        ),
        # Carbon: 6 = 2*2 + x, so 2 CO2; hydrogen and oxygen agree.
        (
            "glucose -> 2 ethanol + ? carbon dioxide",
            {"glucose": -1, "ethanol": 2, "carbon dioxide": 2},
        ),
        # Burning glucose: C gives 6 CO2, H gives 6 water, O gives 12 + 6 - 6 = 12 O, 6 O2.
        (
            "glucose + ? oxygen -> ? carbon dioxide + ? water",
            {"glucose": -1, "oxygen": -6, "carbon dioxide": 6, "water": 6},
        ),
        # Charge decides: Fe+3 + e, the electron from H2 with two protons left.
        (
            "2 Fe3 + ? NADH -> 2 Fe2 + ? H+",
            {"Fe3": -2, "NADH": -1, "Fe2": 2, "H+": 2},
        ),
        # A compound on both sides is netted, and vanishes where it cancels.
        ("glucose + 2 water -> 2 lactate + 2 water", {"glucose": -1, "lactate": 2}),
        ("glucose + ATP -> 2 lactate + 3 ATP", {"glucose": -1, "ATP": 2, "lactate": 2}),
        # A ? that comes out as zero drops out.
        ("glucose -> 2 lactate + ? water", {"glucose": -1, "lactate": 2}),
    ],
)
def test_a_reaction_in_numbers(bound_of: BoundOf, equation: str, net: dict[str, Fraction]) -> None:
    found, findings = _one(bound_of, equation)
    assert found == net
    assert list(findings) == []


def test_which_numbers_were_solved_is_remembered(bound_of: BoundOf) -> None:
    bound, _ = bound_of(f"{HEAD}  it: glucose -> 2 ethanol + ? carbon dioxide\n")
    assert bound.reactions[0].written == (
        (-1, "glucose", F(1), False),
        (1, "ethanol", F(2), False),
        (1, "carbon dioxide", F(2), True),
    )


def test_a_negative_answer_moves_to_the_other_side_and_is_told(bound_of: BoundOf) -> None:
    # 2 lactate hold 6 C, 12 H, 6 O: from 2 ethanol (4 C) CO2 must come in, on the left.
    found, findings = _one(bound_of, "2 ethanol -> lactate + ? carbon dioxide + ? NADH + ? water")
    # C: 4 = 3 + x, x = 1. O: 2 = 3 + 2 + z, z = -3. H: 12 = 6 + 2y + 2z, y = 6.
    assert found == {"ethanol": -2, "lactate": 1, "carbon dioxide": 1, "NADH": 6, "water": -3}
    (finding,) = findings
    assert finding.code == "YN404"
    assert finding.severity is Severity.NOTE
    assert "'water' in 'it'" in finding.message
    assert (finding.left, finding.right) == ("written on the right", "3 on the left")


@pytest.mark.parametrize(
    ("equation", "elements"),
    [
        # Carbon asks for 2 CO2, oxygen for 3: either may be the wrong one.
        ("glucose + oxygen -> 2 ethanol + ? carbon dioxide", "C or O"),
        # C gives 6 CO2 and H 6 water, and O does not agree: any of the three may be wrong.
        ("glucose + oxygen -> ? carbon dioxide + ? water", "C or O or H"),
        # O gives 2 water, charge 2 H+, and 2 H are not 2 + 4.
        ("2 Fe3 + NADH + oxygen -> 2 Fe2 + ? H+ + ? water", "H or charge or O"),
        # N, C and H ask for 1 urea; O alone asks for 2, because water was left out.
        ("2 ammonia + carbon dioxide -> ? urea + NADH", "O"),
    ],
)
def test_without_a_solution_the_element_is_blamed(
    bound_of: BoundOf, equation: str, elements: str
) -> None:
    found, findings = _one(bound_of, equation)
    assert found == {}
    (finding,) = findings
    assert finding.code == "YN402"
    assert finding.message == f"no value of the ? closes {elements} in 'it'"
    assert "Give another compound a ?" in finding.hint
    assert ("all balances but O can be closed" in finding.hint) == (elements == "O")


@pytest.mark.parametrize(
    ("equation", "names"),
    [
        ("glucose -> ? lactate + ? ethanol + ? carbon dioxide", ("lactate", "ethanol")),
        ("glucose + ? water -> 2 lactate + ? NADH + ? oxygen", ("water", "NADH", "oxygen")),
        ("? glucose -> ? lactate", ("glucose", "lactate")),
    ],
)
def test_under_determined_unknowns_are_named(
    bound_of: BoundOf, equation: str, names: tuple[str, ...]
) -> None:
    found, findings = _one(bound_of, equation)
    assert found == {}
    (finding,) = findings
    assert finding.code == "YN403"
    assert all(repr(name) in finding.message for name in names)
    assert finding.hint == "Write a number for one of them."


def test_a_determined_unknown_is_not_among_the_loose_ones(bound_of: BoundOf) -> None:
    # The ammonia is fixed by nitrogen, whatever glucose and lactate do.
    bound, findings = bound_of(
        GROWING + "  equation: '? glucose + ? ammonia -> biomass + ? water + ? NADH + ? oxygen'\n"
    )
    assert bound.reaction("growth") is None
    (finding,) = findings
    assert finding.code == "YN403"
    assert "'ammonia'" not in finding.message
    assert "'glucose'" not in finding.message
    assert "'oxygen'" in finding.message


def test_a_token_cannot_be_unknown(bound_of: BoundOf) -> None:
    found, findings = _one(bound_of, "glucose -> 2 lactate + ? ATP")
    assert found == {}
    (finding,) = findings
    assert finding.code == "YN403"
    assert "'ATP' in 'it' cannot follow from elements" in finding.message


def test_a_division_by_zero_names_the_coefficient(bound_of: BoundOf) -> None:
    found, findings = _one(bound_of, "NADH + 1/2 oxygen -> water + (1/none) ATP")
    assert found == {}
    (finding,) = findings
    assert finding.code == "YN207"
    assert "(1/none) of 'ATP' in 'it'" in finding.message


@pytest.mark.parametrize("value", [F(2), F(3, 2), F(7, 3)])
def test_overrides_change_the_numbers_and_the_solved_ones_with_them(
    network_of: Callable[[str], Network], value: Fraction
) -> None:
    network = network_of(f"{HEAD}  it: (po) glucose -> ? carbon dioxide + ? NADH + ? oxygen\n")
    bound, findings = bind(network, {"po": value})
    reaction = bound.reaction("it")
    assert reaction is not None
    # 6 carbons leave with 12 oxygen atoms, of which the sugar brings 6.
    assert reaction.coefficients == (
        ("glucose", -value),
        ("carbon dioxide", 6 * value),
        ("NADH", 6 * value),
        ("oxygen", -3 * value),
    )
    assert [item.value for item in bound.network.parameters] == [value, F(0)]
    assert [item.code for item in findings] == ["YN404"]


def test_an_override_may_leave_an_unknown_without_a_solution(
    network_of: Callable[[str], Network],
) -> None:
    network = network_of(f"{HEAD}  it: glucose -> (po) ethanol + ? carbon dioxide\n")
    bound, findings = bind(network, {"po": F(2)})
    assert bound.reaction("it") is not None
    assert list(findings) == []
    bound, findings = bind(network)
    assert bound.reaction("it") is None
    assert [item.code for item in findings] == ["YN402"]


def test_an_override_of_an_unknown_parameter_is_our_mistake(
    network_of: Callable[[str], Network],
) -> None:
    with pytest.raises(KeyError, match="p_o"):
        bind(network_of(f"{HEAD}  it: glucose -> 2 lactate\n"), {"p_o": F(1)})


def test_a_row_that_no_unknown_can_change_is_left_to_the_closure_rule(bound_of: BoundOf) -> None:
    bound, findings = bound_of(f"{HEAD}  it: glucose + ammonia -> 2 ethanol + ? carbon dioxide\n")
    (reaction,) = bound.reactions
    assert list(findings) == []
    assert reaction.coefficient("carbon dioxide") == 2
    assert bound.residual(reaction) == {"N": F(-1), "H": F(-3)}


def test_growth_stands_last_and_makes_one_biomass(bound_of: BoundOf) -> None:
    bound, findings = bound_of(
        GROWING
        + "  equation: 0.2 glucose + ? ammonia + 2 ATP"
        + " -> biomass + ? carbon dioxide + ? water + ? NADH\n"
    )
    growth = bound.reactions[-1]
    assert growth.name == "growth"
    assert not growth.reversible
    # N: 1/5. C: 6/5 = 1 + 1/5. O: 6/5 = 1/2 + 2/5 + w, w = 3/10.
    # H: 12/5 + 3/5 = 9/5 + 2 w + 2 n, n = 3/10.
    assert dict(growth.coefficients) == {
        "glucose": F(-1, 5),
        "ammonia": F(-1, 5),
        "ATP": F(-2),
        "biomass": F(1),
        "carbon dioxide": F(1, 5),
        "water": F(3, 10),
        "NADH": F(3, 10),
    }
    assert bound.residual(growth) == {}
    assert list(findings) == []


def test_growth_per_gram_is_scaled_to_one_mol_of_biomass_with_ash(bound_of: BoundOf) -> None:
    bound, findings = bound_of(
        GROWING
        + "  per: g\n"
        + "  equation: 8 glucose + ? ammonia + 40 ATP"
        + " -> biomass + ? carbon dioxide + ? water + ? NADH\n"
    )
    # 1 mol CH1.8O0.5N0.2 weighs 24.6263 g, with 5 % ash 25.92 g; 1 g is 1/25.92 mol.
    weight = F("12.011") + F("1.8") * F("1.008") + F("0.5") * F("15.999") + F("0.2") * F("14.007")
    mass = weight / F("0.95")
    growth = bound.reactions[-1]
    assert growth.coefficient("biomass") == 1
    assert growth.coefficient("glucose") == -8 * mass / 1000
    assert growth.coefficient("ATP") == -40 * mass / 1000
    assert growth.coefficient("ammonia") == F(-1, 5)
    assert growth.coefficient("carbon dioxide") == 6 * 8 * mass / 1000 - 1
    assert bound.residual(growth) == {}
    assert list(findings) == []


def test_growth_may_be_off_within_the_digits_written(bound_of: BoundOf) -> None:
    bound, findings = bound_of(
        GROWING + "  equation: 0.167 glucose + 0.2 ammonia -> biomass + 0.5 water + 0.1 NADH\n"
    )
    growth = bound.reactions[-1]
    # C: 1 - 6*0.167 = -0.002. H: 1.8 + 1 + 0.2 - 12*0.167 - 0.6 = 0.396.
    # O: 0.5 + 0.5 - 6*0.167 = -0.002. N closes.
    assert bound.residual(growth) == {"C": F(-1, 500), "H": F(99, 250), "O": F(-1, 500)}
    # Half a unit of the last digit of each decimal, times its atoms.
    half, tenth = F(1, 2000), F(1, 20)
    assert dict(growth.slack) == {
        "C": 6 * half,
        "H": 12 * half + 3 * tenth + 2 * tenth + 2 * tenth,
        "O": 6 * half + tenth,
        "N": tenth,
    }
    assert list(findings) == []


def test_growth_that_uses_up_its_biomass_is_no_growth(bound_of: BoundOf) -> None:
    bound, findings = bound_of(GROWING + "  equation: 0.2 glucose + biomass -> biomass\n")
    assert bound.reaction("growth") is None
    assert [item.code for item in findings] == ["YN414"]


def test_a_bound_network_without_some_reactions(bound_of: BoundOf) -> None:
    bound, _ = bound_of(f"{HEAD}  it: glucose -> 2 lactate\n  that: NADH + 1/2 oxygen -> water\n")
    fewer = bound.without(frozenset({"it"}))
    assert [item.name for item in fewer.reactions] == ["that"]
    assert bound.reaction("it") is not None
    assert bound.reactions[0].coefficient("oxygen") == 0


def test_composition_counts_charge_as_one_more_element() -> None:
    assert composition(read_formula("HCO3-")) == {"H": 1, "C": 1, "O": 3, CHARGE: -1}
    assert composition(read_formula("H2O")) == {"H": 2, "O": 1}
