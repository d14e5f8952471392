"""Cases for which part of the answer does not exist: each is answered, and told why, in words.

A case without an aim, an aim without a bound in some rung or in the last, a change after which it
has none, and networks with loops that run for nothing, for less than nothing, or for energy.
"""

from __future__ import annotations

import json
from typing import TYPE_CHECKING, Any

import pytest

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from click.testing import Result

    Run = Callable[..., Result]

NETWORK = """
network: Small
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
crossing:
  in: [glucose, oxygen, hydrogen]
  out: [lactate, ethanol]
  either: [carbon dioxide, water]
compounds:
  glucose 6-phosphate: C6H12O6
  lactate in the cell: C3H6O3
reactions:
  hexokinase: glucose + ATP -> glucose 6-phosphate
  glycolysis: glucose 6-phosphate -> 2 pyruvate + 2 NADH + 3 ATP
  lactate dehydrogenase: pyruvate + NADH <-> lactate in the cell
  lactate export: lactate in the cell -> lactate
  alcohol dehydrogenase: pyruvate + NADH -> ethanol + carbon dioxide
  respiration: NADH + 1/2 oxygen -> water + 1.5 ATP
  carbon fixation: 3 carbon dioxide + 5 NADH + 6 ATP -> pyruvate + 3 water
  hydrogenase: hydrogen <-> NADH
"""
CASE = """
case: Small
network: network.yaml
equation: {equation}
either side: [carbon dioxide, water]
"""
FERMENTATION = CASE.format(equation="glucose -> ? lactate + ? ethanol")
WITH_HYDROGEN = CASE.format(equation="glucose + ? hydrogen -> ? lactate + ? ethanol")
WITH_AIR = CASE.format(equation="glucose + ? hydrogen + ? oxygen -> ? lactate + ? ethanol")
ENDLESS = "lactate made, carbon dioxide taken up, water made can grow together without limit"


class Told:
    """Answer to a case as text in one line and as JSON."""

    def __init__(self, run: Run, path: Path, *options: str) -> None:
        self.result = run("predict", str(path), *options)
        self.text = " ".join(self.result.stdout.split())
        self.errors = " ".join(self.result.stderr.split())
        self.form: dict[str, Any] = json.loads(run("predict", str(path), *options, "--json").stdout)


@pytest.fixture
def tell(run: Run, tmp_path: Path) -> Callable[..., Told]:
    """Answers a case on a network, both YAML texts."""

    def _tell(case: str, *options: str, network: str = NETWORK) -> Told:
        (tmp_path / "network.yaml").write_text(network, "utf-8")
        path = tmp_path / "case.yaml"
        path.write_text(case, "utf-8")
        return Told(run, path, *options)

    return _tell


@pytest.fixture
def audited(run: Run, tmp_path: Path) -> Callable[[str], str]:
    """Audit of a YAML text, in one line."""

    def _audited(network: str) -> str:
        path = tmp_path / "network.yaml"
        path.write_text(network, "utf-8")
        return " ".join(run("audit", str(path)).stdout.split())

    return _audited


def test_without_an_aim_every_coefficient_is_told_by_its_range(tell: Callable[..., Told]) -> None:
    told = tell(FERMENTATION)
    assert told.result.exit_code == 0
    assert told.form["status"] == "solved"
    assert "no aim: every coefficient is told by its range" in told.text
    assert "glucose -> [0…2] lactate + [0…2] ethanol + [0…2] carbon dioxide" in told.text
    assert "one mol more lactate goes with -1 ethanol, -1 carbon dioxide" in told.text
    for key in ("ladder", "relaxations", "limits", "other_order"):
        assert told.form[key] == []
    for key in ("aim", "conflict", "fluxes", "proof", "without_effect"):
        assert told.form[key] is None


def test_a_rung_in_which_the_aim_has_no_bound_says_what_runs_away(
    tell: Callable[..., Told],
) -> None:
    told = tell(WITH_HYDROGEN + "aim: most lactate\n", "--order", "energy,redox,pathways")
    assert told.result.exit_code == 0
    assert told.form["aim"]["exact"] == "7/3"
    rungs = {item["rung"]: item for item in told.form["ladder"]}
    for name in ("elements", "pathways", "redox"):
        assert (rungs[name]["value"], rungs[name]["loss"]) == (None, None)
        assert rungs[name]["reason"] == f"hydrogen taken up, {ENDLESS}"
    assert (rungs["energy"]["exact"], rungs["energy"]["loss"]) == ("7/3", None)
    assert f"elements, pathways, redox: hydrogen taken up, {ENDLESS}." in told.text
    shares = told.form["shares"]
    assert shares["layers"] == []
    assert shares["reason"] == "with elements alone the aim has no best value"
    assert "No shares: with elements alone the aim has no best value." in told.text
    assert "energy unbounded; redox unbounded; pathways 2.33" in told.text


