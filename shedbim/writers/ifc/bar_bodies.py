"""The body of a bar: a swept profile, cut only at ends that are not square, drilled and notched.

The sweep runs from long point to long point, so a square end needs no cut. A plane cut is a clipping by a
half space; a pointed end is two of them; a notched end, of which what lies inside either plane is kept,
loses the wedge outside both: a prism. Holes and notches are taken away one after another: the library meshes
such a chain at once, and 40 holes of it fifteen times as fast as their union taken away.

Of a tube with ends pressed flat the sweep is what is round of it; each end is a shell of flat faces beside it.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.model.bars import SQUARE, Bar, EndCut
from shedbim.model.pressed_solids import pressed_ends
from shedbim.model.shells import shell_of
from shedbim.sections.profiles import Pipe
from shedbim.writers.ifc.breps import faceted
from shedbim.writers.ifc.curves import area, closed_line
from shedbim.writers.ifc.placements import axis2placement
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.sweeps import drilled, sawn, sweep
from shedbim.writers.ifc.text import TRUE, enum

__all__ = ["bar_bodies"]

Vector = NDArray[np.float64]

#: A wedge is this many times as large as the steel it may meet.
_BEYOND = 1.5
#: Arcs of pressed ends become chords this far off, mm: of a whole bar that is less than 0.1 % of its volume.
_CHORD_ERROR = 0.1

#: A reference, and the RepresentationType of a representation that holds it.
Item = tuple[str, str]


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


def bar_bodies(step: StepFile, bar: Bar, profile: str) -> tuple[tuple[str, ...], str]:
    """Write the body of a bar in the part's own frame: its items, and what a representation of them is.

    It is swept from the ``profile`` it refers to.
    """
    item, kind = _swept(step, bar, profile)
    pipe = bar.section.profile
    if bar.pressed == (None, None) or not isinstance(pipe, Pipe):
        return (item,), kind
    if kind != "SweptSolid":  # a result of booleans alone is no solid to the schemas
        item = step.add("IfcCsgSolid", TreeRootExpression=item)
    ends = pressed_ends(pipe, bar.length, bar.pressed, bar.holes, _CHORD_ERROR)
    return (item, *(faceted(step, shell_of(end)) for end in ends)), "SolidModel"


def _swept(step: StepFile, bar: Bar, profile: str) -> Item:
    """Write what is swept, cut, drilled and notched."""
    # The profile's x is the bar's y, its y the bar's z.
    begin, stop = (0.0 if end is None else end.length for end in bar.pressed)
    swept = sweep(
        step, profile, (begin, 0.0, 0.0), (1.0, 0.0, 0.0), (0.0, 1.0, 0.0), bar.length - begin - stop
    )
    result = swept, "SweptSolid"
    first, last = bar.axis
    cuts = [_cut(bar, bar.start, first, 1.0), _cut(bar, bar.end, last, -1.0)]
    # Notches come last: a clipping takes a sweep or another clipping only.
    for cut in sorted((cut for cut in cuts if cut), key=lambda each: each.notched):
        result = (
            _without(step, result[0], _wedge(step, cut)) if cut.notched else _clipped(step, result[0], cut)
        )
    for hole in bar.holes:
        if bar.bored(hole) is not None:
            result = _without(step, result[0], drilled(step, bar.section.profile, hole))
    for notch in bar.notches:
        result = _without(step, result[0], sawn(step, notch))
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


def _without(step: StepFile, whole: str, tool: str) -> Item:
    """Take one solid away from another."""
    operands = {"FirstOperand": whole, "SecondOperand": tool}
    return step.add("IfcBooleanResult", Operator=enum("DIFFERENCE"), **operands), "CSG"


def _clipped(step: StepFile, whole: str, cut: _Cut) -> Item:
    """Take away what lies outside each plane of a cut."""
    for normal in cut.normals:
        across = _unit(np.cross(normal, _least_along(normal)))
        position = axis2placement(step, (cut.x0, 0.0, 0.0), normal.tolist(), across.tolist())
        plane = step.share("IfcPlane", Position=position)
        # AgreementFlag true: the normal points out of the half space, which is taken away, into the steel.
        outside = step.share("IfcHalfSpaceSolid", BaseSurface=plane, AgreementFlag=TRUE)
        whole = step.add(
            "IfcBooleanClippingResult", Operator=enum("DIFFERENCE"), FirstOperand=whole, SecondOperand=outside
        )
    return whole, "Clipping"


def _wedge(step: StepFile, cut: _Cut) -> str:
    """Write the wedge outside both planes of a cut."""
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
    outline = closed_line(step, [(size * np.array([corner @ x, corner @ y])).tolist() for corner in corners])
    foot = np.array([cut.x0, 0.0, 0.0]) - size * edge
    return sweep(step, area(step, [outline]), foot.tolist(), edge.tolist(), x.tolist(), 2 * size)


def _unit(vector: Vector) -> Vector:
    """Give the vector (3,) with length 1."""
    return vector / float(np.linalg.norm(vector))


def _least_along(normal: Vector) -> Vector:
    """Give the axis (3,) that a direction leans to least."""
    least: Vector = np.eye(3)[int(np.argmin(np.abs(normal)))]
    return least
