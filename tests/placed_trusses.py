"""Trusses read back from the joints and pieces of a shed, and solved as pin-jointed."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from invariants import Bars
from pin_jointed import Forces, solve

from shedbim.model.joints import JointKind
from shedbim.model.roles import Role
from shedbim.model.shed import Shed

__all__ = ["Node", "Placed", "placed_trusses", "solved"]

_CHORDS = (Role.BOTTOM_CHORD, Role.TOP_CHORD)


@dataclass(frozen=True)
class Node:
    """A node of a placed truss: its place in the frame's plane, the chord's role, the webs that land there."""

    place: tuple[float, float]
    chord: Role
    webs: tuple[int, ...]


@dataclass(frozen=True)
class Placed:
    """One truss: its nodes from left to right, its chord pieces from left to right, its webs."""

    name: str
    nodes: tuple[Node, ...]
    chords: dict[Role, tuple[int, ...]]
    webs: tuple[int, ...]


def placed_trusses(shed: Shed) -> tuple[Placed, ...]:
    """Give one truss of each type."""
    bars = Bars(shed)
    at: dict[int, list[Node]] = {}
    for run in shed.joints:
        if run.kind is JointKind.NODE:
            for row, point in zip(run.pieces.tolist(), run.points.tolist(), strict=True):
                node = Node((point[0], point[2]), bars.role[row[0]], tuple(row[1:]))
                at.setdefault(int(shed.pieces.assembly[row[0]]), []).append(node)
    found: dict[int, Placed] = {}
    for group, nodes in at.items():
        kind = int(shed.assemblies.type[group])
        if kind not in found:
            inside = np.flatnonzero(shed.pieces.assembly == group).tolist()
            inside.sort(key=lambda i: bars.ends[i].mean(axis=0)[0])
            found[kind] = Placed(
                shed.assemblies.keys[group],
                tuple(sorted(nodes, key=lambda node: node.place[0])),
                {role: tuple(i for i in inside if bars.role[i] is role) for role in _CHORDS},
                tuple(i for i in inside if bars.role[i] in (Role.DIAGONAL, Role.POST)),
            )
    return tuple(found.values())


def solved(truss: Placed) -> tuple[Forces, dict[int, tuple]]:
    """The truss held at the ends of its bottom chord, under 1 N/mm of plan length on the top nodes, in N.

    Nodes are named by the word of their chord and their number; with the forces comes the bar of each web.
    """
    rows = {role: [n for n in truss.nodes if n.chord is role] for role in _CHORDS}
    places = {(node.chord.word, i): node.place for row in rows.values() for i, node in enumerate(row)}
    ends: dict[int, list] = {}
    for row in rows.values():
        for i, node in enumerate(row):
            for web in node.webs:
                ends.setdefault(web, []).append((node.chord.word, i))
    bars = [
        pair for row in rows.values() for pair in pairwise([(n.chord.word, i) for i, n in enumerate(row)])
    ]
    webs = {web: tuple(pair) for web, pair in ends.items()}
    x = np.array([node.place[0] for node in rows[Role.TOP_CHORD]])
    edges = np.concatenate([[truss.nodes[0].place[0]], (x[1:] + x[:-1]) / 2, [truss.nodes[-1].place[0]]])
    loads = {(Role.TOP_CHORD.word, i): (0.0, -float(w)) for i, w in enumerate(np.diff(edges))}
    word = Role.BOTTOM_CHORD.word
    first, last = (word, 0), (word, len(rows[Role.BOTTOM_CHORD]) - 1)
    forces = solve(places, [*bars, *webs.values()], loads, [(first, "x"), (first, "y"), (last, "y")])
    return forces, webs
