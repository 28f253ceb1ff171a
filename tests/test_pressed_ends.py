"""Tubes with ends pressed flat: what they weigh and measure, which are alike, their bodies, and their joints."""

from __future__ import annotations

from collections import Counter
from dataclasses import replace
from functools import cache
from itertools import combinations
from math import cos, pi, radians, sin

import cast
import ifc_models
import ifcopenshell
import ifcopenshell.geom
import ifcopenshell.util.element
import ifcopenshell.util.shape
import joint_bench
import numpy as np
import pytest
import schema_rules
import specimens
from fastened import FASTENING_RULES
from invariants import coarse_bodies
from manifold3d import Manifold
from overlaps import overlaps
from test_joint_struts import CARRIERS, _strut

from shedbim.description import read_text
from shedbim.description.connections import Connections
from shedbim.errors import DescriptionError, ModelError
from shedbim.expand import expand
from shedbim.expand.joints.contract import Joint
from shedbim.expand.joints.gusset_outline import made_solids, member_solid
from shedbim.expand.joints.strut_end import strut_end
from shedbim.fasteners.distances import wrench_wall
from shedbim.fasteners.holes import hole_diameter
from shedbim.geometry.placements import translation
from shedbim.model.bars import Bar, EndCut
from shedbim.model.feature_congruence import bar_symmetries
from shedbim.model.holes import Hole, Notch
from shedbim.model.joints import JointKind
from shedbim.model.levels import at_level
from shedbim.model.marks import Stock, group_parts
from shedbim.model.pressed_ends import Pressed
from shedbim.model.roles import Role
from shedbim.model.shed import Assemblies, Part, Pieces, Shed
from shedbim.model.shells import shell
from shedbim.model.solids import solid
from shedbim.sections.catalogue import section
from shedbim.tolerance import SHARED_VOLUME
from shedbim.writers.glb.meshes import flat_mesh
from shedbim.writers.ifc import SCHEMAS
from shedbim.writers.view.meshes import view_shell

# The library does not close the file it reads a schema's rules from.
pytestmark = pytest.mark.filterwarnings(
    r"ignore:Exception ignored in. <_io.FileIO name='.*ifcopenshell:pytest.PytestUnraisableExceptionWarning"
)

TUBE = section("CHS 88.9x4")
FINE = 0.002

SMALL = """
project: {id: 3f2f0c1e-51a5-4d0b-8a7e-0b6a4b3d7a21, name: Pressed Shed, number: T9}
building:
  spans: [13.7 m]
  bays: [5.3 m, 6.1 m]
  eaves: 4.6 m
  roof: {form: gable, pitch: 8 deg, pitch_right: 11 deg}
frames:
  columns: {section: HEA 280}
  roof: {system: rafter, section: IPE 330}
  gables: {system: rafter, rafter: IPE 240, posts: HEA 160, post_spacing: 4.9 m}
purlins: {section: C 175x65x18x2.0, spacing: 1.5 m}
rails: {section: C 150x65x18x1.6, spacing: 1.5 m}
bracing:
  bays: [first]
  roof: {pattern: single, section: CHS 76.1x4}
  walls: {pattern: single, section: CHS 88.9x5}
  struts: {section: CHS 76.1x3.2}
  eaves_strut: {section: CHS 88.9x4}
connections:
  tube_ends: {struts: flattened, braces: flattened}
"""


def _way(degrees: float) -> tuple[float, float, float]:
    return 0.0, sin(radians(degrees)), cos(radians(degrees))


def _pressed(degrees: float = 33.0, flat: float = 160.0, taper: float = 110.0) -> Pressed:
    return Pressed(flat, taper, _way(degrees))


def _through(x: float, degrees: float, diameter: float = 22.0) -> Hole:
    """A hole through the flat of ``TUBE``."""
    return Hole((x, 0.0, 0.0), _way(degrees), diameter, 8.0)


def _slice(body: Manifold, x: float) -> float:
    """The area of a solid's section at x."""
    return body.rotate((0.0, -90.0, 0.0)).slice(x).area()


# --- what it weighs and measures

BARS = {
    "both ends": Bar(
        TUBE, 2311.0,
        holes=(_through(40.0, 33), _through(2311.0 - 55.0, 90, 18.0)),
        pressed=(_pressed(), _pressed(90.0, 130.0, 70.0)),
    ),
    "one end": Bar(section("CHS 48.3x5"), 611.0, pressed=(None, _pressed(12.0, 83.0, 61.0))),
    "a thin wall": Bar(section("CHS 76.1x3.2"), 1303.0, EndCut(((0.2, -0.3),)), pressed=(None, _pressed(-71.0))),
}  # fmt: skip


