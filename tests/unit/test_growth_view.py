"""Yield against growth rate as text, JSON, CSV and picture; yield on ATP in a prediction."""

from __future__ import annotations

import csv
import json
import xml.etree.ElementTree as ElementTree
from fractions import Fraction
from itertools import pairwise
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest
from click.testing import CliRunner

import yieldnet
from tests.unit.cells import case_of
from yieldnet.cli.main import main
from yieldnet.report.growth_pictures import draw_growth, save_growth
from yieldnet.report.growth_view import (
    growth_form,
    growth_headline,
    growth_records,
    growth_tables,
    piece_words,
    refused_growth_form,
)
from yieldnet.report.json_form import prediction_form
from yieldnet.report.view import view_of

if TYPE_CHECKING:
    from click.testing import Result
    from matplotlib.lines import Line2D

    from yieldnet.prediction.growth import GrowthCurve

SHORT_OF_AIR = "demands: {oxygen: at most 3}\n"
NO_ETHANOL = "demands: {oxygen: at most 3, ethanol: at most 0}\n"
NEVER = "demands: {carbon dioxide: at least 6}\n"
RATES = (0.01, 0.02, 0.1)


@pytest.fixture(scope="module")
def curve(tmp_path_factory: pytest.TempPathFactory) -> GrowthCurve:
    """Two pieces, growth at every rate."""
    return yieldnet.growth(case_of(tmp_path_factory.mktemp("air"), SHORT_OF_AIR), rates=RATES)


@pytest.fixture(scope="module")
def ending(tmp_path_factory: pytest.TempPathFactory) -> GrowthCurve:
    """One piece, no growth at the slower rates."""
    return yieldnet.growth(case_of(tmp_path_factory.mktemp("end"), NO_ETHANOL), rates=RATES)


@pytest.fixture(scope="module")
def never(tmp_path_factory: pytest.TempPathFactory) -> GrowthCurve:
    """No growth at all."""
    return yieldnet.growth(case_of(tmp_path_factory.mktemp("never"), NEVER), rates=RATES)


def test_the_headline_is_the_law_of_the_fastest_piece_asked_for(
    curve: GrowthCurve, ending: GrowthCurve, never: GrowthCurve
) -> None:
    # 15/4 mol/mol x 30.026/180.156 g/g, and a twentieth of 1 mmol/g/h.
    law = "true yield 0.625 g/g, m_S 0.0500 mmol glucose/g/h"
    assert law in growth_headline(curve)
    assert "at the fastest growth asked for" in growth_headline(curve)
    assert growth_headline(ending).endswith(law)
    assert growth_headline(never) == "no growth at any of these rates"


def test_growth_without_the_basis_has_no_end(checkout: Path) -> None:
    path = checkout / "tests" / "bad_inputs" / "growth-without-the-basis.case.yaml"
    result = yieldnet.growth(path)
    assert not result.grows
    assert "its yield on it has no end" in growth_headline(result)
    assert {row[1] for row in growth_tables(result)[0].rows} == {"no end"}
    assert "maintenance takes more" not in growth_tables(result)[0].note
    assert draw_growth(result).axes[0].get_title(loc="left") == "Most biomass from glucose"


def test_the_tables_hold_points_pieces_and_published_numbers(
    curve: GrowthCurve, ending: GrowthCurve, never: GrowthCurve
) -> None:
    points, pieces, published = growth_tables(curve)
    # At 0.1 1/h: k = 0.30026, glucose 4/15 + k/20.
    assert points.rows[-1] == ("0.100", "3.55", "0.592", "0.938", "13.1", "1")
    assert points.bars[-1] == 1
    assert [row[1] for row in pieces.rows] == ["above 0.0225", "below 0.0225"]
    assert pieces.note == (
        "Below 0.0225 1/h starts: demand oxygen at its limit, ethanol given off, fermenting."
    )
    assert len(published.rows) > 3
    without = growth_tables(ending)[0]
    assert [row[1] for row in without.rows] == ["none", "none", "3.55"]
    assert "none: maintenance takes more" in without.note
    assert [table.title for table in growth_tables(never)][1].startswith("Published")
    assert growth_tables(never)[0].bars == ()


def test_a_change_names_few_and_counts_the_rest(curve: GrowthCurve) -> None:
    from dataclasses import replace

    piece = replace(curve.pieces[1], starts=tuple("abcde"), stops=("x",))
    assert piece_words(piece) == "starts: a, b, c and 2 more; stops: x"
    assert piece_words(replace(piece, starts=(), stops=())) == "another limit of the same flows"


def test_json_holds_the_same_numbers_and_all_keys(
    curve: GrowthCurve, ending: GrowthCurve, never: GrowthCurve
) -> None:
    form = growth_form(curve)
    assert form["status"] == "grows"
    assert form["rates"][-1]["exact"] == str(curve.points[-1].yield_mol)
    assert form["pieces"][0]["exact_true_yield"] == "15/4"
    assert form["pieces"][1]["starts"] == list(curve.pieces[1].starts)
    assert growth_form(ending)["rates"][0]["mol_per_mol"] is None
    assert growth_form(never)["status"] == "does not grow"
    assert [item["code"] for item in growth_form(never)["findings"]] == ["YN886"]
    assert set(form) == set(refused_growth_form(()))
    assert json.loads(json.dumps(form, allow_nan=False)) == form


