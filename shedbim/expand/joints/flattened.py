"""The end of a round tube pressed flat and bolted directly: the flat lies beside the plate that carries it.

The tube's axis is in the middle of its flat, so the plate's face lies one wall off it.
"""

from __future__ import annotations

from math import ceil

import numpy as np
from numpy.typing import NDArray

from shedbim.expand.impossible import impossible
from shedbim.expand.joints.bolt_lines import BoltLine
from shedbim.expand.joints.contract import Met
from shedbim.model.pressed_ends import Pressed, flat_width
from shedbim.sections.profiles import Pipe
from shedbim.sections.section import Section

__all__ = ["FLATTENED", "Flat", "end_reach", "flattened"]

Array = NDArray[np.float64]

#: What the option is called.
FLATTENED = "flattened"
#: Wider tubes are not pressed cold in the shop (value from memory).
_WIDEST = 90.0
#: From the end of the plate beside it to where the flat begins to open, mm (common practice).
_AIR = 10.0
#: Length of the taper in diameters (common practice: 1 to 1.5), up to a whole step, mm.
_TAPER, _STEP = 1.2, 5.0


class Flat:
    """A flat that bolts in a line fit on: its sizes, mm."""

    def __init__(self, pipe: Pipe, line: BoltLine) -> None:
        #: From face to face: both walls.
        self.thickness = 2 * pipe.t
        #: From the middle to either side.
        self.half = flat_width(pipe) / 2
        #: From the tip to where the tube opens, and from there to where it is round.
        self.length = line.lap + _AIR
        self.taper = ceil(_TAPER * pipe.d / _STEP) * _STEP

    def pressed(self, tube: Met, normal: Array) -> Pressed:
        """The pressed end of a tube, its faces square to a unit vector (3,)."""
        _, y, z = (float(v) for v in normal @ tube.frame[:, :3])
        return Pressed(self.length, self.taper, (0.0, y, z))


def end_reach(section: Section, form: str) -> float:
    """Give how far a strut whose ends have a form reaches up from its axis, mm: a flat stands upright."""
    if form == FLATTENED and isinstance(section.profile, Pipe):
        return flat_width(section.profile) / 2
    return section.height / 2


def flattened(tube: Met, line: BoltLine, form: str, option: str) -> Flat | None:
    """Give the flat of a tube's end, or None where another form is asked for.

    Args:
        form: of tube ends, as the description has it.
        option: the field that says so.

    Raises:
        DescriptionError: when it is no round tube, or too large to be pressed.
    """
    if form != FLATTENED:
        return None
    profile = tube.section.profile
    if not isinstance(profile, Pipe) or profile.d > _WIDEST:
        raise impossible(
            option, f"the end of this {tube.role.word} cannot be flattened", given=tube.section.designation,
            allowed=f"round tubes up to {_WIDEST:g} mm, or capped or slotted ends",
        )  # fmt: skip
    return Flat(profile, line)
