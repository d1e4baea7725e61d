"""The output stage's rules, on the controller of an irrigation pump."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]

# What hangs on the outputs, which is what these tests change: C1 E1 E2 C2 and the parts behind them.
PULL_UP = ("D1 0 0 D1", ("R16 VBAT D1 1k",))


def board(outputs: str, parts: tuple[str, ...], *, mode: str = "0", volts: str = "24") -> str:
    lines = [
        "irrigation pump",
        f"VBAT VBAT 0 {volts}",
        f"U1 FB SET COMP DTC CT RT 0 {outputs} VBAT {mode} VREF VREF 0 494",
        "R5 RT 0 22k",
        "C5 CT 0 1n",
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


def outcomes(verdicts: list[Verdict]) -> list[Outcome]:
    return [verdict.outcome for verdict in verdicts]


# ------------------------------------------------------------------------------------------------- path


@pytest.mark.parametrize(
    ("outputs", "parts"),
    [
        pytest.param("D1 0 NC3 NC2", ("R16 VBAT D1 1k",), id="pull-up"),
        pytest.param("VBAT D1 NC3 NC2", ("R16 D1 0 470",), id="pull-down"),
        pytest.param("D1 0 NC3 NC2", ("R16 D1 B 220", "Q1 SW B VBAT QP"), id="the base of a PNP switch"),
        pytest.param("D1 0 NC3 NC2", ("L1 VBAT D1 1m",), id="a winding"),
        pytest.param("VBAT D1 NC3 NC2", ("R16 D1 B 220", "Q1 SW B 0 QN"), id="the base of an NPN switch"),
        pytest.param("D1 0 0 D2", ("TR1 D1 VBAT D2 S1 S2 PUMP",), id="a transformer"),
    ],
)
def test_a_complete_path_passes(ask: Ask, outputs: str, parts: tuple[str, ...]) -> None:
    found = ask("output-stage.path", board(outputs, parts))
    assert found
    assert set(outcomes(found)) == {Outcome.PASS}


def test_whether_a_circuit_of_unknown_inside_completes_the_path_is_for_a_person(ask: Ask) -> None:
    (verdict,) = ask("output-stage.path", board("D1 0 NC3 NC2", ("XU5 D1 G VBAT 0 DRIVER",)))
    assert verdict.outcome is Outcome.REVIEW
    assert "whose inside is not known" in verdict.message


@pytest.mark.parametrize(
    ("outputs", "parts", "remedy"),
    [
        pytest.param(
            "D1 0 NC3 NC2", ("R16 D1 G 10", "M1 SW G VBAT VBAT PM"), "add a pull-up", id="gate, no pull-up"
        ),
        pytest.param(
            "VBAT D1 NC3 NC2", ("R16 D1 G 10", "M1 SW G 0 0 NM"), "add a pull-down", id="gate, no pull-down"
        ),
        pytest.param("D1 0 NC3 NC2", ("R16 D1 0 1k",), "add a pull-up", id="pull-up to the wrong rail"),
        pytest.param("D1 0 NC3 NC2", ("C16 D1 VBAT 1n",), "add a pull-up", id="a capacitor only"),
    ],
)
def test_a_missing_path_fails(ask: Ask, outputs: str, parts: tuple[str, ...], remedy: str) -> None:
    (verdict,) = ask("output-stage.path", board(outputs, parts))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.remedy.startswith(remedy)


# ---------------------------------------------------------------------------------------------- current


def test_the_current_of_the_published_base_drive(ask: Ask) -> None:
    """SLVS074 design example: 220 ohm from 32 V; (32 V - 1.1 V - 0.7 V) / 220 ohm = 137 mA."""
    parts = ("R16 D1 B 220 0%", "Q1 SW B VBAT QP", "D9 0 SW DS", "L1 SW OUT 140u")
    (verdict,) = ask("output-stage.current", board("D1 0 NC3 NC2", parts, volts="32"))
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(0.137, rel=0.01)
    assert verdict.limit is not None
    assert verdict.limit.maximum == 0.2  # three second sources' data sheets


def test_a_pull_up_a_decade_too_small_fails(ask: Ask) -> None:
    (verdict,) = ask("output-stage.current", board("D1 0 NC3 NC2", ("R16 VBAT D1 100",)))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert "driver transistor" in verdict.remedy


def test_joined_outputs_may_carry_twice_the_current(ask: Ask) -> None:
    """False alarm guarded against: 24 V over 100 ohm is more than one output carries, and less than two."""
    (verdict,) = ask("output-stage.current", board("D1 0 0 D1", ("R16 VBAT D1 100",)))
    assert verdict.outcome is Outcome.PASS
    assert verdict.limit is not None
    assert verdict.limit.maximum == 0.4


def test_outputs_that_take_turns_are_judged_each(ask: Ask) -> None:
    netlist = board("D1 0 0 D2", ("R16 VBAT D1 1k", "R17 VBAT D2 100"), mode="VREF")
    assert outcomes(ask("output-stage.current", netlist)) == [Outcome.PASS, Outcome.FAIL]


def test_a_follower_is_solved_with_its_own_saturation(ask: Ask) -> None:
    # (24 V - 1.5 V) / 470 ohm: SLVS074 p.5, emitter follower
    (verdict,) = ask("output-stage.current", board("VBAT D1 NC3 NC2", ("R16 D1 0 470 0%",)))
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(22.5 / 470)


def test_what_is_not_solved_is_open_and_named(ask: Ask) -> None:
    (verdict,) = ask("output-stage.current", board("D1 0 NC3 NC2", ("L1 VBAT D1 1m", "D9 D1 OUT DS")))
    assert verdict.outcome is Outcome.OPEN
    assert verdict.parts == ("L1",)


# ---------------------------------------------------------------------------------------------- voltage


@pytest.mark.parametrize(("volts", "outcome"), [("24", Outcome.PASS), ("48", Outcome.FAIL)])
def test_the_collector_is_held_against_its_limit(ask: Ask, volts: str, outcome: Outcome) -> None:
    """40 V: three second sources' data sheets."""
    outputs, parts = PULL_UP
    for verdict in ask("output-stage.voltage", board(outputs, parts, volts=volts)):
        assert verdict.outcome is outcome
        assert verdict.limit is not None
        assert verdict.limit.maximum == 40.0


