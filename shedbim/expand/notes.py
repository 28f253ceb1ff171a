"""What a reader of the outputs must know: what was assumed, and what is not in them yet."""

from __future__ import annotations

from shedbim.description.models import Description, SameGable, TrussRoof
from shedbim.expand.clearances import APEX_SET_BACK, END_PLATE, POST_HEAD_GAP

__all__ = ["notes"]


def notes(description: Description) -> tuple[str, ...]:
    """Give the sentences that go with every output of a description."""
    found = [
        "Plates, bolts and holes are not in the model yet: chords and rafters stop "
        f"{END_PLATE:g} mm short of columns and rafters {APEX_SET_BACK:g} mm short of the ridge, which leaves "
        "room for end plates.",
        f"Gable posts stop {POST_HEAD_GAP:g} mm below the steel above them, so that the roof can deflect.",
        "Columns and gable posts start at finished floor level: base plates and grout will raise them.",
        "Sag bars end at the webs they hold: add the threaded ends to their length when ordering.",
    ]
    if isinstance(description.frames.roof, TrussRoof) and isinstance(description.frames.gables, SameGable):
        found.append(
            "The end walls have no posts and no rails beside the end trusses, above the bottom chord."
        )
    return tuple(found)
