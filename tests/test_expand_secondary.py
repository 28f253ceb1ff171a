"""Purlins, rails, braces and gable posts as placed: which way round, how far off, how far apart.

All distances are measured on the corners of the placed solids; the numbers wanted come from the description
(or from the list of clearances in the comments), never from the expansion.
"""

from __future__ import annotations

import re
from collections import defaultdict
from functools import cache
from itertools import pairwise
from math import ceil, cos, hypot, tan

import cast
import numpy as np
import pytest
from invariants import Bars, bodies

from shedbim.geometry.placements import apply, inverse
from shedbim.model.bars import Bar
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.model.shed import Shed
from shedbim.sections.profiles import Angle, FoldedChannel, Hollow, IShape, LippedC, LippedZ
from shedbim.tolerance import SAME_LENGTH

ALL = pytest.mark.parametrize("name", cast.CAST)
#: A part may be shorter than the stock bar it stands for, by half of this at either end.
SLACK = SAME_LENGTH / 2 + 0.01
NOISE = 0.01
ROOF_STEEL = (Role.RAFTER, Role.GABLE_RAFTER, Role.TOP_CHORD)


@cache
def bars_of(name: str) -> Bars:
    return Bars(cast.members_of(name))


@cache
def labels_of(name: str) -> frozenset[str]:
    """Labels of the lines and bays looked at: the first and the last three, for the sake of the big preset."""
    numbers = cast.members_of(name).grid.numbers
    bays = [f"{a}-{b}" for a, b in pairwise(numbers)]
    return frozenset([*numbers[:3], *numbers[-3:], *bays[:3], *bays[-3:]])


def chosen(name: str, *roles: Role) -> list[int]:
    shed, bars = cast.members_of(name), bars_of(name)
    return [
        i
        for i, key in enumerate(shed.pieces.keys)
        if bars.role[i] in roles and key.split("/")[0] in labels_of(name)
    ]


@cache
def solid_corners(shed: Shed, part: int) -> np.ndarray:
    return np.asarray(bodies(shed)[part].to_mesh().vert_properties, float)[:, :3]


def corners(name: str, piece: int) -> np.ndarray:
    """The corners of a placed solid (n, 3)."""
    shed = cast.members_of(name)
    return apply(shed.pieces.placement[piece], solid_corners(shed, int(shed.pieces.part[piece])))


def joints(name: str, *kinds: JointKind):
    """Each joint of some kinds: its pieces and where each is taken."""
    shed = cast.members_of(name)
    for run in shed.joints:
        if run.kind in kinds:
            for pieces, at, point in zip(run.pieces.tolist(), run.at.tolist(), run.points, strict=True):
                if shed.pieces.keys[pieces[0]].split("/")[0] in labels_of(name):
                    yield pieces, at, point


def slope_over(name: str, x: float):
    building = cast.described(name).building
    slopes = building.roof.slopes(building.spans)
    return min(slopes, key=lambda s: max(s.x0 - x, x - s.x1, 0.0))


