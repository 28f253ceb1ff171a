"""The part of a faulty description that can be read, so that the rules across fields can still be asked."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, get_args

from shedbim.description.models import Description
from shedbim.description.paths import target
from shedbim.fields import FieldError, Kind, OneOf, Options

__all__ = ["readable_part"]


class _UnreadableError(Exception):
    """The value of a field cannot be read."""


def readable_part(value: object) -> Description:
    """A description of the value's readable fields and the defaults; the others are absent attributes."""
    part = _group(Description, value if isinstance(value, Mapping) else {})
    assert isinstance(part, Description)
    return part


def _group(group: type[Options], value: Mapping[Any, Any]) -> Options:
    """A group with the fields that can be read."""
    found: dict[str, Any] = {}
    for name, field in group.model_fields.items():
        given = value.get(name, None if field.is_required() else field.default)
        try:
            found[name] = _value(target(field), given, field.annotation)
        except _UnreadableError:
            continue
    part = group.model_construct(**found)
    for name in set(part.__dict__) - set(found):
        del part.__dict__[name]
    return part


def _value(here: Kind | OneOf | type[Options] | None, given: object, annotation: object) -> object:
    """The value of one field; raises _UnreadableError."""
    if given is None and type(None) in get_args(annotation):
        return None
    if here is None:
        return given
    if isinstance(here, Kind):
        try:
            return here.read(given)
        except FieldError:
            raise _UnreadableError from None
    if not isinstance(given, Mapping):
        raise _UnreadableError
    if isinstance(here, OneOf):
        kind = here.kinds.get(str(given.get(here.by)))
        if kind is None:
            raise _UnreadableError
        return _group(kind, given)
    return _group(here, given)
