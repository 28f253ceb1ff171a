"""Random edits of descriptions: what clients change, one thing at a time, drawn from a seeded generator."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from random import Random
from typing import Any

import numpy as np
from cast import changed

from shedbim.description import Description
from shedbim.errors import DescriptionError
from shedbim.model.shed import Shed
from shedbim.pipeline import expanded
from shedbim.revisions.register import Register

__all__ = ["EDITS", "built", "edited"]

Fields = dict[str, Any]
Edit = Callable[[Random, Fields], None]


def _bays(random: Random, fields: Fields) -> None:
    bays = fields["building__bays"]
    bays[random.randrange(len(bays))] += random.choice([-310.0, 240.0, 505.0])


def _bay_put_in(random: Random, fields: Fields) -> None:
    bays = fields["building__bays"]
    bays.insert(random.randrange(len(bays) + 1), random.choice([5300.0, 5800.0, bays[0]]))


def _bay_taken_out(random: Random, fields: Fields) -> None:
    bays = fields["building__bays"]
    if len(bays) > 2:
        bays.pop(random.randrange(len(bays)))


def _bay_divided(random: Random, fields: Fields) -> None:
    bays = fields["building__bays"]
    at = int(np.argmax(bays))
    bays[at : at + 1] = [bays[at] / 2 + 35.0, bays[at] / 2 - 35.0]


def _span(random: Random, fields: Fields) -> None:
    spans = fields["building__spans"]
    spans[random.randrange(len(spans))] += random.choice([-420.0, 630.0])


def _span_put_in(random: Random, fields: Fields) -> None:
    spans = fields["building__spans"]
    if len(spans) < 3:
        spans.insert(random.randrange(len(spans) + 1), random.choice([14200.0, spans[-1]]))


def _eaves(random: Random, fields: Fields) -> None:
    fields["building__eaves"] = random.choice(["6 m", "6.35 m", "5.9 m"])


def _columns(random: Random, fields: Fields) -> None:
    fields["frames__columns__section"] = random.choice(["HEA 320", "HEB 300", "HEA 280"])


def _purlins(random: Random, fields: Fields) -> None:
    fields["purlins__spacing"] = random.choice(["1.45 m", "1.6 m", "1.75 m"])


def _rails(random: Random, fields: Fields) -> None:
    fields["rails__spacing"] = random.choice(["1.5 m", "1.65 m", "1.9 m"])


EDITS: tuple[Edit, ...] = (
    _bays,
    _bay_put_in,
    _bay_taken_out,
    _bay_divided,
    _span,
    _span_put_in,
    _eaves,
    _columns,
    _purlins,
    _rails,
)


def edited(
    name: str, random: Random, fields: Fields, register: Register, edits: Sequence[Edit] = EDITS
) -> tuple[Fields, Shed]:
    """The fields after one of some edits that can be built, and the shed of them under its register."""
    for edit in random.sample(edits, len(edits)):
        new = {path: list(each) if isinstance(each, list) else each for path, each in fields.items()}
        edit(random, new)
        try:
            return new, built(name, new, register)
        except DescriptionError:
            continue
    raise AssertionError("no edit can be built")


def described_as(name: str, fields: Fields) -> Description:
    """The description of a specimen with other fields; lengths in mm."""
    lists = {path: [f"{mm} mm" for mm in each] for path, each in fields.items() if isinstance(each, list)}
    return changed(name, **{"building__letters": None, "building__numbers": None, **fields, **lists})


def built(name: str, fields: Fields, register: Register | None = None) -> Shed:
    """The shed of it, under its register where there is one."""
    return expanded(described_as(name, fields), register, repr(fields))
