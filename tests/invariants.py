"""What holds in every building: each function gives what is wrong with a Shed, nothing where all is well.

A second opinion: only the finished tables of the Shed are looked at, and the description for its sections. The
rules take whole buildings or their members alone; what asks for fittings says so.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator
from functools import lru_cache
from itertools import pairwise

import numpy as np
from manifold3d import Manifold
from scipy.spatial import cKDTree

from shedbim.description.models import Description
from shedbim.geometry.placements import apply, compose, inverse
from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.joints import At, JointKind, JointRun
from shedbim.model.plates import Plate
from shedbim.model.roles import Role, Sort
from shedbim.model.shapes import Shape
from shedbim.model.shed import Shed
from shedbim.model.solids import solid
from shedbim.sections.profiles import IShape, LippedZ
from shedbim.sections.section import STEEL_DENSITY
from shedbim.tolerance import SAME_LENGTH, SAME_PLACE

__all__ = [
    "RULES",
    "Bars",
    "bars_end_in_joints",
    "bars_of",
    "bodies",
    "broken",
    "carriers_are_near",
    "coarse_bodies",
    "eccentricities_are_true",
    "equal_assemblies_are_equal",
    "joints_are_at_ends",
    "keys_are_unique",
    "masses_add_up",
    "tables_are_sound",
]

#: Work points hang on stock bars; a part may be this much shorter, in the middle of them.
_SLACK = SAME_LENGTH / 2 + 1e-6

#: What purlins stand on, besides columns.
_ROOF_STEEL = (Role.RAFTER, Role.GABLE_RAFTER, Role.TOP_CHORD)


class Bars:
    """The pieces of a shed as columns of n rows: where their axes begin and end, their sizes, their roles.

    Rows of plates and fasteners are not numbers.
    """

    def __init__(self, shed: Shed) -> None:
        part, placement = shed.pieces.part, shed.pieces.placement
        nothing = (np.nan,) * 9
        sizes = np.array(
            [
                (
                    *p.shape.axis, *p.shape.section.outline.bounds,
                    p.shape.length, p.shape.section.height, p.shape.section.width,
                )
                if isinstance(p.shape, Bar)
                else nothing
                for p in shed.parts
            ]
        )[part]  # fmt: skip
        axis, bounds, length = sizes[:, :2], sizes[:, 2:6], sizes[:, 6]
        self.x = placement[:, :, 0]
        #: (n, 2, 3): the axis where it enters and where it leaves the steel.
        self.ends = placement[:, None, :, 3] + axis[:, :, None] * self.x[:, None, :]
        #: (n, 3) each: the corners of the box that a bar fills in its own frame.
        self.low = np.column_stack([np.zeros(len(part)), bounds[:, 0], bounds[:, 1]])
        self.high = np.column_stack([length, bounds[:, 2], bounds[:, 3]])
        self.height, self.width = sizes[:, 7], sizes[:, 8]
        self.role = [shed.parts[i].role for i in part.tolist()]
        #: Of the widest bar, mm.
        self.widest = float(np.nanmax(self.width))
        #: Greatest height of what purlins stand on, besides columns, mm.
        self.roof_steel = max(
            h for h, r in zip(self.height.tolist(), self.role, strict=True) if r in _ROOF_STEEL
        )
        self._placement = placement

    def outside(self, pieces: np.ndarray, points: np.ndarray) -> np.ndarray:
        """How far points (m, 3) lie outside the boxes of pieces (m,), mm."""
        placement = self._placement[pieces]
        local = np.einsum("mji,mj->mi", placement[:, :, :3], points - placement[:, :, 3])
        beyond = np.maximum(np.maximum(self.low[pieces] - local, local - self.high[pieces]), 0.0)
        return np.linalg.norm(beyond, axis=1)


@lru_cache(maxsize=2)
def bars_of(shed: Shed) -> Bars:
    """Give the pieces of a shed as columns."""
    return Bars(shed)


@lru_cache(maxsize=2)
def bodies(shed: Shed) -> list[Manifold]:
    """Give the solid of each part as it is drawn; chords of arcs take half a thousandth off a round bar at most."""
    return [solid(part.body, _chord_error(part.body)) for part in shed.parts]


@lru_cache(maxsize=2)
def coarse_bodies(shed: Shed) -> list[Manifold]:
    """Give the solid of each part with chords up to 0.1 mm off its arcs, inside bars and bolts and within holes.

    Enough to tell whether solids overlap by a cubic centimetre, at a tenth of the triangles.
    """
    return [solid(part.shape, 0.1) for part in shed.parts]


def _chord_error(shape: Shape) -> float:
    """How far chords may leave the arcs of a shape, mm."""
    if isinstance(shape, Bar):
        return 2e-4 * min(shape.section.width, shape.section.height)
    return 0.01 if isinstance(shape, Plate) else 2e-4 * shape.fastener.diameter


def keys_are_unique(shed: Shed, _: Description) -> Iterator[str]:
    """Every piece has one key, and every assembly."""
    for what, keys in (("piece", shed.pieces.keys), ("assembly", shed.assemblies.keys)):
        for key, count in Counter(keys).items():
            if count > 1 or not key:
                yield f"{count} of {what} {key!r}"


def tables_are_sound(shed: Shed, _: Description) -> Iterator[str]:
    """Columns are as long as each other, indices point somewhere, placements are rigid motions."""
    n, pieces, groups = len(shed.pieces.keys), shed.pieces, shed.assemblies
    if not len(pieces.part) == len(pieces.placement) == len(pieces.assembly) == n:
        yield "columns of unequal length"
    if set(pieces.part.tolist()) != set(range(len(shed.parts))):
        yield "a part without pieces or a piece without a part"
    if pieces.assembly.min() < -1 or pieces.assembly.max() >= len(groups):
        yield "a piece in an assembly that does not exist"
    if (groups.parent >= np.arange(len(groups))).any():
        yield "an assembly before the one it belongs to"
    if set(groups.type.tolist()) != set(range(len(shed.assembly_types))):
        yield "an assembly type without assemblies"
    for placement in (pieces.placement, groups.placement):
        turn = placement[:, :, :3]
        if np.abs(turn @ np.swapaxes(turn, 1, 2) - np.eye(3)).max() > 1e-9 or (np.linalg.det(turn) < 0).any():
            yield "a placement that is no rigid motion"
    marks = Counter([*(p.mark for p in shed.parts), *(t.mark for t in shed.assembly_types)])
    yield from (f"mark {mark} twice" for mark, count in marks.items() if count > 1)


def bars_end_in_joints(shed: Shed, _: Description) -> Iterator[str]:
    """Each end of each piece is in exactly one joint, or declared free exactly once."""
    taken = np.zeros((len(shed.pieces), 2), int)
    met = np.array([part.role.sort is Sort.MEMBER for part in shed.parts])[shed.pieces.part]
    for run in shed.joints:
        met[run.pieces] = True  # stays are fittings that meet like members
        for end in (At.START, At.END):
            np.add.at(taken[:, end], run.pieces[run.at == end], 1)
    for piece, end in np.argwhere((taken != 1) & met[:, None]).tolist():
        yield f"{shed.pieces.keys[piece]}: {('start', 'end')[end]} in {taken[piece, end]} joints"


def joints_are_at_ends(shed: Shed, description: Description) -> Iterator[str]:
    """The work point of a joint at an end of a piece lies near that end of it."""
    bars = bars_of(shed)
    for run in shed.joints:
        reach = _end_reach(shed, run, bars, description)
        for column in range(run.pieces.shape[1]):
            pieces, at = run.pieces[:, column], run.at[:, column]
            rows = np.flatnonzero(at != At.ALONG)
            away = np.linalg.norm(bars.ends[pieces[rows], at[rows]] - run.points[rows], axis=1)
            for row in rows[away > reach[rows] + _SLACK]:
                key, far = shed.pieces.keys[pieces[row]], float(away[rows == row][0])
                yield f"{run.kind.word} of {key}: {far:.1f} mm from its end, at most {reach[row]:.1f}"


#: How far the ends of tubes stand back for the fin they are bolted by: two or three bolts in a row with their end
#: distances, M20 at most 40 + 2 x 70 + 40, a cap of 10 mm, and 10 mm of air before the cap and beyond the tip.
_FIN = 250.0


def _end_reach(shed: Shed, run: JointRun, bars: Bars, description: Description) -> np.ndarray:
    """How far an end may lie from the work point of each joint of a run (m,), mm."""
    columns, connections = description.frames.columns.section, description.connections
    purlins, rails = description.purlins, description.rails
    plain = {
        # The axis ends at the work point itself, or on the plate below it.
        JointKind.PINNED_BASE: _thickness(shed, run, Role.BASE_PLATE),
        JointKind.FIXED_BASE: _thickness(shed, run, Role.BASE_PLATE),
        JointKind.POST_BASE: _thickness(shed, run, Role.BASE_PLATE),
        JointKind.CHORD_COLUMN: 0.0,
        JointKind.CHORD_RIDGE: 0.0,
        JointKind.PACKED_PAIR: 0.0,
        # A bar runs on beyond the web by a washer, a nut and a tip: no more than three diameters.
        JointKind.SAG_BAR_END: 3.0 * max(purlins.sag_bar.width, rails.sag_bar.width),
        JointKind.FREE: _off_line(description),
        JointKind.PURLIN_LAP: _off_line(description),
        JointKind.FLANGE_STAY: 0.0,
        # The cap lies along the roof, a column is upright.
        JointKind.COLUMN_CAP: _thickness(shed, run, Role.CAP_PLATE) / np.cos(_steepest(description)),
        # A post stands off the frame's plane by half the frame at most; a tube has a cap.
        JointKind.POST_HEAD: _thickness(shed, run, Role.CAP_PLATE)
        + max(columns.width, columns.height, bars.widest) / 2,
        # Half the gap; at a gable a purlin runs on past the frame, at a corner a rail to the column's edge.
        JointKind.PURLIN_CLEAT: float(np.hypot(purlins.gap / 2, _off_line(description))),
        JointKind.RAIL_CLEAT: max(rails.gap, columns.width, columns.height) / 2,
        # An end plate on either side of the work point.
        JointKind.CHORD_SPLICE: connections.splices.thickness,
    }
    if run.kind in plain:
        return np.full(len(run.points), plain[run.kind])
    if run.kind in _ANGLE_KINDS:
        return _angle_reach(run, bars, description)
    last = run.pieces[:, -1]
    if run.kind is JointKind.RAFTER_COLUMN:  # half the column and what is between, along the slope
        return (columns.height / 2 + _end_gap(description)) / np.abs(bars.x[last, 0])
    if run.kind is JointKind.APEX:
        # An end plate, along the slope; axes of unequal slopes cross the ridge at unequal levels.
        slopes = 1 / np.abs(bars.x[run.pieces, 0])
        return connections.apex.thickness * slopes.max(axis=1) + bars.roof_steel * np.ptp(slopes, axis=1)
    if run.kind in (JointKind.NODE, JointKind.WEB_SPLICE):
        return _web_reach(run, bars)
    return _brace_reach(run, bars, description)


_ANGLE_KINDS = (
    JointKind.ANGLE_NODE,
    JointKind.ANGLE_SITE_NODE,
    JointKind.ANGLE_COLUMN,
    JointKind.ANGLE_SPLICE,
)


def _angle_reach(run: JointRun, bars: Bars, description: Description) -> np.ndarray:
    """The same in trusses of angles."""
    if run.kind is JointKind.ANGLE_SPLICE:
        # Half the gap between the ends (3 to 10 mm), beside a plate as thick as the gussets.
        return np.hypot(5.0, description.frames.roof.gusset / 2 + bars.width[run.pieces[:, -1]] / 2)
    # Past the chord's leg and that of a neighbour, along the flattest web; at a column beside its bolts.
    bolts = 60.0 if run.kind is JointKind.ANGLE_COLUMN else 0.0
    return 4.0 * bars.height[run.pieces[:, 1:]].max(axis=1) + bolts


def _web_reach(run: JointRun, bars: Bars) -> np.ndarray:
    """The same for the ends of webs: half the chord, and past what else lands here, all along the flattest web."""
    first, webs = run.pieces[:, 0], run.pieces[:, 1:]
    sine = np.linalg.norm(np.cross(bars.x[webs], bars.x[first][:, None]), axis=2).min(axis=1)
    fin = _FIN if run.kind is JointKind.WEB_SPLICE else 0.0
    return (bars.height[first] / 2 + bars.height[webs].sum(axis=1)) / sine + fin


def _off_line(description: Description) -> float:
    """How far the axis of a purlin or rail lies off the line of its course, mm.

    The line runs up the middle of a web at half its depth, and between both of two that lap.
    """
    cleats, purlins = description.connections.cleats, description.purlins.section.profile
    profiles = (each for each in (purlins, description.rails.section.profile) if isinstance(each, LippedZ))
    nest = purlins.thickness / np.sqrt(2) if cleats.continuity == "lapped" else 0.0
    return float(max((np.hypot(*each.outline.centroid) for each in profiles), default=0.0) + nest)


def _thickness(shed: Shed, run: JointRun, role: Role) -> float:
    """The greatest thickness of the plates of a role that the joints of a run add, mm; 0 for none."""
    parts = np.unique(shed.pieces.part[run.fittings]).tolist() if run.fittings.size else []
    return max((shed.parts[i].shape.box[1][2] for i in parts if shed.parts[i].role is role), default=0.0)


def _steepest(description: Description) -> float:
    """The pitch of the steepest slope of the roof, rad."""
    building = description.building
    return max(abs(slope.pitch) for slope in building.roof.slopes(building.spans))


def _end_gap(description: Description) -> float:
    """From a column's face to the end of what is bolted to it, mm: an end plate; at tubes a bracket too."""
    connections = description.connections
    trussed = description.frames.roof.system != "rafter"
    plate = connections.chords.thickness if trussed else connections.rafters.thickness
    if isinstance(description.frames.columns.section.profile, IShape):
        return plate
    return plate + connections.brackets.thickness + connections.brackets.stand_off


