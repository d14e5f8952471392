"""Starting is quick because heavy libraries are loaded only where they are needed."""

from __future__ import annotations

import ast
import subprocess
import sys
from typing import TYPE_CHECKING

import pytest

if TYPE_CHECKING:
    from pathlib import Path

# With what it took to import each on the machine where this was decided [s].
HEAVY = {
    "optlang": 2.0,
    "cobra": 3.5,
    "pandas": 0.7,
    "scipy": 0.9,
    "networkx": 0.4,
    "matplotlib": 1.2,
    "numpy": 0.2,
    "sympy": 1.0,
}
EXAMPLE = "examples/succinate-from-xylose/case.yaml"


def _loaded(checkout: Path, code: str) -> set[str]:
    """Top-level modules that are loaded once some code has run in a fresh interpreter."""
    done = subprocess.run(
        [sys.executable, "-c", f"{code}\nimport sys\nprint('LOADED', *sorted(sys.modules))"],
        cwd=checkout,
        capture_output=True,
        check=True,
        encoding="utf-8",
        timeout=60,
    )
    last = done.stdout.splitlines()[-1].split()
    assert last[0] == "LOADED"
    return {name.split(".")[0] for name in last[1:]}


@pytest.mark.parametrize(
    "arguments",
    [
        ["predict", EXAMPLE],
        ["predict", EXAMPLE, "--json"],
        ["predict", EXAMPLE, "--csv"],
        ["predict", EXAMPLE, "--fluxes", "--proof"],
        ["balance", EXAMPLE],
        ["audit", "facultative-succinate"],
        ["explain", "YN401"],
        ["--help"],
    ],
    ids=" ".join,
)
def test_the_daily_verbs_load_no_heavy_library(checkout: Path, arguments: list[str]) -> None:
    loaded = _loaded(
        checkout,
        "from yieldnet.cli.main import main\n"
        f"try:\n    main({arguments!r})\nexcept SystemExit as end:\n    assert not end.code",
    )
    assert "click" in loaded
    assert loaded & set(HEAVY) == set()


def test_importing_the_package_loads_next_to_nothing(checkout: Path) -> None:
    loaded = _loaded(checkout, "import yieldnet")
    assert loaded & {*HEAVY, "click", "flint", "rich", "ruamel", "swiglpk"} == set()


def test_heavy_libraries_are_imported_inside_functions(program: dict[Path, ast.Module]) -> None:
    early = []
    for path, tree in program.items():
        for node in tree.body:
            names = [alias.name for alias in node.names] if isinstance(node, ast.Import) else []
            if isinstance(node, ast.ImportFrom) and node.module:
                names = [node.module]
            early += [f"{path}: {name}" for name in names if name.split(".")[0] in HEAVY]
    assert early == []


def test_all_imports_are_absolute(trees: dict[Path, ast.Module]) -> None:
    relative = [
        f"{path}:{node.lineno}"
        for path, tree in trees.items()
        for node in ast.walk(tree)
        if isinstance(node, ast.ImportFrom) and node.level
    ]
    assert relative == []
