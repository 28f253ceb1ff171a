"""Rules of purlins, rails and bracing."""

from __future__ import annotations

from collections.abc import Iterator

from shedbim.description.bracing import RoofBracing, WallBracing
from shedbim.description.models import Description
from shedbim.description.roof_systems import TrussedRoof
from shedbim.description.rules.broken import Broken
from shedbim.roofs import Gable, Slope
from shedbim.sections.profiles import Angle, LippedZ
from shedbim.units import format_length

__all__ = ["RULES"]

#: Two purlins or rails nearer than this foul each other's cleats (common practice), mm.
_NEAREST = 300.0
#: Air between the lips of two lapped purlins, mm.
_LAP_PLAY = 1.0
_NANOMETRE = 1e-6

#: Room that a brace in a column line needs beside the middle of the column: half a gusset plate and the way
#: to the flange (common practice), mm.
_HALF_GUSSET, _TO_FLANGE = 5.0, 10.0


def purlin_offsets_leave_a_slope(description: Description) -> Iterator[Broken]:
    """The offsets at both ends of a slope leave room for more than one purlin."""
    purlins, roof, spans = description.purlins, description.building.roof, description.building.spans
    slopes = roof.slopes(spans)
    if isinstance(roof, Gable):
        ends = [(_low_offset(description, slope) + purlins.ridge_offset, slope.length) for slope in slopes]
    else:
        ends = [(2 * description.purlin_eaves_offset, sum(slope.length for slope in slopes))]
    for offsets, length in ends:
        if offsets + _NEAREST > length:
            message = f"the offsets of the purlins take up a slope of {format_length(length)}"
            allowed = f"offsets of at most {format_length(max(length - _NEAREST, 0.0))} in all"
            yield Broken("purlins.eaves_offset", message, allowed, f"{format_length(offsets)} in all")
            return


def _low_offset(description: Description, slope: Slope) -> float:
    """The purlin offset at the low end of a slope of a gable roof, mm."""
    last = len(description.building.spans) - 1
    at_eaves = slope.span == 0 if slope.rises else slope.span == last
    return description.purlin_eaves_offset if at_eaves else description.purlins.valley_offset


def purlins_over_nodes_need_trusses(description: Description) -> Iterator[Broken]:
    """Only trusses have panel points."""
    if description.purlins.set_out == "nodes" and not isinstance(description.frames.roof, TrussedRoof):
        message = "purlins over panel points, but the roof has no trusses"
        yield Broken("purlins.set_out", message, "even, or frames.roof.system: truss")


def lapped_purlins_nest(description: Description) -> Iterator[Broken]:
    """Purlins that lap are Z with a wide flange that takes the narrow one of the next, both walls between."""
    profile = description.purlins.section.profile
    if description.connections.cleats.continuity != "lapped":
        return
    least = 2 * profile.thickness + _LAP_PLAY
    if not isinstance(profile, LippedZ) or profile.b - profile.narrow < least - _NANOMETRE:
        allowed = (
            f"a Z with one flange wider than the other by {least:g} mm or more, such as Z 200x75/68x20x2.5, "
            "or another connections.cleats.continuity"
        )
        yield Broken("purlins.section", "lapped purlins do not nest in each other", allowed)


def rail_offsets_leave_a_wall(description: Description) -> Iterator[Broken]:
    """The offsets at floor and eaves leave room for more than one rail."""
    rails, eaves = description.rails, description.building.eaves
    offsets = rails.base_offset + rails.eaves_offset
    if offsets + _NEAREST > eaves:
        allowed = f"offsets of at most {format_length(eaves - _NEAREST)} in all"
        message = "the offsets of the rails take up the wall"
        yield Broken("rails.base_offset", message, allowed, f"{format_length(offsets)} in all")


def angles_cross(description: Description) -> Iterator[Broken]:
    """An angle takes tension only, so that one alone braces one way only."""
    braces: dict[str, RoofBracing | WallBracing] = {
        "roof": description.bracing.roof,
        "walls": description.bracing.walls,
    }
    for field, brace in braces.items():
        if brace.pattern == "single" and isinstance(brace.section.profile, Angle):
            message = "a single angle: an angle takes tension only"
            allowed = "crossed with angles; single or crossed with CHS"
            yield Broken(f"bracing.{field}.pattern", message, allowed)


def wall_braces_fit_the_columns(description: Description) -> Iterator[Broken]:
    """A brace in a column line stays within the depth of the column."""
    brace, column = description.bracing.walls.section, description.frames.columns.section
    if isinstance(brace.profile, Angle):
        needed, room = max(brace.width, brace.height) + _HALF_GUSSET + _TO_FLANGE, column.height / 2
    else:
        needed, room = brace.width + 2 * _TO_FLANGE, column.height
    if needed > room:
        message = f"the brace sticks out of columns {column.designation}"
        most = room - (needed - max(brace.width, brace.height))
        allowed = f"a leg or diameter of at most {format_length(max(most, 0.0))}"
        yield Broken("bracing.walls.section", message, allowed)


RULES = (
    purlin_offsets_leave_a_slope,
    purlins_over_nodes_need_trusses,
    lapped_purlins_nest,
    rail_offsets_leave_a_wall,
    angles_cross,
    wall_braces_fit_the_columns,
)
