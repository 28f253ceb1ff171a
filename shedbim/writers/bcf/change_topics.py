"""Changes as topics for other trades: one for what changed in one way in pieces of one role."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterator
from uuid import UUID, uuid5

import numpy as np

from shedbim.checks.finding import Place, Point
from shedbim.checks.whereabouts import whereabouts
from shedbim.model.identity import namespace
from shedbim.model.shed import Shed
from shedbim.revisions.change_groups import ChangeGroup
from shedbim.revisions.changes import Changes, Kind
from shedbim.writers.bcf.sight import Sight, Surroundings
from shedbim.writers.bcf.snapshot import snapshot
from shedbim.writers.bcf.topics import CHANGE, STATES, Component, Topic, Viewpoint
from shedbim.writers.bcf.xml import line, paragraphs
from shedbim.writers.comparison import Comparison

__all__ = ["change_topics"]

#: Priority of a topic by its kind of change: what stands elsewhere, or is no longer the steel it was, others must know.
_PRIORITIES = {Kind.REMARKED: "Low", Kind.REJOINED: "Low", Kind.ALTERED: "Low", Kind.RESHAPED: "Medium"}
_MOST_COMPONENTS = 1000
_MOST_SNAPSHOTS = 25
_MOST_LINES = 20
#: How a place is looked at where there is no building to look round in: from above, towards the far left.
_DIRECTION, _REACH = (-0.5, 0.6, -0.62), 4000.0


def change_topics(comparison: Comparison) -> tuple[Topic, ...]:
    """Give a topic for each kind of change and role, in the order of the groups.

    Its id is made from the project, kind and role: the same topic in every later comparison.
    """
    sorted_out: dict[tuple[Kind, str], list[ChangeGroup]] = defaultdict(list)
    for group in comparison.groups:
        sorted_out[group.kind, group.role].append(group)
    around = None if comparison.drawn is None else Surroundings(comparison.drawn)
    return tuple(
        _topic(comparison, around, kind, role, groups, draw=number < _MOST_SNAPSHOTS)
        for number, ((kind, role), groups) in enumerate(sorted_out.items())
    )


def _topic(
    comparison: Comparison,
    around: Surroundings | None,
    kind: Kind,
    role: str,
    groups: list[ChangeGroup],
    *,
    draw: bool,
) -> Topic:
    changes = comparison.changes
    rows = [row for group in groups for row in group.rows.tolist()]
    name = uuid5(namespace(changes.after.project_id), f"change/{kind.name}/{role}")
    pieces = f"{len(rows):,} {'piece' if len(rows) == 1 else 'pieces'}"
    return Topic(
        id=name,
        title=line(f"{role}: {kind.word}, {pieces}"),
        kind=CHANGE,
        state=STATES[0],
        priority=_PRIORITIES.get(kind, "High"),
        labels=tuple(filter(None, (kind.word, line(role)))),
        date=comparison.imprint.stamp,
        description=paragraphs(list(_description(comparison, groups))),
        comment="",
        files=(),
        viewpoint=_viewpoint(comparison, around, name, rows, f"{role} {kind.word}", draw=draw),
    )


def _description(comparison: Comparison, groups: list[ChangeGroup]) -> Iterator[str]:
    before, after = comparison.names
    yield f"From {before} to {after}:"
    for group in groups[:_MOST_LINES]:
        yield f"- {group.says}, {group.mass:,.0f} kg;"
    if len(groups) > _MOST_LINES:
        yield f"- and {len(groups) - _MOST_LINES:,} more, which the file of changes lists."


def _viewpoint(
    comparison: Comparison,
    around: Surroundings | None,
    topic: UUID,
    rows: list[int],
    about: str,
    *,
    draw: bool,
) -> Viewpoint:
    """Where the heaviest piece stands, or stood; pieces that were removed are named, though nothing shows them."""
    changes, shed = comparison.changes, comparison.drawn
    first = _heaviest(changes, rows)
    sight, loud = Sight(_point(changes, first), _unit(), _REACH, np.zeros(0, np.int64)), tuple[int, ...]()
    if around is not None and shed is not None:
        found = _drawn(changes, shed, first)
        loud = () if found < 0 else (found,)
        sight = around.sight(Place(_middle(shed, found) if loud else sight.point, loud))
    components = [Component(changes.id(row), line(changes.key(row))) for row in rows[:_MOST_COMPONENTS]]
    picture = None
    if draw and shed is not None and loud:
        picture = snapshot(shed, sight, loud, f"{about} · {whereabouts(shed.grid, sight.point)}")
    where = [round(each, 3) for each in (*sight.point, *sight.direction, sight.reach)]
    x, y, z = (each / 1000 for each in sight.point)
    return Viewpoint(
        id=uuid5(topic, f"{where} {[each.global_id for each in components]}"),
        target=(x, y, z),
        direction=sight.direction,
        reach=sight.reach / 1000,
        selected=tuple(components[:1]),
        further=tuple(components[1:]),
        picture=picture,
    )


def _heaviest(changes: Changes, rows: list[int]) -> int:
    """The row of the heaviest piece, the first of equals."""

    def mass(row: int) -> float:
        new, old = int(changes.new[row]), int(changes.old[row])
        state, piece = (changes.after, new) if new >= 0 else (changes.before, old)
        return round(state.things[int(state.thing[piece])].mass, 3)

    return max(rows, key=mass)


def _point(changes: Changes, row: int) -> Point:
    """Where the frame of a piece is, or was."""
    new, old = int(changes.new[row]), int(changes.old[row])
    state, piece = (changes.after, new) if new >= 0 else (changes.before, old)
    x, y, z = state.placement[piece, :, 3].tolist()
    return x, y, z


def _drawn(changes: Changes, shed: Shed, row: int) -> int:
    """Index of a piece among those that are drawn, -1 where it is not."""
    key = changes.key(row)
    return shed.pieces.keys.index(key) if int(changes.new[row]) >= 0 and key in shed.pieces.keys else -1


def _middle(shed: Shed, piece: int) -> Point:
    place = shed.pieces.placement[piece]
    middle = np.mean(shed.parts[int(shed.pieces.part[piece])].body.box, axis=0)
    x, y, z = (place[:, :3] @ middle + place[:, 3]).tolist()
    return x, y, z


def _unit() -> Point:
    x, y, z = (np.array(_DIRECTION) / np.linalg.norm(_DIRECTION)).tolist()
    return x, y, z
