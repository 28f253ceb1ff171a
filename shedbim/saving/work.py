"""The work folder of a run: where new files are made whole, and the record of what is to become of them."""

from __future__ import annotations

import json
import os
import re
import tempfile
from collections.abc import Iterator
from contextlib import suppress
from dataclasses import dataclass
from pathlib import Path

__all__ = ["PREFIX", "Record", "Work", "left_behind", "made_beside", "made_inside", "sync"]

#: How the names of all hidden files and folders of a run begin.
PREFIX = ".shedbim-"

_RANDOM = re.compile(r"[a-z0-9_]{8}")  # as the library ends the names of the folders it makes
_PLAIN_NAME = re.compile(r"(?!\.\.?$)[^/\\\0]{1,255}")


@dataclass(frozen=True)
class Record:
    """What a run has settled on, so that a later one can finish it.

    Attributes:
        names: the new files.
        inode: the number of the new folder in the file system, 0 where files are moved one by one.
    """

    names: tuple[str, ...] = ()
    inode: int = 0


@dataclass(frozen=True)
class Work:
    """A work folder on the file system of the target: new files, those they replace, and the record."""

    place: Path

    @property
    def new(self) -> Path:
        """The folder of the new files."""
        return self.place / "new"

    @property
    def old(self) -> Path:
        """The folder of the files that are being replaced."""
        return self.place / "old"

    @property
    def _file(self) -> Path:
        return self.place / "record.json"

    def write_record(self, record: Record) -> None:
        """Write the record, whole or not at all."""
        draft = self.place / "draft.json"
        with draft.open("w", encoding="utf-8") as sink:
            json.dump({"names": record.names, "inode": record.inode}, sink)
            sink.flush()
            os.fsync(sink.fileno())
        draft.replace(self._file)
        sync(self.place)

    def read_record(self) -> Record | None:
        """The record; None where there is none, or none that this program wrote."""
        try:
            data = json.loads(self._file.read_text(encoding="utf-8"))
            names, inode = tuple(data["names"]), data["inode"]
        except (OSError, ValueError, LookupError, TypeError):
            return None
        plain = all(isinstance(name, str) and _PLAIN_NAME.fullmatch(name) for name in names)
        return Record(names, inode) if plain and isinstance(inode, int) else None

    def drop_record(self) -> None:
        """Take the record away."""
        self._file.unlink(missing_ok=True)


def made_inside(folder: Path) -> Work:
    """A new work folder inside the target folder."""
    return _made(PREFIX, folder)


def made_beside(folder: Path) -> Work:
    """A new work folder next to the target folder, named after it."""
    return _made(f"{PREFIX}{folder.name}-", folder.parent)


def _made(prefix: str, place: Path) -> Work:
    work = Work(Path(tempfile.mkdtemp(prefix=prefix, dir=place)))
    work.new.mkdir()
    work.old.mkdir()
    return work


def left_behind(folder: Path) -> Iterator[Work]:
    """The work folders of a target folder, inside it and next to it; while it is locked they are dead runs'."""
    for place, start in ((folder, PREFIX), (folder.parent, f"{PREFIX}{folder.name}-")):
        with suppress(OSError):
            for entry in sorted(os.scandir(place), key=lambda entry: entry.name):
                rest = entry.name.removeprefix(start)
                if rest != entry.name and _RANDOM.fullmatch(rest) and entry.is_dir(follow_symlinks=False):
                    yield Work(Path(entry.path))


def sync(folder: Path) -> None:
    """Have the names in a folder written to disk, on systems that can."""
    with suppress(OSError):
        handle = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(handle)
        finally:
            os.close(handle)
