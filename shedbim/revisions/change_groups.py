"""Changes as few sentences: pieces of one role that changed alike are told together, the weightiest first."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.revisions.changes import Changes, Kind
from shedbim.revisions.rolling import bay_of, frame_of
from shedbim.revisions.states import State, Thing

__all__ = ["ChangeGroup", "change_groups"]

Ints = NDArray[np.int64]

#: What a piece that changed in several ways is told under, the first that holds.
_ORDER = (
    Kind.REMOVED,
    Kind.ADDED,
    Kind.RESECTIONED,
    Kind.RESHAPED,
    Kind.MOVED,
    Kind.ALTERED,
    Kind.REJOINED,
    Kind.REMARKED,
)
#: Of more ways to move, or to be made anew, the pieces of a role are told of in one sentence.
_MOST_WAYS = 4
_MOST_PLACES = 6


@dataclass(frozen=True, eq=False)
class ChangeGroup:
    """Pieces that changed alike.

    Attributes:
        kind: the change that they are told under.
        role: what they do.
        rows: (k,) rows of the changes.
        says: the sentence, without a full stop.
        mass: of the pieces, before where they were removed, kg.
        whole: whether these are all pieces of the role in the places named.
    """

    kind: Kind
    role: str
    rows: Ints
    says: str
    mass: float
    whole: bool


def change_groups(changes: Changes) -> tuple[ChangeGroup, ...]:
    """Give the groups of all that changed: by kind in the order of their weight, then the heavier first."""
    told = _Told(changes)
    found: list[ChangeGroup] = []
    for (kind, role), ways in told.sorted_out().items():
        together = ways
        if len(ways) > _MOST_WAYS:
            rows = np.sort(np.concatenate(list(ways.values())))
            together = {told.ways(kind, rows, len(ways)): rows}
        found += [told.group(kind, role, way, rows) for way, rows in together.items()]
    return tuple(sorted(found, key=lambda each: (_ORDER.index(each.kind), -each.mass, each.says)))


class _Told:
    """What is looked up again and again while changes are put into words.

    Attributes:
        later: (m,) bool, whether a piece is told of as it is, and not as it was.
        thing: (m,) int, what it is, or was: index into ``things``, those of the earlier state first.
        place: (m,) int, its line or bay: index into ``places``.
    """

    def __init__(self, changes: Changes) -> None:
        self.changes = changes
        self.later = changes.new >= 0
        before, after = changes.before, changes.after
        self.things = (*before.things, *after.things)
        self.first = len(before.things)
        self.thing = self._row(before.thing, after.thing + self.first)
        roles = list(dict.fromkeys(thing.role for thing in self.things))
        self.role_of = np.array([roles.index(thing.role) for thing in self.things], np.int64)
        self.places: dict[str, int] = {}
        old, new = (self._placed(state) for state in (before, after))
        self.place = self._row(old, new)
        # How many pieces of each role there are in each place, by state.
        size = (len(roles), len(self.places))
        self.all_of = [np.zeros(size, np.int64), np.zeros(size, np.int64)]
        for counts, place, thing in (
            (self.all_of[0], old, before.thing),
            (self.all_of[1], new, after.thing + self.first),
        ):
            np.add.at(counts, (self.role_of[thing], place), 1)
        self.names = list(self.places)

    def _row(self, old: Ints, new: Ints) -> Ints:
        """For each row of the changes what a column of the later state holds, or else one of the earlier."""
        found = np.zeros(len(self.changes), np.int64)
        found[self.later] = new[self.changes.new[self.later]]
        found[~self.later] = old[self.changes.old[~self.later]]
        return found

    def _placed(self, state: State) -> Ints:
        """The place of each piece of a state (n,); places get their numbers as they come."""
        places = self.places
        return np.array([places.setdefault(_place(key), len(places)) for key in state.keys], np.int64)

    def sorted_out(self) -> dict[tuple[Kind, str], dict[str, Ints]]:
        """The changed rows by kind and role, then by how they changed."""
        rows = self.changes.changed
        flags = self.changes.kinds[rows]
        kind = np.argmax([(flags & np.uint8(each)) > 0 for each in _ORDER], axis=0)
        # Rows alike in all that the words are made of are put into words once.
        old, stood = np.full(len(rows), -1), self.changes.old[rows] >= 0
        old[stood] = self.changes.before.thing[self.changes.old[rows[stood]]]
        step = np.rint(self.changes.moved[rows]).astype(np.int64)
        step[kind != _ORDER.index(Kind.MOVED)] = 0
        alike = np.column_stack([kind, old, self.thing[rows], step])
        different, which = np.unique(alike, axis=0, return_inverse=True)
        order = np.argsort(which.reshape(-1), kind="stable")
        edges = np.searchsorted(which.reshape(-1)[order], np.arange(len(different) + 1))
        found: dict[tuple[Kind, str], dict[str, list[Ints]]] = defaultdict(lambda: defaultdict(list))
        for number, (kind_number, was, now, *moved) in enumerate(different.tolist()):
            one, thing = _ORDER[kind_number], self.things[now]
            way = _way(one, self.things[was], thing, moved)
            found[one, thing.role][way].append(rows[order[edges[number] : edges[number + 1]]])
        return {
            group: {way: np.sort(np.concatenate(some)) for way, some in ways.items()}
            for group, ways in found.items()
        }

    def ways(self, kind: Kind, rows: Ints, ways: int) -> str:
        """Give how pieces changed that changed in too many ways."""
        if kind is Kind.MOVED:
            farthest = np.linalg.norm(self.changes.moved[rows], axis=1).max()
            return f"moved by up to {farthest:,.0f} mm"
        return f"{kind.word}, in {ways} ways"

    def group(self, kind: Kind, role: str, way: str, rows: Ints) -> ChangeGroup:
        """Give the group of some rows."""
        places, first, counts = np.unique(self.place[rows], return_index=True, return_counts=True)
        number = self.role_of[self.thing[rows[0]]]
        whole = bool((counts == self.all_of[int(self.later[rows[0]])][number, places]).all())
        named = [self.names[place] for place in places[np.argsort(first)].tolist()]
        much = f"all {len(rows):,}" if whole else f"{len(rows):,}"
        who = f"{much} {_several(role)}{_where(named)}" if len(rows) > 1 else self.changes.key(int(rows[0]))
        mass = float(np.array([thing.mass for thing in self.things])[self.thing[rows]].sum())
        return ChangeGroup(kind, role, rows, f"{who}: {way}", mass, whole)


def _way(kind: Kind, was: Thing, now: Thing, moved: list[int]) -> str:
    """How a piece changed, in words that alike pieces share."""
    if kind is Kind.MOVED:
        return f"moved by {_vector(moved)}"
    if kind in (Kind.ADDED, Kind.REMOVED):
        return kind.word
    if kind in (Kind.REMARKED, Kind.REJOINED):
        return f"{kind.word}, otherwise as before"
    return _became(kind, was, now)


def _became(kind: Kind, was: Thing, now: Thing) -> str:
    """What a thing became, in words."""
    if kind is Kind.RESECTIONED:
        return f"{was.stock} became {now.stock}"
    if kind is Kind.RESHAPED:
        if abs(was.length - now.length) >= 1.0:
            return f"length {was.length:,.0f} mm became {now.length:,.0f} mm"
        return "other holes, cuts or outline"
    pairs = ((was.role, now.role), (was.grade, now.grade), (was.finish, now.finish))
    told = [f"{one or 'nothing'} became {other or 'nothing'}" for one, other in pairs if one != other]
    return ", ".join(told) or kind.word


def _place(key: str) -> str:
    return frame_of(key) or bay_of(key)


def _where(places: list[str]) -> str:
    """Where pieces are, in words; nothing where their keys do not tell."""
    frames = [place for place in places if place and "-" not in place]
    bays = [place for place in places if "-" in place]
    told = [
        f"{word if len(some) == 1 else word + 's'} {_few(some)}"
        for word, some in (("line", frames), ("bay", bays))
        if some
    ]
    return f" of {' and '.join(told)}" if told else ""


def _few(places: list[str]) -> str:
    if len(places) <= _MOST_PLACES:
        return ", ".join(places)
    return f"{places[0]} to {places[-1]} ({len(places)} of them)"


def _several(role: str) -> str:
    """The word for several of a role."""
    if role.endswith("s"):
        return role
    return f"{role}es" if role.endswith("ch") else f"{role}s"


def _vector(moved: list[int]) -> str:
    """A movement in whole mm, without what is none."""
    words = [f"{axis} {step:+,} mm" for axis, step in zip("xyz", moved, strict=True) if step]
    return ", ".join(words) or "turning about its own axis"
