"""The outline of a gusset: what it must reach, less what it must clear, with few corners.

Plane of a gusset: ``u`` along the carrier, ``v`` off its web or face, ``n`` = u x v; lengths in mm.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from manifold3d import CrossSection, JoinType, Manifold
from numpy.typing import NDArray

from shedbim.expand.joints.contract import FAR, Connection, Met, Work
from shedbim.geometry.placements import Placements, cross
from shedbim.model.bars import bar_on_axis
from shedbim.model.joints import At
from shedbim.model.solids import solid
from shedbim.sections.section import Section

__all__ = [
    "CHORD_ERROR",
    "Plane",
    "boxed",
    "hull",
    "lane",
    "made_solids",
    "member_solid",
    "outline",
    "rectangle_at",
    "shadow",
    "width_between",
]

Array = NDArray[np.float64]
#: Corners nearer to a straight line than this are left out.
_STRAIGHT = 0.05
#: Arcs of what is cleared may be this coarse.
CHORD_ERROR = 0.2


@dataclass(frozen=True, eq=False)
class Plane:
    """The middle plane of a gusset, by a point (3,) and three unit vectors (3,), in joint axes."""

    origin: Array
    u: Array
    v: Array
    n: Array

    def seen(self, point: Array) -> Array:
        """The (u, v) of a point (3,)."""
        d = point - self.origin
        return np.array([float(d @ self.u), float(d @ self.v)])

    def along(self, direction: Array) -> Array:
        """The (u, v) of a direction (3,)."""
        return np.array([float(direction @ self.u), float(direction @ self.v)])

    def point(self, place: Array, off: float = 0.0) -> Array:
        """The point (3,) at (u, v), so far off the plane along n."""
        return self.origin + self.u * float(place[0]) + self.v * float(place[1]) + self.n * off

    @property
    def inverse(self) -> Placements:
        """The (3, 4) that carries joint axes into (u, v, n)."""
        turn = np.array([self.u, self.v, self.n])
        return np.column_stack([turn, -turn @ self.origin])


def rectangle_at(start: Array, direction: Array, length: float, half: float) -> CrossSection:
    """Give the rectangle of ``length`` from ``start`` (2,) along a unit vector (2,), ``half`` to either side."""
    side = np.array([-direction[1], direction[0]]) * half
    end = start + direction * length
    return CrossSection([np.array([start - side, end - side, end + side, start + side])])


def hull(*shapes: CrossSection) -> CrossSection:
    """Give the convex hull of all shapes."""
    return CrossSection.batch_hull(list(shapes))


def shadow(body: Manifold, plane: Plane, half: float, clear: float = 0.0) -> CrossSection:
    """Give what a solid (joint axes) takes from a plate of twice ``half`` thickness, kept ``clear`` of all round."""
    seen = body.transform(plane.inverse)
    reach = half + clear
    low, high = seen.bounding_box()[2], seen.bounding_box()[5]
    if low >= reach or high <= -reach:
        return CrossSection()
    kept = seen.trim_by_plane((0.0, 0.0, 1.0), -reach).trim_by_plane((0.0, 0.0, -1.0), -reach)
    found = kept.project()
    return found.offset(clear, JoinType.Miter) if clear else found


def boxed(area: CrossSection) -> CrossSection:
    """Give the rectangle along u and v around an area; nothing around nothing."""
    return CrossSection() if area.is_empty() else _rectangle(*area.bounds())


def lane(areas: Sequence[CrossSection]) -> CrossSection:
    """Give the strip along v that holds all areas; nothing where they are empty."""
    bounds = np.array([area.bounds() for area in areas if not area.is_empty()])
    if not len(bounds):
        return CrossSection()
    return _rectangle(float(bounds[:, 0].min()), -2 * FAR, float(bounds[:, 2].max()), 2 * FAR)


def _rectangle(low_u: float, low_v: float, high_u: float, high_v: float) -> CrossSection:
    return CrossSection([np.array([[low_u, low_v], [high_u, low_v], [high_u, high_v], [low_u, high_v]])])


def member_solid(met: Met, work: Work | None = None) -> Manifold:
    """Give the solid of a member as far as it is seen, the end that meets moved back and pressed, in joint axes."""
    set_back = 0.0 if work is None else work.set_back
    start, end = -met.to_start, met.to_end
    if met.at == At.START:
        start += set_back
    elif met.at == At.END:
        end -= set_back
    bar = bar_on_axis(met.section, max(end - start, 1.0), met.start, met.end)
    if work is not None and work.pressed is not None and work.taken < end - start:
        bar = replace(bar, pressed=(work.pressed, None) if met.at == At.START else (None, work.pressed))
    place = met.frame.copy()
    place[:, 3] += place[:, 0] * (start - bar.axis[0])
    return solid(bar, CHORD_ERROR).transform(place)


def width_between(section: Section, low: float, high: float) -> float:
    """Give how far a section reaches from its z axis between two levels of z, mm; 0 where it is not."""
    here = section.outline.rim
    there = np.roll(here, -1, axis=0)
    inside = here[(here[:, 1] >= low) & (here[:, 1] <= high), 0]
    found = [inside]
    for level in (low, high):
        crossed = (here[:, 1] - level) * (there[:, 1] - level) < 0
        a, b = here[crossed], there[crossed]
        found.append(a[:, 0] + (b[:, 0] - a[:, 0]) * (level - a[:, 1]) / (b[:, 1] - a[:, 1]))
    return float(np.abs(np.concatenate(found)).max(initial=0.0))


def made_solids(connection: Connection) -> list[Manifold]:
    """Give the solids of plates and bolts of a joint, bolts as the rounds they turn in, in joint axes."""
    found = [solid(each.shape, CHORD_ERROR).transform(each.frame) for each in connection.fittings]
    for bolting in connection.boltings:
        stack = bolting.fastener.stack
        size = max(disc.size for disc in stack) * 2 / 3**0.5
        low, high = min(disc.start for disc in stack), max(disc.end for disc in stack)
        frame = np.column_stack([_turned_to(bolting.axis), np.zeros(3)])
        one = Manifold.cylinder(high - low, size / 2, circular_segments=24).translate((0.0, 0.0, low))
        found += [one.transform(frame).translate(point.tolist()) for point in bolting.points]
    return found


def _turned_to(axis: Array) -> Array:
    """A rotation (3, 3) whose z axis is a unit vector (3,)."""
    x = np.eye(3)[int(np.abs(axis).argmin())]
    x = x - axis * float(x @ axis)
    x /= np.linalg.norm(x)
    return np.column_stack([x, cross(axis, x), axis])


def outline(
    wanted: CrossSection, taken: CrossSection, required: Sequence[CrossSection]
) -> tuple[tuple[float, float], ...] | None:
    """Give the corners of what is left of ``wanted``, anticlockwise; None where a piece of ``required`` is lost."""
    left = (wanted - taken).simplify(_STRAIGHT)
    for piece in left.decompose():
        if all((need - piece).area() < 1.0 for need in required):
            loops = piece.to_polygons()
            if len(loops) == 1:
                return tuple((float(u), float(v)) for u, v in _few(loops[0]))
    return None


def _few(loop: Array) -> Array:
    """The corners of a loop without those on a straight line between their neighbours."""
    kept = list(loop)
    k = 0
    while k < len(kept) and len(kept) > 3:
        a, b, c = kept[k - 1], kept[k], kept[(k + 1) % len(kept)]
        ac = c - a
        off = abs(ac[0] * (b - a)[1] - ac[1] * (b - a)[0]) / max(float(np.linalg.norm(ac)), 1e-9)
        if off < _STRAIGHT:
            del kept[k]
        else:
            k += 1
    return np.array(kept)