def _brace_reach(run: JointRun, bars: Bars, description: Description) -> np.ndarray:
    """The same for the ends of struts, ties and braces."""
    columns, bracing = description.frames.columns.section, description.bracing
    first, last = run.pieces[:, 0], run.pieces[:, -1]
    if run.kind in (JointKind.STRUT_END, JointKind.TIE_END):  # half the steel at the line, then the fin
        return bars.width[first] / 2 + _FIN
    brace = bars.x[last]
    corner = np.hypot(bars.width[last], bars.height[last])
    room = 20.0 + corner  # a set-back, and the corner of the brace itself
    off_plane = 5.0 + corner  # an angle stands on one side of its gusset
    if run.kind is JointKind.BRACE_GUSSET:
        # Whichever is met first: the steel at the line, or what runs along the building, strut or wall brace.
        strut = max(max(s.section.width, s.section.height) for s in (bracing.struts, bracing.eaves_strut))
        strut = max(strut, bracing.walls.section.width + 5.0)
        lengthwise, across = np.abs(brace[:, 1]), np.hypot(brace[:, 0], brace[:, 2])
        beside = np.maximum(bars.width[first], columns.width) / 2 + room
        return np.maximum(beside / lengthwise, (strut + room) / across) + off_plane + _FIN
    if run.kind is JointKind.BRACE_CROSSING:  # half the tube that passes, along the one that stops
        sine = np.linalg.norm(np.cross(bars.x[first], brace), axis=1)
        return room / sine + _FIN
    raise AssertionError(f"no bound for {run.kind}")


