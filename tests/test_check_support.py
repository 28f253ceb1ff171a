"""Support and load path: spoiled sheds, one for each code, and what tells them apart."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest
from cast import CAST, shed_of
from changed_sheds import doubled, matching, without_joints
from fastened import joints_are_closed
from taken_out import freed

from shedbim.checks.finding import Finding
from shedbim.checks.grouping import findings_of
from shedbim.checks.subject import Subject
from shedbim.checks.support.hanging import hanging
from shedbim.checks.support.joints import joints
from shedbim.limits import CODES, Criteria, criteria
from shedbim.model.joints import At, JointKind, JointRun
from shedbim.model.shed import Shed


def _found(shed: Shed) -> list[Finding]:
    subject = Subject(shed, criteria())
    return findings_of(subject, [*joints(subject), *hanging(subject)])


@pytest.mark.parametrize("name", CAST)
def test_the_cast_is_held_up(name: str) -> None:
    assert _found(shed_of(name)) == []


def _joint(kind: JointKind, pieces: list[int], at: list[int], shed: Shed) -> JointRun:
    point = shed.pieces.placement[[pieces[0]], :, 3]
    return JointRun(kind, np.array([pieces]), np.array([at], np.int8), point, np.zeros(1))


def _with(shed: Shed, *runs: JointRun) -> Shed:
    return replace(shed, joints=(*shed.joints, *runs))


def _floating() -> Shed:
    """A second strut ten metres up, its ends declared free."""
    shed = shed_of("lopsided")
    shed = doubled(shed, int(matching(shed, "1-2/strut/A-B/1/1")[0]), (0, 0, 10_000.0))
    last = len(shed.pieces) - 1
    return _with(shed, *(_joint(JointKind.FREE, [last], [end], shed) for end in (At.START, At.END)))


def _undeclared() -> Shed:
    """The overhanging ends of purlins, not said to be free any more."""
    shed = shed_of("lopsided")
    return replace(shed, joints=tuple(run for run in shed.joints if run.kind is not JointKind.FREE))


def _alone() -> Shed:
    """A node of a truss to which no web comes."""
    shed = shed_of("lopsided")
    chord = int(matching(shed, "2/truss/top chord/*")[0])
    return _with(shed, _joint(JointKind.NODE, [chord], [At.ALONG], shed))


def _unwelded() -> Shed:
    """A joint that lost its welds and its bolts, but for what they held: two lots side by side."""
    shed = shed_of("lopsided")
    kept = [run for run in shed.joints if run.kind is not JointKind.TIE_END]
    ties = [replace(run, clamps=()) for run in shed.joints if run.kind is JointKind.TIE_END]
    return replace(shed, joints=(*kept, *ties))


def _turned_over() -> Shed:
    """Purlins that carry the columns and chords they stand on: nothing carries the purlins."""
    shed = shed_of("lopsided")
    runs = []
    for run in shed.joints:
        if run.kind is JointKind.PURLIN_CLEAT:
            width = run.pieces.shape[1]
            order = [1, 0, *range(2, width)]
            new = {old: at for at, old in enumerate(order)}
            columns = {**new, **{c: c for c in range(width, width + run.fittings.shape[1])}}
            turned = replace(
                run,
                pieces=run.pieces[:, order],
                at=run.at[:, order],
                welds=tuple(
                    replace(weld, between=(columns[weld.between[0]], columns[weld.between[1]]))
                    for weld in run.welds
                ),
                clamps=tuple(
                    replace(clamp, layers=tuple((columns[c], t) for c, t in clamp.layers))
                    for clamp in run.clamps
                ),
            )
            runs.append(turned)
        else:
            runs.append(run)
    return replace(shed, joints=tuple(runs))


SPOILED: dict[str, Callable[[], tuple[Shed, Criteria]]] = {
    "unsupported": lambda: (_floating(), criteria()),
    "end-in-no-joint": lambda: (_undeclared(), criteria()),
    "lone-joint": lambda: (_alone(), criteria()),
    "no-load-path": lambda: (_turned_over(), criteria()),
}


def test_every_code_of_support_is_spoiled() -> None:
    assert set(SPOILED) == {code.name for code in CODES.values() if code.area == "support"}


@pytest.mark.parametrize("code", SPOILED)
def test_a_spoiled_shed_gives_its_own_code_alone(code: str) -> None:
    shed, _ = SPOILED[code]()
    assert {finding.code.name for finding in _found(shed)} == {code}


def test_joints_without_their_bolts_are_told_as_the_independent_rule_tells_them() -> None:
    shed = _unwelded()
    assert list(joints_are_closed(shed))
    assert "lone-joint" in {finding.code.name for finding in _found(shed)}
    assert not list(joints_are_closed(shed_of("lopsided")))


def test_a_purlin_that_hangs_on_sag_bars_is_held_and_still_not_carried() -> None:
    shed = shed_of("lopsided")
    (purlin,) = matching(shed, "1-2/purlin/A-B/1/3").tolist()
    for end in (At.START, At.END):
        shed = freed(shed, purlin, int(end))
    cleats = [
        _rows(run, ~((run.pieces == purlin).any(axis=1) & (run.kind is JointKind.PURLIN_CLEAT)))
        for run in shed.joints
    ]
    shed = replace(shed, joints=tuple(run for run in cleats if len(run.pieces)))
    found = _pieces(shed)
    assert purlin in found["no-load-path"]
    assert purlin not in found.get("unsupported", set())


def _rows(run: JointRun, keep: np.ndarray) -> JointRun:
    fittings = run.fittings[keep] if run.fittings.size else run.fittings
    return replace(
        run, pieces=run.pieces[keep], at=run.at[keep], points=run.points[keep],
        eccentricity=run.eccentricity[keep], fittings=fittings,
    )  # fmt: skip


def test_a_post_without_a_base_hangs_from_a_head_that_slides() -> None:
    shed = shed_of("seed-store")
    (post,) = matching(shed, "1/gable post/2").tolist()
    assert post in _pieces(freed(shed, post, At.START))["no-load-path"]


def test_a_column_in_no_joint_is_held_by_nothing() -> None:
    shed = shed_of("lopsided")
    (column,) = matching(shed, "2/column/A").tolist()
    found = _pieces(without_joints(shed, [column]))
    assert column in found["unsupported"]
    assert column in found["end-in-no-joint"]


def _pieces(shed: Shed) -> dict[str, set[int]]:
    """The pieces of all findings of each code."""
    pieces: dict[str, set[int]] = {}
    for finding in _found(shed):
        pieces.setdefault(finding.code.name, set()).update(finding.pieces)
    return pieces
