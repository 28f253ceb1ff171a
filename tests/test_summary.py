"""The summary: its numbers, and its keys against the table that explains them."""

from __future__ import annotations

import json
import re
from dataclasses import replace
from datetime import UTC, datetime
from typing import Any

import numpy as np
import pytest
from specimens_schedule import NASTY, PARTS, QUANTITIES, shed

from shedbim.model.joints import JointKind
from shedbim.writers.imprint import CAUTIONS, Imprint
from shedbim.writers.summary import KEYS, summary, summary_text

STAMP = Imprint(datetime(2024, 5, 17, 9, 30, tzinfo=UTC), "IFC4X3_ADD2", "cd" * 32)


def paths(value: Any, path: str = "") -> set[str]:
    """Every path of a JSON value that ends in something simple or null."""
    if isinstance(value, dict):
        return {
            inner for key, each in value.items() for inner in paths(each, f"{path}.{key}" if path else key)
        }
    if isinstance(value, list) and any(isinstance(each, dict) for each in value):
        return {inner for each in value for inner in paths(each, path + "[]")}
    return {path}


def documented(path: str) -> str | None:
    """The one row of the key table that covers a path."""
    for key, _ in KEYS:
        # Lists of simple values are written key[] in the table.
        pattern = re.sub(
            r"<[^>]+>", "[^.]+", key.replace(".", r"\.").removesuffix("[]").replace("[]", r"\[\]")
        )
        if re.fullmatch(pattern, path):
            return key
    return None


def test_the_numbers_are_those_of_the_shed():
    told = summary(shed(), STAMP)
    mass = sum(count * part.bar.mass for count, part in zip(QUANTITIES, PARTS, strict=True))
    assert (told["pieces"], told["parts"], told["joints"], told["assemblies"]) == (15, 4, 6, 4)
    assert told["mass_kg"] == pytest.approx(mass, abs=5e-4)
    assert told["footprint_m2"] == 12.5 * 11.0
    assert told["mass_per_m2_kg"] == pytest.approx(mass / 137.5, abs=5e-4)
    assert told["schema"] == "IFC4X3_ADD2"
    assert told["time_stamp"] == "2024-05-17T09:30:00Z"
    assert told["description_sha256"] == "cd" * 32
    assert told["project"] == {
        "id": "5f0c9e3a-0000-4000-8000-000000000001", "name": NASTY, "number": "+2417", "revision": "P01",
    }  # fmt: skip
    assert told["joint_kinds"] == {JointKind.PINNED_BASE.word: 4, JointKind.NODE.word: 2}
    assert told["defaults"][0] == {"field": "frames.columns.grade", "value": "S355"}
    assert told["notes"] == ["The ridge is assumed level."]
    assert told["cautions"] == list(CAUTIONS)


def test_roles_add_up_to_the_whole():
    told = summary(shed(), STAMP)
    assert list(told["roles"]) == ["column", "top chord", "diagonal", "bottom chord tie"]
    assert [role["pieces"] for role in told["roles"].values()] == list(QUANTITIES)
    assert sum(role["parts"] for role in told["roles"].values()) == told["parts"]
    assert sum(role["mass_kg"] for role in told["roles"].values()) == pytest.approx(told["mass_kg"], abs=3e-3)


def test_the_worst_node_is_the_one_that_misses_most_whichever_way():
    told = summary(shed(), STAMP)["largest_node_eccentricity"]
    assert told == {
        "mm": -17.25,
        "pieces": ["piece/8", "piece/9", "piece/10"],
        "point_mm": [3000.0, 4000.0, 5000.0],
    }


def test_the_worst_node_is_sought_among_nodes_only_and_in_every_run_of_them():
    base, nodes = shed().joints
    worse = replace(nodes, eccentricity=np.array([30.0, 30.0 + 1e-9]))
    other = replace(base, eccentricity=np.array([99.0, 99.0, 99.0, 99.0]))
    told = summary(shed(joints=(other, nodes, worse)), STAMP)["largest_node_eccentricity"]
    assert (told["mm"], told["pieces"][0]) == (30.0, "piece/2")  # rounding noise does not choose the node
    assert summary(shed(joints=(other,)), STAMP)["largest_node_eccentricity"] is None


def test_every_key_is_explained_and_every_explained_key_is_there():
    told = summary(shed(), STAMP, ())
    found = {path: documented(path) for path in paths(told)}
    assert None not in found.values(), found
    parents = {"largest_node_eccentricity", "findings"}  # explained for the case that they are null
    assert set(found.values()) | parents == {key for key, _ in KEYS}
    without = summary(shed(joints=()), STAMP)
    assert None not in {documented(path) for path in paths(without) if path != "joint_kinds"} - {
        "joint_kinds"
    }
    assert all(meaning for _, meaning in KEYS)


def test_the_text_is_json_in_its_own_letters_and_equal_for_equal_input():
    text = summary_text(shed(), STAMP)
    assert json.loads(text) == summary(shed(), STAMP)
    assert "ü" in text
    assert "\x1b" not in text
    assert text.endswith("}\n")
    assert summary_text(shed(), STAMP) == text
    assert JointKind.NODE.word in text
