"""What an end plate is bolted to at a column: the flange of an I section, or a bracket on the face of a tube.

Bolts cannot be tightened inside a tube. Its bracket is a plate that stands off the column's face on ribs, no
wider than the column, with the nuts behind it beside the ribs.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import sqrt

import numpy as np

from shedbim.expand.impossible import impossible
from shedbim.expand.joints.bolt_room import Room
from shedbim.expand.joints.contract import Bolting, Fitting, Layer, Met, Ref, Welding, Work
from shedbim.expand.joints.standing import Line, Standing, flange
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.welds import throat_for
from shedbim.model.roles import Role
from shedbim.sections.profiles import Hollow, IShape, Pipe

__all__ = ["Side", "bolted", "bracket", "column_side", "gap_left"]

#: Thickness of the ribs of a bracket, mm (common practice, value from memory).
_RIB = 12.0
#: Ribs nearer to each other than this are one, mm.
_ONE = 60.0
#: Air between the tip of a bolt and the column, mm.
_AIR = 2.0
#: Distances that agree to this are one, mm.
_SAME = 1e-6


@dataclass(frozen=True, eq=False)
class Side:
    """The side of a column that looks at what is fastened to it.

    Attributes:
        column: it is member 0 of its joint.
        plane: the column's face.
        face: from that face to what the end plate lies against, mm; 0 at a flange.
        plate: thickness of a bracket's plate, mm; 0 at a flange.
    """

    column: Met
    plane: Standing
    face: float = 0.0
    plate: float = 0.0

    @property
    def is_flange(self) -> bool:
        """Whether it is the flange of an I section."""
        return isinstance(self.column.section.profile, IShape)

    @property
    def half_width(self) -> float:
        """Half the width that there is to bolt through, mm."""
        return self.column.section.width / 2

    def least_aside(self, room: Room) -> float:
        """How near to the middle bolts may be for the column's own web, or for ribs and tube behind the plate."""
        profile = self.column.section.profile
        if isinstance(profile, IShape):
            return room.from_root(profile.tw / 2, profile.r)
        beside = _RIB / 2 + room.from_wall(_leg(_RIB))
        if not isinstance(profile, Pipe):
            return beside
        # The tube falls away behind the plate; the inner edge of the nut must stand clear of it.
        short = room.stack + _AIR - self.back
        radius = profile.d / 2
        if short <= 0:
            return beside
        if short >= radius:
            return float("inf")
        return max(beside, sqrt(radius**2 - (radius - short) ** 2) + room.diameter)

    @property
    def back(self) -> float:
        """How far out the back of a bracket's plate is, mm; 0 at a flange."""
        return self.face - self.plate

    def head(self) -> float:
        """The level that the column's steel ends at, at this side, mm; far above where that is out of sight."""
        up = self.column.x if float(self.column.x @ self.plane.up) > 0 else -self.column.x
        reach, cut = self.column.to_end, self.column.end
        at_end = True
        if float(up @ self.column.x) < 0:
            reach, cut, at_end = self.column.to_start, self.column.start, False
        corners = np.array(
            [self.column.local(self.plane.at(0, a, 0))[1:] for a in (-self.half_width, self.half_width)]
        )
        offsets = cut.offsets(corners, at_end=at_end)
        return self.plane.seen(self.column.origin)[2] + reach + float(min(offsets if at_end else -offsets))


def column_side(column: Met, carried: Met) -> Side:
    """Give the side of a column that a member runs out from."""
    out = carried.into - column.x * float(carried.into @ column.x)
    out = out / float(np.linalg.norm(out))
    plane = Standing.square_to(column.origin + out * (_depth(column, out) / 2), out, _upwards(column))
    return Side(column, plane)


def _upwards(column: Met) -> np.ndarray:
    return column.x if column.x[2] > 0 else -column.x


def _depth(column: Met, out: np.ndarray) -> float:
    """The depth of a column's section along ``out``, one of its axes."""
    along_z = abs(float(column.z @ out)) > 0.5
    return column.section.height if along_z else column.section.width


