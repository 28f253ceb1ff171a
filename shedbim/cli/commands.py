"""The commands, their options and their help; what a command does is in a module it imports when it runs."""
# ruff: noqa: PLC0415 - a command imports its stage when it runs, so that help comes at once
# ruff: noqa: B008 - the way options are declared

from __future__ import annotations

from datetime import datetime
from pathlib import Path

import typer

from shedbim.cli.guard import EXIT_CODES, guard
from shedbim.cli.speech import say
from shedbim.cli.spreading import spread
from shedbim.errors import OutputError
from shedbim.outputs import LABEL_NAMES, LEVEL_NAMES, OUTPUTS, SCHEMAS, VIEW_NAMES, chosen
from shedbim.version import __version__

__all__ = ["app"]

_ONLY_NAMES = ", ".join(dict.fromkeys(word for row in OUTPUTS for word in (row.group, row.name)))
_LEVEL_HELP = (
    "What models and pictures show: coordination (members trimmed, plates, heads and nuts of bolts), "
    "fabrication (every bolt and hole), outline (members alone)."
)
_SET_HELP = (
    "Field set for this run over that of the file, items of a list counted from 0; may be repeated. "
    "Outputs go to a folder of their own, and say so."
)
_CODES = "\n".join(f"  {code:<5}{meaning}" for code, meaning in EXIT_CODES)

app = typer.Typer(
    name="shedbim",
    help=f"""One short text description of a steel shed in; an open BIM model and member schedules out.

\b
Begin with a preset, change it, build it:
  shedbim new store.yaml --preset seed-store
  shedbim build store.yaml
  shedbim check store.yaml
  shedbim picture store.yaml
  shedbim watch store.yaml

\b
Then look up what you can write there:
  shedbim fields            every field, what it allows, its default
  shedbim sections IPE      the sections of a family
  shedbim build --help      the outputs and their options

\b
Exit codes:
{_CODES}
""",
    no_args_is_help=True,
    add_completion=False,
    rich_markup_mode=None,
    pretty_exceptions_enable=False,
    context_settings={"help_option_names": ["-h", "--help"]},
)


def _moment(text: str) -> datetime:
    """Give the moment of an ISO 8601 text; without a zone it is UTC."""
    from datetime import UTC

    try:
        moment = datetime.fromisoformat(text)
    except ValueError:
        raise typer.BadParameter(f"{text!r} is no ISO 8601 time such as 2024-05-17T09:30:00Z") from None
    return moment if moment.tzinfo else moment.replace(tzinfo=UTC)


def _schema_name(text: str) -> str:
    """Give the name of a schema as it is spelled, whatever the case it is given in."""
    for name in SCHEMAS:
        if text.upper() == name:
            return name
    raise typer.BadParameter(f"no schema {text!r}; there are: {', '.join(SCHEMAS)}")


def _level_name(text: str) -> str:
    """Give the name of a level of detail, whatever the case it is given in."""
    if text.lower() not in LEVEL_NAMES:
        raise typer.BadParameter(f"no level of detail {text!r}; there are: {', '.join(LEVEL_NAMES)}")
    return text.lower()


def _names(text: str) -> tuple[str, ...]:
    """Give the output names in a list with commas."""
    names = tuple(word.strip() for word in text.split(",") if word.strip())
    try:
        chosen(names)
    except OutputError as refusal:
        raise typer.BadParameter(str(refusal)) from None
    return names


def _one_line(text: str, longest: int, option: str) -> None:
    """Refuse what is empty, long, or not one line of plain text."""
    if not text.strip() or len(text) > longest or not text.isprintable():
        raise typer.BadParameter(f"{option} takes one line of 1 to {longest} letters")


def _version(wanted: bool) -> None:
    if wanted:
        say(__version__)
        raise typer.Exit


@app.callback()
def _shedbim(
    version: bool = typer.Option(
        False, "--version", callback=_version, is_eager=True, help="Show the version."
    ),
) -> None:
    pass


