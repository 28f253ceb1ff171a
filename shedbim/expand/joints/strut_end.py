"""Ends of struts: a fin plate on the web or face of the carrier, and the strut's own fin bolted beside it.

In the place of that fin may be the end of the tube itself, pressed flat; beside the end of a rafter, where the fins
do not lie in the middle of the strut, it has a cap and a fin all the same. Fins stand upright and within the height
of the strut, so that the gussets of braces pass above and below, and to the left and right.

Axes of an end: ``out`` along the strut, away from the carrier, 0 where the strut ended before; ``up``; ``aside``,
square to both, towards the side that the carrier's fin is on. mm.
"""

from __future__ import annotations

import numpy as np
from manifold3d import CrossSection
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.expand.clearances import STRUT_END_GAP
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.angle_carrier import flat_of_leg, leg_face
from shedbim.expand.joints.bolt_lines import BoltLine, tube_line
from shedbim.expand.joints.cap import cap_thickness
from shedbim.expand.joints.contract import FAR, Bolting, Connection, Fitting, Joint, Layer, Met, Welding
from shedbim.expand.joints.flattened import flattened
from shedbim.expand.joints.shaping import plate_at
from shedbim.expand.joints.tube_ends import Lap, TubeEnd, tube_end
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.welds import throat_for
from shedbim.geometry.placements import cross
from shedbim.model.roles import Role
from shedbim.sections.profiles import Angle, Hollow, IShape, Pipe

__all__ = ["FinOnCarrier", "strut_end"]

Array = NDArray[np.float64]

#: Fins keep this from the end of a rafter, where its end plate is welded; other ends are mitres (value from memory).
_END_ROOM = 12.0
#: From the edge of a fin to a root fillet or a rounded corner.
_FLAT_ROOM = 3.0
#: A bolt is put in from the side: between its fin and a flange there is this more than it is long.
_FINGERS = 25.0
#: Lengths along the strut are whole steps of this.
_STEP = 5.0
#: The weld of a fin on its carrier is at least this share of the fin's height.
_LEAST_WELD = 0.6
#: What is left of a strut between its ends, least (common practice).
_LEAST_STRUT = 100.0


def strut_end(joint: Joint, options: Connections) -> Connection:
    """Give both fins, the tube's end and the bolts of a strut on its carrier."""
    carrier, strut = joint.members
    return FinOnCarrier(carrier, strut, options).connection()


