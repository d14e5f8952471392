"""Trade-offs: what they need, what they give up, where a coefficient turns, and their words."""

from __future__ import annotations

import csv
import io
import json
from dataclasses import replace
from fractions import Fraction
from typing import TYPE_CHECKING, Any

import pytest

from yieldnet.foundation.errors import InputError
from yieldnet.model.network import Direction
from yieldnet.optimum.polygon import Shape
from yieldnet.optimum.ranges import Range
from yieldnet.report.tradeoff_view import (
    axis_label,
    corner_name,
    edge_words,
    region_headline,
    region_letter,
    region_notes,
    region_tables,
    switch_words,
    tradeoff_findings,
    tradeoff_form,
    tradeoff_records,
    tradeoff_title,
    turn_words,
)
from yieldnet.studies.tradeoff import Change, trade_off
from yieldnet.verbs import predict, read_case, tradeoff

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from click.testing import Result

    from yieldnet.model.case import Case
    from yieldnet.studies.tradeoff import Tradeoff

    Run = Callable[..., Result]

EXAMPLE = "examples/succinate-from-xylose/case.yaml"
MIXED = "examples/missing-coefficients/case.yaml"
LYSINE = "examples/lysine/case.yaml"


@pytest.fixture(scope="module")
def xylose(checkout: Path) -> Case:
    return read_case(checkout / EXAMPLE)


@pytest.fixture(scope="module")
def lysine(checkout: Path) -> Case:
    return read_case(checkout / LYSINE)


@pytest.fixture(scope="module")
def against_biomass(xylose: Case) -> Tradeoff:
    return trade_off([xylose])


@pytest.fixture(scope="module")
def two(xylose: Case) -> Tradeoff:
    return trade_off([xylose, replace(xylose, title="Transhydrogenase left in", knock_outs=())])


@pytest.fixture(scope="module")
def open_case(tmp_path_factory: pytest.TempPathFactory) -> Case:
    """A second sugar without a bound: succinate and its use run away together."""
    path = tmp_path_factory.mktemp("open") / "case.yaml"
    path.write_text(
        "case: Two sugars\nnetwork: facultative-succinate\n"
        "strain: mixed-acid wild type without air\n"
        "equation: glucose + ? xylose -> ? acetate + ? ethanol + ? succinate + ? formate"
        " + ? lactate\n"
        "either side: [carbon dioxide, water]\naim: most succinate\n",
        "utf-8",
    )
    return read_case(path)


# What is asked -----------------------------------------------------------------------------------


def test_biomass_and_the_aim_are_the_axes_unless_told(against_biomass: Tradeoff) -> None:
    assert (against_biomass.x.compound, against_biomass.y.compound) == ("biomass", "succinate")
    assert against_biomass.basis == "xylose"
    assert tradeoff_title(against_biomass) == "succinate against biomass, per mol xylose"


def test_over_oxygen_is_the_axis_of_that_name(xylose: Case) -> None:
    assert trade_off([xylose], over="oxygen") == trade_off([xylose], x="oxygen")


def test_growth_rates_are_biomass_at_the_uptake(xylose: Case, against_biomass: Tradeoff) -> None:
    (region,) = trade_off([xylose], over="growth-rate").regions
    mass = xylose.compound("biomass").weight.molar_mass
    assert mass is not None
    assert xylose.substrate_uptake is not None
    factor = xylose.substrate_uptake.value * mass
    assert [(corner.x, corner.y, corner.coefficients) for corner in region.corners] == [
        (corner.x * factor, corner.y, corner.coefficients)
        for corner in against_biomass.regions[0].corners
    ]


def test_the_corner_of_most_product_is_what_predict_says_without_growth(xylose: Case) -> None:
    # One question by two ways: the product held against itself, and the ladder of a case whose
    # statements about biomass are left out.
    bare = replace(xylose, measured=xylose.measured[1:], growth_rate=None)
    assert [item.compound for item in bare.measured] == ["formate"]
    best = predict(bare).aim
    assert best is not None
    assert best.value == trade_off([bare]).regions[0].polygon.y.high


