"""Additions: how candidates fit a network, what is offered, how it is told."""

from __future__ import annotations

import csv
import io
import json
import re
from dataclasses import replace
from fractions import Fraction
from typing import TYPE_CHECKING, Any

import pytest

import yieldnet
from yieldnet.model.binding import bind
from yieldnet.report.additions_view import (
    MOST_ROWS,
    additions_form,
    additions_view,
    refused_additions,
)
from yieldnet.studies.addition_result import COLUMNS, Addition
from yieldnet.studies.candidates import merge

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from click.testing import Result

    from yieldnet.foundation.findings import Finding
    from yieldnet.model.network import Network
    from yieldnet.studies.addition_result import AdditionResult
    from yieldnet.studies.candidates import Merged

    Run = Callable[..., Result]
    NetworkOf = Callable[[str], Network]

F = Fraction
HOST = """
network: Small host
compounds:
  PEP: C3H4O3
  triose: C3H8O3
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
  thioester: {kind: redox, formula: H2}
  spare: {kind: redox, formula: H2}
crossing:
  in: [glucose, oxygen, ammonia]
  out: [biomass, lactate, succinate, acetate]
  either: [carbon dioxide, water]
reactions:
  glycolysis: glucose -> 2 pyruvate + 2 NADH + 2 ATP
  lactate dehydrogenase: pyruvate + NADH -> lactate
  pyruvate dehydrogenase: pyruvate -> acetyl-CoA + carbon dioxide + NADH
  acetate kinase:
    equation: acetyl-CoA + water -> acetate + ATP
    group: acetate
  kinase: PEP -> pyruvate + ATP
  respiration: NADH + 1/2 oxygen -> water + 1.5 ATP
  triose path: triose -> lactate + spare
  thioester path: thioester <-> spare
growth:
  biomass: {formula: CH1.8O0.5N0.2}
  equation: 0.2 glucose + 0.2 ammonia + 2 ATP -> biomass + ? carbon dioxide + ? water + ? NADH
"""
CANDIDATES = """
network: Small candidates
parameters: {{cost: 0.25}}
carriers:
  ATP: {{kind: energy}}
  NADH: {{kind: redox, formula: H2}}
crossing:
  either:
    - carbon dioxide
    - water
reactions:
{reactions}
"""
CASE = """
case: Small
network: network.yaml
equation: glucose + ? oxygen + ? ammonia -> ? biomass + ? lactate + ? acetate + ? succinate
either side: [carbon dioxide, water]
aim: most succinate
"""
TO_SUCCINATE = """
  carboxylation: pyruvate + carbon dioxide + (cost) ATP -> oxaloacetate
  reduction: oxaloacetate + 2 NADH -> succinate + water
  synthase: pyruvate + 2 ATP -> phosphoenolpyruvate
  kinase:
    equation: phosphoenolpyruvate + carbon dioxide -> oxaloacetate
    about: its name is taken
    source: made up for this test
"""


def _candidates(reactions: str) -> str:
    return CANDIDATES.format(reactions=reactions)


@pytest.fixture
def add(tmp_path: Path) -> Callable[..., AdditionResult]:
    """Additions to the small host, of reactions that a test writes."""

    def _add(
        reactions: str, case: str = CASE, network: str = HOST, **options: Any
    ) -> AdditionResult:
        (tmp_path / "network.yaml").write_text(network, "utf-8")
        (tmp_path / "case.yaml").write_text(case, "utf-8")
        (tmp_path / "candidates.yaml").write_text(_candidates(reactions), "utf-8")
        return yieldnet.additions(
            tmp_path / "case.yaml", candidates=tmp_path / "candidates.yaml", **options
        )

    return _add


@pytest.fixture
def merged(network_of: NetworkOf) -> Callable[..., Merged]:
    """Candidates merged into the small host."""
    bound, _ = bind(network_of(HOST))
    return lambda reactions, off=(): merge(bound, off, network_of(_candidates(reactions)))


def _codes(findings: tuple[Finding, ...]) -> list[str]:
    return [item.code for item in findings]


