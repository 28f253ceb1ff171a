"""What ``shedbim picture`` does: one view of a shed as a PNG file."""

from __future__ import annotations

from functools import partial
from pathlib import Path
from typing import BinaryIO

from shedbim.cli.speech import say
from shedbim.pipeline import read_and_expand
from shedbim.saving import save
from shedbim.writers.pictures.views import render_view

__all__ = ["run"]


def run(file: Path, view: str, of: str | None, out: Path | None, width: int, height: int) -> None:
    """Draw a view of the shed in a description file.

    Args:
        view: its name.
        of: what it shows, where it asks for that.
        out: the PNG file; beside the description's outputs where not given.

    Raises:
        ShedbimError: when the description, the view or the place of the picture is refused.
    """
    target = out or Path("outputs") / file.stem / f"{view}.png"
    _, shed, _ = read_and_expand(file)
    data = render_view(shed, view, of, width=width, height=height)
    save(target.parent, {target.name: partial(_write, data)})
    say(f"Written to {target}")


def _write(data: bytes, sink: BinaryIO) -> None:
    sink.write(data)
