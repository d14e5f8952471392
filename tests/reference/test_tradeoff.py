"""Polygons worked by hand on a network of five reactions.

Per mol glucose, with b biomass CH2O (a sixth of a glucose and 2 ATP each), v = 1 - b/6 glycolysis,
p pyruvate burnt, e ethanol, l lactate, r NADH respired:

pyruvate  2v = e + l + p;  NADH  2v + 5p = e + l + r, so r = 6p and oxygen is r/2 = 3p;
ATP  2v + 2r >= 2b + M, with M the ATP for maintenance, so p >= (7b/6 - 1 + M/2)/6 and p >= 0.

Values are exact: nothing is measured, every number of the network is a fraction, so the tolerance
is zero. Source: the arithmetic above; the network is invented and its reactions close.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from yieldnet.optimum.polygon import Shape
from yieldnet.optimum.ranges import Range
from yieldnet.verbs import read_case, tradeoff

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.model.case import Case
    from yieldnet.optimum.polygon import Point
    from yieldnet.studies.tradeoff import Region

NETWORK = """
network: Worked by hand
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
crossing:
  in: [glucose, oxygen]
  out: [biomass, ethanol, lactate]
  either: [carbon dioxide, water]
reactions:
  glycolysis: glucose -> 2 pyruvate + 2 NADH + 2 ATP
  lactate path: pyruvate + NADH -> lactate
  ethanol path: pyruvate + NADH -> ethanol + carbon dioxide
  burning: pyruvate + 3 water -> 3 carbon dioxide + 5 NADH
  respiration: NADH + 1/2 oxygen -> water + 2 ATP
growth:
  biomass: {formula: CH2O}
  equation: 1/6 glucose + 2 ATP -> biomass
