"""Pictures of judged data: what is drawn, and how it comes into a file."""

from __future__ import annotations

import xml.etree.ElementTree as ElementTree
from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np
import pytest
from matplotlib.patches import Rectangle

from tests.unit.judged import fermentation, judge, two_products
from yieldnet.report.data_pictures import draw_data, save_data

if TYPE_CHECKING:
    from pathlib import Path

    from matplotlib.axes import Axes
    from matplotlib.figure import Figure
    from matplotlib.lines import Line2D

    from yieldnet.prediction.reconciliation import Reconciliation

SIGNATURES = {".svg": b"<?xml", ".png": b"\x89PNG"}


@pytest.fixture(scope="module")
def judged(tmp_path_factory: pytest.TempPathFactory) -> Reconciliation:
    text = (
        "case: Three panels\nequation: glucose + ? oxygen -> ? ethanol + ? lactate\n"
        "either side: [carbon dioxide, water]\n"
        "measured: {oxygen: 1.5 ± 0.5, ethanol: 1.0 ± 0.1, water: 1.9 ± 0.2}\n"
    )
    return judge(tmp_path_factory.mktemp("judged"), text, of="lactate")


@pytest.fixture(scope="module")
def failing(tmp_path_factory: pytest.TempPathFactory) -> Reconciliation:
    folder = tmp_path_factory.mktemp("failing")
    return judge(folder, fermentation("1.5 ± 0.05", "2.04 ± 0.05"))


def _panel(figure: Figure, title: str) -> Axes:
    return next(axes for axes in figure.axes if axes.get_title("left").startswith(title))


def _names(axes: Axes) -> list[str]:
    return [item.get_text() for item in axes.get_yticklabels()]


def _texts(axes: Axes) -> list[str]:
    return [item.get_text() for item in axes.texts]


def _across(line: Line2D) -> list[float]:
    return [float(value) for value in np.asarray(line.get_xdata())]


def _widths(axes: Axes) -> list[float]:
    return [item.get_width() for item in axes.patches if isinstance(item, Rectangle)]


def _titles(figure: Figure) -> list[str]:
    return [axes.get_title("left").split(";")[0].split(":")[0] for axes in figure.axes]


def test_there_is_a_panel_for_each_question(judged: Reconciliation) -> None:
    figure = draw_data(judged)
    assert _titles(figure) == [
        "Recovery at the values as measured, bars two standard deviations",
        "Normalised residuals",
        "The next measurement",
    ]
    assert figure.get_suptitle() == "Three panels"


def test_a_panel_without_rows_is_left_out(judged: Reconciliation, failing: Reconciliation) -> None:
    assert len(draw_data(failing).axes) == 2
    unchecked = tuple(replace(item, residual=None) for item in judged.values)
    figure = draw_data(replace(judged, values=unchecked, next=()))
    assert [title[:8] for title in _titles(figure)] == ["Recovery"]


def test_recoveries_stand_at_their_place_with_their_numbers(failing: Reconciliation) -> None:
    axes = _panel(draw_data(failing), "Recovery")
    assert _names(axes) == ["carbon", "electrons", "oxygen", "hydrogen"]
    points = [line for line in axes.lines if line.get_marker() == "o"]
    # Carbon 2 · 1.5 + 2.04 of 6, electrons 12 · 1.5 of 24.
    assert [_across(line) for line in points[:2]] == [[pytest.approx(84)], [75]]
    assert np.concatenate([line.get_ydata() for line in points]).tolist() == [0, 1, 2, 3]
    assert all(text.split(" ")[0] in ("84", "75", "93") for text in _texts(axes)), _texts(axes)
    # A line at 100 %, and nothing beyond the rim.
    assert [100, 100] in [_across(line) for line in axes.lines]
    assert axes.get_xlim()[0] == 0
    assert axes.get_xlim()[1] > 100


