"""One braced panel on the bench: two carriers, two struts, the braces between them, and all their joints made.

Axes: the carriers run along ``u`` at y = 0 and y = the bay, the struts along y at u = 0 and u = the width. Joint
axes are the building's, mm. Solids are cut and drilled by the tests' own rules.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field, replace
from itertools import combinations

import joint_bench
import joint_solids
import numpy as np
from manifold3d import Manifold

from shedbim.description.connections import Connections
from shedbim.expand.braces import BraceEnd, Panel, braces, strut_reach
from shedbim.expand.clearances import BRACE_SET_BACK, STRUT_END_GAP
from shedbim.expand.joints.contract import Connection, Joint, Met
from shedbim.expand.joints.table import JOINTS
from shedbim.expand.kits import Meets, Member
from shedbim.expand.sticks import stick
from shedbim.fasteners.distances import wrench_wall
from shedbim.fasteners.holes import hole_diameter
from shedbim.geometry.placements import Placements, apply
from shedbim.model.bodies import notch_body
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.sections.catalogue import section

__all__ = ["Made", "PanelCase", "corners_of", "faults", "made_panel", "mirrored", "panel_solids"]

_LONG = 2500.0
#: Chords of round steel leave it by this, mm: less than the air of a slot or a hole.
_CHORDS = 0.1


@dataclass(frozen=True)
class PanelCase:
    """What a panel is built of.

    Attributes:
        carriers: sections on the first and on the second line.
        pitch: of the carriers of a roof panel, radians; None for a wall panel between columns.
        pattern: ``crossed`` or ``single``.
    """

    carriers: tuple[str, str]
    brace: str
    strut: str
    width: float
    bay: float
    pitch: float | None = 0.0
    pattern: str = "crossed"
    options: Connections = field(default_factory=Connections)


@dataclass(frozen=True, eq=False)
class Made:
    """A joint of the panel with what was made for it: names of its members and its place (3,)."""

    joint: Joint
    names: tuple[str, ...]
    point: np.ndarray
    connection: Connection


def made_panel(case: PanelCase) -> tuple[dict[str, Member], list[Made]]:
    """Give the members by name, and every joint of the panel."""
    u = np.array([0.0, 0.0, 1.0])
    normal = np.array([1.0, 0.0, 0.0])
    if case.pitch is not None:
        u = np.array([np.cos(case.pitch), 0.0, np.sin(case.pitch)])
        normal = np.array([-u[2], 0.0, u[0]])
    y = np.array([0.0, 1.0, 0.0])
    members, meetings = _steel(case, u, normal, y)
    ends = {}
    for j, line in enumerate((0.0, case.bay)):
        inwards = y if j == 0 else -y
        for i, along in enumerate((u, -u)):
            at = u * case.width * i + y * line
            side = section(case.carriers[j]).width / 2 + BRACE_SET_BACK
            stand_off = strut_reach(section(case.strut), u) + BRACE_SET_BACK
            planes = ((at + inwards * side, inwards), (at + along * stand_off, along))
            ends[i, j] = BraceEnd(at, Meets(f"carrier {j}", At.ALONG), planes)
    corners = (ends[0, 0], ends[1, 1], ends[1, 0], ends[0, 1])
    role = Role.WALL_BRACE if case.pitch is None else Role.ROOF_BRACE
    made, joints = braces(
        Panel("brace", corners, normal), case.pattern, section(case.brace), role, "S355", "painted"
    )
    members |= {member.name: member for member in made}
    meetings += [(meeting.kind, meeting.point, meeting.pieces) for meeting in joints]
    return members, [_made(case, members, meetings, number) for number in range(len(meetings))]


def _steel(case: PanelCase, u: np.ndarray, normal: np.ndarray, y: np.ndarray):
    """Carriers and struts, and the meetings of the struts."""
    members, meetings = {}, []
    wall = case.pitch is None
    for j, name in enumerate(case.carriers):
        start, end = u * -_LONG + y * case.bay * j, u * (case.width + _LONG) + y * case.bay * j
        bar, place = stick(section(name), start, end, normal)
        role = Role.COLUMN if wall else Role.RAFTER
        members[f"carrier {j}"] = Member(f"carrier {j}", role, bar, place, "S355", "painted")
    for i in range(2):
        at, name = u * case.width * i, f"strut {i}"
        stops = [section(carrier).width / 2 + STRUT_END_GAP for carrier in case.carriers]
        bar, place = stick(section(case.strut), at + y * stops[0], at + y * (case.bay - stops[1]), (0, 0, 1))
        members[name] = Member(name, Role.STRUT, bar, place, "S355", "painted")
        for j, end in enumerate((At.START, At.END)):
            pieces = (Meets(f"carrier {j}", At.ALONG), Meets(name, end))
            meetings.append((JointKind.STRUT_END, at + y * case.bay * j, pieces))
    return members, meetings


def _made(case: PanelCase, members: dict[str, Member], meetings: list, number: int) -> Made:
    kind, point, pieces = meetings[number]
    carrier = pieces[0].name

    def met(piece: Meets) -> Met:
        m = members[piece.name]
        return joint_solids.met(m.role, m.bar, m.placement, piece.at, point)

    near = [
        other[1]
        for k, (_, at, other) in enumerate(meetings)
        if k != number and other[0].name == carrier and np.linalg.norm(at - point) < 1500.0
    ]
    joint = Joint(kind, tuple(met(each) for each in pieces), tuple(met(each) for each in near))
    connection = JOINTS[kind].make(joint, case.options)
    return Made(joint, tuple(each.name for each in pieces), point, connection)


def _moved(placement: Placements, point: np.ndarray) -> Placements:
    placed = placement.copy()
    placed[:, 3] += point
    return placed


def panel_solids(members: dict[str, Member], joints: list[Made]) -> dict[str, Manifold]:
    """Everything in place: members cut, notched and drilled, plates drilled, bolts."""
    ends: dict[str, list[float]] = {name: [0.0, 0.0] for name in members}
    for made in joints:
        for work in made.connection.works:
            at = made.joint.members[work.of].at
            if work.set_back:
                ends[made.names[work.of]][at] += work.set_back
    found = {}
    for name, member in members.items():
        first, last = member.bar.axis
        start, end = first + ends[name][0], last - ends[name][1]
        body = joint_bench.prism(member.bar.section.outline.polygons(_CHORDS), start, end)
        found[name] = body.transform(member.placement)
    for k, made in enumerate(joints):
        for work in made.connection.works:
            for notch in work.notches:
                cut = notch_body(notch).transform(made.joint.members[work.of].frame)
                found[made.names[work.of]] -= cut.translate(made.point.tolist())
        for fitting in made.connection.fittings:
            body = joint_bench.fitting_solid(fitting.shape, fitting.frame)
            found[f"{k} {fitting.name}"] = body.translate(made.point.tolist())
    for k, made in enumerate(joints):
        for bolting in made.connection.boltings:
            bolts = []
            for point in bolting.points + made.point:
                depth = 0.0
                for layer in bolting.layers:
                    size = hole_diameter(bolting.fastener.diameter, layer.fit)
                    start = point + bolting.axis * (depth - 0.3)
                    drill = joint_bench.cylinder(start, bolting.axis, size, layer.thickness + 0.6)
                    name = made.names[layer.of] if isinstance(layer.of, int) else f"{k} {layer.of}"
                    found[name] -= drill
                    depth += layer.thickness
                bolts += [
                    joint_bench.fastener_disc(point, bolting.axis, disc) for disc in bolting.fastener.stack
                ]
            found[f"{k} {bolting.name}"] = Manifold.compose(bolts)
    return found


def _shared(one: Manifold, other: Manifold) -> float:
    """The space that two solids share, mm3; at once where their boxes are apart."""
    a, b = np.array(one.bounding_box()), np.array(other.bounding_box())
    if (a[:3] > b[3:]).any() or (b[:3] > a[3:]).any():
        return 0.0
    return float((one ^ other).volume())


def faults(case: PanelCase) -> Iterator[str]:
    """What is wrong with a panel: see the module's tests."""
    members, joints = made_panel(case)
    bodies = panel_solids(members, joints)
    for (a, one), (b, two) in combinations(bodies.items(), 2):
        shared = _shared(one, two)
        if shared > 100.0:
            yield f"{a} and {b} share {shared / 1000:.2f} cm3"
    for k, made in enumerate(joints):
        yield from _joint_faults(k, made, members, bodies)


