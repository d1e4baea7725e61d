"""The rules on nets: loose ends, names that look alike, grounds; on the supply of a bee-hive scale."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.grammar.netlist import Net, Netlist, Part, Pin, Place
from pwmlint.lint import Outcome, Verdict
from pwmlint.lint.review import review_netlist
from pwmlint.rules.nets import single_pin_net

Ask = Callable[..., list[Verdict]]


def board(*more: str, ground: str = "0") -> str:
    """Return the scale's controller as a SPICE-style list; `ground` is the net of its ground pin."""
    return "\n".join(
        [
            "bee-hive scale",
            "VBAT VBAT 0 24",
            f"U1 FB SET COMP DTC CT RT {ground} DRV 0 0 DRV VBAT 0 VREF VREF 0 494",
            "R5 RT 0 12k",
            "C5 CT 0 10n",
            "R11 VREF SET 5.1k",
            "R12 SET 0 5.1k",
            "R13 OUT FB 5.1k",
            "R14 FB 0 1.3k",
            "R15 DTC 0 1k",
            "R16 VBAT DRV 1k",
            "C3 COMP SET 1n",
            "L1 DRV OUT 100u",
            *more,
            ".end",
            "",
        ]
    )


# --------------------------------------------------------------------------------------- single-pin net


@pytest.mark.parametrize(
    ("part", "pin"),
    [
        pytest.param("R9 OUT LOOSE 10k", "pin 2", id="resistor"),
        pytest.param("C9 LOOSE 0 1n", "pin 1", id="capacitor"),
        pytest.param("D9 LOOSE OUT DX", "pin 1", id="diode"),
        pytest.param("Q9 OUT LOOSE 0 QX", "pin 2", id="transistor's base"),
    ],
)
def test_a_loose_end_fails(ask: Ask, part: str, pin: str) -> None:
    (verdict,) = ask("connections.single-pin-net", board(part))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "warning")
    assert verdict.nets == ("LOOSE",)
    assert f"of {verdict.subject} is alone on net LOOSE" in verdict.message
    assert verdict.message.startswith(pin)
    assert verdict.places[0].line == 14


def test_nets_of_two_pins_pass(ask: Ask) -> None:
    (verdict,) = ask("connections.single-pin-net", board())
    assert verdict.outcome is Outcome.PASS


@pytest.mark.parametrize(
    "part",
    [
        pytest.param("TP3 PROBE", id="test point"),
        pytest.param("MH1 HOLE", id="mounting hole"),
        pytest.param("J3 OUT SPARE AUX TERMINAL", id="connector"),
        pytest.param("BEFF ETA 0 V=V(OUT)/24", id="a simulation's own net"),
    ],
)
def test_ends_that_are_meant_to_be_loose_pass(ask: Ask, part: str) -> None:
    (verdict,) = ask("connections.single-pin-net", board(part))
    assert verdict.outcome is Outcome.PASS


def test_spare_pins_of_larger_parts_are_only_listed(ask: Ask) -> None:
    (verdict,) = ask("connections.single-pin-net", board("U7 OUT N7 0 VBAT N8 OPAMP"))
    assert verdict.outcome is Outcome.INFORMATIONAL
    assert verdict.message == "taken as unused: U7 pin 2, U7 pin 5"
    assert verdict.nets == ("N7", "N8")


def test_a_pin_that_the_file_leaves_out_of_all_nets_fails() -> None:
    place = Place("scale.edf", 9, 5)
    netlist = Netlist("scale.edf", "EDIF 2 0 0")
    for reference, nets in (("R1", ("A", "")), ("R2", ("A", "B")), ("U3", ("A", "B", ""))):
        pins = [Pin(str(number), "", net, place) for number, net in enumerate(nets, 1)]
        netlist.parts[reference] = Part(reference, "", "1k", "", pins, place, pins_known="numbers")
    netlist.nets["A"] = Net("A", place, [("R1", 0), ("R2", 0), ("U3", 0)])
    netlist.nets["B"] = Net("B", place, [("R2", 1), ("U3", 1)])
    fail, unused = review_netlist(netlist, rules=[single_pin_net]).verdicts
    assert (fail.outcome, fail.message) == (Outcome.FAIL, "pin 2 of R1 is not connected")
    assert (unused.outcome, unused.message) == (Outcome.INFORMATIONAL, "taken as unused: U3 pin 3")


def test_an_option_that_is_not_fitted_leaves_no_loose_end(ask: Ask) -> None:
    (verdict,) = ask("connections.single-pin-net", board("R9 OUT SNUB 10", "C9 SNUB 0 DNP"))
    assert verdict.outcome is Outcome.PASS


# ------------------------------------------------------------------------------------------- near names


