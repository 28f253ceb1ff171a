"""The stored pictures that pictures are compared with, and how; run it to renew them after a wanted change.

They are snapshots, looked at when they were made: they say that a picture is as it was, not that it is right.
"""

from __future__ import annotations

from pathlib import Path

import numpy as np
from cast import shed_of
from numpy.typing import NDArray
from picture_scenes import decoded

from shedbim.writers.pictures.views import render_view

FOLDER = Path(__file__).parent / "pictures"
WIDTH, HEIGHT = 320, 200

#: File, specimen, view, argument, highlighted keys.
REFERENCES: tuple[tuple[str, str, str, str | None, tuple[str, ...]], ...] = (
    ("lopsided-isometric", "lopsided", "isometric", None, ()),
    ("lopsided-frame", "lopsided", "frame", "2", ()),
    ("lopsided-place", "lopsided", "place", "0,6900,5600", ("2/column/A",)),
    ("valley-front", "valley", "front", None, ()),
    ("valley-plan", "valley", "plan", None, ()),
    ("valley-side", "valley", "side", None, ()),
    ("valley-piece", "valley", "piece", "20/column/*", ()),
    ("lean-bay", "lean", "bay", "1", ()),
    ("flat-back", "flat", "back", None, ()),
)

#: Another processor may round the last digit of a depth otherwise, and a pixel where two surfaces meet then
#: takes the other colour: few pixels may differ, and the whole hardly.
MOST_MEAN = 0.25  # mean of the differences of all channels, of 255
MOST_PIXELS = 0.005  # share of pixels of which a channel differs by more than NOTICED
NOTICED = 16


def drawn(name: str) -> bytes:
    """The PNG of a reference as it is drawn now."""
    (row,) = (row for row in REFERENCES if row[0] == name)
    _, specimen, view, argument, highlight = row
    return render_view(shed_of(specimen), view, argument, width=WIDTH, height=HEIGHT, highlight=highlight)


def stored(name: str) -> bytes:
    """The PNG of a reference as it was kept."""
    return (FOLDER / f"{name}.png").read_bytes()


def difference(one: NDArray[np.uint8], other: NDArray[np.uint8]) -> tuple[float, float]:
    """Mean difference of the channels of two pictures, and the share of pixels that differ noticeably."""
    assert one.shape == other.shape
    off = np.abs(one.astype(int) - other.astype(int))
    return float(off.mean()), float((off.max(axis=2) > NOTICED).mean())


def alike(one: bytes, other: bytes) -> bool:
    """Whether two PNG pictures are the same within the tolerances."""
    mean, share = difference(decoded(one), decoded(other))
    return mean <= MOST_MEAN and share <= MOST_PIXELS


def main() -> None:
    """Write all references anew and take away those no longer named."""
    FOLDER.mkdir(exist_ok=True)
    for old in FOLDER.glob("*.png"):
        old.unlink()
    for name, *_ in REFERENCES:
        (FOLDER / f"{name}.png").write_bytes(drawn(name))


if __name__ == "__main__":
    main()
