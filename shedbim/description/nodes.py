"""The tree of a description text: groups, lists and scalars, each with its line and column.

YAML 1.2 without the parts that make a text mean something else than it shows: doubled keys, anchors,
aliases, merge keys, tags, directives and further documents are faults. Depth and size are bounded while the
text is read, so that no text costs more than its length.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any, NamedTuple

from ruamel.yaml import YAML
from ruamel.yaml.error import MarkedYAMLError, YAMLError
from ruamel.yaml.events import (
    AliasEvent,
    DocumentStartEvent,
    Event,
    MappingEndEvent,
    MappingStartEvent,
    ScalarEvent,
    SequenceEndEvent,
    SequenceStartEvent,
)

from shedbim.description.source import printable
from shedbim.errors import DescriptionError, Fault

__all__ = ["DEEPEST", "MOST_NODES", "Node", "Tree", "node_tree"]

DEEPEST = 16
MOST_NODES = 20_000
_NULLS = {"", "~", "null", "Null", "NULL"}  # YAML 1.2 core schema, section 10.3.2
_MOST_FAULTS = 100


@dataclass
class Node:
    """One value of the text.

    Attributes:
        line, column: where the value begins, from 1.
        scalar: the text of a scalar, None for an empty one and for groups and lists.
        fields: the fields of a group with their keys in the order of the text, or None.
        items: the items of a list, or None.
        key_line, key_column: where its key begins; as the value where it has none.
        broken: the value cannot be known, and its fault is already noted.
        file: what its faults name as their file, where that is not the file of the text.
    """

    line: int
    column: int
    scalar: str | None = None
    fields: dict[str, Node] | None = None
    items: list[Node] | None = None
    key_line: int = 0
    key_column: int = 0
    broken: bool = False
    file: str = ""

    @property
    def value(self) -> Any:
        """The value as dict, list, str or None; scalars stay text, so that each field reads its own."""
        if self.fields is not None:
            return {key: node.value for key, node in self.fields.items()}
        if self.items is not None:
            return [node.value for node in self.items]
        return self.scalar

    def reach(self, path: Sequence[str | int]) -> tuple[Node, bool]:
        """The last node that there is on the path, and whether it is the end of the path."""
        node = self
        for step in path:
            below = node.child(step)
            if below is None:
                return node, False
            node = below
        return node, True

    def child(self, step: str | int) -> Node | None:
        """The field or the item of that name or number."""
        if isinstance(step, str):
            return None if self.fields is None else self.fields.get(step)
        return self.items[step] if self.items is not None and 0 <= step < len(self.items) else None

    @property
    def shown(self) -> str:
        """The value as a short text for messages; nothing for groups."""
        if self.items is not None:
            return printable(f"[{', '.join(item.shown or '...' for item in self.items[:20])}]", 80)
        return printable(self.scalar or "", 80)


@dataclass
class Tree:
    """The root of a text and the faults found in building it."""

    root: Node
    faults: list[Fault] = field(default_factory=list)


def node_tree(text: str, file: str) -> Tree:
    """The tree of a checked text.

    Raises DescriptionError where the text is no YAML at all, too deep or too large; what can be passed over
    (doubled keys, anchors and the like) is noted as faults of the tree.
    """
    builder = _Builder(file)
    try:
        for event in YAML(typ="safe", pure=True).parse(text):
            builder.take(event)
            if builder.documents > 1:
                break
    except MarkedYAMLError as error:
        mark = error.problem_mark or error.context_mark
        line, column = (mark.line + 1, mark.column + 1) if mark else (0, 0)
        raise builder.stop(f"not readable as YAML: {_plain(error)}", line, column) from None
    except (YAMLError, ValueError, OverflowError) as error:
        raise builder.stop(
            f"not readable as YAML from here on: {printable(str(error))}", *builder.last
        ) from None
    if builder.root is None:
        raise builder.stop("the text is empty", 0, 0)
    return Tree(builder.root, builder.faults)


def _plain(error: MarkedYAMLError) -> str:
    """The parser's own words on one line."""
    words = [part.strip() for part in (error.context, error.problem) if part]
    return printable(", ".join(" ".join(part.split()) for part in words))


_NodeEvent = ScalarEvent | AliasEvent | MappingStartEvent | SequenceStartEvent


class _Key(NamedTuple):
    name: str
    line: int
    column: int


