"""The kinds of joint: one function and one row each."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

from shedbim.description.connections import Connections
from shedbim.expand.joints.angle_column import angle_column
from shedbim.expand.joints.angle_node import angle_node, angle_site_node
from shedbim.expand.joints.angle_splice import angle_splice
from shedbim.expand.joints.apex import apex
from shedbim.expand.joints.base import fixed_base, pinned_base, post_base
from shedbim.expand.joints.brace_crossing import brace_crossing
from shedbim.expand.joints.brace_gusset import brace_gusset
from shedbim.expand.joints.cap import column_cap
from shedbim.expand.joints.chord_column import chord_column
from shedbim.expand.joints.chord_splice import chord_splice
from shedbim.expand.joints.cleat import cleat
from shedbim.expand.joints.contract import Connection, Joint
from shedbim.expand.joints.lap import purlin_lap
from shedbim.expand.joints.packed_pair import packed_pair
from shedbim.expand.joints.post_head import post_head
from shedbim.expand.joints.rafter_column import rafter_column
from shedbim.expand.joints.sag_bar import sag_bar_end
from shedbim.expand.joints.stay import flange_stay
from shedbim.expand.joints.strut_end import strut_end
from shedbim.expand.joints.tie_end import tie_end
from shedbim.expand.joints.truss_node import chord_ridge, truss_node
from shedbim.expand.joints.web_splice import web_splice
from shedbim.model.joints import JointKind

__all__ = ["JOINTS", "JointRow"]


@dataclass(frozen=True)
class JointRow:
    """How a kind of joint is made, and whether it is told of the members near by.

    ``sees_neighbours`` are those fastened to its carrier; ``sees_all_round`` adds those fastened to its other
    members.

    ``make`` gives plates, bolts and welds for the members that meet; it raises ``DescriptionError`` through
    ``impossible`` where the description leaves no room for them.
    """

    make: Callable[[Joint, Connections], Connection]
    sees_neighbours: bool = False
    sees_all_round: bool = False


JOINTS: Mapping[JointKind, JointRow] = {
    JointKind.PINNED_BASE: JointRow(pinned_base, sees_neighbours=True),
    JointKind.FIXED_BASE: JointRow(fixed_base, sees_neighbours=True),
    JointKind.POST_BASE: JointRow(post_base, sees_neighbours=True),
    JointKind.COLUMN_CAP: JointRow(column_cap),
    JointKind.POST_HEAD: JointRow(post_head),
    JointKind.NODE: JointRow(truss_node),
    JointKind.CHORD_RIDGE: JointRow(chord_ridge),
    JointKind.RAFTER_COLUMN: JointRow(rafter_column, sees_neighbours=True, sees_all_round=True),
    JointKind.APEX: JointRow(apex, sees_neighbours=True, sees_all_round=True),
    JointKind.CHORD_COLUMN: JointRow(chord_column, sees_neighbours=True, sees_all_round=True),
    JointKind.CHORD_SPLICE: JointRow(chord_splice),
    JointKind.WEB_SPLICE: JointRow(web_splice),
    JointKind.ANGLE_NODE: JointRow(angle_node),
    JointKind.ANGLE_SITE_NODE: JointRow(angle_site_node),
    JointKind.ANGLE_COLUMN: JointRow(angle_column),
    JointKind.ANGLE_SPLICE: JointRow(angle_splice),
    JointKind.PACKED_PAIR: JointRow(packed_pair),
    JointKind.PURLIN_CLEAT: JointRow(cleat),
    JointKind.PURLIN_LAP: JointRow(purlin_lap),
    JointKind.RAIL_CLEAT: JointRow(cleat),
    JointKind.BRACE_GUSSET: JointRow(brace_gusset, sees_neighbours=True),
    JointKind.BRACE_CROSSING: JointRow(brace_crossing),
    JointKind.STRUT_END: JointRow(strut_end),
    JointKind.TIE_END: JointRow(tie_end),
    JointKind.SAG_BAR_END: JointRow(sag_bar_end),
    JointKind.FLANGE_STAY: JointRow(flange_stay),
}
