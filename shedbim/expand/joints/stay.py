"""Flange stays: bolted to the web of the purlin, and to a fin in the corner of the rafter's web and lower flange."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.errors import ModelError
from shedbim.expand.joints.contract import Bolting, Connection, Fitting, Joint, Layer, Met, Welding
from shedbim.expand.joints.shaping import plate_at
from shedbim.expand.stays import STAY_BOLT, STAY_END, back_mark
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.distances import edge
from shedbim.fasteners.plate_stock import rounded_up
from shedbim.fasteners.welds import throat_for
from shedbim.geometry.placements import cross
from shedbim.model.joints import At
from shedbim.model.roles import Role
from shedbim.sections.profiles import IShape

__all__ = ["flange_stay"]

Array = NDArray[np.float64]

#: Thickness of the fin, mm (common practice).
_FIN = 8.0
#: Sides of fins are multiples of this, mm.
_STEP = 5.0


def flange_stay(joint: Joint, options: Connections) -> Connection:
    """Give the bolt of a stay at a purlin, or its fin and bolt at a rafter."""
    carrier, stay = joint.members
    if carrier.role is Role.PURLIN:
        return Connection(boltings=(_bolting(stay, 0, carrier.section.profile.thickness, options),))
    fin, welds = _fin(carrier, stay)
    return Connection((fin,), (_bolting(stay, "fin", _FIN, options),), welds)


def _hole(stay: Met) -> Array:
    """The middle of the hole on the outer face of the leg that is bolted (3,)."""
    low_y, low_z = stay.section.outline.bounds[:2]
    x = STAY_END if stay.at == At.START else -STAY_END
    return stay.point(x, low_y, low_z + back_mark(stay.section))


def _bolting(stay: Met, other: int | str, thickness: float, options: Connections) -> Bolting:
    """One bolt through what the stay lies on and its leg, the nut on the leg."""
    leg = stay.section.profile.thickness
    fastener = bolt(STAY_BOLT, options.bolts.secondary_grade, thickness + leg)
    point = _hole(stay) - stay.y * thickness
    return Bolting("bolt", fastener, point[None], stay.y, (Layer(other, thickness), Layer(1, leg)))


def _fin(rafter: Met, stay: Met) -> tuple[Fitting, tuple[Welding, ...]]:
    """The plate behind the stay's leg, between web and lower flange, its corner snipped at the root."""
    profile = rafter.section.profile
    if not isinstance(profile, IShape):
        raise ModelError(f"{rafter.section.designation} has no flange to stay")
    hole = rafter.local(_hole(stay))
    side = rafter.y if hole[1] > 0 else -rafter.y
    low, web = profile.tf - profile.h / 2, profile.tw / 2
    reach = edge(STAY_BOLT)
    wide = web + rounded_up(abs(float(hole[1])) + reach - web, _STEP)
    high = low + rounded_up(float(hole[2]) + reach - low, _STEP)
    snip = profile.r + 2.0
    corners = [(web + snip, low), (wide, low), (wide, high), (web, high), (web, low + snip)]
    # The leg's outer face lies against the fin's face, the fin behind it.
    face = rafter.point(hole[0], 0.0, 0.0)
    normal = cross(side, rafter.z)
    if float(normal @ stay.y) > 0:
        plate, frame = plate_at(face, side, rafter.z, corners, _FIN, below=_FIN)
    else:
        plate, frame = plate_at(face, side, rafter.z, corners, _FIN)
    run = (wide - web - snip, high - low - snip)
    flange = min(run[0], profile.b / 2 - web - snip)
    weld = Welding((0, "fin"), throat_for(min(_FIN, profile.tw)), 2.0 * (flange + run[1]))
    return Fitting("fin", Role.FIN_PLATE, plate, frame), (weld,)
