"""From kits and runs to the finished Shed: parts and marks found, pieces placed, meetings resolved."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import ModelError
from shedbim.expand.kits import FIRST_LINE, HERE, NEXT_BAY, SECOND_LINE, Kit, Meeting, Run
from shedbim.geometry.placements import compose, inverse, translation
from shedbim.model.joints import At, JointKind, JointRun
from shedbim.model.marks import AssemblyTemplate, Stock, group_assemblies, group_parts
from shedbim.model.shed import Assemblies, AssemblyType, Part, Pieces

__all__ = ["Assembled", "assemble"]


@dataclass(frozen=True, eq=False)
class Assembled:
    """What the runs come to: the tables of a Shed."""

    parts: tuple[Part, ...]
    pieces: Pieces
    assembly_types: tuple[AssemblyType, ...]
    assemblies: Assemblies
    joints: tuple[JointRun, ...]


def assemble(runs: Sequence[Run]) -> Assembled:
    """Give the parts, pieces, assemblies and joints of all runs.

    Raises:
        ModelError: when two pieces share a key or a meeting names a piece that does not exist.
    """
    runs = [run for run in runs if len(run.labels)]
    members = [run.kit.all_members() for run in runs]
    stock = [Stock(m.role, m.bar, m.grade, m.finish) for each in members for m in each]
    grouping = group_parts(stock)
    starts = np.cumsum([0] + [len(each) for each in members])  # first stock entry of each run

    keys: list[str] = []
    parts, placements, turned = [], [], []
    for run, each, first in zip(runs, members, starts, strict=False):
        names = ["/" + m.name for m in each]
        keys.extend([label + name for label in run.labels for name in names])
        span = slice(first, first + len(each))
        local = compose(np.array([m.placement for m in each]).reshape(-1, 3, 4), grouping.motion[span])
        placed = compose(_moves(run)[:, None], local[None])
        parts.append(np.tile(grouping.part_of[span], len(run.labels)))
        turned.append(np.tile(grouping.flipped[span], len(run.labels)))
        placements.append(placed.reshape(-1, 3, 4))
    index = dict(zip(keys, range(len(keys)), strict=True))
    if len(index) != len(keys):
        raise ModelError("two pieces share a key")

    trees = _Trees(runs, starts)
    types = group_assemblies(trees.templates, grouping)
    assemblies, assembly = trees.place(types.type_of, types.motion, len(keys))
    pieces = Pieces(tuple(keys), np.concatenate(parts), np.concatenate(placements), assembly)
    joints = _joints(runs, [[m.name for m in each] for each in members], np.concatenate(turned), index)
    return Assembled(grouping.parts, pieces, types.types, assemblies, joints)


def _moves(run: Run) -> NDArray[np.float64]:
    """The placements (n, 3, 4) of a run's kit."""
    offsets = np.zeros((len(run.labels), 3))
    offsets[:, 1] = run.offsets
    return translation(offsets)


