"""One angle of a pair as a carrier: the pair's other angle is its mirror image in the plane of the truss.

In the frame of an angle the heel is at the least y and z: the leg on the gusset runs up z, the outstanding one along y.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from shedbim.expand.joints.contract import FAR, Met
from shedbim.sections.profiles import Angle, Hollow
from shedbim.sections.section import Section

__all__ = ["block_of_pair", "flat_of_leg", "half_of_pair", "leg_face", "reach"]

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


def block_of_pair(met: Met) -> Met:
    """Give a bar as wide and deep as the pair that an angle is one of, its axis in the middle of it.

    What is fastened to the backs of both angles meets its lower or upper face.
    """
    section, half = met.section, half_of_pair(met)
    _, low, _, high = section.outline.bounds
    wall = section.profile.thickness
    middle = np.array([[0.0, (low + high) / 2]])
    frame = met.frame.copy()
    frame[:, 3] += met.z * (low + high) / 2 - met.y * float(met.origin @ met.y)
    to_start, to_end = (
        each if each >= FAR else each + sign * float(cut.offsets(middle, at_end=at_end)[0])
        for each, sign, cut, at_end in (
            (met.to_start, -1.0, met.start, False),
            (met.to_end, 1.0, met.end, True),
        )
    )
    name = f"2 {section.designation}"
    block = Section(name, "pair", Hollow(section.height, 2 * half, wall, 0.0, 0.0), section.source)
    return replace(met, section=block, frame=frame, to_start=to_start, to_end=to_end)


def flat_of_leg(met: Met) -> tuple[float, float]:
    """Give from where to where along its z axis that face is flat and free for a weld, from the axis, mm."""
    profile = met.section.profile
    assert isinstance(profile, Angle)
    low, high = met.section.outline.bounds[1], met.section.outline.bounds[3]
    return low + profile.t + profile.r, high - max(profile.r2, _TOE_ROOM)
