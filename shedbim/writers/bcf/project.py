"""The files at the root of a file of topics: its version, its project, and the words that topics use."""

from __future__ import annotations

from collections.abc import Iterable

from shedbim.model.identity import namespace
from shedbim.model.shed import ProjectInfo
from shedbim.writers.bcf.topics import CHANGE, LABELS, PRIORITIES, STATES, TYPES, Topic
from shedbim.writers.bcf.xml import Element, document, element, line

__all__ = ["root_21", "root_30"]

#: The words that topics use, by the element of version 3.0 that lists them and the one in it. No users are listed:
#: whoever works on a topic may be anyone.
_WORDS: tuple[tuple[str, str, tuple[str, ...]], ...] = (
    ("TopicTypes", "TopicType", (*TYPES.values(), CHANGE)),
    ("TopicStatuses", "TopicStatus", STATES),
    ("Priorities", "Priority", tuple(PRIORITIES.values())),
    ("TopicLabels", "TopicLabel", LABELS),
    ("Users", "User", ()),
    ("SnippetTypes", "SnippetType", ()),
    ("Stages", "Stage", ()),
)


def root_21(project: ProjectInfo, topics: Iterable[Topic]) -> dict[str, bytes]:
    """Give the files of version 2.1 by name; the words are those that findings use, and those of the topics."""
    version = element("Version", [element("DetailedVersion", "2.1")], VersionId="2.1")
    told = element("ProjectExtension", [_project(project), element("ExtensionSchema", "extensions.xsd")])
    return {
        "bcf.version": document(version),
        "project.bcfp": document(told),
        "extensions.xsd": document(_extensions_21(topics)),
    }


def root_30(project: ProjectInfo, topics: Iterable[Topic]) -> dict[str, bytes]:
    """Give the files of version 3.0 by name; see ``root_21``."""
    extensions = [
        element(group, [element(tag, word) for word in words]) for group, tag, words in _words(topics)
    ]
    return {
        "bcf.version": document(element("Version", VersionId="3.0")),
        "project.bcfp": document(element("ProjectInfo", [_project(project)])),
        "extensions.xml": document(element("Extensions", extensions)),
    }


def _words(topics: Iterable[Topic]) -> list[tuple[str, str, tuple[str, ...]]]:
    """The words, with the labels of topics that no finding has."""
    labels = dict.fromkeys((*LABELS, *(label for topic in topics for label in topic.labels)))
    return [(group, tag, tuple(labels) if tag == "TopicLabel" else words) for group, tag, words in _WORDS]


def _project(project: ProjectInfo) -> Element:
    """The project: its id as a UUID, and its name where it has one."""
    name = line(project.name)
    return element("Project", [element("Name", name)] if name else [], ProjectId=str(namespace(project.id)))


def _extensions_21(topics: Iterable[Topic]) -> Element:
    """The words as a schema that narrows the types of the standard's markup schema."""
    types = [
        element(
            "xs:simpleType",
            [
                element(
                    "xs:restriction",
                    [element("xs:enumeration", value=word) for word in words],
                    base=tag,
                )
            ],
            name=tag,
        )
        for _, tag, words in _words(topics)
        if words
    ]
    return element(
        "xs:schema",
        [element("xs:redefine", types, schemaLocation="markup.xsd")],
        **{"xmlns:xs": "http://www.w3.org/2001/XMLSchema"},
    )
