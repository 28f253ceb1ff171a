"""No two solids of a building share space, on the bodies and placements of the written model files; and their mass."""

from __future__ import annotations

from dataclasses import replace
from io import BytesIO

import built_models
import cast
import ifcopenshell.geom
import ifcopenshell.util.shape
import numpy as np
import pytest
from overlaps import Overlap, overlaps, touching

from shedbim.expand import expand
from shedbim.geometry.placements import apply
from shedbim.sections.section import STEEL_DENSITY
from shedbim.tolerance import SHARED_VOLUME
from shedbim.writers.ifc import write


def shared(model: built_models.Model):
    return overlaps(model.bodies, model.body, model.placement, SHARED_VOLUME)


BIG = "distribution-hall"


@pytest.mark.parametrize("name", [n for n in cast.CAST if n != BIG])
def test_no_two_pieces_share_more_than_a_cubic_centimetre(name):
    """At fabrication level: every bolt whole, in its holes."""
    model = built_models.model(name)
    assert len(model.names) == len(cast.shed_of(name).pieces)
    assert told(model, shared(model)) == []


@pytest.mark.parametrize("name", [n for n in cast.CAST if n != BIG])
def test_all_solids_weigh_what_the_shed_weighs(name):
    """Within a thousandth, though arcs are cut coarsely: bolts, which lose most by that, weigh little."""
    volume = built_models.model(name).volume
    assert volume * STEEL_DENSITY == pytest.approx(cast.shed_of(name).mass, rel=1e-3)


def test_nor_do_those_of_the_big_preset_shortened():
    """Four bays of its forty and three spans of its five, one of each length: every kind of part and joint."""
    short = cast.changed(
        BIG, building__bays=["6.5 m", "6 m", "7.5 m", "6.5 m"], building__spans=["30 m", "32 m", "28.5 m"]
    )
    shed, sink = expand(short), BytesIO()
    write(shed, sink)
    model = built_models.read(ifcopenshell.file.from_string(sink.getvalue().decode("ascii")))
    assert len(model.names) == len(shed.pieces)
    assert told(model, shared(model)) == []


def told(model: built_models.Model, found: list[Overlap]) -> list[str]:
    """Overlaps in words."""
    return [f"{model.names[o.first]} and {model.names[o.second]}: {o.volume:.0f} mm3" for o in found]


@pytest.mark.parametrize(
    ("name", "piece", "shift"),
    [
        ("seed-store", "2/truss/diagonal/A-B/3", (0.0, 0.0, 20.0)),  # into the top chord
        ("lean", "2-3/purlin/A-C/1/4", (0.0, 0.0, -35.0)),  # onto the rafters, 14 mm below
        ("lopsided", "1-2/wall brace/A/1/1", (-20.0, 0.0, 0.0)),  # into the brace that it passes, 10 mm off
        ("lopsided", "2-3/purlin/A-B/1/3/start/bolts 1", (0.0, 0.0, 15.0)),  # out of its holes
        ("lopsided", "3/column/B/start/base plate", (0.0, 0.0, 5.0)),  # into the column above
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
    """Against all pairs of one column, a truss and the purlins beside it with their cleats and bolts, one by one."""
    model = built_models.model("lopsided")
    parts = ("2/column/A", "2/truss/top chord", "2/truss/post", "2-3/purlin/A-B/1", "2-3/strut")
    mine = [i for i, name in enumerate(model.names) if name.startswith(parts)]
    assert 50 < len(mine) < 200
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


@pytest.mark.parametrize("name", ["flat", "joinery-workshop"])
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