# How candidates fit a network ---------------------------------------------------------------------


def test_a_synonym_is_the_compound_of_the_network(merged: Callable[..., Merged]) -> None:
    found = merged("  synthase: pyruvate + 2 ATP -> phosphoenolpyruvate")
    (idea,) = found.ideas
    assert idea.equations == ("pyruvate + 2 ATP -> PEP",)
    assert found.bound.network.compound("phosphoenolpyruvate") is None


def test_new_inside_compounds_come_along(merged: Callable[..., Merged]) -> None:
    found = merged(TO_SUCCINATE)
    assert found.bound.network.compound("oxaloacetate") is not None
    assert str(dict(found.bound.formulas)["oxaloacetate"]) == "C4H4O5"
    assert found.bound.network.direction("oxaloacetate") is None
    assert found.bound.reaction("carboxylation") is not None


def test_a_name_that_is_taken_gets_a_word_more(merged: Callable[..., Merged]) -> None:
    last = merged(TO_SUCCINATE).ideas[-1]
    assert (last.name, last.reactions) == ("kinase", ("kinase (added)",))
    assert (last.about, last.source) == ("its name is taken", "made up for this test")


def test_a_parameter_of_both_takes_the_value_of_the_network(network_of: NetworkOf) -> None:
    host = HOST.replace("compounds:", "parameters: {cost: 3}\ncompounds:", 1)
    bound, _ = bind(network_of(host))
    found = merge(bound, (), network_of(_candidates(TO_SUCCINATE)))
    assert found.ideas[0].equations == ("pyruvate + carbon dioxide + 3 ATP -> oxaloacetate",)


def test_only_what_a_group_lacks_is_added(merged: Callable[..., Merged]) -> None:
    found = merged("""
  uptake:
    equation: 3 glucose -> 6 pyruvate + 6 NADH + 6 ATP
    group: both
  oxidase:
    equation: NADH + 1/2 oxygen -> water
    group: both
""")
    (idea,) = found.ideas
    assert (idea.name, idea.reactions) == ("both", ("oxidase",))


@pytest.mark.parametrize(
    ("equation", "already"),
    [
        ("glucose -> 2 pyruvate + 2 NADH + 2 ATP", True),
        ("1/2 glucose -> pyruvate + NADH + ATP", True),
        ("2 pyruvate + 2 NADH + 2 ATP -> glucose", False),
        ("glucose <-> 2 pyruvate + 2 NADH + 2 ATP", False),
        ("glucose -> 2 pyruvate + 2 NADH + 3 ATP", False),
    ],
)
def test_what_runs_already_is_no_addition(
    merged: Callable[..., Merged], equation: str, already: bool
) -> None:
    found = merged(f"  again: {equation}")
    assert found.already_there == (("again",) if already else ())
    assert _codes(found.findings) == (["YN704"] if already else [])
    assert len(found.ideas) == (not already)


def test_what_the_case_switches_off_can_be_brought_back(merged: Callable[..., Merged]) -> None:
    off = ("acetate kinase",)
    found = merged("  phosphotransferase: acetyl-CoA + water <-> acetate + ATP", off)
    (idea,) = found.ideas
    # It can do more than the reaction of the network, so it is no mere undoing.
    assert idea.undoes == ()
    (same,) = merged("  phosphotransferase: acetyl-CoA + water -> acetate + ATP", off).ideas
    assert same.undoes == ("acetate kinase",)


def test_what_needs_another_candidate_is_kept_and_said(merged: Callable[..., Merged]) -> None:
    found = merged(TO_SUCCINATE)
    assert [item.needs for item in found.ideas[:3]] == [("oxaloacetate",), ("oxaloacetate",), ()]
    alone = [item for item in found.findings if "does nothing alone" in item.message]
    assert [item.code for item in alone] == ["YN708"] * 3
    assert all(item.severity == "note" for item in alone)


def test_a_reaction_that_does_nothing_changes_nothing(add: Callable[..., AdditionResult]) -> None:
    result = add("  mutase: 2 pyruvate -> pyruvate + pyruvate")
    assert result.without_effect == ("mutase",)


