"""What stands at a place of the description: the kind of field, read off the models."""

from __future__ import annotations

import re
from collections.abc import Sequence
from typing import get_args

from pydantic.fields import FieldInfo

from shedbim.fields import Groups, Kind, OneOf, Options
from shedbim.fields.unions import TAG_SIGN

__all__ = ["Step", "Target", "place_of", "shown_path", "steps", "target"]

Step = str | int

#: A leaf, a group of fields, or a group that is one of several; None where there is no field.
Target = Kind | OneOf | type[Options] | None


def target(field: FieldInfo) -> Target:
    """What a field of a group holds; None for the word that tells kinds apart."""
    for mark in field.metadata:
        if isinstance(mark, Kind | OneOf):
            return mark
    return _within(field.annotation)


def _within(annotation: object) -> Target:
    """The first kind or group inside a type: the inside of ``X | None`` and of ``Annotated``."""
    if isinstance(annotation, Kind | OneOf):
        return annotation
    if isinstance(annotation, type) and issubclass(annotation, Options):
        return annotation
    return next((found for part in get_args(annotation) if (found := _within(part)) is not None), None)


def place_of(root: type[Options], location: Sequence[Step]) -> tuple[tuple[Step, ...], Target, Target]:
    """The path as a user sees it, what stands there, and the group around it.

    ``location`` is that of a model error: it also holds the tags of the kinds it went through.
    """
    path: list[Step] = []
    here: Target = root
    around: Target = None
    for step in location:
        if isinstance(here, OneOf) and isinstance(step, str) and step.startswith(TAG_SIGN):
            here = here.kinds[step.removeprefix(TAG_SIGN)]
            continue
        path.append(step)
        if isinstance(here, Groups) and isinstance(step, int):
            here = here.kind
            continue
        if isinstance(here, type) and isinstance(step, str):
            around = here
            here = target(here.model_fields[step]) if step in here.model_fields else None
    return tuple(path), here, around


def shown_path(path: Sequence[Step]) -> str:
    """The path in one word, for example ``building.bays[2]``."""
    text = ""
    for step in path:
        text += f"[{step}]" if isinstance(step, int) else f".{step}" if text else step
    return text


def steps(shown: str) -> tuple[Step, ...]:
    """The path that ``shown_path`` shows in one word."""
    found = re.findall(r"\[([0-9]+)\]|([^.\[\]]+)", shown)
    return tuple(int(number) if number else name for number, name in found)
