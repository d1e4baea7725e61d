"""The rules on the reference, on the controller of a cider press."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]


def board(*more: str, mode: str = "0") -> str:
    """Return the press's controller as a SPICE-style list; `mode` is the net of its output-control pin."""
    return "\n".join(
        [
            "cider press",
            "VBAT VBAT 0 24",
            f"U1 FB SET COMP DTC CT RT 0 DRV 0 0 DRV VBAT {mode} VREF LIM 0 494",
            "R5 RT 0 12k",
            "C5 CT 0 10n",
            "R11 VREF SET 5.1k tol=1%",
            "R12 SET 0 5.1k tol=1%",
            "R13 OUT FB 5.1k tol=1%",
            "R14 FB 0 5.1k tol=1%",
            "R15 DTC 0 1k",
            "R17 LIM 0 100k",
            "R16 VBAT DRV 1k",
            "C3 COMP SET 1n",
            "L1 DRV OUT 100u",
            *more,
            ".end",
            "",
        ]
    )


# ------------------------------------------------------------------------------------------------- load


def test_the_load_is_the_sum_of_the_branches(ask: Ask) -> None:
    # SLVS074 p.4: 4.75 V to 5.25 V, line regulation 25 mV and load regulation 15 mV at most.
    # 5 V / 10.2 kohm = 0.490 mA; worst: 5.29 V / (10.2 kohm less 1 %) = 0.524 mA
    (verdict,) = ask("reference.load", board())
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(5.0 / 10.2e3, rel=2e-3)
    assert verdict.measured.maximum == pytest.approx(5.29 / (10.2e3 * 0.99), rel=2e-3)
    assert verdict.limit is not None
    assert verdict.limit.maximum == 10e-3  # a second source's data sheet of the 7500 class
    assert "R11" in verdict.formula


