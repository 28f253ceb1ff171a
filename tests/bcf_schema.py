"""Files of topics held against the published schemas of BCF-XML 2.1 and 3.0, as the library bcf-client carries them.

Its classes are made from the schemas of buildingSMART by a generator, field by field: names, order, how often an
element may come, patterns, lengths and bounds. They are read here and every document is compared with them; the schemas
themselves are not copied into this repository.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import fields, is_dataclass
from types import UnionType
from typing import Any, Union, get_args, get_origin, get_type_hints
from xml.etree import ElementTree

import bcf.v2.model as model_21
import bcf.v3.model as model_30
from xsdata.models.datatype import XmlDateTime

__all__ = ["ROOTS", "faults"]

Element = ElementTree.Element

#: The class of each file's root by version and name; the schema of words of 2.1 is a schema, not a document.
ROOTS: dict[str, dict[str, type]] = {
    "2.1": {
        "bcf.version": model_21.Version,
        "project.bcfp": model_21.ProjectExtension,
        "markup.bcf": model_21.Markup,
        "viewpoint.bcfv": model_21.VisualizationInfo,
    },
    "3.0": {
        "bcf.version": model_30.Version,
        "project.bcfp": model_30.ProjectInfo,
        "extensions.xml": model_30.Extensions,
        "markup.bcf": model_30.Markup,
        "viewpoint.bcfv": model_30.VisualizationInfo,
    },
}


def faults(data: bytes, kind: type) -> list[str]:
    """What a document breaks of its schema."""
    root = ElementTree.fromstring(data)
    found = [] if root.tag == kind.__name__ else [f"the root is {root.tag}"]
    return found + list(_element(root, kind, root.tag))


def _element(node: Element, kind: type, path: str) -> Iterator[str]:
    """Faults of an element of a class and of all in it."""
    hints = get_type_hints(kind)
    rows = {each.metadata["name"]: each for each in fields(kind)}
    inner = [name for name, each in rows.items() if each.metadata["type"] == "Element"]
    for name in node.attrib:
        if name not in rows or name in inner:
            yield f"{path}: no attribute {name}"
    if (node.text or "").strip():
        yield f"{path}: text between elements"
    tags = [child.tag for child in node]
    yield from (f"{path}: no element {tag}" for tag in tags if tag not in inner)
    places = [inner.index(tag) for tag in tags if tag in inner]
    if places != sorted(places):
        yield f"{path}: elements in the order {tags}"
    for name, each in rows.items():
        several, bare = _bare(hints[each.name])
        rule = dict(each.metadata)
        if name not in inner:
            if name in node.attrib:
                yield from _value(node.attrib[name], bare, rule, f"{path}/@{name}")
            elif rule.get("required"):
                yield f"{path}: no @{name}"
            continue
        children = node.findall(name)
        least = rule.get("min_occurs", 1 if rule.get("required") else 0)
        if len(children) < least or (len(children) > 1 and not several):
            yield f"{path}: {len(children)} of {name}"
        for child in children:
            if is_dataclass(bare):
                yield from _element(child, bare, f"{path}/{name}")
            else:
                yield from _value(child.text or "", bare, rule, f"{path}/{name}")
                yield from (f"{path}/{name}: {inside.tag} in a value" for inside in child)


def _bare(hint: Any) -> tuple[bool, Any]:
    """Whether there may be several, and the type of one."""
    if get_origin(hint) is list:
        return True, get_args(hint)[0]
    if get_origin(hint) in (Union, UnionType):
        return False, next(each for each in get_args(hint) if each is not type(None))
    return False, hint


def _value(text: str, kind: Any, rule: dict[str, Any], path: str) -> Iterator[str]:
    """Faults of a simple value."""
    if rule.get("white_space") == "collapse":
        text = " ".join(text.split())
    if len(text) < rule.get("min_length", 0) or len(text) != rule.get("length", len(text)):
        yield f"{path}: {len(text)} characters"
    if "pattern" in rule and not re.fullmatch(rule["pattern"], text):
        yield f"{path}: {text!r} against {rule['pattern']}"
    try:
        if kind is XmlDateTime:
            XmlDateTime.from_string(text)
        elif kind is bool:
            assert text in ("true", "false", "0", "1"), text
        elif kind in (int, float):
            number = kind(text)
            assert number >= rule.get("min_inclusive", number), text
            assert number <= rule.get("max_inclusive", number), text
            assert "min_exclusive" not in rule or number > rule["min_exclusive"], text
            assert "max_exclusive" not in rule or number < rule["max_exclusive"], text
    except (ValueError, AssertionError) as error:
        yield f"{path}: {error}"
