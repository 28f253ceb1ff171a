"""The part of a faulty description that can be read, so that the rules across fields can still be asked."""

from __future__ import annotations

from collections.abc import Mapping
from functools import lru_cache
from typing import Annotated, Any, get_args

from pydantic import TypeAdapter, ValidationError

from shedbim.description.models import Description
from shedbim.description.paths import target
from shedbim.fields import Kind, OneOf, Options

__all__ = ["readable_part"]


class _Nothing(Exception):
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
        except _Nothing:
            continue
    part = group.model_construct(**found)
    for name in set(part.__dict__) - set(found):
        del part.__dict__[name]
    return part


def _value(here: Kind | OneOf | type[Options] | None, given: object, annotation: object) -> object:
    """The value of one field; raises _Nothing."""
    if given is None and type(None) in get_args(annotation):
        return None
    if here is None:
        return given
    if isinstance(here, Kind):
        try:
            return _adapter(here).validate_python(given)
        except ValidationError:
            raise _Nothing from None
    if not isinstance(given, Mapping):
        raise _Nothing
    if isinstance(here, OneOf):
        kind = here.kinds.get(str(given.get(here.by)))
        if kind is None:
            raise _Nothing
        return _group(kind, given)
    return _group(here, given)


@lru_cache(maxsize=256)
def _adapter(kind: Kind) -> TypeAdapter[Any]:
    return TypeAdapter(Annotated[object, kind])
