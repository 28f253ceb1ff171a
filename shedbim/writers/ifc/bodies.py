"""The body of a bar: a swept profile, cut only at ends that are not square.

The sweep runs from long point to long point, so a square end needs no cut. A plane cut is a clipping by a
half space; a pointed end is two of them; a notched end, of which what lies inside either plane is kept,
loses the wedge outside both: a prism.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.model.bars import Bar, EndCut
from shedbim.writers.ifc.placements import axis2placement, direction, point
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import TRUE, enum, listed, metres

__all__ = ["Body", "body"]

Vector = NDArray[np.float64]

#: Cutting bodies reach beyond the steel by this share of its size.
_BEYOND = 1.5


@dataclass(frozen=True)
class Body:
    """A written body: its reference, and the RepresentationType of a representation that holds it."""

    item: str
    kind: str


def body(step: StepFile, bar: Bar, profile: str) -> Body:
    """Write the body of a bar in the part's own frame, swept from the ``profile`` it refers to."""
    sweep = step.add(
        "IfcExtrudedAreaSolid",
        SweptArea=profile,
        # The profile's x is the bar's y, its y the bar's z.
        Position=axis2placement(step, (0.0, 0.0, 0.0), (1.0, 0.0, 0.0), (0.0, 1.0, 0.0)),
        ExtrudedDirection=direction(step, 0.0, 0.0, 1.0),
        Depth=metres(bar.length),
    )
    result = Body(sweep, "SweptSolid")
    # Notches come last: a clipping takes a sweep or another clipping only.
    for cut, x0, facing in sorted(_cuts(bar), key=lambda each: each[0].notched):
        result = (
            _notched(step, result, bar, cut, x0, facing)
            if cut.notched
            else _clipped(step, result, cut, x0, facing)
        )
    return result


def _cuts(bar: Bar) -> list[tuple[EndCut, float, float]]:
    """Give the cuts to make: cut, x of its axis point in mm, +1 where the steel lies towards +x."""
    first, last = bar.axis
    ends = ((_plain(bar.start), first, 1.0), (_plain(bar.end), last, -1.0))
    return [end for end in ends if not end[0].is_square]


def _plain(cut: EndCut) -> EndCut:
    """Give the cut without planes that say the same twice."""
    slopes = tuple(dict.fromkeys(cut.slopes))
    return EndCut(slopes, cut.notched and len(slopes) > 1)


def _normals(cut: EndCut, facing: float) -> list[Vector]:
    """Give the unit normals (3,) of a cut's planes, each towards the steel it keeps."""
    normals = [np.array([1.0, -a, -b]) * facing for a, b in cut.slopes]
    return [normal / np.linalg.norm(normal) for normal in normals]


def _clipped(step: StepFile, whole: Body, cut: EndCut, x0: float, facing: float) -> Body:
    """Take away what lies outside each plane of a cut through (x0, 0, 0) mm."""
    item = whole.item
    for normal in _normals(cut, facing):
        across = _unit(np.cross(normal, _least_along(normal)))
        position = axis2placement(step, (x0, 0.0, 0.0), normal.tolist(), across.tolist())
        # AgreementFlag true: the normal points out of the half space, which is taken away, into the steel.
        outside = step.share(
            "IfcHalfSpaceSolid", BaseSurface=step.share("IfcPlane", Position=position), AgreementFlag=TRUE
        )
        item = step.add(
            "IfcBooleanClippingResult", Operator=enum("DIFFERENCE"), FirstOperand=item, SecondOperand=outside
        )
    return Body(item, "Clipping")


def _notched(step: StepFile, whole: Body, bar: Bar, cut: EndCut, x0: float, facing: float) -> Body:
    """Take away the wedge outside both planes of a cut through (x0, 0, 0) mm."""
    first, second = _normals(cut, facing)
    edge = _unit(np.cross(first, second))
    # In each plane, the direction from the edge that leads out of what the other plane keeps.
    sides = [_unit(np.cross(edge, normal)) for normal in (first, second)]
    sides = [side if side @ other < 0 else -side for side, other in zip(sides, (second, first), strict=True)]
    reach = _BEYOND * _reach(bar, cut, x0, facing)
    outwards = _unit(sides[0] + sides[1])
    corners = [np.zeros(3), sides[0], sides[0] + outwards, sides[1] + outwards, sides[1]]
    x, y = sides[0], np.cross(edge, sides[0])
    if y @ sides[1] < 0:  # the profile runs anticlockwise
        edge, y = -edge, -y
    outline = [point(step, *(reach * np.array([corner @ x, corner @ y])).tolist()) for corner in corners]
    wedge = step.add(
        "IfcExtrudedAreaSolid",
        SweptArea=step.add(
            "IfcArbitraryClosedProfileDef",
            ProfileType=enum("AREA"),
            OuterCurve=step.add("IfcPolyline", Points=listed([*outline, outline[0]])),
        ),
        Position=axis2placement(
            step, (np.array([x0, 0.0, 0.0]) - reach * edge).tolist(), edge.tolist(), x.tolist()
        ),
        ExtrudedDirection=direction(step, 0.0, 0.0, 1.0),
        Depth=metres(2 * reach),
    )
    item = step.add(
        "IfcBooleanResult", Operator=enum("DIFFERENCE"), FirstOperand=whole.item, SecondOperand=wedge
    )
    return Body(item, "CSG")


def _reach(bar: Bar, cut: EndCut, x0: float, facing: float) -> float:
    """How far from the axis point steel outside a cut can lie, mm."""
    low_y, low_z, high_y, high_z = bar.section.outline.bounds
    radius = float(np.hypot(max(-low_y, high_y), max(-low_z, high_z)))
    steepest = max(float(np.hypot(a, b)) for a, b in cut.slopes)
    beyond = x0 if facing > 0 else bar.length - x0
    return float(np.hypot(radius, max(beyond, radius * steepest)))


def _unit(vector: Vector) -> Vector:
    """Give the vector (3,) with length 1."""
    return vector / float(np.linalg.norm(vector))


def _least_along(normal: Vector) -> Vector:
    """Give the axis (3,) that a direction leans to least."""
    return np.eye(3)[int(np.argmin(np.abs(normal)))]
