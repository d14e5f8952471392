"""The workbook: its cells against Python's figures, as stored and as a spreadsheet has them."""

from __future__ import annotations

import subprocess
from dataclasses import replace
from fractions import Fraction
from pathlib import Path
from shutil import which
from typing import TYPE_CHECKING
from zipfile import ZipFile

import openpyxl
import pytest

from tests.unit.plants import LACTATE, case_at, sheet_at
from tests.unit.workbooks import PLANTS, closed, differences, named, numbers_of, set_cell
from yieldnet.foundation.findings import Findings
from yieldnet.plant import plant as plant_module
from yieldnet.plant.equation import growth_case, settled_equation
from yieldnet.plant.plant import plant_case, plant_of
from yieldnet.prediction.predict import balance_case, predict_case
from yieldnet.reading.case_file import load_case
from yieldnet.report import workbook as workbook_module
from yieldnet.report.workbook import save_workbook, workbook_of
from yieldnet.report.workbook_file import write_book
from yieldnet.report.workbook_inputs import BANNER_OFF
from yieldnet.report.workbook_page import Book, Kind, defined_name, number_format

if TYPE_CHECKING:
    from openpyxl import Workbook

    from yieldnet.model.case import Case
    from yieldnet.plant.sheet import PlantSheet

EXAMPLE = Path("examples") / "plant" / "case.yaml"
needs_spreadsheet = pytest.mark.skipif(
    which("soffice") is None, reason="no LibreOffice here (soffice), so nothing is recalculated"
)


def _written(sheet: PlantSheet, path: Path) -> Path:
    write_book(workbook_of(sheet.prediction, sheet), path)
    return path


@pytest.fixture(scope="module")
def example(checkout: Path) -> PlantSheet:
    case, _ = load_case(str(checkout / EXAMPLE))
    assert case is not None
    return plant_case(case)


@pytest.fixture(scope="module")
def sheets(tmp_path_factory: pytest.TempPathFactory, example: PlantSheet) -> dict[str, PlantSheet]:
    folder = tmp_path_factory.mktemp("cases")
    return {"example": example, **{name: sheet_at(folder, text) for name, text in PLANTS.items()}}


@pytest.mark.parametrize("name", ["example", *PLANTS])
def test_every_figure_stands_in_a_cell_of_its_name(
    name: str, sheets: dict[str, PlantSheet], tmp_path: Path
) -> None:
    path = _written(sheets[name], tmp_path / "a.xlsx")
    cells = named(openpyxl.load_workbook(path, data_only=True))
    assert len(numbers_of(sheets[name])) > 5
    assert differences(cells, sheets[name]) == []


def test_a_difference_would_be_seen(example: PlantSheet, tmp_path: Path) -> None:
    cells = named(openpyxl.load_workbook(_written(example, tmp_path / "a.xlsx"), data_only=True))
    cells["cooling_duty"] *= 1 + 1e-8
    cells["leaves_carbon_dioxide_net"] = 1.0
    del cells["vessels"]
    assert [text.split(":")[0] for text in differences(cells, example)] == [
        "vessels",
        "cooling_duty",
        "leaves_carbon_dioxide_net",
    ]


def test_what_can_be_calculated_is_a_formula(example: PlantSheet, tmp_path: Path) -> None:
    path = _written(example, tmp_path / "a.xlsx")
    cells = named(openpyxl.load_workbook(path))
    inputs = {"vvm", "titre"}
    assert all(str(cells[name]).startswith("=") for name in numbers_of(example))
    assert not any(str(cells[name]).startswith("=") for name in inputs)
    # The yields are numbers, but for those that close the elements.
    formulas = {name for name in cells if name.startswith("yield_of_")
                and str(cells[name]).startswith("=")}  # fmt: skip
    assert formulas - {"yield_of_production"} == {
        "yield_of_ammonia",
        "yield_of_oxygen",
        "yield_of_carbon_dioxide",
        "yield_of_water",
    }


def test_the_sheets_are_named_by_the_words_of_the_project(
    example: PlantSheet, tmp_path: Path
) -> None:
    book = openpyxl.load_workbook(_written(example, tmp_path / "a.xlsx"))
    assert book.sheetnames == [
        "inputs",
        "coefficients",
        "streams",
        "oxygen and heat",
        "cost",
        "ladder",
        "compounds",
        "sources",
    ]
    for sheet in book:
        assert sheet.freeze_panes == "B4"
        assert int(sheet.page_setup.paperSize or 0) == int(sheet.PAPERSIZE_A4)
        assert sheet.page_setup.fitToWidth == 1
        assert sheet["A1"].value == f"Succinate plant beside a sugar works: {sheet.title}"