@pytest.mark.parametrize(
    ("name", "options", "codes", "words"),
    [
        ("lysine", {}, ["YN503"], "'biomass' is not in the overall equation"),
        ("lysine", {"x": "oxygn"}, ["YN503"], "Did you mean 'oxygen'"),
        ("lysine", {"x": "glucose"}, ["YN502"], "its coefficient is always 1"),
        ("lysine", {"x": "L-lysine"}, ["YN701"], "both axes would show 'L-lysine'"),
        ("lysine", {"over": "growth-rate"}, ["YN503", "YN709"], "growth rates need the"),
        ("aimless", {}, ["YN701"], "a trade-off needs a product"),
        ("infeasible", {"x": "oxygen"}, ["YN702"], "infeasible as it stands"),
    ],
)
def test_what_cannot_be_shown_is_refused_with_the_way_out(
    xylose: Case,
    lysine: Case,
    name: str,
    options: dict[str, str],
    codes: list[str],
    words: str,
) -> None:
    cases = {
        "lysine": lysine,
        "aimless": replace(xylose, aim=None),
        "infeasible": replace(
            xylose, demands=(replace(xylose.demands[0], low=Fraction(9), high=None),)
        ),
    }
    with pytest.raises(InputError, match=words) as caught:
        trade_off([cases[name]], **options)
    assert [item.code for item in caught.value.findings] == codes
    assert all(item.hint for item in caught.value.findings)


def test_cases_of_different_bases_are_not_laid_over_each_other(xylose: Case, lysine: Case) -> None:
    with pytest.raises(InputError, match="YN710") as caught:
        trade_off([xylose, lysine], x="oxygen", y="carbon dioxide")
    (finding,) = caught.value.findings
    assert (finding.left, finding.right) == ("first case: xylose", "this case: glucose")


def test_a_compound_counted_the_other_way_is_not_laid_over(xylose: Case) -> None:
    turned = replace(
        xylose,
        coefficients=tuple(
            replace(item, side=Direction.CONSUMED) if item.name == "carbon dioxide" else item
            for item in xylose.coefficients
        ),
    )
    with pytest.raises(InputError, match="YN710") as caught:
        trade_off([xylose, turned], y="carbon dioxide")
    (finding,) = caught.value.findings
    assert (finding.left, finding.right) == ("first case: either", "this case: consumed")


@pytest.mark.parametrize(
    ("number", "options", "words"),
    [
        (0, {}, "a trade-off needs a case"),
        (1, {"over": "time"}, "over='time' is not one of growth-rate, oxygen"),
        (1, {"over": "oxygen", "x": "biomass"}, "stands beside x"),
    ],
)
def test_wrong_calls_are_told(
    xylose: Case, number: int, options: dict[str, str], words: str
) -> None:
    with pytest.raises(ValueError, match=words):
        trade_off([xylose][:number], **options)


# What is found -----------------------------------------------------------------------------------


def test_statements_about_the_axes_are_given_up_and_named(
    xylose: Case, against_biomass: Tradeoff
) -> None:
    (region,) = against_biomass.regions
    assert region.given_up == (
        "measured biomass: 0.11 ± 0.01 g/g",
        "growth rate / substrate uptake: 0.08 ± 0.004 1/h / 4.9 ± 0.2 mmol/g/h",
    )
    (over_oxygen,) = trade_off([xylose], over="oxygen").regions
    assert over_oxygen.given_up == ("demand oxygen: at most 0.65",)
    # What is not on an axis holds: the measured formate, and the demand on oxygen here.
    for corner in region.corners:
        ranges = dict(corner.coefficients)
        assert ranges["formate"].single
        assert ranges["oxygen"].high is not None
        assert ranges["oxygen"].high <= Fraction(65, 100)
    assert region_notes(against_biomass, 0) == (
        "Given up, since it is on an axis: " + "; ".join(region.given_up) + ".",
    )