def test_dead_ends_of_dead_ends_are_found(merged: Callable[..., Merged]) -> None:
    found = merged("""
  first: pyruvate <-> malonate semialdehyde
  second: malonate semialdehyde <-> acrylate + 1/2 oxygen
""")
    assert found.ideas == ()
    assert dict(found.not_applicable) == {
        "first": "nothing else in the network makes or uses 'malonate semialdehyde'",
        "second": "nothing else in the network makes or uses 'acrylate'",
    }


# Bad files ----------------------------------------------------------------------------------------


def _expected(path: Path) -> set[tuple[str, int]]:
    first = path.read_text("utf-8").split("\n", 1)[0]
    return {(code, int(line)) for code, line in re.findall(r"(YN\d{3}) at (\d+)", first)}


def _told(findings: tuple[Finding, ...], path: Path) -> set[tuple[str, int]]:
    return {
        (item.code, item.where.line)
        for item in findings
        if item.where is not None and item.where.file == str(path)
    }


# A candidate that fits the network on which the command is tried may not fit the small one; the
# files name that as well.
def test_each_bad_file_gives_the_findings_it_names(checkout: Path, network_of: NetworkOf) -> None:
    paths = sorted((checkout / "tests" / "bad_inputs" / "candidates").glob("*.yaml"))
    assert [path.stem for path in paths] == ["does-not-fit", "unbalanced", "unknown-names"]
    bound, _ = bind(network_of(HOST))
    for path in paths:
        try:
            found = merge(bound, (), yieldnet.read_network(path)).findings
        except yieldnet.InputError as error:
            found = error.findings
        assert _told(found, path) == _expected(path), [str(item) for item in found]


def test_each_reason_why_something_does_not_fit_is_told(
    checkout: Path, network_of: NetworkOf
) -> None:
    bound, _ = bind(network_of(HOST))
    path = checkout / "tests" / "bad_inputs" / "candidates" / "does-not-fit.yaml"
    found = merge(bound, (), yieldnet.read_network(path))
    assert dict(found.not_applicable) == {
        "hydrogenase": "the network has no carrier 'reduced ferredoxin'",
        "triose oxidation": "'triose' is C3H8O3 in the network and C3H6O3 here",
        "thioester kinase": "the carrier 'thioester' carries something else in the network",
        "spare of another kind": "'spare' is a carrier in the network",
        "path to nowhere": "nothing else in the network makes or uses 'lost intermediate'",
    }
    assert found.already_there == ("doubled glycolysis",)
    assert any("'strains' of the candidate file" in item.message for item in found.findings)
    assert all(item.severity == "note" for item in found.findings)


def test_a_candidate_that_does_not_close_is_refused_and_the_rest_answered(
    run: Run, checkout: Path
) -> None:
    arguments = (
        "additions",
        "examples/lysine/case.yaml",
        "--from",
        "tests/bad_inputs/candidates/unbalanced.yaml",
    )
    shown = run(*arguments)
    assert shown.exit_code == 1
    text = " ".join(shown.output.split())
    assert "transhydrogenase of the file 0.857" in text
    assert (
        "Refused, because they are wrong: phosphoketolase that loses water, decarboxylase that"
        " nothing can close, kinase that pays back." in text
    )
    assert "2 H too few, 1 O too few on the right" in text
    assert "It would close with 1 water more on the right" in text
    form = json.loads(run(*arguments, "--json").output)
    assert form["status"] == "solved"
    assert len(form["refused"]) == 3
    errors = [item for item in form["findings"] if item["severity"] == "error"]
    assert [item["code"] for item in errors] == ["YN708"] * 3


