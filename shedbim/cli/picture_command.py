"""What ``shedbim picture`` does: one view of a shed as a PNG or SVG file, by the ending of its name."""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial
from pathlib import Path
from typing import BinaryIO

from shedbim.cli.speech import say
from shedbim.errors import OutputError
from shedbim.model.levels import at_level
from shedbim.outputs import PICTURE_ENDINGS
from shedbim.pipeline import default_folder, read_and_expand
from shedbim.saving import save
from shedbim.writers.pictures.views import render_view

__all__ = ["run"]


def run(
    file: Path,
    view: str,
    of: str | None,
    out: Path | None,
    *,
    settings: Sequence[str],
    width: int,
    height: int,
    labels: str | None,
    highlight: tuple[str, ...],
    level: str,
    caption: bool,
) -> None:
    """Draw a view of the shed in a description file.

    Args:
        file: the description.
        settings: fields set over those of the file, each as ``path=value``; the caption tells of them.
        view: its name.
        of: what it shows, where it asks for that.
        out: the picture; a PNG file beside the description's outputs where not given.
        width: pixels across.
        height: pixels down.
        labels: what is written on it; None for what the view has by default.
        highlight: keys or patterns of pieces that stand out.
        level: how much it shows, one of ``LEVEL_NAMES``.
        caption: whether project and view are written in the corner.

    Raises:
        ShedbimError: when the description, the view or the place of the picture is refused.
    """
    target = out or default_folder(file, settings) / f"{view}.png"
    form = target.suffix.removeprefix(".").lower()
    if form not in PICTURE_ENDINGS:
        endings = " or ".join(f".{ending}" for ending in PICTURE_ENDINGS)
        raise OutputError(f"a picture is a file that ends in {endings}, not {target.name!r}")
    _, shed, _ = read_and_expand(file, settings=settings)
    data = render_view(
        at_level(shed, level),
        view,
        of,
        form=form,
        width=width,
        height=height,
        labels=labels,
        highlight=highlight,
        caption=caption,
        remark=f"what if {', '.join(settings)}" if settings else "",
    )
    save(target.parent, {target.name: partial(_write, data)})
    say(f"Written to {target}")


def _write(data: bytes, sink: BinaryIO) -> None:
    sink.write(data)
