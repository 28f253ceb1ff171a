"""What holds wherever steel is fastened: each function gives what is wrong with a Shed, nothing where all is well.

A second opinion on joints: only the finished tables are looked at, parts, placements, joints and assemblies. How a
joint was made is not asked.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from functools import lru_cache
from itertools import product

import numpy as np
from scipy.sparse import coo_array
from scipy.sparse.csgraph import connected_components

from shedbim.geometry.placements import apply, compose, inverse
from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.joints import JointKind, JointRun
from shedbim.model.plates import Plate
from shedbim.model.roles import Role, Sort
from shedbim.model.shapes import Shape
from shedbim.model.shed import Shed
from shedbim.sections.profiles import Hollow, Pipe

__all__ = [
    "FASTENING_RULES",
    "assemblies_are_welded",
    "bolts_pass_through_holes",
    "fittings_are_fastened",
    "holes_are_in_walls",
    "holes_have_bolts",
    "joints_are_closed",
    "packs_lie_under_plates",
    "pitches_and_edges_are_held",
    "tables_of_joints_are_sound",
]

#: How far a hole may lie off its bolt, and a face off its neighbour, mm. A part stands for bars up to 0.5 mm apart in
#: length, so what hangs on either end of it may be off by half of that, and so may what it meets.
NEAR = 0.6
#: Chords of arcs leave them by this, mm.
_CHORD = 0.01


@dataclass(frozen=True, eq=False)
class _Holes:
    """The holes of one part as arrays (h, ...)."""

    centre: np.ndarray
    axis: np.ndarray
    diameter: np.ndarray
    thickness: np.ndarray


@lru_cache(maxsize=4)
def _holes(shed: Shed) -> list[_Holes]:
    """Give the holes of each part."""
    found = []
    for part in shed.parts:
        holes = () if isinstance(part.shape, BoltGroup) else part.shape.holes
        found.append(
            _Holes(
                np.array([h.centre for h in holes]).reshape(-1, 3),
                np.array([h.axis for h in holes]).reshape(-1, 3),
                np.array([h.diameter for h in holes]),
                np.array([h.thickness for h in holes]),
            )
        )
    return found


def columns_of(run: JointRun) -> np.ndarray:
    """The pieces of each joint of a run, members first, then what it adds (m, k + f)."""
    return np.hstack([run.pieces, run.fittings]) if run.fittings.size else run.pieces


def tables_of_joints_are_sound(shed: Shed) -> Iterator[str]:
    """Every fitting and fastener is added by one joint, columns point somewhere, keys are unique."""
    sort = np.array([_number(part.role.sort) for part in shed.parts])[shed.pieces.part]
    added, met = np.zeros(len(shed.pieces), int), np.zeros(len(shed.pieces), int)
    for run in shed.joints:
        np.add.at(added, run.fittings.ravel(), 1)
        np.add.at(met, run.pieces.ravel(), 1)
        width = columns_of(run).shape[1]
        named = [c for w in run.welds for c in w.between]
        named += [c for clamp in run.clamps for c in (clamp.group, *(col for col, _ in clamp.layers))]
        named += [clamp.thread for clamp in run.clamps if clamp.thread is not None]
        if not set(named) <= set(range(width)):
            yield f"a {run.kind.word} names a column that it has not"
        if run.fittings.size and len(run.fittings) != len(run.pieces):
            yield f"a {run.kind.word} has fittings for other joints than it has"
    for piece in np.flatnonzero(np.where(sort == _number(Sort.MEMBER), added != 0, added + (met > 0) != 1)):
        yield f"{shed.pieces.keys[piece]} is added by {added[piece]} joints and met by {met[piece]}"
    yield from (f"key {key!r} twice" for key, n in Counter(shed.pieces.keys).items() if n > 1)


def _number(sort: Sort) -> int:
    return list(Sort).index(sort)


def joints_are_closed(shed: Shed) -> Iterator[str]:
    """Everything in a joint hangs together by its welds and bolts: each member, and each plate and bolt.

    Packs do not: they lie in the grout under base plates.
    """
    for run in shed.joints:
        if run.kind is JointKind.FREE:
            continue
        count = columns_of(run).shape[1]
        pairs = [weld.between for weld in run.welds]
        for clamp in run.clamps:
            pairs += [(clamp.group, column) for column, _ in clamp.layers]
            pairs += [(clamp.group, clamp.thread)] if clamp.thread is not None else []
        _, lot = _components(count, np.array(pairs, int).reshape(-1, 2))
        lots = len(set(lot.tolist()) - {int(lot[pack]) for pack, _ in _grouted(shed, run)})
        if lots > 1:
            keys = [shed.pieces.keys[i] for i in columns_of(run)[0].tolist()]
            yield f"{run.kind.word}: {lots} lots in {len(run.pieces)} joints, first {' + '.join(keys)}"


def _components(count: int, pairs: np.ndarray) -> tuple[int, np.ndarray]:
    """The number of lots that pairs (e, 2) join ``count`` things to, and the lot of each."""
    graph = coo_array((np.ones(len(pairs)), (pairs[:, 0], pairs[:, 1])), shape=(count, count))
    return connected_components(graph, directed=False)


@lru_cache(maxsize=2)
def _bolted(shed: Shed) -> tuple[tuple[str, ...], np.ndarray, np.ndarray]:
    """What is wrong with bolts in their holes; how often each hole of each piece has a bolt; its first row (n,)."""
    holes = _holes(shed)
    counts = np.array([len(h.diameter) for h in holes])[shed.pieces.part]
    first = np.concatenate([[0], np.cumsum(counts)])
    used = np.zeros(first[-1], int)
    wrong: list[str] = []
    for run in shed.joints:
        columns = columns_of(run)
        for clamp in run.clamps:
            groups = columns[:, clamp.group]
            for kind in np.unique(shed.pieces.part[groups]).tolist():
                group = shed.parts[kind].shape
                if not isinstance(group, BoltGroup):
                    wrong.append(f"{run.kind.word}: {shed.parts[kind].role.word} in the place of bolts")
                    continue
                rows = np.flatnonzero(shed.pieces.part[groups] == kind)
                grip = sum(thickness for _, thickness in clamp.layers)
                if abs(group.fastener.grip - grip) > 1e-6:
                    wrong.append(f"{run.kind.word}: grip {group.fastener.grip:g} of layers {grip:g} mm")
                depth = 0.0
                for column, thickness in clamp.layers:
                    layer = _Layer(columns[rows, column], groups[rows], group, depth, thickness)
                    wrong.extend(f"{run.kind.word}: {w}" for w in layer.faults(shed, holes, first, used))
                    depth += thickness
    return tuple(wrong), used, first


@dataclass(frozen=True, eq=False)
class _Layer:
    """Bolt groups (r,) of one part through one layer each (r,), from ``depth`` below the head side on."""

    pieces: np.ndarray
    groups: np.ndarray
    group: BoltGroup
    depth: float
    thickness: float

    def faults(self, shed: Shed, holes: list[_Holes], first: np.ndarray, used: np.ndarray) -> Iterator[str]:
        """Give what is wrong; ``used`` is counted up for each hole with a bolt in it."""
        kinds = shed.pieces.part[self.pieces]
        for kind in np.unique(kinds).tolist():
            rows = np.flatnonzero(kinds == kind)
            what = f"{shed.pieces.keys[self.groups[rows[0]]]} in {shed.pieces.keys[self.pieces[rows[0]]]}"
            drilled = holes[kind]
            if not len(drilled.diameter):
                yield f"{what}: no hole"
                continue
            seen = compose(
                inverse(shed.pieces.placement[self.pieces[rows]]),
                shed.pieces.placement[self.groups[rows]],
            )
            axis = seen[:, :, 2]
            middle = np.array([(x, y, self.depth + self.thickness / 2) for x, y in self.group.points])
            points = np.einsum("rij,kj->rki", seen[:, :, :3], middle) + seen[:, None, :, 3]
            off = drilled.centre[None, None] - points[:, :, None]  # (r, k, h, 3)
            along = np.einsum("rkhi,ri->rkh", off, axis)
            aside = np.linalg.norm(off - along[..., None] * axis[:, None, None], axis=3)
            parallel = np.abs(axis @ drilled.axis.T)[:, None] > 1 - 1e-5
            fits = (aside < NEAR) & parallel & (np.abs(along) < NEAR)
            fits &= (drilled.diameter > self.group.fastener.diameter)[None, None]
            fits &= (np.abs(drilled.thickness - self.thickness) < 1e-6)[None, None]
            found = fits.sum(axis=2)
            for row, bolt in np.argwhere(found != 1).tolist():
                near = aside[row, bolt] + np.abs(along[row, bolt])
                h = int(near.argmin())
                yield (
                    f"{shed.pieces.keys[self.groups[rows[row]]]} in {shed.pieces.keys[self.pieces[rows[row]]]}: "
                    f"{found[row, bolt]} holes for bolt {bolt}; nearest {aside[row, bolt, h]:.2f} mm aside, "
                    f"{along[row, bolt, h]:.2f} mm along, diameter {drilled.diameter[h]:g}, through "
                    f"{drilled.thickness[h]:g} of {self.thickness:g} mm"
                )
            where = np.argwhere(fits)
            np.add.at(used, first[self.pieces[rows[where[:, 0]]]] + where[:, 2], 1)


def bolts_pass_through_holes(shed: Shed) -> Iterator[str]:
    """Each bolt has one hole in each layer, on its axis, wider than it, the layers face to face from head to nut.

    The grip that a bolt was chosen for is the sum of the layers.
    """
    yield from _bolted(shed)[0]


def holes_have_bolts(shed: Shed) -> Iterator[str]:
    """Each hole of each piece has one bolt; none at all are the vents of galvanized hollow members."""
    _, used, first = _bolted(shed)
    for piece in np.unique(np.searchsorted(first, np.flatnonzero(used != 1), side="right") - 1).tolist():
        part = shed.parts[shed.pieces.part[piece]]
        here = used[first[piece] : first[piece + 1]]
        if (here > 1).any():
            yield f"{shed.pieces.keys[piece]}: {int((here > 1).sum())} holes with two bolts"
        empty = np.flatnonzero(here == 0).tolist()
        if empty and not (
            isinstance(part.shape, Bar)
            and part.finish == "galvanized"
            and isinstance(part.shape.section.profile, Hollow | Pipe)
            and all(part.shape.holes[i].slot == 0.0 for i in empty)
        ):
            yield f"{shed.pieces.keys[piece]}: {len(empty)} holes without bolts"


def holes_are_in_walls(shed: Shed) -> Iterator[str]:
    """Each hole goes square through one wall of its part: the thickness is the wall's, its middle is the hole's."""
    for part in shed.parts:
        if isinstance(part.shape, BoltGroup):
            continue
        for hole in part.shape.holes:
            centre, axis = np.array(hole.centre), np.array(hole.axis)
            if isinstance(part.shape, Plate):
                low, high = 0.0, part.shape.thickness
                square, middle = abs(axis[2]), centre[2]
            else:
                square = float(np.hypot(axis[1], axis[2]))
                walls = _walls(part.shape, centre[1:], axis[1:])
                flat = _flat(part.shape, centre[0])
                if flat is not None:
                    # Both walls of a tube's end pressed flat, their faces square to the drill.
                    walls = [(-flat - centre[1:] @ axis[1:], flat - centre[1:] @ axis[1:])]
                low, high = min(walls, key=lambda w: abs(w[0] + w[1]), default=(0.0, 0.0))
                middle = 0.0
                if not 0.0 < centre[0] < part.shape.length:
                    yield f"{part.mark}: a hole at {centre[0]:.1f} of {part.shape.length:.1f} mm"
            if square < 1 - 1e-6:
                yield f"{part.mark}: a hole aslant"
            if abs((high - low) - hole.thickness) > 0.1 or abs((high + low) / 2 - middle) > 0.1:
                yield f"{part.mark}: a hole through {hole.thickness:g} mm in a wall from {low:.2f} to {high:.2f}"


def _flat(bar: Bar, x: float) -> float | None:
    """Half the thickness of the flat that the end of a tube is pressed to at ``x``; None where it is not."""
    from_tips = zip(bar.pressed, (x, bar.length - x), strict=True)
    if any(end is not None and distance < end.flat for end, distance in from_tips):
        return bar.section.profile.thickness
    return None


def _walls(bar: Bar, centre: np.ndarray, axis: np.ndarray) -> list[tuple[float, float]]:
    """From where to where a line through the section in a point (2,) is in steel, along the line from there, mm."""
    normal = np.array([-axis[1], axis[0]])
    crossings = []
    for loop in bar.section.outline.polygons(_CHORD):
        # A little off the line, so that it does not run through corners.
        beside = (loop - centre) @ normal - 1e-7
        after, along = np.roll(beside, -1), (loop - centre) @ axis
        there = np.roll(along, -1)
        cut = (beside > 0) != (after > 0)
        share = beside[cut] / (beside[cut] - after[cut])
        crossings.extend((along[cut] + share * (there[cut] - along[cut])).tolist())
    crossings.sort()
    return list(zip(crossings[::2], crossings[1::2], strict=True))


def fittings_are_fastened(shed: Shed) -> Iterator[str]:
    """Each plate, cleat and stay is welded or bolted to something, or lies in grout; bolt groups clamp something."""
    held = np.zeros(len(shed.pieces), bool)
    for run in shed.joints:
        named = {column for weld in run.welds for column in weld.between}
        for clamp in run.clamps:
            named |= {clamp.group, *(column for column, _ in clamp.layers)}
        held[columns_of(run)[:, sorted(named)]] = True
    needs = np.array(
        [part.role.sort is not Sort.MEMBER and part.role is not Role.PACK for part in shed.parts]
    )
    for piece in np.flatnonzero(~held & needs[shed.pieces.part]).tolist():
        yield f"{shed.pieces.keys[piece]} is fastened to nothing"


def packs_lie_under_plates(shed: Shed) -> Iterator[str]:
    """A pack, which nothing holds, lies against the underside of the base plate of its joint, within its sides."""
    for run in shed.joints:
        columns = columns_of(run)
        for pack, plate in _grouted(shed, run):
            for piece, above in columns[:, [pack, plate]].tolist():
                (x0, y0, z0), (x1, y1, z1) = _placed_box(shed, piece)
                (u0, v0, w0), (u1, v1, _) = _placed_box(shed, above)
                if abs(z1 - w0) > 1e-6 or z0 > z1 or min(x0 - u0, y0 - v0, u1 - x1, v1 - y1) < 0.0:
                    yield f"{shed.pieces.keys[piece]} is not under {shed.pieces.keys[above]}"


def _grouted(shed: Shed, run: JointRun) -> list[tuple[int, int]]:
    """The columns of the packs of column bases, each with that of the base plate above it."""
    roles = [shed.parts[i].role for i in shed.pieces.part[columns_of(run)[0]].tolist()]
    if Role.BASE_PLATE not in roles:
        return []
    return [(c, roles.index(Role.BASE_PLATE)) for c, role in enumerate(roles) if role is Role.PACK]


def _placed_box(shed: Shed, piece: int) -> tuple[tuple[float, ...], tuple[float, ...]]:
    """The box of a piece along the building's axes."""
    corners = np.array(list(product(*zip(*shed.parts[shed.pieces.part[piece]].shape.box, strict=True))))
    placed = apply(shed.pieces.placement[piece], corners)
    return tuple(placed.min(axis=0)), tuple(placed.max(axis=0))


