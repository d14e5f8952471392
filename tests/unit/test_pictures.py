"""Pictures of trade-offs: what is drawn, and how it comes into a file."""

from __future__ import annotations

import xml.etree.ElementTree as ElementTree
from dataclasses import replace
from fractions import Fraction
from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np
import pytest

from yieldnet.optimum.ranges import Range
from yieldnet.report.pictures import draw_tradeoff, save_tradeoff
from yieldnet.studies.tradeoff import trade_off
from yieldnet.verbs import read_case

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from click.testing import Result
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from yieldnet.studies.tradeoff import Tradeoff

    Run = Callable[..., Result]

EXAMPLE = "examples/succinate-from-xylose/case.yaml"
SIGNATURES = {".svg": b"<?xml", ".png": b"\x89PNG"}


@pytest.fixture(scope="module")
def one(checkout: Path) -> Tradeoff:
    return trade_off([read_case(checkout / EXAMPLE)])


@pytest.fixture(scope="module")
def two(one: Tradeoff) -> Tradeoff:
    case = one.regions[0].case
    other = replace(case, title="Transhydrogenase left in", knock_outs=())
    return trade_off([case, other])


def _axes(figure: Figure) -> Axes:
    (axes,) = figure.axes
    return axes


def _texts(figure: Figure) -> list[str]:
    return [item.get_text() for item in _axes(figure).texts]


def test_the_line_goes_through_every_corner_and_back(one: Tradeoff) -> None:
    axes = _axes(draw_tradeoff(one))
    expected = [(float(at.x), float(at.y)) for at in one.regions[0].corners]
    drawn = np.asarray(axes.lines[0].get_xydata())
    assert drawn.tolist() == [list(at) for at in (*expected, expected[0])]
    assert axes.lines[1].get_marker() == "o"


def test_axes_have_units_and_nothing_is_cut_off(one: Tradeoff) -> None:
    axes = _axes(draw_tradeoff(one))
    assert axes.get_xlabel() == "biomass [mol/mol xylose]"
    assert axes.get_ylabel() == "succinate [mol/mol xylose]"
    for corner in one.regions[0].corners:
        assert axes.get_xlim()[0] <= corner.x <= axes.get_xlim()[1]
        assert axes.get_ylim()[0] <= corner.y <= axes.get_ylim()[1]


def test_corners_and_changes_are_labelled(one: Tradeoff) -> None:
    texts = _texts(draw_tradeoff(one))
    assert {"1", "2", "3", "4", "5"} <= set(texts)
    assert "from here carbon dioxide given off" in texts
    assert "oxygen appears" in texts


def test_cases_differ_by_more_than_colour_and_carry_their_names(two: Tradeoff) -> None:
    figure = draw_tradeoff(two)
    lines = [line for line in _axes(figure).lines if line.get_linestyle() != "None"]
    marks = [line for line in _axes(figure).lines if line.get_linestyle() == "None"]
    assert len({line.get_linestyle() for line in lines}) == 2
    assert len({line.get_marker() for line in marks}) == 2
    words = " ".join(" ".join(_texts(figure)).split())
    assert "A: Succinate from hardwood" in words
    assert "B: Transhydrogenase left in" in words


def test_labels_cover_no_line_of_the_example_and_not_each_other(two: Tradeoff) -> None:
    figure = draw_tradeoff(two)
    axes = _axes(figure)
    boxes = [item.get_window_extent() for item in axes.texts]
    for place, box in enumerate(boxes):
        assert not any(box.overlaps(other) for other in boxes[place + 1 :])
    rim = axes.transData.transform(axes.lines[0].get_xydata())
    for start, end in pairwise(rim):
        for step in range(101):
            x, y = start + (end - start) * step / 100
            assert not any(box.contains(x, y) for box in boxes)


def test_what_has_no_end_is_drawn_with_arrows_and_says_so(one: Tradeoff) -> None:
    (region,) = one.regions
    end = Range(Fraction(0), None)
    polygon = replace(
        region.polygon,
        corners=region.polygon.corners[:2],
        rays=((Fraction(0), Fraction(1)), (Fraction(1), Fraction(1))),
        x=end,
        y=end,
    )
    unbounded = replace(region, polygon=polygon, corners=region.corners[:2], edges=())
    figure = draw_tradeoff(replace(one, regions=(unbounded,)))
    assert _texts(figure).count("unbounded") == 2
    # A filled shape would have a last side where there is none.
    assert len(_axes(figure).patches) == 0
    assert len(_axes(draw_tradeoff(one)).patches) == 1


