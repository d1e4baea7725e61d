"""Push-pull: 12 V tractor battery to 24 V, 3 A, two N-channel switches behind emitter followers.

The same design as in the examples, where it is drawn over two pages. Figures: RT x CT = 13.7 us makes 73 to
88 kHz, half of it at each switch; 0.31 V on DTC make 1.5 us; RV1 sets 24 V; 0.40 V / 0.1 ohm = 4 A.
"""

from __future__ import annotations

from .board import Board, brief_of, parts_of, ratings_of

CIDER_PRESS = Board(
    "cider press",
    parts_of(
        """
        U1   controller    FB SET COMP DTC CT RT GND OC1 E1 E2 OC2 VBAT REF REF LIM SNS  494
        R1   resistor      RT GND                 13.7k
        C1   capacitor     CT GND                 1n
        R2   resistor      REF DTC                15k
        R3   resistor      DTC GND                1k
        C2   capacitor     REF DTC                4.7u
        R4   resistor      REF SET                4.99k
        R5   resistor      SET GND                4.99k
        R6   resistor      VOUT TOP               39k
        RV1  trimmer       BOT FB TOP             2k
        R7   resistor      BOT GND                3.9k
        C3   capacitor     VOUT FB                2.7n
        R8   resistor      COMP CZ                22k
        C4   capacitor     CZ SET                 22n
        C5   capacitor     COMP SET               220p
        R9   resistor      REF LIM                47k
        R10  resistor      LIM GND                4.12k
        R11  resistor      RTN SNS                1k
        C6   capacitor     SNS GND                1n
        R12  resistor      LIM LZ                 47k
        C7   capacitor     LZ COMP                10n
        C8   capacitor     VBAT GND               100n
        C9   capacitor     REF GND                100n
        R14  resistor      VBAT OC1               68
        R15  resistor      VBAT OC2               68
        R16  resistor      E1 GND                 470
        R17  resistor      E2 GND                 470
        J1   connector     VIN GND                BATTERY
        F1   fuse          VIN VBAT               15A
        C10  electrolytic  VBAT GND               1000u
        C11  electrolytic  VBAT GND               1000u
        C12  capacitor     VBAT GND               2.2u
        D1   diode         E1 GA                  SCHOTTKY 40V 1A
        D2   diode         E2 GB                  SCHOTTKY 40V 1A
        Q3   PNP           GND E1 GA              PNP 40V
        Q4   PNP           GND E2 GB              PNP 40V
        R18  resistor      GA GATEA               10
        R19  resistor      GB GATEB               10
        R20  resistor      GATEA GND              10k
        R21  resistor      GATEB GND              10k
        M1   NMOS          DRA GATEA GND          NMOS 75V
        M2   NMOS          DRB GATEB GND          NMOS 75V
        T1   transformer   DRA VBAT DRB SECA GND SECB  PRESS TRANSFORMER
        R22  resistor      DRA SNUB               10
        C16  capacitor     SNUB DRB               2.2n
        D3   diode         SECA RECT              ULTRAFAST 200V 8A
        D4   diode         SECB RECT              ULTRAFAST 200V 8A
        L1   inductor      RECT VOUT              150u
        C13  electrolytic  VOUT GND               220u
        C14  electrolytic  VOUT GND               220u
        C15  capacitor     VOUT GND               1u
        D5   diode         GND VOUT               TVS 28V
        R13  resistor      RTN GND                0.1
        J2   connector     VOUT RTN               PRESS MOTOR
        """
    ),
    brief_of(
        """
        design.ambient = "0 degC .. 40 degC"
        design.derating = "commercial"
        rails.VBAT.voltage = "10.5 V .. 15 V"
        rails.VOUT.voltage = "24 V"
        rails.VOUT.tolerance = "2 %"
        rails.VOUT.load = "0 A .. 3 A"
        controllers.U1.topology = "push-pull"
        controllers.U1.output = "VOUT"
        controllers.U1.switching_frequency = "33 kHz .. 48 kHz"
        controllers.U1.dead_time = "1 us .. 3 us"
        controllers.U1.soft_start = "2 ms .. 20 ms"
        controllers.U1.current_limit = "3.2 A .. 5 A"
        """
    ),
    ratings_of(
        """
        R1-R12: tolerance 1 %; power 0.25 W; voltage 200 V; package 1206; drift 100 ppm/K
        R13: tolerance 5 %; power 5 W; drift 50 ppm/K
        R14 R15 R16 R17: tolerance 5 %; power 1 W; voltage 200 V; package 2512
        R18 R19 R20 R21: tolerance 5 %; power 0.25 W; voltage 200 V; package 1206
        R22: tolerance 5 %; power 2 W; voltage 350 V
        RV1: tolerance 10 %; power 0.5 W; voltage 300 V; drift 100 ppm/K
        C1 C3 C5 C6: tolerance 5 %; voltage 50 V; package 0805; dielectric C0G; drift 30 ppm/K
        C2: tolerance 10 %; voltage 16 V; package 1206; dielectric X7R
        C4 C7 C8 C9: tolerance 10 %; voltage 50 V; package 0805; dielectric X7R
        C10 C11: tolerance 20 %; voltage 25 V; dielectric aluminium
        C12: tolerance 10 %; voltage 50 V; package 1210; dielectric X7R
        C13 C14: tolerance 20 %; voltage 50 V; dielectric aluminium
        C15: tolerance 10 %; voltage 100 V; package 1210; dielectric X7R
        C16: tolerance 10 %; voltage 100 V; package 0805; dielectric X7R
        D1 D2: voltage 40 V; current 1 A
        D3 D4: voltage 200 V; current 8 A; package TO-220
        L1: tolerance 20 %; current 7 A
        M1 M2: voltage 75 V; current 50 A; package TO-220
        """
    ),
)
