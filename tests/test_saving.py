"""Saving: whole or not at all, whatever goes wrong on the way."""

from __future__ import annotations

import errno
import os
import random
import shutil
import signal
import subprocess
import sys
import time
from collections.abc import Iterator
from contextlib import contextmanager
from hashlib import sha256
from pathlib import Path

import pytest

from shedbim import saving
from shedbim.errors import OutputError
from shedbim.saving import exchange, folder_lock, moving, save, save_new
from shedbim.saving.folder_lock import LOCK
from shedbim.saving.moving import NOTICE

LINUX = pytest.mark.skipif(sys.platform != "linux", reason="only Linux exchanges folders")

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


@pytest.fixture
def one_by_one(monkeypatch) -> None:
    """A system that cannot exchange two folders."""
    monkeypatch.setattr(saving, "prepared", lambda folder: None)


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
@pytest.mark.parametrize("stop", [1, 2, 3, 4, 5])
def test_a_move_that_fails_is_undone(folder, one_by_one, monkeypatch, stop, error):
    real, calls = os.replace, []

    def replace(source, target):
        calls.append(target)
        if len(calls) == stop:
            raise error
        real(source, target)

    monkeypatch.setattr(moving.os, "replace", replace)
    new = {"a.txt": writes(b"new a"), "new.txt": writes(b"new"), "b.txt": writes(b"new b")}
    with pytest.raises(OutputError if isinstance(error, OSError) else KeyboardInterrupt):
        save(folder, new)
    assert len(calls) >= stop
    assert contents(folder) == OLD


def test_a_move_that_can_neither_go_on_nor_back_is_told_and_finished_later(folder, one_by_one, monkeypatch):
    real, calls = os.replace, []

    def replace(source, target):
        calls.append(target)
        if len(calls) > 3:
            raise PermissionError(errno.EACCES, "Permission denied")
        real(source, target)

    new = {"a.txt": b"new a", "b.txt": b"new b", "c.txt": b"new c"}
    monkeypatch.setattr(moving.os, "replace", replace)
    with pytest.raises(OutputError, match=r"unfinished.*run again"):
        save(folder, {name: writes(data) for name, data in new.items()})
    assert (folder / NOTICE).exists()
    monkeypatch.undo()
    save(folder, {"d.txt": writes(b"new d")})
    assert contents(folder) == {**OLD, **new, "d.txt": b"new d"}


def test_saving_works_where_a_file_system_knows_no_links(folder, monkeypatch):
    def link(source, target, **_):
        raise OSError(errno.EPERM, "Operation not permitted")

    monkeypatch.setattr(exchange.os, "link", link)
    save(folder, {"a.txt": writes(b"new a"), "b.txt": writes(b"new b")})
    assert contents(folder) == {**OLD, "a.txt": b"new a", "b.txt": b"new b"}


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


@pytest.mark.parametrize("names", [["a.txt"], ["a.txt", "b.txt"]])
def test_a_folder_that_cannot_be_written_to(tmp_path, names):
    # A user whom permissions bind, also where the tests run as one whom none binds.
    code = (
        "import ctypes, fcntl, os, sys; from pathlib import Path; from shedbim.errors import OutputError\n"
        "from shedbim.saving import save\n"
        "if os.getuid() == 0: os.setgroups([]); os.setgid(65534); os.setuid(65534)\n"
        "try: save(Path(sys.argv[1]), {name: lambda sink: sink.write(b'new') for name in sys.argv[2:]})\n"
        "except OutputError as error: print(error)"
    )
    base = Path("/tmp") / f"shedbim-closed-{os.getpid()}"
    base.mkdir(mode=0o755)
    try:
        (base / "a.txt").write_bytes(b"old")
        base.chmod(0o555)
        command = [sys.executable, "-c", code, str(base), *names]
        done = subprocess.run(command, capture_output=True, text=True, check=True)
        assert f"cannot write into {base}: permission denied" in done.stdout
        assert "nothing was changed there; " in done.stdout
        assert "choose a folder you may write to" in done.stdout
        assert contents(base) == {"a.txt": b"old"}
    finally:
        base.chmod(0o755)
        shutil.rmtree(base)


# --- put into place in one step -----------------------------------------------------------------------------