def test_a_higher_rail_behind_a_pull_up_counts(ask: Ask) -> None:
    parts = ("VHI VHI 0 60", "R16 VHI D1 10k")
    (verdict,) = ask("output-stage.voltage", board("D1 0 NC3 NC2", parts))
    assert verdict.outcome is Outcome.FAIL
    assert "60.0 V" in verdict.message


def test_a_followers_collector_sees_its_own_supply_and_nothing_beyond(ask: Ask) -> None:
    """False alarm guarded against: through a driver and a drive transformer it led to the bridge's 320 V."""
    parts = ("VHI VHI 0 320", "R16 D1 0 1k", "Q1 VBAT D1 P QN", "T1 P 0 G SW DRIVE", "M1 VHI G SW NM")
    (verdict,) = ask("output-stage.voltage", board("VBAT D1 NC3 NC2", parts))
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.nominal == 24


def test_a_winding_without_a_clamp_is_for_a_person(ask: Ask) -> None:
    (verdict,) = ask("output-stage.voltage", board("D1 0 NC3 NC2", ("L1 VBAT D1 1m",)))
    assert verdict.outcome is Outcome.REVIEW
    assert "L1" in verdict.message
    clamped = ("L1 VBAT D1 1m", "D9 D1 VBAT DS")
    (verdict,) = ask("output-stage.voltage", board("D1 0 NC3 NC2", clamped))
    assert verdict.outcome is Outcome.PASS


def test_without_a_known_supply_current_and_voltage_are_open_and_name_it(ask: Ask) -> None:
    netlist = board("D1 0 NC3 NC2", ("R16 VBAT D1 1k",)).replace("VBAT VBAT 0 24\n", "J1 VBAT 0 BATTERY\n")
    for rule in ("current", "voltage"):
        (verdict,) = ask(f"output-stage.{rule}", netlist)
        assert verdict.outcome is Outcome.OPEN
        assert verdict.needs == ('brief: [rails.VBAT] voltage = "..."',)


# ------------------------------------------------------------------------------------------ dissipation


def ambient(top: str) -> str:
    return f'[design]\nambient = "0 degC .. {top} degC"\n'


def test_the_dissipation_is_added_up(ask: Ask) -> None:
    """24 V x 15 mA + 1.3 V x 24 mA x 0.97 (SLVS074 p.5), against 1 W up to 45 degC (a second source)."""
    netlist = board("D1 0 NC3 NC2", ("R16 VBAT D1 1k 0%",))
    (verdict,) = ask("output-stage.dissipation", netlist, brief=ambient("45"))
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.maximum == pytest.approx(24 * 15e-3 + 1.3 * 24e-3 * 0.97, rel=0.01)
    assert verdict.limit is not None
    assert verdict.limit.maximum == pytest.approx(1.0)


@pytest.mark.parametrize(("supply", "verdicts"), [("0 V", 1), ("-5 V", 0), ("-5 V .. 24 V", 0)])
def test_a_supply_that_is_none_heats_nothing(ask: Ask, supply: str, verdicts: int) -> None:
    netlist = board("D1 0 NC3 NC2", ("R16 VBAT D1 1k",))
    brief = f'{ambient("45")}[rails.VBAT]\nvoltage = "{supply}"\n'
    found = ask("output-stage.dissipation", netlist, brief=brief)
    assert [verdict.outcome for verdict in found] == [Outcome.PASS] * verdicts


def test_a_hot_package_fails(ask: Ask) -> None:
    # 1 W x (125 - 105) / (125 - 45) = 0.25 W are left at 105 degC
    netlist = board("D1 0 NC3 NC2", ("R16 VBAT D1 1k",))
    (verdict,) = ask("output-stage.dissipation", netlist, brief=ambient("105"))
    assert verdict.outcome is Outcome.FAIL
    assert verdict.limit is not None
    assert verdict.limit.maximum == pytest.approx(0.25)


def test_without_an_ambient_the_dissipation_is_open(ask: Ask) -> None:
    (verdict,) = ask("output-stage.dissipation", board(*PULL_UP))
    assert verdict.outcome is Outcome.OPEN
    assert verdict.needs == ('brief: [design] ambient = "..."',)


def test_a_current_that_is_not_solved_opens_the_dissipation(ask: Ask) -> None:
    netlist = board("D1 0 NC3 NC2", ("L1 VBAT D1 1m",))
    (verdict,) = ask("output-stage.dissipation", netlist, brief=ambient("45"))
    assert verdict.outcome is Outcome.OPEN
