"""Gussets between the flanges or walls of a column and the plate of its fixed base."""

from __future__ import annotations

from itertools import pairwise

from shedbim.expand.joints.base_layout import BasePlan
from shedbim.expand.joints.contract import Fitting, Met, Welding
from shedbim.expand.joints.shaping import plate_at
from shedbim.fasteners.plate_stock import rounded_up, thickness_at_least
from shedbim.fasteners.welds import throat_for
from shedbim.model.roles import Role
from shedbim.sections.profiles import Hollow, IShape
from shedbim.sections.section import Section

__all__ = ["stiffener_thickness", "stiffeners"]

#: Corner cut off where the weld of the column passes, and the upright noses of the taper (common practice).
_SNIP, _NOSE = 20.0, 20.0
#: Stiffener short of the edge of the plate (common practice).
_SHORT = 10.0
#: Height over projection, and least height (value from memory: 1.5 to 2).
_SLENDER, _LEAST = 1.75, 150.0
#: Stiffeners are as thick as the flange between these (value from memory).
_THINNEST, _THICKEST = 10.0, 20.0


def stiffener_thickness(section: Section) -> float:
    """Give the thickness of the gussets on a section, mm; 0 where it has no flat side for them."""
    profile = section.profile
    if isinstance(profile, IShape):
        return thickness_at_least(min(max(profile.tf, _THINNEST), _THICKEST))
    if isinstance(profile, Hollow):
        return thickness_at_least(max(profile.t, _THINNEST))
    return 0.0


def stiffeners(
    column: Met, plan: BasePlan, plate: float, thickness: float
) -> tuple[list[Fitting], list[Welding]]:
    """Give the gussets, one between each two neighbouring anchors, and their welds to column and plate.

    Args:
        plate: thickness of the base plate, which they stand on.
        thickness: their own.
    """
    face = column.section.height / 2
    length = plan.size[1] / 2 - face - _SHORT
    height = rounded_up(max(_SLENDER * length, _LEAST))
    corners = [(_SNIP, 0.0), (length, 0.0), (length, _NOSE), (_NOSE, height), (0.0, height), (0.0, _SNIP)]
    throat = throat_for(thickness, column.grade)
    fittings: list[Fitting] = []
    welds: list[Welding] = []
    for side in (-1, 1):
        places = sorted(a for a, b in plan.anchors if b * side > 0)
        for left, right in pairwise(places):
            name = f"stiffener/{len(fittings) + 1}"
            origin = column.origin + column.y * (left + right) / 2 + column.z * side * face + column.x * plate
            shape, frame = plate_at(
                origin, column.z * side, column.x, corners, thickness, below=thickness / 2
            )
            fittings.append(Fitting(name, Role.STIFFENER, shape, frame))
            welds.append(Welding((name, 0), throat, 2 * (height - _SNIP)))
            welds.append(Welding((name, "base plate"), throat, 2 * (length - _SNIP)))
    return fittings, welds
