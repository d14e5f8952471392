"""What the command prints, word for word; ``pytest --accept`` rewrites the files."""

from __future__ import annotations

import difflib
import json
from pathlib import Path
from typing import TYPE_CHECKING, Any

import pytest

if TYPE_CHECKING:
    from collections.abc import Callable

    from click.testing import Result

    Run = Callable[..., Result]

HERE = Path(__file__).resolve().parent
EXAMPLE = "examples/succinate-from-xylose/case.yaml"
WORKBOOK = "workbook.txt"
"""Cells of a workbook, which ``test_workbook`` looks at."""
# Paths as a user in the top folder writes them, so that no path of a machine is printed.
SCREENS: dict[str, tuple[tuple[str, ...], int]] = {
    "predict.txt": (("predict", EXAMPLE), 0),
    "predict.json": (("predict", EXAMPLE, "--json"), 0),
    "predict.csv": (("predict", EXAMPLE, "--csv"), 0),
    "balance.txt": (("balance", EXAMPLE), 0),
    "reconcile.txt": (("reconcile", "tests/golden/reconcile.case.yaml"), 0),
    "reconcile.json": (("reconcile", "tests/golden/reconcile.case.yaml", "--json"), 0),
    "reconcile-fails.txt": (("reconcile", "tests/golden/reconcile-fails.case.yaml"), 1),
    "audit.txt": (("audit", "models/facultative-succinate.yaml"), 0),
    "networks.txt": (("networks",), 0),
    "energetics.txt": (("energetics", "examples/energetics/case.yaml"), 0),
    "compounds-succinate.txt": (("compounds", "succinate"), 0),
    "compounds-biomass.txt": (
        (
            "compounds",
            "--biomass-from",
            "protein 0.52, RNA 0.16, DNA 0.03, lipid 0.09, carbohydrate 0.15, ash 0.05",
        ),
        0,
    ),
    "growth.txt": (("growth", "examples/growth/case.yaml"), 0),
    "plant.txt": (("plant", "examples/plant/case.yaml", "--formulas"), 0),
    "explain-YN401.txt": (("explain", "YN401"), 0),
    "bad-case.txt": (("predict", "tests/golden/bad.case.yaml"), 1),
    "bad-network.txt": (("audit", "tests/golden/bad.network.yaml"), 1),
    "infeasible.txt": (("predict", "tests/golden/infeasible.case.yaml"), 1),
    "help.txt": (("--help",), 0),
    "help-predict.txt": (("predict", "--help"), 0),
}


@pytest.mark.parametrize("name", SCREENS)
def test_a_screen_is_word_for_word_as_accepted(
    run: Run, name: str, request: pytest.FixtureRequest
) -> None:
    arguments, code = SCREENS[name]
    result = run(*arguments)
    assert result.exit_code == code
    assert str(HERE.parent.parent) not in result.output
    path = HERE / name
    if request.config.getoption("--accept"):
        path.write_text(result.output, "utf-8")
    accepted = path.read_text("utf-8")
    changes = difflib.unified_diff(
        accepted.splitlines(), result.output.splitlines(), "accepted", "printed", lineterm=""
    )
    assert accepted == result.output, "\n".join(changes)


def test_no_file_is_left_over() -> None:
    kept = {path.name for path in HERE.iterdir() if path.suffix in {".txt", ".json", ".csv"}}
    assert kept == {*SCREENS, WORKBOOK}


def test_the_json_of_the_example_is_json_and_says_what_its_text_says() -> None:
    form: dict[str, Any] = json.loads((HERE / "predict.json").read_text("utf-8"))
    text = (HERE / "predict.txt").read_text("utf-8")
    words = " ".join(text.split())
    assert form["equation"]["text"] in words
    for rung in form["ladder"]:
        assert f"{rung['value']:#.3g}" in text
    assert all(finding["code"] in text for finding in form["findings"])
