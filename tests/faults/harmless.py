"""Changes that a sound board stands: what engineers also draw, and what must raise no alarm."""

from __future__ import annotations

from .board import Board
from .cider_press import CIDER_PRESS
from .cold_store import COLD_STORE
from .edits import Edit, added, all_of, brief, moved, rating, value, without
from .fault import Fault
from .frost_fan import FROST_FAN
from .mast_beacon import MAST_BEACON


def _on(board: Board, *rows: tuple[str, Edit]) -> tuple[Fault, ...]:
    return tuple(Fault(board, words, edit, ()) for words, edit in rows)


def _snubber(number: int, one: str, other: str) -> Edit:
    """Add a resistor and a capacitor in series between two nets."""
    middle = f"SNUB{number}"
    return all_of(
        added(f"R{number}", "resistor", f"{one} {middle}", "10"),
        added(f"C{number}", "capacitor", f"{middle} {other}", "1n"),
    )


def _resistor(nets: str, text: str) -> Edit:
    """Add a resistor with the ratings of its neighbours."""
    told = rating("R90", tolerance="1 %", power="0.5 W", voltage="200 V", drift="100 ppm/K")
    return all_of(added("R90", "resistor", nets, text), told)


HARMLESS = (
    *_on(
        FROST_FAN,
        ("a snubber at the catch diode", _snubber(90, "SW", "GND")),
        (
            "a lamp at the output",
            all_of(_resistor("VOUT LAMP", "2.2k"), added("D90", "diode", "LAMP GND", "LED GREEN")),
        ),
        ("a preload", _resistor("VOUT GND", "1k")),
        (
            "a diode against a reversed battery",
            all_of(moved("F1", "1", "VPROT"), added("D90", "diode", "VIN VPROT", "SCHOTTKY 60V 20A")),
        ),
        ("a suppressor at the battery", added("D90", "diode", "GND VBAT", "TVS 36V")),
        (
            "two sense resistors in parallel",
            all_of(
                value("R13", "0.1"),
                added("R90", "resistor", "RTN GND", "0.1"),
                rating("R90", tolerance="1 %", power="10 W", drift="50 ppm/K"),
            ),
        ),
        (
            "a filter choke in front of the converter",
            all_of(moved("F1", "2", "VFUSE"), added("L90", "inductor", "VFUSE VBAT", "4.7u")),
        ),
        (
            "supply pin behind 10 ohm with its own capacitor",
            all_of(moved("U1", "VCC", "VCC"), moved("C4", "1", "VCC"), _resistor("VBAT VCC", "10")),
        ),
        ("two capacitors at the reference", added("C90", "capacitor", "REF GND", "1u")),
        ("a filter of 1 nF at DTC", added("C90", "capacitor", "DTC GND", "1n")),
        (
            "timing resistor of two in series",
            all_of(value("R1", "12k"), moved("R1", "2", "RT2"), _resistor("RT2 GND", "10k")),
        ),
        (
            "timing capacitor of two in parallel",
            all_of(
                value("C6", "470p"),
                added("C90", "capacitor", "CT GND", "560p"),
                rating("C90", tolerance="5 %", voltage="50 V", dielectric="C0G"),
            ),
        ),
        (
            "OUTPUT CTRL to ground through 47 ohm",
            all_of(moved("U1", "OUTPUT CTRL", "MODE"), _resistor("MODE GND", "47")),
        ),
        ("output 2 tied off", moved("U1", "C2", "GND")),
        (
            "100 ohm in series with 1IN+",
            all_of(moved("U1", "1IN+", "FBIN"), _resistor("FB FBIN", "100")),
        ),
        (
            "upper half of the divider of two",
            all_of(value("R6", "18.2k"), moved("R6", "2", "FB2"), _resistor("FB2 FB", "20k")),
        ),
        ("a class 1 dielectric in other words", rating("C6", dielectric="class 1")),
        (
            "a brief that tells one frequency's band",
            brief("controllers.U1.switching_frequency", "35 kHz .. 65 kHz"),
        ),
        ("a brief without an ambient's extremes", brief("design.ambient", "20 degC .. 30 degC")),
    ),
    *_on(
        CIDER_PRESS,
        (
            "a snubber at each switch",
            all_of(without("R22", "C16"), _snubber(90, "DRA", "GND"), _snubber(91, "DRB", "GND")),
        ),
        (
            "zeners at the gates",
            all_of(
                added("D90", "diode", "GND GATEA", "ZENER 18V"),
                added("D91", "diode", "GND GATEB", "ZENER 18V"),
            ),
        ),
        ("compensation of one network only", without("C5")),
        ("a bleeder at the output", _resistor("VOUT GND", "2.2k")),
        (
            "OUTPUT CTRL to the reference through 10 ohm",
            all_of(moved("U1", "OUTPUT CTRL", "MODE"), _resistor("REF MODE", "10")),
        ),
        (
            "a bead in the supply",
            all_of(
                moved("U1", "VCC", "VCC"),
                moved("C8", "1", "VCC"),
                added("L90", "inductor", "VBAT VCC", "10u"),
            ),
        ),
        ("a warm shed", brief("design.ambient", "0 degC .. 45 degC")),
    ),
    *_on(
        COLD_STORE,
        ("a snubber across the primary", _snubber(90, "SW", "MID")),
        (
            "a capacitor in series with the primary",
            all_of(moved("T1", "PB", "PRI"), added("C90", "capacitor", "PRI MID", "1u")),
        ),
        (
            "diodes across the gate resistors",
            all_of(added("D90", "diode", "GATEH HO", "SIGNAL"), added("D91", "diode", "GATEL LO", "SIGNAL")),
        ),
        (
            "filters at HIN and LIN",
            all_of(
                added("C90", "capacitor", "HIN GND", "100p"), added("C91", "capacitor", "LIN GND", "100p")
            ),
        ),
        ("snubbers at the rectifiers", all_of(_snubber(90, "SECA", "GND"), _snubber(91, "SECB", "GND"))),
    ),
    *_on(
        MAST_BEACON,
        ("a second output diode", added("D90", "diode", "SW VOUT", "SCHOTTKY 60V 5A")),
        ("a snubber at the switch", _snubber(90, "SW", "GND")),
        ("a filter at SNS", added("C90", "capacitor", "SNS GND", "1n")),
        ("compensation of the series pair only", without("C9")),
        (
            "a gate resistor",
            all_of(moved("M1", "G", "GATEM"), moved("R16", "1", "GATEM"), _resistor("GATE GATEM", "10")),
        ),
        ("a zener at the gate", added("D90", "diode", "GND GATE", "ZENER 18V")),
        (
            "an output filter behind the sense point",
            all_of(
                moved("J2", "1", "VLAMP"),
                added("L90", "inductor", "VOUT VLAMP", "2.2u"),
                added("C90", "capacitor", "VLAMP GND", "1u"),
            ),
        ),
    ),
)
