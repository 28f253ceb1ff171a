"""Cleats: upright plates on the steel that carries purlins and rails, which these are bolted to by their webs."""

from __future__ import annotations

from dataclasses import dataclass
from math import asin, floor, sqrt, tan

import numpy as np
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.carrier_face import Ground, ground, stands_on_head
from shedbim.expand.joints.cold_formed_web import (
    HoleLines,
    Web,
    end_distance,
    field_of,
    hole_lines,
    in_layers,
    web_of,
)
from shedbim.expand.joints.contract import Bolting, Connection, Fitting, Joint, Layer, Met, Welding
from shedbim.expand.joints.shaping import frame_of, plate_at
from shedbim.expand.joints.sleeve import Sleeve, sleeve_over
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.distances import least_edge
from shedbim.fasteners.holes import hole_diameter
from shedbim.fasteners.plate_stock import rounded_up
from shedbim.fasteners.welds import throat_for
from shedbim.geometry.placements import cross
from shedbim.model.joints import At
from shedbim.model.plates import Plate
from shedbim.model.roles import Role

__all__ = ["cleat"]

Array = NDArray[np.float64]

#: Usual distance of the bolts from the line of the frame, mm; more where the gap of butted ends asks for it.
_FROM_LINE = 35.0
#: Share of a round carrier's radius that a foot reaches to either side: beyond, it would be a knife's edge.
_ROUND_FOOT = 0.7
#: Seat plates under cleats that stand beside their carrier's face, thickest first, mm.
_SEATS = (8.0, 6.0, 5.0)
#: Air between a seat plate and the flange over it; room for a weld beside the cleat; depth of a seat on its
#: carrier; the most it may stand out, mm (all common practice, values from memory).
_SEAT_GAP, _WELD_ROOM, _SEAT_HOLD, _STANDS_OUT = 1.5, 10.0, 50.0, 75.0
#: Thickness of the pack between a column's head and a seat, mm: what runs up to the column passes under the seat
#: with so much air (common practice: 2 to 3 mm; value from memory).
_PACK = 2.0
_CARRIED = (Role.PURLIN, Role.SIDE_RAIL, Role.GABLE_RAIL)
#: Air between the shoulders of a cleat and the flanges it reaches between, mm.
_SHOULDER = 5.0


@dataclass(frozen=True, eq=False)
class _Size:
    """A cleat in its middle plane: half its width, and its foot and its top up from the purlin's axis, mm."""

    half: float
    foot: float
    top: float


def cleat(joint: Joint, options: Connections) -> Connection:
    """Give the cleat of a purlin or rail, or of two that are butted or lap, with bolts and welds.

    Raises:
        DescriptionError: where web, lift or carrier leave no room.
    """
    carrier = joint.members[0]
    carried = [met for met in joint.members[1:] if met.role in _CARRIED]
    # The angles of a pair carry together; the other one is last.
    holding = (0, *range(1 + len(carried), len(joint.members)))
    web, group = web_of(*carried), field_of(carried[0])
    lines = hole_lines(carried[0].section, options.cleats, group)
    on_head = stands_on_head(carrier, carried[0])
    face = ground(carrier, web, options.cleats.thickness, on_head=on_head)
    out = _out_from_line(carried, web, lines)
    half = rounded_up(out + end_distance(lines), 5.0)
    under: tuple[Fitting, ...] = ()
    if face.beyond > 0.0:
        under = _seat(face, web, group, half, options, packed=on_head)
    lift = sum(each.shape.thickness for each in under if isinstance(each.shape, Plate))
    size = _size(face, web, lines, half, lift, group)
    plate, frame = _plate(face, web, size, options.cleats.thickness, seated=bool(under))
    fitting = Fitting("cleat", Role.CLEAT, plate, frame)
    sleeve = sleeve_over(carried, web, lines, options)
    if len(carried) > 1 and all(met.at == At.ALONG for met in carried):
        boltings: tuple[Bolting, ...] = (_through_both(carried, web, lines, out, options),)
    else:
        boltings = _boltings(carried, web, lines, out, options, sleeve)
    throat = throat_for(options.cleats.thickness)
    fittings = (*under, fitting)
    if not under:
        length = _weld_length(face, size) / len(holding)
        welds = tuple(Welding((number, "cleat"), throat, length) for number in holding)
    else:
        held = 2.0 * min(_SEAT_HOLD, size.half) + 2.0 * min(face.half, size.half)
        on_seat = tuple(Welding((number, under[0].name), throat, held / len(holding)) for number in holding)
        on_pack = tuple(Welding((each.name, "seat"), throat, held) for each in under[:-1])
        welds = (Welding(("seat", "cleat"), throat, 4.0 * size.half), *on_seat, *on_pack)
    if sleeve is not None:
        fittings = (*fittings, sleeve.fitting)
    return Connection(fittings, boltings, welds)


