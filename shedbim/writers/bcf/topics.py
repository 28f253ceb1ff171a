"""Findings as topics: title, description, state and viewpoint of each, before they take the form of a version."""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from uuid import UUID, uuid5

import numpy as np

from shedbim.checks.finding import Finding, Place
from shedbim.limits import CODES, Severity
from shedbim.model.identity import piece_ids
from shedbim.model.other_trades import OtherElement
from shedbim.model.shed import Shed
from shedbim.writers.bcf.sight import Sight, Surroundings
from shedbim.writers.bcf.snapshot import snapshot
from shedbim.writers.bcf.xml import line, paragraphs
from shedbim.writers.finding_words import (
    few,
    finding_ids,
    limit_text,
    marks_of,
    of_the_whole,
    value_text,
    where,
)
from shedbim.writers.imprint import Imprint

__all__ = [
    "AUTHOR",
    "CHANGE",
    "LABELS",
    "PRIORITIES",
    "STATES",
    "TYPES",
    "Component",
    "Topic",
    "Viewpoint",
    "topics_of",
]

#: Topics are written by the program, for nobody named.
AUTHOR = "shedbim"
#: Type and priority of a topic by the severity of its finding.
TYPES = {Severity.ERROR: "Error", Severity.WARNING: "Warning", Severity.NOTE: "Note"}
PRIORITIES = {Severity.ERROR: "High", Severity.WARNING: "Medium", Severity.NOTE: "Low"}
#: Type of a topic that tells of a change.
CHANGE = "Change"
#: State of a topic while its finding is open, and when it is waived.
STATES = ("Open", "Closed")
#: Every label a topic may have: areas and codes of findings.
LABELS = tuple(dict.fromkeys([*(code.area for code in CODES.values()), *CODES]))

#: Places that a description lists; the file of findings lists all.
_MOST_PLACES = 20
_MOST_MARKS = 6
#: The standard's guide asks for no more components than this in a viewpoint.
_MOST_COMPONENTS = 1000
#: Topics that have a snapshot, the severe first: each takes about half a second to draw.
_MOST_SNAPSHOTS = 50
_LONGEST_TITLE = 160
#: A GlobalId as IFC writes it; that of another's model is its author's text.
_GLOBAL_ID = re.compile(r"[0-3][0-9A-Za-z_$]{21}")


@dataclass(frozen=True)
class Component:
    """A thing in a viewpoint: its GlobalId in the model file, and its key; empty for what others have modelled."""

    global_id: str
    key: str


@dataclass(frozen=True)
class Viewpoint:
    """What a reader is shown.

    Attributes:
        id: made from what is shown: another one once that changes.
        target: in the middle of the view, m, in the coordinates of the model file.
        direction: the way the eye looks, a unit vector.
        reach: half the side of the cube that the view shows, m.
        selected: the pieces of the worst place, and what others have modelled there.
        further: the pieces of the other places.
        picture: PNG bytes; None where there is no snapshot.
    """

    id: UUID
    target: tuple[float, float, float]
    direction: tuple[float, float, float]
    reach: float
    selected: tuple[Component, ...]
    further: tuple[Component, ...]
    picture: bytes | None


@dataclass(frozen=True)
class Topic:
    """One finding as it is told.

    Attributes:
        date: ISO 8601.
        comment: why it is waived; empty while it is open.
        files: names of other trades' models that it speaks of.
        viewpoint: None for what is said of no place in particular.
    """

    id: UUID
    title: str
    kind: str
    state: str
    priority: str
    labels: tuple[str, ...]
    date: str
    description: str
    comment: str
    files: tuple[str, ...]
    viewpoint: Viewpoint | None


def topics_of(shed: Shed, imprint: Imprint, findings: Sequence[Finding]) -> tuple[Topic, ...]:
    """Give the topics of findings, in their order, with their snapshots.

    Coordinates are those of the model file: building axes in metres. Where the shed has a place on the map, the
    model file states it beside the geometry and moves nothing, and neither do topics.
    """
    around = Surroundings(shed)
    ids = finding_ids(shed.project.id, findings)
    return tuple(
        _topic(around, imprint, finding, name, draw=row < _MOST_SNAPSHOTS)
        for row, (finding, name) in enumerate(zip(findings, ids, strict=True))
    )


