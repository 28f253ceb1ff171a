"""The shell of a part is the surface of its solid: closed, outwards, flat, and as exact as it is asked to be."""

from __future__ import annotations

from collections import Counter

import numpy as np
import pytest
import specimens

from shedbim.model.bars import Bar, EndCut
from shedbim.model.shells import shell
from shedbim.model.solids import solid

ERRORS = (0.02, 0.5, 2.0)
BARS = {
    **{part.mark: part.bar for part in specimens.parts()},
    # Its two ends meet within it: the prism between them would be inside out at one edge.
    "sliver": Bar(specimens.SECTIONS["RHS"], 160.0, EndCut(((0.0, 1.0),)), EndCut(((0.0, -1.0),))),
}


@pytest.mark.parametrize("chord_error", ERRORS)
@pytest.mark.parametrize("mark", BARS)
def test_a_shell_is_the_closed_surface_of_the_solid(mark: str, chord_error: float) -> None:
    bar = BARS[mark]
    made, body = shell(bar, chord_error), solid(bar, chord_error)
    directed = Counter(
        (a, b)
        for triangle in made.triangles.tolist()
        for a, b in zip(triangle, triangle[1:] + triangle[:1], strict=True)
    )
    assert set(directed.values()) == {1}
    assert all((b, a) in directed for a, b in directed)
    a, b, c = np.moveaxis(made.points[made.triangles], 1, 0)
    assert np.einsum("ij,ij->", a, np.cross(b, c)) / 6 == pytest.approx(body.volume(), rel=1e-9)
    box = np.array(body.bounding_box()).reshape(2, 3)
    assert np.allclose([made.points.min(axis=0), made.points.max(axis=0)], box, atol=1e-6)


@pytest.mark.parametrize("mark", BARS)
def test_normals_are_unit_and_square_to_faces_that_are_flat(mark: str) -> None:
    made = shell(BARS[mark], 0.5)
    assert np.allclose(np.linalg.norm(made.normals, axis=1), 1, atol=1e-12)
    a, b, c = np.moveaxis(made.points[made.triangles], 1, 0)
    cross = np.cross(b - a, c - a)
    assert (np.einsum("ij,ij->i", cross, made.normals) > 0.999999 * np.linalg.norm(cross, axis=1)).all()
    for face in np.unique(made.faces):
        same = made.normals[made.faces == face]
        assert np.abs(same - same[0]).max() < 1e-6


@pytest.mark.parametrize("name", ["CHS", "round"])
def test_the_box_of_a_round_bar_is_exact_however_coarse_its_chords(name: str) -> None:
    section = specimens.SECTIONS[name]
    for chord_error in (0.3, 0.5, 1.0, 2.0):
        points = shell(Bar(section, 1000.0), chord_error).points
        radius = section.width / 2
        assert np.allclose(
            [points.min(axis=0), points.max(axis=0)], [[0, -radius, -radius], [1000, radius, radius]]
        )
