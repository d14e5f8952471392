"""Fixtures of the tests that read the project's own files."""

from __future__ import annotations

import ast
from fnmatch import fnmatch
from pathlib import Path
from typing import TYPE_CHECKING

import pytest

if TYPE_CHECKING:
    from collections.abc import Iterator

CHECKOUT = Path(__file__).resolve().parent.parent.parent


def _kept(folder: Path, ignored: list[str]) -> Iterator[Path]:
    for path in sorted(folder.iterdir()):
        if path.name == ".git" or any(fnmatch(path.name, pattern) for pattern in ignored):
            continue
        if path.is_dir():
            yield from _kept(path, ignored)
        else:
            yield path


@pytest.fixture(scope="session")
def project_files() -> tuple[Path, ...]:
    """Every file of the project, from its top folder, without those that git ignores.

    Walked rather than asked of git, so that a copy of the project without its history is tested
    the same way.
    """
    lines = (CHECKOUT / ".gitignore").read_text("utf-8").split()
    ignored = [line.rstrip("/") for line in lines]
    return tuple(path.relative_to(CHECKOUT) for path in _kept(CHECKOUT, ignored))


@pytest.fixture(scope="session")
def trees(project_files: tuple[Path, ...]) -> dict[Path, ast.Module]:
    """Syntax tree of every Python file of the project."""
    return {
        path: ast.parse((CHECKOUT / path).read_text("utf-8"), str(path))
        for path in project_files
        if path.suffix == ".py"
    }


@pytest.fixture(scope="session")
def program(trees: dict[Path, ast.Module]) -> dict[Path, ast.Module]:
    """Syntax trees of the package alone."""
    found = {path: tree for path, tree in trees.items() if path.parts[0] == "yieldnet"}
    assert len(found) > 50
    return found
