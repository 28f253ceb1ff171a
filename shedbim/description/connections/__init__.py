"""How the steel is fastened together: the options of each kind of joint, one module a family."""

from __future__ import annotations

from shedbim.description.connections.bases import BaseOptions, PostBaseOptions
from shedbim.description.connections.bolting import BoltOptions
from shedbim.description.connections.caps import CapOptions
from shedbim.description.connections.end_plates import (
    ApexOptions,
    BracketOptions,
    ChordOptions,
    RafterOptions,
)
from shedbim.description.connections.gussets import GussetOptions
from shedbim.description.connections.nodes import NodeOptions
from shedbim.description.connections.post_heads import PostHeadOptions
from shedbim.description.connections.secondary import CleatOptions, SagBarOptions, StayOptions
from shedbim.description.connections.splices import SpliceOptions
from shedbim.description.connections.struts import StrutOptions, TubeEndOptions
from shedbim.description.connections.truss_gussets import TrussGussetOptions
from shedbim.fields import Options, default

__all__ = [
    "ApexOptions",
    "BaseOptions",
    "BoltOptions",
    "BracketOptions",
    "CapOptions",
    "ChordOptions",
    "CleatOptions",
    "Connections",
    "GussetOptions",
    "NodeOptions",
    "PostBaseOptions",
    "PostHeadOptions",
    "RafterOptions",
    "SagBarOptions",
    "SpliceOptions",
    "StayOptions",
    "StrutOptions",
    "TrussGussetOptions",
    "TubeEndOptions",
]


class Connections(Options):
    """How the steel is fastened together."""

    bolts: BoltOptions = default({}, "bolts of all joints")
    rafters: RafterOptions = default({}, "end plates and haunches of rafters at columns")
    apex: ApexOptions = default({}, "end plates of rafters at the apex")
    chords: ChordOptions = default({}, "end plates of truss chords at columns")
    brackets: BracketOptions = default(
        {}, "brackets on tubular columns that rafters and chords are bolted to"
    )
    splices: SpliceOptions = default({}, "site splices of trusses that are divided for the road")
    nodes: NodeOptions = default({}, "welds of truss nodes")
    truss_gussets: TrussGussetOptions = default({}, "gussets of trusses of angles")
    cleats: CleatOptions = default({}, "cleats of purlins and rails")
    sag_bars: SagBarOptions = default({}, "ends of sag bars")
    stays: StayOptions = default({}, "stays of the lower flanges of rafters")
    bases: BaseOptions = default({}, "bases of columns")
    post_bases: PostBaseOptions = default({}, "bases of gable posts")
    caps: CapOptions = default({}, "caps of columns and of tubes")
    post_heads: PostHeadOptions = default({}, "sliding heads of gable posts")
    gussets: GussetOptions = default({}, "gussets of roof and wall braces")
    struts: StrutOptions = default({}, "ends of struts and ties")
    tube_ends: TubeEndOptions = default({}, "how tubular struts, ties and braces end")
