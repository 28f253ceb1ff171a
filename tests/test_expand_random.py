"""Random descriptions: each builds a shed in which the invariants hold, or is refused in plain words."""

from __future__ import annotations

from io import StringIO

from fastened import FASTENING_RULES
from hypothesis import Phase, event, given, settings
from invariants import broken, coarse_bodies
from overlaps import overlaps
from random_sheds import descriptions
from ruamel.yaml import YAML

from shedbim.description import read_text
from shedbim.errors import DescriptionError
from shedbim.expand import expand
from shedbim.tolerance import SHARED_VOLUME


def faults_of(data) -> list[str] | None:
    """What is wrong with the shed that a description gives; None where it is refused."""
    sink = StringIO()
    YAML(typ="safe", pure=True).dump(data, sink)
    try:
        description = read_text(sink.getvalue(), "random.yaml")
        shed = expand(description)
    except DescriptionError as error:
        refused = error
    else:
        refused = None
    if refused is not None:
        assert refused.faults
        assert all(fault.field and fault.message for fault in refused.faults)
        return None
    clashes = overlaps(coarse_bodies(shed), shed.pieces.part, shed.pieces.placement, SHARED_VOLUME)
    keys = shed.pieces.keys
    return [
        *broken(shed, description),
        *(f"{rule.__name__}: {fault}" for rule in FASTENING_RULES for fault in rule(shed)),
        *(f"{keys[each.first]} and {keys[each.second]} share {each.volume:.0f} mm3" for each in clashes),
    ]


# Shrinking a whole building takes minutes; the keys in the message lead to the fault as it is.
@settings(max_examples=16, phases=[Phase.explicit, Phase.generate])
@given(descriptions())
def test_random_descriptions_build_sound_sheds_or_are_refused(data):
    faults = faults_of(data)
    event("refused" if faults is None else "built")
    assert not faults, faults[:10]
