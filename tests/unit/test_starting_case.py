"""What a first case is made of: a network, a pair that works, and its equation."""

from __future__ import annotations

from fractions import Fraction
from functools import cache
from typing import TYPE_CHECKING

import pytest

from yieldnet.foundation.errors import InputError
from yieldnet.reading.shipped import shipped_names
from yieldnet.studies.starting_case import best_yields, overall_shape, start_case
from yieldnet.verbs import read_network

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.foundation.findings import Finding
    from yieldnet.model.network import Network
    from yieldnet.studies.starting_case import StartingCase

OWN = """
network: Ethanol from glucose, my own
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
crossing:
  in: [glucose, oxygen]
  out: [ethanol, lactate, formate]
  either: [carbon dioxide, water]
reactions:
  glycolysis: glucose -> 2 pyruvate + 2 NADH + 2 ATP
  lactate dehydrogenase: pyruvate + NADH -> lactate
  ethanol path: pyruvate + NADH -> ethanol + carbon dioxide
  leak: formate -> formate of nobody
compounds:
  formate of nobody: CH2O2
"""


@cache
def _library() -> tuple[tuple[str, Network], ...]:
    return tuple((name, read_network(name)) for name in shipped_names())


def _on(name: str, substrate: str = "", product: str = "") -> StartingCase:
    return start_case([(name, dict(_library())[name])], substrate, product)


def _suggest(substrate: str = "", product: str = "") -> StartingCase:
    return start_case(_library(), substrate, product)


def _refused(call: Callable[[], object]) -> Finding:
    with pytest.raises(InputError, match="YN") as caught:
        call()
    (finding,) = caught.value.findings
    return finding


# The equation ------------------------------------------------------------------------------------


def test_the_equation_lists_one_nitrogen_source_and_no_other_food() -> None:
    shape = overall_shape(dict(_library())["facultative-succinate"], "xylose", "succinate")
    assert shape.nitrogen == "ammonia"
    assert shape.fed == ("ammonia", "oxygen")
    assert shape.made[:2] == ("succinate", "biomass")
    assert set(shape.made[2:]) == {"formate", "acetate", "ethanol", "lactate", "hydrogen"}
    assert shape.either == ("carbon dioxide", "water")
    assert shape.left_out == ("glucose", "glycerol", "urea")


def test_another_food_without_carbon_may_only_be_given_off() -> None:
    shape = overall_shape(dict(_library())["acetogen"], "carbon monoxide", "ethanol")
    assert "hydrogen" in shape.made
    assert "hydrogen" not in shape.either


def test_carbon_that_crosses_either_way_may_only_be_given_off() -> None:
    shape = overall_shape(dict(_library())["yeast"], "ethanol", "acetate")
    assert shape.substrate == "ethanol"
    assert set(shape.made) == {"acetate", "biomass", "xylitol", "glycerol"}


def test_carbon_dioxide_as_substrate_is_on_no_other_side() -> None:
    shape = overall_shape(dict(_library())["photoautotroph"], "carbon dioxide", "glucose")
    assert shape.either == ("water",)
    assert "oxygen" in shape.made
    assert shape.left_out == ("nitrate",)


# Best values -------------------------------------------------------------------------------------


def test_best_yields_are_those_of_the_reproduced_cases() -> None:
    # Two ethanol of a glucose by glycolysis; 12/7 succinate by its available electrons, 24 over 14.
    assert best_yields(dict(_library())["yeast"], "glucose", ["ethanol"]) == {"ethanol": 2}
    found = best_yields(dict(_library())["facultative-succinate"], "glucose", ["succinate"])
    assert found == {"succinate": Fraction(12, 7)}


def test_what_cannot_be_made_or_is_not_in_the_network_has_no_best_yield() -> None:
    network = dict(_library())["yeast"]
    assert best_yields(network, "glucose", ["xylitol", "succinate", "pyruvate"]) == {}


# With a network ----------------------------------------------------------------------------------


def test_what_is_not_asked_for_is_what_the_network_is_meant_for_first() -> None:
    start = _on("enteric-mixed-acid")
    # Biomass is listed first there; a product comes before it.
    assert (start.substrate, start.product) == ("glucose", "acetate")
    assert len(start.chosen) == 2
    assert start.chosen[0].startswith("substrate glucose:")
    start = _on("yeast", product="xylitol")
    assert (start.substrate, start.product) == ("xylose", "xylitol")
    assert _on("yeast", "xylose", "xylitol").chosen == ()


def test_a_synonym_is_the_compound_of_the_network() -> None:
    assert _on("lysine-coryneform", "dextrose").substrate == "glucose"
    assert _suggest("D-xylose", "xylitol").substrate == "xylose"


def test_a_product_that_does_not_come_of_the_substrate_is_refused_with_pairs_that_do() -> None:
    finding = _refused(lambda: _on("yeast", "glucose", "xylitol"))
    assert finding.code == "YN932"
    assert finding.left == "glucose gives acetate, biomass, ethanol, glycerol"
    assert finding.right == "xylitol comes from xylose"
    finding = _refused(lambda: _on("yeast", "ethanol", "ethanol"))
    assert finding.code == "YN932"
    assert "both substrate and product" in finding.message
    assert finding.right == "ethanol comes from glucose, xylose, glycerol"


