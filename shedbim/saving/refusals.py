"""What a system refuses to a run that saves, as one sentence with the place and what to do about it."""

from __future__ import annotations

import errno
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from shedbim.errors import OutputError

__all__ = ["told_of"]

_NO_ROOM = "free some room on that disk, or choose a folder on another one, and run again"
_NO_RIGHT = "close the programs that hold its files open, or choose a folder you may write to, and run again"
_IN_USE = "close the programs that hold the files open and run again"
_NO_LOCKS = "this file system cannot lock a file, so two runs could mix; choose a folder on another one"

#: What to do about each error that a person can do something about.
_ADVICE = {
    errno.ENOSPC: _NO_ROOM,
    errno.EDQUOT: _NO_ROOM,
    errno.EACCES: _NO_RIGHT,
    errno.EPERM: _NO_RIGHT,
    errno.EROFS: _NO_RIGHT,
    errno.EBUSY: _IN_USE,
    errno.ETXTBSY: _IN_USE,
    errno.ENOLCK: _NO_LOCKS,
    errno.ENOTSUP: _NO_LOCKS,
    errno.ENAMETOOLONG: "choose a folder with a shorter name and run again",
}


@contextmanager
def told_of(folder: Path) -> Iterator[None]:
    """Say what the system refused as an OutputError: what, where, and what to do.

    Raises:
        OutputError: in place of each OSError; nothing was changed in the folder then.
    """
    try:
        yield
    except FileExistsError as error:
        raise OutputError(
            f"cannot write into {folder}: it is a file, not a folder; choose another name"
        ) from error
    except OSError as error:
        place = error.filename if isinstance(error.filename, str) else folder
        reason = (error.strerror or str(error)).lower()
        advice = f"; {_ADVICE[error.errno]}" if error.errno in _ADVICE else ""
        raise OutputError(
            f"cannot write into {folder}: {reason} ({place}); nothing was changed there{advice}"
        ) from error