def _spans(met: Met, run: Array) -> tuple[float, float]:
    """From where to where a member runs along the line, seen from the work point, mm."""
    here, along = float(met.origin @ run), float(met.x @ run)
    ends = (here - along * met.to_start, here + along * met.to_end)
    return min(ends), max(ends)


def _out_from_line(carried: list[Met], web: Web, lines: HoleLines) -> float:
    """How far the bolts are from the line of the frame, mm."""
    inner = max(_ends_off_line(*_spans(met, web.run)) for met in carried)
    return max(_FROM_LINE, rounded_up(inner + end_distance(lines), 5.0))


def _ends_off_line(low: float, high: float) -> float:
    """How far from the line the end of a member is that reaches from ``low`` to ``high``; 0 where it passes it, mm."""
    return max(low, -high, 0.0)


def _size(face: Ground, web: Web, lines: HoleLines, half: float, lift: float, group: str) -> _Size:
    """The size of the cleat, rounded up so that sizes repeat."""
    foot = lift - face.depth
    least = lines.gauge / 2 + least_edge(hole_diameter(lines.diameter))
    wanted = min(lines.gauge / 2 + end_distance(lines), web.top)
    if wanted < least:
        raise impossible(
            f"{group}.section", "the bolts of a cleat come too near to its upper edge",
            allowed="a deeper section or smaller bolts",
        )  # fmt: skip
    for step in (10.0, 5.0):
        top = foot + rounded_up(wanted - foot, step)
        if top <= web.top:
            return _Size(half, foot, top)
    return _Size(half, foot, wanted)


def _axes(web: Web) -> tuple[Array, Array]:
    """The axes of a cleat's own plane, so that its thickness runs off the web."""
    along = web.run if float(cross(web.run, web.up) @ web.out) > 0 else -web.run
    return along, web.up


def _plate(face: Ground, web: Web, size: _Size, thickness: float, *, seated: bool) -> tuple[Plate, Array]:
    """The cleat with its foot shaped to what it stands on."""
    w, foot, top = size.half, size.foot, size.top
    x, y = _axes(web)
    origin = web.out * web.face
    if seated or not (face.radius or face.tongue):
        return plate_at(origin, x, y, [(-w, foot), (w, foot), (w, top), (-w, top)], thickness)
    if face.tongue:
        n = min(w, 5.0 * floor(face.half / 5.0))
        down, shoulder = foot - face.tongue, foot + _SHOULDER
        corners = [(-n, down), (n, down), (n, top), (-n, top)]
        if n < w:
            corners = [
                (-n, down), (n, down), (n, shoulder), (w, shoulder),
                (w, top), (-w, top), (-w, shoulder), (-n, shoulder),
            ]  # fmt: skip
        return plate_at(origin, x, y, corners, thickness)
    return _round_footed(face.radius, size, thickness, frame_of(origin, x, y))


def _round_footed(radius: float, size: _Size, thickness: float, frame: Array) -> tuple[Plate, Array]:
    """A cleat square to a round carrier, its foot cut to the circle."""
    w, foot, top = size.half, size.foot, size.top
    n = min(w, 5.0 * floor(_ROUND_FOOT * radius / 5.0))
    low = foot - radius + sqrt(radius**2 - n**2)
    bulge = -tan(asin(n / radius) / 2)
    corners = [(-n, low), (n, low), (n, foot), (w, foot), (w, top), (-w, top), (-w, foot), (-n, foot)]
    bulges = [bulge] + [0.0] * 7
    if n == w:
        corners, bulges = [corners[0], corners[1], corners[4], corners[5]], [bulge, 0.0, 0.0, 0.0]
    return Plate(tuple(corners), thickness, bulges=tuple(bulges)), frame


def _weld_length(face: Ground, size: _Size) -> float:
    """The length of the fillets on both sides of a foot, mm."""
    if face.radius:
        n = min(size.half, _ROUND_FOOT * face.radius)
        return 4.0 * face.radius * asin(n / face.radius)
    return 4.0 * min(size.half, face.half)


