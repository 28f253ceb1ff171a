"""Where web members land on the faces of the chords, so that their toes keep a gap for the weld.

Every web would like its axis to pass through its nodes on the chord axes. Where the footprints of two webs
on a chord face would then overlap or touch, they are moved apart along the face, as little as possible,
until the gap between their toes is the sum of their wall thicknesses (EN 1993-1-8, 7.1.2: g ≥ t1 + t2;
value also in secondary guides). What the axes then miss the chord axis by is the node's eccentricity.
"""

from __future__ import annotations

import itertools
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.sections.section import Section

__all__ = ["ChordFace", "LandedWeb", "WebAim", "axes_miss", "fits", "footprint", "land"]

Array = NDArray[np.float64]
_ROUNDS = 60
_SETTLED = 1e-9  # mm: well below the noise that marks are told apart by
_TOE = 0.01  # mm: toes nearer than asked by less than this are as asked
#: Sine of the flattest angle of a web to the level and to a chord that can still be cut and welded: 15 degrees.
_FLATTEST = 0.26


@dataclass(frozen=True)
class ChordFace:
    """One straight length of chord, from x_from to x_to: its axis z = z0 + slope * (x - x0), half its depth.

    Attributes:
        side: +1 where the webs are above the axis (bottom chord), -1 where they are below it (top chord).
    """

    x_from: float
    x_to: float
    x0: float
    z0: float
    slope: float
    half_depth: float
    side: int

    def axis(self, x: float) -> float:
        """Level of the axis at x."""
        return self.z0 + self.slope * (x - self.x0)

    @property
    def run(self) -> float:
        """Plan length of one unit along the face."""
        return float(1 / np.hypot(1.0, self.slope))

    @property
    def normal(self) -> Array:
        """Unit vector (2,) in x and z out of the face, towards the webs."""
        return np.array([-self.slope, 1.0]) * self.run * self.side

    def face(self, x: float) -> float:
        """Level of the face that webs land on at x."""
        return self.axis(x) + self.side * self.half_depth / self.run

    def face_from(self, node_x: float, direction: Array) -> float:
        """x where a line from the axis at ``node_x`` along ``direction`` (2,) comes through the face."""
        return node_x + float(direction[0]) * self.half_depth / float(self.normal @ direction)


@dataclass(frozen=True)
class WebAim:
    """A web to be placed: its section and the node x it aims at on either chord, with the face it lands on.

    ``faces`` is (bottom, top); a post at a kink of a chord has the two faces that meet there, its own length
    of chord first.
    """

    section: Section
    nodes: tuple[float, float]
    faces: tuple[ChordFace, ChordFace]
    at_kink: tuple[bool, bool]
    is_post: bool


@dataclass(frozen=True)
class LandedWeb:
    """Where a web's axis meets the chord faces: (x, z) at the bottom and at the top."""

    bottom: tuple[float, float]
    top: tuple[float, float]

    @property
    def direction(self) -> Array:
        """Unit vector (2,), bottom to top."""
        d = np.subtract(self.top, self.bottom)
        unit: Array = d / np.linalg.norm(d)
        return unit


def land(
    webs: Sequence[WebAim],
    groups: tuple[Sequence[Sequence[int]], Sequence[Sequence[int]]],
    chord_ends: tuple[tuple[float, float], tuple[float, float]],
    kink: float | None,
) -> list[LandedWeb]:
    """Give the landing of every web.

    Args:
        groups: for the bottom and for the top chord, the webs at each node, left to right.
        chord_ends: for each chord the x between which toes must stay.
        kink: x of the ridge, where chords may kink; toes of webs stay on their own side of it.
    """
    at = np.array([[w.nodes[0], w.nodes[1]] for w in webs], float)  # landing x, bottom and top
    for _ in range(_ROUNDS):
        before = at.copy()
        landed = [_landed(w, *at[i]) for i, w in enumerate(webs)]
        for chord in (0, 1):
            for group in groups[chord]:
                at[group, chord] = _spread(webs, landed, group, chord, chord_ends[chord], kink)
        if float(np.abs(at - before).max()) < _SETTLED:
            break
    return [_landed(w, *at[i]) for i, w in enumerate(webs)]


