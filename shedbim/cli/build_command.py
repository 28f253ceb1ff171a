"""What ``shedbim build`` does and prints: the build, then a summary that a person or a program reads."""

from __future__ import annotations

import sys
from collections.abc import Iterator, Sequence
from datetime import UTC, datetime
from pathlib import Path
from textwrap import wrap

from shedbim.checks.finding import Finding
from shedbim.cli.findings_text import counts_line
from shedbim.cli.speech import complain, say, show_json, stage_line
from shedbim.model.shed import Shed
from shedbim.outputs import OUTPUTS
from shedbim.pipeline import BuildResult, build
from shedbim.writers.imprint import CAUTIONS
from shedbim.writers.schedules.tables import by_role
from shedbim.writers.summary import summary

__all__ = ["report", "run"]

_WIDTH = 100  # characters of a line of the report

#: Groups with many fields that have a rule each.
_BY_RULE = ("connections", "checks")


def run(
    file: Path,
    out: Path | None,
    schema: str,
    level: str,
    outputs: tuple[str, ...],
    moment: datetime | None,
    *,
    settings: Sequence[str],
    checks: bool,
    as_json: bool,
    quiet: bool,
) -> None:
    """Build, and print what came of it: a report, one JSON object, or nothing.

    Args:
        moment: the time stamp of the outputs; now where not given.
        settings: fields set over those of the file, each as ``path=value``.
        checks: whether the shed is checked.

    Raises:
        ShedbimError: as ``pipeline.build``.
    """
    watched = not quiet and not as_json and _watched()
    result = build(
        file,
        out,
        settings=settings,
        schema=schema,
        level=level,
        outputs=outputs,
        checks=checks,
        timestamp=moment or datetime.now(UTC),
        progress=stage_line if watched else None,
    )
    if as_json:
        files = {name: str(path) for name, path in result.files.items()}
        show_json({**summary(result.shed, result.imprint, result.findings), "files": files})
    elif not quiet:
        for line in report(result):
            say(line)
    if not quiet:
        for warning in result.description.warnings:
            complain(f"Warning: {warning}")


def _watched() -> bool:
    """Whether a person may be looking on."""
    return sys.stderr.isatty()


def report(result: BuildResult) -> Iterator[str]:
    """Give the lines a person reads after a build."""
    shed, project = result.shed, result.shed.project
    joints = sum(len(run.pieces) for run in shed.joints)
    yield f"{project.number} {project.name}, revision {project.revision}".strip()
    yield (
        f"  {len(shed.pieces):,} pieces of {len(shed.parts):,} parts, {len(shed.assemblies):,} assemblies, "
        f"{joints:,} joints"
    )
    tonnes = shed.mass / 1000
    yield f"  {tonnes:,.2f} t of steel on {shed.footprint:,.0f} m²: {tonnes / shed.footprint:.4f} t/m²"
    yield ""
    table = by_role(shed)
    for role, pieces, mass in zip(
        table.column("role"), table.column("pieces"), table.column("mass total"), strict=True
    ):
        yield f"  {role:<18}{pieces:>9,}{float(mass) / 1000:>11,.2f} t"
    if missed := summary(shed, result.imprint)["largest_node_eccentricity"]:
        yield ""
        yield f"  axes at truss nodes miss the chord axis by {abs(missed['mm']):.0f} mm at most: {missed['pieces'][0]}"
    if result.findings is not None:
        yield from _listed("Checks:", _check_lines(shed, result.findings))
    yield from _listed("Left open, so by default:", _default_lines(shed))
    yield from _listed("Notes:", shed.notes)
    yield from _listed("Cautions:", CAUTIONS)
    yield from _listed(f"Written to {result.folder}:", _file_lines(result))


def _check_lines(shed: Shed, findings: Sequence[Finding]) -> list[str]:
    """How many findings there are, and each severe one."""
    severe = [f"{each.code.name}: {each.says}" for each in findings if each.severe]
    told = "; `shedbim check` tells of each" if findings else ""
    return [f"{counts_line(findings)}{told}", *severe]


def _default_lines(shed: Shed) -> list[str]:
    """What was left open: each field, but those of the big groups in one line, for they are many."""
    lines = []
    groups: dict[str, int] = dict.fromkeys(_BY_RULE, 0)
    for field, value in shed.defaults:
        group = next((name for name in _BY_RULE if field.startswith(f"{name}.")), None)
        if group is None:
            lines.append(f"{field}: {value}")
        else:
            groups[group] += 1
    lines += [
        f"{group}: {count} fields by rule; `shedbim fields {group}` lists them"
        for group, count in groups.items()
        if count
    ]
    return lines


def _file_lines(result: BuildResult) -> list[str]:
    meanings = {row.name: row.meaning for row in OUTPUTS}
    return [
        f"{path.name:<15}{path.stat().st_size / 1000:>10,.1f} kB  {meanings[name]}"
        for name, path in result.files.items()
    ]


def _listed(heading: str, lines: list[str] | tuple[str, ...]) -> Iterator[str]:
    """An empty line, the heading and the lines under it; nothing for no lines."""
    if lines:
        yield ""
        yield heading
        for line in lines:
            yield from wrap(line, _WIDTH, initial_indent="  ", subsequent_indent="    ")
