"""Plates, fasteners, drilled bars, welds and what realizes joints, in the three schemas."""

from __future__ import annotations

from collections import Counter
from dataclasses import replace
from functools import cache

import fitted_shed
import ifc_models
import ifc_rules
import ifcopenshell
import ifcopenshell.geom
import ifcopenshell.util.element
import ifcopenshell.util.shape
import numpy as np
import pytest
import schema_rules

from shedbim.errors import ModelError
from shedbim.geometry.placements import apply
from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.joints import JointKind
from shedbim.model.levels import at_level
from shedbim.model.plates import Plate
from shedbim.model.roles import Role
from shedbim.model.shed import AssemblyType, Part, Shed
from shedbim.model.solids import solid
from shedbim.model.welds import Weld
from shedbim.sections.section import STEEL_DENSITY
from shedbim.writers.ifc import SCHEMAS
from shedbim.writers.ifc.classes import assembly_class
from shedbim.writers.palette import PALETTE

SHED = fitted_shed.fitted()
Entity = ifcopenshell.entity_instance

each_schema = pytest.mark.parametrize("schema", SCHEMAS)

# The library does not close the file it reads a schema's rules from.
pytestmark = pytest.mark.filterwarnings(
    r"ignore:Exception ignored in. <_io.FileIO name='.*ifcopenshell:pytest.PytestUnraisableExceptionWarning"
)


@cache
def model(schema: str, level: str = "fabrication") -> ifcopenshell.file:
    """Give the fitted shed's model file as the library reads it."""
    return ifc_models.opened(at_level(SHED, level), schema=schema)


def elements(schema: str) -> dict[str, Entity]:
    """Give the elements by their keys."""
    return ifc_models.by_name(model(schema), "IfcElement")


def part(mark: str) -> Part:
    """Give a part by its mark."""
    return next(each for each in SHED.parts if each.mark == mark)


def kind_of(schema: str, mark: str) -> Entity:
    """Give the type of a part."""
    return ifc_models.by_name(model(schema), "IfcElementType", "Tag")[mark]


def welds(file: ifcopenshell.file) -> list[Entity]:
    """Give the welds of a file."""
    return file.by_type("IfcFastener", include_subtypes=False)


# --- the file as a whole


@each_schema
@pytest.mark.parametrize("level", ["coordination", "fabrication"])
def test_nothing_is_found_against_the_schema_and_its_rules(schema: str, level: str) -> None:
    file = ifc_models.opened(at_level(SHED, level), schema=schema, shop_joints=True, full_keys=True)
    # Coordination has nothing that fabrication has not, so its rules need not be tried again.
    assert schema_rules.findings(file, rules=level == "fabrication") == []


@each_schema
def test_agreements_hold(schema: str) -> None:
    """IFC106, SPS003, SPS005, SPS007, PSE001, PSE002, QTY001."""
    file = model(schema)
    assert ifc_rules.unreached(file, schema) == set()
    held = ifc_rules.placed_once(file)
    for element, outer in held.items():
        if element.ObjectPlacement:  # OJP001
            owner = outer or element.ContainedInStructure[0].RelatingStructure
            assert element.ObjectPlacement.PlacementRelTo == owner.ObjectPlacement
    seen = ifc_rules.standard_sets(file, schema)
    fitting = {"Pset_PlateCommon"}
    if schema != "IFC2X3":
        fitting |= {"Pset_ElementComponentCommon", "Pset_FastenerWeld", "Qto_PlateBaseQuantities"}
        fitting |= {"Pset_MechanicalFastenerBolt", "Pset_MechanicalFastenerAnchorBolt"}
    assert fitting <= seen


@each_schema
def test_all_ids_differ(schema: str) -> None:
    ids = [each.GlobalId for each in model(schema).by_type("IfcRoot")]
    assert len(set(ids)) == len(ids)


# --- classes


