"""Several descriptions built side by side, each in a process of its own: one that fails or dies ends no other."""

from __future__ import annotations

import os
import signal
from collections import deque
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from itertools import combinations
from multiprocessing import get_context
from multiprocessing.connection import Connection, wait
from multiprocessing.context import SpawnProcess
from pathlib import Path
from threading import current_thread, main_thread
from time import perf_counter
from traceback import format_exc
from typing import Any

from shedbim.errors import OutputError, ShedbimError
from shedbim.pipeline import BuildResult, default_folder
from shedbim.writers.summary import summary

__all__ = ["Built", "Job", "built_each", "jobs_of", "processors"]

_FAULT = 1  # exit code of a fault that nobody foresaw
_PATIENCE = 10.0  # seconds that a process is given to end cleanly


@dataclass(frozen=True)
class Job:
    """One description and the folder of its outputs."""

    path: Path
    folder: Path


@dataclass(frozen=True)
class Built:
    """What came of one description.

    Attributes:
        job: the description and its folder.
        code: 0, or the exit code that a command ends with for such an error.
        seconds: how long it took.
        error: what went wrong, in words; empty where nothing did.
        warnings: of the description.
        summary: as in the summary file, with ``files``: path of each output by its name; None where it failed.
    """

    job: Job
    code: int
    seconds: float
    error: str = ""
    warnings: tuple[str, ...] = ()
    summary: dict[str, Any] | None = None


def jobs_of(paths: Sequence[Path], out: Path | None = None, settings: Sequence[str] = ()) -> tuple[Job, ...]:
    """Give each description its folder: the default one, or one with the name of its file in ``out``.

    Raises:
        OutputError: when two of them would share a folder.
    """
    names = [default_folder(path, settings) for path in paths]
    folders = names if out is None else [out / name.name for name in names]
    jobs = tuple(Job(path, folder) for path, folder in zip(paths, folders, strict=True))
    for one, other in combinations(jobs, 2):
        if os.path.realpath(one.path) == os.path.realpath(other.path):
            raise OutputError(f"{other.path} is given twice")
        # Also where a file system tells no capitals from small letters.
        if str(one.folder).casefold() == str(other.folder).casefold():
            raise OutputError(
                f"{one.path} and {other.path} would both be written into {other.folder}; nothing was built; "
                "rename one of them, or build them one at a time, each with --out"
            )
    return jobs


def processors() -> int:
    """Give how many processes this one may run side by side."""
    return len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else os.cpu_count() or 1


def built_each(
    jobs: Sequence[Job], make: Callable[[Path, Path], BuildResult], *, most: int
) -> Iterator[tuple[int, Built]]:
    """Build each job, and give its number and what came of it as soon as it is done.

    When the caller stops listening, or is interrupted, the processes that still run are ended, and their
    folders stay as they were.

    Args:
        make: what builds a description into a folder; it is sent to other processes, so it must be a function
            of a module or a partial one.
        most: processes at a time.
    """
    context = get_context("spawn")  # the same on every system, and sound beside the threads of libraries
    waiting = deque(enumerate(jobs))
    running: dict[Connection, _Run] = {}
    try:
        while waiting or running:
            while waiting and len(running) < most:
                number, job = waiting.popleft()
                receiver, sender = context.Pipe(duplex=False)
                process = context.Process(target=_work, args=(sender, job, make), daemon=True)
                with _unheard():
                    process.start()
                sender.close()  # this end, so that the other one's death is seen
                running[receiver] = _Run(number, job, process, perf_counter())
            for ready in wait(list(running)):
                assert isinstance(ready, Connection)
                run = running.pop(ready)
                yield run.number, run.ended(ready)
    finally:
        for run in running.values():
            run.process.terminate()
        for run in running.values():
            run.process.join(_PATIENCE)


@contextmanager
def _unheard() -> Iterator[None]:
    """Have a process that is started here not hear an interrupt of the terminal: its starter ends it."""
    if current_thread() is not main_thread():
        yield
        return
    before = signal.signal(signal.SIGINT, signal.SIG_IGN)
    try:
        yield
    finally:
        signal.signal(signal.SIGINT, before)


@dataclass(frozen=True)
class _Run:
    """A process at work on a job."""

    number: int
    job: Job
    process: SpawnProcess
    start: float

    def ended(self, receiver: Connection) -> Built:
        """What came of it, also where the process died and has nothing to say."""
        try:
            built = receiver.recv()
            assert isinstance(built, Built)
            return built
        except EOFError:
            self.process.join(_PATIENCE)
            code = self.process.exitcode or 0
            why = f"signal {-code}, for want of memory perhaps" if code < 0 else f"exit code {code}"
            error = f"the process that built it was ended from outside ({why}); what stood there is whole"
            return Built(self.job, _FAULT, perf_counter() - self.start, error)
        finally:
            receiver.close()


def _work(sender: Connection, job: Job, make: Callable[[Path, Path], BuildResult]) -> None:
    """Build one job in a process of its own, and send what came of it."""
    signal.signal(signal.SIGTERM, signal.default_int_handler)  # to be ended is to be interrupted: cleanly
    start = perf_counter()
    try:
        code, error, warnings, told = _made(job, make)
    except KeyboardInterrupt:
        return
    sender.send(Built(job, code, perf_counter() - start, error, warnings, told))


def _made(
    job: Job, make: Callable[[Path, Path], BuildResult]
) -> tuple[int, str, tuple[str, ...], dict[str, Any] | None]:
    """Exit code, error, warnings and summary of a job."""
    try:
        result = make(job.path, job.folder)
    except ShedbimError as error:
        return error.exit_code, str(error), (), None
    except Exception:  # whatever it is, it is told with its traceback, and the other jobs go on
        return _FAULT, format_exc(), (), None
    files = {name: str(path) for name, path in result.files.items()}
    told = {**summary(result.shed, result.imprint, result.findings), "files": files}
    return 0, "", tuple(result.description.warnings), told
