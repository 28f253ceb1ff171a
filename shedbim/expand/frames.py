"""Everything that stands on one numbered line: inner frames, and gable frames at the ends."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import ceil, cos

import numpy as np
from numpy.typing import NDArray

from shedbim.description.models import Columns, Description, RafterGable, RafterRoof, TrussRoof
from shedbim.expand.clearances import APEX_SET_BACK, END_PLATE, POST_HEAD_GAP
from shedbim.expand.kits import Kit, Meeting, Member, Meets
from shedbim.expand.layout import Layout, Pitched
from shedbim.expand.sticks import along, stick
from shedbim.expand.trusses import Truss, truss, truss_lifts
from shedbim.geometry.placements import translation
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.roofs.slope import Slope
from shedbim.sections.section import Section

__all__ = ["Frame", "Upright", "end_wall_face", "gable_frame", "inner_frame", "post_places", "roof_lifts"]

Array = NDArray[np.float64]
_UP = (0.0, 0.0, 1.0)
_ACROSS = (1.0, 0.0, 0.0)
_LENGTHWISE = (0.0, 1.0, 0.0)


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
        carriers: name of the piece under the roof surface, one for each slope.
        carrier: its section.
        trusses: one for each span, or none where rafters carry the roof.
        posts: the gable posts, left to right.
    """

    kit: Kit
    carriers: tuple[str, ...]
    carrier: Section
    trusses: tuple[Truss, ...] = ()
    posts: tuple[Upright, ...] = ()


def roof_lifts(description: Description, slopes: Sequence[Slope]) -> list[float]:
    """Give the height of the roof steel's upper face above each slope's own line, mm."""
    roof = description.frames.roof
    if isinstance(roof, TrussRoof):
        by_span = [[s for s in slopes if s.span == span] for span in range(len(description.building.spans))]
        return [lift for each in by_span for lift in truss_lifts(roof, each)]
    return [roof.section.height / cos(s.pitch) for s in slopes]


def inner_frame(description: Description, layout: Layout) -> Frame:
    """Give the frame that stands on every line between the gables."""
    roof = description.frames.roof
    if isinstance(roof, TrussRoof):
        return _truss_frame(description, layout, roof)
    return _rafter_frame(description, layout, roof.section, roof.grade, Role.RAFTER)


def gable_frame(description: Description, layout: Layout, *, outward: int) -> Frame:
    """Give the frame at one end; ``outward`` is -1 on the first line and +1 on the last."""
    gables = description.frames.gables
    if isinstance(gables, RafterGable):
        frame = _rafter_frame(description, layout, gables.rafter, gables.grade, Role.GABLE_RAFTER)
    else:
        frame = inner_frame(description, layout)
    members, meetings, places = [], [], []
    for number, x in enumerate(post_places(description, layout), start=1):
        member, joints = _post(description, layout, frame, x, f"gable post/{number}", outward)
        members.append(member)
        meetings.extend(joints)
        places.append(Upright(x, float(joints[-1].point[2]), member.name))
    kit = Kit(
        frame.kit.members + tuple(members),
        frame.kit.meetings + tuple(meetings),
        frame.kit.assembly,
        frame.kit.origin,
        frame.kit.children,
    )
    return Frame(kit, frame.carriers, frame.carrier, frame.trusses, tuple(places))


def post_places(description: Description, layout: Layout) -> tuple[float, ...]:
    """Give x of the gable posts: every slope in equal parts no longer than the greatest post spacing."""
    spacing = description.frames.gables.post_spacing
    places: list[float] = []
    for pitched in layout.slopes:
        s = pitched.slope
        parts = ceil((s.x1 - s.x0) / spacing - 1e-9)
        places.extend(s.x0 + (s.x1 - s.x0) * k / parts for k in range(1, parts))
        if pitched.right_column < 0:
            places.append(s.x1)
    return tuple(places)


def end_wall_face(description: Description, frame: Frame) -> float:
    """Give how far the steel of an end frame stands out from its line, mm: columns, rafters and posts."""
    return max(description.frames.columns.section.width, frame.carrier.width) / 2


def _columns(description: Description, layout: Layout) -> tuple[list[Member], list[Meeting]]:
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
        meetings.append(
            Meeting(base, (Meets(name, At.START),), np.array([x, 0.0, layout.base]))
        )
        meetings.append(Meeting(JointKind.FREE, (Meets(name, At.END),), np.array([x, 0.0, top])))
    return members, meetings


def _column_half(description: Description) -> float:
    return description.frames.columns.section.height / 2


