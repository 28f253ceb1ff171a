"""The cast: every preset as it appears, and tiny sheds with unequal bays, spans and pitches.

Everything is read, expanded and written once in a test session, when it is first asked for.
"""

from __future__ import annotations

from functools import cache
from io import BytesIO, StringIO
from pathlib import Path
from typing import Any

from keeping import kept
from ruamel.yaml import YAML

from shedbim.description import Description, read_text
from shedbim.expand import expand
from shedbim.model.levels import at_level
from shedbim.model.shed import Shed
from shedbim.writers.ifc import write

__all__ = [
    "CAST",
    "PRESETS",
    "SHORT",
    "TINY",
    "changed",
    "described",
    "members",
    "members_of",
    "model_bytes",
    "shed_of",
    "shortened",
    "text_of",
]

_FOLDER = Path(__file__).parents[1] / "presets"

#: One span; trusses that follow unequal slopes; a bay by the gable is the longest.
_LOPSIDED = """
project: {id: 3f2f0c1e-51a5-4d0b-8a7e-0b6a4b3d7a01, name: Lopsided Store, number: T1}
building:
  spans: [19.3 m]
  bays: [6.9 m, 5.2 m, 6.1 m]
  eaves: 5.8 m
  roof: {form: gable, pitch: 7 deg, pitch_right: 12 deg}
frames:
  columns: {section: HEA 300}
  roof:
    system: truss
    pattern: pratt
    panels: 9
    depth: 1.5 m
    top_chord: SHS 140x140x6
    bottom_chord: RHS 140x80x6
    end_diagonals: SHS 80x80x5
    diagonals: SHS 60x60x4
    posts: CHS 60.3x4
  gables: {system: rafter, rafter: IPE 240, posts: IPE 200, post_spacing: 5.2 m}
purlins: {section: Z 175x65x18x2.0, spacing: 1.6 m, sag_bars: 2}
rails: {section: C 175x65x18x1.6, spacing: 1.7 m}
bracing:
  bays: [first]
  roof: {pattern: crossed, section: L 60x60x6}
  walls: {pattern: crossed, section: L 70x70x7}
"""

#: Two spans with a valley between them; pitched trusses of three unequal depths; tubes for braces.
_VALLEY = """
project: {id: 3f2f0c1e-51a5-4d0b-8a7e-0b6a4b3d7a02, name: Valley Works, number: T2}
building:
  spans: [16.4 m, 21 m]
  bays: [5.4 m, 6.6 m]
  letters: [K, L, M]
  numbers: ["10", "20", "30"]
  eaves: 6.2 m
  roof: {form: gable, pitch: 9 deg, pitch_right: 13 deg}
frames:
  columns: {section: SHS 250x250x10}
  roof:
    system: truss
    shape: pitched
    bottom_pitch: 1.5 deg
    pattern: howe
    panels: 11
    depth: 1.1 m
    top_chord: SHS 140x140x8
    bottom_chord: SHS 120x120x6
    diagonals: SHS 70x70x4
    posts: SHS 60x60x4
  gables: {system: same, posts: SHS 160x160x8, post_spacing: 4.4 m}
purlins: {section: C 200x75x20x2.0, spacing: 1.7 m, set_out: nodes, valley_offset: 420 mm}
rails: {section: Z 200x75x20x2.0, spacing: 1.75 m, sag_bars: 1}
bracing:
  bays: [last]
  roof: {pattern: crossed, section: CHS 76.1x4, panels: 3}
  walls: {pattern: single, section: CHS 88.9x4, tiers: 2}
"""

#: One plane over two unequal spans, the high side on the left; round columns, solid rafters.
_LEAN = """
project: {id: 3f2f0c1e-51a5-4d0b-8a7e-0b6a4b3d7a03, name: Leaning Shed, number: T3}
building:
  spans: [11.2 m, 8.7 m]
  bays: [4.8 m, 5.5 m, 8.3 m, 5.1 m]
  eaves: 4.4 m
  roof: {form: mono-pitch, pitch: 6.5 deg, high: left}
frames:
  columns: {section: CHS 244.5x10}
  roof: {system: rafter, section: IPE 330}
  gables: {system: rafter, rafter: IPE 220, posts: HEA 180, post_spacing: 3.9 m}
purlins: {section: C 175x65x18x2.0, spacing: 1.4 m, eaves_offset: 70 mm, gap: 8 mm, lift: 14 mm}
rails: {section: C 150x65x18x1.6, spacing: 1.3 m, gap: 4 mm, lift: 8 mm, base_offset: 0.5 m}
bracing:
  bays: [2, last]
  roof: {pattern: single, section: CHS 76.1x4}
  walls: {pattern: crossed, section: CHS 88.9x4, lines: outer}
"""