#: Mark, class, and the predefined type (or, in brackets, what stands for it) by the enumerations of each schema:
#: IfcPlateTypeEnum, IfcMechanicalFastenerTypeEnum, IfcDiscreteAccessoryTypeEnum, IfcMemberTypeEnum.
CLASSED = [
    ("BP1", "IfcPlate", "SHEET (BASE_PLATE)", "USERDEFINED (BASE_PLATE)", "BASE_PLATE"),
    ("GU1", "IfcPlate", "SHEET (GUSSET_PLATE)", "USERDEFINED (GUSSET_PLATE)", "GUSSET_PLATE"),
    ("CL1", "IfcPlate", "SHEET (CLEAT)", "USERDEFINED (CLEAT)", "USERDEFINED (CLEAT)"),
    ("CL2", "IfcDiscreteAccessory", "(BRACKET)", "BRACKET", "BRACKET"),
    ("SK1", "IfcMember", "MEMBER (SHEAR_KEY)", "USERDEFINED (SHEAR_KEY)", "USERDEFINED (SHEAR_KEY)"),
    ("SL1", "IfcMember", "MEMBER (SLEEVE)", "USERDEFINED (SLEEVE)", "USERDEFINED (SLEEVE)"),
    ("FS1", "IfcPlate", "SHEET (FLANGE_STAY)", "USERDEFINED (FLANGE_STAY)", "USERDEFINED (FLANGE_STAY)"),
    ("BG1", "IfcMechanicalFastener", "(BOLT)", "BOLT", "BOLT"),
    ("AB1", "IfcMechanicalFastener", "(ANCHORBOLT)", "ANCHORBOLT", "ANCHORBOLT"),
    ("NU1", "IfcMechanicalFastener", "(NUT)", "USERDEFINED (NUT)", "USERDEFINED (NUT)"),
]


@pytest.mark.parametrize(("mark", "entity", "oldest", "middle", "newest"), CLASSED)
def test_fittings_are_classed_as_the_mapping_says(
    mark: str, entity: str, oldest: str, middle: str, newest: str
) -> None:
    for schema, wanted in zip(("IFC2X3", "IFC4", "IFC4X3_ADD2"), (oldest, middle, newest), strict=True):
        kind = kind_of(schema, mark)
        item, _, named = wanted.rstrip(")").partition("(")
        assert kind.is_a() == f"{entity}Type"
        assert getattr(kind, "PredefinedType", None) == (item.strip() or None)
        # OJT001: what is USERDEFINED has a name; beside an item that says it all it does no harm.
        assert kind.ElementType == named or (not named and kind.ElementType in {None, item})
        for piece in ifcopenshell.util.element.get_types(kind):
            assert piece.is_a() == entity
            assert getattr(piece, "PredefinedType", None) is None
            assert piece.ObjectType == ((named or item) if schema == "IFC2X3" else None)


@each_schema
def test_what_the_shop_makes_is_one_assembly_in_its_frame(schema: str) -> None:
    file = model(schema)
    held = {each.Name: outer.Name for each, outer in ifc_rules.placed_once(file).items() if outer}
    found = ifc_models.by_name(file, "IfcElementAssembly")
    for line in ("1", "2"):
        made = found[f"{line}/column/A/shop"]
        assert (made.PredefinedType, made.ObjectType) == ("USERDEFINED", "COLUMN")
        assert (made.AssemblyPlace, made.Tag) == ("FACTORY", "CA1")
        assert found[f"{line}/frame"].PredefinedType == "RIGID_FRAME"
        assert held[made.Name] == f"{line}/frame"
        assert held[f"{line}/column/A/start/base plate"] == made.Name
        assert held[f"{line}/rafter/A-B/start/bolts"] == f"{line}/frame"


def test_assemblies_are_named_after_their_main_piece() -> None:
    made = assembly_class(AssemblyType("X", Role.GABLE_POST.word, "shop"))
    assert (made.item, made.named, made.place) == ("USERDEFINED", "GABLE_POST", "FACTORY")
    assert assembly_class(AssemblyType("X", "truss", "shop")).item == "TRUSS"
    with pytest.raises(ModelError, match="kind 'boat'"):
        assembly_class(AssemblyType("X", "boat", "shop"))


# --- geometry


@cache
def meshes(schema: str, level: str) -> dict[str, tuple[np.ndarray, float]]:
    """Corner points in the building's axes and volume of the last piece of each part by its key, mm and mm³."""
    settings = ifcopenshell.geom.settings()
    settings.set("use-world-coords", True)
    settings.set("mesher-linear-deflection", 5e-5)
    settings.set("mesher-angular-deflection", 0.15)
    file = model(schema, level)
    last = {each.Tag: each for each in file.by_type("IfcElement") if each.Representation}
    shapes = ifcopenshell.geom.iterator(settings, file, include=list(last.values()))
    found = {}
    assert shapes.initialize()
    while True:
        shape = shapes.get()
        points = ifcopenshell.util.shape.get_vertices(shape.geometry) * 1000
        found[file.by_id(shape.id).Name] = points, ifcopenshell.util.shape.get_volume(shape.geometry) * 1e9
        if not shapes.next():
            return found


