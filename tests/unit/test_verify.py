"""A report against its repetition: what was changed is found; the verb `report` from end to end."""

from __future__ import annotations

import json
import re
from typing import TYPE_CHECKING

import pytest

import yieldnet
from tests.unit.studied import SMALL, VERSIONS, page_at, study_at
from yieldnet.reading.study_inputs import ReportFile
from yieldnet.report.report_form import refused_report_form, refused_verify_form, verify_form
from yieldnet.report.verify import Verification, compare_pages, differences_table

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from click.testing import Result

    Run = Callable[..., Result]

LYSINE = "examples/lysine/case.yaml"
PLANT = "examples/plant/case.yaml"


def _compare(page: str, path: str = LYSINE, versions: object = VERSIONS) -> Verification:
    study = study_at(path)
    told = ReportFile(
        page=page,
        inputs=study.inputs,
        digests=tuple((item.role, item.digest) for item in study.inputs.texts()),
        versions=VERSIONS,
        engine="glpk",
        date="",
    )
    return compare_pages(told, page_at(path), versions)  # type: ignore[arg-type]


def _changed(page: str, old: str, new: str) -> str:
    assert page.count(old) >= 1
    return page.replace(old, new, 1)


def test_a_report_agrees_with_itself() -> None:
    result = _compare(page_at(LYSINE))
    assert result.same
    assert result.compared > 300
    assert result.notes == ()
    form = verify_form(result)
    assert form["status"] == "same"
    assert set(form) == set(refused_verify_form(()))


def test_a_changed_number_is_found_with_its_place() -> None:
    page = page_at(PLANT)
    changed = _changed(
        page,
        '<th scope="row">glucose</th><td class="number">3030</td>',
        '<th scope="row">glucose</th><td class="number">2030</td>',
    )
    (found,) = _compare(changed, PLANT).differences
    assert (found.report, found.run) == ("2030", "3030")
    assert found.place == "Plant, 'Enters', 'glucose', 'kg/h'"


def test_every_number_cell_is_compared() -> None:
    page = page_at(LYSINE)
    cells = list(re.finditer(r'<td class="number">([^<]+)</td>', page))
    assert len(cells) > 30
    for cell in cells[::12]:
        changed = page[: cell.start(1)] + "777" + page[cell.end(1) :]
        (found,) = _compare(changed).differences
        assert found.report == "777"


def test_words_rows_and_pictures_words_are_compared() -> None:
    page = page_at(PLANT)
    for old, new in (
        ("needs licensed practice.", "needs no practice."),
        ('aria-label="Ranges', 'aria-label="Rages'),
        ("<li>Net carbon dioxide", "<li>Gross carbon dioxide"),
    ):
        assert _compare(_changed(page, old, new), PLANT).differences
    loose = _compare(_changed(page, "</main>", "<div>Buy now.</div></main>"), PLANT)
    assert [item.report for item in loose.differences] == ["Buy now."]
    row = re.search(r'<tr><th scope="row">oxygen</th>.*?</tr>\n', page)
    assert row is not None
    result = _compare(_changed(page, row[0], ""), PLANT)
    assert {item.report for item in result.differences} == {""}
    assert "oxygen" in {item.run for item in result.differences}
    added = _compare(_changed(page, row[0], row[0] * 2), PLANT)
    assert {item.run for item in added.differences} == {""}


def test_a_changed_picture_or_script_is_found_where_versions_agree() -> None:
    page = page_at(LYSINE)
    changed = _changed(page, "</body>", "<style>td { display: none }</style></body>")
    (found,) = _compare(changed).differences
    assert found.place == "pictures, layout or script"
    other = _compare(changed, versions=(("yieldnet", "1"), ("matplotlib", "0")))
    assert other.same
    assert "yieldnet 0 then, 1 now" in other.notes[0]


def test_a_long_text_is_shown_where_it_parts() -> None:
    page = page_at(LYSINE)
    text = re.search(r"<li>([^<]{100,})</li>", page)
    assert text is not None
    changed = _changed(page, text[1], text[1][:-20] + "#" + text[1][-19:])
    result = _compare(changed)
    ((_, report, run),) = differences_table(result).rows
    assert "#" in report
    assert "#" not in run
    assert report.startswith("…")
    assert len(report) < 80


def test_many_differences_are_counted() -> None:
    result = _compare(re.sub(r'(<td class="number">)', r"\g<1>9", page_at(PLANT)), PLANT)
    table = differences_table(result)
    assert len(table.rows) == 30
    assert table.note == f"{len(result.differences) - 30} more in JSON."


# The verb ----------------------------------------------------------------------------------------