def test_energy_as_an_aim_has_no_meaning_above_its_rung(tell: Callable[..., Told]) -> None:
    told = tell(FERMENTATION + "aim: most ATP\n")
    assert told.form["aim"]["exact"] == "2"
    rungs = {item["rung"]: item for item in told.form["ladder"]}
    for name in ("elements", "pathways", "redox"):
        assert rungs[name]["value"] is None
        assert rungs[name]["reason"] == ("energy carriers are not balanced above the rung 'energy'")
    assert "has no meaning without the energy layer" in told.form["shares"]["reason"]


def test_an_aim_without_any_bound_is_refused_in_words(tell: Callable[..., Told]) -> None:
    told = tell(WITH_AIR + "aim: most lactate\n", "--fluxes", "--proof")
    assert told.result.exit_code == 1
    assert told.form["status"] == "unbounded"
    assert told.form["aim"]["value"] is None
    assert "the aim 'most lactate' has no best value: " in told.text
    assert "can grow together without limit" in told.text
    (finding,) = [item for item in told.form["findings"] if item["severity"] == "error"]
    assert finding["code"] == "YN602"
    assert finding["hint"] == (
        "Bound one of these: measure it, demand a limit, or take it off the equation."
    )
    for key in ("relaxations", "limits"):
        assert told.form[key] == []
    # The ranges are an answer all the same.
    assert {item["status"] for item in told.form["coefficients"]} == {"open"}


def test_a_change_that_leaves_no_bound_says_what_runs_away(tell: Callable[..., Told]) -> None:
    told = tell(WITH_HYDROGEN + "aim: most lactate\n")
    first, second, *others = told.form["relaxations"]
    assert first["parts"] == [{"kind": "carrier", "name": "ATP"}]
    assert second["parts"] == [{"kind": "compound", "name": "oxygen"}]
    for item in (first, second):
        assert (item["value"], item["gain"]) == (None, None)
        assert "carbon dioxide taken up" in item["reason"]
        assert item["reason"].endswith(" can grow together without limit")
        assert "there is no best value: " in item["words"]
    assert all(item["value"] is not None for item in others)
    assert f"With ATP free there is no best value: hydrogen taken up, {ENDLESS}." in told.text


def test_a_tightening_that_nothing_can_keep_is_no_bound_either(tell: Callable[..., Told]) -> None:
    told = tell(WITH_HYDROGEN.replace("? lactate", "7/3 lactate") + "aim: least hydrogen\n")
    assert told.form["aim"]["exact"] == "2"
    *_, last = told.form["relaxations"]
    assert last["parts"][0]["kind"] == "tightening"
    assert last["value"] is None
    assert last["reason"] == "then no point keeps all statements"
    assert "Without net uptake of carbon dioxide, then no point keeps all statements." in told.text
    assert "there is no best value: then" not in told.text


SECOND = "  second lactate dehydrogenase: pyruvate + NADH <-> lactate in the cell\n"
PHOSPHATASE = "  phosphatase: glucose 6-phosphate -> glucose\n"
PERMEASE = "  permease: glucose -> glucose 6-phosphate\n"


def test_a_loop_that_runs_for_nothing_is_left_out_and_named(tell: Callable[..., Told]) -> None:
    told = tell(FERMENTATION + "aim: most lactate\n", "--fluxes", network=NETWORK + SECOND)
    loop = ["lactate dehydrogenase", "second lactate dehydrogenase"]
    assert told.form["fluxes"]["loops"] == [loop]
    assert f"Loop that could turn for nothing, left out: {', '.join(loop)}." in told.text
    found = {item["reaction"]: item for item in told.form["fluxes"]["reactions"]}
    # Both together carry what the aim needs, and neither has a range that ends.
    assert sum(abs(found[name]["flux"]) for name in loop) == 2
    assert all(found[name]["low"] is found[name]["high"] is None for name in loop)
    assert "least total flux" in told.text


def test_two_loops_are_two(tell: Callable[..., Told]) -> None:
    network = NETWORK + SECOND + "  second hydrogenase: hydrogen <-> NADH\n"
    told = tell(FERMENTATION + "aim: most lactate\n", "--fluxes", network=network)
    assert sorted(told.form["fluxes"]["loops"]) == [
        ["hydrogenase", "second hydrogenase"],
        ["lactate dehydrogenase", "second lactate dehydrogenase"],
    ]


