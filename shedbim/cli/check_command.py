"""What ``shedbim check`` does and prints: the findings, in words or as JSON, and the files that carry them."""

from __future__ import annotations

import sys
from collections.abc import Sequence
from datetime import UTC, datetime
from pathlib import Path

from shedbim.cli.findings_text import count_rows, counts_line, finding_lines
from shedbim.cli.speech import complain, say, show_json, stage_line
from shedbim.cli.tables import show_table
from shedbim.pipeline import build
from shedbim.writers.findings import findings_data

__all__ = ["SEVERE", "run"]

#: Exit code when a severe finding is open.
SEVERE = 4

#: The groups of outputs that carry findings.
_OUTPUTS = ("findings", "bcf")

_HEADINGS = ("area", "errors", "warnings", "notes", "waived")


def run(
    file: Path,
    out: Path | None,
    against: Sequence[Path],
    settings: Sequence[str],
    moment: datetime | None,
    *,
    as_json: bool,
    quiet: bool,
) -> None:
    """Check the shed in a description file, and print what was found.

    Args:
        file: the description.
        out: folder of the files with findings; that of the outputs where not given.
        against: models of other trades.
        settings: fields set for this run.
        moment: the time stamp of the files; now where not given.

    Raises:
        ShedbimError: as ``pipeline.build``.
        SystemExit: with ``SEVERE`` when a severe finding is open.
    """
    result = build(
        file,
        out,
        outputs=_OUTPUTS,
        against=against,
        settings=settings,
        timestamp=moment or datetime.now(UTC),
        progress=stage_line if sys.stderr.isatty() and not quiet and not as_json else None,
    )
    findings = result.findings or ()
    if as_json:
        show_json(findings_data(result.handover))
    elif not quiet:
        project = result.shed.project
        say(f"{project.number} {project.name}, revision {project.revision}: {counts_line(findings)}".strip())
        if findings:
            say()
            show_table(_HEADINGS, count_rows(findings), numbers=(1, 2, 3, 4))
        for line in finding_lines(result.shed, findings):
            say(line)
        say()
        say(f"Written to {result.folder}: {', '.join(path.name for path in result.files.values())}")
    if not quiet:
        for warning in result.description.warnings:
            complain(f"Warning: {warning}")
    if any(each.severe for each in findings):
        sys.exit(SEVERE)
