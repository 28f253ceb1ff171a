"""Frames whose roof is carried by trusses between the columns."""

from __future__ import annotations

from collections.abc import Sequence

from shedbim.description.models import Description
from shedbim.description.roof_systems import TrussedRoof, TrussRoof
from shedbim.expand.end_gaps import end_gap
from shedbim.expand.frame import Frame, columns, frame_kit
from shedbim.expand.kits import Meeting, Meets
from shedbim.expand.layout import Layout
from shedbim.expand.roof_places import brace_lengths
from shedbim.expand.truss_site_joints import Shipping
from shedbim.expand.trusses import truss, truss_lifts
from shedbim.model.joints import At, JointKind
from shedbim.roofs.slope import Slope

__all__ = ["roof_lifts", "truss_frame"]


def roof_lifts(roof: TrussedRoof, slopes: Sequence[Slope]) -> list[float]:
    """Give the height of the top chords' upper face above each slope's own line, mm; span by span."""
    spans = sorted({slope.span for slope in slopes})
    return [lift for span in spans for lift in truss_lifts(roof, [s for s in slopes if s.span == span])]


def truss_frame(description: Description, layout: Layout, roof: TrussRoof) -> Frame:
    """Columns with a truss between each pair of them, both chords fastened to the columns."""
    members, meetings = columns(description, layout)
    grid = layout.grid
    back = description.frames.columns.section.height / 2 + end_gap(description, trussed=True)
    trusses = []
    for span, name in enumerate(layout.span_names):
        slopes = [layout.slopes[i].slope for i in layout.span_slopes(span)]
        ends = (grid.x[span] + back, grid.x[span + 1] - back)
        busy = [
            length
            for i in layout.span_slopes(span)
            for length in brace_lengths(description, layout, layout.slopes[i], roof.top_chord)
        ]
        shipping = Shipping(description.connections.splices, busy)
        made = truss(roof, slopes, layout.eaves, name, ends, description.finish.frames, shipping)
        trusses.append(made)
        named = {m.name: m for m in made.kit.members}
        for chords in (made.bottom_chords, made.top_chords):
            for column, chord, at in ((span, chords[0], At.START), (span + 1, chords[-1], At.END)):
                member = named[chord.name]
                place = member.bar.axis[0 if at == At.START else 1]
                point = member.placement[:, 3] + member.placement[:, 0] * place
                carrier = Meets(f"column/{grid.letters[column]}", At.ALONG)
                meetings.append(Meeting(JointKind.CHORD_COLUMN, (carrier, Meets(chord.name, at)), point))
    kit = frame_kit(members, meetings, layout, [t.kit for t in trusses])
    carriers = tuple(bar.name for t in trusses for bar in t.top_chords if not bar.spliced[0])
    return Frame(kit, carriers, roof.top_chord, tuple(trusses))
