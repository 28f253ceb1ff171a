"""Whether the heads of gable posts come where the roof bracing, or a strut to it, takes their force."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.bracing.braced import braced
from shedbim.checks.bracing.lines import bays_over, lines_at
from shedbim.checks.finding import Hit
from shedbim.checks.subject import Subject
from shedbim.model.roles import Role

__all__ = ["post_heads"]

Floats = NDArray[np.float64]

#: A joint belongs to a line when its work point is no farther from it along the building, mm.
_AT_LINE = 300.0


def post_heads(subject: Subject) -> Iterator[Hit]:
    """Give the gable posts whose heads are away from every node of the roof bracing and every strut in their bay."""
    posts = subject.having(Role.GABLE_POST)
    bays = braced(subject).bays
    last = len(subject.shed.grid.y) - 1
    lines = lines_at(subject, subject.centres[posts][:, 1])
    limit, source = subject.criteria.limit("post_head_off_node")
    for line, bay in ((0, 0), (last, last - 1)):
        here = posts[lines == line]
        if not here.size:
            continue
        nodes = _nodes(subject, line, bay)
        place = subject.axes[here].max(axis=1)[:, 0]
        away = np.abs(place[:, None] - nodes).min(axis=1, initial=np.inf)
        for post, off in zip(here[away > limit].tolist(), away[away > limit].tolist(), strict=True):
            yield (
                _off_node(subject, post, off, limit, source) if bay in bays else _without_strut(subject, post)
            )


def _nodes(subject: Subject, line: int, bay: int) -> Floats:
    """Where (x, mm) the roof braces and the struts of an end bay meet its gable line."""
    struts = subject.having(Role.STRUT, Role.EAVES_STRUT, Role.VALLEY_STRUT)
    ends = [subject.centres[struts[bays_over(subject, subject.axes[struts][:, :, 1])[:, bay]]][:, 0]]
    braces = subject.having(Role.ROOF_BRACE)
    entries = subject.entries
    rows = np.isin(entries.piece, braces)
    points = subject.joint_points[entries.joint[rows]]
    ends.append(points[np.abs(points[:, 1] - subject.shed.grid.y[line]) < _AT_LINE][:, 0])
    return np.concatenate(ends)


def _off_node(subject: Subject, post: int, off: float, limit: float, source: str) -> Hit:
    return Hit(
        "post-head-off-node",
        (post,),
        subject.axes[post].max(axis=0).tolist(),
        "The head of a gable post is {value} from the nearest node of the roof bracing (at most {limit}): its wind "
        "force bends the steel between.",
        "Let posts and roof bracing agree: frames.gables.post_spacing, bracing.roof.panels.",
        off,
        limit,
        "mm",
        source,
    )


def _without_strut(subject: Subject, post: int) -> Hit:
    return Hit(
        "post-head-without-strut",
        (post,),
        subject.axes[post].max(axis=0).tolist(),
        "The end bay is not braced and no strut runs from the head of this gable post to the braced bay: the purlins "
        "have to carry its wind force.",
        "Brace the end bay, or design the purlins of the end bay for the force: bracing.bays.",
        source="Steel Buildings in Europe, Single-Storey Part 4 (portal frames), p. 27",
    )