def test_a_loop_that_spends_energy_is_told_with_what_it_voids(
    audited: Callable[[str], str], tell: Callable[..., Told]
) -> None:
    text = audited(NETWORK + PHOSPHATASE)
    assert "note YN417: ATP can be spent for nothing in the loop hexokinase, phosphatase" in text
    assert "With 'energy surplus: none' a case should knock one of these out." in text
    # It is no loop that runs for nothing, so it is not among those left out of the fluxes.
    told = tell(FERMENTATION + "aim: most lactate\n", "--fluxes", network=NETWORK + PHOSPHATASE)
    assert told.form["fluxes"]["loops"] == []


def test_a_loop_that_makes_energy_is_refused(
    audited: Callable[[str], str], tell: Callable[..., Told]
) -> None:
    network = NETWORK.replace("glucose + ATP -> glucose 6", "glucose + ATP <-> glucose 6")
    words = "ATP comes from nothing in the loop hexokinase backwards, permease"
    assert f"error YN408: {words}" in audited(network + PERMEASE)
    told = tell(FERMENTATION + "aim: most lactate\n", network=network + PERMEASE)
    assert told.result.exit_code == 1
    assert f"error YN408: {words}" in f"{told.text} {told.errors}"
    assert told.form["status"] == "refused"
    assert told.form["aim"] is None


# Carbon and ATP hold galactose back. Hexokinase backwards and the permease make ATP from nothing.
GALACTOSE = (
    NETWORK.replace("out: [", "out: [galactose, ").replace(
        "compounds:\n", "compounds:\n  galactose: C6H12O6\n"
    )
    + PERMEASE
    + "  galactose path: glucose 6-phosphate + ATP -> galactose\n"
)
TO_GALACTOSE = CASE.format(equation="glucose -> ? lactate + ? galactose") + "aim: most galactose\n"


def _names(told: Told) -> list[list[str]]:
    return [[part["name"] for part in item["parts"]] for item in told.form["relaxations"]]


def test_a_reaction_that_would_make_energy_from_nothing_is_counted_only(
    tell: Callable[..., Told],
) -> None:
    told = tell(TO_GALACTOSE, network=GALACTOSE)
    assert told.form["aim"]["exact"] == "3/4"
    assert ["ATP"] in _names(told)
    assert not any("hexokinase" in names for names in _names(told))
    assert told.form["not_offered"] == 1
    assert "1 reaction backwards would make ATP from nothing." in told.text


def test_a_pair_is_not_offered_that_makes_energy_from_nothing(tell: Callable[..., Told]) -> None:
    # With the lactate measured, carbon and ATP hold at once, so that nothing helps alone.
    told = tell(TO_GALACTOSE + "measured:\n  lactate: 1/2\n", network=GALACTOSE)
    assert told.form["aim"]["exact"] == "3/4"
    assert "Nothing helps alone, so pairs were tried." in told.text
    assert ["ATP", "measured lactate"] in _names(told)
    assert not any("hexokinase" in names for names in _names(told))


@pytest.mark.parametrize("surplus", ["lost", "none"])
def test_maintenance_that_cannot_be_paid_is_what_is_blamed(
    surplus: str, tell: Callable[..., Told]
) -> None:
    network = """
network: Small
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
crossing:
  in: [glucose, ammonia]
  out: [lactate, ethanol, biomass]
  either: [carbon dioxide, water]
reactions:
  glycolysis: glucose -> 2 pyruvate + 2 NADH + 2 ATP
  lactate dehydrogenase: pyruvate + NADH -> lactate
  alcohol dehydrogenase: pyruvate + NADH -> ethanol + carbon dioxide
growth:
  biomass: {formula: CH1.8O0.5N0.2, ash: 0.05}
  per: mol
  equation: 1/3 pyruvate + 2 ATP + ? ammonia + ? NADH -> biomass + ? water
maintenance: {ATP: 2.5 mmol/g/h}
"""
    case = f"energy surplus: {surplus}\nconditions:\n  substrate uptake: 1 mmol/g/h\n"
    told = tell(FERMENTATION + case + "aim: most lactate\n", network=network)
    assert told.result.exit_code == 1
    assert told.form["status"] == "infeasible"
    # Glycolysis gives 2 ATP per glucose, whatever becomes of it, and 2.5 are asked for.
    (member,) = told.form["conflict"]["members"]
    assert (member["kind"], member["name"]) == ("condition", "maintenance")
    assert member["needs"] == -0.5
    assert member["unit"] == "mmol/g/h"
    assert "ATP" in told.form["conflict"]["lacking"]
