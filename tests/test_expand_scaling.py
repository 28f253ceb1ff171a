"""Larger, mirrored and reversed descriptions give what geometry says."""

from __future__ import annotations

from collections import Counter, defaultdict
from functools import cache
from math import atan, tan

import cast
import numpy as np
import pytest

from shedbim.description import Description
from shedbim.model.roles import Role
from shedbim.model.shed import Shed
from shedbim.tolerance import SAME_LENGTH


def counts(shed: Shed) -> Counter[Role]:
    return Counter(shed.parts[i].role for i in shed.pieces.part.tolist())


def lengths(shed: Shed) -> dict[tuple[str, ...], np.ndarray]:
    """Saw length and mass of every piece, sorted, by role, section, grade and finish."""
    found = defaultdict(list)
    for i in shed.pieces.part.tolist():
        part = shed.parts[i]
        found[part.role.word, part.bar.section.designation, part.grade, part.finish].append(
            (part.bar.length, part.bar.mass)
        )
    return {key: np.array(sorted(rows)) for key, rows in found.items()}


def as_written(value: float, unit: str) -> str:
    return f"{value!r} {unit}"


#: What one more inner bay of 5.75 m adds to the seed store: 30 m span, 6 degrees, eaves 8 m, 12 panels.
ONE_BAY = Counter(
    {
        Role.COLUMN: 2,
        Role.TOP_CHORD: 3,  # two slopes, one of them divided: the truss is longer than 18 m
        Role.BOTTOM_CHORD: 3,
        Role.DIAGONAL: 2 * 12,
        Role.POST: 1,  # a Warren truss has one post: at the ridge
        Role.PURLIN: 2 * 10,  # (15 000 / cos 6 - 300) / 1 700 = 8.7, 9 steps
        # One row between 9 pairs on either slope and over the ridge; between 6 pairs of rails on either side.
        Role.SAG_BAR: (9 + 9 + 1) + 2 * 6,
        # The steel is 1 746 high: (9 746 - 150 tan 6 - 250 - 300) / 1 800 = 5.1, 6 steps.
        Role.SIDE_RAIL: 2 * 7,
        Role.EAVES_STRUT: 2,
        Role.TIE: 2,  # at most 12 m apart over 29.6 m: at two places
    }
)


def test_each_inner_bay_adds_what_it_holds():
    sheds = [
        cast.members(cast.changed("seed-store", building__bays=["7 m", f"{n} x 5.75 m", "7 m"]))
        for n in (4, 8, 16)
    ]
    few, more, many = map(counts, sheds)
    assert more - few == Counter({role: 4 * n for role, n in ONE_BAY.items()})
    assert many - more == Counter({role: 8 * n for role, n in ONE_BAY.items()})
    # The same parts and the same assemblies, only more of them.
    assert [part.mark for part in sheds[0].parts] == [part.mark for part in sheds[2].parts]
    assert sheds[0].assembly_types == sheds[2].assembly_types
    masses = [shed.mass for shed in sheds]
    assert masses[2] - masses[1] == pytest.approx(2 * (masses[1] - masses[0]), rel=1e-9)


def test_each_inner_span_adds_what_it_holds():
    """A third and a fourth span of the packing house between the two outer ones."""
    sheds = [
        cast.members(cast.changed("packing-house", building__spans=["18 m", f"{n} x 24 m", "20.4 m"]))
        for n in (1, 2, 4)
    ]
    one, two, four = map(counts, sheds)
    added = two - one
    assert four - two == Counter({role: 2 * n for role, n in added.items()})
    assert added[Role.COLUMN] == 8
    assert (
        added[Role.PURLIN] == 7 * 2 * 9
    )  # in seven bays; (12 000 / cos 10 - 150 - 400) / 1 650 = 7.05, 8 steps
    assert added[Role.SIDE_RAIL] == 0


@cache
def undivided(name: str) -> Shed:
    """The members of a specimen whose trusses are not divided for the road: where they are is counted from the left."""
    return cast.members(cast.changed(name, **undividing(cast.described(name))))


