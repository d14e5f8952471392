"""Plant sheets as text, JSON and CSV."""

from __future__ import annotations

import csv
import io
import json
from typing import TYPE_CHECKING

import pytest

from tests.unit.plants import AEROBIC, LACTATE, sheet_at
from yieldnet.plant.sheet import CAUTIONS
from yieldnet.report.plant_form import plant_form, plant_records, refused_plant_form
from yieldnet.report.plant_view import plant_headline, plant_view

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from click.testing import Result

EXAMPLE = "examples/plant/case.yaml"


def test_one_plant_shows_flows_per_hour_and_per_year(tmp_path: Path) -> None:
    sheet = sheet_at(tmp_path, LACTATE + "  base: ammonia\n  pH: 6\n  recovery: 0.8\n")
    assert plant_headline(sheet) == "8000 t/y lactate from 10000 t/y glucose, 0.800 g/g sold"
    view = plant_view([sheet])
    enters = view.tables[0]
    assert enters.columns == ("", "kg/h", "t/y")
    assert enters.rows[0] == ("glucose", "1250", "10000")
    assert enters.rows[-1][0] == "total"
    assert view.tables[1].rows[-1][1:] == enters.rows[-1][1:]
    assert view.balance.endswith("close exactly.")
    assert view.formulas == ()
    assert view.cautions == CAUTIONS


def test_several_plants_stand_side_by_side(tmp_path: Path) -> None:
    sheets = [
        sheet_at(tmp_path, LACTATE),
        sheet_at(tmp_path, AEROBIC + "  productivity: 2 g/L/h\n"),
    ]
    view = plant_view(sheets)
    assert [title for title, _ in view.headlines] == ["A: Lactate", "B: Fodder yeast"]
    enters = view.tables[0]
    assert enters.columns == ("", "A", "B")
    rows = {row[0]: row[1:] for row in enters.rows}
    assert rows["ammonia"][0] == ""
    assert rows["ammonia"][1] != ""
    assert any(text.startswith("A: ") for text, _, _ in view.assumptions)
    with pytest.raises(ValueError, match="side by side"):
        plant_view([])


def test_the_ions_of_several_plants(tmp_path: Path) -> None:
    held = sheet_at(tmp_path, LACTATE + "  base: ammonia\n  pH: 6\n")
    view = plant_view([held, sheet_at(tmp_path, LACTATE)])
    (ions,) = [item for item in view.tables if item.title.startswith("Acids")]
    assert ions.rows[0][0] == "NH4+ of ammonia"
    assert ions.rows[0][2] == ""


def test_formulas_name_inputs_and_sources(tmp_path: Path) -> None:
    sheet = sheet_at(tmp_path, LACTATE + "  base: ammonia\n  pH: 6\n")
    view = plant_view([sheet], formulas=True)
    assert len(view.formulas) == len(sheet.figures)
    (acid,) = [text for text in view.formulas if text.startswith("protons of lactate")]
    assert "pH 6" in acid
    assert "aqion.de" in acid


def test_the_form_holds_every_stream_and_figure(tmp_path: Path) -> None:
    sheet = sheet_at(tmp_path, LACTATE)
    form = plant_form([sheet])
    assert json.loads(json.dumps(form)) == form
    assert set(form) == set(refused_plant_form(()))
    (plant,) = form["plants"]
    assert [item["name"] for item in plant["streams"]] == [item.name for item in sheet.streams]
    assert [item["name"] for item in plant["figures"]] == [item.name for item in sheet.figures]
    assert all(item["residual"] == 0 for item in plant["balances"])
    bare = plant_form([sheet_at(tmp_path, AEROBIC)])["plants"][0]
    assert set(bare) == set(plant)


def test_the_records_hold_what_the_form_holds(tmp_path: Path) -> None:
    sheet = sheet_at(tmp_path, LACTATE + "  base: ammonia\n  pH: 6\n")
    header, rows = plant_records([sheet])
    assert all(len(row) == len(header) for row in rows)
    assert len(rows) == 2 * len(sheet.streams) + 2 * len(sheet.ions) + len(sheet.figures)


def test_the_command_prints_a_sheet_of_eighty_columns(run: Callable[..., Result]) -> None:
    result = run("plant", EXAMPLE, "--formulas")
    assert result.exit_code == 0
    assert max(len(line) for line in result.output.splitlines()) <= 80
    for word in ("Enters", "Leaves", "cooling duty", "How each figure follows", "local codes"):
        assert word in result.output


def test_the_command_prints_json_and_csv(run: Callable[..., Result]) -> None:
    form = json.loads(run("plant", EXAMPLE, EXAMPLE, "--json").stdout)
    assert len(form["plants"]) == 2
    assert form["status"] == "solved"
    rows = list(csv.DictReader(io.StringIO(run("plant", EXAMPLE, "--csv").stdout)))
    assert {"case", "section", "name", "value", "unit", "formula", "source"} == set(rows[0])


def test_a_case_without_a_plant_is_refused_in_json_too(run: Callable[..., Result]) -> None:
    result = run("plant", "examples/lysine/case.yaml", EXAMPLE, "--json")
    assert result.exit_code == 1
    form = json.loads(result.stdout)
    assert form["status"] == "refused"
    assert form["plants"] == []
    assert [item["code"] for item in form["findings"]] == ["YN913"]
