"""The 494 profile against what the data sheets print. Page or section stands beside each figure.

SLVS074 is the data sheet of the 494 (p.4 and p.5 as in revision E, sections as in revision I), SLVS052 that
of the 594 (sections as in revision I). Only figures that were read there are tested here.
"""

from __future__ import annotations

from math import isclose

import pytest
from pwmlint.lint.controllers import load

# (figure, minimum, typical, maximum, where it is printed); currents counted into the pin.
PRINTED_494 = [
    ("reference.voltage", 4.75, 5.0, 5.25, "SLVS074 p.4: output voltage (REF), IO = 1 mA"),
    ("reference.line-regulation", None, 2e-3, 25e-3, "SLVS074 p.4: input regulation, VCC = 7 V to 40 V"),
    ("reference.load-regulation", None, 1e-3, 15e-3, "SLVS074 p.4: output regulation, 1 mA to 10 mA"),
    ("reference.temperature-change", None, 2e-3, 10e-3, "SLVS074 p.4: 2 mV/V, 10 mV/V"),
    ("supply.current", None, 7.5e-3, 15e-3, "SLVS074 p.5: average 7.5 mA; standby at 40 V, 15 mA at most"),
    ("output.saturation-common-emitter", None, 1.1, 1.3, "SLVS074 p.5: VE = 0, IC = 200 mA"),
    ("output.saturation-follower", None, 1.5, 2.5, "SLVS074 p.5: VC = 15 V, IE = -200 mA"),
    ("output.leakage", None, 2e-6, 100e-6, "SLVS074 p.5: collector off-state current, 40 V"),
    ("output.emitter-leakage", None, None, 100e-6, "SLVS074 p.5: emitter off-state current -100 uA"),
    ("output.rise-time", None, 100e-9, 200e-9, "SLVS074 p.5: both configurations"),
    ("output.fall-time", None, 40e-9, 100e-9, "SLVS074 p.5: emitter follower"),
    ("feedback.sink", 0.3e-3, 0.7e-3, None, "SLVS074 p.5: input sink current, FEEDBACK = 0.7 V"),
    ("feedback.zero-duty", None, 4.0, 4.5, "SLVS074 p.5: input threshold voltage (FEEDBACK)"),
    ("dead-time.zero-duty-threshold", None, 3.0, 3.3, "SLVS074 p.5, section 7.9: zero duty cycle"),
    ("oscillator.deviation", None, 0.10, None, "SLVS074 p.4: standard deviation 100 Hz/kHz"),
    ("oscillator.supply-change", None, 1e-3, None, "SLVS074 p.4: 1 Hz/kHz, VCC = 7 V to 40 V"),
]

PRINTED_594 = [
    ("reference.voltage", 4.95, 5.0, 5.05, "SLVS052 section 6.5: output voltage (REF), 25 degC"),
    ("reference.line-regulation", None, 2e-3, 25e-3, "SLVS052 section 6.5: input regulation"),
    ("reference.load-regulation", None, 14e-3, 35e-3, "SLVS052 section 6.5: output regulation, 1 to 10 mA"),
    ("reference.short-circuit", 10e-3, 35e-3, 50e-3, "SLVS052 section 6.5: Vref = 0"),
    ("feedback.sink", 0.3e-3, 0.7e-3, None, "SLVS052 section 6.5: output sink current, FEEDBACK = 0.5 V"),
    ("oscillator.temperature-change", None, None, 50e-3, "SLVS052 section 6.5: 50 Hz/kHz"),
]


@pytest.mark.parametrize(
    ("variant", "name", "minimum", "typical", "maximum", "printed"),
    [("494", *row) for row in PRINTED_494] + [("594", *row) for row in PRINTED_594],
)
def test_is_the_printed_figure(
    variant: str, name: str, minimum: float | None, typical: float | None, maximum: float | None, printed: str
):
    figure = load("494", variant).figure(name)
    assert (figure.minimum, figure.typical, figure.maximum) == (minimum, typical, maximum), printed
    assert printed.split()[0] in figure.source, "the profile names the document that prints it"


