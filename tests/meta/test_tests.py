"""Tests that can fail: each asserts something, and says which error it expects."""

from __future__ import annotations

import ast
from typing import TYPE_CHECKING

import pytest

if TYPE_CHECKING:
    from collections.abc import Iterator
    from pathlib import Path


@pytest.fixture(scope="module")
def tests(trees: dict[Path, ast.Module]) -> dict[Path, ast.Module]:
    found = {path: tree for path, tree in trees.items() if path.parts[0] == "tests"}
    assert len(found) > 20
    return found


def _calls(node: ast.AST) -> Iterator[ast.Call]:
    return (item for item in ast.walk(node) if isinstance(item, ast.Call))


def _called(call: ast.Call) -> str:
    """Last name of what is called, ``raises`` for ``pytest.raises``."""
    return ast.unparse(call.func).rsplit(".", 1)[-1]


def _functions(tree: ast.AST) -> Iterator[ast.FunctionDef]:
    return (item for item in ast.walk(tree) if isinstance(item, ast.FunctionDef))


def test_every_test_asserts_something(tests: dict[Path, ast.Module]) -> None:
    functions = [item for tree in tests.values() for item in _functions(tree)]
    asserting = {
        item.name
        for item in functions
        if any(isinstance(node, ast.Assert) for node in ast.walk(item))
    } | {"raises"}
    # A helper that calls a helper that asserts does assert.
    while True:
        more = {
            item.name
            for item in functions
            if item.name not in asserting
            and any(_called(call) in asserting for call in _calls(item))
        }
        if not more:
            break
        asserting |= more
    idle = [
        f"{path}: {item.name}"
        for path, tree in tests.items()
        for item in _functions(tree)
        if item.name.startswith("test_") and item.name not in asserting
    ]
    assert idle == []


def test_every_expected_error_has_its_words(tests: dict[Path, ast.Module]) -> None:
    wordless = [
        f"{path}:{call.lineno}"
        for path, tree in tests.items()
        for call in _calls(tree)
        if _called(call) in {"raises", "warns"}
        and not any(keyword.arg == "match" for keyword in call.keywords)
    ]
    assert wordless == []


# Tests of what other programs make of our files: without a browser or a spreadsheet they say so.
NEED_ANOTHER_PROGRAM = {"tests/browser/conftest.py", "tests/unit/test_workbook.py"}


def test_no_test_is_skipped_or_expected_to_fail(tests: dict[Path, ast.Module]) -> None:
    words = {"skip", "skipif", "xfail", "importorskip"}
    found = [
        path.as_posix()
        for path, tree in tests.items()
        for node in ast.walk(tree)
        if isinstance(node, ast.Attribute) and node.attr in words
    ]
    assert set(found) <= NEED_ANOTHER_PROGRAM
    assert len(found) == len(set(found)), "one reason a file"


def test_no_two_tests_of_a_file_have_the_same_name(tests: dict[Path, ast.Module]) -> None:
    # The second would hide the first, which then never runs.
    hidden = []
    for path, tree in tests.items():
        names = [item.name for item in tree.body if isinstance(item, ast.FunctionDef)]
        hidden += [f"{path}: {name}" for name in {*names} if names.count(name) > 1]
    assert hidden == []
