"""Whether a network gives again what its file says."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

import yieldnet
from yieldnet.prediction.result import Outcome

if TYPE_CHECKING:
    from pathlib import Path

F = Fraction
# Two pyruvate with one NADH each become 2 ethanol; 1 mol of it is 46.069 g, of glucose 180.156 g.
NETWORK = """
network: Small
parameters: {po: 1.5}
parameter sets: {no pumping: {source: from memory, values: {po: 0}}}
carriers: {ATP: {kind: energy}, NADH: {kind: redox, formula: H2}}
crossing:
  in: [glucose, oxygen]
  out: [ethanol, lactate]
  either: [carbon dioxide, water, hydrogen]
reactions:
  glycolysis: glucose -> 2 pyruvate + 2 NADH + 2 ATP
  lactate dehydrogenase: pyruvate + NADH -> lactate
  ethanol path: pyruvate + NADH -> ethanol + carbon dioxide
  respiration: NADH + 1/2 oxygen -> water + (po) ATP
  citric acid cycle: pyruvate + 3 water -> 3 carbon dioxide + 5 NADH
  hydrogenase: NADH <-> hydrogen
meant for: {substrates: [glucose], products: [ethanol]}
reproduces:
"""


def _entry(name: str, asked: str, value: str) -> str:
    return (
        f"  {name}:\n    {asked}\n    either side: [carbon dioxide, water]\n    value: {value}\n"
        "    source: derived by hand\n"
    )


ENTRIES = (
    ("in moles", "equation: glucose -> ? ethanol\n    aim: most ethanol", "2"),
    ("in grams", "equation: glucose -> ? ethanol\n    aim: most ethanol", "0.511 g/g"),
    ("wrong in grams", "equation: glucose -> ? ethanol\n    aim: most ethanol", "0.512 g/g"),
    ("of carbon", "equation: glucose -> ? ethanol\n    aim: most ethanol", "2/3 C-mol/C-mol"),
    # 2 ATP and 12 NADH.
    ("energy", "equation: glucose + ? oxygen -> ? ethanol\n    aim: most ATP", "20"),
    (
        "energy of the set",
        "equation: glucose + ? oxygen -> ? ethanol\n    aim: most ATP\n"
        "    parameter set: no pumping",
        "2",
    ),
    (
        "energy of the case",
        "equation: glucose + ? oxygen -> ? ethanol\n    aim: most ATP\n"
        "    parameter set: no pumping\n    parameters: {po: 1}",
        "14",
    ),
    (
        "infeasible",
        "equation: glucose -> ? ethanol\n    aim: most ethanol\n"
        "    demands: {ethanol: at least 2.1}",
        "2",
    ),
)
ENERGY = ("energy", "energy of the set", "energy of the case")


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return tmp_path / "network.yaml"


def test_values_in_every_unit_and_the_parameters_of_the_set(path: Path) -> None:
    path.write_text(NETWORK + "".join(_entry(*item) for item in ENTRIES), "utf-8")
    found = {item.name: item for item in yieldnet.reproduce(path)}
    assert list(found) == [name for name, *_ in ENTRIES]
    assert [name for name, item in found.items() if not item.agrees] == [
        "wrong in grams",
        "infeasible",
    ]
    assert found["in moles"].expected == found["in moles"].found == 2
    grams = found["wrong in grams"]
    assert grams.found is not None
    assert float(grams.found) == pytest.approx(2 * 46.069 / 180.156, rel=1e-5)
    assert found["of carbon"].found == F(2, 3)
    assert [found[name].found for name in ENERGY] == [20, 2, 14]
    assert found["infeasible"].outcome is Outcome.INFEASIBLE
    assert found["infeasible"].found is None
    assert found["infeasible"].source == "derived by hand"


def test_an_aim_without_end_is_told(path: Path) -> None:
    # With hydrogen from outside and carbon dioxide fixed by no reaction, only hydrogen and oxygen
    # run away: each NADH of theirs is burnt for ATP.
    entry = _entry(
        "burning", "equation: glucose + ? oxygen -> ? ethanol\n    aim: most ATP", "2"
    ).replace("[carbon dioxide, water]", "[carbon dioxide, water, hydrogen]")
    path.write_text(NETWORK + entry, "utf-8")
    (item,) = yieldnet.reproduce(path)
    assert (item.outcome, item.found, item.agrees) == (Outcome.UNBOUNDED, None, False)


def test_both_engines_reproduce_the_same(path: Path) -> None:
    path.write_text(NETWORK + "".join(_entry(*item) for item in ENTRIES), "utf-8")
    assert yieldnet.reproduce(path, engine="optlang") == yieldnet.reproduce(path)


def test_cases_that_must_be_refused_are_told_together(path: Path) -> None:
    entries = "".join(
        _entry(name, "equation: glucose -> ? ethanol\n    aim: most ethanol", "2").replace(
            "[carbon dioxide, water]", "[water]"
        )
        for name in ("first", "second")
    )
    path.write_text(NETWORK + entries, "utf-8")
    with pytest.raises(yieldnet.InputError, match="YN507") as caught:
        yieldnet.reproduce(path)
    lines = [item.where.line for item in caught.value.findings if item.where is not None]
    assert len(lines) == 2
    assert lines[0] < lines[1]


def test_what_is_doubtful_in_a_case_stays_with_its_value(path: Path) -> None:
    path.write_text(
        NETWORK + _entry("acid", "equation: glucose -> ? lactate\n    aim: most lactate", "2"),
        "utf-8",
    )
    (item,) = yieldnet.reproduce(path)
    assert item.agrees
    assert [doubt.code for doubt in item.findings] == ["YN516"]


def test_a_network_with_nothing_to_reproduce(path: Path) -> None:
    path.write_text(NETWORK.removesuffix("reproduces:\n"), "utf-8")
    assert yieldnet.reproduce(path) == ()


def test_bad_entries_refuse_the_check_but_not_the_network(path: Path) -> None:
    path.write_text(
        NETWORK + _entry("x", "equation: glucose -> ? ethanol\n    aim: most ethanol", "two"),
        "utf-8",
    )
    with pytest.raises(yieldnet.InputError, match=r"YN201.*'two' is not a number"):
        yieldnet.reproduce(path)
    assert yieldnet.read_network(path).title == "Small"
    told = [item.code for item in yieldnet.audit(path).findings if item.severity == "error"]
    assert told == ["YN201"]