def shown(level: str) -> dict[str, tuple[Part, np.ndarray]]:
    """The last piece of each part by its key: part and placement."""
    shed = at_level(SHED, level)
    rows = zip(shed.pieces.keys, shed.pieces.part.tolist(), shed.pieces.placement, strict=True)
    last = {index: (key, shed.parts[index], place) for key, index, place in rows}
    return {key: (each, place) for key, each, place in last.values()}


@pytest.mark.parametrize(
    ("schema", "level"), [*((schema, "fabrication") for schema in SCHEMAS), ("IFC4", "coordination")]
)
def test_every_shape_has_its_volume_and_fills_its_box(schema: str, level: str) -> None:
    found = meshes(schema, level)
    wanted = shown(level)
    assert found.keys() == wanted.keys()
    for key, (each, place) in wanted.items():
        points, volume = found[key]
        assert volume == pytest.approx(each.body.volume, rel=1e-3), key
        corners = apply(place, np.array(solid(each.body, 1e-3).to_mesh().vert_properties[:, :3], float))
        # 0.05 mm: coordinates are written to 0.01 mm, arcs are meshed within 0.1 mm and seldom reach a face.
        np.testing.assert_allclose(points.min(axis=0), corners.min(axis=0), atol=0.05, err_msg=key)
        np.testing.assert_allclose(points.max(axis=0), corners.max(axis=0), atol=0.05, err_msg=key)


def test_holes_are_in_the_bodies_of_fabrication_alone() -> None:
    for key, (each, _) in shown("coordination").items():
        if not isinstance(each.shape, BoltGroup) and each.shape.holes:
            gone = meshes("IFC4", "coordination")[key][1] - meshes("IFC4", "fabrication")[key][1]
            assert gone == pytest.approx(each.body.volume - each.shape.volume, rel=0.03), key


@each_schema
def test_plates_are_one_sweep_with_true_circles(schema: str) -> None:
    for mark, circles, others in (("BP1", 4, 0), ("GU1", 1, 1), ("CL1", 0, 0)):
        (body,) = kind_of(schema, mark).RepresentationMaps
        (item,) = body.MappedRepresentation.Items
        assert body.MappedRepresentation.RepresentationType == "SweptSolid"
        assert item.Depth * 1000 == pytest.approx(part(mark).shape.thickness)
        curves = getattr(item.SweptArea, "InnerCurves", ())
        assert [curve.is_a("IfcCircle") for curve in curves].count(True) == circles
        assert len(curves) == circles + others
    outer = kind_of(schema, "GU1").RepresentationMaps[0].MappedRepresentation.Items[0].SweptArea.OuterCurve
    if schema == "IFC2X3":
        assert sum(each.ParentCurve.is_a("IfcTrimmedCurve") for each in outer.Segments) == 2
    else:
        assert sum(each.is_a("IfcArcIndex") for each in outer.Segments) == 2


@each_schema
def test_holes_and_notches_are_taken_away_one_after_another(schema: str) -> None:
    """A chain of subtractions; clippings lie under it, where alone they may (IfcBooleanClippingResult)."""
    for mark, clipped in (("C1", 1), ("R1", 1), ("WB1", 0)):
        shape = part(mark).bar
        mapped = kind_of(schema, mark).RepresentationMaps[1].MappedRepresentation
        assert mapped.RepresentationType == "CSG"
        (item,) = mapped.Items
        chain, tools = [], []
        while not item.is_a("IfcSweptAreaSolid"):
            chain.append(item.is_a())
            tools.append(item.SecondOperand)
            item = item.FirstOperand
        # A drill goes through its wall and just beyond, however far the next wall is; deeper where a wall is bent.
        drills = tools[len(shape.notches) : len(shape.notches) + len(shape.holes)][::-1]
        bent = 10.0 if mark == "WB1" else 0.0
        for hole, drill in zip(shape.holes, drills, strict=True):
            assert hole.thickness < drill.Depth * 1000 <= hole.thickness + 1.1 + bent
        wedges = sum(end.notched for end in (shape.start, shape.end))
        taken = len(shape.holes) + len(shape.notches) + wedges
        assert chain == ["IfcBooleanResult"] * taken + ["IfcBooleanClippingResult"] * clipped


