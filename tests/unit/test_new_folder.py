"""New studies: files that have an answer as they stand, all of them or none."""

from __future__ import annotations

import json
import os
import re
import shutil
from fractions import Fraction
from functools import cache
from typing import TYPE_CHECKING, Any

import pytest

import yieldnet
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Findings, Severity
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.plant.plant import plant_case
from yieldnet.prediction.prepare import prepare
from yieldnet.prediction.result import Outcome
from yieldnet.reading import case_file
from yieldnet.reading.case_file import load_case
from yieldnet.reading.network_file import load_network
from yieldnet.reading.nodes import compose
from yieldnet.reading.shipped import find_shipped, shipped_names
from yieldnet.report import new_folder
from yieldnet.report.case_block import chosen_state, fill_case
from yieldnet.report.new_case import REPLACE, case_lines
from yieldnet.report.new_plant import plant_lines
from yieldnet.studies.starting_case import (
    StartingCase,
    best_yields,
    overall_shape,
    start_case,
)

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator
    from pathlib import Path

    from click.testing import Result

    from yieldnet.model.case import Case
    from yieldnet.plant.sheet import PlantSheet
    from yieldnet.reading.nodes import Node

    Run = Callable[..., Result]

NETWORKS = {name: yieldnet.read_network(name) for name in shipped_names()}
PAIRS = [
    (name, substrate, product)
    for name, network in NETWORKS.items()
    if network.meant_for is not None
    for substrate in network.meant_for.substrates
    for product in network.meant_for.products
]
# By hand: which products no route of the network leads to from that food.
IMPOSSIBLE = {
    *(("filamentous-fungus", food, "gluconate") for food in ("fructose", "sucrose", "xylose")),
    *(("solvent-clostridium", food, "1,3-propanediol") for food in ("glucose", "xylose")),
    *(("yeast", food, "xylitol") for food in ("glucose", "glycerol", "ethanol")),
    ("yeast", "glycerol", "glycerol"),
    ("yeast", "ethanol", "ethanol"),
    ("enteric-mixed-acid", "acetate", "acetate"),
}


def _uncommented(text: str) -> str:
    """The text with every offer taken."""
    return re.sub(r"^( *)#(?=\S)", r"\1", text, flags=re.MULTILINE)


def _keys(node: Node) -> Iterator[Node]:
    for key, value in node.pairs or ():
        yield key
        yield from _keys(value)


def _unexplained(text: str) -> list[str]:
    """Lines of keys with no remark behind them and no comment above."""
    lines = text.splitlines()
    root = compose(text, "a.yaml", Findings())
    assert root is not None
    keys = list(_keys(root))
    assert len(keys) > 5
    return [
        lines[key.span.line - 1]
        for key in keys
        if " # " not in lines[key.span.line - 1]
        and not lines[key.span.line - 2].lstrip().startswith("# ")
    ]


def _codes(error: InputError) -> list[str]:
    return [item.code for item in error.findings]


def _files(folder: Path) -> dict[str, str]:
    return {path.name: path.read_text("utf-8") for path in sorted(folder.iterdir())}


# Every network and every pair --------------------------------------------------------------------


@pytest.fixture
def read_once(monkeypatch: pytest.MonkeyPatch) -> None:
    """Each shipped network is read once for all cases that name it, which is most of the time."""
    monkeypatch.setattr(case_file, "load_network", cache(load_network))


