"""Bad input: every file of ``tests/bad_inputs`` gives the findings it names.

The first line of a file, or of the file ``NAME.expect`` beside it, says which findings come at
which lines: ``# expect YN201 at 4, YN201 at 7``. A word in parentheses at its end names the verb
that finds them; without one they are found on reading. Errors must be named in full; what is named
must come. A cultivation run, ``NAME.run.yaml``, may have its sheet ``NAME.csv`` beside it, and
``YN123 at sheet 5`` is a place in row 5 of that sheet. What is too large or too strange to keep as
a file is made here.
"""

from __future__ import annotations

import contextlib
import datetime
import json
import os
import random
import re
import time
import zipfile
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

import openpyxl
import pytest
from click.testing import CliRunner

import yieldnet
from yieldnet.cli.main import main
from yieldnet.foundation.catalogue import CATALOGUE
from yieldnet.foundation.findings import Finding, Findings, Severity, TooManyFindings
from yieldnet.optimum.basis import Basis
from yieldnet.reading.nodes import compose
from yieldnet.reading.source import MAX_FINDINGS
from yieldnet.reading.workbook import MAX_UNPACKED_BYTES

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator

    from click.testing import Result

pytestmark = pytest.mark.filterwarnings("error")

TESTS = Path(__file__).resolve().parent.parent
FOLDER = TESTS / "bad_inputs"
CHECKOUT = TESTS.parent
_LINE = re.compile(
    r"# expect (?P<places>YN\d{3} at (?:sheet )?\d+(?:, YN\d{3} at (?:sheet )?\d+)*)"
    r"(?: \((?P<verb>audit|energetics|growth|plant|predict|reconcile)\))?"
)
OTHER_VERBS = frozenset({"energetics", "growth", "plant", "reconcile"})
"""Verbs of a case besides predict; what only they see they tell themselves."""
ELSEWHERE = ("YN7", "YN82", "YN83", "YN85", "YN93")
"""Studies, rates, filling and writing cases: their findings need more than one file, or none."""
CODES_ELSEWHERE = frozenset(code for code in CATALOGUE if code.startswith(ELSEWHERE))
_KEYS = {
    "format",
    "case",
    "basis",
    "status",
    "aim",
    "freedom",
    "coefficients",
    "ladder",
    "relaxations",
    "limits",
    "equation",
    "conflict",
    "findings",
    "assumptions",
}
_DATA_KEYS = {
    "format",
    "case",
    "basis",
    "status",
    "feasible",
    "coefficients",
    "recoveries",
    "equations",
    "tests",
    "suspects",
    "eliminations",
    "missing_products",
    "values",
    "held",
    "covariance",
    "calculated",
    "aim",
    "draws",
    "next",
    "findings",
    "assumptions",
}
_ENERGY_KEYS = {
    "format",
    "case",
    "basis",
    "status",
    "equation",
    "not_unique",
    "recoveries",
    "heat",
    "gibbs_energy",
    "dissipation",
    "steps",
    "biomass_yields",
    "findings",
    "assumptions",
}
_FINDING_KEYS = {"code", "severity", "file", "line", "column", "message", "left", "right", "hint"}
_ANSWERED_BADLY = {"YN601": "infeasible", "YN602": "unbounded"}
Places = frozenset[tuple[str, int | str]]
MOST_TO_PARSING = 5
"""Time to read a file of mistakes over the time to parse it [-]."""
"""Codes with a line of the file, or with ``sheet 5`` for row 5 of its sheet."""


@dataclass(frozen=True, slots=True)
class BadInput:
    """A file with what is expected of it; ``verb`` is empty for findings on reading."""

    path: Path
    expected: Places
    verb: str = ""
    order: tuple[str, ...] = ()

    @property
    def is_case(self) -> bool:
        return self.path.name.endswith(".case.yaml")

    @property
    def is_run(self) -> bool:
        return self.path.name.endswith(".run.yaml")

    @property
    def sheets(self) -> tuple[str, ...]:
        """Paths that the sheet of a run may have."""
        name = self.path.name.removesuffix(".run.yaml")
        endings = (".csv", ".xlsx") if self.is_run else ()
        return tuple(str(self.path.with_name(name + ending)) for ending in endings)

    @property
    def codes(self) -> set[str]:
        return {code for code, _ in self.expected}