def assemblies_are_welded(shed: Shed) -> Iterator[str]:
    """Each shop assembly hangs together by shop welds, and no shop weld joins two assemblies."""
    groups, owner = shed.assemblies, shed.pieces.assembly
    pairs = [np.zeros((0, 2), int)]
    for run in shed.joints:
        columns = columns_of(run)
        pairs.extend(columns[:, list(weld.between)] for weld in run.welds if not weld.site)
    welded = np.concatenate(pairs)
    apart = (owner[welded[:, 0]] != owner[welded[:, 1]]) | (owner[welded[:, 0]] < 0)
    for one, other in welded[apart].tolist():
        yield f"{shed.pieces.keys[one]} is welded to {shed.pieces.keys[other]} and goes apart from it"
    _, lot = _components(len(shed.pieces), welded)
    shop = np.array([kind.made == "shop" for kind in shed.assembly_types])[groups.type]
    inside = np.flatnonzero((owner >= 0) & shop[owner])
    lots = Counter(group for group, _ in set(zip(owner[inside].tolist(), lot[inside].tolist(), strict=True)))
    for group in np.flatnonzero(shop).tolist():
        if lots[group] != 1:
            yield f"{groups.keys[group]} is {lots[group]} lots"
        if (groups.parent == group).any():
            yield f"{groups.keys[group]} leaves the shop as one and holds another"


