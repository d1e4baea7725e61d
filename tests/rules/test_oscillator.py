"""The oscillator's rules, each on a frost-fan controller with a few parts changed."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]


def board(*timing: str, mode: str = "0", rt: str = "RT", ct: str = "CT", collector_2: str = "NC2") -> str:
    """Return a frost-fan controller with the given timing parts, as a SPICE-style list."""
    lines = [
        "frost fan drive",
        "VBAT VBAT 0 24",
        f"U1 FB SET COMP DTC {ct} {rt} 0 DRV 0 0 {collector_2} VBAT {mode} VREF VREF 0 494",
        "R11 VREF SET 5k1",
        "R12 SET 0 5k1",
        "R13 FAN FB 5k1",
        "R14 FB 0 1k3",
        "R15 DTC 0 1k",
        "R16 VBAT DRV 1k",
        "R17 VBAT NC2 1k" if collector_2 == "NC2" and mode != "0" else "* one output",
        *timing,
        ".end",
    ]
    return "\n".join(lines) + "\n"


R, C = "R5 RT 0 12k 1%", "C5 CT 0 10n 5%"


def outcomes(verdicts: list[Verdict]) -> list[Outcome]:
    return [verdict.outcome for verdict in verdicts]


# ------------------------------------------------------------------------------------------ timing-parts


def test_both_timing_parts_to_ground_pass(ask: Ask) -> None:
    found = ask("oscillator.timing-parts", board(R, C))
    assert outcomes(found) == [Outcome.PASS, Outcome.PASS]
    assert [verdict.parts for verdict in found] == [("R5",), ("C5",)]


def test_a_trimmer_in_series_is_a_timing_part_like_any_other(ask: Ask) -> None:
    """False alarm guarded against: a trimmer wired as a rheostat, and two capacitors side by side."""
    parts = ("R5 RT MID 10k", "RV5 MID MID 0 10k", "C5 CT 0 4n7", "C6 CT 0 4n7")
    found = ask("oscillator.timing-parts", board(*parts))
    assert outcomes(found) == [Outcome.PASS, Outcome.PASS]


@pytest.mark.parametrize(
    ("parts", "position", "says"),
    [
        pytest.param((C,), 0, "no timing resistor", id="no resistor"),
        pytest.param((R,), 1, "no timing capacitor", id="no capacitor"),
        pytest.param(("R5 CT 0 12k", "C5 RT 0 10n"), 0, "only C5", id="swapped"),
        pytest.param(("R5 RT VREF 12k", C), 0, "leads to VREF", id="resistor to the reference"),
        pytest.param(("R5 RT VBAT 12k", C), 0, "leads to VBAT", id="resistor to the supply"),
        pytest.param((R, "C5 CT VREF 10n"), 1, "leads to VREF", id="capacitor to the reference"),
        pytest.param(("R5 RT LOST 12k", C), 0, "leads nowhere", id="resistor to nowhere"),
    ],
)
def test_a_timing_part_missing_or_misplaced_fails(
    ask: Ask, parts: tuple[str, ...], position: int, says: str
) -> None:
    verdict = ask("oscillator.timing-parts", board(*parts))[position]
    assert verdict.outcome is Outcome.FAIL
    assert verdict.level == "error"
    assert says in verdict.message
    assert "to ground" in verdict.remedy


@pytest.mark.parametrize(
    ("parts", "position", "says"),
    [
        pytest.param((R, C, "Q3 CT GATE 0 2N3904"), 1, "Q3 hangs on it", id="transistor on the capacitor"),
        pytest.param((R, "C6 RT 0 1n", C), 0, "C6 hangs on it", id="capacitor across the resistor"),
        pytest.param((R, "C5 CT SYNC 10n", "R9 SYNC 0 47"), 1, "leads to SYNC", id="not straight to ground"),
    ],
)
def test_whatever_else_shifts_the_frequency_is_for_a_person(
    ask: Ask, parts: tuple[str, ...], position: int, says: str
) -> None:
    verdict = ask("oscillator.timing-parts", board(*parts))[position]
    assert verdict.outcome is Outcome.REVIEW
    assert says in verdict.message


def test_the_timing_capacitor_on_another_pin_of_the_controller_is_for_a_person(ask: Ask) -> None:
    verdict = ask("oscillator.timing-parts", board(R, "C5 DTC 0 10n", ct="DTC"))[1]
    assert verdict.outcome is Outcome.REVIEW
    assert "DTC of U1" in verdict.message


def test_a_stopped_oscillator_is_told_and_nothing_else_asked(ask: Ask) -> None:
    """SLVS074 p.1: the timing resistor's pin at the reference, the capacitor's driven from outside."""
    netlist = board("C5 CT 0 10n", rt="VREF")
    assert outcomes(ask("oscillator.timing-parts", netlist)) == [Outcome.INFORMATIONAL]
    for rule in ("timing-range", "frequency", "dielectric"):
        assert ask(f"oscillator.{rule}", netlist) == []


# ------------------------------------------------------------------------------------------ timing-range


def test_usual_timing_parts_are_in_range(ask: Ask) -> None:
    resistance, capacitance = ask("oscillator.timing-range", board(R, C))
    assert (resistance.outcome, capacitance.outcome) == (Outcome.PASS, Outcome.PASS)
    # 12 kohm 1 % and 10 nF 5 %
    assert resistance.measured is not None
    assert capacitance.measured is not None
    assert resistance.measured.minimum == pytest.approx(11.88e3)
    assert capacitance.measured.maximum == pytest.approx(10.5e-9)
    assert (resistance.parts, capacitance.parts) == (("R5",), ("C5",))


@pytest.mark.parametrize(
    ("resistor", "capacitor", "outside"),
    [
        # 1.8 kohm .. 500 kohm: three second sources' data sheets; 0.47 nF .. 10 uF: two of them
        pytest.param("1k2", "10n", 0, id="resistor too small"),
        pytest.param("680k", "1n", 0, id="resistor too large"),
        pytest.param("100k", "100p", 1, id="capacitor too small"),
        pytest.param("2k2", "22u", 1, id="capacitor too large"),
    ],
)
def test_a_timing_part_outside_its_range_fails(ask: Ask, resistor: str, capacitor: str, outside: int) -> None:
    found = ask("oscillator.timing-range", board(f"R5 RT 0 {resistor}", f"C5 CT 0 {capacitor}"))
    assert found[outside].outcome is Outcome.FAIL
    assert found[1 - outside].outcome is Outcome.PASS


def test_the_remedy_keeps_the_product(ask: Ask) -> None:
    verdict = ask("oscillator.timing-range", board("R5 RT 0 1k2", "C5 CT 0 33n"))[0]
    # 1.2 kohm x 33 nF = 39.6 us; 1.5 nF stands nearest to 39.6 us / 30 kohm, and 27 kohm to 39.6 us / 1.5 nF
    assert "27.0 kΩ and 1.50 nF" in verdict.remedy


def test_a_trimmer_without_an_end_resistor_fails_at_the_end_of_its_travel(ask: Ask) -> None:
    netlist = board("RV5 RT 0 0 50k", C)
    assert ask("oscillator.timing-range", netlist)[0].outcome is Outcome.FAIL


def test_a_trimmer_with_an_end_resistor_passes(ask: Ask) -> None:
    netlist = board("R5 RT MID 10k", "RV5 MID 0 0 10k", C)
    assert ask("oscillator.timing-range", netlist)[0].outcome is Outcome.PASS


def test_a_timing_resistor_without_a_value_is_open(ask: Ask) -> None:
    netlist = board("R5 RT 0 tbd", C)
    for rule in ("timing-range", "frequency"):
        verdict = ask(f"oscillator.{rule}", netlist)[0]
        assert verdict.outcome is Outcome.OPEN
        assert any("R5" in need for need in verdict.needs)


# -------------------------------------------------------------------------------------------- frequency


def test_the_frequency_is_a_band(ask: Ask) -> None:
    """k of 1.0 .. 1.2 (SLVS074 p.11 and p.4) over 12 kohm 1 % and 10 nF 5 %."""
    (verdict,) = ask("oscillator.frequency", board(R, C))
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.minimum == pytest.approx(1.0 / (12.12e3 * 10.5e-9))
    assert verdict.measured.nominal == pytest.approx(1.1 / (12e3 * 10e-9))
    assert verdict.measured.maximum == pytest.approx(1.2 / (11.88e3 * 9.5e-9))
    assert "12.0 kΩ" in verdict.formula
    assert any("10 % (standard deviation, SLVS074 p.4" in sentence for sentence in verdict.assumptions)


@pytest.mark.parametrize(
    ("resistor", "capacitor"),
    [
        # The range of 1 kHz .. 300 kHz: three second sources' data sheets
        pytest.param("2k2", "1n", id="500 kHz: too fast"),
        pytest.param("120k", "100n", id="92 Hz: a decade of capacitor too slow"),
    ],
)
def test_a_frequency_outside_the_range_fails_with_a_preferred_resistor(
    ask: Ask, resistor: str, capacitor: str
) -> None:
    (verdict,) = ask("oscillator.frequency", board(f"R5 RT 0 {resistor}", f"C5 CT 0 {capacitor}"))
    assert verdict.outcome is Outcome.FAIL
    assert verdict.level == "error"
    assert "kΩ" in verdict.remedy


def test_only_a_corner_outside_the_range_is_a_warning(ask: Ask) -> None:
    # 1.1 / (3.9 kohm x 1 nF) = 282 kHz; with 5 % and 10 % and k = 1.2 it exceeds 300 kHz
    (verdict,) = ask("oscillator.frequency", board("R5 RT 0 3k9", "C5 CT 0 1n"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "warning")


def brief(frequency: str, topology: str = "single-ended") -> str:
    return (
        f'[controllers.U1]\ntopology = "{topology}"\nswitching_frequency = "{frequency}"\n'
        '[rails.VBAT]\nvoltage = "21 V .. 29 V"\n'
    )


def test_the_frequency_at_each_switch_is_the_oscillators_when_single_ended(ask: Ask) -> None:
    _, switch = ask("oscillator.frequency", board(R, C), brief=brief("7.5 kHz .. 11 kHz"))
    assert switch.outcome is Outcome.PASS
    assert switch.measured is not None
    assert switch.measured.nominal == pytest.approx(9166.7, rel=1e-4)


def test_the_frequency_at_each_switch_is_half_in_push_pull(ask: Ask) -> None:
    """SLVS074 p.11: the output frequency is half the oscillator's with the control pin at the reference."""
    netlist = board(R, C, mode="VREF")
    _, switch = ask("oscillator.frequency", netlist, brief=brief("3.7 kHz .. 5.6 kHz", "push-pull"))
    assert switch.outcome is Outcome.PASS
    assert switch.measured is not None
    assert switch.measured.nominal == pytest.approx(1.1 / (12e3 * 10e-9) / 2)


