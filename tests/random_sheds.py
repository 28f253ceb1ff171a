"""Random descriptions: every form, system, pattern and family of sections, sizes that mostly go together."""

from __future__ import annotations

from typing import Any

from hypothesis import strategies as st

__all__ = ["descriptions"]

_COLUMNS = ["HEA 300", "HEB 360", "IPE 500", "UB 457x191x67", "UC 254x254x89", "SHS 250x250x10", "RHS 300x200x10",
            "CHS 273x10", "W 14x48"]  # fmt: skip
_RAFTERS = ["IPE 300", "IPE 450", "HEA 260", "UB 406x178x60", "IPE 160"]
_CHORDS = ["SHS 150x150x8", "SHS 120x120x6", "RHS 160x80x6", "RHS 200x120x8", "SHS 200x200x8"]
_WEBS = ["SHS 90x90x5", "SHS 60x60x4", "CHS 76.1x4", "RHS 80x40x4", "CHS 48.3x4", "SHS 120x120x6"]
_POSTS = ["IPE 200", "HEA 180", "SHS 160x160x8", "IPE 330"]
_TUBES = ["CHS 76.1x4", "CHS 114.3x5", "CHS 48.3x3"]
_ANGLES = ["L 60x60x6", "L 80x80x8", "L 100x75x8", "L 120x120x10"]
_STRUTS = ["CHS 88.9x4", "SHS 100x100x5", "SHS 60x60x4", "CHS 168.3x6", "RHS 120x60x5"]
_COLD = ["Z 200x75x20x2.0", "C 200x75x20x2.0", "Z 150x65x18x1.6", "C 250x75x20x2.5", "Z 300x90x25x3.0"]


def _mm(low: int, high: int) -> st.SearchStrategy[str]:
    return st.integers(low, high).map(lambda value: f"{value} mm")


def _deg(low: float, high: float) -> st.SearchStrategy[str]:
    return st.integers(int(low * 10), int(high * 10)).map(lambda value: f"{value / 10} deg")


_ROOFS = st.one_of(
    st.fixed_dictionaries(
        {"form": st.just("gable"), "pitch": _deg(1, 32)}, optional={"pitch_right": _deg(1, 40)}
    ),
    st.fixed_dictionaries(
        {"form": st.just("mono-pitch"), "pitch": _deg(1, 20)},
        optional={"high": st.sampled_from(["left", "right"])},
    ),
    st.fixed_dictionaries(
        {"form": st.just("flat")},
        optional={
            "fall": st.sampled_from(["1:60", "1:150", "1:25"]),
            "high": st.sampled_from(["left", "right"]),
        },
    ),
)


@st.composite
def _trusses(draw: st.DrawFn) -> dict[str, Any]:
    options = draw(
        st.fixed_dictionaries(
            {
                "system": st.just("truss"),
                "shape": st.sampled_from(["parallel", "pitched"]),
                "pattern": st.sampled_from(["pratt", "howe", "warren", "warren-with-posts"]),
                "panels": st.integers(3, 9).map(lambda n: 2 * n) | st.integers(2, 20),
                "depth": _mm(700, 2800),
                "top_chord": st.sampled_from(_CHORDS),
                "bottom_chord": st.sampled_from(_CHORDS),
                "diagonals": st.sampled_from(_WEBS),
            },
            optional={"end_diagonals": st.sampled_from(_WEBS), "posts": st.sampled_from(_WEBS)},
        )
    )
    if options["shape"] == "pitched":
        options["bottom_pitch"] = draw(st.just("0 deg") | _deg(0, 6))
    return options


_SYSTEMS = _trusses() | st.fixed_dictionaries(
    {"system": st.just("rafter"), "section": st.sampled_from(_RAFTERS)}
)


def _braces(draw: st.DrawFn) -> dict[str, Any]:
    pattern = draw(st.sampled_from(["crossed", "single"]))
    sections = _TUBES if pattern == "single" else _TUBES + _ANGLES
    return {"pattern": pattern, "section": draw(st.sampled_from(sections))}


@st.composite
def descriptions(draw: st.DrawFn) -> dict[str, Any]:
    """Give a description as its file would hold it."""
    bays = draw(st.lists(st.integers(2500, 12000), min_size=1, max_size=5))
    gables = {
        "system": draw(st.sampled_from(["same", "rafter"])),
        "posts": draw(st.sampled_from(_POSTS)),
        "post_spacing": draw(_mm(3000, 9000)),
    }
    if gables["system"] == "rafter":
        gables["rafter"] = draw(st.sampled_from(_RAFTERS))
    roof_braces, wall_braces = _braces(draw), _braces(draw)
    roof_braces |= draw(st.fixed_dictionaries({}, optional={"panels": st.integers(1, 6)}))
    wall_braces |= draw(
        st.fixed_dictionaries(
            {}, optional={"tiers": st.integers(1, 3), "lines": st.sampled_from(["outer", "all"])}
        )
    )
    cold = {
        "section": st.sampled_from(_COLD),
        "spacing": _mm(900, 2400),
    }
    rows = st.just("by span") | st.integers(0, 3)
    return {
        "project": {"name": "Random", "number": 1},
        "building": {
            "spans": [f"{mm} mm" for mm in draw(st.lists(st.integers(6000, 32000), min_size=1, max_size=3))],
            "bays": [f"{mm} mm" for mm in bays],
            "eaves": draw(_mm(3000, 11000)),
            "roof": draw(_ROOFS),
        },
        "frames": {
            "columns": {"section": draw(st.sampled_from(_COLUMNS))},
            "roof": draw(_SYSTEMS),
            "gables": gables,
        },
        "purlins": draw(
            st.fixed_dictionaries(
                cold,
                optional={
                    "eaves_offset": _mm(0, 400),
                    "ridge_offset": _mm(50, 400),
                    "valley_offset": _mm(100, 500),
                    "gap": _mm(2, 20),
                    "lift": _mm(3, 30),
                    "set_out": st.sampled_from(["even", "nodes"]),
                    "sag_bars": rows,
                },
            )
        ),
        "rails": draw(
            st.fixed_dictionaries(
                cold,
                optional={
                    "base_offset": _mm(100, 900),
                    "eaves_offset": _mm(50, 600),
                    "gap": _mm(2, 20),
                    "lift": _mm(3, 30),
                    "sag_bars": rows,
                },
            )
        ),
        "bracing": {
            "bays": draw(st.just("rule") | st.sampled_from([["first"], ["last"], ["first", "last"], [1]])),
            "roof": roof_braces,
            "walls": wall_braces,
            "struts": {"section": draw(st.sampled_from(_STRUTS))},
            "eaves_strut": {"section": draw(st.sampled_from(_STRUTS))},
            "ties": {"section": draw(st.sampled_from(_STRUTS)), "spacing": draw(_mm(3000, 15000))},
        },
    }