@each_schema
def test_the_type_of_a_group_has_every_prism_of_every_fastener(schema: str) -> None:
    for mark in ("BG1", "BG2", "AB1", "NU1"):
        group = part(mark).shape
        assert isinstance(group, BoltGroup)
        (whole,) = kind_of(schema, mark).RepresentationMaps  # no axis
        items = whole.MappedRepresentation.Items
        placed = [item.Position.Location.Coordinates for item in items]
        wanted = [(x, y, disc.start) for x, y in group.points for disc in group.fastener.stack]
        assert np.array(placed) * 1000 == pytest.approx(np.array(wanted))
        for piece in ifcopenshell.util.element.get_types(kind_of(schema, mark)):
            (body,) = piece.Representation.Representations
            assert (body.RepresentationIdentifier, body.RepresentationType) == (
                "Body",
                "MappedRepresentation",
            )
            (item,) = body.Items
            assert item.MappingSource == whole
            assert item.MappingTarget.LocalOrigin.Coordinates == (0.0, 0.0, 0.0)


@each_schema
def test_every_item_of_a_body_has_the_colour_of_its_role(schema: str) -> None:
    for each in SHED.parts:
        for item in kind_of(schema, each.mark).RepresentationMaps[-1].MappedRepresentation.Items:
            (style,) = item.StyledByItem[0].Styles
            style = style.Styles[0] if schema == "IFC2X3" else style
            colour = style.Styles[0].SurfaceColour
            found = [colour.Red * 255, colour.Green * 255, colour.Blue * 255]
            assert found == pytest.approx(PALETTE[each.role]), each.mark


# --- what is said of a part


@each_schema
def test_nominal_sizes_stand_where_the_schema_wants_them(schema: str) -> None:
    """IFC4 deprecates those of occurrences in favour of the type's (IFC102)."""
    for mark, diameter, length in (("BG1", 20, 60), ("BG2", 12, 30), ("AB1", 24, 540), ("NU1", 16, None)):
        kind = kind_of(schema, mark)
        pieces = ifcopenshell.util.element.get_types(kind)
        holders, others = (pieces, []) if schema == "IFC2X3" else ([kind], pieces)
        for each in holders:
            assert each.NominalDiameter * 1000 == pytest.approx(diameter)
            assert each.NominalLength == (length and pytest.approx(length / 1000))
        assert all(each.NominalDiameter is each.NominalLength is None for each in others)


@each_schema
def test_fasteners_say_how_many_and_what(schema: str) -> None:
    found = ifcopenshell.util.element.get_psets(elements(schema)["2/rafter/A-B/start/bolts"])
    for each in found.values():
        each.pop("id")
    # EN 1090-2 8.2.2: 32 mm grip, washer 3, nut 18, pitch 2.5 make 55.5: the next length is 60.
    assert found["Shedbim_Fasteners"] == pytest.approx(
        {"Count": 4, "Grade": "8.8", "NominalDiameter": 0.02, "NominalLength": 0.06, "Grip": 0.032,
         "WashersUnderHead": 0, "WashersUnderNut": 1, "NutsEach": 1}
    )  # fmt: skip
    assert found["Shedbim_Part"] == {
        "Mark": "BG1", "Role": "bolts", "Fastener": "M20x60 8.8", "Grade": "8.8", "Finish": "galvanized",
    }  # fmt: skip
    if schema != "IFC2X3":
        # Counts are those of one bolt (ISO 16739-1, Pset_MechanicalFastenerBolt).
        standard = {"ThreadDiameter": 0.02, "NutsCount": 1, "WashersCount": 1}
        assert found["Pset_MechanicalFastenerBolt"] == pytest.approx(standard)
        anchors = ifcopenshell.util.element.get_psets(elements(schema)["1/column/A/start/anchors"])
        length = anchors["Pset_MechanicalFastenerAnchorBolt"]["AnchorBoltLength"]
        assert length == pytest.approx(part("AB1").shape.fastener.length / 1000)


