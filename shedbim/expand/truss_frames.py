"""Frames whose roof is carried by trusses between the columns."""

from __future__ import annotations

from collections.abc import Sequence

from shedbim.description.models import Description
from shedbim.description.roof_systems import TrussRoof
from shedbim.expand.frame import Frame, columns, frame_kit
from shedbim.expand.kits import Meeting, Meets
from shedbim.expand.layout import Layout
from shedbim.expand.trusses import truss, truss_lifts
from shedbim.model.joints import At, JointKind
from shedbim.roofs.slope import Slope

__all__ = ["roof_lifts", "truss_frame"]


def roof_lifts(roof: TrussRoof, slopes: Sequence[Slope]) -> list[float]:
    """Give the height of the top chords' upper face above each slope's own line, mm; span by span."""
    spans = sorted({slope.span for slope in slopes})
    return [lift for span in spans for lift in truss_lifts(roof, [s for s in slopes if s.span == span])]


def truss_frame(description: Description, layout: Layout, roof: TrussRoof) -> Frame:
    """Columns with a truss between each pair of them, both chords fastened to the columns."""
    members, meetings = columns(description, layout)
    half, grid = description.frames.columns.section.height / 2, layout.grid
    trusses = []
    for span, name in enumerate(layout.span_names):
        slopes = [layout.slopes[i].slope for i in layout.span_slopes(span)]
        faces = (grid.x[span] + half, grid.x[span + 1] - half)
        made = truss(roof, slopes, layout.eaves, name, faces, description.finish.frames)
        trusses.append(made)
        ends = {m.name: m for m in made.kit.members}
        for chords in (made.bottom_chords, made.top_chords):
            for column, chord, at in ((span, chords[0], At.START), (span + 1, chords[-1], At.END)):
                member = ends[chord]
                place = member.bar.axis[0 if at == At.START else 1]
                point = member.placement[:, 3] + member.placement[:, 0] * place
                carrier = Meets(f"column/{grid.letters[column]}", At.ALONG)
                meetings.append(Meeting(JointKind.CHORD_COLUMN, (carrier, Meets(chord, at)), point))
    kit = frame_kit(members, meetings, layout, [t.kit for t in trusses])
    carriers = tuple(chord for t in trusses for chord in t.top_chords)
    return Frame(kit, carriers, roof.top_chord, tuple(trusses))
