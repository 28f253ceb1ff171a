"""How far the holes of bolts are from edges and from each other, in every part that bolts pass through."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.finding import Hit
from shedbim.checks.stability.places import a_or_an
from shedbim.checks.subject import Subject
from shedbim.model.bars import Bar
from shedbim.model.holes import Hole
from shedbim.model.plates import Plate
from shedbim.model.pressed_ends import flat_corners
from shedbim.model.shed import Part
from shedbim.sections.profiles import Hollow, Pipe

__all__ = ["Distances", "distances", "drilled"]

Floats = NDArray[np.float64]

#: Arcs of outlines are followed by chords that leave them by at most this, mm.
_CHORD_ERROR = 0.01
#: Where in the thickness of a wall its edge is looked for, from its middle: toes are rounded on one side.
_IN_WALL = (-0.45, 0.0, 0.45)
#: A distance that was set out to be just enough, over the diameter.
_NOISE = 1e-6


@dataclass(frozen=True)
class Distances:
    """The worst of a part, as multiples of the diameter of the hole; infinite where there is none.

    Attributes:
        edge: least distance of a hole to an edge or an end.
        between: least distance of two holes in the same wall.
    """

    edge: float
    between: float


def drilled(subject: Subject) -> Iterator[Hit]:
    """Give the parts with a hole of a bolt too near to an edge, an end or another hole.

    Which way the force runs is not known here: holes are held apart as along the force. Notches are not looked at.
    """
    edge, edge_source = subject.criteria.limit("bolt_edge_least")
    apart, apart_source = subject.criteria.limit("bolt_pitch_least")
    for number, part in enumerate(subject.shed.parts):
        found = distances(part)
        word = a_or_an(part.role.word).lower()
        pieces = np.flatnonzero(subject.shed.pieces.part == number).tolist()
        if found.edge < edge - _NOISE:
            says = (
                f"A bolt hole of {word} is {{value}} of its diameter from an edge or end "
                "(at least {limit})."
            )
            change = "Use smaller bolts or a larger section: connections."
            yield from _hits(
                subject, "bolt-near-edge", part, pieces, says, change, found.edge, edge, edge_source
            )
        if found.between < apart - _NOISE:
            says = f"Two bolt holes of {word} are {{value}} of their diameter apart (at least {{limit}})."
            change = "Use smaller or fewer bolts: connections."
            yield from _hits(
                subject, "bolts-too-close", part, pieces, says, change, found.between, apart, apart_source
            )


def _hits(
    subject: Subject,
    code: str,
    part: Part,
    pieces: list[int],
    says: str,
    change: str,
    value: float,
    limit: float,
    source: str,
) -> Iterator[Hit]:
    for piece in pieces:
        point = subject.point(piece)
        yield Hit(code, (piece,), point, says, change, value, limit, "", source, about=part.role.word)


def distances(part: Part) -> Distances:
    """Give the worst distances of the bolt holes of a part; vents of tubes are none."""
    shape = part.shape
    if isinstance(shape, Plate):
        holes = shape.holes
        rim = shape.outline.polygons(_CHORD_ERROR)[0]
        edges = [_to_rim(rim, hole) / hole.diameter for hole in holes]
    elif isinstance(shape, Bar):
        tube = isinstance(shape.section.profile, Hollow | Pipe)
        holes = tuple(hole for hole in shape.holes if not tube or shape.bored(hole) is None)
        loops = shape.section.outline.polygons(_CHORD_ERROR) if holes else []
        edges = [_in_bar(shape, loops, hole) / hole.diameter for hole in holes]
    else:
        return Distances(np.inf, np.inf)
    return Distances(min(edges, default=np.inf), _between(holes))


def _centres(hole: Hole) -> Floats:
    """Where the drill stands: the middle of a round hole, both ends of the travel of a slot (k, 3)."""
    middle = np.array(hole.centre)
    if not hole.slot:
        return middle[None]
    run = np.array(hole.along) * hole.slot / 2
    return np.array([middle - run, middle + run])


def _to_rim(rim: Floats, hole: Hole) -> float:
    """The least distance of a hole in a plate to the plate's edge, mm."""
    points = _centres(hole)[:, :2]
    start, run = rim, np.roll(rim, -1, axis=0) - rim
    length = np.maximum((run**2).sum(axis=1), 1e-12)
    share = np.clip(((points[:, None] - start) * run).sum(axis=2) / length, 0.0, 1.0)
    nearest = start + share[..., None] * run
    return float(np.linalg.norm(points[:, None] - nearest, axis=2).min())


