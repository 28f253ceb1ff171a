"""Sleeves: plain channels folded to lie inside two butted purlins, bolted through both webs over a frame."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from math import floor

import numpy as np

from shedbim.description.connections import Connections
from shedbim.errors import UnknownSection
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.cold_formed_web import HoleLines, Web, end_distance, field_of, folded
from shedbim.expand.joints.contract import Bolting, Fitting, Layer, Met
from shedbim.expand.joints.shaping import frame_of
from shedbim.fasteners.bolts import bolt
from shedbim.geometry.placements import cross
from shedbim.model.bars import Bar
from shedbim.model.roles import Role
from shedbim.sections import catalogue
from shedbim.sections.profiles import LippedC
from shedbim.sections.section import Section

__all__ = ["Sleeve", "sleeve_over", "sleeve_section"]

#: Air between the flanges of purlin and sleeve, and before the lip, mm.
_PLAY = 1.0
#: Sizes of sleeves are multiples of this, mm.
_STEP = 5.0


@dataclass(frozen=True, eq=False)
class Sleeve:
    """A sleeve over the end of two purlins."""

    fitting: Fitting
    length: float
    thickness: float

    def bolting(self, number: int, met: Met, web: Web, lines: HoleLines, options: Connections) -> Bolting:
        """The two bolts through a member and the sleeve's end over it."""
        side = 1.0 if float(met.into @ web.run) > 0 else -1.0
        place = side * (self.length / 2 - end_distance(lines))
        head = web.out * (web.face - web.thickness - self.thickness)
        points = np.array([head + web.run * place + web.up * v for v in lines.levels])
        fastener = bolt(lines.diameter, options.bolts.secondary_grade, self.thickness + web.thickness)
        layers = (Layer("sleeve", self.thickness), Layer(number, web.thickness))
        return Bolting(f"sleeve bolts {number}", fastener, points, web.out, layers)


@lru_cache(maxsize=64)
def sleeve_section(section: Section) -> Section:
    """Give the plain channel that lies inside a lipped C or Z, its web flat on the other's.

    Raises:
        UnknownSection: where no channel can be folded that small.
    """
    profile = folded(section)
    depth = _STEP * floor((profile.h - 2 * profile.t - 2 * _PLAY) / _STEP)
    narrow = profile.b if isinstance(profile, LippedC) else profile.narrow
    flange = _STEP * floor((narrow - 2 * profile.t - profile.ri - _PLAY) / _STEP)
    return catalogue.section(f"U {depth:g}x{flange:g}x{profile.t:g}")


def sleeve_over(carried: list[Met], web: Web, lines: HoleLines, options: Connections) -> Sleeve | None:
    """Give the sleeve over two butted purlins where the description asks for sleeves; else None.

    It lies on the side of the web that the cleat is not on: inside a C, over the lower flange of a Z.

    Raises:
        DescriptionError: where no sleeve fits the purlins or their length.
    """
    if options.cleats.continuity != "sleeved" or len(carried) < 2 or carried[0].role is not Role.PURLIN:
        return None
    length, group = options.cleats.sleeve, field_of(carried[0])
    shortest = min(max(met.to_start, met.to_end) for met in carried)
    if length / 2 + end_distance(lines) > shortest:
        raise impossible(
            "connections.cleats.sleeve", "the sleeve is longer than the purlins that it joins",
            given=f"{length:.0f} mm", allowed=f"{2 * (shortest - end_distance(lines)):.0f} mm at most",
        )  # fmt: skip
    try:
        section = sleeve_section(carried[0].section)
    except UnknownSection as error:
        raise impossible(f"{group}.section", f"no sleeve fits inside: {error.reason}") from None
    inner = web.face - web.thickness + section.outline.bounds[0]
    along = cross(-web.out, web.up)
    frame = frame_of(web.out * inner - along * length / 2, along, -web.out)
    fitting = Fitting("sleeve", Role.SLEEVE, Bar(section, length), frame, owner=1)
    return Sleeve(fitting, length, web.thickness)
