"""A model file while it is written: it numbers the entities, checks them and streams their text."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from itertools import chain, islice, repeat
from typing import BinaryIO

from shedbim.model.identity import global_ids
from shedbim.writers.ifc.schema import Schema
from shedbim.writers.ifc.text import NONE, quoted

__all__ = ["BETWEEN", "SLOT", "StepFile", "numbered"]

#: Stands in a template where each line has a text of its own; no escaped string holds it.
SLOT = "\0"

#: Stands between the texts of a stable name made of several; no key or mark holds it.
BETWEEN = "\x1f"

_CHUNK = 4000  # lines held before they go to the sink


def numbered(first: int, count: int) -> list[str]:
    """Give ``count`` numbers from ``first`` on as texts."""
    return [str(number) for number in range(first, first + count)]


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

    def write(self, lines: Sequence[str]) -> None:
        """Write finished lines, each with its own line end."""
        self._lines += lines
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

    def template(self, entity: str, *slots: str, **given: str) -> str:
        """Give a line that is to be written many times, with ``SLOT`` where the lines differ.

        Args:
            entity: name as the schema spells it.
            slots: attributes that are nothing but a slot.
            given: attribute name to its text, which may hold slots. The first slot of a line is the entity's
                own number, the others follow in the schema's order; the owner of rooted entities is filled in.
        """
        texts = given | dict.fromkeys(slots, SLOT)
        if "GlobalId" in texts:
            texts["OwnerHistory"] = self.owner
        return f"#{SLOT}={self.schema.text(entity, texts)};\n"

    def fill(self, template: str, *columns: Iterable[str]) -> None:
        """Write a template once for each row of ``columns``, of which there is one for each slot."""
        first, *between = template.split(SLOT)
        # Text and columns take turns; joining them all at once is the fastest way to fill a template.
        turns: list[Iterable[str]] = [repeat(first)]
        for column, text in zip(columns, between, strict=True):
            turns += [column, repeat(text)]
        rows = zip(*turns)  # noqa: B905 - the constant texts never end
        while chunk := "".join(chain.from_iterable(islice(rows, _CHUNK))):
            self.write([chunk])
            self.flush()
