"""Heads of gable posts that slide: wind goes from the post into the steel above, no load of the roof comes down.

A hanger, a flat bar in the plane of the post's depth, is welded to the underside of the rafter or chord and bolted
through long upright slots: to the web of an I post, or to a fin on the cap of a post that is a tube.

Axes: u up the post from its head, v along the post's depth (its z axis), w across (its y axis). mm.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import ceil, floor

import numpy as np
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.expand.clearances import POST_HEAD_GAP
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.angle_carrier import block_of_pair
from shedbim.expand.joints.cap import cap_on, cap_thickness
from shedbim.expand.joints.contract import FAR, Bolting, Connection, Fitting, Joint, Layer, Welding
from shedbim.expand.joints.shaping import plate_at
from shedbim.expand.sticks import along, stick
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.distances import edge, least_edge, least_pitch, pitch, wrench_pitch, wrench_wall
from shedbim.fasteners.fit import Fit
from shedbim.fasteners.holes import hole_diameter, slot_travel
from shedbim.fasteners.plate_stock import thickness_at_least
from shedbim.fasteners.welds import throat_for
from shedbim.model.plates import rectangle
from shedbim.model.roles import Role
from shedbim.sections import catalogue
from shedbim.sections.profiles import Angle, Hollow, IShape
from shedbim.sections.section import Section

__all__ = ["head_room", "post_head"]

Array = NDArray[np.float64]

#: Hanger to the end of the steel above, where another weld or end plate is (value from memory).
_END_ROOM = 12.0
#: Least overlap of hanger and steel above that is worth a weld: 30 mm and its craters (EN 1993-1-8 4.5.1).
_LEAST_WELD = 40.0
#: Hanger to the root fillets of the post, and fin to the edge of the cap (value from memory).
_SIDE_ROOM = 3.0
#: Least and greatest thickness of hanger and fin (common practice: 10 to 12 mm, no thinner than the web).
_LEAST_PLATE, _MOST_PLATE = 10.0, 25.0
#: A fin stands off the axis of its post by no more than this: beside a ridge with end plates.
_FIN_REACH = 45.0
#: Lengths along the post are whole steps of this.
_STEP = 5.0
#: A distance to an end of the steel above that counts as far, so that the side does not follow small differences.
_FAR_ENOUGH = 200.0


@dataclass(frozen=True)
class _Drill:
    """Distances of the bolts, mm.

    Attributes:
        edge: hole to the edge of a plate or the end of the post.
        slot: middle of a slot to the end of the hanger.
        beside, above: between the two bolts side by side, or one above the other.
    """

    diameter: float
    edge: float
    slot: float
    beside: float
    above: float


def _drill(size: str) -> _Drill:
    d = float(size[1:])
    hole = hole_diameter(d)
    travel = slot_travel(d, Fit.LONG_SLOT)
    beside = _up(max(pitch(d), wrench_pitch(d), least_pitch(hole)))
    # Ends of slots keep 1.5 hole diameters (EN 1993-1-8 Table 3.3, value from memory).
    return _Drill(
        d,
        _up(max(edge(d), least_edge(hole), wrench_wall(d) + 2)),
        _up(travel / 2 + 1.5 * hole),
        beside,
        _up(max(beside, least_pitch(hole) + travel)),
    )


def head_room(section: Section, size: str, steepest: float) -> float:
    """Give how far under the steel above the head of a gable post ends on its axis, mm.

    Args:
        size: thread of the bolts, ``M16``.
        steepest: greatest rise over run of the steel above.
    """
    if isinstance(section.profile, IShape):
        return POST_HEAD_GAP
    drill = _drill(size)
    # A fin stands on the cap under the gap, and the cap is level: its edges keep the gap too.
    fin = _fin_height(drill) + steepest * _FIN_REACH
    return POST_HEAD_GAP + _up(max(fin, steepest * section.width / 2))


def _fin_height(drill: _Drill) -> float:
    """Height of a fin: the gap to slide in, the hanger's slots, the edge over the bolts."""
    return POST_HEAD_GAP + _STEP + drill.slot + drill.edge


def post_head(joint: Joint, options: Connections) -> Connection:
    """Give the sliding head of a gable post: hanger, for a tube cap and fin, and two bolts."""
    return _Head(joint, options).connection()


