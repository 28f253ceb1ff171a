"""Trusses read back from the joints and pieces of a shed, and solved as pin-jointed."""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import pairwise

import numpy as np
from invariants import Bars
from pin_jointed import Forces, solve

from shedbim.model.joints import JointKind
from shedbim.model.roles import Role
from shedbim.model.shed import Shed

__all__ = ["Node", "Placed", "placed_trusses", "solved"]

_CHORDS = (Role.BOTTOM_CHORD, Role.TOP_CHORD)
_MEMBERS = (*_CHORDS, Role.DIAGONAL, Role.POST)


@dataclass(frozen=True)
class Node:
    """A node of a placed truss: its place in the frame's plane, the chord's role, the webs that land there.

    ``bolted`` are webs that end before the chord, joined to it on site.
    """

    place: tuple[float, float]
    chord: Role
    webs: tuple[int, ...]
    bolted: tuple[int, ...] = ()


@dataclass(frozen=True)
class Placed:
    """One truss as it stands: nodes, the pieces of each chord and webs, all from left to right.

    ``ridges`` holds for each chord where two pieces of it are welded to one another in a ridge: x, left, right.
    """

    name: str
    nodes: tuple[Node, ...]
    chords: dict[Role, tuple[int, ...]]
    webs: tuple[int, ...]
    ridges: dict[Role, tuple[float, int, int]]


def placed_trusses(shed: Shed) -> tuple[Placed, ...]:
    """Give one truss of each kind: those that hold other parts; what is divided for the road is put together."""
    bars = Bars(shed)
    keys = shed.pieces.keys
    nodes: dict[tuple[str, str], list[Node]] = {}
    ridges: dict[tuple[str, str], dict[Role, tuple[float, int, int]]] = {}
    for run in shed.joints:
        for row, point in zip(run.pieces.tolist(), run.points.tolist(), strict=True):
            if run.kind is JointKind.NODE:
                node = Node((point[0], point[2]), bars.role[row[0]], tuple(row[1:]))
                nodes.setdefault(_truss_of(keys[row[0]]), []).append(node)
            elif run.kind is JointKind.CHORD_RIDGE:
                left, right = sorted(row, key=lambda i: bars.ends[i].mean(axis=0)[0])
                found = ridges.setdefault(_truss_of(keys[row[0]]), {})
                found[bars.role[row[0]]] = (point[0], left, right)
    for run in shed.joints:
        if run.kind is JointKind.WEB_SPLICE:
            for row, point in zip(run.pieces.tolist(), run.points.tolist(), strict=True):
                there = nodes.setdefault(_truss_of(keys[row[0]]), [])
                _bolt(there, Node((point[0], point[2]), bars.role[row[0]], (), (row[1],)))
    inside: dict[tuple[str, str], list[int]] = {}
    for i, key in enumerate(keys):
        if bars.role[i] in _MEMBERS:
            inside.setdefault(_truss_of(key), []).append(i)
    kinds: dict[tuple[int, ...], Placed] = {}
    for truss, pieces in inside.items():
        pieces.sort(key=lambda i: bars.ends[i].mean(axis=0)[0])
        kinds.setdefault(
            tuple(sorted(shed.pieces.part[pieces].tolist())),
            Placed(
                "/".join(truss),
                tuple(sorted(nodes[truss], key=lambda node: node.place[0])),
                {role: tuple(i for i in pieces if bars.role[i] is role) for role in _CHORDS},
                tuple(i for i in pieces if bars.role[i] in (Role.DIAGONAL, Role.POST)),
                ridges.get(truss, {}),
            ),
        )
    return tuple(kinds.values())


def _bolt(nodes: list[Node], bolted: Node) -> None:
    """Bring a node where webs are bolted together with that of the webs welded there, if there is one."""
    for number, node in enumerate(nodes):
        if node.chord is bolted.chord and abs(node.place[0] - bolted.place[0]) < 1.0:
            nodes[number] = replace(node, bolted=node.bolted + bolted.bolted)
            return
    nodes.append(bolted)


def _truss_of(key: str) -> tuple[str, str]:
    """The line and the span of a member of a truss, as its key says: line/truss/role/span/number."""
    line, _, _, span, *_ = key.split("/")
    return line, span


def solved(truss: Placed) -> tuple[Forces, dict[int, tuple]]:
    """The truss held at the ends of its bottom chord, under 1 N/mm of plan length on the top nodes, in N.

    Nodes are named by the word of their chord and their number; with the forces comes the bar of each web.
    """
    rows = {role: [n for n in truss.nodes if n.chord is role] for role in _CHORDS}
    places = {(node.chord.word, i): node.place for row in rows.values() for i, node in enumerate(row)}
    ends: dict[int, list] = {}
    for row in rows.values():
        for i, node in enumerate(row):
            for web in (*node.webs, *node.bolted):
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
