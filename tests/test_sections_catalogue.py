"""Designations as people type them, what is refused and what is offered instead, and the lists."""

from __future__ import annotations

import csv
import json
import re
import subprocess
import sys
from importlib.resources import files

import pytest
from hypothesis import given
from hypothesis import strategies as st

from shedbim.errors import UnknownSection
from shedbim.sections.catalogue import designations, families, section
from shedbim.sections.profiles import Hollow, LippedC, LippedZ
from shedbim.sections.section import Section

TABLES = sorted(
    file.name for file in (files("shedbim.sections") / "data").iterdir() if file.name.endswith(".csv")
)


@pytest.mark.parametrize(
    ("typed", "spelled"),
    [
        ("IPE 300", "IPE 300"),
        ("ipe300", "IPE 300"),
        ("  IPE\t300.0 ", "IPE 300"),
        ("heb 300", "HEB 300"),
        ("IPE-300", "IPE 300"),
        ("HE 300 B", "HEB 300"),  # EN 10365 writes the class behind the depth
        ("he300aa", "HEAA 300"),
        ("HE 260 M", "HEM 260"),
        ("IPE 300 A", "IPE A 300"),
        ("IPEO 330", "IPE O 330"),
        ("UB457x191x67", "UB 457x191x67"),
        ("ub 533 X 165 × 75", "UB 533x165x74"),
        ("UB 1016x305x349", "UB 1016x305x350"),
        ("W 310x38.7", "W 310x38.7"),
        ("W12X26", "W 310x38.7"),
        ("w310*38.70", "W 310x38.7"),
        ("W14x30", "W 360x44"),
        ("UPE200", "UPE 200"),
        ("PFC 200x75x23", "PFC 200x75x23"),
        ("SHS 100×100×5.0", "SHS 100x100x5"),
        ("shs 100x5", "SHS 100x100x5"),
        ("CF SHS 100 x 100 x 5", "SHS 100x100x5"),
        ("HF SHS 100x100x5", "HF SHS 100x100x5"),
        ("hfshs 100*100*6,3", "HF SHS 100x100x6.3"),
        ("HF RHS 200x100x8", "HF RHS 200x100x8"),
        ("HF CHS 114.3x5", "CHS 114.3x5"),
        ("CHS 114,3 x 5.00", "CHS 114.3x5"),
        ("L 80x8", "L 80x80x8"),
        ("L120x80x10", "L 120x80x10"),
        ("C 200x75x20x2.0", "C 200x75x20x2"),
        ("z200x75x20x2.5", "Z 200x75x20x2.5"),
        ("FL 100x10.0", "FL 100x10"),
        ("rd12", "RD 12"),
    ],
)
def test_a_designation_is_read_however_it_is_typed(typed: str, spelled: str) -> None:
    found = section(typed)
    assert found.designation == spelled
    assert found is section(spelled)
    assert found.family == spelled.rsplit(" ", 1)[0]


def test_cold_formed_is_meant_unless_hot_finished_is_said() -> None:
    cold, hot = section("SHS 100x100x5").profile, section("HF SHS 100x100x5").profile
    assert isinstance(cold, Hollow)
    assert isinstance(hot, Hollow)
    assert (cold.ro, cold.ri) == (10.0, 5.0)
    assert (hot.ro, hot.ri) == (7.5, 5.0)


def test_a_cold_formed_section_is_bent_to_one_and_a_half_walls() -> None:
    assert section("C 200x75x20x2").profile == LippedC(200, 75, 20, 2, 3)
    assert section("Z 260x80x25x3").profile == LippedZ(260, 80, 25, 3, 4.5)


