"""What a part is and is worth: kinds, values, tolerances, ratings, and what was assumed."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.grammar import Part, Pin, Place
from pwmlint.lint.circuit.parts import part_kind
from pwmlint.lint.design import Design
from pwmlint.lint.quantity import Spread

DesignOf = Callable[..., Design]

PLACE = Place("press.edf", 1, 1)


def part(reference: str, pins: int = 2, element: str = "", model: str = "") -> Part:
    nets = tuple(Pin(str(n + 1), "", f"N{n}", PLACE) for n in range(pins))
    return Part(reference, element, "", model, nets, PLACE)


class TestKind:
    @pytest.mark.parametrize(
        ("reference", "kind"),
        [
            ("R7", "resistor"),
            ("RV1", "trimmer"),
            ("psu/NTC3", "thermistor"),
            ("RT3", "resistor"),  # the timing resistor's name in the data sheets
            ("C1", "capacitor"),
            ("L2", "inductor"),
            ("D4", "diode"),
            ("Q1", "transistor"),
            ("T1", "transformer"),
            ("F1", "fuse"),
            ("JP2", "jumper"),
            ("TP9", "test point"),
            ("U1", "integrated circuit"),
            ("RX2", "resistor"),
            ("7", "other"),
            ("@1", "other"),
        ],
    )
    def test_by_reference_designator(self, reference: str, kind: str):
        assert part_kind(part(reference, 3 if kind == "trimmer" else 2), {}) == kind

    def test_by_element_letter_where_there_is_one(self):
        assert part_kind(part("FANC1", element="C"), {}) == "capacitor"
        assert part_kind(part("E1", 4, "E"), {}) == "controlled source"

    def test_a_resistor_of_three_pins_is_a_trimmer(self):
        assert part_kind(part("R7", 3), {}) == "trimmer"

    def test_a_trimmer_of_two_pins_is_a_rheostat(self):
        assert part_kind(part("RV7", 2), {}) == "trimmer"

    @pytest.mark.parametrize("reference", ["R1", "C1", "L1"])
    def test_one_with_many_pins_is_something_else(self, reference: str):
        assert part_kind(part(reference, 8), {}) == "other"

    def test_a_thermistor_by_its_model(self):
        assert part_kind(part("RT3", model="NTC 10"), {}) == "thermistor"

    def test_a_junction_transistor_by_its_model(self):
        assert part_kind(part("J1", 3, "J", "SLOW"), {"slow": "njf"}) == "transistor"
        assert part_kind(part("J1", 3), {}) == "connector"


def spread(design: Design, reference: str) -> Spread:
    value = design.circuit.value(design.circuit.parts[reference])
    assert value is not None
    return value.spread


def assumptions(design: Design, reference: str) -> tuple[str, ...]:
    value = design.circuit.value(design.circuit.parts[reference])
    assert value is not None
    return value.assumptions


class TestTolerance:
    @pytest.mark.parametrize(
        ("line", "low", "high"),
        [
            ("R1 A 0 10k tol=1%", 9.9e3, 10.1e3),
            ("R1 A 0 10k tol=1", 9.9e3, 10.1e3),
            ("R1 A 0 10k tol=0.01", 9.9e3, 10.1e3),
            ("R1 A 0 10k tolerance=0.5%", 9.95e3, 10.05e3),
            ("R1 A 0 1m", 1e-3, 1e-3),
            ("R1 A 0 0", 0.0, 0.0),
            ("V1 A 0 12", 12.0, 12.0),
            ("V1 A 0 -12", -12.0, -12.0),
            ("I1 A 0 1m", 1e-3, 1e-3),
        ],
    )
    def test_told(self, line: str, low: float, high: float, design_of: DesignOf):
        design = design_of(line)
        found = spread(design, line.split()[0])
        assert (found.minimum, found.maximum) == pytest.approx((low, high))
        assert assumptions(design, line.split()[0]) == ()

    @pytest.mark.parametrize(
        ("line", "percent"),
        [
            ("R1 A 0 10k", 5),
            ("R1 A 0 38.3k", 1),  # only a fine series holds it
            ("RV1 A B 0 10k", 20),
            ("C1 A 0 100n", 10),
            ("C1 A 0 100u", 20),
            ("L1 A 0 100u", 20),
        ],
    )
    def test_assumed_and_said(self, line: str, percent: float, design_of: DesignOf):
        reference = line.split()[0]
        design = design_of(line)
        found = spread(design, reference)
        assert found.maximum / found.nominal - 1 == pytest.approx(percent / 100)
        (assumed,) = assumptions(design, reference)
        assert assumed.startswith(f"{reference}: tolerance {percent}")

    def test_parts_list_has_the_last_word(self, design_of: DesignOf):
        design = design_of("R1 A 0 10k tol=5%", parts="reference,tolerance\nR1,1%\n")
        assert spread(design, "R1").maximum == pytest.approx(10.1e3)

    def test_an_unreadable_tolerance_is_not_taken_for_none(self, design_of: DesignOf):
        design = design_of("R1 A 0 10k tol=wide")
        assert spread(design, "R1").maximum == pytest.approx(10.5e3)
        assert assumptions(design, "R1")


class TestMissingValues:
    def test_said(self, design_of: DesignOf):
        design = design_of("R1 A 0\nR2 A 0 apple\nR3 A 0 1k\nQ1 A B 0 QN")
        problem = design.circuit.reader.value_problem
        assert problem(design.part("R1")) == "R1 has no value"
        assert problem(design.part("R2")).startswith("R2 has the value 'apple', which cannot be read")
        assert problem(design.part("R3")) == ""
        assert problem(design.part("Q1")) == ""
        assert design.circuit.value(design.part("R2")) is None

    def test_the_parts_list_may_fill_in(self, design_of: DesignOf):
        design = design_of("R1 A 0", parts="reference,value\nR1,4k7\n")
        assert spread(design, "R1").nominal == 4700


class TestRatings:
    def test_from_an_attribute(self, design_of: DesignOf):
        design = design_of("R7 A 0 0.1 p=5")
        rating = design.circuit.reader.rating(design.part("R7"), "power")
        assert rating is not None
        assert (rating.value, rating.source) == (5.0, "R7 power 5")

    def test_from_the_parts_list_first(self, design_of: DesignOf):
        design = design_of("R7 A 0 0.1 p=5", parts="reference,power\nR7,2 W\n")
        rating = design.circuit.reader.rating(design.part("R7"), "power")
        assert rating is not None
        assert (rating.value, rating.source) == (2.0, "parts list line 2")

    def test_none_where_nothing_tells(self, design_of: DesignOf):
        design = design_of("R7 A 0 0.1 p=many")
        reader = design.circuit.reader
        assert reader.rating(design.part("R7"), "power") is None
        assert reader.rating(design.part("R7"), "voltage") is None

    def test_package_and_dielectric(self, design_of: DesignOf):
        design = design_of("C7 A 0 100n package=0805", parts="reference,dielectric\nC7,X7R\n")
        reader = design.circuit.reader
        assert reader.attribute(design.part("C7"), "package") == "0805"
        assert reader.attribute(design.part("C7"), "dielectric") == "X7R"
