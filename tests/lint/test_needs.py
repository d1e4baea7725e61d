"""What an open verdict asks for can be written into a brief as it stands."""

from __future__ import annotations

import tomllib

import pytest
from hypothesis import example, given
from hypothesis import strategies as st
from pwmlint.lint import needs

NAMES = ["VOUT", "mast_5V-2", "+12V", "psu/U1", "N$12", "Net-(U1-Pad3)", "a.b", 'a "b"', "A\\B", "été"]


@pytest.mark.parametrize("name", NAMES)
def test_every_name_is_a_key_of_a_table(name: str) -> None:
    table, line = needs.controller(name, "output").removeprefix("brief: ").split("] ")
    assert tomllib.loads(f"{table}]\n{line}\n") == {"controllers": {name: {"output": "..."}}}


def test_a_rail_is_asked_for_with_its_voltage() -> None:
    assert needs.rail("VOUT", "load") == 'brief: [rails.VOUT] voltage = "...", load = "..."'
    assert needs.rail("VOUT", "load", declared=True) == 'brief: [rails.VOUT] load = "..."'
    assert needs.rail("+12V", "voltage") == 'brief: [rails."+12V"] voltage = "..."'


@given(net=st.text(st.characters(exclude_categories=["Cs"]), max_size=20))
@example(net='a] b = "')
def test_the_rail_of_a_need(net: str) -> None:
    assert needs.rail_asked_for(needs.rail(net, "load", "tolerance")) == net
    assert needs.rail_asked_for(needs.controller(net, "topology")) is None


@pytest.mark.parametrize(
    "need",
    ['brief: [rails.<the other mains net>] circuit = "mains"', "parts list: power of R1", "brief: [rails."],
)
def test_a_need_of_no_rail(need: str) -> None:
    assert needs.rail_asked_for(need) is None