def pitches_and_edges_are_held(shed: Shed) -> Iterator[str]:
    """EN 1993-1-8, Table 3.3: holes 1.2 d0 from an edge (slots 1.5 d0), 2.2 d0 from one another.

    Of bars the distance from the ends is looked at, and where two holes are in one wall.
    """
    for part in shed.parts:
        shape = part.shape
        if isinstance(shape, BoltGroup):
            continue
        what = f"{part.mark}, {part.role.word}"
        edges = _edge_distances(shape)
        for hole, edge in zip(shape.holes, edges, strict=True):
            least = (1.5 if hole.slot else 1.2) * hole.diameter
            if edge < least - 1e-6:
                yield f"{what}: a hole of {hole.diameter:g} {edge:.1f} mm from an edge, at least {least:.1f}"
        centres = np.array([hole.centre for hole in shape.holes]).reshape(-1, 3)
        for i, hole in enumerate(shape.holes):
            for j in range(i):
                other = shape.holes[j]
                if abs(float(np.dot(hole.axis, other.axis))) < 0.99:
                    continue
                between = centres[i] - centres[j]
                if abs(float(between @ hole.axis)) > max(hole.thickness, other.thickness) / 2:
                    continue  # in two walls
                pitch, least = float(np.linalg.norm(between)), 2.2 * max(hole.diameter, other.diameter)
                if pitch < least - 1e-6:
                    yield f"{what}: holes of {hole.diameter:g} {pitch:.1f} mm apart, at least {least:.1f}"


