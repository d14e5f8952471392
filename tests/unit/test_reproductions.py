"""The entries of 'reproduces': small cases on the network of the same file."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from yieldnet.reading import reproductions
from yieldnet.reading.case_file import CASE_KEYS
from yieldnet.reading.reproductions import (
    REPRODUCTION_KEYS,
    load_reproducing_network,
    load_reproductions,
)
from yieldnet.reading.source import MAX_FINDINGS, read_text

if TYPE_CHECKING:
    from pathlib import Path

    from yieldnet.foundation.findings import Findings
    from yieldnet.model.reproduction import Reproduction

NETWORK = """
network: Small
parameters: {po: 1.5}
parameter sets: {no pumping: {source: from memory, values: {po: 0}}}
carriers: {ATP: {kind: energy}, NADH: {kind: redox, formula: H2}}
crossing: {in: [glucose, oxygen], out: [ethanol, lactate], either: [carbon dioxide, water]}
reactions:
  glycolysis: glucose -> 2 pyruvate + 2 NADH + 2 ATP
  lactate dehydrogenase: pyruvate + NADH -> lactate
  ethanol path: pyruvate + NADH -> ethanol + carbon dioxide
  respiration: NADH + 1/2 oxygen -> water + (po) ATP
strains: {no lactate: [lactate dehydrogenase]}
reproduces:
"""
ETHANOL = """
  ethanol:
    equation: glucose -> ? ethanol
    either side: [carbon dioxide, water]
    aim: most ethanol
    value: 0.511 g/g
    source: textbook
"""


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return tmp_path / "network.yaml"


def _load(path: Path, text: str) -> tuple[tuple[Reproduction, ...], Findings]:
    path.write_text(text, "utf-8")
    return load_reproductions(str(path))


def test_an_entry_is_a_case_with_its_answer(path: Path) -> None:
    (item,), findings = _load(path, NETWORK + ETHANOL)
    assert findings.items == []
    assert (item.name, item.source, item.unit) == ("ethanol", "textbook", "g/g")
    assert (item.value, item.last_place) == (Fraction("0.511"), Fraction(1, 1000))
    # 180.156 g of glucose over 46.069 g of ethanol.
    assert float(item.factor) == pytest.approx(180.156 / 46.069, rel=1e-5)
    assert item.case.title == "ethanol"
    assert str(item.case.aim) == "most ethanol"
    assert item.case.network is not None
    assert item.case.network.title == "Small"
    assert item.span is not None
    assert item.span == item.case.span
    assert item.span.line == 15


def test_an_entry_takes_every_key_of_a_case_but_its_own_network(path: Path) -> None:
    text = """
  energy:
    equation: glucose + ? oxygen -> ? lactate + ? ethanol
    either side: [carbon dioxide, water]
    strain: no lactate
    parameter set: no pumping
    parameters: {po: 1}
    conditions: {temperature: 30 degC}
    measured: {ethanol: 1 ± 0.1}
    demands: {oxygen: at most 2}
    energy surplus: lost
    knock-outs: [respiration]
    aim: most ATP
    value: 2
    source: derived by hand
