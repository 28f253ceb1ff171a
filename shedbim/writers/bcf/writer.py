"""Topics as the bytes of a file: an archive with a folder for each topic, in the form of one version."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from typing import BinaryIO
from zipfile import ZIP_DEFLATED, ZIP_STORED, ZipFile, ZipInfo

from shedbim.model.identity import global_ids
from shedbim.model.shed import ProjectInfo
from shedbim.writers.bcf.markup import MODEL, SNAPSHOT, VIEWPOINT, markup_21, markup_30
from shedbim.writers.bcf.project import root_21, root_30
from shedbim.writers.bcf.topics import Topic, Viewpoint
from shedbim.writers.bcf.viewpoint import visualization_21, visualization_30
from shedbim.writers.handover import Handover

__all__ = ["VERSIONS", "write", "write_topics"]

#: The date of everything in the archive: the earliest it can state. Equal topics give equal bytes.
_DATED = (1980, 1, 1, 0, 0, 0)
#: Rights of files and folders for systems that ask: all may read; a folder is marked as one for both kinds of system.
_FILE, _FOLDER = 0o100644 << 16, 0o040755 << 16 | 0x10
_UNIX = 3


@dataclass(frozen=True)
class _Form:
    """How one version writes the files at the root, the markup of a topic and its viewpoint."""

    root: Callable[[ProjectInfo, Iterable[Topic]], dict[str, bytes]]
    markup: Callable[[Topic, int, str, str], bytes]
    visualization: Callable[[Viewpoint], bytes]


#: Versions of the standard by their numbers.
VERSIONS: dict[str, _Form] = {
    "2.1": _Form(root_21, markup_21, visualization_21),
    "3.0": _Form(root_30, markup_30, visualization_30),
}


def write(handover: Handover, sink: BinaryIO, version: str) -> None:
    """Write the findings as topics to a binary sink.

    Args:
        handover: the shed and its findings; a file without topics where it was not checked.
        sink: takes the bytes.
        version: one of ``VERSIONS``.
    """
    project = handover.shed.project
    (name,) = global_ids(project.id, ["project"])
    write_topics(project, name, handover.topics, sink, version)


def write_topics(
    project: ProjectInfo,
    project_guid: str,
    topics: Sequence[Topic],
    sink: BinaryIO,
    version: str,
    model: str = MODEL,
) -> None:
    """Write topics to a binary sink.

    Args:
        project: what the topics belong to.
        project_guid: GlobalId of the project in the model file.
        topics: in their order.
        sink: takes the bytes.
        version: one of ``VERSIONS``.
        model: name of the model file.
    """
    form = VERSIONS[version]
    with ZipFile(sink, "w") as archive:
        for name, data in form.root(project, topics).items():
            _put(archive, name, data)
        for index, topic in enumerate(topics):
            folder = f"{topic.id}/"
            _put(archive, folder, b"")
            _put(archive, folder + "markup.bcf", form.markup(topic, index, project_guid, model))
            if topic.viewpoint is None:
                continue
            _put(archive, folder + VIEWPOINT, form.visualization(topic.viewpoint))
            if topic.viewpoint.picture is not None:
                _put(archive, folder + SNAPSHOT, topic.viewpoint.picture)


def _put(archive: ZipFile, name: str, data: bytes) -> None:
    """Put a file or, by the slash at its end, a folder into an archive; pictures are compressed already."""
    info = ZipInfo(name, _DATED)
    info.create_system = _UNIX
    info.external_attr = _FOLDER if name.endswith("/") else _FILE
    info.compress_type = ZIP_STORED if name.endswith(("/", ".png")) else ZIP_DEFLATED
    archive.writestr(info, data)
