"""Dead time against the switches, on the push-pull supply of a cider press."""

from __future__ import annotations

from collections.abc import Callable

from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]

# 12 kohm and 1 nF: 83 kHz to 100 kHz; DTC at ground: 3 % of 10 us is about 0.3 us.
BOARD = """cider press, switches only
U1 FB SET COMP DTC CT RT 0 VBAT G1 G2 VBAT VBAT REF REF 0 REF 494
R1 RT 0 12k tol=1
C1 CT 0 1n tol=1
{dead_time}
R4 REF SET 4.7k
R5 SET 0 4.7k
R6 OUT FB 43k
R7 FB 0 4.7k
{gates}
M1 DA G1 0 0 NF
M2 DB G2 0 0 NF
L1 VBAT DA 10u
L2 DB VBAT 10u
L3 SA 0 40u
L4 0 SB 40u
K1 L1 L2 L3 L4 0.99
D1 SA RECT DS
D2 SB RECT DS
L5 RECT OUT 100u
C2 OUT 0 220u
.model NF NMOS
.model DS D
.end
"""
RESISTORS = "R8 G1 0 {ohms}\nR9 G2 0 {ohms}"
DIVIDER = "R2 REF DTC 15k\nR3 DTC 0 1k"


def test_a_gate_emptied_within_the_dead_time_passes(ask: Ask) -> None:
    board = BOARD.format(dead_time=DIVIDER, gates=RESISTORS.format(ohms="47"))
    found = ask("dead-time.shoot-through", board)
    assert [verdict.outcome for verdict in found] == [Outcome.PASS, Outcome.PASS]
    assert found[0].parts[0] == "M1"
    # dead time of at least 1 us into 2.3 x 49.4 ohm: some nanofarads
    assert "of gate of M1 within the least dead time" in found[0].message


def test_a_gate_emptied_too_slowly_is_for_a_person(ask: Ask) -> None:
    board = BOARD.format(dead_time="R2 DTC 0 10", gates=RESISTORS.format(ohms="4.7k"))
    found = ask("dead-time.shoot-through", board)
    assert [verdict.outcome for verdict in found] == [Outcome.REVIEW, Outcome.REVIEW]
    assert "raise the dead time" in found[0].remedy


def test_a_gate_that_nothing_empties_is_for_a_person(ask: Ask) -> None:
    found = ask("dead-time.shoot-through", BOARD.format(dead_time=DIVIDER, gates=""))
    assert {verdict.outcome for verdict in found} == {Outcome.REVIEW}
    assert "nothing is seen to empty the gate of M1" in found[0].message


def test_a_driver_that_empties_the_gate_is_named(ask: Ask) -> None:
    drivers = "Q1 0 E1 G1 QP\nD3 E1 G1 DS\nR8 E1 0 1k\nQ2 0 E2 G2 QP\nD4 E2 G2 DS\nR9 E2 0 1k\n.model QP PNP"
    board = BOARD.format(dead_time=DIVIDER, gates=drivers).replace("VBAT G1 G2 VBAT", "VBAT E1 E2 VBAT")
    found = ask("dead-time.shoot-through", board)
    assert {verdict.outcome for verdict in found} == {Outcome.INFORMATIONAL}
    assert "Q1 has" in found[0].message


def test_a_drive_transformer_between_pairs_is_said_not_to_be_computed(ask: Ask) -> None:
    """False alarm guarded against: its primary is driven up and down, so it empties the gates."""
    pairs = "".join(f"Q{n}1 VBAT E{n} P{n} QN\nQ{n}2 0 E{n} P{n} QP\nR1{n} E{n} 0 1k\n" for n in (1, 2))
    gates = "T1 P1 P2 G1 0 G2 0 DRIVE\nR8 G1 0 10k\nR9 G2 0 10k\n.model QP PNP\n.model QN NPN"
    board = BOARD.format(dead_time=DIVIDER, gates=pairs + gates)
    found = ask("dead-time.shoot-through", board.replace("VBAT G1 G2 VBAT", "VBAT E1 E2 VBAT"))
    assert [verdict.outcome for verdict in found] == [Outcome.INFORMATIONAL] * 2
    assert found[0].message.startswith("T1 drives the gate of M1")


def test_bipolar_switches_are_told_their_time(ask: Ask) -> None:
    board = BOARD.format(dead_time=DIVIDER, gates=RESISTORS.format(ohms="47"))
    board = board.replace("M1 DA G1 0 0 NF", "Q1 DA G1 0 QN").replace("M2 DB G2 0 0 NF", "Q2 DB G2 0 QN")
    found = ask("dead-time.shoot-through", board.replace(".model NF NMOS", ".model QN NPN"))
    assert {verdict.outcome for verdict in found} == {Outcome.INFORMATIONAL}
    assert "storage time" in found[0].message


def test_a_single_switch_has_nothing_to_meet(ask: Ask) -> None:
    board = BOARD.format(dead_time=DIVIDER, gates="R8 G1 0 47").replace("M2 DB G2 0 0 NF\n", "")
    assert (
        ask("dead-time.shoot-through", board.replace("L2 DB VBAT 10u\n", "").replace("K1 L1 L2", "K1 L1"))
        == []
    )


def test_without_a_frequency_or_a_voltage_it_is_silent(ask: Ask) -> None:
    gates = RESISTORS.format(ohms="47")
    assert ask("dead-time.shoot-through", BOARD.format(dead_time="C9 DTC 0 1u", gates=gates)) == []
    board = BOARD.format(dead_time=DIVIDER, gates=gates).replace("R1 RT 0 12k tol=1\n", "")
    assert ask("dead-time.shoot-through", board) == []
