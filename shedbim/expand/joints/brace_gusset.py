"""Gussets of braces: a plate in the plane of the braces, welded to the web or face of what carries it.

An angle lies on one face of the gusset and is bolted on its back mark; a tube ends in a fin that lies beside the
gusset, or is pressed flat itself. Along a carrier the outline hangs on the bolts alone, so that gussets of equal
braces are equal plates whichever way the leg of the angle points; at a column's head it is led between strut and
flange.

Nothing is designed: sizes follow from bolts, edges and room.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from math import ceil

import numpy as np
from manifold3d import CrossSection, JoinType, Manifold, OpType
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.expand.braces import strut_reach
from shedbim.expand.clearances import BRACE_SET_BACK, GUSSET
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.angle_carrier import flat_of_leg, half_of_pair, leg_face
from shedbim.expand.joints.bolt_lines import BoltLine, leg_line, tube_line
from shedbim.expand.joints.cap import cap_thickness
from shedbim.expand.joints.contract import FAR, Bolting, Connection, Fitting, Joint, Layer, Met, Welding, Work
from shedbim.expand.joints.flattened import flattened
from shedbim.expand.joints.gusset_levels import middle_of_gusset
from shedbim.expand.joints.gusset_outline import (
    CHORD_ERROR,
    Plane,
    boxed,
    hull,
    lane,
    made_solids,
    member_solid,
    outline,
    rectangle_at,
    shadow,
    width_between,
)
from shedbim.expand.joints.gusset_root import Root, along_carrier, column_head
from shedbim.expand.joints.strut_end import FinOnCarrier
from shedbim.expand.joints.tube_ends import AIR, Lap, TubeEnd, tube_end
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.distances import least_edge
from shedbim.fasteners.gauges import back_mark
from shedbim.fasteners.holes import hole_diameter
from shedbim.fasteners.welds import throat_for
from shedbim.geometry.placements import cross
from shedbim.model.joints import At
from shedbim.model.plates import Plate
from shedbim.model.roles import Role
from shedbim.sections.profiles import Angle, IShape, Pipe

__all__ = ["brace_gusset", "brace_line"]

Array = NDArray[np.float64]
_ADD = OpType.Add

_STRUTS = (Role.STRUT, Role.EAVES_STRUT, Role.VALLEY_STRUT, Role.TIE)
_BARS = (Role.RAFTER, Role.GABLE_RAFTER, Role.TOP_CHORD, Role.BOTTOM_CHORD, Role.ROOF_BRACE, Role.WALL_BRACE)
#: First bolts stand whole steps of this off the carrier, so that plates repeat.
_STEP = 5.0
#: Where a gusset runs into something, its brace moves back by steps of this, so often at most.
_BACK, _TRIES = 10.0, 25
#: Of braces flatter to their carrier than this (sine), the first bolt is not moved to a whole step.
_FLAT = 0.2
#: Stops nearer than this are one.
_SAME = 0.5
#: Air around the flat of a tube, mm: it is wider than the tube was.
_FLAT_AIR = 5.0
#: What is left of a brace between its ends, least.
_LEAST_BRACE = 100.0


def brace_line(brace: Met, options: Connections) -> BoltLine:
    """Give the bolts in an end of a brace.

    Raises:
        DescriptionError: when it is too small for the bolts.
    """
    chosen, profile = options.gussets, brace.section.profile
    if isinstance(profile, Angle):
        line = leg_line(profile, int(chosen.bolts), chosen.size)
    else:
        line = tube_line(brace.section, int(chosen.bolts), chosen.size)
    if line is None:
        raise impossible(
            f"{_field(brace)}.section", f"the end of a {brace.role.word} is too small for bolts",
            given=f"{brace.section.designation}, {chosen.size or 'M12'}", allowed="a larger section",
        )  # fmt: skip
    return line


def brace_gusset(joint: Joint, options: Connections) -> Connection:
    """Give the gusset of a brace's end, its bolts, and the fin where the brace is a tube."""
    return _Gusset(joint, options).connection()


