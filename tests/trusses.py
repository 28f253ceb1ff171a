"""The cast of trusses that web patterns are tried on: specimens, random ones, and their solved forces."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from hypothesis import strategies as st
from pin_jointed import Forces, solve

from shedbim.webs import PATTERNS
from shedbim.webs.topology import Topology, TrussLine

__all__ = [
    "SPECIMENS",
    "Node",
    "Solved",
    "Truss",
    "between",
    "crooked_trusses",
    "gable_trusses",
    "lines",
    "nodes_and_bars",
    "solved",
    "straight",
    "straight_trusses",
    "takes",
]

Node = tuple[str, int]


@dataclass(frozen=True)
class Truss:
    """A truss in its plane: where panel points and chords lie (any unit), and its line."""

    x: np.ndarray
    bottom: np.ndarray
    top: np.ndarray
    line: TrussLine

    @property
    def span(self) -> float:
        return float(self.x[-1])

    def place(self, chord: str, coordinate: float) -> tuple[float, float]:
        """Give x and height of a coordinate on chord "b" or "t"."""
        points = range(self.line.panels + 1)
        heights = self.bottom if chord == "b" else self.top
        return float(np.interp(coordinate, points, self.x)), float(np.interp(coordinate, points, heights))


def truss(x, bottom, top, ridge=None) -> Truss:
    """Give a truss with the leverages of a uniform load of 1 on plan."""
    x, bottom, top = (np.asarray(values, float) for values in (x, bottom, top))
    depth = top - bottom
    moment = x * (x[-1] - x) / 2
    meet = bool(depth[0] == 0)
    if meet:  # the limits of M/d where both vanish: M rises with span/2, d with the slope
        inner = moment[1:-1] / depth[1:-1]
        first, last = x[-1] / 2 * x[1] / depth[1], x[-1] / 2 * (x[-1] - x[-2]) / depth[-2]
        leverage = [first, *inner, last]
    else:
        leverage = list(moment / depth)

    def kinks(heights: np.ndarray) -> bool:
        slopes = np.diff(heights) / np.diff(x)
        return ridge is not None and bool(abs(slopes[ridge] - slopes[ridge - 1]) > 1e-9)

    line = TrussLine(
        panels=len(x) - 1,
        ridge=ridge,
        top_kink=kinks(top),
        bottom_kink=kinks(bottom),
        leverage=tuple(map(float, leverage)),
        end_posts=not meet,
    )
    return Truss(x, bottom, top, line)


def straight(panels: int, span: float, depth: float, slope=0.0, depth_right=None) -> Truss:
    """Chords at the same slope from the left end; deeper or shallower to the right if that is said."""
    x = np.linspace(0, span, panels + 1)
    return truss(x, slope * x, slope * x + np.linspace(depth, depth_right or depth, panels + 1))


def gable(panels, ridge, *, span, ridge_at, rise, depth, bottom_rise=0.0) -> Truss:
    """Level eaves, the top ``rise`` higher at x = ridge_at * span, the bottom chord ``bottom_rise``."""
    apex = ridge_at * span
    x = np.concatenate([np.linspace(0, apex, ridge + 1), np.linspace(apex, span, panels - ridge + 1)[1:]])
    up = np.interp(x, [0, apex, span], [0, 1, 0])
    return truss(x, bottom_rise * up, depth + rise * up, ridge)


@dataclass(frozen=True)
class Solved:
    """The bars of a truss with their forces under vertical loads on the nodes of the top chord."""

    places: dict[Node, tuple[float, float]]
    loads: dict[Node, float]
    chords: dict[str, list[tuple[Node, Node]]]
    webs: list[tuple[str, tuple[Node, Node]]]
    forces: Forces[Node]

    @property
    def largest(self) -> float:
        return max(abs(force) for force in self.forces.bars.values())

    def __getitem__(self, bar: str) -> float:
        """Give the force of the bar between two nodes, e.g. "b0t1"."""
        return self.forces[(bar[0], int(bar[1])), (bar[2], int(bar[3]))]

    def diagonals(self) -> list[float]:
        return [self.forces[bar] for kind, bar in self.webs if kind == "diagonal"]

    def moment(self, x: float, until: float) -> float:
        """Give the moment about ``x`` of the left reaction and the loads up to ``until``: no solver."""
        span = max(place[0] for place in self.places.values())
        at = [(self.places[node][0], load) for node, load in self.loads.items()]
        left = sum(load * (span - where) / span for where, load in at)
        return left * x - sum(load * (x - where) for where, load in at if where <= until)


def nodes_and_bars(topology: Topology, shape: Truss):
    """Give node places, bars of each chord, and webs; where chords meet the end node is a bottom one."""
    panels = shape.line.panels
    rows: dict[str, list[Node]] = {"b": [], "t": []}
    places: dict[Node, tuple[float, float]] = {}
    for number, coordinate in enumerate(topology.bottom):
        rows["b"].append(("b", number))
        places["b", number] = shape.place("b", coordinate)
    for number, coordinate in enumerate(topology.top):
        if shape.line.end_posts or 0 < coordinate < panels:
            rows["t"].append(("t", number))
            places["t", number] = shape.place("t", coordinate)
    if not shape.line.end_posts:
        rows["t"] = [rows["b"][0], *rows["t"], rows["b"][-1]]
    chords = {chord: list(pairwise(row)) for chord, row in rows.items()}
    webs = [(web.kind, (("b", web.bottom), ("t", web.top))) for web in topology.webs]
    return places, rows, chords, webs


def solved(name: str, shape: Truss, load: float = 1.0) -> Solved:
    """Solve a pattern under ``load`` for each unit of plan length, on the top nodes that stand nearest."""
    topology = PATTERNS[name].topology(shape.line)
    places, rows, chords, webs = nodes_and_bars(topology, shape)
    at = [places[node][0] for node in rows["t"]]
    borders = [0.0, *((a + b) / 2 for a, b in pairwise(at)), shape.span]
    loads = {node: load * (borders[n + 1] - borders[n]) for n, node in enumerate(rows["t"])}
    first, last = rows["b"][0], rows["b"][-1]
    forces = solve(
        places,
        [*chords["b"], *chords["t"], *(bar for _, bar in webs)],
        {node: (0.0, -value) for node, value in loads.items()},
        [(first, "x"), (first, "y"), (last, "y")],
    )
    return Solved(places, loads, chords, webs, forces)


def between(low: float, high: float) -> st.SearchStrategy[float]:
    return st.floats(low, high, allow_nan=False)


@st.composite
def straight_trusses(draw) -> Truss:
    """Level or mono-pitch; parallel chords, or deeper at one end."""
    panels = draw(st.integers(2, 17))
    span, depth = draw(between(6, 60)), draw(between(0.3, 4))
    slope = draw(st.sampled_from([0.0, 1 / 60, -1 / 60]) | between(-0.9, 0.9))
    return straight(panels, span, depth, slope, depth_right=draw(st.none() | between(0.3, 6)))


@st.composite
def gable_trusses(draw) -> Truss:
    """Equal and unequal slopes; parallel chords, pitched with a depth at the eaves, or triangular."""
    panels = draw(st.integers(2, 16))
    ridge = draw(st.just((panels + 1) // 2) | st.integers(1, panels - 1))
    rise = draw(between(0.2, 12))
    form = draw(st.sampled_from(["parallel", "pitched", "triangular"]))
    return gable(
        panels,
        ridge,
        span=draw(between(6, 60)),
        ridge_at=draw(st.just(0.5) | between(0.15, 0.85)),
        rise=rise,
        depth=0.0 if form == "triangular" else draw(between(0.3, 4)),
        bottom_rise=rise if form == "parallel" else draw(st.just(0.0) | between(0, 0.7)) * rise,
    )


@st.composite
def crooked_trusses(draw) -> Truss:
    """Any panel lengths, any heights of the bottom chord, any depths."""
    panels = draw(st.integers(2, 12))

    def row(count: int, low: float, high: float) -> list[float]:
        return draw(st.lists(between(low, high), min_size=count, max_size=count))

    x = np.concatenate([[0.0], np.cumsum(row(panels, 0.5, 6))])
    bottom = np.array(row(panels + 1, -3, 3))
    return truss(x, bottom, bottom + row(panels + 1, 0.3, 4))


@st.composite
def lines(draw) -> TrussLine:
    """Any line, with leverages from few values so that ties are common."""
    meet = draw(st.booleans())
    panels = draw(st.integers(2 if meet else 1, 12))
    ridge = draw(st.none() | st.integers(1, panels - 1)) if panels > 1 else None
    leverage = draw(st.lists(st.integers(0, 4), min_size=panels + 1, max_size=panels + 1))
    top, bottom = (draw(st.booleans()) and ridge is not None for _ in "tb")
    return TrussLine(panels, ridge, top, bottom, tuple(map(float, leverage)), end_posts=not meet)


def takes(name: str, line: TrussLine) -> bool:
    return not (PATTERNS[name].needs_even_panels and line.ridge is None and line.panels % 2)


SPECIMENS = {
    "level, even": straight(6, 18.0, 1.8),
    "level, odd": straight(7, 24.5, 1.6),
    "mono-pitch, deeper to the right": straight(8, 26.0, 1.1, 0.07, depth_right=2.3),
    "parallel gable": gable(10, 5, span=30.0, ridge_at=0.5, rise=1.6, depth=1.5, bottom_rise=1.6),
    "unequal parallel gable": gable(9, 4, span=27.3, ridge_at=0.41, rise=2.2, depth=1.4, bottom_rise=2.2),
    "pitched, level bottom": gable(8, 4, span=25.0, ridge_at=0.5, rise=2.4, depth=0.9),
    "pitched, unequal, rising bottom": gable(
        11, 4, span=31.0, ridge_at=0.34, rise=3.1, depth=0.8, bottom_rise=1.2
    ),
    "triangular": gable(6, 3, span=18.0, ridge_at=0.5, rise=3.0, depth=0.0),
    "triangular, unequal": gable(7, 3, span=20.0, ridge_at=0.38, rise=4.0, depth=0.0, bottom_rise=0.9),
}
