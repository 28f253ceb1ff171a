"""Joints made: what each configuration adds and cuts, laid on all the pieces that meet that way.

Glossary:
    made      a configuration with what its kind of joint gave for it
    variant   a bar of the stock together with all that the joints of a piece do to it
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.errors import DescriptionError, Fault, ModelError
from shedbim.expand.joints.contract import Bolting, Connection, Fitting, Met, Ref
from shedbim.expand.joints.seeing import Seen, see
from shedbim.expand.joints.shaping import frame_of
from shedbim.expand.joints.table import JOINTS
from shedbim.expand.joints.venting import vent_holes
from shedbim.expand.placing import Placed, as_bar
from shedbim.fasteners.holes import hole_diameter, slot_travel
from shedbim.geometry.mixing import mixed
from shedbim.geometry.placements import Placements, compose, translation
from shedbim.model.bars import Bar, bar_on_axis
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.holes import Hole, Notch, Vector
from shedbim.model.joints import At, Clamp, JointRun
from shedbim.model.marks import Stock
from shedbim.model.pressed_ends import Pressed
from shedbim.model.welds import Weld

__all__ = ["Connected", "connect"]

Integers = NDArray[np.int64]
Floats = NDArray[np.float64]

_END_WORDS = {At.START: "start", At.END: "end"}


@dataclass(frozen=True, eq=False)
class Connected:
    """Everything that is made, in place.

    Attributes:
        stock: the distinct things: bars as cut and drilled, then fittings and fasteners.
        keys, item, placement: of all pieces, members first: key, index into ``stock``, frame in the building.
        members: how many pieces are members.
        joints: one run a configuration; ``at`` by the ends of the bars of the stock.
    """

    stock: list[Stock]
    keys: list[str]
    item: Integers
    placement: Placements
    members: int
    joints: list[JointRun]


@dataclass(frozen=True, eq=False)
class _Made:
    """A configuration and what was made for it.

    Attributes:
        holes, notches, set_back, pressed: for each member what is done to it, x from its frame's origin.
        fittings: name, stock and frame in joint axes of everything it adds, fasteners last.
    """

    seen: Seen
    holes: list[tuple[Hole, ...]]
    notches: list[tuple[Notch, ...]]
    set_back: list[float]
    pressed: list[Pressed | None]
    fittings: list[tuple[str, Stock, Placements]]
    welds: tuple[Weld, ...]
    clamps: tuple[Clamp, ...]


def connect(placed: Placed, options: Connections) -> Connected:
    """Give the pieces as their joints make them, with all plates and bolts.

    Raises:
        DescriptionError: when the description leaves no room for a joint.
        ModelError: when a kind of joint breaks its contract.
    """
    watchful = frozenset(kind for kind, row in JOINTS.items() if row.sees_neighbours)
    all_round = frozenset(kind for kind, row in JOINTS.items() if row.sees_all_round)
    seen = see(placed, frozenset(JOINTS), watchful, all_round)
    made = [_made(each, placed, options) for each in seen]
    stock, item, placement = _variants(placed, made)
    keys = list(placed.keys)
    items, placements, joints = [item], [placement], []
    for each, names in zip(made, _names(made, placed.keys), strict=True):
        fittings = []
        for name, thing, frame in each.fittings:
            fittings.append(len(keys) + np.arange(len(names)))
            keys.extend(f"{joint}/{name}" for joint in names)
            items.append(np.full(len(names), len(stock)))
            placements.append(compose(translation(each.seen.points), frame))
            stock.append(thing)
        columns = np.column_stack(fittings) if fittings else np.zeros((len(each.seen.pieces), 0), np.int64)
        joints.append(
            JointRun(
                each.seen.joint.kind, each.seen.pieces, each.seen.at, each.seen.points,
                each.seen.eccentricity, columns, each.welds, each.clamps,
            )
        )  # fmt: skip
    if len(set(keys)) != len(keys):
        raise ModelError("two pieces share a key")
    return Connected(stock, keys, np.concatenate(items), np.concatenate(placements), len(placed.keys), joints)


def _made(seen: Seen, placed: Placed, options: Connections) -> _Made:
    """Work out one configuration."""
    count = seen.pieces.shape[1]
    row = JOINTS.get(seen.joint.kind)
    if row is None:
        return _Made(seen, [()] * count, [()] * count, [0.0] * count, [None] * count, [], (), ())
    try:
        return _applied(seen, row.make(seen.joint, options), options)
    except DescriptionError as error:
        where = placed.keys[int(seen.pieces[0, -1])]
        raise DescriptionError([_placed_at(fault, where) for fault in error.faults]) from None


def _placed_at(fault: Fault, where: str) -> Fault:
    """The fault with the first piece it was found at."""
    return replace(fault, message=f"{fault.message} (first at {where})")


def _applied(seen: Seen, connection: Connection, options: Connections) -> _Made:
    """Sort what a kind of joint gave into what is done to each member and what is added."""
    members = seen.joint.members
    columns: dict[Ref, int] = {i: i for i in range(len(members))}
    for name in (*(f.name for f in connection.fittings), *(b.name for b in connection.boltings)):
        if name in columns:
            raise ModelError(f"two fittings of a {seen.joint.kind.word} are named {name!r}")
        columns[name] = len(columns)
    frames: dict[Ref, Placements] = {i: met.frame for i, met in enumerate(members)}
    frames |= {fitting.name: fitting.frame for fitting in connection.fittings}
    holes: dict[Ref, list[Hole]] = {ref: [] for ref in frames}
    for bolting in connection.boltings:
        if not len(bolting.points):
            raise ModelError(f"{bolting.name} of a {seen.joint.kind.word} are none")
        for ref, drilled in _drilled(bolting, frames):
            holes[ref].append(drilled)
    for number, vented in vent_holes(seen.joint, connection).items():
        holes[number].extend(vented)
    notches: list[list[Notch]] = [[] for _ in members]
    set_back = [0.0] * len(members)
    pressed: list[Pressed | None] = [None] * len(members)
    for work in connection.works:
        holes[work.of].extend(work.holes)
        notches[work.of].extend(work.notches)
        set_back[work.of] += work.set_back
        pressed[work.of] = work.pressed or pressed[work.of]
    added = [_fitted(fitting, members, tuple(holes[fitting.name])) for fitting in connection.fittings]
    added += [_bolted(bolting, options) for bolting in connection.boltings]
    welds = tuple(
        Weld((columns[w.between[0]], columns[w.between[1]]), w.form, w.throat, w.length, w.site, w.all_round)
        for w in connection.welds
    )
    clamps = tuple(
        Clamp(
            columns[b.name],
            tuple((columns[layer.of], layer.thickness) for layer in b.layers),
            None if b.thread is None else columns[b.thread],
        )
        for b in connection.boltings
    )
    return _Made(
        seen,
        [tuple(holes[i]) for i in range(len(members))],
        [tuple(each) for each in notches],
        set_back,
        pressed,
        added,
        welds,
        clamps,
    )


def _drilled(bolting: Bolting, frames: dict[Ref, Placements]) -> Iterable[tuple[Ref, Hole]]:
    """The holes of a bolting in each of its layers, in the layer's own frame."""
    diameter = bolting.fastener.diameter
    depth = 0.0
    for layer in bolting.layers:
        turn, origin = frames[layer.of][:, :3], frames[layer.of][:, 3]
        centres = (bolting.points + bolting.axis * (depth + layer.thickness / 2) - origin) @ turn
        along = (0.0, 0.0, 0.0) if layer.along is None else _vector(layer.along @ turn)
        for centre in centres:
            yield (
                layer.of,
                Hole(
                    _vector(centre),
                    _vector(bolting.axis @ turn),
                    hole_diameter(diameter, layer.fit),
                    layer.thickness,
                    slot_travel(diameter, layer.fit),
                    along,
                ),
            )
        depth += layer.thickness


