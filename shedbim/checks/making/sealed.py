"""Whether zinc and air get in and out of hollow bars that are galvanized."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.finding import Hit
from shedbim.checks.subject import Subject
from shedbim.fasteners.vents import internal_area
from shedbim.model.bars import Bar
from shedbim.model.joints import At
from shedbim.model.shed import Part
from shedbim.sections.profiles import Hollow, Pipe

__all__ = ["sealed"]

Bools = NDArray[np.bool_]

#: A hole lets an end out when it is no farther from it than this and the section's size, mm: as near as the cut allows.
_NEAR = 150.0
#: Longer bars need an opening by area, mm.
_BY_AREA = 2800.0
_SOURCE = "galvanizers' design guidance: vents at both ends, over 2.8 m together 30 % of the area inside"


@dataclass(frozen=True)
class _Openings:
    """What is open of a hollow bar near its start and its end: area in mm2, and whether a notch opens it."""

    area: tuple[float, float]
    notched: tuple[bool, bool]


def sealed(subject: Subject) -> Iterator[Hit]:
    """Give the galvanized tubes with an end that is closed and has no vent, or vents too small for their length."""
    closed = _closed_ends(subject)
    share, source = subject.criteria.limit("vent_share")
    for number, part in enumerate(subject.shed.parts):
        if not _is_dipped_tube(part):
            continue
        here = np.flatnonzero(subject.shed.pieces.part == number)
        openings = _openings(part.bar)
        inside = internal_area(part.bar.section)
        for end in (0, 1):
            pressed = part.bar.pressed[end] is not None
            shut = here[(closed[here, end] | pressed) & (not openings.notched[end])]
            if openings.area[end] == 0.0:
                yield from _hits(subject, part, shut, "sealed-tube", None, None, _SOURCE)
            elif part.bar.length > _BY_AREA and openings.area[end] < share * inside * (1 - 1e-6):
                yield from _hits(
                    subject, part, shut, "vent-too-small", openings.area[end] / inside, share, source
                )


def _is_dipped_tube(part: Part) -> bool:
    return (
        isinstance(part.shape, Bar)
        and part.finish == "galvanized"
        and isinstance(part.shape.section.profile, Hollow | Pipe)
    )


def _closed_ends(subject: Subject) -> Bools:
    """Whether a shop weld closes each end (n, 2) of each piece: a fillet weld that this end is laid against."""
    closed = np.zeros((len(subject.shed.pieces), 2), bool)
    for run in subject.shed.joints:
        welded = {
            column
            for weld in run.welds
            if weld.form == "fillet" and not weld.site
            for column in weld.between
            if column < run.pieces.shape[1]
        }
        for column in sorted(welded):
            for end in (At.START, At.END):
                closed[run.pieces[run.at[:, column] == end, column], int(end)] = True
    return closed


def _openings(bar: Bar) -> _Openings:
    """The holes and notches near each end of a bar."""
    near = _NEAR + max(bar.section.width, bar.section.height)
    area, notched = [0.0, 0.0], [False, False]
    for hole in bar.holes:
        for end, place in enumerate((0.0, bar.length)):
            if abs(hole.centre[0] - place) <= near and bar.bored(hole) is not None:
                area[end] += hole.area
    for notch in bar.notches:
        for end, place in enumerate((0.0, bar.length)):
            notched[end] |= abs(notch.origin[0] - place) <= near
    return _Openings((area[0], area[1]), (notched[0], notched[1]))


def _hits(
    subject: Subject,
    part: Part,
    pieces: NDArray[np.int64],
    code: str,
    value: float | None,
    limit: float | None,
    source: str,
) -> Iterator[Hit]:
    sentence = (
        f"An end of a galvanized {part.role.word} is closed and has no vent: what is sealed bursts in the zinc bath."
        if value is None
        else f"The vents at an end of a galvanized {part.role.word} open {{value}} of the area inside; longer tubes "
        "need {limit}."
    )
    for piece in pieces.tolist():
        yield Hit(
            code,
            (piece,),
            subject.point(piece),
            sentence,
            "Give it vents at both ends, or paint it: finish.frames.",
            value,
            limit,
            "%" if value is not None else "",
            source,
            about=part.role.word,
        )
