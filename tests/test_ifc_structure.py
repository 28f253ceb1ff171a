"""The tree, the types and the shapes of the written model.

Held to the implementer agreements and informal propositions that the standard body publishes; a test names
the codes it stands for.
"""

from __future__ import annotations

from collections import Counter
from itertools import pairwise

import ifc_models
import ifc_rules
import ifcopenshell
import pytest
import specimens

from shedbim.model.roles import Role
from shedbim.writers.ifc import SCHEMAS
from shedbim.writers.ifc.classes import BARS, CLASSES
from shedbim.writers.ifc.groups import GROUPS

SHED = specimens.shed()
Entity = ifcopenshell.entity_instance

each_schema = pytest.mark.parametrize("schema", SCHEMAS)


@each_schema
def test_the_spatial_tree_is_one_line_without_shapes(schema: str) -> None:
    """SPS002, SPS008, PJS101, PJS002."""
    file = ifc_models.model(schema)
    line = ["IfcProject", "IfcSite", "IfcBuilding", "IfcBuildingStorey"]
    relations = [r for r in file.by_type("IfcRelAggregates") if not r.RelatingObject.is_a("IfcElement")]
    pairs = {r.RelatingObject.is_a(): [each.is_a() for each in r.RelatedObjects] for r in relations}
    assert pairs == {upper: [lower] for upper, lower in pairwise(line)}
    assert len(file.by_type("IfcProject")) == 1
    assert all(each.Representation is None for each in file.by_type("IfcSpatialStructureElement"))
    if schema != "IFC2X3":
        assert not file.by_type("IfcRelDeclares")


@each_schema
def test_each_element_stands_once_in_the_tree(schema: str) -> None:
    """SPS003, SPS005, SPS007: in an assembly, or else in the storey, and the grid too."""
    held = ifc_rules.placed_once(ifc_models.model(schema))
    inside = {each.Name: outer.Name for each, outer in held.items() if outer}
    keys = SHED.assemblies.keys
    wanted = {k: keys[a] for k, a in zip(SHED.pieces.keys, SHED.pieces.assembly, strict=True) if a >= 0}
    wanted |= {k: keys[a] for k, a in zip(keys, SHED.assemblies.parent, strict=True) if a >= 0}
    assert inside == wanted


@each_schema
def test_placements_follow_the_tree(schema: str) -> None:
    """OJP001: a part is placed relative to its assembly, anything else relative to the storey."""
    file = ifc_models.model(schema)
    for element in [*file.by_type("IfcElement"), *file.by_type("IfcGrid")]:
        outer = element.Decomposes[0].RelatingObject if getattr(element, "Decomposes", ()) else None
        outer = outer or element.ContainedInStructure[0].RelatingStructure
        assert element.ObjectPlacement.PlacementRelTo == outer.ObjectPlacement, element.Name


@each_schema
def test_assemblies_are_classed_and_say_where_they_are_made(schema: str) -> None:
    found = ifc_models.by_name(ifc_models.model(schema), "IfcElementAssembly")
    assert {
        name: (each.PredefinedType, each.AssemblyPlace, each.Tag, each.Representation)
        for name, each in found.items()
    } == {
        "1/frame": ("RIGID_FRAME", "SITE", "F1", None),
        "2/frame": ("RIGID_FRAME", "SITE", "F1", None),
        "1/truss/A-B": ("TRUSS", "FACTORY", "TR1", None),
        "2/truss/A-B": ("TRUSS", "FACTORY", "TR1", None),
    }


@each_schema
def test_each_part_is_one_type_with_the_predefined_type(schema: str) -> None:
    """OJT001: the type says what it is, its occurrences do not say it again."""
    file = ifc_models.model(schema)
    types = {each.Tag: each for each in file.by_type("IfcElementType")}
    assert types.keys() == {part.mark for part in SHED.parts}
    pieces = ifc_models.by_name(file, "IfcElement")
    of_type = {
        each.Name: r.RelatingType.Tag
        for r in file.by_type("IfcRelDefinesByType")
        for each in r.RelatedObjects
    }
    for part in SHED.parts:
        wanted = CLASSES[part.role]
        assert types[part.mark].is_a() == wanted.entity + "Type"
        assert types[part.mark].PredefinedType == wanted.items[schema]
        if wanted.items[schema] == "USERDEFINED":
            assert types[part.mark].ElementType == wanted.named
    for key, index in zip(SHED.pieces.keys, SHED.pieces.part, strict=True):
        part, piece = SHED.parts[index], pieces[key]
        assert of_type[key] == part.mark
        assert piece.is_a() == CLASSES[part.role].entity
        assert piece.Tag == part.mark
        if schema == "IFC2X3":
            assert piece.ObjectType == (CLASSES[part.role].named or CLASSES[part.role].items[schema])
        else:
            assert (piece.PredefinedType, piece.ObjectType) == (None, None)