def test_csv_has_a_row_a_rate_and_empty_cells_without_growth(ending: GrowthCurve) -> None:
    header, rows = growth_records(ending)
    assert len(rows) == len(RATES)
    assert rows[0] == ("0.01", "", "", "", "", "")
    assert dict(zip(header, rows[-1], strict=True))["piece"] == "1"


def _pairs(line: Line2D) -> list[tuple[float, float]]:
    x, y = np.asarray(line.get_xdata(), float), np.asarray(line.get_ydata(), float)
    return [(float(a), float(b)) for a, b in zip(x, y, strict=True)]


def test_the_curve_that_is_drawn_goes_through_the_points(curve: GrowthCurve) -> None:
    above, below = draw_growth(curve).axes
    *lines, dots = above.get_lines()
    assert len(lines) == len(curve.pieces)
    drawn = sorted(pair for line in lines for pair in _pairs(line))
    rates, yields = [x for x, _ in drawn], [y for _, y in drawn]
    for x, y in _pairs(dots):
        assert float(np.interp(x, rates, yields)) == pytest.approx(y, rel=1e-3)
    # Turned over, every piece is straight.
    for line in below.get_lines()[: len(curve.pieces)]:
        pairs = _pairs(line)
        bends = [
            (after[1] - before[1]) / (after[0] - before[0]) for before, after in pairwise(pairs)
        ]
        assert bends == pytest.approx([bends[0]] * len(bends), rel=1e-6)
    legend = above.get_legend()
    assert legend is not None
    assert len(legend.get_texts()) == len(curve.pieces)


def test_rates_without_growth_are_marked(ending: GrowthCurve, never: GrowthCurve) -> None:
    above = draw_growth(ending).axes[0]
    assert "broken line: no growth" in above.get_title(loc="left")
    marked = [line for line in above.get_lines() if line.get_linestyle() == "--"]
    assert len(marked) == 2
    assert draw_growth(never).axes[0].get_legend() is None


def test_a_picture_is_written_whole(curve: GrowthCurve, tmp_path: Path) -> None:
    path = tmp_path / "growth.svg"
    save_growth(curve, path)
    assert ElementTree.fromstring(path.read_text("utf-8")).tag.endswith("svg")
    with pytest.raises(FileExistsError, match=r"growth\.svg"):
        save_growth(curve, path)
    save_growth(curve, tmp_path / "growth.png")
    assert (tmp_path / "growth.png").read_bytes().startswith(b"\x89PNG")


def _run(*arguments: str) -> Result:
    return CliRunner().invoke(main, arguments)


def test_the_command_answers_in_text_json_and_csv(tmp_path: Path) -> None:
    case_of(tmp_path, SHORT_OF_AIR)
    path = str(tmp_path / "cell.case.yaml")
    picture = tmp_path / "growth.svg"
    text = _run("growth", path, "--rates", "0.01, 0.1", "--picture", str(picture))
    assert text.exit_code == 0, text.output
    assert "true yield 0.625 g/g" in text.output
    assert picture.exists()
    again = _run("growth", path, "--picture", str(picture))
    assert again.exit_code == 2
    form: dict[str, Any] = json.loads(_run("growth", path, "--rates", "0.1", "--json").output)
    assert [item["growth_rate"] for item in form["rates"]] == [0.1]
    rows = list(csv.DictReader(_run("growth", path, "--rates", "0.1,1/5", "--csv").output.split()))
    assert [row["growth_rate"] for row in rows] == ["0.1", "0.2"]


@pytest.mark.parametrize(
    ("rates", "words"), [("0.1,fast", "is not a number"), ("0.1,0", "0 1/h is not above zero")]
)
def test_wrong_rates_are_wrong_usage(tmp_path: Path, rates: str, words: str) -> None:
    case_of(tmp_path)
    result = _run("growth", str(tmp_path / "cell.case.yaml"), "--rates", rates)
    assert result.exit_code == 2
    assert words in " ".join(result.output.split())


def test_a_case_without_growth_ends_with_one(tmp_path: Path, checkout: Path) -> None:
    case_of(tmp_path, NEVER)
    result = _run("growth", str(tmp_path / "cell.case.yaml"), "--rates", "0.1")
    assert result.exit_code == 1
    assert "YN886" in result.output
    refused = _run("growth", str(checkout / "examples" / "lysine" / "case.yaml"), "--json")
    assert refused.exit_code == 1
    form = json.loads(refused.stdout)
    assert form["status"] == "refused"
    assert [item["code"] for item in form["findings"]] == ["YN881"]


def test_a_prediction_shows_its_yield_on_atp(tmp_path: Path) -> None:
    result = yieldnet.predict(case_of(tmp_path, "aim: most biomass\n"))
    (line,) = [text for text in view_of(result).remarks if text.startswith("Y_ATP")]
    assert line == (
        "Y_ATP: 15.0 g biomass/mol ATP of growth alone (no maintenance is known here); published"
        " 10.5…16, in theory at most 28.8."
    )
    form = prediction_form(result)["y_atp"]
    assert Fraction(form["exact_low"]) == Fraction("15.013")
    assert form["with_maintenance"] is False
    assert prediction_form(yieldnet.balance(result.case))["y_atp"] is None
