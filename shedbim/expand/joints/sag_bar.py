"""Ends of sag bars: through the web with a nut and washer on either side, or on a plate where the web slants."""

from __future__ import annotations

from dataclasses import dataclass
from math import acos, cos, pi, tan

import numpy as np
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.expand.cold_formed import STAGGER, web_faces
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.cold_formed_web import field_of, flat_half, off_middle
from shedbim.expand.joints.contract import Bolting, Connection, Fitting, Joint, Layer, Met, Welding, Work
from shedbim.expand.joints.shaping import plate_at
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.distances import edge, wrench_pitch, wrench_wall
from shedbim.fasteners.fastener import Fastener
from shedbim.fasteners.fit import Fit
from shedbim.fasteners.nuts import bar_nuts
from shedbim.fasteners.plate_stock import rounded_up
from shedbim.fasteners.welds import throat_for
from shedbim.geometry.placements import cross
from shedbim.model.roles import Role

__all__ = ["sag_bar_end"]

Array = NDArray[np.float64]

#: Thread beyond the nut, so that the courses can be pulled into line, mm (common practice).
_SPARE = 10.0
#: Plate on the end of a bar that meets the web at a slant, and its two bolts, mm (common practice).
_PLATE, _PLATE_BOLT = 6.0, 12.0
#: How far beyond a head the wrench on it reaches, mm (common practice, value from memory).
_WRENCH = 10.0
#: Air between what sits on two bars at one web, mm.
_APART = 2.0
#: Thread of sag bars: its class (value from memory).
_GRADE = "4.6"


@dataclass(frozen=True, eq=False)
class _Arrival:
    """How a bar comes to a web.

    Attributes:
        point: (3,) where its axis meets the web's face.
        normal: unit vector (3,) off that face.
        slant: angle of the bar to the normal, rad.
    """

    point: Array
    normal: Array
    slant: float


def sag_bar_end(joint: Joint, options: Connections) -> Connection:
    """Give the end of a sag bar at the web of a purlin or rail.

    Raises:
        DescriptionError: where the bar is no size of thread, or the web too small for its end plate.
    """
    course, bar = joint.members
    arrival = _arrival(course, bar)
    if arrival.slant <= options.sag_bars.slant:
        return _threaded(course, bar, arrival)
    return _on_plate(course, bar, arrival, options)


def _arrival(course: Met, bar: Met) -> _Arrival:
    side = 1.0 if float(course.y @ bar.into) > 0 else -1.0
    normal = course.y * side
    low, high = web_faces(course.section)
    face = high if side > 0 else -low
    towards = float(bar.into @ normal)
    away = face - float((bar.origin - course.origin) @ normal)
    return _Arrival(bar.origin + bar.into * (away / towards), normal, acos(min(towards, 1.0)))


def _threaded(course: Met, bar: Met, arrival: _Arrival) -> Connection:
    """The bar passes the web; nuts hold it from both sides."""
    web = course.section.profile.thickness
    nuts = _nuts(course, bar, web)
    beyond = max(disc.end for disc in nuts.stack)
    over = rounded_up(beyond + _SPARE, 5.0)
    bolting = Bolting(
        "nuts", nuts, arrival.point[None], -arrival.normal, (Layer(0, web, Fit.BAR),), Role.NUTS, thread=1
    )
    moved = float((bar.origin - arrival.point) @ arrival.normal)
    return Connection(boltings=(bolting,), works=(Work(1, -moved - over),))


def _nuts(course: Met, bar: Met, web: float) -> Fastener:
    """The nuts and washers of a bar, which must stay clear of those of the next one at the same web."""
    diameter = bar.section.profile.thickness
    try:
        nuts = bar_nuts(diameter, _GRADE, web)
    except ValueError as error:
        raise impossible(f"{field_of(course)}.sag_bar", f"no nuts for the bar: {error}") from None
    if max(disc.size for disc in nuts.stack) + _APART > 2 * STAGGER:
        raise impossible(
            f"{field_of(course)}.sag_bar", "the nuts of two sag bars meet at the web they share",
            given=bar.section.designation, allowed="a thinner bar",
        )  # fmt: skip
    return nuts


def _on_plate(course: Met, bar: Met, arrival: _Arrival, options: Connections) -> Connection:
    """A plate flat on the web, welded to the bar's slanted end and bolted above and below it."""
    web, d = course.section.profile.thickness, bar.section.profile.thickness
    fastener = bolt(_PLATE_BOLT, options.bolts.secondary_grade, _PLATE + web)
    head = -min(disc.start for disc in fastener.stack)
    # The bar leans over one of the bolts: a wrench on its head passes beside it.
    leans = (_PLATE + head + _WRENCH) * tan(arrival.slant)
    aside = d / 2 / cos(arrival.slant) + leans + wrench_wall(_PLATE_BOLT)
    place = rounded_up(max(aside, wrench_pitch(_PLATE_BOLT) / 2), 5.0)
    reach = edge(_PLATE_BOLT)
    flat = flat_half(course.section) - off_middle(course, arrival.point)
    if place + max(reach, wrench_wall(_PLATE_BOLT)) > flat:
        raise impossible(
            f"{field_of(course)}.section", "the end plate of a sag bar over the ridge finds no room on the web",
            given=course.section.designation,
            allowed=f"{2 * (place + reach - flat):.0f} mm more of depth, or a flatter roof",
        )  # fmt: skip
    x = course.x if float(cross(course.x, course.z) @ arrival.normal) > 0 else -course.x
    corners = [
        (-reach, -place - reach),
        (reach, -place - reach),
        (reach, place + reach),
        (-reach, place + reach),
    ]
    plate, frame = plate_at(arrival.point, x, course.z, corners, _PLATE)
    outer = arrival.point + arrival.normal * _PLATE
    points = np.array([outer + course.z * place * side for side in (-1.0, 1.0)])
    layers = (Layer("end plate", _PLATE), Layer(0, web))
    back = _PLATE / cos(arrival.slant) + float((arrival.point - bar.origin) @ bar.into)
    girth = pi * d * (1.0 + 1.0 / cos(arrival.slant)) / 2
    return Connection(
        (Fitting("end plate", Role.END_PLATE, plate, frame, owner=1),),
        (Bolting("bolts", fastener, points, -arrival.normal, layers),),
        (Welding((1, "end plate"), throat_for(_PLATE), girth, all_round=True),),
        (Work(1, back),),
    )
