"""What each part means to direct current, on small networks of the orchard, and where growth ends."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.grammar import Part, Pin, Place
from pwmlint.lint.circuit.diodes import diode_nets
from pwmlint.lint.circuit.growth import Growth
from pwmlint.lint.circuit.meanings import in_trimmer_order
from pwmlint.lint.design import Design
from pwmlint.lint.estimate import Estimate, Unsolved

DesignOf = Callable[..., Design]

PLACE = Place("press.edf", 1, 1)

SUPPLY = "V1 VIN 0 12\n"


def volts(design: Design, net: str) -> tuple[float, float, float]:
    found = design.voltage(net)
    assert isinstance(found, Estimate), found
    return (found.spread.minimum, found.spread.nominal, found.spread.maximum)


def nominal(design: Design, net: str) -> float:
    return volts(design, net)[1]


def unsolved(design: Design, net: str) -> Unsolved:
    found = design.voltage(net)
    assert isinstance(found, Unsolved), found
    return found


class TestResistors:
    def test_divider(self, design_of: DesignOf):
        assert nominal(design_of(SUPPLY + "R1 VIN A 1k\nR2 A 0 1k"), "A") == pytest.approx(6)

    def test_both_pins_on_one_net(self, design_of: DesignOf):
        assert nominal(
            design_of(SUPPLY + "R1 VIN A 1k\nR2 A 0 1k\nR3 A A 1\nR4 A A 0"), "A"
        ) == pytest.approx(6)

    def test_links_in_parallel(self, design_of: DesignOf):
        lines = SUPPLY + "R1 VIN A 1k\nR2 A B 0\nR3 A B 0\nL1 B A 10u\nR4 B 0 1k"
        assert nominal(design_of(lines), "A") == pytest.approx(6)
        assert nominal(design_of(lines), "B") == pytest.approx(6)

    def test_two_ties_to_two_grounds(self, design_of: DesignOf):
        assert volts(design_of(SUPPLY + "R1 VIN A 1k\nR2 A 0 0\nR3 A AGND 0"), "A") == (0, 0, 0)

    def test_a_milliohm_beside_a_hundred_megohms(self, design_of: DesignOf):
        lines = SUPPLY + "R1 VIN A 1m\nR2 A B 100meg\nR3 B 0 100meg\nR4 A 0 1m"
        assert nominal(design_of(lines), "A") == pytest.approx(6, rel=1e-9)
        assert nominal(design_of(lines), "B") == pytest.approx(3, rel=1e-9)

    def test_the_smallest_number_is_no_division_by_zero(self, design_of: DesignOf):
        assert nominal(design_of(SUPPLY + "R1 VIN A 1e-310\nR2 A 0 1k"), "A") == pytest.approx(12)

    def test_negative_potentials(self, design_of: DesignOf):
        low, middle, high = volts(design_of(SUPPLY + "V2 0 VNEG 15\nR1 VIN A 10k\nR2 A VNEG 10k"), "A")
        assert middle == pytest.approx(-1.5)
        assert low < middle < high < 0

    def test_without_a_value(self, design_of: DesignOf):
        found = unsolved(design_of(SUPPLY + "R1 VIN A\nR2 A 0 1k"), "A")
        assert (found.parts, found.needs) == (("R1",), ("a value for R1",))
        assert found.reason == "R1 has no value"


class TestTrimmers:
    def test_swept_end_to_end(self, design_of: DesignOf):
        assert volts(design_of(SUPPLY + "RV1 VIN A 0 10k"), "A") == pytest.approx((0, 6, 12))

    def test_wiper_on_an_end(self, design_of: DesignOf):
        # 12 V x 10 / (10 + 0 .. 10 kohm), tolerances aside
        lines = SUPPLY + "RV1 VIN VIN A 10k tol=0\nR1 A 0 10k tol=0"
        assert volts(design_of(lines), "A") == pytest.approx((6, 8, 12))

    def test_both_ends_on_one_net(self, design_of: DesignOf):
        # In the middle the halves are in parallel: 2.5 kohm.
        lines = SUPPLY + "RV1 VIN A VIN 10k tol=0\nR1 A 0 10k tol=0"
        assert volts(design_of(lines), "A") == pytest.approx((9.6, 9.6, 12))

    def test_an_open_end(self, design_of: DesignOf):
        lines = SUPPLY + "R1 VIN A 1k tol=0\nRV1 A W OPEN 1k tol=0\nR2 W 0 1k tol=0"
        assert volts(design_of(lines), "A") == pytest.approx((6, 12 * 1.5 / 2.5, 8))

    def test_a_stop_that_shorts_two_rails_leaves_the_others_alone(self, design_of: DesignOf):
        lines = SUPPLY + "RV1 A VIN 0 10k tol=0\nR1 A 0 10k tol=0"
        assert volts(design_of(lines), "A") == pytest.approx((6, 8, 12))

    def test_a_stop_on_ground(self, design_of: DesignOf):
        assert volts(design_of(SUPPLY + "R1 VIN A 1k tol=0\nRV1 A 0 0 1k tol=0"), "A") == pytest.approx(
            (0, 4, 6)
        )

    def test_six_of_them(self, design_of: DesignOf):
        lines = "\n".join(f"RV{i} VIN W{i} 0 10k\nR{i} W{i} A 10k" for i in range(6))
        assert volts(design_of(SUPPLY + lines), "A") == pytest.approx((0, 6, 12))

    @pytest.mark.parametrize(
        ("pins", "order"),
        [
            ([("1", ""), ("2", ""), ("3", "")], "ABC"),
            ([("1", ""), ("3", ""), ("2", "")], "ACB"),
            ([("1", "CW"), ("2", "CCW"), ("3", "W")], "ACB"),
            ([("7", ""), ("8", ""), ("9", "")], "ABC"),
        ],
    )
    def test_which_pin_is_the_wiper(self, pins: list[tuple[str, str]], order: str):
        part = Part(
            "RV1", "", "10k", "", [Pin(*p, net, PLACE) for p, net in zip(pins, "ABC", strict=True)], PLACE
        )
        assert "".join(pin.net for pin in in_trimmer_order(part)) == order


class TestUnconnectedPins:
    def test_two_of_them_are_not_one_net(self, design_of: DesignOf):
        design = design_of(SUPPLY + "R1 VIN A 1k\nR2 A B 1k\nR3 B 0 1k\nR8 A X 1k\nR9 B Y 1k")
        for reference in ("R8", "R9"):
            part = design.netlist.parts[reference]
            part.pins = (part.pins[0], part.pins[1]._replace(net=""))
        assert nominal(design, "A") == pytest.approx(8)
        assert nominal(design, "B") == pytest.approx(4)


class TestSources:
    def test_between_nets(self, design_of: DesignOf):
        lines = SUPPLY + "R1 VIN A 1k\nV2 A B 3\nR2 B 0 2k"
        assert nominal(design_of(lines), "A") == pytest.approx(3 + 6)

    def test_equal_ones_in_parallel(self, design_of: DesignOf):
        lines = SUPPLY + "R1 VIN A 1k\nV2 A B 3\nV3 A B 3\nR2 B 0 2k"
        assert nominal(design_of(lines), "B") == pytest.approx(6)

    def test_unequal_ones_in_parallel_contradict(self, design_of: DesignOf):
        lines = SUPPLY + "R1 VIN A 1k\nV2 A B 3\nV3 A B 4\nR2 B 0 2k"
        assert "contradict" in unsolved(design_of(lines), "B").reason

    def test_shorted_rails_contradict(self, design_of: DesignOf):
        lines = SUPPLY + "V2 V5 0 5\nR1 VIN A 0\nR2 A V5 0"
        assert "contradict" in unsolved(design_of(lines), "A").reason

    def test_a_current(self, design_of: DesignOf):
        assert nominal(design_of("R1 A 0 1k\nI1 0 A 1m"), "A") == pytest.approx(1)

    def test_a_current_into_a_net_without_a_path(self, design_of: DesignOf):
        assert "no direct-current path" in unsolved(design_of(SUPPLY + "I1 VIN A 1m\nC1 A 0 1u"), "A").reason

    def test_controlled_ones_of_constant_gain(self, design_of: DesignOf):
        lines = SUPPLY + "R1 VIN C 1k\nR2 C 0 1k\nE1 A 0 C 0 0.5\nG1 0 B A 0 1e-3\nR3 B 0 1k"
        assert nominal(design_of(lines), "A") == pytest.approx(3)
        assert nominal(design_of(lines), "B") == pytest.approx(3)

    @pytest.mark.parametrize("line", ["E1 A 0 VIN 0 nan", "B1 A 0 V=3", "F1 A 0 V1 2"])
    def test_others_stand_in_the_way(self, line: str, design_of: DesignOf):
        found = unsolved(design_of(SUPPLY + f"{line}\nR1 A B 1k\nR2 B 0 1k"), "B")
        assert found.parts == (line.split()[0],)

    def test_a_control_without_a_path(self, design_of: DesignOf):
        lines = SUPPLY + "E1 A 0 C 0 2\nC1 C 0 1n\nR1 A B 1k\nR2 B 0 1k"
        assert unsolved(design_of(lines), "B").nets == ("C",)


class TestOpensAndShorts:
    def test_a_capacitor_is_open(self, design_of: DesignOf):
        assert nominal(design_of(SUPPLY + "R1 VIN A 1k\nC1 A 0 1u\nR2 A 0 1k"), "A") == pytest.approx(6)

    def test_behind_a_capacitor_there_is_no_path(self, design_of: DesignOf):
        design = design_of(SUPPLY + "R1 VIN A 1k\nC1 A B 1u\nC2 B 0 1u")
        assert not design.has_path("B")
        assert design.has_path("A")
        assert unsolved(design, "B").reason == "net B has no direct-current path"

    def test_inductor_is_a_short(self, design_of: DesignOf):
        lines = SUPPLY + "L1 VIN A 1m\nR2 B 0 1k\nR3 A B 1k"
        assert nominal(design_of(lines), "B") == pytest.approx(6)


class TestDiodesAndSwitches:
    DIODE = ".model DX d\n.model QX npn\n"

    def test_one_that_blocks(self, design_of: DesignOf):
        design = design_of(self.DIODE + SUPPLY + "R1 VIN A 1k\nD1 0 A DX\nR2 A 0 1k")
        assert nominal(design, "A") == pytest.approx(6)

    def test_one_that_conducts(self, design_of: DesignOf):
        design = design_of(self.DIODE + SUPPLY + "R1 VIN A 1k\nD1 A 0 DX")
        low, _, high = volts(design, "A")
        assert 0.15 < low < high < 1.05

    def test_one_that_a_current_source_drives(self, design_of: DesignOf):
        design = design_of(self.DIODE + SUPPLY + "I1 VIN F 1m\nD1 F A DX\nR1 A 0 1k")
        assert nominal(design, "A") == pytest.approx(1)

    def test_zener(self, design_of: DesignOf):
        assert nominal(design_of(SUPPLY + "R1 VIN A 1k\nD1 0 A DZ5V1\n.model DZ5V1 d"), "A") == pytest.approx(
            5.1
        )

    @pytest.mark.parametrize("reference", ["DZ1", "D1"])
    def test_a_zener_whose_voltage_nothing_tells(self, reference: str, design_of: DesignOf):
        found = design_of(self.DIODE + SUPPLY + f"R1 VIN A 1k\n{reference} 0 A DX").voltage("A")
        assert isinstance(found, Unsolved) == (reference == "DZ1")

    def test_what_a_winding_couples_in_is_not_told(self, design_of: DesignOf):
        lines = "L1 S 0 10u\nL2 P VIN 10u\nK1 L1 L2 0.99\nQ1 P B 0 QX\nD1 S A DX\nR1 A 0 1k"
        found = unsolved(design_of(self.DIODE + SUPPLY + lines), "A")
        assert "D1 rectifies what L1 couples in" in found.reason
        assert found.needs == ('brief: [rails.A] voltage = "..."',)

    def test_what_a_capacitor_couples_in_is_not_told(self, design_of: DesignOf):
        lines = "Q1 SW B 0 QX\nL1 SW VIN 10u\nC1 SW X 1u\nD1 X A DX\nD2 0 X DX\nR1 A 0 1k"
        found = unsolved(design_of(self.DIODE + SUPPLY + lines), "A")
        assert "D1 rectifies what C1 couples in" in found.reason

    def test_what_a_transformers_capacitor_couples_in_is_not_told(self, design_of: DesignOf):
        lines = "L1 S 0 10u\nL2 P VIN 10u\nK1 L1 L2 0.99\nC1 S X 1u\nD1 X A DX\nR1 A 0 1k"
        assert "D1 rectifies what C1" in unsolved(design_of(self.DIODE + SUPPLY + lines), "A").reason

    def test_a_filter_is_no_rectifier(self, design_of: DesignOf):
        lines = "L1 VIN A 10u\nC1 A 0 1u\nD1 0 A DX\nR1 A B 1k\nR2 B 0 1k"
        assert nominal(design_of(self.DIODE + SUPPLY + lines), "B") == pytest.approx(6)

    def test_anode_and_cathode_by_name(self):
        def diode(first: str, second: str) -> Part:
            return Part("D1", "", "", "", [Pin("1", first, "A", PLACE), Pin("2", second, "B", PLACE)], PLACE)

        assert diode_nets(diode("A", "K")) == ("A", "B")
        assert diode_nets(diode("K", "A")) == ("B", "A")
        assert diode_nets(diode("cathode", "")) == ("B", "A")
        assert diode_nets(diode("", "")) == ("A", "B")


class TestWhatBlocks:
    def test_an_unknown_part(self, design_of: DesignOf):
        lines = SUPPLY + "R1 VIN A 1k\nXU2 A 0 VIN PUMP\n.subckt PUMP 1 2 3\nB1 1 2 V=3\n.ends"
        found = design_of(lines).voltage("A")
        assert isinstance(found, Unsolved)
        assert found.needs == ('brief: [rails.A] voltage = "..."',)

    @pytest.mark.parametrize("reference", ["V2", "I2", "L2", "D2", "F2"])
    def test_a_part_with_more_pins_than_its_kind_has(self, reference: str, design_of: DesignOf):
        netlist = design_of(SUPPLY + "R1 VIN A 1k\nR2 A 0 1k").netlist
        pins = [Pin(str(n), "", net, PLACE) for n, net in enumerate(("A", "0", "VIN"), start=1)]
        netlist.parts[reference] = Part(reference, "", "1", "", pins, PLACE)
        for index, pin in enumerate(pins):
            netlist.nets[pin.net].pins.append((reference, index))
        assert unsolved(Design(netlist), "A").parts == (reference,)

    def test_a_rheostat_travels_from_nothing_to_its_value(self, design_of: DesignOf):
        found = design_of("V1 VIN 0 12\nRV1 VIN A 1k tol=0\nR2 A 0 1k tol=0").voltage("A")
        assert not isinstance(found, Unsolved)
        assert (found.spread.minimum, found.spread.maximum) == pytest.approx((6, 12))

    def test_a_trimmer_without_a_value(self, design_of: DesignOf):
        assert unsolved(design_of(SUPPLY + "RV1 VIN A 0 quince"), "A").parts == ("RV1",)

    def test_not_on_a_net_whose_potential_is_known(self, design_of: DesignOf):
        lines = SUPPLY + "Q1 VIN B 0 QX\nR1 VIN A 1k\nR2 A 0 1k\n.model QX npn"
        assert nominal(design_of(lines), "A") == pytest.approx(6)


def test_growth_takes_each_part_once(design_of: DesignOf):
    design = design_of(SUPPLY + "R1 VIN A 1k\nR2 A B 1k\nR3 B 0 1k")
    growth = Growth(design.circuit, design.known, ()).grow("A", "B", "A")
    assert list(growth.elements) == ["R1", "R2", "R3"] or set(growth.elements) == {"R1", "R2", "R3"}
    assert set(growth.nets) == {"VIN", "A", "B", "0"}
