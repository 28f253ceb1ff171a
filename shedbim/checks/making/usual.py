"""Figures of the description itself that are out of the usual: spans, bays, pitches, depths and spacings."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.bracing.lines import bay_label, columns_at, head_struts
from shedbim.checks.finding import Hit
from shedbim.checks.making.truss_depths import truss_depths
from shedbim.checks.subject import Subject
from shedbim.model.roles import Role

__all__ = ["usual"]

Ints = NDArray[np.int64]
Floats = NDArray[np.float64]

#: A roof is said to be too flat, or a height too great, only when it is so by more than this: mm and rad.
_NOISE = 1e-3


def usual(subject: Subject) -> Iterator[Hit]:
    """Give the notes on what is out of the usual; nothing of it need be wrong."""
    yield from _spans(subject)
    yield from _bays(subject)
    yield from _pitches(subject)
    yield from _depths(subject)
    yield from _spacings(
        subject, Role.PURLIN, "purlin_spacing_greatest", "purlins-far-apart", "purlins.spacing"
    )
    yield from _spacings(subject, Role.SIDE_RAIL, "rail_spacing_greatest", "rails-far-apart", "rails.spacing")
    yield from _eaves(subject)


def _note(
    subject: Subject,
    code: str,
    piece: int,
    says: str,
    change: str,
    name: str,
    value: float,
    unit: str,
    about: str,
) -> Hit:
    limit, source = subject.criteria.limit(name)
    point = subject.point(piece)
    return Hit(code, (piece,), point, says, change, value, limit, unit, source, about=about)


def _spans(subject: Subject) -> Iterator[Hit]:
    """Spans of rafters, and of trusses, greater than is usual."""
    grid = subject.shed.grid
    for role, name, word in (
        (Role.RAFTER, "rafter_span_greatest", "solid rafters"),
        (Role.TOP_CHORD, "truss_span_greatest", "trusses"),
    ):
        pieces = subject.having(role)
        if not pieces.size:
            continue
        span_of = np.clip(np.searchsorted(grid.x, subject.centres[pieces][:, 0]) - 1, 0, len(grid.x) - 2)
        for span in np.unique(span_of).tolist():
            wide = grid.x[span + 1] - grid.x[span]
            if wide > subject.criteria.limit(name)[0] + _NOISE:
                first = int(pieces[span_of == span][0])
                letters = f"{grid.letters[span]}-{grid.letters[span + 1]}"
                yield _note(
                    subject, "span-unusual", first,
                    f"A span of {{value}} is more than is usual for {word} without a prop ({{limit}}).",
                    "Use another roof system (frames.roof.system), or more spans (building.spans).",
                    name, wide, "m", f"span {letters}",
                )  # fmt: skip


def _bays(subject: Subject) -> Iterator[Hit]:
    """Bays shorter or longer than is usual."""
    y = np.array(subject.shed.grid.y)
    columns = subject.having(Role.COLUMN)
    for bay, long in enumerate(np.diff(y).tolist()):
        for name, over in (("bay_least", -1.0), ("bay_greatest", 1.0)):
            limit = subject.criteria.limit(name)[0]
            if over * (long - limit) > _NOISE and columns.size:
                nearest = np.abs(subject.centres[columns][:, 1] - y[bay]).argmin()
                than = "less" if over < 0 else "more"
                code = "bay-short" if over < 0 else "bay-long"
                yield _note(
                    subject, code, int(columns[nearest]),
                    f"Bay {bay_label(subject, bay)} is {{value}} long, {than} than is usual ({{limit}}).",
                    "Purlins and bracing go by the bay: look at building.bays.",
                    name, long, "m", "bays",
                )  # fmt: skip


def _pitches(subject: Subject) -> Iterator[Hit]:
    """Roofs flatter than profiled sheets with side laps are laid."""
    pieces = subject.having(Role.RAFTER, Role.GABLE_RAFTER, Role.TOP_CHORD)
    run = np.diff(subject.axes[pieces], axis=1)[:, 0]
    pitch = np.arctan2(np.abs(run[:, 2]), np.abs(run[:, 0]))
    limit = subject.criteria.limit("pitch_least")[0]
    flat = np.flatnonzero(pitch < limit - 1e-6)
    if flat.size:
        least = int(flat[pitch[flat].argmin()])
        yield _note(
            subject, "roof-flat", int(pieces[least]),
            "The roof falls by {value}; profiled sheets with side laps are usually laid from {limit}.",
            "Choose a roofing for this fall, or a steeper building.roof.",
            "pitch_least", float(pitch[least]), "deg", "roof",
        )  # fmt: skip


def _depths(subject: Subject) -> Iterator[Hit]:
    """Trusses that are flat or deep for their span."""
    for piece, span, depth in truss_depths(subject):
        ratio = span / depth
        for name, over, code in (
            ("truss_span_to_depth_least", -1.0, "truss-deep"),
            ("truss_span_to_depth_greatest", 1.0, "truss-shallow"),
        ):
            if over * (ratio - subject.criteria.limit(name)[0]) > _NOISE:
                yield _note(
                    subject, code, piece,
                    "The span is {value} times the greatest depth of the truss (usual to {limit} on this side).",
                    "Look at frames.roof.depth.", name, ratio, "", "trusses",
                )  # fmt: skip


def _spacings(subject: Subject, role: Role, name: str, code: str, field: str) -> Iterator[Hit]:
    """Purlins or rails of one surface farther apart than is usual, across them."""
    pieces = subject.having(role)
    limit = subject.criteria.limit(name)[0]
    for first, second, apart in _neighbours(subject, pieces):
        if apart > limit + 1.0:
            yield Hit(
                code,
                (second, first),
                subject.point(second),
                f"Two {role.word}s are {{value}} apart; up to {{limit}} is usual for sheets and panels.",
                f"Set them closer, or see that the cladding spans so far: {field}.",
                apart,
                limit,
                "m",
                subject.criteria.limit(name)[1],
                about=role.word,
            )


def _neighbours(subject: Subject, pieces: Ints) -> Iterator[tuple[int, int, float]]:
    """Pieces side by side in one bay of one surface, and their distance across, mm."""
    surface = [subject.shed.pieces.keys[piece].rsplit("/", 1)[0] for piece in pieces.tolist()]
    owner = np.unique(np.array(surface, str), return_inverse=True)[1] if surface else np.zeros(0, np.int64)
    centre = subject.centres[pieces][:, [0, 2]]
    # In one surface the pieces follow one another by the direction in which they spread most.
    for number in range(int(owner.max(initial=-1)) + 1):
        here = np.flatnonzero(owner == number)
        places = centre[here]
        order = here[np.argsort(places[:, int(np.ptp(places, axis=0).argmax())], kind="stable")]
        apart = np.linalg.norm(np.diff(centre[order], axis=0), axis=1)
        for k, each in enumerate(apart.tolist()):
            yield int(pieces[order[k]]), int(pieces[order[k + 1]]), each


def _eaves(subject: Subject) -> Iterator[Hit]:
    """Eaves of frames with solid rafters that are higher than is usual."""
    if not subject.having(Role.RAFTER).size:
        return
    columns = subject.having(Role.COLUMN)
    on = columns_at(subject, subject.centres[columns][:, 0])
    for line in (0, len(subject.shed.grid.x) - 1):
        struts = head_struts(subject, line)
        standing = columns[on == line]
        if not struts.size or not standing.size:
            continue
        height = float(subject.centres[struts][:, 2].max())
        if height > subject.criteria.limit("eaves_greatest")[0] + _NOISE:
            yield _note(
                subject, "eaves-high", int(standing[0]),
                "The eaves of these rafter frames are at {value}; up to {limit} is usual.",
                "Look at the sway of the frames: building.eaves, frames.columns.section.",
                "eaves_greatest", height, "m", "eaves",
            )  # fmt: skip
