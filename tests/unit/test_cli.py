"""The command line: every verb, its help, its example, its exit codes and its outputs."""

from __future__ import annotations

import csv
import json
import os
import re
import shlex
import subprocess
import sys
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click
import pytest
from click.testing import CliRunner

import yieldnet
from yieldnet.cli.main import main
from yieldnet.cli.options import refuse
from yieldnet.foundation.catalogue import CATALOGUE
from yieldnet.foundation.errors import SolveError
from yieldnet.optimum.proof import Optimiser
from yieldnet.reading.shipped import shipped_names

if TYPE_CHECKING:
    from collections.abc import Callable

    from click.testing import Result

    Run = Callable[..., Result]

assert isinstance(main, click.Group)
VERBS = main.list_commands(click.Context(main))
EXAMPLE = "examples/succinate-from-xylose/case.yaml"
SMALLER = "examples/lysine/case.yaml"
INFEASIBLE = "tests/golden/infeasible.case.yaml"
BAD_CASE = "tests/golden/bad.case.yaml"
BAD_NETWORK = "tests/golden/bad.network.yaml"
MEASURED = "tests/golden/reconcile.case.yaml"
FAILING = "tests/golden/reconcile-fails.case.yaml"


def _refuse_constant(name: str) -> float:
    raise AssertionError(f"{name} is not JSON")


def _json(text: str) -> Any:
    return json.loads(text, parse_constant=_refuse_constant)


@pytest.mark.parametrize("word", ["NaN", "Infinity", "-Infinity"])
def test_the_json_reader_of_these_tests_refuses_what_is_no_json(word: str) -> None:
    with pytest.raises(AssertionError, match=f"{word} is not JSON"):
        _json(f'{{"a": {word}}}')


def _example(result: Result) -> list[str]:
    """Example of a help text, as the words of a command; the help may have folded it."""
    found = re.search(r"Example: yieldnet (.+?)\n\n", result.output, re.DOTALL)
    assert found is not None, result.output
    return shlex.split(found[1])


