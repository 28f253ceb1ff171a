"""Named views: which pieces are drawn and from where, for a name and an argument.

Pieces are chosen by where they lie, not by how their keys are spelt, except where a key is asked for.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from difflib import get_close_matches
from fnmatch import fnmatchcase

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import ShedbimError
from shedbim.model.shed import Shed
from shedbim.writers.pictures.boxes import piece_boxes
from shedbim.writers.pictures.picture import picture
from shedbim.writers.pictures.projection import View

__all__ = ["VIEWS", "NamedView", "ViewError", "render_view", "selected"]

Chosen = tuple[View, NDArray[np.int64]]
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
class NamedView:
    """A row of the table of views: what it shows, what its argument means, and how it is set up."""

    shows: str
    argument: str
    choose: Callable[[Shed, str | None], Chosen]


def render_view(
    shed: Shed, name: str, argument: str | None = None, *, width: int = 1600, height: int = 1000
) -> bytes:
    """Give the PNG picture (``width`` x ``height`` pixels) of a view of ``VIEWS``.

    Raises:
        ViewError: when the name, or what its argument asks for, does not exist.
    """
    view, pieces = selected(shed, name, argument)
    return picture(shed, view, pieces=pieces, width=width, height=height)


def selected(shed: Shed, name: str, argument: str | None = None) -> Chosen:
    """Give the view and the indices (n,) of the pieces that it draws.

    Raises:
        ViewError: when the name, or what its argument asks for, does not exist.
    """
    if name not in VIEWS:
        raise ViewError(f"no view {name!r}; views: {', '.join(VIEWS)}")
    return VIEWS[name].choose(shed, argument)


def _whole(direction: Direction, up: Direction = (0.0, 0.0, 1.0)) -> Callable[[Shed, str | None], Chosen]:
    """The view of all pieces, or of those whose keys match, in one direction."""

    def choose(shed: Shed, argument: str | None) -> Chosen:
        pieces = np.arange(len(shed.pieces)) if argument is None else _matching(shed, argument)
        return View(direction, up), pieces

    return choose


def _frame(shed: Shed, argument: str | None) -> Chosen:
    """The frame on a numbered line, seen from the front."""
    y = shed.grid.y[_number(shed, argument)]
    return View(_ALONG), _between(shed, y, y)


def _bay(shed: Shed, argument: str | None) -> Chosen:
    """The bay after a numbered line and the frames on both sides, from the front left above."""
    index = _number(shed, argument)
    if index + 1 == len(shed.grid.y):
        raise ViewError(
            f"no bay after line {argument}: it is the last; bays begin at {_listed(shed.grid.numbers[:-1])}"
        )
    return View(_FRONT_LEFT_ABOVE), _between(shed, shed.grid.y[index], shed.grid.y[index + 1])


def _piece(shed: Shed, argument: str | None) -> Chosen:
    """The pieces whose keys match and what lies near them; the named ones fill the picture."""
    if argument is None:
        raise ViewError("the view 'piece' needs a key, or a pattern such as '2/*'")
    named = _matching(shed, argument)
    low, high = piece_boxes(shed, named)
    return _near(shed, low.min(axis=0) - _NEAR, high.max(axis=0) + _NEAR)


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


def _near(shed: Shed, low: NDArray[np.float64], high: NDArray[np.float64]) -> Chosen:
    """What reaches into a box, the box filling the picture."""
    every = np.arange(len(shed.pieces))
    lows, highs = piece_boxes(shed, every)
    pieces = np.flatnonzero(((lows <= high) & (highs >= low)).all(axis=1))
    box = (float(low[0]), float(low[1]), float(low[2])), (float(high[0]), float(high[1]), float(high[2]))
    return View(_FRONT_LEFT_ABOVE, box=box), pieces


def _between(shed: Shed, first: float, last: float) -> NDArray[np.int64]:
    """Pieces that lie wholly between two lines across the building, or on them."""
    low, high = piece_boxes(shed, np.arange(len(shed.pieces)))
    return np.flatnonzero((low[:, 1] >= first - _ON_LINE) & (high[:, 1] <= last + _ON_LINE))


def _number(shed: Shed, argument: str | None) -> int:
    """The index of a numbered grid line."""
    if argument not in shed.grid.numbers:
        raise ViewError(f"no numbered line {argument!r}; lines: {_listed(shed.grid.numbers)}")
    return shed.grid.numbers.index(argument)


def _matching(shed: Shed, pattern: str) -> NDArray[np.int64]:
    """Pieces whose key is the pattern, begins with it, or matches it with * and ?."""
    keys = shed.pieces.keys
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
    "isometric": NamedView("the building from the front left above", _KEYS, _whole(_FRONT_LEFT_ABOVE)),
    "back": NamedView("the building from the back right above", _KEYS, _whole(_BACK_RIGHT_ABOVE)),
    "front": NamedView("the gable elevation on line 1", _KEYS, _whole(_ALONG)),
    "side": NamedView("the side elevation on line A", _KEYS, _whole(_ACROSS)),
    "plan": NamedView("the plan from above, line 1 at the bottom", _KEYS, _whole(_DOWN, up=_ALONG)),
    "frame": NamedView("one frame from the front", "number of its grid line", _frame),
    "bay": NamedView("one bay and its two frames", "number of the grid line before it", _bay),
    "piece": NamedView("pieces and what lies near them", "key or pattern of the pieces", _piece),
    "place": NamedView("what passes a point, close by", "X,Y,Z or X,Y,Z,REACH in mm", _place),
}
