"""The frames at the two ends: rafters on posts, or the inner frame with posts below it."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from shedbim.description.models import Description, RafterGable
from shedbim.expand.frame import Frame, Upright, end_wall_face
from shedbim.expand.frames import inner_frame
from shedbim.expand.joints.post_head import head_room
from shedbim.expand.kits import Meeting, Meets, Member
from shedbim.expand.layout import Layout
from shedbim.expand.rafter_frames import rafter_frame
from shedbim.expand.roof_places import post_places
from shedbim.expand.sticks import along, stick
from shedbim.expand.truss_chords import to_back
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.sections.profiles import IShape

__all__ = ["gable_frame"]

_LENGTHWISE = (0.0, 1.0, 0.0)


def gable_frame(description: Description, layout: Layout, *, outward: int) -> Frame:
    """Give the frame at one end; ``outward`` is -1 on the first line and +1 on the last."""
    gables = description.frames.gables
    if isinstance(gables, RafterGable):
        frame = rafter_frame(description, layout, gables.rafter, gables.grade, Role.GABLE_RAFTER)
    else:
        frame = inner_frame(description, layout)
    members, meetings, places = [], [], []
    for number, x in enumerate(post_places(description, layout), start=1):
        member, joints = _post(description, layout, frame, x, f"gable post/{number}", outward)
        members.append(member)
        meetings.extend(joints)
        places.append(Upright(x, float(joints[-1].point[2]), member.name))
    kit = replace(
        frame.kit, members=(*frame.kit.members, *members), meetings=(*frame.kit.meetings, *meetings)
    )
    return replace(frame, kit=kit, posts=tuple(places))


def _post(
    description: Description, layout: Layout, frame: Frame, x: float, name: str, outward: int
) -> tuple[Member, list[Meeting]]:
    """A gable post, its outer face flush with the columns', its head short of the steel above."""
    gables = description.frames.gables
    section = gables.posts
    y = outward * (end_wall_face(description, frame) - section.height / 2)
    over = [p for p in layout.slopes if p.slope.x0 - 1.0 <= x <= p.slope.x1 + 1.0]
    steel = [_underside_line(frame, layout.slopes.index(p), x) for p in over]
    levels = [round(z + (x - x0) * rise, 6) for x0, z, rise in steel]
    lowest = over[levels.index(min(levels))]
    steepest = max(abs(rise) for _, _, rise in steel)
    level = min(levels) - head_room(section, description.connections.post_heads.size, steepest)
    normals = [(-rise, 0.0, 1.0) for _, _, rise in steel]
    if len(normals) == 2 and abs(steel[0][2] - steel[1][2]) < 1e-9:
        normals = normals[:1]
    # A tube ends square under the fin on its cap; an I follows the steel above.
    planes = along(*normals) if isinstance(section.profile, IShape) else None
    bar, place = stick(section, (x, y, layout.base), (x, y, level), _LENGTHWISE, end_planes=planes)
    member = Member(name, Role.GABLE_POST, bar, place, gables.grade, description.finish.frames)
    base = Meeting(JointKind.POST_BASE, (Meets(name, At.START),), np.array([x, y, layout.base]))
    above = frame.lowest_at(layout.slopes.index(lowest), x)
    other = frame.other_of(above)
    more = () if other is None else (Meets(other, At.ALONG),)
    pieces = (Meets(above, At.ALONG), Meets(name, At.END), *more)
    head = Meeting(JointKind.POST_HEAD, pieces, np.array([x, 0.0, level]))
    return member, [base, head]


def _underside_line(frame: Frame, slope: int, x: float) -> tuple[float, float, float]:
    """The line of the lowest face of a gable frame under a slope at x: x, z and rise over run."""
    name = frame.lowest_at(slope, x)
    member = next(m for m in frame.kit.all_members() if m.name == name)
    origin, direction = member.placement[:, 3], member.placement[:, 0]
    rise = float(direction[2] / direction[0])
    low = origin[2] - to_back(member.bar.section) / abs(float(direction[0]))
    return float(origin[0]), float(low), rise
