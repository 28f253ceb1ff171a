"""The shapes sections have: each gives its outline with fillets, in mm."""

from __future__ import annotations

from dataclasses import dataclass
from math import pi

from shedbim.geometry.outlines import Outline, circle, polyline, rounded
from shedbim.sections.section import Symmetry

__all__ = [
    "Angle",
    "Channel",
    "Flat",
    "FoldedChannel",
    "Hollow",
    "IShape",
    "LippedC",
    "LippedZ",
    "Pipe",
    "Round",
]


@dataclass(frozen=True)
class IShape:
    """A rolled I or H with parallel flanges: depth h, width b, web tw, flange tf, root radius r."""

    h: float
    b: float
    tw: float
    tf: float
    r: float

    @property
    def outline(self) -> Outline:
        """The I with its four root fillets."""
        y, z, w, i = self.b / 2, self.h / 2, self.tw / 2, self.h / 2 - self.tf
        corners = [
            (-y, -z, 0.0), (y, -z, 0.0), (y, -i, 0.0), (w, -i, self.r), (w, i, self.r), (y, i, 0.0),
            (y, z, 0.0), (-y, z, 0.0), (-y, i, 0.0), (-w, i, self.r), (-w, -i, self.r), (-y, -i, 0.0),
        ]  # fmt: skip
        return Outline(rounded(corners))

    @property
    def symmetry(self) -> Symmetry:
        """Half turns, and mirrors along both axes."""
        return Symmetry(turns=2, mirror=0.0)

    @property
    def thickness(self) -> float:
        """The web."""
        return self.tw


@dataclass(frozen=True)
class Channel:
    """A rolled channel with parallel flanges: depth h, width b, web tw, flange tf, root radius r."""

    h: float
    b: float
    tw: float
    tf: float
    r: float

    @property
    def outline(self) -> Outline:
        """The channel, web on the left."""
        z, i = self.h / 2, self.h / 2 - self.tf
        corners = [
            (0.0, -z, 0.0), (self.b, -z, 0.0), (self.b, -i, 0.0), (self.tw, -i, self.r),
            (self.tw, i, self.r), (self.b, i, 0.0), (self.b, z, 0.0), (0.0, z, 0.0),
        ]  # fmt: skip
        return Outline(rounded(corners))

    @property
    def symmetry(self) -> Symmetry:
        """One mirror, along y."""
        return Symmetry(turns=1, mirror=0.0)

    @property
    def thickness(self) -> float:
        """The web."""
        return self.tw


@dataclass(frozen=True)
class Angle:
    """A rolled angle: upright leg h, flat leg b, thickness t, root radius r, toe radius r2."""

    h: float
    b: float
    t: float
    r: float
    r2: float

    @property
    def outline(self) -> Outline:
        """The angle, heel at the lower left."""
        corners = [
            (0.0, 0.0, 0.0), (self.b, 0.0, 0.0), (self.b, self.t, self.r2), (self.t, self.t, self.r),
            (self.t, self.h, self.r2), (0.0, self.h, 0.0),
        ]  # fmt: skip
        return Outline(rounded(corners))

    @property
    def symmetry(self) -> Symmetry:
        """A mirror through the heel where the legs are equal."""
        return Symmetry(turns=1, mirror=pi / 4 if self.h == self.b else None)

    @property
    def thickness(self) -> float:
        """The leg."""
        return self.t


@dataclass(frozen=True)
class Hollow:
    """A square or rectangular hollow section: depth h, width b, wall t, corner radii outer ro, inner ri."""

    h: float
    b: float
    t: float
    ro: float
    ri: float

    @property
    def outline(self) -> Outline:
        """The two rounded rectangles."""
        y, z, v, w = self.b / 2, self.h / 2, self.b / 2 - self.t, self.h / 2 - self.t
        outer = rounded([(-y, -z, self.ro), (y, -z, self.ro), (y, z, self.ro), (-y, z, self.ro)])
        inner = rounded([(-v, -w, self.ri), (-v, w, self.ri), (v, w, self.ri), (v, -w, self.ri)])
        return Outline(outer, (inner,))

    @property
    def symmetry(self) -> Symmetry:
        """Quarter turns where square, else half turns; mirrors along both axes."""
        return Symmetry(turns=4 if self.h == self.b else 2, mirror=0.0)

    @property
    def thickness(self) -> float:
        """The wall."""
        return self.t


@dataclass(frozen=True)
class Pipe:
    """A circular hollow section: outside diameter d, wall t."""

    d: float
    t: float

    @property
    def outline(self) -> Outline:
        """The ring."""
        return Outline(circle(self.d), (circle(self.d - 2 * self.t, clockwise=True),))

    @property
    def symmetry(self) -> Symmetry:
        """Round."""
        return Symmetry(turns=0, mirror=0.0)

    @property
    def thickness(self) -> float:
        """The wall."""
        return self.t


