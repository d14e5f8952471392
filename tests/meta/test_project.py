"""The project's own files: what stands where, what hangs together, what must not be there."""

from __future__ import annotations

import re
import tomllib
from typing import TYPE_CHECKING, Any

import pytest

if TYPE_CHECKING:
    from pathlib import Path

TOP = {
    "README.md",
    "DEVELOPERS.md",
    "LICENSE",
    "pyproject.toml",
    "yieldnet",
    "models",
    "tests",
    "examples",
}
# Put together here, so that this file does not hold what it looks for.
UNFINISHED = ("TO" + "DO", "FIX" + "ME", "X" + "XX")
DATABASE = (
    r"\b(?:E" + r"X|D" + r"M|S" + r"K)_[A-Za-z0-9]",
    r"_" + r"_[DLRS]_[cep]\b",
    r"\b[MR]" + r"_\w+_[cep]\b",
    r"\bMETA" + r":|\bKEGG" + r":|\bbig" + r"g\b",
)
MACHINE = ("/work" + "/main", "/tmp" + "/venv", "/tmp" + "/scratch", "/home" + "/", "/root" + "/")


@pytest.fixture(scope="module")
def settings(checkout: Path) -> dict[str, Any]:
    return tomllib.loads((checkout / "pyproject.toml").read_text("utf-8"))


@pytest.fixture(scope="module")
def texts(checkout: Path, project_files: tuple[Path, ...]) -> dict[Path, str]:
    """Every text file of the project; what the bad inputs hold is meant to be strange.

    A workbook is no text.
    """
    return {
        path: (checkout / path).read_bytes().decode("utf-8", "replace")
        for path in project_files
        if path.parts[:2] != ("tests", "bad_inputs") and path.suffix != ".xlsx"
    }


def test_the_top_folder_holds_what_it_should_and_nothing_else(
    project_files: tuple[Path, ...],
) -> None:
    found = {path.parts[0] for path in project_files}
    assert {name for name in found if not name.startswith(".")} == TOP


@pytest.mark.parametrize("word", UNFINISHED)
def test_nothing_is_left_unfinished(texts: dict[Path, str], word: str) -> None:
    assert [str(path) for path, text in texts.items() if re.search(rf"\b{word}\b", text)] == []


@pytest.mark.parametrize("pattern", DATABASE)
def test_things_are_called_by_their_names_and_not_by_database_ids(
    texts: dict[Path, str], pattern: str
) -> None:
    found = [
        f"{path}: {hit[0]}" for path, text in texts.items() for hit in re.finditer(pattern, text)
    ]
    assert found == []


@pytest.mark.parametrize("words", MACHINE)
def test_no_path_of_a_machine_is_written_down(texts: dict[Path, str], words: str) -> None:
    assert [str(path) for path, text in texts.items() if words in text] == []


def test_text_files_end_their_lines_alike(texts: dict[Path, str]) -> None:
    assert [str(path) for path, text in texts.items() if "\r" in text] == []


def _version(text: str) -> tuple[int, ...]:
    """Numbers of a version without trailing zeros: 1.26 and 1.26.0 are the same."""
    return tuple(int(part) for part in re.sub(r"(\.0)+$", "", text).split("."))


def test_the_oldest_versions_are_the_lower_bounds(checkout: Path, settings: dict[str, Any]) -> None:
    project = settings["project"]
    wanted: dict[str, tuple[int, ...]] = {}
    for requirement in (*project["dependencies"], *project["optional-dependencies"]["test"]):
        name, bound = re.fullmatch(r"([\w.-]+)>=([\d.]+)", requirement, re.ASCII).groups()  # type: ignore[union-attr]
        wanted[name] = _version(bound)
    lines = (checkout / "tests" / "oldest.txt").read_text("utf-8").splitlines()
    pins = [line.split("==") for line in lines if line and not line.startswith("#")]
    assert {name: _version(bound) for name, bound in pins} == wanted
    assert len(pins) == len(wanted)


@pytest.mark.parametrize("heading", ["Run it", "Test it"])
def test_the_readme_has_one_line_to_run_and_one_to_test(checkout: Path, heading: str) -> None:
    text = (checkout / "README.md").read_text("utf-8")
    sections = re.split(r"^## ", text, flags=re.MULTILINE)
    (section,) = [part for part in sections if part.split("\n", 1)[0] == heading]
    fences = re.findall(r"^```(\w*)\n(.*?)^```$", section, re.DOTALL | re.MULTILINE)
    ((language, body),) = fences
    assert language == "sh"
    assert body.count("\n") == 1
    assert "pip install" in body


def test_the_command_is_installed_under_its_name(settings: dict[str, Any]) -> None:
    assert settings["project"]["scripts"] == {"yieldnet": "yieldnet.cli.main:main"}


def test_tests_are_strict(settings: dict[str, Any]) -> None:
    options = settings["tool"]["pytest"]["ini_options"]
    assert {"--strict-markers", "--strict-config", "--doctest-modules"} <= set(options["addopts"])
    assert options["filterwarnings"] == ["error"]
    assert options["xfail_strict"] is True
    assert settings["tool"]["mypy"]["strict"] is True
    assert "overrides" not in settings["tool"]["mypy"]
