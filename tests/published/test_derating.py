"""Derating against published figures.

EEE-INST-002 (NASA/TP-2003-212242, addendum 1 of April 2008), tables 4 of the sections C1, R2, S1, M3 and M4;
IEC 60115-8 (thick-film chip resistors, rated at 70 degC); ECSS-Q-ST-30-11C from memory.
"""

from __future__ import annotations

from math import sqrt

import pytest
from pwmlint.lint.derating import (
    capacitor_voltage,
    junction_limit,
    plastic_supply_limit,
    resistor_power,
    resistor_voltage,
    semiconductor,
)
from pwmlint.lint.packages import Package, package_of


class TestResistors:
    def test_nasa_leaves_a_0603_of_100_mw_60_mw_at_25_degrees(self):
        # EEE-INST-002 section R2 table 4, style RM: factor 0.6 up to 70 degC
        assert 0.1 * resistor_power(25, "nasa").share == pytest.approx(0.06)

    def test_nasa_leaves_a_1206_of_250_mw_103_mw_at_85_degrees(self):
        # 0.6 x (118 - 85) / (118 - 70) x 0.25 W
        assert 0.25 * resistor_power(85, "nasa").share == pytest.approx(0.103125)

    def test_nasa_zero_power_follows_from_its_formula(self):
        # notes 3 and 4: T2 = factor x (T3 - T1) + T1 = 0.6 x (150 - 70) + 70 = 118 degC
        assert resistor_power(117.9, "nasa").share > 0
        assert resistor_power(0.6 * (150 - 70) + 70, "nasa").share == 0

    @pytest.mark.parametrize(("resistance", "volts"), [(10e3, 24.4949), (1e6, 60.0)])
    def test_nasa_voltage_is_the_lesser_of_rating_and_power(self, resistance: float, volts: float):
        # note 2, a 0603 of 0.1 W and 75 V: min(0.8 x 75 V, sqrt(60 mW x R))
        power = 0.1 * resistor_power(25, "nasa").share
        assert min(75 * resistor_voltage("nasa").share, sqrt(power * resistance)) == pytest.approx(
            volts, abs=1e-4
        )

    @pytest.mark.parametrize(
        ("ambient", "share"),
        [
            (70, 1.0),
            (85, 0.823529),
            (100, 0.647059),
            (110, 0.529412),
            (125, 0.352941),
            (140, 0.176471),
            (155, 0),
        ],
    )
    def test_commercial_power_falls_from_70_to_155_degrees(self, ambient: float, share: float):
        # IEC 60115-8, rated at 70 degC: (155 - T) / 85
        assert resistor_power(ambient, "commercial").share == pytest.approx(share, abs=1e-6)

    @pytest.mark.parametrize(
        ("code", "critical"),
        [("0402", 40e3), ("0603", 56.25e3), ("0805", 180e3), ("1206", 160e3), ("2512", 40e3)],
    )
    def test_critical_resistances_of_the_usual_cases(self, code: str, critical: float):
        # working voltage squared over power, by common makers' data
        case = package_of(code)
        assert isinstance(case, Package)
        assert case.voltage**2 / case.power == pytest.approx(critical)


class TestCapacitors:
    @pytest.mark.parametrize(
        ("dielectric", "ambient", "share"),
        [
            ("ceramic", 110, 0.6),
            ("ceramic", 111, 0.0),
            ("glass", 25, 0.5),
            ("film", 85, 0.6),
            ("film", 86, 0.0),
            ("tantalum-foil", 70, 0.5),
            ("tantalum-wet", 70, 0.6),
            ("tantalum-wet", 90, 0.5),
            ("tantalum-wet", 110, 0.4),
            ("tantalum-solid", 70, 0.5),
            ("tantalum-solid", 90, 0.4),
            ("tantalum-solid", 110, 0.3),
            ("tantalum-solid", 120, 0.0),
        ],
    )
    def test_nasa_by_dielectric_and_temperature(self, dielectric: str, ambient: float, share: float):
        # EEE-INST-002 section C1 table 4
        assert capacitor_voltage(dielectric, ambient, 50, "nasa").share == pytest.approx(share)

    @pytest.mark.parametrize(("rated", "share"), [(6.3, 0.9), (10, 0.9), (16, 0.8), (35, 0.8)])
    def test_tantalum_polymer_by_rated_voltage(self, rated: float, share: float):
        # a maker's advice: 10 % less up to 10 V rated, 20 % less above
        assert capacitor_voltage("tantalum-polymer", 85, rated, "commercial").share == share


class TestSemiconductors:
    @pytest.mark.parametrize(
        ("kind", "quantity", "share"),
        [
            ("diode", "reverse-voltage", 0.7),
            ("diode", "surge-current", 0.5),
            ("diode", "current", 0.5),
            ("zener", "power", 0.5),
            ("zener", "current", 0.75),
            ("suppressor", "power", 0.5),
            ("transistor", "power", 0.6),
            ("transistor", "current", 0.75),
            ("transistor", "voltage", 0.75),
            ("mosfet", "gate-voltage", 0.6),
            ("mosfet", "drain-voltage", 0.75),
            ("linear-circuit", "supply-voltage", 0.8),
            ("digital-circuit", "supply-voltage", 0.9),
            ("linear-circuit", "power", 0.75),
            ("linear-circuit", "output-current", 0.8),
        ],
    )
    def test_nasa(self, kind: str, quantity: str, share: float):
        # EEE-INST-002 sections S1 and M3, table 4
        assert semiconductor(kind, quantity, "nasa").share == share

    @pytest.mark.parametrize(
        ("kind", "quantity", "share"),
        [
            ("diode", "reverse-voltage", 0.75),
            ("zener", "power", 0.65),
            ("transistor", "voltage", 0.75),
            ("mosfet", "drain-voltage", 0.8),
            ("mosfet", "gate-voltage", 0.75),
            ("opto-coupler", "current", 0.5),
            ("linear-circuit", "supply-voltage", 0.9),
        ],
    )
    def test_ecss(self, kind: str, quantity: str, share: float):
        # ECSS-Q-ST-30-11C, from memory
        assert semiconductor(kind, quantity, "ecss").share == share

    @pytest.mark.parametrize(("kind", "volts"), [("digital-circuit", 22.5), ("linear-circuit", 27.0)])
    def test_supply_of_a_circuit_in_plastic(self, kind: str, volts: float):
        # EEE-INST-002 section M4 table 4: nominal 15 V, maximum 30 V
        assert plastic_supply_limit(15, 30, kind, "nasa") == volts

    @pytest.mark.parametrize(
        ("maximum", "kind", "policy", "limit"),
        [
            # EEE-INST-002 section S1: 0.8 of it, 40 K below it, 125 degC at most
            (150, "discrete", "nasa", 110.0),
            (175, "discrete", "nasa", 125.0),
            (225, "discrete", "nasa", 125.0),
            # section M3, linear: 0.75 of it, 40 K below it, 110 degC at most
            (150, "linear-circuit", "nasa", 110.0),
            (125, "linear-circuit", "nasa", 85.0),
            # ECSS-Q-ST-30-11C, from memory: 40 K below it, 110 degC at most
            (150, "discrete", "ecss", 110.0),
            (125, "discrete", "ecss", 85.0),
        ],
    )
    def test_junction_temperature(self, maximum: float, kind: str, policy: str, limit: float):
        assert junction_limit(maximum, kind, policy) == pytest.approx(limit)
