"""Boost: 12 V battery to the 24 V beacon of a weather mast, 1 A, an N-channel switch behind joined followers.

The current is sensed in the battery's return, below ground: 2IN+ looks at ground, 2IN- at a divider from the
reference down to the battery's minus, which falls as the current rises. Figures:

- RT x CT = 12 us: 83 to 100 kHz, every pulse at the one switch (both outputs joined).
- DTC at 5 V / 11 = 0.45 V leaves 80 % of duty; 1 - 10.5 V / 24 V = 56 % are needed.
- Soft start: 1 uF x 0.91 kohm = 0.9 ms.
- Output: 2.5 V x (1 + 43.2 / 4.99) = 24.1 V.
- Limit: zero at LIM where I x 0.1 ohm / 1 kohm = 5 V / 14.3 kohm, I = 3.5 A; the full load takes
  24 V x 1 A / (10.5 V x 0.9) = 2.6 A. At 4 A the sense resistor takes 1.6 W.
- Drive: the followers lift the gate to between 10.5 V - 2.5 V - 0.5 V = 7.5 V and 15 V; Q2 empties it.
"""

from __future__ import annotations

from .board import Board, brief_of, parts_of, ratings_of

MAST_BEACON = Board(
    "mast beacon",
    parts_of(
        """
        J1   connector     VIN BATN               BATTERY
        F1   fuse          VIN VBAT               5A
        R13  resistor      GND BATN               0.1
        C1   electrolytic  VBAT GND               470u
        C2   capacitor     VBAT GND               2.2u
        U1   controller    FB SET COMP DTC CT RT GND VBAT DRV DRV VBAT VBAT GND REF LIM SNS  494
        C4   capacitor     VBAT GND               100n
        C5   capacitor     REF GND                100n
        R1   resistor      RT GND                 12k
        C6   capacitor     CT GND                 1n
        R2   resistor      REF DTC                10k
        R3   resistor      DTC GND                1k
        C7   capacitor     REF DTC                1u
        R4   resistor      REF SET                4.99k
        R5   resistor      SET GND                4.99k
        R6   resistor      VOUT FB                43.2k
        R7   resistor      FB GND                 4.99k
        R8   resistor      COMP CZ                47k
        C8   capacitor     CZ SET                 22n
        C9   capacitor     COMP SET               220p
        R9   resistor      REF LIM                14.3k
        R10  resistor      LIM BATN               1k
        R11  resistor      SNS GND                1k
        C12  capacitor     LIM GND                10n
        R14  resistor      DRV GND                470
        D3   diode         DRV GATE               SCHOTTKY 40V 1A
        Q2   PNP           GND DRV GATE           PNP 40V
        R16  resistor      GATE GND               10k
        M1   NMOS          SW GATE GND            NMOS 60V
        L1   inductor      VBAT SW                100u
        D1   diode         SW VOUT                SCHOTTKY 60V 5A
        C13  electrolytic  VOUT GND               220u
        C14  electrolytic  VOUT GND               220u
        C15  capacitor     VOUT GND               1u
        D4   diode         GND VOUT               TVS 28V
        J2   connector     VOUT GND               BEACON
        """
    ),
    brief_of(
        """
        design.ambient = "-10 degC .. 45 degC"
        design.derating = "commercial"
        rails.VBAT.voltage = "10.5 V .. 15 V"
        rails.VOUT.voltage = "24 V"
        rails.VOUT.tolerance = "15 %"
        rails.VOUT.load = "0 A .. 1 A"
        controllers.U1.topology = "single-ended"
        controllers.U1.output = "VOUT"
        controllers.U1.switching_frequency = "70 kHz .. 110 kHz"
        controllers.U1.dead_time = "1 us .. 4 us"
        controllers.U1.soft_start = "0.1 ms .. 5 ms"
        controllers.U1.current_limit = "2.7 A .. 4.4 A"
        """
    ),
    ratings_of(
        """
        R1-R11: tolerance 1 %; power 0.125 W; voltage 150 V; package 0805; drift 100 ppm/K
        R13: tolerance 1 %; power 5 W; drift 50 ppm/K
        R14: tolerance 5 %; power 1 W; voltage 200 V; package 2512
        R16: tolerance 5 %; power 0.25 W; voltage 200 V; package 1206
        C1: tolerance 20 %; voltage 35 V; dielectric aluminium
        C2: tolerance 10 %; voltage 50 V; package 1210; dielectric X7R
        C4 C5 C8 C12: tolerance 10 %; voltage 50 V; package 0805; dielectric X7R
        C7: tolerance 10 %; voltage 25 V; package 0805; dielectric X7R
        C6 C9: tolerance 5 %; voltage 50 V; package 0805; dielectric C0G; drift 30 ppm/K
        C13 C14: tolerance 20 %; voltage 50 V; dielectric aluminium
        C15: tolerance 10 %; voltage 50 V; package 1206; dielectric X7R
        D1: voltage 60 V; current 5 A
        M1: voltage 60 V; current 30 A; package TO-220
        L1: tolerance 20 %; current 5 A
        """
    ),
)
