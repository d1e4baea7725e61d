"""Lists made at random, sound ones and damaged ones. `tests/fuzz/fuzz_spice.py` makes the long run."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.grammar.errors import NetlistError
from pwmlint.grammar.netlist import Netlist
from pwmlint.grammar.spice import read_spice

SCRIPT = Path(__file__).parents[1] / "fuzz" / "fuzz_spice.py"

names = st.from_regex(r"[A-Za-z0-9_+/.#~-]{1,6}", fullmatch=True).filter(lambda name: name[0] not in "/+")
values = st.from_regex(r"[1-9][0-9]{0,2}(k|meg|n|u|p)?", fullmatch=True)


def ground_as_zero(name: str) -> str:
    return "0" if name.casefold() == "gnd" else name.casefold()


@st.composite
def parts(draw: st.DrawFn) -> tuple[str, list[str]]:
    """Return an element line without its reference's number, and its nodes."""
    letter = draw(st.sampled_from("RCLDQMVIUX"))
    count = {"Q": 3, "M": 4, "U": 16, "X": 5}.get(letter, 2)
    nodes = draw(st.lists(names, min_size=count, max_size=count))
    last = "MODEL" if letter in "DQMUX" else draw(values)
    return f"{letter}# {draw(st.sampled_from((' ', '  ', chr(9), chr(10) + '+ '))).join(nodes)} {last}", nodes


@settings(deadline=None, max_examples=100)
@given(st.lists(parts(), min_size=1, max_size=12))
def test_what_was_written_is_read(board: list[tuple[str, list[str]]]) -> None:
    lines = [line.replace("#", str(number), 1) for number, (line, _) in enumerate(board)]
    netlist = read_spice("\n".join(["orchard", *lines]), "x.cir")
    assert len(netlist.parts) == len(board)
    for part, (_, nodes) in zip(netlist.parts.values(), board, strict=True):
        assert [ground_as_zero(pin.net) for pin in part.pins] == [ground_as_zero(node) for node in nodes]
        for index, pin in enumerate(part.pins):
            assert (part.reference, index) in netlist.nets[pin.net].pins


line_scraps = st.sampled_from(
    (
        *("R1 a b 1k", "X1 a s", "V1 a 0 PULSE(1 2)", "K1 L1 L2 1", "Q1 a b c d e f", "{", "'", "+ x", "* c"),
        *(".subckt s p", ".ends", ".if (1)", ".else", ".endif", ".param a={b}", ".param b={a+1}"),
        *(".control", ".endc", ".lib x", ".endl"),
    )
)


def read_or_refused(text: str) -> Netlist | None:
    try:
        return read_spice(text, "x.cir")
    except NetlistError as error:
        str(error)
        return None


@settings(deadline=None, max_examples=150)
@given(st.lists(st.one_of(line_scraps, st.text(max_size=30)), max_size=15))
def test_any_text_is_read_or_refused(lines: list[str]) -> None:
    netlist = read_or_refused("\n".join(["orchard", *lines]))
    if netlist is not None:
        assert all(pin.place.line > 0 for part in netlist.parts.values() for pin in part.pins)


def test_damaged_lists_by_the_script_of_the_long_run() -> None:
    command = [sys.executable, str(SCRIPT), "300", "--seed", "7"]
    run = subprocess.run(command, capture_output=True, text=True, check=False)
    assert (run.returncode, run.stderr) == (0, "")
    assert "0 failed" in run.stdout
