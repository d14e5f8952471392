"""Screens of knock-outs: ranking, pairs that matter only together, estimates, interruptions."""

from __future__ import annotations

import csv
import io
import json
from itertools import combinations
from pathlib import Path

import pytest
from click.testing import CliRunner

import yieldnet
from yieldnet.cli.main import main
from yieldnet.studies.behaviour import behaviour
from yieldnet.studies.screen import Score, screen_case
from yieldnet.studies.setting import set_up
from yieldnet.verbs import screen

EXAMPLES = Path(__file__).resolve().parent.parent.parent / "examples"
XYLOSE = EXAMPLES / "succinate-from-xylose" / "case.yaml"
SMALL = """
network: Small cell
compounds: {triose: C3H6O3}
carriers: {ATP: {kind: energy}}
crossing: {in: [glucose], out: [biomass, lactate, acetate, 3-hydroxypropionate]}
reactions:
  fermentation: glucose -> 2 triose + 2 ATP
  lactate path: triose -> lactate
  acetate path: triose -> 3/2 acetate
  side path: triose -> 3-hydroxypropionate
growth:
  biomass: {formula: CH2O}
  equation: 1/6 glucose + 1/6 ATP -> biomass
"""


@pytest.fixture
def small(tmp_path: Path) -> Path:
    (tmp_path / "n.yaml").write_text(SMALL, encoding="utf-8")
    case = tmp_path / "c.yaml"
    case.write_text(
        "case: Small\nnetwork: n.yaml\n"
        "equation: glucose -> ? biomass + ? lactate + ? acetate + ? 3-hydroxypropionate\n"
        "aim: most lactate\n",
        encoding="utf-8",
    )
    return case


def test_the_pair_that_closes_every_other_way_out_is_found(small: Path) -> None:
    result = screen(small, depth=2)
    best = result.entries[0]
    assert best.names == ("acetate path", "side path")
    assert best.together
    assert best.score == pytest.approx(2 / 3, abs=1e-6)
    assert best.exact is not None
    assert best.exact.guaranteed is not None
    assert abs(float(best.exact.guaranteed) - best.score) < 1e-6
    assert result.essential == ("fermentation",)


@pytest.mark.parametrize("score", list(Score))
def test_a_screen_equals_exact_problems_one_by_one(small: Path, score: Score) -> None:
    case = yieldnet.read_case(small)
    setting = set_up(case)
    result = screen_case(case, depth=2, score=score, growth_share=0.5)
    told = {frozenset(item.names): item.score for item in result.entries}
    names = setting.candidates()
    host = behaviour(setting, setting.problem).most_biomass
    assert host is not None
    for size in (1, 2):
        for members in combinations(names, size):
            found = behaviour(setting, setting.without(members))
            if frozenset(members) not in told or not found.feasible:
                continue
            assert found.guaranteed is not None
            assert found.most_biomass is not None
            exact = found.guaranteed
            if score is Score.PRODUCT_TIMES_GROWTH:
                exact *= found.most_biomass
            if score is Score.PRODUCT:
                from fractions import Fraction

                from yieldnet.optimum.problem import Bounds

                held = setting.without(members).with_columns(
                    {setting.biomass_column: Bounds(Fraction(host, 2), None)}
                )
                exact = setting.optimiser.optimise(held, setting.product_objective()).value
            assert told[frozenset(members)] == pytest.approx(float(exact), abs=1e-6)


def test_chains_are_counted_once() -> None:
    result = screen(XYLOSE)
    assert ("fumarase", "fumarate reductase") in result.chains
    assert result.looked_at < len(set_up(yieldnet.read_case(XYLOSE)).candidates()) + 1


def test_groups_are_switched_off_as_wholes() -> None:
    result = screen(XYLOSE, groups=True)
    assert result.chains == ()
    assert (
        "reductive branch"
        in {name for item in result.entries for name in item.names} | set(result.essential)
        or result.without_effect
    )


def test_a_screen_that_would_take_long_is_estimated_first(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    monkeypatch.setattr("yieldnet.studies.screen.MAX_SECONDS", 0.0)
    with pytest.raises(yieldnet.InputError, match="would take about") as caught:
        screen(XYLOSE, depth=2)
    assert [item.code for item in caught.value.findings if item.severity == "error"] == ["YN706"]
    assert screen(XYLOSE, depth=2, yes=True).entries


def test_an_interrupted_screen_keeps_what_is_finished() -> None:
    def stop(done: int, total: int) -> None:
        assert done < total
        raise KeyboardInterrupt

    result = screen(XYLOSE, depth=2, tick=stop)
    assert result.interrupted
    assert 0 < result.looked_at < 562
    assert "YN707" in [item.code for item in result.findings]


def test_a_screen_needs_growth() -> None:
    with pytest.raises(yieldnet.InputError, match="needs biomass") as caught:
        screen(EXAMPLES / "lysine" / "case.yaml")
    assert [item.code for item in caught.value.findings] == ["YN701"]


def test_the_command_prints_text_csv_and_json() -> None:
    text = CliRunner().invoke(main, ["screen", str(XYLOSE), "--depth", "2"])
    assert text.exit_code == 0
    assert "alcohol dehydrogenase +" in text.output
    assert max(len(line) for line in text.output.split("\n")) <= 80
    table = list(
        csv.DictReader(
            io.StringIO(
                CliRunner().invoke(main, ["screen", str(XYLOSE), "--depth", "2", "--csv"]).output
            )
        )
    )
    assert table[0]["knock-outs"] == "alcohol dehydrogenase; lactate dehydrogenase"
    form = json.loads(
        CliRunner().invoke(main, ["screen", str(XYLOSE), "--depth", "2", "--json"]).output
    )
    assert form["entries"][0]["exact"]["coupling"] == "always"
    assert form["interrupted"] is False


def test_the_table_holds_every_entry() -> None:
    result = screen(XYLOSE, score="product")
    assert len(result.table()) == len(result.entries)
    assert list(result.table().columns) == ["knock-outs", "score", "together"]
