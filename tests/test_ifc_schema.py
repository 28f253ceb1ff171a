"""The text of entities: tables against the published schemas, attributes by name, values escaped."""

from __future__ import annotations

import json
import re

import ifc_tables
import ifcopenshell
import pytest
from hypothesis import given
from hypothesis import strategies as st

from shedbim.errors import ModelError
from shedbim.writers.ifc.schema import SCHEMAS, schema
from shedbim.writers.ifc.text import label, labels, number, quoted


@pytest.mark.parametrize("name", SCHEMAS)
def test_tables_are_those_of_the_published_schemas(name: str) -> None:
    shipped = json.loads((ifc_tables.FOLDER / f"{name}.json").read_text(encoding="utf-8"))
    assert shipped == ifc_tables.table(name)


def test_attributes_are_put_in_order_by_name() -> None:
    text = schema("IFC4").text("IfcMember", {"Tag": "'P1'", "GlobalId": "'x'", "Name": "'n'"})
    assert text == "IFCMEMBER('x',$,'n',$,$,$,$,'P1',$)"
    assert schema("IFC2X3").text("IfcSIUnit", {"Name": ".METRE.", "UnitType": ".LENGTHUNIT."}) == (
        "IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.)"
    )


@pytest.mark.parametrize(
    ("entity", "attributes", "message"),
    [
        ("IfcMember", {"GlobalId": "'x'", "Colour": "'red'"}, "IfcMember: no attribute Colour"),
        ("IfcMember", {"Name": "'n'"}, "IfcMember: needs GlobalId"),
        ("IfcMember", {"GlobalId": "$"}, "IfcMember: needs GlobalId"),
        ("IfcMember", {"GlobalID": "'x'"}, "IfcMember: no attribute GlobalID; needs GlobalId"),
        ("IfcGirder", {}, "no entity IfcGirder in the table of IFC4"),
    ],
)
def test_wrong_attributes_are_refused(entity: str, attributes: dict[str, str], message: str) -> None:
    with pytest.raises(ModelError, match=re.escape(message)):
        schema("IFC4").text(entity, attributes)


def test_what_a_schema_does_not_have_is_refused_in_it_only() -> None:
    attributes = {"GlobalId": "'x'", "PredefinedType": ".PURLIN."}
    assert schema("IFC4").text("IfcMember", attributes).endswith(".PURLIN.)")
    with pytest.raises(ModelError, match="no attribute PredefinedType; needs OwnerHistory"):
        schema("IFC2X3").text("IfcMember", attributes)


def test_other_schemas_are_refused() -> None:
    with pytest.raises(ModelError, match="no schema 'IFC4X3'; allowed: IFC4, IFC4X3_ADD2, IFC2X3"):
        schema("IFC4X3")


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (0.0, "0."), (-0.0, "0."), (7.0, "7."), (12.345, "12.345"), (-0.00001, "-1.E-5"), (1.5e-7, "1.5E-7"),
        (5403120.5, "5403120.5"), (1e15, "1.E15"), (2 / 3, "0.666666666667"), (123456.789012, "123456.789012"),
    ],
)  # fmt: skip
def test_numbers_are_short_and_carry_a_point(value: float, text: str) -> None:
    assert number(value) == text
    assert re.fullmatch(r"-?\d+\.\d*(E-?\d+)?", text)  # REAL of ISO 10303-21, 6.4.2


@pytest.mark.parametrize("value", [float("nan"), float("inf"), -float("inf")])
def test_what_is_no_number_is_refused(value: float) -> None:
    with pytest.raises(ModelError, match="cannot hold"):
        number(value)


def test_strings_are_escaped() -> None:
    assert quoted("plain #1 (a);") == "'plain #1 (a);'"
    assert quoted("it's \\X2\\") == "'it''s \\\\X2\\\\'"
    assert quoted("Höhe 🏗\n") == "'H\\X2\\00F6\\X0\\he \\X4\\0001F3D70000000A\\X0\\'"


@given(st.text(st.characters(exclude_categories=["Cs"], exclude_characters="\0"), max_size=60))
def test_the_library_reads_any_text_back(text: str) -> None:
    written = quoted(text)
    assert written.isascii()
    assert written.isprintable()
    lines = (
        "ISO-10303-21;HEADER;FILE_DESCRIPTION((''),'2;1');FILE_NAME('','',(''),(''),'','','');",
        f"FILE_SCHEMA(('IFC4'));ENDSEC;DATA;\n#1=IFCMATERIAL({written},$,$);\nENDSEC;END-ISO-10303-21;",
    )
    assert ifcopenshell.file.from_string("".join(lines)).by_id(1).Name == text


def test_half_a_character_is_written_as_a_stand_in() -> None:
    assert quoted("a\ud800") == "'a\\X2\\FFFD\\X0\\'"


def test_labels_end_at_the_length_the_schema_sets() -> None:
    assert label("x" * 255) == quoted("x" * 255)
    assert label("x" * 256) == quoted("x" * 254 + "…")
    assert labels(["a", "b'c", "x" * 300]) == [label("a"), label("b'c"), label("x" * 300)]
    assert labels(["a", "b"]) == ["'a'", "'b'"]
    assert labels([]) == []
