"""What a purlin or rail gives its joints: the side of its web that is free, and its lines of holes."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.description.connections import CleatOptions
from shedbim.errors import ModelError
from shedbim.expand.cold_formed import web_faces, web_middle
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.contract import Layer, Met
from shedbim.fasteners.distances import edge, least_edge, wrench_pitch, wrench_wall
from shedbim.fasteners.holes import hole_diameter
from shedbim.model.roles import Role
from shedbim.sections.profiles import LippedC, LippedZ
from shedbim.sections.section import Section

__all__ = [
    "HoleLines",
    "Web",
    "end_distance",
    "field_of",
    "flat_half",
    "folded",
    "hole_lines",
    "in_layers",
    "off_middle",
    "web_of",
]

Array = NDArray[np.float64]

#: Distances of the two lines of holes in the webs of purlins and rails, mm (common practice: 56 to 178 mm).
_GAUGES = (56.0, 86.0, 116.0, 146.0, 178.0)
#: What a gauge leaves of the depth, both sides together, mm (common practice, value from memory).
_BESIDE_GAUGE = 80.0
#: From this depth on the bolts are M16, mm (common practice, value from memory).
_DEEP = 200.0
#: Places of a millimetre that distances from the work point are rounded to: what is less is noise.
_PLACES = 6
#: Air between a plate and the bend of a flange, mm.
_BEND_GAP = 1.5


@dataclass(frozen=True, eq=False)
class Web:
    """The web of a purlin or rail, and the side of it that no flange keeps a plate from reaching from below.

    Where two lap it is both webs. Measured from the work point, which lies on the line of the course.

    Attributes:
        run: unit vector (3,) along the bar.
        up: unit vector (3,) away from what carries it.
        out: unit vector (3,) off the free side: a Z has its upper flange there, a C nothing.
        face: how far the free face is along ``out``, mm.
        thickness: of one web, mm.
        top: how far up a plate on the free face may reach, mm.
        bottom: how far down the bars reach, mm.
    """

    run: Array
    up: Array
    out: Array
    face: float
    thickness: float
    top: float
    bottom: float


@dataclass(frozen=True)
class HoleLines:
    """Bolts of one diameter in two lines along the web, ``gauge`` apart and centred on the course's line, mm."""

    diameter: float
    gauge: float

    @property
    def levels(self) -> tuple[float, float]:
        """Both lines, up from that of the course, mm."""
        return -self.gauge / 2, self.gauge / 2


def field_of(met: Met) -> str:
    """The group of fields that a purlin or a rail is described by."""
    return "purlins" if met.role is Role.PURLIN else "rails"


def web_of(*bars: Met) -> Web:
    """Give the web of a purlin or rail, of two that are butted, or of two that lap."""
    met = bars[0]
    profile = folded(met.section)
    half, flat = met.section.height / 2, flat_half(met.section) - _BEND_GAP
    if isinstance(profile, LippedC):
        return Web(met.x, met.z, -met.y, -web_faces(met.section)[0], profile.t, flat, half)
    side = _upright(met)
    out, up = met.y * side, met.z * side
    off, levels = zip(*(_middle(bar, out, up) for bar in bars), strict=True)
    face = profile.t / 2 + max(off)
    return Web(met.x, up, out, face, profile.t, flat + min(levels), half - min(levels))


def _upright(met: Met) -> float:
    """1 of a purlin or rail that lies as drawn, -1 of a purlin that is turned half round, lower flange up."""
    return -1.0 if met.role is Role.PURLIN and met.z[2] < 0.0 else 1.0


def _middle(met: Met, out: Array, up: Array) -> tuple[float, float]:
    """Where the middle of a web is, along ``out`` and ``up`` from the work point, mm."""
    y, z = web_middle(met.section)
    middle = met.origin + met.y * y + met.z * z
    return round(float(middle @ out), _PLACES), round(float(middle @ up), _PLACES)


def off_middle(met: Met, point: Array) -> float:
    """How far a point (3,) is from the middle of the depth of a purlin or rail, mm."""
    return abs(round(float((point - met.origin) @ met.z) - web_middle(met.section)[1], _PLACES))


def in_layers(bars: Mapping[int, Met], web: Web) -> tuple[Layer, ...]:
    """Give the webs of bars by number as layers, that at the free face last."""
    order = sorted(bars, key=lambda number: _middle(bars[number], web.out, web.up)[0])
    return tuple(Layer(number, web.thickness) for number in order)


def folded(section: Section) -> LippedC | LippedZ:
    """Give the profile of a purlin or rail.

    Raises:
        ModelError: where it is neither a lipped C nor a lipped Z.
    """
    profile = section.profile
    if isinstance(profile, LippedC | LippedZ):
        return profile
    raise ModelError(f"{section.designation} is no purlin")


def flat_half(section: Section) -> float:
    """Give half the depth of the flat of a purlin's web, between the bends, mm."""
    profile = folded(section)
    return profile.h / 2 - profile.t - profile.ri


def hole_lines(section: Section, options: CleatOptions, group: str) -> HoleLines:
    """Give the lines of holes that suit the depth of a purlin or rail.

    Raises:
        DescriptionError: where its flanges leave a spanner no room; ``group`` is where the section stands.
    """
    depth = section.height
    diameter = (16.0 if depth >= _DEEP else 12.0) if options.bolt == "by depth" else float(options.bolt[1:])
    fitting = [gauge for gauge in _GAUGES if gauge <= depth - _BESIDE_GAUGE]
    gauge = fitting[-1] if fitting else wrench_pitch(diameter)
    bend = flat_half(section)
    if group == "purlins" and options.continuity == "lapped":
        bend -= section.profile.thickness / 2  # one lies lower than the other by a wall
    room = max(wrench_wall(diameter), least_edge(hole_diameter(diameter)))
    if gauge / 2 + room > bend:
        raise impossible(
            f"{group}.section", f"two M{diameter:g} bolts find no room in the web",
            given=section.designation, allowed=f"a depth of {depth + 2 * (gauge / 2 + room - bend):.0f} mm or more",
        )  # fmt: skip
    return HoleLines(diameter, gauge)


def end_distance(lines: HoleLines) -> float:
    """Give the distance of the bolts to the end of a bar and to the edges of a plate, mm."""
    return edge(lines.diameter)
