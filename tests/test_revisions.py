"""Ids, marks and the register: what stays when a building is changed and issued again."""

from __future__ import annotations

from collections import Counter
from dataclasses import replace
from functools import cache
from random import Random

import numpy as np
import pytest
from cast import TINY, shed_of
from edited_sheds import EDITS, built, described_as, edited

from shedbim.errors import RegisterError
from shedbim.geometry.placements import apply
from shedbim.model.bars import Bar
from shedbim.model.marks import Stock, group_parts
from shedbim.model.shed import Part, Shed
from shedbim.revisions.codes import next_revision
from shedbim.revisions.issuing import in_revision, issued
from shedbim.revisions.merging import merged
from shedbim.revisions.register import Issue, Register
from shedbim.revisions.register_text import register_of, register_text
from shedbim.revisions.repairing import repaired
from shedbim.revisions.shape_text import shape_of, shape_text
from shedbim.revisions.snapshot import snapshot
from shedbim.revisions.under_register import under_register

NAMES = sorted(TINY)


def issue(shed: Shed, code: str, register: Register | None = None, reason: str = "a\treason") -> Register:
    """The register after an issue, as it is read back from its text."""
    made = issued(in_revision(shed, code), Issue(code, "S3", "2026-01-02T03:04:05Z", reason, code), register)
    return register_of(register_text(made), "x.register")


@cache
def start(name: str) -> tuple[dict[str, list[float]], Shed, Register]:
    description = described_as(name, {})
    building = description.building
    fields = {"building__spans": list(building.spans), "building__bays": list(building.bays)}
    shed = built(name, fields)
    return fields, shed, issue(shed, "P01")


def looks(shed: Shed) -> list[tuple[object, ...]]:
    """What each piece is and where its solid lies, to the tenth of a mm, whatever frames and keys it has.

    Written apart from the program's own comparison: role, stock, steel, volume, where its holes are
    from its middle, and where that is.
    """
    told = []
    for part, place in zip(shed.pieces.part.tolist(), shed.pieces.placement, strict=True):
        it = shed.parts[part]
        stock = it.shape.section.designation if isinstance(it.shape, Bar) else type(it.shape).__name__
        middle = apply(place, np.mean(it.shape.box, axis=0)[None])[0]
        rounded = tuple(np.floor(middle / 0.1 + 0.37).astype(int).tolist())
        holes = np.array([hole.centre for hole in getattr(it.shape, "holes", ())]).reshape(-1, 3)
        drilled = sorted(map(tuple, np.floor(apply(place, holes) - middle + 0.37).astype(int).tolist()))
        size = (round(it.shape.volume / 50.0), tuple(drilled))
        told.append((it.role, stock, it.grade, it.finish, size, rounded))
    return told


@pytest.mark.parametrize("name", NAMES)
def test_what_stands_unchanged_keeps_its_id_whatever_else_changes(name: str) -> None:
    fields, shed, register = start(name)
    random = Random(f"edits {name}")
    for half in (EDITS[0::2], EDITS[1::2]):
        after, now = edited(name, random, fields, register, half)
        old, new = looks(shed), looks(now)
        once = {each for each, count in Counter(old).items() if count == 1}
        once &= {each for each, count in Counter(new).items() if count == 1}
        old_name = dict(zip(old, shed.pieces.names, strict=True))
        new_name = dict(zip(new, now.pieces.names, strict=True))
        assert len(set(now.pieces.names)) == len(now.pieces)
        lost = [each for each in once if old_name[each] != new_name[each]]
        assert lost == [], (after, len(lost), len(once))