def test_a_brief_that_fits_the_oscillator_only_is_told_so(ask: Ask) -> None:
    netlist = board(R, C, mode="VREF")
    _, switch = ask("oscillator.frequency", netlist, brief=brief("8 kHz .. 11 kHz", "push-pull"))
    assert switch.outcome is Outcome.FAIL
    assert "fits the oscillator itself" in switch.message
    # 1.1 / (2 x 9.5 kHz x 10 nF) = 5.79 kohm
    assert "E24: 5.60 kΩ" in switch.remedy
    assert "E96: 5.76 kΩ" in switch.remedy


def test_a_brief_that_fits_push_pull_mode_only_is_told_so(ask: Ask) -> None:
    _, switch = ask("oscillator.frequency", board(R, C), brief=brief("4 kHz .. 5.4 kHz", "push-pull"))
    assert switch.outcome is Outcome.FAIL
    assert "fits half of it" in switch.message


def test_a_decade_wrong_fails_and_names_the_resistor_to_fit(ask: Ask) -> None:
    netlist = board("R5 RT 0 120k", C)
    _, switch = ask("oscillator.frequency", netlist, brief=brief("8 kHz .. 10.4 kHz"))
    assert (switch.outcome, switch.level) == (Outcome.FAIL, "error")
    assert "E24: 12.0 kΩ makes 9.17 kHz" in switch.remedy


