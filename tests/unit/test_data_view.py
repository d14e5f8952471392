"""What a text shows of judged data."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from tests.unit.judged import FERMENTATION, judge, measured, two_products
from yieldnet.balance.redundancy import RedundancyEquation
from yieldnet.optimum.ranges import Range
from yieldnet.prediction.spread import WorstEnd
from yieldnet.report.data_view import data_view, equation_words, words_of_test

if TYPE_CHECKING:
    from pathlib import Path

    from yieldnet.prediction.reconciliation import Reconciliation
    from yieldnet.report.table import Table

F = Fraction
LOST = (
    f"{FERMENTATION}either side: [water]\n"
    "measured: {ethanol: 1.5 ± 0.05, carbon dioxide: 1.5 ± 0.05}\n"
)


@pytest.fixture
def agreeing(tmp_path: Path) -> Reconciliation:
    text = two_products("1.2 ± 0.2", "1.0 ± 0.1", "aim: most carbon dioxide\n")
    return judge(tmp_path, text)


@pytest.fixture
def failing(tmp_path: Path) -> Reconciliation:
    return judge(tmp_path, LOST)


def _table(result: Reconciliation, title: str, unit: str = "mol/mol") -> Table:
    return next(item for item in data_view(result, unit).tables if item.title.startswith(title))


def _titles(result: Reconciliation) -> list[str]:
    return [item.title.split(",")[0].split(":")[0] for item in data_view(result).tables]


# Headline and equations --------------------------------------------------------------------------


def test_values_that_agree(agreeing: Reconciliation) -> None:
    view = data_view(agreeing)
    assert view.title == "Two products"
    assert view.setting == "per mol glucose; elements alone"
    assert view.headline == (
        "The measured values agree within their errors: chi-square 0.800 with 1 degree of freedom,"
        " p = 0.37"
    )
    assert view.equations == ("electron balance: 12 ethanol + 12 lactate = 24; measured 26.4",)
    assert view.remarks == ()
    assert view.assumptions == (
        ("without a unit, so in mol/mol: measured ethanol, measured lactate", "", ""),
    )


def test_values_that_fail(failing: Reconciliation) -> None:
    headline = data_view(failing).headline
    assert headline.startswith("The measured values fail their test against 'elements': ")
    assert "p < 0.0001" in headline


def test_values_that_cannot_be_tested(tmp_path: Path) -> None:
    text = two_products("1.2 ± 0.2", "1.0 ± 0.1").replace(", lactate: 1.0 ± 0.1", "")
    result = judge(tmp_path, text)
    view = data_view(result)
    assert view.headline == "The measured values cannot be tested: no balance ties them together."
    assert view.equations == ()
    assert "Chi-square test at 95 %" not in _titles(result)


def test_exact_values_that_contradict_are_no_agreement(tmp_path: Path) -> None:
    text = two_products("1.2", "0.9, water: 0.1 ± 0.1")
    result = judge(tmp_path, text)
    assert result.contradictory
    assert data_view(result).headline == (
        "Values without an error contradict the balances: no measured value can agree."
    )


def test_the_network_is_part_of_the_setting(tmp_path: Path) -> None:
    text = two_products("1.2 ± 0.1", "0.8 ± 0.1", "network: network.yaml\n")
    result = judge(tmp_path, text)
    view = data_view(result)
    assert view.setting == "per mol glucose; network: Both together"
    assert "fail their test against 'pathways'" in view.headline
    # An overlooked product is a question to the elements, which do not fail here.
    assert not any(title.startswith("If all values were right") for title in _titles(result))
    tests = _table(result, "Chi-square test")
    assert [row[0] for row in tests.rows] == ["elements", "pathways"]
    assert [row[-1] for row in tests.rows] == ["agrees", "fails"]
    alone = data_view(judge(tmp_path, text, elements=True))
    assert alone.setting == "per mol glucose; elements alone"


@pytest.mark.parametrize(
    ("terms", "constant", "name", "words"),
    [
        (
            [("ethanol", "1", "2"), ("lactate", "0.5", "-3")],
            "6",
            "carbon balance",
            "carbon balance: 2 ethanol - 3 lactate = 6; measured 0.500",
        ),
        (
            [("ethanol", "1", "-1"), ("lactate", "0.5", "1")],
            "0",
            "",
            "all balances together: - ethanol + lactate = 0; measured -0.500",
        ),
    ],
)
def test_an_equation_in_words(
    terms: list[tuple[str, str, str]], constant: str, name: str, words: str
) -> None:
    item = RedundancyEquation(
        name=name,
        terms=tuple((measured(one, value, "0.1"), F(factor)) for one, value, factor in terms),
        constant=F(constant),
    )
    assert equation_words(item) == words


def test_two_values_of_one_coefficient_are_told_apart() -> None:
    item = RedundancyEquation(
        name="values of biomass",
        terms=(
            (measured("biomass", "1", "0.1"), F(1)),
            (measured("biomass", "2", "0.1", "growth rate / substrate uptake"), F(-1)),
        ),
        constant=F(0),
    )
    assert equation_words(item) == (
        "values of biomass: measured biomass - growth rate / substrate uptake = 0; measured -1"
    )


@pytest.mark.parametrize(
    ("degrees", "p", "words"),
    [
        (1, 0.0455, "chi-square 4 with 1 degree of freedom, p = 0.045"),
        (3, 1e-9, "chi-square 4 with 3 degrees of freedom, p < 0.0001"),
    ],
)
def test_a_test_in_words(degrees: int, p: float, words: str) -> None:
    assert words_of_test(F(4), degrees, p) == words


# Tables ------------------------------------------------------------------------------------------


def test_the_tables_of_values_that_agree(agreeing: Reconciliation) -> None:
    assert _titles(agreeing) == [
        "What the equalities say of each coefficient",
        "Recovery at the values as measured",
        "Chi-square test at 95 %",
        "Measured and reconciled",
        "Calculated from them",
    ]
    assert _table(agreeing, "What the equalities").rows == (
        ("ethanol", "measured", "redundant by elements"),
        ("lactate", "measured", "redundant by elements"),
        ("carbon dioxide", "not measured", "calculable by elements"),
        ("water", "not measured", "calculable by elements"),
    )
    recoveries = {row[0]: row for row in _table(agreeing, "Recovery").rows}
    assert recoveries["electrons"][1] == "110"
    assert recoveries["oxygen"][3] == "carbon dioxide, water"
    assert _table(agreeing, "Chi-square test").rows == (
        ("elements", "1", "0.800", "3.84", "0.37", "agrees"),
    )
    # 0.0894 is the root of 0.008.
    assert _table(agreeing, "Measured and reconciled").rows == (
        ("ethanol", "1.20±0.20", "1.040±0.089", "-0.80", "-0.89", "80"),
        ("lactate", "1.00±0.10", "0.960±0.089", "-0.40", "-0.89", "20"),
    )
    assert _table(agreeing, "Calculated").rows == (
        ("carbon dioxide", "given off", "1.040±0.089", "elements"),
        ("water", "given off", "0", "elements"),
    )


def test_who_may_be_wrong(failing: Reconciliation) -> None:
    assert _titles(failing) == [
        "What the equalities say of each coefficient",
        "Recovery at the values as measured",
        "Chi-square test at 95 %",
        "If one value alone were wrong",
        "Taken out one after the other until the rest agrees",
        "If all values were right and one product overlooked",
        "Measured and reconciled",
        "Calculated from them",
    ]
    assert _table(failing, "If one value").rows[0][0] == "measured ethanol"
    taken = _table(failing, "Taken out")
    assert [row[1] for row in taken.rows] == ["measured ethanol", "measured carbon dioxide"]
    assert taken.rows[-1][2:] == ("0", "none left")
    overlooked = _table(failing, "If all values")
    # A half of lactate or three quarters of acetate close all; only the first three are named.
    assert "more" in overlooked.rows[0][0]
    assert overlooked.rows[0][2] == "0"
    assert len(overlooked.rows) <= 8


def test_values_that_no_point_keeps_are_said_to_be_so(failing: Reconciliation) -> None:
    assert not failing.feasible
    assert "No point keeps all bands and sides" in _table(failing, "Measured and rec").note
    assert "No point" not in _table(replace(failing, feasible=True), "Measured and rec").note


@pytest.mark.parametrize(
    ("unit", "ethanol"),
    [
        ("mol/mol", "1.20±0.20"),
        # 46.069/180.156 and 2/6.
        ("g/g", "0.307±0.051"),
        ("C-mol/C-mol", "0.400±0.067"),
    ],
)
def test_values_are_told_in_the_unit_asked_for(
    agreeing: Reconciliation, unit: str, ethanol: str
) -> None:
    table = _table(agreeing, "Measured and reconciled", unit)
    assert table.title.endswith(f", {unit}")
    assert table.rows[0][1] == ethanol


def test_a_unit_without_meaning_is_said(agreeing: Reconciliation) -> None:
    rows = {row[0]: row for row in _table(agreeing, "Calculated", "C-mol/C-mol").rows}
    assert rows["water"][2] == "no C-mol/C-mol"


def test_a_value_that_nothing_checks_has_no_residual(tmp_path: Path) -> None:
    result = judge(
        tmp_path, two_products("1.2 ± 0.2", "1.0 ± 0.1").replace(", lactate: 1.0 ± 0.1", "")
    )
    assert _table(result, "Measured and rec").rows == (
        ("ethanol", "1.20±0.20", "1.20±0.20", "+0.00", "none", "0"),
    )
    assert _table(result, "What the").rows[0] == ("ethanol", "measured", "not redundant")


def test_exact_and_open_coefficients_have_classes_of_their_own(tmp_path: Path) -> None:
    text = (
        "case: x\nequation: glucose + ? oxygen -> 1/2 ethanol + ? lactate + ? acetate\n"
        "either side: [carbon dioxide, water]\nmeasured: {oxygen: 1 ± 0.1}\n"
    )
    classes = {row[0]: row[1:] for row in _table(judge(tmp_path, text), "What the").rows}
    assert classes["ethanol"] == ("exact", "taken as exact")
    assert classes["oxygen"] == ("measured", "not redundant")
    assert classes["acetate"] == ("not measured", "not calculable")


# The aim, the draws, the next measurement ---------------------------------------------------------


def test_the_aim_has_its_error_and_its_ends(agreeing: Reconciliation) -> None:
    view = data_view(agreeing)
    assert view.aim.startswith("most carbon dioxide: 1.04")
    assert "0.800 to 1.20 within two s.d. of all measured values" in view.aim
    assert agreeing.optimum is not None
    unknown = replace(agreeing.optimum, worse=WorstEnd(None, 600, "the bands have corners"))
    assert data_view(replace(agreeing, optimum=unknown)).aim.endswith(
        "its worse end within two s.d. is not told: the bands have corners"
    )


def test_no_aim_is_no_line(failing: Reconciliation) -> None:
    assert data_view(failing).aim == ""


def test_drawn_sets_are_said_to_be_drawn(tmp_path: Path) -> None:
    result = judge(tmp_path, two_products("2.05 ± 0.1", "0.01 ± 0.1"), draws=50)
    (remark,) = data_view(result).remarks
    # 1/sqrt(2 · 50).
    assert remark == (
        "Standard deviations of reconciled values are from 50 drawn sets (seed 20261), so known to"
        " about 10 %; all others are in closed form."
    )
    best = data_view(replace(result, held=())).remarks[0]
    assert best.startswith("Standard deviations of the best value are from 50")


def test_the_next_measurement_with_bars(tmp_path: Path) -> None:
    text = (
        "case: x\nequation: glucose + ? oxygen -> ? ethanol + ? lactate\n"
        "either side: [carbon dioxide, water]\nmeasured: {oxygen: 1.5 ± 0.5}\n"
    )
    result = judge(tmp_path, text, of="lactate", precision=0.1)
    table = data_view(result).next
    assert table is not None
    # Oxygen 0.5 to 2.5 leaves 22 electrons at most: lactate up to 22/12.
    assert table.title == ("The next measurement: what it leaves of the 1.83 that lactate can vary")
    assert "s.d. of 10 % of its value" in table.note
    assert {row[0] for row in table.rows} == {"ethanol", "carbon dioxide", "water"}
    assert table.bars == tuple(item.narrowing for item in result.next)
    endless = replace(result.next[0], expected=None, worst=None, range=Range(F(0), None))
    again = data_view(replace(result, next=(endless,))).next
    assert again is not None
    assert again.rows == ((endless.compound, "0…unbounded", "no end", "no end"),)
    assert again.bars == (0.0,)


def test_without_a_target_there_is_no_next_measurement(failing: Reconciliation) -> None:
    assert data_view(failing).next is None