class FinOnCarrier:
    """One end of a strut or tie; every step reads what the steps before it set."""

    def __init__(self, carrier: Met, strut: Met, options: Connections) -> None:
        self.carrier, self.strut, self.options = carrier, strut, options
        self.thickness = options.struts.thickness
        self.out = strut.into
        self.up = strut.z
        self.line = self._line()
        form, option = options.tube_ends.struts, "connections.tube_ends.struts"
        self.flat = flattened(strut, self.line, form, option)
        self.side = self._side()
        self.aside = cross(self.up, self.out) * self.side
        self.gap = self._gap()
        if self.gap != self._usual_gap:
            self.flat = None
        self.start = self._start()

    def connection(self) -> Connection:
        """Everything the end adds, and how far the strut moves back."""
        end = self._tube_end()
        room = self.strut.to_start + self.strut.to_end
        if room < FAR and room - 2 * end.work.taken < _LEAST_STRUT:
            raise impossible(
                "building.bays", f"no room for the {self.strut.role.word} between its two ends",
                given=self.strut.section.designation, allowed="a longer bay, or fewer or smaller bolts",
            )  # fmt: skip
        fin, weld = self._carrier_fin()
        layers = (Layer("carrier fin", self.thickness), self._layer)
        fastener = bolt(self.line.diameter, self.options.bolts.grade, self._grip)
        outer = self.gap + self.thickness
        points = np.array([self._point(self.start + x, 0.0, outer) for x in self.line.places])
        bolts = Bolting("bolts", fastener, points, -self.aside, layers)
        return Connection((fin, *end.fittings), (bolts,), (weld, *end.welds), (end.work,))

    @property
    def reach(self) -> float:
        """How far plates, bolts and strut reach from the strut's axis to the sides, mm: a diameter covers a head."""
        section, flat = self.strut.section, 0.0 if self.flat is None else self.flat.half
        steel = max(section.width / 2, section.height / 2, flat)
        return max(steel, self.gap + self.thickness + self.line.diameter)

    @property
    def _layer(self) -> Layer:
        """What of the strut is bolted: its fin, or the tube itself."""
        return Layer("fin", self.thickness) if self.flat is None else Layer(1, self.flat.thickness)

    @property
    def _grip(self) -> float:
        return self.thickness + self._layer.thickness

    @property
    def _usual_gap(self) -> float:
        """From the strut's axis to the face of the carrier's fin where the other lies in the middle of the strut."""
        return self._layer.thickness / 2

    @property
    def _field(self) -> str:
        role = self.strut.role
        if role is Role.TIE:
            return "bracing.ties"
        return "bracing.eaves_strut" if role in (Role.EAVES_STRUT, Role.VALLEY_STRUT) else "bracing.struts"

    def _point(self, out: float, up: float, aside: float) -> Array:
        """The point (3,) in joint axes."""
        return self.strut.origin + self.out * out + self.up * up + self.aside * aside

    def _line(self) -> BoltLine:
        chosen = self.options.struts
        line = tube_line(self.strut.section, int(chosen.bolts), chosen.size)
        if line is None:
            raise impossible(
                f"{self._field}.section", f"the end of the {self.strut.role.word} is too small for bolts",
                given=f"{self.strut.section.designation}, {chosen.size or 'M12'}", allowed="a larger tube",
            )  # fmt: skip
        return line

    # Where the fins stand

    @property
    def _upright(self) -> bool:
        """Whether the carrier is a column."""
        return abs(float(self.carrier.x @ self.up)) > 0.7

    def _ends(self, direction: Array) -> list[float]:
        """How far from the strut's axis the two ends of the carrier are along a unit vector; infinite where far."""
        found = []
        _, low, _, high = self.carrier.section.outline.bounds
        web = np.array([[0.0, low], [0.0, high]])
        for reach, cut, at_end in (
            (-self.carrier.to_start, self.carrier.start, False),
            (self.carrier.to_end, self.carrier.end, True),
        ):
            if abs(reach) >= FAR:
                run = float(self.carrier.x @ direction) * (1.0 if at_end else -1.0)
                found.append(float(np.copysign(np.inf, run)))
                continue
            x = reach + cut.offsets(web, at_end=at_end)
            corners = [self.carrier.point(float(a), 0.0, float(z)) for a, (_, z) in zip(x, web, strict=True)]
            places = [float((corner - self.strut.origin) @ direction) for corner in corners]
            middle = float((self.carrier.point(0.0, 0.0, 0.0) - self.strut.origin) @ direction)
            found.append(min(places) if sum(places) / 2 > middle else max(places))
        return found

    def _side(self) -> float:
        """The side of the strut's axis that the carrier's fin is on: where the carrier runs on."""
        if self._upright:
            return 1.0
        low, high = sorted(self._ends(cross(self.up, self.out)))
        return 1.0 if high >= -low else -1.0

    def _gap(self) -> float:
        """From the strut's axis to the face where the fins lie on each other: more beside the end of a rafter."""
        usual = self._usual_gap
        if self._upright:
            return usual
        nearest = min(self._ends(self.aside))
        if isinstance(self.carrier.section.profile, IShape):
            nearest += _END_ROOM
        return usual if nearest <= usual else float(np.ceil(nearest / _STEP) * _STEP)

    def _start(self) -> float:
        """Where the lap begins: where the strut ended, or past the flanges where bolts cannot be put in between."""
        profile = self.carrier.section.profile
        if not (self._upright and isinstance(profile, IShape)):
            return 0.0
        tips = profile.b / 2 - self._from_axis() + STRUT_END_GAP
        if tips <= _STEP:
            return 0.0
        fastener = bolt(self.line.diameter, self.options.bolts.grade, self._grip)
        room = profile.h / 2 - profile.tf - self.gap - self.thickness
        if room >= fastener.length + _FINGERS:
            return 0.0
        return float(np.ceil(tips / _STEP) * _STEP)

    def _from_axis(self) -> float:
        """How far the strut's end was from the carrier's axis, along the strut."""
        return float((self.strut.origin - self.carrier.origin) @ self.out)

    # What is made

    def _tube_end(self) -> TubeEnd:
        lap = Lap(
            self._point(self.start, 0.0, 0.0), self.out, self.up * self.side, self.line,
            shift=self._usual_gap - self.gap,
        )  # fmt: skip
        cap = cap_thickness(self.strut.section, self.options.caps)
        form = self.options.tube_ends.struts
        return tube_end(self.strut, 1, lap, self.thickness, form, cap, flat=self.flat)

    def _face(self) -> float:
        """``out`` of the carrier's web or face."""
        profile = self.carrier.section.profile
        if isinstance(profile, Pipe):
            beside = 0.0 if not self._upright else abs(self._lateral())
            return float(np.sqrt((profile.d / 2) ** 2 - beside**2)) - self._from_axis()
        if isinstance(profile, Angle):
            return leg_face(self.carrier) - self._from_axis()
        half = profile.tw / 2 if isinstance(profile, IShape) else self.carrier.section.width / 2
        return half - self._from_axis()

    def _lateral(self) -> float:
        """How far the nearer face of the carrier's fin lies beside the carrier's axis."""
        axis = float((self.carrier.origin - self.strut.origin) @ self.aside)
        return min((self.gap - axis, self.gap + self.thickness - axis), key=abs)

    def _levels(self) -> tuple[float, float]:
        """From where to where the carrier offers a flat face for the fin, upwards from the strut's axis."""
        profile = self.carrier.section.profile
        if self._upright:
            ends = sorted(self._ends(self.up))
            return ends[0], ends[1]
        if isinstance(profile, IShape):
            half = profile.h / 2 - profile.tf - profile.r
        elif isinstance(profile, Hollow):
            half = profile.h / 2 - profile.ro
        else:
            half = 0.0
        rise = float(self.carrier.x @ self.up) / float(self.carrier.x @ self.aside)
        upright = abs(float(self.carrier.z @ self.up))
        axis = self.carrier.origin - self.strut.origin
        middle = [
            float(axis @ self.up) + rise * (aside - float(axis @ self.aside))
            for aside in (self.gap, self.gap + self.thickness)
        ]
        low, high = flat_of_leg(self.carrier) if isinstance(profile, Angle) else (-half, half)
        if float(self.carrier.z @ self.up) < 0:
            low, high = -high, -low
        return max(middle) + low / upright, min(middle) + high / upright

    def _carrier_fin(self) -> tuple[Fitting, Welding]:
        """The plate on the carrier: as high as the strut's fin, drawn to the flat of the carrier where need be."""
        half, face = self.line.side, self._face()
        low, high = self._levels()
        low, high = low + _FLAT_ROOM, high - _FLAT_ROOM
        least = _LEAST_WELD * 2 * half
        bottom, top = max(low, -half), min(high, half)
        bottom, top = max(low, min(bottom, top - least)), min(high, max(top, bottom + least))
        if top - bottom < least - 1e-6 or bottom > half or top < -half:
            raise impossible(
                f"{self._field}.section",
                f"the fin of the {self.strut.role.word} finds too little of {self.carrier.section.designation}",
                given=self.strut.section.designation, allowed="smaller struts, or deeper steel to carry them",
            )  # fmt: skip
        end = self.start + self.line.lap
        # It keeps within the flat, and so between flanges, up to the gap before the lap.
        inner = max(face, self.start - STRUT_END_GAP / 2)
        wanted = [(face, bottom), (face, top), (inner, bottom), (inner, top)]
        wanted += [(self.start, -half), (self.start, half), (end, -half), (end, half)]
        # Straight lines to the lap would run through a flange that ends the flat.
        beside = [((face - 1.0, -FAR), (inner, bottom)), ((face - 1.0, top), (inner, FAR))]
        flanges = [CrossSection([np.array([(a, c), (b, c), (b, d), (a, d)])]) for (a, c), (b, d) in beside]
        outline = CrossSection.hull_points(wanted) - flanges[0] - flanges[1]
        (corners,) = outline.simplify(1e-3).to_polygons()
        # The plate's own z axis, out x up, is against ``aside`` on one side and along it on the other.
        foot = self.gap + (self.thickness if self.side > 0 else 0.0)
        plate, frame = plate_at(self._point(0.0, 0.0, foot), self.out, self.up, corners, self.thickness)
        throat = throat_for(min(self.thickness, self.carrier.section.profile.thickness), self.carrier.grade)
        weld = Welding(("carrier fin", 0), throat, 2 * (top - bottom))
        return Fitting("carrier fin", Role.FIN_PLATE, plate, frame), weld
