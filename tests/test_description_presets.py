"""The presets, as files beside the package and as files in it."""

from __future__ import annotations

import tomllib
from pathlib import Path
from uuid import UUID, uuid4

import pytest

from shedbim.description.presets import new_description, preset_names, preset_text
from shedbim.description.reading import read_text
from shedbim.description.roof_systems import AngleTrussRoof, RafterRoof, TrussRoof
from shedbim.errors import DescriptionError
from shedbim.roofs import Flat, Gable, MonoPitch

_TOP = Path(__file__).parents[1]


@pytest.mark.parametrize("preset", preset_names())
def test_a_preset_is_read_without_a_warning_and_opens_with_what_it_is(preset: str) -> None:
    description = read_text(preset_text(preset))
    assert description.warnings == ()
    first = preset_text(preset).splitlines()[0]
    assert first.startswith("# A")
    assert first.endswith(".")


def test_presets_have_ids_of_their_own_made_at_random() -> None:
    ids = [read_text(preset_text(name)).project_id for name in preset_names()]
    assert len(set(ids)) == len(ids)
    assert all(one.version == 4 for one in ids)


def test_presets_show_every_kind_of_roof_and_unequal_bays_and_spans() -> None:
    descriptions = [read_text(preset_text(name)) for name in preset_names()]
    assert {type(one.building.roof) for one in descriptions} == {Gable, MonoPitch, Flat}
    assert {type(one.frames.roof) for one in descriptions} == {RafterRoof, TrussRoof, AngleTrussRoof}
    trusses = [one.frames.roof for one in descriptions if isinstance(one.frames.roof, TrussRoof)]
    assert {truss.pattern for truss in trusses} == {"warren", "pratt", "howe", "warren-with-posts"}
    assert {one.frames.gables.system for one in descriptions} == {"same", "rafter"}  # type: ignore[attr-defined]
    for one in descriptions:
        assert len(set(one.building.bays)) > 1
        assert len(one.building.spans) == 1 or len(set(one.building.spans)) > 1


def test_the_first_preset_is_30_by_60_m() -> None:
    building = read_text(preset_text("seed-store")).building
    assert (sum(building.spans), sum(building.bays)) == (30_000, 60_000)


def test_a_new_description_is_the_preset_with_another_id_and_all_its_comments() -> None:
    made, old = str(uuid4()), preset_text("depot")
    text = new_description("depot", made)
    assert read_text(text).project_id == UUID(made)
    assert text == old.replace(str(read_text(old).project_id), made) != old


def test_an_unknown_preset_is_refused_with_the_nearest() -> None:
    with pytest.raises(DescriptionError) as caught:
        new_description("seedstore", str(uuid4()))
    assert caught.value.faults[0].nearest == ("seed-store",)


@pytest.mark.parametrize("word", ["", "x", "../seed-store", "\0", "a" * 10_000])
def test_no_word_reaches_other_files(word: str) -> None:
    with pytest.raises(DescriptionError):
        preset_text(word)


def test_a_new_id_that_is_no_uuid_is_refused() -> None:
    with pytest.raises(ValueError, match="UUID"):
        new_description("depot", "5f0c")


def test_the_packages_that_are_installed_are_the_folders_with_modules() -> None:
    """The list in pyproject.toml is written out; a folder forgotten there would be missing once installed."""
    setup = tomllib.loads((_TOP / "pyproject.toml").read_text(encoding="utf-8"))["tool"]["setuptools"]
    folders = {path.parent.relative_to(_TOP) for path in (_TOP / "shedbim").rglob("*.py")}
    expected = {".".join(folder.parts) for folder in folders} | {"shedbim.presets"}
    assert set(setup["packages"]) == expected
    assert setup["package-dir"]["shedbim.presets"] == "presets"
    assert setup["package-data"]["shedbim.presets"] == ["*.yaml", "services/*.ifc"]
