"""Site splices of truss chords of two angles: a plate in the gap and a cover on the backs, both bolted to all four.

The plate is as thick as the gussets, so that it packs the gap; the cover lies over both outstanding legs. Bolts of the
two legs take turns along the chord, so that a wrench turns each. Their number is what is asked for: no resistance is
computed.

Glossary:
    places   along the chord from the middle of the splice
    mark     from the back of a leg to a row of bolts in it
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.description.connections.splices import SpliceOptions
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.angle_gusset import leg_of
from shedbim.expand.joints.angle_node import gap_of
from shedbim.expand.joints.bolt_room import STEP, Room, sizes
from shedbim.expand.joints.contract import Bolting, Connection, Fitting, Joint, Layer
from shedbim.expand.joints.gusset_legs import RECESS
from shedbim.expand.joints.shaping import plate_at
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.distances import wrench_pitch
from shedbim.fasteners.gauges import back_mark, double_back_mark
from shedbim.fasteners.plate_stock import rounded_up, thickness_at_least
from shedbim.geometry.placements import cross
from shedbim.model.plates import rectangle
from shedbim.model.roles import Role
from shedbim.sections.section import Section

__all__ = ["END_GAP", "CoverSplice", "angle_splice", "cover_splice"]

Array = NDArray[np.float64]
_Y = np.eye(3)[1]

#: Between the sawn ends of the two lengths of chord, mm (common practice: 3 to 10 mm).
END_GAP = 6.0
#: The largest diameter by rule, mm (common practice).
_USUAL = 20.0
#: Greatest distance of bolts (EN 1993-1-8 Table 3.3: the lesser of 14 t and 200 mm; value from memory).
_THICKNESSES, _FARTHEST = 14.0, 200.0


@dataclass(frozen=True)
class CoverSplice:
    """How a chord is spliced, mm.

    Attributes:
        diameter: of the bolts.
        marks: of the rows in a leg: one, or two in wide legs.
        in_cover, in_plate: places of the bolts on one side, in the outstanding legs and in those at the gap.
        half_cover, half_plate: half the lengths of cover and plate.
        thickness: of the cover.
    """

    diameter: float
    marks: tuple[float, ...]
    in_cover: tuple[float, ...]
    in_plate: tuple[float, ...]
    half_cover: float
    half_plate: float
    thickness: float


def cover_splice(section: Section, role: Role, own: SpliceOptions) -> CoverSplice:
    """Give the splice of a pair of angles.

    Raises:
        DescriptionError: when no bolts fit the legs.
    """
    wall = section.profile.thickness
    for diameter, marks in _rows(section, own):
        room = Room(diameter)
        # The bolts of one leg stand half way between those of the other.
        pitch = rounded_up(max(room.pitch, 2 * room.round_corner), STEP)
        if pitch <= min(_THICKNESSES * wall, _FARTHEST):
            first = rounded_up(END_GAP / 2 + room.edge, STEP)
            in_cover = tuple(first + k * pitch for k in range(own.row))
            in_plate = tuple(x + pitch / 2 for x in in_cover)
            cover = thickness_at_least(wall) if own.cover is None else own.cover
            return CoverSplice(
                diameter, marks, in_cover, in_plate, in_cover[-1] + room.edge, in_plate[-1] + room.edge, cover
            )
    word = role.word.replace(" ", "_")
    raise impossible(
        f"frames.roof.{word}" if own.bolt is None else "connections.splices.bolt",
        "the leg of a spliced chord is too small or too thin for the bolts of its covers",
        given=f"{section.designation}, {own.bolt or 'M12'}",
        allowed="larger angles, smaller bolts, or frames.roof.longest: none",
    )  # fmt: skip


def _rows(section: Section, own: SpliceOptions) -> Iterator[tuple[float, tuple[float, ...]]]:
    """Diameters and the marks of their rows that fit a leg: two rows where there is room, larger bolts first."""
    leg, wall = section.width, section.profile.thickness
    for marks_of in (_two_marks, _one_mark):
        for diameter in sizes(own.bolt, _USUAL):
            room, marks = Room(diameter), marks_of(leg, diameter)
            clear = marks and marks[0] >= max(wall + room.from_wall(), RECESS + room.least_edge)
            if clear and leg - marks[-1] >= room.least_edge:
                yield diameter, marks


def _one_mark(leg: float, diameter: float) -> tuple[float, ...]:
    """The mark of one row in a leg; nothing where the bolt is too large for it."""
    try:
        mark, largest = back_mark(leg)
    except ValueError:
        return ()
    return (mark,) if diameter <= largest else ()


def _two_marks(leg: float, diameter: float) -> tuple[float, ...]:
    """The marks of two rows between which a wrench turns; nothing where the leg is too narrow for them."""
    try:
        first, apart, largest = double_back_mark(leg)
    except ValueError:
        return ()
    return (first, first + apart) if diameter <= largest and apart >= wrench_pitch(diameter) else ()


def angle_splice(joint: Joint, options: Connections) -> Connection:
    """Give plate, cover and bolts; members are the near angles, left and right, then the far ones."""
    near, far = joint.members[:2], joint.members[2:]
    section, role = near[0].section, near[0].role
    made = cover_splice(section, role, options.splices)
    right = leg_of(near[1])
    heel = np.array([right.heel[0], 0.0, right.heel[1]])
    along = np.array([right.along[0], 0.0, right.along[1]])
    gap = gap_of(near[1], far[1])
    grade, wall = options.bolts.grade, section.profile.thickness
    high, low = right.back - RECESS, -right.toe
    plate, frame = plate_at(
        heel * (high + low) / 2, along, heel, rectangle(2 * made.half_plate, high - low), gap, below=gap / 2
    )
    fittings = [Fitting("splice plate", Role.SPLICE_PLATE, plate, frame)]
    across = cross(heel, along)
    cover, frame = plate_at(
        heel * right.back, along, across,
        rectangle(2 * made.half_cover, 2 * section.width + gap), made.thickness,
    )  # fmt: skip
    fittings.append(Fitting("cover", Role.SPLICE_PLATE, cover, frame))
    boltings = []
    through = bolt(made.diameter, grade, 2 * wall + gap)
    on_cover = bolt(made.diameter, grade, made.thickness + wall)
    for i, (side, word) in enumerate(((-1.0, "left"), (1.0, "right"))):
        points = [
            along * side * x + heel * (right.back - mark) - _Y * (gap / 2 + wall)
            for x in made.in_plate
            for mark in made.marks
        ]
        layers = (Layer(i, wall), Layer("splice plate", gap), Layer(i + 2, wall))
        boltings.append(Bolting(f"bolts {word}", through, np.array(points), _Y, layers))
        for number, out, name in ((i, -1.0, "near"), (i + 2, 1.0, "far")):
            points = [
                along * side * x + heel * (right.back + made.thickness) + _Y * out * (gap / 2 + mark)
                for x in made.in_cover
                for mark in made.marks
            ]
            under = (Layer("cover", made.thickness), Layer(number, wall))
            boltings.append(Bolting(f"cover bolts {name} {word}", on_cover, np.array(points), -heel, under))
    return Connection(tuple(fittings), tuple(boltings))
