"""What the gussets of angle trusses have in common: the legs that lie on them, their welds, bolts and outline.

Chords are welded, webs welded or bolted. Fillets run along heel and toe; their lengths are balanced about the axis of
centroids. No resistance is computed. Axes in the plane: x across the building, z up.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from manifold3d import CrossSection, JoinType
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.bolt_lines import BoltLine, leg_line
from shedbim.expand.joints.contract import Bolting, Fitting, Joint, Layer, Met, Welding
from shedbim.expand.joints.gusset_legs import LEDGE, RECESS, Leg, lap_of, toe_length
from shedbim.expand.joints.gusset_outline import outline
from shedbim.expand.joints.shaping import plate_at
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.gauges import back_mark
from shedbim.fasteners.welds import throat_for
from shedbim.model.joints import At
from shedbim.model.roles import Role
from shedbim.sections.profiles import Angle
from shedbim.sections.section import Section

__all__ = [
    "AnglePair",
    "beyond_backs",
    "chord_patch",
    "gusset",
    "leg_of",
    "pairs_of",
    "web_line",
    "web_patch",
]

Array = NDArray[np.float64]
_X, _Y, _Z = np.eye(3)
_CHORDS = (Role.TOP_CHORD, Role.BOTTOM_CHORD)
_FAR, _HAIR = 3000.0, 0.1


@dataclass(frozen=True, eq=False)
class AnglePair:
    """Two members of a joint that are one pair: their numbers, near one first, and the near one's leg.

    ``on_site`` is a web that is bolted there, whatever fastens the others.
    """

    numbers: tuple[int, int]
    near: Met
    leg: Leg
    on_site: bool = False

    @property
    def is_chord(self) -> bool:
        """Whether it is a chord."""
        return self.near.role in _CHORDS

    @property
    def ends(self) -> bool:
        """Whether it ends here."""
        return self.near.at != At.ALONG


def pairs_of(joint: Joint, first: int = 0) -> list[AnglePair]:
    """Give the pairs among the members of a joint from number ``first`` on, in the order of their near angles."""
    near = [i for i, met in enumerate(joint.members) if i >= first and met.origin[1] < 0]
    far = [i for i, met in enumerate(joint.members) if i >= first and met.origin[1] > 0]
    found = []
    for i in near:
        here = joint.members[i]
        partner = next(j for j in far if _opposite(here, joint.members[j]))
        found.append(AnglePair((i, partner), here, leg_of(here)))
    return found


def _opposite(one: Met, other: Met) -> bool:
    """Whether two angles are a pair: the same line in the plane, and the same heel."""
    apart = one.origin - other.origin
    return bool(
        one.role is other.role
        and float(np.hypot(apart[0], apart[2])) < 1e-3
        and float(np.abs(one.z - other.z).max()) < 1e-6
        and float(np.abs(one.into - other.into).max() if one.at != At.ALONG else 0.0) < 1e-6
    )


def leg_of(met: Met) -> Leg:
    """Give the leg of an angle that lies on the gusset."""
    low, high = met.section.outline.bounds[1], met.section.outline.bounds[3]
    flat = [0, 2]
    return Leg(met.origin[flat], met.into[flat], -met.z[flat], -low, high)


def web_line(section: Section, options: Connections, *, on_site: bool = False) -> BoltLine | None:
    """Give the bolts in an end of a web; None where webs are welded and this one is not joined on site.

    Raises:
        DescriptionError: when the leg is too small for them.
    """
    own, profile = options.truss_gussets, section.profile
    if own.fastening == "welded" and not on_site:
        return None
    assert isinstance(profile, Angle)
    line = leg_line(profile, int(own.bolts), own.size)
    if line is None:
        raise impossible(
            "connections.truss_gussets.size", "the leg of a web is too small for these bolts",
            given=f"{section.designation}, {own.size or 'M12'}",
            allowed="larger angles, smaller bolts, or "
            + ("frames.roof.longest: none" if own.fastening == "welded" else "welds"),
        )  # fmt: skip
    return line


def _off_axis(section: Section) -> float:
    """How far the bolts of a web lie off its axis, towards the heel, mm."""
    return -section.outline.bounds[0] - back_mark(section.width)[0]


def web_patch(leg: Leg, section: Section, options: Connections, *, on_site: bool = False) -> CrossSection:
    """Give what a gusset must reach of a web: along its welds with a ledge beside them, or round its bolts."""
    line = web_line(section, options, on_site=on_site)
    if line is None:
        lap = lap_of(leg.width, options.truss_gussets.lap)
        return leg.patch(0.0, lap, -leg.toe - LEDGE, leg.back + LEDGE)
    middle = _off_axis(section)
    return leg.patch(0.0, line.lap, middle - line.side, middle + line.side)


def chord_patch(leg: Leg, options: Connections, *, ends: bool, before: float = 0.0) -> CrossSection:
    """Give what a gusset must reach of a chord: its lap where it ends, ``before`` mm more, or a strip under a node."""
    lap = lap_of(leg.width, options.truss_gussets.lap)
    first, last = (-before, lap) if ends else (-lap / 2, lap / 2)
    return leg.patch(first, last, -leg.toe - LEDGE, leg.back - RECESS)


def beyond_backs(chords: Sequence[Leg]) -> CrossSection:
    """Give what lies outside the backs of all chord lengths of a node, less the recess: no gusset is there."""
    found = [leg.patch(-_FAR, _FAR, leg.back - RECESS, _FAR) for leg in chords]
    taken = found[0]
    for each in found[1:]:
        taken = taken ^ each
    return taken


def gusset(
    pairs: Sequence[AnglePair],
    wanted: Sequence[CrossSection],
    thickness: float,
    options: Connections,
    behind: CrossSection | None = None,
) -> tuple[Fitting, list[Bolting], list[Welding], CrossSection]:
    """Give the gusset that reaches everything wanted, the bolts and welds of the pairs on it, and its area.

    Args:
        behind: where it must not be, besides outside the backs of the chords.

    Raises:
        DescriptionError: when no plate in one piece reaches all members.
    """
    chords = [pair.leg for pair in pairs if pair.is_chord]
    taken = beyond_backs(chords)
    if behind is not None:
        taken = taken + behind
    # Less the hair that an outline loses where corners nearly in line are left out.
    needed = [(patch - taken).offset(-_HAIR, JoinType.Miter) for patch in wanted]
    corners = outline(CrossSection.batch_hull(list(wanted)), taken, needed)
    if corners is None:
        raise impossible(
            "frames.roof.panels", "no gusset in one piece reaches all bars at a node of a truss",
            allowed="fewer panels, or more depth",
        )  # fmt: skip
    area = CrossSection([np.array(corners)])
    plate, frame = plate_at(np.zeros(3), _X, _Z, corners, thickness, below=thickness / 2)
    boltings: list[Bolting] = []
    welds: list[Welding] = []
    for pair in pairs:
        line = None if pair.is_chord else web_line(pair.near.section, options, on_site=pair.on_site)
        if line is None:
            welds += _welds(pair, area, thickness, options)
        else:
            boltings.append(_bolts(pair, line, thickness, options))
    return Fitting("gusset", Role.GUSSET, plate, frame), boltings, welds, area


def _welds(pair: AnglePair, area: CrossSection, thickness: float, options: Connections) -> list[Welding]:
    """Fillets along heel and toe of both angles."""
    leg, met = pair.leg, pair.near
    throat = throat_for(min(thickness, met.section.profile.thickness), met.grade)
    if pair.ends:
        lap = lap_of(leg.width, options.truss_gussets.lap)
        length = lap + min(toe_length(leg, lap), lap)
    else:
        length = leg.edge_in(area, leg.back - RECESS - 0.5) + leg.edge_in(area, -leg.toe)
    return [Welding((number, "gusset"), throat, length) for number in pair.numbers]


def _bolts(pair: AnglePair, line: BoltLine, thickness: float, options: Connections) -> Bolting:
    """Bolts through both angles and the gusset, heads on the near one."""
    met, leg = pair.near, pair.leg
    wall = met.section.profile.thickness
    up = _off_axis(met.section)
    flat = [leg.point(x, up) for x in line.places]
    points = np.array([[x, -thickness / 2 - wall, z] for x, z in flat])
    layers = (Layer(pair.numbers[0], wall), Layer("gusset", thickness), Layer(pair.numbers[1], wall))
    fastener = bolt(line.diameter, options.bolts.grade, 2 * wall + thickness)
    name = f"bolts {pair.numbers[0]}"
    return Bolting(name, fastener, points, _Y, layers)
