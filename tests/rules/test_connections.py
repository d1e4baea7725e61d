"""The rules on connections, on the controller of a weather mast's battery supply."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.grammar.netlist import Net, Netlist, Part, Pin, Place
from pwmlint.lint import Outcome, Verdict
from pwmlint.lint.review import review_netlist

Ask = Callable[..., list[Verdict]]

PINS = "FB SET COMP DTC CT RT 0 DRV 0 0 DRV VBAT 0 VREF VREF 0"

PARTS = {
    "VBAT": "VBAT 0 24",
    "R5": "RT 0 12k",
    "C5": "CT 0 10n",
    "R11": "VREF SET 5.1k",
    "R12": "SET 0 5.1k",
    "R13": "OUT FB 5.1k",
    "R14": "FB 0 1.3k",
    "R15": "DTC 0 1k",
    "R16": "VBAT DRV 1k",
    "C3": "COMP SET 1n",
    "L1": "DRV OUT 100u",
}


def board(*more: str, pins: str = PINS, without: tuple[str, ...] = (), title: str = "weather mast") -> str:
    """Return the mast's controller as a SPICE-style list, with parts added or left out."""
    parts = [f"{name} {rest}" for name, rest in PARTS.items() if name not in without]
    return "\n".join([title, f"U1 {pins} 494", *parts, *more, ".end", ""])


def failures(verdicts: list[Verdict]) -> list[Verdict]:
    return [verdict for verdict in verdicts if verdict.outcome is Outcome.FAIL]


# ------------------------------------------------------------------------------------- controller-found


def test_a_controller_with_all_pins_mapped_passes(ask: Ask) -> None:
    (verdict,) = ask("connections.controller-found", board())
    assert (verdict.outcome, verdict.subject) == (Outcome.PASS, "U1")
    assert "U1 is a 494" in verdict.message
    assert any("first node = pin 1" in assumption for assumption in verdict.assumptions)


def test_without_a_controller_it_is_open_and_lists_what_was_looked_for(ask: Ask) -> None:
    (verdict,) = ask("connections.controller-found", "orchard gate\nR1 A 0 1k\nC1 A 0 1n\n.end\n")
    assert verdict.outcome is Outcome.OPEN
    for number in ("494", "594", "7500"):
        assert number in verdict.message
    assert verdict.needs


def test_a_part_with_the_number_but_few_pins_is_named(ask: Ask) -> None:
    (verdict,) = ask(
        "connections.controller-found", "orchard gate\nU7 A B 0 494\nR1 A B 1k\nR2 B 0 1k\n.end\n"
    )
    assert verdict.outcome is Outcome.OPEN
    assert "U7 has the number but only 3 pins" in verdict.message


def test_pins_that_cannot_be_mapped_are_open_with_the_line_to_add(ask: Ask) -> None:
    (verdict,) = ask("connections.controller-found", board(pins="FB SET COMP DTC CT RT 0 DRV 0 VREF"))
    assert verdict.outcome is Outcome.OPEN
    assert "16 of its 16 pins are not mapped" in verdict.message
    assert "[controllers.U1]" in verdict.needs[0]


def test_a_controller_that_only_the_brief_knows_is_open(ask: Ask) -> None:
    brief = '[controllers.U2]\ntopology = "push-pull"\n'
    verdicts = ask("connections.controller-found", board(), brief=brief)
    assert [verdict.outcome for verdict in verdicts] == [Outcome.PASS, Outcome.OPEN]
    assert verdicts[1].message == "the brief tells of a controller U2; the controllers found are U1"
    assert verdicts[1].places[0].file.endswith(".brief.toml")


# --------------------------------------------------------------------------------------------- pin-open


def test_driven_pins_pass_in_one_verdict(ask: Ask) -> None:
    (verdict,) = ask("connections.pin-open", board())
    assert verdict.outcome is Outcome.PASS
    assert "dead time" in verdict.pins
    assert "feedback" not in verdict.pins  # it may stay open, and nothing was asked of it


@pytest.mark.parametrize(
    ("pins", "role"),
    [
        pytest.param(PINS.replace("DTC", "NX1"), "dead time", id="dead time"),
        pytest.param(PINS.replace("RT", "NX1"), "timing resistor", id="timing resistor"),
        pytest.param(PINS.replace("DRV VBAT 0", "DRV VBAT NX1"), "output control", id="output control"),
        pytest.param(PINS.replace("DRV VBAT 0", "DRV NX1 0"), "supply", id="supply"),
        pytest.param(f"{PINS[: PINS.rindex(' ')]} NX1", "amplifier 2 in+", id="amplifier 2 in+"),
    ],
)
def test_a_pin_alone_on_its_net_fails(ask: Ask, pins: str, role: str) -> None:
    fails = failures(ask("connections.pin-open", board(pins=pins)))
    assert [verdict.pins for verdict in fails] == [(role,)]
    assert fails[0].level == "error"
    assert fails[0].nets == ("NX1",)
    assert fails[0].places[0].line == 2
    assert fails[0].remedy


