"""How roles carry and how joints hold, as the frame model takes them: the assumptions of the stability checks.

Axes that miss one another at a joint are snapped to one node, on the axis of the piece that carries: a rigid link
would hold rotations that the joint does not. Where a joint could be taken in two ways, the softer one is taken. No
bar passes torque on: each is taken to be held against twisting by its joints and to hold nothing else by it.
"""

from __future__ import annotations

from shedbim.model.joints import JointKind
from shedbim.model.roles import Role
from shedbim.model.shed import Part
from shedbim.sections.profiles import Angle, Flat, Round

__all__ = [
    "BASES",
    "BEAMS",
    "CHORDS",
    "CLEATS",
    "CONTINUOUS",
    "FIXED",
    "LINKS",
    "NODES",
    "PASSED_OVER",
    "SLIDES",
    "STIFF",
    "WEBS",
    "tension_only",
]

#: Bars that bend, in the plane of their frame and sideways; their ends turn freely unless the joint is stiff.
BEAMS = frozenset(
    {
        Role.COLUMN,
        Role.GABLE_POST,
        Role.RAFTER,
        Role.GABLE_RAFTER,
        Role.TOP_CHORD,
        Role.BOTTOM_CHORD,
    }
)

WEBS = frozenset({Role.DIAGONAL, Role.POST})
CHORDS = frozenset({Role.TOP_CHORD, Role.BOTTOM_CHORD})

#: Bars with a pin at either end: webs too, though they are welded, so that each of them counts.
#: Sag bars and flange stays are left out: they line up purlins and hold flanges, and nothing stands by them.
LINKS = WEBS | {
    Role.PURLIN,
    Role.SIDE_RAIL,
    Role.GABLE_RAIL,
    Role.EAVES_STRUT,
    Role.VALLEY_STRUT,
    Role.STRUT,
    Role.ROOF_BRACE,
    Role.WALL_BRACE,
    Role.TIE,
}

#: Supports: no movement; fixed ones no turning either.
BASES = frozenset({JointKind.PINNED_BASE, JointKind.FIXED_BASE, JointKind.POST_BASE})
FIXED = frozenset({JointKind.FIXED_BASE})

#: Beams keep their angle to one another in the plane of the frame: corners and ridges.
STIFF = frozenset(
    {
        JointKind.RAFTER_COLUMN,
        JointKind.APEX,
        JointKind.CHORD_RIDGE,
        JointKind.CHORD_SPLICE,
        JointKind.ANGLE_SPLICE,
    }
)

#: Beams run on sideways too. At a corner they do not: a frame is not to brace the building by its columns' twisting.
CONTINUOUS = STIFF - {JointKind.RAFTER_COLUMN}

#: Where webs meet a chord: the chords run on, the webs are pinned.
NODES = frozenset(
    {
        JointKind.NODE,
        JointKind.ANGLE_NODE,
        JointKind.ANGLE_SITE_NODE,
        JointKind.WEB_SPLICE,
        JointKind.ANGLE_COLUMN,
    }
)

#: Joints of purlins and rails, which stand anywhere along what carries them.
CLEATS = frozenset({JointKind.PURLIN_CLEAT, JointKind.RAIL_CLEAT})

#: The post moves up and down freely in its slotted holes; sideways it is held.
SLIDES = frozenset({JointKind.POST_HEAD})

#: Joints that the model does without: what ends there is a sag bar or a stay, or is held by other joints. Laps and
#: packs fasten bars that lie side by side; without them each stands by itself.
PASSED_OVER = frozenset(
    {
        JointKind.FREE,
        JointKind.COLUMN_CAP,
        JointKind.SAG_BAR_END,
        JointKind.FLANGE_STAY,
        JointKind.PURLIN_LAP,
        JointKind.PACKED_PAIR,
    }
)


def tension_only(part: Part) -> bool:
    """Whether a brace of this part holds in tension alone: angles, flats and rods, not hollow sections.

    Source: Steel Buildings in Europe, Single-Storey Part 4, p. 50 (crossed angles act in tension only, hollow sections
    take compression) and Part 2, p. 26 (flats act in tension only).
    """
    return isinstance(part.bar.section.profile, Angle | Flat | Round)