def test_a_region_without_corners_is_said_to_be_unbounded(one: Tradeoff) -> None:
    (region,) = one.regions
    rays = ((Fraction(1), Fraction(0)), (Fraction(-1), Fraction(0)))
    polygon = replace(region.polygon, corners=(), rays=rays)
    empty = replace(region, polygon=polygon, corners=(), edges=())
    assert "unbounded" in _texts(draw_tradeoff(replace(one, regions=(empty,))))


def test_an_axis_that_goes_below_zero_shows_where_zero_is(checkout: Path) -> None:
    case = read_case(checkout / "examples/missing-coefficients/case.yaml")
    axes = _axes(draw_tradeoff(trade_off([case], y="carbon dioxide")))
    low, high = axes.get_ylim()
    assert low < 0 < high
    assert [0, 0] in [list(line.get_ydata()) for line in axes.lines]  # type: ignore[arg-type]


@pytest.mark.parametrize("number", [1, 2])
def test_points_and_segments_are_drawn_as_well(one: Tradeoff, number: int) -> None:
    (region,) = one.regions
    polygon = replace(region.polygon, corners=region.polygon.corners[:number])
    small = replace(region, polygon=polygon, corners=region.corners[:number], edges=())
    texts = _texts(draw_tradeoff(replace(one, regions=(small,))))
    assert [text for text in texts if text.isdigit()] == [str(n + 1) for n in range(number)]


@pytest.mark.parametrize("ending", [".svg", ".png"])
def test_a_saved_picture_is_whole_and_always_the_same(
    one: Tradeoff, tmp_path: Path, ending: str
) -> None:
    first, second = tmp_path / f"first{ending}", tmp_path / f"second{ending}"
    save_tradeoff(one, first)
    save_tradeoff(one, second)
    assert first.read_bytes().startswith(SIGNATURES[ending])
    assert first.read_bytes() == second.read_bytes()
    assert sorted(path.name for path in tmp_path.iterdir()) == [first.name, second.name]
    if ending == ".svg":
        assert ElementTree.fromstring(first.read_text("utf-8")).tag.endswith("svg")


def test_a_picture_replaces_a_file_only_when_told(one: Tradeoff, tmp_path: Path) -> None:
    path = tmp_path / "kept.svg"
    path.write_text("mine", "utf-8")
    with pytest.raises(FileExistsError, match=r"kept\.svg"):
        save_tradeoff(one, path)
    assert path.read_text("utf-8") == "mine"
    save_tradeoff(one, path, replace=True)
    assert path.read_text("utf-8").startswith("<?xml")
    assert list(tmp_path.iterdir()) == [path]


def test_a_picture_of_another_kind_is_refused(one: Tradeoff, tmp_path: Path) -> None:
    with pytest.raises(ValueError, match=r"'a\.gif' does not end in \.svg or \.png"):
        save_tradeoff(one, tmp_path / "a.gif")
    assert list(tmp_path.iterdir()) == []


def test_a_drawing_that_fails_leaves_nothing(
    one: Tradeoff, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def fail(*_: object, **__: object) -> None:
        raise OSError("the disk is full")

    monkeypatch.setattr("matplotlib.figure.Figure.savefig", fail)
    with pytest.raises(OSError, match="the disk is full"):
        save_tradeoff(one, tmp_path / "a.svg")
    assert list(tmp_path.iterdir()) == []


def test_the_command_draws_and_keeps_what_is_there(run: Run, tmp_path: Path) -> None:
    path = tmp_path / "picture.png"
    assert run("tradeoff", EXAMPLE, "--picture", str(path)).exit_code == 0
    drawn = path.read_bytes()
    again = run("tradeoff", EXAMPLE, "--picture", str(path))
    assert again.exit_code == 2
    assert "--force replaces it" in " ".join(again.output.split())
    path.write_text("mine", "utf-8")
    assert run("tradeoff", EXAMPLE, "--picture", str(path), "--force").exit_code == 0
    assert path.read_bytes() == drawn


def test_the_command_says_when_a_picture_cannot_be_written(run: Run, tmp_path: Path) -> None:
    result = run("tradeoff", EXAMPLE, "--picture", str(tmp_path / "nowhere" / "a.svg"))
    assert result.exit_code == 1
    assert "No such file or directory" in result.output
