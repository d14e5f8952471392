"""The public functions say what they take and give, with units, and show how they are called."""

from __future__ import annotations

import ast
import inspect
import re
from importlib import import_module
from typing import TYPE_CHECKING

import pytest

import yieldnet

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

FUNCTIONS = [name for name in yieldnet.__all__ if inspect.isfunction(getattr(yieldnet, name))]
SUMMARY = re.compile(r"[A-Z`0-9?+\[].*[.?]", re.DOTALL)
MOST_WITHOUT_SECTIONS = 3
"""A function with more parameters than this says what each of them is [-]."""


def _function(name: str) -> Callable[..., object]:
    found: Callable[..., object] = getattr(yieldnet, name)
    return found


def _sections(text: str) -> dict[str, str]:
    """Sections of a numpydoc text by their heading, the summary under an empty one."""
    parts = re.split(r"^([A-Z][a-z]+(?: [a-z]+)?)\n-{3,}\n", text, flags=re.MULTILINE)
    return {"": parts[0].strip(), **dict(zip(parts[1::2], parts[2::2], strict=True))}


def _entries(section: str) -> dict[str, str]:
    """Entries of a section of parameters by name, several names of one entry apart."""
    found: dict[str, str] = {}
    for entry in filter(str.strip, re.split(r"^(?=\S)", section, flags=re.MULTILINE)):
        head, _, body = entry.partition("\n")
        names, _, kind = head.partition(" : ")
        for name in names.split(", "):
            found[name.strip().lstrip("*")] = f"{kind}\n{body}"
    return found


@pytest.mark.parametrize("name", FUNCTIONS)
def test_a_verb_documents_every_parameter_its_result_and_its_use(name: str) -> None:
    text = inspect.getdoc(_function(name))
    assert text
    sections = _sections(text)
    assert SUMMARY.fullmatch(sections[""])
    assert "\n" not in sections[""].split("\n\n")[0], "the summary is one line"
    parameters = _entries(sections["Parameters"])
    assert list(parameters) == list(inspect.signature(_function(name)).parameters)
    for told in (*parameters.values(), sections["Returns"]):
        kind, _, words = told.strip().partition("\n")
        assert kind.strip()
        assert words.strip().endswith("."), told
    assert ">>> " in sections["Examples"]


@pytest.mark.parametrize("name", FUNCTIONS)
def test_a_verb_that_gives_numbers_says_in_what(name: str) -> None:
    sections = _sections(inspect.getdoc(_function(name)) or "")
    gives = inspect.signature(_function(name)).return_annotation
    if_numbers = str(gives) in {"Prediction", "float", "Fraction"}
    assert (re.search(r"\[[^\]]+\]", sections["Returns"]) is not None) or not if_numbers


def _public_functions(tree: ast.Module) -> dict[str, ast.FunctionDef]:
    public: set[str] = set()
    for node in tree.body:
        if isinstance(node, ast.Assign) and ast.unparse(node.targets[0]) == "__all__":
            public = set(ast.literal_eval(node.value))
    return {
        node.name: node
        for node in tree.body
        if isinstance(node, ast.FunctionDef) and node.name in public
    }


def _faults(path: Path, function: ast.FunctionDef) -> list[str]:
    """What is missing in the docstring of a public function.

    One line is enough where it says all; once there are sections, or many parameters, every
    parameter and the result have their entry.
    """
    text = ast.get_docstring(function) or ""
    sections = _sections(text)
    label = f"{path}: {function.name}"
    if not SUMMARY.fullmatch(sections[""].split("\n\n")[0]):
        return [f"{label} has no summary that ends with a full stop"]
    arguments = [item.arg for item in (*function.args.args, *function.args.kwonlyargs)]
    arguments += [item.arg for item in (function.args.vararg, function.args.kwarg) if item]
    # Verbs of the command line: the docstring is their help text.
    if path.parts[1] == "cli":
        return []
    if len(sections) == 1:
        return [f"{label} has no sections"] if len(arguments) > MOST_WITHOUT_SECTIONS else []
    faults = []
    if "Parameters" in sections:
        told = list(_entries(sections["Parameters"]))
        faults += [f"{label} tells {told}, takes {arguments}"] if told != arguments else []
        gives = ast.unparse(function.returns) if function.returns else "None"
        if gives not in {"None", "NoReturn"} and "Returns" not in sections:
            faults.append(f"{label} does not tell what it returns")
    return faults


def test_no_public_function_is_half_documented(program: dict[Path, ast.Module]) -> None:
    functions = [
        (path, function)
        for path, tree in program.items()
        for function in _public_functions(tree).values()
    ]
    assert len(functions) > 80
    faults = [fault for path, function in functions for fault in _faults(path, function)]
    assert not faults, "\n".join(faults)


def test_every_name_a_module_makes_public_is_there(program: dict[Path, ast.Module]) -> None:
    for path in program:
        module = import_module(".".join(path.with_suffix("").parts).removesuffix(".__init__"))
        for name in getattr(module, "__all__", ()):
            assert hasattr(module, name), f"{path} names {name}"


def test_every_module_says_what_it_is_for(program: dict[Path, ast.Module]) -> None:
    silent = [str(path) for path, tree in program.items() if not ast.get_docstring(tree)]
    assert silent == []