class _Head:
    """The steps of one head; every step reads what the steps before it set."""

    def __init__(self, joint: Joint, options: Connections) -> None:
        self.post, self.others = joint.members[1], range(2, len(joint.members))
        above = joint.members[0]
        self.above = block_of_pair(above) if isinstance(above.section.profile, Angle) else above
        self.options = options
        self.drill = _drill(options.post_heads.size)
        self.is_tube = isinstance(self.post.section.profile, Hollow)
        self.face = self._face()
        self.thickness = self._thickness()
        self.upright = self._upright()
        self.width = 2 * self.drill.edge + (0.0 if self.upright else self.drill.beside)
        self.v = self._place()
        self.side, self.lap = self._lap()

    def connection(self) -> Connection:
        """Everything the head adds to the post and the steel above."""
        fittings, welds, works = [self._hanger()], self._hanger_welds(), []
        layers = [Layer("hanger", self.thickness, Fit.LONG_SLOT, self.post.x)]
        if self.is_tube:
            cap, weld, work = cap_on(self.post, 1, cap_thickness(self.post.section, self.options.caps))
            fin = self._fin()
            fittings += [cap, fin]
            throat = throat_for(self.thickness, self.post.grade)
            welds += [weld, Welding(("fin", "cap plate"), throat, 2 * self.width)]
            works.append(work)
            layers.append(Layer("fin", self.thickness))
        else:
            web = self.post.section.profile.thickness
            spacer = self.lap - web / 2
            if spacer > 0:
                fittings.append(self._spacer(spacer))
                length = 2 * (self.width + self._rows_height())
                throat = throat_for(min(web, spacer), self.post.grade)
                welds.append(Welding(("spacer", 1), throat, length, all_round=True))
                layers.append(Layer("spacer", spacer))
            layers.append(Layer(1, web))
        grip = sum(layer.thickness for layer in layers)
        fastener = bolt(self.drill.diameter, self.options.bolts.grade, grip, (1, 1))
        points = np.array([
            self._point(u, v, self.side * (self.lap + self.thickness)) for u, v in self._bolts()
        ])  # fmt: skip
        bolts = Bolting("bolts", fastener, points, -self.post.y * self.side, tuple(layers))
        return Connection(tuple(fittings), (bolts,), tuple(welds), tuple(works))

    def _point(self, u: float, v: float, w: float) -> Array:
        """The point (3,) in joint axes."""
        return self.post.origin + self.post.x * u + self.post.z * v + self.post.y * w

    # Measures

    def _face(self) -> tuple[Array, Array]:
        """A point (3,) of the underside of the steel above, and its normal (3,) down to the post."""
        down = -1.0 if float(self.above.z @ self.post.x) > 0 else 1.0
        normal = self.above.z * down
        return self.above.origin + normal * (self.above.section.height / 2), normal

    def _under(self, v: float, w: float) -> float:
        """u of the underside of the steel above at a place."""
        point, normal = self.face
        return float(normal @ (point - self._point(0.0, v, w)) / (normal @ self.post.x))

    def _thickness(self) -> float:
        profile = self.post.section.profile
        return thickness_at_least(
            min(max(_LEAST_PLATE, 0.0 if self.is_tube else profile.thickness), _MOST_PLATE)
        )

    def _clear(self) -> float:
        """Half of what is flat along the post's depth: the web between the fillets, the cap of a tube."""
        profile = self.post.section.profile
        if isinstance(profile, IShape):
            return profile.h / 2 - profile.tf - profile.r - _SIDE_ROOM
        return self.post.section.height / 2 - profile.thickness / 2 - _SIDE_ROOM

    def _upright(self) -> bool:
        """Whether the bolts stand one above the other: on a web too narrow for two side by side."""
        drill, clear = self.drill, 2 * self._clear()
        if 2 * drill.edge + drill.beside <= clear:
            return False
        if self.is_tube or 2 * drill.edge > clear:
            raise impossible(
                "connections.post_heads.size", f"two bolts find no room at the head of {self._name}",
                given=self.options.post_heads.size, allowed="smaller bolts or deeper posts",
            )  # fmt: skip
        return True

    @property
    def _name(self) -> str:
        return self.post.section.designation

    def _place(self) -> float:
        """v of the hanger's middle: under the middle of the steel above, or as near as the post reaches."""
        middle = float((self.above.origin - self.post.origin) @ self.post.z)
        most = self._clear() - self.width / 2
        v = middle if abs(middle) <= most else float(np.sign(middle)) * floor(most)
        if self._overlap(v, middle) < _LEAST_WELD:
            raise impossible(
                "frames.gables.posts", f"the head of {self._name} reaches too little under "
                f"{self.above.section.designation}",
                given=self._name, allowed="deeper posts, or wider steel above",
            )  # fmt: skip
        return v

    def _overlap(self, v: float, middle: float) -> float:
        """How much of the hanger's width lies on the flat of the steel above."""
        profile = self.above.section.profile
        half = self.above.section.width / 2 - (profile.ro if isinstance(profile, Hollow) else 0.0)
        return min(v + self.width / 2, middle + half) - max(v - self.width / 2, middle - half)

    def _lap(self) -> tuple[float, float]:
        """The side of the post that the hanger is on (+1 along its y axis), and w of its inner face there.

        It keeps away from the ends of the steel above; where an I post's web does not lie there a spacer fills
        the gap, and the fin of a tube moves along.
        """
        least = 0.0 if self.is_tube else self.post.section.profile.thickness / 2
        low, high = self._ends()
        found = []
        for side, near, far in ((1, low, high), (-1, -high, -low)):
            lap = max(least, near + _END_ROOM)
            if lap > least:
                lap = _up(lap) if self.is_tube else least + thickness_at_least(lap - least)
            if lap + self.thickness + _END_ROOM <= far:
                found.append((lap, -min(far, _FAR_ENOUGH), -side))
        most = self.post.section.width / 2 - self.thickness - _SIDE_ROOM
        if not found or min(found)[0] > most:
            raise impossible(
                "frames.gables.posts", f"the head of {self._name} finds no steel above to be held by",
                given=self._name, allowed="wider posts",
            )  # fmt: skip
        lap, _, side = min(found)
        return -side, lap

    def _ends(self) -> tuple[float, float]:
        """w at which the underside of the steel above begins and ends; no end within sight counts as infinite."""
        above = self.above
        z = above.section.height / 2 * (-1.0 if float(above.z @ self.post.x) > 0 else 1.0)
        reaches = []
        for cut, reach, at_end in ((above.start, -above.to_start, False), (above.end, above.to_end, True)):
            if abs(reach) >= FAR:
                w = float(np.copysign(np.inf, above.x @ self.post.y)) * (1 if at_end else -1)
            else:
                x = reach + float(cut.offsets(np.array([[0.0, z]]), at_end=at_end)[0])
                w = float((above.point(x, 0.0, z) - self.post.origin) @ self.post.y)
            reaches.append(w)
        return min(reaches), max(reaches)

    def _bolts(self) -> list[tuple[float, float]]:
        """(u, v) of the two bolts, the lower one last where one is above the other."""
        if self.is_tube:
            first = POST_HEAD_GAP + _STEP + self.drill.slot
        else:
            # The end of the post slopes: over the web, and over the spacer that keeps the gap too.
            slope = max(abs(a) for a, _ in self.post.cut.slopes)
            first = -_up(self.drill.edge + slope * self.lap)
        if self.upright:
            return [(first, self.v), (first - self.drill.above, self.v)]
        half = self.drill.beside / 2
        return [(first, self.v - half), (first, self.v + half)]

    def _rows_height(self) -> float:
        """Height of the plates around the bolts."""
        return 2 * self.drill.edge + (self.drill.above if self.upright else 0.0)

    # Parts

    def _hanger(self) -> Fitting:
        """A flat bar, its upper end cut along the underside of the steel above."""
        section = catalogue.section(f"FL {self.width:g}x{self.thickness:g}")
        low = min(u for u, _ in self._bolts()) - self.drill.slot
        w = self.side * (self.lap + self.thickness / 2)
        high = self._under(self.v, w)
        bar, frame = stick(
            section, self._point(low, self.v, w), self._point(high, self.v, w), self.post.z,
            end_planes=along(self.face[1]),
        )  # fmt: skip
        return Fitting("hanger", Role.FIN_PLATE, bar, frame)

    def _hanger_welds(self) -> list[Welding]:
        """Both sides of the hanger, as far as it lies on the flat of the steel above, or of both angles of a pair."""
        profile = self.above.section.profile
        wall = profile.tf if isinstance(profile, IShape) else profile.thickness
        middle = float((self.above.origin - self.post.origin) @ self.post.z)
        throat = throat_for(min(wall, self.thickness), self.above.grade)
        holding = (0, *self.others)
        length = 2 * self._overlap(self.v, middle) / len(holding)
        return [Welding(("hanger", number), throat, length) for number in holding]

    def _flat(
        self, name: str, role: Role, levels: tuple[float, float], inner: float, thickness: float
    ) -> Fitting:
        """A rectangular plate as wide as the hanger between two levels u, its inner face at ``inner``."""
        size = (self.width, levels[1] - levels[0])
        x, y = self.post.z, self.post.x
        if self.side < 0:
            size, x, y = (size[1], size[0]), y, x
        origin = self._point(sum(levels) / 2, self.v, self.side * inner)
        plate, frame = plate_at(origin, x, y, rectangle(*size), thickness)
        return Fitting(name, role, plate, frame, owner=1)

    def _spacer(self, thickness: float) -> Fitting:
        """A plate on the web that brings the hanger's place to where the steel above is."""
        levels = [u for u, _ in self._bolts()]
        around = (min(levels) - self.drill.edge, max(levels) + self.drill.edge)
        return self._flat("spacer", Role.PACK, around, self.lap - thickness, thickness)

    def _fin(self) -> Fitting:
        """A plate upright on the cap."""
        height = _fin_height(self.drill)
        return self._flat("fin", Role.FIN_PLATE, (0.0, height), self.lap - self.thickness, self.thickness)


def _up(value: float) -> float:
    return ceil(value / _STEP - 1e-9) * _STEP
