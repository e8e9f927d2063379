from __future__ import annotations

import datetime as dt
import json

import jsonschema
import pytest

from plumbfall.bench.schema import SCHEMA_FILE, Sheet, json_schema, schema_text


def as_json(value):
    """Return a sheet as editors hand it to a schema: dates as text."""
    if isinstance(value, dict):
        return {key: as_json(item) for key, item in value.items()}
    if isinstance(value, list):
        return [as_json(item) for item in value]
    return value.isoformat() if isinstance(value, dt.date | dt.datetime) else value


@pytest.fixture(scope="module")
def validator():
    return jsonschema.Draft202012Validator(json.loads(SCHEMA_FILE.read_text(encoding="utf-8")))


def test_the_shipped_file_is_current():
    assert SCHEMA_FILE.read_text(encoding="utf-8") == schema_text()


def test_it_is_a_schema_of_its_draft():
    jsonschema.Draft202012Validator.check_schema(json_schema())


def test_it_takes_the_whole_sheet(validator, whole_sheet):
    validator.validate(as_json(whole_sheet))


@pytest.mark.parametrize(
    "sheet",
    [
        {"tube": {"A": {"boer": "50 mm"}}},
        {"tubes": {}},
        {"tube": {"A": {"bore": 50.0}}},
        {"timer": {"T": {"kind": "sundial"}}},
        {"ball": {"A": {"density": "7.7 g/cm3"}}},
        {"tube": {"A": {"bore": {"value": 50.0, "unit": "mm", "sigma": 1}}}},
        {"bench": {"coverage": 95}},
    ],
)
def test_it_refuses_what_the_reader_refuses(validator, sheet):
    assert not validator.is_valid(sheet)


def test_every_key_is_explained_to_its_user():
    def keys(node):
        yield from node.get("properties", {}).items()
        for inner in node.get("$defs", {}).values():
            yield from keys(inner)

    schema = json_schema()
    quantity = schema["$defs"].pop("quantity")
    assert "2.0000(5) mm" in quantity["description"]
    silent = [name for name, key in keys(schema) if not key.get("description")]
    assert silent == []


def test_whole_sheet_of_the_tests_uses_every_table(whole_sheet):
    assert set(whole_sheet) == set(Sheet.model_fields)
