"""The commands that look something up or begin a description."""
# ruff: noqa: PLC0415 - a command imports its stage when it runs, so that help comes at once
# ruff: noqa: B008 - the way options are declared

from __future__ import annotations

from pathlib import Path

import typer

from shedbim.cli.guard import guard

__all__ = ["fields", "new", "presets", "schema", "sections", "summary_keys"]


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