@pytest.mark.parametrize("name", [name for name in NAMES if name != "flat"])  # that has one bay
def test_pieces_that_move_with_their_line_keep_their_ids(name: str) -> None:
    # A bay of its own length put in before bay k: what stood on later lines moves by that length, part by part.
    fields, shed, register = start(name)
    bays = fields["building__bays"]
    for k in (len(bays) // 2,):
        length = 5430.0
        after = {**fields, "building__bays": [*bays[:k], length, *bays[k:]]}
        now = built(name, after, register)
        # The end wall and the bay before it are told by their parts: they moved as a whole.
        old, new = looks(shed), looks(now)
        y = shed.grid.y[-1]
        shift = int(np.floor(length / 0.1))
        at = {each: i for i, each in enumerate(new)}
        kept = moved = 0
        for look, piece in zip(old, shed.pieces.names, strict=True):
            if look[5][1] * 0.1 < y - 600.0:
                continue
            there = (*look[:5], (look[5][0], look[5][1] + shift, look[5][2]))
            if there in at:
                moved += 1
                kept += now.pieces.names[at[there]] == piece
        assert moved > 50
        assert kept >= 0.99 * moved, (k, kept, moved)


def parts_by_mark(shed: Shed) -> dict[str, Part]:
    return {part.mark: part for part in shed.parts}


def same_part(one: Part, other: Part) -> bool:
    stock = [Stock(each.role, each.shape, each.grade, each.finish) for each in (one, other)]
    return len(group_parts(stock).parts) == 1


@pytest.mark.parametrize("name", ["flat", "lopsided"])
def test_marks_never_change_their_meaning_over_ten_edits_with_issues_between(name: str) -> None:
    fields, shed, register = start(name)
    random = Random(f"chain {name}")
    meant: dict[tuple[str, str], Part] = {(part.mark, "P01"): part for part in shed.parts}
    retired: set[str] = set()
    codes = ["P01"]
    for _ in range(10 if name == "flat" else 4):
        before = register
        fields, now = edited(name, random, fields, register)
        code = next_revision(codes, "S3")
        codes.append(code)
        assert now.project.revision == code
        register = issue(now, code, register)
        marks = parts_by_mark(now)
        assert len(marks) == len(now.parts)
        assert not retired & marks.keys()
        was = {part.mark: part for part in before.parts}
        mark_of = dict(zip(now.pieces.names, (now.parts[i].mark for i in now.pieces.part), strict=True))
        for mark, part in marks.items():
            known = meant.setdefault((mark, part.revision), part)
            assert same_part(known, part), (mark, part.revision)
            if mark in was and part.revision == code:
                # It rose: nothing that was issued under it and still stands has another mark.
                pieces = [
                    n
                    for n, i in zip(before.names, before.last.part, strict=True)
                    if before.last.parts[i].mark == mark
                ]
                assert {mark_of[each] for each in pieces if each in mark_of} == {mark}
        retired |= was.keys() - marks.keys()
        assert {m.mark for m in register.marks if not m.live} >= retired
        assert {m.mark for m in register.marks if m.live} == marks.keys() | {
            k.mark for k in now.assembly_types
        }
        roles = [list(type(part.role)).index(part.role) for part in now.parts]
        assert roles == sorted(roles)


@pytest.mark.parametrize("name", NAMES)
def test_an_unchanged_shed_is_as_it_was_issued(name: str) -> None:
    fields, shed, register = start(name)
    again = under_register(built(name, fields), register)
    assert again.pieces.names == shed.pieces.names
    assert [part.mark for part in again.parts] == [part.mark for part in shed.parts]
    assert {part.revision for part in again.parts} == {"P01"}
    assert [kind.mark for kind in again.assembly_types] == [kind.mark for kind in shed.assembly_types]
    assert {kind.revision for kind in again.assembly_types} == {"P01"}


def test_a_mark_rises_when_all_its_pieces_changed_and_only_then() -> None:
    fields, shed, register = start("lopsided")
    all_columns = built("lopsided", {**fields, "frames__columns__section": "HEA 320"}, register)
    columns = [part for part in all_columns.parts if part.role.prefix == "C"]
    old = [part for part in shed.parts if part.role.prefix == "C"]
    assert [part.mark for part in columns] == [part.mark for part in old]
    assert {part.revision for part in columns} == {"P02"}
    # The middle bay is longer: a mark of which some rails stand elsewhere stays as it is, and the longer ones get marks
    # that were never used; a mark that had rails in this bay alone rises with them.
    bays = fields["building__bays"]
    longer = built("lopsided", {**fields, "building__bays": [bays[0], bays[1] + 240.0, *bays[2:]]}, register)
    used = {mark.mark for mark in register.marks}
    revision = {part.mark: part.revision for part in longer.parts}
    stood: dict[str, set[str]] = {}
    for key, part in zip(shed.pieces.keys, shed.pieces.part, strict=True):
        if "/side rail/" in key and "/start/" not in key and "/end/" not in key:
            stood.setdefault(shed.parts[part].mark, set()).add(key.split("/")[0])
    assert {revision[mark] for mark, where in stood.items() if where - {"2-3"}} == {"P01"}
    assert {revision[mark] for mark, where in stood.items() if where == {"2-3"}} <= {"P02"}
    assert [mark for mark in revision if mark not in used and revision[mark] != "P02"] == []


@pytest.mark.parametrize("name", NAMES)
def test_shapes_outlive_their_text(name: str) -> None:
    shed = shed_of(name)
    again = [shape_of(shape_text(part.shape)) for part in shed.parts]
    assert [shape_text(shape) for shape in again] == [shape_text(part.shape) for part in shed.parts]
    both = group_parts([Stock(p.role, s, p.grade, p.finish) for p, s in zip(shed.parts, again, strict=True)])
    assert len(both.parts) == len(shed.parts)
    assert [shape.mass for shape in again] == pytest.approx([part.shape.mass for part in shed.parts])


def test_every_damaged_line_of_a_register_is_named_and_nothing_is_read() -> None:
    _, _, register = start("flat")
    text = register_text(register)
    lines = text.splitlines(keepends=True)
    random = Random(7)
    for _ in range(40):
        row = random.randrange(len(lines))
        at = random.randrange(len(lines[row]) - 1)
        letter = random.choice("0aZ\t\\")
        if lines[row][at] == letter:
            continue
        spoiled = [*lines]
        spoiled[row] = lines[row][:at] + letter + lines[row][at + 1 :]
        with pytest.raises(RegisterError) as error:
            register_of("".join(spoiled), "x.register")
        assert row + 1 in [fault.line for fault in error.value.faults]
    for whole in (
        lines[:-1],
        lines[:9] + lines[10:],
        [lines[0], lines[2], lines[1], *lines[3:]],
        [],
        ["hello\n"],
    ):
        with pytest.raises(RegisterError):
            register_of("".join(whole), "x.register")
    assert register_text(register_of(text, "x")) == text


def test_a_repaired_register_holds_everything_that_was_whole_and_says_what_was_lost() -> None:
    _, _, register = start("flat")
    lines = register_text(register).splitlines(keepends=True)
    random = Random(11)
    rows = random.sample(range(20, len(lines) - 1), 12)
    spoiled = [line[:-4] + "\n" if row in rows else line for row, line in enumerate(lines)]
    spoiled.insert(40, "<<<<<<< ours\n")
    again, losses = repaired("".join(spoiled), "x.register")
    lost_lines = [lines[row].split("\t")[:2] for row in rows]
    assert len(losses) >= len(rows)
    gone = set(register.last.keys) - set(again.last.keys)
    told = " ".join(losses)
    for key in gone:
        assert ["piece", key] in lost_lines or f"piece {key}:" in told or "more" in losses[-1]
    kept = {
        key: (name, ident)
        for key, name, ident in zip(again.last.keys, again.names, again.last.ids, strict=True)
    }
    before = {
        key: (name, ident)
        for key, name, ident in zip(register.last.keys, register.names, register.last.ids, strict=True)
    }
    assert kept.items() <= before.items()
    assert len(kept) >= len(before) - 400
    assert register_text(register_of(register_text(again), "y")) == register_text(again)
    # What is whole is what it was: nothing is lost of a register that is not damaged.
    assert repaired("".join(lines), "x")[1] == ()
    with pytest.raises(RegisterError):
        repaired("".join(lines[4:]), "x")


def test_two_registers_of_one_project_become_one_and_contradictions_are_told() -> None:
    fields, _, register = start("flat")
    lower = issue(built("flat", {**fields, "building__eaves": "4.9 m"}, register), "P02", register)
    both = merged(register, lower)
    assert register_text(both) == register_text(lower) == register_text(merged(lower, register))
    other = issue(built("flat", {**fields, "building__eaves": "5.05 m"}, register), "P02", register, "other")
    with pytest.raises(RegisterError, match="P02 was issued twice"):
        merged(lower, other)
    # Issued apart under two codes: a mark that was made anew on both sides names two things.
    three = replace(other, issues=(*other.issues[:-1], replace(other.issues[-1], revision="P03")))
    parts = tuple(replace(p, revision="P03") if p.revision == "P02" else p for p in three.parts)
    clash = {p.mark for p in parts if p.revision == "P03"} & {
        p.mark for p in lower.parts if p.revision == "P02"
    }
    assert clash
    with pytest.raises(RegisterError, match=f"mark {min(clash)} was issued for two things"):
        merged(lower, replace(three, parts=parts))


def test_the_register_of_another_project_is_refused() -> None:
    fields, _, register = start("flat")
    with pytest.raises(RegisterError, match="another project"):
        built("flat", {**fields, "project__id": "3f2f0c1e-51a5-4d0b-8a7e-0b6a4b3d7aff"}, register)


@pytest.mark.parametrize(
    ("issued_codes", "status", "following"),
    [
        ([], "S3", "P01"),
        (["P01", "P02"], "S4", "P03"),
        (["P09"], "S1", "P10"),
        (["P02"], "A1", "C01"),
        (["P01", "C01", "C02"], "A4", "C03"),
        (["P01", "C01"], "S3", "P02"),
        (["A"], "S3", "B"),
        (["R9"], "S3", "R10"),
        (["first"], "S3", "P01"),
    ],
)
def test_the_revision_that_follows(issued_codes: list[str], status: str, following: str) -> None:
    assert next_revision(issued_codes, status) == following


def test_joints_of_a_snapshot_tell_kind_and_partners() -> None:
    shed = shed_of("flat")
    whole = snapshot(shed)
    without = snapshot(replace(shed, joints=shed.joints[1:]))
    gone = shed.joints[0].pieces.ravel()
    differs = np.flatnonzero(whole.joints != without.joints)
    assert set(differs.tolist()) == set(gone.tolist())
