"""One angle of a pair as a carrier: the pair's other angle is its mirror image in the plane of the truss.

In the frame of an angle the heel is at the least y and z: the leg on the gusset runs up z, the outstanding one along y.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from shedbim.expand.joints.contract import Met
from shedbim.sections.profiles import Angle

__all__ = ["flat_of_leg", "half_of_pair", "leg_face", "reach"]

Array = NDArray[np.float64]
#: From the edge of a plate to the toe of the leg it is welded to, mm (value from memory).
_TOE_ROOM = 5.0


def reach(met: Met, direction: Array) -> float:
    """Give how far a member's section reaches from its axis along a unit vector (3,), mm."""
    across = np.array([float(met.y @ direction), float(met.z @ direction)])
    return float((met.section.outline.rim @ across).max())


def half_of_pair(met: Met) -> float:
    """Give half the overall width of the pair that an angle is one of, mm; the work point is in the pair's plane."""
    return float(met.origin @ met.y) + reach(met, met.y)


def leg_face(met: Met) -> float:
    """Give how far along its y axis the free face of the leg on the gusset lies from an angle's axis, mm."""
    return met.section.outline.bounds[0] + met.section.profile.thickness


def flat_of_leg(met: Met) -> tuple[float, float]:
    """Give from where to where along its z axis that face is flat and free for a weld, from the axis, mm."""
    profile = met.section.profile
    assert isinstance(profile, Angle)
    low, high = met.section.outline.bounds[1], met.section.outline.bounds[3]
    return low + profile.t + profile.r, high - max(profile.r2, _TOE_ROOM)