#: A flat roof over trusses with a post at every node, in a single bay: there is no inner frame.
_FLAT = """
project: {id: 3f2f0c1e-51a5-4d0b-8a7e-0b6a4b3d7a04, name: Flat Kiosk, number: T4}
building:
  spans: [12.6 m]
  bays: [6.3 m]
  eaves: 3.9 m
  roof: {form: flat, fall: "1:50", high: left}
frames:
  columns: {section: UB 305x165x40}
  roof:
    system: truss
    pattern: warren-with-posts
    panels: 8
    depth: 1.25 m
    top_chord: SHS 120x120x5
    bottom_chord: SHS 100x100x5
    diagonals: CHS 60.3x4
    posts: SHS 50x50x4
  gables: {system: same, posts: IPE 180}
purlins: {section: Z 150x65x18x1.6, spacing: 1.5 m}
rails: {section: C 150x65x18x1.6, spacing: 1.4 m}
bracing:
  roof: {pattern: crossed, section: L 60x60x6}
  walls: {pattern: crossed, section: L 60x60x6}
"""

PRESETS: dict[str, str] = {
    path.stem: path.read_text(encoding="utf-8") for path in sorted(_FOLDER.glob("*.yaml"))
}
TINY: dict[str, str] = {"lopsided": _LOPSIDED, "valley": _VALLEY, "lean": _LEAN, "flat": _FLAT}
#: Presets with fewer bays and spans: the same kinds of parts and joints, fewer of each.
SHORT: dict[str, dict[str, Any]] = {
    "boat-hall": {"building__bays": ["5.5 m", "6.4 m", "6.4 m", "5.9 m"], "bracing__bays": ["first", "last"]},
    "depot": {"building__bays": ["6.3 m", "7.2 m", "6.6 m", "5.8 m"]},
    "distribution-hall": {
        "building__bays": ["6.5 m", "6 m", "7.5 m"],
        "building__spans": ["30 m", "28.5 m"],
    },
    "packing-house": {"building__bays": ["6.2 m", "6.8 m", "6.4 m", "6 m"]},
    "seed-store": {"building__bays": ["7 m", "2 x 5.75 m", "7 m"]},
}
#: Names of all specimens.
CAST: tuple[str, ...] = (*TINY, *PRESETS)


def text_of(name: str) -> str:
    """Give the description of a specimen as its author wrote it."""
    return TINY[name] if name in TINY else PRESETS[name]


@cache
def described(name: str) -> Description:
    """Give the description of a specimen, read and checked."""
    return read_text(text_of(name), name)


@cache
def shed_of(name: str) -> Shed:
    """Give the building of a specimen, its connections made."""
    return expand(described(name))


def members(description: Description) -> Shed:
    """Give the members alone of the building that a description means, as their joints leave them."""
    return at_level(expand(description), "outline")


@cache
def members_of(name: str) -> Shed:
    """Give the members alone of a specimen, as their joints leave them."""
    return at_level(shed_of(name), "outline")


@kept
def model_bytes(name: str, schema: str = "IFC4") -> bytes:
    """Give the model file of a specimen as it is written with every bolt and hole."""
    sink = BytesIO()
    write(shed_of(name), sink, schema=schema)
    return sink.getvalue()


@cache
def shortened(name: str) -> Shed:
    """Give the building of a specimen with fewer bays where it has many; see ``SHORT``."""
    return expand(changed(name, **SHORT[name])) if name in SHORT else shed_of(name)


def changed(name: str, **fields: Any) -> Description:
    """Give the description of a specimen with other values; ``building__bays=...`` names building.bays.

    None leaves a field out.
    """
    data = YAML(typ="safe", pure=True).load(text_of(name))
    for path, value in fields.items():
        *outer, last = path.split("__")
        place = data
        for step in outer:
            place = place.setdefault(step, {})
        if value is None:
            place.pop(last, None)
        else:
            place[last] = value
    sink = StringIO()
    YAML(typ="safe", pure=True).dump(data, sink)
    return read_text(sink.getvalue(), name)
