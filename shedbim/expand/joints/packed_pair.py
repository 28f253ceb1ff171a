"""Packs: plates between the two angles of a pair, welded to both along heel and toe, that hold them together."""

from __future__ import annotations

import numpy as np

from shedbim.description.connections import Connections
from shedbim.expand.joints.angle_gusset import leg_of
from shedbim.expand.joints.angle_node import gap_of
from shedbim.expand.joints.contract import Connection, Fitting, Joint, Welding
from shedbim.expand.joints.gusset_legs import LEDGE, RECESS
from shedbim.expand.joints.shaping import plate_at
from shedbim.fasteners.plate_stock import rounded_up
from shedbim.fasteners.welds import throat_for
from shedbim.model.plates import rectangle
from shedbim.model.roles import Role

__all__ = ["PACK", "packed_pair"]

#: Length of a pack along its pair, mm (common practice: 60 to 80 mm).
PACK = 60.0
_CHORDS = (Role.TOP_CHORD, Role.BOTTOM_CHORD)


def packed_pair(joint: Joint, _: Connections) -> Connection:
    """Give one pack at the work point."""
    near, far = joint.members
    leg, gap = leg_of(near), gap_of(near, far)
    chord = near.role in _CHORDS
    high = leg.back - RECESS if chord else leg.back + LEDGE
    low = high - rounded_up(high + leg.toe + LEDGE, 5.0)
    middle = np.array([leg.start[0], 0.0, leg.start[1]]) - near.z * (high + low) / 2
    plate, frame = plate_at(middle, near.x, near.z, rectangle(PACK, high - low), gap, below=gap / 2)
    throat = throat_for(min(gap, near.section.profile.thickness), near.grade)
    welds = tuple(Welding((number, "pack"), throat, 2 * PACK) for number in (0, 1))
    return Connection((Fitting("pack", Role.PACK, plate, frame),), (), welds)
