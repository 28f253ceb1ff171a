"""Faults of a description: all at once, each with its place, what was given, what is allowed, near names."""

from __future__ import annotations

from pathlib import Path

import pytest
from spoiling import changed, faults, only_fault

from shedbim.description import read, read_text
from shedbim.description.faults import MOST_FAULTS
from shedbim.description.source import MOST_BYTES
from shedbim.errors import DescriptionError

#: Words of the model library that no user should meet.
JARGON = ("pydantic", "http", "input", "Input", "Literal", "validat", "NoneType", "dict", "tuple", "str")


def test_all_faults_come_at_once_in_the_order_of_the_text() -> None:
    text = changed(
        "warren-gable",
        ("eaves: 8 m", "eave: 8 m"),
        ("pitch: 6 deg", "pitch: 80 deg"),
        ("section: HEB 300", "section: HEB 310"),
        ("pattern: warren", "pattern: waren"),
        ("panels: 12", "panels: twelve"),
        ("depth: 1.6 m", "depth: 1.6"),
        ("8 x 5.75 m", "8 x 5.75, 0.5 m"),
        ("spacing: 1.7 m", "spacing: 1.7 m\n  spacing: 1.8 m"),
        ("bays: [first, last]", "bays: [first, 12]"),
        ("section: L 90x90x8", "section: IPE 300"),
    )
    found = faults(text)
    assert [fault.field for fault in found] == [
        "building.eaves",
        "building.bays[1]",
        "building.bays[2]",
        "building.eave",
        "building.roof.pitch",
        "frames.columns.section",
        "frames.roof.pattern",
        "frames.roof.panels",
        "frames.roof.depth",
        "",
        "bracing.walls.section",
    ]
    assert [fault.line for fault in found] == sorted(fault.line for fault in found)


def test_a_fault_names_its_place_to_the_letter() -> None:
    text = changed("warren-gable", ("section: HEB 300", "section: HEB 310"))
    fault = only_fault(text)
    line = text.splitlines()[fault.line - 1]
    assert line[fault.column - 1 :].startswith("HEB 310")
    assert (fault.file, fault.given) == ("shed.yaml", "HEB 310")
    assert "HEB 300" in fault.nearest
    assert "an I or H section" in fault.allowed
    assert str(fault).startswith(f"shed.yaml:{fault.line}:{fault.column}: frames.columns.section: ")


def test_an_item_of_a_list_is_named_by_its_number() -> None:
    text = changed("warren-gable", ("[7 m, 8 x 5.75 m, 7 m]", "\n    - 7 m\n    - 8 x 5.75 m\n    - 7"))
    fault = only_fault(text)
    assert fault.field == "building.bays[2]"
    assert text.splitlines()[fault.line - 1] == "    - 7         # along the length, 60 m in all"
    assert fault.column == 7


def test_an_unknown_field_points_at_its_key_and_names_the_nearest() -> None:
    text = changed("warren-gable", ("  spacing: 1.8 m", "  spacing: 1.8 m\n  eaves_ofset: 2 m"))
    fault = only_fault(text)
    assert (fault.field, fault.given) == ("rails.eaves_ofset", "eaves_ofset")
    assert fault.column == 3
    assert fault.nearest[0] == "eaves_offset"
    assert "base_offset" in fault.allowed


def test_a_missing_field_points_at_its_group() -> None:
    text = changed("warren-gable", ("    pitch: 6 deg\n", ""))
    fault = only_fault(text)
    assert (fault.field, fault.message) == ("building.roof.pitch", "the field is missing")
    assert text.splitlines()[fault.line - 1].strip() == "roof:"
    assert fault.allowed == "1 deg to 60 deg"


def test_a_doubled_field_names_the_line_of_the_first() -> None:
    text = changed("warren-gable", ("eaves: 8 m", "eaves: 8 m\n  eaves: 9 m"))
    fault = only_fault(text)
    first = next(i for i, line in enumerate(text.splitlines(), 1) if "eaves: 8 m" in line)
    assert fault.line == first + 1
    assert fault.message == f"'eaves' is given twice, first in line {first}"


@pytest.mark.parametrize("written", ["6", "6.5", "[6, 5.75 m]"])
def test_a_bare_number_where_a_unit_is_due_is_told_so(written: str) -> None:
    if written.startswith("["):
        fault = only_fault(changed("warren-gable", ("[7 m, 8 x 5.75 m, 7 m]", written)))
    else:
        fault = only_fault(changed("warren-gable", ("depth: 1.6 m", f"depth: {written}")))
    assert fault.message == "a bare number: the unit is missing"
    assert "for example 6 m" in fault.allowed


@pytest.mark.parametrize(
    "written", [".nan", "nan m", ".inf", "-.inf", "inf m", "1e99 m", "1e999 m", "-8 m", "0 m"]
)
def test_lengths_that_are_not_finite_or_out_of_bounds_are_refused(written: str) -> None:
    fault = only_fault(changed("warren-gable", ("eaves: 8 m", f"eaves: {written}")))
    assert fault.field == "building.eaves"
    assert fault.given == written
    assert "2 m to 40 m" in fault.allowed


