"""What of the building moves freely: findings of the frame model of the whole."""

from __future__ import annotations

from collections.abc import Iterator

from shedbim.checks.finding import Hit
from shedbim.checks.stability.compatibility import compatibility
from shedbim.checks.stability.mechanisms import MOST, mechanisms
from shedbim.checks.stability.motions import WAYS, Motion, motions
from shedbim.checks.stability.places import a_or_an, frames_of, listed
from shedbim.checks.stability.skeleton import Skeleton
from shedbim.checks.subject import Subject
from shedbim.model.roles import Role

__all__ = ["CHANGES", "whole"]

#: What to change, by the way in which something moves.
CHANGES = {
    WAYS[
        0
    ]: "Fix the column bases (frames.columns.base), or join the roof steel stiffly to the columns (frames.roof).",
    WAYS[1]: "Brace the walls and the roof (bracing.walls, bracing.roof) in more bays (bracing.bays).",
    WAYS[2]: "Look at the joints and supports of these pieces: one that carries them is missing.",
}


def whole(subject: Subject, bars: Skeleton) -> Iterator[Hit]:
    """Give the mechanisms of the building, and the bars that hang from one pin alone."""
    for piece in bars.loose:
        yield Hit(
            "loose-bar",
            (piece,),
            subject.point(piece),
            f"{a_or_an(subject.role[piece].word)} has one joint alone, and that does not keep it from swinging.",
            "Join its other end; where the description gives no reason for this, report it as a fault of the program.",
        )
    if not len(bars.points):
        return
    strains = compatibility(subject, bars)
    free = mechanisms(strains.matrix)
    more = free.shape[1] >= MOST
    for motion in motions(bars, strains, free):
        yield _hit(subject, motion, more=more)


def _hit(subject: Subject, motion: Motion, *, more: bool) -> Hit:
    roles = list(dict.fromkeys(subject.role[piece].word for piece in motion.pieces))
    what, frames = _what(subject, motion, roles)
    ending = f" These are some of {MOST} ways or more in which it moves." if more else ""
    says = f"{what} can {'sway' if frames else 'move'} {motion.way} without any resistance."
    return Hit(
        "mechanism",
        motion.pieces,
        motion.point,
        says + ending,
        CHANGES[motion.way],
        about=f"{motion.way}: {listed(sorted(roles)[:3])}",
    )


def _what(subject: Subject, motion: Motion, roles: list[str]) -> tuple[str, bool]:
    """What moves, as the subject of a sentence, and whether that is whole frames."""
    where = frames_of(subject, motion.pieces)
    if len(motion.pieces) == 1:
        return a_or_an(roles[0]), False
    if any(subject.role[piece] is Role.COLUMN for piece in motion.pieces) and where.startswith("frame"):
        return where.capitalize(), True
    most = f"The {listed([_plural(word) for word in roles[:3]])}"
    return f"{most} of {where}" if where else most, False


def _plural(word: str) -> str:
    return f"{word}es" if word.endswith(("s", "ch")) else f"{word}s"