"""
    (item,), findings = _load(path, NETWORK + text)
    assert findings.items == []
    case = item.case
    assert case.aim is not None
    assert case.aim.is_energy
    assert case.parameter_set is not None
    assert case.overrides() == {"po": 1}
    assert [one.name for one in case.knock_outs] == ["respiration"]
    assert (item.value, item.factor) == (Fraction(2), Fraction(1))
    assert (item.last_place, item.unit) == (None, "mol/mol")
    allowed = [key for key in CASE_KEYS if key in REPRODUCTION_KEYS]
    assert [*allowed, "value", "source"] == list(REPRODUCTION_KEYS)
    # What the network file says already, or what has no place in a single best value.
    assert not {"case", "network", "compounds"} & set(allowed)


def test_the_file_is_read_once(path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path.write_text(NETWORK + ETHANOL, "utf-8")
    asked: list[str] = []

    def counting(name: str, findings: Findings) -> str | None:
        asked.append(name)
        return read_text(name, findings)

    monkeypatch.setattr(reproductions, "read_text", counting)
    network, (item,), _ = load_reproducing_network(str(path))
    assert asked == [str(path)]
    assert item.case.network is network


def test_a_network_need_not_reproduce_anything(path: Path) -> None:
    found, findings = _load(path, NETWORK.removesuffix("reproduces:\n"))
    assert (found, findings.items) == ((), [])


@pytest.mark.parametrize(
    ("old", "new", "code", "words"),
    [
        ("value: 0.511 g/g", "value: 0.511 g/h", "YN203", "'h' is not an amount"),
        ("value: 0.511 g/g", "value: half", "YN201", "'half' is not a number"),
        ("value: 0.511 g/g", "value: 0.5 ± 0.1", "YN112", "has an error, which nothing here"),
        ("value: 0.511 g/g", "value: [2]", "YN112", "the value of 'ethanol' of 'reproduces' has"),
        ("    value: 0.511 g/g\n", "", "YN111", "'ethanol' of 'reproduces' has no 'value'"),
        ("    aim: most ethanol\n", "", "YN111", "'ethanol' of 'reproduces' has no 'aim'"),
        ("    source: textbook\n", "", "YN111", "'ethanol' of 'reproduces' has no 'source'"),
        ("aim: most ethanol", "aim: most ATP", "YN203", "ATP"),
        ("aim: most ethanol", "aim: most oxygen", "YN503", "the aim 'oxygen' is not in"),
        ("source: textbook", "network: small", "YN110", "'network' is not a key of 'ethanol'"),
        ("source: textbook", "strain: none", "YN302", "strain 'none' is not in the network"),
        ("source: textbook", "parameter set: no", "YN302", "Known parameter sets: no pumping"),
        ("-> ? ethanol", "-> ? acetate", "YN505", "in the library, but not in this network"),
        ("    equation: glucose -> ? ethanol\n", "", "YN111", "has no 'equation'"),
    ],
)
def test_what_is_wrong_in_an_entry_is_told_at_its_line(
    path: Path, old: str, new: str, code: str, words: str
) -> None:
    assert ETHANOL.count(old) == 1
    found, findings = _load(path, NETWORK + ETHANOL.replace(old, new))
    assert found == ()
    told = [item for item in findings if item.code == code and words in str(item)]
    assert len(told) == 1, [str(item) for item in findings]
    assert told[0].where is not None
    assert 15 <= told[0].where.line <= 21


@pytest.mark.parametrize("section", ["  - ethanol\n", "  ethanol: 2\n"])
def test_a_section_of_another_shape(path: Path, section: str) -> None:
    found, findings = _load(path, NETWORK + section)
    assert found == ()
    assert findings.items[0].code == "YN112"


def test_a_good_entry_stays_beside_a_bad_one(path: Path) -> None:
    bad = ETHANOL.replace("  ethanol:", "  again:").replace("0.511", "0,511")
    found, findings = _load(path, NETWORK + ETHANOL + bad)
    assert [item.name for item in found] == ["ethanol"]
    assert [item.code for item in findings] == ["YN201"]


def test_mistakes_of_the_network_and_of_its_entries_come_together(path: Path) -> None:
    text = NETWORK.replace("(po) ATP", "(pi) ATP") + ETHANOL.replace("0.511", "0,511")
    path.write_text(text, "utf-8")
    network, found, findings = load_reproducing_network(str(path))
    assert (network, found) == (None, ())
    assert [item.code for item in findings] == ["YN302", "YN201"]


def test_a_file_that_is_not_there(path: Path) -> None:
    found, findings = load_reproductions(str(path))
    assert found == ()
    assert [item.code for item in findings] == ["YN101"]


@pytest.mark.parametrize("text", ["[]", "case: x\nreproduces: {}\n"])
def test_a_file_that_is_no_network(path: Path, text: str) -> None:
    found, findings = _load(path, text)
    assert found == ()
    assert len(findings.items) == 1


def test_reading_stops_where_mistakes_have_no_end(path: Path) -> None:
    many = "".join(f"  entry {i}: 2\n" for i in range(MAX_FINDINGS + 5))
    found, findings = _load(path, NETWORK + many)
    assert found == ()
    assert findings.items[-1].code == "YN116"
