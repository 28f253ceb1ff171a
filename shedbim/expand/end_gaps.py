"""How far the sawn ends of rafters and chords stand off the faces of columns: the plates between them."""

from __future__ import annotations

from shedbim.description.models import Description
from shedbim.sections.profiles import IShape

__all__ = ["end_gap"]


def end_gap(description: Description, *, trussed: bool) -> float:
    """Give the distance from a column's face to the sawn end of what is fastened to it, mm.

    The end plate alone at the flange of an I section; a bracket besides at a tube, whose bolts cannot be
    tightened inside.

    Args:
        trussed: whether it is the chord of a truss, else a rafter.
    """
    connections = description.connections
    plate = connections.chords.thickness if trussed else connections.rafters.thickness
    if isinstance(description.frames.columns.section.profile, IShape):
        return plate
    return plate + connections.brackets.thickness + connections.brackets.stand_off
