"""Closed shells of triangles as solids of the model file."""

from __future__ import annotations

from shedbim.model.shells import Shell
from shedbim.writers.ifc.placements import point
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import TRUE, listed

__all__ = ["faceted"]


def faceted(step: StepFile, shell: Shell) -> str:
    """Write a shell, in one piece and closed, as a solid with a face for each triangle."""
    corners = [point(step, *place) for place in shell.points.tolist()]
    faces = []
    for triangle in shell.triangles.tolist():
        loop = step.add("IfcPolyLoop", Polygon=listed(corners[i] for i in triangle))
        bound = step.add("IfcFaceOuterBound", Bound=loop, Orientation=TRUE)
        faces.append(step.add("IfcFace", Bounds=listed([bound])))
    return step.add("IfcFacetedBrep", Outer=step.add("IfcClosedShell", CfsFaces=listed(faces)))