def gap_left(side: Side, carried: Line, end_plate: float, plate: float) -> tuple[Side, Work | None]:
    """Give the side with its bracket in the gap that the member was sawn for, and what is still to be cut off.

    Args:
        end_plate: thickness of the member's end plate, mm.
        plate: thickness of a bracket's plate, mm.
    """
    if side.is_flange:
        more = (end_plate - carried.end) / carried.run
        return side, Work(1, set_back=more) if abs(more) > _SAME else None
    return Side(side.column, side.plane, carried.end - end_plate, plate), None


def bolted(
    side: Side, diameter: float, grade: str, aside: float, levels: list[float], end_plate: float
) -> Bolting:
    """Give the bolts through end plate and side: heads within the column's flanges, or nuts behind a bracket's plate.

    Raises:
        DescriptionError: when the bracket stands too near to its column for the nuts.
    """
    layer: tuple[Ref, float] = (0, flange(side.column.section)) if side.is_flange else ("bracket", side.plate)
    fastener = bolt(diameter, grade, layer[1] + end_plate, washers=(0, 1))
    behind, front = Layer(*layer), Layer("end plate", end_plate)
    if side.is_flange:
        axis, start, layers = side.plane.out, -layer[1], (behind, front)
    else:
        axis, start, layers = -side.plane.out, side.face + end_plate, (front, behind)
        room = side.back
        stands_out = max(disc.end for disc in fastener.stack) - fastener.grip
        if stands_out + _AIR > room and not isinstance(side.column.section.profile, Pipe):
            raise impossible(
                "connections.brackets.stand_off", "no room for the nuts between a bracket's plate and its column",
                given=f"{room:g} mm", allowed=f"{stands_out + _AIR:.0f} mm or more",
            )  # fmt: skip
    points = np.array([side.plane.at(start, a, level) for level in levels for a in (-aside, aside)])
    return Bolting("bolts", fastener, points, axis, layers)


def bracket(
    side: Side, room: Room, aside: float, half: float, low: float, high: float, rise: float
) -> tuple[list[Fitting], list[Welding]]:
    """Give plate and ribs of the bracket on a tube, from ``low`` to ``high`` and ``half`` to either side.

    Under a roof that rises outwards (``rise`` over a run of 1) the ribs' upper edges fall towards the column.
    """
    rib_at = _rib_place(side, room, aside)
    corners = [(-half, low), (half, low), (half, high), (-half, high)]
    behind = side.back
    fittings = [side.plane.facing("bracket", Role.GUSSET, behind, corners, side.plate, 0)]
    welds = []
    grade = side.column.grade
    on_column = throat_for(min(_RIB, side.column.section.profile.thickness), grade)
    on_plate = throat_for(min(_RIB, side.plate), grade)
    for number, place in enumerate((-rib_at, rib_at) if rib_at else (0.0,), start=1):
        near = _foot(side, abs(place) - _RIB / 2)
        name = f"rib {number}"
        outline = [
            (near, low),
            (behind, low),
            (behind, high),
            (near, high - max(rise, 0.0) * (behind - near)),
        ]
        fittings.append(side.plane.upright(name, Role.STIFFENER, place, outline, _RIB, 0))
        length = 2 * (high - low)
        welds += [Welding((0, name), on_column, length), Welding((name, "bracket"), on_plate, length)]
    return fittings, welds


def _rib_place(side: Side, room: Room, aside: float) -> float:
    """How far aside the middles of the two ribs are; 0 where one in the middle does."""
    flat = side.half_width - _RIB / 2
    profile = side.column.section.profile
    if isinstance(profile, Hollow):
        flat -= profile.ro
    elif isinstance(profile, Pipe):
        flat = side.half_width / 2
    place = min(aside - room.from_wall(_leg(_RIB)) - _RIB / 2, flat)
    return place if 2 * place >= _ONE else 0.0


def _foot(side: Side, inner: float) -> float:
    """How far out a rib's foot is: on the face, or on the round of a tube at the edge of the rib nearer its middle."""
    profile = side.column.section.profile
    if not isinstance(profile, Pipe) or inner <= 0:
        return 0.0
    return sqrt((profile.d / 2) ** 2 - inner**2) - profile.d / 2


def _leg(thickness: float) -> float:
    """A fillet weld's leg along steel this thick, mm, generous: its throat is at most 0.55 of the thickness."""
    return 0.8 * thickness