def carriers_are_near(shed: Shed, description: Description) -> Iterator[str]:
    """What carries a joint, and what else runs through it, is at its work point."""
    bars = bars_of(shed)
    purlins, rails, bracing = description.purlins, description.rails, description.bracing
    lapped = description.connections.cleats.continuity == "lapped"
    nest = purlins.section.profile.thickness / 2 if lapped else 0.0
    off_plane = max(bracing.roof.section.width, bracing.walls.section.width) + 5.0
    columns = description.frames.columns.section
    stub = _valley_stub(bars, description)
    is_column = np.array([role is Role.COLUMN for role in bars.role])
    roof_steel = np.array([role in _ROOF_STEEL for role in bars.role])
    # A column ends below the plate on its head.
    cap = max(
        (_thickness(shed, run, Role.CAP_PLATE) for run in shed.joints if run.kind is JointKind.COLUMN_CAP),
        default=0.0,
    ) / np.cos(_steepest(description))
    # Rafters end 20 mm short of a ridge, measured level.
    ridge = 20.0
    beyond = _end_gap(description) / 2 / np.cos(_steepest(description))
    # The two angles of a pair are on either side of the plane of their truss, and end 5 mm short of the ridge.
    between = getattr(description.frames.roof, "gusset", 0.0) / 2
    reach = {
        JointKind.ANGLE_NODE: between,
        JointKind.ANGLE_SITE_NODE: between,
        JointKind.PACKED_PAIR: between,
        JointKind.TIE_END: float(np.hypot(between, 5.0)) if between else 0.0,
        # The first node stands off the end plate by its bolts, 60 mm, and half a post at most.
        JointKind.ANGLE_COLUMN: _end_gap(description) + 60.0 + bars.widest / 2,
        JointKind.BRACE_GUSSET: ridge,
        JointKind.STRUT_END: ridge,
        # The work point lies on the axis of the purlin or rail, which is lifted off its carrier.
        # Over the gap between a column and what is bolted to it a purlin is on the nearer of the two: beyond the end
        # of a rafter by half the gap at most, measured level. At a flange the gap is 20 mm, at a tube a bracket's.
        JointKind.PURLIN_CLEAT: float(
            np.hypot(purlins.lift + purlins.section.height / 2 + nest, max(20.0, beyond))
        ),
        # A stay lies beside the web of its purlin.
        JointKind.FLANGE_STAY: description.connections.stays.section.width / 2,
        # Where the roof steel is wider than a corner column, rails stand off the column by as much more.
        JointKind.RAIL_CLEAT: rails.lift
        + rails.section.height / 2
        + max(0.0, (max(bars.width[roof_steel], default=0.0) - columns.width) / 2),
        # The carrier ends an end plate away, or a bracket (a valley column is lower by a stub).
        JointKind.CHORD_COLUMN: _end_gap(description) + stub,
        # It is above the head of a post by a gap of 25 mm, or by a hanger that is bolted to a fin on the cap
        # (end distances and slots of M16: 105 mm more); at a ridge also beside it.
        JointKind.POST_HEAD: float(np.hypot(130.0, ridge)) / np.cos(_steepest(description)),
        # Angles stand on either side of the gusset's plane.
        JointKind.BRACE_CROSSING: off_plane,
    }
    for run in shed.joints:
        for column in range(run.pieces.shape[1]):
            pieces = run.pieces[:, column]
            rows = np.flatnonzero(run.at[:, column] == At.ALONG)
            away = bars.outside(pieces[rows], run.points[rows])
            bound = np.full(len(rows), reach.get(run.kind, 0.0))
            if run.kind is JointKind.PURLIN_CLEAT:
                bound[is_column[pieces[rows]]] += stub + cap
            for row in np.flatnonzero(away > bound + _SLACK):
                key = shed.pieces.keys[pieces[rows[row]]]
                yield f"{run.kind.word} on {key}: {away[row]:.1f} mm away from it, at most {bound[row]:.1f}"


