"""Materials: one for each grade, with its density; and the profile of each section in each grade."""

from __future__ import annotations

from shedbim.sections.section import STEEL_DENSITY, Section
from shedbim.writers.ifc.properties import one_property
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import label, listed, number, quoted, typed

__all__ = ["material", "profile_properties", "profile_set", "profile_usage"]

#: IfcCardinalPointReference: the axis of a piece runs through the centroid of its section (ISO 16739-1).
_CENTROID = "10"

#: Millimetres in a metre, to the fourth power.
_MM4 = 1e12


def material(step: StepFile, grade: str) -> str:
    """Write the steel of a grade, with its density in kg/m³."""
    density = typed("IfcMassDensityMeasure", number(STEEL_DENSITY * 1e9))
    if step.schema.is_first:
        steel = step.add("IfcMaterial", Name=label(grade))
        step.add(
            "IfcGeneralMaterialProperties", Material=steel, MassDensity=density[density.index("(") + 1 : -1]
        )
        return steel
    steel = step.add("IfcMaterial", Name=label(grade), Category=quoted("steel"))
    sets = {"Pset_MaterialCommon": one_property(step, "MassDensity", density)}
    if step.schema.name == "IFC4X3_ADD2":
        sets["Pset_MaterialSteel"] = one_property(step, "StructuralGrade", typed("IfcLabel", label(grade)))
    for name, held in sets.items():
        step.add("IfcMaterialProperties", Name=quoted(name), Properties=listed([held]), Material=steel)
    return steel


def profile_properties(step: StepFile, section: Section, profile: str) -> str:
    """Write what follows from a section's outline: kg/m, m² and m⁴ about the centroid; give the reference."""
    values = {
        "MassPerLength": ("IfcMassPerLengthMeasure", section.mass_per_metre),
        "CrossSectionArea": ("IfcAreaMeasure", section.area / 1e6),
        "MomentOfInertiaY": ("IfcMomentOfInertiaMeasure", section.iy / _MM4),
        "MomentOfInertiaZ": ("IfcMomentOfInertiaMeasure", section.iz / _MM4),
    }
    if step.schema.is_first:
        given = {name: number(value) for name, (_, value) in values.items()}
        given["PhysicalWeight"] = given.pop("MassPerLength")
        return step.add(
            "IfcStructuralSteelProfileProperties",
            ProfileName=label(section.designation),
            ProfileDefinition=profile,
            **given,
        )
    properties = listed(
        one_property(step, name, typed(kind, number(value))) for name, (kind, value) in values.items()
    )
    return step.add(
        "IfcProfileProperties",
        Name=quoted("Pset_ProfileMechanical"),
        Properties=properties,
        ProfileDefinition=profile,
    )


def profile_set(step: StepFile, section: Section, grade: str, profile: str, steel: str) -> str:
    """Write the profile of a section in a grade (not in IFC2X3, which has none)."""
    name = label(section.designation)
    layer = step.add("IfcMaterialProfile", Name=name, Material=steel, Profile=profile)
    return step.add(
        "IfcMaterialProfileSet", Name=label(f"{section.designation} {grade}"), MaterialProfiles=f"({layer})"
    )


def profile_usage(step: StepFile, profiles: str) -> str:
    """Write how pieces carry a profile set: the centroid on their axis."""
    return step.add("IfcMaterialProfileSetUsage", ForProfileSet=profiles, CardinalPoint=_CENTROID)