#: What the enumerations of IFC2X3, IFC4 and IFC4X3_ADD2 have for a role (IfcColumnTypeEnum, IfcMemberTypeEnum).
PREDEFINED = [
    (Role.COLUMN, "COLUMN", "COLUMN", "COLUMN"),
    (Role.RAFTER, "RAFTER", "RAFTER", "RAFTER"),
    (Role.BOTTOM_CHORD, "CHORD", "CHORD", "CHORD"),
    (Role.DIAGONAL, "BRACE", "BRACE", "BRACE"),
    (Role.POST, "POST", "POST", "POST"),
    (Role.PURLIN, "PURLIN", "PURLIN", "PURLIN"),
    (Role.SIDE_RAIL, "MEMBER", "USERDEFINED", "USERDEFINED"),
    (Role.EAVES_STRUT, "STRUT", "STRUT", "STRUT"),
    (Role.WALL_BRACE, "BRACE", "BRACE", "BRACE"),
    (Role.TIE, "STRUT", "STRUT", "TIEBAR"),
    (Role.SAG_BAR, "MEMBER", "USERDEFINED", "TIEBAR"),
]


@pytest.mark.parametrize(("role", "oldest", "middle", "newest"), PREDEFINED)
def test_roles_are_classed_as_the_mapping_says(role: Role, oldest: str, middle: str, newest: str) -> None:
    assert CLASSES[role].items == {"IFC2X3": oldest, "IFC4": middle, "IFC4X3_ADD2": newest}


@each_schema
def test_every_role_has_a_class_that_the_schema_knows(schema: str) -> None:
    declarations = ifcopenshell.ifcopenshell_wrapper.schema_by_name(schema)
    assert CLASSES.keys() == set(Role)
    for each in (*CLASSES.values(), *BARS.values()):
        declarations.declaration_by_name(each.entity)
        assert each.named or each.items[schema] != "USERDEFINED"
        if schema == "IFC2X3" and each.entity in {"IfcMechanicalFastener", "IfcDiscreteAccessory"}:
            continue  # it has no such lists
        items = declarations.declaration_by_name(f"{each.entity}TypeEnum").enumeration_items()
        assert each.items[schema] in items


def _same(placement: Entity) -> bool:
    return (
        placement.Location.Coordinates == (0.0, 0.0, 0.0)
        and placement.Axis.DirectionRatios == (0.0, 0.0, 1.0)
        and placement.RefDirection.DirectionRatios == (1.0, 0.0, 0.0)
    )


@each_schema
def test_maps_belong_to_types_and_move_nothing(schema: str) -> None:
    """GEM003, GEM004, MPD001; map origin and target are the identity; nothing is used directly and by a map."""
    file = ifc_models.model(schema)
    allowed = {
        "Axis": {"Curve3D"},
        "Body": {"SweptSolid", "Clipping", "CSG"},
        "FootPrint": {"GeometricCurveSet"},
    }
    mapped = set()
    for kind in file.by_type("IfcElementType"):
        shown = [each.MappedRepresentation for each in kind.RepresentationMaps]
        assert [each.RepresentationIdentifier for each in shown] == ["Axis", "Body"]
        assert all(_same(each.MappingOrigin) for each in kind.RepresentationMaps)
        mapped |= set(shown)
    used = set()
    for element in file.by_type("IfcElement"):
        if element.is_a("IfcElementAssembly"):
            continue
        shown = element.Representation.Representations
        used |= set(shown)
        assert [each.RepresentationIdentifier for each in shown] == ["Axis", "Body"]
        for each in shown:
            assert each.RepresentationType == "MappedRepresentation"
            (item,) = each.Items
            source = item.MappingSource.MappedRepresentation
            assert source.RepresentationIdentifier == each.RepresentationIdentifier
            assert source.ContextOfItems == each.ContextOfItems
            target = item.MappingTarget
            assert target.Scale == 1.0
            assert target.LocalOrigin.Coordinates == (0.0, 0.0, 0.0)
            axes = [target.Axis1, target.Axis2, target.Axis3]
            assert [axis.DirectionRatios for axis in axes] == [
                (1.0, 0.0, 0.0),
                (0.0, 1.0, 0.0),
                (0.0, 0.0, 1.0),
            ]
    assert not mapped & used
    for each in file.by_type("IfcShapeRepresentation"):
        if each not in used:
            assert each.RepresentationType in allowed[each.RepresentationIdentifier]


