"""The joints of a truss that are made on site: where its parts are spliced, and the web that is bolted across."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from shedbim.description.connections import SpliceOptions
from shedbim.expand.joints.web_splice import Beside, lap_of
from shedbim.expand.kits import Meeting, Meets
from shedbim.expand.truss_chords import BOTTOM, TOP, ChordBar, bar_over
from shedbim.expand.truss_splits import Cut
from shedbim.expand.web_ends import LandedWeb, WebAim, footprint
from shedbim.model.joints import At, JointKind

__all__ = ["Shipping", "lap_length", "site_meetings"]


@dataclass(frozen=True, eq=False)
class Shipping:
    """How a truss is divided for the road: the options of its splices, and x of the roof bracing's nodes."""

    splices: SpliceOptions
    busy: Sequence[tuple[float, float]] = ()


def lap_length(
    aims: Sequence[WebAim],
    landed: Sequence[LandedWeb],
    group: Sequence[int],
    number: int,
    which: int,
    splices: SpliceOptions,
) -> float:
    """Give how far before the chord's face a web ends that is bolted to it, mm along its axis.

    Args:
        group: the webs at that node.
        number: of the web.
        which: of the chords.
    """
    face = aims[number].faces[which]
    along = np.array([1.0, face.slope]) * face.run

    def leaving(web: int) -> tuple[float, float]:
        d = landed[web].direction * face.side
        return float(d @ along), float(d @ face.normal)

    def place(web: int) -> float:
        return (landed[web].bottom, landed[web].top)[which][0]

    beside = []
    for other in group:
        if other != number:
            low, high = footprint(aims[other], landed[other], which)
            toe = low if place(other) > place(number) else high
            beside.append(Beside((toe - place(number)) / face.run, leaving(other)))
    return lap_of(aims[number].section, leaving(number), beside, splices).end


def site_meetings(
    divided: Sequence[Cut],
    aims: Sequence[WebAim],
    bars: tuple[Sequence[ChordBar], Sequence[ChordBar]],
    web_names: Sequence[str],
    axis: Callable[[int, float], float],
) -> list[Meeting]:
    """Give the splices of both chords and the web joint of every cut; ``axis`` is the level of a chord's axis at x."""
    meetings = []
    for cut in divided:
        for which in (BOTTOM, TOP):
            x = cut.x[which]
            left = next(bar for bar in bars[which] if bar.x_to == x)
            right = next(bar for bar in bars[which] if bar.x_from == x)
            pair = (Meets(left.name, At.END), Meets(right.name, At.START))
            meetings.append(Meeting(JointKind.CHORD_SPLICE, pair, np.array([x, 0.0, axis(which, x)])))
        x = aims[cut.web].nodes[cut.bolted]
        end = At.START if cut.bolted == BOTTOM else At.END
        carrier = bar_over(bars[cut.bolted], x).name
        pieces = (Meets(carrier, At.ALONG), Meets(web_names[cut.web], end))
        meetings.append(Meeting(JointKind.WEB_SPLICE, pieces, np.array([x, 0.0, axis(cut.bolted, x)])))
    return meetings
