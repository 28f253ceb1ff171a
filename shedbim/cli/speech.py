"""What the command line says: plain text, in which no text of a user can act on the terminal."""

from __future__ import annotations

import json
import sys
from typing import Any

__all__ = ["complain", "printable", "say", "show_json", "stage_line"]


def printable(text: str) -> str:
    """Give the text with every character that would steer a terminal, line feeds excepted, spelled out."""
    return "".join(
        letter if letter == "\n" or letter.isprintable() else letter.encode("unicode_escape").decode()
        for letter in text
    )


def say(text: str = "") -> None:
    """Print a line on standard output."""
    sys.stdout.write(printable(text) + "\n")


def complain(text: str) -> None:
    """Print a line on standard error."""
    sys.stderr.write(printable(text) + "\n")


def stage_line(stage: str, done: int, total: int) -> None:
    """Show on standard error how far a long work has come, in one line that each call writes anew."""
    text = f"{done + 1}/{total} {stage}" if done < total else ""
    sys.stderr.write("\r" + printable(text).ljust(40) + ("\r" if done >= total else ""))
    sys.stderr.flush()


def show_json(data: Any) -> None:
    """Print one JSON object, in letters that every terminal and pipe can carry."""
    sys.stdout.write(json.dumps(data, indent=2) + "\n")
