"""Trusses as placed: toes of webs on the chord faces, levels of the chords, forces of the patterns.

Everything is measured on the placed solids and the joints; the web patterns themselves are not asked.
"""

from __future__ import annotations

from functools import cache
from itertools import pairwise

import cast
import numpy as np
import pytest
from invariants import Bars, bodies
from placed_trusses import Node, Placed, placed_trusses, solved

from shedbim.geometry.placements import apply, inverse
from shedbim.model.roles import Role
from shedbim.tolerance import SAME_LENGTH

TRUSSED = [name for name in cast.CAST if cast.described(name).frames.roof.system == "truss"]

#: A part may be shorter than the stock bar it stands for, by half of this at either end.
SLACK = SAME_LENGTH / 2 + 0.01


@cache
def bars_of(name: str) -> Bars:
    return Bars(cast.members_of(name))


@cache
def trusses_of(name: str) -> tuple[Placed, ...]:
    return placed_trusses(cast.members_of(name))


def corners(name: str, piece: int) -> np.ndarray:
    """The corners of a placed solid (n, 3)."""
    shed = cast.members_of(name)
    local = np.asarray(bodies(shed)[shed.pieces.part[piece]].to_mesh().vert_properties, float)[:, :3]
    return apply(shed.pieces.placement[piece], local)


def above_face(name: str, chord: int, web: int) -> np.ndarray:
    """How far each corner of a web stands off the face of a chord that looks at the web, mm."""
    shed, bars = cast.members_of(name), bars_of(name)
    placement = shed.pieces.placement[chord]
    local = apply(inverse(placement), corners(name, web))
    middle = apply(inverse(placement), bars.ends[web].mean(axis=0)[None])[0]
    # The section's axis that lies in the frame's plane; a square tube may have been turned by a quarter.
    axis = 1 + int(abs(placement[1, 1]) > 0.5)
    side = np.sign(middle[axis])
    return local[:, axis] * side - (bars.high if side > 0 else -bars.low)[chord, axis]


def over(name: str, chords: tuple[int, ...], x: float) -> int:
    """The length of a chord that x falls in."""
    bars = bars_of(name)
    return min(chords, key=lambda i: max(bars.ends[i, :, 0].min() - x, x - bars.ends[i, :, 0].max()))


def landing_x(name: str, truss: Placed, node: Node, web: int) -> float:
    """Where the axis of a web meets the chord of a node."""
    bars = bars_of(name)
    near = np.abs(bars.ends[web, :, 2] - node.place[1]).argmin()
    return float(bars.ends[web, near, 0])


def ridge_of(name: str, truss: Placed) -> float | None:
    """Where the lengths of the top chord meet in a ridge, mm."""
    return truss.ridges[Role.TOP_CHORD][0] if Role.TOP_CHORD in truss.ridges else None


def kinked(name: str, chords: tuple[int, int]) -> bool:
    x = bars_of(name).x
    return bool(np.linalg.norm(np.cross(x[chords[0]], x[chords[1]])) > 1e-9)


def slopes_of(name: str, truss: Placed, role: Role) -> list[tuple[float, float, np.ndarray]]:
    """The straight stretches of a chord, lengths divided for the road put together: x from, x to, line z(x)."""
    found: list[tuple[float, float, np.ndarray]] = []
    for chord in truss.chords[role]:
        ends = bars_of(name).ends[chord]
        x0, x1 = ends[:, 0].min(), ends[:, 0].max()
        line = np.polyfit(ends[:, 0], ends[:, 2], 1)
        at_ridge = role in truss.ridges and abs(truss.ridges[role][0] - x0) < 1.0
        if found and not at_ridge:
            assert found[-1][2] == pytest.approx(line, abs=1e-3)
            x0 = found.pop()[0]
        found.append((x0, x1, line))
    return found


@pytest.mark.parametrize("name", TRUSSED)
def test_webs_touch_the_chord_face_and_do_not_enter_it(name):
    for truss in trusses_of(name):
        ridge = ridge_of(name, truss)
        for node in truss.nodes:
            chords = truss.ridges[node.chord][1:] if node.chord in truss.ridges else ()
            for web in node.webs:
                x = landing_x(name, truss, node, web)
                if chords and ridge is not None and abs(x - ridge) < 1.0 and kinked(name, chords):
                    # A post at the ridge: its left corners on the left length, the others on the right one.
                    left = corners(name, web)[:, 0] <= ridge + 0.01
                    right = corners(name, web)[:, 0] >= ridge - 0.01
                    off = [
                        float(above_face(name, chord, web)[side].min())
                        for chord, side in zip(chords, (left, right), strict=True)
                    ]
                    assert min(off) > -SLACK
                    assert min(off) < SLACK
                    # Faces of unequal slopes miss each other by h/2 (1/cos a - 1/cos b).
                    runs = [abs(bars_of(name).x[chord, 0]) for chord in chords]
                    step = bars_of(name).height[chords[0]] / 2 * abs(1 / runs[0] - 1 / runs[1])
                    assert max(off) < SLACK + step
                else:
                    off = above_face(name, over(name, truss.chords[node.chord], x), web)
                    assert abs(off.min()) < SLACK