@pytest.mark.parametrize("name", BARS)
def test_the_figures_are_those_of_the_solid(name: str) -> None:
    bar = BARS[name]
    body = solid(bar, FINE)
    assert body.volume() == pytest.approx(bar.volume, rel=1e-4)
    low, high = np.array(bar.box)
    assert np.array(body.bounding_box()) == pytest.approx(np.concatenate([low, high]), abs=0.01)
    # The painted surface: that of the bar filled, without its end faces.
    filled = Bar(bar.section, bar.length, bar.start, bar.end, pressed=bar.pressed)
    made = shell(filled, FINE)
    a, b, c = np.moveaxis(made.points[made.triangles], 1, 0)
    areas = np.linalg.norm(np.cross(b - a, c - a), axis=1) / 2
    middle = (a + b + c) / 3
    outwards = np.hypot(*(made.normals[:, 1:]).T) > 0.01
    # Inner faces look to the axis, but for those of the flat: there are none.
    outside = (made.normals[:, 1:] * middle[:, 1:]).sum(axis=1) > 0
    if bar.start.is_square:
        drilled = sum(2 * hole.area for hole in bar.holes)
        assert areas[outwards & outside].sum() - drilled == pytest.approx(bar.surface, rel=3e-4)


@pytest.mark.parametrize("name", BARS)
def test_pressing_neither_loses_nor_gains_steel(name: str) -> None:
    bar = BARS[name]
    plain = Bar(bar.section, bar.length, bar.start, bar.end)
    assert replace(bar, holes=()).mass == pytest.approx(plain.mass, rel=1e-12)
    pressed, at_end = (bar.pressed[0], False) if bar.pressed[0] else (bar.pressed[1], True)
    assert pressed is not None
    body = solid(replace(bar, holes=()), FINE)

    def area(x: float) -> float:
        return _slice(body, bar.length - x if at_end else x)

    assert area(0.4 * pressed.flat) == pytest.approx(bar.section.area, rel=1e-3)
    nodes, weights = np.polynomial.legendre.leggauss(7)
    taper = [area(pressed.flat + (n + 1) / 2 * pressed.taper) for n in nodes]
    assert float(np.array(taper) @ weights) / 2 == pytest.approx(bar.section.area, rel=1e-3)


def test_a_flat_is_two_walls_thick_and_half_the_middle_line_wide() -> None:
    """CHS 88.9 x 4: 8 mm by pi (88.9 - 4) / 2 = 133.4 mm."""
    bar = Bar(TUBE, 1500.0, pressed=(_pressed(0.0), None))
    flat = solid(bar, FINE).trim_by_plane((-1.0, 0.0, 0.0), -159.0)
    assert flat.bounding_box() == pytest.approx((0.0, -66.68, -4.0, 159.0, 66.68, 4.0), abs=0.01)
    assert abs(2 * 66.68 - pi * 84.9 / 2) < 0.01


def test_the_solid_is_closed_and_the_walls_part_inside_it() -> None:
    body = solid(BARS["one end"])
    assert body.status().name == "NoError"
    assert [piece.volume() > 0 for piece in body.decompose()] == [True]
    assert body.genus() == 0  # a pocket, open at one end
    inside = solid(Bar(TUBE, 2000.0, pressed=(_pressed(), _pressed(5.0))))
    outer, void = sorted(inside.decompose(), key=lambda each: -each.volume())
    assert outer.genus() == void.genus() == 0
    assert void.volume() < 0  # the bore is shut at both ends


def test_what_cannot_be_pressed_is_refused() -> None:
    with pytest.raises(ModelError, match="round"):
        Bar(section("SHS 60x60x4"), 1000.0, pressed=(_pressed(), None))
    with pytest.raises(ModelError, match="square"):
        Bar(TUBE, 1000.0, EndCut(((0.1, 0.0),)), pressed=(_pressed(), None))
    with pytest.raises(ModelError, match="short"):
        Bar(TUBE, 540.0, pressed=(_pressed(), _pressed()))


# --- which are alike


