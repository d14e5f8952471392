"""One idea before and after: names, ladder, behaviour, coupling words."""

from __future__ import annotations

import json
from fractions import Fraction
from pathlib import Path

import pytest
from click.testing import CliRunner

import yieldnet
from yieldnet.cli.main import main
from yieldnet.studies.behaviour import Coupling, behaviour
from yieldnet.studies.setting import set_up
from yieldnet.verbs import knockout

EXAMPLES = Path(__file__).resolve().parent.parent.parent / "examples"
LYSINE = EXAMPLES / "lysine" / "case.yaml"
XYLOSE = EXAMPLES / "succinate-from-xylose" / "case.yaml"


def _codes(error: yieldnet.InputError) -> list[str]:
    return [item.code for item in error.findings]


def test_malic_enzyme_out_takes_lysine_from_30_37_to_3_4() -> None:
    # Row A1.10 of the published values, LP variants.
    result = knockout(LYSINE, ["malic enzyme"])
    assert result.before.aim is not None
    assert result.after.aim is not None
    assert result.before.aim.value == Fraction(30, 37)
    assert result.after.aim.value == Fraction(3, 4)
    assert result.ladder[-1].rung == "knock-outs"
    assert result.ladder[-1].value == Fraction(3, 4)
    assert result.ladder[-1].loss == Fraction(30, 37) - Fraction(3, 4)


def test_the_ladder_before_is_kept_and_one_rung_is_added() -> None:
    result = knockout(LYSINE, ["malic enzyme"])
    assert result.ladder[:-1] == result.before.ladder


def test_a_measured_case_that_the_idea_breaks_says_so() -> None:
    result = knockout(XYLOSE, ["pyruvate-formate lyase"])
    assert result.after.outcome == "infeasible"
    assert result.ladder[-1].value is None
    assert "no point keeps" in result.ladder[-1].reason
    assert not result.behaviour_after.feasible


def test_an_unknown_name_comes_with_a_near_match() -> None:
    with pytest.raises(yieldnet.InputError, match="Did you mean 'malic enzyme'") as caught:
        knockout(LYSINE, ["malic enzym"])
    assert _codes(caught.value) == ["YN703"]


def test_the_only_uptake_cannot_go() -> None:
    with pytest.raises(yieldnet.InputError, match="leaves no uptake of 'glucose'") as caught:
        knockout(LYSINE, ["glucose phosphotransferase system"])
    assert _codes(caught.value) == ["YN705"]


def test_a_case_without_a_product_cannot_be_studied() -> None:
    case = EXAMPLES / "missing-coefficients" / "case.yaml"
    with pytest.raises(yieldnet.InputError, match="needs a product") as caught:
        knockout(case, ["lactate dehydrogenase"])
    assert "YN701" in _codes(caught.value)


def test_an_infeasible_case_cannot_be_studied() -> None:
    case = EXAMPLES / "contradiction" / "case.yaml"
    with pytest.raises(yieldnet.InputError, match="infeasible as it stands") as caught:
        knockout(case, ["lactate dehydrogenase"])
    assert "YN702" in _codes(caught.value)


def test_what_the_case_switches_off_already_is_told() -> None:
    from yieldnet.studies.knockout import check_names

    found = check_names(yieldnet.read_case(XYLOSE), ["transhydrogenase"])
    assert [item.code for item in found] == ["YN704"]
    assert not found.refused


def test_growth_makes_product_once_nothing_else_takes_the_electrons() -> None:
    result = knockout(XYLOSE, ["alcohol dehydrogenase", "lactate dehydrogenase"])
    before, after = result.behaviour_before, result.behaviour_after
    assert before.coupling is Coupling.NONE
    assert before.guaranteed == 0
    assert after.coupling is Coupling.ALWAYS
    assert after.guaranteed is not None
    assert after.guaranteed > Fraction(2, 5)
    # Growth itself loses nothing, and the most product neither.
    assert after.most_biomass == before.most_biomass
    assert after.most_product == before.most_product


def test_coupling_words_of_a_cell_worked_by_hand(tmp_path: Path) -> None:
    # Of one mol glucose g is fermented: 2 g lactate and 2 g ATP. The rest makes 6 (1 - g) biomass
    # and needs (1 - g) ATP, so g >= 1/3: at most growth, 4 biomass and 2/3 lactate. Less growth
    # still needs ATP, and ATP comes with lactate alone: growth always makes product.
    network = tmp_path / "n.yaml"
    network.write_text(
        "network: Growth by hand\n"
        "compounds: {triose: C3H6O3}\n"
        "carriers: {ATP: {kind: energy}}\n"
        "crossing: {in: [glucose], out: [biomass, lactate]}\n"
        "reactions:\n"
        "  fermentation: glucose -> 2 triose + 2 ATP\n"
        "  lactate path: triose -> lactate\n"
        "growth:\n"
        "  biomass: {formula: CH2O}\n"
        "  equation: 1/6 glucose + 1/6 ATP -> biomass\n",
        encoding="utf-8",
    )
    case = tmp_path / "c.yaml"
    case.write_text(
        "case: By hand\nnetwork: n.yaml\nequation: glucose -> ? biomass + ? lactate\n"
        "aim: most lactate\n",
        encoding="utf-8",
    )
    setting = set_up(yieldnet.read_case(case))
    found = behaviour(setting, setting.problem)
    assert found.most_biomass == 4
    assert found.guaranteed == Fraction(2, 3)
    assert found.product_at_most_growth == Fraction(2, 3)
    assert found.most_product == 2
    assert found.biomass_at_most_product == 0
    assert found.coupling is Coupling.ALWAYS


def test_the_command_shows_both_and_its_json_is_whole() -> None:
    run = CliRunner().invoke(main, ["knockout", str(LYSINE), "malic enzyme"])
    assert run.exit_code == 0
    assert "without 'malic enzyme': most L-lysine 0.750 mol/mol, before 0.811" in " ".join(
        run.output.split()
    )
    assert max(len(line) for line in run.output.split("\n")) <= 80
    form = json.loads(
        CliRunner().invoke(main, ["knockout", str(LYSINE), "malic enzyme", "--json"]).output
    )
    assert form["names"] == ["malic enzyme"]
    assert form["ladder"][-1]["exact"] == "3/4"
    assert form["after"]["status"] == "solved"
    assert set(form["behaviour"]) == {"before", "after"}


def test_the_command_refuses_in_words() -> None:
    run = CliRunner().invoke(main, ["knockout", str(LYSINE), "nothing"])
    assert run.exit_code == 1
    assert "YN703" in run.output
