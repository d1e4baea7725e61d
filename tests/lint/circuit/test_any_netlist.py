"""Whatever is wired to whatever: every question is answered or left open, none ends in a traceback."""

from __future__ import annotations

from collections.abc import Callable

from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from pwmlint.grammar import NetlistError
from pwmlint.lint.circuit.regimes import Regime
from pwmlint.lint.design import Design
from pwmlint.lint.estimate import Estimate

DesignOf = Callable[..., Design]

NETS = ("0", "A", "B", "C", "D", "VREF", "VIN", "OUT", "SW", "P", "M", "COMP", "GND")
PINS = ["A", "B", "COMP", "C", "D", "M", "0", "SW", "0", "0", "SW", "VIN", "GND", "VREF", "P", "OUT"]

CALM = (HealthCheck.function_scoped_fixture, HealthCheck.too_slow, HealthCheck.data_too_large)

nets = st.sampled_from(NETS)
ohms = st.sampled_from(("0", "1m", "0.1", "10", "1k", "10k", "1meg", "100meg", "1e-310", "1e308", "", "pear"))

# How each part reads in a list: its letters, how many nets, and its values.
PARTS = (
    ("R", 2, ohms),
    ("RV", 3, ohms),
    ("C", 2, st.sampled_from(("1n", "10u", ""))),
    ("L", 2, st.just("10u")),
    ("D", 2, st.sampled_from(("DX", "DZ5V1"))),
    ("DZ", 2, st.just("DX")),
    ("Q", 3, st.just("QX")),
    ("M", 4, st.just("MX")),
    ("V", 2, st.sampled_from(("5", "0", "-3", "pulse(0 1)"))),
    ("I", 2, st.sampled_from(("1m", "0", "-1u"))),
    ("E", 4, st.sampled_from(("2", "0", "-1", "1e9", "fast"))),
    ("G", 4, st.sampled_from(("1e-3", "0", "-1"))),
    ("B", 2, st.sampled_from(("V=1", "I=1m"))),
    ("XU9", 3, st.just("PUMP")),
)


@st.composite
def lists(draw: st.DrawFn) -> str:
    """Draw a list of up to twenty parts round a controller, a quarter of its pins anywhere."""
    lines: list[str] = []
    for number in range(draw(st.integers(2, 20))):
        letters, count, values = draw(st.sampled_from(PARTS))
        ends = [draw(nets) for _ in range(count)]
        lines.append(f"{letters}{number} {' '.join(ends)} {draw(values)}")
    pins = [draw(nets) if draw(st.integers(0, 3)) == 0 else pin for pin in PINS]
    return "\n".join([*lines, f"U1 {' '.join(pins)} 494", ".model DX d", ".model QX npn", ".model MX nmos"])


@settings(max_examples=60, deadline=None, suppress_health_check=CALM)
@given(lines=lists())
def test_every_question_is_answered_or_left_open(design_of: DesignOf, lines: str):
    try:
        design = design_of(lines)
    except NetlistError:
        return  # a list that cannot be read says so
    for net in design.netlist.nets:
        found = design.voltage(net)
        assert found.spread.minimum <= found.spread.maximum if isinstance(found, Estimate) else found.reason
        design.has_path(net)
    for controller in design.controllers:
        design.regulation(controller)
        design.trip(controller)
        design.trip(controller, shorted=True)
        design.reference_load(controller)
        design.timing(controller)
        design.output_mode(controller)
        for regime in Regime:
            design.voltage_in(regime, controller, controller.net("dead time") or "A")


def test_output_control_without_a_supply(design_of: DesignOf):
    # The reference is none then, and the pin's current cannot be told as a share of it.
    design = design_of(
        "U1 P M COMP DTC CT RT 0 C1 0 0 C2 VIN MODE VREF X Y 494\nR1 VREF MODE 1k\nR2 MODE 0 10k"
    )
    found = design.voltage_in(Regime.SUPPLY_ABSENT, design.controllers[0], "MODE")
    assert isinstance(found, Estimate)
    assert found.spread.maximum == 0
