"""Frames whose roof is carried by trusses of pairs of angles between the columns."""

from __future__ import annotations

from shedbim.description.models import Description
from shedbim.description.roof_systems import AngleTrussRoof
from shedbim.expand.angle_truss_cuts import Busy, busy_places, is_too_long
from shedbim.expand.angle_trusses import Between, angle_truss
from shedbim.expand.end_gaps import end_gap
from shedbim.expand.frame import Frame, columns, frame_kit
from shedbim.expand.impossible import impossible
from shedbim.expand.layout import Layout
from shedbim.expand.pairs import size_of_pair
from shedbim.sections.profiles import IShape

__all__ = ["angle_truss_frame"]


def angle_truss_frame(description: Description, layout: Layout, roof: AngleTrussRoof) -> Frame:
    """Columns with a truss between each pair of them.

    Raises:
        DescriptionError: for columns that are tubes.
    """
    section, grid = description.frames.columns.section, layout.grid
    if not isinstance(section.profile, IShape):
        raise impossible(
            "frames.columns.section", "trusses of angles are bolted to flanges", given=section.designation,
            allowed="an I section",
        )  # fmt: skip
    members, meetings = columns(description, layout)
    back = section.height / 2 + end_gap(description, trussed=True)
    places = [
        Between(
            (grid.x[span] + back, grid.x[span + 1] - back),
            (f"column/{grid.letters[span]}", f"column/{grid.letters[span + 1]}"),
        )
        for span in range(len(layout.span_names))
    ]
    slopes = [
        [layout.slopes[i].slope for i in layout.span_slopes(span)] for span in range(len(layout.span_names))
    ]

    def frame(busy: Busy | None) -> Frame:
        trusses = [
            angle_truss(
                roof,
                own,
                layout.eaves,
                name,
                between,
                description.finish.frames,
                description.connections,
                busy,
            )
            for name, own, between in zip(layout.span_names, slopes, places, strict=True)
        ]
        kit = frame_kit(members, meetings, layout, [t.kit for t in trusses])
        carriers = tuple(bar.name for t in trusses for bar in t.top_chords if not bar.spliced[0])
        return Frame(kit, carriers, size_of_pair(roof.top_chord, roof.gusset), tuple(trusses))

    whole = frame(None)
    if not any(is_too_long(roof, own, each.faces) for own, each in zip(slopes, places, strict=True)):
        return whole
    # Splices keep off the purlins, which may follow the nodes of the trusses.
    return frame(busy_places(description, layout, roof, whole))
