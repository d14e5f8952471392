"""Biomass as shares of macromolecules, in networks, cases and on one line."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

import yieldnet
from yieldnet.chemistry.macromolecules import compose, find_make_up
from yieldnet.reading.composition import read_composition_line

if TYPE_CHECKING:
    from pathlib import Path

SHARES = "protein: 0.52, RNA: 0.16, DNA: 0.03, lipid: 0.09, carbohydrate: 0.15"
LINE = "protein 0.52, RNA 0.16, DNA 0.03, lipid 0.09, carbohydrate 0.15, ash 0.05"
NETWORK = """
network: Put together
carriers: {{ATP: {{kind: energy}}}}
crossing: {{in: [glucose, ammonia, oxygen], out: [biomass], either: [carbon dioxide, water]}}
reactions:
  respiration: glucose + 6 oxygen -> 6 carbon dioxide + 6 water + 20 ATP
growth:
  biomass: {biomass}
  equation: 0.2 glucose + ? ammonia + ? oxygen + 2 ATP -> biomass + ? carbon dioxide + ? water
"""
CASE = """
case: Elements of a cell that was put together
equation: glucose + ? ammonia + ? oxygen -> ? biomass
either side: [carbon dioxide, water]
aim: most biomass
compounds:
  biomass: {biomass}
"""


def _expected(make_up: str = "Escherichia coli") -> tuple[dict[str, Fraction], Fraction]:
    shares = {
        name: Fraction(text) for name, text in (pair.split(": ") for pair in SHARES.split(", "))
    }
    formula, minerals = compose(shares, Fraction("0.05"), find_make_up(make_up)).rounded
    return dict(formula.elements), minerals


def _written(folder: Path, name: str, text: str, biomass: str) -> Path:
    path = folder / name
    path.write_text(text.format(biomass=biomass), "utf-8")
    return path


def test_a_network_takes_biomass_from_macromolecules(tmp_path: Path) -> None:
    path = _written(tmp_path, "n.yaml", NETWORK, f"{{from: {{{SHARES}}}, ash: 0.05, about: Ours}}")
    growth = yieldnet.read_network(path).growth
    assert growth is not None
    elements, minerals = _expected()
    assert dict(growth.biomass.formula.elements) == elements
    assert growth.biomass.ash == minerals
    for words in ("Ours; put together from protein 0.52", "Escherichia coli", "from memory"):
        assert words in growth.biomass.about
    audited = yieldnet.audit(path)
    assert not audited.refused


def test_a_case_and_its_elements_take_biomass_from_macromolecules(tmp_path: Path) -> None:
    biomass = f"{{from: {{{SHARES}}}, ash: 0.05, monomers: yeast}}"
    case = yieldnet.read_case(_written(tmp_path, "c.yaml", CASE, biomass))
    elements, minerals = _expected("yeast")
    compound = case.compound("biomass")
    assert dict(compound.formula.elements) == elements
    assert compound.ash == minerals
    result = yieldnet.balance(case)
    # Electrons alone: 24 over the degree of reduction, less than the carbon bound of 6.
    best = 24 / compound.formula.degree_of_reduction()
    assert best < 6
    assert result.aim is not None
    assert result.aim.value == best
    assert any("put together from protein" in item.source for item in result.assumptions)


def test_a_run_takes_biomass_from_macromolecules(tmp_path: Path, checkout: Path) -> None:
    example = checkout / "examples" / "batch"
    for path in example.iterdir():
        (tmp_path / path.name).write_bytes(path.read_bytes())
    run = tmp_path / "run.yaml"
    text = run.read_text("utf-8")
    begin = text.index("\n  biomass:", text.index("\ncompounds:"))
    end = text.index("\n", begin + 1)
    run.write_text(
        f"{text[:begin]}\n  biomass: {{from: {{{SHARES}}}, ash: 0.05}}{text[end:]}", "utf-8"
    )
    elements, minerals = _expected()
    biomass = next(item for item in yieldnet.read_run(run).compounds if item.name == "biomass")
    assert dict(biomass.formula.elements) == elements
    assert biomass.ash == minerals


def test_own_monomers_replace_those_of_an_organism(tmp_path: Path) -> None:
    biomass = "{from: {protein: 1}, monomers: {like: yeast, glycine: 2, alanine: 2}}"
    case = yieldnet.read_case(_written(tmp_path, "c.yaml", CASE, biomass))
    # Half glycine C2H3NO, half alanine C3H5NO.
    assert str(case.compound("biomass").formula) == "CH1.6O0.4N0.4"
    assert case.compound("biomass").ash == 0


def test_normalise_is_said_and_told(tmp_path: Path) -> None:
    biomass = "{from: {protein: 0.6, glycogen: 0.6}, normalise: yes}"
    case = yieldnet.read_case(_written(tmp_path, "c.yaml", CASE, biomass))
    half = Fraction(1, 2)
    formula, _ = compose({"protein": half, "glycogen": half}).rounded
    assert case.compound("biomass").formula == formula
    assert "divided by their sum" in case.compound("biomass").about
    with pytest.raises(yieldnet.InputError, match="YN884"):
        yieldnet.read_case(
            _written(tmp_path, "c.yaml", CASE, biomass.replace("normalise: yes", "normalise: no"))
        )


def test_a_line_says_the_same_as_a_file() -> None:
    composed, findings = read_composition_line(LINE)
    assert not list(findings)
    assert composed is not None
    elements, minerals = _expected()
    assert dict(composed.formula.elements) == elements
    assert composed.minerals == minerals
    assert yieldnet.biomass_from(LINE) == composed.composition


@pytest.mark.parametrize(
    ("line", "codes"),
    [
        ("protein 0.5", ["YN884"]),
        ("protein", ["YN201"]),
        ("protein 0.5, 0.5", ["YN885"]),
        ("protein 0,5", ["YN885"]),
        ("protein 1, ash 0, ash 0", ["YN885"]),
        ("protein 1, protein 0", ["YN885"]),
        ("protein 1.5", ["YN885"]),
        ("ash 1", ["YN885"]),
        ("concrete 1", ["YN883"]),
        ("", ["YN201"]),
    ],
)
def test_a_line_with_slips_gives_findings(line: str, codes: list[str]) -> None:
    composed, findings = read_composition_line(line)
    assert composed is None
    assert [item.code for item in findings] == codes


def test_an_unknown_organism_on_a_line_names_the_known_ones() -> None:
    with pytest.raises(yieldnet.InputError, match=r"YN883.*nobody.*Known: Escherichia coli"):
        yieldnet.biomass_from("protein 1", monomers="nobody")
