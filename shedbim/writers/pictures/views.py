"""Named views: which pieces are drawn and from where, for a name and an argument.

Pieces are chosen by where they lie, not by how their keys are spelt, except where a key is asked for.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from difflib import get_close_matches
from fnmatch import fnmatchcase

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import ShedbimError
from shedbim.model.shed import Shed
from shedbim.writers.pictures.boxes import piece_boxes
from shedbim.writers.pictures.composition import LABELS, Composition, compose
from shedbim.writers.pictures.picture import png_picture
from shedbim.writers.pictures.projection import View
from shedbim.writers.pictures.svg import svg_picture
from shedbim.writers.pictures.tints import Emphasis

__all__ = ["FORMATS", "VIEWS", "Chosen", "NamedView", "ViewError", "render_view", "selected"]

Indices = NDArray[np.int64]
Direction = tuple[float, float, float]

_FRONT_LEFT_ABOVE: Direction = (0.80, 1.0, -0.62)
_BACK_RIGHT_ABOVE: Direction = (-0.80, -1.0, -0.62)
_ALONG, _ACROSS, _DOWN = (0.0, 1.0, 0.0), (1.0, 0.0, 0.0), (0.0, 0.0, -1.0)
#: What stands on a grid line lies within this of it, mm: half a deep column and the rails outside it.
_ON_LINE = 600.0
#: Pieces within this of a named one are its neighbours, mm.
_NEAR = 300.0
#: Half the side of the cube that a place shows, mm.
_PLACE_REACH = 600.0


class ViewError(ShedbimError):
    """Raised when a view, a grid label or a key does not exist; the message names those that do."""

    exit_code = 2


@dataclass(frozen=True)
class Chosen:
    """What a view draws: the pieces (n,), and of those the named ones, which keep their colours while the
    others go pale; None when none is named.
    """

    view: View
    pieces: Indices
    named: Indices | None = None


@dataclass(frozen=True)
class NamedView:
    """A row of the table of views.

    Attributes:
        shows: what it shows.
        argument: what its argument means.
        choose: sets it up.
        labels: what is written on it unless something else is asked for, one of ``LABELS``.
    """

    shows: str
    argument: str
    choose: Callable[[Shed, str | None], Chosen]
    labels: str


def render_view(
    shed: Shed,
    name: str,
    argument: str | None = None,
    *,
    form: str = "png",
    width: int = 1600,
    height: int = 1000,
    labels: str | None = None,
    highlight: Sequence[str] = (),
    caption: bool = True,
    remark: str = "",
) -> bytes:
    """Give a view of ``VIEWS`` as the bytes of a picture of ``width`` x ``height`` pixels.

    Args:
        shed: the building.
        name: of the view.
        argument: what it shows, where it asks for that.
        form: one of ``FORMATS``.
        width: of the picture, pixels.
        height: of the picture, pixels.
        labels: one of ``LABELS``; None for what the view has by default.
        highlight: keys, or patterns of keys, of pieces shown in a loud colour while all others go pale.
        caption: whether the project and the view are written in the corner.
        remark: what is written after them.

    Raises:
        ViewError: when the name, the form, the labels, or what an argument asks for, does not exist.
    """
    if form not in FORMATS:
        raise ViewError(f"no picture format {form!r}; formats: {', '.join(FORMATS)}")
    chosen = selected(shed, name, argument)
    if labels is not None and labels not in LABELS:
        raise ViewError(f"no labels {labels!r}; there are: {', '.join(LABELS)}")
    loud = [_matching(shed, pattern) for pattern in highlight]
    composition = compose(
        shed,
        chosen.view,
        chosen.pieces,
        width=width,
        height=height,
        labels=VIEWS[name].labels if labels is None else labels,
        caption=_caption(shed, name, argument, remark) if caption else "",
        emphasis=Emphasis(shed, np.unique(np.concatenate([np.zeros(0, np.int64), *loud])), chosen.named),
    )
    return FORMATS[form](composition)


def selected(shed: Shed, name: str, argument: str | None = None) -> Chosen:
    """Give what a view draws.

    Raises:
        ViewError: when the name, or what its argument asks for, does not exist.
    """
    if name not in VIEWS:
        raise ViewError(f"no view {name!r}; views: {', '.join(VIEWS)}")
    return VIEWS[name].choose(shed, argument)


def _caption(shed: Shed, name: str, argument: str | None, remark: str) -> str:
    """Project, view and remark in one line."""
    project = shed.project
    words = (
        project.name,
        project.number,
        project.revision,
        f"{name} {argument}" if argument else name,
        remark,
    )
    return " · ".join(word for word in words if word)


def _whole(direction: Direction, up: Direction = (0.0, 0.0, 1.0)) -> Callable[[Shed, str | None], Chosen]:
    """The view of all pieces, or of those whose keys match, in one direction."""

    def choose(shed: Shed, argument: str | None) -> Chosen:
        pieces = np.arange(len(shed.pieces)) if argument is None else _matching(shed, argument)
        return Chosen(View(direction, up), pieces)

    return choose


def _frame(shed: Shed, argument: str | None) -> Chosen:
    """The frame on a numbered line, seen from the front."""
    y = shed.grid.y[_number(shed, argument)]
    return Chosen(View(_ALONG), _between(shed, y, y))


def _bay(shed: Shed, argument: str | None) -> Chosen:
    """The bay after a numbered line and the frames on both sides, from the front left above."""
    index = _number(shed, argument)
    if index + 1 == len(shed.grid.y):
        raise ViewError(
            f"no bay after line {argument}: it is the last; bays begin at {_listed(shed.grid.numbers[:-1])}"
        )
    pieces = _between(shed, shed.grid.y[index], shed.grid.y[index + 1])
    return Chosen(View(_FRONT_LEFT_ABOVE), pieces)


def _piece(shed: Shed, argument: str | None) -> Chosen:
    """The pieces whose keys match and what lies near them; the named ones fill the picture."""
    if argument is None:
        raise ViewError("the view 'piece' needs a key, or a pattern such as '2/*'")
    named = _matching(shed, argument)
    low, high = piece_boxes(shed, named)
    return _near(shed, low.min(axis=0) - _NEAR, high.max(axis=0) + _NEAR, named)


def _place(shed: Shed, argument: str | None) -> Chosen:
    """All that passes a point, close by."""
    try:
        numbers = [float(word) for word in (argument or "").split(",")]
    except ValueError:
        numbers = []
    if len(numbers) == 3:
        numbers.append(_PLACE_REACH)
    if len(numbers) != 4 or not np.isfinite(numbers).all() or numbers[3] <= 0:
        raise ViewError(f"the view 'place' needs X,Y,Z or X,Y,Z,REACH in mm, not {argument!r}")
    point, reach = np.array(numbers[:3]), numbers[3]
    return _near(shed, point - reach, point + reach)


def _near(
    shed: Shed, low: NDArray[np.float64], high: NDArray[np.float64], named: Indices | None = None
) -> Chosen:
    """What reaches into a box, the box filling the picture."""
    every = np.arange(len(shed.pieces))
    lows, highs = piece_boxes(shed, every)
    pieces = np.flatnonzero(((lows <= high) & (highs >= low)).all(axis=1))
    box = (float(low[0]), float(low[1]), float(low[2])), (float(high[0]), float(high[1]), float(high[2]))
    return Chosen(View(_FRONT_LEFT_ABOVE, box=box), pieces, named)


def _between(shed: Shed, first: float, last: float) -> Indices:
    """Pieces that lie wholly between two lines across the building, or on them."""
    low, high = piece_boxes(shed, np.arange(len(shed.pieces)))
    return np.flatnonzero((low[:, 1] >= first - _ON_LINE) & (high[:, 1] <= last + _ON_LINE))


def _number(shed: Shed, argument: str | None) -> int:
    """The index of a numbered grid line."""
    if argument not in shed.grid.numbers:
        raise ViewError(f"no numbered line {argument!r}; lines: {_listed(shed.grid.numbers)}")
    return shed.grid.numbers.index(argument)


def _matching(shed: Shed, pattern: str) -> Indices:
    """The piece whose key is the pattern, or those whose keys begin with it or match it with * and ?."""
    keys = shed.pieces.keys
    if pattern in keys:
        return np.array([keys.index(pattern)], np.int64)
    found = [i for i, key in enumerate(keys) if key.startswith(pattern) or fnmatchcase(key, pattern)]
    if not found:
        nearest = get_close_matches(pattern, keys, n=3, cutoff=0.0)
        raise ViewError(f"no piece has a key like {pattern!r}; nearest: {', '.join(nearest)}")
    return np.array(found, np.int64)


def _listed(words: tuple[str, ...]) -> str:
    """A list that stays short enough to read."""
    return ", ".join(words) if len(words) <= 12 else f"{', '.join(words[:5])} ... {words[-1]}"


_KEYS = "key or pattern of the pieces to draw; all when left out"
#: Every view by name, in the order people are told of them.
VIEWS: dict[str, NamedView] = {
    "isometric": NamedView(
        "the building from the front left above", _KEYS, _whole(_FRONT_LEFT_ABOVE), "grid"
    ),
    "back": NamedView("the building from the back right above", _KEYS, _whole(_BACK_RIGHT_ABOVE), "grid"),
    "front": NamedView("the gable elevation on line 1", _KEYS, _whole(_ALONG), "grid"),
    "side": NamedView("the side elevation on line A", _KEYS, _whole(_ACROSS), "grid"),
    "plan": NamedView("the plan from above, line 1 at the bottom", _KEYS, _whole(_DOWN, up=_ALONG), "grid"),
    "frame": NamedView("one frame from the front", "number of its grid line", _frame, "marks"),
    "bay": NamedView("one bay and its two frames", "number of the grid line before it", _bay, "grid"),
    "piece": NamedView("pieces and what lies near them", "key or pattern of the pieces", _piece, "marks"),
    "place": NamedView("what passes a point, close by", "X,Y,Z or X,Y,Z,REACH in mm", _place, "marks"),
}
#: Every form of a picture, named as its files end.
FORMATS: dict[str, Callable[[Composition], bytes]] = {"png": png_picture, "svg": svg_picture}
