"""The commands that make something of a description: build, check, watch, picture."""
# ruff: noqa: PLC0415 - a command imports its stage when it runs, so that help comes at once
# ruff: noqa: B008 - the way options are declared

from __future__ import annotations

from pathlib import Path

import typer

from shedbim.cli.guard import guard
from shedbim.cli.parameters import (
    LEVEL_HELP,
    ONLY_NAMES,
    SET_HELP,
    level_name,
    moment_of,
    names_of,
    schema_name,
)
from shedbim.cli.spreading import spread
from shedbim.outputs import LABEL_NAMES, LEVEL_NAMES, SCHEMAS, VIEW_NAMES

__all__ = ["build", "check", "picture", "watch"]


def build(
    files: list[Path] = typer.Argument(
        ..., metavar="FILE...", help="The description, a YAML file; of several, each is built by itself."
    ),
    out: Path = typer.Option(
        None,
        metavar="DIR",
        help="Folder for the outputs; of several files, each gets one in it.  [default: outputs/<file stem>]",
    ),
    settings: list[str] = typer.Option(None, "--set", metavar="FIELD=VALUE", help=SET_HELP),
    schema: str = typer.Option(
        SCHEMAS[0], metavar="NAME", help=f"Schema of the model file: {', '.join(SCHEMAS)}."
    ),
    level: str = typer.Option(LEVEL_NAMES[0], metavar="NAME", help=LEVEL_HELP),
    only: str = typer.Option("", metavar="NAMES", help=f"Only these outputs, with commas: {ONLY_NAMES}."),
    checks: bool = typer.Option(True, help="Check the shed, and write what was found."),
    jobs: int = typer.Option(
        None, metavar="N", min=1, max=256, help="Files built side by side.  [default: number of processors]"
    ),
    time_stamp: str = typer.Option("", metavar="ISO", help="Time written into the outputs.  [default: now]"),
    json: bool = typer.Option(False, "--json", help="Print one JSON object and nothing else."),
    quiet: bool = typer.Option(False, "--quiet", "-q", help="Print nothing but errors."),
) -> None:
    """Build the model and the schedules of a shed from its description.

    Everything is written or nothing: a build that fails leaves the outputs of the one before as they were.
    The same description with the same time stamp gives the same bytes.

    \b
    Examples:
      shedbim build store.yaml
      shedbim build store.yaml --out issue/P02 --schema IFC4X3_ADD2
      shedbim build store.yaml --level fabrication
      shedbim build store.yaml --only schedules,summary
      shedbim build store.yaml --time-stamp 2024-05-17T09:30:00Z
      shedbim build store.yaml --json
      shedbim build store.yaml --set building.roof.pitch="8 deg" --set "building.bays=[6 m, 2 x 7 m]"
      shedbim build *.yaml --out issue --jobs 4
    """
    chosen_ones = (schema_name(schema), level_name(level), names_of(only))
    moment = moment_of(time_stamp) if time_stamp else None
    paths, told = spread(files), tuple(settings or ())
    with guard():
        if len(paths) > 1:
            from shedbim.cli.portfolio_command import run as run_each

            run_each(
                paths, out, told, *chosen_ones, moment, jobs=jobs, checks=checks, as_json=json, quiet=quiet
            )
        else:
            from shedbim.cli.build_command import run as run_build

            run_build(
                paths[0], out, *chosen_ones, moment, settings=told, checks=checks, as_json=json, quiet=quiet
            )


