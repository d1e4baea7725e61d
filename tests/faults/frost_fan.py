"""Single-ended buck: 24 V battery to a 12 V fan, 6 A, a P-channel switch driven from both collectors.

The same design as in the examples, where it is drawn as a list. Figures: RT x CT = 22 us makes 45 to 55 kHz;
5 V / 11 = 0.45 V on DTC leave 80 % of duty where 12 V / 21 V = 57 % are needed; 2.5 V x (1 + 38.3 / 10) =
12.1 V; 0.40 V / 0.05 ohm = 8 A.
"""

from __future__ import annotations

from .board import Board, brief_of, parts_of, ratings_of

FROST_FAN = Board(
    "frost fan",
    parts_of(
        """
        J1   connector     VIN GND                BATTERY
        F1   fuse          VIN VBAT               7.5A
        C1   electrolytic  VBAT GND               470u
        C2   electrolytic  VBAT GND               470u
        C3   capacitor     VBAT GND               1u
        U1   controller    FB SET COMP DTC CT RT GND DRN GND GND DRN VBAT GND REF LIM SNS  494
        C4   capacitor     VBAT GND               100n
        C5   capacitor     REF GND                100n
        R1   resistor      RT GND                 22k
        C6   capacitor     CT GND                 1n
        R2   resistor      REF DTC                10k
        R3   resistor      DTC GND                1k
        C7   capacitor     REF DTC                1u
        R4   resistor      REF SET                4.99k
        R5   resistor      SET GND                4.99k
        R6   resistor      VOUT FB                38.3k
        R7   resistor      FB GND                 10k
        C10  capacitor     VOUT FB                2.2n
        R8   resistor      COMP CZ                22k
        C8   capacitor     CZ SET                 22n
        C9   capacitor     COMP SET               220p
        R9   resistor      REF LIM                47k
        R10  resistor      LIM GND                4.12k
        R11  resistor      RTN SNS                1k
        C12  capacitor     SNS GND                1n
        R12  resistor      LIM LZ                 47k
        C11  capacitor     LZ COMP                10n
        R13  resistor      RTN GND                0.05
        R14  resistor      VBAT DRV               1k
        R15  resistor      DRV DRN                270
        Q2   NPN           VBAT DRV GATE          NPN 40V
        D3   diode         GATE DRV               SIGNAL
        D2   diode         GATE VBAT              ZENER 12V
        R16  resistor      GATE VBAT              10k
        M1   PMOS          SW GATE VBAT           PMOS 60V
        D1   diode         GND SW                 SCHOTTKY 60V 15A
        L1   inductor      SW VOUT                100u
        C13  electrolytic  VOUT GND               220u
        C14  electrolytic  VOUT GND               220u
        C15  capacitor     VOUT GND               1u
        D4   diode         GND VOUT               TVS 17V
        J2   connector     VOUT RTN               FAN
        """
    ),
    brief_of(
        """
        design.ambient = "-10 degC .. 50 degC"
        design.derating = "commercial"
        rails.VBAT.voltage = "21 V .. 29 V"
        rails.VOUT.voltage = "12 V"
        rails.VOUT.tolerance = "15 %"
        rails.VOUT.load = "0 A .. 6 A"
        controllers.U1.topology = "single-ended"
        controllers.U1.output = "VOUT"
        controllers.U1.switching_frequency = "40 kHz .. 60 kHz"
        controllers.U1.dead_time = "2 us .. 5 us"
        controllers.U1.soft_start = "0.5 ms .. 5 ms"
        controllers.U1.current_limit = "6.6 A .. 9.6 A"
        """
    ),
    ratings_of(
        """
        R1-R12: tolerance 1 %; power 0.125 W; voltage 150 V; package 0805; drift 100 ppm/K
        R13: tolerance 1 %; power 10 W; package TO-220; drift 50 ppm/K
        R14: tolerance 5 %; power 1 W; voltage 200 V; package 2512
        R15: tolerance 5 %; power 2 W; voltage 200 V
        R16: tolerance 5 %; power 0.125 W; voltage 150 V; package 0805
        C1 C2: tolerance 20 %; voltage 50 V; dielectric aluminium
        C3: tolerance 10 %; voltage 100 V; package 1210; dielectric X7R
        C4 C5 C8 C11: tolerance 10 %; voltage 50 V; package 0805; dielectric X7R
        C7: tolerance 10 %; voltage 25 V; package 0805; dielectric X7R
        C6 C9 C10 C12: tolerance 5 %; voltage 50 V; package 0805; dielectric C0G; drift 30 ppm/K
        C13 C14: tolerance 20 %; voltage 25 V; dielectric aluminium
        C15: tolerance 10 %; voltage 50 V; package 1206; dielectric X7R
        D1: voltage 60 V; current 15 A; package TO-220
        M1: voltage 60 V; current 20 A; package TO-220
        L1: tolerance 20 %; current 12 A
        """
    ),
)
