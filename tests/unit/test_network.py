"""Networks as values: look-ups, changed copies, weights."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from yieldnet.chemistry.formula import read_formula
from yieldnet.model.network import GROWTH, Compound, Direction

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.model.network import Network

TEXT = """
network: Small
parameters: {po: 1.5}
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
crossing: {in: [glucose, oxygen, ammonia], out: [biomass, lactate], either: [water, carbon dioxide]}
reactions:
  glycolysis: glucose -> 2 pyruvate + 2 ATP + 2 NADH
  lactate dehydrogenase: pyruvate + NADH <-> lactate
  respiration of NADH:
    equation: NADH + 1/2 oxygen -> water + (po) ATP
    group: respiration
  other respiration:
    equation: NADH + 1/2 oxygen -> water
    group: respiration
strains:
  fermenting: [respiration]
growth:
  biomass: {formula: CH1.8O0.5N0.2, ash: 0.05}
  equation: 1/6 glucose + 0.2 ammonia + 2 ATP -> biomass + ? water + ? NADH
"""


@pytest.fixture(scope="module")
def network(network_of: Callable[[str], Network]) -> Network:
    return network_of(TEXT)


def test_look_ups(network: Network) -> None:
    assert network.direction("glucose") is Direction.CONSUMED
    assert network.direction("lactate") is Direction.PRODUCED
    assert network.direction("water") is Direction.EITHER
    assert network.direction("pyruvate") is None
    assert network.compound("pyruvate") is not None
    assert network.compound("ATP") is None
    assert network.groups() == ("respiration",)
    strain = network.strain("fermenting")
    assert strain is not None
    assert strain.off == ("respiration",)
    assert network.strain("wild type") is None
    assert repr(network) == "Network('Small': 4 reactions)"
    assert repr(network.reactions[0]) == (
        "Reaction('glycolysis': glucose -> 2 pyruvate + 2 ATP + 2 NADH)"
    )


@pytest.mark.parametrize(
    ("name", "members"),
    [
        ("glycolysis", ("glycolysis",)),
        ("respiration", ("respiration of NADH", "other respiration")),
        (GROWTH, (GROWTH,)),
        ("nothing", ()),
    ],
)
def test_a_name_stands_for_a_reaction_or_a_group(
    network: Network, name: str, members: tuple[str, ...]
) -> None:
    assert network.members(name) == members


def test_without_takes_reactions_and_groups_out_of_a_copy(network: Network) -> None:
    smaller = network.without("respiration", "lactate dehydrogenase")
    assert [item.name for item in smaller.reactions] == ["glycolysis"]
    assert smaller.growth is network.growth
    assert len(network.reactions) == 4
    assert network.without() == network


def test_without_growth_leaves_the_reactions(network: Network) -> None:
    fasting = network.without(GROWTH)
    assert fasting.growth is None
    assert fasting.reactions == network.reactions
    assert fasting.members(GROWTH) == ()


def test_without_an_unknown_name_is_refused(network: Network) -> None:
    with pytest.raises(KeyError, match="glycolisis"):
        network.without("respiration", "glycolisis")


def test_with_parameter_changes_one_value_in_a_copy(network: Network) -> None:
    changed = network.with_parameter("po", Fraction(2))
    assert [item.value for item in changed.parameters] == [2]
    assert [item.value for item in network.parameters] == [Fraction(3, 2)]
    assert changed.reactions == network.reactions
    with pytest.raises(KeyError, match="op"):
        network.with_parameter("op", Fraction(2))


def test_place_and_file_do_not_make_two_networks_different(
    network: Network, network_of: Callable[[str], Network]
) -> None:
    assert network_of("\n\n" + TEXT) == network


def test_a_notebook_shows_a_network_with_its_equations_escaped(network: Network) -> None:
    shown = network._repr_html_()
    assert shown.startswith("<p><b>Small</b></p><table>")
    assert "<td>pyruvate + NADH &lt;-&gt; lactate</td>" in shown
    assert shown.count("<tr>") == 1 + len(network.reactions)


def test_biomass_weighs_its_ash_too() -> None:
    formula = read_formula("CH1.8O0.5N0.2")
    biomass = Compound(name="biomass", formula=formula, ash=Fraction(1, 20))
    assert biomass.weight.molar_mass == formula.molar_mass * 20 / 19
    assert biomass.weight.carbon == 1


def test_a_token_has_no_weight() -> None:
    weight = Compound(name="ATP", formula=read_formula("H0.5").of({})).weight
    assert weight.molar_mass is None
    assert weight.carbon == 0
