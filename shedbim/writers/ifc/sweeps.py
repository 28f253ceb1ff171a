"""Straight sweeps of a profile, and what a drill or a saw takes out of a bar as such sweeps."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.outlines import Loop
from shedbim.model.holes import Hole, Notch
from shedbim.model.openings import drill_reach
from shedbim.sections.section import Profile
from shedbim.writers.ifc.curves import area, closed_line, loop_curve, position
from shedbim.writers.ifc.placements import axis2placement, direction
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import enum, metres

__all__ = ["drilled", "round_profile", "sawn", "sweep"]

Vector = NDArray[np.float64]


def sweep(
    step: StepFile,
    profile: str,
    origin: Sequence[float],
    axis: Sequence[float],
    ref: Sequence[float],
    depth: float,
) -> str:
    """Write a profile swept for ``depth`` mm along ``axis`` (3,) from ``origin`` (3,) mm, its x along ``ref``."""
    return step.add(
        "IfcExtrudedAreaSolid",
        SweptArea=profile,
        Position=axis2placement(step, origin, axis, ref),
        ExtrudedDirection=direction(step, 0.0, 0.0, 1.0),
        Depth=metres(depth),
    )


def round_profile(step: StepFile, diameter: float) -> str:
    """Write (or find) a full circle."""
    return step.share(
        "IfcCircleProfileDef",
        ProfileType=enum("AREA"),
        Position=position(step, 0.0, 0.0),
        Radius=metres(diameter / 2),
    )


def drilled(step: StepFile, profile: Profile, hole: Hole) -> str:
    """Write what a hole takes out of a bar of ``profile``: through one wall and just beyond its faces."""
    axis = np.array(hole.axis)
    along = np.array(hole.along) if hole.slot else np.eye(3)[int(np.abs(axis).argmin())]
    along = along - axis * float(along @ axis)
    along /= float(np.linalg.norm(along))
    low, high = drill_reach(profile, hole)
    opening = _slot(step, hole) if hole.slot else round_profile(step, hole.diameter)
    origin = np.array(hole.centre) + low * axis
    return sweep(step, opening, origin.tolist(), hole.axis, along.tolist(), high - low)


def _slot(step: StepFile, hole: Hole) -> str:
    """Write (or find) the opening of a slot about its middle, along x."""
    u, v = hole.slot / 2, hole.diameter / 2
    corners = np.array([[u, -v], [u, v], [-u, v], [-u, -v]])
    return area(step, [loop_curve(step, Loop(corners, np.array([1.0, 0.0, 1.0, 0.0])))])


def sawn(step: StepFile, notch: Notch) -> str:
    """Write what a notch takes."""
    u, v = np.array(notch.u), np.array(notch.v)
    outline = area(step, [closed_line(step, notch.outline)])
    return sweep(step, outline, notch.origin, np.cross(u, v).tolist(), notch.u, notch.depth)
