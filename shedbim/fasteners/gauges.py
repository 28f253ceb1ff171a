"""Where bolts sit in rolled sections: back marks of angle legs, cross-centres of flanges, mm."""

from __future__ import annotations

from shedbim.fasteners.distances import least_edge
from shedbim.fasteners.holes import hole_diameter
from shedbim.fasteners.rows import by_diameter, rows_of
from shedbim.sections.profiles import IShape
from shedbim.sections.section import Section

__all__ = ["back_mark", "cross_centres", "double_back_mark", "largest_bolt"]

#: Families whose flanges are drilled by the rows of each table.
_TABLES = {
    **dict.fromkeys(("IPE", "IPE A", "IPE O"), "IPE"),
    **dict.fromkeys(("HEA", "HEAA", "HEB", "HEM"), "HE"),
    "UB": "UB",
    "UC": "UC",
}
#: Sections of other families at least this many times as deep as wide are drilled as UB, the rest as UC.
_SLENDER = 1.25
#: Widths may be so much below the row's, mm: a flange of 199 is one of 200.
_WITHIN = 1.0


def back_mark(leg: float) -> tuple[float, float]:
    """Give the distance of one line of bolts from the back of an angle's leg, and the largest bolt there.

    A leg between two rows of the table is drilled as the smaller one.

    Raises:
        ValueError: for a leg that takes no bolt of M12.
    """
    found = [row for row in rows_of("back_marks") if float(row["leg"]) <= leg]
    if not found:
        raise ValueError(
            f"an angle leg of {leg:g} mm takes no bolt; {rows_of('back_marks')[0]['leg']} mm does"
        )
    return float(found[-1]["mark"]), float(found[-1]["largest"])


def double_back_mark(leg: float) -> tuple[float, float, float]:
    """Give back mark of the first of two lines of bolts, their distance, and the largest bolt there.

    Raises:
        ValueError: for a leg that is too small for two lines.
    """
    found = [row for row in rows_of("double_back_marks") if float(row["leg"]) <= leg]
    if not found:
        least = rows_of("double_back_marks")[0]["leg"]
        raise ValueError(f"an angle leg of {leg:g} mm takes one line of bolts; two from {least} mm")
    row = found[-1]
    return float(row["mark"]), float(row["apart"]), float(row["largest"])


def cross_centres(section: Section) -> float:
    """Give the distance of the two lines of bolts in a flange of an I, one on either side of the web.

    Raises:
        ValueError: for a section that is no I, or whose flange is narrower than any listed.
    """
    profile = _i_shape(section)
    table = _TABLES.get(section.family, "UB" if profile.h > _SLENDER * profile.b else "UC")
    rows = [row for row in rows_of("cross_centres") if row["table"] == table]
    found = [row for row in rows if float(row["from_width"]) <= profile.b + _WITHIN]
    if not found:
        raise ValueError(
            f"the flange of {section.designation} is {profile.b:g} mm wide; {rows[0]['from_width']} mm takes bolts"
        )
    return float(found[-1]["centres"])


def largest_bolt(section: Section, centres: float | None = None) -> float:
    """Give the largest bolt for a flange of an I.

    Its hole keeps the least edge distance (EN 1993-1-8 Table 3.3), its washer lies clear of the root.

    Args:
        section: an I.
        centres: of the two lines of bolts; ``cross_centres`` by default.

    Raises:
        ValueError: where no bolt fits, or for a section that is no I.
    """
    profile = _i_shape(section)
    across = cross_centres(section) if centres is None else centres
    edge, root = (profile.b - across) / 2, across / 2 - profile.tw / 2 - profile.r
    fitting = [
        diameter
        for diameter, row in by_diameter("bolts").items()
        if least_edge(hole_diameter(diameter)) <= edge and row["washer_d2"] / 2 <= root
    ]
    if not fitting:
        raise ValueError(f"no bolt fits the flange of {section.designation} at {across:g} mm across")
    return max(fitting)


def _i_shape(section: Section) -> IShape:
    """The dimensions of an I."""
    if not isinstance(section.profile, IShape):
        raise ValueError(f"{section.designation} has no flanges on both sides of a web")
    return section.profile
