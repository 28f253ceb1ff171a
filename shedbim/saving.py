"""Files written whole or not at all: beside their target first, then moved into place together.

The new files are written into a hidden folder inside the target folder, so that moving them is a rename
on one file system. A run that fails, or is killed while writing, leaves what stood there before; a run
that fails while moving puts it back. What a killed run leaves behind is hidden, blocks nothing, and is
cleared away by a later run once it is a day old.
"""

from __future__ import annotations

import os
import shutil
import tempfile
import time
from collections.abc import Callable, Iterator, Mapping
from contextlib import contextmanager, suppress
from pathlib import Path
from typing import BinaryIO

from shedbim.errors import OutputError

__all__ = ["save"]

_PREFIX = ".shedbim-"
_STALE = 24 * 3600.0  # seconds after which the work folder of a dead run is cleared away

Write = Callable[[BinaryIO], object]


def save(
    folder: Path, writers: Mapping[str, Write], progress: Callable[[str, int, int], None] | None = None
) -> tuple[Path, ...]:
    """Write each named file into ``folder``, which is made when it is not there; give the paths in order.

    Args:
        folder: where the files go.
        writers: for each file name, what writes its bytes to a binary sink.
        progress: called with (file name, files done, files in all) before each file.

    Raises:
        OutputError: when a file cannot be written; nothing is changed then.
    """
    folder = Path(folder)
    with _told_of(folder), _made(folder):
        for name in writers:
            if (folder / name).is_dir():
                raise OutputError(f"cannot write {folder / name}: there is a folder of that name")
        _clear_stale(folder)
        work = Path(tempfile.mkdtemp(prefix=_PREFIX, dir=folder))
        try:
            for done, (name, write) in enumerate(writers.items()):
                if progress is not None:
                    progress(name, done, len(writers))
                with (work / name).open("wb") as sink:
                    write(sink)
            _move(work, folder, tuple(writers))
        finally:
            shutil.rmtree(work, ignore_errors=True)
    return tuple(folder / name for name in writers)


def _move(work: Path, folder: Path, names: tuple[str, ...]) -> None:
    """Move the files in, and back out again when one of them cannot be moved or the run is interrupted."""
    before = work / "before"
    before.mkdir()
    for name in names:
        if (folder / name).exists():
            _keep(folder / name, before / name)
    moved: list[str] = []
    whole = False
    try:
        for name in names:
            moved.append(name)
            os.replace(work / name, folder / name)
        whole = True
    finally:
        if not whole:
            for name in moved:
                _put_back(work / name, before / name, folder / name)


def _put_back(new: Path, old: Path, target: Path) -> None:
    """Undo one move; a file that is still in the work folder never moved."""
    if new.exists():
        return
    with suppress(OSError):
        if old.exists():
            os.replace(old, target)
        else:
            target.unlink()


def _keep(target: Path, old: Path) -> None:
    """Keep what stands at the target under a second name, or as a copy where a file system knows no links."""
    try:
        os.link(target, old)
    except OSError:
        shutil.copy2(target, old)


@contextmanager
def _made(folder: Path) -> Iterator[None]:
    """Make the folder; when the run fails, take away the folders that were made and are still empty."""
    missing = [each for each in (folder, *folder.parents) if not each.exists()]
    folder.mkdir(parents=True, exist_ok=True)
    whole = False
    try:
        yield
        whole = True
    finally:
        if not whole:
            for each in missing:
                with suppress(OSError):
                    each.rmdir()


@contextmanager
def _told_of(folder: Path) -> Iterator[None]:
    """Say what the system refused as an OutputError, in one sentence with the place."""
    try:
        yield
    except FileExistsError as error:
        raise OutputError(f"cannot write into {folder}: it is a file, not a folder") from error
    except OSError as error:
        place = error.filename if isinstance(error.filename, str) else folder
        reason = (error.strerror or str(error)).lower()
        raise OutputError(
            f"cannot write into {folder}: {reason} ({place}); nothing was changed there"
        ) from error


def _clear_stale(folder: Path) -> None:
    """Clear away the work folders of runs that died at least a day ago."""
    oldest = time.time() - _STALE
    for each in folder.glob(f"{_PREFIX}*"):
        with suppress(OSError):
            if max(inner.stat().st_mtime for inner in (each, *each.rglob("*"))) < oldest:
                shutil.rmtree(each, ignore_errors=True)


def save_new(path: Path, text: str) -> None:
    """Write a text as UTF-8 into a file that is not there yet, making the folders above it.

    Raises:
        OutputError: when something of that name is there, or the file cannot be written.
    """
    data = text.encode()
    if path.exists():
        raise OutputError(f"cannot write {path}: it is there already, and is left as it is")
    save(path.parent, {path.name: lambda sink: sink.write(data)})
