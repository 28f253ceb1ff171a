"""Kinds of fields that hold a list: lengths with repeats, labels, numbers with words among them, groups."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from pydantic import GetCoreSchemaHandler, GetJsonSchemaHandler, ValidationError
from pydantic_core import CoreSchema, core_schema

from shedbim import units
from shedbim.fields.kind import ALLOWED, FieldError, Kind, Options, as_text, nearest
from shedbim.fields.scalars import Quantity, Text, Whole

__all__ = ["Groups", "Labels", "NumbersOr", "Repeats"]

_REPEAT = re.compile(r"\s*([0-9]{1,6})\s*[x×*]\s+?(.+)|\s*([0-9]{1,6})\s*[x×*](.+)", re.DOTALL)


class ListKind(Kind):
    """A list whose items are read one by one, each with its own faults, and then as a whole."""

    @property
    def longest(self) -> int:
        """No list with more items than this can be right, so that its items need not be read."""
        raise NotImplementedError

    def item(self, value: object) -> Any:
        """One item as read; raises FieldError."""
        raise NotImplementedError

    def whole(self, items: Sequence[Any]) -> object:
        """The value from all items; raises FieldError."""
        raise NotImplementedError

    def word(self, value: object) -> object | None:
        """The value of a single word that may stand instead of the list, or None."""
        return None

    def read(self, value: object) -> object:
        """The value from the list, up to its first fault."""
        if isinstance(value, str) and (found := self.word(value)) is not None:
            return found
        return self.whole([self.item(each) for each in self._listed(value)])

    def _listed(self, value: object) -> list[Any]:
        if not isinstance(value, list | tuple):
            raise FieldError("a list is wanted here, in square brackets", self.allowed)
        if len(value) > self.longest:
            raise FieldError(f"{len(value)} items in the list", self.allowed)
        return list(value)

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        """A validator as ``read``, but with the faults of all items, each at its place."""
        items = core_schema.list_schema(core_schema.no_info_plain_validator_function(self.item))
        whole = core_schema.no_info_after_validator_function(self.whole, items)

        def read(value: object, inner: core_schema.ValidatorFunctionWrapHandler) -> object:
            if isinstance(value, str) and (found := self.word(value)) is not None:
                return found
            return inner(self._listed(value))

        return core_schema.no_info_wrap_validator_function(read, whole)


@dataclass(frozen=True)
class Repeats(ListKind):
    """Lengths of which ``8 x 6 m`` stands for eight; gives the lengths one by one, mm."""

    low: str
    high: str
    most: int

    @property
    def allowed(self) -> str:
        """Bounds of an item and of the number of items."""
        each = f"lengths of {self.low} to {self.high}, repeats as 8 x 6 m"
        return f"a list of {each}, 1 to {self.most} in all"

    @property
    def longest(self) -> int:
        """As many as there may be in all."""
        return self.most

    def item(self, value: object) -> tuple[int, float]:
        """The number of repeats and the length, mm."""
        text = as_text(value, self.allowed)
        times, length = 1, text
        if match := _REPEAT.fullmatch(text):
            times, length = int(match[1] or match[3]), (match[2] or match[4]).strip()
        if not 1 <= times <= self.most:
            raise FieldError(f"{times} repeats", self.allowed)
        return times, Quantity(units.LENGTH, self.low, self.high).read(length)

    def whole(self, items: Sequence[Any]) -> tuple[float, ...]:
        """All lengths, mm."""
        count = sum(times for times, _ in items)
        if not 1 <= count <= self.most:
            raise FieldError(f"{count} lengths in all", self.allowed)
        return tuple(length for times, length in items for _ in range(times))

    def schema(self) -> dict[str, Any]:
        """An array of strings."""
        pattern = units.pattern(units.LENGTH).removeprefix("^")
        item = {"type": "string", "pattern": rf"^\s*(?:[0-9]+\s*[x×*]\s*)?{pattern}"}
        return {"type": "array", "items": item, "minItems": 1, "maxItems": self.most}


@dataclass(frozen=True)
class Labels(ListKind):
    """Labels of grid lines: short words without blanks or signs that keys are made with."""

    most: int

    _LABEL = Text(longest=8, pattern=r"[A-Za-z0-9.']+", words="letters, digits, points, at most 8 a label")

    @property
    def allowed(self) -> str:
        """The form of a label."""
        return f"a list of labels, one for each line ({self._LABEL.allowed})"

    @property
    def longest(self) -> int:
        """As many as there may be lines."""
        return self.most

    def item(self, value: object) -> str:
        """One label."""
        return self._LABEL.read(value)

    def whole(self, items: Sequence[Any]) -> tuple[str, ...]:
        """All labels; none twice."""
        if not 1 <= len(items) <= self.most:
            raise FieldError(f"{len(items)} labels", self.allowed)
        doubled = sorted(label for label, count in Counter(items).items() if count > 1)
        if doubled:
            raise FieldError(f"labels given twice: {', '.join(doubled[:5])}", self.allowed)
        return tuple(items)

    def schema(self) -> dict[str, Any]:
        """An array of strings or numbers."""
        return {
            "type": "array",
            "items": self._LABEL.schema(),
            "minItems": 1,
            "maxItems": self.most,
            "uniqueItems": True,
        }


@dataclass(frozen=True)
class NumbersOr(ListKind):
    """A list of whole numbers and words, or one word that stands for a rule."""

    rule: str
    words: tuple[str, ...]
    low: int
    high: int

    @property
    def allowed(self) -> str:
        """The words and the bounds."""
        return f"{self.rule!r}, or a list of {' | '.join(self.words)} | a number, {self.low} to {self.high}"

    @property
    def longest(self) -> int:
        """Each number and each word once."""
        return self.high - self.low + 1 + len(self.words)

    def word(self, value: object) -> object | None:
        """The rule."""
        return self.rule if value == self.rule else None

    def item(self, value: object) -> int | str:
        """A number or a word."""
        text = as_text(value, self.allowed)
        if text in self.words:
            return text
        try:
            return Whole(self.low, self.high).read(value)
        except FieldError as error:
            raise FieldError(error.message, self.allowed, nearest(text, self.words)) from None

    def whole(self, items: Sequence[Any]) -> tuple[int | str, ...]:
        """All items; none twice."""
        if not items:
            raise FieldError("the list is empty", self.allowed)
        if len(set(items)) < len(items):
            raise FieldError("an item is given twice", self.allowed)
        return tuple(items)

    def schema(self) -> dict[str, Any]:
        """The rule, or an array."""
        item = {"anyOf": [{"enum": list(self.words)}, Whole(self.low, self.high).schema()]}
        return {
            "anyOf": [
                {"const": self.rule},
                {"type": "array", "items": item, "minItems": 1, "uniqueItems": True},
            ]
        }


@dataclass(frozen=True)
class Groups(ListKind):
    """A list of groups of fields, all of one kind."""

    kind: type[Options]
    most: int

    @property
    def allowed(self) -> str:
        """The fields of a group."""
        return f"a list of groups of fields: {', '.join(self.kind.model_fields)}; at most {self.most}"

    @property
    def longest(self) -> int:
        """As many as there may be."""
        return self.most

    def item(self, value: object) -> Options:
        """One group."""
        try:
            return self.kind.model_validate(value)
        except ValidationError:
            raise FieldError("a group of fields that is not right", self.allowed) from None

    def whole(self, items: Sequence[Any]) -> tuple[Options, ...]:
        """All groups."""
        return tuple(items)

    def schema(self) -> dict[str, Any]:
        """An array of objects."""
        return {"type": "array", "maxItems": self.most}

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        """A validator of a list whose items are read as the groups they are, each with its faults in place."""
        groups = core_schema.list_schema(handler.generate_schema(self.kind))
        listed = core_schema.no_info_before_validator_function(self._listed, groups)
        return core_schema.no_info_after_validator_function(self.whole, listed)

    def __get_pydantic_json_schema__(
        self, schema: CoreSchema, handler: GetJsonSchemaHandler
    ) -> dict[str, Any]:
        """An array of the groups' own schema."""
        return {ALLOWED: self.allowed, **handler(schema), **self.schema()}
