"""The section of a designation, and the lists of what there is.

The families are one table; a family is one row of it, kept in the module that knows its shape. The table of a
family is read when one of its sections is first asked for, and only that table.
"""

from __future__ import annotations

from functools import cache, lru_cache

from shedbim.errors import UnknownSection
from shedbim.sections import angles, by_dimension, channels, hollow, rolled, us_wide_flange
from shedbim.sections.designation import LONGEST, folded, parse
from shedbim.sections.family import Entry, Family, Size
from shedbim.sections.nearest import distance, nearest_names, nearest_sizes
from shedbim.sections.section import Section

__all__ = ["Family", "designations", "families", "section"]

_FAMILIES = (
    *rolled.FAMILIES,
    *us_wide_flange.FAMILIES,
    *channels.FAMILIES,
    *hollow.FAMILIES,
    *angles.FAMILIES,
    *by_dimension.FAMILIES,
)


def _named() -> dict[str, Family]:
    """Give the family of every name and alias, folded; refuses doubles."""
    names: dict[str, Family] = {}
    for family in _FAMILIES:
        for name in (family.name, *family.aliases):
            if folded(name) in names:
                raise AssertionError(f"two families are called {name}")
            names[folded(name)] = family
    return names


_BY_NAME = _named()


def families() -> tuple[Family, ...]:
    """Give all families, in the order in which they are listed to a user."""
    return _FAMILIES


def designations(family: Family | str) -> tuple[str, ...]:
    """Give the designations of a family in the order of its table; empty for a family made from dimensions.

    Raises:
        UnknownSection: when there is no family of that name.
    """
    if isinstance(family, str):
        found = _BY_NAME.get(folded(family))
        if found is None:
            raise UnknownSection(family, [f.name for f in _closest(folded(family))], reason="no such family")
        family = found
    return tuple(family.designation(entry.size) for entry in _entries(family.name))


@lru_cache(maxsize=4096)
def section(designation: str) -> Section:
    """Give the section of a designation such as ``IPE 300``, ``SHS 100x100x5`` or ``Z 200x75x20x2.5``.

    Case, spaces, ``×`` or ``*`` for ``x`` and trailing zeros do not matter; the section carries the
    designation as the catalogue spells it, and equal designations give one and the same section.

    Raises:
        UnknownSection: when there is none, with the nearest ones; also for impossible dimensions, with the
            reason.
    """
    parsed = parse(designation)
    name, size, strokes = parsed if parsed is not None else ("", (), ())
    family = _BY_NAME.get(name)
    if parsed is None or (strokes and (family is None or family.strokes(size) != strokes)):
        shown = designation if len(designation) <= LONGEST else f"{designation[:LONGEST]}…"
        reason = "not a family name followed by its dimensions"
        raise UnknownSection(shown, _similar(designation), reason=reason)
    if family is None:
        raise UnknownSection(designation, _across(_closest(name), size), reason="no such family")
    if family.square and len(size) == 2:
        size = (size[0], *size)
    if not family.listed:
        return _made(designation, family, size, strokes)
    entry = _index(family.name).get(size)
    if entry is None:
        raise UnknownSection(designation, _across((family,), size))
    return _built(family.name, entry.size)


def _made(designation: str, family: Family, size: Size, strokes: Size) -> Section:
    """Give the section of a family made from dimensions."""
    try:
        if strokes != family.strokes(size):
            raise ValueError("no / before the second flange")
        return _built(family.name, size)
    except ValueError as refusal:
        raise UnknownSection(designation, reason=f"{refusal} ({family.pattern}, in mm)") from refusal


@lru_cache(maxsize=4096)
def _built(family_name: str, size: Size) -> Section:
    """Give the section of a listed or made size, once."""
    family = _BY_NAME[folded(family_name)]
    if not family.listed:
        return Section(family.designation(size), family.name, family.shape(size), family.standard)
    entry = _index(family_name)[size]
    return Section(family.designation(size), family.name, family.shape(entry.dimensions), entry.source)


@cache
def _entries(family_name: str) -> tuple[Entry, ...]:
    """Give the listed sizes of a family; none for one made from dimensions."""
    entries = _BY_NAME[folded(family_name)].entries
    return tuple(entries()) if entries is not None else ()


@cache
def _index(family_name: str) -> dict[Size, Entry]:
    """Give the entry of every size, and of every other size it is known under."""
    index: dict[Size, Entry] = {}
    for entry in _entries(family_name):
        for size in (entry.size, *entry.other):
            index[size] = entry
    return index


def _closest(name: str) -> tuple[Family, ...]:
    """Give the families whose names look most like ``name``, in the order of the table where equally like."""
    near = nearest_names(name, _BY_NAME)
    return tuple(dict.fromkeys(_BY_NAME[folded_name] for folded_name in near))


def _across(candidates: tuple[Family, ...], size: Size) -> list[str]:
    """Give the designations nearest to ``size`` in the candidates, or in all families if there are none."""
    count = 3 if len(candidates) == 1 else 1
    found = sorted(
        (round(distance(size, near), 9), rank, family.designation(_index(family.name)[near].size))
        for rank, family in enumerate(candidates or _FAMILIES)
        for near in nearest_sizes(size, _index(family.name), count)
    )
    return list(dict.fromkeys(designation for _, _, designation in found))[:5]


def _similar(text: str) -> list[str]:
    """Give an example of each of the three families that a text which is no designation looks most like."""
    examples = {family.example.upper(): family.example for family in _FAMILIES}
    return [examples[near] for near in nearest_names(text.upper()[:LONGEST], examples, 3, least=0.0)]