def _grouped(*bars: Bar) -> list[int]:
    """The part that each bar is, by the rule of marks; each motion lays the part on its bar."""
    found = group_parts([Stock(Role.STRUT, bar, "S355", "painted") for bar in bars])
    for bar, part, motion in zip(bars, found.part_of.tolist(), found.motion, strict=True):
        one, other = solid(bar, 0.05), solid(found.parts[part].bar, 0.05).transform(motion)
        shared = (one ^ other).volume()
        assert shared == pytest.approx(one.volume(), rel=0.02)
        assert found.parts[part].bar.volume == pytest.approx(bar.volume, rel=1e-3)
    return found.part_of.tolist()


def _flattened(degrees: float, other: float, bolts: float = 40.0, flat: float = 160.0) -> Bar:
    """A tube with both ends pressed, one bolt in each; its ends look ``degrees`` and ``other`` round its axis."""
    holes = (_through(bolts, degrees), _through(1900.0 - 47.0, other))
    return Bar(TUBE, 1900.0, holes=holes, pressed=(_pressed(degrees, flat), _pressed(other, 90.0)))


def _flipped(bar: Bar) -> Bar:
    """The same bar seen from its other end: half a turn about y."""

    def hole(each: Hole) -> Hole:
        (x, y, z), (i, j, k) = each.centre, each.axis
        return replace(each, centre=(bar.length - x, y, -z), axis=(-i, j, -k))

    def end(each: Pressed | None) -> Pressed | None:
        return each and replace(each, axis=(0.0, each.axis[1], -each.axis[2]))

    first, last = (end(each) for each in bar.pressed)
    return replace(bar, holes=tuple(map(hole, bar.holes)), pressed=(last, first))


def test_turned_and_flipped_bars_are_one_part() -> None:
    one = _flattened(10, 40)
    assert len(set(_grouped(one, _flattened(73, 103), _flattened(190, 40), _flipped(one)))) == 1


def test_a_part_that_starts_at_the_other_end_of_its_bar_keeps_its_flat() -> None:
    """The end that is cut aslant comes last in the part, whichever end of the bar it is."""
    bar = BARS["a thin wall"]
    found = group_parts([Stock(Role.STRUT, bar, "S355", "painted")])
    assert found.flipped.tolist() == [True]
    assert [end is not None for end in found.parts[0].bar.pressed] == [True, False]
    _grouped(bar)


def test_bars_pressed_otherwise_are_other_parts() -> None:
    others = [
        _flattened(10, 40),
        _flattened(10, 44),  # turned farther
        _flattened(10, -20),  # its mirror image
        _flattened(10, 40, flat=161.0),
        _flattened(10, 40, bolts=43.0),
        replace(_flattened(10, 40), pressed=(_pressed(10.0), None), holes=_flattened(10, 40).holes[:1]),
        Bar(TUBE, 1900.0),
    ]
    assert len(set(_grouped(*others))) == len(others)


def test_holes_aslant_to_nothing_tell_ends_without_bolts_apart() -> None:
    """Undrilled ends, one turned by a right angle: told by the flats alone."""
    bare = [replace(_flattened(10, other), holes=()) for other in (10, 100, 190)]
    assert _grouped(*bare) in ([0, 1, 0], [1, 0, 1])


@pytest.mark.parametrize("other", [25.0, 61.0])
def test_half_turns_and_flips_are_all_that_is_left(other: float) -> None:
    bar = Bar(TUBE, 1900.0, pressed=(_pressed(25.0), _pressed(other)))
    motions, is_free = bar_symmetries(bar)
    assert not is_free
    assert len(motions) == 4
    body = solid(bar, 0.05)
    for motion in motions:
        assert (body ^ body.transform(motion)).volume() == pytest.approx(body.volume(), rel=0.02)
    assert len(bar_symmetries(replace(bar, pressed=(bar.pressed[0], None)))[0]) == 2


# --- in the model file


def _shed(*bars: Bar) -> Shed:
    """A shed of nothing but these bars, each a part."""
    plain = specimens.shed()
    count = len(bars)
    return Shed(
        project=plain.project,
        georeference=plain.georeference,
        grid=plain.grid,
        parts=tuple(
            Part(f"S{i}", Role.STRUT, bar, "S355", "galvanized") for i, bar in enumerate(bars, start=1)
        ),
        pieces=Pieces(
            tuple(f"1-2/strut/{i}" for i in range(count)),
            np.arange(count),
            translation(np.outer(313.0 * np.arange(count), (1.0, 0.0, 0.3))),
            np.full(count, -1),
        ),
        assembly_types=(),
        assemblies=Assemblies((), np.zeros(0, np.int64), np.zeros((0, 3, 4)), np.zeros(0, np.int64)),
        joints=(),
    )


