"""Faults in the words of this program, from the errors of the model library and the tree of the text."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from pydantic import ValidationError
from pydantic_core import ErrorDetails

from shedbim.description.models import Description
from shedbim.description.nodes import Node
from shedbim.description.paths import Step, Target, place_of, shown_path, target
from shedbim.description.source import printable
from shedbim.errors import Fault
from shedbim.fields import FieldError, Kind, OneOf, Options, nearest

__all__ = ["MOST_FAULTS", "Source", "capped", "model_faults"]

#: More faults than these help nobody, and looking for near names takes time.
MOST_FAULTS = 100

_LONGEST_NAME = 60


@dataclass(frozen=True)
class Source:
    """The text that faults are found in: its root node and the name of its file."""

    root: Node
    file: str

    def fault(
        self,
        message: str,
        path: Sequence[Step],
        *,
        given: str = "",
        allowed: str = "",
        near: Sequence[str] = (),
        at_key: bool = False,
    ) -> Fault:
        """A fault at the place of the path in the text, or at the nearest group around it that is there."""
        node, is_there = self.root.reach(path)
        at_value = is_there and not at_key
        line, column = (node.line, node.column) if at_value else (node.key_line, node.key_column)
        shown = given or (node.shown if is_there else "")
        field = printable(shown_path(path))
        return Fault(message, field, shown, allowed, tuple(near), node.file or self.file, line, column)

    def is_broken(self, path: Sequence[Step]) -> bool:
        """Whether a value on the path has a fault of its own already."""
        return any(self.root.reach(path[:length])[0].broken for length in range(len(path) + 1))


def model_faults(error: ValidationError, source: Source) -> list[Fault]:
    """The faults of a text that the models refuse, without those that follow from faults of the tree."""
    details = error.errors(include_url=False, include_input=False)[: 2 * MOST_FAULTS]
    faults = []
    for detail in details:
        path, here, around = place_of(Description, detail["loc"])
        if not source.is_broken(path):
            faults += _faults(detail, path, here, around, source)
    return faults


def capped(faults: Sequence[Fault], file: str) -> list[Fault]:
    """The faults in the order of the text; of very many only the first, and how many more there are."""
    ordered = sorted(faults, key=lambda fault: (fault.line, fault.column))
    if len(ordered) <= MOST_FAULTS:
        return ordered
    more = len(ordered) - MOST_FAULTS
    return [*ordered[:MOST_FAULTS], Fault(f"and at least {more} more faults", file=file)]


def _faults(
    detail: ErrorDetails, path: Sequence[Step], here: Target, around: Target, source: Source
) -> list[Fault]:
    """The faults that one error of the models stands for."""
    kind = detail["type"]
    if kind == "value_error" and isinstance(error := detail["ctx"]["error"], FieldError):
        return [source.fault(error.message, path, allowed=error.allowed, near=error.nearest)]
    if kind == "extra_forbidden":
        names = list(around.model_fields) if isinstance(around, type) else []
        return [_unknown(path, names, source)]
    if kind == "missing":
        return [source.fault("the field is missing", path, allowed=_allowed(here))]
    if (
        isinstance(here, OneOf)
        and kind.startswith("union_tag")
        and source.root.reach(path)[0].fields is not None
    ):
        return [_unnamed(here, path, source), *_inside_unnamed(here, path, source)]
    return [source.fault(_wrong_shape(source, path), path, allowed=_allowed(here))]


def _unknown(path: Sequence[Step], names: Sequence[str], source: Source) -> Fault:
    """The fault of a field that its group does not have."""
    name = str(path[-1])[:_LONGEST_NAME]
    return source.fault(
        "there is no such field here",
        path,
        given=printable(name),
        allowed=", ".join(names),
        near=nearest(name, names),
        at_key=True,
    )


def _unnamed(here: OneOf, path: Sequence[Step], source: Source) -> Fault:
    """The fault of a group that does not say, or not rightly, which of the kinds it is."""
    inner = (*path, here.by)
    word, is_there = source.root.reach(inner)
    if not is_there:
        return source.fault("the field is missing", inner, allowed=here.allowed)
    near = nearest(word.scalar, list(here.kinds)) if word.scalar else ()
    return source.fault("not one of the choices", inner, allowed=here.allowed, near=near)


def _inside_unnamed(here: OneOf, path: Sequence[Step], source: Source) -> list[Fault]:
    """The faults of the other fields of such a group: those that no kind has, and values that none takes."""
    places = {
        name: target(field) for kind in here.kinds.values() for name, field in kind.model_fields.items()
    }
    faults = []
    for name, node in (source.root.reach(path)[0].fields or {}).items():
        inner, kind = (*path, name), places.get(name)
        if name not in places:
            faults.append(_unknown(inner, list(places), source))
        elif isinstance(kind, Kind):
            try:
                kind.read(node.value)
            except FieldError as error:
                faults.append(source.fault(error.message, inner, allowed=error.allowed, near=error.nearest))
    return faults[:MOST_FAULTS]


def _wrong_shape(source: Source, path: Sequence[Step]) -> str:
    """Why a value cannot be a group of fields."""
    node, is_there = source.root.reach(path)
    if not is_there or (node.items is None and node.scalar is None and node.fields is None):
        return "nothing is given here"
    return "a group of fields is wanted here"


def _allowed(here: Target) -> str:
    """What may stand at a place, in words."""
    if here is None:
        return ""
    if isinstance(here, OneOf):
        return f"a group of fields with {here.by}: {here.allowed}"
    if isinstance(here, type):
        return f"a group of fields: {', '.join(_names(here))}"
    return here.allowed


def _names(group: type[Options]) -> list[str]:
    """The names of the fields of a group, the needed ones first."""
    fields = group.model_fields.items()
    return [name for name, field in sorted(fields, key=lambda item: not item[1].is_required())]