class _Builder:
    """Builds the tree from the parser's events, one by one."""

    def __init__(self, file: str) -> None:
        self.file = file
        self.root: Node | None = None
        self.faults: list[Fault] = []
        self._open: list[Node] = []
        self._keys: list[_Key | None] = []
        self.last = (0, 0)
        self._count = 0
        self.documents = 0

    def take(self, event: Event) -> None:
        """Takes the next event."""
        self.last = _place(event)
        if isinstance(event, DocumentStartEvent):
            self._document(event)
        elif isinstance(event, _NodeEvent):
            self._count += 1
            line, column = _place(event)
            if self._count > MOST_NODES:
                raise self.stop(f"more than {MOST_NODES} values and keys", line, column)
            if isinstance(event, MappingStartEvent | SequenceStartEvent) and len(self._open) >= DEEPEST:
                raise self.stop(f"nested more than {DEEPEST} deep", line, column)
            self._begin(event, line, column)
        elif isinstance(event, MappingEndEvent | SequenceEndEvent):
            self._open.pop()
            self._keys.pop()

    def _document(self, event: DocumentStartEvent) -> None:
        self.documents += 1
        line, column = _place(event)
        if self.documents > 1:
            self._note("a second document in one file", line, column, allowed="one document without ---")
        if event.version not in {None, (1, 2)} or event.tags:
            self._note(
                "a directive other than %YAML 1.2", line, column, allowed="YAML 1.2 without directives"
            )

    def _begin(self, event: _NodeEvent, line: int, column: int) -> None:
        """A new key or value."""
        parent = self._open[-1] if self._open else None
        is_key = parent is not None and parent.fields is not None and self._keys[-1] is None
        self._refuse_references(event, line, column)
        if is_key and isinstance(event, ScalarEvent):
            self._keys[-1] = _Key(str(event.value), line, column)
            return
        node = self._node(event, line, column)
        if is_key:
            self._note("a key that is no plain text", line, column, allowed="a field name before each colon")
            self._keys[-1] = _Key("", line, column)
        elif parent is None:
            self.root = node
        elif parent.fields is not None:
            self._put(parent.fields, node)
        elif parent.items is not None:
            parent.items.append(node)
        if isinstance(event, MappingStartEvent | SequenceStartEvent):
            self._open.append(node)
            self._keys.append(None)

    def _put(self, fields: dict[str, Node], node: Node) -> None:
        """A field of the group that is open; the first of two equal keys stands."""
        key, self._keys[-1] = self._keys[-1] or _Key("", node.line, node.column), None
        node.key_line, node.key_column = key.line, key.column
        if key.name == "<<":
            self._note("a merge key", key.line, key.column, allowed="each field written out")
        elif key.name in fields:
            message = f"{printable(key.name, 40)!r} is given twice, first in line {fields[key.name].key_line}"
            self._note(message, key.line, key.column, allowed="each field once")
        else:
            fields[key.name] = node

    def _node(self, event: _NodeEvent, line: int, column: int) -> Node:
        """The node of an event, without its place in the tree."""
        node = Node(line, column, key_line=line, key_column=column)
        if isinstance(event, MappingStartEvent):
            node.fields = {}
        elif isinstance(event, SequenceStartEvent):
            node.items = []
        elif isinstance(event, ScalarEvent):
            plain = event.implicit[0]
            is_null = plain and event.value in _NULLS
            node.scalar = None if is_null else str(event.value)
        node.broken = isinstance(event, AliasEvent)
        return node

    def _refuse_references(self, event: _NodeEvent, line: int, column: int) -> None:
        """Notes anchors, aliases and tags."""
        if isinstance(event, AliasEvent):
            self._note("an alias", line, column, given=f"*{event.anchor}", allowed="each value written out")
            return
        if event.anchor:
            self._note("an anchor", line, column, given=f"&{event.anchor}", allowed="each value written out")
        if event.tag:
            self._note("a tag", line, column, given=str(event.tag), allowed="plain values")

    def _note(self, message: str, line: int, column: int, *, given: str = "", allowed: str = "") -> None:
        if len(self.faults) < _MOST_FAULTS:
            self.faults.append(self._fault(message, line, column, given, allowed))

    def _fault(self, message: str, line: int, column: int, given: str = "", allowed: str = "") -> Fault:
        return Fault(message, "", printable(given, 80), allowed, (), self.file, line, column)

    def stop(self, message: str, line: int, column: int) -> DescriptionError:
        """The error that ends the reading, with all faults noted so far."""
        return DescriptionError([*self.faults, self._fault(message, line, column)])


def _place(event: Event) -> tuple[int, int]:
    """Line and column of an event, from 1."""
    return event.start_mark.line + 1, event.start_mark.column + 1
