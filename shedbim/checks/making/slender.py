"""How slender bars are between the joints that hold them.

Limits go by the duty of a bar, for no force is known here: a bar that is only ever in tension may be more slender.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.bracing.chords import CHORD_HOLDS
from shedbim.checks.bracing.held import stretches
from shedbim.checks.finding import Hit
from shedbim.checks.stability.places import a_or_an
from shedbim.checks.subject import FITTED, Subject
from shedbim.model.joints import JointKind
from shedbim.model.roles import Role
from shedbim.sections.profiles import Angle
from shedbim.sections.section import Section

__all__ = ["longest_between", "slender"]

Ints = NDArray[np.int64]
Floats = NDArray[np.float64]

_EVERY = tuple(kind for kind in JointKind if kind is not JointKind.FREE)
_NODES = (
    JointKind.NODE,
    JointKind.CHORD_RIDGE,
    JointKind.CHORD_COLUMN,
    JointKind.WEB_SPLICE,
    JointKind.ANGLE_NODE,
    JointKind.ANGLE_SITE_NODE,
    JointKind.ANGLE_COLUMN,
)
_UNDER_PURLINS = (
    JointKind.PURLIN_CLEAT,
    JointKind.STRUT_END,
    JointKind.CHORD_COLUMN,
    JointKind.ANGLE_COLUMN,
)
_ALONG_WALL = tuple(kind for kind in _EVERY if kind is not JointKind.RAIL_CLEAT)


@dataclass(frozen=True)
class _Rule:
    """Bars of some roles, the limit they are held against, and what divides their length.

    Attributes:
        about: ``least`` takes the least radius of the section; ``y`` and ``z`` that about the section's own axis.
        joints: kinds of joints that hold the bar against buckling so.
    """

    roles: tuple[Role, ...]
    limit: str
    about: str
    joints: tuple[JointKind, ...]


_STRUTS = (Role.STRUT, Role.EAVES_STRUT, Role.VALLEY_STRUT, Role.TIE)
_RULES = (
    _Rule((Role.DIAGONAL, Role.POST), "slenderness_compression", "least", _EVERY),
    _Rule((Role.TOP_CHORD,), "slenderness_compression", "y", _NODES),
    _Rule((Role.TOP_CHORD,), "slenderness_compression", "z", _UNDER_PURLINS),
    _Rule((Role.COLUMN,), "slenderness_compression", "z", _ALONG_WALL),
    _Rule((Role.BOTTOM_CHORD,), "slenderness_tie", "y", _NODES),
    _Rule((Role.GABLE_POST,), "slenderness_wind", "z", _EVERY),
    _Rule(_STRUTS, "slenderness_wind", "least", _EVERY),
    _Rule((Role.ROOF_BRACE, Role.WALL_BRACE), "slenderness_wind", "least", _EVERY),
)
_CHANGE = {
    Role.DIAGONAL: "frames.roof.diagonals",
    Role.POST: "frames.roof.posts",
    Role.TOP_CHORD: "frames.roof.top_chord",
    Role.BOTTOM_CHORD: "frames.roof.bottom_chord or bracing.ties.spacing",
    Role.COLUMN: "frames.columns.section",
    Role.GABLE_POST: "frames.gables.posts",
    Role.TIE: "bracing.ties.section",
    Role.STRUT: "bracing.struts.section",
    Role.EAVES_STRUT: "bracing.eaves_strut.section",
    Role.VALLEY_STRUT: "bracing.eaves_strut.section",
    Role.ROOF_BRACE: "bracing.roof.section",
    Role.WALL_BRACE: "bracing.walls.section",
}


def slender(subject: Subject) -> Iterator[Hit]:
    """Give the bars whose length between joints over their radius of gyration is more than their duty allows."""
    for rule in _RULES:
        pieces = subject.having(*rule.roles)
        lengths = longest_between(subject, pieces, rule.joints)
        parts = subject.shed.pieces.part[pieces]
        for part in np.unique(parts).tolist():
            section = subject.shed.parts[part].bar.section
            name = rule.limit
            # Crossed angles are tension only, tubes take compression: Single-Storey Part 4 (portal frames), p. 50.
            if rule.limit == "slenderness_wind" and isinstance(section.profile, Angle):
                name = "slenderness_tension"
            rows = parts == part
            ratio = lengths[rows] / _radius(section, rule.about)
            yield from _hits(subject, pieces[rows], ratio, name)
    yield from _bottom_chords(subject)


def _bottom_chords(subject: Subject) -> Iterator[Hit]:
    """Bottom chords sideways, over all bars of a line."""
    for stretch in stretches(subject, [Role.BOTTOM_CHORD], CHORD_HOLDS):
        section = subject.shed.parts[int(subject.shed.pieces.part[stretch.piece])].bar.section
        ratio = np.array([stretch.length / _radius(section, "z")])
        yield from _hits(subject, np.array([stretch.piece]), ratio, "slenderness_tie")


def _hits(subject: Subject, pieces: Ints, ratio: Floats, name: str) -> Iterator[Hit]:
    limit, source = subject.criteria.limit(name)
    for piece, value in zip(pieces[ratio > limit].tolist(), ratio[ratio > limit].tolist(), strict=True):
        role = subject.role[piece]
        yield Hit(
            "bar-too-slender",
            (piece,),
            subject.point(piece),
            f"{a_or_an(role.word)} is {{value}} times as long between its joints as its radius of gyration "
            f"(at most {{limit}} for its duty).",
            f"Use a stiffer section or hold it more often: {_CHANGE[role]}.",
            value,
            limit,
            "",
            source,
            about=role.word,
        )


def _radius(section: Section, about: str) -> float:
    """Radius of gyration, mm; of two angles back to back where chords are angles, as they stand in a truss."""
    if about == "least":
        return section.radius_least
    if about == "y":
        return section.radius_y
    if isinstance(section.profile, Angle):
        # Two angles heel to heel bend sideways about the plane between them; the gap is left out.
        return float(np.hypot(section.radius_z, section.outline.bounds[0]))
    return section.radius_z


def longest_between(subject: Subject, pieces: Ints, kinds: tuple[JointKind, ...]) -> Floats:
    """Give the longest stretch of each bar (n,) between joints of some kinds or its ends, mm along its axis."""
    ends = subject.axes[pieces]
    run = ends[:, 1] - ends[:, 0]
    length = np.linalg.norm(run, axis=1)
    row_of = np.full(len(subject.shed.pieces), -1)
    row_of[pieces] = np.arange(len(pieces))
    entries = subject.entries
    of_kind = np.array([kind in kinds for kind in subject.joint_kinds], bool)
    rows = (entries.at != FITTED) & (row_of[entries.piece] >= 0) & of_kind[entries.joint]
    bar = row_of[entries.piece[rows]]
    away = subject.joint_points[entries.joint[rows]] - ends[bar, 0]
    place = np.clip((away * run[bar]).sum(axis=1) / length[bar], 0.0, length[bar])
    every = np.concatenate([np.arange(len(pieces))] * 2 + [bar])
    places = np.concatenate([np.zeros(len(pieces)), length, place])
    order = np.lexsort((places, every))
    step = np.diff(places[order])
    same = np.diff(every[order]) == 0
    longest = np.zeros(len(pieces))
    np.maximum.at(longest, every[order][1:][same], step[same])
    return longest