@each_schema
def test_plates_and_drilled_bars_say_what_they_are_cut_from(schema: str) -> None:
    plate = ifcopenshell.util.element.get_psets(elements(schema)["1/column/A/start/base plate"])
    assert plate["Shedbim_Part"]["Plate"] == "PL 25x300x380"
    assert plate["Shedbim_Part"]["Holes"] == 4
    column = ifcopenshell.util.element.get_psets(elements(schema)["1/column/A"])
    assert column["Shedbim_Part"]["Section"] == "I 310x150"
    assert column["Shedbim_Part"]["Holes"] == 6


@each_schema
def test_quantities_are_those_of_the_true_shape_at_each_level(schema: str) -> None:
    for level in ("fabrication", "coordination"):
        file = model(schema, level)
        kinds = ifc_models.by_name(file, "IfcElementType", "Tag")
        for each in SHED.parts:
            piece = ifcopenshell.util.element.get_types(kinds[each.mark])[0]
            ((name, found),) = ifcopenshell.util.element.get_psets(piece, qtos_only=True).items()
            found.pop("id")
            own = {"IfcMechanicalFastener", "IfcDiscreteAccessory"}
            noun = piece.is_a().removeprefix("Ifc")
            newer = "Shedbim_Quantities" if piece.is_a() in own else f"Qto_{noun}BaseQuantities"
            assert name == ("BaseQuantities" if schema == "IFC2X3" else newer)
            assert found == pytest.approx(_quantities(each), rel=1e-9), each.mark


def _quantities(each: Part) -> dict[str, float]:
    shape = each.shape
    net = {"NetVolume": shape.volume / 1e9, "NetWeight": shape.volume * STEEL_DENSITY}
    if isinstance(shape, BoltGroup):
        return {"Count": len(shape.points), **net}
    if isinstance(shape, Plate):
        holes = sum(hole.area for hole in shape.holes)
        gross = shape.volume + holes * shape.thickness
        lengths = {"Width": shape.thickness / 1e3, "Perimeter": shape.outline.outer_perimeter / 1e3}
        areas = {"GrossArea": gross / shape.thickness / 1e6, "NetArea": shape.volume / shape.thickness / 1e6}
        return {**lengths, **areas, **net, "GrossVolume": gross / 1e9, "GrossWeight": gross * STEEL_DENSITY}
    assert isinstance(shape, Bar)
    gross = shape.section.area * shape.length
    assert gross > shape.volume or not (shape.holes or shape.notches)
    return {
        "Length": shape.length / 1e3,
        "CrossSectionArea": shape.section.area / 1e6,
        "OuterSurfaceArea": shape.surface / 1e6,
        "GrossVolume": gross / 1e9,
        "GrossWeight": gross * STEEL_DENSITY,
        **net,
    }


@each_schema
def test_masses_of_all_quantity_sets_make_that_of_the_shed(schema: str) -> None:
    total = 0.0
    for relation in model(schema).by_type("IfcRelDefinesByProperties"):
        if relation.RelatingPropertyDefinition.is_a("IfcElementQuantity"):
            (mass,) = [q for q in relation.RelatingPropertyDefinition.Quantities if q.Name == "NetWeight"]
            total += mass.WeightValue * len(relation.RelatedObjects)
    assert total == pytest.approx(SHED.mass, rel=1e-9)


@each_schema
def test_plates_and_fasteners_are_made_of_their_grade(schema: str) -> None:
    file = model(schema)
    for each in SHED.parts:
        kind = ifc_models.by_name(file, "IfcElementType", "Tag")[each.mark]
        for thing in (kind, *ifcopenshell.util.element.get_types(kind)):
            material = ifcopenshell.util.element.get_material(thing, should_inherit=False)
            if isinstance(each.shape, Bar) and schema != "IFC2X3":
                profiles = material.ForProfileSet if thing != kind else material
                material = profiles.MaterialProfiles[0].Material
            assert (material.is_a(), material.Name) == ("IfcMaterial", each.grade), each.mark
    names = [each.Name for each in file.by_type("IfcMaterial")]
    assert sorted(names) == sorted({each.grade for each in SHED.parts})  # one for each grade
    held = "IfcGeneralMaterialProperties" if schema == "IFC2X3" else "IfcMaterialProperties"
    assert {each.Material.Name for each in file.by_type(held)} == set(names)


