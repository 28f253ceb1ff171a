"""The markup file of a topic: which model it speaks of, the topic itself, its comment and its viewpoint."""

from __future__ import annotations

from collections.abc import Sequence
from uuid import uuid5

from shedbim.writers.bcf.topics import AUTHOR, Topic
from shedbim.writers.bcf.xml import Element, document, element

__all__ = ["MODEL", "SNAPSHOT", "VIEWPOINT", "markup_21", "markup_30"]

#: The model file that the GlobalIds are of; it lies beside the file of topics.
MODEL = "model.ifc"
#: Names of the files beside the markup; version 2.1 asks for these.
VIEWPOINT, SNAPSHOT = "viewpoint.bcfv", "snapshot.png"


def markup_21(topic: Topic, index: int, project: str, model: str = MODEL) -> bytes:
    """Give the markup file in the form of version 2.1.

    Args:
        topic: what it tells.
        index: its place among the topics.
        project: GlobalId of the project in the model file.
        model: name of the model file.
    """
    told = element(
        "Topic",
        [
            element("Title", topic.title),
            element("Priority", topic.priority),
            element("Index", str(index)),
            *(element("Labels", label) for label in topic.labels),
            *_made(topic),
            element("Description", topic.description),
        ],
        **_attributes(topic),
    )
    header = element("Header", _files(topic, model, IfcProject=project, isExternal="true"))
    return document(element("Markup", [header, told, *_comments(topic), *_viewpoints(topic, "Viewpoints")]))


def markup_30(topic: Topic, index: int, project: str, model: str = MODEL) -> bytes:
    """Give the markup file in the form of version 3.0, which has dropped the index; see ``markup_21``."""
    told = [
        element("Title", topic.title),
        element("Priority", topic.priority),
        element("Labels", [element("Label", label) for label in topic.labels]),
        *_made(topic),
        element("Description", topic.description),
        *_group("Comments", _comments(topic)),
        *_group("Viewpoints", _viewpoints(topic, "ViewPoint")),
    ]
    files = element("Files", _files(topic, model, IfcProject=project, IsExternal="true"))
    return document(
        element("Markup", [element("Header", [files]), element("Topic", told, **_attributes(topic))])
    )


def _attributes(topic: Topic) -> dict[str, str]:
    return {"Guid": str(topic.id), "TopicType": topic.kind, "TopicStatus": topic.state}


def _files(topic: Topic, model: str, **attributes: str) -> list[Element]:
    """The model files that the topic speaks of: the shed's own, then those of other trades."""
    own = element("File", [element("Filename", model), element("Date", topic.date)], **attributes)
    return [own, *(element("File", [element("Filename", name)]) for name in topic.files)]


def _made(topic: Topic) -> list[Element]:
    return [element("CreationDate", topic.date), element("CreationAuthor", AUTHOR)]


def _comments(topic: Topic) -> list[Element]:
    """The reason why a finding is waived; nothing while it is open."""
    if not topic.comment:
        return []
    content = [element("Date", topic.date), element("Author", AUTHOR), element("Comment", topic.comment)]
    return [element("Comment", content, Guid=str(uuid5(topic.id, topic.comment)))]


def _group(tag: str, content: Sequence[Element]) -> list[Element]:
    """An element round others; nothing for none."""
    return [element(tag, content)] if content else []


def _viewpoints(topic: Topic, tag: str) -> list[Element]:
    if topic.viewpoint is None:
        return []
    files = [element("Viewpoint", VIEWPOINT)]
    if topic.viewpoint.picture is not None:
        files.append(element("Snapshot", SNAPSHOT))
    return [element(tag, files, Guid=str(topic.viewpoint.id))]
