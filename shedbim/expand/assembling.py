"""From kits and runs to the finished tables: pieces placed, joints made, parts and marks found."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.expand.connecting import connect
from shedbim.expand.kits import Run
from shedbim.expand.placing import place
from shedbim.expand.shop import put_together
from shedbim.geometry.placements import compose
from shedbim.model.joints import At, JointRun
from shedbim.model.marks import group_parts
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


def assemble(runs: Sequence[Run], options: Connections) -> Assembled:
    """Give the parts, pieces, assemblies and joints of all runs.

    Raises:
        DescriptionError: when the description leaves no room for a joint.
        ModelError: when two pieces share a key or a meeting names a piece that does not exist.
    """
    placed = place(runs)
    connected = connect(placed, options)
    grouping = group_parts(connected.stock)
    shop = put_together(placed, connected, grouping)
    pieces = Pieces(
        tuple(connected.keys),
        grouping.part_of[connected.item],
        compose(connected.placement, grouping.motion[connected.item]),
        shop.of_piece,
    )
    flipped = grouping.flipped[connected.item]
    joints = tuple(_by_parts(run, flipped) for run in connected.joints)
    return Assembled(grouping.parts, pieces, shop.types, shop.assemblies, joints)


def _by_parts(run: JointRun, flipped: NDArray[np.bool_]) -> JointRun:
    """The joints with ends told by the parts: the start of a piece whose part runs the other way is its end."""
    turned = (run.at != At.ALONG) & flipped[run.pieces]
    return replace(run, at=np.where(turned, 1 - run.at, run.at).astype(np.int8))