def _valley_stub(bars: Bars, description: Description) -> float:
    """How far the roof stands above the head of a valley column within its cleats' reach, mm; 0 without valleys.

    The head is square, at the lower of the two slopes.
    """
    building, columns = description.building, description.frames.columns.section
    slopes = building.roof.slopes(building.spans)
    if len(slopes) < 3 or slopes[0].rises == slopes[1].rises:
        return 0.0
    pitches = [abs(slope.pitch) for slope in slopes]
    step = bars.roof_steel * (1 / np.cos(max(pitches)) - 1 / np.cos(min(pitches)))
    return float((columns.height / 2 + 20.0) * np.tan(max(pitches)) + step)


def masses_add_up(shed: Shed, _: Description) -> Iterator[str]:
    """A part weighs what its solid weighs, and a shed what its pieces weigh."""
    for part, body in zip(shed.parts, bodies(shed), strict=True):
        meshed = body.volume() * STEEL_DENSITY
        if abs(meshed / part.body.mass - 1) > 1e-3:
            yield f"{part.mark}: {part.body.mass:.3f} kg, its solid {meshed:.3f} kg"
    total = sum(shed.parts[i].shape.mass for i in shed.pieces.part.tolist())
    if abs(total / shed.mass - 1) > 1e-9:
        yield f"the pieces weigh {total:.1f} kg, the shed {shed.mass:.1f} kg"


