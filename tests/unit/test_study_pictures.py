"""Pictures of a study: what is drawn and said, and how they come into files."""

from __future__ import annotations

import xml.etree.ElementTree as ElementTree
from dataclasses import replace
from fractions import Fraction
from typing import TYPE_CHECKING

import numpy as np
import pytest
from matplotlib.patches import PathPatch, Rectangle

from tests.unit.conftest import CASES, NETWORK
from tests.unit.studied import SMALL, study_at, study_of_text
from yieldnet.optimum.ranges import Range
from yieldnet.report.picture_file import picture_text
from yieldnet.report.stream_picture import draw_streams, stream_words
from yieldnet.report.study_pictures import (
    draw_ladder,
    draw_ranges,
    draw_relaxations,
    save_study_pictures,
    study_pictures,
)

if TYPE_CHECKING:
    from pathlib import Path

    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

# The oldest matplotlib that is allowed calls the newest pyparsing by its former names; that is
# between the two of them.
pytestmark = pytest.mark.filterwarnings("ignore:'[A-Za-z]+'.* deprecated:DeprecationWarning")
PLANT = "examples/plant/case.yaml"
XYLOSE = "examples/succinate-from-xylose/case.yaml"


def _widths(axes: Axes) -> list[float]:
    return [item.get_width() for item in axes.patches if isinstance(item, Rectangle)]


def _words(figure: Figure) -> list[str]:
    return [text.get_text() for axes in figure.axes for text in axes.texts]


def test_a_study_has_the_pictures_its_data_allow() -> None:
    assert [item.name for item in study_pictures(study_at(PLANT))] == [
        "ranges",
        "ladder",
        "relaxations",
        "measured",
        "tradeoff",
        "streams",
    ]
    alone = study_of_text("case: Alone\nequation: glucose -> ? lactate\n")
    assert [item.name for item in study_pictures(alone)] == ["ranges"]


def test_every_picture_says_its_numbers_in_words() -> None:
    words = {item.name: item.words for item in study_pictures(study_at(PLANT))}
    assert "measured 1.53, costs 0.187" in words["ladder"]
    assert "biomass: elements 0.216…0.361" in words["ranges"]
    assert "measured 0.288±0.036" in words["ranges"]
    assert "with a free source of NADH +0.223" in words["relaxations"]
    assert "glucose 23600" in words["streams"]
    assert "rest of the air, 363000 t/y" in words["streams"]
    assert "most succinate 1.61" in words["tradeoff"]
    assert "recovery of carbon 11.1±1.0 %" in words["measured"]


def test_the_ladder_is_a_waterfall() -> None:
    result = study_at(XYLOSE).prediction
    (axes,) = draw_ladder(result).axes
    assert [text.get_text() for text in axes.get_yticklabels()] == [
        item.rung for item in result.ladder
    ]
    values = [float(item.value) for item in result.ladder if item.value is not None]
    losses = [float(item.loss) for item in result.ladder if item.loss]
    bars = [item for item in axes.patches if isinstance(item, Rectangle)]
    whole = [item.get_width() for item in bars if not item.get_hatch()]
    lost = [item.get_width() for item in bars if item.get_hatch()]
    assert whole == pytest.approx(values)
    assert lost == pytest.approx(losses)
    # A loss begins where its rung ends and ends where the rung before ended.
    ends = [item.get_x() + item.get_width() for item in bars if item.get_hatch()]
    assert all(any(end == pytest.approx(value) for value in values) for end in ends)


def test_a_rung_without_a_value_says_none() -> None:
    result = study_of_text(CASES["half open"], NETWORK).prediction
    assert any(item.value is None for item in result.ladder)
    assert "none" in _words(draw_ladder(result))


def test_the_ladder_of_a_least_aim_goes_up() -> None:
    text = CASES["solved"].replace("most ethanol", "least ethanol")
    result = study_of_text(text, NETWORK).prediction
    assert any(item.loss for item in result.ladder)
    assert any("(+" in words for words in _words(draw_ladder(result)))


def test_a_ladder_below_zero_is_not_cut() -> None:
    text = "case: Fixes\nequation: glucose -> ? succinate\n"
    text += "either side: [carbon dioxide, water]\naim: most carbon dioxide\n"
    result = study_of_text(text + "demands: {succinate: at least 1.7}\n").prediction
    lowest = min(float(item.value) for item in result.ladder if item.value is not None)
    assert lowest < 0
    assert draw_ladder(result).axes[0].get_xlim()[0] <= lowest


def test_a_ladder_of_zeros_is_no_picture() -> None:
    study = study_at("tests/golden/infeasible.case.yaml")
    assert not any(item.value for item in study.prediction.ladder)
    assert "ladder" not in {item.name for item in study_pictures(study)}


