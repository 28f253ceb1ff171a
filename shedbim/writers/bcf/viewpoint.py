"""The visualization file of a topic: camera, selection, colours, and that all else stays visible.

Lengths m, angles degrees, in the coordinates of the model file.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import atan, degrees, radians, sin, tan

from shedbim.writers.bcf.snapshot import HEIGHT, WIDTH
from shedbim.writers.bcf.topics import AUTHOR, Component, Viewpoint
from shedbim.writers.bcf.xml import Element, document, element
from shedbim.writers.pictures.tints import HIGHLIGHT

__all__ = ["visualization_21", "visualization_30"]

_ASPECT = WIDTH / HEIGHT
#: Version 2.1 states the horizontal field of view and allows 45 to 60 degrees; version 3.0 states the vertical one.
#: Both are those of one camera.
_ACROSS = 60.0
_UP = degrees(2 * atan(tan(radians(_ACROSS) / 2) / _ASPECT))
#: The ball that has to fit into the view, in reaches: the cube's faces touch it, its corners stand out a little.
_BALL = 1.25
#: Colours of the pieces of the worst place, which is that of the snapshot, and of those of all others.
_WORST = "{:02X}{:02X}{:02X}".format(*HIGHLIGHT)
_OTHERS = "F0A030"


def visualization_21(view: Viewpoint) -> bytes:
    """Give the visualization file in the form of version 2.1."""
    colours = [element("Color", components, Color=colour) for colour, components in _coloured(view)]
    return _document(view, colours, [_number("FieldOfView", _ACROSS)])


def visualization_30(view: Viewpoint) -> bytes:
    """Give the visualization file in the form of version 3.0."""
    colours = [
        element("Color", [element("Components", components)], Color=colour)
        for colour, components in _coloured(view)
    ]
    return _document(view, colours, [_number("FieldOfView", _UP), _number("AspectRatio", _ASPECT)])


def _document(view: Viewpoint, colours: Sequence[Element], lens: Sequence[Element]) -> bytes:
    """What both versions share, with the elements in the order that both ask for."""
    components = [element("Visibility", DefaultVisibility="true")]
    if view.selected:
        components.insert(0, element("Selection", _components(view.selected)))
    if colours:
        components.append(element("Coloring", colours))
    distance = _BALL * view.reach / sin(radians(_UP / 2))
    eye = [at - distance * way for at, way in zip(view.target, view.direction, strict=True)]
    camera = [
        _vector("CameraViewPoint", eye),
        _vector("CameraDirection", view.direction),
        _vector("CameraUpVector", _upwards(view.direction)),
        *lens,
    ]
    return document(
        element(
            "VisualizationInfo",
            [element("Components", components), element("PerspectiveCamera", camera)],
            Guid=str(view.id),
        )
    )


def _coloured(view: Viewpoint) -> list[tuple[str, list[Element]]]:
    """Each colour with the components that have it; no colour without components."""
    pairs = ((_WORST, view.selected), (_OTHERS, view.further))
    return [(colour, _components(some)) for colour, some in pairs if some]


def _components(some: Sequence[Component]) -> list[Element]:
    return [element("Component", _own(each), IfcGuid=each.global_id) for each in some]


def _own(component: Component) -> list[Element]:
    """Who made a component, and its name there; nothing is known of what others have modelled."""
    if not component.key:
        return []
    return [element("OriginatingSystem", AUTHOR), element("AuthoringToolId", component.key)]


def _upwards(direction: Sequence[float]) -> list[float]:
    """The unit vector square to the direction that leans least from the vertical; the direction is never upright."""
    x, y, z = direction
    flat = (x * x + y * y) ** 0.5
    return [-z * x / flat, -z * y / flat, flat]


def _vector(tag: str, values: Sequence[float]) -> Element:
    return element(tag, [_number(axis, value) for axis, value in zip("XYZ", values, strict=True)])


def _number(tag: str, value: float) -> Element:
    """A number to the micrometre, never ``-0``."""
    return element(tag, repr(round(value, 6) + 0.0))