def check(
    file: Path = typer.Argument(..., metavar="FILE", help="The description, a YAML file."),
    against: list[Path] = typer.Option(
        None, metavar="FILE", help="IFC model of another trade; may be repeated."
    ),
    settings: list[str] = typer.Option(None, "--set", metavar="FIELD=VALUE", help=SET_HELP),
    out: Path = typer.Option(
        None, metavar="DIR", help="Folder for the files with findings.  [default: outputs/<file stem>]"
    ),
    time_stamp: str = typer.Option("", metavar="ISO", help="Time written into the files.  [default: now]"),
    json: bool = typer.Option(False, "--json", help="Print one JSON object and nothing else."),
    quiet: bool = typer.Option(False, "--quiet", "-q", help="Print nothing but errors."),
) -> None:
    """Check a shed: clashes, bracing, stability, support, making and moving; and against other trades.

    Findings come as words, as findings.json and as BCF files. What each is held against, and what is accepted
    for a reason, is set in the description under checks: see `shedbim fields checks`. It says nothing of strength.

    \b
    Examples:
      shedbim check store.yaml
      shedbim check store.yaml --against services.ifc --against sprinklers.ifc
      shedbim check store.yaml --set bracing.bays=rule
      shedbim check store.yaml --json
    """
    moment = moment_of(time_stamp) if time_stamp else None
    with guard():
        from shedbim.cli.check_command import run as run_check

        run_check(file, out, tuple(against or ()), tuple(settings or ()), moment, as_json=json, quiet=quiet)


def watch(
    file: Path = typer.Argument(..., metavar="FILE", help="The description, a YAML file."),
    out: Path = typer.Option(
        None, metavar="DIR", help="Folder for the outputs.  [default: outputs/<file stem>]"
    ),
    only: str = typer.Option("", metavar="NAMES", help=f"Only these outputs, with commas: {ONLY_NAMES}."),
    checks: bool = typer.Option(True, help="Check the shed, and tell of findings that came or went."),
) -> None:
    """Build whenever the description is saved, and say what that changed; Ctrl-C ends it.

    A file that cannot be built is told of, and what was built last stays until it can.

    \b
    Examples:
      shedbim watch store.yaml
      shedbim watch store.yaml --only view --no-checks
    """
    outputs = names_of(only)
    with guard():
        from shedbim.cli.watch_command import run as run_watch

        run_watch(file, out, outputs, checks=checks)


def picture(
    file: Path = typer.Argument(..., metavar="FILE", help="The description, a YAML file."),
    view: str = typer.Option("isometric", metavar="NAME", help=f"What to draw: {', '.join(VIEW_NAMES)}."),
    of: str = typer.Option(
        "", metavar="WHAT", help="The line of a frame or bay, the key of a piece, the x,y,z of a place."
    ),
    out: Path = typer.Option(
        None,
        metavar="FILE",
        help="The picture, .png for pixels or .svg for lines.  [default: outputs/<file stem>/<view>.png]",
    ),
    labels: str = typer.Option(
        "", metavar="NAME", help=f"What is written on it: {', '.join(LABEL_NAMES)}.  [default: by view]"
    ),
    highlight: list[str] = typer.Option(
        None, metavar="KEY", help="Key or pattern of pieces to show in red, all others pale; may be repeated."
    ),
    settings: list[str] = typer.Option(None, "--set", metavar="FIELD=VALUE", help=SET_HELP),
    level: str = typer.Option(LEVEL_NAMES[0], metavar="NAME", help=LEVEL_HELP),
    caption: bool = typer.Option(True, help="Write project and view in the corner."),
    width: int = typer.Option(1600, min=100, max=8000, help="Pixels across."),
    height: int = typer.Option(1000, min=100, max=8000, help="Pixels down."),
) -> None:
    """Draw a view of a shed, hidden surfaces removed, without a screen or a graphics card.

    Elevations, plan and isometrics show the grid; a frame, a piece and a place also the marks of the pieces.

    \b
    Examples:
      shedbim picture store.yaml
      shedbim picture store.yaml --view frame --of 3 --out frame-3.svg
      shedbim picture store.yaml --view piece --of "3/truss/top chord/*" --labels keys
      shedbim picture store.yaml --view place --of 0,7000,9000 --highlight 2/column/A
      shedbim picture store.yaml --view plan --width 2400 --labels none --no-caption
    """
    detail = level_name(level)
    with guard():
        from shedbim.cli.picture_command import run as run_picture

        run_picture(
            file,
            view,
            of or None,
            out,
            settings=tuple(settings or ()),
            width=width,
            height=height,
            labels=labels or None,
            highlight=tuple(highlight or ()),
            level=detail,
            caption=caption,
        )
