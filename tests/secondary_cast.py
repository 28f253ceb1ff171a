"""Purlins and rails on what carries them, laid out by hand: the cast of the tests of their joints."""

from __future__ import annotations

from math import cos, radians, sin

import numpy as np
from joint_bench import met

from shedbim.expand.cold_formed import Course, Stretch, course_bar
from shedbim.expand.joints.contract import Joint, Met
from shedbim.expand.sticks import along, stick
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.sections import catalogue

ACROSS, LENGTHWISE, UP = np.eye(3)
GAP = 6.0


def steel(role: Role, name: str, start: object, end: object, up: object, **cuts: object) -> Met:
    """A member that runs through the work point's neighbourhood, or ends there."""
    return met(role, stick(catalogue.section(name), start, end, up, **cuts), At.ALONG)


def carried(course: Course, name: str, role: Role, how: str, overhang: float = 140.0) -> tuple[Met, ...]:
    """What meets at the middle of a line: ``butted``, ``through`` or a ``lone`` end ``overhang`` beyond."""
    section = catalogue.section(name)
    near, far = (At.START, At.END) if course.forwards else (At.END, At.START)
    stretches = {
        "butted": ((Stretch(-5400.0, -GAP / 2), far), (Stretch(GAP / 2, 6100.0), near)),
        "through": ((Stretch(-250.0, 6100.0), At.ALONG),),
        "lone": ((Stretch(-overhang, 6100.0), near),),
    }[how]
    found = []
    for stretch, at in stretches:
        member = course_bar(course, stretch, section, role, "S350GD", "galvanized")
        found.append(met(role, (member.bar, member.placement), at))
    return tuple(found)


def purlin_joint(
    carrier: str,
    purlin: str,
    how: str = "butted",
    *,
    pitch: float = 6.0,
    lift: float = 10.0,
    rises: bool = True,
) -> Joint:
    """A purlin over a rafter or chord on a slope of ``pitch`` degrees that rises to +x, or falls."""
    slope = radians(pitch if rises else -pitch)
    direction, normal = np.array([cos(slope), 0, sin(slope)]), np.array([-sin(slope), 0, cos(slope)])
    course = Course("purlin", np.zeros(3), direction if rises else -direction, normal, LENGTHWISE)
    sections = [catalogue.section(name) for name in (carrier, purlin)]
    down = sections[1].height / 2 + lift + sections[0].height / 2
    middle = -normal * down
    role = Role.RAFTER if carrier.startswith("IPE") else Role.TOP_CHORD
    rafter = steel(role, carrier, middle - direction * 4000, middle + direction * 5000, UP)
    return Joint(JointKind.PURLIN_CLEAT, (rafter, *carried(course, purlin, Role.PURLIN, how)))


def head_joint(
    column: str, purlin: str, aside: float, *, pitch: float = 5.0, rises: bool = True, valley: bool = False
) -> Joint:
    """A purlin over the head of a column whose axis is ``aside`` from it, its top along the slope or level."""
    slope = radians(pitch if rises else -pitch)
    direction, normal = np.array([cos(slope), 0, sin(slope)]), np.array([-sin(slope), 0, cos(slope)])
    course = Course("purlin", np.zeros(3), direction if rises else -direction, normal, LENGTHWISE)
    foot = -normal * (catalogue.section(purlin).height / 2 + 10.0)
    # Where the roof's upper steel face crosses the column's axis.
    top = foot + direction * (aside - foot[0]) / direction[0]
    post = steel(
        Role.COLUMN, column, top - UP * 6000, top, ACROSS, end_planes=along(UP if valley else normal)
    )
    return Joint(JointKind.PURLIN_CLEAT, (post, *carried(course, purlin, Role.PURLIN, "butted")))


def rail_joint(
    column: str,
    rail: str,
    how: str = "butted",
    *,
    outward: float = 1.0,
    lift: float = 10.0,
    overhang: float = 140.0,
) -> Joint:
    """A rail of a side wall on the outer face of a column; ``outward`` is the sign of x there."""
    course = Course("rail", np.zeros(3), -UP, ACROSS * outward, LENGTHWISE)
    sections = [catalogue.section(name) for name in (column, rail)]
    x = -outward * (sections[0].height / 2 + lift + sections[1].height / 2)
    post = steel(Role.COLUMN, column, (x, 0, -3000), (x, 0, 4000), ACROSS)
    return Joint(JointKind.RAIL_CLEAT, (post, *carried(course, rail, Role.SIDE_RAIL, how, overhang)))


def corner_joint(column: str, rail: str, *, stands_off: float = 0.0) -> Joint:
    """A rail of a gable wall at a corner column, whose flanges it looks at from the side."""
    course = Course("rail", np.zeros(3), -UP, -LENGTHWISE, ACROSS)
    sections = [catalogue.section(name) for name in (column, rail)]
    y = sections[0].width / 2 + 10.0 + stands_off + sections[1].height / 2
    post = steel(Role.COLUMN, column, (0, y, -3000), (0, y, 4000), ACROSS)
    ends = carried(course, rail, Role.GABLE_RAIL, "lone", sections[0].height / 2)
    return Joint(JointKind.RAIL_CLEAT, (post, *ends))