@pytest.mark.parametrize("name", TRUSSED)
def test_toes_of_webs_leave_a_gap_of_both_walls(name):
    """EN 1993-1-8, 7.1.2: g >= t1 + t2."""
    shed, bars = cast.members_of(name), bars_of(name)
    closest = np.inf
    rightwards = bars.x * np.sign(bars.x[:, :1])
    for truss in trusses_of(name):
        ridge = ridge_of(name, truss)
        for role, chords in truss.chords.items():
            for chord in chords:
                toes = []
                for node in truss.nodes:
                    for web in node.webs if node.chord is role else ():
                        x = landing_x(name, truss, node, web)
                        # A post at the ridge stands on both lengths.
                        if chord == over(name, chords, x) or (ridge is not None and abs(x - ridge) < 1.0):
                            off = above_face(name, chord, web)
                            along = corners(name, web)[off < off.min() + 1.0] @ rightwards[chord]
                            wall = shed.parts[shed.pieces.part[web]].bar.section.profile.thickness
                            toes.append((along.min(), along.max(), wall))
                toes.sort()
                for (_, end, wall_a), (start, _, wall_b) in pairwise(toes):
                    assert start - end > wall_a + wall_b - 2 * SLACK
                    closest = min(closest, start - end - wall_a - wall_b)
                sawn = corners(name, chord) @ rightwards[chord]
                if chord == chords[0]:  # the outermost toes stand 10 mm clear of the sawn chord ends at least
                    assert toes[0][0] - sawn.min() > 10.0 - SLACK
                if chord == chords[-1]:
                    assert sawn.max() - toes[-1][1] > 10.0 - SLACK
    # Somewhere the webs would have run into one another and were moved apart to just the gap asked for.
    assert closest < 2 * SLACK


@pytest.mark.parametrize("name", TRUSSED)
def test_chords_stand_at_eaves_level_and_apart_by_the_depth(name):
    description = cast.described(name)
    roof, building = description.frames.roof, description.building
    lowest = []
    for truss in trusses_of(name):
        levels = {role: slopes_of(name, truss, role) for role in truss.chords}
        for (x0, x1, bottom), (_, _, top) in zip(
            *(levels[r] for r in (Role.BOTTOM_CHORD, Role.TOP_CHORD)), strict=True
        ):
            if roof.shape == "parallel":
                for x in (x0, x1):
                    assert np.polyval(top, x) - np.polyval(bottom, x) == pytest.approx(roof.depth, abs=0.01)
        # Column lines beside this truss, the bottom chord carried on to them.
        lines = np.concatenate([[0.0], np.cumsum(building.spans)])
        for x0, x1, bottom in levels[Role.BOTTOM_CHORD]:
            for line in lines[np.minimum(abs(lines - x0), abs(lines - x1)) < 500.0]:
                lowest.append(
                    np.polyval(bottom, line) - roof.bottom_chord.height / 2 * np.hypot(1, bottom[0])
                )
        if roof.shape == "pitched":
            for x0, x1, top in levels[Role.TOP_CHORD]:
                line = min(lines, key=lambda x: min(abs(x - x0), abs(x - x1)))
                bottom = next(b for a, c, b in levels[Role.BOTTOM_CHORD] if abs((a + c) - (x0 + x1)) < 10.0)
                assert np.polyval(top, line) - np.polyval(bottom, line) == pytest.approx(roof.depth, abs=0.01)
    # The underside at the column line is at eaves level: on the steepest chord; flatter ones are a trifle higher.
    assert min(lowest) == pytest.approx(building.eaves, abs=0.01)


@pytest.mark.parametrize("name", TRUSSED)
def test_both_lengths_of_a_chord_meet_at_the_ridge(name):
    """Under unequal slopes too, where the ridge is not in the middle (a bottom chord once missed itself there)."""
    bars = bars_of(name)
    for truss in trusses_of(name):
        for role, chords in truss.chords.items():
            for left, right in pairwise(chords):
                apart = min(np.linalg.norm(p - q) for p in bars.ends[left] for q in bars.ends[right])
                if role in truss.ridges and (left, right) == truss.ridges[role][1:]:
                    assert apart < 2 * SLACK
                else:  # divided for the road: an end plate on either side
                    thickness = cast.described(name).connections.splices.thickness
                    assert apart == pytest.approx(2 * thickness, abs=2 * SLACK)


# Patterns by the signs of their forces


@pytest.mark.parametrize("name", TRUSSED)
def test_web_forces_bear_out_the_name_of_the_pattern(name):
    """Pratt: diagonals in tension under gravity; Howe: in compression (the trade's definition; facts of the trade)."""
    bars, pattern = bars_of(name), cast.described(name).frames.roof.pattern
    for truss in trusses_of(name):
        forces, webs = solved(truss)
        assert set(webs) == set(truss.webs)
        largest = max(abs(force) for force in forces.bars.values())
        diagonals = [forces[webs[i]] for i in truss.webs if bars.role[i] is Role.DIAGONAL]
        posts = [forces[webs[i]] for i in truss.webs if bars.role[i] is Role.POST]
        if pattern == "pratt":
            assert min(diagonals) > -1e-6 * largest
            assert max(diagonals) > 0.1 * largest
            assert np.mean(posts) < 0
        elif pattern == "howe":
            assert max(diagonals) < 1e-6 * largest
            assert min(diagonals) < -0.1 * largest
        elif pattern == "warren":
            # One post at most, at a ridge; the diagonals take turns as long as they carry much.
            assert len(posts) <= 1
            much = [force for force in diagonals if abs(force) > 0.05 * largest]
            assert {np.sign(f) for f in much} == {1.0, -1.0}
        else:
            # A post at every panel point of the top chord.
            tops = [node for node in truss.nodes if node.chord is Role.TOP_CHORD]
            assert len(posts) == len(tops)
            assert {np.sign(f) for f in diagonals if abs(f) > 0.05 * largest} == {1.0, -1.0}


def test_all_patterns_and_shapes_are_in_the_cast():
    roofs = [cast.described(name).frames.roof for name in TRUSSED]
    assert {roof.pattern for roof in roofs} == {"pratt", "howe", "warren", "warren-with-posts"}
    assert {roof.shape for roof in roofs} == {"parallel", "pitched"}
