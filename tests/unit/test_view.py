"""The view of a prediction: labels, sides, headlines, remarks."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from yieldnet.model.case import Named
from yieldnet.optimum.ranges import Range
from yieldnet.prediction.result import CarbonDioxideNeed
from yieldnet.report.view import UNITS, equation_text, view_of

if TYPE_CHECKING:
    from yieldnet.prediction.result import Prediction
    from yieldnet.report.table import Table
    from yieldnet.report.view import PredictionView

F = Fraction
Answers = dict[str, "Prediction"]


def _table(view: PredictionView, title: str) -> Table:
    return next(item for item in view.tables if item.title.startswith(title))


def _row(table: Table, name: str) -> dict[str, str]:
    row = next(item for item in table.rows if item[0] == name)
    return dict(zip(table.columns, row, strict=True))


# The headline ------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("name", "words"),
    [
        (
            "solved",
            ("most ethanol: ", " mol/mol (", " within 2 s.d.) = ", " g/g; ", "measured 1 is"),
        ),
        ("no aim", ("no aim",)),
        ("energy", ("most ATP: 20 mol/mol",)),
        ("taken up", ("most succinate: 1.71 mol/mol = 1.12 g/g",)),
        ("charged", ("least H+: 0.100 mol/mol",)),
        ("runaway", ("no best value", "ethanol made", "can grow together without limit")),
        ("infeasible", ("infeasible from the rung 'demands' on",)),
        ("impossible", ("infeasible from the rung 'measured' on",)),
    ],
)
def test_the_headline_answers_the_question(
    answers: Answers, name: str, words: tuple[str, ...]
) -> None:
    headline = view_of(answers[name]).headline
    assert all(word in headline for word in words), headline


def test_the_headline_leaves_out_a_band_that_says_nothing_new(answers: Answers) -> None:
    assert "s.d." not in view_of(answers["taken up"]).headline


@pytest.mark.parametrize(
    ("name", "words"),
    [
        ("solved", "per mol glucose; network: Small; knocked out: hydrogenase"),
        ("no aim", "per mol glucose; network: Small"),
        ("taken up", "per mol glucose; elements alone"),
    ],
)
def test_the_setting_names_basis_network_and_switches(
    answers: Answers, name: str, words: str
) -> None:
    assert view_of(answers[name]).setting == words


def test_the_setting_names_the_parameter_set(answers: Answers) -> None:
    result = answers["solved"]
    chosen = replace(result, case=replace(result.case, parameter_set=Named(name="poor")))
    assert view_of(chosen).setting.endswith("; knocked out: hydrogenase; parameter set: poor")


# Equation ----------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("name", "text"),
    [
        ("taken up", "glucose + 0.857 carbon dioxide -> 1.71 succinate + 0.857 water"),
        ("energy", "glucose + 6 oxygen -> 6 carbon dioxide + 6 water"),
        ("infeasible", ""),
    ],
)
def test_the_equation_is_filled_in_and_leaves_out_zeros(
    answers: Answers, name: str, text: str
) -> None:
    assert equation_text(answers[name]) == view_of(answers[name]).equation == text


def test_a_coefficient_that_is_not_unique_stands_in_brackets(answers: Answers) -> None:
    assert "[0…6] oxygen -> " in equation_text(answers["no aim"])
    assert "[0…unbounded] ethanol" in equation_text(answers["runaway"])


def test_an_equation_that_makes_nothing_says_so(answers: Answers) -> None:
    result = answers["taken up"]
    assert equation_text(replace(result, terms=result.terms[:1])) == "glucose -> nothing"


# The table of coefficients -----------------------------------------------------------------------


def test_coefficients_show_measured_values_ranges_and_status(answers: Answers) -> None:
    table = _table(view_of(answers["solved"]), "Coefficients, mol/mol")
    assert table.columns == ("", "measured", "elements", "network", "%", "status")
    assert "within two standard deviations" in table.title
    assert _row(table, "biomass")["status"] == "reconciled"
    assert "±" in _row(table, "biomass")["measured"]
    # The aim's own measured value stands aside, in brackets, and the note says so.
    assert _row(table, "ethanol")["measured"] == "(1)"
    assert "set aside" in table.note
    assert "given off is positive, taken up negative" in table.note


def test_an_exact_measured_value_is_called_exact(answers: Answers) -> None:
    view = view_of(answers["charged"])
    assert _row(_table(view, "Coefficients"), "biomass")["measured"] == "0.500 exact"


def test_without_a_network_its_columns_are_left_out(answers: Answers) -> None:
    table = _table(view_of(answers["taken up"]), "Coefficients")
    assert table.columns == ("", "measured", "elements", "status")
    assert _row(table, "carbon dioxide")["elements"] == "-0.857"


def test_unbounded_is_said_in_words(answers: Answers) -> None:
    table = _table(view_of(answers["half open"]), "Coefficients")
    assert _row(table, "ethanol")["elements"] == "0…unbounded"
    assert _row(table, "carbon dioxide")["elements"] == "unbounded…6"
    assert _row(table, "water")["network"] == "-6…0"


@pytest.mark.parametrize("unit", UNITS)
def test_every_row_keeps_its_status_whatever_the_unit(answers: Answers, unit: str) -> None:
    plain = _table(view_of(answers["solved"]), "Coefficients")
    table = _table(view_of(answers["solved"], unit), f"Coefficients, {unit}")
    assert [row[-1] for row in table.rows] == [row[-1] for row in plain.rows]


def test_units_scale_the_numbers_and_a_unit_without_meaning_is_said(answers: Answers) -> None:
    # 1.71 mol succinate per mol glucose: times 118.088/180.156 in g/g, times 4/6 in C-mol.
    result = answers["taken up"]
    grams = _table(view_of(result, "g/g"), "Coefficients")
    carbon = _table(view_of(result, "C-mol/C-mol"), "Coefficients")
    assert _row(grams, "succinate")["elements"] == f"{12 / 7 * 118.088 / 180.156:.3g}"
    assert _row(carbon, "succinate")["elements"] == f"{12 / 7 * 4 / 6:.3g}"
    assert "no C-mol/C-mol" in _row(carbon, "water").values()


# The table of the filled-in equation -------------------------------------------------------------


@pytest.mark.parametrize(
    ("name", "compound", "side", "amount"),
    [
        ("taken up", "glucose", "taken up", "1"),
        ("taken up", "carbon dioxide", "taken up", "0.857"),
        ("taken up", "succinate", "given off", "1.71"),
        ("energy", "ethanol", "none", "0"),
        ("half open", "water", "taken up", "0…6"),
        ("runaway", "hydrogen", "either way", "unbounded…12"),
    ],
)
def test_every_compound_has_a_side_in_words(
    answers: Answers, name: str, compound: str, side: str, amount: str
) -> None:
    table = _table(view_of(answers[name]), "Filled in")
    row = next(item for item in table.rows if item[0] == compound)
    assert row[1:3] == (side, amount)


def test_grams_and_carbon_stand_beside_the_moles(answers: Answers) -> None:
    table = _table(view_of(answers["taken up"]), "Filled in at the aim")
    row = next(item for item in table.rows if item[0] == "succinate")
    assert row[3:] == (f"{12 / 7 * 118.088 / 180.156:.3g}", "100")


@pytest.mark.parametrize(
    ("name", "title"),
    [
        ("solved", "Filled in at the aim, at the reconciled point"),
        ("energy", "Filled in at the aim"),
        ("no aim", "Filled in as far as known"),
    ],
)
def test_the_title_says_what_the_equation_is_filled_in_with(
    answers: Answers, name: str, title: str
) -> None:
    assert _table(view_of(answers[name]), "Filled in").title == title


# Ladder and freedom ------------------------------------------------------------------------------


def test_the_ladder_shows_a_word_a_value_and_a_bar_a_rung(answers: Answers) -> None:
    result = answers["solved"]
    table = _table(view_of(result), "Ladder: most ethanol, mol/mol")
    assert [row[0] for row in table.rows] == [item.rung for item in result.ladder]
    words = {row[0]: row[1] for row in table.rows}
    assert words["elements"] == "elements over the cell"
    assert words["measured"] == "values of biomass"
    assert words["demands"] == "bounds on oxygen"
    assert words["pathways"] == "6 of 7 reactions"
    assert words["energy"] == "ATP made covers use"
    assert words["maintenance"] == "ATP for staying alive"
    assert table.bars[0] == 1.0
    assert list(table.bars) == sorted(table.bars, reverse=True)


def test_a_rung_without_a_value_says_why_and_has_no_bar(answers: Answers) -> None:
    table = _table(view_of(answers["energy"]), "Ladder")
    best = dict(zip([row[0] for row in table.rows], [row[3] for row in table.rows], strict=True))
    assert best == {"elements": "none", "pathways": "none", "redox": "none", "energy": "20"}
    assert table.bars == (0.0, 0.0, 0.0, 1.0)
    assert "energy carriers are not balanced above the rung 'energy'" in table.note


def test_a_ladder_without_any_value_has_no_bars(answers: Answers) -> None:
    assert _table(view_of(answers["runaway"]), "Ladder").bars == ()


def test_charge_is_named_where_it_is_balanced(answers: Answers) -> None:
    table = _table(view_of(answers["charged"]), "Ladder: least H+")
    assert table.rows[0][1] == "elements and charge over the cell"


def test_without_an_aim_the_degrees_of_freedom_are_shown_alone(answers: Answers) -> None:
    titles = [item.title for item in view_of(answers["no aim"]).tables]
    assert "Degrees of freedom" in titles
    assert not any(title.startswith("Ladder") for title in titles)


# Remarks -----------------------------------------------------------------------------------------


def test_remarks_on_recovery_quotient_and_carbon_dioxide(answers: Answers) -> None:
    remarks = view_of(answers["energy"]).remarks
    assert remarks == (
        "Carbon: 100 % found again in the filled-in equation.",
        "Available electrons: 100 % found again in the filled-in equation.",
        "RQ: 1 mol/mol.",
        "Net carbon dioxide, mol/mol: 6 given off.",
    )


@pytest.mark.parametrize(
    ("net", "words"),
    [
        (Range(F(1, 2), F(1, 2)), "0.500 given off"),
        (Range(F(-1, 2), F(-1, 2)), "0.500 taken up"),
        (Range(F(-2), F(-1)), "1…2 taken up"),
        (Range(F(1), F(2)), "1…2 given off"),
        (Range(F(1), None), "1…unbounded given off"),
        (Range(F(-1), F(2)), "1 taken up … 2 given off"),
        (Range(None, F(2)), "unbounded taken up … 2 given off"),
        (Range(None, None), "unbounded taken up … unbounded given off"),
    ],
)
def test_net_carbon_dioxide_is_told_by_side(answers: Answers, net: Range, words: str) -> None:
    remarks = view_of(replace(answers["energy"], net_carbon_dioxide=net)).remarks
    assert f"Net carbon dioxide, mol/mol: {words}." in remarks


def test_carbon_dioxide_that_the_best_value_needs_is_told(answers: Answers) -> None:
    need = CarbonDioxideNeed(least=F(1, 2), most=F(3, 4), without=F(1))
    remarks = " ".join(view_of(replace(answers["energy"], carbon_dioxide_need=need)).remarks)
    assert "takes up 0.500…0.750 mol carbon dioxide net" in remarks
    assert "without net uptake the best is 1 mol/mol" in remarks


def test_values_that_were_moved_are_told_in_standard_deviations(answers: Answers) -> None:
    result = answers["solved"]
    biomass = result.coefficient("biomass")
    known = biomass.reconciled
    assert known is not None
    assert known.sd is not None
    moved = replace(biomass, reconciled=replace(known, value=known.mean + known.sd / 2))
    kept = tuple(moved if item is biomass else item for item in result.coefficients)
    table = _table(
        view_of(replace(result, coefficients=kept)), "Measured, reconciled and predicted"
    )
    row = _row(table, "biomass")
    # 0.3 ± 0.02 and 0.1 ± 0.01 over 13 mmol/g/h, which is 0.297 ± 0.0297 with 25.92 g/mol.
    assert row["measured"] == "0.299±0.0166"
    assert row["reconciled"] == "0.307"
    assert row["moved s.d."] == "+0.50"
    assert row["predicted"] == "0.299"


def test_findings_and_assumptions_are_passed_on(answers: Answers) -> None:
    result = answers["solved"]
    view = view_of(result)
    assert view.findings == tuple((str(f.severity), str(f)) for f in result.findings)
    assert ("parameter po", "1.50", "from memory") in view.assumptions
    assert ("the temperature is kept and not used here", "30 degC", "") in view.assumptions
