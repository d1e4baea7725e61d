"""What can go wrong with the cold store's half-bridge."""

from __future__ import annotations

from .cold_store import COLD_STORE
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
    swapped,
    value,
    without,
)
from .fault import faults_of

COLD_STORE_FAULTS = faults_of(
    COLD_STORE,
    # ---- connections
    ("CT pin open", opened("U1", "CT"), "connections.pin-open oscillator.timing-parts"),
    ("emitter of output 1 open", opened("U1", "E1"), "output-mode.outputs-used connections.single-pin-net"),
    ("bootstrap capacitor loose at the switch node", opened("C20", "2"), "connections.single-pin-net"),
    ("gate resistor loose", opened("R18", "2"), "connections.single-pin-net gate-drive.pull-down"),
    # ---- supply
    ("controller on the bank itself", moved("U1", "VCC", "VBUS"), "supply.range"),
    ("auxiliary supply of 5 V", brief("rails.VAUX.voltage", "4.75 V .. 5.25 V"), "supply.range"),
    ("ceramics at the supply left out", without("C4", "C21"), "supply.bypass"),
    # ---- oscillator
    ("timing capacitor a decade too large", value("C6", "10n"), "oscillator.frequency"),
    ("timing resistor below the range", value("R1", "1.1k"), "oscillator.timing-range oscillator.frequency"),
    ("timing resistor for 50 kHz at the oscillator", value("R1", "22k"), "oscillator.frequency"),
    ("timing resistor left out", without("R1"), "oscillator.timing-parts"),
    ("timing capacitor left out", without("C6"), "oscillator.timing-parts"),
    ("timing parts exchanged", swapped("U1", "CT", "RT"), "oscillator.timing-parts"),
    # ---- dead time
    ("R2 left out: no dead time but the controller's own", without("R2"), "dead-time.minimum"),
    ("R3 left out", without("R3"), "dead-time.range"),
    ("R2 a decade too small", value("R2", "2.2k"), "dead-time.minimum dead-time.duty-headroom"),
    ("DTC on a capacitor alone", without("R2", "R3"), "dead-time.driven"),
    ("DTC at ground", joined("GND", "DTC"), "dead-time.minimum"),
    ("DTC fed from the auxiliary supply", moved("R2", "1", "VAUX"), "dead-time.source"),
    (
        "more duty asked for than is left",
        brief("controllers.U1.maximum_duty", "48 %"),
        "dead-time.duty-headroom",
    ),
    ("the brief asks for 2 us", brief("controllers.U1.dead_time", "2 us .. 3 us"), "dead-time.minimum"),
    # ---- soft start
    ("soft-start capacitor to ground", moved("C7", "1", "GND"), "soft-start.wiring"),
    ("soft-start capacitor left out", without("C7"), "soft-start.present"),
    ("soft-start capacitor of 4.7 nF", value("C7", "4.7n"), "soft-start.time"),
    # ---- reference
    ("1 kohm and the mode pin too much", added("R99", "resistor", "REF GND", "820"), "reference.load"),
    ("capacitor at the reference left out", without("C5"), "reference.bypass"),
    ("reference bridged to the auxiliary supply", joined("VAUX", "REF"), "reference.back-fed"),
    ("pull-up from the bank", added("R99", "resistor", "VBUS REF", "10k"), "reference.back-fed"),
    # ---- output mode
    ("OUTPUT CTRL at ground", moved("U1", "OUTPUT CTRL", "GND"), "output-mode.topology"),
    ("OUTPUT CTRL at the auxiliary supply", moved("U1", "OUTPUT CTRL", "VAUX"), "output-mode.wiring"),
    ("HIN and LIN bridged", joined("HIN", "LIN"), "output-mode.outputs-used"),
    ("collector of output 1 open", opened("U1", "C1"), "output-mode.outputs-used"),
    (
        "the brief tells of one switch",
        brief("controllers.U1.topology", "single-ended"),
        "output-mode.topology",
    ),
    # ---- output stage and gate drive
    ("R14 left out: HIN never falls", without("R14"), "output-stage.path"),
    ("R15 of 10 ohm", value("R15", "10"), "output-stage.current"),
    ("R21 left out", without("R21"), "gate-drive.pull-down"),
    (
        "R20 to ground",
        moved("R20", "2", "GND"),
        "gate-drive.pull-down",
        "it does hold the gate off without supply; that it loads the bootstrap needs the driver's inside",
    ),
    ("gate resistor of 10 kohm", value("R19", "10k"), "gate-drive.turn-off"),
    ("drain and source of M1 exchanged", swapped("M1", "D", "S"), "gate-drive.polarity"),
    ("drain and source of M2 exchanged", swapped("M2", "D", "S"), "gate-drive.polarity"),
    (
        "HO and LO exchanged",
        swapped("U2", "HO", "LO"),
        "gate-drive.polarity gate-drive.pull-down",
        "which pin of a driver circuit does what is not known",
    ),
    (
        "collectors on the bank",
        all_of(moved("U1", "C1", "VBUS"), moved("U1", "C2", "VBUS")),
        "output-stage.voltage",
    ),
    # ---- error amplifiers
    ("1IN+ and 1IN- exchanged", swapped("U1", "1IN+", "1IN-"), "amplifier.polarity"),
    ("2IN+ and 2IN- exchanged", swapped("U1", "2IN+", "2IN-"), "amplifier.polarity"),
    ("compensation left out", without("R8", "C8", "C9"), "amplifier.compensation"),
    ("FEEDBACK pulled up to 12 V", added("R99", "resistor", "VAUX COMP", "10k"), "amplifier.feedback-pin"),
    ("sensing the bank's current at the plus side", moved("U1", "2IN+", "VBUS"), "amplifier.common-mode"),
    # ---- feedback
    ("R6 a decade too large", value("R6", "383k"), "feedback.output-voltage"),
    ("R7 a decade too small", value("R7", "1k"), "feedback.output-voltage"),
    ("R6 left out", without("R6"), "feedback.complete"),
    ("R7 left out", without("R7"), "feedback.complete"),
    ("divider on the auxiliary supply", moved("R6", "1", "VAUX"), "feedback.sense-point"),
    ("divider on the bank", moved("R6", "1", "VBUS"), "feedback.sense-point"),
    ("suppressor left out", without("D6"), "feedback.single-fault"),
    ("the brief asks for 24 V", brief("rails.VOUT.voltage", "24 V"), "feedback.output-voltage"),
    # ---- current limit
    ("sense resistor of 0.1 ohm", value("R13", "0.1"), "current-limit.trip-point"),
    ("sense resistor of 0.5 W", rating("R13", power="0.5 W"), "current-limit.sense-dissipation"),
    ("R10 a decade too large", value("R10", "30.1k"), "current-limit.trip-point"),
    ("R10 left out", without("R10"), "current-limit.trip-point"),
    ("fans' return straight to ground", moved("J2", "2", "GND"), "current-limit.present"),
    ("R13 shorted", joined("GND", "RTN"), "connections.shorted-part"),
    # ---- power stage
    ("both rectifiers turned round", all_of(reversed_("D3"), reversed_("D4")), "output-mode.power-stage"),
    ("one rectifier turned round", reversed_("D3"), "output-mode.power-stage"),
    ("lower switch not on the node", moved("M2", "D", "MID"), "output-mode.power-stage"),
    (
        "the brief tells of a push-pull stage",
        brief("controllers.U1.topology", "push-pull"),
        "output-mode.power-stage",
    ),
    # ---- ratings
    ("bus capacitor of 50 V", rating("C1", voltage="50 V"), "rating.capacitor-voltage"),
    ("bus capacitor turned round", reversed_("C1"), "rating.capacitor-polarity"),
    (
        "R14 of 0.05 W",
        rating("R14", power="0.05 W", package=""),
        "rating.resistor-power",
        "the driver circuit keeps the voltage of HIN from being computed",
    ),
    (
        "balancing resistor of 22 V",
        rating("R24", voltage="22 V", package=""),
        "rating.resistor-voltage",
        "the transformer's winding keeps the voltage of MID from being computed",
    ),
    (
        "one P-channel switch",
        all_of(drawn_as("M2", "PMOS"), value("M2", "PMOS 100V")),
        "gate-drive.polarity",
    ),
)
