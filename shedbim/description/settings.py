"""Fields set for one run over those of the file: ``building.roof.pitch=8 deg``, laid over the tree of the text.

The path is written as faults show it, items of a list counted from 0 as they are written there; the value is
written as in the file. It may be a list in brackets or a group in braces.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

from shedbim.description.nodes import DEEPEST, Node, Tree, node_tree
from shedbim.description.paths import Step, shown_path, steps
from shedbim.description.source import MOST_BYTES, checked_text, printable
from shedbim.errors import DescriptionError, Fault

__all__ = ["MOST_SETTINGS", "with_settings"]

#: More settings than these are another description.
MOST_SETTINGS = 200

_PATH = re.compile(r"[a-z_][a-z0-9_]*(?:\.[a-z_][a-z0-9_]*|\[[0-9]{1,4}\])*", re.IGNORECASE)
_LINE_BREAK = re.compile(r"[\n\r\x85\u2028\u2029]")
_ALLOWED = "a field, then = and its value, such as building.roof.pitch=8 deg or building.bays[2]=6 m"


@dataclass(frozen=True)
class _Setting:
    """One field with its new value, and the place that its faults carry."""

    path: tuple[Step, ...]
    value: Node
    place: str


class _Misfit(Exception):
    """Raised when the path leads through something that has no fields or no such item."""

    def __init__(self, message: str, path: Sequence[Step], allowed: str) -> None:
        self.message, self.path, self.allowed = message, path, allowed
        super().__init__(message)


def with_settings(tree: Tree, settings: Sequence[str]) -> Tree:
    """The tree with fields set anew, each as ``path=value``, one after the other; the tree given stays as it is.

    A setting that cannot be laid over the tree is a fault of the new one, with ``--set path`` as its place.
    Whether there is such a field, and whether it takes the value, is for the models to say, as of the file.
    """
    root, faults = tree.root, list(tree.faults)
    try:
        _checked_size(settings)
        for setting in _read(settings, faults):
            try:
                root = _put(root, setting, 0)
            except _Misfit as misfit:
                field = shown_path(misfit.path)
                faults.append(Fault(misfit.message, field, allowed=misfit.allowed, file=setting.place))
    except DescriptionError as error:
        faults += error.faults
    return Tree(root, faults)


def _checked_size(settings: Sequence[str]) -> None:
    """Raise DescriptionError for settings that are too many or too long."""
    size = sum(len(text) for text in settings)
    if len(settings) > MOST_SETTINGS or size > MOST_BYTES:
        message = f"{len(settings)} settings of {size} letters in all"
        allowed = f"at most {MOST_SETTINGS} settings of {MOST_BYTES // 1024} KiB in all"
        raise DescriptionError([Fault(message, allowed=allowed, file="--set")])


def _read(settings: Sequence[str], faults: list[Fault]) -> Iterator[_Setting]:
    """The settings that can be read; the faults of the others are noted."""
    seen: set[tuple[Step, ...]] = set()
    for text in settings:
        name, sign, value = (part.strip() for part in text.partition("="))
        shown = printable(name, 80)
        place = f"--set {shown}"
        if not sign or not _PATH.fullmatch(name):
            what = "not the path of a field" if sign else "no value: there is no = in it"
            faults.append(Fault(what, given=printable(text, 80), allowed=_ALLOWED, file=place))
            continue
        path = steps(name)
        wrong = _wrong(path, value, seen)
        if wrong:
            faults.append(Fault(wrong, shown, printable(value, 80), _ALLOWED, file=place))
            continue
        seen.add(path)
        try:
            read = node_tree(checked_text(value, place), place)
        except DescriptionError as error:
            faults += [replace(fault, field=shown) for fault in error.faults]
            continue
        faults += [replace(fault, field=shown) for fault in read.faults]
        yield _Setting(path, _from(read.root, place), place)


def _wrong(path: tuple[Step, ...], value: str, seen: set[tuple[Step, ...]]) -> str:
    """What is wrong with a setting before its value is read; empty where nothing is."""
    if path in seen:
        return "set twice"
    if len(path) > DEEPEST:
        return f"nested more than {DEEPEST} deep"
    if not value:
        return "nothing is given after ="
    return "a line break in the value" if _LINE_BREAK.search(value) else ""


def _from(node: Node, place: str) -> Node:
    """The node and all in it, said to come from a place."""
    fields, items = node.fields, node.items
    return replace(
        node,
        fields=None if fields is None else {key: _from(each, place) for key, each in fields.items()},
        items=None if items is None else [_from(each, place) for each in items],
        file=place,
    )


def _put(node: Node | None, setting: _Setting, depth: int) -> Node:
    """The node with the value of the setting in it; ``depth`` steps of the path lead to the node."""
    path, place = setting.path, setting.place
    if depth == len(path):
        return replace(setting.value, line=0, column=0, key_line=0, key_column=0)
    if node is None:
        node = Node(0, 0, fields={}, file=place)
    step = path[depth]
    if isinstance(step, int):
        return _put_item(node, setting, depth, step)
    if node.items is not None or node.scalar is not None:
        raise _Misfit("a value or a list, which has no fields", path[:depth], _ALLOWED)
    fields = dict(node.fields or {})
    fields[step] = _put(fields.get(step), setting, depth + 1)
    return replace(node, fields=fields)


def _put_item(node: Node, setting: _Setting, depth: int, step: int) -> Node:
    """A list with the value of the setting in one of its items."""
    items, around = list(node.items or ()), setting.path[:depth]
    if step >= len(items):
        shown = shown_path(around)
        allowed = f"{shown}[0] to {shown}[{len(items) - 1}]" if items else f"a whole list: {shown}=[...]"
        message = f"no item {step}: there are {len(items)}, counted from 0" if items else "not a list"
        raise _Misfit(message, (*around, step), allowed)
    items[step] = _put(items[step], setting, depth + 1)
    return replace(node, items=items)
