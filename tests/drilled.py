"""Parts with holes made for tests: walls of sections to drill, plates, fasteners, and their mirror images."""

from __future__ import annotations

from dataclasses import replace
from math import cos, pi, sin
from random import Random

import numpy as np

from shedbim.fasteners.fastener import Disc, Fastener
from shedbim.geometry.placements import apply, compose, rotation, translation
from shedbim.model.bars import SQUARE, Bar, EndCut
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.holes import Hole, Notch, Vector
from shedbim.model.plates import Plate
from shedbim.sections.profiles import Angle, Flat, Hollow, IShape, LippedZ, Pipe, Round
from shedbim.sections.section import Profile, Section

PROFILES: dict[str, Profile] = {
    "I": IShape(160.0, 92.0, 5.0, 7.4, 9.0),
    "SHS": Hollow(80.0, 80.0, 4.0, 6.0, 4.0),
    "RHS": Hollow(120.0, 60.0, 4.0, 6.0, 4.0),
    "CHS": Pipe(88.9, 5.0),
    "L": Angle(70.0, 70.0, 7.0, 9.0, 4.5),
    "L unequal": Angle(100.0, 75.0, 8.0, 10.0, 5.0),
    "Z": LippedZ(200.0, 75.0, 21.0, 2.0, 3.0),
    "FL": Flat(80.0, 12.0),
    "RD": Round(30.0),
}
SECTIONS = {name: Section(name, name, profile, "test") for name, profile in PROFILES.items()}
#: Of each section by hand: turns about the axis that leave it as it is (0 for any), and mirror axes that allow a
#: flip end for end (degrees from y).
TURNS = {"I": 2, "SHS": 4, "RHS": 2, "CHS": 0, "L": 1, "L unequal": 1, "Z": 2, "FL": 2, "RD": 0}
MIRRORS = {
    "I": (0, 90), "SHS": (0, 45, 90, 135), "RHS": (0, 90), "CHS": (0,), "L": (45,), "L unequal": (), "Z": (),
    "FL": (0, 90), "RD": (0,),
}  # fmt: skip


def walls(name: str) -> list[tuple[float, float, float, float]]:
    """Middles (y, z) of places to drill about the centroid, the angle of the drill from y, and the thickness."""
    low_y, low_z, high_y, high_z = SECTIONS[name].outline.bounds
    profile = PROFILES[name]
    t = profile.thickness
    if isinstance(profile, IShape):
        z = high_z - profile.tf / 2
        return [
            (0.0, 21.0, 0.0, t),
            *((y, side * z, pi / 2, profile.tf) for y in (-27.0, 27.0) for side in (1, -1)),
        ]
    if isinstance(profile, Hollow):
        y, z = high_y - t / 2, high_z - t / 2
        return [(y, 7.0, 0.0, t), (-y, 7.0, pi, t), (5.0, z, pi / 2, t), (5.0, -z, -pi / 2, t)]
    if isinstance(profile, Angle):
        return [(low_y + 45.0, low_z + t / 2, pi / 2, t), (low_y + t / 2, low_z + 50.0, 0.0, t)]
    if isinstance(profile, LippedZ):
        return [
            (0.0, 33.0, 0.0, t),
            (0.0, -33.0, pi, t),
            (38.0, high_z - t / 2, pi / 2, t),
            (-38.0, low_z + t / 2, pi / 2, t),
        ]
    if isinstance(profile, Pipe):
        r = (profile.d - t) / 2
        return [(r * cos(a), r * sin(a), a, t) for a in (0.0, 0.4, 2.0, 4.0)]
    return [(0.0, 0.0, 0.0, 12.0 if isinstance(profile, Flat) else 30.0)]


def drilled_hole(
    name: str, wall: int, x: float, diameter: float, slot: float = 0.0, across: bool = False
) -> Hole:
    """A hole through a wall of a section; a slot runs along the bar or across it."""
    y, z, angle, thickness = walls(name)[wall]
    axis = (0.0, cos(angle), sin(angle))
    along = (0.0, -sin(angle), cos(angle)) if across else (1.0, 0.0, 0.0)
    return Hole((x, y, z), axis, diameter, thickness, slot, along if slot else (0.0, 0.0, 0.0))


def random_bar(random: Random, name: str, holes: int, length: float = 400.0) -> Bar:
    """A bar with holes apart from each other, and now and then a slot or a notch."""
    places = random.sample(range(1, 10), holes)
    found = []
    for place in places:
        slot = random.choice([0.0, 0.0, 9.0])
        wall = random.randrange(len(walls(name)))
        x = 20.0 + place * (length - 40.0) / 10
        found.append(drilled_hole(name, wall, x, random.choice([9.0, 13.0]), slot))
    notches = ()
    if random.random() < 0.3:
        corners = ((0.0, -4.0), (25.0, -4.0), (25.0, 6.0), (0.0, 3.0))
        notches = (Notch(corners, (-1.0, 0.0, -70.0), (1.0, 0.0, 0.0), (0.0, 1.0, 0.0), 140.0),)
    return Bar(SECTIONS[name], length, SQUARE, SQUARE, tuple(found), notches)


