"""Files written whole or not at all: in a work folder first, then all of them put into place.

A run holds the folder by a lock (``folder_lock``), makes its files in a hidden work folder (``work``), and puts
them into place in one step where the system can exchange two folders (``exchange``), else one by one
(``moving``). A run that fails changes nothing. What a killed run leaves behind is hidden, blocks nothing, and
is finished or cleared away by the next run on the folder.
"""

from __future__ import annotations

import os
from collections.abc import Callable, Iterator, Mapping
from contextlib import contextmanager, suppress
from pathlib import Path
from typing import BinaryIO

from shedbim.errors import OutputError
from shedbim.saving.exchange import exchanged, prepared
from shedbim.saving.folder_lock import locked
from shedbim.saving.moving import mended, moved, settle
from shedbim.saving.refusals import told_of
from shedbim.saving.work import Work, made_inside, sync

__all__ = ["save", "save_new"]

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
        OutputError: when a file cannot be written, or another run holds the folder; nothing is changed then.
    """
    folder = Path(folder)
    real = Path(os.path.realpath(folder))
    with told_of(folder), _made(real), locked(real):
        mended(real)
        for name in writers:
            if (real / name).is_dir():
                raise OutputError(f"cannot write {folder / name}: there is a folder of that name")
        # A single file is put into place by one rename, so the folder itself can stay as it is.
        work = (prepared(real) if len(writers) > 1 else None) or made_inside(real)
        try:
            _write(work, writers, progress)
            _put(work, real, tuple(writers))
        finally:
            with suppress(OSError):
                settle(work, real)
    return tuple(folder / name for name in writers)


def save_new(path: Path, text: str) -> None:
    """Write a text as UTF-8 into a file that is not there yet, making the folders above it.

    Raises:
        OutputError: when something of that name is there, or the file cannot be written.
    """
    data = text.encode()
    if path.exists():
        raise OutputError(f"cannot write {path}: it is there already, and is left as it is")
    save(path.parent, {path.name: lambda sink: sink.write(data)})


def _write(
    work: Work, writers: Mapping[str, Write], progress: Callable[[str, int, int], None] | None
) -> None:
    """Write all files into the work folder, down to the disk."""
    for done, (name, write) in enumerate(writers.items()):
        if progress is not None:
            progress(name, done, len(writers))
        with (work.new / name).open("wb") as sink:
            write(sink)
            sink.flush()
            os.fsync(sink.fileno())


def _put(work: Work, folder: Path, names: tuple[str, ...]) -> None:
    """Put the files that are whole into place."""
    if len(names) == 1:
        os.replace(work.new / names[0], folder / names[0])
        sync(folder)
    elif not exchanged(work, folder, names):
        moved(work, folder, names)


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
