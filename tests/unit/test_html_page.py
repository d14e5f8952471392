"""The page of a study: one file, no requests, names as text, the figures of the text outputs."""

from __future__ import annotations

import re
from html.parser import HTMLParser
from importlib import import_module
from itertools import pairwise
from typing import TYPE_CHECKING

import pytest

from tests.unit.studied import SMALL, page_at, study_at, study_of_text
from yieldnet.plant.sheet import CAUTIONS
from yieldnet.report.html_page import page_of, save_page
from yieldnet.report.plant_view import plant_view
from yieldnet.report.view import view_of

if TYPE_CHECKING:
    from pathlib import Path

PLANT = "examples/plant/case.yaml"
HOSTILE = "</title><script>alert(1)</script> & \"quoted\" <b onclick='x'>$x_1$"
VOID = {"meta", "link", "br", "hr", "img", "input"}


class _Tree(HTMLParser):
    """Elements in order, with a check that every one is closed where it should be."""

    def __init__(self) -> None:
        super().__init__(convert_charrefs=True)
        self.open: list[str] = []
        self.elements: list[tuple[str, dict[str, str | None]]] = []
        self.texts: list[str] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.elements.append((tag, dict(attrs)))
        if tag not in VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.elements.append((tag, dict(attrs)))

    def handle_endtag(self, tag: str) -> None:
        assert self.open.pop() == tag

    def handle_data(self, data: str) -> None:
        if not {"script", "style", "svg"} & set(self.open):
            self.texts.append(data)


def _tree(page: str) -> _Tree:
    tree = _Tree()
    tree.feed(page)
    tree.close()
    assert tree.open == []
    return tree


@pytest.fixture(scope="module")
def tree() -> _Tree:
    return _tree(page_at(PLANT))


def test_every_figure_of_the_text_outputs_stands_in_the_page(tree: _Tree) -> None:
    study = study_at(PLANT)
    words = " ".join(" ".join(tree.texts).split())
    assert study.plant is not None
    tables = (*view_of(study.prediction).tables, *plant_view([study.plant]).tables)
    for table in tables:
        for row in table.rows:
            for cell in row:
                for figure in re.split(r"[…±]", cell):
                    assert figure.strip() in words
    assert view_of(study.prediction).headline in words
    for caution in CAUTIONS:
        assert caution in words


def test_nothing_is_fetched_and_no_script_but_its_own_may_run(tree: _Tree) -> None:
    for tag, named in tree.elements:
        assert "src" not in named, tag
        if tag == "a":
            assert (named["href"] or "").startswith("#")
        elif "href" in named:
            assert named["href"] == "data:,"
        for place in ("xlink:href",):
            assert (named.get(place) or "#").startswith("#")
        assert not [name for name in named if name.startswith("on")], tag
    (policy,) = [
        named["content"] or ""
        for tag, named in tree.elements
        if named.get("http-equiv") == "Content-Security-Policy"
    ]
    assert policy.startswith("default-src 'none'")
    assert "script-src 'sha256-" in policy
    assert "@import" not in page_at(PLANT)
    assert not re.search(r"url\((?!#)", page_at(PLANT))


def test_addresses_are_there_and_names_of_parts_stand_once(tree: _Tree) -> None:
    names = [named["id"] for _, named in tree.elements if named.get("id")]
    assert len(names) == len(set(names))
    for tag, named in tree.elements:
        if tag == "a":
            assert (named["href"] or "").removeprefix("#") in names
        if named.get("aria-labelledby"):
            assert named["aria-labelledby"] in names


def test_headings_are_in_order_and_tables_are_named(tree: _Tree) -> None:
    levels = [int(tag[1]) for tag, _ in tree.elements if re.fullmatch("h[1-6]", tag)]
    assert levels[0] == 1
    assert levels.count(1) == 1
    assert all(after <= before + 1 for before, after in pairwise(levels))
    tags = [tag for tag, _ in tree.elements]
    assert tags.count("caption") == tags.count("table") == tags.count("thead") > 20
    assert all(named.get("scope") in {"col", "row"} for tag, named in tree.elements if tag == "th")
    assert dict(tree.elements[0][1]) == {"lang": "en"} or tree.elements[0][0] == "html"
    pictures = [named for tag, named in tree.elements if tag == "svg"]
    assert len(pictures) == 6
    assert all(named["role"] == "img" and named["aria-label"] for named in pictures)


def test_the_cells_of_number_columns_are_plain_numbers_or_words(tree: _Tree) -> None:
    page = page_at(PLANT)
    cells = re.findall(r'<td class="number[^"]*"[^>]*>([^<]*)</td>', page)
    assert len(cells) > 150
    assert not [cell for cell in cells if re.search(r"[…±(%]", cell)]


def test_a_hostile_name_is_text(checkout: Path) -> None:
    network = (checkout / "models" / "lysine-coryneform.yaml").read_text("utf-8")
    text = (checkout / "examples" / "lysine" / "case.yaml").read_text("utf-8")
    quoted = "'" + HOSTILE.replace("'", "''") + "'"
    case = re.sub(r"^case: .*$", lambda _: f"case: {quoted}", text, flags=re.MULTILINE)
    page = page_of(study_of_text(case, network))
    tree = _tree(page)
    assert HOSTILE in "".join(tree.texts)
    assert "<script>alert" not in page
    assert [tag for tag, _ in tree.elements].count("script") == 2
    assert "b" not in {tag for tag, named in tree.elements if "onclick" in named}


def test_the_same_study_is_the_same_file_and_a_date_is_printed_only_when_given() -> None:
    study = study_of_text(SMALL)
    assert page_of(study) == page_of(study_of_text(SMALL))
    dated = page_of(study, "1 May 2031")
    assert "<p>1 May 2031</p>" in dated
    assert "1 May 2031" not in page_of(study)


def test_a_file_is_written_whole_and_never_over_another(tmp_path: Path) -> None:
    path = tmp_path / "study.html"
    study = study_of_text(SMALL)
    save_page(study, path)
    assert path.read_text("utf-8") == page_of(study)
    with pytest.raises(FileExistsError, match="it is there already"):
        save_page(study, path)
    save_page(study, path, date="later", replace=True)
    assert "later" in path.read_text("utf-8")
    assert list(tmp_path.iterdir()) == [path]


def test_a_report_that_fails_leaves_no_half_file(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def fail(*_: object) -> str:
        raise RuntimeError("the pen broke")

    # By its module, since `yieldnet.report` is the verb of that name.
    monkeypatch.setattr(import_module("yieldnet.report.html_page"), "page_of", fail)
    with pytest.raises(RuntimeError, match="the pen broke"):
        save_page(study_of_text(SMALL), tmp_path / "study.html")
    assert list(tmp_path.iterdir()) == []
