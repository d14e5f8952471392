"""A prediction as a value: its numbers, its refusals, its tables."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

from yieldnet.foundation.errors import SolveError

if TYPE_CHECKING:
    from yieldnet.prediction.result import Prediction

Answers = dict[str, "Prediction"]


@pytest.mark.parametrize(
    ("name", "text"),
    [
        ("taken up", "Prediction('Taken up': solved, most succinate 1.714 mol/mol)"),
        ("no aim", "Prediction('No aim': solved)"),
        ("infeasible", "Prediction('Infeasible': infeasible, most carbon dioxide)"),
        ("runaway", "Prediction('Runaway': unbounded, most ethanol)"),
    ],
)
def test_a_prediction_is_told_in_one_line(answers: Answers, name: str, text: str) -> None:
    assert repr(answers[name]) == text


def test_the_best_yield_is_a_number(answers: Answers) -> None:
    assert answers["taken up"].best_yield_mol_per_mol() == 12 / 7


@pytest.mark.parametrize(
    ("name", "reason"),
    [
        ("no aim", "the case has no aim"),
        ("infeasible", "the case is infeasible: "),
        ("runaway", "the case is unbounded: .*can grow together without limit"),
    ],
)
def test_a_yield_that_is_not_there_is_never_a_number(
    answers: Answers, name: str, reason: str
) -> None:
    with pytest.raises(SolveError, match=reason):
        answers[name].best_yield_mol_per_mol()


def test_a_coefficient_is_found_by_its_compound(answers: Answers) -> None:
    result = answers["solved"]
    assert result.coefficient("biomass").compound == "biomass"
    with pytest.raises(KeyError, match="glucose"):
        result.coefficient("glucose")


def test_a_measured_value_knows_how_far_it_was_moved(answers: Answers) -> None:
    biomass = answers["solved"].coefficient("biomass").reconciled
    assert biomass is not None
    assert biomass.moved_sd == 0
    exact = answers["charged"].coefficient("biomass").reconciled
    assert exact is not None
    assert exact.sd is None
    assert exact.moved_sd == 0


def test_the_table_of_coefficients_holds_numbers_and_missing_values(answers: Answers) -> None:
    table = answers["solved"].coefficient_table()
    result = answers["solved"]
    assert list(table.index) == [item.compound for item in result.coefficients]
    oxygen = result.coefficient("oxygen")
    assert oxygen.elements is not None
    assert table.loc["oxygen", "elements high"] == float(oxygen.elements.high or 0)
    assert table["measured"].isna().tolist() == [True, True, False, True, True, True]
    assert table.loc["carbon dioxide", "side"] == "either"
    open_ended = answers["runaway"].coefficient_table()
    assert open_ended["elements high"].isna().tolist() == [True, False, True, False]


def test_a_notebook_shows_title_ladder_and_coefficients(answers: Answers) -> None:
    shown = answers["taken up"]._repr_html_()
    assert shown.startswith("<p><b>Taken up</b>: solved</p>")
    assert shown.count("<table") == 2
    assert answers["impossible"]._repr_html_() == "<p><b>Impossible</b>: infeasible</p>"
    assert answers["no aim"]._repr_html_().count("<table") == 1


def test_the_table_of_the_ladder_holds_one_row_a_rung(answers: Answers) -> None:
    table = answers["energy"].ladder_table()
    assert list(table.index) == [item.rung for item in answers["energy"].ladder]
    assert table.loc["energy", "value"] == 20
    assert table["value"].isna().sum() == 3
    assert answers["no aim"].ladder_table().empty
