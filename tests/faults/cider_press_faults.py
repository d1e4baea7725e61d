"""What can go wrong with the cider press's push-pull converter."""

from __future__ import annotations

from .cider_press import CIDER_PRESS
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

CIDER_PRESS_FAULTS = faults_of(
    CIDER_PRESS,
    # ---- connections
    ("OUTPUT CTRL open", opened("U1", "OUTPUT CTRL"), "connections.pin-open output-mode.wiring"),
    ("2IN+ open", opened("U1", "2IN+"), "connections.pin-open amplifier.input-open"),
    ("reference and SET bridged", joined("REF", "SET"), "feedback.output-voltage connections.shorted-part"),
    ("snubber's capacitor on one net", moved("C16", "2", "SNUB"), "connections.shorted-part"),
    ("loose end at the trimmer's resistor", opened("R6", "1"), "connections.single-pin-net"),
    ("output net written in two ways", moved("L1", "2", "V_OUT"), "connections.near-names"),
    # ---- supply
    ("battery down to 6 V while cranking", brief("rails.VBAT.voltage", "6 V .. 15 V"), "supply.range"),
    ("on a 24 V truck with load dump", brief("rails.VBAT.voltage", "18 V .. 58 V"), "supply.range"),
    ("no ceramic at the supply", without("C8", "C12"), "supply.bypass"),
    # ---- oscillator
    (
        "timing resistor a decade too small",
        value("R1", "1.37k"),
        "oscillator.timing-range oscillator.frequency",
    ),
    ("timing resistor a decade too large", value("R1", "137k"), "oscillator.frequency"),
    ("timing capacitor doubled", value("C1", "2.2n"), "oscillator.frequency"),
    (
        "the factor of two forgotten: oscillator at the switching frequency",
        value("R1", "27.4k"),
        "oscillator.frequency",
    ),
    ("timing capacitor to the reference", moved("C1", "2", "REF"), "oscillator.timing-parts"),
    ("timing resistor to the supply", moved("R1", "2", "VBAT"), "oscillator.timing-parts"),
    ("timing capacitor of Y5V", rating("C1", dielectric="Y5V"), "oscillator.dielectric"),
    ("timing capacitor an aluminium one", rating("C1", dielectric="aluminium"), "oscillator.dielectric"),
    # ---- dead time
    ("R2 a decade too large", value("R2", "150k"), "dead-time.minimum"),
    ("R2 a decade too small", value("R2", "1.5k"), "dead-time.minimum"),
    ("R3 left out", without("R3"), "dead-time.range"),
    ("DTC at ground", joined("GND", "DTC"), "dead-time.minimum"),
    (
        "DTC below ground",
        moved("R3", "2", "NEG"),
        "dead-time.driven dead-time.range connections.single-pin-net",
    ),
    ("DTC fed from the battery", moved("R2", "1", "VBAT"), "dead-time.source"),
    ("DTC fed from the switch node", moved("R2", "1", "DRA"), "dead-time.source dead-time.range"),
    ("the brief asks for 5 us", brief("controllers.U1.dead_time", "5 us .. 6 us"), "dead-time.minimum"),
    # ---- soft start
    ("soft-start capacitor to ground", moved("C2", "1", "GND"), "soft-start.wiring"),
    ("soft-start capacitor left out", without("C2"), "soft-start.present"),
    ("soft-start capacitor of 4.7 nF", value("C2", "4.7n"), "soft-start.time"),
    ("soft-start capacitor of 470 uF", value("C2", "470u"), "soft-start.time"),
    # ---- reference
    ("R4 and R5 of 100 ohm", all_of(value("R4", "100"), value("R5", "100")), "reference.load"),
    ("a lamp of 5 mA more than it can", added("R99", "resistor", "REF GND", "620"), "reference.load"),
    ("capacitor at the reference left out", without("C9"), "reference.bypass"),
    ("reference joined to the battery", joined("VBAT", "REF"), "reference.back-fed"),
    ("reference shorted", joined("GND", "REF"), "reference.back-fed"),
    ("pull-up from the battery", added("R99", "resistor", "VBAT REF", "2.2k"), "reference.back-fed"),
    # ---- output mode
    ("OUTPUT CTRL at ground", moved("U1", "OUTPUT CTRL", "GND"), "output-mode.topology"),
    (
        "OUTPUT CTRL through 4.7 kohm",
        all_of(moved("U1", "OUTPUT CTRL", "MODE"), added("R99", "resistor", "REF MODE", "4.7k")),
        "output-mode.wiring",
    ),
    (
        "the brief tells of one switch",
        brief("controllers.U1.topology", "single-ended"),
        "output-mode.topology",
    ),
    ("emitters joined", joined("E1", "E2"), "output-mode.outputs-used"),
    (
        "both gates on output 1",
        all_of(moved("D2", "A", "E1"), moved("Q4", "B", "E1"), without("R17")),
        "output-mode.outputs-used",
    ),
    ("collector of output 2 open", opened("U1", "C2"), "output-mode.outputs-used output-stage.path"),
    # ---- output stage and gate drive
    ("R14 left out: output 1 without supply", without("R14"), "output-mode.outputs-used output-stage.path"),
    ("R16 a decade too small", value("R16", "4.7"), "output-stage.current"),
    (
        "R16 left out: nothing pulls the base down",
        without("R16"),
        "gate-drive.turn-off output-stage.path",
    ),
    ("R20 left out", without("R20"), "gate-drive.pull-down"),
    ("R18 of 10 kohm", value("R18", "10k"), "gate-drive.turn-off"),
    ("Q3 left out: the gate empties through 10 kohm", without("Q3"), "gate-drive.turn-off"),
    ("Q3 an NPN", all_of(drawn_as("Q3", "NPN"), value("Q3", "NPN 40V")), "gate-drive.turn-off"),
    (
        "M1 a P-channel type",
        all_of(drawn_as("M1", "PMOS"), value("M1", "PMOS 75V")),
        "gate-drive.polarity",
    ),
    ("drain and source of M2 exchanged", swapped("M2", "D", "S"), "gate-drive.polarity"),
    ("diode to gate B turned round", reversed_("D2"), "gate-drive.voltage gate-drive.polarity"),
    ("diode to gate B left out", without("D2"), "gate-drive.voltage gate-drive.polarity"),
    ("12 V drive from a 28 V rail", brief("rails.VBAT.voltage", "10.5 V .. 28 V"), "gate-drive.voltage"),
    # ---- error amplifiers
    ("1IN+ and 1IN- exchanged", swapped("U1", "1IN+", "1IN-"), "amplifier.polarity"),
    ("2IN+ and 2IN- exchanged", swapped("U1", "2IN+", "2IN-"), "amplifier.polarity"),
    ("compensation left out", without("R8", "C4", "C5"), "amplifier.compensation"),
    (
        "compensation to ground",
        all_of(moved("C4", "2", "GND"), moved("C5", "2", "GND")),
        "amplifier.compensation",
    ),
    (
        "FEEDBACK and reference bridged by 1 kohm",
        added("R99", "resistor", "REF COMP", "1k"),
        "amplifier.feedback-pin",
    ),
    ("R11 left out", without("R11"), "amplifier.input-open current-limit.present"),
    # ---- feedback
    ("RV1 a decade too small", value("RV1", "200"), "feedback.output-voltage"),
    ("R6 a decade too small", value("R6", "3.9k"), "feedback.output-voltage"),
    ("R7 a decade too large", value("R7", "39k"), "feedback.output-voltage"),
    ("R7 left out", without("R7"), "feedback.complete"),
    ("R6 left out", without("R6"), "feedback.complete"),
    (
        "trimmer's wiper open",
        opened("RV1", "W"),
        "connections.single-pin-net amplifier.input-open feedback.complete",
    ),
    ("divider on the rectifier before the choke", moved("R6", "1", "RECT"), "feedback.sense-point"),
    ("divider on the battery", moved("R6", "1", "VBAT"), "feedback.sense-point"),
    ("divider on the switch node", moved("R6", "1", "DRA"), "feedback.sense-point"),
    ("suppressor left out", without("D5"), "feedback.single-fault"),
    ("the brief asks for 48 V", brief("rails.VOUT.voltage", "48 V"), "feedback.output-voltage"),
    # ---- current limit
    ("sense resistor of 0.22 ohm", value("R13", "0.22"), "current-limit.trip-point"),
    ("sense resistor of 0.01 ohm", value("R13", "0.01"), "current-limit.trip-point"),
    ("sense resistor of 1 W", rating("R13", power="1 W"), "current-limit.sense-dissipation"),
    ("R9 a decade too small", value("R9", "4.7k"), "current-limit.trip-point"),
    ("R9 a decade too large", value("R9", "470k"), "current-limit.sense-voltage current-limit.trip-point"),
    (
        "the brief's load of 6 A",
        brief("controllers.U1.current_limit", "6.6 A .. 9 A"),
        "current-limit.trip-point",
    ),
    (
        "sense resistor under the switches",
        all_of(
            moved("M1", "S", "RTN"),
            moved("M2", "S", "RTN"),
            moved("J2", "2", "GND"),
        ),
        "current-limit.pulse-by-pulse",
    ),
    ("motor's return straight to ground", moved("J2", "2", "GND"), "current-limit.present"),
    (
        "current limit left out",
        without("R9", "R10", "R11", "R12", "C6", "C7", "R13"),
        "current-limit.present",
    ),
    # ---- power stage
    ("one rectifier turned round", reversed_("D3"), "output-mode.power-stage"),
    ("both rectifiers turned round", all_of(reversed_("D3"), reversed_("D4")), "output-mode.power-stage"),
    ("one rectifier past the choke", moved("D4", "K", "VOUT"), "output-mode.power-stage"),
    ("both ends of the primary on one switch", moved("T1", "PB", "DRA"), "output-mode.power-stage"),
    ("choke left out", without("L1"), "output-mode.power-stage"),
    (
        "the brief tells of a half-bridge",
        brief("controllers.U1.topology", "half-bridge"),
        "output-mode.power-stage",
    ),
    # ---- ratings
    (
        "output capacitors of 16 V",
        all_of(rating("C13", voltage="16 V"), rating("C14", voltage="16 V")),
        "rating.capacitor-voltage",
    ),
    ("input capacitor of 10 V", rating("C10", voltage="10 V"), "rating.capacitor-voltage"),
    ("output capacitor turned round", reversed_("C13"), "rating.capacitor-polarity"),
    ("R16 of 0.1 W", rating("R16", power="0.1 W", package=""), "rating.resistor-power"),
    ("rectifier shorted", shorted("D3"), "connections.shorted-part"),
)
