"""Where the foot of a cleat stands on its carrier: a flat face, a column's head, a round, or between flanges."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.expand.joints import angle_carrier
from shedbim.expand.joints.cold_formed_web import Web
from shedbim.expand.joints.contract import FAR, Met
from shedbim.model.roles import Role
from shedbim.sections.profiles import Angle, Hollow, IShape, Pipe

__all__ = ["Ground", "ground", "stands_on_head"]

Array = NDArray[np.float64]
#: Axes whose cosine is above this are parallel; two of them never are nearly so by chance.
_PARALLEL = 0.999
#: The plate that caps a column stays this far inside its faces at most, mm: see ``joints.cap``.
_CAP_INSET = 7.0
#: Directions whose cosine is this near to 1 are one.
_SAME = 1e-6


@dataclass(frozen=True, eq=False)
class Ground:
    """The face under a cleat, seen in the cleat's middle plane.

    Attributes:
        depth: from the purlin's axis down to the foot of the cleat, mm.
        normal: unit vector (3,) off the face.
        half: half the length that the foot finds steel along the purlin, mm.
        beyond: how far the cleat stands out over the end or edge of the face, mm; 0 or less where it does not.
        side: 1 where it stands out on the side of the web that it is on, -1 on the other.
        radius: of a round carrier, else 0.
        tongue: how far down a foot may reach between the flanges, to the web; 0 where there is a face.
        square: whether the cleat stands square to the face.
    """

    depth: float
    normal: Array
    half: float
    beyond: float
    side: float = 1.0
    radius: float = 0.0
    tongue: float = 0.0
    square: bool = True


def ground(carrier: Met, web: Web, thickness: float, *, on_head: bool) -> Ground:
    """Give the face that a cleat ``thickness`` mm thick on the free side of a web comes down on.

    The work point lies on the axis of the purlin or rail. ``on_head``: the carrier is a column under it.
    """
    return _head(carrier, web, thickness) if on_head else _side(carrier, web, thickness)


def stands_on_head(carrier: Met, carried: Met) -> bool:
    """Whether a purlin stands on the head of a column."""
    return carrier.role is Role.COLUMN and carried.role is Role.PURLIN


def _head(column: Met, web: Web, thickness: float) -> Ground:
    """The cut that a column ends with."""
    a, b = column.end.slopes[0]
    normal = column.frame[:, :3] @ np.array([1.0, -a, -b])
    normal = normal / np.linalg.norm(normal)
    middle = column.point(column.to_end, 0.0, 0.0)
    across = [web.out * (web.face + w) for w in (0.0, thickness)]
    depths = [float((point - middle) @ normal) / float(web.up @ normal) for point in across]
    feet = [column.local(point - web.up * depth) for point, depth in zip(across, depths, strict=True)]
    width, depth = column.section.width / 2, column.section.height / 2
    along_y = abs(float(column.y @ web.run)) > _PARALLEL
    number, edge, half = (2, depth, width) if along_y else (1, width, depth)
    outermost = max(feet, key=lambda foot: abs(float(foot[number])))
    out = float(column.frame[:, number] @ web.out) * float(outermost[number])
    return Ground(
        min(depths),
        normal,
        half - _CAP_INSET,
        abs(float(outermost[number])) - edge + _CAP_INSET,
        1.0 if out > 0 else -1.0,
        square=float(normal @ web.up) > 1.0 - _SAME,
    )


def _side(carrier: Met, web: Web, thickness: float) -> Ground:
    """The side of a rafter, chord, column or post that looks at the purlin or rail."""
    width, depth = carrier.section.width / 2, carrier.section.height / 2
    profile = carrier.section.profile
    upright = abs(float(carrier.z @ web.up)) > _PARALLEL
    reach, half = (depth, width) if upright else (width, depth)
    if isinstance(profile, Angle):
        reach, half = angle_carrier.reach(carrier, web.up), angle_carrier.half_of_pair(carrier)
    down = -float(carrier.origin @ web.up) - reach
    radius = tongue = 0.0
    if isinstance(profile, Pipe):
        radius = profile.d / 2
    elif isinstance(profile, Hollow):
        half -= profile.ro
    elif isinstance(profile, IShape) and not upright:
        tongue, half = (profile.b - profile.tw) / 2, profile.h / 2 - profile.tf - profile.r
    beyond, side = _overrun(carrier, web, thickness, reach)
    return Ground(down, web.up, half, beyond, side, radius, tongue)


def _overrun(carrier: Met, web: Web, thickness: float, reach: float) -> tuple[float, float]:
    """How far a cleat stands out over an end of its carrier, mm, and on which side: see ``Ground``."""
    places = [float(carrier.local(web.out * (web.face + w))[0]) for w in (0.0, thickness)]
    face = (carrier.frame[:, 1:3].T @ web.up * reach)[None]
    out = 1.0 if float(carrier.x @ web.out) > 0 else -1.0
    over, side = -FAR, out
    if carrier.to_end < FAR:
        over = max(places) - carrier.to_end - float(carrier.end.offsets(face, at_end=True)[0])
    if carrier.to_start < FAR:
        start = -carrier.to_start + float(carrier.start.offsets(face, at_end=False)[0]) - min(places)
        if start > over:
            over, side = start, -out
    return over, side
