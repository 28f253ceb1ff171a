"""What the commands about the description print and write: its fields, its schema, presets, a new one."""

from __future__ import annotations

from dataclasses import asdict
from itertools import takewhile
from pathlib import Path
from uuid import uuid4

from shedbim.cli.speech import say, show_json
from shedbim.cli.tables import show_table
from shedbim.description.listing import all_fields
from shedbim.description.presets import new_description, preset_names, preset_text
from shedbim.description.schema import json_schema
from shedbim.errors import DescriptionError, Fault
from shedbim.fields import nearest
from shedbim.saving import save_new

__all__ = ["show_fields", "show_presets", "show_schema", "write_new"]


def show_fields(start: str, *, as_json: bool) -> None:
    """Print every field, with its default, whose path is ``start`` or lies under it; all for an empty one.

    Raises:
        DescriptionError: when there is no such field.
    """
    every = all_fields()
    rows = [row for row in every if not start or f"{row.path}.".startswith(f"{start}.")]
    if not rows:
        known = {".".join(row.path.split(".")[:depth]) for row in every for depth in range(1, 5)}
        raise DescriptionError(
            [Fault("there is no such field", field=start, nearest=nearest(start, sorted(known)))]
        )
    if as_json:
        show_json({"fields": [asdict(row) for row in rows]})
        return
    for row in rows:
        say(f"{row.path}: {row.default or '(must be given)'}")
        say(f"    {row.explanation}" + (f"; only with {row.condition}" if row.condition else ""))
        say(f"    allowed: {row.allowed}")


def show_schema() -> None:
    """Print the JSON Schema of a description."""
    show_json(json_schema())


def show_presets(*, as_json: bool) -> None:
    """Print the names of the presets, each with the first sentence in it."""
    rows = [(name, _first_comment(preset_text(name))) for name in preset_names()]
    if as_json:
        show_json({"presets": [{"name": name, "meaning": meaning} for name, meaning in rows]})
    else:
        show_table(("preset", "what"), rows)


def write_new(file: Path, preset: str) -> None:
    """Write a description from a preset, with an id that no other project has.

    Raises:
        DescriptionError: when there is no such preset.
        OutputError: when the file is there already or cannot be written.
    """
    save_new(file, new_description(preset, str(uuid4())))
    say(f"Wrote {file}. Its project id is new: keep it, for every id in the outputs hangs on it.")
    say(f"Change what you like in it, then: shedbim build {file}")


def _first_comment(text: str) -> str:
    """The first sentence of the comment that a description begins with."""
    comment = takewhile(lambda line: line.startswith("#"), text.splitlines())
    words = " ".join(line.lstrip("# ").strip() for line in comment)
    return words.split(". ")[0].removesuffix(".")