def test_an_exact_coefficient_on_an_axis_is_given_up(tmp_path: Path) -> None:
    path = tmp_path / "case.yaml"
    path.write_text(
        "case: Exact\nnetwork: lysine-coryneform\nstrain: no transhydrogenase\n"
        "equation: glucose + ? ammonia + 1 oxygen -> ? L-lysine\n"
        "either side: [carbon dioxide, water]\naim: most L-lysine\n",
        "utf-8",
    )
    (region,) = tradeoff(path, over="oxygen").regions
    assert region.given_up == ("written oxygen: 1",)
    assert region.polygon.shape is Shape.SEGMENT


def test_a_measured_value_of_the_aim_counts_where_the_aim_is_on_no_axis(lysine: Case) -> None:
    (region,) = trade_off([lysine], x="oxygen", y="carbon dioxide").regions
    assert region.given_up == ()
    (corner,) = region.corners
    ranges = dict(corner.coefficients)
    assert ranges["L-lysine"].single
    assert lysine.measured[0].compound == "L-lysine"
    assert ranges["L-lysine"].low == lysine.measured[0].value


def test_where_carbon_dioxide_turns_it_is_zero(xylose: Case, against_biomass: Tradeoff) -> None:
    (region,) = against_biomass.regions
    (edge,) = [
        edge for edge in region.edges if any(item.change is Change.TURNS for item in edge.switches)
    ]
    (turn,) = [item for item in edge.switches if item.change is Change.TURNS]
    assert turn.compound == "carbon dioxide"
    first, last = turn.places
    assert first == last
    # Both ends are unique, so the place is where the straight line between them crosses zero.
    here, there = region.corners[edge.start], region.corners[edge.end]
    before, after = (dict(at.coefficients)["carbon dioxide"].low for at in (here, there))
    assert before is not None
    assert after is not None
    share = before / (before - after)
    assert first == (here.x + share * (there.x - here.x), here.y + share * (there.y - here.y))
    told = switch_words(against_biomass, region, edge, turn)
    assert told == "carbon dioxide turns from given off to taken up at biomass 0.584"
    # The edge goes to the left; a picture is read to the right.
    assert turn_words(region, edge, turn) == "from here carbon dioxide given off"


def test_changes_are_read_to_the_right_and_upwards(against_biomass: Tradeoff) -> None:
    (region,) = against_biomass.regions
    words = [edge_words(region, edge) for edge in region.edges]
    assert words == [
        "urea appears",
        "ethanol, lactate may vanish",
        "oxygen appears",
        "urea appears",
        "oxygen, ethanol, lactate may vanish",
    ]


def test_both_engines_find_the_same(xylose: Case, against_biomass: Tradeoff) -> None:
    assert trade_off([xylose], engine="optlang") == against_biomass


def test_an_unbounded_region_is_declared(open_case: Case) -> None:
    result = trade_off([open_case], x="xylose")
    (region,) = result.regions
    assert region.polygon.shape is Shape.UNBOUNDED
    # Xylose has 20 available electrons and succinate 14, so 10/7 of it are made of each xylose.
    assert region.polygon.rays == (
        (Fraction(7, 10), Fraction(1)),
        (Fraction(1), Fraction(0)),
    )
    assert region_headline(result, 0) == "succinate unbounded; xylose unbounded"
    notes = region_notes(result, 0)
    assert notes[0].startswith("Unbounded: from corner 1 along +0.700 xylose with +1 succinate")
    assert tradeoff_form(result)["status"] == "unbounded"


def test_the_headline_of_a_level_without_end_tells_no_other_value(
    against_biomass: Tradeoff,
) -> None:
    # The most succinate goes on for ever along biomass, so no biomass belongs to it.
    (region,) = against_biomass.regions
    level = replace(
        region.polygon,
        rays=((Fraction(1), Fraction(0)),) * 2,
        x=Range(Fraction(0), None),
        y=Range(Fraction(0), region.corners[4].y),
    )
    result = replace(against_biomass, regions=(replace(region, polygon=level),))
    assert region_headline(result, 0) == "most succinate 1.04 mol/mol; biomass unbounded"


