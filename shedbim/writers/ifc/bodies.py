"""The body of a part: what its shape is written as.

A plate is one sweep of its outline, holes and all. A bolt group is a sweep for each prism of each fastener: a
type then has the whole shape of its pieces. One fastener mapped to many places would save 600 bytes a fastener
in each part and no time to mesh, and its type would show one bolt of a group.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import pi, sqrt

import numpy as np

from shedbim.fasteners.fastener import Disc
from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.plates import Plate
from shedbim.model.shapes import Shape
from shedbim.writers.ifc.bar_bodies import bar_bodies
from shedbim.writers.ifc.curves import area, circle_curve, closed_line, loop_curve, position
from shedbim.writers.ifc.profiles import profile
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.sweeps import round_profile, sweep
from shedbim.writers.ifc.text import enum, metres

__all__ = ["Body", "body"]

_UP, _ACROSS = (0.0, 0.0, 1.0), (1.0, 0.0, 0.0)


@dataclass(frozen=True)
class Body:
    """A written body: what it consists of, and the RepresentationType of a representation that holds that."""

    items: tuple[str, ...]
    kind: str


def body(step: StepFile, shape: Shape) -> Body:
    """Write the body of a shape in the part's own frame."""
    if isinstance(shape, Bar):
        return Body(*bar_bodies(step, shape, profile(step, shape.section)))
    if isinstance(shape, Plate):
        return Body((_plate(step, shape),), "SweptSolid")
    return Body(_bolts(step, shape), "SweptSolid")


def _plate(step: StepFile, plate: Plate) -> str:
    """Write a plate as one sweep: round holes are circles, all else follows its lines and arcs."""
    outer, *openings = plate.outline.loops
    curves = [loop_curve(step, outer)]
    for hole, loop in zip(plate.holes, openings, strict=True):
        if hole.slot:
            curves.append(loop_curve(step, loop))
        else:
            curves.append(circle_curve(step, hole.diameter, hole.centre[0], hole.centre[1]))
    return sweep(step, area(step, curves), (0.0, 0.0, 0.0), _UP, _ACROSS, plate.thickness)


def _bolts(step: StepFile, group: BoltGroup) -> tuple[str, ...]:
    """Write the prisms of all fasteners of a group."""
    return tuple(
        sweep(step, _disc(step, disc), (x, y, disc.start), _UP, _ACROSS, disc.end - disc.start)
        for x, y in group.points
        for disc in group.fastener.stack
    )


def _disc(step: StepFile, disc: Disc) -> str:
    """Write (or find) the profile of one prism; hexagons and squares stand with two flats square to y."""
    if disc.form == "round":
        if not disc.bore:
            return round_profile(step, disc.size)
        return step.share(
            "IfcCircleHollowProfileDef",
            ProfileType=enum("AREA"),
            Position=position(step, 0.0, 0.0),
            Radius=metres(disc.size / 2),
            WallThickness=metres((disc.size - disc.bore) / 2),
        )
    sides = 6 if disc.form == "hexagon" else 4
    corner = disc.size / sqrt(3) if sides == 6 else disc.size / sqrt(2)
    angle = 2 * pi * np.arange(sides) / sides + (0.0 if sides == 6 else pi / 4)
    outline = closed_line(step, (corner * np.column_stack([np.cos(angle), np.sin(angle)])).round(6).tolist())
    return area(step, [outline, circle_curve(step, disc.bore, 0.0, 0.0)] if disc.bore else [outline])