def test_a_single_wanted_frequency_must_lie_in_the_band(ask: Ask) -> None:
    """False alarm guarded against: no part meets "9 kHz" exactly, and none is expected to."""
    assert ask("oscillator.frequency", board(R, C), brief=brief("9 kHz"))[1].outcome is Outcome.PASS
    assert ask("oscillator.frequency", board(R, C), brief=brief("20 kHz"))[1].outcome is Outcome.FAIL


def test_a_trimmer_must_reach_the_wanted_frequency_on_every_unit(ask: Ask) -> None:
    """False alarm guarded against: the travel leaves the wanted range at both ends, as it should."""
    netlist = board("R5 RT MID 6k8 1%", "RV5 MID 0 0 10k 20%", C)
    _, switch = ask("oscillator.frequency", netlist, brief=brief("9 kHz .. 10 kHz"))
    assert switch.outcome is Outcome.PASS
    assert "set on the bench" in " ".join(switch.assumptions)
    # 1.2 / (0.99 x 6.8 kohm + 8 kohm) / 9.5 nF = 8.57 kHz; 1.0 / (1.01 x 6.8 kohm) / 10.5 nF = 13.9 kHz
    assert "from 8.57 kHz to 13.9 kHz" in switch.message
    _, switch = ask("oscillator.frequency", netlist, brief=brief("14 kHz .. 16 kHz"))
    assert switch.outcome is Outcome.FAIL