class _Trees:
    """The assemblies of every kit, flattened with children before parents."""

    def __init__(self, runs: Sequence[Run], starts: NDArray[np.int64]) -> None:
        self._runs = runs
        self.templates: list[AssemblyTemplate] = []
        #: for each run: (template, kit, positions of its own members in the run, parent or -1 in this list)
        self._nodes: list[list[tuple[int, Kit, NDArray[np.int64], int]]] = []
        for run, first in zip(runs, starts, strict=False):
            nodes: list[tuple[int, Kit, NDArray[np.int64], int]] = []
            self._walk(run.kit, int(first), 0, nodes)
            # Children were met first; parents come first in the tables.
            count = len(nodes)
            self._nodes.append(
                [(t, kit, at, count - 1 - up if up >= 0 else -1) for t, kit, at, up in reversed(nodes)]
            )

    def _walk(
        self, kit: Kit, first: int, position: int, nodes: list[tuple[int, Kit, NDArray[np.int64], int]]
    ) -> tuple[int, int]:
        """Add the assemblies of a kit; give its template (-1 for none) and the position after its members."""
        own = np.arange(position, position + len(kit.members))
        after = position + len(kit.members)
        children, child_nodes = [], []
        for child in kit.children:
            template, after = self._walk(child, first, after, nodes)
            if template >= 0:
                children.append((template, child.origin))
                child_nodes.append(len(nodes) - 1)
        if kit.assembly is None:
            return -1, after
        back = inverse(kit.origin)
        _, kind, made = kit.assembly
        self.templates.append(
            AssemblyTemplate(
                kind,
                made,
                tuple(
                    (first + int(i), compose(back, m.placement))
                    for i, m in zip(own, kit.members, strict=True)
                ),
                tuple((t, compose(back, origin)) for t, origin in children),
            )
        )
        for place in child_nodes:
            template, child_kit, at, _ = nodes[place]
            nodes[place] = (template, child_kit, at, len(nodes))
        nodes.append((len(self.templates) - 1, kit, own, -1))
        return len(self.templates) - 1, after

    def place(
        self, type_of: NDArray[np.int64], motion: NDArray[np.float64], count: int
    ) -> tuple[Assemblies, NDArray[np.int64]]:
        """Give the assemblies of all runs, and for each of ``count`` pieces the assembly it is in."""
        keys: list[str] = []
        kinds, placements, parents = [], [], []
        assembly = np.full(count, -1, np.int64)
        base = 0
        for run, nodes in zip(self._runs, self._nodes, strict=True):
            n, size = len(run.labels), len(run.kit.all_members())
            first = len(keys)
            for number, (template, kit, at, parent) in enumerate(nodes):
                name = kit.assembly[0] if kit.assembly else ""
                keys.extend(f"{label}/{name}" for label in run.labels)
                kinds.append(np.full(n, type_of[template]))
                placements.append(compose(_moves(run), compose(kit.origin, motion[template])))
                parents.append(np.full(n, -1) if parent < 0 else first + parent * n + np.arange(n))
                rows = base + np.arange(n)[:, None] * size + at[None, :]
                assembly[rows] = (first + number * n + np.arange(n))[:, None]
            base += n * size
        none = not keys
        table = Assemblies(
            tuple(keys),
            np.zeros(0, np.int64) if none else np.concatenate(kinds).astype(np.int64),
            np.zeros((0, 3, 4)) if none else np.concatenate(placements),
            np.zeros(0, np.int64) if none else np.concatenate(parents).astype(np.int64),
        )
        return table, assembly


def _joints(
    runs: Sequence[Run], names: Sequence[Sequence[str]], flipped: NDArray[np.bool_], index: dict[str, int]
) -> tuple[JointRun, ...]:
    """Resolve the meetings of every run; those of one kind and size become one JointRun.

    ``flipped`` tells of all pieces whether their part runs the other way.
    """
    found: dict[tuple[str, int], list[JointRun]] = {}
    base = 0
    for run, kit_names in zip(runs, names, strict=True):
        position = {name: i for i, name in enumerate(kit_names)}
        alike: dict[tuple[JointKind, tuple[int, ...]], list[Meeting]] = {}
        for meeting in run.kit.meetings:
            sought = tuple(piece.where for piece in meeting.pieces)
            alike.setdefault((meeting.kind, sought), []).append(meeting)
        for (kind, sought), meetings in alike.items():
            pieces = _resolve(run, meetings, sought, base, position, index)
            joint = _joint_run(run, kind, meetings, pieces, flipped)
            found.setdefault((kind.name, len(sought)), []).append(joint)
        base += len(run.labels) * len(kit_names)
    return tuple(_merged(group) for _, group in sorted(found.items(), key=lambda item: item[0]))


def _resolve(
    run: Run,
    meetings: Sequence[Meeting],
    sought: tuple[int, ...],
    base: int,
    position: dict[str, int],
    index: dict[str, int],
) -> NDArray[np.int64]:
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


def _joint_run(
    run: Run,
    kind: JointKind,
    meetings: Sequence[Meeting],
    pieces: NDArray[np.int64],
    flipped: NDArray[np.bool_],
) -> JointRun:
    """The joints of one kind of a run, row by row."""
    n, m, k = pieces.shape
    at = np.array([[piece.at for piece in meeting.pieces] for meeting in meetings], np.int8)
    # A joint at the start of a piece whose part runs the other way is at the part's end.
    seen = np.where((at != At.ALONG) & flipped[pieces], 1 - at, at).astype(np.int8)
    points = np.tile(np.array([meeting.point for meeting in meetings]), (n, 1, 1))
    points[:, :, 1] += run.offsets[:, None]
    eccentricity = np.tile([meeting.eccentricity for meeting in meetings], n)
    return JointRun(kind, pieces.reshape(-1, k), seen.reshape(-1, k), points.reshape(n * m, 3), eccentricity)


def _merged(group: list[JointRun]) -> JointRun:
    return replace(
        group[0],
        pieces=np.concatenate([g.pieces for g in group]),
        at=np.concatenate([g.at for g in group]),
        points=np.concatenate([g.points for g in group]),
        eccentricity=np.concatenate([g.eccentricity for g in group]),
    )