@LINUX
def test_all_else_in_the_folder_is_kept(folder):
    """Files keep their inode, so an editor that has one open notices nothing; links and rights stay too."""
    (folder / "notes").mkdir(mode=0o700)
    (folder / "notes" / "n.txt").write_bytes(b"note")
    (folder / "link").symlink_to("nowhere")
    (folder / "notes" / "away").symlink_to(folder.parent)
    folder.chmod(0o751)
    inodes = {name: (folder / name).stat().st_ino for name in ("kept.txt", "notes/n.txt")}
    own = folder.stat().st_ino
    save(folder, {"a.txt": writes(b"new a"), "b.txt": writes(b"new b")})
    assert folder.stat().st_ino != own, "the folder was not exchanged"
    assert {name: (folder / name).stat().st_ino for name in inodes} == inodes
    assert {(folder / name).stat().st_nlink for name in inodes} == {1}
    assert os.readlink(folder / "link") == "nowhere"
    assert os.readlink(folder / "notes" / "away") == str(folder.parent)
    assert (folder.stat().st_mode & 0o777, (folder / "notes").stat().st_mode & 0o777) == (0o751, 0o700)
    assert sorted(each.name for each in folder.iterdir()) == [*OLD, "link", "notes"]
    assert [each.name for each in folder.parent.iterdir()] == ["out"]


@LINUX
def test_a_file_that_comes_while_the_folder_is_exchanged_is_kept(folder, monkeypatch):
    real = exchange._exchange

    def late(one, other):
        (other / "late.txt").write_bytes(b"late")
        (other / "kept.draft").write_bytes(b"saved anew")
        (other / "kept.draft").replace(other / "kept.txt")
        return real(one, other)

    monkeypatch.setattr(exchange, "_exchange", late)
    save(folder, {"a.txt": writes(b"new a"), "b.txt": writes(b"new b")})
    new = {"a.txt": b"new a", "b.txt": b"new b"}
    assert contents(folder) == {**OLD, **new, "kept.txt": b"saved anew", "late.txt": b"late"}


@LINUX
@pytest.mark.parametrize("why", ["stands there", "many files", "a run inside", "a link to it"])
def test_a_folder_that_is_not_exchanged(folder, monkeypatch, why):
    target, own = folder, folder.stat().st_ino
    if why == "stands there":
        monkeypatch.chdir(folder)
    elif why == "many files":
        monkeypatch.setattr(exchange, "_MOST_KEPT", 1)
    elif why == "a run inside":
        (folder / "sub" / ".shedbim-x-abcdefgh").mkdir(parents=True)
    else:
        target = folder.parent / "link"
        target.symlink_to(folder)
    save(target, {"a.txt": writes(b"new a"), "b.txt": writes(b"new b")})
    assert (folder.stat().st_ino == own) == (why != "a link to it")
    assert target.is_symlink() == (why == "a link to it")
    assert {**contents(folder), "a.txt": b"new a", "b.txt": b"new b"} == contents(folder)
    assert not (folder / NOTICE).exists()
    assert [each.name for each in folder.parent.iterdir() if each.name.startswith(".")] == []


# --- killed at any moment -----------------------------------------------------------------------------------

#: Saves a build of six files of which the last is the largest; what a build holds follows from its name.
BUILD = """
import os, signal, sys
from hashlib import sha256
from pathlib import Path
from shedbim.saving import exchange, save

NAMES = ["model.ifc", "members.csv", "plates.csv", "view.html", "schedule.xlsx", "summary.json"]

def content(build, place):
    return sha256(f"{build} {place}".encode()).digest() * 2048 * (place + 1)

def save_build(folder, build):
    save(folder, {name: lambda sink, p=p: sink.write(content(build, p)) for p, name in enumerate(NAMES)})
"""

RANDOMLY = (
    BUILD
    + """
folder, build = Path(sys.argv[1]), sys.argv[2]
print("ready", flush=True)
save_build(folder, build)
print("done", flush=True)
"""
)

#: Forks a run for each line of the package's saving that a run passes, and kills it just before that line.
AT_EVERY_LINE = (
    BUILD
    + """
os.fsync = lambda handle: None  # what a killed run has written stays without it; a power cut is another matter
folder = Path(sys.argv[1])
if sys.argv[2] == "one by one":
    exchange.prepared = None
    sys.modules["shedbim.saving"].prepared = lambda folder: None

def killed_before(line, build):
    left = line
    def trace(frame, event, argument):
        nonlocal left
        if "saving" not in frame.f_code.co_filename:
            return None
        if event == "line":
            left -= 1
            if left < 0:
                os.kill(os.getpid(), signal.SIGKILL)
        return trace
    sys.settrace(trace)
    save_build(folder, build)
    os._exit(0)

for line in range(10000):
    child = os.fork()
    if not child:
        killed_before(line, f"build {line}")
    _, status = os.waitpid(child, 0)
    print(line, "whole" if status == 0 else "killed", flush=True)
    sys.stdin.readline()
    if status == 0:
        break
"""
)
NAMES = ["model.ifc", "members.csv", "plates.csv", "view.html", "schedule.xlsx", "summary.json"]