#: A vented tube, one that is slotted at its other end, one cut aslant there, and a very short one.
WRITTEN = (
    replace(BARS["both ends"], holes=(
        *BARS["both ends"].holes, Hole((311.0, 0.0, 42.45), (0.0, 0.0, 1.0), 25.0, 4.0),
    )),
    Bar(TUBE, 1811.0, holes=(_through(44.0, -20),), pressed=(_pressed(-20.0), None), notches=(
        Notch(((0.0, -6.0), (97.0, -6.0), (97.0, 6.0), (0.0, 6.0)), (1815.0, 0.0, 50.0),
              (-1.0, 0.0, 0.0), (0.0, 1.0, 0.0), 100.0),
    )),
    BARS["a thin wall"],
    Bar(section("CHS 60.3x4"), 455.0, pressed=(_pressed(0.0, 100.0, 75.0), _pressed(80.0, 100.0, 75.0))),
)  # fmt: skip


@cache
def _model(schema: str) -> ifcopenshell.file:
    return ifc_models.opened(_shed(*WRITTEN), schema=schema)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_the_file_is_valid_and_has_the_volume(schema: str) -> None:
    """The rules are tried on one bar, which has all there is in few faces: they take long."""
    assert schema_rules.findings(ifc_models.opened(_shed(WRITTEN[1]), schema=schema)) == []
    file = _model(schema)
    assert schema_rules.findings(file, rules=False) == []
    settings = ifcopenshell.geom.settings()
    settings.set("mesher-linear-deflection", 2e-5)
    pieces = {each.Name: each for each in file.by_type("IfcMember")}
    for i, bar in enumerate(WRITTEN):
        meshed = ifcopenshell.geom.create_shape(settings, pieces[f"1-2/strut/{i}"])
        volume = ifcopenshell.util.shape.get_volume(meshed.geometry) * 1e9
        assert volume == pytest.approx(bar.volume, rel=1e-3)
        points = ifcopenshell.util.shape.get_vertices(meshed.geometry) * 1e3
        assert np.array([points.min(axis=0), points.max(axis=0)]) == pytest.approx(np.array(bar.box), abs=0.2)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_ends_are_closed_shells_of_flat_faces(schema: str) -> None:
    """Each edge is in two faces, once each way; holes of a face run against its rim; GEM001, BRP001."""
    shells = _model(schema).by_type("IfcClosedShell")
    assert len(shells) == 6
    for each in shells:
        edges: Counter[tuple[int, int]] = Counter()
        holed = 0
        for face in each.CfsFaces:
            assert [b.is_a("IfcFaceOuterBound") for b in face.Bounds] == [True] + [False] * (
                len(face.Bounds) - 1
            )
            holed += len(face.Bounds) - 1
            areas, normals = [], []
            for bound in face.Bounds:
                ids = [point.id() for point in bound.Bound.Polygon]
                assert len(set(ids)) == len(ids)
                edges.update(zip(ids, [*ids[1:], ids[0]], strict=True))
                rim = np.array([point.Coordinates for point in bound.Bound.Polygon]) * 1e3
                turned = np.cross(rim - rim[0], np.roll(rim, -1, axis=0) - rim[0]).sum(axis=0)
                areas.append(float(np.linalg.norm(turned)))
                normals.append(turned / areas[-1])
                assert np.abs((rim - rim[0]) @ normals[0]).max() < 1e-5
            assert all(float(normal @ normals[0]) < -0.99 for normal in normals[1:])
            assert areas[0] == max(areas)
        assert all(count == 1 and edges[b, a] == 1 for (a, b), count in edges.items())
        assert holed % 2 == 1  # the bore at the ring, and each bolt hole on both sides


def test_the_types_say_how_many_ends_are_pressed() -> None:
    file = _model("IFC4")
    said = {
        kind.Tag: ifcopenshell.util.element.get_psets(kind)["Shedbim_Part"]["PressedEnds"]
        for kind in file.by_type("IfcMemberType")
    }
    assert said == {"S1": 2, "S2": 1, "S3": 1, "S4": 2}


