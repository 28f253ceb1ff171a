"""What a kind of joint is given and what it gives back.

Joint axes: the building's axes with the origin at the work point, mm. A joint is worked out once for each
distinct configuration and then placed wherever that configuration stands, so it knows no keys and no lines.

Glossary:
    member    a bar that meets here; the first carries the rest. Named by its number in the joint
    fitting   a plate or a short bar that the joint adds. Named by a word of the joint's own
    ref       one of the two: a member's number or a fitting's name
    layer     one thickness that a bolt passes through
    work      what the joint does to a member: its end moved, notches; holes follow from the bolts
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from shedbim.fasteners.fastener import Fastener
from shedbim.fasteners.fit import Fit
from shedbim.geometry.placements import Placements
from shedbim.model.bars import Bar, EndCut
from shedbim.model.holes import Hole, Notch
from shedbim.model.joints import At, JointKind
from shedbim.model.plates import Plate
from shedbim.model.pressed_ends import Pressed
from shedbim.model.roles import Role
from shedbim.sections.section import Section

__all__ = [
    "FAR",
    "NEAR",
    "Bolting",
    "Connection",
    "Fitting",
    "Joint",
    "Layer",
    "Met",
    "Ref",
    "Welding",
    "Work",
]

Array = NDArray[np.float64]

#: What lies farther than this along a member is no concern of a joint, mm.
FAR = 3000.0
#: Joints whose work points are nearer than this to one another on one piece are neighbours, mm.
NEAR = 1500.0

Ref = int | str


@dataclass(frozen=True, eq=False)
class Met:
    """A member as the joint sees it.

    Attributes:
        frame: (3, 4) the bar's own axes in joint axes; the origin is a point of its centroid axis: where the
            axis ends (at START, END), or the point of the axis nearest the work point (ALONG).
        to_start, to_end: how far the axis runs from that origin against x and along x, mm; FAR for more.
        start, end: cuts of its ends; square where these are FAR.
    """

    role: Role
    section: Section
    grade: str
    finish: str
    at: At
    frame: Placements
    to_start: float
    to_end: float
    start: EndCut
    end: EndCut

    @property
    def x(self) -> Array:
        """Unit vector (3,) along the bar, start to end."""
        return self.frame[:, 0]

    @property
    def y(self) -> Array:
        """Unit vector (3,) of the section's y axis."""
        return self.frame[:, 1]

    @property
    def z(self) -> Array:
        """Unit vector (3,) of the section's z axis: up the web."""
        return self.frame[:, 2]

    @property
    def origin(self) -> Array:
        """The point (3,) of its axis that the frame is at."""
        return self.frame[:, 3]

    @property
    def into(self) -> Array:
        """Unit vector (3,) from the end that meets here into the bar; along x where it runs through."""
        return -self.x if self.at == At.END else self.x

    @property
    def cut(self) -> EndCut:
        """The cut of the end that meets here; that of the start where it runs through."""
        return self.end if self.at == At.END else self.start

    def point(self, x: float, y: float, z: float) -> Array:
        """The point (3,) in joint axes of (x, y, z) in the frame."""
        placed: Array = self.frame[:, :3] @ np.array([x, y, z]) + self.frame[:, 3]
        return placed

    def local(self, point: Array) -> Array:
        """The coordinates (3,) in the frame of a point in joint axes."""
        seen: Array = (point - self.frame[:, 3]) @ self.frame[:, :3]
        return seen


@dataclass(frozen=True, eq=False)
class Joint:
    """The members that meet, the carrier first, and other members near by that fittings keep clear of.

    ``neighbours`` are members fastened to the carrier within ``NEAR`` of the work point by other joints; given
    only to the kinds that ask for them in the table.
    """

    kind: JointKind
    members: tuple[Met, ...]
    neighbours: tuple[Met, ...] = ()


@dataclass(frozen=True, eq=False)
class Fitting:
    """A plate or a short bar the joint adds, without the holes that its bolts will ask for.

    Attributes:
        name: unique in the joint and stable: it becomes the end of the piece's key.
        frame: (3, 4) the shape's own frame in joint axes.
        owner: the member whose grade and finish it takes.
    """

    name: str
    role: Role
    shape: Plate | Bar
    frame: Placements
    owner: int = 0
    grade: str = ""


@dataclass(frozen=True, eq=False)
class Layer:
    """One thickness that bolts pass through: of what, how thick, the hole in it, the way a slot runs (3,)."""

    of: Ref
    thickness: float
    fit: Fit = Fit.NORMAL
    along: Array | None = None


@dataclass(frozen=True, eq=False)
class Bolting:
    """Equal fasteners through the same layers; the holes in every layer follow.

    Attributes:
        name: unique in the joint: ``bolts``, ``anchors``.
        fastener: the item, chosen for the grip: the sum of the layers.
        points: (n, 3) on the outer face of the first layer, joint axes.
        axis: unit vector (3,) from head to nut, square to all layers.
        layers: from head to nut, face to face without gaps.
        thread: of nuts alone, the member whose thread they turn on.
    """

    name: str
    fastener: Fastener
    points: Array
    axis: Array
    layers: tuple[Layer, ...]
    role: Role = Role.BOLTS
    thread: Ref | None = None


@dataclass(frozen=True)
class Welding:
    """A weld between two things of the joint; see ``model.welds.Weld``."""

    between: tuple[Ref, Ref]
    throat: float
    length: float
    form: str = "fillet"
    site: bool = False
    all_round: bool = False


@dataclass(frozen=True, eq=False)
class Work:
    """What the joint does to a member besides the holes of its bolts.

    Attributes:
        of: number of the member.
        set_back: how far its end that meets here is moved back along its axis, mm; negative: moved on.
        holes, notches: in the member's ``frame``, x from its origin.
        pressed: what its end that meets here is pressed to, seen in its ``frame``; None for nothing.
    """

    of: int
    set_back: float = 0.0
    holes: tuple[Hole, ...] = ()
    notches: tuple[Notch, ...] = ()
    pressed: Pressed | None = None

    @property
    def taken(self) -> float:
        """How far from where the end was the member is not yet its own section, mm."""
        return self.set_back + (0.0 if self.pressed is None else self.pressed.length)


@dataclass(frozen=True, eq=False)
class Connection:
    """Everything a joint adds and does."""

    fittings: tuple[Fitting, ...] = ()
    boltings: tuple[Bolting, ...] = ()
    welds: tuple[Welding, ...] = ()
    works: tuple[Work, ...] = field(default=())
