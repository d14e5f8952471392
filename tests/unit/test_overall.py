"""The overall equation, own compounds and those of either side, as every file says them."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.chemistry.library import biomass_entries
from yieldnet.foundation.findings import Findings
from yieldnet.model.network import Direction
from yieldnet.reading.names import NameBook
from yieldnet.reading.nodes import Node, compose
from yieldnet.reading.overall import OverallReader


def _read(text: str) -> tuple[OverallReader, Findings]:
    """Reader that went over the three sections of a text."""
    findings = Findings()
    root = compose(text, "a.yaml", findings)
    assert root is not None
    sections: dict[str, Node] = {key.text: value for key, value in root.pairs}
    reader = OverallReader(book=NameBook(findings), findings=findings)
    if "compounds" in sections:
        reader.own_compounds(sections["compounds"])
    reader.equation(sections.get("equation"))
    reader.either_side(sections.get("either side"))
    return reader, findings


def test_sides_basis_and_formulas_are_taken() -> None:
    reader, findings = _read(
        "compounds:\n  biomass: {formula: CH1.8O0.5N0.2, ash: 0.05}\n  sweat: CH2O\n"
        "equation: glucose + ? oxygen -> ? biomass + 1/2 sweat\neither side: [water]\n"
    )
    assert findings.items == []
    assert reader.basis is not None
    assert reader.basis.name == "glucose"
    assert {name: item.side for name, item in reader.coefficients.items()} == {
        "oxygen": Direction.CONSUMED,
        "biomass": Direction.PRODUCED,
        "sweat": Direction.PRODUCED,
        "water": Direction.EITHER,
    }
    written = reader.coefficients["sweat"].written
    assert written is not None
    assert written.value == Fraction(1, 2)
    assert reader.coefficients["oxygen"].written is None
    assert reader.compounds["biomass"].ash == Fraction(1, 20)
    assert str(reader.compounds["sweat"].formula) == "CH2O"
    assert list(reader.compounds) == list(reader.coefficients)


def test_biomass_of_the_library_brings_formula_and_ash() -> None:
    entry = next(item for item in biomass_entries() if item.ash)
    equation = "equation: glucose -> ? biomass\n"
    reader, findings = _read(f"compounds: {{biomass: {entry.name}}}\n{equation}")
    assert findings.items == []
    assert reader.compounds["biomass"].formula == entry.formula
    assert reader.compounds["biomass"].ash == entry.ash
    reader, _ = _read(f"compounds: {{biomass: {{formula: {entry.name}, ash: 0.5}}}}\n{equation}")
    assert reader.compounds["biomass"].ash == Fraction(1, 2)


def test_a_compound_without_a_formula_is_kept_for_later_messages() -> None:
    reader, _ = _read("compounds: {sweat: Xy}\nequation: glucose -> ? sweat\n")
    assert reader.compound("sweat").formula.elements == ()
    assert reader.compound("glucose").formula["C"] == 6


@pytest.mark.parametrize(
    ("text", "code", "words"),
    [
        ("equation: glucose <-> ? ethanol\n", "YN208", "runs one way"),
        ("equation: 2 glucose -> ? ethanol\n", "YN501", "has the coefficient 2"),
        ("equation: glucose -> ? ethanol + ? glucose\n", "YN501", "stands twice"),
        ("equation: glucose -> ? ethanol + ? ethanol\n", "YN305", "stands twice"),
        ("equation: glucose -> (po) ethanol\n", "YN208", "is an expression"),
        ("equation: [glucose]\n", "YN112", "wrong shape"),
        (
            "equation: glucose -> ? ethanol\neither side: [ethanol]\n",
            "YN305",
            "and under 'either side'",
        ),
        ("equation: glucose -> ? ethanol\neither side: [ethanoll]\n", "YN301", "is not known"),
        ("compounds: {sweat: {formula: CH2O, ash: 1}}\n", "YN210", "not a fraction"),
        ("compounds: {sweat: {ash: 0.1}}\n", "YN111", "has no 'formula'"),
        ("compounds: {ethanol: C2H4O}\n", "YN304", "another formula"),
        ("compounds: {glucose: C6H12O6, dextrose: C6H12O6}\n", "YN303", "two names"),
    ],
)
def test_each_mistake_is_told(text: str, code: str, words: str) -> None:
    _, findings = _read(text)
    assert [finding.code for finding in findings] == [code]
    (finding,) = findings
    assert words in finding.message
    assert finding.hint or code == "YN112"