def _read_expectation(path: Path) -> BadInput:
    beside = path.with_name(path.name + ".expect")
    raw = (beside if beside.exists() else path).read_bytes()
    # The byte order mark and the carriage return are what some of the files are about.
    first = raw.removeprefix(b"\xef\xbb\xbf").split(b"\n", 1)[0].rstrip(b"\r").decode("ascii")
    found = _LINE.fullmatch(first)
    assert found is not None, f"{path.name} does not begin with '# expect CODE at LINE'"
    places = re.findall(r"(YN\d{3}) at ((?:sheet )?\d+)", found["places"])
    expected: Places = frozenset(
        (code, int(place) if place.isdigit() else place) for code, place in places
    )
    return BadInput(path, expected, found["verb"] or "")


ALL = [_read_expectation(path) for path in sorted(FOLDER.glob("*.yaml"))]
RUNS = [item for item in ALL if item.is_run]
BAD = [item for item in ALL if not item.is_run]
CASES = [item for item in BAD if item.is_case]
RECONCILED = [item for item in CASES if item.verb == "reconcile"]
NETWORKS = [item for item in BAD if not item.is_case]


def _name(item: BadInput) -> str:
    return item.path.name.removesuffix(".yaml")


def _findings(item: BadInput) -> tuple[Finding, ...]:
    """All findings of the verb that an input is about."""
    path = str(item.path)
    read: Callable[[str], object] = yieldnet.read_case if item.is_case else yieldnet.read_network
    if item.is_run:
        read = yieldnet.read_run
    try:
        if item.verb == "audit":
            return yieldnet.audit(path).findings
        if item.verb == "reconcile":
            return yieldnet.reconcile(path).findings
        if item.verb == "plant":
            return yieldnet.plant(path)[0].findings
        if item.verb == "energetics":
            return yieldnet.energetics(path).findings
        if item.verb == "growth":
            return yieldnet.growth(path).findings
        if item.verb == "predict":
            return yieldnet.predict(path, order=item.order).findings
        read(path)
    except yieldnet.InputError as refused:
        return refused.findings
    return ()


def _place(finding: Finding, item: BadInput) -> tuple[str, int | str]:
    """Code and line in the file or its sheet; line 0 for a place elsewhere, which none expects."""
    if finding.where is not None and finding.where.file == str(item.path):
        return finding.code, finding.where.line
    if finding.where is not None and finding.where.file in item.sheets:
        return finding.code, f"sheet {finding.where.line}"
    return finding.code, 0


def _is_printable(finding: Finding) -> bool:
    """Whether no control character of the file reaches the terminal."""
    return f"{finding.message}{finding.left}{finding.right}{finding.hint}".isprintable()


def _check(item: BadInput) -> None:
    findings = _findings(item)
    told = "\n".join(str(finding) for finding in findings)
    errors = {_place(f, item) for f in findings if f.severity is Severity.ERROR}
    assert errors <= item.expected, told
    assert item.expected <= {_place(f, item) for f in findings}, told
    raw = item.path.read_bytes() if os.path.isfile(item.path) else b""
    lines = raw.count(b"\n") + 1
    for finding in findings:
        assert finding.where is not None, told
        if finding.where.file == str(item.path):
            assert 1 <= finding.where.line <= lines, told
        assert finding.where.column >= 1, told
        assert finding.message, told
        assert "WrittenNumber(" not in str(finding), told
        assert _is_printable(finding), told


@pytest.mark.parametrize("item", ALL, ids=_name)
def test_a_bad_file_gives_exactly_the_errors_it_names(item: BadInput) -> None:
    _check(item)