def _in_bar(bar: Bar, loops: list[Floats], hole: Hole) -> float:
    """The least distance of a hole in a wall of a bar to an edge of the wall and to the ends of the bar, mm."""
    axis = np.array(hole.axis)
    across = np.array([-axis[2], axis[1]])  # in the plane of the section, along the wall
    offs = [share * hole.thickness for share in _IN_WALL]
    found = []
    for centre in _centres(hole):
        if isinstance(bar.section.profile, Pipe):
            found.append(_in_flat(bar, centre))
        else:
            found += [
                max(_exit(loops, centre[1:] + off * axis[1:], sign * across) for off in offs)
                for sign in (-1.0, 1.0)
            ]
        for place, cut in zip(bar.axis, (bar.start, bar.end), strict=True):
            for a, b in cut.slopes:
                lean = a * across[0] + b * across[1]
                gap = centre[0] - (place + a * centre[1] + b * centre[2])
                found.append(abs(gap) / (1.0 + lean**2) ** 0.5)
    return float(min(found))


def _in_flat(bar: Bar, centre: Floats) -> float:
    """The distance of a hole in a flattened end of a round tube to the nearer side of the flat, mm."""
    profile = bar.section.profile
    pressed = bar.pressed[0 if centre[0] < bar.length / 2 else 1]
    if not isinstance(profile, Pipe) or pressed is None:
        return float(np.inf)
    corners = flat_corners(profile, pressed)
    wide = int(np.ptp(corners, axis=0).argmax())
    return float(min(corners[:, wide].max() - centre[1 + wide], centre[1 + wide] - corners[:, wide].min()))


def _exit(loops: list[Floats], start: Floats, direction: Floats) -> float:
    """How far a line runs inside a section from a point in its steel (2,) along a unit vector (2,), mm."""
    nearest = np.inf
    for loop in loops:
        a, b = loop - start, np.roll(loop, -1, axis=0) - start
        side_a = direction[0] * a[:, 1] - direction[1] * a[:, 0]
        side_b = direction[0] * b[:, 1] - direction[1] * b[:, 0]
        crossed = (side_a > 0) != (side_b > 0)
        share = side_a[crossed] / (side_a[crossed] - side_b[crossed])
        reach = (a[crossed] + share[:, None] * (b[crossed] - a[crossed])) @ direction
        nearest = min(nearest, float(reach[reach > 0].min(initial=np.inf)))
    return nearest


def _between(holes: tuple[Hole, ...]) -> float:
    """The least distance of two holes in the same wall over the greater of their diameters."""
    if len(holes) < 2:
        return float(np.inf)
    owner = np.concatenate([np.full(len(_centres(hole)), k) for k, hole in enumerate(holes)])
    points = np.concatenate([_centres(hole) for hole in holes])
    axis = np.array([hole.axis for hole in holes])[owner]
    size = np.array([hole.diameter for hole in holes])[owner]
    thick = np.array([hole.thickness for hole in holes])[owner]
    apart = points[:, None] - points
    off_wall = np.abs((apart * axis[:, None]).sum(axis=2))
    parallel = np.abs(axis @ axis.T) > 1 - 1e-6
    pairs = (owner[:, None] != owner) & parallel & (off_wall < np.maximum(thick[:, None], thick))
    if not pairs.any():
        return float(np.inf)
    ratio = np.linalg.norm(apart, axis=2) / np.maximum(size[:, None], size)
    return float(ratio[pairs].min())
