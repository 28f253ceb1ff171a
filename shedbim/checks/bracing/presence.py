"""Whether every column line and every slope is braced, and its bracing runs from side to side without a gap."""

from __future__ import annotations

from collections.abc import Iterator

from shedbim.checks.bracing.braced import Braced, Panels, braced
from shedbim.checks.bracing.lines import ROOF_STEEL, columns_of, nearest_slope
from shedbim.checks.finding import Hit
from shedbim.checks.subject import Subject

__all__ = ["presence"]


def presence(subject: Subject) -> Iterator[Hit]:
    """Give the column lines and slopes without bracing, and the bracing with a panel missing."""
    found = braced(subject)
    yield from _walls(subject, found)
    yield from _roofs(subject, found)
    limit, source = subject.criteria.limit("bracing_gap")
    letters = subject.shed.grid.letters
    groups = [("walls", f"line {letters[line]}", panels) for (line, _), panels in found.walls.items()]
    groups += [("roof", f"slope {found.slopes[n].name}", panels) for (n, _), panels in found.roofs.items()]
    for field, name, panels in groups:
        if panels.gap > limit:
            yield _broken(subject, field, name, panels, limit, source)


def _walls(subject: Subject, found: Braced) -> Iterator[Hit]:
    last = len(subject.shed.grid.x) - 1
    for column, letter in enumerate(subject.shed.grid.letters):
        standing = columns_of(subject, column)
        if found.wall_bays(column) or not standing:
            continue
        about, change = f"line {letter}", "Brace this column line: bracing.walls.lines, bracing.bays."
        if 0 < column < last and _roof_carries(found, column):
            yield Hit(
                "inner-line-open",
                standing[:1],
                subject.point(standing[0]),
                "An inner column line has no wall bracing: the roof bracing is to carry its longitudinal forces to "
                "the neighbouring lines, and is to be designed for that.",
                change,
                about=about,
            )
            continue
        yield Hit(
            "wall-line-unbraced",
            standing[:1],
            subject.point(standing[0]),
            "No bay of this column line has wall bracing, and nothing else takes its longitudinal forces to the "
            "ground.",
            change,
            about=about,
        )


def _roof_carries(found: Braced, column: int) -> bool:
    """Whether all slopes that reach a column line are braced, and have a braced bay in common."""
    beside = [set(found.roof_bays(n)) for n, slope in enumerate(found.slopes) if column in slope.columns]
    return bool(beside) and bool(set.intersection(*beside))


def _roofs(subject: Subject, found: Braced) -> Iterator[Hit]:
    steel = subject.having(*ROOF_STEEL)
    owner = nearest_slope(found.slopes, subject.centres[steel][:, 0])
    for number, slope in enumerate(found.slopes):
        if not found.roof_bays(number):
            first = int(steel[owner == number][0])
            yield Hit(
                "slope-unbraced",
                (first,),
                subject.point(first),
                "No bay of this slope has roof bracing: nothing carries the wind on the gables, or what holds the "
                "rafters and top chords sideways, to the braced walls.",
                "Brace the roof: bracing.roof, bracing.bays.",
                about=f"slope {slope.name}",
            )


def _broken(subject: Subject, field: str, name: str, panels: Panels, limit: float, source: str) -> Hit:
    return Hit(
        "bracing-broken",
        panels.pieces,
        subject.point(panels.pieces[0]),
        "The braces of a bay leave {value} open; its bracing is to run from side to side without a gap "
        "(at most {limit} at joints).",
        f"Brace every panel of the bay: bracing.{field}.",
        panels.gap,
        limit,
        "mm",
        source,
        about=name,
    )
