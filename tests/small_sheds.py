"""Two sheds so small that a dense matrix holds them: solid rafters with single braces, a truss with crossed ones."""

from __future__ import annotations

from functools import cache

from shedbim.description import read_text
from shedbim.expand import expand
from shedbim.model.shed import Shed

__all__ = ["SMALL", "small_shed"]

_RAFTERS = """
project: {id: 3f2f0c1e-51a5-4d0b-8a7e-0b6a4b3d7b01, name: Handcart Shed, number: S1}
building:
  spans: [7.8 m]
  bays: [4.1 m, 4.7 m]
  eaves: 3.2 m
  roof: {form: gable, pitch: 9 deg}
frames:
  columns: {section: HEA 200}
  roof: {system: rafter, section: IPE 220}
  gables: {system: rafter, rafter: IPE 200, posts: IPE 200, post_spacing: 5 m}
purlins: {section: Z 150x65x18x1.6, spacing: 2.4 m, sag_bars: 0}
rails: {section: C 150x65x18x1.6, spacing: 2.4 m, sag_bars: 0}
bracing:
  bays: [first]
  roof: {pattern: single, section: CHS 76.1x4, panels: 1}
  walls: {pattern: single, section: CHS 76.1x4}
connections: {rafters: {stiffeners: none}}
"""

_TRUSSES = """
project: {id: 3f2f0c1e-51a5-4d0b-8a7e-0b6a4b3d7b02, name: Cart Shed, number: S2}
building:
  spans: [8.4 m]
  bays: [4.6 m, 4.2 m]
  eaves: 3.6 m
  roof: {form: flat, fall: "1:40"}
frames:
  columns: {section: HEA 220}
  roof:
    system: truss
    pattern: pratt
    panels: 6
    depth: 1.0 m
    top_chord: SHS 100x100x5
    bottom_chord: SHS 100x100x5
    diagonals: SHS 50x50x4
    posts: SHS 50x50x4
  gables: {system: same, posts: IPE 200, post_spacing: 5 m}
purlins: {section: Z 150x65x18x1.6, spacing: 2.4 m, sag_bars: 0}
rails: {section: C 150x65x18x1.6, spacing: 2.4 m, sag_bars: 0}
bracing:
  bays: [last]
  roof: {pattern: crossed, section: L 60x60x6, panels: 2}
  walls: {pattern: crossed, section: L 60x60x6}
  ties: {spacing: 5 m}
"""

SMALL: dict[str, str] = {"rafters": _RAFTERS, "trusses": _TRUSSES}


@cache
def small_shed(name: str) -> Shed:
    """Give one of them, its connections made."""
    return expand(read_text(SMALL[name], name))
