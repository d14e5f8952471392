"""The sections ``concentrations`` and ``conditions: pH`` of a case."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.foundation.findings import Findings
    from yieldnet.model.case import Case

    Read = Callable[[str], tuple[Case | None, Findings]]

HEAD = """
case: t
equation: glucose + ? oxygen -> ? ethanol + ? biomass
either side: [carbon dioxide, water]
compounds: {biomass: {formula: CH1.8O0.5N0.2, ash: 0.05}}
"""


@pytest.mark.parametrize(
    ("name", "written", "low", "high", "gas"),
    [
        ("glucose", "5 mmol/L", "0.005", "0.005", False),
        ("glucose", "0.1 to 10 mmol/L", "0.0001", "0.01", False),
        ("glucose", "1/2 mol/m3", "0.0005", "0.0005", False),
        ("glucose", "3 µmol/mL", "0.003", "0.003", False),
        ("glucose", "180.156 g/L", "1", "1", False),
        ("ethanol", "1 C-mol/l", "0.5", "0.5", False),
        ("oxygen", "0.2 bar", "0.2", "0.2", True),
        ("oxygen", "20 to 50 kPa", "0.2", "0.5", True),
        ("oxygen", "1 atm", "1.01325", "1.01325", True),
        ("carbon dioxide", "30 mbar", "0.03", "0.03", True),
        # Bicarbonate is what the table has of it in solution.
        ("carbon dioxide", "2 mmol/L", "0.002", "0.002", False),
    ],
)
def test_concentrations_and_pressures_are_exact(
    case_of: Read, name: str, written: str, low: str, high: str, gas: bool
) -> None:
    case, findings = case_of(f"{HEAD}concentrations:\n  {name}: {written}\n")
    assert case is not None, findings.items
    (found,) = case.concentrations
    assert (found.compound, found.gas, found.text) == (name, gas, written)
    assert (found.low, found.high) == (Fraction(low), Fraction(high))
    assert found.span is not None
    assert found.span.line == 7


@pytest.mark.parametrize(
    ("line", "code", "words"),
    [
        ("glucose: 5 g/m", "YN203", "no concentration and no pressure"),
        ("glucose: 5 parsec/L", "YN203", "no concentration and no pressure"),
        ("oxygen: 1 C-mol/L", "YN506", "has no carbon"),
        ("glucose: -1 mmol/L", "YN210", "not above zero"),
        ("glucose: 1,5 mmol/L", "YN201", "decimal comma"),
        ("glucose: [1]", "YN112", "wrong shape"),
        ("biomass: 5 g/L", "YN861", "activity is one"),
        ("ethanol: 5 mbar", "YN860", "is dissolved in the table"),
        ("oxygen: 5 mmol/L", "YN860", "is a gas in the table"),
        ("acetate: 5 mmol/L", "YN503", "neither in the equation nor in a network"),
        ("NADH: 5 mmol/L", "YN301", "is not known"),
    ],
)
def test_what_cannot_be_is_told_with_its_place(
    case_of: Read, line: str, code: str, words: str
) -> None:
    _, findings = case_of(f"{HEAD}concentrations:\n  {line}\n")
    (found,) = findings.items
    assert found.code == code
    assert words in found.message
    assert found.where is not None
    assert found.where.line == 7
    assert found.hint or code == "YN112"


def test_a_compound_inside_a_network_may_have_a_concentration(case_of: Read) -> None:
    network = "network: ../../nothing.yaml"
    case, findings = case_of(
        f"case: t\n{network}\nequation: glucose -> ? ethanol\n"
        "concentrations: {pyruvate: 1 mmol/L, ATP: 1 mmol/L}\n"
    )
    # The network cannot be read, and nothing else is told of names that it would define.
    assert case is None
    assert [item.code for item in findings] == ["YN513"]


def test_phosphate_esters_have_no_concentration_of_their_own(case_of: Read) -> None:
    case, findings = case_of(
        "case: t\nnetwork: facultative-succinate\nequation: glucose -> ? succinate\n"
        "either side: [carbon dioxide, water]\n"
        "concentrations:\n  glucose 6-phosphate: 1 mmol/L\n  pyruvate: 1 to 2 mmol/L\n"
    )
    assert case is None
    (found,) = findings.items
    assert (found.code, found.where and found.where.line) == ("YN860", 6)
    assert "without its phosphate" in found.message


def test_without_an_equation_the_section_is_still_read(case_of: Read) -> None:
    _, findings = case_of("case: t\nequation: nonsense\nconcentrations: {glucose: 5 parsec}\n")
    assert "YN203" in {item.code for item in findings}


def test_a_ph_is_a_condition(case_of: Read) -> None:
    case, _ = case_of(f"{HEAD}conditions: {{pH: 6.8 ± 0.1}}\n")
    assert case is not None
    assert case.ph is not None
    assert (case.ph.value, case.ph.sd) == (Fraction("6.8"), Fraction("0.1"))


@pytest.mark.parametrize("written", ["0", "14"])
def test_the_ends_of_the_scale_are_a_ph(case_of: Read, written: str) -> None:
    case, findings = case_of(f"{HEAD}conditions: {{pH: {written}}}\n")
    assert case is not None, findings.items
    assert case.ph is not None
    assert case.ph.value == int(written)


@pytest.mark.parametrize(
    ("written", "code"), [("-1", "YN210"), ("14.5", "YN210"), ("7 mol", "YN203"), ("x", "YN201")]
)
def test_what_is_no_ph_is_told(case_of: Read, written: str, code: str) -> None:
    _, findings = case_of(f"{HEAD}conditions: {{pH: {written}}}\n")
    assert [item.code for item in findings] == [code]