def seen_from(bar: Bar, turn: float, flip: float | None = None) -> tuple[Bar, np.ndarray]:
    """The same steel after a turn about its axis, and before it a flip about an axis at ``flip`` from y.

    Also the motion (3, 4) that was made.
    """
    motion = rotation((1.0, 0.0, 0.0), turn)
    start, end = bar.start, bar.end
    if flip is not None:
        middle = translation((bar.length / 2, 0.0, 0.0))
        half = rotation((0.0, cos(flip), sin(flip)), pi)
        motion = compose(motion, compose(compose(middle, half), translation((-bar.length / 2, 0.0, 0.0))))
        start, end = end, start
    return replace(
        bar,
        start=_turned_cut(start, motion),
        end=_turned_cut(end, motion),
        holes=tuple(moved_hole(hole, motion) for hole in bar.holes),
        notches=tuple(
            replace(n, origin=_point(n.origin, motion), u=_way(n.u, motion), v=_way(n.v, motion))
            for n in bar.notches
        ),
    ), motion


def moved_hole(hole: Hole, motion: np.ndarray) -> Hole:
    return replace(
        hole,
        centre=_point(hole.centre, motion),
        axis=_way(hole.axis, motion),
        along=_way(hole.along, motion),
    )


def mirrored(bar: Bar) -> Bar:
    """The mirror image in the plane across its middle; of bars cut square and without notches."""
    holes = tuple(
        replace(h, centre=(bar.length - h.centre[0], *h.centre[1:]), along=(-h.along[0], *h.along[1:]))
        for h in bar.holes
    )
    return replace(bar, holes=holes)


def moved_plate(plate: Plate, angle: float, shift: tuple[float, float], turned_over: bool) -> Plate:
    """The same plate drawn elsewhere in its plane, and turned over before."""
    motion = compose(translation((*shift, 0.0)), rotation((0.0, 0.0, 1.0), angle))
    if turned_over:
        over = np.array([[1.0, 0, 0, 0], [0, -1, 0, 0], [0, 0, -1, plate.thickness]])
        motion = compose(motion, over)
    corners = apply(motion, np.column_stack([np.array(plate.corners), np.zeros(len(plate.corners))]))[:, :2]
    bulges = plate.bulges
    if turned_over:
        corners = corners[::-1]
        # The side from each corner to the next now follows the other end of it.
        bulges = tuple(np.roll(np.array(bulges)[::-1], -1).tolist()) if bulges else ()
    return replace(
        plate,
        corners=tuple((float(x), float(y)) for x, y in corners),
        bulges=bulges,
        holes=tuple(moved_hole(hole, motion) for hole in plate.holes),
    )


def plate_hole(
    x: float, y: float, diameter: float, thickness: float, slot: float = 0.0, angle: float = 0.0
) -> Hole:
    along = (cos(angle), sin(angle), 0.0) if slot else (0.0, 0.0, 0.0)
    return Hole((x, y, thickness / 2), (0.0, 0.0, 1.0), diameter, thickness, slot, along)


def bolt(diameter: float = 20.0, length: float = 60.0, grip: float = 31.0) -> Fastener:
    """A bolt with a washer under its nut; sizes of M20 whatever the diameter, as tests need no other."""
    end = grip + 3.0
    stack = (
        Disc("hexagon", 30.0, -12.5, 0.0),
        Disc("round", 20.0, 0.0, length),
        Disc("round", 37.0, grip, end, 20.0),
        Disc("hexagon", 30.0, end, end + 18.0, 20.0),
    )
    return Fastener("bolt", diameter, length, "8.8", grip, (0, 1), 1, stack)


def moved_group(
    group: BoltGroup, angle: float, shift: tuple[float, float], mirror: bool = False
) -> BoltGroup:
    points = np.array(group.points) * (1.0, -1.0 if mirror else 1.0)
    turn = np.array([[cos(angle), -sin(angle)], [sin(angle), cos(angle)]])
    return replace(group, points=tuple((float(x), float(y)) for x, y in points @ turn.T + shift))


def _turned_cut(cut: EndCut, motion: np.ndarray) -> EndCut:
    """The cut after a motion: x = x0 + g·p becomes ±(x0' + (R g)·p')."""
    slopes = np.array(cut.slopes) @ motion[1:, 1:3].T * motion[0, 0]
    return EndCut(tuple((float(a), float(b)) for a, b in slopes), cut.notched)


def _point(point: Vector, motion: np.ndarray) -> Vector:
    x, y, z = (float(v) for v in apply(motion, np.array([point]))[0])
    return x, y, z


def _way(vector: Vector, motion: np.ndarray) -> Vector:
    x, y, z = (float(v) for v in motion[:, :3] @ np.array(vector))
    return x, y, z