@pytest.mark.parametrize("bar", WRITTEN)
def test_meshes_of_pictures_are_closed_however_coarse(bar: Bar) -> None:
    for triangles in (view_shell(bar).triangles, shell(bar, 1.0).triangles):
        edges = Counter((int(t[k]), int(t[k - 2])) for t in triangles for k in range(3))
        assert all(count == 1 and edges[b, a] == 1 for (a, b), count in edges.items())
    mesh = flat_mesh(bar)
    # A corner has a vertex for each face: they are told by their places.
    _, place = np.unique(mesh.points, axis=0, return_inverse=True)
    corners = place.reshape(-1)[mesh.indices].reshape(-1, 3).tolist()
    edges = Counter((t[k], t[k - 2]) for t in corners for k in range(3))
    assert all(count == edges[b, a] for (a, b), count in edges.items())


def test_levels_show_it_drilled_undrilled_and_as_cut() -> None:
    shed = _shed(*WRITTEN)
    for level, holes, pressed in (
        ("fabrication", True, True),
        ("coordination", False, True),
        ("outline", False, False),
    ):
        for before, after in zip(shed.parts, at_level(shed, level).parts, strict=True):
            assert after.shape == before.shape
            shown = after.body
            assert isinstance(shown, Bar)
            assert bool(shown.holes) == (holes and bool(before.bar.holes))
            assert (shown.pressed == before.bar.pressed) == pressed
            assert pressed or shown.pressed == (None, None)
    assert ifc_models.opened(at_level(shed, "outline")).by_type("IfcFacetedBrep") == ()


# --- in joints

FLATTENED = Connections.model_validate({"tube_ends": {"struts": "flattened"}})


@pytest.mark.parametrize("name", ["CHS 88.9x4", "CHS 60.3x5"])
@pytest.mark.parametrize("where", CARRIERS)
def test_a_flattened_strut_end_is_sound(where: str, name: str) -> None:
    """No overlap; two bolts in line, as far from the edges as they must be, and room for wrenches."""
    carrier = CARRIERS[where]
    joint = Joint(JointKind.STRUT_END, (carrier, _strut(carrier, name)))
    made = strut_end(joint, FLATTENED)
    (work,), (bolting,) = made.works, made.boltings
    beside_an_end = "of an apex" in where
    assert (work.pressed is None) == beside_an_end
    assert {each.name for each in made.fittings} == {"carrier fin"} | (
        {"fin", "cap"} if beside_an_end else set()
    )
    tube = joint.members[1].section.profile
    thickness = 10.0 if beside_an_end else 2 * tube.t
    assert [layer.thickness for layer in bolting.layers] == [10.0, thickness]
    assert bolting.fastener.grip == 10.0 + thickness
    bodies = {"carrier": member_solid(carrier), "strut": member_solid(joint.members[1], work)}
    bodies |= {each.name: joint_bench.fitting_solid(each.shape, each.frame) for each in made.fittings}
    names = {0: "carrier", 1: "strut"}
    d0 = hole_diameter(bolting.fastener.diameter)
    depth = 0.0
    for layer in bolting.layers:
        key = names.get(layer.of, layer.of)
        for point in bolting.points:
            start = point + bolting.axis * depth
            ring = joint_bench.cylinder(start, bolting.axis, 2.4 * d0, layer.thickness)
            assert (ring ^ bodies[key]).volume() > 0.995 * ring.volume(), (key, "edge")
        for point in bolting.points:
            start = point + bolting.axis * (depth - 0.05)
            bodies[key] -= joint_bench.cylinder(start, bolting.axis, d0, layer.thickness + 0.1)
        depth += layer.thickness
    bolts = made_solids(replace(made, fittings=()))
    for one, other in combinations([*bodies.values()], 2):
        assert (one ^ other).volume() < 100.0
    d = bolting.fastener.diameter
    for point in bolting.points:
        for start, length in ((-0.7 * d, 0.7 * d - 0.2), (bolting.fastener.grip + 0.2, 1.2 * d)):
            wrench = joint_bench.cylinder(
                point + bolting.axis * start, bolting.axis, 2 * wrench_wall(d), length
            )
            assert all((wrench ^ body).volume() < 100.0 for body in bodies.values())
    assert len(bolts) == len(bolting.points) == 2


def test_the_flat_begins_where_the_strut_was_and_opens_behind_the_fin() -> None:
    """CHS 88.9, M20: a lap of 40 + 70 + 40 mm and 10 mm of air; a taper of 1.2 diameters up to 5 mm."""
    carrier = CARRIERS["rafter"]
    made = strut_end(Joint(JointKind.STRUT_END, (carrier, _strut(carrier, "CHS 88.9x4"))), FLATTENED)
    (work,) = made.works
    assert work.set_back == pytest.approx(0.0)
    assert work.pressed is not None
    assert (work.pressed.flat, work.pressed.taper) == (160.0, 110.0)
    assert work.taken == pytest.approx(270.0)


