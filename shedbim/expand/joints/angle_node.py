"""Nodes of trusses of angles: one gusset between the pairs that meet; at a ridge it joins both lengths of chord."""

from __future__ import annotations

from shedbim.description.connections import Connections
from shedbim.expand.joints.angle_gusset import chord_patch, gusset, pairs_of, web_patch
from shedbim.expand.joints.contract import Connection, Joint, Met

__all__ = ["angle_node", "gap_of"]


def gap_of(near: Met, far: Met) -> float:
    """Give the gap between the two angles of a pair: the thickness of its gussets, mm."""
    apart = float(abs(far.origin[1] - near.origin[1]))
    return round(apart + 2 * near.section.outline.bounds[0], 6)


def angle_node(joint: Joint, options: Connections) -> Connection:
    """Give the gusset of a node with its welds and bolts."""
    pairs = pairs_of(joint)
    patches = [
        chord_patch(pair.leg, options, ends=pair.ends)
        if pair.is_chord
        else web_patch(pair.leg, pair.near.section, options)
        for pair in pairs
    ]
    first = pairs[0]
    thickness = gap_of(joint.members[first.numbers[0]], joint.members[first.numbers[1]])
    plate, boltings, welds, _ = gusset(pairs, patches, thickness, options)
    return Connection((plate,), tuple(boltings), tuple(welds))
