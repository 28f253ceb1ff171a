"""GlobalIds against the standard library's UUIDs and the model library's compression."""

from __future__ import annotations

import uuid

import ifcopenshell.guid
import numpy as np

from shedbim.model.identity import global_ids, namespace, pair_ids, piece_ids, piece_words

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


def test_pair_ids_are_version_8_uuids_that_tell_pairs_sides_names_and_projects_apart() -> None:
    keys = [f"{line}/purlin/A-B/1/{n}" for line in ("1-2", "2-3") for n in range(40)]
    words = piece_words(PROJECT, keys)
    one, other = (side.ravel() for side in np.meshgrid(np.arange(80), np.arange(80)))
    ids = pair_ids(PROJECT, "cleat", words[one], words[other])
    assert len(set(ids)) == 6400
    for text in ids[:50]:
        found = uuid.UUID(ifcopenshell.guid.expand(text))
        assert (found.version, found.variant) == (8, uuid.RFC_4122)
    assert pair_ids(PROJECT, "cleat", words[one[:9]], words[other[:9]]) == ids[:9]
    assert not set(pair_ids(PROJECT, "node", words[one], words[other])) & set(ids)
    assert not set(pair_ids(OTHER, "cleat", words[one], words[other])) & set(ids)
    assert not set(
        pair_ids(PROJECT, "cleat", *[piece_words(OTHER, keys)[side] for side in (one, other)])
    ) & set(ids)


def test_pair_ids_spread_over_all_their_bits() -> None:
    words = piece_words(PROJECT, [str(n) for n in range(2000)])
    ids = pair_ids(PROJECT, "x", words[:-1], words[1:])
    bits = np.array([[int(b) for b in f"{int(ifcopenshell.guid.expand(i), 16):0128b}"] for i in ids])
    fixed = {48, 49, 50, 51, 64, 65}  # version and variant, RFC 9562
    share = bits.mean(axis=0)
    # 1,999 tosses: 0.5 within 6 standard deviations of 0.011.
    assert {n for n in range(128) if abs(share[n] - 0.5) > 0.067} == fixed
