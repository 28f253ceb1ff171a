"""Saving: whole or not at all, whatever goes wrong on the way."""

from __future__ import annotations

import errno
import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

from shedbim import saving
from shedbim.errors import OutputError
from shedbim.saving import save, save_new

OLD = {"a.txt": b"old a", "b.txt": b"old b", "kept.txt": b"somebody's own"}


def writes(data: bytes):
    return lambda sink: sink.write(data)


def fails(error: BaseException):
    def write(sink):
        sink.write(b"half of it")
        raise error

    return write


def contents(folder: Path) -> dict[str, bytes]:
    """Every file and folder below, hidden ones too."""
    return {
        str(each.relative_to(folder)): each.read_bytes() if each.is_file() else b""
        for each in folder.rglob("*")
    }


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    target = tmp_path / "out"
    target.mkdir()
    for name, data in OLD.items():
        (target / name).write_bytes(data)
    return target


def test_files_are_written_and_others_left_alone(folder):
    paths = save(folder, {"a.txt": writes(b"new a"), "c.txt": writes(b"new c")})
    assert paths == (folder / "a.txt", folder / "c.txt")
    assert contents(folder) == {**OLD, "a.txt": b"new a", "c.txt": b"new c"}


def test_the_folder_and_those_above_it_are_made(tmp_path):
    save(tmp_path / "x" / "y", {"a.txt": writes(b"1")})
    assert contents(tmp_path) == {"x": b"", "x/y": b"", "x/y/a.txt": b"1"}


def test_progress_names_each_file_before_it_is_written(tmp_path):
    told: list[tuple[str, int, int]] = []
    save(tmp_path, {"a": writes(b""), "b": writes(b"")}, lambda *each: told.append(each))
    assert told == [("a", 0, 2), ("b", 1, 2)]


@pytest.mark.parametrize("error", [ValueError("bug"), KeyboardInterrupt()])
def test_a_writer_that_fails_changes_nothing(folder, error):
    with pytest.raises(type(error)):
        save(folder, {"a.txt": writes(b"new a"), "b.txt": fails(error)})
    assert contents(folder) == OLD


def test_a_full_disk_is_told_and_changes_nothing(folder):
    full = OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))
    with pytest.raises(OutputError, match=r"no space left.*nothing was changed"):
        save(folder, {"a.txt": writes(b"new a"), "b.txt": fails(full)})
    assert contents(folder) == OLD


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="this system has no full device")
def test_a_disk_that_is_full_when_the_file_is_closed(folder, monkeypatch):
    real = Path.open
    monkeypatch.setattr(
        Path, "open", lambda self, *rest: real(Path("/dev/full") if self.name == "b.txt" else self, *rest)
    )
    with pytest.raises(OutputError, match="no space left"):
        save(folder, {"a.txt": writes(b"new a"), "b.txt": writes(b"x")})
    monkeypatch.undo()
    assert contents(folder) == OLD


def test_a_run_that_fails_takes_away_the_folders_it_made(tmp_path):
    with pytest.raises(ValueError, match="bug"):
        save(tmp_path / "x" / "y", {"a.txt": fails(ValueError("bug"))})
    assert contents(tmp_path) == {}


@pytest.mark.parametrize("error", [PermissionError(errno.EACCES, "Permission denied"), KeyboardInterrupt()])
@pytest.mark.parametrize("stop", [1, 2, 3])
def test_a_move_that_fails_is_undone(folder, monkeypatch, stop, error):
    real, calls = os.replace, []

    def replace(source, target):
        calls.append(target)
        if len(calls) == stop:
            raise error
        real(source, target)

    monkeypatch.setattr(saving.os, "replace", replace)
    new = {"a.txt": writes(b"new a"), "new.txt": writes(b"new"), "b.txt": writes(b"new b")}
    with pytest.raises(OutputError if isinstance(error, OSError) else KeyboardInterrupt):
        save(folder, new)
    assert len(calls) >= stop
    assert contents(folder) == OLD


