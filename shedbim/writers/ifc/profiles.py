"""Profiles: the entity of a section's cross-section, parametric where the schemas have its shape.

A profile's own x and y are a section's y and z. Parametric profiles are drawn about the middle of their
bounding box (ISO 16739-1), ours about the centroid: the profile's Position makes up for it.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

from shedbim.sections.profiles import Angle, Channel, Flat, Hollow, IShape, LippedC, Pipe, Round
from shedbim.sections.section import Profile, Section
from shedbim.writers.ifc.curves import area, loop_curve, position
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import NONE, enum, label, metres

__all__ = ["PARAMETRIC", "profile"]

#: A profile entity and the attributes of its own.
Parameters = tuple[str, dict[str, str]]


def profile(step: StepFile, section: Section) -> str:
    """Write (or find) the profile of a section; give its reference."""
    name = label(section.designation)
    parameters = PARAMETRIC.get(type(section.profile))
    if parameters is None:
        curves = [loop_curve(step, loop) for loop in section.outline.loops]
        return area(step, curves, ProfileName=name)
    entity, given = parameters(section.profile)
    y, z = section.centroid_in_box
    return step.share(
        entity, ProfileType=enum("AREA"), ProfileName=name, Position=position(step, -y, -z), **given
    )


def _radius(radius: float) -> str:
    """Give a radius in metres, or nothing for a sharp corner: IFC2X3 allows no zero."""
    return metres(radius) if radius > 0 else NONE


def _i_shape(p: IShape) -> Parameters:
    return "IfcIShapeProfileDef", {
        "OverallWidth": metres(p.b), "OverallDepth": metres(p.h), "WebThickness": metres(p.tw),
        "FlangeThickness": metres(p.tf), "FilletRadius": _radius(p.r),
    }  # fmt: skip


def _u_shape(p: Channel) -> Parameters:
    return "IfcUShapeProfileDef", {
        "Depth": metres(p.h), "FlangeWidth": metres(p.b), "WebThickness": metres(p.tw),
        "FlangeThickness": metres(p.tf), "FilletRadius": _radius(p.r),
    }  # fmt: skip


def _l_shape(p: Angle) -> Parameters:
    return "IfcLShapeProfileDef", {
        "Depth": metres(p.h), "Width": metres(p.b), "Thickness": metres(p.t),
        "FilletRadius": _radius(p.r), "EdgeRadius": _radius(p.r2),
    }  # fmt: skip


def _rectangle_hollow(p: Hollow) -> Parameters:
    return "IfcRectangleHollowProfileDef", {
        "XDim": metres(p.b), "YDim": metres(p.h), "WallThickness": metres(p.t),
        "InnerFilletRadius": _radius(p.ri), "OuterFilletRadius": _radius(p.ro),
    }  # fmt: skip


def _circle_hollow(p: Pipe) -> Parameters:
    return "IfcCircleHollowProfileDef", {"Radius": metres(p.d / 2), "WallThickness": metres(p.t)}


def _c_shape(p: LippedC) -> Parameters:
    return "IfcCShapeProfileDef", {
        "Depth": metres(p.h), "Width": metres(p.b), "WallThickness": metres(p.t),
        "Girth": metres(p.c), "InternalFilletRadius": _radius(p.ri),
    }  # fmt: skip


def _rectangle(p: Flat) -> Parameters:
    return "IfcRectangleProfileDef", {"XDim": metres(p.t), "YDim": metres(p.b)}


def _circle(p: Round) -> Parameters:
    return "IfcCircleProfileDef", {"Radius": metres(p.d / 2)}


#: Profile classes the schemas draw from dimensions. A lipped Z is not among them: theirs has no lips.
PARAMETRIC: Mapping[type[Profile], Callable[[Any], Parameters]] = {
    IShape: _i_shape,
    Channel: _u_shape,
    Angle: _l_shape,
    Hollow: _rectangle_hollow,
    Pipe: _circle_hollow,
    LippedC: _c_shape,
    Flat: _rectangle,
    Round: _circle,
}
