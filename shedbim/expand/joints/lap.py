"""Laps of purlins: two bolts through both webs where the one ends on the other."""

from __future__ import annotations

import numpy as np

from shedbim.description.connections import Connections
from shedbim.expand.joints.cold_formed_web import end_distance, field_of, hole_lines, in_layers, web_of
from shedbim.expand.joints.contract import Bolting, Connection, Joint
from shedbim.fasteners.bolts import bolt

__all__ = ["purlin_lap"]


def purlin_lap(joint: Joint, options: Connections) -> Connection:
    """Give the bolts at the end of a purlin that lies against the web of the next one.

    Raises:
        DescriptionError: where the web leaves them no room.
    """
    ended = joint.members[1]
    web = web_of(*joint.members)
    lines = hole_lines(ended.section, options.cleats, field_of(ended))
    layers = in_layers(dict(enumerate(joint.members)), web)
    grip = sum(layer.thickness for layer in layers)
    head = web.out * (web.face - grip) + ended.into * end_distance(lines)
    points = np.array([head + web.up * v for v in lines.levels])
    fastener = bolt(lines.diameter, options.bolts.secondary_grade, grip)
    return Connection(boltings=(Bolting("bolts", fastener, points, web.out, layers),))