@pytest.mark.parametrize(
    ("typed", "nearest"),
    [
        ("IPE 310", ["IPE 300", "IPE 330", "IPE 270"]),
        ("IPE 3000", ["IPE 600", "IPE 550", "IPE 500"]),
        ("SHS 100x100x7", ["SHS 100x100x6.3", "SHS 100x100x8", "SHS 100x100x6"]),
        ("CHS 114x5", ["CHS 114.3x5", "CHS 114.3x4.5", "CHS 101.6x5"]),
        ("RHS 100x200x8", ["RHS 200x100x8"]),  # depth and width the wrong way round
        ("L 80x120x10", ["L 120x80x10"]),
        ("UB 457x191x68", ["UB 457x191x67"]),
        ("UB 457x191", ["UB 457x191x67"]),
        ("W 12x27", ["W 310x38.7"]),  # a name in inches is near to names in inches
        ("IPX 300", ["IPE 300"]),
        ("HEZ 300", ["HEA 300", "HEB 300", "HEM 300"]),
        ("UPN 200", ["UPE 200"]),
        ("100x100x5", ["SHS 100x100x5", "HF SHS 100x100x5"]),
        ("SHS", ["SHS 100x100x5"]),
    ],
)
def test_an_unknown_section_is_answered_with_the_nearest(typed: str, nearest: list[str]) -> None:
    with pytest.raises(UnknownSection) as caught:
        section(typed)
    assert caught.value.designation == typed
    offered = list(caught.value.nearest)
    assert offered[: len(nearest)] == nearest
    assert len(offered) <= 5
    assert all(section(one).designation == one for one in offered)


@pytest.mark.parametrize(
    ("typed", "reason"),
    [
        ("C 200x75x20", "3 dimensions where 4 are wanted: depth x flange x lip x wall"),
        ("C 200x75x20x-2", "the wall is -2 mm"),
        ("C 200x75x20x0", "the wall is 0 mm"),
        ("C 200x75x20x0.2", "the wall is 0.2 mm and must be 0.45 to 15 mm"),
        ("C 200x75x20x10", "the lip of 20 mm leaves nothing"),
        ("C 200x75x100x2", "two lips of 100 mm meet"),
        ("C 2000x75x20x2", "2000 mm is more than 1000 mm"),
        ("Z 200x10x20x2.5", "the flange of 10 mm leaves nothing"),
        ("Z 200x75x200x2.5", "as deep as the section"),
        ("Z 10x75x20x2.5", "the depth of 10 mm leaves nothing"),
        ("FL 10x100", "the width comes first"),
        ("FL 5000x10", "more than 3000 mm"),
        ("FL 100", "1 dimensions where 2 are wanted"),
        ("RD 0", "the diameter is 0 mm"),
        ("RD -5", "the diameter is -5 mm"),
        ("RD 501", "more than 500 mm"),
        ("RD 12x3", "2 dimensions where 1 are wanted"),
        ("", "not a family name followed by its dimensions"),
        ("IPE", "not a family name followed by its dimensions"),
        ("IPE 1e3", "not a family name"),
        ("IPE nan", "not a family name"),
        ("IPE 300\n; drop", "not a family name"),
        ("IPE ٣٠٠", "not a family name"),  # digits of another script are no number here
        ("Q" * 5000, "not a family name"),
        ("RD " + "9" * 5000, "not a family name"),
    ],
)
def test_an_impossible_section_is_refused_with_the_reason(typed: str, reason: str) -> None:
    with pytest.raises(UnknownSection, match=re.escape(reason)) as caught:
        section(typed)
    assert len(str(caught.value)) < 300


@given(
    st.text(max_size=80)
    | st.from_regex(r"(C|Z|FL|RD|SHS|UB) ?-?[0-9.]{1,9}([x*,-][0-9.]{1,6}){0,4}", fullmatch=True)
)
def test_any_text_gives_a_section_or_is_refused(text: str) -> None:
    try:
        found = section(text)
    except UnknownSection:
        return
    assert found.area > 0
    assert section(found.designation) is found