def test_moving_works_where_a_file_system_knows_no_links(folder, monkeypatch):
    def link(source, target):
        raise OSError(errno.EPERM, "Operation not permitted")

    real = os.replace

    def replace(source, target):
        if target.name == "b.txt" and source.parent.name != "before":
            raise PermissionError(errno.EACCES, "Permission denied")
        real(source, target)

    monkeypatch.setattr(saving.os, "link", link)
    save(folder, {"a.txt": writes(b"new a")})
    assert contents(folder) == {**OLD, "a.txt": b"new a"}
    monkeypatch.setattr(saving.os, "replace", replace)
    with pytest.raises(OutputError, match="permission denied"):
        save(folder, {"a.txt": writes(b"newer a"), "b.txt": writes(b"new b")})
    assert contents(folder) == {**OLD, "a.txt": b"new a"}


def test_a_target_that_is_a_file(folder):
    with pytest.raises(OutputError, match="it is a file, not a folder"):
        save(folder / "a.txt", {"x": writes(b"")})
    with pytest.raises(OutputError, match="not a directory"):
        save(folder / "a.txt" / "deeper", {"x": writes(b"")})
    assert contents(folder) == OLD


def test_a_folder_that_has_the_name_of_an_output(folder):
    (folder / "a.csv").mkdir()
    before = contents(folder)
    with pytest.raises(OutputError, match="there is a folder of that name"):
        save(folder, {"b.txt": writes(b"new"), "a.csv": writes(b"")})
    assert contents(folder) == before


def test_a_folder_that_cannot_be_written_to(folder, monkeypatch):
    # The tests may run as a user whom no permission binds, so the refusal is played.
    def refuse(**_):
        raise PermissionError(errno.EACCES, "Permission denied", str(folder))

    monkeypatch.setattr(saving.tempfile, "mkdtemp", refuse)
    with pytest.raises(OutputError, match="permission denied"):
        save(folder, {"a.txt": writes(b"")})
    assert contents(folder) == OLD


def test_a_killed_run_leaves_what_was_there_and_blocks_nothing(folder):
    code = (
        "import os, sys, signal; from pathlib import Path; from shedbim.saving import save\n"
        "def dies(sink):\n    sink.write(b'x' * 100000); sink.flush(); os.kill(os.getpid(), signal.SIGKILL)\n"
        "save(Path(sys.argv[1]), {'a.txt': lambda sink: sink.write(b'new'), 'b.txt': dies})"
    )
    done = subprocess.run([sys.executable, "-c", code, str(folder)], check=False)
    assert done.returncode == -signal.SIGKILL
    left = {name: data for name, data in contents(folder).items() if not name.startswith(".shedbim-")}
    assert left == OLD
    save(folder, {"a.txt": writes(b"new a")})
    assert (folder / "a.txt").read_bytes() == b"new a"
    # A fresh leftover may belong to a run beside this one; an old one is cleared away.
    leftovers = list(folder.glob(".shedbim-*"))
    assert len(leftovers) == 1
    old = time.time() - 2 * 24 * 3600
    for each in (*leftovers[0].rglob("*"), leftovers[0]):
        os.utime(each, (old, old))
    save(folder, {"a.txt": writes(b"newer a")})
    assert contents(folder) == {**OLD, "a.txt": b"newer a"}


def test_a_new_file_is_written_once_and_never_over_another(tmp_path):
    target = tmp_path / "x" / "new.yaml"
    save_new(target, "name: ü\n")
    assert target.read_bytes() == "name: ü\n".encode()
    with pytest.raises(OutputError, match="is there already"):
        save_new(target, "other")
    assert target.read_bytes() == "name: ü\n".encode()
    with pytest.raises(OutputError, match="cannot write"):
        save_new(target / "deeper.yaml", "other")
    assert contents(tmp_path) == {"x": b"", "x/new.yaml": "name: ü\n".encode()}


def test_a_new_file_that_cannot_be_written_whole_is_taken_away(tmp_path):
    with pytest.raises(UnicodeEncodeError):
        save_new(tmp_path / "new.yaml", "half \ud800")
    assert contents(tmp_path) == {}
