"""The check against models of other trades: what of the steel they run through, and what is too near to them."""

from __future__ import annotations

from collections.abc import Iterator
from functools import partial

import numpy as np

from shedbim.checks.finding import Hit
from shedbim.checks.others.asks import Ask, ask_of
from shedbim.checks.others.bodies import Bodies, Body, body_of_mesh, local_boxes
from shedbim.checks.others.meetings import Meeting, meetings
from shedbim.checks.others.placing import Placed, placed
from shedbim.checks.subject import Subject
from shedbim.model.other_trades import OtherElement, Remark
from shedbim.model.roles import Role

__all__ = ["trades"]

#: What is cast into concrete or grout: it may be inside what is not a part of the services.
_CAST_IN = (Role.ANCHORS, Role.SHEAR_KEY)

#: What to do about what is said of a whole model.
_REMEDIES = {
    "other-unread": "Ask its author for the file again, as an IFC model, or check that part by eye.",
    "other-unplaced": "Give site.crs and the model one coordinate reference system, or ask its author for its place.",
    "other-far-away": "Compare site.easting, site.northing and the units with those of the model's author.",
    "other-own-origin": "Give the place on the map under site, and ask the model's author for the same.",
    "other-not-closed": "Ask its author for closed bodies if it matters whether steel is inside them.",
}
_MOVE = (
    "Agree with the other trade who moves: its element, or the steel (frames.roof.panels, purlins.spacing);"
)


def trades(subject: Subject) -> Iterator[Hit]:
    """Give the hits of all models of other trades that go with a shed."""
    for model in subject.others:
        yield from _hits(subject, placed(model, subject.shed))


def _hits(subject: Subject, other: Placed) -> Iterator[Hit]:
    """The hits of one model."""
    elements, model = other.model.elements, other.model
    asks = [ask_of(element, subject.criteria) for element in elements]
    bodies = Bodies(
        local_boxes(model.meshes)[model.mesh],
        other.placement,
        model.mesh,
        np.array([ask.around for ask in asks], float),
        np.array([ask.above for ask in asks], float),
    )
    made: dict[int, Body] = {}

    def body_of(shape: int) -> Body:
        made[shape] = body_of_mesh(model.meshes[shape])
        return made[shape]

    cast_in = np.isin(np.arange(len(subject.shed.pieces)), subject.having(*_CAST_IN))
    for meeting in meetings(subject, bodies, body_of):
        element = elements[meeting.body]
        if element.is_service or not cast_in[meeting.piece]:
            yield _hit(subject, meeting, element, asks[meeting.body])
    remarks = list(other.remarks)
    open_ones = [shape for shape, body in made.items() if not body.closed]
    if open_ones:
        count = int(np.isin(model.mesh, open_ones).sum())
        said = f"{count:,} elements of {model.file} near the steel have surfaces that are not closed"
        remarks.append(Remark("other-not-closed", f"{said}: only these surfaces were looked at"))
    yield from map(partial(_remark, model.file), remarks)


def _hit(subject: Subject, meeting: Meeting, element: OtherElement, ask: Ask) -> Hit:
    """The hit of a piece and an element."""
    role = subject.role[meeting.piece].word
    named = f"{element.kind} {element.name!r}" if element.name else element.kind
    named = f"{named} ({element.guid} of {element.file})"
    where = f"{_MOVE} a zone for it can be kept free under reserved."
    if meeting.shares:
        measured = meeting.volume is not None
        says = f"{named} runs through the {role}" + ("; they share {value}." if measured else ".")
        value, unit, limit, source = meeting.volume, "cm³" if measured else "", None, ""
        code = "other-overlap"
    else:
        above = meeting.above
        between = f"the free height from it up to the {role}" if above else f"the distance to the {role}"
        says = f"{named}: {between} is {{value}}; at least {{limit}} is asked for."
        value, unit, code = meeting.gap, "mm", "other-too-near"
        limit, source = (ask.above, ask.source_above) if above else (ask.around, ask.source)
    return Hit(
        code,
        (meeting.piece,),
        meeting.point,
        says,
        where,
        value,
        limit,
        unit,
        source,
        element.guid,
        (element,),
    )


def _remark(file: str, remark: Remark) -> Hit:
    """The hit of what is said of a whole model; it stands at the origin of the building, with no piece."""
    return Hit(remark.code, (), (0.0, 0.0, 0.0), f"{remark.says}.", _REMEDIES[remark.code], about=file)
