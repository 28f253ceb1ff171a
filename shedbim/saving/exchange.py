"""A folder exchanged for a new one in a single step of the file system, with all else that it holds kept.

The new folder gets a second name (a hard link) of every other file in the old one, so that the files of the user
are in both, and then both folders change places. Who looks into the folder at any moment, also right after
the run was killed, finds all old files or all new ones.
"""

from __future__ import annotations

import os
import shutil
import sys
from collections.abc import Collection
from contextlib import suppress
from dataclasses import dataclass
from pathlib import Path

from shedbim.saving.folder_lock import LOCK
from shedbim.saving.work import PREFIX, Record, Work, made_beside, sync

__all__ = ["carry", "exchanged", "prepared"]

_MOST_KEPT = 1000  # other files and folders: beyond that it is a folder of other work, not one of outputs
_HERE = -100  # AT_FDCWD of linux/fcntl.h
_EXCHANGE = 2  # RENAME_EXCHANGE of linux/fs.h


class _NotKept(OSError):
    """Raised when something in the folder cannot be kept by a second name."""


def prepared(folder: Path) -> Work | None:
    """A work folder from which the folder can be exchanged; None where that cannot be."""
    if sys.platform != "linux" or not folder.name or _stands_in(folder):
        return None
    try:
        work = made_beside(folder)
    except OSError:  # the folder around it is closed to us, or another file system
        return None
    try:
        os.link(folder / LOCK, work.new / LOCK)  # fails where a mount lies between them
    except OSError:
        shutil.rmtree(work.place, ignore_errors=True)
        return None
    return work


def exchanged(work: Work, folder: Path, names: Collection[str]) -> bool:
    """Exchange the folder for the work folder's new one; False, with nothing changed, where that cannot be."""
    if not (work.new / LOCK).exists():
        return False
    try:
        carry(work, folder, work.new, names, over=True)
        work.write_record(Record(tuple(names), work.new.stat().st_ino))
    except OSError:
        return False
    sync(work.new)
    if not _exchange(work.new, folder):
        work.drop_record()
        return False
    sync(folder.parent)
    with suppress(
        OSError
    ):  # what came into the old folder in between; it is tried again when all is cleared up
        carry(work, work.new, folder, names, over=True)
    return True


def carry(work: Work, source: Path, target: Path, but: Collection[str] = (), *, over: bool) -> None:
    """Give everything in ``source`` a second name in ``target``.

    Args:
        work: where a name is made before it takes the place of another.
        but: names in the folder itself that are left out.
        over: whether another file of that name in ``target`` gives way; it stays otherwise.

    Raises:
        OSError: when something cannot be kept so.
    """
    _Carrier(work.place / "draft", over).take(source, target, but)


@dataclass
class _Carrier:
    """Carries folders, and counts what it has met so far."""

    draft: Path
    over: bool
    met: int = 0

    def take(self, source: Path, target: Path, but: Collection[str]) -> None:
        """Carry one folder and those in it."""
        with os.scandir(source) as entries:
            for entry in entries:
                if entry.name not in but:
                    self._take(entry, target / entry.name)
        _dress(source, target)

    def _take(self, entry: os.DirEntry[str], twin: Path) -> None:
        """Carry one entry of a folder."""
        if entry.name.startswith(PREFIX) and entry.name != LOCK:
            raise _NotKept(f"{entry.path} belongs to another run")
        self.met += 1
        if self.met > _MOST_KEPT:
            raise _NotKept(f"more than {_MOST_KEPT} other files in the folder")
        if entry.is_dir(follow_symlinks=False):
            twin.mkdir(exist_ok=True)
            self.take(Path(entry.path), twin, ())
        else:
            self._link(Path(entry.path), twin)

    def _link(self, one: Path, twin: Path) -> None:
        """Give a file a second name."""
        try:
            os.link(one, twin, follow_symlinks=False)
        except FileExistsError:
            if self.over and not os.path.samestat(one.lstat(), twin.lstat()):
                self.draft.unlink(missing_ok=True)
                os.link(one, self.draft, follow_symlinks=False)
                self.draft.replace(twin)


def _dress(source: Path, target: Path) -> None:
    """Give a folder the rights, times and owner of another."""
    shutil.copystat(source, target)
    if sys.platform != "win32":
        wanted, made = source.stat(), target.stat()
        if (wanted.st_uid, wanted.st_gid) != (made.st_uid, made.st_gid):
            os.chown(target, wanted.st_uid, wanted.st_gid)


def _stands_in(folder: Path) -> bool:
    """Whether this process, and so the shell it was started from, stands in the folder: it must stay the same."""
    try:
        return Path.cwd().is_relative_to(folder)
    except OSError:
        return False


def _exchange(one: Path, other: Path) -> bool:
    """Have two folders change places in one step; say whether the system could."""
    from ctypes import CDLL, c_char_p, c_int, c_uint  # noqa: PLC0415 - only when a folder is exchanged

    call = getattr(CDLL(None, use_errno=True), "renameat2", None)
    if call is None:
        return False
    call.argtypes = (c_int, c_char_p, c_int, c_char_p, c_uint)
    return bool(call(_HERE, os.fsencode(one), _HERE, os.fsencode(other), _EXCHANGE) == 0)