# Inputs that are too large, too deep or too strange to keep as files -----------------------------

_CASE = (
    "case: Made by a test\nequation: glucose -> ? ethanol\neither side: [carbon dioxide, water]\n"
)
_NETWORK = "network: Made by a test\ncrossing: {in: [glucose], out: [lactate]}\nreactions:\n"


def _missing(folder: Path) -> BadInput:
    return BadInput(folder / "missing.case.yaml", frozenset({("YN101", 1)}))


def _missing_network(folder: Path) -> BadInput:
    return BadInput(folder / "missing.network.yaml", frozenset({("YN101", 1)}))


def _directory(folder: Path) -> BadInput:
    path = folder / "directory.case.yaml"
    path.mkdir()
    return BadInput(path, frozenset({("YN101", 1)}))


def _name_too_long(folder: Path) -> BadInput:
    return BadInput(folder / ("a" * 300 + ".case.yaml"), frozenset({("YN101", 1)}))


def _name_with_zero(folder: Path) -> BadInput:
    return BadInput(folder / "a\0b.case.yaml", frozenset({("YN101", 1)}))


def _five_megabytes(folder: Path) -> BadInput:
    path = folder / "large.case.yaml"
    path.write_text(_CASE + "# and so on\n" * (5_000_000 // 12), "utf-8")
    return BadInput(path, frozenset({("YN108", 1)}))


def _parentheses_in_equation(folder: Path) -> BadInput:
    path = folder / "parentheses.network.yaml"
    term = "(" * 10_000 + "1" + ")" * 10_000
    path.write_text(f"{_NETWORK}  ferment: glucose -> {term} lactate\n", "utf-8")
    return BadInput(path, frozenset({("YN208", 4)}))


def _parentheses_in_expression(folder: Path) -> BadInput:
    path = folder / "parentheses.network.yaml"
    term = "(" * 1_000 + "1" + ")" * 1_000
    path.write_text(f"{_NETWORK}  ferment: glucose -> {term} lactate\n", "utf-8")
    return BadInput(path, frozenset({("YN206", 4)}))


def _parentheses_in_formula(folder: Path) -> BadInput:
    path = folder / "parentheses.case.yaml"
    formula = "(" * 10_000 + "C" + ")" * 10_000
    path.write_text(f"{_CASE}compounds:\n  ethanol: {formula}\n", "utf-8")
    return BadInput(path, frozenset({("YN204", 5)}))


def _brackets_of_yaml(folder: Path) -> BadInput:
    path = folder / "brackets.case.yaml"
    path.write_text(f"{_CASE}knock-outs: {'[' * 100_000}\n", "utf-8")
    return BadInput(path, frozenset({("YN108", 4)}))


def _dashes_of_yaml(folder: Path) -> BadInput:
    path = folder / "dashes.case.yaml"
    path.write_text(f"{_CASE}knock-outs:\n  {'- ' * 10_000}respiration\n", "utf-8")
    return BadInput(path, frozenset({("YN108", 5)}))


def _network_name_too_long(folder: Path) -> BadInput:
    path = folder / "name.case.yaml"
    path.write_text(f"{_CASE}network: {'a' * 300}.yaml\n", "utf-8")
    return BadInput(path, frozenset({("YN513", 4)}))


def _order_of_rungs(folder: Path) -> BadInput:
    path = folder / "order.case.yaml"
    path.write_text(f"{_CASE}network: {FOLDER}/networks/small.yaml\naim: most ethanol\n", "utf-8")
    return BadInput(path, frozenset({("YN514", 1)}), "predict", order=("pathways", "pathways"))


def _order_in_vain(folder: Path) -> BadInput:
    path = folder / "no-aim.case.yaml"
    path.write_text(
        f"case: No aim\nnetwork: {FOLDER / 'networks' / 'small.yaml'}\n"
        "equation: glucose -> ? lactate + ? ethanol\neither side: [carbon dioxide, water]\n",
        encoding="utf-8",
    )
    order = ("energy", "redox", "pathways")
    return BadInput(path, frozenset({("YN607", 1)}), "predict", order=order)


def _hundreds_of_mistakes(folder: Path) -> BadInput:
    path = folder / "hundreds-of-mistakes.case.yaml"
    lines = "".join(f"  unknown{i}: 0.1\n" for i in range(MAX_FINDINGS + 20))
    path.write_text(
        "case: The same slip again and again\nequation: glucose -> ? ethanol\n"
        "either side: [carbon dioxide, water]\nmeasured:\n" + lines,
        encoding="utf-8",
    )
    listed = {("YN301", 5 + i) for i in range(MAX_FINDINGS)}
    return BadInput(path, frozenset(listed | {("YN116", 1)}))


_RUN = (
    "run: Made by a test\nkind: batch\nsheet: workbook.xlsx\n"
    "equation: glucose -> ? biomass + ? ethanol\n"
    "compounds: {biomass: CH1.8O0.5N0.2}\nmethod: start and end\n"
    "errors: {glucose: 0.2 g/L, ethanol: 0.05 g/L}\n"
)
_ROWS: list[list[object]] = [
    ["time [h]", "glucose [g/L]", "ethanol [g/L]"],
    [0, 20.0, 0.1],
    [2, 18.5, 0.8],
    [4, 15.0, 2.25],
]


def _workbook(
    folder: Path, cells: dict[str, Any], expected: Places, more: str = "", percent: str = ""
) -> BadInput:
    """Run whose workbook has some cells replaced."""
    book = openpyxl.Workbook()
    tab = book.active
    assert tab is not None
    for row in _ROWS:
        tab.append(row)
    for place, value in cells.items():
        tab[place] = value
    if percent:
        tab[percent].number_format = "0.00%"
    book.save(folder / "workbook.xlsx")
    path = folder / "workbook.run.yaml"
    path.write_text(_RUN + more, "utf-8")
    return BadInput(path, expected)


def _date_in_workbook(folder: Path) -> BadInput:
    cells: dict[str, Any] = {"A3": datetime.datetime(2024, 5, 6, 8, 30)}
    return _workbook(folder, cells, frozenset({("YN125", "sheet 3")}))


def _formula_without_value(folder: Path) -> BadInput:
    return _workbook(folder, {"C4": "=B4*0.15"}, frozenset({("YN125", "sheet 4")}))


def _error_in_workbook(folder: Path) -> BadInput:
    return _workbook(folder, {"C4": "#DIV/0!"}, frozenset({("YN125", "sheet 4")}))


def _truth_in_workbook(folder: Path) -> BadInput:
    return _workbook(folder, {"C4": True}, frozenset({("YN125", "sheet 4")}))


def _percentage_in_workbook(folder: Path) -> BadInput:
    return _workbook(folder, {}, frozenset({("YN125", "sheet 4")}), percent="C4")


def _empty_cell_in_workbook(folder: Path) -> BadInput:
    return _workbook(folder, {"B3": None}, frozenset({("YN124", "sheet 3")}))


def _column_beyond_the_headings_of_a_workbook(folder: Path) -> BadInput:
    return _workbook(folder, {"D3": "late"}, frozenset({("YN126", "sheet 1")}))


def _tab_not_in_workbook(folder: Path) -> BadInput:
    return _workbook(folder, {}, frozenset({("YN122", 8)}), "tab: Sheat\n")


def _cell_far_from_the_table(folder: Path) -> BadInput:
    return _workbook(folder, {"XFD1": "stray"}, frozenset({("YN108", "sheet 1")}))


def _no_workbook(folder: Path) -> BadInput:
    (folder / "workbook.xlsx").write_bytes(b"PK and nothing more")
    path = folder / "workbook.run.yaml"
    path.write_text(_RUN, "utf-8")
    return BadInput(path, frozenset({("YN121", "sheet 1")}))


def _workbook_without_its_parts(folder: Path) -> BadInput:
    with zipfile.ZipFile(folder / "workbook.xlsx", "w") as packed:
        packed.writestr("letter.txt", "Not a workbook.")
    path = folder / "workbook.run.yaml"
    path.write_text(_RUN, "utf-8")
    return BadInput(path, frozenset({("YN121", "sheet 1")}))


def _workbook_that_unpacks_to_very_much(folder: Path) -> BadInput:
    with zipfile.ZipFile(folder / "workbook.xlsx", "w", zipfile.ZIP_DEFLATED) as packed:
        packed.writestr("xl/workbook.xml", "0" * (MAX_UNPACKED_BYTES + 1))
    path = folder / "workbook.run.yaml"
    path.write_text(_RUN, "utf-8")
    return BadInput(path, frozenset({("YN108", "sheet 1")}))


def _missing_run(folder: Path) -> BadInput:
    return BadInput(folder / "missing.run.yaml", frozenset({("YN101", 1)}))


GENERATED: list[Callable[[Path], BadInput]] = [
    _date_in_workbook,
    _formula_without_value,
    _error_in_workbook,
    _truth_in_workbook,
    _percentage_in_workbook,
    _empty_cell_in_workbook,
    _column_beyond_the_headings_of_a_workbook,
    _tab_not_in_workbook,
    _cell_far_from_the_table,
    _no_workbook,
    _workbook_without_its_parts,
    _workbook_that_unpacks_to_very_much,
    _missing_run,
    _missing,
    _missing_network,
    _directory,
    _name_too_long,
    _name_with_zero,
    _five_megabytes,
    _parentheses_in_equation,
    _parentheses_in_expression,
    _parentheses_in_formula,
    _brackets_of_yaml,
    _dashes_of_yaml,
    _network_name_too_long,
    _order_of_rungs,
    _order_in_vain,
    _hundreds_of_mistakes,
]


@pytest.mark.parametrize("make", GENERATED, ids=lambda make: make.__name__.strip("_"))
def test_a_generated_input_gives_exactly_the_errors_it_names(
    make: Callable[[Path], BadInput], tmp_path: Path
) -> None:
    _check(make(tmp_path))


@pytest.mark.parametrize(
    ("text", "code"),
    [
        ("".join(f"key {number}: 1\n" for number in range(10_000)), "YN110"),
        ("aim: most ethanol\n" * 10_000, "YN109"),
        ("measured:\n" + "".join(f"  etha{number}: 1\n" for number in range(10_000)), "YN301"),
        (f"knock-outs: [{','.join(map(str, range(10_000)))}]\n", "YN111"),
        ("".join(f"key {number}: &a{number} 1\n" for number in range(10_000)), "YN107"),
    ],
    ids=["unknown keys", "one key", "unknown compounds", "long list", "anchors"],
)
def test_ten_thousand_mistakes_cost_little_more_than_parsing(
    text: str, code: str, tmp_path: Path
) -> None:
    # A search for near matches for each mistake, and comparing each finding with all the others,
    # took 10 to 15 s. A file beyond a size limit may be refused before it is parsed.
    path = tmp_path / "mistakes.case.yaml"
    path.write_text(_CASE + text, "utf-8")
    begin = time.process_time()
    with contextlib.suppress(TooManyFindings):
        compose(_CASE + text, str(path), Findings(limit=MAX_FINDINGS))
    parsed = time.process_time()
    with pytest.raises(yieldnet.InputError, match=f"{code}|YN108"):
        yieldnet.read_case(path)
    # Parsing again is one of these; those searches were ten.
    assert time.process_time() - parsed < MOST_TO_PARSING * (parsed - begin)


def test_findings_of_the_network_stand_at_their_place_in_the_network_file(tmp_path: Path) -> None:
    network = FOLDER / "strain-names-unknown-reaction.network.yaml"
    path = tmp_path / "of-a-bad-network.case.yaml"
    path.write_text(f"{_CASE}network: {network}\n", "utf-8")
    with pytest.raises(yieldnet.InputError, match="YN302") as caught:
        yieldnet.read_case(path)
    places = [(f.code, str(f.where)) for f in caught.value.findings]
    assert places == [("YN302", f"{network}:10:7")]


def test_a_case_that_names_a_case_as_its_network(tmp_path: Path) -> None:
    path = tmp_path / "snake.case.yaml"
    path.write_text(f"{_CASE}network: snake.case.yaml\n", "utf-8")
    with pytest.raises(yieldnet.InputError, match="YN113"):
        yieldnet.read_case(path)


# The folder itself -------------------------------------------------------------------------------


def test_the_folder_holds_cases_networks_and_runs_and_nothing_else() -> None:
    assert len(CASES) > 50
    assert len(NETWORKS) > 50
    assert len(RUNS) > 50
    sheets = {Path(sheet).name for item in RUNS for sheet in item.sheets}
    others = [
        item.name
        for item in FOLDER.iterdir()
        if not item.name.endswith((".case.yaml", ".network.yaml", ".run.yaml", ".expect"))
        and item.name not in sheets
    ]
    assert sorted(others) == [".gitattributes", "candidates", "networks"]
    for beside in FOLDER.glob("*.expect"):
        assert beside.with_name(beside.name.removesuffix(".expect")).exists(), beside.name


@pytest.mark.parametrize("path", sorted(FOLDER.glob("networks/*.yaml")), ids=lambda path: path.stem)
def test_the_networks_that_the_cases_use_are_good(path: Path) -> None:
    assert yieldnet.audit(path).clean


def test_every_code_of_the_catalogue_is_produced(tmp_path: Path) -> None:
    # What a file names must come, which the tests above assert; here nothing may be left over.
    named = set().union(*(item.codes for item in ALL))
    for number, make in enumerate(GENERATED):
        (folder := tmp_path / str(number)).mkdir()
        named |= make(folder).codes
    # YN605 needs a problem of thousands of pivots; the test below makes the limit small instead.
    # Findings of studies, rates and filled cases have no file: their tests stand beside them.
    assert named | {"YN605"} | CODES_ELSEWHERE == set(CATALOGUE)


@pytest.mark.parametrize("code", sorted(CODES_ELSEWHERE))
def test_a_code_without_a_file_is_named_in_a_test_of_its_own(code: str) -> None:
    tests = (TESTS / "unit").glob("test_*.py")
    assert any(
        code in path.read_text("utf-8") for path in tests if path.name != Path(__file__).name
    )


def test_a_problem_too_large_to_prove_says_so(
    monkeypatch: pytest.MonkeyPatch, run: Callable[..., Result]
) -> None:
    monkeypatch.setattr("yieldnet.optimum.exact_simplex.MAX_PIVOTS", -1)
    monkeypatch.setattr(
        "yieldnet.optimum.glpk.GlpkSession.suggest",
        lambda self, problem, objective, maximise: Basis((), frozenset()),
    )
    case = FOLDER.parent.parent / "examples" / "lysine" / "case.yaml"
    result = run("predict", str(case), "--json")
    assert result.exit_code == 1
    form = _json(result)
    assert form["status"] == "refused"
    assert [item["code"] for item in form["findings"]] == ["YN605"]


# The command line --------------------------------------------------------------------------------


def _state(folder: Path) -> dict[str, tuple[int, int]]:
    return {str(path): (path.stat().st_size, path.stat().st_mtime_ns) for path in folder.rglob("*")}


@pytest.fixture
def run(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Iterator[Callable[..., Result]]:
    """Runs the command in an empty folder; afterwards nothing may have been written anywhere."""
    empty = tmp_path / "empty"
    empty.mkdir()
    monkeypatch.chdir(empty)
    before = _state(FOLDER)

    def _run(*arguments: str) -> Result:
        result = CliRunner().invoke(main, arguments)
        assert result.exception is None or isinstance(result.exception, SystemExit)
        assert "Traceback" not in result.output
        assert "\x1b" not in result.output
        return result

    yield _run
    assert _state(FOLDER) == before
    assert list(empty.iterdir()) == []


def _refuse_constant(name: str) -> float:
    raise AssertionError(f"{name} is not JSON")


def _json(result: Result) -> dict[str, Any]:
    form = json.loads(result.stdout, parse_constant=_refuse_constant)
    assert isinstance(form, dict)
    for finding in form["findings"]:
        assert set(finding) >= _FINDING_KEYS
        assert finding["code"] in CATALOGUE
    return form


def _status(findings: list[dict[str, Any]]) -> str:
    """Status that findings must lead to."""
    errors = [item["code"] for item in findings if item["severity"] == "error"]
    answered = [_ANSWERED_BADLY[code] for code in errors if code in _ANSWERED_BADLY]
    if len(answered) < len(errors):
        return "refused"
    return answered[0] if answered else "solved"


@pytest.mark.parametrize("item", BAD, ids=_name)
def test_predict_answers_a_bad_file_with_json(item: BadInput, run: Callable[..., Result]) -> None:
    result = run("predict", str(item.path), "--json")
    form = _json(result)
    assert set(form) >= _KEYS
    assert form["format"] == 1
    status = _status(form["findings"])
    assert form["status"] == status
    assert result.exit_code == (0 if status == "solved" else 1)
    if not item.is_case:
        # A network where a case is wanted: refused, whatever else is wrong with it.
        assert status == "refused"
        return
    told = {(one["code"], one["line"]) for one in form["findings"] if one["file"] == str(item.path)}
    assert item.expected <= told or item.verb in OTHER_VERBS


@pytest.mark.parametrize("item", CASES, ids=_name)
def test_a_bad_file_is_answered_with_text(item: BadInput, run: Callable[..., Result]) -> None:
    verb = item.verb if item.verb in OTHER_VERBS else "predict"
    result = run(verb, str(item.path))
    # Lines may be folded to the width of the terminal.
    text = "".join(result.output.split())
    for code, line in item.expected:
        assert code in text
        assert re.search(re.escape(f"{item.path}:{line}:") + r"\d", text), result.output


@pytest.mark.parametrize("item", CASES, ids=_name)
def test_reconcile_answers_a_bad_case_with_json(item: BadInput, run: Callable[..., Result]) -> None:
    result = run("reconcile", str(item.path), "--json")
    form = _json(result)
    assert set(form) == _DATA_KEYS
    assert form["format"] == 1
    errors = [one for one in form["findings"] if one["severity"] == "error"]
    assert form["status"] in ({"refused"} if errors else {"agrees", "fails", "untested"})
    assert result.exit_code == (1 if form["status"] in {"refused", "fails"} else 0)
    told = {(one["code"], one["line"]) for one in form["findings"] if one["file"] == str(item.path)}
    # What only a prediction sees stands with that verb.
    assert item.expected <= told or item.verb in {"energetics", "growth", "plant", "predict"}


@pytest.mark.parametrize("item", CASES, ids=_name)
def test_energetics_answers_a_bad_case_with_json(
    item: BadInput, run: Callable[..., Result]
) -> None:
    result = run("energetics", str(item.path), "--json")
    form = _json(result)
    assert set(form) == _ENERGY_KEYS
    assert form["format"] == 1
    assert form["status"] == _status(form["findings"])
    assert result.exit_code == (0 if form["status"] == "solved" else 1)
    told = {(one["code"], one["line"]) for one in form["findings"] if one["file"] == str(item.path)}
    # What only a prediction with a network, a growth rate or the data shows stands there.
    assert item.expected <= told or item.verb in {"growth", "plant", "predict", "reconcile"}


@pytest.mark.parametrize("item", NETWORKS, ids=_name)
def test_audit_answers_a_bad_network_with_json(item: BadInput, run: Callable[..., Result]) -> None:
    result = run("audit", str(item.path), "--json")
    form = _json(result)
    told = {(one["code"], one["line"]) for one in form["findings"]}
    assert item.expected <= told
    refused = any(one["severity"] == "error" for one in form["findings"])
    assert result.exit_code == (1 if refused else 0)


@pytest.mark.parametrize("item", NETWORKS, ids=_name)
def test_predict_refuses_a_case_whose_network_has_errors(
    item: BadInput, run: Callable[..., Result], tmp_path: Path
) -> None:
    path = tmp_path / "of-a-bad-network.case.yaml"
    path.write_text(
        f"case: t\nnetwork: {item.path}\nequation: glucose -> ? lactate\naim: most lactate\n",
        "utf-8",
    )
    form = _json(run("predict", str(path), "--json"))
    errors = {
        (one["code"], one["line"])
        for one in form["findings"]
        if one["severity"] == "error" and one["file"] == str(item.path)
    }
    if not item.verb:
        assert form["status"] == "refused"
        assert errors == item.expected
    else:
        # What only the audit looks at may be doubtful and still let the case be answered.
        assert errors <= item.expected
        assert form["status"] == _status(form["findings"])


# Broken at random --------------------------------------------------------------------------------


def _examples() -> dict[str, bytes]:
    """Good cases and a good network; the cases name their networks by a full path."""
    models = str(CHECKOUT / "models").encode()
    found = {
        f"{path.parent.name}.case.yaml": path.read_bytes().replace(b"../../models", models)
        for path in sorted(CHECKOUT.glob("examples/*/case.yaml"))
    }
    return {**found, "small.network.yaml": (FOLDER / "networks" / "small.yaml").read_bytes()}


EXAMPLES = _examples()


def _survives(name: str, raw: bytes, folder: Path) -> None:
    """Assert that a file is read, or refused with findings that have a place in it."""
    path = folder / name
    path.write_bytes(raw)
    findings: tuple[Finding, ...] = ()
    try:
        if name.endswith(".case.yaml"):
            yieldnet.read_case(path)
        else:
            findings = yieldnet.audit(path).findings
    except yieldnet.InputError as refused:
        findings = refused.findings or ()
        if not findings:
            raise
    for finding in findings:
        assert finding.where is not None
        assert finding.where.line <= raw.count(b"\n") + 1
        assert _is_printable(finding)


@pytest.mark.parametrize("name", EXAMPLES)
def test_a_file_cut_short_is_read_or_refused(name: str, tmp_path: Path) -> None:
    raw = EXAMPLES[name]
    cuts = range(0, len(raw), 40)
    assert len(cuts) > 10
    for end in cuts:
        _survives(name, raw[:end], tmp_path)


@pytest.mark.parametrize("name", EXAMPLES)
def test_a_file_with_bytes_replaced_is_read_or_refused(name: str, tmp_path: Path) -> None:
    raw = EXAMPLES[name]
    dice = random.Random(name)
    for _ in range(40):
        broken = bytearray(raw)
        for _ in range(dice.choice([1, 1, 2, 8])):
            letter = dice.choice(b" \t\n:,-?[]{}()#&*!|>'\"%@`+0123456789eE./<\\~")
            broken[dice.randrange(len(broken))] = dice.choice([letter, dice.randrange(256)])
        _survives(name, bytes(broken), tmp_path)


@pytest.mark.parametrize("name", EXAMPLES)
def test_a_file_with_values_exchanged_is_read_or_refused(name: str, tmp_path: Path) -> None:
    lines = EXAMPLES[name].split(b"\n")
    dice = random.Random(name)
    with_value = [place for place, line in enumerate(lines) if b": " in line]
    for _ in range(40):
        first, second = dice.sample(with_value, 2)
        keys = [lines[place].split(b": ", 1)[0] for place in (first, second)]
        values = [lines[place].split(b": ", 1)[1] for place in (second, first)]
        broken = list(lines)
        for place, key, value in zip((first, second), keys, values, strict=True):
            broken[place] = key + b": " + value
        _survives(name, b"\n".join(broken), tmp_path)
