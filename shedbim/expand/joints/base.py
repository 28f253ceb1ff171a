"""Bases of columns and gable posts: a plate on grout, cast-in anchors, packs, and for columns stiffeners and a key.

Nothing here is designed: sizes follow rules of the trade from the section, and a designer replaces them.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import product
from math import ceil, sqrt

import numpy as np
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.description.connections.bases import AnchoredBase, BaseOptions
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.base_layout import PACK_GAP, AnchorRoom, BasePlan, base_plan, pack_places
from shedbim.expand.joints.base_stiffeners import stiffener_thickness, stiffeners
from shedbim.expand.joints.contract import Bolting, Connection, Fitting, Joint, Layer, Met, Welding, Work
from shedbim.expand.joints.shaping import plate_at
from shedbim.expand.sticks import stick
from shedbim.fasteners.anchors import anchor
from shedbim.fasteners.distances import edge, least_edge, least_pitch, wrench_pitch, wrench_wall
from shedbim.fasteners.fastener import Fastener
from shedbim.fasteners.fit import Fit
from shedbim.fasteners.holes import hole_diameter
from shedbim.fasteners.plate_stock import thickness_at_least
from shedbim.fasteners.welds import leg, throat_for
from shedbim.model.plates import rectangle
from shedbim.model.roles import Role
from shedbim.sections.profiles import IShape, Pipe
from shedbim.sections.section import Section

__all__ = ["fixed_base", "pinned_base", "post_base"]

Array = NDArray[np.float64]

#: Anchors by the greater size of the section (common practice, values from memory).
_PINNED_SIZES = ((260.0, 20.0), (450.0, 24.0), (700.0, 30.0), (float("inf"), 36.0))
_FIXED_SIZES = ((200.0, 20.0), (300.0, 24.0), (450.0, 30.0), (float("inf"), 36.0))
#: Sections larger than this have six anchors in a fixed base (common practice).
_SIX_ANCHORS = 350.0
#: Least thickness of a base plate by rule (common practice, values from memory).
_POST_PLATE, _PINNED_PLATE, _FIXED_PLATE = 15.0, 20.0, 25.0
#: Fixed bases have plates this much thicker than the flange (value from memory).
_FIXED_RATIO = 1.25
#: Embedment in anchor diameters, and the step it is rounded up to (value from memory: 16 to 20 diameters).
_EMBEDMENT, _EMBEDMENT_STEP = 20.0, 50.0
#: Rail to the top of an anchor below it: room to put on washer and nut (value from memory).
_RAIL_GAP = 10.0
#: Washer of an anchor to the weld beside it and to the edge of the plate (value from memory).
_WASHER_GAP = 2.0


def pinned_base(joint: Joint, options: Connections) -> Connection:
    """Give the base of a column with four anchors close to its axis."""
    return _Base(joint, options.bases, "connections.bases", _PINNED_PLATE, fixed=False).connection()


def fixed_base(joint: Joint, options: Connections) -> Connection:
    """Give the base of a column with anchors beyond its flanges or walls."""
    return _Base(joint, options.bases, "connections.bases", _FIXED_PLATE, fixed=True).connection()


def post_base(joint: Joint, options: Connections) -> Connection:
    """Give the base of a gable post: as a pinned one, of smaller plate."""
    return _Base(joint, options.post_bases, "connections.post_bases", _POST_PLATE, fixed=False).connection()


@dataclass(frozen=True, eq=False)
class _Box:
    """A block over the plan (a, b) of a base from ``low`` to ``high`` (3,): a, b and level."""

    low: Array
    high: Array


class _Base:
    """The steps of one base; every step reads what the steps before it set."""

    def __init__(
        self, joint: Joint, options: AnchoredBase, field: str, least_plate: float, *, fixed: bool
    ) -> None:
        self.column, self.neighbours = joint.members[0], joint.neighbours
        self.options, self.field, self.fixed = options, field, fixed
        self.section = self.column.section
        self.wall = _flange(self.section)
        self.plate = self._thickness(least_plate)
        self.throat = throat_for(min(self.section.profile.thickness, self.plate), self.column.grade)
        self.flange_throat = (
            throat_for(min(self.wall, self.plate), self.column.grade) if fixed else self.throat
        )
        self.gussets = self._gussets()
        self.anchor = self._anchor()
        self.reach = max(disc.size for disc in self.anchor.stack if disc.start < 0) / 2
        self.plan = self._plan()

    def connection(self) -> Connection:
        """Everything the base adds to its column."""
        self._clear_of_rails()
        fittings, welds = [self._base_plate()], self._column_welds()
        for more, joined in (self._stiffeners(), self._shear_key()):
            fittings += more
            welds += joined
        fittings += self._packs()
        points = np.array([self._point(a, b, self.plate) for a, b in self.plan.anchors])
        anchors = Bolting(
            "anchors",
            self.anchor,
            points,
            -self.column.into,
            (Layer("base plate", self.plate, Fit.CAST_IN),),
            Role.ANCHORS,
        )
        work = Work(0, set_back=self.plate)
        return Connection(tuple(fittings), (anchors,), tuple(welds), (work,))

    def _point(self, a: float, b: float, level: float) -> Array:
        """The point (3,) in joint axes over a place of the plan, ``level`` above the plate's underside."""
        return self.column.origin + self.column.y * a + self.column.z * b + self.column.x * level

    # Sizes

    def _thickness(self, least: float) -> float:
        """The plate's thickness: no thinner than the flange."""
        given = self.options.thickness
        if given is None:
            ratio = _FIXED_RATIO if self.fixed else 1.0
            try:
                return thickness_at_least(max(least, ratio * self.wall))
            except ValueError as error:
                raise impossible(
                    f"{self.field}.thickness", f"the base of {self._name} has no plate by rule: {error}",
                    allowed="a thickness of its own",
                ) from error  # fmt: skip
        if given < self.wall - 1e-9:
            raise impossible(
                f"{self.field}.thickness", f"the base plate is thinner than the flange or wall of {self._name}",
                given=f"{given:g} mm", allowed=f"at least {self.wall:g} mm",
            )  # fmt: skip
        return given

    @property
    def _name(self) -> str:
        return self.section.designation

    def _gussets(self) -> float:
        """Thickness of the stiffeners, 0 where there are none."""
        if not isinstance(self.options, BaseOptions) or self.options.stiffeners == "none":
            return 0.0
        thickness = stiffener_thickness(self.section)
        if not (self.fixed and thickness):
            raise impossible(
                f"{self.field}.stiffeners", "gussets stand on flat flanges or walls, beyond which a plate of a "
                "fixed base runs out",
                given="gussets", allowed="none; or frames.columns.base: fixed, with I sections, SHS or RHS",
            )  # fmt: skip
        return thickness

    def _anchor(self) -> Fastener:
        depth = max(self.section.width, self.section.height)
        sizes = _FIXED_SIZES if self.fixed else _PINNED_SIZES
        by_rule = next(size for most, size in sizes if depth <= most)
        diameter = by_rule if self.options.size is None else float(self.options.size[1:])
        by_rule = ceil(_EMBEDMENT * diameter / _EMBEDMENT_STEP) * _EMBEDMENT_STEP
        embedment = by_rule if self.options.embedment is None else self.options.embedment
        return anchor(diameter, self.options.grade, self.plate, self.options.grout, embedment)

    def _plan(self) -> BasePlan:
        """Anchors clear of steel by the wrench and the plate washer, of the edges by the hole and the washer."""
        diameter = self.anchor.diameter
        hole = hole_diameter(diameter, Fit.CAST_IN)
        # Beside a round tube it is the corner of the square washer that comes nearest.
        corner = sqrt(2.0) if isinstance(self.section.profile, Pipe) else 1.0
        room = AnchorRoom(
            clear=max(wrench_wall(diameter), self.reach * corner + leg(self.flange_throat) + _WASHER_GAP),
            edge=max(edge(diameter), least_edge(hole), self.reach + _WASHER_GAP),
            pitch=max(wrench_pitch(diameter), least_pitch(hole), 2 * self.reach + _WASHER_GAP),
        )
        by_rule = 6 if self.fixed and max(self.section.width, self.section.height) > _SIX_ANCHORS else 4
        count = by_rule if self.options.anchors is None else int(self.options.anchors)
        return base_plan(self.section, count, room, fixed=self.fixed, stiffener=self.gussets)

    # Parts

    def _base_plate(self) -> Fitting:
        plate, frame = plate_at(
            self.column.origin, self.column.y, self.column.z, rectangle(*self.plan.size), self.plate
        )
        return Fitting("base plate", Role.BASE_PLATE, plate, frame)

    def _column_welds(self) -> list[Welding]:
        """All round the column; flanges and web of a fixed I section by their own thickness."""
        profile = self.section.profile
        if not (self.fixed and isinstance(profile, IShape)):
            girth = self.section.outline.outer_perimeter
            return [Welding((0, "base plate"), self.throat, girth, all_round=True)]
        flanges, web = 4 * profile.b - 2 * profile.tw, 2 * (profile.h - 2 * profile.tf)
        return [
            Welding((0, "base plate"), self.flange_throat, flanges),
            Welding((0, "base plate"), self.throat, web),
        ]

    def _packs(self) -> list[Fitting]:
        if self.options.packs == "none":
            return []
        found = pack_places(self.plan, self.anchor.diameter, self._key_size())
        if found is None:
            raise impossible(
                f"{self.field}.packs", f"four packs find no room under the base plate of {self._name}",
                given="four", allowed="none; or fewer anchors, a smaller shear key",
            )  # fmt: skip
        side, places = found
        packs = []
        for number, (a, b) in enumerate(places, start=1):
            plate, frame = plate_at(
                self._point(a, b, -self.options.grout), self.column.y, self.column.z, rectangle(side, side),
                self.options.grout,
            )  # fmt: skip
            packs.append(Fitting(f"pack/{number}", Role.PACK, plate, frame))
        return packs

    def _stiffeners(self) -> tuple[list[Fitting], list[Welding]]:
        if not self.gussets:
            return [], []
        return stiffeners(self.column, self.plan, self.plate, self.gussets)

    def _key_size(self) -> tuple[float, float] | None:
        """Sizes of the shear key along a and b."""
        key = self.options.shear_key if isinstance(self.options, BaseOptions) else None
        return None if key is None else (key.width, key.height)

    def _shear_key(self) -> tuple[list[Fitting], list[Welding]]:
        """A short bar under the middle of the plate, turned as the column is."""
        if not isinstance(self.options, BaseOptions) or self.options.shear_key is None:
            return [], []
        key, depth = self.options.shear_key, self.options.shear_key_depth
        if depth <= self.options.grout:
            raise impossible(
                f"{self.field}.shear_key_depth", "the shear key ends in the grout", given=f"{depth:g} mm",
                allowed=f"more than the grout of {self.options.grout:g} mm",
            )  # fmt: skip
        gap = self.anchor.diameter / 2 + PACK_GAP
        inside = (key.width / 2 + PACK_GAP, key.height / 2 + PACK_GAP)
        if any(
            abs(a) < key.width / 2 + gap and abs(b) < key.height / 2 + gap for a, b in self.plan.anchors
        ) or any(half > size / 2 for half, size in zip(inside, self.plan.size, strict=True)):
            raise impossible(
                f"{self.field}.shear_key", f"no room between the anchors under {self._name}",
                given=key.designation, allowed="a smaller section",
            )  # fmt: skip
        bar, frame = stick(key, self._point(0, 0, 0), self._point(0, 0, -depth), self.column.z)
        throat = throat_for(min(key.profile.thickness, self.plate), self.column.grade)
        weld = Welding(("shear key", "base plate"), throat, key.outline.outer_perimeter, all_round=True)
        return [Fitting("shear key", Role.SHEAR_KEY, bar, frame)], [weld]

    # Neighbours

    def _clear_of_rails(self) -> None:
        """No rail runs through the plate, an anchor or a stiffener."""
        for rail in self.neighbours:
            if rail.role not in (Role.SIDE_RAIL, Role.GABLE_RAIL):
                continue
            there = self._seen(rail)
            if any((box.low < there.high).all() and (there.low < box.high).all() for box in self._boxes()):
                needed = max(float(box.high[2]) for box in self._boxes()) + rail.section.width / 2
                raise impossible(
                    "rails.base_offset", f"the lowest rail runs into the base of {self._name}",
                    allowed=f"about {ceil(needed / 10) * 10} mm or more",
                )  # fmt: skip

    def _boxes(self) -> list[_Box]:
        """The room that the base takes above its underside."""
        half = np.array(self.plan.size) / 2
        boxes = [_Box(np.array([*-half, 0.0]), np.array([*half, self.plate]))]
        stand = self.plate - min(disc.start for disc in self.anchor.stack) + _RAIL_GAP
        for a, b in self.plan.anchors:
            low = np.array([a - self.reach, b - self.reach, self.plate])
            boxes.append(_Box(low, np.array([a + self.reach, b + self.reach, stand])))
        for fitting in self._stiffeners()[0]:
            boxes.append(self._around(fitting.frame, fitting.shape.box))
        return boxes

    def _seen(self, bar: Met) -> _Box:
        """The block round a bar."""
        low_y, low_z, high_y, high_z = bar.section.outline.bounds
        return self._around(bar.frame, ((-bar.to_start, low_y, low_z), (bar.to_end, high_y, high_z)))

    def _around(self, frame: Array, box: Sequence[Sequence[float]]) -> _Box:
        """The block over the plan round a box (low, high) given in a frame."""
        corners = np.array(list(product(*zip(*box, strict=True))))
        seen = (corners @ frame[:, :3].T + frame[:, 3] - self.column.origin) @ self.column.frame[:, [1, 2, 0]]
        return _Box(seen.min(axis=0), seen.max(axis=0))


def _flange(section: Section) -> float:
    """The flange of an I, the wall of a tube."""
    profile = section.profile
    return profile.tf if isinstance(profile, IShape) else profile.thickness