def test_without_a_mode_the_frequency_at_the_switch_is_open(ask: Ask) -> None:
    netlist = board(R, C, "R8 VREF OC 10k", "R9 OC 0 10k", mode="OC")
    _, switch = ask("oscillator.frequency", netlist, brief=brief("8 kHz .. 11 kHz"))
    assert switch.outcome is Outcome.OPEN
    assert "OUTPUT CTRL at ground or at the reference" in switch.needs


# ------------------------------------------------------------------------------------------- dielectric


@pytest.mark.parametrize("name", ["C0G", "NP0", "film", "polypropylene", "PET"])
def test_a_steady_dielectric_passes(ask: Ask, name: str) -> None:
    (verdict,) = ask("oscillator.dielectric", board(R, C), parts=f"Reference,Dielectric\nC5,{name}\n")
    assert verdict.outcome is Outcome.PASS


@pytest.mark.parametrize("name", ["X7R", "X5R", "Y5V", "Z5U", "electrolytic", "tantalum", "class 2"])
def test_a_drifting_dielectric_is_a_warning(ask: Ask, name: str) -> None:
    (verdict,) = ask("oscillator.dielectric", board(R, C), parts=f"Reference,Dielectric\nC5,{name}\n")
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "warning")
    assert "C0G" in verdict.remedy


@pytest.mark.parametrize("parts", ["", "Reference,Dielectric\nC5,blue\n"])
def test_an_untold_dielectric_is_open_and_named(ask: Ask, parts: str) -> None:
    (verdict,) = ask("oscillator.dielectric", board(R, C), parts=parts)
    assert verdict.outcome is Outcome.OPEN
    assert verdict.needs == ("parts list: C5 dielectric, such as C0G or film",)
