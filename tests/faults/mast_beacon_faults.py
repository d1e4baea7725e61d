"""What can go wrong with the mast beacon's boost."""

from __future__ import annotations

from .edits import (
    added,
    all_of,
    brief,
    drawn_as,
    joined,
    moved,
    opened,
    rating,
    reversed_,
    shorted,
    swapped,
    value,
    without,
)
from .fault import faults_of
from .mast_beacon import MAST_BEACON

MAST_BEACON_FAULTS = faults_of(
    MAST_BEACON,
    # ---- connections
    ("DTC pin open", opened("U1", "DTC"), "connections.pin-open dead-time.driven"),
    ("1IN- open", opened("U1", "1IN-"), "connections.pin-open amplifier.input-open"),
    ("catch diode loose", opened("D1", "K"), "connections.single-pin-net"),
    ("choke without a value in the loop's divider", value("R7", ""), "connections.value-missing"),
    ("parts list with another sense resistor", rating("R13", value="0.01"), "connections.value-conflict"),
    # ---- supply
    ("24 V truck battery charging", brief("rails.VBAT.voltage", "22 V .. 42 V"), "supply.range"),
    (
        "battery above the output of a boost",
        brief("rails.VBAT.voltage", "20 V .. 29 V"),
        "dead-time.duty-headroom",
    ),
    ("controller fed from the output", moved("U1", "VCC", "SW"), "supply.range supply.bypass"),
    ("ceramics left out", without("C2", "C4"), "supply.bypass"),
    # ---- oscillator
    ("timing capacitor a decade too large", value("C6", "10n"), "oscillator.frequency"),
    ("timing capacitor 100 pF", value("C6", "100p"), "oscillator.timing-range"),
    ("timing resistor of 680 ohm", value("R1", "680"), "oscillator.timing-range"),
    ("timing capacitor to the supply", moved("C6", "2", "VBAT"), "oscillator.timing-parts"),
    (
        "timing capacitor of 20 % X7R",
        rating("C6", dielectric="X7R", tolerance="20 %"),
        "oscillator.dielectric",
    ),
    # ---- dead time
    ("R2 for half the duty", value("R2", "3k"), "dead-time.duty-headroom dead-time.minimum"),
    ("R3 a decade too large", value("R3", "10k"), "dead-time.duty-headroom"),
    ("R3 left out", without("R3"), "dead-time.range"),
    (
        "battery down to 5 V",
        brief("rails.VBAT.voltage", "4.5 V .. 15 V"),
        "dead-time.duty-headroom supply.range",
    ),
    ("DTC fed from the output", moved("R2", "1", "VOUT"), "dead-time.source dead-time.range"),
    # ---- soft start
    ("soft-start capacitor to ground", moved("C7", "1", "GND"), "soft-start.wiring"),
    ("soft-start capacitor left out", without("C7"), "soft-start.present"),
    ("soft-start capacitor of 220 uF", value("C7", "220u"), "soft-start.time"),
    # ---- reference
    ("450 ohm on the reference", added("R99", "resistor", "REF GND", "430"), "reference.load"),
    ("capacitor at the reference left out", without("C5"), "reference.bypass"),
    ("reference pulled up to the output", added("R99", "resistor", "VOUT REF", "4.7k"), "reference.back-fed"),
    # ---- output mode
    ("OUTPUT CTRL at the reference", moved("U1", "OUTPUT CTRL", "REF"), "output-mode.topology"),
    ("OUTPUT CTRL open", opened("U1", "OUTPUT CTRL"), "output-mode.wiring"),
    ("one emitter at ground", moved("U1", "E2", "GND"), "output-mode.outputs-used"),
    # ---- output stage and gate drive
    ("R14 of 22 ohm", value("R14", "22"), "output-stage.current"),
    ("R14 left out", without("R14"), "output-stage.path gate-drive.turn-off"),
    ("R16 left out", without("R16"), "gate-drive.pull-down"),
    ("Q2 left out", without("Q2"), "gate-drive.turn-off"),
    ("Q2 an NPN", all_of(drawn_as("Q2", "NPN"), value("Q2", "NPN 40V")), "gate-drive.turn-off"),
    ("D3 turned round", reversed_("D3"), "gate-drive.voltage gate-drive.polarity"),
    ("D3 left out", without("D3"), "gate-drive.voltage gate-drive.polarity"),
    (
        "P-channel switch",
        all_of(drawn_as("M1", "PMOS"), value("M1", "PMOS 60V")),
        "gate-drive.polarity",
    ),
    ("drain and source exchanged", swapped("M1", "D", "S"), "gate-drive.polarity"),
    (
        "N-channel gate straight on the collectors",
        all_of(
            moved("U1", "C1", "DRV"),
            moved("U1", "C2", "DRV"),
            moved("U1", "E1", "GND"),
            moved("U1", "E2", "GND"),
            moved("R14", "2", "VBAT"),
        ),
        "gate-drive.polarity",
    ),
    # ---- error amplifiers
    ("1IN+ and 1IN- exchanged", swapped("U1", "1IN+", "1IN-"), "amplifier.polarity"),
    ("2IN+ and 2IN- exchanged", swapped("U1", "2IN+", "2IN-"), "amplifier.polarity"),
    ("compensation left out", without("R8", "C8", "C9"), "amplifier.compensation"),
    ("R11 left out", without("R11"), "amplifier.input-open"),
    # ---- feedback
    ("R7 left out", without("R7"), "feedback.complete"),
    ("R6 left out", without("R6"), "feedback.complete"),
    ("R6 a decade too small", value("R6", "4.32k"), "feedback.output-voltage"),
    ("divider on the battery", moved("R6", "1", "VBAT"), "feedback.sense-point"),
    ("divider on the switch node", moved("R6", "1", "SW"), "feedback.sense-point"),
    ("divider of 10 Mohm", all_of(value("R6", "8.66M"), value("R7", "1M")), "feedback.impedance"),
    ("suppressor left out", without("D4"), "feedback.single-fault"),
    ("the brief asks for 1 %", brief("rails.VOUT.tolerance", "1 %"), "reference.needed-accuracy"),
    # ---- current limit
    ("R9 a decade too large", value("R9", "143k"), "current-limit.trip-point current-limit.sense-voltage"),
    ("R10 at ground", moved("R10", "2", "GND"), "current-limit.present current-limit.trip-point"),
    ("sense resistor of 10 milliohm", value("R13", "0.01"), "current-limit.trip-point"),
    ("sense resistor of 1 W", rating("R13", power="1 W"), "current-limit.sense-dissipation"),
    ("battery's minus straight at ground", moved("J1", "2", "GND"), "current-limit.present"),
    ("sense resistor shorted", shorted("R13"), "connections.shorted-part current-limit.present"),
    (
        "the brief asks for 6 A",
        brief("controllers.U1.current_limit", "6 A .. 8 A"),
        "current-limit.trip-point",
    ),
    # ---- ratings
    ("output capacitor of 16 V", rating("C13", voltage="16 V"), "rating.capacitor-voltage"),
    ("output capacitor turned round", reversed_("C14"), "rating.capacitor-polarity"),
    (
        "R14 in an 0805",
        rating("R14", power="", package="0805"),
        "rating.resistor-power rating.package-assumed",
    ),
    # ---- power stage
    ("output diode turned round", reversed_("D1"), "output-mode.power-stage"),
    ("output diode left out", without("D1"), "output-mode.power-stage"),
    ("choke between switch and output", moved("L1", "1", "VOUT"), "output-mode.power-stage"),
    (
        "choke after the switch node's diode",
        joined("VBAT", "SW"),
        "gate-drive.polarity connections.shorted-part",
    ),
)
