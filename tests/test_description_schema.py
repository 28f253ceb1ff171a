"""The JSON Schema of the description: what an editor accepts is what the reader accepts, form for form."""

from __future__ import annotations

import json
from typing import Any

import pytest
from jsonschema import Draft202012Validator
from ruamel.yaml import YAML
from spoiling import changed, faults

from shedbim.description.listing import all_fields
from shedbim.description.presets import preset_names, preset_text
from shedbim.description.schema import json_schema

SCHEMA = json_schema()
VALIDATOR = Draft202012Validator(SCHEMA)


def loaded(text: str) -> Any:
    """The text as any YAML 1.2 reader loads it."""
    return YAML(typ="safe", pure=True).load(text)


def test_the_schema_is_a_schema_and_plain_json() -> None:
    Draft202012Validator.check_schema(SCHEMA)
    assert json.loads(json.dumps(SCHEMA)) == SCHEMA
    assert SCHEMA["$schema"] == "https://json-schema.org/draft/2020-12/schema"


@pytest.mark.parametrize("preset", preset_names())
def test_every_preset_is_valid(preset: str) -> None:
    VALIDATOR.validate(loaded(preset_text(preset)))


@pytest.mark.parametrize(
    ("name", "old", "new"),
    [
        ("warren-gable", "eaves: 8 m", "eaves: 8"),
        ("warren-gable", "eaves: 8 m", "eaves: 8 furlongs"),
        ("warren-gable", "eaves: 8 m", "eave: 8 m"),
        ("warren-gable", "eaves: 8 m", "eaves: [8 m]"),
        ("warren-gable", "  eaves: 8 m  ", "  "),
        ("warren-gable", "8 x 5.75 m", "8 x 5.75"),
        ("warren-gable", "[7 m, 8 x 5.75 m, 7 m]", "[]"),
        ("warren-gable", "form: gable", "form: gabel"),
        ("warren-gable", "form: gable", "form: mono-pitch\n    pitch_right: 5 deg"),
        ("warren-gable", "panels: 12", "panels: twelve"),
        ("warren-gable", "panels: 12", "panels: 61"),
        ("warren-gable", "pattern: warren", "pattern: waren"),
        ("warren-gable", "base: pinned", "base: hinged"),
        ("warren-gable", "grade: S355", "grade: S335"),
        ("warren-gable", "section: HEB 300", "section: 300"),
        ("warren-gable", "[first, last]", "[first, 0]"),
        ("warren-gable", "[first, last]", "always"),
        ("warren-gable", '"EPSG:25832"', "25832"),
        ("warren-gable", "e2a817a6-", ""),
        ("posted-flat", "fall: 1:60", "fall: 60"),
        ("posted-flat", "system: truss", "system: rafter"),
        ("rafters", "sag_bars: 1", "sag_bars: some"),
    ],
)
def test_a_spoilt_text_is_invalid_and_refused_by_the_reader_as_well(name: str, old: str, new: str) -> None:
    text = changed(name, (old, new))
    assert not VALIDATOR.is_valid(loaded(text))
    assert faults(text)


def test_every_field_of_the_list_is_in_the_schema_with_its_words() -> None:
    """Walks the schema as an editor does, through references and choices."""
    found: dict[str, str] = {}

    def walk(schema: dict[str, Any], path: str) -> None:
        if "$ref" in schema:
            walk(SCHEMA["$defs"][schema["$ref"].rpartition("/")[2]], path)
        for choice in (*schema.get("oneOf", ()), *schema.get("anyOf", ())):
            walk(choice, path)
        if isinstance(schema.get("items"), dict):
            walk(schema["items"], f"{path}[]")
        for name, field in schema.get("properties", {}).items():
            inner = f"{path}.{name}".removeprefix(".")
            found[inner] = found.get(inner, "") + field.get("description", "")
            walk(field, inner)

    walk(SCHEMA, "")
    for row in all_fields():
        assert row.path in found
        if not row.path.endswith((".form", ".system")):
            assert row.explanation in found[row.path]
            assert row.allowed in found[row.path] or row.allowed == "a group of fields"
