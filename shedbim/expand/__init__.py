"""From a description to a whole shed."""

from __future__ import annotations

import numpy as np

from shedbim.description.listing import defaults_taken
from shedbim.description.models import Description
from shedbim.expand.assembling import assemble
from shedbim.expand.bracing import bracing
from shedbim.expand.frame import end_wall_face
from shedbim.expand.frames import inner_frame, roof_lifts
from shedbim.expand.gables import gable_frame
from shedbim.expand.kits import Run
from shedbim.expand.layout import lay_out
from shedbim.expand.notes import notes
from shedbim.expand.purlins import purlins
from shedbim.expand.rails import gable_rails, rail_depth, side_rails
from shedbim.expand.stays import stays
from shedbim.expand.zones import zones
from shedbim.model.shed import Georeference, ProjectInfo, Shed

__all__ = ["expand"]


def expand(description: Description) -> Shed:
    """Give the whole building that a description means: every piece placed, marked and joined."""
    building = description.building
    slopes = building.roof.slopes(building.spans)
    layout = lay_out(description, roof_lifts(description, slopes), slopes)
    inner = inner_frame(description, layout)
    ends = (gable_frame(description, layout, outward=-1), gable_frame(description, layout, outward=1))
    numbers, y = layout.grid.numbers, np.array(layout.grid.y)
    # Purlins reach to the outer face of the gable rails, so that roof and wall sheets meet.
    verge = end_wall_face(description, ends[0]) + rail_depth(description)
    runs = [
        Run(ends[0].kit, numbers[:1], y[:1]),
        Run(inner.kit, numbers[1:-1], y[1:-1]),
        Run(ends[1].kit, numbers[-1:], y[-1:]),
        *purlins(description, layout, inner, ends, verge),
        *side_rails(description, layout),
        gable_rails(description, layout, ends[0], outward=-1),
        gable_rails(description, layout, ends[1], outward=1),
        *bracing(description, layout, inner, ends),
        *stays(description, layout, inner),
    ]
    made = assemble(runs, description.connections)
    site = description.site
    return Shed(
        project=ProjectInfo(
            str(description.project_id),
            description.project.name,
            description.project.number,
            description.project.revision,
        ),
        georeference=None
        if site is None
        else Georeference(site.crs, site.easting, site.northing, site.level, site.rotation),
        grid=layout.grid,
        parts=made.parts,
        pieces=made.pieces,
        assembly_types=made.assembly_types,
        assemblies=made.assemblies,
        joints=made.joints,
        finishes=description.finish.meanings,
        defaults=defaults_taken(description),
        notes=notes(description),
        zones=zones(description.reserved, layout.grid),
    )
