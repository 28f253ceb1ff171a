"""Whether every frame has a way along struts and purlins to a braced bay."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.bracing.braced import Braced, braced
from shedbim.checks.bracing.lines import (
    ROOF_STEEL,
    bay_label,
    bays_over,
    columns_at,
    columns_of,
    head_struts,
    lines_at,
    nearest_slope,
)
from shedbim.checks.finding import Hit
from shedbim.checks.subject import FITTED, Subject
from shedbim.model.joints import JointKind
from shedbim.model.roles import Role

__all__ = ["paths", "reached"]

Bools = NDArray[np.bool_]
Ints = NDArray[np.int64]

#: What carries a force along the building in the plane of the roof.
_ROOF_STRUTS = (Role.STRUT, Role.PURLIN)
#: Joints that take it over from one piece to the next.
_HANDS_ON = (JointKind.STRUT_END, JointKind.PURLIN_CLEAT, JointKind.PURLIN_LAP)


def paths(subject: Subject) -> Iterator[Hit]:
    """Give the frames that no struts or purlins join to a braced bay, and the bays where a line of struts breaks."""
    found = braced(subject)
    yield from _along_columns(subject, found)
    yield from _along_roof(subject, found)


def reached(joined: Sequence[bool], braced_bays: Sequence[int]) -> list[bool]:
    """Give which lines (b + 1) hang together with a braced bay, over bays (b) that are joined or not.

    A braced bay holds both of its own lines.
    """
    held = [False] * (len(joined) + 1)
    for bay in braced_bays:
        held[bay] = held[bay + 1] = True
    for bay, whole in enumerate(joined):
        held[bay + 1] |= held[bay] and whole
    for bay in range(len(joined) - 1, -1, -1):
        held[bay] |= held[bay + 1] and joined[bay]
    return held


def _held_bays(subject: Subject, pieces: Ints) -> Bools:
    """Whether any of some pieces runs from joint to joint through each bay (b,)."""
    entries = subject.entries
    hands_on = np.array([kind in _HANDS_ON for kind in subject.joint_kinds], bool)
    rows = np.isin(entries.piece, pieces) & (entries.at != FITTED)
    rows &= hands_on[entries.joint]
    y = subject.joint_points[entries.joint[rows]][:, 1]
    ends = np.array([np.full(len(subject.shed.pieces), np.inf), np.full(len(subject.shed.pieces), -np.inf)])
    np.minimum.at(ends[0], entries.piece[rows], y)
    np.maximum.at(ends[1], entries.piece[rows], y)
    whole = pieces[np.isfinite(ends[0, pieces])]
    return np.asarray(bays_over(subject, ends[:, whole].T).any(axis=0))


def _along_columns(subject: Subject, found: Braced) -> Iterator[Hit]:
    """Along each column line by the struts at its heads."""
    for column, letter in enumerate(subject.shed.grid.letters):
        bays = found.wall_bays(column) or _roof_bays_at(found, column)
        if not bays or not columns_of(subject, column):
            continue
        joined = _held_bays(subject, head_struts(subject, column))
        held = reached(joined.tolist(), bays)
        for line in np.flatnonzero(~np.array(held)).tolist():
            yield from _lost(subject, columns_of(subject, column, [line]), f"line {letter}", "eaves_strut")
        for bay in np.flatnonzero(~joined).tolist():
            if held[bay] and held[bay + 1]:
                yield _broken(subject, columns_of(subject, column, [bay, bay + 1]), bay, f"line {letter}")


def _roof_bays_at(found: Braced, column: int) -> list[int]:
    """The bays in which a slope that reaches a column line is braced."""
    slopes = [number for number, slope in enumerate(found.slopes) if column in slope.columns]
    return sorted({bay for number in slopes for bay in found.roof_bays(number)})


def _along_roof(subject: Subject, found: Braced) -> Iterator[Hit]:
    """Along each slope by what runs from frame to frame in it; none may be on a column line alone."""
    struts = subject.having(*_ROOF_STRUTS)
    slope_of = nearest_slope(found.slopes, subject.centres[struts][:, 0])
    lies_free = (columns_at(subject, subject.centres[struts][:, 0]) < 0) | (
        subject.role[struts] == Role.PURLIN
    )
    steel = subject.having(*ROOF_STEEL)
    steel_on = nearest_slope(found.slopes, subject.centres[steel][:, 0])
    line_of = lines_at(subject, subject.centres[steel][:, 1])
    for number, slope in enumerate(found.slopes):
        bays = found.roof_bays(number)
        if not bays:
            continue
        joined = _held_bays(subject, struts[lies_free & (slope_of == number)])
        held = reached(joined.tolist(), bays)
        for line in np.flatnonzero(~np.array(held)).tolist():
            lost = steel[(steel_on == number) & (line_of == line)]
            yield from _lost(subject, tuple(lost[:1].tolist()), f"slope {slope.name}", "struts")


def _lost(subject: Subject, pieces: tuple[int, ...], about: str, field: str) -> Iterator[Hit]:
    if pieces:
        yield Hit(
            "frame-out-of-path",
            pieces[:1],
            subject.point(pieces[0]),
            "No continuous line of struts or purlins joins this frame to a braced bay: nothing takes its longitudinal "
            "forces, or holds it upright.",
            f"Carry the struts on to a braced bay: bracing.{field}, bracing.bays.",
            source="Steel Buildings in Europe, Single-Storey Part 4 (portal frames), ch. 9",
            about=about,
        )


def _broken(subject: Subject, columns: tuple[int, ...], bay: int, about: str) -> Hit:
    return Hit(
        "strut-line-broken",
        columns,
        subject.point(columns[0]),
        f"No strut joins the column heads in bay {bay_label(subject, bay)}: the line of struts between the braced bays "
        "is broken there.",
        "Give every bay its strut: bracing.eaves_strut.",
        source="Steel Buildings in Europe, Single-Storey Part 4 (portal frames), fig. 9.4",
        about=about,
    )
