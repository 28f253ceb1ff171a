"""What a state of a building comes to: the quantities that it costs by, and masses by role and by section."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from shedbim.revisions.states import State, Thing

__all__ = ["Amount", "amounts", "masses_by"]


@dataclass(frozen=True)
class Amount:
    """One quantity: its name, unit and value; None where the state does not tell."""

    name: str
    unit: str
    value: float | None


def amounts(state: State) -> tuple[Amount, ...]:
    """Give the quantities of a state that drive its cost, always the same ones in the same order."""
    counts = np.bincount(state.thing, minlength=len(state.things))
    things = list(zip(counts.tolist(), state.things, strict=True))

    # Fasteners are bought coated: what is painted and dipped is members and fittings, as in the schedule of finishes.
    coated = [(count, thing) for count, thing in things if not thing.fasteners]

    return (
        Amount("mass", "kg", float(sum(count * thing.mass for count, thing in things))),
        Amount("pieces", "", float(len(state))),
        Amount("fasteners", "", float(sum(count * thing.fasteners for count, thing in things))),
        Amount("welds", "m", state.welds),
        Amount(
            "painted surface",
            "m²",
            float(sum(count * thing.surface for count, thing in coated if thing.finish == "painted")),
        ),
        Amount(
            "galvanized mass",
            "kg",
            float(sum(count * thing.mass for count, thing in coated if thing.finish == "galvanized")),
        ),
        Amount("distinct marks", "", float(len({thing.mark for count, thing in things if count}))),
        Amount("distinct assemblies", "", float(len({mark for mark in state.assembly if mark}))),
    )


def masses_by(state: State, what: str) -> dict[str, tuple[int, float]]:
    """Give pieces and mass, kg, by ``role`` or by ``stock``, in the order of the things."""
    counts = np.bincount(state.thing, minlength=len(state.things))
    found: dict[str, tuple[int, float]] = {}
    for count, thing in zip(counts.tolist(), state.things, strict=True):
        pieces, mass = found.get(_name(thing, what), (0, 0.0))
        if count:
            found[_name(thing, what)] = (pieces + count, mass + count * thing.mass)
    return found


def _name(thing: Thing, what: str) -> str:
    return thing.role if what == "role" else thing.stock
