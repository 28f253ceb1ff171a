"""A description looked at again whenever it is saved: what each state comes to, and how it differs from before."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from functools import cached_property
from hashlib import sha256
from pathlib import Path

from shedbim.checks.checking import check
from shedbim.checks.finding import Finding
from shedbim.errors import ShedbimError
from shedbim.pipeline import Read, read_under_register
from shedbim.readers.registers import register_path
from shedbim.revisions.changes import Changes
from shedbim.revisions.comparing import compare
from shedbim.revisions.snapshot import Snapshot, snapshot

__all__ = ["Standing", "Step", "steps"]


@dataclass(frozen=True, eq=False)
class Standing:
    """A state of the description that could be built; no findings where it is not checked."""

    read: Read
    findings: tuple[Finding, ...] | None

    @cached_property
    def snapshot(self) -> Snapshot:
        """Its pieces."""
        return snapshot(self.read.shed)


@dataclass(frozen=True, eq=False)
class Step:
    """What one state of the file came to.

    Attributes:
        now: the state; None where it could not be built.
        fault: why it could not.
        changes: since the last state that could be built; None for the first.
        came, gone: findings that were not there before, or are there no longer.
    """

    now: Standing | None
    fault: str = ""
    changes: Changes | None = None
    came: tuple[Finding, ...] = ()
    gone: tuple[Finding, ...] = ()


def steps(path: Path, wait: Callable[[], object], *, checks: bool) -> Iterator[Step]:
    """Give a step for the file as it is, and one whenever it, or the register beside it, was saved otherwise.

    Args:
        path: the description.
        wait: called between two looks at the file.
        checks: whether each state is checked.
    """
    seen, good = "", None
    while True:
        now = _digest(path)
        # An editor may put a new file in the place of the old one: a file that is not there gets a second look.
        if not now:
            wait()
            now = _digest(path) or "missing"
        if now == seen:
            wait()
            continue
        seen = now
        step = _step(path, good, checks=checks)
        good = step.now or good
        yield step


def _digest(path: Path) -> str:
    """What tells one state of the files from another; empty where there is no description."""
    try:
        own = sha256(path.read_bytes()).hexdigest()
    except FileNotFoundError:
        return ""
    except OSError as error:
        return f"unreadable {error.errno}"
    try:
        register = register_path(path).stat()
    except OSError:
        return own
    return f"{own} {register.st_mtime_ns} {register.st_size}"


def _step(path: Path, good: Standing | None, *, checks: bool) -> Step:
    try:
        read = read_under_register(path)
        found = tuple(check(read.shed, read.description.checks.criteria)) if checks else None
        now = Standing(read, found)
        if good is None:
            return Step(now)
        came, gone = _difference(good.findings or (), found or ())
        return Step(now, "", compare(good.snapshot, now.snapshot), came, gone)
    except ShedbimError as error:
        return Step(None, str(error))
    # While someone types, a file passes through states that nobody foresaw: one of them must not end the watch.
    except Exception as error:
        return Step(None, f"A fault of the program that nobody foresaw: {type(error).__name__}: {error}")


def _difference(
    before: tuple[Finding, ...], after: tuple[Finding, ...]
) -> tuple[tuple[Finding, ...], tuple[Finding, ...]]:
    """The findings that came, and those that went; one that was waived went, and came as waived."""
    old, new = ({_name(each) for each in some} for some in (before, after))
    came = tuple(each for each in after if _name(each) not in old)
    return came, tuple(each for each in before if _name(each) not in new)


def _name(finding: Finding) -> tuple[str, str, str]:
    return finding.code.name, finding.about, finding.waived