@pytest.mark.parametrize(
    ("written", "message", "near"),
    [
        ("form: gabel", "not one of the choices", ("gable",)),
        ("form:", "not one of the choices", ()),
        ("form: [gable]", "not one of the choices", ()),
        ("fom: gable", "the field is missing", ()),
    ],
)
def test_a_group_that_does_not_say_its_kind_is_told_the_kinds(
    written: str, message: str, near: tuple[str, ...]
) -> None:
    found = [
        f
        for f in faults(changed("warren-gable", ("form: gable", written)))
        if f.field == "building.roof.form"
    ]
    assert [(f.message, f.nearest, f.allowed) for f in found] == [
        (message, near, "gable | mono-pitch | flat")
    ]


def test_the_other_faults_of_a_group_of_unknown_kind_are_told_as_well() -> None:
    text = changed(
        "warren-gable", ("system: rafter", "system: rafters"), ("rafter: IPE 300", "rafter: IPE 305")
    )
    found = faults(text.replace("posts: IPE 240", "post: IPE 240"))
    assert [f.field for f in found] == ["frames.gables.system", "frames.gables.rafter", "frames.gables.post"]
    assert found[1].nearest[0] == "IPE 300"
    assert found[2].nearest[0] == "posts"


@pytest.mark.parametrize(
    ("field", "old", "new", "message"),
    [
        ("building", "building:", "building: 6 m\nbuildings:", "a group of fields is wanted here"),
        ("building.eaves", "eaves: 8 m", "eaves: [8 m]", "a list stands here"),
        ("building.eaves", "eaves: 8 m", "eaves: {high: 8 m}", "a group of fields stands here"),
        ("building.eaves", "eaves: 8 m", "eaves:", "nothing is given"),
        ("building.bays", "[7 m, 8 x 5.75 m, 7 m]", "7 m", "a list is wanted here, in square brackets"),
        ("building.bays", "[7 m, 8 x 5.75 m, 7 m]", "[]", "0 lengths in all"),
        ("building.bays", "[7 m, 8 x 5.75 m, 7 m]", "[499 x 6 m, 2 x 6 m]", "501 lengths in all"),
        ("building.bays[0]", "[7 m, 8 x 5.75 m, 7 m]", "[99999 x 6 m]", "99999 repeats"),
        ("building.bays[1]", "[7 m, 8 x 5.75 m, 7 m]", "[7 m, 0 x 6 m]", "0 repeats"),
        ("frames.roof.panels", "panels: 12", "panels: 12.0", "not a whole number"),
        ("frames.roof.panels", "panels: 12", "panels: 62", "out of bounds"),
        (
            "frames.roof.top_chord",
            "SHS 150x150x8",
            "CHS 139.7x5",
            "a section of a shape that cannot be used here",
        ),
        ("frames.columns.grade", "grade: S355", "grade: S335", "not a grade of this kind of steel"),
        ("purlins.section", "Z 200x75x20x2.5", "IPE 200", "a section of a shape that cannot be used here"),
        ("bracing.bays", "[first, last]", "[]", "the list is empty"),
        ("bracing.bays", "[first, last]", "[2, 2]", "an item is given twice"),
        ("bracing.bays[1]", "[first, last]", "[first, lats]", "not a whole number"),
        ("project.name", "Saltmarsh Seed Store", '""', "the text is empty"),
        (
            "project.name",
            "Saltmarsh Seed Store",
            '"a\\u0007b"',
            "a control character or a line break in the text",
        ),
        (
            "project.name",
            "Saltmarsh Seed Store",
            '"a\\nb"',
            "a control character or a line break in the text",
        ),
        ("project.name", "Saltmarsh Seed Store", "x" * 101, "the text has 101 letters"),
        ("site.crs", '"EPSG:25832"', "25832", "the text does not have the right form"),
    ],
)
def test_a_value_that_its_field_cannot_take_is_told_why(field: str, old: str, new: str, message: str) -> None:
    found = {fault.field: fault for fault in faults(changed("warren-gable", (old, new)))}
    assert found[field].message == message
    assert found[field].allowed
    assert found[field].line > 1


