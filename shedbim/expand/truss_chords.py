"""The chords of a truss: their straight lengths between ends and ridge, and the bars these are made of."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import atan, cos, tan

from shedbim.description.roof_systems import TrussedRoof
from shedbim.expand.kits import Member
from shedbim.expand.sticks import along, stick
from shedbim.expand.web_ends import ChordFace
from shedbim.model.roles import Role
from shedbim.roofs.slope import Slope
from shedbim.sections.profiles import Angle
from shedbim.sections.section import Section

__all__ = [
    "BOTTOM",
    "CHORD_ROLES",
    "TOP",
    "ChordBar",
    "bar_over",
    "chord_bars",
    "chord_faces",
    "chord_member",
    "to_back",
    "to_webs",
    "truss_lifts",
]

BOTTOM, TOP = 0, 1
#: The role of each.
CHORD_ROLES = (Role.BOTTOM_CHORD, Role.TOP_CHORD)
_UP = (0.0, 0.0, 1.0)
_ACROSS = (1.0, 0.0, 0.0)
_SAME = 1e-6  # mm: two computed positions of one thing


@dataclass(frozen=True)
class ChordBar:
    """One bar of a chord.

    Attributes:
        name: of the piece.
        slope: number of the slope of its span that it lies under.
        x_from, x_to: where it begins and ends: at the sawn ends, the ridge, or the middle of a site splice.
        spliced: whether it is spliced at its start and at its end.
        far: of a pair of angles, the name of the one on the side away from the first line; ``name`` is the other.
    """

    name: str
    slope: int
    x_from: float
    x_to: float
    spliced: tuple[bool, bool] = (False, False)
    far: str = ""

    def on_side(self, *, far: bool) -> str:
        """The piece that is met on the side away from the first line, or on the other."""
        return self.far if far and self.far else self.name


def to_back(section: Section) -> float:
    """Give the distance from a chord's axis to its outer face: under the purlins, or the lowest of a truss."""
    return -section.outline.bounds[1] if isinstance(section.profile, Angle) else section.height / 2


def to_webs(section: Section) -> float:
    """Give the distance from a chord's axis to where it ends towards the webs; of an angle to its toe."""
    return section.height - to_back(section)


def _bottom_pitches(options: TrussedRoof, slopes: Sequence[Slope]) -> list[float]:
    """Signed pitch of the bottom chord under each slope of a span.

    Under unequal slopes it is everywhere the same share of the roof's, so that both lengths meet at the ridge.
    """
    if options.shape == "parallel":
        return [s.pitch for s in slopes]
    share = tan(options.bottom_pitch) / tan(abs(slopes[0].pitch))
    return [atan(share * tan(s.pitch)) for s in slopes]


def _bottom_rise(options: TrussedRoof, slopes: Sequence[Slope]) -> float:
    """Axis of the bottom chord above the underside at the column line: its outer half on the steepest slope."""
    return to_back(options.bottom_chord) / min(cos(pitch) for pitch in _bottom_pitches(options, slopes))


def truss_lifts(options: TrussedRoof, slopes: Sequence[Slope]) -> list[float]:
    """Give the height of the top chord's upper face above each slope's own line, mm."""
    axis = _bottom_rise(options, slopes) + options.depth
    return [axis + to_back(options.top_chord) / cos(s.pitch) for s in slopes]


def chord_faces(options: TrussedRoof, slopes: Sequence[Slope], eaves: float, which: int) -> list[ChordFace]:
    """Give the straight lengths of one chord, left to right."""
    rise = _bottom_rise(options, slopes)
    faces = []
    for s, bottom_pitch in zip(slopes, _bottom_pitches(options, slopes), strict=True):
        low_x, low_z = (s.x0, s.z0) if s.rises else (s.x1, s.z1)
        axis = eaves + low_z + rise
        if which == BOTTOM:
            half = to_webs(options.bottom_chord)
            faces.append(ChordFace(s.x0, s.x1, low_x, axis, tan(bottom_pitch), half, 1))
        else:
            half = to_webs(options.top_chord)
            faces.append(ChordFace(s.x0, s.x1, low_x, axis + options.depth, tan(s.pitch), half, -1))
    return faces


def chord_bars(
    faces: Sequence[ChordFace], ends: tuple[float, float], cuts: Sequence[float], role: Role, span: str
) -> list[ChordBar]:
    """Give the bars of a chord, left to right: one for each length, or more where it is cut at x in ``cuts``."""
    bars = []
    for slope, face in enumerate(faces):
        x0, x1 = max(face.x_from, ends[0]), min(face.x_to, ends[1])
        name = f"truss/{role.word}/{span}/{slope + 1}"
        inner = [x for x in cuts if x0 < x < x1]
        stops = [x0, *inner, x1]
        for k in range(len(stops) - 1):
            spliced = (k > 0, k < len(inner))
            own = f"{name}/{k + 1}" if inner else name
            bars.append(ChordBar(own, slope, stops[k], stops[k + 1], spliced))
    return bars


def bar_over(bars: Sequence[ChordBar], x: float) -> ChordBar:
    """Give the bar of a chord over x; where two meet there, the left one."""
    return next((bar for bar in bars if x <= bar.x_to + _SAME), bars[-1])


def chord_member(
    bar: ChordBar, face: ChordFace, options: TrussedRoof, role: Role, finish: str, back: float
) -> Member:
    """Give the member of a bar: ends sawn upright, or square and ``back`` mm before the middle of a splice."""
    section = options.bottom_chord if role is Role.BOTTOM_CHORD else options.top_chord
    x0 = bar.x_from + (back * face.run if bar.spliced[0] else 0.0)
    x1 = bar.x_to - (back * face.run if bar.spliced[1] else 0.0)
    stick_bar, place = stick(
        section, (x0, 0.0, face.axis(x0)), (x1, 0.0, face.axis(x1)), _UP,
        start_planes=None if bar.spliced[0] else along(_ACROSS),
        end_planes=None if bar.spliced[1] else along(_ACROSS),
    )  # fmt: skip
    return Member(bar.name, role, stick_bar, place, options.grade, finish)
