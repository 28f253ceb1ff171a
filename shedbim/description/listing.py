"""Lists of fields: all there are, with what they allow, and those a user left to their defaults."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from pydantic.fields import FieldInfo

from shedbim.description.models import Description
from shedbim.description.paths import target
from shedbim.fields import Groups, Kind, OneOf, Options
from shedbim.fields.kind import LEFT_OUT

__all__ = ["FieldRow", "all_fields", "defaults_taken"]


@dataclass(frozen=True)
class FieldRow:
    """One field of the description.

    Attributes:
        path: for example ``purlins.spacing``.
        allowed: what may be written, in words.
        default: what holds where it is left out, as a user would write it; empty where it must be given.
        explanation: what it is, in a few words.
        condition: the word that the field belongs to, for example ``form: gable``; empty for most.
    """

    path: str
    allowed: str
    default: str
    explanation: str
    condition: str = ""


def all_fields() -> tuple[FieldRow, ...]:
    """Every field of a description, in its order."""
    return tuple(_rows(Description, "", ""))


def defaults_taken(description: Description) -> tuple[tuple[str, str], ...]:
    """Field path and value, as a user would write it, of all that the user left open."""
    return tuple(_taken(description, ""))


def _rows(group: type[Options], prefix: str, condition: str) -> Iterator[FieldRow]:
    """The rows of a group; a group that may be left out as a whole has a row of its own."""
    for name, field in group.model_fields.items():
        path, here = prefix + name, target(field)
        explanation = field.description or ""
        if isinstance(here, Kind):
            yield FieldRow(path, here.allowed, _default(field), explanation, condition)
            if isinstance(here, Groups):
                yield from _rows(here.kind, f"{path}[].", condition)
        elif isinstance(here, OneOf):
            yield FieldRow(f"{path}.{here.by}", here.allowed, "", explanation, condition)
            for word, kind in here.kinds.items():
                rows = _rows(kind, f"{path}.", f"{here.by}: {word}")
                yield from (row for row in rows if row.path != f"{path}.{here.by}")
        elif here is not None:
            if _meaning(field):
                yield FieldRow(path, "a group of fields", _default(field), explanation, condition)
            yield from _rows(here, f"{path}.", condition)


def _taken(group: Options, prefix: str) -> Iterator[tuple[str, str]]:
    """The fields of a group that the user left open, and those of the groups in it."""
    for name, field in type(group).model_fields.items():
        value = getattr(group, name)
        if isinstance(value, Options):
            yield from _taken(value, f"{prefix}{name}.")
        elif name not in group.model_fields_set:
            yield prefix + name, _default(field)


def _default(field: FieldInfo) -> str:
    """What holds where the field is left out; empty where it must be given."""
    if field.is_required():
        return ""
    return _meaning(field) or str(field.default or "") or "none"


def _meaning(field: FieldInfo) -> str:
    """What it means that an optional field is left out."""
    extra: Any = field.json_schema_extra
    return str(extra[LEFT_OUT]) if isinstance(extra, dict) and LEFT_OUT in extra else ""
