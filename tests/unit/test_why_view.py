"""The views of why: relaxations, limits, conflict, trade-offs, fluxes, proof."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

import yieldnet
from yieldnet.optimum.ranges import Range
from yieldnet.prediction.conflict import Conflict
from yieldnet.prediction.fluxes import FluxAnswer, Fluxes
from yieldnet.prediction.limits import Limit
from yieldnet.prediction.relaxations import Relaxation, RelaxationReport
from yieldnet.report import why_view
from yieldnet.report.figures import figure

if TYPE_CHECKING:
    from yieldnet.prediction.result import Prediction

F = Fraction
Answers = dict[str, "Prediction"]
GAIN = Relaxation(
    parts=(("switch", "it"),), value=F(3, 2), gain=F(1, 2), reason="", words="undoing 'it'"
)
ENDLESS = Relaxation(
    parts=(("compound", "glycerol"),),
    value=None,
    gain=None,
    reason="all can grow without limit",
    words="with glycerol taken up too",
)


def test_a_relaxation_in_words() -> None:
    assert why_view.relaxation_words(GAIN) == "undoing 'it' gives 1.50"
    endless = why_view.relaxation_words(ENDLESS)
    assert endless.startswith("with glycerol taken up too")
    assert endless.endswith("all can grow without limit")


@pytest.mark.parametrize(
    ("report", "rows", "words"),
    [
        (
            RelaxationReport(helpful=(GAIN,), without_effect=1),
            (("undoing 'it'", "1.50", "+0.500"),),
            ("1 other change would change nothing.",),
        ),
        (
            RelaxationReport(helpful=(ENDLESS, GAIN), without_effect=2, not_offered=1),
            (("undoing 'it'", "1.50", "+0.500"),),
            (
                "With glycerol taken up too",
                "all can grow without limit.",
                "2 other changes would change nothing.",
                "1 reaction backwards would make ATP from nothing.",
            ),
        ),
        (
            RelaxationReport(helpful=(ENDLESS, ENDLESS), without_effect=3, pairs=True),
            (),
            ("Nothing helps alone, so pairs were tried.",),
        ),
    ],
)
def test_the_table_of_relaxations(
    answers: Answers,
    report: RelaxationReport,
    rows: tuple[tuple[str, ...], ...],
    words: tuple[str, ...],
) -> None:
    table = why_view.relaxations_table(replace(answers["solved"], relaxations=report))
    assert table is not None
    assert table.rows == rows
    assert all(word in table.note for word in words), table.note


def test_without_a_best_value_there_is_nothing_to_give_back(answers: Answers) -> None:
    for name in ("no aim", "infeasible", "taken up"):
        assert why_view.relaxations_table(answers[name]) is None
        assert why_view.limits_table(answers[name]) is None


def _limit(gain: Fraction | None, cost: Fraction | None, until: Fraction | None = None) -> Limit:
    return Limit(
        kind="carrier",
        name="ATP",
        gain=gain,
        cost=cost,
        gain_until=until,
        cost_until=until,
        unit="mol/mol",
    )


@pytest.mark.parametrize(
    ("limit", "words"),
    [
        (_limit(F(1, 2), F(-1, 2)), "one mol/mol more ATP: +0.500; less: -0.500"),
        (_limit(F(0), F(-1)), "one mol/mol more ATP: 0; less: -1"),
        (_limit(None, F(-1)), "one mol/mol more ATP: impossible; less: -1"),
        (_limit(F(1), None), "one mol/mol more ATP: +1; less: impossible"),
    ],
)
def test_a_limit_in_words(limit: Limit, words: str) -> None:
    assert why_view.limit_words(limit) == words


def test_the_table_of_limits_leaves_out_what_is_not_felt(answers: Answers) -> None:
    limits = (_limit(F(1, 2), F(-1, 4), F(3)), _limit(F(0), F(0)), _limit(None, F(-1)))
    table = why_view.limits_table(replace(answers["solved"], limits=limits))
    assert table is not None
    assert [row[2:] for row in table.rows] == [
        ("+0.500", "3", "-0.250", "3"),
        ("impossible", "", "-1", "ever"),
    ]
    assert "1 other would not be felt." in table.note
    nothing = replace(answers["solved"], limits=limits[1:2])
    assert why_view.limits_table(nothing) is None


def test_a_conflict_lists_its_statements_and_what_each_needs(answers: Answers) -> None:
    result = answers["infeasible"]
    assert result.conflict is not None
    heading, *lines = why_view.conflict_lines(result)
    assert heading == "These 3 statements cannot hold together (the least number):"
    assert [item.name for item in result.conflict.members] == [
        "measured ethanol",
        "demand oxygen",
        "hydrogen",
    ]
    for line, item in zip(lines, result.conflict.members, strict=True):
        assert item.name in line
        assert (item.unit in line) == (item.needs is not None)
    assert "0.880" in lines[0]
    assert "88.0 s.d." in lines[0]
    assert "2.64" in lines[1]
    assert "closed compound" in lines[2]


def test_a_conflict_that_is_only_irreducible_says_so(answers: Answers) -> None:
    result = answers["infeasible"]
    assert result.conflict is not None
    irreducible = replace(result, conflict=replace(result.conflict, least=False))
    assert "none of them can be spared" in why_view.conflict_lines(irreducible)[0]


def test_a_conflict_without_statements_says_what_the_network_lacks(answers: Answers) -> None:
    nothing = Conflict(least=True, members=(), lacking=("NADH", "ATP"))
    (line,) = why_view.conflict_lines(replace(answers["infeasible"], conflict=nothing))
    assert "NADH, ATP" in line


def test_a_single_statement_that_elements_alone_forbid_blames_no_network(
    answers: Answers,
) -> None:
    told = " ".join(why_view.conflict_lines(answers["impossible"]))
    assert "'measured ethanol'" in told
    assert "network" not in told


def test_no_conflict_no_lines(answers: Answers) -> None:
    assert why_view.conflict_lines(answers["solved"]) == ()


@pytest.mark.parametrize(
    ("moves", "lines"),
    [
        ((), ()),
        (
            ((("formate", F(2)), ("hydrogen", F(1)), ("water", F(-3))),),
            ("Not unique: one mol more formate goes with +0.500 hydrogen, -1.50 water.",),
        ),
        (
            ((("formate", F(1)), ("water", F(1))), (("lactate", F(1)), ("water", F(-1)))),
            ("Not unique, with 2 degrees of freedom: formate, water, lactate.",),
        ),
    ],
)
def test_coefficients_that_move_together(
    answers: Answers,
    moves: tuple[tuple[tuple[str, Fraction], ...], ...],
    lines: tuple[str, ...],
) -> None:
    assert why_view.movement_lines(replace(answers["solved"], movements=moves)) == lines


def test_fluxes_leave_out_what_stands_still_and_name_idle_loops(answers: Answers) -> None:
    def flux(name: str, value: int, low: int, high: int) -> FluxAnswer:
        return FluxAnswer(reaction=name, flux=F(value), range=Range(F(low), F(high)))

    fluxes = Fluxes(
        answers=(
            flux("runs", 2, 2, 2),
            flux("may run", 0, 0, 1),
            flux("stands", 0, 0, 0),
        ),
        loops=(("one way", "the other way"),),
    )
    table = why_view.fluxes_table(replace(answers["solved"], fluxes=fluxes))
    assert table is not None
    assert table.title.endswith("mol/mol glucose")
    assert table.rows == (("runs", "2", "unique"), ("may run", "0", "0…1"))
    assert "one way, the other way" in table.note
    assert "1 reaction" in table.note
    assert why_view.fluxes_table(answers["solved"]) is None


def test_the_proof_is_a_line_of_arithmetic_that_ends_at_the_best_value(answers: Answers) -> None:
    result = yieldnet.predict(answers["solved"].case, proof=True)
    proof = result.certificate
    assert proof is not None
    assert result.aim is not None
    # The line is checked here by its own sum, apart from the program that made it.
    assert sum(term.worth * term.amount for term in proof.terms) == proof.value
    assert proof.value == result.aim.value
    line, how = why_view.proof_lines(result)
    assert line.startswith("ethanol <= ")
    assert line.endswith(f"= {figure(proof.value)}")
    assert "No reaction that is allowed makes worth" in how
    worths, reactions = why_view.proof_tables(result)
    assert [row[0] for row in worths.rows] == [name for name, _ in proof.worths]
    assert len(reactions.rows) == len(proof.reactions)
    assert why_view.proof_lines(answers["solved"]) == ()
    assert why_view.proof_tables(answers["solved"]) == ()
