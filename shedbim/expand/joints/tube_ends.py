"""The ways a tube ends to be bolted beside a plate.

Forms:
    capped     a cap plate closes the tube, a fin is welded to the middle of the cap
    slotted    the fin sits in a slot of the tube's end, welded along all four edges of the slot
    flattened  the tube itself is pressed flat and drilled (see ``flattened``)
"""

from __future__ import annotations

from dataclasses import dataclass
from math import ceil, hypot

import numpy as np
from numpy.typing import NDArray

from shedbim.expand.joints.bolt_lines import BoltLine
from shedbim.expand.joints.contract import Fitting, Met, Welding, Work
from shedbim.expand.joints.flattened import Flat
from shedbim.expand.joints.shaping import frame_of, plate_at
from shedbim.fasteners.welds import throat_for
from shedbim.geometry.placements import cross
from shedbim.model.holes import Notch, Vector
from shedbim.model.plates import Plate
from shedbim.model.roles import Role
from shedbim.sections.profiles import Pipe
from shedbim.sections.section import Section

__all__ = ["AIR", "Lap", "TubeEnd", "slot_depth", "tube_end"]

Array = NDArray[np.float64]

#: Between the end of a plate and the cap or tube it runs up to, mm (common practice: 10 mm).
AIR = 10.0
#: A fin stands out of a slotted tube by this on both sides: room for its welds (value from memory).
_LEDGE = 8.0
#: A slot is wider than its fin by this, and so much longer than the fin goes in (common practice).
_SLOT_PLAY, _SLOT_END = 0.8, 5.0
#: From a fin to the edge of its cap: room for its weld.
_CAP_EDGE = 8.0
#: How far a fin goes into a slot: this share of the tube's size, and least, mm (values from memory).
_DEPTH_SHARE, _LEAST_DEPTH, _STEP = 1.2, 80.0, 10.0


@dataclass(frozen=True, eq=False)
class Lap:
    """Where a fin lies on the plate beside it, in joint axes.

    Attributes:
        tip: the end (3,) of the fin on the tube's axis.
        along: unit vector (3,) from there along the tube's axis, into the tube.
        aside: unit vector (3,) in the plane of the fin.
        line: the bolts, along the axis.
        shift: how far the fin's middle lies off the tube's axis along ``normal``, mm.
    """

    tip: Array
    along: Array
    aside: Array
    line: BoltLine
    shift: float = 0.0

    @property
    def normal(self) -> Array:
        """Unit vector (3,) square to the fin."""
        return cross(self.along, self.aside)

    def point(self, along: float, aside: float = 0.0, off: float = 0.0) -> Array:
        """The point (3,) so far along the axis from the tip, aside in the fin's plane and off the tube's axis."""
        return self.tip + self.along * along + self.aside * aside + self.normal * off


@dataclass(frozen=True, eq=False)
class TubeEnd:
    """An end of a tube: its plates and welds, and what is done to the tube. The fin is named ``fin``.

    An end that is pressed flat has neither.
    """

    fittings: tuple[Fitting, ...]
    welds: tuple[Welding, ...]
    work: Work


def tube_end(
    tube: Met,
    number: int,
    lap: Lap,
    thickness: float,
    form: str,
    cap: float,
    suffix: str = "",
    flat: Flat | None = None,
) -> TubeEnd:
    """Give the end of a tube that is member ``number`` of its joint.

    Args:
        thickness: of the fin, mm.
        form: ``capped`` or ``slotted``; a fin beside the middle of its tube stands on a cap in any case.
            ``flattened`` counts as ``slotted`` where the joint gives no flat: in the crossing of two tubes.
        cap: thickness of the cap plate, mm.
        suffix: of the names of its plates, where a joint has several ends.
        flat: what the end is pressed to, where it is.
    """
    if flat is not None:
        work = Work(number, _set_back(tube, lap, 0.0), pressed=flat.pressed(tube, lap.normal))
        return TubeEnd((), (), work)
    make = _capped if form == "capped" or lap.shift != 0.0 else _slotted
    return make(tube, number, lap, thickness, cap, suffix)


def _set_back(tube: Met, lap: Lap, start: float) -> float:
    """How far the tube's end moves so that it stands ``start`` beyond the tip of the fin."""
    return start + float((lap.tip - tube.origin) @ lap.along)