def _edge_distances(shape: Shape) -> list[float]:
    """How far the middle of each hole, or the nearer end of a slot's middle line, is from an edge, mm."""
    found = []
    for hole in shape.holes:
        ends = [np.array(hole.centre) + np.array(hole.along) * hole.slot / 2 * side for side in (-1, 1)]
        if isinstance(shape, Plate):
            (outer, *_) = Plate(shape.corners, shape.thickness, (), shape.bulges).outline.polygons(_CHORD)
            found.append(min(_to_polygon(outer, end[:2]) for end in ends))
        elif isinstance(shape.section.profile, Hollow | Pipe):
            found.append(np.inf)  # vents stand at their ends
        else:
            found.append(float(min(min(end[0], shape.length - end[0]) for end in ends)))
    return found


def _to_polygon(polygon: np.ndarray, point: np.ndarray) -> float:
    """The distance of a point to the sides of a polygon (n, 2), negative where it lies outside."""
    start, run = polygon, np.roll(polygon, -1, axis=0) - polygon
    share = np.clip(((point - start) * run).sum(axis=1) / (run**2).sum(axis=1), 0.0, 1.0)
    distance = float(np.linalg.norm(start + share[:, None] * run - point, axis=1).min())
    upper = start[:, 1] > point[1]
    crossed = upper != np.roll(upper, -1)
    x = start[crossed, 0] + (point[1] - start[crossed, 1]) / run[crossed, 1] * run[crossed, 0]
    return distance if (x > point[0]).sum() % 2 else -distance


FASTENING_RULES: tuple[Callable[[Shed], Iterator[str]], ...] = (
    tables_of_joints_are_sound,
    joints_are_closed,
    holes_are_in_walls,
    bolts_pass_through_holes,
    holes_have_bolts,
    fittings_are_fastened,
    packs_lie_under_plates,
    assemblies_are_welded,
    pitches_and_edges_are_held,
)
