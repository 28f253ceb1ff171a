"""Closed shells of flat faces as solids of the model file."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from shedbim.model.shells import Shell
from shedbim.writers.ifc.placements import point
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import TRUE, listed

__all__ = ["faceted"]

Array = NDArray[np.float64]

#: Triangles whose corners lie this near to one plane are one face, mm.
_FLAT = 1e-6

_Loop = list[int]


def faceted(step: StepFile, shell: Shell) -> str:
    """Write a shell, in one piece and closed, as a solid; triangles that lie in one plane make one face."""
    corners = [point(step, *place) for place in shell.points.tolist()]
    faces = []
    for outer, *inner in _faces(shell):
        bounds = []
        for kind, loop in (("IfcFaceOuterBound", outer), *(("IfcFaceBound", each) for each in inner)):
            line = step.add("IfcPolyLoop", Polygon=listed(corners[i] for i in loop))
            bounds.append(step.add(kind, Bound=line, Orientation=TRUE))
        faces.append(step.add("IfcFace", Bounds=listed(bounds)))
    return step.add("IfcFacetedBrep", Outer=step.add("IfcClosedShell", CfsFaces=listed(faces)))


def _faces(shell: Shell) -> list[list[_Loop]]:
    """The loops of each flat face, steel on their left seen from outside, the outer one first."""
    triangles: list[_Loop] = shell.triangles.tolist()
    beside = {(t[k], t[k - 2]): i for i, t in enumerate(triangles) for k in range(3)}
    a, b, c = np.moveaxis(shell.points[shell.triangles], 1, 0)
    size = np.linalg.norm(np.cross(b - a, c - a), axis=1)
    taken = np.zeros(len(triangles), bool)
    found = []
    # The largest first: their planes are the surest.
    for first in np.argsort(-size, kind="stable").tolist():
        if taken[first]:
            continue
        normal = shell.normals[first]
        off = np.abs((shell.points[shell.triangles] - a[first]) @ normal).max(axis=1)
        level = (off < _FLAT) & (shell.normals @ normal > 0) & ~taken
        face, front = {first}, [first]
        while front:
            t = triangles[front.pop()]
            near = {beside[t[k - 2], t[k]] for k in range(3)}
            new = [i for i in near - face if level[i]]
            face.update(new)
            front.extend(new)
        members = sorted(face)
        taken[members] = True
        found.append(_loops([triangles[i] for i in members], shell.points, normal))
    return found


def _loops(triangles: list[_Loop], points: Array, normal: Array) -> list[_Loop]:
    """The rims of triangles that hang together, that with the greatest area first."""
    edges = {(t[k], t[k - 2]) for t in triangles for k in range(3)}
    following = {here: there for here, there in sorted(edges) if (there, here) not in edges}
    loops = []
    while following:
        start, here = following.popitem()
        loop = [start]
        while here != start:
            loop.append(here)
            here = following.pop(here)
        loops.append(loop)

    def area(loop: _Loop) -> float:
        rim = points[loop] - points[loop[0]]
        return float(np.cross(rim, np.roll(rim, -1, axis=0)).sum(axis=0) @ normal)

    return sorted(loops, key=area, reverse=True)