def _seat(
    face: Ground, web: Web, group: str, half: float, options: Connections, *, packed: bool
) -> tuple[Fitting, ...]:
    """The plate that a cleat stands on where it would come down beside its carrier's face, over a pack or none."""
    thickness = options.cleats.thickness
    outer = face.beyond + _WELD_ROOM
    if not face.square or face.radius or face.tongue or outer > _STANDS_OUT:
        raise impossible(
            f"{group}.eaves_offset" if face.square else f"{group}.valley_offset",
            "the cleat of a purlin stands beside what carries it",
            allowed=f"a distance that moves the purlin by {face.beyond:.0f} mm or more",
        )  # fmt: skip
    room = face.depth - web.bottom - _SEAT_GAP
    # Under a purlin set down lower than usual the seat lies on the head itself.
    pack = _PACK if packed and _SEATS[-1] + _PACK <= room else 0.0
    fitting = [t for t in _SEATS if t + pack <= room]
    if not fitting:
        raise impossible(
            f"{group}.lift", "a seat plate for the cleat finds no room under the purlin",
            allowed=f"{_SEATS[-1] + _SEAT_GAP:g} mm or more, or another offset of the purlin",
        )  # fmt: skip
    # It reaches from beyond the cleat back on to the carrier, on whichever side that is.
    depth = rounded_up(outer + _SEAT_HOLD)
    first, hold = web.face - _WELD_ROOM, (outer, depth)
    if face.side > 0:
        first, hold = web.face + thickness + _WELD_ROOM - depth, (0.0, depth - outer)
    spans = [(first, first + depth), (first + hold[0], first + hold[1])]
    x, y = web.run, cross(web.up, web.run)
    if float(y @ web.out) < 0:
        spans = [(-high, -low) for low, high in spans]

    def plate(
        name: str, role: Role, level: float, wide: float, span: tuple[float, float], t: float
    ) -> Fitting:
        """A plate of this thickness, its underside ``level`` above the head or face."""
        low, high = span
        corners = ((-wide, low), (wide, low), (wide, high), (-wide, high))
        return Fitting(name, role, Plate(corners, t), frame_of(web.up * (level - face.depth), x, y))

    seat = plate("seat", Role.SEAT, pack, half, spans[0], fitting[0])
    if not pack:
        return (seat,)
    return (plate("pack", Role.PACK, 0.0, min(half, face.half), spans[1], pack), seat)


def _through_both(
    carried: list[Met], web: Web, lines: HoleLines, out: float, options: Connections
) -> Bolting:
    """Two bolts on each side of the line through the webs of two purlins that lap."""
    thickness = options.cleats.thickness
    layers = (*in_layers(dict(enumerate(carried, start=1)), web), Layer("cleat", thickness))
    grip = sum(layer.thickness for layer in layers)
    head = web.out * (web.face + thickness - grip)
    points = np.array([head + web.run * u + web.up * v for u in (-out, out) for v in lines.levels])
    return Bolting(
        "bolts", bolt(lines.diameter, options.bolts.secondary_grade, grip), points, web.out, layers
    )


def _boltings(
    carried: list[Met], web: Web, lines: HoleLines, out: float, options: Connections, sleeve: Sleeve | None
) -> tuple[Bolting, ...]:
    """Two bolts on each side of the line where a member has its web there, and those of the sleeve's ends."""
    thickness = options.cleats.thickness
    inner = () if sleeve is None else (Layer("sleeve", sleeve.thickness),)
    grip = thickness + web.thickness + (0.0 if sleeve is None else sleeve.thickness)
    fastener = bolt(lines.diameter, options.bolts.secondary_grade, grip)
    head = web.out * (web.face + thickness - grip)
    room = end_distance(lines) - 1e-6
    found = []
    for number, met in enumerate(carried, start=1):
        low, high = _spans(met, web.run)
        places = [u for u in (-out, out) if low + room <= u <= high - room]
        points = [head + web.run * u + web.up * v for u in places for v in lines.levels]
        layers = (*inner, Layer(number, web.thickness), Layer("cleat", thickness))
        name = "bolts" if len(carried) == 1 else f"bolts {number}"
        found.append(Bolting(name, fastener, np.array(points), web.out, layers))
        if sleeve is not None:
            found.append(sleeve.bolting(number, met, web, lines, options))
    return tuple(found)
