"""Stiffeners between the flanges of a column, where the flange of a haunch or of a rafter pushes or pulls."""

from __future__ import annotations

from collections.abc import Sequence
from math import floor

from shedbim.expand.impossible import impossible
from shedbim.expand.joints.bolt_room import Zone
from shedbim.expand.joints.column_side import Side
from shedbim.expand.joints.contract import Fitting, Met, Welding
from shedbim.fasteners.plate_stock import thickness_at_least
from shedbim.fasteners.welds import throat_for
from shedbim.model.joints import At
from shedbim.model.roles import Role
from shedbim.sections.profiles import IShape

__all__ = ["stiffener_thickness", "stiffeners"]

#: From the tip of a flange to the edge of a stiffener; from its corners to the root fillets, mm (common practice).
_BACK, _CLEAR = 5.0, 3.0
#: What lies across the middle of a column (a gusset on its web, the end of a strut), and air beside it, mm.
_GUSSET, _AIR = 12.0, 20.0
#: A wall brace at a work point nearer than this may have its gusset beside a stiffener, mm.
_NEAR_BRACE = 800.0
#: Shorter stiffeners do nothing, mm.
_LEAST = 60.0


def stiffener_thickness(pushing: float) -> float:
    """Give the thickness of stiffeners behind a flange this thick, mm."""
    return thickness_at_least(max(pushing, 10.0))


def stiffeners(
    side: Side, name: str, levels: Zone, neighbours: Sequence[Met]
) -> tuple[list[Fitting], list[Welding]]:
    """Give the two stiffeners of a column between two levels, one on each side of its web.

    They run from flange to flange, or only as far as there is room where something else is fastened to the web
    or to the other flange.

    Raises:
        DescriptionError: when a strut leaves no room for them.
    """
    profile = side.column.section.profile
    if not isinstance(profile, IShape):
        return [], []
    level, thickness = (levels.low + levels.high) / 2, levels.high - levels.low
    clear = profile.h - 2 * profile.tf
    width = floor(((profile.b - profile.tw) / 2 - _BACK) / 5 + 1e-9) * 5
    snip = min(profile.r + _CLEAR, width / 2)
    throat = throat_for(min(thickness, profile.tf), side.column.grade)
    on_web = throat_for(min(thickness, profile.tw), side.column.grade)
    fittings, welds = [], []
    for number, sign in enumerate((-1.0, 1.0), start=1):
        length = _length(side, level, thickness, sign, clear, neighbours)
        whole = length == clear
        web, tip = sign * profile.tw / 2, sign * (profile.tw / 2 + width)
        near, far = -profile.tf, -profile.tf - length
        outline = [(near, web + sign * snip), (near, tip), (far, tip)]
        outline += [(far, web + sign * snip), (far + snip, web)] if whole else [(far, web)]
        outline.append((near - snip, web))
        piece = f"{name} {number}"
        corners = outline if sign > 0 else outline[::-1]
        fittings.append(side.plane.level(piece, Role.STIFFENER, level, _anticlockwise(corners), thickness, 0))
        flanges = 2 if whole else 1
        welds.append(Welding((0, piece), throat, 2 * flanges * (width - snip)))
        welds.append(Welding((0, piece), on_web, 2 * (length - flanges * snip)))
    return fittings, welds


def _anticlockwise(corners: list[tuple[float, float]]) -> list[tuple[float, float]]:
    area = sum(a[0] * b[1] - b[0] * a[1] for a, b in zip(corners, corners[1:] + corners[:1], strict=True))
    return corners if area > 0 else corners[::-1]


def _length(
    side: Side, level: float, thickness: float, sign: float, clear: float, neighbours: Sequence[Met]
) -> float:
    """How long a stiffener on one side of the web can be, from its own flange."""
    plane = side.plane
    length = clear
    for met in neighbours:
        out, aside, up = plane.seen(met.origin)
        into = met.into
        if met.role is Role.WALL_BRACE and float(into @ plane.aside) * sign > 0:
            if abs(up - level) < _NEAR_BRACE:
                length = min(length, clear / 2 - _GUSSET / 2 - _AIR)
        elif met.role in (Role.EAVES_STRUT, Role.VALLEY_STRUT, Role.STRUT) and aside * sign > 0:
            if abs(up - level) < plane.reach(met, plane.up) + thickness / 2 + _AIR:
                length = min(length, -out - plane.reach(met, plane.out) - side_flange(side) - _AIR)
        elif (
            met.at != At.ALONG
            and float(into @ plane.out) < -0.5
            and met.role in (Role.RAFTER, Role.GABLE_RAFTER)
        ):
            # Another rafter on the other flange, with stiffeners of its own.
            length = min(length, clear / 2 - _AIR / 2)
    if length < min(_LEAST, clear):
        raise impossible(
            "connections.rafters.stiffeners", "a strut is in the way of the stiffeners of a column",
            allowed="none, or another depth of the haunch",
        )  # fmt: skip
    return length


def side_flange(side: Side) -> float:
    """Thickness of the flange of a column that is an I section, mm."""
    profile = side.column.section.profile
    return profile.tf if isinstance(profile, IShape) else 0.0