def fits(
    webs: Sequence[WebAim],
    landed: Sequence[LandedWeb],
    groups: tuple[Sequence[Sequence[int]], Sequence[Sequence[int]]],
    chord_ends: tuple[tuple[float, float], tuple[float, float]],
) -> bool:
    """Whether all webs run upwards between the chords and their toes keep clear of each other and of chord ends."""
    for web, at in zip(webs, landed, strict=True):
        to_faces = [abs(float(face.normal @ at.direction)) for face in web.faces]
        if at.direction[1] < _FLATTEST or min(to_faces) < _FLATTEST:
            return False
    for chord in (0, 1):
        toes: list[tuple[float, float, float]] = []  # left toe, right toe, wall
        for group in groups[chord]:
            for i in group:
                toes.append((*footprint(webs[i], landed[i], chord), webs[i].section.profile.thickness))
        if toes[0][0] < chord_ends[chord][0] - _TOE or toes[-1][1] > chord_ends[chord][1] + _TOE:
            return False
        runs = [webs[i].faces[chord].run for group in groups[chord] for i in group]
        for (_, right, wall_a), (left, _, wall_b), run in zip(toes, toes[1:], runs, strict=False):
            if left - right < (wall_a + wall_b) * run - _TOE:
                return False
    return True


def footprint(web: WebAim, at: LandedWeb, chord: int) -> tuple[float, float]:
    """Give x from and to of what a web covers of a chord, mm."""
    place = (at.bottom, at.top)[chord][0]
    half = _half_footprint(web, at.direction, chord)
    return place - half, place + half


def _landed(web: WebAim, x_bottom: float, x_top: float) -> LandedWeb:
    bottom, top = web.faces
    return LandedWeb((x_bottom, bottom.face(x_bottom)), (x_top, top.face(x_top)))


def _half_footprint(web: WebAim, direction: Array, chord: int) -> float:
    """Half of what a web covers of a chord, in plan, mm."""
    if web.at_kink[chord]:
        return web.section.height / 2
    face = web.faces[chord]
    return web.section.height / 2 / abs(float(face.normal @ direction)) * face.run


def _spread(
    webs: Sequence[WebAim],
    landed: Sequence[LandedWeb],
    group: Sequence[int],
    chord: int,
    ends: tuple[float, float],
    kink: float | None,
) -> list[float]:
    """The landing x of the webs of one node, in the order of the group."""
    items: list[tuple[float, float, float, float, bool]] = []  # wish, half, wall, weight, is a web
    for index in group:
        web, direction = webs[index], landed[index].direction
        face = web.faces[chord]
        wish = web.nodes[chord] if web.is_post else face.face_from(web.nodes[chord], direction)
        weight = 1e9 if web.is_post else 1.0
        items.append(
            (wish, _half_footprint(web, direction, chord), web.section.profile.thickness, weight, True)
        )
    node = webs[group[0]].nodes[chord]
    if kink is not None and abs(node - kink) < 1.0 and not any(webs[i].is_post for i in group):
        # No post stands at the ridge: keep the toes of either side off the mitre of the chord.
        place = sum(wish < kink for wish, *_ in items)
        items.insert(place, (kink, 0.0, 0.0, 1e9, False))
    run = max(webs[i].faces[chord].run for i in group)
    steps = [0.0]
    for (_, half_a, wall_a, _, _), (_, half_b, wall_b, _, _) in itertools.pairwise(items):
        steps.append(half_a + half_b + (wall_a + wall_b) * run)
    offsets = np.cumsum(steps)
    wishes = np.array([item[0] for item in items]) - offsets
    placed = _least_moves(wishes, np.array([item[3] for item in items]))
    low = ends[0] + items[0][1] - offsets[0]
    high = ends[1] - items[-1][1] - offsets[-1]
    kept = np.clip(placed, low, max(low, high)) + offsets
    return [float(x) for x, item in zip(kept, items, strict=True) if item[4]]


def _least_moves(wishes: Array, weights: Array) -> Array:
    """The ascending values nearest to the wishes by weighted least squares (pooling adjacent violators)."""
    blocks: list[list[float]] = []  # mean, weight, count
    for wish, weight in zip(wishes, weights, strict=True):
        blocks.append([float(wish), float(weight), 1.0])
        while len(blocks) > 1 and blocks[-2][0] > blocks[-1][0]:
            mean_b, weight_b, count_b = blocks.pop()
            mean_a, weight_a, count_a = blocks.pop()
            total = weight_a + weight_b
            blocks.append([(mean_a * weight_a + mean_b * weight_b) / total, total, count_a + count_b])
    return np.concatenate([np.full(int(count), mean) for mean, _, count in blocks])


def axes_miss(first: LandedWeb, second: LandedWeb, axis: Callable[[float], float]) -> float:
    """How far from a chord axis two web axes cross, mm, positive upwards; 0 where they are parallel."""
    d, e = first.direction, second.direction
    cross = float(d[0] * e[1] - d[1] * e[0])
    if abs(cross) < 1e-9:
        return 0.0
    gap = np.subtract(second.bottom, first.bottom)
    t = float(gap[0] * e[1] - gap[1] * e[0]) / cross
    x, z = np.asarray(first.bottom) + t * d
    return float(z) - axis(float(x))
