"""The house: a folder imports its own floor and those below, and some things happen in one place.

The table is that of DEVELOPERS.md; a folder that is not in it fails here, and so must be given a
floor before it can grow.
"""

from __future__ import annotations

import ast
from typing import TYPE_CHECKING

import pytest

if TYPE_CHECKING:
    from collections.abc import Iterator
    from pathlib import Path

FLOORS: dict[str, float] = {
    "foundation": 0,
    "chemistry": 1,
    "model": 2,
    "reading": 3,
    "optimum": 4,
    "balance": 5,
    "audit": 5,
    "prediction": 6,
    "studies": 7,
    "rates": 7,
    "plant": 7,
    "report": 8,
    "bridge": 9,
    # The functions behind the verbs, and the package that hands them out, stand between.
    "verbs.py": 9.5,
    "__init__.py": 9.6,
    "cli": 10,
    "__main__.py": 11,
}
# A plant is studied, so it may use the studies beside it.
SAME_FLOOR = {("plant", "studies")}


def _home(path: Path) -> str:
    """Row of the table that a file of the package belongs to."""
    return path.parts[1]


def _modules(tree: ast.Module) -> Iterator[str]:
    """Full names of all modules that a file imports, wherever in it."""
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            assert node.module is not None
            yield node.module
            # `from yieldnet.prediction import checks` imports a module of that folder.
            yield from (f"{node.module}.{alias.name}" for alias in node.names)


def _imported_homes(tree: ast.Module) -> set[str]:
    homes = set()
    for module in _modules(tree):
        first, *rest = module.split(".")
        if first != "yieldnet":
            continue
        home = rest[0] if rest else "__init__.py"
        homes.add(home if home in FLOORS else f"{home}.py" if f"{home}.py" in FLOORS else "")
    # A name taken from the package itself, such as yieldnet.__version__, is no module.
    return homes - {""}


def _may_import(home: str, other: str) -> bool:
    if FLOORS[other] == FLOORS[home]:
        return home == other or (home, other) in SAME_FLOOR
    return FLOORS[other] < FLOORS[home]


def test_every_folder_has_a_floor(program: dict[Path, ast.Module]) -> None:
    assert {_home(path) for path in program} <= set(FLOORS)


def test_imports_go_down(program: dict[Path, ast.Module]) -> None:
    upward = [
        f"{path} imports {other}"
        for path, tree in program.items()
        for other in _imported_homes(tree)
        if not _may_import(_home(path), other)
    ]
    assert upward == []


@pytest.mark.parametrize(
    ("home", "other", "may"),
    [
        ("cli", "report", True),
        ("balance", "balance", True),
        ("plant", "studies", True),
        ("studies", "plant", False),
        ("balance", "audit", False),
        ("model", "reading", False),
    ],
)
def test_what_the_table_says_of_two_folders(home: str, other: str, may: bool) -> None:
    assert _may_import(home, other) is may


def test_the_table_is_felt(program: dict[Path, ast.Module]) -> None:
    # The test above would pass on nothing if imports were not found at all.
    found = {
        (_home(path), other) for path, tree in program.items() for other in _imported_homes(tree)
    }
    assert {("cli", "report"), ("prediction", "optimum"), ("reading", "model")} <= found


def _importers(program: dict[Path, ast.Module], *names: str) -> set[str]:
    return {
        _home(path)
        for path, tree in program.items()
        if any(module.split(".")[0] in names for module in _modules(tree))
    }


def test_only_the_optimum_imports_a_solver(program: dict[Path, ast.Module]) -> None:
    assert _importers(program, "swiglpk", "optlang") == {"optimum"}


def test_only_the_bridge_imports_another_modelling_library(program: dict[Path, ast.Module]) -> None:
    assert _importers(program, "cobra", "libsbml") <= {"bridge"}


def _calls(tree: ast.Module) -> Iterator[str]:
    for node in ast.walk(tree):
        if isinstance(node, ast.Call):
            yield ast.unparse(node.func)


def test_only_the_command_line_prints_and_exits(program: dict[Path, ast.Module]) -> None:
    ends = {"print", "exit", "quit", "sys.exit", "os._exit", "os.abort", "click.echo"}
    guilty = {_home(path) for path, tree in program.items() if ends & set(_calls(tree))}
    assert guilty == {"cli"}
    assert _importers(program, "click") == {"cli"}
    assert _importers(program, "rich") <= {"cli", "report"}


def test_only_reading_opens_the_files_of_a_user(program: dict[Path, ast.Module]) -> None:
    # Tables that ship inside the package are no files of a user: chemistry reads those.
    # Writing a result is the work of report, bridge and cli.
    opening = {"open", "read_text", "read_bytes", "fdopen"}
    guilty = {
        _home(path)
        for path, tree in program.items()
        if opening & {call.rsplit(".", 1)[-1] for call in _calls(tree)}
    }
    assert guilty - {"report", "bridge", "cli"} == {"reading", "chemistry"}
    own_tables = [path for path in program if _home(path) == "chemistry"]
    for path in own_tables:
        for call in _calls(program[path]):
            if call.rsplit(".", 1)[-1] in opening:
                assert call.startswith("files('yieldnet.chemistry').joinpath("), (path, call)


def test_nothing_below_the_entry_points_reads_the_clock_or_the_environment(
    program: dict[Path, ast.Module],
) -> None:
    # The public functions are entry points as well: one hands a clock to a long study.
    assert _importers(program, "time", "datetime") <= {"cli", "verbs.py"}
    reading_it = {
        _home(path)
        for path, tree in program.items()
        if any(
            isinstance(node, ast.Attribute) and node.attr in {"environ", "getenv"}
            for node in ast.walk(tree)
        )
    }
    assert reading_it <= {"cli"}
