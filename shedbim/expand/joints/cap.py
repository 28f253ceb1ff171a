"""Cap plates on the heads of columns, and of gable posts that are tubes.

A cap takes the place of the last of the column, so that the head stays where it was; it lies along the cut of
the head and stands out over no face of the column: end plates, rails and struts come close there. It keeps off the
faces of flanges, which end plates are drawn up to.
"""

from __future__ import annotations

from math import cos, floor, pi, sin

import numpy as np

from shedbim.description.connections import Connections
from shedbim.description.connections.caps import CapOptions
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.contract import Connection, Fitting, Joint, Met, Welding, Work
from shedbim.fasteners.plate_stock import thickness_at_least
from shedbim.fasteners.welds import throat_for
from shedbim.geometry.placements import cross
from shedbim.model.plates import Plate
from shedbim.model.roles import Role
from shedbim.sections.profiles import IShape, Pipe
from shedbim.sections.section import Section

__all__ = ["cap_on", "cap_thickness", "column_cap"]

#: Least and greatest thickness by rule, and its share of the flange or wall (common practice, values from memory).
_LEAST, _MOST, _SHARE = 10.0, 30.0, 0.5
#: Sizes of caps are whole steps of this.
_STEP = 5.0
#: From the edge of a cap to the face of a flange, mm (common practice: 2 to 5 mm; value from memory).
_OFF_FLANGE = 2.0
#: Sides of the polygon that stands for an ellipse.
_SIDES = 48


def column_cap(joint: Joint, options: Connections) -> Connection:
    """Give the plate that closes the head of a column, its edges within the column's faces."""
    column = joint.members[0]
    fitting, weld, work = cap_on(column, 0, cap_thickness(column.section, options.caps))
    return Connection((fitting,), (), (weld,), (work,))


def cap_thickness(section: Section, options: CapOptions) -> float:
    """Give the thickness of the cap plate of a section, mm."""
    if options.thickness is not None:
        return options.thickness
    profile = section.profile
    wall = profile.tf if isinstance(profile, IShape) else profile.thickness
    return thickness_at_least(min(max(_LEAST, _SHARE * wall), _MOST))


def cap_on(met: Met, number: int, thickness: float) -> tuple[Fitting, Welding, Work]:
    """Give the cap of an upright that meets with its end, the weld all round, and how far the end moves back.

    Args:
        number: of the upright among the members of the joint.

    Raises:
        DescriptionError: when the end is cut so steeply that nothing of a plate is left within the faces.
    """
    ((a, b),) = met.cut.slopes
    normal = met.frame[:, :3] @ np.array([1.0, -a, -b])
    normal = normal / np.linalg.norm(normal)
    upright, lean = float(normal @ met.x), abs(float(normal @ met.z))
    width, depth = _room(met.section)
    # Its edges are square to the plate: under a slope the lower corner of one comes out furthest.
    long = (depth - thickness * lean) / upright
    if _down(min(long, width)) <= 0:
        raise impossible("connections.caps.thickness", f"the cap is too thick for {met.section.designation}")
    sizes = (_down(width), _down(long))
    across = met.y
    along = cross(normal, across)
    set_back = thickness / upright
    # The plate's middle, not the middle of its underside, lies over the axis.
    shift = -thickness * float(normal @ met.z) / 2 / float(along @ met.z)
    frame = np.column_stack([across, along, normal, met.origin - met.x * set_back + along * shift])
    plate = _plate(met.section, sizes, thickness)
    throat = throat_for(min(met.section.profile.thickness, thickness), met.grade)
    weld = Welding((number, "cap plate"), throat, plate.outline.outer_perimeter, all_round=True)
    fitting = Fitting("cap plate", Role.CAP_PLATE, plate, frame, owner=number)
    return fitting, weld, Work(number, set_back=set_back)


def _room(section: Section) -> tuple[float, float]:
    """How large a level cap may be across and along the depth: to the tips of an I and nearly to its faces; half a
    wall less on a tube, whose wall then carries the weld outside the plate."""
    if isinstance(section.profile, IShape):
        return section.width, section.height - 2 * _OFF_FLANGE
    inset = section.profile.thickness
    return section.width - inset, section.height - inset


def _plate(section: Section, sizes: tuple[float, float], thickness: float) -> Plate:
    """A disc on a round tube, on a steep cut an ellipse; else a rectangle, its corners cut where a tube is rounded."""
    x, y = sizes[0] / 2, sizes[1] / 2
    if isinstance(section.profile, Pipe):
        r = min(x, y)
        if max(x, y) - r >= _STEP:
            turns = [2 * pi * i / _SIDES for i in range(_SIDES)]
            return Plate(tuple((x * cos(turn), y * sin(turn)) for turn in turns), thickness)
        return Plate(((r, 0.0), (-r, 0.0)), thickness, bulges=(1.0, 1.0))
    if isinstance(section.profile, IShape):
        return Plate(((-x, -y), (x, -y), (x, y), (-x, y)), thickness)
    s = section.profile.thickness
    return Plate(
        ((s - x, -y), (x - s, -y), (x, s - y), (x, y - s), (x - s, y), (s - x, y), (-x, y - s), (-x, s - y)),
        thickness,
    )


def _down(size: float) -> float:
    return floor(size / _STEP + 1e-9) * _STEP
