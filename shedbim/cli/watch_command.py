"""What ``shedbim watch`` does and prints: a screen for each state of the file, first what changed, then the outputs."""

from __future__ import annotations

import signal
import sys
import time
from collections.abc import Iterator, Sequence
from datetime import UTC, datetime
from pathlib import Path
from textwrap import shorten

from shedbim.checks.finding import Finding
from shedbim.cli.changes_text import count_words, group_lines, quantity_rows
from shedbim.cli.findings_text import counts_line
from shedbim.cli.speech import say
from shedbim.errors import OutputError
from shedbim.outputs import chosen
from shedbim.pipeline import default_folder, digest, write_outputs
from shedbim.revisions.change_groups import change_groups
from shedbim.watching import Standing, Step, steps
from shedbim.writers.imprint import Imprint

__all__ = ["run"]

#: Seconds between two looks at the file.
_PAUSE = 0.3
_WIDTH = 118  # characters of a line
_MOST_GROUPS, _MOST_FINDINGS = 10, 6


def run(file: Path, out: Path | None, outputs: tuple[str, ...], *, checks: bool) -> None:
    """Watch a description until it is interrupted, and print and write what each of its states comes to.

    Args:
        file: the description.
        out: folder of the outputs; that of the description where not given.
        outputs: names or groups of outputs; all where not given.
        checks: whether each state is checked.

    Raises:
        OutputError: when an output is asked for that there is none of without checks.
    """
    chosen(outputs, checked=checks)
    folder = default_folder(file) if out is None else out
    for number in (signal.SIGINT, signal.SIGTERM):
        signal.signal(number, signal.default_int_handler)
    try:
        _tell([f"Watching {file}; Ctrl-C ends it."])
        for step in steps(file, lambda: time.sleep(_PAUSE), checks=checks):
            _tell(_lines(step))
            if step.now is not None:
                _tell(_written(step.now, folder, outputs))
    except KeyboardInterrupt:
        _tell(["Stopped watching."])


def _tell(lines: Sequence[str] | Iterator[str]) -> None:
    """Print lines at once: whoever reads may sit at the other end of a pipe."""
    for line in lines:
        say(line)
    sys.stdout.flush()


def _lines(step: Step) -> Iterator[str]:
    """The screen of a state, 40 lines at most."""
    yield ""
    yield f"--- {datetime.now().astimezone():%H:%M:%S} ---"
    if step.now is None:
        yield "Cannot be built; what was built last stays as it is:"
        yield step.fault
        return
    shed = step.now.read.shed
    yield (
        f"{shed.project.number} {shed.project.name}, revision {shed.project.revision}: {len(shed.pieces):,} pieces, "
        f"{shed.mass / 1000:,.2f} t".strip()
    )
    if step.changes is not None:
        yield f"Changed: {count_words(step.changes)}"
        for name, before, after, difference in quantity_rows(step.changes, all_of_them=False):
            yield f"  {name:<20}{before:>14} -> {after:>12}  {difference:>12}"
        for line in group_lines(change_groups(step.changes), _MOST_GROUPS):
            yield f"  {_short(line)}"
    if step.now.findings is not None:
        yield f"Checks: {counts_line(step.now.findings)}"
        if step.changes is not None:
            yield from _finding_lines("new", step.came)
            yield from _finding_lines("gone", step.gone)


def _finding_lines(word: str, findings: Sequence[Finding]) -> Iterator[str]:
    for each in findings[:_MOST_FINDINGS]:
        yield f"  {word:<5}{_short(f'{each.code.severity.value}: {each.says} ({each.code.name})')}"
    if len(findings) > _MOST_FINDINGS:
        yield f"  {word:<5}and {len(findings) - _MOST_FINDINGS:,} more"


def _short(line: str) -> str:
    return shorten(line, _WIDTH, placeholder=" ...")


def _written(now: Standing, folder: Path, outputs: tuple[str, ...]) -> Iterator[str]:
    """Write the outputs; gives a line on how that went."""
    read = now.read
    imprint = Imprint(datetime.now(UTC), digest=digest(read.text))
    try:
        files = write_outputs(
            read.shed, folder, outputs, imprint=imprint, findings=now.findings, changes=read.changes
        )
        yield f"Written to {folder}: {len(files):,} files"
    except OutputError as error:
        yield f"Not written: {error}"
