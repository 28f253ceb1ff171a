"""What ``shedbim sections`` prints: families, the sections of one, or all of one section."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import asdict, dataclass
from typing import Any

from shedbim.cli.speech import say, show_json
from shedbim.cli.tables import show_table
from shedbim.errors import UnknownSection
from shedbim.sections.catalogue import Family, designations, families, section
from shedbim.sections.section import Section

__all__ = ["run"]


@dataclass(frozen=True)
class _Property:
    """A property of a section: name, unit, decimals and how it is had; ``main`` ones are listed."""

    name: str
    unit: str
    decimals: int
    value: Callable[[Section], float]
    main: bool = False

    def rounded(self, found: Section, extra: int = 0) -> float:
        """The value to the property's decimals and some more, never minus zero."""
        return round(self.value(found), self.decimals + extra) + 0.0

    def shown(self, found: Section) -> str:
        """The value as text."""
        return f"{self.rounded(found):.{self.decimals}f}"

    @property
    def heading(self) -> str:
        return f"{self.name} {self.unit}"

    @property
    def key(self) -> str:
        unit = self.unit.replace("/", "_per_").replace("²", "2").replace("⁴", "4")
        return f"{self.name.replace(' ', '_')}_{unit}"


_PROPERTIES = (
    _Property("mass", "kg/m", 2, lambda s: s.mass_per_metre, main=True),
    _Property("surface", "m²/m", 3, lambda s: s.surface_per_metre, main=True),
    _Property("height", "mm", 1, lambda s: s.height, main=True),
    _Property("width", "mm", 1, lambda s: s.width, main=True),
    _Property("area", "cm²", 2, lambda s: s.area / 1e2, main=True),
    _Property("Iy", "cm⁴", 2, lambda s: s.iy / 1e4, main=True),
    _Property("Iz", "cm⁴", 2, lambda s: s.iz / 1e4, main=True),
    _Property("Iyz", "cm⁴", 2, lambda s: s.iyz / 1e4),
    _Property("Iu", "cm⁴", 2, lambda s: s.principal[0] / 1e4),
    _Property("Iv", "cm⁴", 2, lambda s: s.principal[1] / 1e4),
    _Property("radius y", "mm", 2, lambda s: s.radius_y),
    _Property("radius z", "mm", 2, lambda s: s.radius_z),
    _Property("radius least", "mm", 2, lambda s: s.radius_least),
    _Property("centroid y from the middle", "mm", 2, lambda s: s.centroid_in_box[0]),
    _Property("centroid z from the middle", "mm", 2, lambda s: s.centroid_in_box[1]),
)


def run(name: str, *, as_json: bool) -> None:
    """Print all families for an empty name, else the family or the section of that name.

    Raises:
        UnknownSection: when it is neither, with the nearest ones.
    """
    if not name:
        _show_families(as_json=as_json)
        return
    family = _family(name)
    if family is None:
        _show_section(section(name), as_json=as_json)
    else:
        _show_family(family, as_json=as_json)


def _family(name: str) -> Family | None:
    try:
        listed = designations(name)
    except UnknownSection:
        return None
    wanted = section(listed[0]).family if listed else name
    for family in families():
        if wanted.casefold() in {word.casefold() for word in (family.name, *family.aliases)}:
            return family
    return None


def _show_families(*, as_json: bool) -> None:
    rows = [(f, len(designations(f))) for f in families()]
    if as_json:
        show_json({"families": [_family_data(family, count) for family, count in rows]})
        return
    show_table(
        ("family", "sizes", "written", "for example", "what", "standard"),
        [
            (f.name, str(count) if f.listed else "any", f.pattern, f.example, f.description, f.standard)
            for f, count in rows
        ],
        numbers=(1,),
    )


def _family_data(family: Family, count: int) -> dict[str, Any]:
    return {
        "name": family.name,
        "sizes": count if family.listed else None,
        "pattern": family.pattern,
        "example": family.example,
        "description": family.description,
        "standard": family.standard,
        "aliases": list(family.aliases),
    }


def _show_family(family: Family, *, as_json: bool) -> None:
    names = designations(family)
    if as_json:
        listed = [_section_data(section(name)) for name in names]
        show_json({"family": _family_data(family, len(names)), "sections": listed})
        return
    say(f"{family.name}: {family.description} ({family.standard})")
    if not family.listed:
        say(f"Made from its dimensions in mm: {family.pattern}, for example {family.example}")
        return
    shown = [row for row in _PROPERTIES if row.main]
    show_table(
        ("section", *(row.heading for row in shown)),
        [(name, *(row.shown(section(name)) for row in shown)) for name in names],
        numbers=range(1, len(shown) + 1),
    )


def _dimensions(found: Section) -> dict[str, float]:
    """The dimensions of its profile by their symbols, mm; without those that it leaves to another."""
    dimensions: dict[str, float | None] = asdict(found.profile)  # type: ignore[call-overload]
    return {name: value for name, value in dimensions.items() if value is not None}


def _section_data(found: Section) -> dict[str, Any]:
    data: dict[str, Any] = {"designation": found.designation, "family": found.family}
    data["dimensions_mm"] = _dimensions(found)
    data.update({row.key: row.rounded(found, 3) for row in _PROPERTIES})
    data["source"] = found.source
    return data


def _show_section(found: Section, *, as_json: bool) -> None:
    if as_json:
        show_json(_section_data(found))
        return
    say(f"{found.designation} ({found.family})")
    rows = [(name, f"{value:g}", "mm") for name, value in _dimensions(found).items()]
    rows += [(row.name, row.shown(found), row.unit) for row in _PROPERTIES]
    show_table(("property", "value", "unit"), rows, numbers=(1,))
    say(f"Source: {found.source}")