@dataclass(frozen=True)
class LippedC:
    """A cold-formed lipped C: depth h, flange b, lip c, wall t, inside bend radius ri, outside dimensions."""

    h: float
    b: float
    c: float
    t: float
    ri: float

    @property
    def outline(self) -> Outline:
        """The folded strip, web on the left."""
        z, ro, ri, t = self.h / 2, self.ri + self.t, self.ri, self.t
        corners = [
            (0.0, -z, ro), (self.b, -z, ro), (self.b, -z + self.c, 0.0), (self.b - t, -z + self.c, 0.0),
            (self.b - t, -z + t, ri), (t, -z + t, ri), (t, z - t, ri), (self.b - t, z - t, ri),
            (self.b - t, z - self.c, 0.0), (self.b, z - self.c, 0.0), (self.b, z, ro), (0.0, z, ro),
        ]  # fmt: skip
        return Outline(rounded(corners))

    @property
    def symmetry(self) -> Symmetry:
        """One mirror, along y."""
        return Symmetry(turns=1, mirror=0.0)

    @property
    def thickness(self) -> float:
        """The strip."""
        return self.t


@dataclass(frozen=True)
class LippedZ:
    """A cold-formed lipped Z: depth h, upper flange b, lips c, wall t, inside bend radius ri, lower flange b2.

    Without b2 both flanges are b. The outline is drawn about the middle of the web.
    """

    h: float
    b: float
    c: float
    t: float
    ri: float
    b2: float | None = None

    @property
    def narrow(self) -> float:
        """The lower flange."""
        return self.b if self.b2 is None else self.b2

    @property
    def outline(self) -> Outline:
        """The folded strip, upper flange to the right, lower flange to the left."""
        z, ro, ri, t = self.h / 2, self.ri + self.t, self.ri, self.t
        w = t / 2
        upper, lower = (
            [
                (w, z - t, ri), (far - t, z - t, ri), (far - t, z - self.c, 0.0), (far, z - self.c, 0.0),
                (far, z, ro), (-w, z, ro),
            ]
            for far in (self.b - w, self.narrow - w)
        )  # fmt: skip
        return Outline(rounded(upper + [(-y, -zz, radius) for y, zz, radius in lower]))

    @property
    def symmetry(self) -> Symmetry:
        """No mirror: a Z is handed; half turns where the flanges are equal."""
        return Symmetry(turns=2 if self.narrow == self.b else 1, mirror=None)

    @property
    def thickness(self) -> float:
        """The strip."""
        return self.t


@dataclass(frozen=True)
class FoldedChannel:
    """A cold-formed channel without lips: depth h, flange b, wall t, inside bend radius ri, outside dimensions."""

    h: float
    b: float
    t: float
    ri: float

    @property
    def outline(self) -> Outline:
        """The folded strip, web on the left."""
        z, ro, ri, t = self.h / 2, self.ri + self.t, self.ri, self.t
        corners = [
            (0.0, -z, ro), (self.b, -z, 0.0), (self.b, -z + t, 0.0), (t, -z + t, ri),
            (t, z - t, ri), (self.b, z - t, 0.0), (self.b, z, 0.0), (0.0, z, ro),
        ]  # fmt: skip
        return Outline(rounded(corners))

    @property
    def symmetry(self) -> Symmetry:
        """One mirror, along y."""
        return Symmetry(turns=1, mirror=0.0)

    @property
    def thickness(self) -> float:
        """The strip."""
        return self.t


@dataclass(frozen=True)
class Flat:
    """A flat bar: width b upright, thickness t."""

    b: float
    t: float

    @property
    def outline(self) -> Outline:
        """The rectangle, its width along z."""
        y, z = self.t / 2, self.b / 2
        return Outline(polyline([(-y, -z), (y, -z), (y, z), (-y, z)]))

    @property
    def symmetry(self) -> Symmetry:
        """Half turns and mirrors."""
        return Symmetry(turns=4 if self.b == self.t else 2, mirror=0.0)

    @property
    def thickness(self) -> float:
        """The flat's own."""
        return self.t


@dataclass(frozen=True)
class Round:
    """A round bar of diameter d."""

    d: float

    @property
    def outline(self) -> Outline:
        """The disc."""
        return Outline(circle(self.d))

    @property
    def symmetry(self) -> Symmetry:
        """Round."""
        return Symmetry(turns=0, mirror=0.0)

    @property
    def thickness(self) -> float:
        """The diameter."""
        return self.d
