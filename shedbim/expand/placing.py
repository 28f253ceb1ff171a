"""From kits and runs to tables: every bar once, every piece placed, every meeting resolved."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import ModelError
from shedbim.expand.kits import FIRST_LINE, HERE, NEXT_BAY, SECOND_LINE, Kit, Meeting, Run
from shedbim.geometry.placements import Placements, compose, translation
from shedbim.model.bars import Bar
from shedbim.model.joints import JointKind
from shedbim.model.marks import Stock

__all__ = ["Placed", "RawJoints", "as_bar", "place"]

Integers = NDArray[np.int64]


@dataclass(frozen=True, eq=False)
class RawJoints:
    """Joints of one kind and size as the kits say them: see ``JointRun``; ``at`` is by the bars' own ends."""

    kind: JointKind
    pieces: Integers
    at: NDArray[np.int8]
    points: NDArray[np.float64]
    eccentricity: NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Placed:
    """All bars in place, before they are joined.

    Attributes:
        stock: the bars of all kits, s of them.
        keys: of the n pieces.
        bar: (n,) int, index into ``stock``.
        placement: (n, 3, 4) float, of the bar's own frame in building axes.
        group: (n,) int, index into ``groups``: what the kit puts the piece into; -1 for none.
        groups: key, kind and place of making of each assembly the kits name, in the order of its pieces.
        parent: for each group the one it stands in, or -1.
        joints: all meetings.
    """

    stock: list[Stock]
    keys: list[str]
    bar: Integers
    placement: Placements
    group: Integers
    groups: list[tuple[str, str, str]]
    parent: list[int]
    joints: list[RawJoints]


def as_bar(thing: Stock) -> Bar:
    """Give the shape of a thing of the kits, where all are bars."""
    if not isinstance(thing.shape, Bar):
        raise ModelError(f"a {thing.role.word} of a kit is not a bar")
    return thing.shape


def place(runs: Sequence[Run]) -> Placed:
    """Give the pieces and joints of all runs.

    Raises:
        ModelError: when two pieces share a key or a meeting names a piece that does not exist.
    """
    runs = [run for run in runs if len(run.labels)]
    members = [run.kit.all_members() for run in runs]
    stock = [Stock(m.role, m.bar, m.grade, m.finish) for each in members for m in each]
    keys: list[str] = []
    bars, placements, owners = [], [], []
    groups: list[tuple[str, str, str]] = []
    parent: list[int] = []
    first = 0
    for run, each in zip(runs, members, strict=True):
        keys.extend([f"{label}/{m.name}" for label in run.labels for m in each])
        local = np.array([m.placement for m in each]).reshape(-1, 3, 4)
        placed = compose(_moves(run)[:, None], local[None])
        bars.append(np.tile(first + np.arange(len(each)), len(run.labels)))
        placements.append(placed.reshape(-1, 3, 4))
        owners.append(_groups(run, len(each), groups, parent))
        first += len(each)
    index = dict(zip(keys, range(len(keys)), strict=True))
    if len(index) != len(keys):
        raise ModelError("two pieces share a key")
    return Placed(
        stock,
        keys,
        np.concatenate(bars),
        np.concatenate(placements),
        np.concatenate(owners),
        groups,
        parent,
        _joints(runs, [[m.name for m in each] for each in members], index),
    )


def _moves(run: Run) -> Placements:
    """The placements (n, 3, 4) of a run's kit."""
    offsets = np.zeros((len(run.labels), 3))
    offsets[:, 1] = run.offsets
    return translation(offsets)