@pytest.mark.usefixtures("read_once")
@pytest.mark.parametrize("name", NETWORKS)
def test_every_pair_gives_a_case_that_is_solved_or_is_refused(name: str, tmp_path: Path) -> None:
    pairs = [pair for pair in PAIRS if pair[0] == name]
    assert pairs
    network = NETWORKS[name]
    best: dict[str, dict[str, Fraction]] = {}
    taken_of: set[str] = set()
    for pair in pairs:
        _, substrate, product = pair
        if pair in IMPOSSIBLE:
            with pytest.raises(InputError, match=r"YN932: .*comes from"):
                start_case([(name, network)], substrate, product)
            continue
        if substrate not in best:
            best[substrate] = best_yields(network, substrate, [one[2] for one in pairs])
        start = StartingCase(
            name=name,
            network=network,
            shape=overall_shape(network, substrate, product),
            product=product,
            best=best[substrate][product],
        )
        text = "\n".join([*case_lines(start, name, False), *plant_lines(start)]) + "\n"
        assert _unexplained(text) == []
        path = tmp_path / "case.yaml"
        path.write_text(text, "utf-8")
        case, findings = load_case(str(path))
        assert case is not None, [str(item) for item in findings]
        assert [str(item) for item in findings] == []
        assert case.plant is not None
        assert case.plant.product == product
        ready = prepare(case, Optimiser(engine_named("glpk")))
        assert ready.findings == ()
        assert ready.objective is not None
        answer = ready.objective.best(ready.optimiser, ready.layers.final)
        assert answer.status is Status.OPTIMAL
        assert answer.value == start.best > 0
        # Every offer can be taken, too; one product tells enough of a substrate.
        if substrate in taken_of:
            continue
        taken_of.add(substrate)
        path.write_text(_uncommented(text), "utf-8")
        taken, findings = load_case(str(path))
        assert taken is not None, [str(item) for item in findings]
        assert [str(item) for item in findings if item.severity is not Severity.NOTE] == []
        assert taken.demands
        assert taken.knock_outs
        assert taken.plant is not None
        assert taken.plant.prices