@pytest.mark.parametrize(
    ("substrate", "product", "words", "listed"),
    [
        ("citrate", "", "cannot be taken up", "substrates: glucose, xylose, glycerol, ethanol"),
        ("", "succinate", "cannot be given off", "products: ethanol, glycerol, acetate"),
        ("xylitol", "", "cannot be taken up", "substrates: glucose"),
    ],
)
def test_what_does_not_cross_that_way_is_refused(
    substrate: str, product: str, words: str, listed: str
) -> None:
    finding = _refused(lambda: _on("yeast", substrate, product))
    assert finding.code == "YN932"
    assert words in finding.message
    assert finding.left.startswith(listed)


def test_both_slips_are_told_at_once() -> None:
    with pytest.raises(InputError, match="taken up") as caught:
        _on("yeast", "citrate", "succinate")
    assert [item.code for item in caught.value.findings] == ["YN932", "YN932"]
    with pytest.raises(InputError, match="not known") as caught:
        _on("yeast", "citratte", "sucinate")
    assert [item.code for item in caught.value.findings] == ["YN301", "YN301"]
    assert "Did you mean 'citrate'" in caught.value.findings[0].hint


def test_a_network_that_does_not_say_what_it_is_for_is_asked_for_all_that_crosses(
    network_of: Callable[[str], Network],
) -> None:
    start = start_case([("own.yaml", network_of(OWN))])
    assert (start.substrate, start.product) == ("glucose", "ethanol")
    assert start.best == 2
    assert start.shape.nitrogen == ""
    assert start.shape.fed == ("oxygen",)
    finding = _refused(lambda: start_case([("own.yaml", network_of(OWN))], product="formate"))
    assert finding.code == "YN932"
    assert finding.right == "formate comes from nothing"


# Without a network -------------------------------------------------------------------------------


def test_the_only_network_that_fits_is_taken_and_that_is_said() -> None:
    start = _suggest("glycerol", "citric acid")
    assert (start.name, start.product) == ("lipid-yeast", "citrate")
    assert start.chosen == ("network lipid-yeast: the only one that ships and does this",)


def test_a_network_that_is_meant_for_both_and_does_not_make_one_of_the_other_does_not_count() -> (
    None
):
    # The solvent former is meant for glucose and for 1,3-propanediol, which it makes of glycerol.
    finding = _refused(lambda: _suggest("glucose", "1,3-propanediol"))
    assert finding.code == "YN932"
    assert finding.right == "1,3-propanediol comes from glycerol"


def test_several_networks_that_fit_are_listed() -> None:
    finding = _refused(lambda: _suggest("xylose", "succinate"))
    assert finding.code == "YN931"
    assert "enteric-mixed-acid (Enteric bacterium, respiring or mixed-acid)" in finding.left
    assert "facultative-succinate" in finding.left
    assert "--network" in finding.hint


def test_nothing_to_go_by_is_refused() -> None:
    finding = _refused(_suggest)
    assert finding.code == "YN930"
    assert "yieldnet networks" in finding.hint


def test_a_pair_that_no_network_is_meant_for_is_refused_with_what_goes_with_either() -> None:
    finding = _refused(lambda: _suggest("glucose", "methane"))
    assert finding.code == "YN930"
    assert finding.left == "substrates with methane: acetate, formate, hydrogen, methanol"
    assert finding.right.startswith("products with glucose: 1,3-propanediol")
    finding = _refused(lambda: _suggest(product="water"))
    assert finding.code == "YN930"
    assert finding.left.startswith("products: 1,3-propanediol")
    assert finding.right == ""


def test_a_network_that_does_not_say_what_it_is_for_is_never_suggested(
    network_of: Callable[[str], Network],
) -> None:
    start = start_case([*_library(), ("own.yaml", network_of(OWN))], "xylose", "xylitol")
    assert start.name == "yeast"


SULFUR = """
network: Sulfur that has no way out
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
crossing:
  in: [glucose, L-cysteine]
  out: [lactate, ethanol]
  either: [carbon dioxide, water, ammonia]
meant for: {substrates: [glucose, L-cysteine], products: [lactate, ethanol]}
reactions:
  glycolysis: glucose -> 2 pyruvate + 2 NADH + 2 ATP
  lactate dehydrogenase: pyruvate + NADH -> lactate
  desulfurase: L-cysteine + water -> pyruvate + ammonia + hydrogen sulfide
  ethanol path: ethanol inside -> ethanol
compounds:
  ethanol inside: C2H6O
"""


def test_a_substrate_whose_equation_cannot_close_gives_nothing(
    network_of: Callable[[str], Network],
) -> None:
    network = network_of(SULFUR)
    finding = _refused(lambda: start_case([("own.yaml", network)], "glucose", "ethanol"))
    assert finding.code == "YN932"
    assert finding.left == "glucose gives lactate"
    assert finding.right == "ethanol comes from nothing"
    finding = _refused(lambda: start_case([("own.yaml", network)], "L-cysteine", "lactate"))
    assert finding.left == "L-cysteine gives nothing"
    assert finding.right == "lactate comes from glucose"
