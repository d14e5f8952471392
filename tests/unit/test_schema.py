"""The JSON Schema of the two files knows the keys that the readers know."""

from __future__ import annotations

import json
from typing import Any

import pytest

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
