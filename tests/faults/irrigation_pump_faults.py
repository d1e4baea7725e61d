"""What can go wrong with the irrigation pump's half-bridge on the mains."""

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
    swapped,
    value,
    without,
)
from .fault import faults_of
from .irrigation_pump import IRRIGATION_PUMP

IRRIGATION_PUMP_FAULTS = faults_of(
    IRRIGATION_PUMP,
    # ---- mains and barrier
    ("bleeder at the line left out", without("R23"), "safety.discharge"),
    ("one bleeder instead of two", all_of(without("R24"), moved("R23", "2", "N")), "safety.discharge"),
    ("bleeders of 10 Mohm", all_of(value("R23", "10M"), value("R24", "10M")), "safety.discharge"),
    ("capacitor at the line of 10 uF", value("C1", "10u"), "safety.discharge"),
    ("bleeder at the upper bulk capacitor left out", without("R25"), "safety.stored-energy"),
    ("bleeders at the bulk a decade too large", value("R26", "180k"), "safety.stored-energy"),
    ("bulk capacitors of 1 mF", all_of(value("C2", "1m"), value("C3", "1m")), "safety.stored-energy"),
    ("primary and secondary ground linked", added("R99", "resistor", "HVN GND", "0"), "safety.isolation"),
    ("a resistor across the barrier", added("R99", "resistor", "HV VAUX", "1M"), "safety.isolation"),
    ("a divider on the bus", moved("R6", "1", "HV"), "safety.isolation feedback.sense-point"),
    ("an ordinary capacitor for the Y capacitor", rating("C20", dielectric="X7R"), "safety.isolation"),
    ("gate return on the secondary ground", moved("R19", "2", "GND"), "safety.isolation"),
    (
        "drive transformer's return at the secondary ground",
        moved("T2", "S2B", "GND"),
        "gate-drive.pull-down safety.isolation",
        "a transformer may join any nets: which of its pins are on one winding is not known",
    ),
    # ---- connections and supply
    ("OUTPUT CTRL open", opened("U1", "OUTPUT CTRL"), "output-mode.wiring"),
    ("loose end at the bleeder", opened("R25", "1"), "connections.single-pin-net"),
    ("auxiliary supply of 6 V", brief("rails.VAUX.voltage", "5.5 V .. 6.5 V"), "supply.range"),
    ("capacitor at the supply left out", without("C21"), "supply.bypass"),
    # ---- oscillator, dead time, soft start, reference
    ("timing resistor a decade too large", value("R1", "110k"), "oscillator.frequency"),
    ("timing capacitor left out", without("C6"), "oscillator.timing-parts"),
    ("DTC at ground", joined("GND", "DTC"), "dead-time.minimum"),
    ("R3 a decade too large", value("R3", "10k"), "dead-time.minimum dead-time.duty-headroom"),
    ("soft-start capacitor to ground", moved("C7", "1", "GND"), "soft-start.wiring"),
    ("soft-start capacitor left out", without("C7"), "soft-start.present"),
    ("390 ohm on the reference", added("R99", "resistor", "REF GND", "390"), "reference.load"),
    ("capacitor at the reference left out", without("C22"), "reference.bypass"),
    # ---- outputs and gates
    ("OUTPUT CTRL at ground", moved("U1", "OUTPUT CTRL", "GND"), "output-mode.topology"),
    ("collectors joined", joined("COL1", "COL2"), "output-mode.outputs-used"),
    ("clamp at output 1 left out", without("D11"), "output-stage.voltage"),
    ("clamps of 62 V", all_of(value("D11", "ZENER 62V"), value("D12", "ZENER 62V")), "output-stage.voltage"),
    (
        "R22 left out: no drive",
        without("R22"),
        "output-stage.path",
        "a transformer may join any nets: which of its pins are on one winding is not known",
    ),
    ("R20 left out", without("R20"), "gate-drive.pull-down"),
    ("Q3 left out", without("Q3"), "gate-drive.turn-off dead-time.shoot-through"),
    (
        "Q4 an NPN",
        all_of(drawn_as("Q4", "NPN"), value("Q4", "NPN 40V")),
        "gate-drive.turn-off dead-time.shoot-through",
    ),
    (
        "R18 left out: nothing pulls the base of Q3",
        without("R18"),
        "gate-drive.turn-off dead-time.shoot-through",
    ),
    ("drain and source of M1 exchanged", swapped("M1", "D", "S"), "gate-drive.polarity"),
    ("drain and source of M2 exchanged", swapped("M2", "D", "S"), "gate-drive.polarity"),
    (
        "both gates from one phase",
        all_of(moved("T2", "S2A", "HVN"), moved("T2", "S2B", "DRVL")),
        "gate-drive.polarity output-mode.topology",
        "the sense of a transformer's windings is not in a netlist",
    ),
    # ---- power stage
    ("both rectifiers turned round", all_of(reversed_("D5"), reversed_("D6")), "output-mode.power-stage"),
    ("one rectifier left out", without("D5"), "output-mode.power-stage"),
    (
        "the brief tells of a full bridge",
        brief("controllers.U1.topology", "full-bridge"),
        "output-mode.power-stage",
    ),
    # ---- loops
    ("1IN+ and 1IN- exchanged", swapped("U1", "1IN+", "1IN-"), "amplifier.polarity"),
    ("R7 left out", without("R7"), "feedback.complete"),
    ("R6 a decade too small", value("R6", "4.32k"), "feedback.output-voltage"),
    ("divider on the rectifier before the choke", moved("R6", "1", "RECT"), "feedback.sense-point"),
    ("suppressor left out", without("D7"), "feedback.single-fault"),
    ("compensation left out", without("R8", "C8", "C9"), "amplifier.compensation"),
    ("sense resistor of 3 milliohm", value("R13", "0.003"), "current-limit.trip-point"),
    ("sense resistor of 3 W", rating("R13", power="3 W"), "current-limit.sense-dissipation"),
    ("pump's return straight to ground", moved("J2", "2", "GND"), "current-limit.present"),
    # ---- ratings
    ("bulk capacitor of 160 V", rating("C2", voltage="160 V"), "rating.capacitor-voltage"),
    ("bulk capacitor turned round", reversed_("C3"), "rating.capacitor-polarity"),
    ("bleeder of 1 W", rating("R25", power="1 W"), "rating.resistor-power"),
    ("bleeder of 100 V", rating("R26", voltage="100 V"), "rating.resistor-voltage"),
    ("output capacitor of 16 V", rating("C13", voltage="16 V"), "rating.capacitor-voltage"),
    (
        "beside a boiler at 130 degC",
        brief("design.ambient", "0 degC .. 130 degC"),
        "output-stage.dissipation current-limit.sense-dissipation",
    ),
)
