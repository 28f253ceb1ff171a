"""What a web pattern is asked and what it answers: the line of a truss, and the webs between its nodes.

Words of this folder:
    panel       the part of a truss between two neighbouring panel points
    panel point one of the places 0..panels, left to right, where the bottom chord may have a node
    coordinate  a place along the truss counted in panels: 2 is panel point 2, 2.5 the middle of panel 2
    node        a place of a chord where webs meet
    web         a bar between a bottom and a top node: a post (the same coordinate) or a diagonal
    leverage    bending moment over depth at a panel point; as long as a post stands there, it is the
                horizontal force of the chords, whatever their slopes

Coordinates and indices only: where a panel point lies in the building is the caller's concern.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

from shedbim.errors import ModelError

__all__ = ["Topology", "TrussLine", "Web"]


@dataclass(frozen=True)
class TrussLine:
    """What a pattern needs to know of a truss.

    Attributes:
        panels: number of panels, 1 or more (2 or more when the chords meet at the ends).
        ridge: the panel point, 1..panels-1, where chords kink; None for a straight truss.
        top_kink: the top chord kinks at the ridge.
        bottom_kink: the bottom chord kinks at the ridge.
        leverage: (panels + 1,) for each panel point the bending moment of the simply supported truss
            under uniform gravity load, over the vertical distance of the chord axes there. Any unit and
            scale: only the order of the values counts. 0 at the ends, or the limit value where the
            chords meet.
        end_posts: False where the chords meet at both ends (no depth): no web reaches the end nodes.

    Raises:
        ModelError: the values contradict one another.
    """

    panels: int
    ridge: int | None
    top_kink: bool
    bottom_kink: bool
    leverage: tuple[float, ...]
    end_posts: bool = True

    def __post_init__(self) -> None:
        least = 1 if self.end_posts else 2
        if self.panels < least:
            raise ModelError(f"a truss line needs at least {least} panels, not {self.panels}")
        if self.ridge is not None and not 0 < self.ridge < self.panels:
            raise ModelError(f"ridge {self.ridge} is not between the ends 0 and {self.panels}")
        if self.ridge is None and (self.top_kink or self.bottom_kink):
            raise ModelError("a chord kinks at the ridge, and there is no ridge")
        if len(self.leverage) != self.panels + 1:
            raise ModelError(
                f"{self.panels} panels need {self.panels + 1} leverages, not {len(self.leverage)}"
            )
        if not all(math.isfinite(value) for value in self.leverage):
            raise ModelError(f"leverages must be finite: {self.leverage}")

    @property
    def middle(self) -> float:
        """The coordinate about which patterns are symmetric: the ridge, else half the panels."""
        return self.panels / 2 if self.ridge is None else float(self.ridge)


@dataclass(frozen=True)
class Web:
    """One bar between the chords.

    Attributes:
        kind: "post" (both nodes at the same coordinate) or "diagonal".
        bottom: index into ``Topology.bottom``.
        top: index into ``Topology.top``.
    """

    kind: Literal["diagonal", "post"]
    bottom: int
    top: int


@dataclass(frozen=True)
class Topology:
    """The nodes of both chords and the webs between them.

    Attributes:
        top: coordinates of the nodes of the top chord, ascending, within 0..panels.
        bottom: the same for the bottom chord. Patterns with a node at every panel point list the end
            nodes also where the chords meet, so that an index stays the number of the panel point.
        webs: left to right.
    """

    top: tuple[float, ...]
    bottom: tuple[float, ...]
    webs: tuple[Web, ...]
