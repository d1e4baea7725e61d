"""Published designs around a 494, as sound designs: a reviewer may frown, but nothing in them is wrong.

All values are from memory. SLVA001 is the supply of tests/published. The two application circuits are a
second source's: the values given there are marked with `*`; the rest is ours, drawn in the usual way.
"""

from __future__ import annotations

from pathlib import Path

from pwmlint.grammar import Netlist, read

from .board import GROUND, Board, Part, brief_of, parts_of

_SYMBOLS = {"R": "resistor", "C": "capacitor", "L": "inductor", "D": "diode"}


def _board_of(netlist: Netlist, brief: str) -> Board:
    """Return a netlist of two-ended parts, transistors and one controller as a board."""
    parts: list[Part] = []
    for part in netlist.parts.values():
        kind = netlist.models.get(part.model.casefold(), "").upper()
        symbol = "controller" if part.reference == "U1" else _SYMBOLS.get(part.element, kind)
        nets = tuple(GROUND if pin.net == "0" else pin.net for pin in part.pins)
        parts.append(Part(part.reference, symbol, nets, part.value or part.model))
    return Board("SLVA001", tuple(parts), brief_of(brief))


# 32 V to 5 V at 20 kHz; RT x CT = 50 us makes 20 to 24 kHz, 17.3 to 28.1 kHz with parts of 5 % and 10 %.
# The load is not told: the note's limit stands at the 10 A that it may draw.
SLVA001 = _board_of(
    read(Path(__file__).parent.parent / "published" / "slva001.cir"),
    """
    rails.VI.voltage = "32 V"
    rails.VO.voltage = "5 V"
    controllers.U1.topology = "single-ended"
    controllers.U1.output = "VO"
    controllers.U1.switching_frequency = "17 kHz .. 29 kHz"
    """,
)

# Push-pull, 8 V to 20 V in, 28 V, 0.2 A out, short-circuit limit 250 mA: the bottom end of the winding is
# switched to the input by PNP transistors. 28 V x 4.7 / 26.7 = 4.93 V against the reference itself.
PUSH_PULL_28_V = Board(
    "push-pull 28 V",
    parts_of(
        """
        J1   connector     VIN GND                8 V TO 20 V
        C1   electrolytic  VIN GND                50u
        U1   controller    FB SET COMP GND CT RT GND COL1 GND GND COL2 VIN REF REF LIM SNS  494  # * pin 13
        R1   resistor      RT GND                 15k    # *
        C2   capacitor     CT GND                 1n     # *
        R2   resistor      REF SET                4.7k
        R3   resistor      VOUT FB                22k    # *
        R4   resistor      FB GND                 4.7k   # *
        R5   resistor      COMP SET               1M
        R6   resistor      COMP CZ                33k
        C3   capacitor     CZ SET                 10n
        R7   resistor      REF LIM                4.7k
        R8   resistor      LIM GND                240
        R9   resistor      RTN SNS                1k
        R10  resistor      RTN GND                1      # *
        R11  resistor      VIN B1                 100
        R12  resistor      VIN B2                 100
        R13  resistor      B1 COL1                150
        R14  resistor      B2 COL2                150
        Q1   PNP           DRA B1 VIN             PNP 40V 3A   # *
        Q2   PNP           DRB B2 VIN             PNP 40V 3A   # *
        T1   transformer   DRA GND DRB SECA GND SECB  20 TO 120 TURNS
        D1   diode         SECA RECT              FAST 200V 1A
        D2   diode         SECB RECT              FAST 200V 1A
        L1   inductor      RECT VOUT              3.5m   # *
        C4   electrolytic  VOUT GND               50u
        J2   connector     VOUT RTN               LOAD
        """
    ),
    brief_of(
        """
        rails.VIN.voltage = "8 V .. 20 V"
        rails.VOUT.voltage = "28 V"
        rails.VOUT.load = "0 A .. 0.2 A"
        controllers.U1.topology = "push-pull"
        controllers.U1.output = "VOUT"
        """
    ),
)

# Step-down, 10 V to 40 V in, 5 V, 1 A out, short-circuit limit about 1.3 A. The output is compared with the
# reference itself; the sense resistor stands in the return, below the controller's ground.
STEP_DOWN_5_V = Board(
    "step-down 5 V",
    parts_of(
        """
        J1   connector     VIN INRTN              10 V TO 40 V
        C1   electrolytic  VIN INRTN              50u
        U1   controller    FB SET COMP GND CT RT GND COL GND GND COL VIN GND REF LIM GND  494  # * pin 13
        R1   resistor      RT GND                 47k    # *
        C2   capacitor     CT GND                 1n     # *
        R2   resistor      REF SET                5.1k   # *
        R3   resistor      VOUT FB                5.1k   # *
        R4   resistor      COMP SET               1M     # *
        R5   resistor      COMP CZ                47k    # *
        C3   capacitor     CZ SET                 100n
        R6   resistor      REF LIM                5.1k
        R7   resistor      LIM INRTN              150
        R8   resistor      GND INRTN              0.1    # *
        R9   resistor      VIN BASE               47
        R10  resistor      BASE COL               150
        Q1   PNP           SW BASE VIN            PNP 60V 3A   # *
        D1   diode         INRTN SW               FAST 100V 3A
        L1   inductor      SW VOUT                1m     # *
        C4   electrolytic  VOUT GND               50u
        C5   capacitor     VOUT GND               100n
        J2   connector     VOUT GND               LOAD
        """
    ),
    brief_of(
        """
        rails.VIN.voltage = "10 V .. 40 V"
        rails.VOUT.voltage = "5 V"
        rails.VOUT.load = "0 A .. 1 A"
        controllers.U1.topology = "single-ended"
        controllers.U1.output = "VOUT"
        """
    ),
)

PUBLISHED = (SLVA001, PUSH_PULL_28_V, STEP_DOWN_5_V)
