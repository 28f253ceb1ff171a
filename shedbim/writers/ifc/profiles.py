"""Profiles: the entity of a section's cross-section, parametric where the schemas have its shape.

A profile's own x and y are a section's y and z. Parametric profiles are drawn about the middle of their
bounding box (ISO 16739-1), ours about the centroid: the profile's Position makes up for it.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

import numpy as np

from shedbim.geometry.outlines import Loop
from shedbim.sections.profiles import Angle, Channel, Flat, Hollow, IShape, LippedC, Pipe, Round
from shedbim.sections.section import Profile, Section
from shedbim.writers.ifc.placements import direction, point
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import FALSE, NONE, TRUE, enum, label, listed, metres, number, reals, typed

__all__ = ["PARAMETRIC", "profile"]

_STRAIGHT = 1e-9

#: A profile entity and the attributes of its own.
Parameters = tuple[str, dict[str, str]]


def profile(step: StepFile, section: Section) -> str:
    """Write (or find) the profile of a section; give its reference."""
    shared = {"ProfileType": enum("AREA"), "ProfileName": label(section.designation)}
    parameters = PARAMETRIC.get(type(section.profile))
    if parameters is None:
        return _arbitrary(step, section, shared)
    entity, given = parameters(section.profile)
    y, z = section.centroid_in_box
    return step.share(entity, **shared, Position=_position(step, -y, -z), **given)


def _position(step: StepFile, y: float, z: float) -> str:
    """Write (or find) an unturned placement at (y, z) mm in the plane of the section."""
    # Outlines are integrated numerically: a nanometre of noise is not an offset.
    location = point(step, round(y, 6) + 0.0, round(z, 6) + 0.0)
    return step.share("IfcAxis2Placement2D", Location=location, RefDirection=direction(step, 1.0, 0.0))


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


def _arbitrary(step: StepFile, section: Section, shared: dict[str, str]) -> str:
    """Write (or find) a profile that follows the outline, arcs as arcs."""
    draw = _composite if step.schema.is_first else _indexed
    outer, *holes = [draw(step, loop) for loop in section.outline.loops]
    if not holes:
        return step.share("IfcArbitraryClosedProfileDef", **shared, OuterCurve=outer)
    return step.share(
        "IfcArbitraryProfileDefWithVoids", **shared, OuterCurve=outer, InnerCurves=listed(holes)
    )


def _indexed(step: StepFile, loop: Loop) -> str:
    """Write a loop as one list of points and the lines and arcs between them."""
    count = len(loop.points)
    points = loop.points.tolist()
    segments = []
    for i, bulge in enumerate(loop.bulges.tolist()):
        start, end = i + 1, (i + 1) % count + 1
        if abs(bulge) < _STRAIGHT:
            segments.append(typed("IfcLineIndex", f"({start},{end})"))
        else:
            points.append(_middle(points[i], points[end - 1], bulge))
            segments.append(typed("IfcArcIndex", f"({start},{len(points)},{end})"))
    coordinates = listed(reals([y / 1000, z / 1000]) for y, z in points)
    where = step.share("IfcCartesianPointList2D", CoordList=coordinates)
    return step.share("IfcIndexedPolyCurve", Points=where, Segments=listed(segments), SelfIntersect=FALSE)


def _middle(start: list[float], end: list[float], bulge: float) -> list[float]:
    """Give the point halfway along an arc, mm: half the chord times the bulge off it, on the right."""
    (y1, z1), (y2, z2) = start, end
    return [(y1 + y2) / 2 + bulge * (z2 - z1) / 2, (z1 + z2) / 2 - bulge * (y2 - y1) / 2]


def _composite(step: StepFile, loop: Loop) -> str:
    """Write a loop as a chain of lines and trimmed circles."""
    following = np.roll(loop.points, -1, axis=0).tolist()
    pieces = []
    for start, end, bulge in zip(loop.points.tolist(), following, loop.bulges.tolist(), strict=True):
        if abs(bulge) < _STRAIGHT:
            curve = step.share("IfcPolyline", Points=listed([point(step, *start), point(step, *end)]))
        else:
            curve = _arc(step, np.array(start), np.array(end), bulge)
        pieces.append(
            step.share(
                "IfcCompositeCurveSegment", Transition=enum("CONTINUOUS"), SameSense=TRUE, ParentCurve=curve
            )
        )
    return step.share("IfcCompositeCurve", Segments=listed(pieces), SelfIntersect=FALSE)


def _arc(step: StepFile, start: np.ndarray[Any, Any], end: np.ndarray[Any, Any], bulge: float) -> str:
    """Write an arc from ``start`` to ``end`` (2,) mm as a circle trimmed at two angles, radians."""
    chord = end - start
    left = np.array([-chord[1], chord[0]])
    # With the opening angle 4·atan(bulge): the centre's distance from the chord over the chord's length.
    centre = (start + end) / 2 + left * (1 - bulge * bulge) / (4 * bulge)
    radius = float(np.hypot(*(start - centre)))
    circle = step.share("IfcCircle", Position=_position(step, *centre.tolist()), Radius=metres(radius))
    first, last = (float(np.arctan2(p[1] - centre[1], p[0] - centre[0])) % (2 * np.pi) for p in (start, end))
    return step.share(
        "IfcTrimmedCurve",
        BasisCurve=circle,
        Trim1=listed([typed("IfcParameterValue", number(first))]),
        Trim2=listed([typed("IfcParameterValue", number(last))]),
        SenseAgreement=TRUE if bulge > 0 else FALSE,
        MasterRepresentation=enum("PARAMETER"),
    )
