"""A description that is watched: what a real process says and writes while someone edits the file."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
import time
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from queue import Empty, Queue
from threading import Thread

import pytest
from small_sheds import SMALL

from shedbim.watching import Step, steps

RAFTERS = SMALL["rafters"]
#: Seconds that anything may take here: builds of a small shed on a loaded machine.
PATIENCE = 120.0

pytestmark = pytest.mark.skipif(sys.platform == "win32", reason="signals of POSIX")


class Watch:
    """A running watch, and what it said."""

    def __init__(self, process: subprocess.Popen[str]) -> None:
        self.process = process
        self._coming: Queue[str] = Queue()
        self._listener = Thread(target=self._listen, daemon=True)
        self._listener.start()

    def _listen(self) -> None:
        assert self.process.stdout is not None
        with self.process.stdout as lines:
            for line in lines:
                self._coming.put(line.rstrip("\n"))

    def end(self) -> None:
        """End the process, whatever it does."""
        self.process.kill()
        self.process.wait()
        self._listener.join()

    def until(self, *words: str) -> list[str]:
        """The lines up to the first with one of the words in it."""
        said: list[str] = []
        end = time.monotonic() + PATIENCE
        while True:
            try:
                said.append(self._coming.get(timeout=max(0.0, end - time.monotonic())))
            except Empty:
                raise AssertionError(f"never said {words}: {said}") from None
            if any(word in said[-1] for word in words):
                return said


@contextmanager
def watching(file: Path, *words: str) -> Iterator[Watch]:
    command = [sys.executable, "-m", "shedbim", "watch", str(file), *words]
    process = subprocess.Popen(
        command, stdout=subprocess.PIPE, stderr=subprocess.STDOUT, text=True, cwd=file.parent
    )
    watch = Watch(process)
    try:
        yield watch
    finally:
        watch.end()


def written(file: Path, text: str) -> None:
    file.write_text(text, encoding="utf-8")


def test_a_process_tells_of_each_save_survives_broken_states_and_ends_well(tmp_path: Path) -> None:
    file, members = tmp_path / "store.yaml", tmp_path / "out" / "members.csv"
    written(file, RAFTERS)
    with watching(file, "--out", "out", "--only", "schedules") as watch:
        first = watch.until("Written to")
        assert any("342 pieces" in line for line in first)
        assert not any(line.startswith("Changed") for line in first)
        assert any(line.startswith("Checks:") for line in first)
        before = members.read_bytes()

        written(file, RAFTERS.replace("4.7 m]", "4.95 m]"))
        said = watch.until("Written to")
        assert any(line.startswith("Changed:") and "94 moved" in line for line in said)
        assert any("all 2 columns of line 3: moved by y +250 mm" in line for line in said)
        assert any(line.startswith("  mass, kg") for line in said)
        assert len(said) <= 40
        good = members.read_bytes()
        assert good != before

        # Broken ways: half a file, a wrong value, bytes that are no text, nothing, and no file at all.
        broken = [RAFTERS[: len(RAFTERS) // 2], RAFTERS.replace("eaves: 3.2 m", "eaves: 3.2 miles"), ""]
        for text in broken:
            written(file, text)
            said = watch.until("Cannot be built")
        file.write_bytes(b"\xff\xfe\x00building")
        watch.until("Cannot be built")
        file.unlink()
        watch.until("Cannot be built")
        assert watch.process.poll() is None
        assert members.read_bytes() == good

        # Told against the last state that could be built; put into place by a rename, as editors do.
        other = tmp_path / "store.yaml.new"
        written(other, RAFTERS.replace("4.7 m]", "4.95 m]").replace("eaves: 3.2 m", "eaves: 3.3 m"))
        other.replace(file)
        said = watch.until("Written to")
        assert any("all 6 columns of lines 1, 2, 3: length 3,408 mm became 3,508 mm" in line for line in said)
        assert not any("y +250" in line for line in said)

        watch.process.send_signal(signal.SIGINT)
        assert watch.until("Stopped watching")
        assert watch.process.wait(PATIENCE) == 0
    assert not [each for each in os.listdir(tmp_path) if each.startswith(".")]


def test_a_termination_in_the_middle_of_the_work_ends_it_well(tmp_path: Path) -> None:
    file = tmp_path / "store.yaml"
    written(file, RAFTERS)
    with watching(file, "--no-checks", "--only", "members") as watch:
        watch.until("Watching")
        watch.process.send_signal(signal.SIGTERM)
        watch.until("Stopped watching")
        assert watch.process.wait(PATIENCE) == 0


def test_findings_that_came_and_went_are_told(tmp_path: Path) -> None:
    # A roof flatter than is usual is a finding of its own; there the plates that touch without a joint do not.
    file = tmp_path / "store.yaml"
    looks: list[Step] = []
    written(file, RAFTERS)
    edits = iter([RAFTERS.replace("pitch: 9 deg", "pitch: 1 deg"), RAFTERS])
    for step in steps(file, lambda: written(file, next(edits)), checks=True):
        looks.append(step)
        if len(looks) == 3:
            break
    came, gone = (
        [{each.code.name for each in some} for some in (look.came, look.gone)] for look in looks[1:]
    )
    assert "roof-flat" in came[0]
    assert came == gone[::-1]


def test_a_save_that_changes_nothing_is_no_step(tmp_path: Path) -> None:
    file = tmp_path / "store.yaml"
    written(file, RAFTERS)
    waits = 0

    def wait() -> None:
        nonlocal waits
        waits += 1
        written(file, RAFTERS if waits < 3 else f"{RAFTERS}\n# a remark\n")

    found = steps(file, wait, checks=False)
    assert next(found).now is not None
    step = next(found)
    assert waits == 3
    assert step.changes is not None
    assert len(step.changes.changed) == 0
