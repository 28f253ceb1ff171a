"""The JSON Schema of the description, for editors that complete and check while one writes."""

from __future__ import annotations

from typing import Any

from shedbim.description.models import Description
from shedbim.fields.kind import ALLOWED, LEFT_OUT

__all__ = ["json_schema"]


def json_schema() -> dict[str, Any]:
    """The schema (draft 2020-12) of a description as an editor loads it from YAML.

    It holds the form of every field; bounds of quantities and rules across fields stand in words only, for
    JSON Schema cannot compare numbers with units.
    """
    schema = _readable(Description.model_json_schema())
    head = {"$schema": "https://json-schema.org/draft/2020-12/schema", "title": "Description of a steel shed"}
    return {**head, **schema}


def _readable(schema: Any, inside: str = "") -> Any:
    """The schema without made-up titles; what is allowed stands in each field's explanation."""
    if isinstance(schema, list):
        return [_readable(item) for item in schema]
    if not isinstance(schema, dict):
        return schema
    if inside in {"properties", "$defs"}:
        return {name: _readable(each) for name, each in schema.items()}
    notes = [note for note in (_allowed(schema), _left_out(schema)) if note]
    words = "; ".join(part for part in (schema.get("description", ""), *notes) if part)
    kept = {key: _readable(each, key) for key, each in schema.items() if key not in _DROPPED}
    return {**kept, "description": words} if words else kept


_DROPPED = {"title", "description", ALLOWED, LEFT_OUT}


def _allowed(schema: dict[str, Any]) -> str:
    """What a field allows, also where it stands in the first choice of an optional field."""
    first = schema.get("anyOf", [{}])[0]
    found = schema.get(ALLOWED) or first.get(ALLOWED, "")
    return f"allowed: {found}" if found else ""


def _left_out(schema: dict[str, Any]) -> str:
    return f"left out: {schema[LEFT_OUT]}" if LEFT_OUT in schema else ""