def test_there_is_a_chart_of_the_cost_and_of_the_ladder(
    example: PlantSheet, tmp_path: Path
) -> None:
    with ZipFile(_written(example, tmp_path / "a.xlsx")) as archive:
        charts = [archive.read(f"xl/charts/chart{k}.xml").decode() for k in (1, 2)]
    assert "'cost'!$B$7:$B$9" in charts[0]
    assert "Raw materials, EUR per kg product" in charts[0]
    assert "'ladder'!$B$7:$B$13" in charts[1]
    assert "Ladder: most succinate, mol/mol" in charts[1]


def test_every_number_of_a_list_has_its_unit_and_says_what_it_is(
    example: PlantSheet, tmp_path: Path
) -> None:
    book = openpyxl.load_workbook(_written(example, tmp_path / "a.xlsx"))
    kinds = {str(kind) for kind in Kind}
    listed = 0
    for name in ("inputs", "oxygen and heat", "cost"):
        for row in book[name].iter_rows(min_row=5, max_col=6):
            if row[3].value not in kinds or row[1].value is None or not row[2].value:
                continue
            listed += 1
            assert row[0].value
            assert row[4].value or row[5].value or row[3].value == Kind.YOURS
            if row[3].value == Kind.CONSTANT:
                assert row[5].value, row[0].value
    assert listed > 80


def test_ranges_stand_beside_the_yields(example: PlantSheet, tmp_path: Path) -> None:
    sheet = openpyxl.load_workbook(_written(example, tmp_path / "a.xlsx"))["coefficients"]
    rows = {row[0].value: [cell.value for cell in row] for row in sheet.iter_rows(7, 16)}
    answer = example.prediction.coefficient("biomass")
    assert answer.network is not None
    assert answer.elements is not None
    ends = [answer.network.low, answer.network.high, answer.elements.low, answer.elements.high]
    assert rows["biomass"][8:12] == [None if end is None else float(end) for end in ends]
    assert rows["biomass"][13] == "0.04 ± 0.005 g/g; measured"


def test_the_ladder_says_where_its_numbers_are_from(example: PlantSheet, tmp_path: Path) -> None:
    book = openpyxl.load_workbook(_written(example, tmp_path / "a.xlsx"))
    sheet = book["ladder"]
    assert "from the linear problem" in sheet["A3"].value
    values = {row[0].value: row[1].value for row in sheet.iter_rows(7, 13)}
    best = {item.rung: item.value for item in example.prediction.ladder}
    assert values == {name: pytest.approx(float(value or 0)) for name, value in best.items()}


def test_no_macro_no_link_no_date_and_the_same_bytes_each_time(
    example: PlantSheet, tmp_path: Path
) -> None:
    first, second = (_written(example, tmp_path / name) for name in ("a.xlsx", "b.xlsx"))
    assert first.read_bytes() == second.read_bytes()
    with ZipFile(first) as archive:
        assert archive.testzip() is None
        text = b"".join(archive.read(name) for name in archive.namelist())
        names = " ".join(archive.namelist())
    assert "vba" not in names.lower()
    assert "external" not in names.lower()
    assert b'TargetMode="External"' not in text
    assert b"dcterms:modified" not in text


def test_a_text_of_the_user_never_becomes_a_formula(tmp_path: Path) -> None:
    text = LACTATE.replace("case: Lactate", "case: '=1+1'")
    case = case_at(tmp_path, text)
    book = openpyxl.load_workbook(_written(plant_case(case), tmp_path / "a.xlsx"))
    cell = book["inputs"]["B6"]
    assert (cell.value, cell.data_type) == ("=1+1", "s")


def test_a_case_without_a_plant_has_the_other_sheets(checkout: Path, tmp_path: Path) -> None:
    case, _ = load_case(str(checkout / "examples/succinate-from-xylose/case.yaml"))
    assert case is not None
    answer = predict_case(case)
    book = workbook_of(answer, None)
    write_book(book, tmp_path / "a.xlsx")
    assert list(book.pages) == ["inputs", "compounds", "coefficients", "ladder", "sources"]
    assert book["all checks"].value == "yes"
    made = answer.coefficient("succinate").at_aim
    assert made is not None
    assert made.low is not None
    assert book["yield of succinate"].value == float(made.low)


def test_an_equation_that_is_not_settled_leaves_its_yields_open(tmp_path: Path) -> None:
    text = LACTATE.replace("-> ? lactate", "-> ? lactate + ? acetate").split("plant:")[0]
    book = workbook_of(balance_case(case_at(tmp_path, text)), None)
    assert "yield of glucose" in book
    assert "yield of lactate" not in book


