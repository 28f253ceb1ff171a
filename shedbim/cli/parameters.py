"""What options of several commands take: their help, and the value of what was typed."""
# ruff: noqa: PLC0415 - what few calls need is imported by them, so that help comes at once

from __future__ import annotations

from datetime import datetime

import typer

from shedbim.errors import OutputError
from shedbim.outputs import LEVEL_NAMES, OUTPUTS, SCHEMAS, chosen

__all__ = [
    "LEVEL_HELP",
    "ONLY_NAMES",
    "SET_HELP",
    "check_line",
    "level_name",
    "moment_of",
    "names_of",
    "schema_name",
]

ONLY_NAMES = ", ".join(dict.fromkeys(word for row in OUTPUTS for word in (row.group, row.name)))
LEVEL_HELP = (
    "What models and pictures show: coordination (members trimmed, plates, heads and nuts of bolts), "
    "fabrication (every bolt and hole), outline (members alone)."
)
SET_HELP = (
    "Field set for this run over that of the file, items of a list counted from 0; may be repeated. "
    "Outputs go to a folder of their own, and say so."
)


def moment_of(text: str) -> datetime:
    """Give the moment of an ISO 8601 text; without a zone it is UTC."""
    from datetime import UTC

    try:
        moment = datetime.fromisoformat(text)
    except ValueError:
        raise typer.BadParameter(f"{text!r} is no ISO 8601 time such as 2024-05-17T09:30:00Z") from None
    return moment if moment.tzinfo else moment.replace(tzinfo=UTC)


def schema_name(text: str) -> str:
    """Give the name of a schema as it is spelled, whatever the case it is given in."""
    for name in SCHEMAS:
        if text.upper() == name:
            return name
    raise typer.BadParameter(f"no schema {text!r}; there are: {', '.join(SCHEMAS)}")


def level_name(text: str) -> str:
    """Give the name of a level of detail, whatever the case it is given in."""
    if text.lower() not in LEVEL_NAMES:
        raise typer.BadParameter(f"no level of detail {text!r}; there are: {', '.join(LEVEL_NAMES)}")
    return text.lower()


def names_of(text: str) -> tuple[str, ...]:
    """Give the output names in a list with commas."""
    names = tuple(word.strip() for word in text.split(",") if word.strip())
    try:
        chosen(names)
    except OutputError as refusal:
        raise typer.BadParameter(str(refusal)) from None
    return names


def check_line(text: str, longest: int, option: str) -> None:
    """Refuse what is empty, long, or not one line of plain text."""
    if not text.strip() or len(text) > longest or not text.isprintable():
        raise typer.BadParameter(f"{option} takes one line of 1 to {longest} letters")