@pytest.mark.parametrize(
    ("one", "other"),
    [
        pytest.param("VOUT", "V_OUT", id="underscore"),
        pytest.param("12V", "+12V", id="leading plus"),
        pytest.param("SENSE-A", "SENSEA", id="hyphen"),
        pytest.param("VO", "V0", id="letter O for digit 0"),
        pytest.param("LIM_I", "LIM1", id="letter I for digit 1"),
    ],
)
def test_names_that_look_alike_are_for_a_person_to_judge(ask: Ask, one: str, other: str) -> None:
    (verdict,) = ask("connections.near-names", board(f"R8 {one} 0 1k", f"R9 {other} 0 1k"))
    assert verdict.outcome is Outcome.REVIEW
    assert verdict.nets == (one, other)
    assert [place.line for place in verdict.places] == [14, 15]


@pytest.mark.parametrize(
    ("one", "other"),
    [
        pytest.param("VCC1", "VCC2", id="numbered"),
        pytest.param("12V", "-12V", id="sign"),
        pytest.param("IN+", "IN-", id="inputs"),
        pytest.param("N001", "N01", id="a tool's numbers"),
        pytest.param("3.3V", "33V", id="decimal point"),
        pytest.param("OUT1_1", "OUT11", id="two numbers"),
        pytest.param("RESET", "/RESET", id="active low"),
        pytest.param("psu/FB", "mast/FB", id="two sheets"),
        pytest.param("Net-(R1-Pad1)", "Net-(R1-Pad-1)", id="made by a tool"),
        pytest.param("OUT", "OUTA", id="a letter more"),
    ],
)
def test_neighbours_that_are_meant_raise_no_alarm(ask: Ask, one: str, other: str) -> None:
    (verdict,) = ask("connections.near-names", board(f"R8 {one} 0 1k", f"R9 {other} 0 1k"))
    assert verdict.outcome is Outcome.PASS


def test_two_rails_that_the_brief_knows_are_two(ask: Ask) -> None:
    brief = '[rails."12V"]\nvoltage = "12 V"\n[rails."+12V"]\nvoltage = "12 V"\n'
    (verdict,) = ask("connections.near-names", board("R8 12V 0 1k", "R9 +12V 0 1k"), brief=brief)
    assert verdict.outcome is Outcome.PASS


# ----------------------------------------------------------------------------------------------- ground


def test_one_ground_passes(ask: Ask) -> None:
    (verdict,) = ask("connections.ground", board())
    assert (verdict.outcome, verdict.message) == (Outcome.PASS, "one ground: 0")


@pytest.mark.parametrize(
    "tie",
    [
        pytest.param("R9 PGND 0 0", id="zero-ohm link"),
        pytest.param("JP1 PGND 0 LINK", id="jumper"),
        pytest.param("NT1 PGND 0 TIE", id="net tie"),
        pytest.param("L9 PGND 0 1u", id="choke"),
        pytest.param("R9 PGND 0 0.05", id="current sense"),
    ],
)
def test_grounds_that_are_tied_pass(ask: Ask, tie: str) -> None:
    (verdict,) = ask("connections.ground", board("R8 OUT PGND 10k", tie))
    assert verdict.outcome is Outcome.PASS
    assert verdict.nets == ("0", "PGND")
    assert verdict.assumptions == ("net PGND taken for ground by its name",)


def test_grounds_joined_by_signal_parts_only_fail(ask: Ask) -> None:
    (verdict,) = ask("connections.ground", board("R8 OUT PGND 10k", "C9 PGND 0 100n"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.nets == ("0", "PGND")
    assert "nothing ties them" in verdict.message


def test_a_controller_on_a_ground_of_its_own_fails(ask: Ask) -> None:
    (verdict,) = ask("connections.ground", board("C9 COLD 0 100n", ground="COLD"))
    assert verdict.outcome is Outcome.FAIL
    assert set(verdict.nets) == {"0", "COLD"}


def test_isolated_sides_raise_no_alarm(ask: Ask) -> None:
    secondary = ("T1 DRV VBAT SEC SGND FERRITE", "D9 SEC ISO DX", "C8 ISO SGND 10u", "R8 ISO SGND 1k")
    barrier = ("C9 SGND 0 2.2n", "R9 SGND 0 10MEG", "U8 ISO SGND SET 0 OPTO")
    (verdict,) = ask("connections.ground", board(*secondary, *barrier))
    assert verdict.outcome is Outcome.INFORMATIONAL
    assert "isolated from each other" in verdict.message


def test_a_list_without_any_ground_is_open(ask: Ask) -> None:
    (verdict,) = ask("connections.ground", "scale\nR1 A B 1k\nR2 B A 1k\n.end\n")
    assert verdict.outcome is Outcome.OPEN
    assert verdict.needs == ("netlist: a net called GND or 0",)
