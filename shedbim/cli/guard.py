"""How a command ends: plain words on standard error and an exit code, no traceback for bad input."""

from __future__ import annotations

import sys
from collections.abc import Iterator
from contextlib import contextmanager

from shedbim.cli.speech import complain
from shedbim.errors import ModelError, ShedbimError

__all__ = ["EXIT_CODES", "guard"]

INTERRUPTED = 130

#: Exit code and meaning, as the help shows them.
EXIT_CODES: tuple[tuple[int, str], ...] = (
    (0, "done"),
    (1, "a fault of the program that nobody foresaw: please report the traceback"),
    (2, "a description, a section name or the command itself is refused"),
    (3, "outputs cannot be written; what stood there is untouched"),
    (4, "checked, and a severe finding is open"),
    (5, "a register is damaged, or two of them contradict one another"),
    (70, "a fault of the program that it found itself: please report it"),
    (130, "interrupted; what stood there is untouched"),
)


@contextmanager
def guard() -> Iterator[None]:
    """Turn an error of the package, or an interruption, into words and an exit code.

    Raises:
        SystemExit: with the exit code, when the command did not end well.
    """
    try:
        yield
    except ShedbimError as error:
        if isinstance(error, ModelError):
            complain("A fault of the program, not of your description; please report it.")
        complain(str(error))
        sys.exit(error.exit_code)
    except KeyboardInterrupt:
        complain("\nInterrupted; nothing was written.")
        sys.exit(INTERRUPTED)