def test_a_region_without_a_corner_is_declared(open_case: Case, against_biomass: Tradeoff) -> None:
    # No such case is known among the networks here, so its words are tried on a made-up polygon.
    polygon = replace(
        against_biomass.regions[0].polygon, corners=(), rays=((Fraction(1), Fraction(0)),)
    )
    region = replace(against_biomass.regions[0], polygon=polygon, corners=(), edges=())
    result = replace(against_biomass, regions=(region,))
    assert region_tables(result, 0) == ()
    assert region_notes(result, 0)[0] == (
        "Unbounded, without a corner: runs away along +1 biomass with 0 succinate."
    )


# How it is shown ---------------------------------------------------------------------------------


def test_axes_have_their_units(xylose: Case, against_biomass: Tradeoff) -> None:
    assert axis_label(against_biomass, against_biomass.x) == "biomass [mol/mol xylose]"
    gases = trade_off([xylose], x="oxygen", y="carbon dioxide")
    assert axis_label(gases, gases.x) == "oxygen taken up [mol/mol xylose]"
    assert axis_label(gases, gases.y) == "carbon dioxide given off [mol/mol xylose]"
    growth = trade_off([xylose], over="growth-rate")
    assert axis_label(growth, growth.x) == "growth rate [1/h]"
    assert region_tables(growth, 0)[0].columns == (
        "corner",
        "growth rate, 1/h",
        "succinate, mol/mol",
        "g/g",
    )


def test_the_headline_tells_both_ends(against_biomass: Tradeoff) -> None:
    assert region_headline(against_biomass, 0) == (
        "most succinate 1.04 mol/mol (biomass 0); most biomass 0.942 mol/mol (succinate 0…0.496)"
    )


def test_tables_hold_corners_equations_and_edges(against_biomass: Tradeoff) -> None:
    corners, equations, edges = region_tables(against_biomass, 0)
    assert corners.rows[3] == ("4", "0.111", "0.0185", "1.03", "0.808")
    assert equations.rows[4] == (
        "5",
        "xylose + 0.626 carbon dioxide -> 1.04 succinate + 0.210 formate + 0.626 acetate"
        " + 0.416 water",
    )
    assert edges.rows[1] == ("2", "3", "upright", "ethanol may vanish; lactate may vanish")
    assert edges.rows[3] == ("4", "5", "-0.119", "urea vanishes")


def test_several_cases_have_letters(two: Tradeoff, against_biomass: Tradeoff) -> None:
    assert [region_letter(two, place) for place in (0, 1)] == ["A", "B"]
    assert corner_name(two, 1, 2) == "B3"
    assert corner_name(against_biomass, 0, 2) == "3"
    many = replace(two, regions=two.regions * 14)
    assert region_letter(many, 27) == "28."


def test_a_case_with_more_reactions_holds_the_other(two: Tradeoff) -> None:
    small, large = two.regions
    for start, end in large.polygon.edges():
        (x0, y0), (x1, y1) = large.polygon.corners[start], large.polygon.corners[end]
        for x, y in small.polygon.corners:
            assert (x1 - x0) * (y - y0) - (y1 - y0) * (x - x0) >= 0


def test_findings_of_several_cases_are_told_once(two: Tradeoff) -> None:
    every = [item for region in two.regions for item in region.findings]
    assert len(tradeoff_findings(two)) == len(set(every))


def test_the_json_holds_every_number_exactly(against_biomass: Tradeoff) -> None:
    form: dict[str, Any] = json.loads(json.dumps(tradeoff_form(against_biomass), allow_nan=False))
    assert form["format"] == 1
    assert form["status"] == "solved"
    assert form["x"] == {"name": "biomass", "compound": "biomass", "unit": "mol/mol"}
    (case,) = form["cases"]
    assert case["shape"] == "polygon"
    for corner, at in zip(case["corners"], against_biomass.regions[0].corners, strict=True):
        assert (Fraction(corner["exact_x"]), Fraction(corner["exact_y"])) == (at.x, at.y)
        assert corner["x"] == float(at.x)
    assert [(edge["from"], edge["to"]) for edge in case["edges"]] == [
        (1, 2),
        (2, 3),
        (3, 4),
        (4, 5),
        (5, 1),
    ]
    turn = case["edges"][2]["switches"][1]
    assert turn["change"] == "turns"
    assert len(turn["places"]) == 2
    assert case["edges"][1]["slope"] is None