def test_a_file_with_growth_and_maintenance_lends_its_reactions_alone(
    network_of: NetworkOf,
) -> None:
    bound, _ = bind(network_of(HOST))
    whole = network_of(
        HOST + "maintenance: {ATP: 1 mmol/g/h}\nparameters: {po: 1}\n"
        "parameter sets: {two: {source: from memory, values: {po: 2}}}\n"
        "meant for: {substrates: [glucose], products: [lactate]}\n"
    )
    found = merge(bound, (), whole)
    assert len(found.already_there) == 8
    words = [item.message for item in found.findings if item.code == "YN708"]
    assert words == [
        "'growth' of the candidate file is not added",
        "'maintenance' of the candidate file is not added",
        "'parameter sets' of the candidate file is not added",
        "'meant for' of the candidate file is not added",
    ]


def test_a_shared_parameter_out_of_its_range_is_doubted(network_of: NetworkOf) -> None:
    bound, _ = bind(network_of(HOST))
    text = _candidates(TO_SUCCINATE).replace("cost: 0.25", "cost: {value: 2, high: 1}")
    assert "YN412" in _codes(merge(bound, (), network_of(text)).findings)


@pytest.mark.parametrize(
    ("name", "code"),
    [
        ("nowhere.yaml", "YN101"),
        ("nowhere", "YN513"),
        ("tests/bad_inputs/candidates/unknown-names.yaml", "YN301"),
        ("examples/lysine/case.yaml", "YN113"),
    ],
)
def test_a_candidate_file_that_cannot_be_read(run: Run, name: str, code: str) -> None:
    arguments = ("additions", "examples/lysine/case.yaml", "--from", name)
    refused = run(*arguments)
    assert refused.exit_code == 1
    assert code in refused.output
    form = json.loads(run(*arguments, "--json").output)
    assert form["status"] == "refused"
    assert form["singles"] == []
    assert code in [item["code"] for item in form["findings"]]


@pytest.mark.parametrize(
    ("case", "code", "words"),
    [
        (CASE.replace("aim: most succinate", ""), "YN701", "a product as its aim"),
        (CASE.replace("most succinate", "most ATP"), "YN701", "a product as its aim"),
        (CASE + "demands: {lactate: at least 3}", "YN702", "infeasible as it stands"),
    ],
)
def test_a_case_that_cannot_be_compared_with(
    add: Callable[..., AdditionResult], case: str, code: str, words: str
) -> None:
    with pytest.raises(yieldnet.InputError, match=words) as refused:
        add(TO_SUCCINATE, case)
    assert code in _codes(refused.value.findings)


def test_an_aim_without_a_bound_cannot_be_improved(
    add: Callable[..., AdditionResult],
) -> None:
    network = HOST.replace("in: [glucose", "in: [PEP, glucose")
    case = CASE.replace("+ ? oxygen", "+ ? PEP + ? oxygen").replace(
        "most succinate", "most lactate"
    )
    with pytest.raises(yieldnet.InputError, match="no best value before anything is added") as told:
        add(TO_SUCCINATE, case, network)
    assert "YN602" in _codes(told.value.findings)


@pytest.mark.parametrize(
    "case", [CASE.replace("? biomass + ", ""), CASE.replace("most succinate", "least oxygen")]
)
def test_knock_outs_on_top_need_growth_and_a_product_to_be_most(
    add: Callable[..., AdditionResult], case: str
) -> None:
    assert add(TO_SUCCINATE, case).deletions is None
    with pytest.raises(yieldnet.InputError, match="least product at most growth"):
        add(TO_SUCCINATE, case, with_deletions=True)


# What is offered ----------------------------------------------------------------------------------


def test_what_makes_energy_from_nothing_is_counted_and_not_offered(
    add: Callable[..., AdditionResult],
) -> None:
    result = add("  free synthase: pyruvate -> phosphoenolpyruvate\n" + TO_SUCCINATE)
    assert result.makes_energy == ("free synthase",)
    assert "free synthase" not in result.without_effect
    assert "YN408" in _codes(result.findings)
    assert "Would make energy from nothing, not offered: free synthase." in (
        additions_view(result).remarks
    )


