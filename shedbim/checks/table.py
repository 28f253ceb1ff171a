"""The table of checks: one row each; to add a check is to write its module and a row here."""

from __future__ import annotations

from shedbim.checks.bracing.angles import angles
from shedbim.checks.bracing.chords import chords
from shedbim.checks.bracing.flanges import flanges
from shedbim.checks.bracing.length import length
from shedbim.checks.bracing.openings import openings
from shedbim.checks.bracing.paths import paths
from shedbim.checks.bracing.post_heads import post_heads
from shedbim.checks.bracing.presence import presence
from shedbim.checks.bracing.spread import spread
from shedbim.checks.bracing.sway import sway
from shedbim.checks.check import Check
from shedbim.checks.clash.bolt_access import bolt_access
from shedbim.checks.clash.clashes import clashes
from shedbim.checks.making.bought import bought
from shedbim.checks.making.drilled import drilled
from shedbim.checks.making.moved import moved
from shedbim.checks.making.nodes import nodes
from shedbim.checks.making.sealed import sealed
from shedbim.checks.making.slender import slender
from shedbim.checks.making.usual import usual
from shedbim.checks.others.trades import trades
from shedbim.checks.others.zones import zones
from shedbim.checks.stability.stability import stability
from shedbim.checks.support.hanging import hanging
from shedbim.checks.support.joints import joints

__all__ = ["CHECKS"]

CHECKS: tuple[Check, ...] = (
    Check(
        "clashes",
        ("overlap", "duplicate", "joint-without-contact", "contact-without-joint", "too-near"),
        clashes,
    ),
    Check("room for wrenches", ("bolt-access",), bolt_access),
    Check(
        "bracing of walls and roof",
        ("wall-line-unbraced", "inner-line-open", "slope-unbraced", "bracing-broken"),
        presence,
    ),
    Check(
        "places of braced bays",
        ("braced-bay-inside", "braced-bays-apart", "bracing-far-from-end", "bays-differ"),
        spread,
    ),
    Check("force paths along the building", ("frame-out-of-path", "strut-line-broken"), paths),
    Check("heads of gable posts", ("post-head-off-node", "post-head-without-strut"), post_heads),
    Check("restraint of bottom chords", ("chord-unrestrained",), chords),
    Check("restraint of inner flanges", ("flange-unrestrained", "column-flange-open"), flanges),
    Check("angles of braces", ("brace-flat", "brace-steep"), angles),
    Check("bracing across doors", ("brace-across-opening",), openings),
    Check("movement joints", ("no-movement-joint",), length),
    Check("sway of frames", ("no-longitudinal-girder",), sway),
    Check("reserved zones", ("zone-overlap", "zone-too-near"), zones),
    Check(
        "models of other trades",
        (
            "other-overlap",
            "other-too-near",
            "other-unread",
            "other-unplaced",
            "other-far-away",
            "other-own-origin",
            "other-not-closed",
        ),
        trades,
    ),
    Check("lengths of bars", ("bar-longer-than-stock",), bought),
    Check(
        "road, crane and zinc bath",
        ("too-long-to-ship", "too-bulky-to-ship", "too-heavy-to-lift", "too-big-for-bath"),
        moved,
    ),
    Check("vents of galvanized tubes", ("sealed-tube", "vent-too-small"), sealed),
    Check("nodes of trusses", ("web-too-flat", "node-eccentric-outwards", "node-eccentric-inwards"), nodes),
    Check("distances of bolt holes", ("bolt-near-edge", "bolts-too-close"), drilled),
    Check("slenderness", ("bar-too-slender",), slender),
    Check(
        "figures out of the usual",
        (
            "span-unusual",
            "bay-short",
            "bay-long",
            "roof-flat",
            "truss-deep",
            "truss-shallow",
            "purlins-far-apart",
            "rails-far-apart",
            "eaves-high",
        ),
        usual,
    ),
    Check(
        "stability by computation",
        (
            "mechanism",
            "loose-bar",
            "truss-mechanism",
            "unbraced-panel",
            "one-way-brace",
            "purlin-off-node",
        ),
        stability,
    ),
    Check("joints that join", ("end-in-no-joint", "lone-joint"), joints),
    Check("support and load path", ("unsupported", "no-load-path"), hanging),
)