def test_the_csv_has_a_row_a_corner_and_the_coefficients_of_all_cases(two: Tradeoff) -> None:
    header, rows = tradeoff_records(two)
    assert len(rows) == sum(len(region.corners) for region in two.regions)
    assert all(len(row) == len(header) for row in rows)
    assert header[:4] == ("case", "corner", "biomass mol/mol", "succinate mol/mol")
    assert "oxygen low mol/mol" in header
    assert Fraction(rows[2][4]) == two.regions[0].corners[2].x


# The command -------------------------------------------------------------------------------------


def test_the_command_shows_text_csv_and_json(run: Run) -> None:
    text = run("tradeoff", EXAMPLE)
    assert text.exit_code == 0
    assert "most succinate 1.04 mol/mol" in text.output
    assert max(len(line) for line in text.output.splitlines()) <= 80
    table = list(csv.reader(io.StringIO(run("tradeoff", EXAMPLE, "--csv").output)))
    assert len(table) == 6
    form = json.loads(run("tradeoff", EXAMPLE, "--over", "growth-rate", "--json").output)
    assert form["x"]["unit"] == "1/h"


def test_the_command_tells_what_is_doubtful(run: Run, tmp_path: Path, checkout: Path) -> None:
    path = tmp_path / "case.yaml"
    text = (checkout / EXAMPLE).read_text("utf-8")
    text = text.replace("../../models/facultative-succinate.yaml", "facultative-succinate")
    path.write_text(text.replace("po_nadh: 1.0", "po_nadh: 3.0"), "utf-8")
    result = run("tradeoff", str(path))
    assert result.exit_code == 0
    assert "warning YN412" in result.output
    form = json.loads(run("tradeoff", str(path), "--json").output)
    assert [item["code"] for item in form["findings"]] == ["YN412"]


def test_the_command_takes_several_cases(run: Run, tmp_path: Path, checkout: Path) -> None:
    other = tmp_path / "other.yaml"
    text = (checkout / EXAMPLE).read_text("utf-8")
    text = text.replace("../../models/facultative-succinate.yaml", "facultative-succinate")
    other.write_text(text.replace("first estimate", "second estimate"), "utf-8")
    result = run("tradeoff", EXAMPLE, str(other))
    assert result.exit_code == 0, result.output
    assert "Succinate from hardwood xylose, second estimate" in result.output
    assert {"A5", "B5"} <= set(result.output.split())
    refused = run("tradeoff", EXAMPLE, LYSINE, "--x", "oxygen", "--y", "carbon dioxide")
    assert refused.exit_code == 1
    assert "YN710" in refused.output


@pytest.mark.parametrize("form", [[], ["--json"]], ids=["text", "json"])
def test_an_unbounded_trade_off_ends_with_1(run: Run, open_case: Case, form: list[str]) -> None:
    result = run("tradeoff", open_case.file, "--x", "xylose", *form)
    assert result.exit_code == 1
    assert "nbounded" in result.output


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        ([], "Missing argument 'CASE...'"),
        ([EXAMPLE, "--over", "time"], "--over"),
        ([EXAMPLE, "--over", "oxygen", "--x", "biomass"], "leave --x out"),
        ([EXAMPLE, "--picture", "a.pdf"], "ends in .svg or .png"),
    ],
)
def test_wrong_usage_ends_with_2(run: Run, arguments: list[str], words: str) -> None:
    result = run("tradeoff", *arguments)
    assert result.exit_code == 2
    assert words in result.output


def test_a_refused_case_ends_with_1(run: Run) -> None:
    assert run("tradeoff", LYSINE).exit_code == 1
    form = json.loads(run("tradeoff", LYSINE, "--json").output)
    assert form["status"] == "refused"
    assert [item["code"] for item in form["findings"]] == ["YN503"]