@app.command(short_help="Build the model and the schedules.")
def build(
    files: list[Path] = typer.Argument(
        ..., metavar="FILE...", help="The description, a YAML file; of several, each is built by itself."
    ),
    out: Path = typer.Option(
        None,
        metavar="DIR",
        help="Folder for the outputs; of several files, each gets one in it.  [default: outputs/<file stem>]",
    ),
    settings: list[str] = typer.Option(None, "--set", metavar="FIELD=VALUE", help=_SET_HELP),
    schema: str = typer.Option(
        SCHEMAS[0], metavar="NAME", help=f"Schema of the model file: {', '.join(SCHEMAS)}."
    ),
    level: str = typer.Option(LEVEL_NAMES[0], metavar="NAME", help=_LEVEL_HELP),
    only: str = typer.Option("", metavar="NAMES", help=f"Only these outputs, with commas: {_ONLY_NAMES}."),
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
    chosen_ones = (_schema_name(schema), _level_name(level), _names(only))
    moment = _moment(time_stamp) if time_stamp else None
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


@app.command(short_help="Check whether the shed is sound to hand over.")
def check(
    file: Path = typer.Argument(..., metavar="FILE", help="The description, a YAML file."),
    against: list[Path] = typer.Option(
        None, metavar="FILE", help="IFC model of another trade; may be repeated."
    ),
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
      shedbim check store.yaml --json
    """
    moment = _moment(time_stamp) if time_stamp else None
    with guard():
        from shedbim.cli.check_command import run as run_check

        run_check(file, out, tuple(against or ()), moment, as_json=json, quiet=quiet)


@app.command(short_help="Write down what stands now as issued.")
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
    moment = _moment(time_stamp) if time_stamp else None
    _one_line(status, 12, "--status")
    _one_line(reason, 300, "--reason")
    _one_line(revision or "P01", 12, "--revision")
    with guard():
        from shedbim.cli.issue_command import run as run_issue

        run_issue(file, status, reason, revision, moment, as_json=json)


@app.command(short_help="Say what changed between two states of a building.")
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
    moment = _moment(time_stamp) if time_stamp else None
    with guard():
        from shedbim.cli.compare_command import run as run_compare

        run_compare(old, new, tuple(settings or ()), out, moment, as_json=json)


@app.command(short_help="Build again whenever the description is saved.")
def watch(
    file: Path = typer.Argument(..., metavar="FILE", help="The description, a YAML file."),
    out: Path = typer.Option(
        None, metavar="DIR", help="Folder for the outputs.  [default: outputs/<file stem>]"
    ),
    only: str = typer.Option("", metavar="NAMES", help=f"Only these outputs, with commas: {_ONLY_NAMES}."),
    checks: bool = typer.Option(True, help="Check the shed, and tell of findings that came or went."),
) -> None:
    """Build whenever the description is saved, and say what that changed; Ctrl-C ends it.

    A file that cannot be built is told of, and what was built last stays until it can.

    \b
    Examples:
      shedbim watch store.yaml
      shedbim watch store.yaml --only view --no-checks
    """
    outputs = _names(only)
    with guard():
        from shedbim.cli.watch_command import run as run_watch

        run_watch(file, out, outputs, checks=checks)


register_app = typer.Typer(
    help="Check, repair or merge the register that `shedbim issue` writes.",
    no_args_is_help=True,
    rich_markup_mode=None,
    context_settings={"help_option_names": ["-h", "--help"]},
)
app.add_typer(register_app, name="register", short_help="Check, repair or merge a register.")


@register_app.command("check", short_help="Say whether a register is whole, and what it holds.")
def register_check(file: Path = typer.Argument(..., metavar="FILE", help="The register.")) -> None:
    """Say whether a register is whole, and list its issues; every damaged line is named.

    \b
    Examples:
      shedbim register check store.register
    """
    with guard():
        from shedbim.cli.register_command import check as check_register

        check_register(file)


@register_app.command("repair", short_help="Write what is whole of a damaged register.")
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


@register_app.command("merge", short_help="Make one register of two.")
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


@app.command(short_help="Draw a picture of the shed.")
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
    settings: list[str] = typer.Option(None, "--set", metavar="FIELD=VALUE", help=_SET_HELP),
    level: str = typer.Option(LEVEL_NAMES[0], metavar="NAME", help=_LEVEL_HELP),
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
    detail = _level_name(level)
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


@app.command(short_help="Look up sections.")
def sections(
    name: list[str] = typer.Argument(
        None, metavar="[FAMILY or DESIGNATION]", help="What to show; all families without."
    ),
    json: bool = typer.Option(False, "--json", help="Print one JSON object and nothing else."),
) -> None:
    """List the section families, the sections of one family, or all properties of one section.

    \b
    Examples:
      shedbim sections
      shedbim sections IPE
      shedbim sections SHS 100x100x5
      shedbim sections Z 200x75x20x2.5 --json
    """
    with guard():
        from shedbim.cli.sections_command import run

        run(" ".join(name or ()), as_json=json)


@app.command(short_help="List what a description can say.")
def fields(
    name: str = typer.Argument("", metavar="[FIELD]", help="Only the fields that begin with this path."),
    json: bool = typer.Option(False, "--json", help="Print one JSON object and nothing else."),
) -> None:
    """List every field of a description: what it allows and what it is when left out.

    \b
    Examples:
      shedbim fields
      shedbim fields purlins
      shedbim fields frames.roof --json
    """
    with guard():
        from shedbim.cli.description_commands import show_fields

        show_fields(name, as_json=json)


@app.command(short_help="Print the JSON Schema of a description.")
def schema() -> None:
    """Print the JSON Schema of a description, for an editor that completes and checks while you write.

    \b
    Examples:
      shedbim schema > shed.schema.json
    and as the first line of the description:
      # yaml-language-server: $schema=shed.schema.json
    """
    with guard():
        from shedbim.cli.description_commands import show_schema

        show_schema()


@app.command(short_help="Begin a description from a preset.")
def new(
    file: Path = typer.Argument(
        ..., metavar="FILE", help="Where to write it; a file that is there is never touched."
    ),
    preset: str = typer.Option(
        ..., metavar="NAME", help="The preset to begin with; `shedbim presets` lists them."
    ),
) -> None:
    """Write a commented description from a preset, with a project id of its own.

    \b
    Examples:
      shedbim presets
      shedbim new store.yaml --preset seed-store
    """
    with guard():
        from shedbim.cli.description_commands import write_new

        write_new(file, preset)


@app.command(short_help="List the presets.")
def presets(
    json: bool = typer.Option(False, "--json", help="Print one JSON object and nothing else."),
) -> None:
    """List the presets that a new description can begin with.

    \b
    Examples:
      shedbim presets
      shedbim presets --json
    """
    with guard():
        from shedbim.cli.description_commands import show_presets

        show_presets(as_json=json)


@app.command("summary-keys", short_help="Explain the keys of summary.json.")
def summary_keys() -> None:
    """List the keys of summary.json and what each means.

    \b
    Examples:
      shedbim summary-keys
    """
    with guard():
        from shedbim.cli.tables import show_table
        from shedbim.writers.summary_keys import KEYS

        show_table(("key", "meaning"), KEYS)
