"""Ends of ties between the bottom chords of trusses: as the ends of struts."""

from __future__ import annotations

from shedbim.description.connections import Connections
from shedbim.expand.joints.contract import Connection, Joint
from shedbim.expand.joints.strut_end import FinOnCarrier

__all__ = ["tie_end"]


def tie_end(joint: Joint, options: Connections) -> Connection:
    """Give both fins, the tube's end and the bolts of a tie on the side of a chord."""
    chord, tie = joint.members
    return FinOnCarrier(chord, tie, options).connection()