def _fin(
    lap: Lap, corners: tuple[tuple[float, float], ...], thickness: float, number: int, suffix: str
) -> Fitting:
    plate, frame = plate_at(
        lap.point(0.0, 0.0, lap.shift), lap.along, lap.aside, corners, thickness, below=thickness / 2
    )
    return Fitting(f"fin{suffix}", Role.FIN_PLATE, plate, frame, owner=number)


def _capped(tube: Met, number: int, lap: Lap, thickness: float, cap: float, suffix: str) -> TubeEnd:
    length, half = lap.line.lap + AIR, lap.line.side
    fin = _fin(lap, ((0.0, -half), (length, -half), (length, half), (0.0, half)), thickness, number, suffix)
    plate, frame = _cap(tube, lap, thickness, cap, length)
    name = f"cap{suffix}"
    throat = throat_for(min(cap, tube.section.profile.thickness), tube.grade)
    welds = (
        Welding((fin.name, name), throat_for(min(cap, thickness), tube.grade), 4 * half),
        Welding((name, number), throat, tube.section.outline.outer_perimeter, all_round=True),
    )
    fitting = Fitting(name, Role.CAP_PLATE, plate, frame, owner=number)
    return TubeEnd((fin, fitting), welds, Work(number, _set_back(tube, lap, length + cap)))


def _cap(tube: Met, lap: Lap, thickness: float, cap: float, at: float) -> tuple[Plate, Array]:
    """The cap: within the tube's faces, half a wall less so that the wall carries the weld.

    A fin beside the middle of a slim tube needs a cap that stands out on that side. In the plate's frame x runs
    along the fin's normal, y along ``aside``: x cross y is against the tube's axis.
    """
    section = tube.section
    inset = section.profile.thickness / 2
    aside = abs(float(tube.z @ lap.aside)) * section.height + abs(float(tube.y @ lap.aside)) * section.width
    across = (
        abs(float(tube.z @ lap.normal)) * section.height + abs(float(tube.y @ lap.normal)) * section.width
    )
    x, y = across / 2 - inset, aside / 2 - inset
    if isinstance(section.profile, Pipe):
        x = y = section.profile.d / 2 - inset
    reach = abs(lap.shift) + thickness / 2 + _CAP_EDGE
    frame = frame_of(lap.point(at + cap), lap.normal, lap.aside)
    if isinstance(section.profile, Pipe) and hypot(abs(lap.shift) + thickness / 2, lap.line.side) <= x:
        return Plate(((x, 0.0), (-x, 0.0)), cap, bulges=(1.0, 1.0)), frame
    low, high = (max(x, reach) if lap.shift * side > 0 else x for side in (-1, 1))
    y = max(y, lap.line.side)
    return Plate(((-low, -y), (high, -y), (high, y), (-low, y)), cap), frame


def slot_depth(section: Section) -> float:
    """Give how far a fin goes into the slot of a tube, mm."""
    return ceil(max(_DEPTH_SHARE * section.height, _LEAST_DEPTH) / _STEP) * _STEP


def _slotted(tube: Met, number: int, lap: Lap, thickness: float, _: float, suffix: str) -> TubeEnd:
    start, half = lap.line.lap + AIR, lap.line.side
    depth = slot_depth(tube.section)
    wide = ceil(tube.section.height / 2 + _LEDGE)
    taper = min(AIR, wide - half)
    corners = (
        (0.0, -half), (start - AIR, -half), (start - AIR + taper, -wide), (start + depth, -wide),
        (start + depth, wide), (start - AIR + taper, wide), (start - AIR, half), (0.0, half),
    )  # fmt: skip
    fin = _fin(lap, corners, thickness, number, suffix)
    width = thickness + _SLOT_PLAY
    reach = tube.section.height / 2 + 1.0
    turn = tube.frame[:, :3].T
    # The slot begins a little outside the steel and runs along ``aside``, which is along x -normal.
    low, high = (0.0, depth + _SLOT_END + 1.0)
    outline = ((low, -width / 2), (high, -width / 2), (high, width / 2), (low, width / 2))
    origin = tube.local(lap.point(start - 1.0, -reach))
    notch = Notch(outline, _vector(origin), _vector(turn @ lap.along), _vector(turn @ -lap.normal), 2 * reach)
    throat = throat_for(min(thickness, tube.section.profile.thickness), tube.grade)
    weld = Welding((fin.name, number), throat, 4 * depth)
    return TubeEnd((fin,), (weld,), Work(number, _set_back(tube, lap, start), notches=(notch,)))


def _vector(values: Array) -> Vector:
    x, y, z = (float(v) for v in values)
    return x, y, z
