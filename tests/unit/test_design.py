"""Designs for coupling asked of a case: units, refusals, the command."""

from __future__ import annotations

import json
from fractions import Fraction
from pathlib import Path

import pytest
from click.testing import CliRunner

import yieldnet
from yieldnet.cli.main import main
from yieldnet.verbs import couple, knockout

EXAMPLES = Path(__file__).resolve().parent.parent.parent / "examples"
XYLOSE = EXAMPLES / "succinate-from-xylose" / "case.yaml"


def test_the_smallest_set_closes_the_other_ways_out_of_reduced_carriers() -> None:
    design = couple(XYLOSE, least_yield=Fraction(2, 5))
    assert design.sets[0].members == ("alcohol dehydrogenase", "lactate dehydrogenase")
    assert design.sets[0].forced >= Fraction(2, 5)
    # What it says of most growth is what the knock-out itself says.
    told = knockout(XYLOSE, design.sets[0].members).behaviour_after
    assert design.sets[0].behaviour == told


def test_a_yield_with_a_unit_is_turned_into_mol() -> None:
    in_grams = couple(XYLOSE, least_yield="0.3 g/g")
    # 150.13 g xylose and 118.088 g succinate per mol: 0.3 g/g is 0.3814 mol/mol.
    assert float(in_grams.least_yield) == pytest.approx(0.3 * 150.13 / 118.088, rel=1e-4)


def test_more_than_can_be_forced_names_what_forces_most() -> None:
    design = couple(XYLOSE, least_yield="1.5", depth=2)
    assert design.sets == ()
    assert design.best is not None
    assert design.best.forced < Fraction(3, 2)


@pytest.mark.parametrize(
    ("text", "code"), [("0,4", "YN201"), ("0.4 g", "YN203"), ("much", "YN201")]
)
def test_a_yield_that_cannot_be_read_is_a_finding(text: str, code: str) -> None:
    with pytest.raises(yieldnet.InputError, match="least yield") as caught:
        couple(XYLOSE, least_yield=text)
    assert [item.code for item in caught.value.findings if item.severity == "error"] == [code]


def test_a_case_without_growth_is_refused() -> None:
    with pytest.raises(yieldnet.InputError, match="needs biomass") as caught:
        couple(EXAMPLES / "lysine" / "case.yaml", least_yield="0.5")
    assert "YN701" in [item.code for item in caught.value.findings]


def test_groups_are_knocked_out_as_wholes() -> None:
    design = couple(XYLOSE, least_yield="0.4", groups=True)
    groups = yieldnet.read_case(XYLOSE).network.groups()  # type: ignore[union-attr]
    assert groups
    assert all(
        member in groups or not any(member in group for group in groups)
        for item in design.sets
        for member in item.members
    )


def test_the_command_prints_text_and_json() -> None:
    arguments = ["couple", str(XYLOSE), "--yield", "0.4"]
    text = CliRunner().invoke(main, arguments)
    assert text.exit_code == 0
    assert "2 knock-outs at the least" in " ".join(text.output.split())
    assert max(len(line) for line in text.output.split("\n")) <= 80
    form = json.loads(CliRunner().invoke(main, [*arguments, "--json"]).output)
    assert form["sets"][0]["members"] == ["alcohol dehydrogenase", "lactate dehydrogenase"]
    beyond = CliRunner().invoke(main, ["couple", str(XYLOSE), "--yield", "1.5"])
    assert beyond.exit_code == 1
    assert "no set of that size" in " ".join(beyond.output.split())
