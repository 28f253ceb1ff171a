"""The lock of a folder: one run at a time writes there, and a dead run holds nothing.

The system's own file lock is the lock: it ends with the process that holds it, however that ends, so that a
lock file left behind by a killed run blocks nobody. What stands in the file, the process, its host and since
when, is only for the message to whoever finds the folder taken.
"""

from __future__ import annotations

import os
import re
import socket
import sys
import time
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from datetime import UTC, datetime
from pathlib import Path

from shedbim.errors import OutputError

__all__ = ["LOCK", "locked"]

#: The name of the lock file in the folder.
LOCK = ".shedbim-lock"

_WAIT = 10.0  # seconds that a run waits for another one: more than moving takes, less than patience lasts
_PAUSE = 0.05  # seconds between two tries
_MOST_BYTES = 400
_OWNER = re.compile(r"process [0-9]{1,10} on [\w.-]{1,255}, since [0-9TZ:-]{20}")
_FLAGS = getattr(os, "O_CLOEXEC", 0) | getattr(os, "O_NOFOLLOW", 0)  # a link there would lead a write astray


@contextmanager
def locked(folder: Path) -> Iterator[None]:
    """Hold the folder, which is made when it is not there, as the only run.

    Raises:
        OutputError: when another run holds it for longer than a moment, with who and since when.
        OSError: when the folder or the file in it cannot be made.
    """
    handle = _taken(folder)
    try:
        yield
    finally:
        # Taken away while it is held: whoever waits for it sees that the name has gone, and makes a new one.
        with suppress(OSError):
            (folder / LOCK).unlink()
        os.close(handle)
        if sys.platform == "win32":  # where a file that is open cannot be taken away
            with suppress(OSError):
                (folder / LOCK).unlink()


def _taken(folder: Path) -> int:
    """The handle of the lock file, held."""
    path, end = folder / LOCK, time.monotonic() + _WAIT
    while True:
        folder.mkdir(parents=True, exist_ok=True)
        late = time.monotonic() >= end
        try:
            handle, own = _opened(path)
        except FileNotFoundError:  # a run that failed took the folder away between the two lines
            if late:
                raise
            continue
        try:
            if _holds(handle):
                if own and _is_at(handle, path):
                    _sign(handle, path)
                    return handle
                if not own:  # another user's, and dead
                    path.unlink(missing_ok=True)
            elif late:
                raise OutputError(_busy(folder, handle))
        except BaseException:
            os.close(handle)
            raise
        os.close(handle)
        time.sleep(_PAUSE)


def _opened(path: Path) -> tuple[int, bool]:
    """The lock file, made where there is none, and whether it can be written to."""
    try:
        return os.open(path, os.O_RDWR | os.O_CREAT | _FLAGS, 0o644), True
    except PermissionError:
        if not path.exists():
            raise
        return os.open(path, os.O_RDONLY | _FLAGS), False


def _holds(handle: int) -> bool:
    """Take the lock of an open file if nobody has it; say whether it is ours now."""
    if sys.platform == "win32":
        import msvcrt  # noqa: PLC0415 - only on that system

        os.lseek(handle, 1 << 30, os.SEEK_SET)  # beyond the text, which others must be able to read
        try:
            msvcrt.locking(handle, msvcrt.LK_NBLCK, 1)
        except OSError:
            return False
    else:
        import fcntl  # noqa: PLC0415 - only on those systems

        try:
            fcntl.flock(handle, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError:
            return False
    return True


def _is_at(handle: int, path: Path) -> bool:
    """Whether the open file still is the one of that name."""
    try:
        return os.path.samestat(os.fstat(handle), path.stat())
    except FileNotFoundError:
        return False


def _sign(handle: int, path: Path) -> None:
    """Write into the lock file who holds it; where that cannot be, none is left behind."""
    host = re.sub(r"[^\w.-]", "-", socket.gethostname())[:255] or "-"
    now = datetime.now(UTC).strftime("%Y-%m-%dT%H:%M:%SZ")
    try:
        os.ftruncate(handle, 0)
        os.lseek(handle, 0, os.SEEK_SET)
        os.write(handle, f"process {os.getpid()} on {host}, since {now}".encode())
    except OSError:
        path.unlink(missing_ok=True)
        raise


def _busy(folder: Path, handle: int) -> str:
    """The message that the folder is taken; what is in the file counts only where it reads as it should."""
    os.lseek(handle, 0, os.SEEK_SET)
    owner = os.read(handle, _MOST_BYTES).decode(errors="replace")
    who = owner if _OWNER.fullmatch(owner) else "which does not say its name"
    return (
        f"cannot write into {folder}: another run is writing there ({who}); nothing was changed there; "
        "wait until it ends or stop it, or choose another folder, and run again"
    )