@each_schema
def test_contexts_are_of_the_kinds_the_agreements_ask_for(schema: str) -> None:
    """GEM051, GEM052."""
    file = ifc_models.model(schema)
    (model,) = file.by_type("IfcGeometricRepresentationContext", include_subtypes=False)
    assert model.ContextType == "Model"
    assert {each.ContextIdentifier for each in model.HasSubContexts} == {"Axis", "Body", "FootPrint"}


@each_schema
def test_only_ends_that_are_not_square_are_cut(schema: str) -> None:
    """Plane and pointed cuts are clippings, one a plane; a notch is taken away as a prism."""
    types = {each.Tag: each for each in ifc_models.model(schema).by_type("IfcElementType")}
    for part in SHED.parts:
        item = types[part.mark].RepresentationMaps[1].MappedRepresentation.Items[0]
        chain = []
        while not item.is_a("IfcSweptAreaSolid"):
            chain.append((item.is_a(), item.SecondOperand.is_a()))
            item = item.FirstOperand
        ends = (part.bar.start, part.bar.end)
        planes = sum(len(end.slopes) for end in ends if not end.is_square and not end.notched)
        notches = sum(end.notched for end in ends)
        assert (
            chain
            == [("IfcBooleanResult", "IfcExtrudedAreaSolid")] * notches
            + [("IfcBooleanClippingResult", "IfcHalfSpaceSolid")] * planes
        )
        assert item.Depth == pytest.approx(part.bar.length / 1000)


@each_schema
def test_profiles_are_parametric_where_the_schemas_have_the_shape(schema: str) -> None:
    file = ifc_models.model(schema)
    found = {each.ProfileName: each for each in file.by_type("IfcProfileDef") if each.ProfileName}
    assert {name: each.is_a() for name, each in found.items()} == {
        "I 310x150": "IfcIShapeProfileDef",
        "U 220x85": "IfcUShapeProfileDef",
        "L 120x80x9": "IfcLShapeProfileDef",
        "L 70x50x6": "IfcLShapeProfileDef",
        "RHS 160x90x6.3": "IfcRectangleHollowProfileDef",
        "CHS 88.9x5": "IfcCircleHollowProfileDef",
        "C 205x65x20x2": "IfcCShapeProfileDef",
        "Z 200x75x21x2.5": "IfcArbitraryClosedProfileDef",
        "FL 90x11": "IfcRectangleProfileDef",
        "RD 17": "IfcCircleProfileDef",
        "KEYHOLE 130": "IfcArbitraryProfileDefWithVoids",
    }
    for each in found.values():
        if each.is_a("IfcParameterizedProfileDef"):
            assert each.Position.RefDirection.DirectionRatios == (1.0, 0.0)
    curve = found["Z 200x75x21x2.5"].OuterCurve
    if schema == "IFC2X3":
        assert sum(each.ParentCurve.is_a("IfcTrimmedCurve") for each in curve.Segments) == 8
    else:
        assert sum(each.is_a("IfcArcIndex") for each in curve.Segments) == 8
        assert len(set(curve.Points.CoordList)) == len(curve.Points.CoordList)  # GEM112


@each_schema
def test_polylines_close_on_the_very_same_point(schema: str) -> None:
    """GEM111: no point stands on the one before, and a closed line ends in the instance it began with."""
    for line in ifc_models.model(schema).by_type("IfcPolyline"):
        places = [each.Coordinates for each in line.Points]
        assert all(a != b for a, b in pairwise(places))
        if places[0] == places[-1]:
            assert line.Points[0] == line.Points[-1]