# --- joints


def realized(file: ifcopenshell.file) -> dict[tuple[str, str, str], list[str]]:
    """Kind, carrying and carried piece of each realized connection, and the names of what realizes it."""
    found = {}
    for each in file.by_type("IfcRelConnectsWithRealizingElements"):
        assert each.ConnectionType == each.Name
        ends = each.Name, each.RelatingElement.Name, each.RelatedElement.Name
        assert ends not in found
        found[ends] = sorted(thing.Name for thing in each.RealizingElements)
    return found


@each_schema
def test_joints_are_realized_by_their_fittings_and_welds(schema: str) -> None:
    found = realized(model(schema))
    wanted: dict[tuple[str, str, str], list[str]] = {}
    for line in ("1", "2"):
        column = f"{line}/column/A"
        # A member alone is connected to the first fitting, which the others realize.
        wanted["pinned column base", column, f"{column}/start/base plate"] = [
            f"{column}/start/anchors", f"{column}/start/key", "a6 ◺ 871 ○ all round", "s10 ‖ 311",
        ]  # fmt: skip
        wanted["rafter to column", column, f"{line}/rafter/A-B"] = [
            f"{column}/end/gusset", f"{line}/rafter/A-B/start/bolts", "a5 ◺ 180 ⚑ site", "a5 ◺ 240",
        ]  # fmt: skip
        wanted["rail cleat", column, f"{column}/along/2/bracket"] = ["a5 ◺ 240", "a5 ◺ 240"]
        wanted["brace gusset", column, f"{line}/wall brace/A"] = [f"{line}/wall brace/A/start/bolts"]
    purlin = "1-2/purlin/A-B/1"
    for other in (purlin, f"{purlin}/end/sleeve"):
        wanted["purlin cleat", "1/rafter/A-B", other] = [f"{purlin}/along/nuts", f"{purlin}/along/stay"]
    assert found == {ends: sorted(things) for ends, things in wanted.items()}


@each_schema
def test_what_nothing_realizes_is_a_plain_connection(schema: str) -> None:
    for options, wanted in (({}, set()), ({"shop_joints": True}, {"truss node"})):
        file = ifc_models.opened(SHED, schema=schema, **options)
        plain = file.by_type("IfcRelConnectsElements", include_subtypes=False)
        # The node lies within one shop assembly; the free end is no connection at all.
        assert {each.Name for each in plain} == {"strut end"} | wanted


def test_connections_keep_their_ids_whatever_realizes_them() -> None:
    def ids(shed: Shed) -> dict[tuple[str, str, str], str]:
        file = ifc_models.opened(shed, shop_joints=True)
        return {
            (each.Name, each.RelatingElement.Name, each.RelatedElement.Name): each.GlobalId
            for each in file.by_type("IfcRelConnectsElements")
        }

    bare = tuple(
        replace(run, fittings=np.zeros((len(run.pieces), 0), np.int64), welds=()) for run in SHED.joints
    )
    full, plain = ids(SHED), ids(replace(SHED, joints=bare))
    assert {ends[0] for ends in full.keys() - plain.keys()} == {"pinned column base"}
    assert {ends: full[ends] for ends in plain} == plain


@each_schema
def test_each_weld_of_each_joint_is_an_element_of_a_type(schema: str) -> None:
    file = model(schema)
    found = welds(file)
    made = [weld for run in SHED.joints for weld in run.welds for _ in run.pieces]
    assert len(found) == len(made) == 12
    assert all(each.Representation is None for each in found)
    kinds = Counter(ifcopenshell.util.element.get_type(each) for each in found)
    # Equal welds are of one type, lengths to a millimetre, whatever joints they are in.
    assert sorted((kind.Name, count) for kind, count in kinds.items()) == [
        ("a5 ◺ 180 ⚑ site", 2), ("a5 ◺ 240", 6), ("a6 ◺ 871 ○ all round", 2), ("s10 ‖ 311", 2),
    ]  # fmt: skip
    for kind in kinds:
        assert kind.is_a() == "IfcFastenerType"
        assert (kind.ElementType if schema == "IFC2X3" else kind.PredefinedType) == "WELD"