def _vector(values: Floats) -> Vector:
    x, y, z = (float(v) for v in values)
    return x, y, z


def _fitted(
    fitting: Fitting, members: Sequence[Met], holes: tuple[Hole, ...]
) -> tuple[str, Stock, Placements]:
    """A fitting with its holes as a thing of the stock."""
    owner = members[fitting.owner]
    shape = replace(fitting.shape, holes=(*fitting.shape.holes, *holes))
    thing = Stock(fitting.role, shape, fitting.grade or owner.grade, owner.finish)
    return fitting.name, thing, fitting.frame


def _bolted(bolting: Bolting, options: Connections) -> tuple[str, Stock, Placements]:
    """A bolt group as a thing of the stock: its frame's z from head to nut, its x any way square to that."""
    axis = bolting.axis
    spread = bolting.points - bolting.points[0]
    # Square washers lie along the rows of bolts: the nearest other bolt is in the same row.
    gaps = np.linalg.norm(spread, axis=1)
    near = int(np.where(gaps > 0.0, gaps, np.inf).argmin())
    across = spread[near] if near else np.eye(3)[int(np.abs(axis).argmin())]
    across = across - axis * float(across @ axis)
    frame = frame_of(bolting.points[0], across, np.cross(axis, across))
    local = spread @ frame[:, :2]
    group = BoltGroup(bolting.fastener, tuple((float(x), float(y)) for x, y in local))
    return bolting.name, Stock(bolting.role, group, bolting.fastener.grade, options.bolts.finish), frame