def equal_assemblies_are_equal(shed: Shed, _: Description) -> Iterator[str]:
    """Assemblies of one type hold the same parts, each corner and hole of their steel in the same place.

    What stands in an assembly inside another is in the outer one too.
    """
    groups, pieces = shed.assemblies, shed.pieces
    members: list[list[int]] = [[] for _ in groups.keys]
    inner: list[list[int]] = [[] for _ in groups.keys]
    for piece, group in enumerate(pieces.assembly.tolist()):
        if group >= 0:
            members[group].append(piece)
    for group in range(len(groups) - 1, -1, -1):  # parents come first
        above = int(groups.parent[group])
        if above >= 0:
            members[above].extend(members[group])
            inner[above].append(int(groups.type[group]))
    inside = np.unique(pieces.part[pieces.assembly >= 0]).tolist()
    corners = {i: _corners(shed.parts[i].shape) for i in inside}
    seen: dict[int, list[tuple[np.ndarray, np.ndarray]]] = {}
    clouds: dict[int, cKDTree] = {}
    held: dict[int, list[int]] = {}
    for group, kind in enumerate(groups.type.tolist()):
        parts = pieces.part[members[group]]
        back = inverse(groups.placement[group])
        here = compose(back, pieces.placement[members[group]])
        known = seen.setdefault(kind, [])
        if held.setdefault(kind, sorted(inner[group])) != sorted(inner[group]):
            yield f"{groups.keys[group]} holds other assemblies than its like"
        if any(np.array_equal(p, parts) and np.abs(h - here).max(initial=0.0) < 1e-6 for p, h in known):
            continue
        known.append((parts, here))
        if not len(parts):
            continue
        cloud = np.concatenate([apply(at, corners[p]) for p, at in zip(parts.tolist(), here, strict=True)])
        if sorted(known[0][0].tolist()) != sorted(parts.tolist()):
            yield f"{groups.keys[group]} holds other parts than its like"
        elif len(known) == 1:
            clouds[kind] = cKDTree(cloud)
        else:
            other = clouds[kind]
            away = max(other.query(cloud)[0].max(), cKDTree(cloud).query(other.data)[0].max())
            if away > SAME_PLACE + SAME_LENGTH + _CORNERS:
                yield f"{groups.keys[group]} differs from its like by {away:.2f} mm"


