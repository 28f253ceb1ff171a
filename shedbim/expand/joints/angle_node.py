"""Nodes of trusses of angles: one gusset between the pairs that meet; at a ridge it joins both lengths of chord."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from shedbim.description.connections import Connections
from shedbim.expand.joints.angle_gusset import AnglePair, chord_patch, gusset, pairs_of, web_patch
from shedbim.expand.joints.contract import Connection, Joint, Met

__all__ = ["angle_node", "angle_site_node", "gap_of"]


def gap_of(near: Met, far: Met) -> float:
    """Give the gap between the two angles of a pair: the thickness of its gussets, mm."""
    apart = float(abs(far.origin[1] - near.origin[1]))
    return round(apart + 2 * near.section.outline.bounds[0], 6)


def angle_node(joint: Joint, options: Connections) -> Connection:
    """Give the gusset of a node with its welds and bolts."""
    return _node(joint, pairs_of(joint), options)


def angle_site_node(joint: Joint, options: Connections) -> Connection:
    """Give the same where webs are bolted on site: those between the first member and the next of a chord."""
    pairs = pairs_of(joint)
    second = min(number for pair in pairs if pair.is_chord for number in pair.numbers if number)
    on_site = [replace(pair, on_site=0 < pair.numbers[0] < second) for pair in pairs]
    return _node(joint, on_site, options)


def _node(joint: Joint, pairs: Sequence[AnglePair], options: Connections) -> Connection:
    """The gusset of these pairs."""
    patches = [
        chord_patch(pair.leg, options, ends=pair.ends)
        if pair.is_chord
        else web_patch(pair.leg, pair.near.section, options, on_site=pair.on_site)
        for pair in pairs
    ]
    first = pairs[0]
    thickness = gap_of(joint.members[first.numbers[0]], joint.members[first.numbers[1]])
    plate, boltings, welds, _ = gusset(pairs, patches, thickness, options)
    return Connection((plate,), tuple(boltings), tuple(welds))
