"""Parameters of a network and their named sets."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from yieldnet.foundation.findings import Severity
from yieldnet.model.network import ParameterSet
from yieldnet.reading.network_file import parse_network

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.foundation.findings import Findings
    from yieldnet.model.case import Case
    from yieldnet.model.network import Network

    CaseOf = Callable[[str], tuple[Case | None, Findings]]

NETWORK = """
network: Small
crossing: {in: [glucose], out: [lactate]}
carriers: {ATP: {kind: energy}}
parameters: {cost: {value: 1, low: 1/3, high: 2, unit: mol/mol}, gain: 2}
reactions: {fermentation: glucose + (cost) ATP -> 2 lactate + (gain) ATP}
"""


def test_sets_are_read_in_order_and_found_by_name(network_of: Callable[[str], Network]) -> None:
    network = network_of(
        NETWORK + "parameter sets:\n  cheap: {about: symport, source: from memory, values:"
        " {cost: 1/3, gain: 1.5}}\n  dear: {source: a book, values: {cost: 2}}\n"
    )
    cheap, dear = network.parameter_sets
    assert cheap == ParameterSet(
        name="cheap",
        values=(("cost", Fraction(1, 3)), ("gain", Fraction(3, 2))),
        about="symport",
        source="from memory",
    )
    assert network.parameter_set("dear") is dear
    assert network.parameter_set("nothing") is None
    assert dear.span is not None
    assert dear.span.line == 9


@pytest.mark.parametrize(
    ("entry", "code", "words"),
    [
        ("cheap", "YN112", "parameter set 'x' has the wrong shape"),
        ("{values: {cost: 1}}", "YN111", "has no 'source'. Say where its values come from"),
        ("{source: a}", "YN111", "has no 'values'"),
        ("{source: a, values: {}}", "YN111", "parameter set 'x' has no values"),
        ("{source: a, values: [cost]}", "YN112", "'values' of parameter set 'x' has the wrong"),
        ("{source: a, maintenance: {ATP: 3 1/h}}", "YN203", "maintenance of parameter set 'x'"),
        ("{source: a, maintenance: {ADP: 3 mmol/g/h}}", "YN302", "no energy carrier"),
        ("{source: a, values: {cots: 1}}", "YN302", "'cots' is not known. Did you mean 'cost'"),
        ("{source: a, values: {cost: 1,5}}", "YN302", "parameter '5' is not known"),
        ("{source: a, values: {cost: high}}", "YN201", "'high' is not a number"),
        ("{source: a, value: {cost: 1}, values: {cost: 1}}", "YN110", "Did you mean 'values'"),
    ],
)
def test_what_is_wrong_in_a_set(entry: str, code: str, words: str) -> None:
    network, findings = parse_network(f"{NETWORK}parameter sets:\n  x: {entry}\n", "n.yaml")
    assert network is None
    told = [item for item in findings if item.code == code]
    assert len(told) == 1
    assert words in str(told[0])
    assert told[0].where is not None
    assert told[0].where.line == 8


@pytest.mark.parametrize(
    ("value", "side"), [("0.3", "low 1/3 mol/mol"), ("2.01", "high 2 mol/mol")]
)
def test_a_value_outside_the_range_is_a_warning_with_both_sides(value: str, side: str) -> None:
    text = f"{NETWORK}parameter sets:\n  x: {{source: a, values: {{cost: {value}, gain: 99}}}}\n"
    network, findings = parse_network(text, "n.yaml")
    assert network is not None
    (finding,) = findings
    assert (finding.code, finding.severity) == ("YN412", Severity.WARNING)
    assert (finding.left, finding.right) == (f"value {value}", side)


@pytest.mark.parametrize("value", ["1/3", "2"])
def test_the_ends_of_the_range_belong_to_it(value: str) -> None:
    text = f"{NETWORK}parameter sets:\n  x: {{source: a, values: {{cost: {value}}}}}\n"
    assert parse_network(text, "n.yaml")[1].items == []


def test_a_parameter_that_could_not_be_read_is_not_told_as_unknown() -> None:
    text = NETWORK.replace("gain: 2", "gain: two")
    _, findings = parse_network(f"{text}parameter sets:\n  x: {{source: a, values: {{gain: 1}}}}\n")
    assert [item.code for item in findings] == ["YN201"]


def test_a_set_may_bring_its_own_maintenance(network_of: Callable[[str], Network]) -> None:
    network = network_of(
        NETWORK + "maintenance: {ATP: 1 mmol/g/h}\nparameter sets:\n"
        "  hungry: {source: a book, maintenance: {ATP: 3 mmol/g/h}}\n"
    )
    (hungry,) = network.parameter_sets
    assert hungry.values == ()
    assert hungry.maintenance is not None
    assert hungry.maintenance.rate_mol_per_gram_hour == Fraction(3, 1000)
    assert hungry.maintenance.source == "a book"


def test_a_case_takes_the_maintenance_of_its_set(case_of: CaseOf, tmp_path: Path) -> None:
    (tmp_path / "network.yaml").write_text(
        NETWORK + "maintenance: {ATP: 1 mmol/g/h}\nparameter sets:\n"
        "  hungry: {source: a book, maintenance: {ATP: 3 mmol/g/h}}\n",
        "utf-8",
    )
    text = "case: A\nnetwork: network.yaml\nequation: glucose -> ? lactate\n"
    plain, _ = case_of(text)
    chosen, findings = case_of(text + "parameter set: hungry\n")
    assert chosen is not None, findings.items
    rates = [
        case.network.maintenance.rate_mol_per_gram_hour
        for case in (plain, chosen)
        if case is not None and case.network is not None and case.network.maintenance is not None
    ]
    assert rates == [Fraction(1, 1000), Fraction(3, 1000)]