@pytest.fixture
def elsewhere(checkout: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A folder with examples and networks, in which a verb may write."""
    for name in ("examples", "models"):
        (tmp_path / name).symlink_to(checkout / name)
    monkeypatch.chdir(tmp_path)
    return tmp_path


# Verbs and help ----------------------------------------------------------------------------------


def test_the_verbs_of_the_daily_work_are_there() -> None:
    assert {"predict", "balance", "audit", "compounds", "networks", "explain"} <= set(VERBS)
    assert "reconcile" in VERBS


@pytest.mark.parametrize("ask", ["--help", "-h"])
def test_the_help_lists_every_verb_and_an_example(run: Run, ask: str) -> None:
    result = run(ask)
    assert result.exit_code == 0
    for verb in VERBS:
        assert re.search(rf"^  {verb} +\S", result.output, re.MULTILINE), verb
    assert _example(result)[0] == "predict"


def test_without_a_verb_the_help_is_shown(run: Run) -> None:
    assert "Verbs:" in run().output


@pytest.mark.parametrize("verb", VERBS)
def test_the_help_of_a_verb_shows_an_example_that_runs(
    run: Run, verb: str, elsewhere: Path
) -> None:
    result = CliRunner().invoke(main, [verb, "--help"])
    assert result.exit_code == 0
    assert "--json" in result.output
    words = _example(result)
    assert words[0] == verb
    shown = CliRunner().invoke(main, words)
    assert shown.exit_code == 0, shown.output
    assert shown.output.strip()
    as_json = CliRunner().invoke(main, [*words, "--json"])
    assert as_json.exit_code == 0, as_json.output
    assert isinstance(_json(as_json.output), dict)


def test_the_version_is_that_of_the_package(run: Run) -> None:
    assert run("--version").output == f"yieldnet {yieldnet.__version__}\n"


# Wrong usage -------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["predictt", "x"], "'predictt' is not a verb. Did you mean 'predict'?"),
        (["zzz"], "'zzz' is not a verb. Verbs: predict, balance"),
        (["predict"], "Missing argument 'CASE'"),
        (["predict", EXAMPLE, "--unit", "kg/kg"], "--unit"),
        (["predict", EXAMPLE, "--engine", "abacus"], "--engine"),
        (["predict", EXAMPLE, "--jason"], "--jason"),
        (["predict", EXAMPLE, "--level", "95"], "--level"),
        (["balance", EXAMPLE, "--level", "1"], "--level"),
        (["reconcile"], "Missing argument 'CASE'"),
        (["reconcile", MEASURED, "--level", "0"], "--level"),
        (["reconcile", MEASURED, "--precision", "1"], "--precision"),
        (["reconcile", MEASURED, "--precision", "-0.1"], "--precision"),
        (["reconcile", MEASURED, "--draws", "1"], "--draws"),
        (["reconcile", MEASURED, "--unit", "kg"], "--unit"),
        (["reconcile", MEASURED, "--picture", "a.gif"], "ends in .svg or .png"),
        (["predict", EXAMPLE, EXAMPLE], "unexpected extra argument"),
        (["--nothing"], "--nothing"),
    ],
)
def test_wrong_usage_ends_with_2_and_says_what_is_right(
    run: Run, arguments: list[str], words: str
) -> None:
    result = run(*arguments)
    assert result.exit_code == 2
    assert words in result.output
    assert "Traceback" not in result.output


# Exit codes --------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("arguments", "code"),
    [
        (["predict", EXAMPLE], 0),
        (["balance", EXAMPLE], 0),
        (["predict", INFEASIBLE], 1),
        (["predict", BAD_CASE], 1),
        (["balance", BAD_CASE], 1),
        (["predict", "nowhere.yaml"], 1),
        (["predict", "examples"], 1),
        (["reconcile", MEASURED], 0),
        (["reconcile", FAILING], 1),
        (["reconcile", FAILING, "--level", "0.9999999"], 0),
        (["reconcile", EXAMPLE], 0),
        (["reconcile", EXAMPLE, "--elements"], 0),
        (["reconcile", MEASURED, "--of", "acetate"], 0),
        (["reconcile", MEASURED, "--of", "xylose"], 1),
        (["reconcile", "tests/bad_inputs/exact-values-contradict.case.yaml"], 1),
        (["reconcile", "tests/bad_inputs/nothing-measured.case.yaml"], 1),
        (["reconcile", BAD_CASE], 1),
        (["reconcile", "nowhere.yaml"], 1),
        (["audit", "models/lysine-coryneform.yaml"], 0),
        (["audit", "lysine-coryneform"], 0),
        (["audit", BAD_NETWORK], 1),
        (["audit", EXAMPLE], 1),
        (["audit", "nowhere.yaml"], 1),
        (["networks"], 0),
        (["networks", "lysine-coryneform"], 0),
        (["networks", "nowhere"], 1),
        (["compounds"], 0),
        (["compounds", "nothing of the kind"], 1),
        (["explain"], 0),
        (["explain", "yn401"], 0),
        (["explain", "YN999"], 1),
    ],
)
@pytest.mark.parametrize("form", [[], ["--json"]], ids=["text", "json"])
def test_exit_codes_are_0_for_an_answer_and_1_for_none(
    run: Run, arguments: list[str], code: int, form: list[str]
) -> None:
    result = run(*arguments, *form)
    assert result.exit_code == code
    assert result.output.strip()
    assert "Traceback" not in result.output


def test_an_unbounded_aim_ends_with_1(run: Run, tmp_path: Path) -> None:
    path = tmp_path / "runaway.yaml"
    path.write_text(
        "case: x\nequation: glucose -> ? ethanol\n"
        "either side: [carbon dioxide, water, hydrogen]\naim: most ethanol\n",
        "utf-8",
    )
    result = run("balance", str(path))
    assert result.exit_code == 1
    assert "can grow together without limit" in " ".join(result.output.split())
    assert _json(run("balance", str(path), "--json").output)["status"] == "unbounded"


def test_doubts_alone_end_an_audit_with_0(run: Run, tmp_path: Path) -> None:
    path = tmp_path / "doubtful.yaml"
    path.write_text(
        "network: x\ncrossing: {in: [glucose], out: [lactate]}\n"
        "reactions:\n  one: glucose -> 2 lactate\n  two: glucose -> 2 lactate\n",
        "utf-8",
    )
    result = run("audit", str(path))
    assert result.exit_code == 0
    assert "2 reactions audited: 1 finding." in result.output


@pytest.mark.parametrize("as_json", [False, True])
def test_an_error_of_the_solver_is_told_as_a_finding(
    capsys: pytest.CaptureFixture[str], as_json: bool
) -> None:
    with pytest.raises(SystemExit, match="1"):
        refuse(SolveError("too large to prove"), as_json=as_json)
    captured = capsys.readouterr()
    assert "too large to prove" in (captured.out if as_json else captured.err)
    assert (captured.err if as_json else captured.out) == ""


# Streams and colour ------------------------------------------------------------------------------


def _command(checkout: Path, *arguments: str, **environment: str) -> tuple[int, str, str]:
    clean = {
        name: value
        for name, value in os.environ.items()
        if name not in {"FORCE_COLOR", "NO_COLOR", "TTY_COMPATIBLE", "TTY_INTERACTIVE"}
    }
    done = subprocess.run(
        [sys.executable, "-m", "yieldnet", *arguments],
        cwd=checkout,
        env={**clean, "PYTHONPATH": str(checkout), "PYTHONUTF8": "1", **environment},
        capture_output=True,
        check=False,
        encoding="utf-8",
        timeout=60,
    )
    return done.returncode, done.stdout, done.stderr


def test_findings_of_a_refused_case_go_to_the_error_stream(checkout: Path) -> None:
    code, out, err = _command(checkout, "predict", BAD_CASE)
    assert (code, out) == (1, "")
    assert err.endswith(" findings; no answer.\n")
    assert f"{BAD_CASE}:4:" in err


@pytest.mark.parametrize(
    "arguments",
    [
        ["predict", "nowhere.yaml"],
        ["reconcile", "nowhere.yaml"],
        ["audit", "nowhere.yaml"],
        ["networks", "nowhere"],
        ["compounds", "nothing of the kind"],
        ["explain", "YN999"],
    ],
    ids=lambda arguments: arguments[0],
)
def test_json_is_json_even_where_there_is_no_answer(checkout: Path, arguments: list[str]) -> None:
    code, out, _ = _command(checkout, *arguments, "--json")
    assert code == 1
    form = _json(out)
    assert form["format"] == 1


def test_no_codes_of_a_terminal_go_into_a_file(checkout: Path) -> None:
    for arguments in (["predict", EXAMPLE], ["predict", BAD_CASE], ["audit", BAD_NETWORK]):
        _, out, err = _command(checkout, *arguments)
        assert "\x1b" not in out + err


def test_colour_can_be_forced_and_no_color_takes_it_away(checkout: Path) -> None:
    colour = re.compile(r"\x1b\[[\d;]*3\d")
    arguments = ["audit", BAD_NETWORK]
    _, out, _ = _command(checkout, *arguments, FORCE_COLOR="1", TERM="xterm-256color")
    assert colour.search(out)
    _, out, _ = _command(checkout, *arguments, FORCE_COLOR="1", TERM="xterm-256color", NO_COLOR="1")
    assert not colour.search(out)


# Outputs -----------------------------------------------------------------------------------------


@pytest.mark.parametrize("unit", ["mol/mol", "g/g", "C-mol/C-mol"])
def test_the_unit_of_the_table_is_the_one_asked_for(run: Run, unit: str) -> None:
    result = run("predict", EXAMPLE, "--unit", unit)
    assert result.exit_code == 0
    assert f"\nCoefficients, {unit}" in result.output


def test_the_json_stays_in_mol_whatever_the_unit(run: Run) -> None:
    plain = run("predict", EXAMPLE, "--json").output
    assert run("predict", EXAMPLE, "--json", "--unit", "g/g").output == plain


@pytest.mark.parametrize("verb", ["predict", "balance"])
def test_another_engine_gives_the_same_answer(run: Run, verb: str) -> None:
    ours = _json(run(verb, SMALLER, "--json").output)
    other = _json(run(verb, SMALLER, "--json", "--engine", "optlang").output)
    for key in ("status", "aim", "ladder", "coefficients", "equation", "freedom"):
        assert other[key] == ours[key], key


def test_an_audit_does_not_depend_on_the_engine(run: Run) -> None:
    arguments = ("audit", BAD_NETWORK, "--json")
    assert run(*arguments, "--engine", "optlang").output == run(*arguments).output


@pytest.mark.parametrize("verb", ["predict", "balance"])
def test_the_csv_holds_the_numbers_of_the_json(run: Run, verb: str) -> None:
    rows = list(csv.DictReader(run(verb, EXAMPLE, "--csv").output.splitlines()))
    form = _json(run(verb, EXAMPLE, "--json").output)
    assert [row["compound"] for row in rows] == [item["compound"] for item in form["coefficients"]]
    for row, item in zip(rows, form["coefficients"], strict=True):
        assert row["status"] == item["status"]
        assert float(row["elements low"]) == item["elements"]["low"]
        assert float(row["elements high"]) == item["elements"]["high"]


def test_tables_of_the_libraries_as_csv(run: Run) -> None:
    compounds = list(csv.DictReader(run("compounds", "--csv").output.splitlines()))
    water = next(row for row in compounds if row["name"] == "water")
    assert water["formula"] == "H2O"
    # A name with a comma is one cell.
    assert any(row["name"] == "1,3-propanediol" for row in compounds)
    networks = list(csv.DictReader(run("networks", "--csv").output.splitlines()))
    assert [row["name"] for row in networks] == list(shipped_names())
    lysine = next(row for row in networks if row["name"] == "lysine-coryneform")
    assert (lysine["substrates"], lysine["products"]) == ("glucose", "L-lysine")
    assert int(lysine["checked"]) >= 4


def test_the_list_of_networks_predicts_nothing(run: Run, monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(*_: object) -> None:
        raise AssertionError("a problem was solved")

    monkeypatch.setattr(Optimiser, "optimise", refuse)
    assert run("networks").exit_code == 0
    assert run("networks", "lysine-coryneform").exit_code == 0


def test_a_network_is_checked_against_what_it_reproduces(run: Run, tmp_path: Path) -> None:
    good = run("networks", "lysine-coryneform", "--check")
    assert good.exit_code == 0
    assert "Villadsen, Nielsen" in good.output
    assert "All 4 agree." in good.output
    form = _json(run("networks", "lysine-coryneform", "--check", "--json").output)
    assert (form["network"], form["agrees"], form["findings"]) == ("lysine-coryneform", True, [])
    assert [item["found_exact"] for item in form["values"]] == ["3/4", "30/37", "3/4", "6/7"]
    rows = list(
        csv.DictReader(run("networks", "lysine-coryneform", "--check", "--csv").output.splitlines())
    )
    assert [row["agrees"] for row in rows] == ["yes"] * 4
    text = Path("models/lysine-coryneform.yaml").read_text("utf-8")
    changed = tmp_path / "changed.yaml"
    assert text.count("value: 30/37") == 1
    changed.write_text(text.replace("value: 30/37", "value: 31/37"), "utf-8")
    bad = run("networks", str(changed), "--check")
    assert bad.exit_code == 1
    assert "1 of 4 do not agree." in bad.output
    assert "31/37 mol/mol  30/37  no" in bad.output
    form = _json(run("networks", str(changed), "--check", "--json").output)
    assert form["agrees"] is False
    assert [item["agrees"] for item in form["values"]] == [True, False, True, True]


def test_a_check_needs_the_name_of_a_network(run: Run) -> None:
    result = run("networks", "--check")
    assert result.exit_code == 2
    assert "--check needs the NAME of a network" in result.output
    assert run("networks", "nowhere", "--check").exit_code == 1


def test_a_check_shows_what_is_doubtful_in_a_case(run: Run, tmp_path: Path) -> None:
    text = Path("tests/bad_inputs/networks/meant.yaml").read_text("utf-8")
    path = tmp_path / "meant.yaml"
    path.write_text(text.replace("products: [ethanol]", "products: [lactate]"), "utf-8")
    result = run("networks", str(path), "--check")
    assert result.exit_code == 0
    assert "warning YN516" in result.output


def test_one_compound_in_full_and_several_as_a_table(run: Run) -> None:
    assert "molar mass" in run("compounds", "succinic acid").output
    several = run("compounds", "butanediol").output
    assert "2,3-butanediol" in several
    assert "1,4-butanediol" in several
    (entry,) = _json(run("compounds", "water", "--json").output)["compounds"]
    assert entry["formula"] == "H2O"


def test_an_unknown_compound_comes_with_a_near_match(run: Run) -> None:
    assert "Did you mean 'succinate'" in run("compounds", "succinatee").output
    assert "'yieldnet compounds' lists all." in run("compounds", "qqqqqqqq").output


def test_an_unknown_network_comes_with_a_near_match(run: Run) -> None:
    assert "lysine-coryneform" in run("networks", "lysine-corineform").output


def test_explain_knows_every_code(run: Run) -> None:
    listed = run("explain").output
    for code, entry in CATALOGUE.items():
        assert code in listed
        told = " ".join(run("explain", code).output.split())
        assert all(text in told for text in (entry.title, entry.why, entry.way_out))
    assert "Did you mean 'YN" in run("explain", "YN4011").output


def test_explain_knows_words_too(run: Run) -> None:
    assert "carbon dioxide given off per oxygen taken up" in " ".join(
        run("explain", "rq").output.split()
    )
    form = _json(run("explain", "RQ", "--json").output)
    assert list(form["words"]) == ["RQ"]
    assert form["codes"] == []


def test_options_that_show_more(run: Run) -> None:
    result = run("predict", EXAMPLE, "--fluxes", "--proof")
    assert result.exit_code == 0
    for title in ("Fluxes at the aim", "Proof that nothing better is possible", "Worths, "):
        assert title in result.output
    order = "maintenance, energy, redox, pathways, demands, measured"
    assert "In the order asked for" in run("predict", EXAMPLE, "--order", order).output


def test_an_order_that_is_none_is_refused(run: Run) -> None:
    result = run("predict", EXAMPLE, "--order", "energy")
    assert result.exit_code == 1
    assert "YN514" in result.output


# Width -------------------------------------------------------------------------------------------


def _screens(checkout: Path) -> list[list[str]]:
    cases = [
        f"examples/{item.parent.name}/case.yaml" for item in checkout.glob("examples/*/*.yaml")
    ]
    networks = [item.stem for item in sorted((checkout / "models").glob("*.yaml"))]
    screens = [["predict", case, "--unit", unit] for case in cases for unit in ("g/g", "mol/mol")]
    screens += [["predict", case, "--unit", "C-mol/C-mol", "--fluxes", "--proof"] for case in cases]
    screens += [["balance", case] for case in cases]
    screens += [["networks", name] for name in networks]
    screens += [["audit", f"models/{name}.yaml"] for name in networks]
    screens += [["networks"], ["compounds"], ["compounds", "phosphate"], ["explain"]]
    screens += [["explain", code] for code in CATALOGUE]
    screens += [["predict", INFEASIBLE], ["predict", BAD_CASE], ["audit", BAD_NETWORK]]
    screens += [["reconcile", case] for case in (EXAMPLE, MEASURED, FAILING, BAD_CASE)]
    screens += [[verb, "--help"] for verb in VERBS]
    screens += [["--help"], ["predictt"], ["compounds", "qqqq"], ["explain", "qqqq"]]
    return screens


def test_no_line_of_any_screen_is_wider_than_80(run: Run, checkout: Path) -> None:
    screens = _screens(checkout)
    assert len(screens) > 80
    wide: list[str] = []
    for screen in screens:
        result = run(*screen)
        lines = result.output.replace(str(checkout), "").splitlines()
        wide += [f"{' '.join(screen)}: {line}" for line in lines if len(line) > 80]
    assert wide == []


def test_no_line_told_of_a_bad_file_is_wider_than_80(run: Run, checkout: Path) -> None:
    folder = checkout / "tests" / "bad_inputs"
    files = sorted(folder.glob("*.yaml"))
    assert len(files) > 100
    wide: list[str] = []
    for path in files:
        verb = "predict" if path.name.endswith(".case.yaml") else "audit"
        lines = run(verb, f"tests/bad_inputs/{path.name}").output.splitlines()
        wide += [f"{path.name}: {line}" for line in lines if len(line) > 80]
    assert wide == []


# Judging data ------------------------------------------------------------------------------------


def test_the_text_of_judged_data_has_its_verdict_first(run: Run) -> None:
    good, bad = run("reconcile", MEASURED).output, run("reconcile", FAILING).output
    assert good.splitlines()[3].startswith("The measured values agree within their errors")
    assert bad.splitlines()[3].startswith("The measured values fail their test")
    assert "YN802: most suspect: measured ethanol" in " ".join(bad.split())


def test_a_picture_of_judged_data_is_drawn_once(run: Run, tmp_path: Path) -> None:
    path = tmp_path / "data.svg"
    assert run("reconcile", MEASURED, "--picture", str(path)).exit_code == 0
    drawn = path.read_bytes()
    assert drawn.startswith(b"<?xml")
    again = run("reconcile", MEASURED, "--picture", str(path))
    assert again.exit_code == 2
    assert "--force replaces it" in " ".join(again.output.split())
    path.write_text("mine", "utf-8")
    # A picture of values that fail is drawn as well, and the exit code still says so.
    assert run("reconcile", FAILING, "--picture", str(path), "--force").exit_code == 1
    assert path.read_bytes().startswith(b"<?xml")
    assert path.read_bytes() != drawn
    nowhere = run("reconcile", MEASURED, "--picture", str(tmp_path / "nowhere" / "a.svg"))
    assert nowhere.exit_code == 1
    assert "No such file or directory" in nowhere.output


def test_the_elements_alone_judge_without_the_network(run: Run) -> None:
    both = run("reconcile", EXAMPLE).output
    alone = run("reconcile", EXAMPLE, "--elements").output
    assert "network: " in both.splitlines()[1]
    assert "elements alone" in " ".join(alone.split())
    assert _json(run("reconcile", EXAMPLE, "--elements", "--json").output)["status"] == "agrees"


def test_the_next_measurement_is_for_whom_it_is_asked(run: Run) -> None:
    form = _json(run("reconcile", MEASURED, "--json").output)
    assert form["next"]["of"] == "ethanol"
    asked = _json(
        run("reconcile", MEASURED, "--json", "--of", "acetate", "--precision", "0.2").output
    )
    assert (asked["next"]["of"], asked["next"]["precision"]) == ("acetate", 0.2)
    assert asked["tests"] == form["tests"]
    refused = run("reconcile", MEASURED, "--of", "acetat")
    assert "'acetat' is not in the overall equation" in " ".join(refused.output.split())
    assert "Did you mean 'acetate'?" in refused.output


def test_the_csv_of_judged_data_holds_the_numbers_of_the_json(run: Run) -> None:
    rows = list(csv.DictReader(run("reconcile", MEASURED, "--csv").output.splitlines()))
    form = _json(run("reconcile", MEASURED, "--json").output)
    listed = [*form["values"], *form["calculated"]]
    assert [row["compound"] for row in rows] == [item["compound"] for item in listed]
    for row, item in zip(rows, form["values"], strict=False):
        assert float(row["reconciled"]) == item["reconciled"]
        assert float(row["reconciled s.d."]) == item["reconciled_sd"]


def test_the_unit_of_judged_values_is_the_one_asked_for(run: Run) -> None:
    assert "Measured and reconciled, g/g" in run("reconcile", MEASURED, "--unit", "g/g").output
    plain = run("reconcile", MEASURED, "--json").output
    assert run("reconcile", MEASURED, "--json", "--unit", "g/g").output == plain


def test_the_level_of_a_prediction_decides_whether_its_data_pass(run: Run) -> None:
    strict = _json(run("balance", FAILING, "--json").output)
    lax = _json(run("balance", FAILING, "--json", "--level", "0.9999999").output)
    assert [item["passed"] for item in strict["data_tests"]] == [False]
    assert [item["passed"] for item in lax["data_tests"]] == [True]
    assert "YN801" in [item["code"] for item in strict["findings"]]
    assert "YN801" not in [item["code"] for item in lax["findings"]]