#: Half the distance of two corners of the polygon drawn for the widest tube: a tube may be turned by as much.
_CORNERS = 4.0


def _corners(shape: Shape) -> np.ndarray:
    """The corners and the middles of the holes of a shape (n, 3), mm; of fasteners the two ends of each axis."""
    if isinstance(shape, BoltGroup):
        ends = (min(d.start for d in shape.fastener.stack), max(d.end for d in shape.fastener.stack))
        return np.array([(x, y, z) for x, y in shape.points for z in ends])
    drilled = np.array([hole.centre for hole in shape.holes]).reshape(-1, 3)
    if isinstance(shape, Plate):
        outline = np.array(shape.corners)
        faces = [np.column_stack([outline, np.full(len(outline), z)]) for z in (0.0, shape.thickness)]
        return np.concatenate([*faces, drilled])
    points = shape.section.outline.outer.polygon(0.05)
    first, last = shape.axis
    sawn = (first + shape.start.offsets(points, at_end=False), last + shape.end.offsets(points, at_end=True))
    return np.concatenate([*(np.column_stack([x, points]) for x in sawn), drilled])


def eccentricities_are_true(shed: Shed, _: Description) -> Iterator[str]:
    """The eccentricity of a truss node is how far, measured upright, its webs' axes cross off the chord's."""
    bars = bars_of(shed)
    continues: dict[int, int] = {}
    for run in shed.joints:
        if run.kind is JointKind.CHORD_RIDGE:
            continues |= dict(run.pieces.tolist()) | dict(run.pieces[:, ::-1].tolist())
    for run in shed.joints:
        if run.kind is not JointKind.NODE:
            continue
        for pieces, stated in zip(run.pieces.tolist(), run.eccentricity.tolist(), strict=True):
            lengths = [pieces[0], continues.get(pieces[0], pieces[0])]
            misses = _misses(bars, lengths, pieces[1:])
            worst = max(misses, key=abs, default=0.0)
            if abs(abs(worst) - abs(stated)) > 1e-3:
                yield f"node on {shed.pieces.keys[pieces[0]]}: {stated:.2f} mm stated, {worst:.2f} mm found"


