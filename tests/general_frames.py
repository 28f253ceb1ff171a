"""Bars of a shed in a general library for space frames, loaded along the building: how far they move.

The library (PyNiteFEA, open source, MIT) builds and solves by itself; it is told of bars, pins and supports. It has y
upwards: x, y, z of the building are its X, -Z, Y. Units: N, m.
"""

from __future__ import annotations

import warnings
from collections import Counter

import numpy as np
from Pynite import FEModel3D
from space_frame import FRAME_ROLES, E, G, properties, stretches_of

from shedbim.checks.stability.skeleton import Skeleton
from shedbim.model.roles import Role
from shedbim.model.shed import Shed

__all__ = ["furthest"]

_UPRIGHT = (Role.COLUMN, Role.GABLE_POST)
#: The load of each node, N.
_LOAD = 1.0


def furthest(shed: Shed, bars: Skeleton, *, along: bool) -> float:
    """How far the frame moves, m, under 1 N at every node along or across the building; inf where it cannot be solved.

    The shed has no post with a sliding head and no brace that runs on over a crossing.
    """
    assert not len(bars.sliding)
    model = FEModel3D()
    model.add_material("steel", E, G, E / (2 * G) - 1, 0.0)
    roles = [shed.parts[int(shed.pieces.part[p])].role for p in bars.piece]
    used = sorted({int(bars.node[s]) for _, *ends in stretches_of(bars) for s in ends})
    for node in used:
        x, y, z = (bars.points[node] / 1000).tolist()
        model.add_node(str(node), x, z, -y)
    owner = _owners(bars, roles)
    sections: set[str] = set()
    for number, (bar, a, b) in enumerate(stretches_of(bars)):
        section = str(shed.pieces.part[bars.piece[bar]])
        if section not in sections:
            A, inertia, _ = properties(shed, bars.piece[bar])
            model.add_section(section, A, inertia, inertia, 1e-9)
            sections.add(section)
        name = f"{bar}/{number}"
        model.add_member(name, str(bars.node[a]), str(bars.node[b]), "steel", section)
        pins = [_pinned(bars, roles, owner, bar, spot) for spot in (a, b)]
        stays = {f"R{axis}{end}": pins[k][n] for k, end in enumerate("ij") for n, axis in enumerate("xyz")}
        stays["Rxj"] = stays["Rxj"] and not stays["Rxi"]
        model.def_releases(name, **stays)
    fixed = {int(bars.node[s]) for joint, s, _ in bars.at_joint.tolist() if bars.kind[joint] == "FIXED_BASE"}
    for node in used:
        held = bool(bars.supported[node])
        still = node in fixed or node not in owner
        upright = node in owner and roles[owner[node]] in _UPRIGHT
        # Held against twisting: columns about the upright axis, roof steel about the axis across the building.
        model.def_support(
            str(node), held, held, held, still or not upright, still or upright, still
        )  # fmt: skip
        if not held:
            model.add_node_load(str(node), "FZ" if along else "FX", _LOAD)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        try:
            model.analyze_linear(check_stability=False)
        except Exception:
            return float("inf")
    moved = [
        abs(float(value["Combo 1"])) for node in model.nodes.values() for value in (node.DX, node.DY, node.DZ)
    ]
    return max(moved) if np.isfinite(moved).all() else float("inf")


def _owners(bars: Skeleton, roles: list[Role]) -> dict[int, int]:
    """The bar whose turnings are those of each node: of those that bend a column first, then one that runs on."""
    found: dict[int, int] = {}
    spots = Counter(bars.bar.tolist())
    for bar, node in sorted(
        zip(bars.bar.tolist(), bars.node.tolist(), strict=True), key=lambda s: -spots[s[0]]
    ):
        if roles[bar] in FRAME_ROLES and (node not in found or _before(roles[bar], roles[found[node]])):
            found[node] = bar
    return found


def _before(role: Role, other: Role) -> bool:
    return role in _UPRIGHT and other not in _UPRIGHT


def _pinned(
    bars: Skeleton, roles: list[Role], owner: dict[int, int], bar: int, spot: int
) -> tuple[bool, bool, bool]:
    """Which turnings about its own x, y and z the end of a bar is free of; its z is square to the frame."""
    node = int(bars.node[spot])
    if roles[bar] not in FRAME_ROLES:
        return True, True, True
    chief = owner[node]
    if chief == bar or (roles[chief] not in _UPRIGHT and roles[bar] is roles[chief]):
        return False, False, False
    corner = any(s == spot and bars.kind[joint] == "RAFTER_COLUMN" for joint, s, _ in bars.at_joint.tolist())
    return True, True, not corner