def build_digests(build: str) -> dict[str, str]:
    """What each file of a build holds, worked out apart from the run."""
    return {
        name: sha256(sha256(f"{build} {place}".encode()).digest() * 2048 * (place + 1)).hexdigest()
        for place, name in enumerate(NAMES)
    }


def found(folder: Path) -> dict[str, str]:
    """What a person finds in a folder: each file that is not hidden, and what it holds."""
    return {
        each.name: sha256(each.read_bytes()).hexdigest()
        for each in folder.glob("*")
        if not each.name.startswith(".")
    }


@pytest.fixture
def built(tmp_path) -> Path:
    """A folder with an old build, and a file that is somebody's own."""
    folder = tmp_path / "out"
    code = RANDOMLY.replace("print(", "(lambda *a, **k: 0)(")
    subprocess.run([sys.executable, "-c", code, str(folder), "old"], check=True)
    (folder / "own.txt").write_bytes(b"own")
    return folder


OWN = {"own.txt": sha256(b"own").hexdigest()}


@LINUX
def test_a_run_killed_at_fifty_random_moments_leaves_old_or_new_whole(built):
    """Real processes, killed from outside; half of the moments close to the step that puts files into place."""
    seed, step, state, outcomes = random.Random(20), 0.1, "old", {"old": 0, "new": 0}
    for number in range(50):
        build = f"build {number}"
        command = [sys.executable, "-c", RANDOMLY, str(built), build]
        with subprocess.Popen(command, stdout=subprocess.PIPE, text=True) as running:
            assert running.stdout is not None
            assert running.stdout.readline() == "ready\n"
            time.sleep(seed.uniform(0, 1.5 * step) if number % 2 else step)
            running.kill()
        after = found(built)
        is_new = after == {**build_digests(build), **OWN}
        assert is_new or after == {**build_digests(state), **OWN}, f"run {number} left neither old nor new"
        state = build if is_new else state
        outcomes["new" if is_new else "old"] += 1
        if number % 2 == 0:  # the moment of the step is learnt on the way, for it depends on the machine
            step *= seed.uniform(0.8, 0.95) if is_new else seed.uniform(1.05, 1.25)
    assert min(outcomes.values()) >= 3, f"the moments did not lie on both sides of the step: {outcomes}"
    save(built, {"more.txt": writes(b"")})
    assert not any(each.name.startswith(".shedbim") for each in (*built.iterdir(), *built.parent.iterdir()))


@LINUX
@pytest.mark.parametrize("way", ["exchange", "one by one"])
def test_a_run_killed_before_any_line_leaves_old_or_new(built, way):
    """Every moment between two lines, one after the other, each on what the run before left behind.

    Where folders can be exchanged, all is old or all is new. Where files are moved one by one, files may be
    missing with a notice, but never do two builds lie side by side, and the next run makes it whole.
    """
    command = [sys.executable, "-c", AT_EVERY_LINE, str(built), way]
    recent, lines, gaps, changes = ["old"], 0, 0, 0
    with subprocess.Popen(command, stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True) as running:
        assert running.stdin is not None
        assert running.stdout is not None
        for said in running.stdout:
            number, end = said.split()
            build, after = f"build {number}", found(built)
            notice = after.pop(NOTICE, None)
            assert after.pop("own.txt") == OWN["own.txt"]
            # A run first finishes what the one before had settled on, so that one counts as old as well.
            recent = [*recent, build]
            whole = [each for each in recent if after == build_digests(each)]
            if whole:
                changes += whole != recent[:1]
                recent = [*whole, *(recent[-3:] if way == "one by one" else [])]
            else:
                assert way == "one by one"
                assert notice is not None, f"files are missing without a notice, killed before line {number}"
                assert any(after.items() <= build_digests(each).items() for each in recent)
                gaps += 1
            lines += 1
            running.stdin.write("\n")
            running.stdin.flush()
    assert end == "whole"
    assert lines > 100
    assert changes > 1
    assert (gaps > 10) == (way == "one by one")
    assert found(built) == {**build_digests(build), **OWN}
    assert not any(each.name.startswith(".shedbim") for each in (*built.iterdir(), *built.parent.iterdir()))


