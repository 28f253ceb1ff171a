"""The end of a truss web that is bolted on site: a gusset on the chord, a cap with a fin on the web, two bolts.

Gusset and fin are strips along the web's axis, no wider than the web, side by side with their faces in the plane of
the truss. No resistance is computed.

Glossary:
    along   on the chord's face, from where the web's axis meets it
    off     square to that face, towards the web
    depth   along the web's axis, from the chord's face
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import ceil, floor

import numpy as np

from shedbim.description.connections import Connections
from shedbim.description.connections.splices import SpliceOptions
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.bolt_room import STEP, Room, sizes
from shedbim.expand.joints.contract import Bolting, Connection, Fitting, Joint, Layer, Welding
from shedbim.expand.joints.shaping import plate_at
from shedbim.expand.joints.truss_node import girth
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.plate_stock import rounded_up
from shedbim.fasteners.welds import throat_for
from shedbim.geometry.placements import cross
from shedbim.model.plates import rectangle
from shedbim.model.roles import Role
from shedbim.sections.section import Section

__all__ = ["Beside", "Lap", "lap_of", "web_splice"]

#: Thickness of gusset and fin, and of the cap (common practice, values from memory), mm.
_STRIP, _CAP = 12.0, 10.0
#: From the fin's end to the chord, from the gusset's end to the cap; how much a cap is larger than its web, mm.
_GAP, _LARGER = 10.0, 10.0
#: Webs this deep have the larger bolts by rule, mm.
_DEEP = 80.0


@dataclass(frozen=True)
class Beside:
    """A web beside the one that is joined: where its near side meets the chord's face (along), its direction."""

    toe: float
    direction: tuple[float, float]


@dataclass(frozen=True)
class Lap:
    """How fin and gusset lap: depths of fin end, bolts, gusset end, cap and end of the web; half the strips' width."""

    room: Room
    half: float
    fin: float
    first: float
    second: float
    gusset: float
    cap: float
    end: float


def lap_of(
    section: Section, direction: tuple[float, float], beside: Sequence[Beside], own: SpliceOptions
) -> Lap:
    """Give the lap of a web that leaves the chord's face in a direction (along, off), a unit vector.

    Raises:
        DescriptionError: when no bolt fits the width of the web.
    """
    room, half = _bolts(section, own)
    nearest = ceil((half * abs(direction[0]) + _GAP) / direction[1] / STEP) * STEP + room.edge
    while (
        not all(_clear(nearest, direction, each, room) for each in beside) and nearest < section.height * 20
    ):
        nearest += STEP
    second = nearest + room.pitch
    gusset = second + room.edge
    cap = gusset + _GAP
    return Lap(room, half, nearest - room.edge, nearest, second, gusset, cap, cap + _CAP)


def _bolts(section: Section, own: SpliceOptions) -> tuple[Room, float]:
    """The bolts, and half the width of the strips."""
    half = floor(section.height / 2 / STEP + 1e-9) * STEP
    if half < section.height / 2 - STEP / 2:
        half += STEP / 2
    for diameter in sizes(own.web_bolt, 20.0 if section.height >= _DEEP else 16.0):
        room = Room(diameter)
        if half >= room.least_edge:
            return room, half
    field = "connections.splices.web_bolt" if own.web_bolt else "frames.roof.diagonals"
    raise impossible(
        field, "a web that is joined on site is too narrow for its bolts", given=section.designation,
        allowed="wider webs, or frames.roof.longest: none",
    )  # fmt: skip


def _clear(depth: float, direction: tuple[float, float], beside: Beside, room: Room) -> bool:
    """Whether a bolt at this depth can be turned beside another web."""
    x, y = depth * direction[0] - beside.toe, depth * direction[1]
    return abs(x * beside.direction[1] - y * beside.direction[0]) >= room.from_wall()


def web_splice(joint: Joint, options: Connections) -> Connection:
    """Give gusset, cap, fin and bolts; the web was sawn square where ``lap_of`` ends it."""
    chord, web = joint.members
    off = web.into - chord.x * float(web.into @ chord.x)
    off = off / float(np.linalg.norm(off))
    along = chord.x
    half_chord = (chord.section.height if abs(float(chord.z @ off)) > 0.5 else chord.section.width) / 2
    direction = (float(web.into @ along), float(web.into @ off))
    depth = (float((web.origin - chord.origin) @ off) - half_chord) / direction[1]
    landing = web.origin - web.into * depth
    room, half = _bolts(web.section, options.splices)
    cap = depth - _CAP
    gusset = cap - _GAP
    second = gusset - room.edge
    first = second - room.pitch
    low = first - room.edge
    side = cross(along, off)
    strip = _Strip(direction, half)
    plate, frame = plate_at(landing, along, off, strip.on_face(gusset), _STRIP)
    fittings = [Fitting("gusset", Role.GUSSET, plate, frame, 0)]
    plate, frame = plate_at(landing, along, off, strip.between(low, cap), _STRIP, below=_STRIP)
    fittings.append(Fitting("fin", Role.FIN_PLATE, plate, frame, 1))
    wide, deep = (rounded_up(size + _LARGER, STEP) for size in (web.section.width, web.section.height))
    plate, frame = plate_at(
        web.origin - web.into * _CAP, web.y, cross(web.into, web.y), rectangle(wide, deep), _CAP
    )
    fittings.append(Fitting("cap", Role.CAP_PLATE, plate, frame, 1))
    thin = throat_for(_STRIP, chord.grade)
    round_web = throat_for(min(_CAP, web.section.profile.thickness), web.grade, sides=1)
    welds = (
        Welding((0, "gusset"), thin, 4 * half / direction[1]),
        Welding((1, "cap"), round_web, girth(web), all_round=True),
        Welding(("cap", "fin"), thin, 4 * half),
    )
    points = np.array([landing + web.into * at - side * _STRIP for at in (first, second)])
    fastener = bolt(room.diameter, options.bolts.grade, 2 * _STRIP, washers=(0, 1))
    bolts = Bolting("bolts", fastener, points, side, (Layer("fin", _STRIP), Layer("gusset", _STRIP)))
    return Connection(tuple(fittings), (bolts,), welds)


@dataclass(frozen=True)
class _Strip:
    """A strip along a web's axis in (along, off): its direction and half its width."""

    direction: tuple[float, float]
    half: float

    def between(self, low: float, high: float) -> list[tuple[float, float]]:
        """Its corners from one depth to another, anticlockwise."""
        return [self._at(low, -1), self._at(high, -1), self._at(high, 1), self._at(low, 1)]

    def on_face(self, high: float) -> list[tuple[float, float]]:
        """Its corners from the chord's face to a depth, anticlockwise."""
        lean = self.half * self.direction[0] / self.direction[1]
        return [self._at(lean, -1), self._at(high, -1), self._at(high, 1), self._at(-lean, 1)]

    def _at(self, depth: float, side: int) -> tuple[float, float]:
        c, s = self.direction
        return depth * c - side * self.half * s, depth * s + side * self.half * c
