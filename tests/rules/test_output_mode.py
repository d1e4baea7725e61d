"""The output mode's rules, on the controller of a cider press with its output pins wired in many ways."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]


def board(*parts: str, mode: str = "0", outputs: str = "DRV 0 0 DRV") -> str:
    """Return a cider-press controller as a SPICE-style list; `outputs` are C1 E1 E2 C2."""
    lines = [
        "cider press",
        "VBAT VBAT 0 24",
        f"U1 FB SET COMP DTC CT RT 0 {outputs} VBAT {mode} VREF VREF 0 494",
        "R5 RT 0 12k",
        "C5 CT 0 10n",
        "R11 VREF SET 5k1",
        "R12 SET 0 5k1",
        "R13 OUT FB 5k1",
        "R14 FB 0 1k3",
        "R15 DTC 0 1k",
        "R16 VBAT DRV 1k",
        "R17 VBAT DRV2 1k",
        "R18 GA 0 1k",
        "R19 GB 0 1k",
        *parts,
        ".end",
    ]
    return "\n".join(lines) + "\n"


def brief(topology: str) -> str:
    return f'[controllers.U1]\ntopology = "{topology}"\n'


# ----------------------------------------------------------------------------------------------- wiring


@pytest.mark.parametrize(
    ("mode", "parts", "says"),
    [
        pytest.param("0", (), "single-ended mode", id="ground"),
        pytest.param("VREF", (), "push-pull mode", id="reference"),
        pytest.param("OC", ("R8 OC 0 100",), "through R8: single-ended", id="100 ohm to ground"),
        pytest.param("OC", ("R8 VREF OC 47",), "through R8: push-pull", id="47 ohm to the reference"),
    ],
)
def test_a_tie_to_ground_or_reference_passes(ask: Ask, mode: str, parts: tuple[str, ...], says: str) -> None:
    (verdict,) = ask("output-mode.wiring", board(*parts, mode=mode))
    assert verdict.outcome is Outcome.PASS
    assert says in verdict.message


def test_a_divider_between_the_states_fails_with_its_voltage(ask: Ask) -> None:
    # 5 V halved by 10 kohm and 10 kohm, with the pin's own 0.2 mA at 5 V as a load: 2.5 V / (1 + 5 / 25)
    (verdict,) = ask("output-mode.wiring", board("R8 VREF OC 10k", "R9 OC 0 10k", mode="OC"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(2.5 / 1.2)
    assert "between the two states" in verdict.message


def test_an_open_pin_fails(ask: Ask) -> None:
    (verdict,) = ask("output-mode.wiring", board(mode="OC"))
    assert verdict.outcome is Outcome.FAIL
    assert "hangs open" in verdict.message
    assert "tie OUTPUT CTRL to ground" in verdict.remedy


def test_a_pull_up_too_weak_for_the_pins_own_current_fails(ask: Ask) -> None:
    # SLVS074 p.5: up to 3.5 mA into the pin at the reference: 1 kohm may drop 3.5 V of the 5 V
    (verdict,) = ask("output-mode.wiring", board("R8 VREF OC 1k", mode="OC"))
    assert verdict.outcome is Outcome.FAIL


@pytest.mark.parametrize(
    ("mode", "parts", "reads"),
    [
        pytest.param("OC", ("R8 OC 0 1k",), "single-ended", id="weak tie to ground"),
        pytest.param("VBAT", (), "push-pull", id="at the supply"),
    ],
)
def test_a_state_made_in_an_unusual_way_is_for_a_person(
    ask: Ask, mode: str, parts: tuple[str, ...], reads: str
) -> None:
    (verdict,) = ask("output-mode.wiring", board(*parts, mode=mode))
    assert verdict.outcome is Outcome.REVIEW
    assert f"reads as {reads}" in verdict.message


def test_a_pin_driven_by_logic_is_open(ask: Ask) -> None:
    (verdict,) = ask("output-mode.wiring", board("X7 OC VBAT 0 LOGIC", mode="OC"))
    assert verdict.outcome is Outcome.OPEN
    assert any("OC" in need for need in verdict.needs)


# --------------------------------------------------------------------------------------------- topology


@pytest.mark.parametrize(
    ("mode", "topology"),
    [("0", "single-ended"), ("VREF", "push-pull"), ("VREF", "half-bridge"), ("VREF", "full-bridge")],
)
def test_a_mode_that_fits_passes(ask: Ask, mode: str, topology: str) -> None:
    (verdict,) = ask("output-mode.topology", board(mode=mode), brief=brief(topology))
    assert verdict.outcome is Outcome.PASS


@pytest.mark.parametrize("topology", ["push-pull", "half-bridge", "full-bridge"])
def test_switches_on_together_fail(ask: Ask, topology: str) -> None:
    netlist = board(outputs="DRV 0 0 DRV2")
    (verdict,) = ask("output-mode.topology", netlist, brief=brief(topology))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert "on together" in verdict.message
    assert verdict.remedy == "tie OUTPUT CTRL to the reference"


def test_a_single_ended_stage_on_two_alternating_outputs_fails(ask: Ask) -> None:
    netlist = board(mode="VREF", outputs="DRV 0 0 DRV2")
    (verdict,) = ask("output-mode.topology", netlist, brief=brief("single-ended"))
    assert verdict.outcome is Outcome.FAIL
    assert verdict.remedy == "tie OUTPUT CTRL to ground"


def test_one_output_in_push_pull_mode_is_for_a_person(ask: Ask) -> None:
    """False alarm guarded against: a forward converter limits its duty below one half this way."""
    netlist = board(mode="VREF", outputs="DRV 0 0 NC2")
    (verdict,) = ask("output-mode.topology", netlist, brief=brief("single-ended"))
    assert verdict.outcome is Outcome.REVIEW
    assert [v.outcome for v in ask("output-mode.outputs-used", netlist, brief=brief("single-ended"))] == [
        Outcome.PASS
    ]


def test_without_a_topology_the_question_is_open(ask: Ask) -> None:
    (verdict,) = ask("output-mode.topology", board())
    assert verdict.outcome is Outcome.OPEN
    assert verdict.needs == ('brief: [controllers.U1] topology = "..."',)


PUSH_PULL = (
    "M1 PA DRV 0 0 NM",
    "M2 PB DRV2 0 0 NM",
    "TR1 PA VBAT PB SA 0 SB PRESS",
    "D1 SA RECT DS",
    "D2 SB RECT DS",
    "L1 RECT OUT 100u",
    ".model NM NMOS",
    ".model DS D",
)


@pytest.mark.parametrize(("mode", "outcome"), [("VREF", Outcome.PASS), ("0", Outcome.FAIL)])
def test_without_a_brief_the_recognised_power_stage_counts(ask: Ask, mode: str, outcome: Outcome) -> None:
    netlist = board(*PUSH_PULL, mode=mode, outputs="DRV 0 0 DRV2")
    (verdict,) = ask("output-mode.topology", netlist)
    assert verdict.outcome is outcome
    assert "the power stage (push-pull)" in verdict.message
    assert any(sentence.startswith("M1 (N-channel MOSFET)") for sentence in verdict.assumptions)


def test_without_a_mode_the_other_rules_are_silent(ask: Ask) -> None:
    netlist = board("R8 VREF OC 10k", "R9 OC 0 10k", mode="OC")
    assert ask("output-mode.topology", netlist, brief=brief("push-pull")) == []
    assert ask("output-mode.outputs-used", netlist, brief=brief("push-pull")) == []


# ----------------------------------------------------------------------------------------- outputs-used


@pytest.mark.parametrize(
    ("mode", "outputs"),
    [
        pytest.param("0", "DRV 0 0 DRV", id="joined, common emitter"),
        pytest.param("0", "VBAT GA GA VBAT", id="joined, follower"),
        pytest.param("0", "DRV 0 NC3 NC2", id="second output open"),
        pytest.param("0", "DRV 0 0 NC2", id="second output's emitter at ground"),
        pytest.param("0", "DRV 0 0 0", id="second output at ground"),
        pytest.param("0", "DRV 0 NC3 VBAT", id="second output's collector at the supply"),
        pytest.param("VREF", "DRV 0 0 DRV2", id="push-pull, common emitter"),
        pytest.param("VREF", "VBAT GA GB VBAT", id="push-pull, follower"),
    ],
)
def test_sound_uses_pass(ask: Ask, mode: str, outputs: str) -> None:
    """False alarms guarded against: every way to leave an output unused, and to join or separate two."""
    (verdict,) = ask("output-mode.outputs-used", board(mode=mode, outputs=outputs))
    assert verdict.outcome is Outcome.PASS


@pytest.mark.parametrize(
    ("mode", "outputs", "says"),
    [
        pytest.param("VREF", "DRV 0 0 DRV", "joined", id="joined collectors in push-pull"),
        pytest.param("VREF", "VBAT GA GA VBAT", "joined", id="joined emitters in push-pull"),
        pytest.param("0", "NC1 0 0 NC2", "neither output drives", id="neither is used"),
        pytest.param("0", "NC1 GA NC3 NC2", "collector of output 1 hangs open", id="collector lost"),
        pytest.param("0", "VBAT 0 NC3 NC2", "straight between VBAT and 0", id="across the supply"),
    ],
)
def test_uses_that_cannot_work_fail(ask: Ask, mode: str, outputs: str, says: str) -> None:
    (verdict,) = ask("output-mode.outputs-used", board(mode=mode, outputs=outputs))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert says in verdict.message


def test_one_output_of_a_push_pull_stage_fails(ask: Ask) -> None:
    netlist = board(mode="VREF", outputs="DRV 0 0 NC2")
    (verdict,) = ask("output-mode.outputs-used", netlist, brief=brief("push-pull"))
    assert verdict.outcome is Outcome.FAIL
    assert "connect output 2" in verdict.remedy


@pytest.mark.parametrize(
    ("mode", "outputs", "says"),
    [
        pytest.param("VREF", "DRV 0 0 NC2", "output 1 alone drives", id="one in push-pull, no brief"),
        pytest.param("0", "DRV 0 0 DRV2", "pulse together", id="two loads in phase"),
        pytest.param("0", "DRV 0 NC3 DRV", "emitter of output 2 hangs open", id="joined at one end"),
    ],
)
def test_uses_that_may_be_meant_are_for_a_person(ask: Ask, mode: str, outputs: str, says: str) -> None:
    (verdict,) = ask("output-mode.outputs-used", board(mode=mode, outputs=outputs))
    assert verdict.outcome is Outcome.REVIEW
    assert says in verdict.message


def test_outputs_that_are_not_mapped_are_left_to_the_rule_that_says_so(ask: Ask) -> None:
    told = (
        '[controllers.U1]\npins = ["1IN+", "1IN-", "FEEDBACK", "DTC", "CT", "RT", "GND", "-", "-", "-", "-",'
    )
    told += ' "VCC", "OUTPUT CTRL", "REF", "2IN-", "2IN+"]\n'
    assert ask("output-mode.outputs-used", board(), brief=told) == []