@LINUX
def test_a_run_killed_while_it_writes_leaves_what_was_there_and_blocks_nothing(folder):
    code = (
        "import os, sys, signal; from pathlib import Path; from shedbim.saving import save\n"
        "def dies(sink):\n    sink.write(b'x' * 100000); sink.flush(); os.kill(os.getpid(), signal.SIGKILL)\n"
        "save(Path(sys.argv[1]), {'a.txt': lambda sink: sink.write(b'new'), 'b.txt': dies})"
    )
    done = subprocess.run([sys.executable, "-c", code, str(folder)], check=False)
    assert done.returncode == -signal.SIGKILL
    left = {name: data for name, data in contents(folder).items() if not name.startswith(".shedbim-")}
    assert left == OLD
    assert (folder / LOCK).exists()
    start = time.monotonic()
    save(folder, {"a.txt": writes(b"newer a")})
    assert time.monotonic() - start < 1
    assert contents(folder.parent) == {
        "out": b"",
        **{f"out/{name}": data for name, data in {**OLD, "a.txt": b"newer a"}.items()},
    }


def test_a_record_that_leads_elsewhere_is_not_followed(folder):
    work = folder / ".shedbim-abcdefgh"
    (work / "new").mkdir(parents=True)
    (work / "old").mkdir()
    (work / "new" / "x").write_bytes(b"x")
    for text in (
        '{"names": ["../../x"], "inode": 0}',
        '{"names": [".."], "inode": 0}',
        "[]",
        "{",
        '{"names": 3}',
    ):
        (work / "record.json").write_text(text)
        assert saving.work.Work(work).read_record() is None
    save(folder, {"a.txt": writes(b"new a")})
    assert contents(folder.parent).keys() == {"out", *(f"out/{name}" for name in OLD)}


# --- a full disk --------------------------------------------------------------------------------------------


@contextmanager
def small_disk(place: Path, size: str) -> Iterator[Path]:
    """A disk of a size in memory; the test is left out where it cannot be had."""
    place.mkdir()
    mount = ["mount", "-t", "tmpfs", "-o", f"size={size}", "tmpfs", str(place)]
    if sys.platform != "linux" or os.getuid() != 0 or subprocess.run(mount, check=False).returncode != 0:
        pytest.skip("no disk can be mounted here")
    try:
        yield place
    finally:
        subprocess.run(["umount", str(place)], check=True)


def test_a_disk_that_is_really_full(tmp_path):
    with small_disk(tmp_path / "disk", "1m") as disk:
        folder = disk / "out"
        save(folder, {"a.txt": writes(b"old a" * 1000), "b.txt": writes(b"old b" * 1000)})
        before = contents(disk)
        large = {"a.txt": writes(b"n" * 600_000), "b.txt": writes(b"n" * 600_000)}
        with pytest.raises(OutputError, match=r"no space left.*nothing was changed there; free some room"):
            save(folder, large)
        assert contents(disk) == before
        (disk / "filler").write_bytes(b"f" * (shutil.disk_usage(disk).free))
        assert shutil.disk_usage(disk).free == 0
        with pytest.raises(OutputError, match=r"no space left.*free some room"):
            save(folder, {"a.txt": writes(b"n"), "b.txt": writes(b"n")})
        (disk / "filler").unlink()
        assert contents(disk) == before
        save(folder, {"a.txt": writes(b"new"), "b.txt": writes(b"new")})
        assert contents(folder) == {"a.txt": b"new", "b.txt": b"new"}


def test_a_folder_that_is_a_disk_of_its_own(tmp_path):
    """It cannot be exchanged, so its files are moved one by one."""
    with small_disk(tmp_path / "disk", "1m") as disk:
        for build in (b"old", b"new"):
            save(disk, {"a.txt": writes(build), "b.txt": writes(build)})
            assert contents(disk) == {"a.txt": build, "b.txt": build}


def test_a_disk_that_may_only_be_read(tmp_path):
    with small_disk(tmp_path / "disk", "1m") as disk:
        save(disk / "out", {"a.txt": writes(b"old"), "b.txt": writes(b"old")})
        before = contents(disk)
        subprocess.run(["mount", "-o", "remount,ro", str(disk)], check=True)
        with pytest.raises(OutputError, match=r"read-only.*nothing was changed there;.*choose a folder"):
            save(disk / "out", {"a.txt": writes(b"new"), "b.txt": writes(b"new")})
        assert contents(disk) == before


# --- two runs at once ---------------------------------------------------------------------------------------

HOLDS = (
    "import sys; from pathlib import Path; from shedbim.saving import save\n"
    "def slow(sink):\n    print('writing', flush=True); sys.stdin.readline(); sink.write(b'first')\n"
    "save(Path(sys.argv[1]), {'a.txt': slow, 'b.txt': lambda sink: sink.write(b'first')})"
)


