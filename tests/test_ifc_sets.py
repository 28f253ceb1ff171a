"""Property sets, quantities, materials and colours, against the standard's own templates."""

from __future__ import annotations

import ifc_models
import ifc_rules
import ifcopenshell
import ifcopenshell.util.element
import ifcopenshell.util.unit
import pytest
import specimens

from shedbim.sections.section import STEEL_DENSITY
from shedbim.writers.ifc import SCHEMAS
from shedbim.writers.palette import PALETTE

SHED = specimens.shed()
Entity = ifcopenshell.entity_instance

each_schema = pytest.mark.parametrize("schema", SCHEMAS)


def pieces_of(schema: str) -> list[tuple[str, object, Entity]]:
    """Key, part and element of each piece."""
    found = ifc_models.by_name(ifc_models.model(schema), "IfcElement")
    rows = zip(SHED.pieces.keys, SHED.pieces.part, strict=True)
    return [(key, SHED.parts[part], found[key]) for key, part in rows]


@each_schema
def test_sets_with_standard_names_are_the_standard_ones(schema: str) -> None:
    """PSE001, PSE002, QTY001: names, members, value types and classes are those of the templates."""
    seen = ifc_rules.standard_sets(ifc_models.model(schema), schema)
    later = {"Pset_ElementAssemblyCommon", "Pset_MaterialCommon", "Pset_ProfileMechanical"}
    later |= {"Qto_MemberBaseQuantities", "Qto_ColumnBaseQuantities"}
    later |= {"Pset_MaterialSteel"} if schema == "IFC4X3_ADD2" else set()
    assert seen == {"Pset_MemberCommon", "Pset_ColumnCommon"} | (set() if schema == "IFC2X3" else later)


@each_schema
def test_quantities_are_those_of_the_part(schema: str) -> None:
    for key, part, piece in pieces_of(schema):
        noun = piece.is_a().removeprefix("Ifc")
        name = "BaseQuantities" if schema == "IFC2X3" else f"Qto_{noun}BaseQuantities"
        found = ifcopenshell.util.element.get_psets(piece, qtos_only=True)
        assert found.keys() == {name}, key
        found[name].pop("id")
        bar = part.bar
        gross = bar.section.area * bar.length
        assert found[name] == pytest.approx(
            {
                "Length": bar.length / 1e3,
                "CrossSectionArea": bar.section.area / 1e6,
                "OuterSurfaceArea": bar.surface / 1e6,
                "GrossVolume": gross / 1e9,
                "NetVolume": bar.volume / 1e9,
                "GrossWeight": gross * STEEL_DENSITY,
                "NetWeight": bar.mass,
            },
            rel=1e-9,
        ), key


@each_schema
def test_the_masses_in_the_quantities_add_up_to_that_of_the_shed(schema: str) -> None:
    total = 0.0
    for relation in ifc_models.model(schema).by_type("IfcRelDefinesByProperties"):
        if relation.RelatingPropertyDefinition.is_a("IfcElementQuantity"):
            (mass,) = [q for q in relation.RelatingPropertyDefinition.Quantities if q.Name == "NetWeight"]
            total += mass.WeightValue * len(relation.RelatedObjects)
    assert total == pytest.approx(SHED.mass, rel=1e-9)


@each_schema
def test_pieces_say_what_they_are(schema: str) -> None:
    for key, part, piece in pieces_of(schema):
        found = ifcopenshell.util.element.get_psets(piece)
        for each in found.values():
            each.pop("id")
        assert found["Shedbim_Part"] == {
            "Mark": part.mark,
            "Role": part.role.word,
            "Section": part.bar.section.designation,
            "Grade": part.grade,
            "Finish": part.finish,
        }, key
        common = found[f"Pset_{piece.is_a().removeprefix('Ifc')}Common"]
        assert common == {"Reference": part.mark, "LoadBearing": True, "IsExternal": False}


@each_schema
def test_line_and_place_make_up_the_key(schema: str) -> None:
    owners = dict(zip(SHED.pieces.keys, SHED.pieces.assembly, strict=True))
    for key, _, piece in pieces_of(schema):
        found = ifcopenshell.util.element.get_psets(piece)
        assert f"{found['Shedbim_Line']['Line']}/{found['Shedbim_Place']['Place']}" == key == piece.Name
        in_truss = owners[key] >= 0 and SHED.assembly_types[SHED.assemblies.type[owners[key]]].made == "shop"
        assert found["Shedbim_Place"].get("AssemblyMark") == ("TR1" if in_truss else None)


def test_sets_of_lines_and_places_are_shared() -> None:
    file = ifc_models.model("IFC4")
    names = [each.Name for each in file.by_type("IfcPropertySet")]
    keys = (*SHED.pieces.keys, *SHED.assemblies.keys)
    assert names.count("Shedbim_Line") == len({key.split("/")[0] for key in keys})
    # No place holds two marks here.
    assert names.count("Shedbim_Place") == len({key.partition("/")[2] for key in keys})