def test_pairs_that_make_energy_from_nothing_are_counted(
    add: Callable[..., AdditionResult],
) -> None:
    # One makes oxaloacetate with ATP, the other turns it back for nothing.
    loop = """
  carboxykinase: pyruvate + carbon dioxide -> oxaloacetate + 3 ATP
  decarboxylase: oxaloacetate -> pyruvate + carbon dioxide
"""
    case = CASE.replace("most succinate", "most biomass")
    result = add(loop, case, pairs=True)
    assert result.makes_energy == ()
    assert result.pairs == ()
    assert result.pairs_with_energy == 1
    table = additions_view(result).tables[1]
    assert "1 pair would make energy from nothing." in table.note


def test_pairs_that_matter_only_together_are_marked(add: Callable[..., AdditionResult]) -> None:
    result = add(TO_SUCCINATE, pairs=True)
    assert result.before == 0
    assert result.singles == ()
    assert result.pairs is not None
    first = result.pairs[0]
    assert first.names == ("carboxylation", "reduction")
    # Two pyruvate and two NADH a glucose; each succinate takes two NADH, and respiration none.
    assert (first.value, first.gain, first.beyond, first.only_together) == (
        F(4, 3),
        F(4, 3),
        F(4, 3),
        True,
    )
    (relief,) = first.relieves
    assert relief.rung == "pathways"
    assert relief.before - relief.after == F(4, 3)
    assert [rung.value for rung in first.ladder][-1] == first.value
    assert not any({"synthase", "kinase"} == set(item.names) for item in result.pairs)


def test_without_pairs_nothing_is_said_of_them(add: Callable[..., AdditionResult]) -> None:
    result = add(TO_SUCCINATE)
    assert result.pairs is None
    assert len(additions_view(result).tables) == 1
    assert additions_form(result)["pairs"] is None
    assert additions_form(result)["with_deletions"] is None
    assert "No candidate improves the aim alone." in additions_view(result).tables[0].note


def test_an_addition_that_leaves_no_bound_comes_first_and_says_why(
    add: Callable[..., AdditionResult],
) -> None:
    # Carbon dioxide to acetate without electrons: oxygen leaves instead.
    endless = """
  splitting: 2 carbon dioxide + 2 water -> acetyl-CoA + water + 2 oxygen
  oxidase: NADH + 1/2 oxygen -> water
"""
    case = CASE.replace("most succinate", "most acetate").replace(" + ? oxygen", "")
    case = case.replace("[carbon dioxide, water]", "[carbon dioxide, water, oxygen]")
    network = HOST.replace("in: [glucose, oxygen, ammonia]", "in: [glucose, ammonia]")
    network = network.replace("[carbon dioxide, water]", "[carbon dioxide, water, oxygen]")
    result = add(endless, case, network, pairs=True)
    first = result.singles[0]
    assert (first.names, first.value, first.gain) == (("splitting",), None, None)
    assert "acetate made" in first.reason
    assert result.pairs == ()
    view = additions_view(result)
    assert view.tables[0].rows[0][:3] == ("splitting", "none", "")
    assert "With splitting there is no best value:" in view.tables[0].note
    assert result.table()["value"].isna().tolist() == [True]


def test_knock_outs_on_top_are_those_that_raise_what_growth_guarantees(
    add: Callable[..., AdditionResult],
) -> None:
    reactions = """
  carboxylation:
    equation: pyruvate + carbon dioxide + (cost) ATP -> oxaloacetate
    group: reductive path
  reduction:
    equation: oxaloacetate + 2 NADH -> succinate + water
    group: reductive path
"""
    result = add(reactions, with_deletions=True)
    assert [item.names for item in result.singles] == [("reductive path",)]
    assert result.deletions is not None
    assert result.guaranteed_before == 0
    best = result.deletions[0]
    # Growth sets electrons free. With oxygen shut out only succinate takes them, and without the
    # addition nothing does, so that the cell cannot grow.
    assert (best.addition, best.deletion) == ("reductive path", "respiration")
    assert best.with_addition == 0
    assert best.with_deletion is None
    assert best.gain == best.guaranteed > 0
    assert best.behaviour.guaranteed == best.guaranteed
    assert all(item.guaranteed > (item.with_addition or 0) for item in result.deletions)
    ranked = [item.guaranteed for item in result.deletions]
    assert ranked == sorted(ranked, reverse=True)
    table = additions_view(result).tables[-1]
    assert table.rows[0][0] == "reductive path, without respiration"
    assert "As the case stands 0 is guaranteed." in table.note
    (first, *_) = additions_form(result)["with_deletions"]
    assert first["exact_guaranteed"] == str(best.guaranteed)
    assert first["behaviour"]["coupling"] == str(best.behaviour.coupling)