def test_families_have_unequal_names_and_examples_that_exist() -> None:
    names = [family.name for family in families()]
    assert len(set(names)) == len(names)
    for wanted in (
        *("IPE", "HEA", "HEB", "HEM", "UB", "UC", "W", "UPE", "PFC"),
        *("SHS", "RHS", "CHS", "HF SHS", "HF RHS", "L", "C", "Z", "FL", "RD"),
    ):
        assert wanted in names
    for family in families():
        assert section(family.example).designation == family.example
        assert section(family.example).family == family.name
        assert family.pattern.startswith(family.name)
        assert bool(designations(family)) == family.listed
        assert designations(family.name) == designations(family)


def test_an_unknown_family_is_answered_with_the_nearest() -> None:
    with pytest.raises(UnknownSection, match="no such family") as caught:
        designations("HEX")
    assert {"HEA", "HEB", "HEM"} <= set(caught.value.nearest)


#: Numbers of sizes counted by hand from the standards' own lists: IPE 80 to 600 and five of 750, HE 100 to
#: 1000, UPE 80 to 400, PFC 100 to 430; W as many as the AISC table has. UB and UC are held against a whole
#: independent table elsewhere.
COUNTS = {"IPE": 23, "HEA": 24, "HEB": 24, "HEM": 24, "UPE": 14, "PFC": 16, "W": 289}


@pytest.mark.parametrize(("family", "count"), COUNTS.items())
def test_tables_are_whole(family: str, count: int) -> None:
    listed = designations(family)
    assert len(listed) == len(set(listed)) == count


def listed_sections() -> list[Section]:
    return [section(name) for family in families() for name in designations(family)]


def test_every_listed_section_is_sound() -> None:
    everything = listed_sections()
    assert len(everything) > 1900
    for found in everything:
        low_y, low_z, high_y, high_z = found.outline.bounds
        box = (high_y - low_y) * (high_z - low_z)
        assert 0 < found.area < box, found.designation
        assert 0 < found.iz * (1 - 1e-9) <= found.principal[0], found.designation
        assert found.outline.centroid == pytest.approx((0.0, 0.0), abs=1e-6)
        assert 0 < found.profile.thickness < min(high_y - low_y, high_z - low_z), found.designation
        assert found.source


def test_within_one_size_a_thicker_wall_is_heavier() -> None:
    for name in ("SHS", "RHS", "HF SHS", "HF RHS", "CHS", "L"):
        by_outside: dict[str, list[tuple[float, float]]] = {}
        for listed in designations(name):
            outside, wall = listed.rsplit("x", 1)
            by_outside.setdefault(outside, []).append((float(wall), section(listed).mass_per_metre))
        for walls in by_outside.values():
            masses = [mass for _, mass in sorted(walls)]
            assert masses == sorted(set(masses))


@pytest.mark.parametrize("table", TABLES)
def test_every_row_of_data_names_its_source(table: str) -> None:
    text = (files("shedbim.sections") / "data" / table).read_text(encoding="utf-8")
    rows = list(csv.DictReader(text.splitlines()))
    assert rows
    for row in rows:
        assert re.search(r"EN 10\d\d\d|BS 4-1|SCI P363|ASTM A6", row["source"])
        assert re.search(r"from memory|as held by|row seen", row["source"])
        assert None not in row
        assert None not in row.values()


def test_looking_up_one_section_reads_one_table_and_imports_nothing_heavy() -> None:
    script = """
import json, sys
opened = []
sys.addaudithook(lambda event, args: opened.append(str(args[0])) if event == "open" else None)
from shedbim.sections.catalogue import section
at_import = [name for name in opened if name.endswith(".csv")]
section("UPE 220"); section("UPE 240"); section("C 200x75x20x2")
tables = [name.replace("\\\\", "/").rsplit("/", 1)[1] for name in opened if name.endswith(".csv")]
heavy = sorted({"pydantic", "ruamel", "manifold3d", "xlsxwriter", "ifcopenshell", "scipy"} & set(sys.modules))
print(json.dumps([at_import, tables, heavy]))
"""
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, check=True)
    assert json.loads(done.stdout) == [[], ["upe.csv"], []]