@each_schema
def test_full_keys_name_piece_and_assembly(schema: str) -> None:
    file = ifc_models.opened(SHED, schema=schema, full_keys=True)
    found = ifc_models.by_name(file, "IfcElement")
    for key, owner in zip(SHED.pieces.keys, SHED.pieces.assembly, strict=True):
        held = ifcopenshell.util.element.get_pset(found[key], "Shedbim_Piece")
        held.pop("id")
        wanted = {"Key": key}
        if owner >= 0:
            mark = SHED.assembly_types[SHED.assemblies.type[owner]].mark
            wanted |= {"AssemblyKey": SHED.assemblies.keys[owner], "AssemblyMark": mark}
        assert held == wanted


@each_schema
def test_materials_carry_grade_density_and_profile(schema: str) -> None:
    file = ifc_models.model(schema)
    assert {each.Name for each in file.by_type("IfcMaterial")} == {"S235", "S355"}
    if schema == "IFC2X3":
        densities = {
            each.Material.Name: each.MassDensity for each in file.by_type("IfcGeneralMaterialProperties")
        }
    else:
        densities = {
            each.Material.Name: each.Properties[0].NominalValue.wrappedValue
            for each in file.by_type("IfcMaterialProperties")
            if each.Name == "Pset_MaterialCommon"
        }
    assert densities == {"S235": 7850.0, "S355": 7850.0}
    for key, part, piece in pieces_of(schema):
        found = ifcopenshell.util.element.get_material(piece, should_inherit=False)
        if schema == "IFC2X3":
            assert found.Name == part.grade
            continue
        assert (found.is_a(), found.CardinalPoint) == ("IfcMaterialProfileSetUsage", 10), key
        (layer,) = found.ForProfileSet.MaterialProfiles
        assert (layer.Material.Name, layer.Profile.ProfileName) == (part.grade, part.bar.section.designation)
        kind = ifcopenshell.util.element.get_type(piece)
        assert ifcopenshell.util.element.get_material(kind) == found.ForProfileSet
        solid = ifc_sweep(kind)
        assert solid.SweptArea == layer.Profile


def ifc_sweep(kind: Entity) -> Entity:
    """The sweep that a type's body begins with."""
    item = kind.RepresentationMaps[1].MappedRepresentation.Items[0]
    while not item.is_a("IfcSweptAreaSolid"):
        item = item.FirstOperand
    return item


@each_schema
def test_section_properties_are_those_of_the_outline(schema: str) -> None:
    file = ifc_models.model(schema)
    for section in specimens.SECTIONS.values():
        if schema == "IFC2X3":
            held = ifc_models.by_name(file, "IfcStructuralSteelProfileProperties", "ProfileName")[
                section.designation
            ]
            found = [held.PhysicalWeight, held.CrossSectionArea, held.MomentOfInertiaY, held.MomentOfInertiaZ]
        else:
            (held,) = [
                each
                for each in file.by_type("IfcProfileProperties")
                if each.ProfileDefinition.ProfileName == section.designation
            ]
            found = [each.NominalValue.wrappedValue for each in held.Properties]
        wanted = [section.mass_per_metre, section.area / 1e6, section.iy / 1e12, section.iz / 1e12]
        assert found == pytest.approx(wanted, rel=1e-9)


@each_schema
def test_every_body_has_the_colour_of_its_role(schema: str) -> None:
    for kind in ifc_models.model(schema).by_type("IfcElementType"):
        (part,) = [each for each in SHED.parts if each.mark == kind.Tag]
        item = kind.RepresentationMaps[1].MappedRepresentation.Items[0]
        (style,) = item.StyledByItem[0].Styles
        if schema == "IFC2X3":
            (style,) = style.Styles
        assert style.is_a("IfcSurfaceStyle")
        colour = style.Styles[0].SurfaceColour
        assert [colour.Red * 255, colour.Green * 255, colour.Blue * 255] == pytest.approx(PALETTE[part.role])


@each_schema
def test_units_are_those_of_the_international_system(schema: str) -> None:
    file = ifc_models.model(schema)
    for kind in ("LENGTHUNIT", "AREAUNIT", "VOLUMEUNIT", "PLANEANGLEUNIT"):
        assert ifcopenshell.util.unit.calculate_unit_scale(file, kind) == 1.0
    mass = ifcopenshell.util.unit.get_project_unit(file, "MASSUNIT")
    assert (mass.Prefix, mass.Name) == ("KILO", "GRAM")


@each_schema
def test_the_project_states_itself_and_the_building_what_was_assumed(schema: str) -> None:
    file = ifc_models.model(schema)
    (project,), (building,) = file.by_type("IfcProject"), file.by_type("IfcBuilding")
    assert (project.Name, project.LongName) == ("2417", "Saltmarsh Seed Store")
    issue = ifcopenshell.util.element.get_pset(project, "Shedbim_Issue")
    assert (issue["Number"], issue["Revision"]) == ("2417", "P01")
    basis = ifcopenshell.util.element.get_pset(building, "Shedbim_Basis")
    assert basis["Notes"] == ["A note.", "A second note."]
    assert basis["Defaults"] == ["purlins.gap: 6 mm"]
