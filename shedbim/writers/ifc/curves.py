"""Closed curves in a plane: loops of lines and arcs, arcs as true arcs, and the profiles they bound."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from shedbim.geometry.outlines import Loop
from shedbim.writers.ifc.placements import direction, point
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import FALSE, TRUE, enum, listed, metres, number, reals, typed

__all__ = ["area", "circle_curve", "closed_line", "loop_curve", "position"]

_STRAIGHT = 1e-9


def position(step: StepFile, y: float, z: float) -> str:
    """Write (or find) an unturned placement at (y, z) mm in a plane."""
    # Outlines are integrated numerically: a nanometre of noise is not an offset.
    location = point(step, round(y, 6) + 0.0, round(z, 6) + 0.0)
    return step.share("IfcAxis2Placement2D", Location=location, RefDirection=direction(step, 1.0, 0.0))


def area(step: StepFile, curves: Sequence[str], **given: str) -> str:
    """Write (or find) the profile inside the first of ``curves`` and outside the others."""
    outer, *holes = curves
    shared = {"ProfileType": enum("AREA"), **given, "OuterCurve": outer}
    if not holes:
        return step.share("IfcArbitraryClosedProfileDef", **shared)
    return step.share("IfcArbitraryProfileDefWithVoids", **shared, InnerCurves=listed(holes))


def closed_line(step: StepFile, corners: Sequence[Sequence[float]]) -> str:
    """Write a polygon through ``corners`` (x, y), mm; it ends in the very point it began with."""
    points = [point(step, x, y) for x, y in corners]
    return step.share("IfcPolyline", Points=listed([*points, points[0]]))


def circle_curve(step: StepFile, diameter: float, x: float, y: float) -> str:
    """Write (or find) a whole circle about (x, y), mm."""
    return step.share("IfcCircle", Position=position(step, x, y), Radius=metres(diameter / 2))


def loop_curve(step: StepFile, loop: Loop) -> str:
    """Write (or find) a loop with its arcs, mm."""
    return _composite(step, loop) if step.schema.is_first else _indexed(step, loop)


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
    circle = step.share("IfcCircle", Position=position(step, *centre.tolist()), Radius=metres(radius))
    first, last = (float(np.arctan2(p[1] - centre[1], p[0] - centre[0])) % (2 * np.pi) for p in (start, end))
    return step.share(
        "IfcTrimmedCurve",
        BasisCurve=circle,
        Trim1=listed([typed("IfcParameterValue", number(first))]),
        Trim2=listed([typed("IfcParameterValue", number(last))]),
        SenseAgreement=TRUE if bulge > 0 else FALSE,
        MasterRepresentation=enum("PARAMETER"),
    )
