"""A model file while it is written: it numbers the entities, checks them and streams their text."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from itertools import islice
from typing import BinaryIO

from shedbim.model.identity import global_ids
from shedbim.writers.ifc.schema import Schema
from shedbim.writers.ifc.text import NONE, quoted

__all__ = ["StepFile"]

_CHUNK = 4000  # lines held before they go to the sink


class StepFile:
    """A stream of numbered entities; references to them are texts such as ``#12``.

    Args:
        sink: where the bytes go.
        schema: the schema that orders and checks the attributes.
        project_id: the scope of the GlobalIds.
        first: the first number given to entities; lower numbers are the caller's to use in ``write``.
    """

    def __init__(self, sink: BinaryIO, schema: Schema, project_id: str, *, first: int = 1) -> None:
        self.schema = schema
        self.owner = NONE
        self._sink = sink
        self._project_id = project_id
        self._next = first
        self._lines: list[str] = []
        self._known: dict[str, str] = {}

    def write(self, lines: Iterable[str]) -> None:
        """Write finished lines, each with its own line end."""
        stream = iter(lines)
        while chunk := list(islice(stream, _CHUNK)):
            self._lines += chunk
            if len(self._lines) >= _CHUNK:
                self.flush()

    def flush(self) -> None:
        """Hand to the sink what is held back."""
        self._sink.write("".join(self._lines).encode("ascii"))
        self._lines.clear()

    def reserve(self, count: int) -> int:
        """Set ``count`` numbers aside and give the first of them."""
        first = self._next
        self._next += count
        return first

    def add(self, entity: str, **given: str) -> str:
        """Write an entity and give its reference; errors as ``Schema.text``."""
        return self._put(self.schema.text(entity, given))

    def share(self, entity: str, **given: str) -> str:
        """Give the reference of an entity with this very text, writing it the first time only."""
        text = self.schema.text(entity, given)
        if text not in self._known:
            self._known[text] = self._put(text)
        return self._known[text]

    def _put(self, text: str) -> str:
        """Write one entity under the next number."""
        reference = f"#{self.reserve(1)}"
        self.write([f"{reference}={text};\n"])
        return reference

    def ids(self, names: Sequence[str]) -> list[str]:
        """Give the GlobalIds of stable names, not yet quoted."""
        return global_ids(self._project_id, names)

    def rooted(self, entity: str, name: str, **given: str) -> str:
        """Write an entity with a GlobalId and an owner; ``name`` is its stable name within the project."""
        return self.add(entity, GlobalId=quoted(self.ids([name])[0]), OwnerHistory=self.owner, **given)

    def template(self, entity: str, slots: Mapping[str, str], **fixed: str) -> str:
        """Give a line of many: a ``%`` format that takes the number, then the slots in the schema's order.

        Args:
            entity: name as the schema spells it.
            slots: attribute name to its own ``%`` format; the owner of rooted entities is filled in.
            fixed: attribute name to the text all lines share.
        """
        given = {name: text.replace("%", "%%") for name, text in fixed.items()} | dict(slots)
        if "GlobalId" in given:
            given["OwnerHistory"] = self.owner
        return f"#%d={self.schema.text(entity, given)};\n"