def _field(brace: Met) -> str:
    return "bracing.roof" if brace.role is Role.ROOF_BRACE else "bracing.walls"


@dataclass(frozen=True, eq=False)
class _Shape:
    """An outline that fits: how far the brace moves back for it, where the lap begins (u, v), and its root."""

    set_back: float
    start: Array
    corners: tuple[tuple[float, float], ...]
    root: Root


class _Gusset:
    """One end of a brace; every step reads what the steps before it set."""

    def __init__(self, joint: Joint, options: Connections) -> None:
        self.carrier, self.brace = joint.members
        self.neighbours, self.options = joint.neighbours, options
        self.line = brace_line(self.brace, options)
        profile, form = self.brace.section.profile, options.tube_ends.braces
        self.angle = profile if isinstance(profile, Angle) else None
        option = "connections.tube_ends.braces"
        self.flat = None if self.angle else flattened(self.brace, self.line, form, option)
        self.fin = options.struts.thickness if self.flat is None else self.flat.thickness
        self.plane = self._plane()
        self.direction = self.plane.along(self.brace.into)
        self.body = self._body()

    def connection(self) -> Connection:
        """Everything the end adds, and how far the brace moves back."""
        shape = self._shape()
        lap = self._lap(shape.set_back)
        end = self._tube_end(lap)
        work = Work(1, shape.set_back) if end is None else end.work
        room = self.brace.to_start + self.brace.to_end
        if room < FAR and room - 2 * work.taken < _LEAST_BRACE:
            raise impossible(
                _field(self.brace), f"no room for a {self.brace.role.word} between its two ends",
                given=self.brace.section.designation, allowed="fewer and larger panels, or a smaller section",
            )  # fmt: skip
        fittings: tuple[Fitting, ...] = (self._plate(shape),)
        welds: tuple[Welding, ...] = (self._weld(shape.root),)
        if end is not None:
            fittings, welds = (*fittings, *end.fittings), (*welds, *end.welds)
        return Connection(fittings, (self._bolts(lap),), welds, (work,))

    # Where it lies

    def _body(self) -> CrossSection:
        """What the carrier takes from the plane: up to its web or face, or all of a column that is cut across."""
        if not self._along:
            area = shadow(member_solid(self.carrier), self.plane, GUSSET / 2)
            # The chords of a round lie inside it.
            return (
                area.offset(CHORD_ERROR, JoinType.Miter)
                if isinstance(self.carrier.section.profile, Pipe)
                else area
            )
        level = float((self.plane.origin - self.carrier.origin) @ self.carrier.z)
        if isinstance(self.carrier.section.profile, Angle):
            low, high = flat_of_leg(self.carrier)
            if not low <= level - GUSSET / 2 < level + GUSSET / 2 <= high:
                raise impossible(
                    "frames.roof.top_chord", "the gusset of a roof brace finds too little of the leg of a chord",
                    given=f"{self.brace.section.designation} at {self.carrier.section.designation}",
                    allowed="smaller braces and struts, or a larger chord",
                )  # fmt: skip
            face = float(self.carrier.origin @ self.plane.v) + leg_face(self.carrier)
        else:
            face = width_between(self.carrier.section, level - GUSSET / 2, level + GUSSET / 2)
        return CrossSection([np.array([[-FAR, -face], [FAR, -face], [FAR, face], [-FAR, face]])])

    def _plane(self) -> Plane:
        """The middle of the gusset: half its thickness under the angle's leg, or beside the fin of a tube."""
        v = self.carrier.y * (1.0 if float(self.brace.into @ self.carrier.y) > 0 else -1.0)
        u = self.brace.into - v * float(self.brace.into @ v)
        u = u / float(np.linalg.norm(u))
        return Plane(self.brace.z * middle_of_gusset(self.brace, self.fin), u, v, cross(u, v))

    @property
    def _mark(self) -> float:
        """How far the bolts lie off the brace's axis along its y axis, mm."""
        if self.angle is None:
            return 0.0
        return self.brace.section.outline.bounds[0] + back_mark(self.angle.b)[0]

    @property
    def _along(self) -> bool:
        """Whether the gusset stands in the middle of a web or face that runs on along it."""
        return abs(float(self.carrier.x @ self.plane.u)) > 0.999

    def _lap_start(self, set_back: float) -> Array:
        """Where the line of bolts begins (u, v): the brace's end."""
        point = self.brace.origin + self.brace.y * self._mark + self.brace.into * set_back
        return self.plane.seen(point)

    def _first_set_back(self, face: float) -> float:
        """How far the brace moves back so that its first bolt stands whole steps off the face."""
        sine = float(self.direction[1])
        if sine < _FLAT:
            return 0.0
        here = float(self._lap_start(0.0)[1])
        wanted = max(here, self._other_hand()) if self._along else here
        first = wanted - face + self.line.end * sine
        return (ceil(first / _STEP - 1e-6) * _STEP - first + wanted - here) / sine

    def _other_hand(self) -> float:
        """v where the line of bolts would begin if the angle lay the other way round."""
        c, s = (float(x) for x in self.direction)
        low, _, high, _ = self.brace.section.outline.bounds
        hand = 1.0 if float(self.plane.along(self.brace.y) @ np.array([-s, c])) > 0 else -1.0
        inner, outer = (high, -low) if hand > 0 else (-low, high)
        here = float(self.plane.seen(self.brace.origin) @ self.direction)
        # The planes that the brace was stopped before: along the carrier, and along the strut at its node.
        is_pair = isinstance(self.carrier.section.profile, Angle)
        half = half_of_pair(self.carrier) if is_pair else self.carrier.section.width / 2
        side = half + BRACE_SET_BACK
        strut = self._strut_stop()
        if strut is None and here * s - outer * c > side + _SAME:
            strut = here * c - inner * s
        t = (side + inner * c) / s
        if strut is not None and c > _FLAT:
            t = max(t, (strut + outer * s) / c)
        return t * s - hand * self._mark * c

    def _strut_stop(self) -> float | None:
        """u of the plane that the brace was stopped before by the strut at its node; None where none is seen."""
        for met in self.neighbours:
            if met.role in _STRUTS and met.at != At.ALONG:
                u = float(self.plane.seen(met.origin)[0])
                if abs(u) < met.section.height:
                    return u + strut_reach(met.section, self.plane.u) + BRACE_SET_BACK
        return None

    # The outline

    def _shape(self) -> _Shape:
        first = self._first_set_back(self._face())
        taken = CrossSection.batch_boolean([CrossSection(), *self._obstacles(first)], _ADD)
        root = along_carrier if self._along else column_head
        least = least_edge(hole_diameter(self.line.diameter))
        for k in range(_TRIES):
            set_back = first + k * _BACK
            start = self._lap_start(set_back)
            if not (self._flat_lap(start) ^ (taken + self.body)).is_empty():
                continue
            lap = rectangle_at(start, self.direction, self.line.lap, self.line.side)
            found = root(self.carrier, self.plane, self.body, lap, taken, self.line.lap)
            if found is None:
                break
            needed = rectangle_at(start, self.direction, self.line.lap, min(least, self.line.side))
            wanted = hull(found.end, lap) + found.area
            corners = outline(wanted, taken + self.body, [needed, found.core])
            if corners is not None:
                return _Shape(set_back, start, corners, found)
        raise impossible(
            _field(self.brace), f"no room for the gusset of a {self.brace.role.word}",
            given=f"{self.brace.section.designation} at {self.carrier.section.designation}",
            allowed="larger panels, smaller braces or struts, or a larger column",
        )  # fmt: skip

    def _flat_lap(self, start: Array) -> CrossSection:
        """What the flat of a tube takes, and its taper, with air around; nothing where it has none."""
        if self.flat is None:
            return CrossSection()
        begin = start - self.direction * _FLAT_AIR
        length = self.flat.length + self.flat.taper + _FLAT_AIR
        return rectangle_at(begin, self.direction, length, self.flat.half + _FLAT_AIR)

    def _face(self) -> float:
        """v of the web or face, mm."""
        if self._along:
            return float(self.body.bounds()[3])
        web = self.carrier.section.profile
        return web.tw / 2 if isinstance(web, IShape) else self.carrier.section.width / 2

    def _obstacles(self, first: float) -> Iterator[CrossSection]:
        """What other members on this side of the carrier take from the plane, with air around them.

        A gusset along its carrier lies beside a strut at its node, and comes near nothing else.
        """
        for met in self.neighbours:
            bodies: list[Manifold] = []
            if float((met.point(met.to_end, 0, 0) + met.point(-met.to_start, 0, 0)) @ self.plane.v) <= 0:
                continue
            if met.role in _STRUTS and met.at != At.ALONG:
                end = FinOnCarrier(self.carrier, met, self.options)
                if self._along and self._passes(end, first):
                    continue
                made = end.connection()
                bodies = [*made_solids(made), member_solid(met, made.works[0])]
            elif met.role in _BARS and met.role is not self.brace.role and not self._along:
                bodies = [member_solid(met)]
            half = GUSSET / 2 + (0.0 if self.flat is None else self.flat.thickness)
            shadows = [shadow(body, self.plane, half, AIR) for body in bodies]
            if self._along and shadows:
                yield lane(shadows)
            else:
                yield from (boxed(each) for each in shadows)

    def _passes(self, end: FinOnCarrier, first: float) -> bool:
        """Whether the end of a strut lies wholly beside the lap, on the side of the work point."""
        half = self.line.side if self.flat is None else self.flat.half
        lap = rectangle_at(self._lap_start(first), self.direction, self.line.lap, half)
        return float(lap.bounds()[0]) >= float(self.plane.seen(end.strut.origin)[0]) + end.reach + AIR

    # What is made

    def _plate(self, shape: _Shape) -> Fitting:
        """The gusset; its own axes are u and v from the start of the lap."""
        corners = tuple((u - float(shape.start[0]), v - float(shape.start[1])) for u, v in shape.corners)
        frame = np.column_stack(
            [self.plane.u, self.plane.v, self.plane.n, self.plane.point(shape.start, -GUSSET / 2)]
        )
        return Fitting("gusset", Role.GUSSET, Plate(corners, GUSSET), frame)

    def _weld(self, root: Root) -> Welding:
        wall = self.carrier.section.profile.thickness
        throat = throat_for(min(GUSSET, wall), self.carrier.grade)
        return Welding(("gusset", 0), throat, 2 * root.length)

    def _lap(self, set_back: float) -> Lap:
        tip = self.brace.origin + self.brace.y * self._mark + self.brace.into * set_back
        return Lap(tip, self.brace.into, cross(self.brace.z, self.brace.into), self.line)

    def _tube_end(self, lap: Lap) -> TubeEnd | None:
        if self.angle is not None:
            return None
        cap = cap_thickness(self.brace.section, self.options.caps)
        form = self.options.tube_ends.braces
        return tube_end(self.brace, 1, lap, self.fin, form, cap, flat=self.flat)

    def _bolts(self, lap: Lap) -> Bolting:
        """Heads on the leg or the fin, nuts on the free face of the gusset."""
        if self.angle is None:
            layer = Layer("fin" if self.flat is None else 1, self.fin)
            top = self.fin / 2
        else:
            layer, top = Layer(1, self.angle.t), self.brace.section.outline.bounds[1] + self.angle.t
        layers = (layer, Layer("gusset", GUSSET))
        grip = layer.thickness + GUSSET
        points = np.array([lap.point(x, 0.0, top) for x in self.line.places])
        fastener = bolt(self.line.diameter, self.options.bolts.grade, grip)
        return Bolting("bolts", fastener, points, -self.brace.z, layers)
