"""What the names of properties mean."""

from __future__ import annotations

import tomllib
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.grammar import property_names
from pwmlint.grammar.property_names import fold, is_fitted, leaves_out, meaning, read_properties

TABLE = tomllib.loads(Path(property_names.__file__).with_suffix(".toml").read_text(encoding="utf-8"))


def test_no_name_has_two_meanings() -> None:
    aliases = [fold(alias) for names in TABLE["names"].values() for alias in names]
    assert len(aliases) == len(set(aliases))


@pytest.mark.construct("A5 property names for value, footprint, part number, reference designator")
@pytest.mark.parametrize(
    ("name", "key"),
    [
        ("PartValue", "value"),
        ("part_value", "value"),
        ("VAL", "value"),
        ("Comment", "value"),
        ("device", "value"),
        ("PCB Footprint", "package"),
        ("pcb_footprint", "package"),
        ("ModuleValue", "package"),
        ("module", "package"),
        ("PRT", "package"),
        ("JEDEC_TYPE", "package"),
        ("part number", "part number"),
        ("MPN", "part number"),
        ("manufacturer_pn", "part number"),
        ("RefDes", "reference"),
        ("PART_REFERENCE", "reference"),
        ("TOLERAN", "tolerance"),
        ("Wattage", "power"),
        ("VOLTAGE", "voltage"),
        ("PositionInPackage", "section"),
        ("DNP", "not fit"),
    ],
)
def test_meaning(name: str, key: str) -> None:
    found = meaning(name)
    assert found is not None
    assert found.key == key


@pytest.mark.parametrize("name", ["TN", "Source Library", "Designator", "", "Graphic", "x" * 1000])
def test_names_without_a_meaning(name: str) -> None:
    assert meaning(name) is None


def test_the_first_name_of_the_table_that_is_not_empty_counts() -> None:
    pairs = [
        ("Comment", "10k"),
        ("PCB Footprint", ""),
        ("Value", "22k"),
        ("PCB Footprint", "0805"),
        ("TN", "7"),
    ]
    assert read_properties(pairs) == {"value": "22k", "package": "0805", "tn": "7"}
    assert read_properties([("X", "1"), ("x", "2"), ("Y" * 300, " ")]) == {"x": "1"}


@pytest.mark.parametrize(
    "text", ["DNI", "10k,dnp", "NC", "open", "10k, Do not  populate", "0402-NC", "47UF 16V NM", "1u;nf"]
)
def test_texts_that_leave_a_part_out(text: str) -> None:
    assert leaves_out(text)
    assert not is_fitted(text, {})
    assert not is_fitted("1k", {"state": text})


@pytest.mark.parametrize(
    "text", ["", "10 NF", "4.7 NM", "open frame", "SW-NC", "NCP", "1k,1%", ",,", "x" * 500]
)
def test_texts_that_do_not(text: str) -> None:
    assert not leaves_out(text)
    assert is_fitted(text, {})


@settings(deadline=None, max_examples=100)
@given(st.text(max_size=300))
def test_any_text_is_read(text: str) -> None:
    leaves_out(text)
    read_properties([(text, text)])
