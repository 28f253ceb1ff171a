"""The kinds of fields a description is made of: each reads what the user wrote and says what is allowed.

A kind stands in ``Annotated[type, kind]``: the model library asks it for a validator and for its JSON
Schema, the list of fields asks it for its words. Values after reading: mm, rad, ``Section``.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from difflib import get_close_matches
from typing import Any

from pydantic import BaseModel, ConfigDict, Field, GetCoreSchemaHandler, GetJsonSchemaHandler
from pydantic_core import CoreSchema, core_schema

__all__ = [
    "ALLOWED",
    "LEFT_OUT",
    "FieldError",
    "Kind",
    "Options",
    "as_text",
    "default",
    "kind_of_value",
    "left_out",
    "nearest",
    "required",
]

#: Notes in a field's JSON Schema, taken out again when the schema is made readable.
LEFT_OUT, ALLOWED = "x-left-out", "x-allowed"

_CONTROL = re.compile(r"[\x00-\x1f\x7f-\x9f\u2028\u2029\ud800-\udfff]")


class FieldError(ValueError):
    """A value that its field cannot take; carries what the message is made of."""

    def __init__(self, message: str, allowed: str, near: Sequence[str] = ()) -> None:
        self.message = message
        self.allowed = allowed
        self.nearest = tuple(near)
        super().__init__(f"{message}; allowed: {allowed}")


class Options(BaseModel):
    """Base of every group of fields: frozen, unknown fields refused, defaults written as a user would."""

    model_config = ConfigDict(
        frozen=True, extra="forbid", validate_default=True, arbitrary_types_allowed=True
    )


def required(explanation: str) -> Any:
    """A field the user must give, with its explanation."""
    return Field(description=explanation)


def left_out(meaning: str, explanation: str) -> Any:
    """A field that may be left out, with what is done then in a few words, and its explanation."""
    return Field(default=None, description=explanation, json_schema_extra={LEFT_OUT: meaning})


def default(value: object, explanation: str) -> Any:
    """A field with a default in the user's own words (``1.8 m``), with its explanation."""
    return Field(default=value, description=explanation)


def nearest(word: str, choices: Sequence[str]) -> tuple[str, ...]:
    """Up to three of the choices that are spelt much like the word, best first."""
    lowered = {choice.lower(): choice for choice in sorted(choices, reverse=True)}
    found = get_close_matches(word[:40].lower(), lowered, n=3, cutoff=0.6)
    return tuple(lowered[match] for match in found)


def kind_of_value(value: object) -> str:
    """What a wrong value is, in words."""
    if value is None:
        return "nothing is given"
    if isinstance(value, dict):
        return "a group of fields stands here"
    if isinstance(value, list | tuple):
        return "a list stands here"
    return "not a value of the right kind"


def as_text(value: object, allowed: str) -> str:
    """The value as one line of text; bare numbers count as text. Raises FieldError."""
    if isinstance(value, int | float) and not isinstance(value, bool):
        return str(value)
    if not isinstance(value, str):
        raise FieldError(kind_of_value(value), allowed)
    if _CONTROL.search(value):
        raise FieldError("a control character or a line break in the text", allowed)
    return value.strip()


class Kind:
    """Base of the kinds: one that reads a value with ``read`` and shows its schema with ``schema``."""

    @property
    def allowed(self) -> str:
        """What a user may write, in words."""
        raise NotImplementedError

    def read(self, value: object) -> object:
        """The value of the program from the value of the file; raises FieldError."""
        raise NotImplementedError

    def schema(self) -> dict[str, Any]:
        """The JSON Schema of what a user may write."""
        raise NotImplementedError

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        return core_schema.no_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(
        self, schema: CoreSchema, handler: GetJsonSchemaHandler
    ) -> dict[str, Any]:
        return {ALLOWED: self.allowed, **self.schema()}
