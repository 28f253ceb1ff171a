"""What a reader of the outputs must know: what was assumed, and what is not in them."""

from __future__ import annotations

from shedbim.description.models import Description, SameGable
from shedbim.description.roof_systems import AngleTrussRoof, TrussedRoof
from shedbim.expand.clearances import POST_HEAD_GAP
from shedbim.expand.joints.flattened import FLATTENED

__all__ = ["notes"]


def notes(description: Description) -> tuple[str, ...]:
    """Give the sentences that go with every output of a description."""
    found = [
        "Plates, bolts, welds and holes are laid out by rule from the members that meet, in sizes of common "
        "practice: no joint was checked for the forces in it.",
        "Base plates stand with their underside at finished floor level, on "
        f"{description.connections.bases.grout:g} mm of grout: the concrete is lower by that.",
        f"Gable posts stop {POST_HEAD_GAP:g} mm below the steel above them, and their heads slide in slots, so "
        "that the roof can deflect.",
        "Bolts are counted as modelled; the list to order adds a surplus of 5 %.",
    ]
    if description.finish.frames == "galvanized":
        found.append(
            "Holes for zinc and air follow galvanizers' published guidance: agree them with the galvanizer."
        )
    roof = description.frames.roof
    if isinstance(roof, AngleTrussRoof) and roof.longest != "none":
        found.append(
            f"Trusses of angles over {roof.longest / 1000:g} m are divided for the road: the covers of their splices, "
            "and bolt heads on these, stand out above the top chords and below the bottom chords."
        )
    tube_ends = description.connections.tube_ends
    if FLATTENED in (tube_ends.struts, tube_ends.braces):
        found.append(
            "Ends of tubes pressed flat are drawn with square sides, half the middle line of the ring wide; the shop "
            "agrees the length of their tapers."
        )
    if isinstance(description.frames.roof, TrussedRoof) and isinstance(description.frames.gables, SameGable):
        found.append(
            "The end walls have no posts and no rails beside the end trusses, above the bottom chord."
        )
    return tuple(found)