def _groups(run: Run, size: int, groups: list[tuple[str, str, str]], parent: list[int]) -> Integers:
    """The group of every piece of a run (n * size,); new groups are added to the lists."""
    own = np.full(size, -1)
    named: list[tuple[str, str, str]] = []
    above: list[int] = []

    def walk(kit: Kit, position: int, up: int) -> int:
        here = up
        if kit.assembly is not None:
            named.append(kit.assembly)
            above.append(up)
            here = len(named) - 1
        own[position : position + len(kit.members)] = here
        position += len(kit.members)
        for child in kit.children:
            position = walk(child, position, here)
        return position

    walk(run.kit, 0, -1)
    base, count = len(groups), len(named)
    for number, label in enumerate(run.labels):
        groups.extend((f"{label}/{name}", kind, made) for name, kind, made in named)
        parent.extend(-1 if up < 0 else base + number * count + up for up in above)
    shift = base + np.arange(len(run.labels))[:, None] * count
    placed: Integers = np.where(own < 0, -1, own + shift).reshape(-1)
    return placed


def _joints(runs: Sequence[Run], names: Sequence[Sequence[str]], index: dict[str, int]) -> list[RawJoints]:
    """Resolve the meetings of every run; those of one kind and size become one table."""
    found: dict[tuple[str, int], list[RawJoints]] = {}
    base = 0
    for run, kit_names in zip(runs, names, strict=True):
        position = {name: i for i, name in enumerate(kit_names)}
        alike: dict[tuple[JointKind, tuple[int, ...]], list[Meeting]] = {}
        for meeting in run.kit.meetings:
            sought = tuple(piece.where for piece in meeting.pieces)
            alike.setdefault((meeting.kind, sought), []).append(meeting)
        for (kind, sought), meetings in alike.items():
            pieces = _resolve(run, meetings, sought, base, position, index)
            found.setdefault((kind.name, len(sought)), []).append(_raw(run, kind, meetings, pieces))
        base += len(run.labels) * len(kit_names)
    return [_merged(group) for _, group in sorted(found.items(), key=lambda item: item[0])]


def _resolve(
    run: Run,
    meetings: Sequence[Meeting],
    sought: tuple[int, ...],
    base: int,
    position: dict[str, int],
    index: dict[str, int],
) -> Integers:
    """The pieces (n, m, k) of m meetings that look for their k pieces in the same places, placed n times.

    Raises:
        ModelError: when a meeting names a piece that does not exist.
    """
    n = len(run.labels)
    beside = {FIRST_LINE: run.first_lines, SECOND_LINE: run.second_lines, NEXT_BAY: run.next_bays}
    pieces = np.empty((n, len(meetings), len(sought)), np.int64)
    for column, where in enumerate(sought):
        named = [meeting.pieces[column].name for meeting in meetings]
        if where == HERE:
            places = np.array([position[name] for name in named])
            pieces[:, :, column] = base + np.arange(n)[:, None] * len(position) + places
            continue
        labels = beside[where]
        try:
            pieces[:, :, column] = [[index[f"{label}/{name}"] for name in named] for label in labels]
        except (KeyError, ValueError) as missing:
            raise ModelError(f"a {meetings[0].kind.word} names what does not exist: {missing}") from missing
    return pieces


def _raw(run: Run, kind: JointKind, meetings: Sequence[Meeting], pieces: Integers) -> RawJoints:
    """The joints of one kind of a run, row by row."""
    n, m, k = pieces.shape
    at = np.array([[piece.at for piece in meeting.pieces] for meeting in meetings], np.int8)
    points = np.tile(np.array([meeting.point for meeting in meetings]), (n, 1, 1))
    points[:, :, 1] += run.offsets[:, None]
    eccentricity = np.tile([meeting.eccentricity for meeting in meetings], n)
    return RawJoints(kind, pieces.reshape(-1, k), np.tile(at, (n, 1)), points.reshape(n * m, 3), eccentricity)


def _merged(group: Sequence[RawJoints]) -> RawJoints:
    return RawJoints(
        group[0].kind,
        np.concatenate([g.pieces for g in group]),
        np.concatenate([g.at for g in group]),
        np.concatenate([g.points for g in group]),
        np.concatenate([g.eccentricity for g in group]),
    )
