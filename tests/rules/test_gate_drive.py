"""The gate drive's rules, on the switches of an irrigation pump."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]

COLLECTOR, EMITTER = "D1 0 NC3 NC2", "VBAT D1 NC3 NC2"

P_BUCK = ("M1 SW G VBAT VBAT PM", "D9 0 SW DS", "L1 SW OUT 100u")
N_BOOST = ("M1 SW G 0 0 NM", "D9 SW OUT DS", "L1 VBAT SW 100u")

# A follower that empties the gate, as by the books: emitter to the gate, base to the output, a diode across.
EMPTIED = ("D8 D1 G DS", "Q8 0 D1 G QP", "R16 D1 0 1k", "R17 G 0 10k")


def board(outputs: str, parts: tuple[str, ...], *, volts: str = "12", timing: str = "1n") -> str:
    lines = [
        "irrigation pump",
        f"VBAT VBAT 0 {volts}",
        f"U1 FB SET COMP DTC CT RT 0 {outputs} VBAT 0 VREF VREF 0 494",
        "R5 RT 0 22k",
        f"C5 CT 0 {timing}",
        "R11 VREF SET 5k1",
        "R12 SET 0 5k1",
        "R13 OUT FB 5k1",
        "R14 FB 0 1k3",
        "R15 DTC 0 1k",
        *parts,
        ".model PM PMOS",
        ".model NM NMOS",
        ".model QP PNP",
        ".model QN NPN",
        ".model DS D",
        ".end",
    ]
    return "\n".join(lines) + "\n"


# --------------------------------------------------------------------------------------------- polarity


@pytest.mark.parametrize(
    ("outputs", "parts"),
    [
        pytest.param(COLLECTOR, (*P_BUCK, "R16 VBAT G 470", "R17 G D1 10"), id="P-channel, pulled down"),
        pytest.param(EMITTER, (*N_BOOST, "R16 G 0 470", "R17 G D1 10"), id="N-channel, pulled up"),
        pytest.param(EMITTER, (*N_BOOST, *EMPTIED), id="N-channel, by a follower"),
        pytest.param(
            COLLECTOR,
            (*N_BOOST, "R16 VBAT D1 1k", "R17 D1 B 1k", "Q8 G B VBAT QP", "R18 G 0 470"),
            id="N-channel, collector through an inverting PNP",
        ),
    ],
)
def test_a_switch_turned_on_by_its_output_passes(ask: Ask, outputs: str, parts: tuple[str, ...]) -> None:
    (verdict,) = ask("gate-drive.polarity", board(outputs, parts))
    assert verdict.outcome is Outcome.PASS, verdict.message


@pytest.mark.parametrize(
    ("outputs", "parts"),
    [
        pytest.param(COLLECTOR, (*N_BOOST, "R16 VBAT G 470", "R17 G D1 10"), id="N-channel on a collector"),
        pytest.param(EMITTER, (*P_BUCK, "R16 G 0 470", "R17 G D1 10"), id="P-channel on an emitter"),
        pytest.param(
            EMITTER,
            (*N_BOOST, "R16 D1 B 1k", "Q8 G B 0 QN", "R18 VBAT G 470", "R19 D1 0 1k"),
            id="N-channel, emitter through an inverting NPN",
        ),
    ],
)
def test_a_switch_turned_off_by_its_output_fails(ask: Ask, outputs: str, parts: tuple[str, ...]) -> None:
    (verdict,) = ask("gate-drive.polarity", board(outputs, parts))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert "turns it off" in verdict.message


def test_behind_a_driver_circuit_nothing_is_said_of_the_polarity(ask: Ask) -> None:
    parts = (*N_BOOST, "XU5 D1 G VBAT 0 DRIVER", "R16 D1 0 1k")
    assert ask("gate-drive.polarity", board(EMITTER, parts)) == []


def test_without_a_switch_nothing_is_said(ask: Ask) -> None:
    netlist = board(COLLECTOR, ("R16 VBAT D1 1k",))
    for rule in ("polarity", "pull-down", "turn-off", "voltage"):
        assert ask(f"gate-drive.{rule}", netlist) == []


# -------------------------------------------------------------------------------------------- pull-down


@pytest.mark.parametrize(
    ("outputs", "parts", "outcome"),
    [
        pytest.param(EMITTER, (*N_BOOST, "R16 G 0 470", "R17 G D1 10"), Outcome.PASS, id="at the gate"),
        pytest.param(EMITTER, (*N_BOOST, "R16 D1 0 470", "R17 G D1 10"), Outcome.PASS, id="at the output"),
        pytest.param(EMITTER, (*N_BOOST, *EMPTIED[:3]), Outcome.REVIEW, id="by the driver only"),
        pytest.param(EMITTER, (*N_BOOST, "R17 G D1 10"), Outcome.FAIL, id="by nothing"),
    ],
)
def test_the_gate_is_held(ask: Ask, outputs: str, parts: tuple[str, ...], outcome: Outcome) -> None:
    (verdict,) = ask("gate-drive.pull-down", board(outputs, parts))
    assert verdict.outcome is outcome


def test_a_follower_that_holds_the_gate_by_itself_is_told_as_that(ask: Ask) -> None:
    (verdict,) = ask("gate-drive.pull-down", board(EMITTER, (*N_BOOST, *EMPTIED[:3])))
    assert verdict.message == "no resistor holds the gate of M1, Q8 does to a junction's drop"


def test_a_base_needs_no_pull_down(ask: Ask) -> None:
    """False alarm guarded against: a bipolar switch without base current is off."""
    parts = ("Q1 SW B 0 QN", "R16 D1 B 220", "D9 SW OUT DS", "L1 VBAT SW 100u")
    assert ask("gate-drive.pull-down", board(EMITTER, parts)) == []


# --------------------------------------------------------------------------------------------- turn-off


def test_a_transistor_that_empties_the_gate_passes(ask: Ask) -> None:
    (verdict,) = ask("gate-drive.turn-off", board(EMITTER, (*N_BOOST, *EMPTIED)))
    assert verdict.outcome is Outcome.PASS
    assert "Q8 empties" in verdict.message


@pytest.mark.parametrize(
    ("timing", "capacitance", "outcome"),
    [
        # 2 % of 20 us (22 kohm x 1 nF / 1.1) over 480 ohm: 0.83 nF; ten times that at 5 kHz
        pytest.param("1n", "833 pF", Outcome.REVIEW, id="50 kHz"),
        pytest.param("10n", "8.33 nF", Outcome.PASS, id="5 kHz"),
    ],
)
def test_a_resistor_empties_as_much_gate_as_the_period_leaves_time_for(
    ask: Ask, timing: str, capacitance: str, outcome: Outcome
) -> None:
    parts = (*N_BOOST, "R16 D1 0 470", "R17 G D1 10")
    (verdict,) = ask("gate-drive.turn-off", board(EMITTER, parts, timing=timing))
    assert verdict.outcome is outcome
    assert capacitance in verdict.message


# ---------------------------------------------------------------------------------------------- voltage


def test_a_usual_gate_voltage_passes_with_its_figure(ask: Ask) -> None:
    # 12 V less the follower's 1.5 V (SLVS074 p.5) over 10 ohm and 470 ohm
    parts = (*N_BOOST, "R16 G 0 470 0%", "R17 G D1 10 0%")
    (verdict,) = ask("gate-drive.voltage", board(EMITTER, parts))
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(10.5 * 470 / 480)


@pytest.mark.parametrize(
    ("volts", "says"),
    [
        pytest.param("28", "above the usual 20 V", id="high"),
        pytest.param("6", "below the usual 4.5 V", id="low"),
    ],
)
def test_an_unusual_gate_voltage_is_for_a_person(ask: Ask, volts: str, says: str) -> None:
    parts = (*N_BOOST, "R16 G 0 470", "R17 G D1 10")
    (verdict,) = ask("gate-drive.voltage", board(EMITTER, parts, volts=volts))
    assert verdict.outcome is Outcome.REVIEW
    assert says in verdict.message


def test_a_clamp_at_the_gate_is_taken_for_one(ask: Ask) -> None:
    """False alarm guarded against: a diode from gate to source whose voltage nothing states."""
    parts = (*P_BUCK, "R16 VBAT G 470", "R17 G D1 10", "D8 G VBAT DS")
    (verdict,) = ask("gate-drive.voltage", board(COLLECTOR, parts, volts="28"))
    assert verdict.outcome is Outcome.PASS
    assert "D8 clamps it" in verdict.message


def test_behind_an_inverting_driver_the_gate_voltage_is_not_solved_and_not_claimed(ask: Ask) -> None:
    parts = (*N_BOOST, "R16 VBAT D1 1k", "R17 D1 B 1k", "Q8 G B VBAT QP", "R18 G 0 470")
    assert ask("gate-drive.voltage", board(COLLECTOR, parts)) == []