def test_no_addition_no_knock_out_on_top(add: Callable[..., AdditionResult]) -> None:
    result = add(TO_SUCCINATE, with_deletions=True)
    assert result.deletions == ()
    assert "No knock-out on top" in additions_view(result).tables[-1].note


# How it is told -----------------------------------------------------------------------------------


def test_all_keys_are_there_whatever_the_answer(add: Callable[..., AdditionResult]) -> None:
    form = additions_form(add(TO_SUCCINATE, pairs=True))
    with pytest.raises(yieldnet.InputError, match="a product as its aim") as refused:
        add(TO_SUCCINATE, CASE.replace("aim: most succinate", ""))
    assert set(refused_additions(refused.value.findings)) == set(form)
    assert form["format"] == 1
    pair = form["pairs"][0]
    assert (pair["exact"], pair["only_together"]) == ("4/3", True)
    assert pair["candidates"][0]["reactions"] == ["carboxylation"]
    assert pair["ladder"][-1]["exact"] == "4/3"


def test_the_table_holds_singles_and_pairs(add: Callable[..., AdditionResult]) -> None:
    result = add(TO_SUCCINATE, pairs=True)
    table = result.table()
    assert result.pairs is not None
    assert list(table.reset_index().columns) == list(COLUMNS)
    assert list(table.index) == [" + ".join(item.names) for item in result.pairs]
    assert table["gain"].iloc[0] == pytest.approx(4 / 3)
    empty = add("  again: glucose -> 2 pyruvate + 2 NADH + 2 ATP").table()
    assert list(empty.columns) == list(COLUMNS[1:])
    assert len(empty) == 0
    assert repr(result) == "AdditionResult('Small': 0 of 4 candidates help)"


def test_long_lists_are_cut_in_the_text_and_whole_in_the_rest(
    add: Callable[..., AdditionResult],
) -> None:
    result = add(TO_SUCCINATE, pairs=True)
    assert result.pairs is not None
    many: tuple[Addition, ...] = (result.pairs[0],) * (MOST_ROWS + 3)
    longer = replace(result, pairs=many, singles=many)
    singles, pairs = additions_view(longer).tables
    for table in (singles, pairs):
        assert len(table.rows) == MOST_ROWS
        assert f"The first {MOST_ROWS} of {MOST_ROWS + 3}." in table.note
    assert len(additions_form(longer)["pairs"]) == len(many)
    assert len(longer.records()) == 2 * len(many)


def test_the_command_in_every_form(run: Run) -> None:
    arguments = ("additions", "examples/succinate-from-xylose/case.yaml", "--pairs")
    text = run(*arguments, "--with-deletions", "--top", "1").output
    assert max(len(line) for line in text.splitlines()) <= 80
    assert "Additions, one at a time: most succinate, mol/mol" in text
    assert "Additions with one knock-out on top, mol/mol" in text
    form = json.loads(run(*arguments, "--json").output)
    rows = list(csv.DictReader(io.StringIO(run(*arguments, "--csv").output)))
    assert tuple(rows[0]) == COLUMNS
    assert len(rows) == len(form["singles"]) + len(form["pairs"])
    assert [float(row["gain"]) for row in rows[: len(form["singles"])]] == [
        item["gain"] for item in form["singles"]
    ]
    assert "additions" in yieldnet.__all__


def test_the_candidates_that_ship_are_no_network_of_their_own(run: Run, checkout: Path) -> None:
    assert (checkout / "models" / "candidates.yaml").exists()
    assert "candidates" not in run("networks").output
