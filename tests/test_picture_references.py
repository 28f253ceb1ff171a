"""Pictures are as they were when they were last looked at; see picture_references.py."""

from __future__ import annotations

import numpy as np
import pytest
from cast import shed_of
from picture_references import FOLDER, HEIGHT, REFERENCES, WIDTH, alike, difference, drawn, stored
from picture_scenes import decoded

from shedbim.writers.pictures.png import png
from shedbim.writers.pictures.views import VIEWS, render_view

NAMES = [name for name, *_ in REFERENCES]


@pytest.mark.parametrize("name", NAMES)
def test_picture_is_as_stored(name: str) -> None:
    now = drawn(name)
    assert alike(now, stored(name)), difference(decoded(now), decoded(stored(name)))


def test_all_are_stored_none_is_left_over_and_they_are_small() -> None:
    files = list(FOLDER.glob("*"))
    assert sorted(path.stem for path in files) == sorted(NAMES)
    assert sum(path.stat().st_size for path in files) < 150_000
    assert {view for _, _, view, _, _ in REFERENCES} == set(VIEWS)


def test_the_comparison_finds_another_frame_other_labels_a_highlight_a_shift_and_a_hole() -> None:
    frame = stored("lopsided-frame")
    assert alike(frame, frame)
    shed = shed_of("lopsided")
    assert not alike(render_view(shed, "frame", "1", width=WIDTH, height=HEIGHT), frame)
    assert not alike(render_view(shed, "frame", "2", labels="keys", width=WIDTH, height=HEIGHT), frame)
    assert not alike(
        render_view(shed, "frame", "2", highlight=["2/column/A"], width=WIDTH, height=HEIGHT), frame
    )
    # Whole views, where one piece of hundreds is little: one brace fewer, and everything a pixel aside.
    whole = decoded(stored("lopsided-isometric"))
    assert not alike(png(np.roll(whole, 1, axis=1)), stored("lopsided-isometric"))
    patched = whole.copy()
    patched[80:100, 150:170] = 255
    assert not alike(png(patched), stored("lopsided-isometric"))


def test_the_comparison_lets_rounding_pass_and_no_more() -> None:
    frame = stored("lopsided-frame")
    pixels = decoded(frame).copy()
    pixels[::40, ::16] ^= 255  # one pixel in 640, as if two surfaces changed places there
    mean, share = difference(pixels, decoded(frame))
    assert share == pytest.approx(1 / 640, rel=0.05)
    assert 0.2 < mean < 0.5
    assert not alike(png(pixels), frame)
    rounded = decoded(frame).copy()
    rounded[::40, ::32] -= np.minimum(rounded[::40, ::32], 90)
    rounded[1::16] = np.where(rounded[1::16] < 255, rounded[1::16] + 1, 254)
    assert alike(png(rounded), frame)