def _joint_faults(
    k: int, made: Made, members: dict[str, Member], bodies: dict[str, Manifold]
) -> Iterator[str]:
    connection = made.connection

    def name(ref: object) -> str:
        return made.names[ref] if isinstance(ref, int) else f"{k} {ref}"

    reached = set()
    for weld in connection.welds:
        gap = bodies[name(weld.between[0])].min_gap(bodies[name(weld.between[1])], 20.0)
        if gap > 0.5:
            yield f"a weld of {name(weld.between[0])} and {name(weld.between[1])} bridges {gap:.2f} mm"
        if weld.length <= 0 or weld.throat < 3.0:
            yield f"no weld between {name(weld.between[0])} and {name(weld.between[1])}"
        reached |= set(weld.between)
    for bolting in connection.boltings:
        reached |= {layer.of for layer in bolting.layers}
        if abs(sum(layer.thickness for layer in bolting.layers) - bolting.fastener.grip) > 1e-9:
            yield f"grip of {k} {bolting.name}"
        yield from _bolt_faults(name, made, bolting, bodies)
    for ref in [*range(len(made.names)), *(fitting.name for fitting in connection.fittings)]:
        if ref not in reached:
            yield f"nothing holds {name(ref)}"


def _bolt_faults(name, made: Made, bolting, bodies: dict[str, Manifold]) -> Iterator[str]:
    """Edges 1.2 d0 and pitches 2.2 d0 (EN 1993-1-8 Table 3.3), layers face to face, room for a wrench."""
    d = bolting.fastener.diameter
    size = hole_diameter(d)
    points = bolting.points + made.point
    total = bolting.fastener.grip
    mine = {name(layer.of) for layer in bolting.layers}
    for a, b in combinations(points, 2):
        if np.linalg.norm(a - b) < 2.2 * size - 1e-6:
            yield f"bolts of {sorted(mine)} too near to each other"
    for point in points:
        depth = 0.0
        for layer in bolting.layers:
            body = bodies[name(layer.of)]
            ring = joint_bench.cylinder(
                point + bolting.axis * depth, bolting.axis, 2.4 * size, layer.thickness
            )
            hole = joint_bench.cylinder(
                point + bolting.axis * (depth - 1), bolting.axis, size, layer.thickness + 2
            )
            ring = ring - hole
            if (ring ^ body).volume() < 0.995 * ring.volume():
                yield f"a bolt too near to an edge of {name(layer.of)}"
            if (hole ^ body).volume() > 1.0:
                yield f"a bolt without a hole in {name(layer.of)}"
            depth += layer.thickness
        for start, length in ((-0.7 * d, 0.7 * d - 0.2), (total + 0.2, 1.2 * d)):
            wrench = joint_bench.cylinder(
                point + bolting.axis * start, bolting.axis, 2 * wrench_wall(d), length
            )
            for other, body in bodies.items():
                if "bolts" not in other and _shared(wrench, body) > 100.0:
                    yield f"no room for a wrench between {other} and the bolts of {sorted(mine)}"


def mirrored(made: Made, axis: int) -> Joint:
    """The joint as its mirror image along an axis of the building: bars run the other way along their axes."""
    return Joint(
        made.joint.kind,
        tuple(_mirror(met, axis) for met in made.joint.members),
        tuple(_mirror(met, axis) for met in made.joint.neighbours),
    )


def _mirror(met: Met, axis: int) -> Met:
    assert met.start.is_square
    assert met.end.is_square
    frame = met.frame.copy()
    frame[axis] *= -1
    frame[:, 0] *= -1
    at = {At.START: At.END, At.END: At.START, At.ALONG: At.ALONG}[met.at]
    return replace(met, at=at, frame=frame, to_start=met.to_end, to_end=met.to_start)


def corners_of(connection: Connection, name: str) -> np.ndarray:
    """The corners (n, 3) of the middle plane of a plate, sorted."""
    fitting = next(each for each in connection.fittings if each.name == name)
    local = [(x, y, fitting.shape.thickness / 2) for x, y in fitting.shape.corners]
    points = apply(fitting.frame, local)
    return points[np.lexsort(np.round(points, 3).T)]
