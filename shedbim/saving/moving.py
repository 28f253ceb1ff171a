"""Files moved one by one where a folder cannot be exchanged: first all old ones out, then all new ones in.

So the files of two builds never lie side by side. A run that is killed on the way leaves some files out, with a
notice in plain sight, and the next run on the folder finishes what it began.
"""

from __future__ import annotations

import os
import shutil
from collections.abc import Collection
from contextlib import suppress
from pathlib import Path

from shedbim.errors import OutputError
from shedbim.saving.exchange import carry
from shedbim.saving.work import Record, Work, left_behind, sync

__all__ = ["NOTICE", "mended", "moved", "settle"]

#: The file that says in plain sight that files are missing.
NOTICE = "shedbim-unfinished.txt"

_NOTICE_TEXT = (
    "A run was stopped while it put its files into this folder. Some of them are missing; none is of another\n"
    "build. Run the same command again: it finishes what was begun, and takes this notice away.\n"
)


def moved(work: Work, folder: Path, names: Collection[str]) -> None:
    """Move the new files in for the old ones; put all back when one cannot be moved or the run is interrupted.

    Raises:
        OSError: when a file cannot be moved; all stands as it was.
        OutputError: when it cannot be put back either; the next run finishes the move.
    """
    work.write_record(Record(names=tuple(names)))
    try:
        _forward(work, folder, names)
        work.drop_record()
    except BaseException as error:
        if not _back(work, folder, names):
            raise OutputError(
                f"{folder} is unfinished: a file could be moved neither in nor back ({error}); close the "
                "programs that hold the files open and run again, which finishes it"
            ) from error
        work.drop_record()
        raise


def settle(work: Work, folder: Path) -> None:
    """Finish what the record of a work folder says, or drop what was never settled on, and clear it away.

    Raises:
        OSError: when a file cannot be moved; the work folder stays for another time.
    """
    record = work.read_record()
    if record is not None and not record.inode:
        _forward(work, folder, record.names)
    elif record is not None and record.inode == folder.stat().st_ino:
        # What lies in the work folder is the old folder now; a file that came there late is not lost.
        carry(work, work.new, folder, record.names, over=False)
    work.drop_record()  # before the rest, so that a run killed while clearing away leaves nothing to finish
    shutil.rmtree(work.place, ignore_errors=True)


def mended(folder: Path) -> bool:
    """Finish what killed runs left in a folder that is locked; say whether there was anything.

    Raises:
        OSError: when a file cannot be moved.
    """
    works = list(left_behind(folder))
    for work in works:
        settle(work, folder)
    return bool(works)


def _forward(work: Work, folder: Path, names: Collection[str]) -> None:
    """Move on from wherever the move stands: what is still among the new files is not in place."""
    notice = folder / NOTICE
    notice.write_text(_NOTICE_TEXT, encoding="utf-8")
    waiting = [name for name in names if (work.new / name).exists()]
    for name in waiting:
        if (folder / name).exists():
            os.replace(folder / name, work.old / name)
    for name in waiting:
        os.replace(work.new / name, folder / name)
    sync(folder)
    notice.unlink()


def _back(work: Work, folder: Path, names: Collection[str]) -> bool:
    """Move everything back; say whether that could be done."""
    moves = [(folder / name, work.new / name) for name in names if not (work.new / name).exists()]
    moves += [(work.old / name, folder / name) for name in names if (work.old / name).exists()]
    done = True
    for source, target in moves:
        try:
            os.replace(source, target)
        except OSError:
            done = False
    if done:
        with suppress(OSError):
            (folder / NOTICE).unlink(missing_ok=True)
    return done
