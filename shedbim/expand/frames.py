"""The frame on every line between the gables, by the way its roof is carried: one row a roof system."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from shedbim.description.models import Description
from shedbim.description.roof_systems import AngleTrussRoof, RafterRoof, RoofSystem, TrussRoof
from shedbim.expand.angle_truss_frames import angle_truss_frame
from shedbim.expand.frame import Frame
from shedbim.expand.layout import Layout
from shedbim.expand.rafter_frames import rafter_frame, rafter_lifts
from shedbim.expand.truss_frames import roof_lifts as truss_roof_lifts
from shedbim.expand.truss_frames import truss_frame
from shedbim.model.roles import Role
from shedbim.roofs.slope import Slope

__all__ = ["inner_frame", "roof_lifts"]


@dataclass(frozen=True)
class _Carried:
    """How a roof system is built: the lift of its upper face over each slope, and the frame on a line.

    The options each takes are those of its own system.
    """

    lifts: Callable[[Any, Sequence[Slope]], list[float]]
    frame: Callable[[Description, Layout, Any], Frame]


_SYSTEMS: Mapping[type[RoofSystem], _Carried] = {
    RafterRoof: _Carried(
        lambda roof, slopes: rafter_lifts(roof.section, slopes),
        lambda description, layout, roof: rafter_frame(
            description, layout, roof.section, roof.grade, Role.RAFTER
        ),
    ),
    TrussRoof: _Carried(truss_roof_lifts, truss_frame),
    AngleTrussRoof: _Carried(truss_roof_lifts, angle_truss_frame),
}


def roof_lifts(description: Description, slopes: Sequence[Slope]) -> list[float]:
    """Give the height of the roof steel's upper face above each slope's own line, mm."""
    roof = description.frames.roof
    return _SYSTEMS[type(roof)].lifts(roof, slopes)


def inner_frame(description: Description, layout: Layout) -> Frame:
    """Give the frame that stands on every line between the gables."""
    roof = description.frames.roof
    return _SYSTEMS[type(roof)].frame(description, layout, roof)