def _topic(around: Surroundings, imprint: Imprint, finding: Finding, name: UUID, *, draw: bool) -> Topic:
    severity = finding.code.severity
    places, whole = len(finding.places), of_the_whole(finding.places[0])
    title = line(finding.says).removesuffix(".")
    if len(title) > _LONGEST_TITLE:
        title = f"{title[:_LONGEST_TITLE].rstrip()}…"
    return Topic(
        id=name,
        title=f"{title} ({places:,} places)" if places > 1 else title or finding.code.name,
        kind=TYPES[severity],
        state=STATES[bool(finding.waived)],
        priority=PRIORITIES[severity],
        labels=(finding.code.area, finding.code.name),
        date=imprint.stamp,
        description=paragraphs(list(_description(around.shed, finding))),
        comment=line(f"Waived: {finding.waived}") if finding.waived else "",
        files=tuple(filter(None, dict.fromkeys(line(each.file) for each in _others(finding)))),
        viewpoint=_viewpoint(around, finding, name, draw=draw) if not whole else None,
    )


def _description(shed: Shed, finding: Finding) -> Iterator[str]:
    """The lines of a description; each is a sentence."""
    yield finding.says
    if value := value_text(finding):
        limit = limit_text(finding)
        yield f"Measured: {value}; limit: {limit}." if limit else f"Measured: {value}."
    if finding.source:
        yield f"Source of the limit: {finding.source}."
    if finding.change:
        yield f"What to change: {finding.change}"
    count = len(finding.places)
    yield f"At {count:,} places, the worst first:" if count > 1 else "At one place:"
    for place in finding.places[:_MOST_PLACES]:
        yield f"- {_place(shed, place)};"
    if count > _MOST_PLACES:
        yield f"- and {count - _MOST_PLACES:,} more, which the file of findings lists."
    yield f"Code: {finding.code.name} ({finding.code.severity.value}): {finding.code.meaning}"


def _place(shed: Shed, place: Place) -> str:
    """A place in one line: where, and the marks and keys of its pieces."""
    keys = [shed.pieces.keys[piece] for piece in place.pieces]
    words = [where(shed, place)]
    if keys:
        words += [few(marks_of(shed, place.pieces), _MOST_MARKS), few(keys, _MOST_MARKS)]
    return ": ".join(words)


def _viewpoint(around: Surroundings, finding: Finding, topic: UUID, *, draw: bool) -> Viewpoint:
    shed, worst = around.shed, finding.places[0]
    sight = around.sight(worst)
    shown = finding.pieces[:_MOST_COMPONENTS]
    first = set(worst.pieces)
    known = [
        Component(name, line(shed.pieces.keys[piece]))
        for piece, name in zip(shown, _global_ids(shed, shown), strict=True)
    ]
    theirs = [Component(each.guid, "") for each in worst.others if _GLOBAL_ID.fullmatch(each.guid)]
    caption = f"{finding.code.name} · {where(shed, worst)}"
    return Viewpoint(
        id=uuid5(topic, f"{_rounded(sight)} {[each.global_id for each in known + theirs]}"),
        target=_metres(sight.point),
        direction=sight.direction,
        reach=sight.reach / 1000,
        selected=(*(each for each, piece in zip(known, shown, strict=True) if piece in first), *theirs),
        further=tuple(each for each, piece in zip(known, shown, strict=True) if piece not in first),
        picture=snapshot(shed, sight, worst.pieces, caption) if draw else None,
    )


def _others(finding: Finding) -> Iterable[OtherElement]:
    """What others have modelled at the places of a finding."""
    return (each for place in finding.places for each in place.others)


def _global_ids(shed: Shed, pieces: Sequence[int]) -> list[str]:
    """The GlobalIds that pieces have in the model file."""
    return piece_ids(shed.project.id, [shed.pieces.names[piece] for piece in pieces])


def _rounded(sight: Sight) -> str:
    """What a camera shows, to the millimetre: noise of the last digits makes no other viewpoint."""
    return str([round(float(value), 3) for value in (*np.rint(sight.point), *sight.direction, sight.reach)])


def _metres(point: tuple[float, float, float]) -> tuple[float, float, float]:
    x, y, z = point
    return x / 1000, y / 1000, z / 1000