def _names(made: Sequence[_Made], keys: Sequence[str]) -> list[list[str]]:
    """The keys of the joints of each configuration; those that would share one are numbered along the piece."""
    names = [_joint_keys(each.seen, keys) if each.fittings else [] for each in made]
    places: dict[str, list[tuple[float, int, int]]] = {}
    for number, each in enumerate(made):
        column = min(1, each.seen.pieces.shape[1] - 1)
        if names[number] and each.seen.at[0, column] == At.ALONG:
            for row, x in enumerate(each.seen.along[:, column].tolist()):
                places.setdefault(names[number][row], []).append((x, number, row))
    for shared in places.values():
        if len(shared) > 1:
            for count, (_, number, row) in enumerate(sorted(shared), start=1):
                names[number][row] += f"/{count}"
    return names


def _joint_keys(seen: Seen, keys: Sequence[str]) -> list[str]:
    """The key of each joint of a configuration: that of the first member that is carried, and its end."""
    column = min(1, seen.pieces.shape[1] - 1)
    carried = [keys[piece] for piece in seen.pieces[:, column].tolist()]
    at = At(int(seen.at[0, column]))
    if at != At.ALONG:
        return [f"{key}/{_END_WORDS[at]}" for key in carried]
    carriers = [keys[piece] for piece in seen.pieces[:, 0].tolist()]
    return [f"{key}/at {by.split('/', 1)[0]}" for key, by in zip(carried, carriers, strict=True)]


def _variants(placed: Placed, made: Sequence[_Made]) -> tuple[list[Stock], Integers, Placements]:
    """The stock of bars as the joints leave them, which each member is, and where it lies."""
    count = len(placed.keys)
    sums = np.zeros(count, np.uint64)
    entries: list[tuple[Integers, int, int, Floats]] = []  # pieces, number in made, member, x
    for number, each in enumerate(made):
        for j in range(each.seen.pieces.shape[1]):
            if each.holes[j] or each.notches[j] or each.set_back[j] or each.pressed[j]:
                pieces, x = each.seen.pieces[:, j], each.seen.along[:, j]
                entries.append((pieces, number, j, x))
                rows = np.column_stack([np.full(len(x), number), np.full(len(x), j), np.rint(x * 1e3)])
                np.add.at(sums, pieces, mixed(rows.astype(np.int64)))
    total = mixed(np.column_stack([placed.bar, sums.view(np.int64)]))
    _, first, variant = np.unique(total, return_index=True, return_inverse=True)
    order = np.argsort(first)
    rank = np.empty_like(order)
    rank[order] = np.arange(len(order))
    first, variant = first[order], rank[variant.reshape(-1)]
    chosen = np.full(count, -1)
    chosen[first] = np.arange(len(first))
    done: list[list[tuple[_Made, int, float]]] = [[] for _ in first]
    for pieces, number, j, x in entries:
        for row in np.flatnonzero(chosen[pieces] >= 0).tolist():
            done[chosen[pieces[row]]].append((made[number], j, float(x[row])))
    stock, shifts = [], np.zeros(len(first))
    for i, piece in enumerate(first.tolist()):
        bare = placed.stock[int(placed.bar[piece])]
        bar, shifts[i] = _worked(as_bar(bare), done[i])
        stock.append(replace(bare, shape=bar))
    placement = placed.placement.copy()
    placement[:, :, 3] += placement[:, :, 0] * shifts[variant][:, None]
    return stock, variant, placement


def _worked(bar: Bar, done: Sequence[tuple[_Made, int, float]]) -> tuple[Bar, float]:
    """A bar after its joints have worked on it, and how far its frame has moved along its axis, mm."""
    ends = [0.0, 0.0]
    pressed: list[Pressed | None] = [None, None]
    for made, j, _ in done:
        if made.set_back[j]:
            ends[made.seen.joint.members[j].at] += made.set_back[j]
        if made.pressed[j]:
            pressed[made.seen.joint.members[j].at] = made.pressed[j]
    first, last = bar.axis
    cut = bar
    if ends != [0.0, 0.0]:
        cut = bar_on_axis(bar.section, last - first - ends[0] - ends[1], bar.start, bar.end)
    holes = [
        replace(hole, centre=(hole.centre[0] + x - ends[0], *hole.centre[1:]))
        for made, j, x in done
        for hole in made.holes[j]
    ]
    notches = [
        replace(notch, origin=(notch.origin[0] + x - ends[0], *notch.origin[1:]))
        for made, j, x in done
        for notch in made.notches[j]
    ]
    whole = replace(cut, holes=tuple(holes), notches=tuple(notches), pressed=(pressed[0], pressed[1]))
    return whole, ends[0]
