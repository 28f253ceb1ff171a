"""Where two braces of a panel cross.

Angles lie on both faces of the plane of their gussets and pass each other: a pack fills the gap, one bolt goes
through both legs where their back marks cross. Of two tubes one runs through; a gusset in a slot of it carries
the fins of both halves of the other.
"""

from __future__ import annotations

import numpy as np
from manifold3d import CrossSection
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.expand.clearances import GUSSET
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.brace_gusset import brace_line
from shedbim.expand.joints.cap import cap_thickness
from shedbim.expand.joints.contract import Bolting, Connection, Fitting, Joint, Layer, Met, Welding, Work
from shedbim.expand.joints.gusset_outline import Plane, hull, rectangle_at
from shedbim.expand.joints.shaping import plate_at
from shedbim.expand.joints.tube_ends import Lap, TubeEnd, tube_end
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.gauges import back_mark
from shedbim.fasteners.plate_stock import rounded_up
from shedbim.fasteners.welds import throat_for
from shedbim.geometry.placements import cross
from shedbim.model.holes import Notch, Vector
from shedbim.model.plates import Plate, rectangle
from shedbim.model.roles import Role
from shedbim.sections.profiles import Angle

__all__ = ["brace_crossing"]

Array = NDArray[np.float64]

#: The slot of a gusset is wider and longer than it by this on each side (common practice).
_PLAY = 0.4


def brace_crossing(joint: Joint, options: Connections) -> Connection:
    """Give what fastens two crossing braces to each other."""
    if isinstance(joint.members[0].section.profile, Angle):
        return _angles(joint, options)
    return _TubeCrossing(joint, options).connection()


def _angles(joint: Joint, options: Connections) -> Connection:
    """A pack between the legs and one bolt."""
    first, second = joint.members
    n = first.z
    lines, faces, legs = [], [], []
    for met in joint.members:
        angle = met.section.profile
        assert isinstance(angle, Angle)
        low_y, low_z = met.section.outline.bounds[:2]
        lines.append(met.origin + met.y * (low_y + back_mark(angle.b)[0]))
        faces.append(float((met.origin + met.z * low_z) @ n))
        legs.append(angle.t)
    # Where the line of the first is crossed by that of the second, seen along n.
    across = cross(second.x, n)
    run = float((lines[1] - lines[0]) @ across) / float(first.x @ across)
    middle = lines[0] + first.x * run
    middle = middle - n * float(middle @ n)
    line = brace_line(first, options)
    gap = faces[0] - faces[1]
    side = rounded_up(2 * line.side)
    plate, frame = plate_at(middle + n * faces[1], first.x, first.y, rectangle(side, side), gap)
    pack = Fitting("pack", Role.PACK, plate, frame)
    layers = (Layer(0, legs[0]), Layer("pack", gap), Layer(1, legs[1]))
    fastener = bolt(line.diameter, options.bolts.grade, sum(layer.thickness for layer in layers))
    points = np.array([middle + n * (faces[0] + legs[0])])
    return Connection((pack,), (Bolting("bolts", fastener, points, -n, layers),))


class _TubeCrossing:
    """A tube that runs through, and two halves."""

    def __init__(self, joint: Joint, options: Connections) -> None:
        self.through, *self.halves = joint.members
        self.options = options
        self.line = brace_line(self.through, options)
        self.fin = options.struts.thickness
        # The fins are in the middle of the tubes, the gusset lies beside them.
        self.n = self.through.z
        self.below = self.fin / 2 + GUSSET / 2
        middle = self.n * (float(self.through.origin @ self.n) - self.below)
        self.plane = Plane(middle, self.through.x, self.through.y, self.n)
        if (
            self.below + GUSSET / 2 + _PLAY
            > self.through.section.height / 2 - self.through.section.profile.thickness
        ):
            raise impossible(
                f"{'bracing.roof' if self.through.role is Role.ROOF_BRACE else 'bracing.walls'}.section",
                "no room for the slot of the gusset in the crossing braces",
                given=self.through.section.designation, allowed="a larger tube",
            )  # fmt: skip

    def connection(self) -> Connection:
        """The gusset in its slot, and both halves' ends."""
        laps = [Lap(half.origin, half.into, cross(self.n, half.into), self.line) for half in self.halves]
        ends = [
            self._end(half, number, lap)
            for number, (half, lap) in enumerate(zip(self.halves, laps, strict=True), 1)
        ]
        area = hull(*(
            rectangle_at(self.plane.seen(lap.tip), self.plane.along(lap.along), self.line.lap, self.line.side)
            for lap in laps
        ))  # fmt: skip
        gusset, slot, length = self._gusset(area)
        throat = throat_for(min(GUSSET, self.through.section.profile.thickness), self.through.grade)
        fittings = (gusset, *(fitting for end in ends for fitting in end.fittings))
        welds = (Welding(("gusset", 0), throat, length), *(weld for end in ends for weld in end.welds))
        bolts = tuple(self._bolts(number, lap) for number, lap in enumerate(laps, start=1))
        return Connection(fittings, bolts, welds, (Work(0, notches=(slot,)), *(end.work for end in ends)))

    def _end(self, half: Met, number: int, lap: Lap) -> TubeEnd:
        cap = cap_thickness(half.section, self.options.caps)
        return tube_end(half, number, lap, self.fin, self.options.tube_ends.braces, cap, f" {number}")

    def _gusset(self, area: CrossSection) -> tuple[Fitting, Notch, float]:
        """The plate, the slot it sits in, and how much weld that has."""
        (loop,) = area.simplify(1e-3).to_polygons()
        corners = tuple((float(u), float(v)) for u, v in loop)
        frame = np.column_stack(
            [self.plane.u, self.plane.v, self.plane.n, self.plane.point(np.zeros(2), -GUSSET / 2)]
        )
        plate = Fitting("gusset", Role.GUSSET, Plate(corners, GUSSET), frame)
        radius = self.through.section.height / 2
        band = CrossSection(
            [np.array([[-1e4, -radius - 1], [1e4, -radius - 1], [1e4, radius + 1], [-1e4, radius + 1]])]
        )
        (taken,) = (area.offset(_PLAY) ^ band).simplify(1e-2).to_polygons()
        origin = self.through.local(self.plane.point(np.zeros(2), -GUSSET / 2 - _PLAY))
        turn = self.through.frame[:, :3].T
        slot = Notch(
            tuple((float(u), float(v)) for u, v in taken),
            _vector(origin), _vector(turn @ self.plane.u), _vector(turn @ self.plane.v), GUSSET + 2 * _PLAY,
        )  # fmt: skip
        # Two walls, both faces of the plate.
        run = area ^ CrossSection([np.array([[-1e4, -0.5], [1e4, -0.5], [1e4, 0.5], [-1e4, 0.5]])])
        return plate, slot, 4 * float(run.area())

    def _bolts(self, number: int, lap: Lap) -> Bolting:
        layers = (Layer(f"fin {number}", self.fin), Layer("gusset", GUSSET))
        points = np.array([lap.point(x, 0.0, self.fin / 2) for x in self.line.places])
        fastener = bolt(self.line.diameter, self.options.bolts.grade, self.fin + GUSSET)
        return Bolting(f"bolts {number}", fastener, points, -self.n, layers)


def _vector(values: Array) -> Vector:
    x, y, z = (float(v) for v in values)
    return x, y, z
