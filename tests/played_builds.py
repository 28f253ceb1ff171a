"""Builds that are played: in a module of their own that is light to import, for each process imports it anew."""

from __future__ import annotations

import os
import signal
import time
from pathlib import Path

from shedbim.errors import ModelError, OutputError
from shedbim.pipeline import BuildResult


def play(path: Path, folder: Path, **_: object) -> BuildResult:
    """Play a build as the name of the description says; a log beside the folder notes begin and end."""
    log = folder.with_name("log")
    with log.open("a") as sink:
        sink.write(f"+{path}\n")
    if path.stem == "dies":
        os.kill(os.getpid(), signal.SIGKILL)
    if path.stem == "breaks":
        raise ZeroDivisionError("nobody foresaw this")
    if path.stem == "listens":
        raise OutputError(f"hears an interrupt by {signal.getsignal(signal.SIGINT)!r}")
    if path.stem == "is-at-fault":
        raise ModelError("a promise is broken")
    time.sleep(600 if path.stem == "endless" else 0.3)
    with log.open("a") as sink:
        sink.write(f"-{path}\n")
    raise OutputError("cannot write")