@cache
def _small(**fields: object) -> Shed:
    text = SMALL
    for old, new in fields.items():
        assert text.count(old) == 1
        text = text.replace(old, str(new))
    return expand(read_text(text, "small"))


def _without_clash(shed: Shed) -> None:
    assert [finding for rule in FASTENING_RULES for finding in rule(shed)] == []
    found = overlaps(coarse_bodies(shed), shed.pieces.part, shed.pieces.placement, SHARED_VOLUME / 10)
    keys = shed.pieces.keys
    assert [f"{keys[o.first]} and {keys[o.second]}: {o.volume:.0f} mm3" for o in found] == []


def _ends(shed: Shed, role: Role) -> Counter[int]:
    """How many members of a role have so many pressed ends."""
    return Counter(
        sum(end is not None for end in shed.parts[part].bar.pressed)
        for part in shed.pieces.part.tolist()
        if shed.parts[part].role is role
    )


def test_a_building_of_flattened_tubes_holds_together() -> None:
    """Closed, bolted through holes, nothing in anything; only ridge struts, beside the rafters' ends, are capped."""
    shed = _small()
    _without_clash(shed)
    assert any("pressed flat" in note for note in shed.notes)
    assert _ends(shed, Role.EAVES_STRUT) == {2: 4}
    assert _ends(shed, Role.STRUT) == {2: 2, 0: 1}
    assert set(_ends(shed, Role.ROOF_BRACE)) == set(_ends(shed, Role.WALL_BRACE)) == {2}
    for part in shed.parts:
        if isinstance(part.shape, Bar) and part.shape.pressed != (None, None):
            assert part.shape.mass < part.shape.section.area * part.shape.length * 7.85e-6
            assert len(part.shape.holes) == 4


def test_flats_stand_clear_of_the_caps_of_low_columns() -> None:
    """Where the roof is flat the strut is next to the cap: its flat is higher than the tube, so it lies lower."""
    struts = {"bracing__struts": {"section": "CHS 60.3x4"}, "bracing__eaves_strut": {"section": "CHS 88.9x4"}}
    shed = expand(cast.changed("flat", **struts, connections__tube_ends={"struts": "flattened"}))
    _without_clash(shed)
    assert _ends(shed, Role.EAVES_STRUT) == {2: 2}


def test_crossed_and_galvanized_they_hold_together_too() -> None:
    """In each wall one runs through, two halves end in slots where they cross it. Vents are behind the tapers."""
    shed = _small(**{
        "walls: {pattern: single, section: CHS 88.9x5}": "walls: {pattern: crossed, section: CHS 88.9x5}",
        "connections:": "finish: {frames: galvanized}\nconnections:",
    })  # fmt: skip
    _without_clash(shed)
    assert _ends(shed, Role.WALL_BRACE) == {2: 2, 1: 4}
    seen = 0
    for bar in (part.bar for part in shed.parts if part.role is Role.EAVES_STRUT):
        first = bar.pressed[0]
        assert first is not None
        vents = [hole for hole in bar.holes if hole.thickness == bar.section.profile.thickness]
        edges = [min(h.centre[0], bar.length - h.centre[0]) - h.diameter / 2 for h in vents]
        assert edges == pytest.approx([first.length + 10.0] * len(vents))
        seen += len(vents)
    assert seen >= 4


@pytest.mark.parametrize(
    ("old", "new", "field"),
    [
        ("struts: {section: CHS 76.1x3.2}", "struts: {section: SHS 60x60x4}", "connections.tube_ends.struts"),
        (
            "eaves_strut: {section: CHS 88.9x4}",
            "eaves_strut: {section: CHS 114.3x4}",
            "connections.tube_ends.struts",
        ),
        ("section: CHS 88.9x5}", "section: CHS 101.6x5}", "connections.tube_ends.braces"),
    ],
)
def test_other_tubes_are_refused_by_the_field_that_asks_for_it(old: str, new: str, field: str) -> None:
    with pytest.raises(DescriptionError) as refused:
        _small(**{old: new})
    (fault,) = refused.value.faults
    assert fault.field == field
    assert "90 mm" in fault.allowed


def test_angles_are_bolted_as_ever() -> None:
    shed = _small(
        **{"walls: {pattern: single, section: CHS 88.9x5}": "walls: {pattern: crossed, section: L 70x70x7}"}
    )
    assert set(_ends(shed, Role.WALL_BRACE)) == {0}