@pytest.fixture(scope="module")
def made(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A report that the verb has written."""
    folder = tmp_path_factory.mktemp("made")
    case, path = folder / "case.yaml", folder / "study.html"
    case.write_text(SMALL, "utf-8")
    study = yieldnet.report(case, out=path, date="2 May 2031")
    assert study.prediction.outcome == "solved"
    return path


def test_verify_repeats_a_report(run: Run, made: Path) -> None:
    result = run("report", "--verify", str(made))
    assert result.exit_code == 0, result.output
    assert "agrees with its repetition" in " ".join(result.output.split())


def test_verify_finds_a_changed_input(run: Run, made: Path, tmp_path: Path) -> None:
    page = made.read_text("utf-8")
    # The text that is run, not the one that is shown: in JSON its lines end with \n in letters.
    changed = tmp_path / "changed.html"
    old = re.search(r"\\naim: most lactate", page)
    assert old is not None
    changed.write_text(page.replace(old[0], old[0].replace("most", "least")), "utf-8")
    result = run("report", "--verify", str(changed))
    assert result.exit_code == 1
    assert "SHA-256" in result.output
    form = json.loads(run("report", "--verify", str(changed), "--json").output)
    assert form["status"] == "different"
    assert len(form["differences"]) > 5


def test_verify_finds_a_changed_number(run: Run, made: Path, tmp_path: Path) -> None:
    changed = tmp_path / "changed.html"
    page = made.read_text("utf-8")
    changed.write_text(page.replace('<td class="number">1.50<', '<td class="number">1.60<'))
    result = run("report", "--verify", str(changed))
    assert result.exit_code == 1
    assert "1.60" in result.output
    assert "1.50" in result.output


def test_verify_refuses_what_is_no_report(run: Run, tmp_path: Path) -> None:
    path = tmp_path / "page.html"
    path.write_text("<p>0.811</p>")
    result = run("report", "--verify", str(path))
    assert result.exit_code == 1
    assert "YN931" in result.stderr
    form = json.loads(run("report", "--verify", str(path), "--json").stdout)
    assert form["status"] == "refused"
    assert [item["code"] for item in form["findings"]] == ["YN931"]


def test_verify_refuses_inputs_that_are_no_case(run: Run, made: Path, tmp_path: Path) -> None:
    path = tmp_path / "page.html"
    page = made.read_text("utf-8")
    path.write_text(page.replace("\\nequation: ", "\\nequatoin: "), "utf-8")
    result = run("report", "--verify", str(path))
    assert result.exit_code == 1
    assert "equatoin" in result.stderr


def test_the_verb_writes_pictures_and_says_what_it_wrote(
    run: Run, made: Path, tmp_path: Path
) -> None:
    folder = tmp_path / "pictures"
    case = str(made.parent / "case.yaml")
    result = run("report", case, "--pictures", str(folder), "--json")
    assert result.exit_code == 0, result.output
    form = json.loads(result.output)
    assert form["status"] == "solved"
    assert form["not_told"] == []
    assert set(form) == set(refused_report_form(()))
    assert sorted(form["written"]) == sorted(str(path) for path in folder.iterdir())
    assert {"ladder.svg", "ladder.png", "ranges.svg"} <= {path.name for path in folder.iterdir()}
    again = run("report", case, "--pictures", str(folder))
    assert again.exit_code == 1
    assert "already" in again.stderr


def test_the_verb_never_writes_over_a_file_unasked(run: Run, made: Path) -> None:
    before = made.read_text("utf-8")
    result = run("report", str(made.parent / "case.yaml"), "--out", str(made))
    assert result.exit_code == 2
    assert "--force replaces it" in result.stderr
    assert made.read_text("utf-8") == before


def test_the_verb_refuses_a_bad_case_and_writes_nothing(run: Run, tmp_path: Path) -> None:
    out = tmp_path / "study.html"
    result = run("report", "tests/golden/bad.case.yaml", "--out", str(out))
    assert result.exit_code == 1
    assert "no answer" in result.stderr
    assert list(tmp_path.iterdir()) == []


def test_an_infeasible_case_is_written_and_ends_with_one(run: Run, tmp_path: Path) -> None:
    out = tmp_path / "study.html"
    result = run("report", "tests/golden/infeasible.case.yaml", "--out", str(out))
    assert result.exit_code == 1
    assert "cannot hold together" in out.read_text("utf-8")
    assert f"written: {out}" in result.output


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        ((), "Name a CASE"),
        ((LYSINE,), "Say what to write"),
        ((LYSINE, "--out", "study.pdf"), "ends in .html or .htm"),
        ((LYSINE, "--xlsx", "study.xls"), "ends in .xlsx"),
        ((LYSINE, "--verify", "study.html"), "stands alone"),
    ],
)
def test_wrong_usage_is_told(run: Run, arguments: tuple[str, ...], words: str) -> None:
    result = run("report", *arguments)
    assert result.exit_code == 2
    assert words in " ".join(result.stderr.split())


def test_a_folder_that_is_not_there_is_told(run: Run, made: Path, tmp_path: Path) -> None:
    case = str(made.parent / "case.yaml")
    result = run("report", case, "--out", str(tmp_path / "none" / "study.html"))
    assert result.exit_code == 1
    assert "No such file" in result.stderr


def test_the_verb_writes_a_workbook(run: Run, made: Path, tmp_path: Path) -> None:
    out = tmp_path / "study.xlsx"
    result = run("report", str(made.parent / "case.yaml"), "--xlsx", str(out))
    assert result.exit_code == 0, result.output
    assert out.read_bytes().startswith(b"PK")


def test_what_could_not_be_told_is_said(run: Run, tmp_path: Path) -> None:
    case, out = tmp_path / "case.yaml", tmp_path / "study.html"
    plant = "plant: {product: lactate, output: 10 t/y, on-stream: 8000 h/y}\n"
    unsettled = SMALL.replace("aim: most lactate", plant).replace("measured: ", "# ")
    case.write_text(f"about: A trial.\n{unsettled}", "utf-8")
    result = run("report", str(case), "--out", str(out))
    assert "Not told, plant: " in result.output
    assert "YN913" in result.output
    page = out.read_text("utf-8")
    assert "What could not be told" in page
    assert "<p>A trial.</p>" in page
