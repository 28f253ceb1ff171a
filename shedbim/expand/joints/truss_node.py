"""Webs of a hollow truss welded to the face of their chord, and chords welded to each other at the ridge."""

from __future__ import annotations

import numpy as np

from shedbim.description.connections import Connections
from shedbim.expand.joints.contract import Connection, Joint, Met, Welding
from shedbim.fasteners.welds import throat_for
from shedbim.model.joints import At

__all__ = ["chord_ridge", "girth", "truss_node"]


def truss_node(joint: Joint, options: Connections) -> Connection:
    """Give a fillet weld all round each web, on the chord's face."""
    chord, *webs = joint.members
    welds = []
    for number, web in enumerate(webs, start=1):
        throat = options.nodes.throat or _throat(chord, web)
        welds.append(Welding((0, number), throat, girth(web), all_round=True))
    return Connection(welds=tuple(welds))


def chord_ridge(joint: Joint, options: Connections) -> Connection:
    """Give the butt weld all round two chords that meet in a mitre; its throat is the thinner wall."""
    left, right = joint.members
    wall = min(met.section.profile.thickness for met in (left, right))
    return Connection(welds=(Welding((0, 1), wall, girth(left), form="butt", all_round=True),))


def _throat(chord: Met, web: Met) -> float:
    """The throat by rule: full strength of the thinner wall."""
    return throat_for(min(chord.section.profile.thickness, web.section.profile.thickness), web.grade)


def girth(met: Met) -> float:
    """Give the length round the outside of a member along the cut of its end that meets here, mm."""
    rim = met.section.outline.rim
    x = met.cut.offsets(rim, at_end=met.at == At.END)
    points = np.column_stack([x, rim])
    return float(np.linalg.norm(np.roll(points, -1, axis=0) - points, axis=1).sum())