def test_what_is_not_all_measured_is_drawn_open_and_said(judged: Reconciliation) -> None:
    axes = _panel(draw_data(judged), "Recovery")
    open_ones = [
        line.get_markerfacecolor() == "white" for line in axes.lines if line.get_marker() == "o"
    ]
    left_out = [bool(item.left_out) for item in judged.recoveries]
    assert open_ones == left_out
    assert any(left_out)
    said = ["not all of it measured" in text for text in _texts(axes)]
    assert said == left_out


def test_residuals_beyond_two_are_hatched(failing: Reconciliation) -> None:
    axes = _panel(draw_data(failing), "Normalised residuals")
    assert _names(axes) == ["ethanol", "carbon dioxide"]
    # 0.5 and -0.04 in standard deviations of 0.05.
    assert _widths(axes) == pytest.approx([10, -0.8])
    assert [bool(bar.get_hatch()) for bar in axes.patches] == [True, False]
    assert _texts(axes) == ["+10.00", "-0.80"]
    assert axes.get_xlim()[0] < -2
    assert axes.get_xlim()[1] > 10
    assert {_across(line)[0] for line in axes.lines} == {-2.0, 0.0, 2.0}


def test_the_next_measurement_leaves_part_of_each_bar(judged: Reconciliation) -> None:
    axes = _panel(draw_data(judged), "The next measurement")
    assert _names(axes) == [item.compound for item in judged.next]
    before = float(judged.next[0].before)
    widths = _widths(axes)
    assert widths[::2] == [before] * len(judged.next)
    assert widths[1::2] == [item.expected for item in judged.next]
    assert "within 5 %" in axes.get_title("left")
    assert "mol/mol" in axes.get_xlabel()


def test_a_coefficient_without_an_end_has_an_empty_bar(judged: Reconciliation) -> None:
    endless = replace(judged.next[0], expected=None, worst=None)
    axes = _panel(draw_data(replace(judged, next=(endless,))), "The next measurement")
    assert len(axes.patches) == 1
    assert _texts(axes) == ["has no end"]


def test_one_residual_and_nothing_else(tmp_path: Path) -> None:
    text = two_products("1.2 ± 0.2", "0.8").replace("lactate: 0.8", "water: 0.1 ± 0.1")
    result = replace(judge(tmp_path, text), recoveries=(), next=())
    figure = draw_data(result)
    (axes,) = figure.axes
    assert _names(axes) == ["water"]


@pytest.mark.parametrize("ending", [".svg", ".png"])
def test_a_saved_picture_is_whole_and_always_the_same(
    judged: Reconciliation, tmp_path: Path, ending: str
) -> None:
    first, second = tmp_path / f"first{ending}", tmp_path / f"second{ending}"
    save_data(judged, first)
    save_data(judged, second)
    assert first.read_bytes().startswith(SIGNATURES[ending])
    assert first.read_bytes() == second.read_bytes()
    assert sorted(path.name for path in tmp_path.iterdir()) == [first.name, second.name]
    if ending == ".svg":
        assert ElementTree.fromstring(first.read_text("utf-8")).tag.endswith("svg")


def test_a_picture_replaces_a_file_only_when_told(judged: Reconciliation, tmp_path: Path) -> None:
    path = tmp_path / "kept.svg"
    path.write_text("mine", "utf-8")
    with pytest.raises(FileExistsError, match=r"kept\.svg"):
        save_data(judged, path)
    assert path.read_text("utf-8") == "mine"
    save_data(judged, path, replace=True)
    assert path.read_text("utf-8").startswith("<?xml")
    assert list(tmp_path.iterdir()) == [path]


def test_a_picture_of_another_kind_is_refused(judged: Reconciliation, tmp_path: Path) -> None:
    with pytest.raises(ValueError, match=r"'a\.gif' does not end in \.svg or \.png"):
        save_data(judged, tmp_path / "a.gif")
    assert list(tmp_path.iterdir()) == []
