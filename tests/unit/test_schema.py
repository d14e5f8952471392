"""The JSON Schema of the two files knows the keys that the readers know."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest
from jsonschema import Draft202012Validator
from ruamel.yaml import YAML

from yieldnet.reading.case_file import CASE_KEYS
from yieldnet.reading.case_statements import CONDITION_KEYS
from yieldnet.reading.network_file import NETWORK_KEYS
from yieldnet.reading.schema import case_schema, network_schema


@pytest.mark.parametrize(
    ("schema", "keys"), [(case_schema(), CASE_KEYS), (network_schema(), NETWORK_KEYS)]
)
def test_the_keys_are_those_of_the_reader(schema: dict[str, Any], keys: tuple[str, ...]) -> None:
    assert tuple(schema["properties"]) == keys
    assert schema["additionalProperties"] is False
    assert set(schema["required"]) <= set(keys)
    assert json.loads(json.dumps(schema)) == schema


def test_the_conditions_are_those_of_the_reader() -> None:
    assert tuple(case_schema()["properties"]["conditions"]["properties"]) == CONDITION_KEYS


def _objects(form: object) -> list[dict[str, Any]]:
    """All schemas of mappings inside a schema."""
    if isinstance(form, dict):
        inner = [item for value in form.values() for item in _objects(value)]
        return [form, *inner] if form.get("type") == "object" else inner
    return [item for value in form for item in _objects(value)] if isinstance(form, list) else []


@pytest.mark.parametrize("schema", [case_schema(), network_schema()])
def test_every_mapping_says_which_keys_or_what_values_it_takes(schema: dict[str, Any]) -> None:
    found = _objects(schema)
    assert len(found) > 5
    for item in found:
        assert "additionalProperties" in item
        assert set(item.get("required", ())) <= set(item.get("properties", ()))


CHECKOUT = Path(__file__).resolve().parent.parent.parent
CASES = sorted(CHECKOUT.glob("examples/*/case.yaml"))
NETWORKS = sorted(CHECKOUT.glob("models/*.yaml"))


def _loaded(path: Path) -> object:
    """The file as an editor would see it; numbers may come as numbers."""
    return YAML(typ="safe", pure=True).load(path.read_text("utf-8"))


def test_there_are_files_to_validate() -> None:
    assert len(CASES) >= 6
    assert len(NETWORKS) >= 3


@pytest.mark.parametrize("path", CASES, ids=lambda path: path.parent.name)
def test_every_shipped_case_is_valid(path: Path) -> None:
    found = list(Draft202012Validator(case_schema()).iter_errors(_loaded(path)))
    assert [error.message for error in found] == []


@pytest.mark.parametrize("path", NETWORKS, ids=lambda path: path.stem)
def test_every_shipped_network_is_valid(path: Path) -> None:
    found = list(Draft202012Validator(network_schema()).iter_errors(_loaded(path)))
    assert [error.message for error in found] == []


def test_the_schemas_are_schemas_and_refuse() -> None:
    for schema in (case_schema(), network_schema()):
        Draft202012Validator.check_schema(schema)
        assert list(Draft202012Validator(schema).iter_errors({"case": 3, "surprise": 1}))


@pytest.mark.parametrize(
    ("correlations", "valid"),
    [
        ({}, True),
        ({"ethanol": {"lactate": 0.4, "acetate": "-1/4"}}, True),
        ({"ethanol": 0.4}, False),
        ({"ethanol": {"lactate": [0.4]}}, False),
        (["ethanol", "lactate", 0.4], False),
    ],
)
def test_correlations_are_numbers_by_two_names(correlations: object, valid: bool) -> None:
    case = {"case": "x", "equation": "glucose -> ? ethanol", "correlations": correlations}
    found = list(Draft202012Validator(case_schema()).iter_errors(case))
    assert (found == []) is valid, [error.message for error in found]


@pytest.mark.parametrize("name", ["reconcile", "reconcile-fails"])
def test_a_case_with_correlations_and_intervals_is_valid(name: str) -> None:
    case = _loaded(CHECKOUT / "tests" / "golden" / f"{name}.case.yaml")
    found = list(Draft202012Validator(case_schema()).iter_errors(case))
    assert [error.message for error in found] == []
