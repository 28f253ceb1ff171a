"""Where along the building the braced bays are: near an end, not far apart, and the same in roof and walls."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise

from shedbim.checks.bracing.braced import Braced, Panels, braced
from shedbim.checks.bracing.lines import bay_label
from shedbim.checks.finding import Hit
from shedbim.checks.subject import Subject

__all__ = ["spread"]


def spread(subject: Subject) -> Iterator[Hit]:
    """Give the braced bays that stand in the wrong place along the building."""
    found = braced(subject)
    yield from _inside(subject, found)
    for panels in _sets(found):
        yield from _apart(subject, panels)
    yield from _differ(subject, found)


def _sets(found: Braced) -> list[dict[int, Panels]]:
    """The braces by bay of each column line and each slope with bracing."""
    return [
        _by_bay(panels, owner)
        for panels in (found.walls, found.roofs)
        for owner in sorted({owner for owner, _ in panels})
    ]


def _by_bay(panels: dict[tuple[int, int], Panels], owner: int) -> dict[int, Panels]:
    return {bay: each for (line, bay), each in sorted(panels.items()) if line == owner}


def _inside(subject: Subject, found: Braced) -> Iterator[Hit]:
    """The building whose braced bays are all away from both its ends."""
    last = len(subject.shed.grid.y) - 2
    if not found.bays or any(bay in (0, 1, last - 1, last) for bay in found.bays):
        return
    panels = next(each for (_, bay), each in (found.walls | found.roofs).items() if bay == found.bays[0])
    yield Hit(
        "braced-bay-inside",
        panels.pieces,
        subject.point(panels.pieces[0]),
        f"The braced bay nearest to an end is {bay_label(subject, found.bays[0])}: it is usual to brace the end bay "
        "or the second one, where the wind on the gable comes in and where erection begins.",
        "Name the first or second bay, or the last or last but one, in bracing.bays.",
        source="Steel Buildings in Europe, Single-Storey Part 2 (concept design), p. 3; second bay: common practice",
        about="building",
    )


def _apart(subject: Subject, panels: dict[int, Panels]) -> Iterator[Hit]:
    """Braced bays too far from one another, and from the ends."""
    y = subject.shed.grid.y
    middles = {bay: (y[bay] + y[bay + 1]) / 2 for bay in panels}
    limit, source = subject.criteria.limit("braced_bays_apart")
    for first, second in pairwise(sorted(panels)):
        away = middles[second] - middles[first]
        if away > limit:
            yield Hit(
                "braced-bays-apart",
                panels[first].pieces + panels[second].pieces,
                subject.point(panels[second].pieces[0]),
                "Two braced bays are {value} apart, middle to middle; at most {limit} is usual.",
                "Brace a bay between them: bracing.bays.",
                away,
                limit,
                "m",
                source,
                about="building",
            )
    limit, source = subject.criteria.limit("braced_bay_from_end")
    first, last = min(panels), max(panels)
    for bay, away in ((first, middles[first] - y[0]), (last, y[-1] - middles[last])):
        if away > limit:
            yield Hit(
                "bracing-far-from-end",
                panels[bay].pieces,
                subject.point(panels[bay].pieces[0]),
                "The end of the building is {value} from the nearest braced bay; at most {limit} is usual.",
                "Brace a bay nearer to the end: bracing.bays.",
                away,
                limit,
                "m",
                source,
                about="building",
            )


def _differ(subject: Subject, found: Braced) -> Iterator[Hit]:
    """Bays braced in a slope and not in the column line that it reaches, or the other way round."""
    letters = subject.shed.grid.letters
    for number, slope in enumerate(found.slopes):
        roof = _by_bay(found.roofs, number)
        for column in slope.columns:
            wall = _by_bay(found.walls, column)
            if not roof or not wall:
                continue
            for bay in sorted(set(roof) ^ set(wall)):
                in_roof = bay in roof
                panels = roof[bay] if in_roof else wall[bay]
                here, there = ("roof", "column line") if in_roof else ("column line", "roof")
                yield Hit(
                    "bays-differ",
                    panels.pieces,
                    subject.point(panels.pieces[0]),
                    f"Bay {bay_label(subject, bay)} is braced in the {here} and not in the {there} beside it: the "
                    "strut between them has to carry the force to another bay.",
                    "Brace roof and walls in the same bays: bracing.bays, bracing.walls.lines.",
                    source="Steel Buildings in Europe, Single-Storey Part 4 (portal frames), fig. 9.4",
                    about=f"line {letters[column]} + slope {slope.name}",
                )
