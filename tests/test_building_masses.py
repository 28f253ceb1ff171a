"""Conservation: the schedules, the quantities in the model file and its meshed solids weigh the same."""

from __future__ import annotations

import csv
import io
from collections import Counter
from dataclasses import replace

import built_models
import cast
import pytest

from shedbim.outputs import OUTPUTS, SCHEMAS
from shedbim.writers.imprint import Imprint

#: kg/mm³: EN 1991-1-1 Table A.4 and the section tables: 7 850 kg/m³.
DENSITY = 7850e-9
#: The shares of a thousandth in which schedule, quantities and solids agree.
SAME = 1e-3


def members(name: str) -> list[dict[str, str]]:
    """The rows of the members schedule as a spreadsheet reads them."""
    (row,) = [output for output in OUTPUTS if output.name == "members"]
    sink = io.BytesIO()
    row.write(cast.shed_of(name), Imprint(), sink)
    return list(csv.DictReader(io.StringIO(sink.getvalue().decode("utf-8-sig"))))


def scheduled(name: str) -> tuple[float, int]:
    """Mass (kg) and number of all pieces by the schedule: its rows added up."""
    rows = members(name)
    mass = next(heading for heading in rows[0] if heading.startswith("mass total"))
    return sum(float(row[mass]) for row in rows), sum(int(row["quantity"]) for row in rows)


@pytest.mark.parametrize("name", cast.PRESETS)
def test_schedule_quantities_and_solids_weigh_the_same(name):
    mass, pieces = scheduled(name)
    stated = built_models.weights(name)
    model = built_models.model(name)
    assert len(stated) == len(model.names) == pieces
    assert sum(stated.values()) == pytest.approx(mass, rel=SAME)
    assert model.volume * DENSITY == pytest.approx(mass, rel=SAME)
    assert cast.shed_of(name).mass == pytest.approx(mass, rel=SAME)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_so_they_do_in_every_schema(schema):
    mass, pieces = scheduled("barn")
    stated = built_models.weights("barn", schema)
    model = built_models.model("barn", schema)
    assert len(stated) == len(model.names) == pieces
    assert sum(stated.values()) == pytest.approx(mass, rel=SAME)
    assert model.volume * DENSITY == pytest.approx(mass, rel=SAME)


@pytest.mark.parametrize("name", cast.PRESETS)
def test_every_piece_weighs_what_its_solid_weighs(name):
    """Each type by itself: the library's arcs take up to a sixth of a hundredth off a tube or a round bar."""
    model, stated = built_models.model(name), built_models.weights(name)
    shed = cast.shed_of(name)
    by_key = dict(zip(shed.pieces.keys, shed.pieces.part.tolist(), strict=True))
    for name_of, body in zip(model.names, model.body.tolist(), strict=True):
        weight = stated[name_of]
        assert model.bodies[body].volume() * DENSITY == pytest.approx(weight, rel=4e-3)
        assert shed.parts[by_key[name_of]].bar.mass == pytest.approx(weight, rel=SAME)


def test_a_lost_piece_is_found():
    """The comparison can fail: without one column the solids weigh less by more than the share allowed."""
    model = built_models.model("seed-store")
    mass, _ = scheduled("seed-store")
    keep = [i for i, name in enumerate(model.names) if name != "2/column/A"]
    less = replace(
        model,
        names=tuple(model.names[i] for i in keep),
        body=model.body[keep],
        placement=model.placement[keep],
    )
    assert less.volume * DENSITY != pytest.approx(mass, rel=SAME)


@pytest.mark.parametrize("name", cast.CAST)
def test_the_number_of_pieces_is_the_same_in_every_output(name):
    shed = cast.shed_of(name)
    quantities = Counter(shed.parts[i].mark for i in shed.pieces.part.tolist())
    assert {row["mark"]: int(row["quantity"]) for row in members(name)} == quantities
    tags = Counter(e.Tag for e in built_models.opened(name).by_type("IfcElement") if e.Representation)
    assert tags == quantities