def _rafter_frame(
    description: Description, layout: Layout, section: Section, grade: str, role: Role
) -> Frame:
    """Columns with a rafter on each slope, from column face to column face or ridge."""
    members, meetings = _columns(description, layout)
    half, names = _column_half(description), []
    finish = description.finish.frames
    for pitched in layout.slopes:
        s = pitched.slope
        x0 = s.x0 + (half + END_PLATE if pitched.left_column >= 0 else APEX_SET_BACK)
        x1 = s.x1 - (half + END_PLATE if pitched.right_column >= 0 else APEX_SET_BACK)
        bar, place = stick(
            section, pitched.point(x0, section.height / 2), pitched.point(x1, section.height / 2), _UP,
            start_planes=along(_ACROSS), end_planes=along(_ACROSS),
        )  # fmt: skip
        name = f"rafter/{pitched.name}"
        names.append(name)
        members.append(Member(name, role, bar, place, grade, finish))
        for column, at, x in ((pitched.left_column, At.START, s.x0), (pitched.right_column, At.END, s.x1)):
            if column >= 0:
                carrier = Meets(f"column/{layout.grid.letters[column]}", At.ALONG)
                point = pitched.point(x, section.height / 2)
                meetings.append(Meeting(JointKind.RAFTER_COLUMN, (carrier, Meets(name, at)), point))
    for left, right, a, b in zip(layout.slopes, layout.slopes[1:], names, names[1:], strict=False):
        if left.right_column < 0:
            point = left.point(left.slope.x1, section.height / 2)
            meetings.append(Meeting(JointKind.APEX, (Meets(a, At.END), Meets(b, At.START)), point))
    return Frame(_frame_kit(members, meetings, layout), tuple(names), section)


def _truss_frame(description: Description, layout: Layout, roof: TrussRoof) -> Frame:
    """Columns with a truss between each pair of them, both chords fastened to the columns."""
    members, meetings = _columns(description, layout)
    half, grid = _column_half(description), layout.grid
    trusses = []
    for span, name in enumerate(layout.span_names):
        slopes = [layout.slopes[i].slope for i in layout.span_slopes(span)]
        faces = (grid.x[span] + half, grid.x[span + 1] - half)
        made = truss(roof, slopes, layout.eaves, name, faces, description.finish.frames)
        trusses.append(made)
        ends = {m.name: m for m in made.kit.members}
        for chords in (made.bottom_chords, made.top_chords):
            for column, chord, at in ((span, chords[0], At.START), (span + 1, chords[-1], At.END)):
                member = ends[chord]
                place = member.bar.axis[0 if at == At.START else 1]
                point = member.placement[:, 3] + member.placement[:, 0] * place
                carrier = Meets(f"column/{grid.letters[column]}", At.ALONG)
                meetings.append(Meeting(JointKind.CHORD_COLUMN, (carrier, Meets(chord, at)), point))
    kit = _frame_kit(members, meetings, layout, [t.kit for t in trusses])
    carriers = tuple(chord for t in trusses for chord in t.top_chords)
    return Frame(kit, carriers, roof.top_chord, tuple(trusses))


def _frame_kit(
    members: Sequence[Member], meetings: Sequence[Meeting], layout: Layout, children: Sequence[Kit] = ()
) -> Kit:
    inner = [meeting for child in children for meeting in child.meetings]
    return Kit(
        tuple(members),
        (*meetings, *inner),
        ("frame", "frame", "site"),
        translation([0.0, 0.0, layout.base]),
        tuple(children),
    )


def _post(
    description: Description, layout: Layout, frame: Frame, x: float, name: str, outward: int
) -> tuple[Member, list[Meeting]]:
    """A gable post, its outer face flush with the columns', its head short of the steel above."""
    gables = description.frames.gables
    section = gables.posts
    y = outward * (end_wall_face(description, frame) - section.height / 2)
    over = [p for p in layout.slopes if p.slope.x0 - 1.0 <= x <= p.slope.x1 + 1.0]
    steel = [_underside_line(frame, layout.slopes.index(p), p) for p in over]
    levels = [round(z + (x - x0) * rise, 6) for x0, z, rise in steel]
    lowest = over[levels.index(min(levels))]
    level = min(levels) - POST_HEAD_GAP
    normals = [(-rise, 0.0, 1.0) for _, _, rise in steel]
    if len(normals) == 2 and abs(steel[0][2] - steel[1][2]) < 1e-9:
        normals = normals[:1]
    bar, place = stick(
        section, (x, y, layout.base), (x, y, level), _LENGTHWISE, end_planes=along(*normals)
    )
    member = Member(name, Role.GABLE_POST, bar, place, gables.grade, description.finish.frames)
    base = Meeting(JointKind.POST_BASE, (Meets(name, At.START),), np.array([x, y, layout.base]))
    above = _lowest_piece(frame, layout.slopes.index(lowest), lowest)
    head = Meeting(
        JointKind.POST_HEAD, (Meets(above, At.ALONG), Meets(name, At.END)), np.array([x, 0.0, level])
    )
    return member, [base, head]


def _lowest_piece(frame: Frame, slope: int, pitched: Pitched) -> str:
    """Name of the lowest piece of a gable frame under a slope."""
    name = frame.carriers[slope]
    if not frame.trusses:
        return name
    made = frame.trusses[pitched.slope.span]
    return made.bottom_chords[made.top_chords.index(name)]


def _underside_line(frame: Frame, slope: int, pitched: Pitched) -> tuple[float, float, float]:
    """The line of the lowest face of a gable frame under a slope: x, z and rise over run."""
    name = _lowest_piece(frame, slope, pitched)
    member = next(m for m in frame.kit.all_members() if m.name == name)
    origin, direction = member.placement[:, 3], member.placement[:, 0]
    rise = float(direction[2] / direction[0])
    low = origin[2] - member.bar.section.height / 2 / float(direction[0])
    return float(origin[0]), float(low), rise