@each_schema
def test_axes_run_from_steel_to_steel(schema: str) -> None:
    types = {each.Tag: each for each in ifc_models.model(schema).by_type("IfcElementType")}
    for part in SHED.parts:
        (line,) = types[part.mark].RepresentationMaps[0].MappedRepresentation.Items
        (first, *_), (last, *_) = (each.Coordinates for each in line.Points)
        assert (first * 1000, last * 1000) == pytest.approx(part.bar.axis, abs=1e-6)


@each_schema
def test_the_grid_stands_on_the_storey_with_its_labels(schema: str) -> None:
    (grid,) = ifc_models.model(schema).by_type("IfcGrid")
    lettered = {each.AxisTag: [p.Coordinates for p in each.AxisCurve.Points] for each in grid.UAxes}
    numbered = {each.AxisTag: [p.Coordinates for p in each.AxisCurve.Points] for each in grid.VAxes}
    assert {tag: {x for x, _ in line} for tag, line in lettered.items()} == {
        "A": {0.0},
        "B": {6.1},
        "C": {13.7},
    }
    assert {tag: {y for _, y in line} for tag, line in numbered.items()} == {
        "1": {0.0},
        "2": {6.05},
        "3": {11.93},
    }
    assert all(line[0][1] < 0 and line[1][1] > 11.93 for line in lettered.values())
    assert all(line[0][0] < 0 and line[1][0] > 13.7 for line in numbered.values())


@each_schema
def test_every_resource_is_reached_from_something_with_an_id(schema: str) -> None:
    """IFC106: nothing lies about unused; properties, styles and conversions point at what they are about."""
    assert ifc_rules.unreached(ifc_models.model(schema), schema) == set()


@each_schema
def test_shapes_are_shared_where_the_schema_lets_them_be(schema: str) -> None:
    file = ifc_models.model(schema)
    shapes = [each.Representation for each in file.by_type("IfcMember") + file.by_type("IfcColumn")]
    assert len(set(shapes)) == (len(shapes) if schema == "IFC2X3" else len(SHED.parts))


def test_equal_frames_share_their_placements() -> None:
    lines = [ifc_models.model("IFC4").by_type(name) for name in ("IfcLocalPlacement", "IfcAxis2Placement3D")]
    more = ifc_models.opened(specimens.shed(frames=3))
    again = [more.by_type(name) for name in ("IfcLocalPlacement", "IfcAxis2Placement3D")]
    assert len(again[0]) - len(lines[0]) == 8 + 2
    # The third frame is a placement of its own; all that stands in it stands as in the first.
    assert len(again[1]) - len(lines[1]) == 1


@each_schema
def test_bracing_and_secondary_steel_are_groups(schema: str) -> None:
    file = ifc_models.model(schema)
    found = {
        r.RelatingGroup.Name: sorted(each.Name for each in r.RelatedObjects)
        for r in file.by_type("IfcRelAssignsToGroup")
    }
    roles = [SHED.parts[index].role for index in SHED.pieces.part]
    assert found == {
        name: sorted(key for key, role in zip(SHED.pieces.keys, roles, strict=True) if role in wanted)
        for name, wanted in GROUPS.items()
    }
    assert all(r.RelatedObjectsType is None for r in file.by_type("IfcRelAssignsToGroup"))  # IFC102


@each_schema
def test_joints_connect_what_carries_with_the_rest(schema: str) -> None:
    keys = SHED.pieces.keys
    pairs = Counter(
        (run.kind.word, keys[row[0]], keys[other])
        for run in SHED.joints
        if run.kind.word != "free end"
        for row in run.pieces
        for other in row[1:]
    )
    shop = {pair: count for pair, count in pairs.items() if pair[0] == "truss node"}
    assert sum(shop.values()) == 6
    for options, wanted in (({"shop_joints": True}, pairs), ({}, pairs - Counter(shop))):
        file = ifc_models.opened(SHED, schema=schema, **options)
        relations = file.by_type("IfcRelConnectsElements")
        assert Counter((r.Name, r.RelatingElement.Name, r.RelatedElement.Name) for r in relations) == wanted