def test_ranges_stand_on_an_axis_of_their_own_with_all_marks() -> None:
    result = study_at(PLANT).prediction
    figure = draw_ranges(result)
    assert len(figure.axes) == len(result.coefficients)
    place = [item.compound for item in result.coefficients].index("biomass")
    axes, item = figure.axes[place], result.coefficients[place]
    for shown, bar in zip((item.elements, item.network), axes.patches, strict=True):
        assert shown is not None
        assert isinstance(bar, Rectangle)
        assert bar.get_x() == pytest.approx(float(shown.low or 0))
        assert bar.get_width() == pytest.approx(float((shown.high or 0) - (shown.low or 0)))
    low, high = axes.get_xlim()
    assert low <= 0
    assert high >= float(item.measurements[0].value + 2 * (item.measurements[0].sd or 0))
    labels = [text.get_text() for text in figure.legends[0].get_texts()]
    assert labels == ["elements", "network", "at the aim", "measured ± 2 s.d."]


def test_what_has_no_end_says_so() -> None:
    result = study_of_text(CASES["no aim"], NETWORK).prediction
    item = result.coefficients[0]
    endless = replace(
        item, elements=Range(Fraction(0), None), at_aim=Range(None, None), network=None
    )
    figure = draw_ranges(replace(result, coefficients=(endless,)))
    assert _words(figure).count("no end") == 2
    labels = [text.get_text() for text in figure.legends[0].get_texts()]
    assert "network" not in labels


def test_relaxations_are_bars_and_those_left_out_are_counted() -> None:
    result = study_at(PLANT).prediction
    (axes,) = draw_relaxations(result).axes
    assert _widths(axes)[0] == pytest.approx(0.223, abs=5e-4)
    assert _widths(axes) == sorted(_widths(axes), reverse=True)
    assert axes.get_title("left") == ""
    report = result.relaxations
    assert report is not None
    many = replace(report, helpful=report.helpful * 4)
    (axes,) = draw_relaxations(replace(result, relaxations=many)).axes
    assert len(_widths(axes)) == 12
    assert axes.get_title("left") == "8 smaller gains in the table"


def test_streams_are_bands_as_thick_as_they_are_large() -> None:
    sheet = study_at(PLANT).plant
    assert sheet is not None
    figure = draw_streams(sheet)
    (axes,) = figure.axes
    bands = [item for item in axes.patches if isinstance(item, PathPatch)]
    shown = [item for item in sheet.streams if item.name != "rest of the air"]
    assert len(bands) == len(shown)
    words = _words(figure)
    for item in shown:
        assert any(text.replace("\n", " ").startswith(item.name) for text in words)
    corners = [np.asarray(item.get_path().vertices) for item in bands]
    thick = [float(at[0, 1] - at[-2, 1]) for at in corners]
    # Glucose against ammonia as base: 23650 over 6464 t/y.
    assert thick[0] / thick[1] == pytest.approx(
        float(sheet.stream("glucose").t_per_y / sheet.stream("ammonia, as base").t_per_y)
    )
    assert any("363000 t/y, passes through" in text.replace("\n", " ") for text in words)


def test_a_plant_without_air_does_not_speak_of_it() -> None:
    text = (
        "case: Lactate\nequation: glucose -> ? lactate\n"
        "plant: {product: lactate, output: 8000 t/y, on-stream: 8000 h/y}\n"
    )
    sheet = study_of_text(text).plant
    assert sheet is not None
    assert stream_words(sheet) == "enters: glucose 8000; leaves: lactate, sold 8000."


def test_files_are_svg_and_png_and_never_over_others(tmp_path: Path) -> None:
    study = study_of_text(SMALL)
    folder = tmp_path / "deep" / "pictures"
    written = save_study_pictures(study, folder)
    assert sorted(written) == sorted(folder.iterdir())
    assert len(written) == 2 * len(study_pictures(study)) > 2
    for path in written:
        if path.suffix == ".svg":
            assert ElementTree.parse(path).getroot().tag.endswith("svg")
        else:
            assert path.read_bytes().startswith(b"\x89PNG")
    before = {path: path.read_bytes() for path in written}
    (folder / "ladder.svg").unlink()
    with pytest.raises(FileExistsError, match="it is there already"):
        save_study_pictures(study, folder)
    assert not (folder / "ladder.svg").exists()
    save_study_pictures(study, folder, replace=True)
    assert {path: path.read_bytes() for path in folder.iterdir()} == before


def test_a_dollar_in_a_name_is_no_formula() -> None:
    text = SMALL.replace("case: Small", r"case: '$\frac$ and $x'")
    for item in study_pictures(study_of_text(text)):
        assert picture_text(item.draw) == picture_text(item.draw)
