"""The mesh of a bar as the view draws it: coarser than an exact one, round bars with few chords."""

from __future__ import annotations

from shedbim.model.bars import Bar
from shedbim.model.shells import Shell, shell
from shedbim.sections.profiles import Pipe, Round

__all__ = ["is_round", "view_shell"]

#: Arcs become chords this far off, mm: a rolled corner becomes two chords with an edge between them.
_CHORD_ERROR = 1.6
#: Round sections become ten-sided: this far off as a share of the radius, at most.
_ROUND_SHARE = 0.06


def is_round(bar: Bar) -> bool:
    """Whether the lines along a bar's mesh are chords of a round and not edges."""
    return isinstance(bar.section.profile, Pipe | Round)


def view_shell(bar: Bar) -> Shell:
    """Give the closed surface of a bar; the page finds the edges in it."""
    error = min(_CHORD_ERROR, _ROUND_SHARE * bar.section.height / 2) if is_round(bar) else _CHORD_ERROR
    return shell(bar, error)