def mirrored(name: str) -> Description:
    """The description seen from the other end of the building: left and right change places."""
    before = cast.described(name)
    building, roof, truss = before.building, before.building.roof, before.frames.roof
    fields = {"building__spans": [as_written(span, "mm") for span in reversed(building.spans)]}
    if roof.form == "gable":
        fields["building__roof__pitch"] = as_written(roof.right, "rad")
        fields["building__roof__pitch_right"] = as_written(roof.pitch, "rad")
        if getattr(truss, "bottom_pitch", 0.0):
            # It is that under the left-hand slope.
            pitch = atan(tan(truss.bottom_pitch) * tan(roof.right) / tan(roof.pitch))
            fields["frames__roof__bottom_pitch"] = as_written(pitch, "rad")
    else:
        fields["building__roof__high"] = {"left": "right", "right": "left"}[roof.high]
    return cast.changed(name, **fields, **undividing(before))


def undividing(before: Description) -> dict[str, str]:
    return {"frames__roof__longest": "none"} if hasattr(before.frames.roof, "longest") else {}


def lengthwise_reversed(name: str) -> Description:
    """The description with its bays from back to front."""
    before = cast.described(name)
    fields = {"building__bays": [as_written(bay, "mm") for bay in reversed(before.building.bays)]}
    bays, count = before.bracing.bays, len(before.building.bays)
    if bays != "rule":
        named = {"first": "last", "last": "first"}
        fields["bracing__bays"] = [named[bay] if isinstance(bay, str) else count + 1 - bay for bay in bays]
    return cast.changed(name, **fields, **undividing(before))


@pytest.mark.parametrize("name", [n for n in cast.CAST if n != "distribution-hall"])
@pytest.mark.parametrize("turned", [mirrored, lengthwise_reversed])
def test_mirrored_descriptions_swap_handed_marks_and_nothing_else(name, turned):
    shed, other = undivided(name), cast.members(turned(name))
    assert counts(shed) == counts(other)
    # Along the building, which diagonal of a panel is the one that passes, and to which side of it an angle
    # turns its leg, is counted from the first line: reversed, its length may be that of the other diagonal.
    # Mirrored, its leg may be on the other side of its line, and its gusset finds room a little farther on.
    uneven = {"roof brace", "wall brace"}
    here, there = lengths(shed), lengths(other)
    assert here.keys() == there.keys()
    for key, rows in here.items():
        if key[0] not in uneven:
            np.testing.assert_allclose(
                rows[:, 0], there[key][:, 0], atol=SAME_LENGTH + 0.01, err_msg=str(key)
            )
            np.testing.assert_allclose(rows[:, 1], there[key][:, 1], atol=0.05, rtol=2e-3, err_msg=str(key))
        else:
            assert rows[:, 0].sum() == pytest.approx(there[key][:, 0].sum(), rel=5e-3)
    assert other.mass == pytest.approx(shed.mass, rel=3e-4)
    joints = [Counter(run.kind for run in each.joints for _ in run.points) for each in (shed, other)]
    assert joints[0] == joints[1]


def test_the_comparison_of_lengths_can_fail():
    """A slope one degree steeper has the same counts, and other lengths."""
    shed = cast.members_of("lopsided")
    other = cast.members(cast.changed("lopsided", building__roof__pitch_right="13 deg"))
    here, there = lengths(shed), lengths(other)
    posts = next(key for key in here if key[0] == "gable post")
    assert np.abs(here[posts][:, 0] - there[posts][:, 0]).max() > 10 * SAME_LENGTH


def test_handed_parts_swap_their_marks():
    """A diagonal of the left half, mirrored, is another part where its chords are not parallel to each other."""
    shed, other = undivided("valley"), cast.members(mirrored("valley"))
    assert [p.bar.length for p in shed.parts if p.role is Role.DIAGONAL] == pytest.approx(
        [p.bar.length for p in other.parts if p.role is Role.DIAGONAL], abs=SAME_LENGTH + 0.01
    )


def test_the_same_description_gives_the_same_shed():
    first, second = cast.members(cast.described("valley")), cast.members(cast.described("valley"))
    assert first.pieces.keys == second.pieces.keys
    assert [p.mark for p in first.parts] == [p.mark for p in second.parts]
    assert np.array_equal(first.pieces.placement, second.pieces.placement)
    assert np.array_equal(first.pieces.part, second.pieces.part)


def test_keys_of_pieces_that_still_exist_stay():
    """A change of dimensions that keeps the layout changes no key."""
    longer = cast.members(
        cast.changed("lopsided", building__bays=["6.8 m", "5.3 m", "6.2 m"], building__eaves="5.9 m")
    )
    assert longer.pieces.keys == cast.members_of("lopsided").pieces.keys