def eaves_offset(name: str) -> float:
    """The first purlin from the column line: as described, or 150 mm; over the heads of tubes, 45 mm from their edge.

    Beside a tube is the bracket of what is bolted to it. In whole centimetres.
    """
    description = cast.described(name)
    columns = description.frames.columns.section
    if description.purlins.eaves_offset is not None:
        return description.purlins.eaves_offset
    return (
        150.0 if isinstance(columns.profile, IShape) else min(150.0, (columns.height / 2 - 45.0) // 10 * 10)
    )


def surfaces(name: str):
    """Slopes that run on in one plane, taken together: (x0, x1, pitch, whether its ends are at column lines)."""
    building = cast.described(name).building
    slopes = building.roof.slopes(building.spans)
    if len({round(s.pitch, 9) for s in slopes}) == 1:
        return [(slopes[0].x0, slopes[-1].x1, slopes[0].pitch)]
    return [(s.x0, s.x1, s.pitch) for s in slopes]


def foot_x(name: str, piece: int) -> float:
    """x of the point of the roof steel's top line that a purlin stands over, square to the slope."""
    purlins, (x, _, _) = cast.described(name).purlins, bars_of(name).ends[piece, 0]
    above = purlins.lift + purlins.section.height / 2
    return float(x + np.sin(slope_over(name, float(x)).pitch) * above)


def opens_towards(name: str, piece: int, open_to: np.ndarray, outward: np.ndarray) -> bool:
    """Whether a C opens, or the outer flange of a Z points, along a direction."""
    bars = bars_of(name)
    shed = cast.members_of(name)
    off = corners(name, piece) - bars.ends[piece, 0]
    across, out = off @ open_to, off @ outward
    if isinstance(shed.parts[shed.pieces.part[piece]].bar.section.profile, LippedC):
        return bool(across.max() > -across.min() + 1.0)  # the web is near the centroid, the lips are far
    flange = across[out > 0.9 * out.max()]
    return bool(flange.max() > -flange.min() + 1.0)


# Purlins


@ALL
def test_purlins_stand_the_right_way_up_the_slope(name):
    """The upper flange of a Z points uphill, a C opens uphill: then loads twist it least (common practice)."""
    for piece in chosen(name, Role.PURLIN):
        pitch = slope_over(name, foot_x(name, piece)).pitch
        uphill = np.array([cos(pitch), 0.0, np.sin(pitch)]) * np.sign(pitch)
        normal = np.array([-np.sin(pitch), 0.0, cos(pitch)])
        assert opens_towards(name, piece, uphill, normal)


@ALL
def test_purlins_clear_the_steel_that_carries_them_by_the_lift(name):
    shed, bars, lift = cast.members_of(name), bars_of(name), cast.described(name).purlins.lift
    carriers = set()
    for pieces, _, _ in joints(name, JointKind.PURLIN_CLEAT):
        carrier = pieces[0]
        if bars.role[carrier] not in ROOF_STEEL:
            continue
        carriers.add(bars.role[carrier])
        placement = shed.pieces.placement[carrier]
        axis = 1 + int(abs(placement[2, 2]) > 0.5)  # the section's axis that is upright
        side = np.sign(placement[2, axis])
        top = bars.high[carrier, axis] if side > 0 else -bars.low[carrier, axis]
        for purlin in (i for i in pieces[1:] if bars.role[i] is Role.PURLIN):  # not the other angle of a pair
            off = apply(inverse(placement), corners(name, purlin))[:, axis] * side - top
            assert off.min() == pytest.approx(lift, abs=NOISE)
    gables = cast.described(name).frames.gables.system
    assert (Role.GABLE_RAFTER in carriers) == (gables == "rafter")


@ALL
def test_purlins_are_set_out_as_described(name):
    description = cast.described(name)
    purlins, building = description.purlins, description.building
    lines = np.concatenate([[0.0], np.cumsum(building.spans)])
    label = chosen(name, Role.PURLIN)
    first_bay = cast.members_of(name).pieces.keys[label[0]].split("/")[0]
    mine = [i for i in label if cast.members_of(name).pieces.keys[i].split("/")[0] == first_bay]
    feet = sorted(foot_x(name, i) for i in mine)
    seen = 0
    for x0, x1, pitch in surfaces(name):
        along = [(x - x0) / cos(pitch) for x in feet if x0 < x < x1]
        seen += len(along)
        length = (x1 - x0) / cos(pitch)
        wanted = []
        for x in (x0, x1):
            at = [i for i, line in enumerate(lines) if abs(line - x) < 1e-3]
            if not at:
                wanted.append(purlins.ridge_offset)
            else:
                wanted.append(eaves_offset(name) if at[0] in (0, len(lines) - 1) else purlins.valley_offset)
        assert along[0] == pytest.approx(wanted[0], abs=NOISE)
        assert length - along[-1] == pytest.approx(wanted[1], abs=NOISE)
        steps = np.diff(along)
        assert steps.max() <= purlins.spacing + NOISE
        if purlins.set_out == "even":
            assert np.ptp(steps) < NOISE
            # One purlin fewer would be too few.
            assert len(steps) == max(ceil((along[-1] - along[0]) / purlins.spacing - 1e-9), 1)
    assert seen == len(feet)


@pytest.mark.parametrize("name", [n for n in cast.CAST if cast.described(n).purlins.set_out == "nodes"])
def test_purlins_over_nodes_stand_over_every_node(name):
    shed, bars, description = cast.members_of(name), bars_of(name), cast.described(name)
    purlins = description.purlins
    feet = np.array(sorted({round(foot_x(name, i), 3) for i in chosen(name, Role.PURLIN)}))
    nodes = [
        point[0]
        for pieces, _, point in joints(name, JointKind.NODE)
        if bars.role[pieces[0]] is Role.TOP_CHORD
        and shed.pieces.keys[pieces[0]].split("/")[0] == shed.grid.numbers[1]
    ]
    assert len(nodes) > 8
    lines = np.array(shed.grid.x)
    beside = description.frames.columns.section.height / 2 + 20.0 + 310.0
    ends = np.array([x for x0, x1, _ in surfaces(name) for x in (x0, x1)])
    for x in nodes:
        # Next to the first and last purlin of a slope, within 300 mm of them, there is no room for another; nor
        # next to a column that a slope runs past, where one purlin serves both trusses.
        offset = max(purlins.valley_offset, eaves_offset(name)) + 310.0
        if np.abs(ends - x).min() > offset and np.abs(lines - x).min() > beside:
            assert np.abs(feet - x).min() < NOISE
    for line in lines:
        if np.abs(ends - line).min() > 1.0:
            assert np.abs(feet - line).min() < NOISE


@ALL
def test_purlins_are_butted_with_their_gap_and_reach_the_outer_face_of_the_gable_rails(name):
    shed, bars, gap = cast.members_of(name), bars_of(name), cast.described(name).purlins.gap
    courses = defaultdict(list)
    for i in chosen(name, Role.PURLIN):
        courses[shed.pieces.keys[i].split("/", 1)[1]].append(sorted(bars.ends[i, :, 1]))
    rails = np.concatenate([corners(name, i)[:, 1] for i in chosen(name, Role.GABLE_RAIL)])
    y = np.array(shed.grid.y)
    for stretches in courses.values():
        stretches.sort()
        for (_, end), (start, _) in pairwise(stretches):
            if start - end < 1000.0:  # else bays in between were left out
                assert start - end == pytest.approx(gap, abs=2 * SLACK)
                assert np.abs(y - (start + end) / 2).min() < SLACK
        assert stretches[0][0] == pytest.approx(rails.min(), abs=SLACK)
        assert stretches[-1][1] == pytest.approx(rails.max(), abs=SLACK)


# Rails


@ALL
def test_rails_open_downwards(name):
    """So that no water stands in them (common practice)."""
    grid = cast.members_of(name).grid
    for i in chosen(name, Role.SIDE_RAIL, Role.GABLE_RAIL):
        x, y, _ = bars_of(name).ends[i].mean(axis=0)
        if bars_of(name).role[i] is Role.SIDE_RAIL:
            outward = np.array([-1.0 if x < grid.x[-1] / 2 else 1.0, 0.0, 0.0])
        else:
            outward = np.array([0.0, -1.0 if y < grid.y[-1] / 2 else 1.0, 0.0])
        assert opens_towards(name, i, np.array([0.0, 0.0, -1.0]), outward)


@ALL
def test_rails_stand_outside_the_steel_by_the_lift(name):
    description, bars, grid = cast.described(name), bars_of(name), cast.members_of(name).grid
    lift, seen = description.rails.lift, set()
    for pieces, _, point in joints(name, JointKind.RAIL_CLEAT):
        carrier = corners(name, pieces[0])
        for rail in pieces[1:]:
            role = bars.role[rail]
            axis = 0 if role is Role.SIDE_RAIL else 1
            out = 1.0 if point[axis] > np.mean((grid.x, grid.y)[axis]) else -1.0
            off = (corners(name, rail)[:, axis] * out).min() - (carrier[:, axis] * out).max()
            wanted = lift
            if role is Role.GABLE_RAIL and bars.role[pieces[0]] is Role.COLUMN:
                # Gable rails are in one line, outside the widest of columns and roof steel.
                steel = [i for i in chosen(name, *ROOF_STEEL) if abs(bars.ends[i, 0, 1] - point[1]) < 500.0]
                widest = max(bars.width[steel]) if steel else 0.0
                wanted += max(0.0, (widest - description.frames.columns.section.width) / 2)
            assert off == pytest.approx(wanted, abs=NOISE)
            seen.add((role, bars.role[pieces[0]]))
    assert {(Role.SIDE_RAIL, Role.COLUMN), (Role.GABLE_RAIL, Role.GABLE_POST)} <= seen


@ALL
def test_rails_are_butted_with_their_gap(name):
    shed, bars, description = cast.members_of(name), bars_of(name), cast.described(name)
    columns = description.frames.columns.section
    rows = defaultdict(list)
    for i in chosen(name, Role.SIDE_RAIL, Role.GABLE_RAIL):
        axis = 1 if bars.role[i] is Role.SIDE_RAIL else 0
        x, y, z = bars.ends[i].mean(axis=0)
        rows[axis, round(float((x, y)[1 - axis])), round(float(z))].append(sorted(bars.ends[i, :, axis]))
    butted = 0
    for (axis, _, _), stretches in rows.items():
        stretches.sort()
        for (_, end), (start, _) in pairwise(stretches):
            if start - end < 1000.0:
                assert start - end == pytest.approx(description.rails.gap, abs=2 * SLACK)
                butted += 1
        # At the corners they run on to the edge of the column.
        half = (columns.width if axis == 1 else columns.height) / 2
        first, last = ((shed.grid.y, shed.grid.x)[axis == 0][i] for i in (0, -1))
        if stretches[0][0] < first + 500.0:
            assert stretches[0][0] == pytest.approx(first - half, abs=SLACK)
        if stretches[-1][1] > last - 500.0:
            assert stretches[-1][1] == pytest.approx(last + half, abs=SLACK)
    assert butted > 3


def cap_height(name: str, column: int) -> float:
    """How high the plate on the head of a column is, measured upright, mm; it lies along the roof."""
    key = cast.members_of(name).pieces.keys[column]
    shed = cast.shed_of(name)
    caps = [
        shed.parts[shed.pieces.part[fitting]].shape.thickness
        for run in shed.joints
        if run.kind is JointKind.COLUMN_CAP
        for pieces, fittings in zip(run.pieces, run.fittings.tolist(), strict=True)
        if shed.pieces.keys[pieces[0]] == key
        for fitting in fittings
        if shed.parts[shed.pieces.part[fitting]].role is Role.CAP_PLATE
    ]
    (thickness,) = caps
    return thickness / cos(slope_over(name, float(bars_of(name).ends[column, 0, 0])).pitch)


@ALL
def test_side_rails_are_set_out_as_described(name):
    bars, shed, rails = bars_of(name), cast.members_of(name), cast.described(name).rails
    for letter in (shed.grid.letters[0], shed.grid.letters[-1]):
        column = shed.pieces.keys.index(f"{shed.grid.numbers[0]}/column/{letter}")
        mine = [i for i in chosen(name, Role.SIDE_RAIL) if f"side rail/{letter}/" in shed.pieces.keys[i]]
        levels = np.array(sorted({round(float(bars.ends[i, 0, 2]), 3) for i in mine}))
        assert levels[0] == pytest.approx(rails.base_offset, abs=NOISE)
        # Below the lowest corner of the column's head, cap plate included.
        head = corners(name, column)
        lowest = head[head[:, 2] > head[:, 2].max() - 500.0][:, 2].min() + cap_height(name, column)
        assert lowest - levels[-1] == pytest.approx(rails.eaves_offset, abs=2 * SLACK)
        steps = np.diff(levels)
        assert np.ptp(steps) < NOISE
        assert len(steps) == max(ceil((levels[-1] - levels[0]) / rails.spacing - 1e-6), 1)


@ALL
def test_every_rail_has_the_uprights_behind_it(name):
    """A rail ends at uprights that reach past its upper edge."""
    bars = bars_of(name)
    for pieces, _, _ in joints(name, JointKind.RAIL_CLEAT):
        upright = bars.ends[pieces[0], :, 2].max()
        for rail in pieces[1:]:
            assert corners(name, rail)[:, 2].max() < upright + NOISE


# Braces and posts


@ALL
def test_crossing_braces_pass_each_other(name):
    """Angles on either face of a 10 mm gusset; the halves of a split tube 20 mm or more off the one that passes."""
    shed, bars, seen = cast.members_of(name), bars_of(name), 0
    for pieces, at, point in joints(name, JointKind.BRACE_CROSSING):
        seen += 1
        first, *others = pieces
        for other in others:
            normal = np.cross(bars.x[first], bars.x[other])
            normal /= np.linalg.norm(normal)
            if isinstance(shed.parts[shed.pieces.part[first]].bar.section.profile, Angle):
                here, there = ((corners(name, i) - point) @ normal for i in (first, other))
                if here.mean() > 0:
                    here, there = there, here
                assert here.max() == pytest.approx(-5.0, abs=NOISE)
                assert there.min() == pytest.approx(5.0, abs=NOISE)
                assert at == [At.ALONG, At.ALONG]
            else:
                aside = np.cross(normal, bars.x[first])
                off = np.abs((corners(name, other) - point) @ aside)
                # They stand back for the fins they are bolted by: three M20 in a row are 235 mm with all around.
                assert 20.0 - SLACK <= off.min() - bars.height[first] / 2 <= 20.0 + 235.0
        if len(others) == 2:  # one half on either side
            sides = [np.dot(bars.ends[i].mean(axis=0) - point, aside) for i in others]
            assert sides[0] * sides[1] < 0
    bracing = cast.described(name).bracing
    assert (seen > 0) == ("crossed" in (bracing.roof.pattern, bracing.walls.pattern))


@ALL
def test_gable_posts_end_below_the_steel(name):
    """25 mm below it or more, so that the roof can deflect (common practice: 20 to 30 mm)."""
    bars, seen = bars_of(name), 0
    description = cast.described(name)
    for pieces, _, point in joints(name, JointKind.POST_HEAD):
        carrier, post = pieces
        head = corners(name, post)
        head = head[head[:, 2] > head[:, 2].max() - 300.0]
        lengths = [
            i
            for i in chosen(name, bars.role[carrier])
            if abs(bars.ends[i, 0, 1] - bars.ends[carrier, 0, 1]) < 1.0
            and bars.ends[i, :, 0].min() - 150.0 < point[0] < bars.ends[i, :, 0].max() + 150.0
        ]
        gaps = []
        for i in lengths:
            (x0, _, z0), (x1, _, z1) = bars.ends[i]
            rise = (z1 - z0) / (x1 - x0)
            depth = (
                bars.height[i]
                if abs(cast.members_of(name).pieces.placement[i, 1, 2]) < 0.5
                else bars.width[i]
            )
            underside = z0 + (head[:, 0] - x0) * rise - depth / 2 * hypot(1, rise)
            gaps.append(underside - head[:, 2])
        nearest = min(gap.min() for gap in gaps)
        profile = cast.members_of(name).parts[cast.members_of(name).pieces.part[carrier]].bar.section.profile
        if isinstance(profile, Hollow):
            # A hanger comes down from the chord, to which a fin on the post is bolted in long slots.
            assert 25.0 - 2 * SLACK <= nearest <= 25.0 + 130.0
        else:
            assert nearest == pytest.approx(25.0, abs=2 * SLACK)
        # Its outer face is in line with the outer faces of columns and of the roof steel in this frame.
        y = bars.ends[carrier, 0, 1]
        steel = [i for i in chosen(name, *ROOF_STEEL) if abs(bars.ends[i, 0, 1] - y) < 1.0]
        face = max(description.frames.columns.section.width, *bars.width[steel]) / 2
        out = 1.0 if y > 1.0 else -1.0
        assert ((corners(name, post)[:, 1] - y) * out).max() == pytest.approx(face, abs=NOISE)
        seen += 1
    assert seen >= 2


@ALL
def test_sag_bars_run_from_web_to_web(name):
    """Each end of a sag bar is at the web of the purlin or rail that holds it: through it, a nut beyond, or on it.

    ISO 4032, ISO 7089: the nut of M12 is 10.8 mm high, its washer 2.5 mm thick; more than three diameters of thread
    nobody leaves. A bar that slants too much for a hole ends at a plate of 5 to 10 mm on the web.
    """
    shed, bars, through = cast.members_of(name), bars_of(name), 0
    for pieces, at, _ in joints(name, JointKind.SAG_BAR_END):
        held, bar = pieces
        back = inverse(shed.pieces.placement[held])
        here, there = apply(back, bars.ends[bar, [at[1], 1 - at[1]]])
        section = shed.parts[shed.pieces.part[held]].bar.section
        is_c = isinstance(section.profile, LippedC)
        web = section.outline.bounds[0] + section.profile.thickness / 2 if is_c else 0.0
        past = (here[1] - web) * np.sign(here[1] - there[1])
        half = section.profile.thickness / 2
        if past > 0:
            assert 10.8 + 2.5 <= past - half <= 3 * bars.width[bar]
            through += 1
        else:
            assert 5.0 - SLACK <= -past - half <= 10.0
        assert abs(here[2]) < section.height / 4
    assert through


def test_sag_bars_have_a_grade_of_their_own():
    """They took the grade of the purlins' strip; round bar is no strip (EN 10025-2, not EN 10346)."""
    grades = {"purlins__sag_bar_grade": "S235", "rails__sag_bar_grade": "S355J2"}
    shed = cast.members(cast.changed("flat", rails__sag_bars=1, purlins__sag_bars=2, **grades))
    found = defaultdict(set)
    for key, part in zip(shed.pieces.keys, shed.pieces.part.tolist(), strict=True):
        if shed.parts[part].role is Role.SAG_BAR:
            found["rail" if "/rail sag bar/" in key else "roof"].add(shed.parts[part].grade)
    assert found == {"roof": {"S235"}, "rail": {"S355J2"}}


@ALL
def test_only_strip_has_a_grade_of_strip(name):
    """Plates and bars of other shapes are of hot-rolled steel: EN 10346 and ASTM A653 are for strip."""
    of_strip = (LippedC, LippedZ, FoldedChannel)
    for part in cast.shed_of(name).parts:
        strip = isinstance(part.shape, Bar) and isinstance(part.shape.section.profile, of_strip)
        assert (re.search(r"GD|A653", part.grade) is not None) == strip, part.mark


@ALL
def test_columns_stop_at_the_roof(name):
    """The head of a column is cut along the roof; in a valley it is square."""
    bars, description = bars_of(name), cast.described(name)
    valleys = {
        round(s.x1)
        for s, t in pairwise(description.building.roof.slopes(description.building.spans))
        if not s.rises and t.rises
    }
    for i in chosen(name, Role.COLUMN):
        head = corners(name, i)
        top = head[head[:, 2] > head[:, 2].max() - 1.0]
        if round(float(bars.ends[i, 0, 0])) in valleys:
            assert np.ptp(top[:, 0]) > 0.9 * description.frames.columns.section.height
        else:
            pitch = slope_over(name, float(bars.ends[i, 0, 0])).pitch
            levels = head[:, 2] - head[:, 0] * tan(pitch)
            upper = levels[head[:, 2] > head[:, 2].max() - abs(tan(pitch)) * np.ptp(head[:, 0]) - 1.0]
            assert np.ptp(upper) < NOISE
