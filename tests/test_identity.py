"""GlobalIds against the standard library's UUIDs and the model library's compression."""

from __future__ import annotations

import uuid

import ifcopenshell.guid

from shedbim.model.identity import global_ids, namespace, piece_ids

PROJECT = "8c0f5a2e-6d1b-4f39-9a77-31c2e0b4d5f6"
OTHER = "0b7e4d11-52c3-4a86-8d90-7f1e6a2c9b35"
NAMES = [
    "",
    "project",
    "piece/3/truss/top chord/A-B/1",
    "Größe/Ж/🏗",
    "a'b\\c\n",
    *(f"line {i}" for i in range(500)),
]


def test_ids_are_version_5_uuids_in_the_compression_of_the_standard() -> None:
    scope = uuid.UUID(PROJECT)
    assert global_ids(PROJECT, NAMES) == [ifcopenshell.guid.compress(uuid.uuid5(scope, n).hex) for n in NAMES]


def test_ids_expand_to_the_same_uuids() -> None:
    for name, short in zip(NAMES, global_ids(PROJECT, NAMES), strict=True):
        assert uuid.UUID(ifcopenshell.guid.expand(short)) == uuid.uuid5(uuid.UUID(PROJECT), name)


def test_an_id_depends_on_nothing_but_project_and_name() -> None:
    assert global_ids(PROJECT, NAMES[::-1])[::-1] == global_ids(PROJECT, NAMES)
    assert global_ids(PROJECT.upper(), NAMES) == global_ids(PROJECT, NAMES)
    assert global_ids(PROJECT, []) == []


def test_two_projects_share_no_id() -> None:
    assert not set(global_ids(PROJECT, NAMES)) & set(global_ids(OTHER, NAMES))


def test_ids_of_projects_that_are_no_uuids_are_scoped_by_their_text() -> None:
    assert namespace("2417") != namespace("2418")
    assert not set(global_ids("2417", NAMES)) & set(global_ids("2418", NAMES))
    assert global_ids("", ["x"]) != global_ids(" ", ["x"])


def test_half_a_character_gives_an_id_too() -> None:
    assert len(global_ids(PROJECT, ["\ud800"])[0]) == 22


def test_pieces_are_told_from_everything_else_by_their_names() -> None:
    assert piece_ids(PROJECT, ["3/column/A"]) == global_ids(PROJECT, ["piece/3/column/A"])
