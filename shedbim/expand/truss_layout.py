"""The lines of one truss: its chords' straight lengths, its panel points, and the webs of its pattern."""

from __future__ import annotations

from collections.abc import Sequence

from shedbim.description.roof_systems import TrussedRoof
from shedbim.expand.truss_chords import BOTTOM, TOP, chord_faces
from shedbim.expand.web_ends import ChordFace
from shedbim.model.roles import Role
from shedbim.roofs.slope import Slope
from shedbim.sections.section import Section
from shedbim.webs import PATTERNS
from shedbim.webs.topology import Topology, TrussLine, Web

__all__ = ["TrussLayout", "has_end_posts"]


def has_end_posts(pattern: str) -> bool:
    """Whether a pattern stands a post on the first panel point, whatever the leverages are."""
    smallest = TrussLine(2, None, False, False, (0.0, 1.0, 0.0))
    return PATTERNS[pattern].topology(smallest).webs[0].kind == "post"


class TrussLayout:
    """The lines of the truss under the slopes of one span.

    Attributes:
        chords: the straight lengths of the bottom and of the top chord.
        line_ends: x of the first and last panel point, mm.
        topology: nodes and webs by panel coordinates.
    """

    def __init__(
        self,
        options: TrussedRoof,
        slopes: Sequence[Slope],
        eaves: float,
        span: str,
        line_ends: tuple[float, float],
    ) -> None:
        self.options, self.span, self.line_ends = options, span, line_ends
        self.slopes = slopes
        self.ridge_x = self.slopes[0].x1 if len(self.slopes) == 2 else None
        self.chords = (
            chord_faces(options, slopes, eaves, BOTTOM),
            chord_faces(options, slopes, eaves, TOP),
        )
        self.kinks = tuple(
            len(faces) == 2 and abs(faces[0].slope - faces[1].slope) > 1e-9 for faces in self.chords
        )
        self.topology = self._webs()

    def over(self, which: int, x: float) -> ChordFace:
        """The length of a chord over x; at the ridge the left one."""
        faces = self.chords[which]
        return faces[0] if len(faces) == 1 or x <= faces[0].x_to else faces[1]

    def ridge_panel(self) -> int | None:
        """Panels left of the ridge: in proportion to the plan lengths of the slopes."""
        if self.ridge_x is None:
            return None
        share = (self.ridge_x - self.slopes[0].x0) / (self.slopes[1].x1 - self.slopes[0].x0)
        return min(max(round(self.options.panels * share), 1), self.options.panels - 1)

    def x(self, coordinate: float) -> float:
        """x of a panel coordinate."""
        first, last = self.line_ends
        ridge, panels = self.ridge_panel(), self.options.panels
        if ridge is None or self.ridge_x is None:
            return first + (last - first) * coordinate / panels
        if coordinate <= ridge:
            return first + (self.ridge_x - first) * coordinate / ridge
        return self.ridge_x + (last - self.ridge_x) * (coordinate - ridge) / (panels - ridge)

    def _webs(self) -> Topology:
        panels = self.options.panels
        first, last = self.line_ends
        points = [self.x(float(i)) for i in range(panels + 1)]
        leverage = tuple(
            (x - first) * (last - x) / (self.over(TOP, x).axis(x) - self.over(BOTTOM, x).axis(x))
            for x in points
        )
        line = TrussLine(panels, self.ridge_panel(), self.kinks[TOP], self.kinks[BOTTOM], leverage)
        return PATTERNS[self.options.pattern].topology(line)

    def section(self, web: Web) -> Section:
        """The section of a web."""
        if web.kind == "post":
            return self.options.post_section
        panels = self.options.panels
        middle = (self.topology.bottom[web.bottom] + self.topology.top[web.top]) / 2
        at_end = middle < 1 or middle > panels - 1
        return (self.options.end_section) if at_end else self.options.diagonals

    def groups(self, which: int) -> list[list[int]]:
        """The webs at each node of a chord, left to right."""
        count = len(self.topology.bottom if which == BOTTOM else self.topology.top)
        at: list[list[int]] = [[] for _ in range(count)]
        for i, web in enumerate(self.topology.webs):
            at[web.bottom if which == BOTTOM else web.top].append(i)
        return [
            sorted(group, key=lambda i: self.nodes(self.topology.webs[i])[1 - which]) for group in at if group
        ]

    def nodes(self, web: Web) -> tuple[float, float]:
        """x of a web's nodes on the bottom and on the top chord."""
        return self.x(self.topology.bottom[web.bottom]), self.x(self.topology.top[web.top])

    def web_names(self) -> list[tuple[Role, str]]:
        """Role and name of each web."""
        named = []
        counts = {Role.DIAGONAL: 0, Role.POST: 0}
        for web in self.topology.webs:
            role = Role.POST if web.kind == "post" else Role.DIAGONAL
            counts[role] += 1
            named.append((role, f"truss/{role.word}/{self.span}/{counts[role]}"))
        return named
