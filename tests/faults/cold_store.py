"""Half-bridge: 48 V battery bank to the 12 V fans of a cold store, 5 A, driven through a half-bridge driver.

The bank (42 V to 58 V) is above what the controller stands: an auxiliary supply makes 12 V for it. Figures:

- RT x CT = 11 us: the oscillator runs at 91 to 109 kHz, each switch at 45 to 55 kHz.
- DTC at 5 V x 1 / 23 + 2 uA x 0.96 kohm = 0.22 V: 9 % to 11 % of 9 us to 11 us is about 1 us, and each
  output keeps 44 % of duty. Needed at 42 V, a turns ratio of 3 / 4 and 0.8 V across the rectifiers:
  12.8 V / (2 x 21 V x 0.75) = 40.6 %.
- Soft start: 4.7 uF x 0.96 kohm = 4.5 ms.
- Output: 2.5 V x (1 + 38.3 / 10) = 12.1 V. Limit: 5 V x 3.01 / 50.01 = 0.30 V over 0.05 ohm is 6 A, in the
  load's return; at most 6.7 A, which is 2.3 W.
- Drive: the followers put 12 V - 1.5 V on HIN and LIN, 1 kohm each takes 11 mA. The driver swings its gates
  between 0 V and 12 V, the upper one from C20 (0.22 uF, more than ten times the gate's charge over 12 V).
"""

from __future__ import annotations

from .board import Board, brief_of, parts_of, ratings_of

COLD_STORE = Board(
    "cold store",
    parts_of(
        """
        J1   connector     VBANK GND              BANK
        F1   fuse          VBANK VBUS             4A
        J3   connector     VAUX GND               AUXILIARY SUPPLY
        C1   electrolytic  VBUS GND               470u
        C2   capacitor     VBUS GND               1u
        U1   controller    FB SET COMP DTC CT RT GND VAUX HIN LIN VAUX VAUX REF REF LIM SNS  494
        C4   capacitor     VAUX GND               100n
        C5   capacitor     REF GND                220n
        R1   resistor      RT GND                 11k
        C6   capacitor     CT GND                 1n
        R2   resistor      REF DTC                22k
        R3   resistor      DTC GND                1k
        C7   capacitor     REF DTC                4.7u
        R4   resistor      REF SET                4.99k
        R5   resistor      SET GND                4.99k
        R6   resistor      VOUT FB                38.3k
        R7   resistor      FB GND                 10k
        R8   resistor      COMP CZ                22k
        C8   capacitor     CZ SET                 22n
        C9   capacitor     COMP SET               220p
        R9   resistor      REF LIM                47k
        R10  resistor      LIM GND                3.01k
        R11  resistor      RTN SNS                1k
        C12  capacitor     SNS GND                1n
        R12  resistor      LIM LZ                 47k
        C11  capacitor     LZ COMP                10n
        R13  resistor      RTN GND                0.05
        R14  resistor      HIN GND                1k
        R15  resistor      LIN GND                1k
        U2   half-bridge-driver  VAUX HIN LIN GND LO SW HO BOOT  HALF BRIDGE DRIVER
        C21  capacitor     VAUX GND               1u
        D5   diode         VAUX BOOT              ULTRAFAST 200V 1A
        C20  capacitor     BOOT SW                220n
        R18  resistor      HO GATEH               10
        R19  resistor      LO GATEL               10
        R20  resistor      GATEH SW               10k
        R21  resistor      GATEL GND              10k
        M1   NMOS          VBUS GATEH SW          NMOS 100V
        M2   NMOS          SW GATEL GND           NMOS 100V
        C10  capacitor     VBUS MID               2.2u
        C16  capacitor     MID GND                2.2u
        R24  resistor      VBUS MID               47k
        R25  resistor      MID GND                47k
        T1   half-bridge-transformer  SW MID SECA GND SECB  STORE TRANSFORMER
        D3   diode         SECA RECT              SCHOTTKY 100V 10A
        D4   diode         SECB RECT              SCHOTTKY 100V 10A
        L1   inductor      RECT VOUT              47u
        C13  electrolytic  VOUT GND               470u
        C14  electrolytic  VOUT GND               470u
        C15  capacitor     VOUT GND               1u
        D6   diode         GND VOUT               TVS 17V
        J2   connector     VOUT RTN               FANS
        """
    ),
    brief_of(
        """
        design.ambient = "-5 degC .. 40 degC"
        design.derating = "commercial"
        rails.VBUS.voltage = "42 V .. 58 V"
        rails.VAUX.voltage = "11.4 V .. 12.6 V"
        rails.VOUT.voltage = "12 V"
        rails.VOUT.tolerance = "15 %"
        rails.VOUT.load = "0 A .. 5 A"
        controllers.U1.topology = "half-bridge"
        controllers.U1.output = "VOUT"
        controllers.U1.switching_frequency = "40 kHz .. 60 kHz"
        controllers.U1.dead_time = "0.6 us .. 1.8 us"
        controllers.U1.maximum_duty = "41 %"
        controllers.U1.soft_start = "2 ms .. 20 ms"
        controllers.U1.current_limit = "5.1 A .. 7.5 A"
        """
    ),
    ratings_of(
        """
        R1-R12: tolerance 1 %; power 0.125 W; voltage 150 V; package 0805; drift 100 ppm/K
        R13: tolerance 1 %; power 5 W; drift 50 ppm/K
        R14 R15: tolerance 5 %; power 0.5 W; voltage 200 V; package 2010
        R18 R19 R20 R21: tolerance 5 %; power 0.25 W; voltage 200 V; package 1206
        R24 R25: tolerance 5 %; power 0.25 W; voltage 200 V; package 1206
        C1: tolerance 20 %; voltage 100 V; dielectric aluminium
        C2: tolerance 10 %; voltage 100 V; package 1210; dielectric X7R
        C4 C5 C8 C11: tolerance 10 %; voltage 50 V; package 0805; dielectric X7R
        C20 C21: tolerance 10 %; voltage 50 V; package 0805; dielectric X7R
        C7: tolerance 10 %; voltage 25 V; package 1206; dielectric X7R
        C6 C9 C12: tolerance 5 %; voltage 50 V; package 0805; dielectric C0G; drift 30 ppm/K
        C10 C16: tolerance 10 %; voltage 100 V; dielectric polyester
        C13 C14: tolerance 20 %; voltage 25 V; dielectric aluminium
        C15: tolerance 10 %; voltage 50 V; package 1206; dielectric X7R
        D3 D4: voltage 100 V; current 10 A; package TO-220
        D5: voltage 200 V; current 1 A
        M1 M2: voltage 100 V; current 20 A; package TO-220
        L1: tolerance 20 %; current 9 A
        """
    ),
)
