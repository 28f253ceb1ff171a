"""Rules of trusses: depth, panels, chords and webs."""

from __future__ import annotations

from collections.abc import Iterator
from math import atan2, degrees, tan

from shedbim.description.models import Description
from shedbim.description.roof_systems import AngleTrussRoof, TrussedRoof
from shedbim.description.rules.broken import Broken
from shedbim.roofs import Gable
from shedbim.sections.section import Section
from shedbim.units import format_angle, format_length
from shedbim.webs import PATTERNS

__all__ = ["RULES"]

#: Angles of web to chord outside these cannot be welded all round (EN 1993-1-8 7.1.2 asks for 30 deg;
#: the wider bounds leave room for end panels, common practice).
_FLATTEST, _STEEPEST = 20.0, 75.0

#: Least clear height between the chord faces, in heights of the diagonals (common practice).
_CLEAR_DIAGONALS = 2.0

_SAME_PITCH = 1e-9  # rad


def _truss(description: Description) -> TrussedRoof | None:
    """The trusses, or None where rafters carry the roof."""
    roof = description.frames.roof
    return roof if isinstance(roof, TrussedRoof) else None


def depth_is_less_than_eaves(description: Description) -> Iterator[Broken]:
    """A truss is not deeper than the building is high."""
    truss, eaves = _truss(description), description.building.eaves
    if truss and truss.depth >= eaves:
        message = "the truss is deeper than the eaves are high"
        yield Broken("frames.roof.depth", message, f"less than {format_length(eaves)}")


def depth_holds_the_webs(description: Description) -> Iterator[Broken]:
    """Between the chords there is room for webs."""
    if truss := _truss(description):
        chords = (truss.top_chord.height + truss.bottom_chord.height) / 2
        least = chords + _CLEAR_DIAGONALS * truss.diagonals.height
        if truss.depth < least:
            message = "the chords leave no room for webs between them"
            yield Broken("frames.roof.depth", message, f"at least {format_length(least)}")


def panels_are_symmetric(description: Description) -> Iterator[Broken]:
    """An even number of panels where the pattern or the ridge in the middle needs it."""
    truss, roof = _truss(description), description.building.roof
    if truss is None or truss.panels % 2 == 0:
        return
    if isinstance(roof, Gable):
        if abs(roof.pitch - roof.right) < _SAME_PITCH:
            message = "an odd number of panels under two equal slopes: the ridge would be no panel point"
            yield Broken("frames.roof.panels", message, "an even number")
    elif PATTERNS[truss.pattern].needs_even_panels:
        message = f"an odd number of panels in a straight truss of pattern {truss.pattern}"
        yield Broken("frames.roof.panels", message, "an even number")


def bottom_pitch_fits_the_shape(description: Description) -> Iterator[Broken]:
    """Only pitched trusses have a bottom pitch, and it is less than that of the roof."""
    truss = _truss(description)
    if truss is None or truss.bottom_pitch == 0:
        return
    if truss.shape != "pitched":
        message = "the bottom chord of a parallel truss follows the roof"
        yield Broken("frames.roof.bottom_pitch", message, "leave it out, or shape: pitched")
        return
    least = min(abs(slope.pitch) for slope in description.building.roof.slopes(description.building.spans))
    if truss.bottom_pitch >= least:
        message = "the bottom chord is as steep as the roof or steeper"
        yield Broken("frames.roof.bottom_pitch", message, f"less than {format_angle(least)}")


def webs_fit_the_chords(description: Description) -> Iterator[Broken]:
    """A web is not wider than the chord face it is welded to."""
    if truss := _truss(description):
        chords = min(truss.top_chord, truss.bottom_chord, key=lambda chord: chord.width)
        webs: dict[str, Section | None] = {
            "diagonals": truss.diagonals,
            "end_diagonals": truss.end_diagonals,
            "posts": truss.posts,
        }
        for field, web in webs.items():
            if web is not None and web.width > chords.width:
                message = f"wider than the chord {chords.designation} it is welded to"
                yield Broken(f"frames.roof.{field}", message, f"at most {format_length(chords.width)} wide")


def webs_meet_the_chords_well(description: Description) -> Iterator[Broken]:
    """Webs are neither so flat nor so steep against the chords that no joint can be made."""
    truss = _truss(description)
    if truss is None:
        return
    building = description.building
    half = 2 if truss.pattern == "warren" else 1
    for slope in building.roof.slopes(building.spans):
        panel = building.spans[slope.span] / truss.panels / half
        bottom = truss.bottom_pitch if truss.shape == "pitched" else abs(slope.pitch)
        growth = (tan(abs(slope.pitch)) - tan(bottom)) * (slope.x1 - slope.x0)
        flattest = degrees(atan2(truss.depth + growth, panel))
        steepest = degrees(atan2(truss.depth, panel))
        if flattest < _FLATTEST or steepest > _STEEPEST:
            angle = flattest if flattest < _FLATTEST else steepest
            message = f"the diagonals of span {slope.span + 1} stand at {angle:.0f} deg to the chord"
            few = (
                "more panels or a greater depth"
                if flattest < _FLATTEST
                else "fewer panels or a smaller depth"
            )
            yield Broken("frames.roof.panels", message, f"{_FLATTEST:.0f} to {_STEEPEST:.0f} deg: {few}")
            return


def pairs_have_equal_legs(description: Description) -> Iterator[Broken]:
    """The angles of a pair have equal legs, so that the two angles are alike back to back."""
    roof = description.frames.roof
    if isinstance(roof, AngleTrussRoof):
        for field in ("top_chord", "bottom_chord", "diagonals", "end_diagonals", "posts"):
            section = getattr(roof, field)
            if section is not None and section.width != section.height:
                yield Broken(f"frames.roof.{field}", "an angle with unequal legs in a pair", "equal legs")


RULES = (
    depth_is_less_than_eaves,
    depth_holds_the_webs,
    panels_are_symmetric,
    bottom_pitch_fits_the_shape,
    webs_fit_the_chords,
    webs_meet_the_chords_well,
    pairs_have_equal_legs,
)