@each_schema
def test_welds_say_their_sizes(schema: str) -> None:
    by_name = {each.Name: ifcopenshell.util.element.get_psets(each) for each in welds(model(schema))}
    found = by_name["a6 ◺ 871 ○ all round"]
    for each in found.values():
        each.pop("id")
    # By hand: a leg of sqrt(2) 6 mm.
    assert found["Shedbim_Weld"] == pytest.approx(
        {"Symbol": "a6 ◺ 871 ○ all round", "Form": "fillet", "Throat": 0.006, "Leg": 0.008485281374,
         "Length": 0.871, "Made": "shop", "AllRound": True}
    )  # fmt: skip
    assert by_name["a5 ◺ 180 ⚑ site"]["Shedbim_Weld"]["Made"] == "site"
    assert "Leg" not in by_name["s10 ‖ 311"]["Shedbim_Weld"]
    names = {"IFC4": ("a", "z", "l", "n"), "IFC4X3_ADD2": (
        "NominalThroatThickness", "WeldLegLength", "WeldElementLength", "NumberOfWeldElements",
    )}  # fmt: skip
    if schema in names:
        sizes = dict(zip(names[schema], (0.006, 0.008485281374, 0.871, 1), strict=True))
        wanted = {"Type1": "fillet", "Intermittent": False, **sizes}
        assert found["Pset_FastenerWeld"] == pytest.approx(wanted)


@each_schema
def test_welds_lie_in_the_innermost_assembly_of_both_they_join(schema: str) -> None:
    held = ifc_rules.placed_once(model(schema))
    found = Counter((each.Name, held[each] and held[each].Name) for each in welds(model(schema)))
    wanted: Counter[tuple[str, str]] = Counter()
    for line in ("1", "2"):
        shop = f"{line}/column/A/shop"
        wanted.update(
            [("a6 ◺ 871 ○ all round", shop), ("s10 ‖ 311", shop), ("a5 ◺ 180 ⚑ site", f"{line}/frame")]
        )
        wanted.update([("a5 ◺ 240", shop)] * 3)
    assert found == wanted
    across = replace(SHED.joints[0], pieces=np.array([[0, 11]]), fittings=np.zeros((1, 0), np.int64))
    across = replace(across, welds=(Weld((0, 1), "fillet", 4.0, 90.0, site=True),))
    file = ifc_models.opened(replace(SHED, joints=(across,)), schema=schema)
    (lone,) = welds(file)
    assert ifc_rules.placed_once(file)[lone] is None  # two frames: the storey


def test_welds_keep_their_ids_when_others_come_and_go() -> None:
    def ids(shed: Shed) -> list[tuple[str, str]]:
        return [(each.Name, each.GlobalId) for each in welds(ifc_models.opened(shed))]

    base = SHED.joints[0]
    fewer = replace(SHED, joints=(replace(base, welds=base.welds[:1]), *SHED.joints[2:]))
    assert set(ids(fewer)) < set(ids(SHED))
    again = replace(base, kind=JointKind.FIXED_BASE)
    assert not set(ids(replace(SHED, joints=(again,)))) & set(ids(SHED))


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"fittings": np.full((2, 3), 999)}, "not there"),
        ({"fittings": np.array([[1, 2, 0], [12, 13, 17]])}, "one piece twice"),
        ({"welds": (Weld((0, 4), "fillet", 5.0, 100.0),)}, "joins what the joint does not have"),
        ({"welds": (Weld((-1, 1), "fillet", 5.0, 100.0),)}, "joins what the joint does not have"),
    ],
)
def test_joints_of_nothing_are_refused(change: dict[str, object], message: str) -> None:
    run = replace(SHED.joints[0], **change)
    with pytest.raises(ModelError, match=message):
        ifc_models.written(replace(SHED, joints=(run,)))


def test_a_weld_and_a_piece_are_few_bytes() -> None:
    """What grows with the building is a line or two for each thing; figures are measured, with some room."""
    few, many = (ifc_models.written(fitted_shed.fitted(count)) for count in (10, 60))
    each = (len(many) - len(few)) / 50
    bare = replace(fitted_shed.fitted(60), joints=())
    joined = len(many) - len(ifc_models.written(bare))
    assert each / fitted_shed.PER_FRAME < 470  # placements turn with every frame here
    assert joined / 60 < 6 * 130 + 4 * 160
