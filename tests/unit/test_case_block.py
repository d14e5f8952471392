"""Rates as lines of a case, and filled into one: nothing lost, nothing half-written."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import pytest

import yieldnet
from yieldnet.foundation.errors import InputError
from yieldnet.report.case_block import block_lines, chosen_state, estimate_text, fill_case

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from click.testing import Result

    from yieldnet.rates.result import RateResult

    Run = Callable[..., Result]

RUN = "examples/chemostat/run.yaml"
QUESTION = """case: Filled
equation: glucose + ? oxygen + ? ammonia -> ? biomass + ? acetate + ? ethanol
compounds:
  biomass: {formula: CH1.8O0.5N0.2, ash: 0.08}
either side: [carbon dioxide, water]
"""


@pytest.fixture(scope="module")
def result(checkout: Path) -> RateResult:
    return yieldnet.rates(checkout / RUN)


@pytest.fixture
def question(tmp_path: Path) -> Path:
    path = tmp_path / "question.yaml"
    path.write_text(QUESTION, "utf-8")
    return path


def _codes(error: InputError) -> list[str]:
    return [item.code for item in error.findings]


@pytest.mark.parametrize(
    ("value", "sd", "text"),
    [
        (0.1098765, 0.0123456, "0.10988 ± 0.01235"),
        (123.456, 2.5, "123.456 ± 2.500"),
        (-0.5, 0.25, "-0.5000 ± 0.2500"),
        (12345.6, 2345.6, "12346 ± 2346"),
        (0.5, 0.0, "0.5 exact"),
    ],
)
def test_an_estimate_is_written_to_four_digits_of_its_error(
    value: float, sd: float, text: str
) -> None:
    assert estimate_text(value, sd) == text


def test_a_filled_case_holds_the_same_yields_and_the_same_covariance(
    result: RateResult, question: Path
) -> None:
    state = result.state("slow")
    case = fill_case(result, state, question)
    assert [item.compound for item in case.measured] == list(state.products)
    for item in case.measured:
        if item.compound == "biomass":
            # g/g is what was weighed: the formulas of run and case differ.
            grams = state.yield_in_grams("biomass")
            assert float(item.value / item.factor) == pytest.approx(grams.value, rel=1e-3)
            continue
        found = state.yield_of(item.compound)
        assert float(item.value) == pytest.approx(found.value, abs=1e-3 * found.sd)
        assert item.sd is not None
        assert float(item.sd) == pytest.approx(found.sd, rel=1e-3)
    assert len(case.correlations) == 10
    for pair in case.correlations:
        assert float(pair.value) == pytest.approx(state.correlation(pair.first, pair.second))
    uptake = state.specific_rate("glucose")
    assert case.substrate_uptake is not None
    assert float(case.substrate_uptake.value) == pytest.approx(uptake.value, rel=1e-3)
    # The growth rate beside the uptake would count the same biomass a second time.
    assert case.growth_rate is None


def test_what_was_taken_up_counts_negative_where_the_case_leaves_the_side_open(
    result: RateResult, question: Path
) -> None:
    question.write_text(
        QUESTION.replace("+ ? oxygen ", "").replace("[carbon", "[oxygen, carbon"), "utf-8"
    )
    state = result.state("slow")
    case = fill_case(result, state, question)
    values = {item.compound: float(item.value) for item in case.measured}
    assert values["oxygen"] == pytest.approx(-state.yield_of("oxygen").value, rel=1e-3)
    signs = {(item.first, item.second): float(item.value) for item in case.correlations}
    plain = state.correlation("oxygen", "acetate")
    assert plain is not None
    assert signs["oxygen", "acetate"] == pytest.approx(-plain)


def test_a_copy_tells_its_network_from_its_own_folder(
    result: RateResult, checkout: Path, tmp_path: Path
) -> None:
    out = tmp_path / "deep" / "case.yaml"
    out.parent.mkdir()
    source = checkout / "examples/chemostat/question.yaml"
    before = source.read_text("utf-8")
    case = fill_case(result, result.state("slow"), source, out)
    assert case.network is not None
    assert source.read_text("utf-8") == before
    assert yieldnet.predict(out).outcome == "solved"
    assert list(out.parent.iterdir()) == [out]


def test_a_case_with_values_of_its_own_is_not_changed_unasked(
    result: RateResult, question: Path
) -> None:
    state = result.state("slow")
    fill_case(result, state, question)
    once = question.read_text("utf-8")
    with pytest.raises(InputError, match="has its own 'measured' and 'correlations'") as refused:
        fill_case(result, result.state("fast"), question)
    assert _codes(refused.value) == ["YN851"]
    assert question.read_text("utf-8") == once
    fill_case(result, result.state("fast"), question, replace=True)
    assert question.read_text("utf-8") != once
    fill_case(result, state, question, replace=True)
    assert question.read_text("utf-8") == once


def test_a_file_that_is_there_is_not_replaced_unasked(
    result: RateResult, question: Path, tmp_path: Path
) -> None:
    out = tmp_path / "out.yaml"
    out.write_text("mine", "utf-8")
    with pytest.raises(FileExistsError, match="there already"):
        fill_case(result, result.state("slow"), question, out)
    assert out.read_text("utf-8") == "mine"


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (
            "glucose + ? oxygen",
            "xylose + ? glucose + ? oxygen",
            "run and case have another basis",
        ),
        (" + ? ethanol", "", "'ethanol' is measured in the run and not in the equation"),
        (
            "glucose + ? oxygen + ? ammonia -> ? biomass + ? acetate",
            "glucose + ? acetate + ? oxygen + ? ammonia -> ? biomass",
            "'acetate' stands on another side",
        ),
    ],
)
def test_run_and_case_must_fit(
    result: RateResult, question: Path, old: str, new: str, message: str
) -> None:
    question.write_text(QUESTION.replace(old, new), "utf-8")
    before = question.read_text("utf-8")
    with pytest.raises(InputError, match=message) as refused:
        fill_case(result, result.state("slow"), question)
    assert "YN850" in _codes(refused.value)
    assert question.read_text("utf-8") == before
    assert list(question.parent.iterdir()) == [question]


def test_a_case_that_cannot_be_read_is_refused_with_its_findings(
    result: RateResult, question: Path
) -> None:
    question.write_text("case: A\n", "utf-8")
    with pytest.raises(InputError, match="has no 'equation'"):
        fill_case(result, result.state("slow"), question)


def test_what_cannot_be_read_back_is_not_written(result: RateResult, question: Path) -> None:
    # A covariance that no errors can have would be refused in the case, so nothing is written.
    state = result.state("slow")
    size = len(state.products)
    spread = tuple(
        tuple(
            state.yield_covariance[i][i] ** 0.5
            * state.yield_covariance[j][j] ** 0.5
            * (1 if i == j else -0.9)
            for j in range(size)
        )
        for i in range(size)
    )
    before = question.read_text("utf-8")
    with pytest.raises(InputError, match="no errors can have these correlations") as refused:
        fill_case(result, replace(state, yield_covariance=spread), question)
    assert {item.where.file for item in refused.value.findings if item.where} == {str(question)}
    assert question.read_text("utf-8") == before
    assert list(question.parent.iterdir()) == [question]


def test_the_only_state_needs_no_name_and_several_do(result: RateResult) -> None:
    one = replace(result, states=result.states[:1])
    assert chosen_state(one, "").label == "slow"
    assert chosen_state(result, "fast").label == "fast"
    with pytest.raises(InputError, match=r"several steady states.*slow, fast") as refused:
        chosen_state(result, "")
    assert _codes(refused.value) == ["YN852"]
    with pytest.raises(InputError, match=r"no steady state 'slwo'.*'slow'"):
        chosen_state(result, "slwo")


def test_an_exact_yield_is_said_to_be_exact_and_has_no_correlation(result: RateResult) -> None:
    state = result.state("slow")
    place = state.products.index("ethanol")
    spread = tuple(
        tuple(0.0 if place in (i, j) else value for j, value in enumerate(row))
        for i, row in enumerate(state.yield_covariance)
    )
    lines = block_lines(result, replace(state, yield_covariance=spread))
    assert any(
        line.startswith("ethanol: ") and line.endswith("exact mol/mol")
        for line in lines["measured"]
    )
    assert all("ethanol" not in line for line in lines["correlations"])


def test_the_command_fills_and_says_where(run: Run, tmp_path: Path) -> None:
    out = tmp_path / "case.yaml"
    words = ("rates", RUN, "--state", "slow", "--into", "examples/chemostat/question.yaml")
    done = run(*words, "--out", str(out))
    assert done.exit_code == 0
    assert done.stdout.rstrip().endswith(f"Written to {out}.")
    again = run(*words, "--out", str(out))
    assert again.exit_code == 2
    assert "--force replaces it" in again.stderr
    assert run(*words, "--out", str(out), "--force").exit_code == 0
    assert run("predict", str(out)).exit_code == 0


def test_the_command_prints_the_block_alone(run: Run) -> None:
    done = run("rates", RUN, "--state", "slow", "--block")
    assert done.exit_code == 0
    keys = [line for line in done.stdout.splitlines() if not line.startswith(" ")]
    assert keys == ["conditions:", "measured:", "correlations:"]
    assert run("rates", RUN, "--block").exit_code == 1
    assert run("rates", RUN, "--out", "x.yaml").exit_code == 2


@pytest.mark.parametrize(
    ("name", "state"),
    [("batch", ""), ("chemostat", "slow"), ("fed-batch", ""), ("start-and-end", "")],
)
def test_every_example_goes_from_its_sheet_to_the_filled_equation(
    checkout: Path, tmp_path: Path, name: str, state: str
) -> None:
    folder = checkout / "examples" / name
    result = yieldnet.rates(folder / "run.yaml")
    out = tmp_path / "case.yaml"
    case = fill_case(result, chosen_state(result, state), folder / "question.yaml", out)
    answer = yieldnet.predict(case)
    assert answer.outcome == "solved"
    assert all(term.range.single for term in answer.terms)
    assert yieldnet.reconcile(case).failed is None
    # What the sheet measured of the aim is near the best, and never beyond it by its error.
    assert not [item for item in answer.findings if item.code == "YN606"]