def test_inputs_joined_to_nothing_but_each_other_hang_open(ask: Ask) -> None:
    pins = "FB SET COMP DTC CT RT 0 DRV 0 0 DRV VBAT 0 VREF NX NX"
    fails = failures(ask("connections.pin-open", board(pins=pins)))
    assert {verdict.pins[0] for verdict in fails} == {"amplifier 2 in-", "amplifier 2 in+"}


def test_a_test_point_drives_nothing(ask: Ask) -> None:
    fails = failures(ask("connections.pin-open", board("TP1 DTC", without=("R15",))))
    assert [verdict.pins for verdict in fails] == [("dead time",)]


@pytest.mark.parametrize(
    "pins",
    [
        pytest.param("FB SET NX DTC CT RT 0 DRV 0 0 DRV VBAT 0 VREF VREF 0", id="feedback open"),
        pytest.param("FB SET COMP DTC CT RT 0 DRV 0 NX NY VBAT 0 VREF VREF 0", id="second output unused"),
        pytest.param("FB SET COMP DTC CT RT 0 DRV 0 0 DRV VBAT NR NR NR 0", id="tied to the reference only"),
        pytest.param("FB COMP COMP DTC CT RT 0 DRV 0 0 DRV VBAT 0 VREF VREF 0", id="follower"),
    ],
)
def test_what_may_hang_open_raises_no_alarm(ask: Ask, pins: str) -> None:
    assert not failures(ask("connections.pin-open", board(pins=pins)))


def test_a_pin_that_the_file_leaves_out_of_all_nets_fails() -> None:
    place = Place("mast.edf", 7, 3)
    netlist = Netlist("mast.edf", "EDIF 2 0 0")
    pins = [Pin(str(number), "", f"N{number}" if number != 4 else "", place) for number in range(1, 17)]
    netlist.parts["U1"] = Part("U1", "", "494", "", pins, place, pins_known="numbers")
    netlist.parts["J1"] = Part("J1", "", "", "", pins, place, pins_known="numbers")
    for index, pin in enumerate(pins):
        if pin.net:
            netlist.nets[pin.net] = Net(pin.net, place, [("U1", index), ("J1", index)])
    verdicts = review_netlist(netlist).verdicts
    (fail,) = [v for v in verdicts if v.rule == "connections.pin-open" and v.outcome is Outcome.FAIL]
    assert fail.message == "DTC (pin 4, dead time) is not connected"


# ------------------------------------------------------------------------------------------ duplicates


def test_two_parts_under_one_reference_fail(ask: Ask) -> None:
    (verdict,) = ask("connections.duplicate-reference", board("R15 VREF 0 2.2k"))
    assert (verdict.outcome, verdict.level, verdict.subject) == (Outcome.FAIL, "error", "R15")
    assert verdict.places[0].line > 2


def test_references_used_once_pass(ask: Ask) -> None:
    (verdict,) = ask("connections.duplicate-reference", board())
    assert verdict.outcome is Outcome.PASS
    assert verdict.message.startswith("12 parts")


# ---------------------------------------------------------------------------------------- shorted parts


@pytest.mark.parametrize("part", ["R9 OUT OUT 10k", "C9 OUT OUT 1n", "L9 OUT OUT 10u", "RV1 OUT OUT OUT 10k"])
def test_a_part_with_all_ends_on_one_net_fails(ask: Ask, part: str) -> None:
    (verdict,) = ask("connections.shorted-part", board(part))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.nets == ("OUT",)
    assert verdict.parts == (part.split()[0],)


@pytest.mark.parametrize(
    "part",
    [
        pytest.param("R9 0 0 0", id="zero-ohm link"),
        pytest.param("J3 OUT OUT TERMINAL", id="connector with two pins in parallel"),
        pytest.param("R9 OUT 0 10k", id="part between two nets"),
        pytest.param("C3A COMP SET 1n", id="part in parallel with another"),
    ],
)
def test_what_may_have_both_ends_on_one_net_passes(ask: Ask, part: str) -> None:
    (verdict,) = ask("connections.shorted-part", board(part))
    assert verdict.outcome is Outcome.PASS


# ------------------------------------------------------------------------------------------- title line


def test_a_first_line_that_reads_as_a_part_is_for_a_person_to_judge(ask: Ask) -> None:
    (verdict,) = ask("connections.title-line", board(title="R10 VREF 0 4.7k"))
    assert verdict.outcome is Outcome.REVIEW
    assert verdict.places[0].line == 1


@pytest.mark.parametrize("title", ["weather mast", "* weather mast, 24 V", "Rail supply for the mast"])
def test_a_title_passes(ask: Ask, title: str) -> None:
    (verdict,) = ask("connections.title-line", board(title=title))
    assert verdict.outcome is Outcome.PASS


def test_formats_without_a_title_line_are_not_asked() -> None:
    verdicts = review_netlist(Netlist("mast.edf", "EDIF 2 0 0")).verdicts
    assert not [verdict for verdict in verdicts if verdict.rule == "connections.title-line"]
