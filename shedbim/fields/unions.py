"""The kind of field whose group of fields is one of several, told apart by one of its fields."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, get_args

from pydantic import GetCoreSchemaHandler
from pydantic_core import CoreSchema, core_schema

from shedbim.fields.kind import Options

__all__ = ["OneOf", "table"]

#: Put before a tag in the place of an error, so that no field of a user's file can be taken for one.
TAG_SIGN = "\x00"


def table(by: str, *kinds: type[Options]) -> dict[str, type[Options]]:
    """The kinds by the word that their field ``by`` (a ``Literal`` of one word) holds; refuses doubles."""
    rows: dict[str, type[Options]] = {}
    for kind in kinds:
        (word,) = get_args(kind.model_fields[by].annotation)
        if word in rows:
            raise ValueError(f"two kinds are called {by}: {word}")
        rows[word] = kind
    return rows


class OneOf:
    """Marks a field as one of the kinds of a table; the field's type is their common base."""

    def __init__(self, by: str, kinds: Mapping[str, type[Options]]) -> None:
        self.by = by
        self.kinds = dict(kinds)

    @property
    def allowed(self) -> str:
        """The words of the table."""
        return " | ".join(self.kinds)

    def _tag(self, value: object) -> str | None:
        word = value.get(self.by) if isinstance(value, Mapping) else getattr(value, self.by, None)
        return TAG_SIGN + word if isinstance(word, str) else None

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        choices = {TAG_SIGN + word: handler.generate_schema(kind) for word, kind in self.kinds.items()}
        return core_schema.tagged_union_schema(choices, discriminator=self._tag)
