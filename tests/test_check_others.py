"""The checks against models of other trades and reserved zones: what is measured, where it stands, what is refused."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from math import radians

import numpy as np
import pytest
from cast import changed, described, shed_of
from manifold3d import Manifold
from other_boxes import FILE, box_mesh, box_model, mesh_of, model_of
from structuralcodes.geometry.profiles import HE

from shedbim.checks.checking import check
from shedbim.checks.finding import Finding
from shedbim.checks.grouping import findings_of
from shedbim.checks.others.placing import placed
from shedbim.checks.others.trades import trades
from shedbim.checks.others.zones import zones
from shedbim.checks.subject import Subject
from shedbim.errors import DescriptionError
from shedbim.expand import expand
from shedbim.limits import CODES, Criteria, Waiver, criteria
from shedbim.model.other_trades import MapPlace, Mesh, OtherModel, Remark
from shedbim.model.shed import Georeference, Shed
from shedbim.model.solids import solid
from shedbim.model.zones import Zone

Spoiled = tuple[Shed, Criteria, tuple[OtherModel, ...]]
AREAS = ("other trades", "reserved zones")

#: Half of the depth of the columns of the lopsided shed, HEA 300, mm (EN 10365: h = 290 mm, A = 112.5 cm²).
HALF = 145.0
#: Its area by a general library, mm².
AREA = float(HE("HEA300").A)
COLUMN_Y = 6900.0


def lopsided(*others: OtherModel, **limits: float) -> Spoiled:
    return shed_of("lopsided"), criteria(limits), others


def with_zone(**zone: object) -> Spoiled:
    values = {"name": "kept", "kind": "free", "low": (0.0, 0.0, 0.0), "high": (1.0, 1.0, 1.0)} | zone
    return replace(shed_of("lopsided"), zones=(Zone(**values),)), criteria(), ()


def beside_column(gap: float, kind: str = "IfcPipeSegment", **more: bool) -> OtherModel:
    """A box inside the building, so far from the flange of a column, clear of everything else."""
    low, high = (HALF + gap, COLUMN_Y - 80.0, 2000.0), (HALF + gap + 60.0, COLUMN_Y + 80.0, 2100.0)
    return box_model(low, high, kind, **more)


def between_flanges() -> OtherModel:
    """A pipe that runs up beside the web of a column, 36 mm from it and farther from its flanges."""
    low, high = (-40.0, COLUMN_Y + 40.0, 2000.0), (40.0, COLUMN_Y + 100.0, 2100.0)
    return box_model(low, high, "IfcPipeSegment")


def through_column(kind: str = "IfcDuctSegment", **more: bool) -> OtherModel:
    """A box round 100 mm of a column and of nothing else: 3 mm beyond its flanges, where no rail begins yet."""
    low, high = (-HALF - 3.0, COLUMN_Y - 200.0, 2450.0), (HALF + 3.0, COLUMN_Y + 200.0, 2550.0)
    return box_model(low, high, kind, **more)


def opened(model: OtherModel) -> OtherModel:
    """The model with the first triangle of each surface taken away."""
    return replace(model, meshes=tuple(Mesh(m.points, m.triangles[1:]) for m in model.meshes))


def placed_in(model: OtherModel, crs: str) -> Spoiled:
    shed = replace(shed_of("lopsided"), georeference=Georeference("EPSG:25832", 0.0, 0.0, 0.0, 0.0))
    return shed, criteria(), (replace(model, place=MapPlace(crs, 0.0, 0.0, 0.0, 0.0)),)


SPOILED: dict[str, Callable[[], Spoiled]] = {
    "other-overlap": lambda: lopsided(through_column("IfcWall", is_service=False)),
    "other-too-near": lambda: lopsided(beside_column(20.0)),
    "other-unread": lambda: lopsided(OtherModel(FILE, remarks=(Remark("other-unread", "it was not read"),))),
    "other-unplaced": lambda: placed_in(beside_column(500.0), "EPSG:31467"),
    "other-far-away": lambda: lopsided(beside_column(5e6)),
    "other-own-origin": lambda: lopsided(beside_column(500.0)),
    "other-not-closed": lambda: lopsided(opened(between_flanges())),
    "zone-overlap": lambda: with_zone(low=(0.0, 6800.0, 2000.0), high=(900.0, 7000.0, 2100.0)),
    "zone-too-near": lambda: with_zone(
        kind="door", low=(HALF + 60.0, 6800.0, 2000.0), high=(900.0, 7000.0, 2100.0)
    ),
}

#: What a model without a place on the map says as well.
ALONGSIDE = {"other-own-origin"}


def found(spoiled: Spoiled) -> list[Finding]:
    subject = Subject(*spoiled)
    return findings_of(subject, [*trades(subject), *zones(subject)])


def codes(spoiled: Spoiled) -> list[str]:
    return [each.code.name for each in found(spoiled)]


def test_there_is_a_spoiled_shed_for_every_code() -> None:
    assert set(SPOILED) == {name for name, code in CODES.items() if code.area in AREAS}


@pytest.mark.parametrize("code", SPOILED)
def test_a_spoiled_shed_gives_its_code_and_no_other(code: str) -> None:
    assert set(codes(SPOILED[code]())) - (ALONGSIDE - {code}) == {code}


def test_the_whole_of_the_checks_gives_it_beyond_what_the_shed_gives_anyway() -> None:
    shed, held, others = SPOILED["other-overlap"]()
    before = {(each.code.name, each.about) for each in check(shed, held)}
    after = {(each.code.name, each.about) for each in check(shed, held, others=others)}
    assert {name for name, _ in after - before} == {"other-overlap", "other-own-origin"}
    assert before <= after


def test_between_the_flanges_of_a_column_there_is_room() -> None:
    assert codes(lopsided(between_flanges())) == ["other-own-origin"]


def test_without_models_and_zones_nothing_is_said() -> None:
    assert codes(lopsided()) == []


def test_the_volume_that_is_shared_is_that_of_the_section_by_its_published_area() -> None:
    (one,) = [each for each in found(lopsided(through_column())) if each.severe]
    assert one.value == pytest.approx(AREA * 100.0, rel=2e-3)
    place = one.places[0]
    assert [shed_of("lopsided").pieces.keys[k] for k in place.pieces] == ["2/column/A"]
    np.testing.assert_allclose(place.point, (0.0, COLUMN_Y, 2500.0), atol=1.0)
    (element,) = place.others
    assert (element.guid, element.kind, element.name) == (f"{0:022d}", "IfcDuctSegment", "one 1")
    assert all(word in one.says for word in (element.guid, element.kind, element.name, FILE, "column"))
    assert one.about == element.guid


@pytest.mark.parametrize(
    ("gap", "limit", "is_told"), [(24.0, 25.0, True), (26.0, 25.0, False), (26.0, 27.0, True)]
)
def test_the_distance_is_held_against_the_limit_of_the_class(gap: float, limit: float, is_told: bool) -> None:
    near = [
        each for each in found(lopsided(beside_column(gap), clear_of_pipes=limit)) if each.places[0].pieces
    ]
    assert bool(near) is is_told
    for each in near:
        assert (each.code.name, each.limit) == ("other-too-near", limit)
        assert each.value == pytest.approx(gap, abs=1e-3)


@pytest.mark.parametrize(
    ("kind", "is_service", "limit"),
    [
        ("IfcDuctFitting", True, 50.0),
        ("IfcPipeFitting", True, 25.0),
        ("IfcCableCarrierSegment", True, 50.0),
        ("IfcCableSegment", True, 50.0),
        ("IfcFireSuppressionTerminal", True, 300.0),
        ("IfcTransportElement", False, 76.0),
        ("IfcDoor", False, 100.0),
        ("IfcBoiler", True, 50.0),
        ("IfcWall", False, 0.0),
    ],
)
def test_each_class_asks_for_its_own_distance(kind: str, is_service: bool, limit: float) -> None:
    def told(gap: float) -> bool:
        model = beside_column(gap, kind, is_service=is_service)
        return "other-too-near" in codes(lopsided(model))

    assert not told(limit + 1.0)
    assert told(limit - 1.0) is (limit > 0.0)


def test_what_touches_is_no_overlap() -> None:
    assert codes(lopsided(beside_column(0.0, "IfcWall", is_service=False))) == ["other-own-origin"]
    touching = [each for each in found(lopsided(beside_column(0.0))) if each.places[0].pieces]
    assert [(each.code.name, each.value) for each in touching] == [("other-too-near", 0.0)]


def test_a_surface_turned_inside_out_is_the_same_solid() -> None:
    model = through_column()
    turned = replace(model, meshes=tuple(Mesh(m.points, m.triangles[:, ::-1]) for m in model.meshes))
    one, other = ([each.value for each in found(lopsided(each)) if each.severe] for each in (model, turned))
    assert one == pytest.approx(other, rel=1e-9)
    assert len(one) == 1


def test_of_an_open_surface_it_is_told_where_steel_goes_through_and_where_it_only_lies_on_it() -> None:
    through = {each.code.name: each for each in found(lopsided(opened(through_column())))}
    # Its sides lie beside the flanges; top and bottom are cut by the column.
    assert set(through) == {"other-overlap", "other-own-origin", "other-not-closed"}
    assert through["other-overlap"].value is None
    assert "1 elements" in through["other-not-closed"].says
    lying = codes(lopsided(opened(beside_column(0.0))))
    assert sorted(lying) == ["other-not-closed", "other-own-origin", "other-too-near"]


def test_the_free_height_over_a_cable_tray_is_measured_up_to_the_steel_above_it() -> None:
    shed = shed_of("lopsided")
    chord = shed.pieces.keys.index("2/truss/bottom chord/A-B/1/2")
    low = float(Subject(shed, criteria()).centres[chord][2]) - 70.0  # RHS 140x80, its long side upright
    x, y = Subject(shed, criteria()).centres[chord][:2]
    steel = solid(shed.parts[shed.pieces.part[chord]].shape, 0.2).transform(shed.pieces.placement[chord])
    over = steel ^ Manifold.cube([100.0, 600.0, 900.0]).translate([x - 50.0, y - 300.0, low - 500.0])
    for height in (90.0, 140.0):
        top = low - height
        tray = box_model(
            (x - 50.0, y - 300.0, top - 60.0), (x + 50.0, y + 300.0, top), "IfcCableCarrierSegment"
        )
        above = [each for each in found(lopsided(tray)) if "free height" in each.says]
        assert [each.limit for each in above] == [150.0]
        assert above[0].value == pytest.approx(over.bounding_box()[2] - top, abs=0.1)
    beside = box_model(
        (x - 50.0, y + 200.0, low), (x + 50.0, y + 300.0, low + 60.0), "IfcCableCarrierSegment"
    )
    assert codes(lopsided(beside)) == ["other-own-origin"]


def test_anchors_may_stand_in_concrete_but_not_in_a_pipe() -> None:
    low, high = (-400.0, COLUMN_Y - 400.0, -600.0), (400.0, COLUMN_Y + 400.0, -40.0)
    assert codes(lopsided(box_model(low, high, "IfcFooting", is_service=False))) == ["other-own-origin"]
    assert "other-overlap" in codes(lopsided(box_model(low, high, "IfcPipeSegment")))


def test_each_element_is_one_finding_with_all_its_places() -> None:
    low, high = (-HALF - 3.0, 0.0, 2450.0), (HALF + 3.0, 19_000.0, 2550.0)
    duct, other = (
        box_mesh(low, high),
        box_mesh((19_300.0 + low[0], 0.0, low[2]), (19_300.0 + high[0], 19e3, high[2])),
    )
    severe = [each for each in found(lopsided(model_of([duct, other], "IfcDuctSegment"))) if each.severe]
    assert [each.about for each in severe] == [f"{0:022d}", f"{1:022d}"]
    for each, letter in zip(severe, "AB", strict=True):
        keys = [shed_of("lopsided").pieces.keys[k] for k in each.pieces]
        assert {f"{line}/column/{letter}" for line in "23"} <= set(keys)


def test_findings_against_others_can_be_waived() -> None:
    shed, _, others = SPOILED["other-overlap"]()
    held = criteria(waivers=(Waiver("other-overlap", "2/column/*", "cast round the column"),))
    assert [each.waived for each in found((shed, held, others)) if each.code.name == "other-overlap"] == [
        "cast round the column"
    ]
    shed, _, others = SPOILED["other-unread"]()
    held = criteria(waivers=(Waiver("other-unread", "*", "an old file"),))
    assert [each.waived for each in found((shed, held, others))] == ["an old file"]


def test_names_of_others_are_data() -> None:
    hostile = "<b>x</b> \u202e'quoted' =1+1"
    model = through_column()
    model = replace(model, elements=tuple(replace(each, name=hostile) for each in model.elements))
    (one,) = [each for each in found(lopsided(model)) if each.severe]
    assert one.places[0].others[0].name == hostile


# Where a model is laid.

EAST, NORTH, LEVEL, TURN = 512_340_000.0, 5_403_120_000.0, 212_350.0, radians(14.0)


def turned_about(angle: float, points: np.ndarray) -> np.ndarray:
    """Points turned about z, by complex numbers."""
    flat = (points[:, 0] + 1j * points[:, 1]) * np.exp(1j * angle)
    return np.column_stack([flat.real, flat.imag, points[:, 2]])


@pytest.mark.parametrize("turn", [0.0, radians(14.0), radians(-131.0)])
@pytest.mark.parametrize("scale", [1.0, 0.9996])
def test_a_model_is_laid_where_both_places_on_the_map_say(turn: float, scale: float) -> None:
    shed = replace(shed_of("lopsided"), georeference=Georeference("EPSG:25832", EAST, NORTH, LEVEL, TURN))
    origin = np.array([EAST - 40_000.0, NORTH + 13_000.0, LEVEL - 900.0])
    mesh = box_mesh((100.0, 200.0, 300.0), (700.0, 500.0, 900.0))
    on_map = turned_about(TURN, mesh.points) + np.array([EAST, NORTH, LEVEL])
    local = turned_about(-turn, (on_map - origin) / scale)
    corner = local[0].copy()
    model = model_of([Mesh(local - corner, mesh.triangles)], "IfcDuctSegment")
    model.placement[0, :, 3] = corner
    place = MapPlace(" epsg: 25832", *origin.tolist(), turn, scale)
    laid = placed(replace(model, place=place), shed)
    assert laid.remarks == ()
    points = laid.model.meshes[0].points @ laid.placement[0][:, :3].T + laid.placement[0][:, 3]
    np.testing.assert_allclose(points, mesh.points, atol=1e-4)


@pytest.mark.parametrize(("ours", "theirs"), [(True, False), (False, True), (False, False)])
def test_without_both_places_it_lies_origin_to_origin_and_that_is_said(ours: bool, theirs: bool) -> None:
    shed = shed_of("lopsided")
    if ours:
        shed = replace(shed, georeference=Georeference("EPSG:25832", EAST, NORTH, LEVEL, TURN))
    model = beside_column(500.0)
    if theirs:
        model = replace(model, place=MapPlace("EPSG:25832", EAST, NORTH, LEVEL, TURN))
    laid = placed(model, shed)
    assert [each.code for each in laid.remarks] == ["other-own-origin"]
    np.testing.assert_allclose(laid.placement, model.placement)


def test_another_coordinate_reference_system_is_refused_by_both_names() -> None:
    (one,) = found(placed_in(through_column(), "EPSG:31467"))
    assert one.code.name == "other-unplaced"
    assert "EPSG:31467" in one.says
    assert "EPSG:25832" in one.says
    assert "other-overlap" in codes(placed_in(through_column(), ""))


@pytest.mark.parametrize(
    ("factor", "said"), [(1000.0, "unit of length"), (1e-3, "unit of length"), (304.8, "unit of length")]
)
def test_wrong_units_are_seen_by_the_size(factor: float, said: str) -> None:
    mesh = box_mesh((0.0, 0.0, 3000.0), (19_000.0, 18_000.0, 3400.0))
    model = model_of([Mesh(mesh.points * factor, mesh.triangles)], "IfcDuctSegment")
    far = [each.says for each in found(lopsided(model)) if each.code.name == "other-far-away"]
    assert len(far) == 1
    assert said in far[0]


def test_elements_far_from_the_shed_are_counted_and_the_others_checked() -> None:
    model = through_column()
    away = Mesh(model.meshes[0].points + np.array([3e6, 0.0, 0.0]), model.meshes[0].triangles)
    both = model_of([*model.meshes, away], "IfcDuctSegment")
    by_code = {each.code.name: each.says for each in found(lopsided(both))}
    assert "other-overlap" in by_code
    assert "1 of the 2 elements" in by_code["other-far-away"]
    alone = {each.code.name: each.says for each in found(lopsided(model_of([away], "IfcDuctSegment")))}
    assert "1 of the 1 elements" in alone["other-far-away"]
    assert "3.0 km" in alone["other-far-away"]


# Reserved zones.


def test_a_zone_is_held_clear_by_the_limit_of_its_kind_or_its_own() -> None:
    for kind, limit in (("door", 100.0), ("crane-hook-path", 76.0), ("sprinkler", 300.0), ("walkway", 0.0)):
        for gap in (limit - 1.0, limit + 1.0) if limit else (1.0,):
            low, high = (HALF + gap, COLUMN_Y - 20.0, 2000.0), (HALF + gap + 900.0, COLUMN_Y + 20.0, 2100.0)
            told = [each.code.name for each in found(with_zone(kind=kind, low=low, high=high))]
            assert told == (["zone-too-near"] if gap < limit else [])
    own = found(with_zone(low=(HALF + 30.0, 6880.0, 2e3), high=(900.0, 6920.0, 2100.0), clearance=31.0))
    assert [(each.limit, each.source) for each in own] == [(31.0, "set in the description")]
    assert own[0].value == pytest.approx(30.0, abs=1e-3)


def test_what_stands_in_a_zone_is_measured() -> None:
    shed, held, _ = with_zone(low=(-HALF - 3.0, 6700.0, 2450.0), high=(HALF + 3.0, 7100.0, 2550.0))
    (one,) = found((shed, held, ()))
    assert one.code.name == "zone-overlap"
    assert one.value == pytest.approx(AREA * 100.0, rel=2e-3)
    assert "'kept'" in one.says


def test_rails_in_a_door_are_told() -> None:
    door = {
        "name": "lorries",
        "kind": "door",
        "line": "A",
        "along": ["2 + 800 mm", "3 - 800 mm"],
        "z": ["0 m", "4 m"],
    }
    shed = expand(changed("lopsided", reserved=[door]))
    (zone,) = shed.zones
    assert zone.low == (-600.0, 7700.0, 0.0)
    assert zone.high == (600.0, 11_300.0, 4000.0)
    told = found((shed, criteria(), ()))
    rails = [each for each in told if each.code.name == "zone-overlap" and "side rail" in each.says]
    assert len(rails) == 1
    keys = [shed.pieces.keys[k] for k in rails[0].pieces]
    levels = shed.pieces.placement[rails[0].pieces, 2, 3]
    assert {key.rsplit("/", 1)[0] for key in keys} == {"2-3/side rail/A"}
    # Rails stand at 0.3 m and then at most 1.7 m apart: those below 4 m are in the door.
    assert len(keys) == 3
    assert levels.max() < 4100.0
    assert "bracing.bays" in rails[0].change


def test_a_box_by_lines_follows_the_grid() -> None:
    box = {
        "name": "hook",
        "kind": "crane-hook-path",
        "x": ["1 m", "B - 1 m"],
        "y": [2, "3"],
        "z": ["0 m", "3 m"],
    }
    for bays in (["6.9 m", "5.2 m", "6.1 m"], ["7.9 m", "5.2 m", "6.1 m"]):
        (zone,) = expand(changed("lopsided", reserved=[box], building__bays=bays)).zones
        first = 1000.0 * float(bays[0].split()[0])
        assert zone.low == (1000.0, first, 0.0)
        assert zone.high == (18_300.0, first + 5200.0, 3000.0)
    assert described("lopsided").reserved == ()


DOOR: dict[str, object] = {
    "name": "d",
    "kind": "door",
    "line": "A",
    "along": ["1 m", "4 m"],
    "z": ["0 m", "4 m"],
}


@pytest.mark.parametrize(
    ("zone", "field", "said"),
    [
        ({"line": "Q"}, "reserved[0].line", "there is no such line"),
        ({"along": ["1 m", "Z + 1 m"]}, "reserved[0].along", "there is no such line"),
        ({"along": ["4 m", "1 m"]}, "reserved[0].along", "no size"),
        ({"along": ["1 m"]}, "reserved[0].along", "1 places"),
        ({"along": None}, "reserved[0]", "does not say where"),
        ({"x": ["1 m", "2 m"]}, "reserved[0]", "both"),
        ({"z": ["0 m", "B"]}, "reserved[0].z[1]", "not a length"),
        ({"kind": "gate"}, "reserved[0].kind", "choices"),
        ({"name": ""}, "reserved[0].name", "empty"),
        ({"clearance": "-1 m"}, "reserved[0].clearance", "out of bounds"),
        ({"along": ["2 + 8 furlong", "4 m"]}, "reserved[0].along[0]", "unit"),
    ],
)
def test_zones_that_cannot_be_are_refused_in_place(zone: dict[str, object], field: str, said: str) -> None:
    written = {name: value for name, value in {**DOOR, **zone}.items() if value is not None}
    with pytest.raises(DescriptionError) as refused:
        expand(changed("lopsided", reserved=[written]))
    assert [fault.field for fault in refused.value.faults] == [field]
    assert said in refused.value.faults[0].message


def test_two_zones_of_one_name_are_refused() -> None:
    with pytest.raises(DescriptionError, match="two zones are called d"):
        changed("lopsided", reserved=[{**DOOR, "z": [*z]} for z in (("0 m", "4 m"), ("1 m", "3 m"))])


def test_a_round_body_is_met_where_its_roundness_lets_it() -> None:
    # A sphere of radius 100 beside a flange: the distance is that of its middle less its radius.
    ball = Manifold.sphere(100.0, 256).translate([HALF + 100.0 + 20.0, COLUMN_Y, 2000.0])
    near = [
        each for each in found(lopsided(model_of([mesh_of(ball)], "IfcPipeFitting"))) if each.places[0].pieces
    ]
    assert near[0].value == pytest.approx(20.0, abs=0.05)
