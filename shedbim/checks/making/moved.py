"""Whether what leaves the shop fits a lorry, a crane and, where it is dipped, a zinc bath."""

from __future__ import annotations

from collections.abc import Iterator

from shedbim.checks.finding import Hit
from shedbim.checks.making.bought import COLD_FORMED
from shedbim.checks.making.packages import Package, Size, packages
from shedbim.checks.stability.places import a_or_an
from shedbim.checks.subject import Subject
from shedbim.model.bars import Bar

__all__ = ["moved"]

_ON_THE_ROAD = "{limit} goes on the road without special permission."
_SHORTER = "Divide it into shorter parts: frames.roof.longest for trusses, building.spans, building.bays."
_SMALLER = "Make it less deep, or ship it in parts: frames.roof.depth, building.roof.pitch."


def moved(subject: Subject) -> Iterator[Hit]:
    """Give the assemblies and loose bars that are too long, too bulky or too heavy to be moved as usual."""
    for package in packages(subject):
        yield from _shipped(subject, package)
        yield from _dipped(subject, package)


def _hit(
    subject: Subject,
    package: Package,
    code: str,
    says: str,
    change: str,
    name: str,
    value: float,
    limit: float,
) -> Iterator[Hit]:
    """The hits of every occurrence of a package over a limit."""
    unit = "t" if code == "too-heavy-to-lift" else "m"
    source = subject.criteria.limit(name)[1]
    for piece in package.pieces:
        yield Hit(
            code,
            (piece,),
            subject.point(piece),
            says,
            f"{change} Or set checks.limits.{name}.",
            value,
            limit,
            unit,
            source,
            about=package.kind,
        )


def _shipped(subject: Subject, package: Package) -> Iterator[Hit]:
    kind = package.kind
    limit = subject.criteria.limit("ship_length")[0]
    length, depth, thickness = _size(subject, package, "ship_length", "ship_width", "ship_height")
    if length > limit:
        says = f"{a_or_an(kind)} is {{value}} long as it leaves the shop; {_ON_THE_ROAD}"
        yield from _hit(subject, package, "too-long-to-ship", says, _SHORTER, "ship_length", length, limit)
    over = _over(subject, "ship_width", "ship_height", depth, thickness)
    if over is not None:
        name, value, limit = over
        says = f"{a_or_an(kind)} is {{value}} across as it leaves the shop, laid as it takes least room; {_ON_THE_ROAD}"
        yield from _hit(subject, package, "too-bulky-to-ship", says, _SMALLER, name, value, limit)
    limit = subject.criteria.limit("lift_mass")[0]
    if package.mass > limit:
        says = f"{a_or_an(kind)} weighs {{value}} as it leaves the shop; {{limit}} is lifted in one go."
        yield from _hit(
            subject, package, "too-heavy-to-lift", says, _SHORTER, "lift_mass", package.mass, limit
        )


def _size(subject: Subject, package: Package, length: str, width: str, height: str) -> Size:
    """The size of a package; only what does not fit as it lies is turned to find its smallest box."""
    rough = package.rough_size
    if rough[0] <= subject.criteria.limit(length)[0] and _over(subject, width, height, *rough[1:]) is None:
        return rough
    return package.size


def _over(
    subject: Subject, width: str, height: str, depth: float, thickness: float
) -> tuple[str, float, float] | None:
    """The limit that a cross-section exceeds however it is turned: its name, the size and the limit."""
    (greater, more), (less, fewer) = sorted(
        ((subject.criteria.limit(name)[0], name) for name in (width, height)), reverse=True
    )
    if depth > greater:
        return more, depth, greater
    return (fewer, thickness, less) if thickness > less else None


def _dipped(subject: Subject, package: Package) -> Iterator[Hit]:
    """What is hot dip galvanized after it was made; strip is coated before."""
    parts = [subject.shed.parts[number] for number in set(package.parts)]
    bars = [part for part in parts if isinstance(part.shape, Bar) and part.finish == "galvanized"]
    if all(isinstance(part.bar.section.profile, COLD_FORMED) for part in bars):
        return
    limit = subject.criteria.limit("bath_length")[0]
    length, depth, thickness = _size(subject, package, "bath_length", "bath_width", "bath_depth")
    says = f"{a_or_an(package.kind)} to be galvanized is {{value}} {{way}}; the bath takes {{limit}}."
    change = "Divide it into smaller parts (frames.roof.longest), or paint it (finish.frames)."
    if length > limit:
        yield from _hit(
            subject,
            package,
            "too-big-for-bath",
            says.replace("{way}", "long"),
            change,
            "bath_length",
            length,
            limit,
        )
        return
    over = _over(subject, "bath_width", "bath_depth", depth, thickness)
    if over is not None:
        name, value, limit = over
        yield from _hit(
            subject, package, "too-big-for-bath", says.replace("{way}", "across"), change, name, value, limit
        )