def test_an_infeasible_case_has_a_workbook_too(checkout: Path, tmp_path: Path) -> None:
    case, _ = load_case(str(checkout / "tests/golden/infeasible.case.yaml"))
    assert case is not None
    path = tmp_path / "a.xlsx"
    write_book(workbook_of(predict_case(case), None), path)
    book = openpyxl.load_workbook(path)
    assert "none" in [cell.value for cell in book["ladder"]["B"]]


def test_the_checks_hold_where_python_finds_nothing_and_fail_where_it_warns(
    sheets: dict[str, PlantSheet],
) -> None:
    fine = workbook_of(sheets["example"].prediction, sheets["example"])
    assert fine["all checks"].value == "yes"
    low = sheets["cells with too little air"]
    assert "YN912" in {item.code for item in low.findings}
    book = workbook_of(low.prediction, low)
    assert book["all checks"].value == "no"
    assert {book.values[page, "A2"] for page in book.pages} == {BANNER_OFF}


def test_a_file_is_written_whole_and_never_over_another(
    checkout: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    from yieldnet.reading.study_inputs import case_of_inputs, read_inputs
    from yieldnet.report.study import study_of

    path = tmp_path / "case.yaml"
    path.write_text(LACTATE, "utf-8")
    inputs, _ = read_inputs(str(path))
    assert inputs is not None
    case, _ = case_of_inputs(inputs)
    assert case is not None
    study = study_of(case, inputs, versions=(("Python", "3"),))
    target = tmp_path / "study.xlsx"
    save_workbook(study, target)
    rows = [cell.value for cell in openpyxl.load_workbook(target)["sources"]["A"]]
    assert "case file case.yaml, SHA-256" in rows
    before = target.read_bytes()
    with pytest.raises(FileExistsError, match="there already"):
        save_workbook(study, target)
    with pytest.raises(ValueError, match="does not end in"):
        save_workbook(study, tmp_path / "study.ods")
    monkeypatch.setattr(workbook_module, "write_book", _fails)
    with pytest.raises(OSError, match="disk full"):
        save_workbook(study, target, replace=True)
    assert target.read_bytes() == before
    assert {item.name for item in tmp_path.iterdir()} == {"case.yaml", "study.xlsx"}
    assert checkout.is_dir()


def _fails(*_: object) -> None:
    raise OSError("disk full")


def test_names_are_what_a_spreadsheet_takes() -> None:
    assert defined_name("yield of 1,3-propanediol") == "yield_of_1_3_propanediol"
    assert [number_format(value) for value in (0.0, 123.4, 1e-12)] == ["0.00", "#,##0", "0.00E+00"]


def test_two_cells_of_like_names_are_told_apart() -> None:
    book = Book("t")
    page = book.page("a", (9, 9), "about")
    first = book.define("yield of b-c", page.write(1, 1.0))
    second = book.define("yield of B c", page.write(2, 2.0))
    assert (first.text, second.text) == ("yield_of_b_c", "yield_of_B_c_2")
    assert book["yield of B c"].value == 2
    with pytest.raises(AssertionError, match="named twice"):
        book.define("yield of b-c", first)


# Calculated by a spreadsheet.


def _changed_plant(case: Case) -> Case:
    """The case with other numbers in its plant."""
    plant = case.plant
    assert plant is not None
    assert plant.titre is not None
    assert plant.ph is not None
    assert plant.temperature is not None
    prices = tuple(
        replace(item, value=Fraction("0.4")) if item.name == "glucose" else item
        for item in plant.prices
    )
    return replace(
        case,
        plant=replace(
            plant,
            output=replace(plant.output, value=Fraction(30_000_000)),
            titre=replace(plant.titre, value=Fraction(70)),
            ph=replace(plant.ph, value=Fraction("5.5")),
            temperature=replace(plant.temperature, value=Fraction(34)),
            prices=prices,
        ),
    )


YIELDS = {"succinate": 1.35, "acetate": 0.15}
GROWTH = {"biomass": 3.0}
CHANGES = {
    **{f"yield_of_{name}": value for name, value in YIELDS.items()},
    **{f"growth_yield_of_{name}": value for name, value in GROWTH.items()},
    "output": 30_000.0,
    "titre": 70.0,
    "pH_of_the_broth": 5.5,
    "temperature": 34.0,
    "price_of_glucose": 0.4,
}
CHANGED = {"changed": CHANGES, "opened": {"yield_of_lactate": 1.8}}
CALCULATED = (
    "example",
    "base that gives off carbon dioxide",
    "base that costs too much",
    "cells",
    "cells with too little oxygen",
    "cells with too little air",
    "sodium nitrate",
    "phases of known time",
)


def _sheet_of_changes(
    example: PlantSheet, monkeypatch: pytest.MonkeyPatch, case: Case
) -> PlantSheet:
    """What Python tells of other yields: its plant functions, given the changed equations."""
    assert example.growth is not None
    before = growth_case(case)
    production = dict(settled_equation(example.case, example.prediction, Findings()))
    growth = dict(settled_equation(before, example.growth, Findings()))
    changed = {
        True: tuple(closed(case, production, YIELDS).items()),
        False: tuple(closed(case, growth, GROWTH).items()),
    }

    def settled(asked: Case, *_: object) -> tuple[tuple[str, Fraction], ...]:
        return changed[asked.plant is not None]

    monkeypatch.setattr(plant_module, "settled_equation", settled)
    return plant_of(case, example.prediction)


@pytest.fixture(scope="module")
def calculated(
    sheets: dict[str, PlantSheet], tmp_path_factory: pytest.TempPathFactory
) -> dict[str, Workbook]:
    """Every workbook as LibreOffice calculates it, and one with changed cells."""
    folder = tmp_path_factory.mktemp("calculated")
    paths = {}
    chosen = {name: sheets[name] for name in CALCULATED}
    more = {"changed": sheets["example"], "opened": sheets["bare"]}
    for k, (name, sheet) in enumerate({**chosen, **more}.items()):
        paths[name] = _written(sheet, folder / f"{k}.xlsx")
        book = openpyxl.load_workbook(paths[name])
        for cell, value in CHANGED.get(name, {}).items():
            set_cell(book, cell, value)
        # Saved anew it holds no values beside its formulas, so that all must be calculated.
        book.save(paths[name])
        bare = named(openpyxl.load_workbook(paths[name], data_only=True))
        assert bare["product_sold"] is None
    out = folder / "out"
    command = ["soffice", f"-env:UserInstallation={(folder / 'profile').as_uri()}", "--headless"]
    command += ["--convert-to", "xlsx", "--outdir", str(out), *map(str, paths.values())]
    subprocess.run(command, check=True, capture_output=True, timeout=300)
    return {
        name: openpyxl.load_workbook(out / path.name, data_only=True)
        for name, path in paths.items()
    }


@needs_spreadsheet
@pytest.mark.parametrize("name", CALCULATED)
def test_a_spreadsheet_comes_to_the_numbers_of_python(
    name: str, sheets: dict[str, PlantSheet], calculated: dict[str, Workbook]
) -> None:
    assert differences(named(calculated[name]), sheets[name]) == []


@needs_spreadsheet
@pytest.mark.parametrize("name", CALCULATED)
def test_what_is_stored_beside_a_formula_is_what_it_comes_to(
    name: str, sheets: dict[str, PlantSheet], calculated: dict[str, Workbook]
) -> None:
    sheet = sheets[name]
    values = workbook_of(sheet.prediction, sheet).values
    assert len(values) > 50
    wrong = []
    for (page, address), stored in values.items():
        found = calculated[name][page][address].value
        # Residuals are all rounding, so they are the same only to a trillionth.
        same = found == (
            pytest.approx(stored, rel=1e-9, abs=1e-9) if isinstance(stored, float) else stored
        )
        wrong += [] if same else [f"{page} {address}: {found} and not {stored}"]
    assert wrong == []


@needs_spreadsheet
def test_no_cell_holds_an_error(calculated: dict[str, Workbook]) -> None:
    texts = [
        f"{name} {sheet.title} {cell.coordinate}: {cell.value}"
        for name, book in calculated.items()
        for sheet in book
        for row in sheet.iter_rows()
        for cell in row
        if cell.data_type == "e" or (isinstance(cell.value, str) and cell.value.startswith("#"))
    ]
    assert texts == []


@needs_spreadsheet
def test_changed_yields_prices_and_conditions_move_everything_as_in_python(
    example: PlantSheet, calculated: dict[str, Workbook], monkeypatch: pytest.MonkeyPatch
) -> None:
    sheet = _sheet_of_changes(example, monkeypatch, _changed_plant(example.case))
    cells = named(calculated["changed"])
    assert differences(cells, sheet) == []
    before = numbers_of(example)
    moved = {name for name, value in numbers_of(sheet).items() if value != before.get(name)}
    assert {"cooling_duty", "raw_materials", "break_even_yield", "enters_glucose"} <= moved
    assert {"ammonia_as_base", "vessels", "kLa_needed", "leaves_water_net"} <= moved
    assert cells["all_checks"] == "yes"


@needs_spreadsheet
def test_a_yield_that_opens_a_balance_is_told(calculated: dict[str, Workbook]) -> None:
    # Lactate from glucose alone: no other compound can follow.
    book = calculated["opened"]
    cells = named(book)
    assert cells["all_checks"] == "no"
    assert book["cost"]["A2"].value == BANNER_OFF
    assert named(calculated["changed"])["all_checks"] == "yes"