@pytest.mark.parametrize("name", NETWORKS)
def test_a_study_of_every_network_answers_predict_and_plant(
    name: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    # The sheet that is made before the files are put in place is what the verb would give.
    sheets: list[PlantSheet] = []

    def kept(case: Case) -> PlantSheet:
        sheets.append(plant_case(case))
        return sheets[-1]

    monkeypatch.setattr(new_folder, "plant_case", kept)
    study = yieldnet.new(tmp_path / "study", network=name)
    assert study.files == ("case.yaml",)
    assert study.best > 0
    assert [str(item) for item in study.findings] == []
    (sheet,) = sheets
    assert sheet.prediction.outcome is Outcome.SOLVED
    assert sheet.prediction.aim is not None
    assert sheet.prediction.aim.value == study.best
    assert sheet.plant.product == study.product
    assert float(sheet.stream(study.substrate).t_per_y) > 0
    # The two ways to tell a heat may disagree; a placeholder must not be out of reach.
    doubts = {item.code for item in sheet.findings if item.severity is not Severity.NOTE}
    assert doubts <= {"YN868"}


@pytest.mark.parametrize(
    ("kind", "name", "product"),
    [
        ("batch", "propionate", "propionate"),
        ("fed-batch", "propionate", "propionate"),
        ("chemostat", "propionate", "propionate"),
        ("fed-batch", "yeast", "biomass"),
        ("batch", "methanogen", "methane"),
    ],
)
def test_a_run_goes_from_its_sheet_to_the_filled_case(
    kind: str, name: str, product: str, tmp_path: Path
) -> None:
    folder = tmp_path / "study"
    substrate = "methanol" if name == "methanogen" else ""
    study = yieldnet.new(
        folder, network=name, substrate=substrate, product=product, run=kind, plant=False
    )
    assert study.files == ("case.yaml", "run.yaml", "sheet.csv")
    assert _unexplained((folder / "run.yaml").read_text("utf-8")) == []
    result = yieldnet.rates(folder / "run.yaml")
    assert [item.code for item in result.findings if item.severity is not Severity.NOTE] == []
    assert "placeholders" in result.run.title
    state = chosen_state(result, "")
    # Methane leaves with the gas, so that sheet has cells alone.
    assert set(state.products) == {"biomass", product} - {"methane"}
    assert state.growth_rate is not None
    assert state.growth_rate.value == pytest.approx(0.1, rel=0.01)
    case = fill_case(result, state, folder / "case.yaml", folder / "filled.yaml")
    assert yieldnet.predict(case).outcome is Outcome.SOLVED


@pytest.mark.parametrize("kind", ["batch", "fed-batch"])
def test_a_run_without_growth_compares_start_and_end(kind: str, tmp_path: Path) -> None:
    yieldnet.new(tmp_path / "study", network="lysine-coryneform", run=kind)
    result = yieldnet.rates(tmp_path / "study" / "run.yaml")
    found = result.states[0].yield_of("L-lysine")
    # Half of 6/7, the best of the case.
    assert found.value == pytest.approx(3 / 7, abs=found.sd)


# What is written ---------------------------------------------------------------------------------


def test_a_shipped_network_is_named_and_a_copy_stands_beside_the_case(tmp_path: Path) -> None:
    named = yieldnet.new(tmp_path / "named", network="yeast")
    assert named.files == ("case.yaml",)
    assert "\nnetwork: yeast\n" in (tmp_path / "named/case.yaml").read_text("utf-8")
    copied = yieldnet.new(tmp_path / "copied", network="yeast", own_network=True)
    assert copied.files == ("case.yaml", "yeast.yaml")
    assert "\nnetwork: yeast.yaml\n" in (tmp_path / "copied/case.yaml").read_text("utf-8")
    shipped = find_shipped("yeast")
    assert shipped is not None
    assert (tmp_path / "copied/yeast.yaml").read_bytes() == shipped.read_bytes()
    assert yieldnet.read_case(tmp_path / "copied/case.yaml").network is not None


def test_a_network_of_ones_own_is_named_by_the_way_to_it(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    shipped = find_shipped("yeast")
    assert shipped is not None
    (tmp_path / "nets").mkdir()
    shutil.copyfile(shipped, tmp_path / "nets/mine.yaml")
    monkeypatch.chdir(tmp_path)
    study = yieldnet.new("study", network="nets/mine.yaml", product="glycerol")
    text = (tmp_path / "study/case.yaml").read_text("utf-8")
    assert "\nnetwork: ../nets/mine.yaml\n" in text
    assert study.network == "nets/mine.yaml"
    assert study.folder == "study"
    assert yieldnet.predict("study/case.yaml").outcome is Outcome.SOLVED


def test_a_plant_is_written_unless_it_is_not_wanted(tmp_path: Path) -> None:
    yieldnet.new(tmp_path / "with", network="yeast")
    yieldnet.new(tmp_path / "without", network="yeast", plant=False)
    (with_it, without) = (
        (tmp_path / name / "case.yaml").read_text("utf-8") for name in ("with", "without")
    )
    assert with_it.startswith(without)
    plant = with_it.removeprefix(without)
    figures = [line for line in plant.splitlines() if re.match(r" +#?[a-zA-Z][^:]*: \S", line)]
    assert len(figures) > 10
    assert all(REPLACE in line for line in figures)


def test_a_base_is_proposed_for_an_acid_of_known_pka_alone(tmp_path: Path) -> None:
    def plant(product: str) -> Any:
        folder = tmp_path / product
        yieldnet.new(folder, network="facultative-succinate", product=product)
        return yieldnet.read_case(folder / "case.yaml").plant

    acid = plant("succinate")
    assert (acid.base, acid.ph.value) == ("ammonia", Fraction("6.5"))
    assert plant("ethanol").base == ""


# Refused -----------------------------------------------------------------------------------------


def test_files_that_are_there_are_all_named_and_kept_unless_forced(tmp_path: Path) -> None:
    folder = tmp_path / "study"
    folder.mkdir()
    for name in ("case.yaml", "sheet.csv", "notes.txt"):
        (folder / name).write_text(f"my {name}\n", "utf-8")
    before = _files(folder)
    with pytest.raises(InputError, match="is there already") as caught:
        yieldnet.new(folder, network="yeast", run="batch")
    assert _codes(caught.value) == ["YN933", "YN933"]
    assert _files(folder) == before
    assert list(tmp_path.iterdir()) == [folder]
    yieldnet.new(folder, network="yeast", run="batch", force=True)
    after = _files(folder)
    assert after["notes.txt"] == "my notes.txt\n"
    assert after["case.yaml"] != before["case.yaml"]
    assert set(after) == {"case.yaml", "notes.txt", "run.yaml", "sheet.csv"}
    assert list(tmp_path.iterdir()) == [folder]


def test_a_folder_that_is_none_is_refused(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("mine\n", "utf-8")
    with pytest.raises(InputError, match="is a file") as caught:
        yieldnet.new(tmp_path / "file", network="yeast", force=True)
    assert _codes(caught.value) == ["YN933"]
    assert (tmp_path / "file").read_text("utf-8") == "mine\n"
    with pytest.raises(InputError, match="does not exist") as caught:
        yieldnet.new(tmp_path / "a/b", network="yeast")
    assert _codes(caught.value) == ["YN101"]
    (tmp_path / "study/case.yaml").mkdir(parents=True)
    with pytest.raises(InputError, match="is a folder") as caught:
        yieldnet.new(tmp_path / "study", network="yeast", force=True)
    assert _codes(caught.value) == ["YN933"]


@pytest.mark.parametrize(
    ("options", "words"),
    [
        ({"network": "acetogen", "substrate": "hydrogen", "run": "batch"}, "enters as gas"),
        ({"network": "lysine-coryneform", "run": "chemostat"}, "has no growth"),
    ],
)
def test_a_run_that_cannot_be_is_refused_and_nothing_is_written(
    options: dict[str, str], words: str, tmp_path: Path
) -> None:
    with pytest.raises(InputError, match=words) as caught:
        yieldnet.new(tmp_path / "study", **options)  # type: ignore[arg-type]
    assert _codes(caught.value) == ["YN934"]
    assert list(tmp_path.iterdir()) == []


GAS_ALONE = """
network: Hydrogen from glucose, cells at rest
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
crossing:
  in: [glucose]
  out: [hydrogen]
  either: [carbon dioxide, water]
meant for: {substrates: [glucose], products: [hydrogen]}
reactions:
  glycolysis: glucose -> 2 pyruvate + 2 NADH + 2 ATP
  burning: pyruvate + 3 water -> 3 carbon dioxide + 5 NADH
  hydrogenase: NADH -> hydrogen
"""


def test_a_run_of_gas_alone_is_refused(tmp_path: Path) -> None:
    own = tmp_path / "own.yaml"
    own.write_text(GAS_ALONE, "utf-8")
    with pytest.raises(InputError, match="leaves as gas") as caught:
        yieldnet.new(tmp_path / "study", network=own, run="batch")
    assert _codes(caught.value) == ["YN934"]
    # 12 hydrogen of a glucose that is burnt with water: 24 available electrons over 2.
    assert yieldnet.new(tmp_path / "study", network=own).best == 12


GROWTH_OFF = """
network: Growth that closes within its digits
carriers:
  ATP: {kind: energy}
crossing:
  in: [glucose, ammonia]
  out: [biomass, lactate, oxygen]
  either: [carbon dioxide, water]
meant for: {substrates: [glucose], products: [biomass, lactate]}
reactions:
  glycolysis: glucose -> 2 lactate + 2 ATP
growth:
  biomass: {formula: CH2.0O0.5N0.2, ash: 0.05}
  equation: 0.1667 glucose + 0.2 ammonia + 0.3 ATP -> biomass + 0.3 water + 0.1 oxygen
"""


def test_a_first_answer_that_is_none_refuses_it_all(
    checkout: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    none = yieldnet.predict(checkout / "tests/golden/infeasible.case.yaml")
    monkeypatch.setattr(new_folder, "predict_case", lambda case: none)
    with pytest.raises(InputError, match="YN601"):
        yieldnet.new(tmp_path / "study", network="yeast")
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize(("part", "file"), [("case_lines", "case.yaml"), ("run_lines", "run.yaml")])
def test_a_file_that_cannot_be_read_back_is_told_at_its_place_and_not_written(
    part: str, file: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(new_folder, part, lambda *_: ["nonsense: 1"])
    with pytest.raises(InputError, match="'nonsense' is not a key") as caught:
        yieldnet.new(tmp_path / "study", network="yeast", run="batch")
    places = {item.where.file for item in caught.value.findings if item.where is not None}
    assert places == {str(tmp_path / "study" / file)}
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize("force", [False, True])
@pytest.mark.parametrize("there", [False, True])
def test_a_disk_that_fails_in_the_middle_leaves_what_was_there(
    force: bool, there: bool, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    folder = tmp_path / "study"
    if there:
        folder.mkdir()
        (folder / "notes.txt").write_text("mine\n", "utf-8")
        if force:
            (folder / "case.yaml").write_text("mine\n", "utf-8")
            (folder / "sheet.csv").write_text("mine\n", "utf-8")
    before = _files(folder) if there else None
    link = os.link

    def failing(source: Path, target: Path) -> None:
        if target.name == "sheet.csv":
            raise OSError(28, "No space left on device", os.fspath(target))
        link(source, target)

    monkeypatch.setattr(os, "link", failing)
    with pytest.raises(OSError, match="No space left"):
        yieldnet.new(folder, network="yeast", run="batch", force=force)
    monkeypatch.undo()
    assert (_files(folder) if folder.exists() else None) == before
    assert [path.name for path in tmp_path.iterdir()] == (["study"] if there else [])


def test_findings_of_the_files_are_told_where_they_were_meant_to_be(tmp_path: Path) -> None:
    own = tmp_path / "own.yaml"
    own.write_text(GROWTH_OFF, "utf-8")
    folder = tmp_path / "study"
    # A plant whose streams would not close is refused; without one it is a doubt.
    with pytest.raises(InputError, match="YN914") as caught:
        yieldnet.new(folder, network=own, product="biomass", own_network=True)
    assert not folder.exists()
    study = yieldnet.new(folder, network=own, product="biomass", own_network=True, plant=False)
    for told in (caught.value.findings, study.findings):
        places = {item.where.file for item in told if item.where is not None}
        assert places
        assert places <= {str(folder / name) for name in ("case.yaml", "own.yaml")}


# The command -------------------------------------------------------------------------------------


def test_the_command_says_what_it_wrote_and_what_to_do_next(run: Run, tmp_path: Path) -> None:
    folder = tmp_path / "study"
    result = run("new", str(folder), "--product", "xylitol", "--run", "batch", "--own-network")
    assert result.exit_code == 0, result.output
    words = " ".join(result.output.split())
    assert "case.yaml, run.yaml, sheet.csv, yeast.yaml" in words
    assert "network yeast: the only one that ships and does this" in words
    assert "substrate xylose:" in words
    for verb, name in (("predict", "case"), ("plant", "case"), ("rates", "run")):
        assert f"yieldnet {verb} {folder}/{name}.yaml" in words
    again = run("new", str(folder), "--product", "xylitol")
    assert again.exit_code == 1
    assert "YN933" in again.output


def test_the_json_of_a_study_has_all_keys_written_or_refused(run: Run, tmp_path: Path) -> None:
    options = ("--network", "yeast", "--no-plant", "--json")
    written = run("new", str(tmp_path / "study"), *options)
    assert written.exit_code == 0
    form = json.loads(written.output)
    assert form["status"] == "written"
    assert form["files"] == ["case.yaml"]
    assert form["best"] == {"value": 2.0, "exact": "2", "unit": "mol/mol"}
    assert form["plant"] is False
    refused = run("new", str(tmp_path / "study"), *options)
    assert refused.exit_code == 1
    other = json.loads(refused.output)
    assert other["status"] == "refused"
    assert [item["code"] for item in other["findings"]] == ["YN933"]
    assert set(form) == set(other)


def test_a_doubt_of_the_first_answer_is_shown(run: Run, tmp_path: Path) -> None:
    own = tmp_path / "own.yaml"
    own.write_text(GROWTH_OFF, "utf-8")
    result = run("new", str(tmp_path / "study"), "--network", str(own), "--no-plant")
    assert result.exit_code == 0
    assert "YN405" in result.output


def test_a_disk_that_fails_is_told_without_a_traceback(
    run: Run, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def failing(source: Path, target: Path) -> None:
        raise OSError(28, "No space left on device", os.fspath(target))

    monkeypatch.setattr(os, "link", failing)
    result = run("new", str(tmp_path / "study"), "--network", "yeast")
    assert result.exit_code == 1
    assert "No space left on device" in result.output
    assert list(tmp_path.iterdir()) == []