def _misses(bars: Bars, chords: list[int], webs: list[int]) -> list[float]:
    """How far each two neighbouring webs of a node cross above the axis of the chord, mm."""
    lines = [(bars.ends[i, 0][[0, 2]], bars.x[i][[0, 2]]) for i in webs]
    middles = [bars.ends[i].mean(axis=0)[0] for i in webs]
    lines = [line for _, line in sorted(zip(middles, lines, strict=True), key=lambda pair: pair[0])]
    found = []
    for (p, d), (q, e) in pairwise(lines):
        crossing = p + d * np.linalg.solve(np.column_stack([d, -e]), q - p)[0]
        found.append(float(crossing[1]) - _level(bars, chords, float(crossing[0])))
    return found


def _level(bars: Bars, chords: list[int], x: float) -> float:
    """Level of the axis of a chord of one or two lengths at x, mm: the length that x falls in, or the nearer."""

    def beyond(i: int) -> float:
        low, high = sorted(bars.ends[i, :, 0])
        return max(low - x, x - high, 0.0)

    nearest = min(chords, key=beyond)
    (x0, _, z0), (x1, _, z1) = bars.ends[nearest]
    return float(z0 + (z1 - z0) * (x - x0) / (x1 - x0))


RULES = (
    keys_are_unique,
    tables_are_sound,
    bars_end_in_joints,
    joints_are_at_ends,
    carriers_are_near,
    masses_add_up,
    equal_assemblies_are_equal,
    eccentricities_are_true,
)


def broken(shed: Shed, description: Description) -> list[str]:
    """Give what breaks any of the rules."""
    return [f"{rule.__name__}: {finding}" for rule in RULES for finding in rule(shed, description)]
