"""What ``shedbim build`` does and prints for several descriptions: one table of them all, or one JSON list."""

from __future__ import annotations

import sys
from collections.abc import Iterator, Sequence
from contextlib import suppress
from datetime import UTC, datetime
from functools import partial
from pathlib import Path
from typing import Any

from shedbim.cli.guard import INTERRUPTED
from shedbim.cli.speech import complain, say, show_json, stage_line
from shedbim.cli.tables import show_table
from shedbim.pipeline import build
from shedbim.portfolio import Built, built_each, jobs_of, processors

__all__ = ["run"]

_HEADINGS = ("file", "pieces", "tonnes", "errors", "warnings", "seconds", "result")
_NUMBERS = (1, 2, 3, 4, 5)

#: What exit codes mean in one word or two; the worst code first.
_RESULTS = {
    1: "fault of the program",
    70: "fault of the program",
    3: "not written",
    2: "refused",
    0: "built",
}


def run(
    files: Sequence[Path],
    out: Path | None,
    settings: tuple[str, ...],
    schema: str,
    level: str,
    outputs: tuple[str, ...],
    moment: datetime | None,
    *,
    jobs: int | None,
    checks: bool,
    as_json: bool,
    quiet: bool,
) -> None:
    """Build several descriptions side by side, and print what came of each in the order they were given.

    Args:
        out: folder in which each gets a folder of its own.
        moment: the time stamp of all outputs; now where not given.
        jobs: how many at a time; as many as there are processors where not given.

    Raises:
        OutputError: when two would share a folder.
        SystemExit: with the worst exit code of them all, where that is not 0.
    """
    every = jobs_of(files, out, settings)
    make = partial(
        build,
        settings=settings,
        schema=schema,
        level=level,
        outputs=outputs,
        checks=checks,
        timestamp=moment or datetime.now(UTC),
    )
    watched = not quiet and not as_json and sys.stderr.isatty()
    done: dict[int, Built] = {}
    whole = False
    with suppress(KeyboardInterrupt):
        for number, built in built_each(every, make, most=jobs or processors()):
            done[number] = built
            if watched:
                stage_line(f"{len(done)} of {len(every)} built", len(done) - 1, len(every))
        whole = True
    results = [done[number] for number in sorted(done)]
    if as_json:
        show_json([_data(each) for each in results])
    elif not quiet:
        if watched:
            stage_line("", len(every), len(every))
        _show(results)
    for line in _complaints(results, quiet=quiet):
        complain(line)
    if not whole:
        complain(
            f"Interrupted: {_counted(len(done), 'shed')} of {len(every)} done; all others are as they were."
        )
        sys.exit(INTERRUPTED)
    codes = {each.code for each in results}
    sys.exit(next((code for code in _RESULTS if code in codes), 1))


def _show(results: Sequence[Built]) -> None:
    """Print the table, the sum under it, and where the outputs are."""
    show_table(_HEADINGS, [_row(each) for each in results], numbers=_NUMBERS)
    told = [each.summary for each in results if each.summary is not None]
    pieces = sum(each["pieces"] for each in told)
    tonnes = sum(each["mass_kg"] for each in told) / 1000
    say(f"{_counted(len(told), 'shed')} of {len(results)} built: {pieces:,} pieces, {tonnes:,.2f} t of steel")
    for each in results:
        if each.summary is not None:
            say(f"  {each.job.path}: written to {each.job.folder}")


def _row(built: Built) -> tuple[str, ...]:
    """One line of the table; what is not known is a dash."""
    told = built.summary or {}
    counts = told.get("findings") or {}
    return (
        str(built.job.path),
        f"{told['pieces']:,}" if told else "-",
        f"{told['mass_kg'] / 1000:,.2f}" if told else "-",
        *(str(counts[name]) if name in counts else "-" for name in ("error", "warning")),
        f"{built.seconds:.1f}",
        _RESULTS.get(built.code, _RESULTS[1]),
    )


def _data(built: Built) -> dict[str, Any]:
    """One description as plain data: what came of it, then the summary where it was built."""
    head = {
        "file": str(built.job.path),
        "folder": str(built.job.folder),
        "exit_code": built.code,
        "result": _RESULTS.get(built.code, _RESULTS[1]),
        "error": built.error,
        "seconds": round(built.seconds, 3),
    }
    return {**head, **(built.summary or {})}


def _complaints(results: Sequence[Built], *, quiet: bool) -> Iterator[str]:
    """What went wrong with each, and what the descriptions are warned of."""
    for each in results:
        if each.error:
            yield f"{each.job.path}: {_RESULTS.get(each.code, _RESULTS[1])}"
            yield from (f"  {line}" for line in each.error.splitlines())
        if not quiet:
            yield from (f"Warning: {each.job.path}: {warning}" for warning in each.warnings)


def _counted(count: int, noun: str) -> str:
    return f"{count} {noun}" if count == 1 else f"{count} {noun}s"
