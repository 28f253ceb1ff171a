"""The commands about what was issued and what changed since: issue, compare, register."""
# ruff: noqa: PLC0415 - a command imports its stage when it runs, so that help comes at once
# ruff: noqa: B008 - the way options are declared

from __future__ import annotations

from pathlib import Path

import typer

from shedbim.cli.guard import guard
from shedbim.cli.parameters import check_line, moment_of

__all__ = ["compare", "issue", "register_check", "register_merge", "register_repair"]


def issue(
    file: Path = typer.Argument(..., metavar="FILE", help="The description, a YAML file."),
    status: str = typer.Option(
        ..., metavar="CODE", help="What it may be used for: S0 to S5, A1 and on, or a code of the project."
    ),
    reason: str = typer.Option(..., metavar="TEXT", help="Why it is issued, in one line."),
    revision: str = typer.Option(
        "", metavar="CODE", help="Its revision.  [default: the description's, or the next one]"
    ),
    time_stamp: str = typer.Option("", metavar="ISO", help="Time of the issue.  [default: now]"),
    json: bool = typer.Option(False, "--json", help="Print one JSON object and nothing else."),
) -> None:
    """Write the ids and marks of all pieces into the register beside the description.

    From then on a build gives every piece that still stands the same id and mark, whatever else changes. The
    register is a text file with one thing a line: keep it under version control with the description.

    \b
    Examples:
      shedbim issue store.yaml --status S3 --reason "for review"
      shedbim issue store.yaml --status A1 --reason "for construction" --revision C01
    """
    moment = moment_of(time_stamp) if time_stamp else None
    check_line(status, 12, "--status")
    check_line(reason, 300, "--reason")
    check_line(revision or "P01", 12, "--revision")
    with guard():
        from shedbim.cli.issue_command import run as run_issue

        run_issue(file, status, reason, revision, moment, as_json=json)


def compare(
    old: Path = typer.Argument(
        ..., metavar="OLD", help="The earlier state: a description, a register, or an IFC model."
    ),
    new: Path = typer.Argument(
        None, metavar="[NEW]", help="The later one.  [default: OLD as it is, since it was last issued]"
    ),
    settings: list[str] = typer.Option(
        None,
        "--set",
        metavar="FIELD=VALUE",
        help="Compare OLD, a description, with what it would be with this field; may be repeated.",
    ),
    out: Path = typer.Option(
        None, metavar="DIR", help="Folder for the changes as data, workbook, topics and view."
    ),
    time_stamp: str = typer.Option("", metavar="ISO", help="Time written into the files.  [default: now]"),
    json: bool = typer.Option(False, "--json", help="Print one JSON object and nothing else."),
) -> None:
    """Say piece by piece what was added, removed, moved, or made otherwise, and what that comes to.

    Pieces are met by GlobalId. Models may be anybody's; a description alone is compared with its register.

    \b
    Examples:
      shedbim compare store.yaml
      shedbim compare store-P01.yaml store.yaml --out outputs/changes
      shedbim compare store.yaml --set building.eaves="9 m"
      shedbim compare issue/P01/model.ifc issue/P02/model.ifc --json
    """
    moment = moment_of(time_stamp) if time_stamp else None
    with guard():
        from shedbim.cli.compare_command import run as run_compare

        run_compare(old, new, tuple(settings or ()), out, moment, as_json=json)


def register_check(file: Path = typer.Argument(..., metavar="FILE", help="The register.")) -> None:
    """Say whether a register is whole, and list its issues; every damaged line is named.

    \b
    Examples:
      shedbim register check store.register
    """
    with guard():
        from shedbim.cli.register_command import check as check_register

        check_register(file)


def register_repair(
    file: Path = typer.Argument(..., metavar="FILE", help="The damaged register; it is left as it is."),
    out: Path = typer.Option(
        None, metavar="FILE", help="Where to write.  [default: <stem>.repaired.register]"
    ),
) -> None:
    """Write all that is whole of a damaged register into another file, and say what is lost.

    \b
    Examples:
      shedbim register repair store.register
    """
    with guard():
        from shedbim.cli.register_command import repair

        repair(file, out)


def register_merge(
    ours: Path = typer.Argument(..., metavar="OURS", help="A register."),
    theirs: Path = typer.Argument(..., metavar="THEIRS", help="Another of the same project."),
    out: Path = typer.Option(..., metavar="FILE", help="Where to write the register of both."),
) -> None:
    """Make one register of two that were issued from apart; where they contradict one another, nothing is written.

    \b
    Examples:
      shedbim register merge ours.register theirs.register --out store.register
    """
    with guard():
        from shedbim.cli.register_command import merge

        merge(ours, theirs, out)
