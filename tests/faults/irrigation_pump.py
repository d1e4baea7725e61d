"""Half-bridge on the mains: 230 V to the 24 V, 8 A of an irrigation pump, controlled from the output's side.

Nobody has built it, and nobody should from this table: the mains and the charge of C2 and C3 kill. Follow
the local codes, and leave it to licensed practice where they ask for it. Figures:

- RT x CT = 11 us: each switch at 45 to 55 kHz. DTC at 0.22 V: about 1 us of 10 us, 44 % of duty left.
- Output: 2.5 V x (1 + 43.2 / 4.99) = 24.1 V. Limit: 0.30 V / 0.03 ohm = 10 A, 3.7 W at the most.
- Drive: the collectors take turns at T2 (1 : 1), fed through R22: at most 12.6 V / 68 ohm = 0.19 A. R18 and
  R19 take 12 mA each, so that 12 V - 24 mA x 68 ohm - 1.1 V - 0.6 V = 8.7 V reach a gate; between the pulses
  Q3 and Q4 empty the gates, their bases pulled by the same resistors.
- C1: 0.94 Mohm x 0.22 uF = 0.2 s, through two resistors.
- C2 and C3: 358 V on 50 uF, through 36 kohm: 1.8 s x ln(358 / 60) = 3.2 s to 60 V; each resistor takes
  179 V x 179 V / 18 kohm = 1.8 W.
"""

from __future__ import annotations

from .board import Board, brief_of, parts_of, ratings_of

