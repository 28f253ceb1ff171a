"""The body of a bar: a swept profile, cut only at ends that are not square.

The sweep runs from long point to long point, so a square end needs no cut. A plane cut is a clipping by a
half space; a pointed end is two of them; a notched end, of which what lies inside either plane is kept,
loses the wedge outside both: a prism.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.model.bars import SQUARE, Bar, EndCut
from shedbim.writers.ifc.placements import axis2placement, direction, point
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import TRUE, enum, listed, metres

__all__ = ["Body", "body"]

Vector = NDArray[np.float64]

#: A wedge is this many times as large as the steel it may meet.
_BEYOND = 1.5


@dataclass(frozen=True)
class Body:
    """A written body: its reference, and the RepresentationType of a representation that holds it."""

    item: str
    kind: str


@dataclass(frozen=True)
class _Cut:
    """A cut that is to be made.

    Attributes:
        normals: unit normals (3,) of its planes, each towards the steel it keeps.
        notched: as of ``EndCut``.
        x0: where the planes meet the axis, mm.
        reach: steel that a notch takes away lies within so much of that point, mm.
    """

    normals: tuple[Vector, ...]
    notched: bool
    x0: float
    reach: float


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
    first, last = bar.axis
    cuts = [_cut(bar, bar.start, first, 1.0), _cut(bar, bar.end, last, -1.0)]
    # Notches come last: a clipping takes a sweep or another clipping only.
    for cut in sorted((cut for cut in cuts if cut), key=lambda each: each.notched):
        result = (_notched if cut.notched else _clipped)(step, result, cut)
    return result


def _cut(bar: Bar, end: EndCut, x0: float, facing: float) -> _Cut | None:
    """Give the cut at an end, nothing where it is square; ``facing`` is +1 where the steel lies towards +x."""
    slopes = tuple(dict.fromkeys(end.slopes))  # two equal planes are one
    if slopes == SQUARE.slopes:
        return None
    normals = tuple(_unit(np.array([1.0, -a, -b]) * facing) for a, b in slopes)
    low_y, low_z, high_y, high_z = bar.section.outline.bounds
    radius = float(np.hypot(max(-low_y, high_y), max(-low_z, high_z)))
    steepest = max(float(np.hypot(a, b)) for a, b in slopes)
    beyond = x0 if facing > 0 else bar.length - x0
    reach = float(np.hypot(radius, max(beyond, radius * steepest)))
    return _Cut(normals, end.notched and len(slopes) > 1, x0, reach)


def _clipped(step: StepFile, whole: Body, cut: _Cut) -> Body:
    """Take away what lies outside each plane of a cut."""
    item = whole.item
    for normal in cut.normals:
        across = _unit(np.cross(normal, _least_along(normal)))
        position = axis2placement(step, (cut.x0, 0.0, 0.0), normal.tolist(), across.tolist())
        plane = step.share("IfcPlane", Position=position)
        # AgreementFlag true: the normal points out of the half space, which is taken away, into the steel.
        outside = step.share("IfcHalfSpaceSolid", BaseSurface=plane, AgreementFlag=TRUE)
        item = step.add(
            "IfcBooleanClippingResult", Operator=enum("DIFFERENCE"), FirstOperand=item, SecondOperand=outside
        )
    return Body(item, "Clipping")


def _notched(step: StepFile, whole: Body, cut: _Cut) -> Body:
    """Take away the wedge outside both planes of a cut."""
    first, second = cut.normals
    edge = _unit(np.cross(first, second))
    # In each plane, the direction from the edge that leads out of what the other plane keeps.
    sides = [_unit(np.cross(edge, normal)) for normal in (first, second)]
    sides = [side if side @ other < 0 else -side for side, other in zip(sides, (second, first), strict=True)]
    outwards = _unit(sides[0] + sides[1])
    corners = [np.zeros(3), sides[0], sides[0] + outwards, sides[1] + outwards, sides[1]]
    x, y = sides[0], np.cross(edge, sides[0])
    if y @ sides[1] < 0:  # the profile runs anticlockwise
        edge, y = -edge, -y
    size = _BEYOND * cut.reach
    outline = [point(step, *(size * np.array([corner @ x, corner @ y])).tolist()) for corner in corners]
    foot = np.array([cut.x0, 0.0, 0.0]) - size * edge
    wedge = step.add(
        "IfcExtrudedAreaSolid",
        SweptArea=step.add(
            "IfcArbitraryClosedProfileDef",
            ProfileType=enum("AREA"),
            OuterCurve=step.add("IfcPolyline", Points=listed([*outline, outline[0]])),
        ),
        Position=axis2placement(step, foot.tolist(), edge.tolist(), x.tolist()),
        ExtrudedDirection=direction(step, 0.0, 0.0, 1.0),
        Depth=metres(2 * size),
    )
    operands = {"FirstOperand": whole.item, "SecondOperand": wedge}
    return Body(step.add("IfcBooleanResult", Operator=enum("DIFFERENCE"), **operands), "CSG")


def _unit(vector: Vector) -> Vector:
    """Give the vector (3,) with length 1."""
    return vector / float(np.linalg.norm(vector))


def _least_along(normal: Vector) -> Vector:
    """Give the axis (3,) that a direction leans to least."""
    least: Vector = np.eye(3)[int(np.argmin(np.abs(normal)))]
    return least
