"""No two solids of a building share space: on the bodies and placements of the written model files."""

from __future__ import annotations

from dataclasses import replace

import built_models
import cast
import ifcopenshell.geom
import ifcopenshell.util.shape
import numpy as np
import pytest
from invariants import bodies
from overlaps import overlaps, touching

from shedbim.geometry.placements import apply
from shedbim.tolerance import SHARED_VOLUME


def shared(model: built_models.Model):
    return overlaps(model.bodies, model.body, model.placement, SHARED_VOLUME)


@pytest.mark.parametrize("name", [n for n in cast.CAST if n != "valley"])
def test_no_two_pieces_share_more_than_a_cubic_centimetre(name):
    model = built_models.model(name)
    assert len(model.names) == len(cast.shed_of(name).pieces)
    found = [f"{model.names[o.first]} and {model.names[o.second]}: {o.volume:.0f} mm3" for o in shared(model)]
    assert found == []


def test_nor_do_solids_that_the_library_meshes_slowly():
    """The specimen with the most tubes, on our own solids."""
    shed = cast.shed_of("valley")
    assert overlaps(bodies(shed), shed.pieces.part, shed.pieces.placement, SHARED_VOLUME) == []


@pytest.mark.parametrize(
    ("name", "piece", "shift"),
    [
        ("seed-store", "2/truss/diagonal/A-B/3", (0.0, 0.0, 20.0)),  # into the top chord
        ("lean", "2-3/purlin/A-C/1/4", (0.0, 0.0, -35.0)),  # onto the rafters, 14 mm below
        ("lopsided", "1-2/wall brace/A/1/1", (-20.0, 0.0, 0.0)),  # into the brace that it passes, 10 mm off
    ],
)
def test_a_piece_out_of_its_place_is_found(name, piece, shift):
    model = built_models.model(name)
    placement = model.placement.copy()
    placement[model.names.index(piece), :, 3] += shift
    found = shared(replace(model, placement=placement))
    assert found
    assert all(piece in (model.names[o.first], model.names[o.second]) for o in found)


def test_a_broken_piece_is_found_wherever_it_stands():
    """Every pair is looked at, though equal ones only once: the same piece, spoiled on each line in turn."""
    model = built_models.model("depot")
    for line in ("2", "4", "8"):
        piece = model.names.index(f"{line}/truss/post/B-C/5")
        placement = model.placement.copy()
        placement[piece, :, 3] += (0.0, 0.0, 20.0)
        found = shared(replace(model, placement=placement))
        assert found
        assert {piece} <= {found[0].first, found[0].second}


def test_the_search_misses_no_pair():
    """Against all pairs of one frame and the purlins beside it, one by one."""
    model = built_models.model("lopsided")
    mine = [i for i, name in enumerate(model.names) if name.startswith(("2/", "2-3/purlin", "2-3/strut"))]
    body, placement = model.body[mine], model.placement[mine].copy()
    placement[::7, :, 3] += 30.0  # so that some do overlap
    found = {(o.first, o.second) for o in overlaps(model.bodies, body, placement, SHARED_VOLUME)}
    placed = [model.bodies[b].transform(at) for b, at in zip(body, placement, strict=True)]
    wanted = {
        (i, j)
        for i in range(len(mine))
        for j in range(i + 1, len(mine))
        if (placed[i] ^ placed[j]).volume() > SHARED_VOLUME
    }
    assert len(wanted) > 3
    assert {tuple(sorted(pair)) for pair in found} == wanted
    near = {
        tuple(sorted(pair))
        for pair in zip(*(t.tolist() for t in touching(model.bodies, body, placement)), strict=True)
    }
    assert wanted <= near


@pytest.mark.parametrize("name", ["lopsided", "packing-house"])
def test_pieces_lie_where_the_library_puts_them(name):
    """Our reading of types, maps and placements beside the library's own, for one piece of each type."""
    file, model = built_models.opened(name), built_models.model(name)
    settings = ifcopenshell.geom.settings()
    settings.set("use-world-coords", True)
    firsts = np.unique(model.body, return_index=True)[1]
    elements = {e.Name: e for e in file.by_type("IfcElement")}
    for i in firsts.tolist():
        shape = ifcopenshell.geom.create_shape(settings, elements[model.names[i]])
        theirs = ifcopenshell.util.shape.get_vertices(shape.geometry) * 1000
        ours = np.asarray(model.bodies[model.body[i]].to_mesh().vert_properties, float)[:, :3]
        ours = apply(model.placement[i], ours)
        # The library's arcs are coarser here.
        np.testing.assert_allclose(theirs.min(axis=0), ours.min(axis=0), atol=0.5)
        np.testing.assert_allclose(theirs.max(axis=0), ours.max(axis=0), atol=0.5)