@pytest.fixture
def holder(folder) -> Iterator[subprocess.Popen[str]]:
    """Another run that is writing into the folder, until it is sent a line."""
    command = [sys.executable, "-c", HOLDS, str(folder)]
    with subprocess.Popen(command, stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True) as running:
        assert running.stdout is not None
        assert running.stdout.readline() == "writing\n"
        yield running
        running.kill()


@pytest.mark.parametrize("names", [["a.txt"], ["a.txt", "b.txt"]])
def test_a_second_run_is_refused_and_told_who_writes(folder, holder, monkeypatch, names):
    monkeypatch.setattr(folder_lock, "_WAIT", 0.2)
    since = r"since \d{4}-\d\d-\d\dT\d\d:\d\d:\d\dZ"
    with pytest.raises(OutputError, match=rf"process {holder.pid} on [\w.-]+, {since}\).*wait until it ends"):
        save(folder, {name: writes(b"second") for name in names})
    holder.communicate("\n")
    assert contents(folder) == {**OLD, "a.txt": b"first", "b.txt": b"first"}


def test_a_second_run_waits_for_one_that_ends_soon(folder, holder):
    with subprocess.Popen(
        [sys.executable, "-c", HOLDS.replace("first", "second"), str(folder)],
        stdin=subprocess.PIPE,
        stdout=subprocess.PIPE,
        text=True,
    ) as second:
        time.sleep(0.5)
        assert contents(folder)["a.txt"] == b"old a"
        assert holder.communicate("\n")[0] == ""
        assert holder.returncode == 0
        assert second.communicate("\n")[0] == "writing\n"
        assert second.returncode == 0
    assert contents(folder) == {**OLD, "a.txt": b"second", "b.txt": b"second"}


def test_runs_that_crowd_leave_one_build_whole(tmp_path):
    """Eight runs at once: each waits for its turn, also those that waited while the folder was exchanged."""
    folder = tmp_path / "out"
    runs = [
        subprocess.Popen(
            [sys.executable, "-c", RANDOMLY, str(folder), f"build {number}"], stdout=subprocess.PIPE
        )
        for number in range(8)
    ]
    for run in runs:
        run.communicate()
    assert [run.returncode for run in runs] == [0] * 8
    assert found(folder) in [build_digests(f"build {number}") for number in range(8)]
    assert [each.name for each in tmp_path.iterdir()] == ["out"]


@pytest.mark.parametrize(
    "text", [b"", b"\xff\x1b[31m" * 200, b"process 1 on elsewhere, since 2020-01-01T00:00:00Z"]
)
def test_a_lock_that_a_dead_run_left_blocks_nobody(folder, text):
    (folder / LOCK).write_bytes(text)
    start = time.monotonic()
    save(folder, {"a.txt": writes(b"new a"), "b.txt": writes(b"new b")})
    assert time.monotonic() - start < 1
    assert contents(folder) == {**OLD, "a.txt": b"new a", "b.txt": b"new b"}


def test_a_lock_that_is_a_link_leads_nowhere(folder, tmp_path):
    (tmp_path / "precious").write_bytes(b"precious")
    (folder / LOCK).symlink_to(tmp_path / "precious")
    with pytest.raises(OutputError, match="cannot write into"):
        save(folder, {"a.txt": writes(b"new a")})
    assert (tmp_path / "precious").read_bytes() == b"precious"
    assert (folder / "a.txt").read_bytes() == b"old a"


def test_a_lock_that_was_taken_away_before_it_was_held_is_none(folder, monkeypatch):
    """Who waited for a run that has ended holds a file without a name; two such could write at once."""
    real, calls = folder_lock._holds, []

    def holds(handle):
        calls.append(handle)
        if len(calls) == 1:
            (folder / LOCK).unlink()
        return real(handle)

    monkeypatch.setattr(folder_lock, "_holds", holds)
    with folder_lock.locked(folder):
        assert (folder / LOCK).exists()
    assert len(calls) == 2


def test_what_a_lock_says_of_its_owner_is_data(folder, monkeypatch):
    monkeypatch.setattr(folder_lock, "_WAIT", 0.0)
    with folder_lock.locked(folder):
        (folder / LOCK).write_bytes(b"process 1 on \x1b]0;evil\x07, since now")
        with pytest.raises(OutputError, match="which does not say its name"):
            save(folder, {"a.txt": writes(b"new a")})


# --- a file that is not there yet ---------------------------------------------------------------------------


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