def test_near_words_are_given_for_a_misspelt_word_in_a_list() -> None:
    assert only_fault(changed("warren-gable", ("[first, last]", "[first, lats]"))).nearest == ("last",)


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("eaves: 8 m", "eaves: &high 8 m", "an anchor"),
        ("eaves: 8 m", "eaves: !!str 8 m", "a tag"),
        ("eaves: 8 m", "eaves: ! 8 m", "a tag"),
        ("# A seed", "%YAML 1.1\n---\n# A seed", "a directive other than %YAML 1.2"),
        ("# A seed", "%TAG !e! tag:example.org,2000:\n---\n# A seed", "a directive other than %YAML 1.2"),
        ("bracing:\n", "---\nbracing:\n", "a second document in one file"),
        ("purlins:\n", "? [a, b]\n: 1\npurlins:\n", "a key that is no plain text"),
        ("  eaves: 8 m", "  <<: {eaves: 9 m}\n  eaves: 8 m", "a merge key"),
    ],
)
def test_yaml_that_means_something_else_than_it_shows_is_refused(old: str, new: str, message: str) -> None:
    assert message in [fault.message for fault in faults(changed("warren-gable", (old, new)))]


def test_an_alias_is_one_fault_and_its_value_none() -> None:
    text = changed("warren-gable", ("eaves: 8 m", "eaves: *high"))
    assert [fault.message for fault in faults(text)] == ["an alias"]


def test_yaml_1_2_is_read_as_it_is_meant() -> None:
    """Words that YAML 1.1 reads as truth values stay words; the 1.2 directive is allowed."""
    text = "%YAML 1.2\n---\n" + changed(
        "warren-gable", ("Saltmarsh Seed Store", "No"), ("revision: P01", "revision: on")
    )
    project = read_text(text).project
    assert (project.name, project.revision) == ("No", "on")


def test_a_text_that_is_no_yaml_has_one_fault_with_its_place() -> None:
    fault = only_fault(changed("warren-gable", ("spans: [30 m]", "spans: [30 m")))
    assert fault.message.startswith("not readable as YAML")
    assert fault.line > 1


@pytest.mark.parametrize("text", ["", "   \n", "# only a comment\n", "---\n", "\ufeff"])
def test_an_empty_text_is_refused(text: str) -> None:
    assert faults(text)


@pytest.mark.parametrize("text", ["hello", "- a\n- b\n", "12", "null"])
def test_a_text_that_is_no_group_of_fields_is_refused(text: str) -> None:
    fault = only_fault(text)
    assert "building" in fault.allowed


def test_very_many_faults_are_cut_short_and_counted() -> None:
    text = changed("warren-gable") + "".join(f"f{number}: 1\n" for number in range(500))
    found = faults(text)
    assert len(found) == MOST_FAULTS + 1
    assert "more faults" in found[-1].message


def test_messages_hold_no_words_of_the_library() -> None:
    text = changed(
        "warren-gable",
        ("eaves: 8 m", "eaves:"),
        ("form: gable", "form: 3"),
        ("    section: HEB 300", "    - HEB 300"),
        ("purlins:", "purlins: 3\npurlin:"),
        ("[first, last]", "{a: b}"),
    )
    for changed_text in (text, "project: 3", changed("warren-gable").replace("  pattern", "  patern")):
        for fault in faults(changed_text):
            words = f"{fault.message} {fault.allowed}".split()
            assert not [word for word in words if word.strip(".,;:()") in JARGON], str(fault)


def test_a_file_is_read_and_named_in_its_faults(tmp_path: Path) -> None:
    path = tmp_path / "shed.yaml"
    path.write_text(changed("feet"), encoding="utf-8")
    assert read(path) == read(str(path)) == read_text(changed("feet"))
    path.write_bytes(changed("feet", ("40 ft", "40")).encode())
    with pytest.raises(DescriptionError) as caught:
        read(path)
    assert caught.value.faults[0].file == str(path)


def test_windows_line_ends_and_a_byte_order_mark_change_nothing(tmp_path: Path) -> None:
    path = tmp_path / "shed.yaml"
    path.write_bytes(b"\xef\xbb\xbf" + changed("posted-flat").replace("\n", "\r\n").encode())
    assert read(path) == read_text(changed("posted-flat"))


@pytest.mark.parametrize(
    ("content", "word", "line"),
    [
        (b"project:\n  name: caf\xe9\n", "not UTF-8", 2),
        (b"\xff\xfep\x00", "not UTF-8", 1),
        (b"project:\n\n  name: a\x00b\n", "control character", 3),
        (b"a: \x1b[31m", "control character", 1),
        (b"#" * (MOST_BYTES + 1), "bytes", 0),
    ],
)
def test_a_file_that_is_no_short_text_is_refused(
    content: bytes, word: str, line: int, tmp_path: Path
) -> None:
    path = tmp_path / "shed.yaml"
    path.write_bytes(content)
    with pytest.raises(DescriptionError) as caught:
        read(path)
    (fault,) = caught.value.faults
    assert word in fault.message
    assert fault.line == line


@pytest.mark.parametrize("name", ["", "missing.yaml", "missing/shed.yaml", "x" * 5000, "a\0b"])
def test_a_file_that_is_not_there_is_refused(name: str, tmp_path: Path) -> None:
    with pytest.raises(DescriptionError) as caught:
        read(tmp_path / name)
    assert caught.value.exit_code == 2
