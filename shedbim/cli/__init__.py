"""The command line: parsing, printing and exit codes. No engineering here.

Nothing that computes is imported before a command runs, so that help comes at once.
"""

from __future__ import annotations

import sys
from io import TextIOWrapper

from shedbim.cli.commands import app
from shedbim.cli.guard import guard
from shedbim.cli.speech import say
from shedbim.version import __version__

__all__ = ["main"]


def main() -> None:
    """Run the command line of this process and leave with its exit code."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, TextIOWrapper):
            stream.reconfigure(errors="backslashreplace")  # a letter a terminal lacks is no reason to fail
    with guard():
        # An option of the whole program would have its value checked before any help, by a heavy library.
        if sys.argv[1:] == ["--version"]:
            say(__version__)
            sys.exit()
        app(prog_name="shedbim")
