"""The root of a gusset: where it is welded on, and how it comes out from there.

See ``gusset_outline`` for the plane's axes.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import ceil

import numpy as np
from manifold3d import CrossSection

from shedbim.expand.joints.contract import Met
from shedbim.expand.joints.gusset_outline import Plane
from shedbim.sections.profiles import Hollow, IShape, Pipe

__all__ = ["Root", "along_carrier", "column_head"]

#: Least length of a gusset's weld on a web that runs on (value from memory).
_LEAST_STRIP = 100.0
#: Its ends are square to the web over this height: no sharp corner at the weld (common practice).
_STRIP_HEIGHT = 25.0
_STEP = 10.0
#: Air between a gusset and what it passes, mm (common practice).
_AIR = 10.0
#: Heads of an end plate's bolts, each with a washer, stand out of the inside of a column's flange by so much, mm:
#: those of M20; larger ones come that much nearer, well under the steel that may be shared.
_HEADS = 16.0
#: Least width of a neck, mm, and of one beside the heads of an end plate's bolts (values from memory).
_LEAST_NECK, _LEAST_BESIDE = 40.0, 25.0
#: Beside the root fillet, and a rounded corner.
_FILLET_ROOM = 3.0
_FAR_OUT = 5000.0


@dataclass(frozen=True, eq=False)
class Root:
    """A gusset's root as areas of its plane.

    Attributes:
        area: all of it.
        core: what of it may not be lost.
        end: where it comes out: the gusset is drawn from there to the bolts.
        length: of the weld on one side of the plate, mm.
    """

    area: CrossSection
    core: CrossSection
    end: CrossSection
    length: float


def along_carrier(
    _: Met, __: Plane, body: CrossSection, lap: CrossSection, ___: CrossSection, length: float
) -> Root:
    """Give the strip on a web or face that begins beside the lap, ``length`` mm long or a little more."""
    low, _low_v, _high, _high_v = lap.bounds()
    face = body.bounds()[3]
    strip = max(ceil(length / _STEP - 1e-9) * _STEP, _LEAST_STRIP)
    area = _box(low, face, low + strip, face + _STRIP_HEIGHT)
    return Root(area, area, area, strip)


def column_head(
    column: Met, plane: Plane, body: CrossSection, _: CrossSection, taken: CrossSection, __: float
) -> Root | None:
    """Give the neck on a column's web or face between the strut and the flange, or None where it is too narrow.

    It ends past the flange tips, where it is free to turn to the bolts.
    """
    out = body.bounds()[3] + _AIR
    profile = column.section.profile
    tilt = abs(float(column.z @ plane.u)), abs(float(column.z @ plane.n))
    if isinstance(profile, IShape):
        edge, face = profile.h / 2 - profile.tf, profile.tw / 2
    elif isinstance(profile, Hollow):
        edge, face = profile.h / 2 - profile.ro - _FILLET_ROOM, profile.b / 2
    else:
        assert isinstance(profile, Pipe)
        edge, face = 0.7 * profile.d / 2, 0.0
    # Where the column's axis goes through the plane.
    up = float((plane.origin - column.origin) @ plane.n) / float(column.x @ plane.n)
    axis = float((column.origin + column.x * up - plane.origin) @ plane.u)
    high = (edge - 5.0 * tilt[1]) / tilt[0] + axis
    least, snip = _LEAST_NECK, 0.0
    if isinstance(profile, IShape):
        high -= _HEADS
        least, snip = _LEAST_BESIDE, max(profile.r + _FILLET_ROOM - _HEADS, 0.0)
    beyond = taken ^ _box(-_FAR_OUT, 0.0, high, _FAR_OUT)
    for lane in (beyond, beyond ^ _box(-_FAR_OUT, 0.0, high, out)):
        low = max(lane.bounds()[2], 0.0) if not lane.is_empty() else 0.0
        if high - low >= least:
            break
    else:
        return None
    corners = [(low, face), (high - snip, face), (high, face + snip), (high, out), (low, out)]
    area = CrossSection([np.array(corners)])
    length = high - snip - low
    end = _box(low, out - 1.0, high, out)
    core = end if isinstance(profile, Pipe) else area
    return Root(area, core, end, length)


def _box(low_u: float, low_v: float, high_u: float, high_v: float) -> CrossSection:
    """The rectangle between two corners; empty where it is turned over."""
    if high_u <= low_u or high_v <= low_v:
        return CrossSection()
    return CrossSection([np.array([[low_u, low_v], [high_u, low_v], [high_u, high_v], [low_u, high_v]])])