class TestFiguresThatAreKeptWiderThanPrinted:
    def test_short_circuit_covers_the_typical_25_ma(self):
        # SLVS074 p.4: 25 mA typical, REF = 0 V, for one second at most.
        assert load("494").figure("reference.short-circuit").typical == 25e-3

    def test_offset_covers_10_mv_of_either_sign(self):
        # SLVS074 p.4: input offset voltage 2 mV typical, 10 mV maximum.
        offset = load("494").figure("amplifier.offset").spread()
        assert (offset.minimum, offset.maximum) == (-10e-3, 10e-3)

    def test_offset_current_covers_250_na_of_either_sign(self):
        # SLVS074 p.4: input offset current 25 nA typical, 250 nA maximum.
        current = load("494").figure("amplifier.offset-current").spread()
        assert (current.minimum, current.maximum) == (-250e-9, 250e-9)

    def test_bias_current_covers_1_ua_of_either_sign(self):
        # SLVS074 p.4: input bias current 0.2 uA typical, 1 uA maximum, no sign.
        bias = load("494").figure("amplifier.bias-current").spread()
        assert (bias.minimum, bias.maximum) == (-1e-6, 1e-6)
        assert abs(bias.nominal) == 0.2e-6

    def test_output_control_current_ends_at_3_5_ma(self):
        # SLVS074 p.5: output control input current 3.5 mA maximum at Vref; SLVS052 p.5 the same.
        assert load("494").limit("output-control.current").maximum == 3.5e-3

    def test_dead_time_bias_flows_out_of_the_pin(self):
        # SLVS074 p.5, section 7.9: -2 uA typical, -10 uA maximum, VI = 0 to 5.25 V.
        bias = load("494").figure("dead-time.bias-current").spread()
        assert (bias.minimum, bias.nominal, bias.maximum) == (-10e-6, -2e-6, 0)

    def test_each_output_reaches_45_percent(self):
        # SLVS074 p.5, section 7.9: maximum duty cycle, each output, 45 % at least at 0 V.
        assert load("494").limit("dead-time.guaranteed-duty").minimum == 0.45

    def test_gain_and_rejection_are_70_and_65_db(self):
        # SLVS052 section 6.5: open-loop voltage amplification 70 dB, common mode rejection ratio 65 dB.
        figures = load("494").figures
        assert isclose(figures["amplifier.gain"].minimum or 0, 10 ** (70 / 20), rel_tol=1e-3)
        rejection = figures["amplifier.common-mode-rejection"].minimum or 0
        assert isclose(rejection, 10 ** (65 / 20), rel_tol=1e-3)

    def test_common_mode_reaches_from_below_ground_to_2_v_below_the_supply(self):
        # SLVS074 p.4: common-mode input voltage range -0.3 V to VCC - 2 V, VCC = 7 V to 40 V.
        assert load("494").limit("amplifier.common-mode-low").minimum == -0.3
        assert load("494").limit("amplifier.common-mode-headroom").minimum == 2

    def test_current_ceiling_of_an_output(self):
        # SLVS074, design example: the controller's 250 mA maximum.
        assert load("494").limit("output.current-absolute").maximum == 0.25


class TestDeadTime:
    def test_text_of_the_data_sheet(self):
        # SLVS074 section 9.3.3 (p.11): from about 3 % at 0 V to 100 % at 3.3 V, linear.
        text = load("494").dead_time_models[0]
        assert text.at_zero == 0.03
        assert isclose(text.at_zero + 3.3 * text.per_volt, 1, abs_tol=1e-4)

    def test_inner_offset_against_the_ramp(self):
        # SLVS074 section 9.3.3 (p.11): offset of 110 mV; the ramp ends at 3 V (p.11).
        ramp = load("494").dead_time_models[2]
        assert isclose(ramp.at_zero, 0.110 / 3, abs_tol=1e-5)
        assert isclose(ramp.per_volt, 1 / 3, abs_tol=1e-5)
        assert load("494").figure("dead-time.offset").typical == 0.110

    def test_least_dead_time_spans_what_is_printed(self):
        # SLVS074 section 9.3.3: about 3 %; p.1: about 5 %.
        least = load("494").limit("dead-time.least")
        assert (least.minimum, least.maximum) == (0.03, 0.05)

    def test_whole_range_ends_at_3_3_v(self):
        # SLVS074 section 9.3.3: 0 V to 3.3 V.
        useful = load("494").limit("dead-time.useful-voltage")
        assert (useful.minimum, useful.maximum) == (0, 3.3)


class TestOscillator:
    def test_printed_point_lies_in_the_band(self):
        # SLVS074 p.4: 10 kHz typical at CT = 0.01 uF, RT = 12 kohm.
        constant = load("494").figure("oscillator.constant").spread()
        band = (constant.minimum / (12e3 * 10e-9), constant.maximum / (12e3 * 10e-9))
        assert band[0] <= 10e3 <= band[1] * (1 + 1e-12)

    def test_printed_formula_lies_in_the_band(self):
        # SLVS074 p.11: f = 1 / (RT CT) in single-ended operation: 20 kHz at 50 kohm, 1 nF.
        constant = load("494").figure("oscillator.constant").spread()
        assert constant.minimum / (50e3 * 1e-9) <= 20e3 * (1 + 1e-12)
        assert constant.maximum / (50e3 * 1e-9) >= 20e3

    def test_ramp_ends_at_3_v(self):
        # SLVS074 p.11: charging current 3 V / RT, period 3 V x CT / current, thus RT x CT.
        ramp = load("494").limit("oscillator.ramp")
        assert (ramp.minimum, ramp.maximum) == (0, 3)