maintenance: {ATP: 5 mmol/g/h}
"""
CASE = """
case: Worked by hand
network: network.yaml
equation: glucose + ? oxygen -> ? biomass + ? ethanol + ? lactate
either side: [carbon dioxide, water]
aim: most ethanol
"""
UPTAKE = "conditions: {substrate uptake: 10 mmol/g/h}\n"


@pytest.fixture
def case(tmp_path: Path) -> Callable[[str], Case]:
    (tmp_path / "network.yaml").write_text(NETWORK, "utf-8")

    def _case(more: str = "") -> Case:
        path = tmp_path / "case.yaml"
        path.write_text(CASE + more, "utf-8")
        return read_case(path)

    return _case


def _corners(region: Region) -> list[Point]:
    return [(corner.x, corner.y) for corner in region.corners]


def _fractions(*places: tuple[str, str]) -> list[Point]:
    return [(Fraction(x), Fraction(y)) for x, y in places]


def _switches(region: Region) -> dict[tuple[int, int], set[tuple[str, str, bool]]]:
    return {
        (edge.start + 1, edge.end + 1): {
            (item.compound, str(item.change), item.certain) for item in edge.switches
        }
        for edge in region.edges
    }


# No maintenance: without an uptake or a growth rate it cannot be told. Ethanol e = 2v - p.
# p = 0 up to b = 6/7, where 2v = 12/7; then e = 13/6 - 19b/36 down to b = 78/19.
BIOMASS = _fractions(("0", "0"), ("78/19", "0"), ("6/7", "12/7"), ("0", "2"))


@pytest.mark.parametrize("engine", ["glpk", "optlang"])
def test_ethanol_against_biomass(case: Callable[[str], Case], engine: str) -> None:
    result = tradeoff(case(""), engine=engine)
    (region,) = result.regions
    assert region.polygon.shape is Shape.POLYGON
    assert _corners(region) == BIOMASS
    assert [edge.slope for edge in region.edges] == [0, Fraction(-19, 36), Fraction(-1, 3), None]
    # Oxygen is 3p with p = 2v = 12/19, and carbon dioxide e + 3p.
    at_most_growth, at_the_bend = (dict(region.corners[at].coefficients) for at in (1, 2))
    assert at_most_growth["oxygen"].low == at_most_growth["oxygen"].high == Fraction(36, 19)
    assert at_most_growth["carbon dioxide"].low == Fraction(36, 19)
    assert at_the_bend["oxygen"].single
    assert at_the_bend["oxygen"].low == 0
    assert at_the_bend["carbon dioxide"].low == Fraction(12, 7)
    # Without product and biomass the pyruvate is burnt or made lactate, or some of both.
    idle = dict(region.corners[0].coefficients)
    assert idle["oxygen"] == Range(Fraction(0), Fraction(6))
    assert idle["lactate"] == Range(Fraction(0), Fraction(2))


def test_by_products_of_ethanol_against_biomass(case: Callable[[str], Case]) -> None:
    found = _switches(tradeoff(case("")).regions[0])
    assert found[1, 2] == {("lactate", "vanishes", False)}
    assert found[2, 3] == {("oxygen", "vanishes", True), ("water", "vanishes", True)}
    assert found[3, 4] == set()
    assert found[4, 1] == {(name, "appears", False) for name in ("oxygen", "lactate", "water")}


def test_ethanol_against_growth_rate_with_maintenance(case: Callable[[str], Case]) -> None:
    # M = 5/10 per mol glucose: p = 0 up to b = 9/14, where 2v = 25/14; then e = 17/8 - 19b/36 down
    # to b = 153/38. A growth rate of b mol at 10 mmol/g/h is 10/1000 b times 30.026 g/mol.
    studied = case(UPTAKE)
    result = tradeoff(studied, over="growth-rate")
    mass = studied.compound("biomass").weight.molar_mass
    assert mass is not None
    assert float(mass) == pytest.approx(30.026, abs=0.001)  # 12.011 + 2 x 1.008 + 15.999
    rate = mass / 100
    assert _corners(result.regions[0]) == [
        (b * rate, e)
        for b, e in _fractions(("0", "0"), ("153/38", "0"), ("9/14", "25/14"), ("0", "2"))
    ]
    assert (result.x.name, result.x.unit) == ("growth rate", "1/h")


def test_ethanol_against_oxygen(case: Callable[[str], Case]) -> None:
    # e = 2v - p - l with v at most 1, and oxygen 3p: all burnt at oxygen 6.
    (region,) = tradeoff(case(""), over="oxygen").regions
    assert _corners(region) == _fractions(("0", "0"), ("6", "0"), ("0", "2"))
    assert _switches(region)[2, 3] == {("water", "vanishes", True)}


def test_ethanol_against_oxygen_at_a_measured_biomass(case: Callable[[str], Case]) -> None:
    # b = 2: v = 2/3, p between (7/3 - 1)/6 = 2/9 and 4/3, e = 4/3 - p - l.
    (region,) = tradeoff(case("measured: {biomass: 2}\n"), over="oxygen").regions
    assert _corners(region) == _fractions(("2/3", "0"), ("4", "0"), ("2/3", "10/9"))
    found = _switches(region)
    assert found[1, 2] == {("lactate", "vanishes", True)}
    assert found[3, 1] == {("lactate", "appears", True)}


def test_a_statement_about_an_axis_is_given_up_and_any_other_holds(
    case: Callable[[str], Case],
) -> None:
    demanded = case("demands: {biomass: at least 1, ethanol: at most 1/2, oxygen: at most 2/3}\n")
    (region,) = tradeoff(demanded).regions
    # Oxygen 2/3 is p = 2/9: with it 7b/6 - 1 = 4/3 and b = 2, where e = 4/3 - 2/9.
    assert _corners(region) == _fractions(
        ("0", "0"), ("2", "0"), ("2", "10/9"), ("6/7", "12/7"), ("0", "2")
    )
    assert region.given_up == ("demand biomass: at least 1", "demand ethanol: at most 1/2")


def test_ethanol_against_lactate_under_little_carbon_dioxide(case: Callable[[str], Case]) -> None:
    # b = 6/7, so e + l + p = 12/7, and carbon dioxide e + 3p is at most 1: with e = 0 p is at most
    # 1/3 and l at least 12/7 - 1/3; with p = 0 e is at most 1 and l at least 5/7.
    studied = case("measured: {biomass: 6/7}\ndemands: {carbon dioxide: at most 1}\n")
    (region,) = tradeoff(studied, x="lactate").regions
    assert _corners(region) == _fractions(("29/21", "0"), ("12/7", "0"), ("5/7", "1"))


def test_ethanol_against_lactate_without_respiration_is_a_line_and_then_a_point(
    case: Callable[[str], Case],
) -> None:
    # r = 0 leaves p = 0, so e + l = 2v = 2 - b/3, which is 12/7 with b = 6/7.
    still = "measured: {biomass: 6/7}\nknock-outs: [respiration]\n"
    (line,) = tradeoff(case(still), x="lactate").regions
    assert line.polygon.shape is Shape.SEGMENT
    assert _corners(line) == _fractions(("12/7", "0"), ("0", "12/7"))
    assert [edge.slope for edge in line.edges] == [-1]
    exact = case("measured: {biomass: 6/7, ethanol: 12/7}\n")
    (point,) = tradeoff(exact, x="oxygen", y="lactate").regions
    assert point.polygon.shape is Shape.POINT
    assert _corners(point) == _fractions(("0", "0"))
    assert point.edges == ()