def test_an_overload_fails_and_names_every_branch_and_the_resistor_to_fit(ask: Ask) -> None:
    # 5 V / 470 ohm = 10.6 mA and 0.49 mA: over 10 mA
    (verdict,) = ask("reference.load", board("R20 VREF 0 470"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(5 / 470 + 5 / 10.2e3, rel=1e-3)
    assert "R20" in verdict.message
    assert "R11" in verdict.message
    # worst case 5.29 V / 446.5 ohm = 11.85 mA plus 0.52 mA; 9.48 mA are left: 470 ohm x 1.25 = 588 ohm
    assert verdict.remedy == "raise R20 from 470 Ω to 620 Ω (E24)"
    (mended,) = ask("reference.load", board("R20 VREF 0 620"))
    assert mended.outcome is Outcome.PASS


def test_a_corner_over_the_limit_fails_although_the_nominal_load_is_inside(ask: Ask) -> None:
    # 5 V / 560 ohm = 8.93 mA and 0.49 mA; at 5.29 V and 532 ohm 9.94 mA and 0.52 mA
    (verdict,) = ask("reference.load", board("R20 VREF 0 560"))
    assert verdict.outcome is Outcome.FAIL
    assert verdict.measured is not None
    assert verdict.measured.nominal < 10e-3 < verdict.measured.maximum


def test_a_divider_is_raised_as_a_whole(ask: Ask) -> None:
    (verdict,) = ask("reference.load", board("R20 VREF TAP 220", "R21 TAP 0 220"))
    assert verdict.outcome is Outcome.FAIL
    assert verdict.remedy == "raise R20 from 220 Ω to 300 Ω (E24), and R21 in the same ratio"


def test_the_output_control_pin_counts_where_it_is_tied_to_the_reference(ask: Ask) -> None:
    # SLVS074 p.5: up to 3.5 mA into the pin
    (tied,) = ask("reference.load", board(mode="VREF"))
    (free,) = ask("reference.load", board())
    assert tied.measured is not None
    assert free.measured is not None
    assert tied.measured.maximum - free.measured.maximum == pytest.approx(3.5e-3)


def test_many_branches_that_no_single_one_can_mend(ask: Ask) -> None:
    (verdict,) = ask("reference.load", board(*(f"R2{digit} VREF 0 1k" for digit in range(6))))
    assert verdict.outcome is Outcome.FAIL
    assert "all branches" in verdict.remedy


def test_an_unknown_part_leaves_the_load_open_until_the_brief_tells_it(ask: Ask) -> None:
    netlist = board("U7 VREF SET 0 GAUGE")
    (verdict,) = ask("reference.load", netlist)
    assert verdict.outcome is Outcome.OPEN
    assert verdict.needs == ('brief: [rails.VREF] voltage = "...", load = "..."',)
    assert "U7" in verdict.message
    told = '[rails.VREF]\nvoltage = "5 V"\nload = "1 mA .. 2 mA"\n'
    (verdict,) = ask("reference.load", netlist, brief=told)
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.maximum > 2.5e-3
    assert any("parts other than resistors" in assumption for assumption in verdict.assumptions)
    (verdict,) = ask("reference.load", netlist, brief=told.replace("2 mA", "12 mA"))
    assert verdict.outcome is Outcome.FAIL


def test_a_branch_that_leaves_the_board_is_open_where_only_its_other_end_decides(ask: Ask) -> None:
    """False alarm guarded against: a thermostat's pull-up through a connector, taken as shorted to ground."""
    (verdict,) = ask("reference.load", board("R20 VREF HOT 100", "J3 HOT LIFT THERMOSTAT"))
    assert verdict.outcome is Outcome.OPEN
    assert verdict.needs == ('brief: [rails.HOT] voltage = "..."',)
    assert verdict.message.endswith("the most only if something pulls HOT to ground")
    told = '[rails.HOT]\nvoltage = "4.6 V .. 5 V"\n'
    (verdict,) = ask("reference.load", board("R20 VREF HOT 100", "J3 HOT LIFT THERMOSTAT"), brief=told)
    assert verdict.outcome is Outcome.PASS
    (verdict,) = ask("reference.load", board("R20 VREF 0 330", "R21 VREF HOT 100", "J3 HOT LIFT THERMOSTAT"))
    assert verdict.outcome is Outcome.FAIL


def test_an_unknown_part_does_not_hide_an_overload(ask: Ask) -> None:
    (verdict,) = ask("reference.load", board("R20 VREF 0 330", "U7 VREF SET 0 GAUGE"))
    assert verdict.outcome is Outcome.FAIL


def test_a_branch_without_a_value_leaves_it_open(ask: Ask) -> None:
    (verdict,) = ask("reference.load", board("R20 VREF 0"))
    assert verdict.outcome is Outcome.OPEN
    assert verdict.needs == ("a value for R20",)


# ----------------------------------------------------------------------------------------------- bypass


@pytest.mark.parametrize("value", ["100n", "1u", "10u"])
def test_a_bypass_of_the_usual_size_passes(ask: Ask, value: str) -> None:
    (verdict,) = ask("reference.bypass", board(f"C2 VREF 0 {value}"))
    assert verdict.outcome is Outcome.PASS
    assert verdict.limit is not None
    assert (verdict.limit.minimum, verdict.limit.maximum) == (100e-9, 10e-6)  # common practice, no source


def test_no_bypass_fails_where_the_supply_has_one(ask: Ask) -> None:
    (verdict,) = ask("reference.bypass", board("C1 VBAT 0 100n"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "warning")
    assert "100 nF to 1 µF" in verdict.remedy


def test_the_soft_start_capacitor_is_no_bypass(ask: Ask) -> None:
    (verdict,) = ask("reference.bypass", board("C2 VREF DTC 1u", "C1 VBAT 0 100n"))
    assert verdict.outcome is Outcome.FAIL


def test_a_large_bypass_is_for_a_person_to_judge(ask: Ask) -> None:
    (verdict,) = ask("reference.bypass", board("C2 VREF 0 22u dielectric=X5R"))
    assert (verdict.outcome, verdict.level) == (Outcome.REVIEW, None)


def test_a_sketch_without_any_bypass_is_for_a_person_to_judge(ask: Ask) -> None:
    (verdict,) = ask("reference.bypass", board())
    assert verdict.outcome is Outcome.REVIEW


def test_a_bypass_without_a_value_is_open(ask: Ask) -> None:
    (verdict,) = ask("reference.bypass", board("C2 VREF 0"))
    assert verdict.outcome is Outcome.OPEN


# --------------------------------------------------------------------------------------------- back-fed


def test_a_reference_of_its_own_passes(ask: Ask) -> None:
    (verdict,) = ask("reference.back-fed", board("C2 VREF 0 100n"))
    assert verdict.outcome is Outcome.PASS


@pytest.mark.parametrize(
    ("part", "says"),
    [
        pytest.param("V9 VREF 0 5", "is driven against 0 by V9", id="source"),
        pytest.param("J9P VREF X 0", "", id="connector, unknown"),
        pytest.param("L9 VREF VBAT 10u", "is linked to VBAT by L9", id="bead to the supply"),
        pytest.param("R9 VREF 0 0", "is linked to 0 by R9", id="link to ground"),
    ],
)
def test_another_driver_on_the_net_fails(ask: Ask, part: str, says: str) -> None:
    (verdict,) = ask("reference.back-fed", board(part))
    assert verdict.outcome is (Outcome.FAIL if says else Outcome.PASS)
    assert says in verdict.message


def test_a_resistor_that_raises_the_reference_fails(ask: Ask) -> None:
    # (24 V - 5 V) / 1 kohm = 19 mA in, 0.49 mA out
    (verdict,) = ask("reference.back-fed", board("R9 VBAT VREF 1k"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(5 / 10.2e3 - 19e-3, rel=1e-3)
    assert verdict.message.startswith("R9 can feed current into VREF")


def test_a_resistor_from_the_supply_whose_current_the_dividers_take_passes(ask: Ask) -> None:
    # 19 V / 100 kohm = 0.19 mA in, 0.49 mA out
    (verdict,) = ask("reference.back-fed", board("R9 VBAT VREF 100k"))
    assert verdict.outcome is Outcome.PASS


def test_a_reference_shorted_to_ground_fails(ask: Ask) -> None:
    (verdict,) = ask("reference.back-fed", board().replace("VBAT 0 VREF LIM", "VBAT 0 0 LIM"))
    assert verdict.outcome is Outcome.FAIL
    assert "shorted to ground" in verdict.message


def test_the_supply_on_the_reference_net_fails(ask: Ask) -> None:
    (verdict,) = ask("reference.back-fed", board().replace("DRV VBAT 0 VREF LIM", "DRV VREF 0 VREF LIM"))
    assert verdict.outcome is Outcome.FAIL
    assert "supply net" in verdict.message


def test_two_controllers_must_not_share_one_reference_net(ask: Ask) -> None:
    second = "U2 FB SET COMP DTC CT2 RT2 0 DRV 0 0 DRV VBAT 0 VREF LIM 0 494"
    verdicts = ask("reference.back-fed", board(second))
    assert [verdict.outcome for verdict in verdicts] == [Outcome.FAIL, Outcome.FAIL]
    assert "reference of U2" in verdicts[0].message


@pytest.mark.parametrize(("voltage", "outcome"), [("12 V", Outcome.FAIL), ("5 V", Outcome.PASS)])
def test_a_rail_of_another_voltage_on_the_net_fails(ask: Ask, voltage: str, outcome: Outcome) -> None:
    (verdict,) = ask("reference.back-fed", board(), brief=f'[rails.VREF]\nvoltage = "{voltage}"\n')
    assert verdict.outcome is outcome


@pytest.mark.parametrize(("net", "outcome"), [("+12V", Outcome.FAIL), ("5V", Outcome.PASS)])
def test_the_nets_own_name_must_not_contradict(ask: Ask, net: str, outcome: Outcome) -> None:
    (verdict,) = ask("reference.back-fed", board().replace("VREF", net))
    assert verdict.outcome is outcome


def test_an_ammeter_of_the_simulation_is_no_driver(ask: Ask) -> None:
    (verdict,) = ask("reference.back-fed", board("V9 VREF LOAD 0", "R9 LOAD 0 10k"))
    assert verdict.outcome is Outcome.PASS
