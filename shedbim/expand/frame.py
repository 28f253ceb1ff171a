"""A frame as the bays see it, and the columns that every frame stands on."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from shedbim.description.models import Columns, Description
from shedbim.expand.kits import Kit, Meeting, Meets, Member
from shedbim.expand.layout import Layout
from shedbim.expand.pairs import Steel
from shedbim.expand.sticks import along, stick
from shedbim.expand.truss_chords import ChordBar, bar_over
from shedbim.expand.trusses import Truss
from shedbim.geometry.placements import translation
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role

__all__ = ["Frame", "Upright", "columns", "end_wall_face", "frame_kit"]

_UP = (0.0, 0.0, 1.0)
_ACROSS = (1.0, 0.0, 0.0)


@dataclass(frozen=True)
class Upright:
    """What gable rails are fastened to: its place x, the level of its head (mm), and its name."""

    x: float
    head: float
    name: str


@dataclass(frozen=True, eq=False)
class Frame:
    """A frame as a kit, with what the bays fasten to.

    Attributes:
        carriers: name of the piece under the roof surface, the first one of each slope.
        carrier: its section, or the size of its pairs.
        trusses: one for each span, or none where rafters carry the roof.
        posts: the gable posts, left to right.
    """

    kit: Kit
    carriers: tuple[str, ...]
    carrier: Steel
    trusses: tuple[Truss, ...] = ()
    posts: tuple[Upright, ...] = ()

    def carrier_at(self, slope: int, x: float, *, far: bool = False) -> str:
        """The piece under the roof surface at x on a slope; of a pair the near one or the ``far`` one."""
        return self._at(slope, x, [made.top_chords for made in self.trusses], far=far)

    def other_of(self, name: str) -> str | None:
        """The far angle of the pair that a chord is the near one of; None where it is no pair."""
        bars = (bar for made in self.trusses for bar in (*made.top_chords, *made.bottom_chords))
        return next((bar.far for bar in bars if bar.name == name and bar.far), None)

    def lowest_at(self, slope: int, x: float) -> str:
        """The lowest piece at x under a slope of the frame."""
        return self._at(slope, x, [made.bottom_chords for made in self.trusses], far=False)

    def _at(self, slope: int, x: float, chords: Sequence[Sequence[ChordBar]], *, far: bool) -> str:
        """The bar of one of the chords of the trusses, or the rafter where there are none."""
        first = 0
        for bars in chords:
            own = [bar for bar in bars if first + bar.slope == slope]
            if own:
                return bar_over(own, x).on_side(far=far)
            first += 1 + bars[-1].slope
        return self.carriers[slope]


def end_wall_face(description: Description, frame: Frame) -> float:
    """Give how far the steel of an end frame stands out from its line, mm: columns, rafters and posts."""
    return max(description.frames.columns.section.width, frame.carrier.width) / 2


def columns(description: Description, layout: Layout) -> tuple[list[Member], list[Meeting]]:
    """Give the columns of a frame, their bases and their caps."""
    options: Columns = description.frames.columns
    base = JointKind.FIXED_BASE if options.base == "fixed" else JointKind.PINNED_BASE
    members, meetings = [], []
    for number, (letter, x) in enumerate(zip(layout.grid.letters, layout.grid.x, strict=True)):
        met = layout.slopes_at_column(number)
        # Under a valley the column stops square at its bottom, else it follows the roof.
        normal = _UP if layout.is_valley(number) else met[0].normal
        top = layout.column_top(number)
        bar, place = stick(
            options.section, (x, 0.0, layout.base), (x, 0.0, top), _ACROSS, end_planes=along(normal)
        )
        name = f"column/{letter}"
        members.append(Member(name, Role.COLUMN, bar, place, options.grade, description.finish.frames))
        meetings.append(Meeting(base, (Meets(name, At.START),), np.array([x, 0.0, layout.base])))
        meetings.append(Meeting(JointKind.COLUMN_CAP, (Meets(name, At.END),), np.array([x, 0.0, top])))
    return members, meetings


def frame_kit(
    members: Sequence[Member], meetings: Sequence[Meeting], layout: Layout, children: Sequence[Kit] = ()
) -> Kit:
    """Give the kit of a frame: its own members and meetings, and the trusses in it."""
    inner = [meeting for child in children for meeting in child.meetings]
    return Kit(
        tuple(members),
        (*meetings, *inner),
        ("frame", "frame", "site"),
        translation([0.0, 0.0, layout.base]),
        tuple(children),
    )
