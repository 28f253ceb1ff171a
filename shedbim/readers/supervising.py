"""What came of a process that meshes a model file: started again past the element at which it ended, if it did."""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Callable, Iterator, Mapping, Sequence
from contextlib import contextmanager
from pathlib import Path
from queue import Empty, Queue
from threading import Thread

__all__ = ["heard", "supervise"]

#: Seconds without a word after which the process is ended: while it opens the file, over a batch, over one element.
#: Opening the largest file that is read takes a quarter of the first; common elements take a hundredth of a second.
PATIENCE = (240.0, 120.0, 30.0)

#: The process; what follows are the file, the folder and the numbers that ``meshing.main`` takes.
#: It imports nothing from the folder that the user is in, which may hold anything.
COMMAND = (sys.executable, "-P", "-m", "shedbim.readers.meshing")

#: The folder that this package is imported from.
_ROOT = str(Path(__file__).parents[2])

#: How often the process is started again.
_MOST_STARTS = 12


def supervise(file: Path, folder: Path, tell: Callable[[int, int], None]) -> str:
    """Have a file meshed into a folder, whatever it does to the process; give what went wrong, empty for nothing.

    A batch in which the process ends is tried again element by element; one that ends it is left out.

    Args:
        file: a model file.
        folder: where the results go.
        tell: called with the elements done and all elements.
    """
    skipped: list[int] = []
    start = single = 0
    for _ in range(_MOST_STARTS):
        said = _run(file, folder, (start, single, *skipped), tell)
        if "end" in said or "fault" in said:
            return said.get("fault", "")
        if "begin" not in said:
            return "the library that reads model files ended over it"
        first, last = map(int, said["begin"].split())
        if last - first > 1:
            start, single = first, last
        else:
            skipped.append(first)
            start = first + 1
    return "too many of its elements end the library that reads model files"


def _run(
    file: Path, folder: Path, numbers: tuple[int, ...], tell: Callable[[int, int], None]
) -> dict[str, str]:
    """What one process said, by the first word of a line; of each word the last."""
    said: dict[str, str] = {}
    with heard([*COMMAND, str(file.resolve()), str(folder), *map(str, numbers)]) as hear:
        while (line := hear(_patience(said))) is not None:
            word, _, text = line.partition(" ")
            said[word] = text
            if word == "done":
                tell(int(text), int(said["open"]))
    return said


def _patience(said: Mapping[str, str]) -> float:
    """How long the next word may take after what was said, seconds."""
    opening, batch, single = PATIENCE
    if "begin" not in said:
        return opening
    first, last = map(int, said["begin"].split())
    return batch if last - first > 1 else single


@contextmanager
def heard(command: Sequence[str]) -> Iterator[Callable[[float], str | None]]:
    """Give a process as a function that gives its next line; None where it ended, or said nothing for so many seconds.

    It is ended afterwards.
    """
    paths = os.pathsep.join(filter(None, (_ROOT, os.environ.get("PYTHONPATH", ""))))
    process = subprocess.Popen(
        list(command),
        env={**os.environ, "PYTHONPATH": paths},
        stdin=subprocess.DEVNULL,
        stdout=subprocess.PIPE,
        stderr=subprocess.DEVNULL,
        text=True,
        errors="replace",
    )
    said: Queue[str | None] = Queue()

    def listen() -> None:
        assert process.stdout is not None
        with process.stdout as lines:
            for line in lines:
                said.put(line.rstrip("\n"))
        said.put(None)

    def hear(patience: float) -> str | None:
        try:
            return said.get(timeout=patience)
        except Empty:
            return None

    listener = Thread(target=listen, daemon=True)
    listener.start()
    try:
        yield hear
    finally:
        process.kill()
        process.wait()
        listener.join()
