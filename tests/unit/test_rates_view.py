"""How rates are shown: tables, picture, JSON and CSV say the same numbers."""

from __future__ import annotations

import csv
import io
import json
import xml.etree.ElementTree as ElementTree
from typing import TYPE_CHECKING

import numpy as np
import pytest

import yieldnet
from yieldnet.foundation.errors import InputError
from yieldnet.report.rates_pictures import draw_rates, save_rates
from yieldnet.report.rates_view import fit_words, rates_form, rates_headline, rates_tables

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from click.testing import Result

    from yieldnet.rates.result import RateResult

    Run = Callable[..., Result]

EXAMPLES = ("batch", "chemostat", "fed-batch", "start-and-end")


@pytest.fixture(scope="module")
def found(checkout: Path) -> dict[str, RateResult]:
    return {name: yieldnet.rates(checkout / f"examples/{name}/run.yaml") for name in EXAMPLES}


@pytest.mark.parametrize("name", EXAMPLES)
def test_every_screen_is_80_columns_wide(run: Run, name: str) -> None:
    done = run("rates", f"examples/{name}/run.yaml")
    assert done.exit_code == 0
    assert max(len(line) for line in done.stdout.splitlines()) <= 80


def test_yields_rates_and_fit_have_their_tables(found: dict[str, RateResult]) -> None:
    result = found["batch"]
    (state,) = result.states
    titles = [table.title.split(",")[0] for table in rates_tables(result, state)]
    assert titles[:3] == [
        "Yields on xylose",
        "Specific rates",
        "Volumetric rates",
    ]
    assert titles[3].startswith("Fit of constant rates from")
    assert "growth rate 0.06" in rates_headline(result, state)
    assert state.fit is not None
    assert fit_words(state.fit).startswith("chi-square")


def test_a_run_without_biomass_says_so(found: dict[str, RateResult]) -> None:
    result = found["start-and-end"]
    (state,) = result.states
    assert rates_headline(result, state).startswith("RQ 1.2")
    titles = [table.title.split(",")[0] for table in rates_tables(result, state)]
    assert titles == ["Yields on glucose", "Volumetric rates"]


def test_json_and_csv_hold_the_numbers_of_the_result(
    run: Run, found: dict[str, RateResult]
) -> None:
    form = json.loads(run("rates", "examples/chemostat/run.yaml", "--json").stdout)
    assert form == json.loads(json.dumps(rates_form(found["chemostat"])))
    assert [state["state"] for state in form["states"]] == ["slow", "fast"]
    text = run("rates", "examples/chemostat/run.yaml", "--csv").stdout
    rows = list(csv.DictReader(io.StringIO(text)))
    fast = found["chemostat"].state("fast")
    row = next(r for r in rows if r["state"] == "fast" and r["compound"] == "ethanol")
    assert float(row["yield mol/mol"]) == fast.yield_of("ethanol").value
    assert float(row["specific rate mol/g/h"]) == fast.specific_rate("ethanol").value


def test_a_refused_run_is_json_with_all_keys(run: Run, found: dict[str, RateResult]) -> None:
    done = run("rates", "nowhere.yaml", "--json")
    assert done.exit_code == 1
    form = json.loads(done.stdout)
    assert form["status"] == "refused"
    assert set(form) == set(rates_form(found["batch"]))


@pytest.mark.parametrize("name", ["batch", "fed-batch"])
def test_the_picture_has_a_panel_a_series_with_its_points_and_its_curve(
    found: dict[str, RateResult], name: str
) -> None:
    result = found[name]
    fit = result.states[0].fit
    assert fit is not None
    panels = [axes for axes in draw_rates(result).axes if axes.axison]
    assert len(panels) == len(fit.series)
    for axes, series in zip(panels, fit.series, strict=True):
        assert axes.get_title(loc="left").startswith(series.compound)
        lengths = [np.size(line.get_xdata()) for line in axes.get_lines()]
        assert len(series.times) in lengths
        assert len(series.curve_times) in lengths


def test_steady_states_are_drawn_over_their_growth_rate(found: dict[str, RateResult]) -> None:
    result = found["chemostat"]
    panels = [axes for axes in draw_rates(result).axes if axes.axison]
    assert len(panels) == len(result.states[0].compounds)
    names = {text.get_text() for axes in panels for text in axes.texts}
    assert names == {"slow", "fast"}


@pytest.mark.parametrize("ending", [".svg", ".png"])
def test_a_picture_is_a_file_of_its_kind(
    found: dict[str, RateResult], tmp_path: Path, ending: str
) -> None:
    path = tmp_path / f"fit{ending}"
    save_rates(found["batch"], path)
    if ending == ".svg":
        assert ElementTree.parse(path).getroot().tag.endswith("svg")
    else:
        assert path.read_bytes().startswith(b"\x89PNG")
    with pytest.raises(FileExistsError, match="there already"):
        save_rates(found["batch"], path)


def test_amounts_have_nothing_to_draw(found: dict[str, RateResult], tmp_path: Path) -> None:
    path = tmp_path / "fit.svg"
    with pytest.raises(InputError, match="YN853"):
        save_rates(found["start-and-end"], path)
    assert not path.exists()
