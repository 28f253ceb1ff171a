"""The command line: parsing, printing and exit codes. No engineering here.

Nothing that computes is imported before a command runs, so that help comes at once.
"""

from __future__ import annotations

import sys
from io import TextIOWrapper

from shedbim.cli.commands import app
from shedbim.cli.guard import guard

__all__ = ["main"]


def main() -> None:
    """Run the command line of this process and leave with its exit code."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, TextIOWrapper):
            stream.reconfigure(errors="backslashreplace")  # a letter a terminal lacks is no reason to fail
    with guard():
        app(prog_name="shedbim")
