"""The typed description: what a preset means once it is read, its ids, defaults and lists of fields."""

from __future__ import annotations

from math import radians
from uuid import UUID

import pytest
from pydantic import ValidationError
from spoiling import SPECIMENS, changed, only_fault

from shedbim.description.listing import all_fields, defaults_taken
from shedbim.description.models import Description, RafterGable, TrussRoof
from shedbim.description.reading import read_text
from shedbim.roofs import Gable
from shedbim.sections.catalogue import section
from shedbim.webs import PATTERNS


def warren_gable() -> Description:
    return read_text(changed("warren-gable"))


def test_a_description_is_read_in_mm_rad_and_sections() -> None:
    description = warren_gable()
    building, roof = description.building, description.frames.roof
    assert building.spans == (30_000.0,)
    assert building.bays == (7000.0, *[5750.0] * 8, 7000.0)
    assert building.eaves == 8000.0
    assert isinstance(building.roof, Gable)
    assert building.roof.pitch == pytest.approx(radians(6))
    assert isinstance(roof, TrussRoof)
    assert (roof.pattern, roof.panels, roof.depth) == ("warren", 12, 1600.0)
    assert roof.top_chord is section("SHS 150x150x8")
    assert roof.end_section is section("SHS 90x90x5")
    assert roof.post_section is section("SHS 70x70x5")
    assert isinstance(description.frames.gables, RafterGable)
    assert description.bracing.bays == ("first", "last")
    assert description.site is not None
    assert description.site.easting == 512_340_000.0


def test_customary_units_are_read_to_the_same_millimetres() -> None:
    building = read_text(changed("feet")).building
    assert building.spans == pytest.approx((40 * 304.8,))
    assert building.bays == pytest.approx((5029.2, 6096, 6096, 17 * 304.8 + 3.5 * 25.4))
    assert isinstance(building.roof, Gable)
    assert building.roof.pitch == pytest.approx(radians(18.434949))


def test_bare_numbers_and_leading_noughts_of_a_job_number_stay_as_written() -> None:
    description = read_text(changed("warren-gable", ("number: 2417", "number: 0417"), ("P01", "1.10")))
    assert (description.project.number, description.project.revision) == ("0417", "1.10")


@pytest.mark.parametrize(
    ("written", "bays"),
    [
        ("[6 m, 2 x 7 m]", (6000, 7000, 7000)),
        ("[2x6m]", (6000, 6000)),
        ("[3 × 20 ft]", (6096, 6096, 6096)),
        ("[2 * 6500 mm, 5.5 m]", (6500, 6500, 5500)),
        ("[1 x 98 ft 5 in]", (29_997.4,)),
    ],
)
def test_repeats_stand_for_as_many_lengths(written: str, bays: tuple[float, ...]) -> None:
    text = changed("warren-gable", ("[7 m, 8 x 5.75 m, 7 m]", written))
    assert read_text(text).building.bays == pytest.approx(bays)


def test_a_description_cannot_be_changed() -> None:
    with pytest.raises(ValidationError):
        warren_gable().building.eaves = 9000.0


def test_the_project_id_is_the_one_written_whatever_the_name() -> None:
    one = warren_gable()
    renamed = read_text(changed("warren-gable", ("Saltmarsh Seed Store", "Another Name")))
    assert one.project.id is not None
    assert one.project_id == renamed.project_id == UUID(one.project.id)
    assert one.warnings == ()


def without_id(*exchanges: tuple[str, str]) -> Description:
    text = changed("warren-gable", *exchanges)
    return read_text("\n".join(line for line in text.splitlines() if not line.startswith("  id:")))


def test_a_description_without_an_id_is_read_with_a_warning() -> None:
    (warning,) = without_id().warnings
    assert "project.id is missing" in warning
    assert "name and number" in warning


def test_an_id_made_from_the_name_is_the_same_each_time_and_another_for_another_project() -> None:
    one = without_id()
    assert one.project_id == without_id(("8 m  ", "9 m  ")).project_id
    others = {without_id(("2417", "2418")).project_id, without_id(("Seed", "Weed")).project_id}
    assert len({one.project_id, warren_gable().project_id, *others}) == 4


@pytest.mark.parametrize("word", ["5f0c", "not-a-uuid", "{e2a817a6-e078-4d54-bb03-8af09886730e}"])
def test_an_id_that_is_no_uuid_is_refused(word: str) -> None:
    text = changed("warren-gable", ("e2a817a6-e078-4d54-bb03-8af09886730e", f'"{word}"'))
    fault = only_fault(text)
    assert fault.field == "project.id"
    assert "shedbim new" in fault.allowed


def test_every_web_pattern_and_no_other_can_be_named() -> None:
    rows = [row for row in all_fields() if row.path == "frames.roof.pattern"]  # one for each kind of truss
    assert {row.allowed for row in rows} == {" | ".join(PATTERNS)}


def test_defaults_taken_are_what_the_user_left_open() -> None:
    taken = dict(defaults_taken(warren_gable()))
    assert taken["purlins.eaves_offset"] == "150 mm, or over the head of a tubular column"
    assert taken["bracing.struts.section"] == "CHS 88.9x4"
    assert taken["building.roof.pitch_right"] == "as pitch"
    assert taken["finish.secondary"] == "galvanized"
    for given in (
        "purlins.spacing",
        "site",
        "site.level",
        "project.id",
        "frames.columns.base",
        "bracing.bays",
    ):
        assert given not in taken


def test_a_default_written_out_is_taken_no_more_and_changes_nothing_else() -> None:
    text = changed("warren-gable", ("spacing: 1.7 m", "gap: 6 mm\n  spacing: 1.7 m"))
    one, other = warren_gable(), read_text(text)
    assert set(defaults_taken(one)) - set(defaults_taken(other)) == {("purlins.gap", "6 mm")}
    assert one == other


@pytest.mark.parametrize("name", SPECIMENS)
def test_defaults_taken_are_fields_with_the_default_that_the_list_shows(name: str) -> None:
    listed = {(row.path, row.default) for row in all_fields()}
    taken = defaults_taken(read_text(changed(name)))
    assert taken
    assert set(taken) <= listed


def test_the_list_of_fields_explains_every_field_and_shows_what_must_be_given() -> None:
    rows = all_fields()
    assert all(row.allowed and row.explanation for row in rows)
    needed = {row.path for row in rows if not row.default and not row.condition}
    assert {"project.name", "building.spans", "building.roof.form", "purlins.section"} <= needed
    assert not {"project.id", "site", "purlins.spacing", "bracing.ties.spacing"} & needed
    pitches = {row.condition: row.allowed for row in rows if row.path == "building.roof.pitch"}
    assert pitches == {"form: gable": "1 deg to 60 deg", "form: mono-pitch": "1 deg to 45 deg"}
    assert len({(row.path, row.condition) for row in rows}) == len(rows)


def test_a_default_can_be_written_as_the_list_shows_it() -> None:
    """Each default is put in the user's own words: written out, it reads as the default."""
    text = changed("rafters", ("spacing: 1.55 m", "spacing: 1.8 m"))
    shown = dict(defaults_taken(read_text(text)))
    words = [
        f"{name}: {shown[f'rails.{name}']}" for name in ("grade", "eaves_offset", "gap", "lift", "sag_bars")
    ]
    written = text.replace(
        "  base_offset: 450 mm", "\n".join(f"  {line}" for line in ["base_offset: 450 mm", *words])
    )
    assert read_text(written) == read_text(text)
    assert "rails.gap" not in dict(defaults_taken(read_text(written)))
