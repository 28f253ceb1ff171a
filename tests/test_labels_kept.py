"""Labels of grid lines after a change."""

from __future__ import annotations

from itertools import combinations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from shedbim.revisions.labels import kept_labels, matched_lines

ISSUED = (("1", 0.0), ("2", 7000.0), ("3", 12750.0), ("4", 18500.0), ("5", 25500.0))


def placed(*bays: float) -> list[float]:
    return np.concatenate([[0.0], np.cumsum(bays)]).tolist()


@pytest.mark.parametrize(
    ("bays", "labels"),
    [
        ((7000, 5750, 5750, 7000), "1 2 3 4 5"),
        ((6100, 6900, 5000, 7000), "1 2 3 4 5"),  # moved lines are the lines they were
        ((7000, 5750, 5750, 5750, 7000), "1 2 3 4 4.1 5"),  # the end wall stays the end wall
        ((7000, 2900, 2850, 5750, 7000), "1 2 2.1 3 4 5"),  # a line put between 2 and 3
        ((3000, 4000, 5750, 5750, 7000), "1 1.1 2 3 4 5"),
        ((7000, 2000, 2000, 1750, 5750, 7000), "1 2 2.1 2.2 3 4 5"),
        ((7000, 11500, 7000), "1 2 4 5"),  # line 3 taken away
        ((25500,), "1 5"),
    ],
)
def test_lines_that_stand_keep_their_labels(bays: tuple[float, ...], labels: str) -> None:
    assert kept_labels(ISSUED, placed(*bays)) == tuple(labels.split())


def test_letters_and_lines_put_in_between_lines_put_in() -> None:
    first = kept_labels((("A", 0.0), ("B", 20000.0)), [0, 9000, 20000])
    assert first == ("A", "A.1", "B")
    second = kept_labels(tuple(zip(first, [0, 9000, 20000], strict=True)), [0, 4000, 9000, 15000, 20000])
    assert second == ("A", "A.01", "A.1", "A.2", "B")


def test_a_label_that_was_taken_away_names_no_other_line() -> None:
    assert kept_labels(ISSUED, placed(7000, 2900, 2850, 5750, 7000), {"2.1"}) == (
        "1",
        "2",
        "2.2",
        "3",
        "4",
        "5",
    )


def test_twelve_lines_between_two_are_in_order_and_all_different() -> None:
    labels = kept_labels((("3", 0.0), ("4", 13000.0)), placed(*[1000.0] * 13))
    assert labels[:11] == ("3", *(f"3.{n}" for n in range(1, 10)), "3.91")
    assert len(set(labels)) == 14
    assert sorted(labels, key=float) == list(labels)


@settings(max_examples=80, deadline=None)
@given(
    st.lists(st.integers(1, 9), min_size=1, max_size=7),
    st.lists(st.integers(1, 9), min_size=1, max_size=7),
)
def test_no_other_way_to_match_moves_lines_less(old_bays: list[int], new_bays: list[int]) -> None:
    old, new = placed(*old_bays), placed(*new_bays)
    found = matched_lines(old, new)
    assert found[0] == 0
    assert found[-1] == len(old) - 1
    kept = [(line, int(issued)) for line, issued in enumerate(found) if issued >= 0][1:-1]
    assert [issued for _, issued in kept] == sorted(issued for _, issued in kept)
    fewest = min(len(old), len(new)) - 2
    assert len(kept) == fewest
    moved = sum(abs(new[line] - old[issued]) for line, issued in kept)
    best = min(
        sum(abs(a - b) for a, b in zip(some, others, strict=True))
        for some in combinations(new[1:-1], fewest)
        for others in combinations(old[1:-1], fewest)
    )
    assert moved == pytest.approx(best)