IRRIGATION_PUMP = Board(
    "irrigation pump",
    parts_of(
        """
        J1   connector     LINE N                 MAINS
        F1   fuse          LINE L                 3.15A
        C1   capacitor     L N                    220n
        R23  resistor      L LN                   470k
        R24  resistor      LN N                   470k
        D1   diode         L HV                   RECTIFIER 600V 4A
        D2   diode         N HV                   RECTIFIER 600V 4A
        D3   diode         HVN L                  RECTIFIER 600V 4A
        D4   diode         HVN N                  RECTIFIER 600V 4A
        C2   electrolytic  HV MID                 100u
        C3   electrolytic  MID HVN                100u
        R25  resistor      HV MID                 18k
        R26  resistor      MID HVN                18k
        M1   NMOS          HV GATEH SW            NMOS 500V
        M2   NMOS          SW GATEL HVN           NMOS 500V
        T1   half-bridge-transformer  SW PRI SECA GND SECB  PUMP TRANSFORMER
        C4   capacitor     PRI MID                1u
        T2   drive-transformer  COL1 VDRV COL2 DRVH SW DRVL HVN  DRIVE TRANSFORMER
        R18  resistor      DRVH SW                1k
        R19  resistor      DRVL HVN               1k
        D13  diode         DRVH GATEH             SIGNAL
        D14  diode         DRVL GATEL             SIGNAL
        Q3   PNP           SW DRVH GATEH          PNP 40V
        Q4   PNP           HVN DRVL GATEL         PNP 40V
        R20  resistor      GATEH SW               10k
        R21  resistor      GATEL HVN              10k
        D9   diode         SW GATEH               ZENER 18V
        D10  diode         HVN GATEL              ZENER 18V
        C20  capacitor     HVN GND                2.2n
        J3   connector     VAUX GND               AUXILIARY SUPPLY
        U1   controller    FB SET COMP DTC CT RT GND COL1 GND GND COL2 VAUX REF REF LIM SNS  494
        C21  capacitor     VAUX GND               1u
        C22  capacitor     REF GND                220n
        R22  resistor      VAUX VDRV              68
        C23  capacitor     VDRV GND               2.2u
        D11  diode         GND COL1               ZENER 33V
        D12  diode         GND COL2               ZENER 33V
        R1   resistor      RT GND                 11k
        C6   capacitor     CT GND                 1n
        R2   resistor      REF DTC                22k
        R3   resistor      DTC GND                1k
        C7   capacitor     REF DTC                4.7u
        R4   resistor      REF SET                4.99k
        R5   resistor      SET GND                4.99k
        R6   resistor      VOUT FB                43.2k
        R7   resistor      FB GND                 4.99k
        R8   resistor      COMP CZ                22k
        C8   capacitor     CZ SET                 22n
        C9   capacitor     COMP SET               220p
        R9   resistor      REF LIM                47k
        R10  resistor      LIM GND                3.01k
        R11  resistor      RTN SNS                1k
        C12  capacitor     SNS GND                1n
        R13  resistor      RTN GND                0.03
        D5   diode         SECA RECT              ULTRAFAST 200V 16A
        D6   diode         SECB RECT              ULTRAFAST 200V 16A
        L1   inductor      RECT VOUT              68u
        C13  electrolytic  VOUT GND               1000u
        C14  electrolytic  VOUT GND               1000u
        C15  capacitor     VOUT GND               1u
        D7   diode         GND VOUT               TVS 30V
        J2   connector     VOUT RTN               PUMP
        """
    ),
    brief_of(
        """
        design.ambient = "0 degC .. 40 degC"
        design.derating = "commercial"
        rails.L.voltage = "207 V .. 253 V"
        rails.L.circuit = "mains"
        rails.N.voltage = "207 V .. 253 V"
        rails.N.circuit = "mains"
        rails.HV.voltage = "285 V .. 358 V"
        rails.HV.circuit = "primary"
        rails.HVN.voltage = "0 V"
        rails.HVN.circuit = "primary"
        rails.VAUX.voltage = "11.4 V .. 12.6 V"
        rails.VAUX.circuit = "secondary"
        rails.VOUT.voltage = "24 V"
        rails.VOUT.tolerance = "15 %"
        rails.VOUT.load = "0 A .. 8 A"
        rails.VOUT.circuit = "secondary"
        controllers.U1.topology = "half-bridge"
        controllers.U1.output = "VOUT"
        controllers.U1.switching_frequency = "40 kHz .. 60 kHz"
        controllers.U1.dead_time = "0.6 us .. 1.8 us"
        controllers.U1.maximum_duty = "41 %"
        controllers.U1.soft_start = "2 ms .. 20 ms"
        controllers.U1.current_limit = "8.4 A .. 12 A"
        """
    ),
    ratings_of(
        """
        R1-R11: tolerance 1 %; power 0.125 W; voltage 150 V; package 0805; drift 100 ppm/K
        R13: tolerance 1 %; power 10 W; drift 50 ppm/K
        R18-R21: tolerance 5 %; power 0.25 W; voltage 200 V; package 1206
        R22: tolerance 5 %; power 3 W; voltage 350 V
        R23-R24: tolerance 5 %; power 0.5 W; voltage 400 V
        R25-R26: tolerance 5 %; power 5 W; voltage 500 V
        C1: tolerance 10 %; voltage 400 V; dielectric X2
        C2-C3: tolerance 20 %; voltage 250 V; dielectric aluminium
        C4: tolerance 10 %; voltage 250 V; dielectric polypropylene
        C20: tolerance 20 %; voltage 400 V; dielectric Y1
        C7: tolerance 10 %; voltage 25 V; package 1206; dielectric X7R
        C6 C9 C12: tolerance 5 %; voltage 50 V; package 0805; dielectric C0G; drift 30 ppm/K
        C8 C21-C23: tolerance 10 %; voltage 50 V; package 0805; dielectric X7R
        C13-C14: tolerance 20 %; voltage 50 V; dielectric aluminium
        C15: tolerance 10 %; voltage 100 V; package 1210; dielectric X7R
        D5-D6: voltage 200 V; current 16 A; package TO-220
        M1-M2: voltage 500 V; current 12 A; package TO-220
        L1: tolerance 20 %; current 15 A
        """
    ),
)
