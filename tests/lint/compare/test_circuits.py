"""What changed in parts and nets, on lists of a few lines."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint.compare.comparison import CircuitChanges, NetChange, PartChange

Changes = Callable[..., CircuitChanges]

DIVIDER = """R1 VIN FB 38.3k
R2 FB 0 10k
C1 VIN 0 100n
"""


def differences(change: PartChange) -> list[tuple[str, str, str]]:
    return [(one.what, one.old, one.new) for one in change.differences]


def moves(change: PartChange) -> list[tuple[str, str | None, str | None]]:
    return [(move.pin, move.old, move.new) for move in change.pins]


def traffic(changes: CircuitChanges) -> dict[str, tuple[tuple[str, ...], tuple[str, ...]]]:
    return {change.new.name: (change.gained, change.lost) for change in changes.nets_changed}


def renamed(changes: tuple[NetChange, ...]) -> dict[str, str]:
    return {change.old.name: change.new.name for change in changes if change.renamed}


def test_nothing_changed(changes: Changes) -> None:
    assert not changes(DIVIDER, DIVIDER)


def test_a_part_was_added(changes: Changes) -> None:
    found = changes(DIVIDER, DIVIDER + "R3 FB 0 47k\n")
    assert [(part.reference, part.kind, part.value, part.nets) for part in found.parts_added] == [
        ("R3", "resistor", "47.0 kΩ", ("FB", "0"))
    ]
    assert found.parts_added[0].place.line == 5
    assert traffic(found) == {"FB": (("R3",), ()), "0": (("R3",), ())}
    assert (found.parts_removed, found.parts_changed, found.nets_added) == ((), (), ())


def test_a_part_was_removed_and_a_net_with_it(changes: Changes) -> None:
    found = changes(DIVIDER + "R3 FB TEST 47k\nR4 TEST 0 1k\n", DIVIDER)
    assert [part.reference for part in found.parts_removed] == ["R3", "R4"]
    assert [(net.name, net.pins) for net in found.nets_removed] == [("TEST", ("R3", "R4"))]


def test_the_parts_that_stay_on_a_net_do_not_move_with_those_that_go(changes: Changes) -> None:
    # FB keeps one pin alone: it hangs open now, and has not moved.
    found = changes(DIVIDER, "R1 VIN FB 38.3k\nC1 VIN 0 100n\n")
    assert [part.reference for part in found.parts_removed] == ["R2"]
    assert found.parts_changed == ()
    assert traffic(found) == {"FB": ((), ("R2",)), "0": ((), ("R2",))}


@pytest.mark.parametrize(
    ("old", "new", "told"),
    [
        ("R1 A 0 10k", "R1 A 0 22k", [("value", "10.0 kΩ", "22.0 kΩ")]),
        ("R1 A 0 4.99k", "R1 A 0 4.987k", [("value", "4.990 kΩ", "4.987 kΩ")]),
        ("R1 A 0 10k", "R1 A 0", [("value", "10.0 kΩ", "")]),
        ("C1 A 0 0.1u", "C1 A 0 100n", []),
        ("R1 A 0 10k", "R1 A 0 10000", []),
        ("R1 A 0 10k tol=1", "R1 A 0 10k tol=5", [("tolerance", "±1 %", "±5 %")]),
        ("R1 A 0 10k", "R1 A 0 10k tol=5", [("tolerance", "", "±5 %")]),
        ("R1 A 0 10k p=0.25", "R1 A 0 10k p=0.5", [("power", "250 mW", "500 mW")]),
        ("V1 A 0 5", "V1 A 0 -5", [("value", "5.00 V", "-5.00 V")]),
        ("D1 A 0 DA", "D1 A 0 DB", [("model", "DA", "DB")]),
        ("D1 A 0 da", "D1 A 0 DA", []),
        ("E1 A 0 B 0 2", "E1 A 0 B 0 -2", [("value", "2", "-2")]),
        ("M1 A B 0 0 NX W=1u", "M1 A B 0 0 NX W=2u", [("w", "1u", "2u")]),
        (
            "L1 A 0 1u\nL2 B 0 1u\nL3 C 0 1u\nK1 L1 L2 0.9",
            "L1 A 0 1u\nL2 B 0 1u\nL3 C 0 1u\nK1 L1 L3 0.9",
            [("windings", "l1 l2", "l1 l3")],
        ),
        (
            "Q1 A B 0 QX\n.model QX NPN(BF=100)",
            "Q1 A B 0 QX\n.model QX PNP(BF=100)",
            [("type of the model", "npn", "pnp")],
        ),
    ],
)
def test_properties_by_what_they_mean(
    changes: Changes, old: str, new: str, told: list[tuple[str, str, str]]
) -> None:
    found = changes(old, new)
    assert [one for change in found.parts_changed for one in differences(change)] == told
    assert found.nets_changed == ()


def test_a_difference_holds_its_numbers(changes: Changes) -> None:
    (change,) = changes("R1 A 0 10k", "R1 A 0 22k").parts_changed
    (value,) = change.differences
    assert (value.old_number, value.new_number, value.unit) == (10e3, 22e3, "ohm")


def test_ratings_of_the_parts_list(changes: Changes) -> None:
    head = "Reference,Tolerance,Power,Voltage,Package,Dielectric,Temperature coefficient\n"
    found = changes(
        DIVIDER,
        DIVIDER,
        old_parts=head + "R1,1 %,0.125 W,150 V,0805,,100 ppm/K\nC1,10 %,,50 V,0805,X7R,\n",
        new_parts=head + "R1,2 %,0.25 W,200 V,1206,,50 ppm/K\nC1,10 %,,50 V,0805,C0G,\n",
    )
    assert {change.new.reference: differences(change) for change in found.parts_changed} == {
        "R1": [
            ("tolerance", "±1 %", "±2 %"),
            ("power", "125 mW", "250 mW"),
            ("voltage", "150 V", "200 V"),
            ("package", "0805", "1206"),
            ("temperature coefficient", "100 ppm/K", "50.0 ppm/K"),
        ],
        "C1": [("dielectric", "X7R", "C0G")],
    }


def test_a_pin_moved(changes: Changes) -> None:
    found = changes(DIVIDER + "D1 FB VIN DX\n", DIVIDER + "D1 FB 0 DX\n")
    (change,) = found.parts_changed
    assert moves(change) == [("K", "VIN", "0")]
    assert traffic(found) == {"VIN": ((), ("D1.K",)), "0": (("D1.K",), ())}


def test_a_pin_was_opened(changes: Changes) -> None:
    found = changes(DIVIDER, DIVIDER.replace("R2 FB 0", "R2 FB LOOSE"))
    (change,) = found.parts_changed
    assert moves(change) == [("one end", "0", "LOOSE")]
    assert found.nets_added == ()  # a net of one pin joins nothing


def test_the_ends_of_a_resistor_may_be_exchanged_those_of_a_diode_not(changes: Changes) -> None:
    found = changes("R1 A B 1k\nD1 A B DX\nC1 A B 1n\nV1 A 0 5", "R1 B A 1k\nD1 B A DX\nC1 B A 1n\nV1 A 0 5")
    (change,) = found.parts_changed
    assert moves(change) == [("A", "A", "B"), ("K", "B", "A")]


def test_an_electrolytic_has_no_ends_to_exchange(changes: Changes) -> None:
    parts = "Reference,Dielectric\nC1,aluminium\n"
    circuit = "R1 A B 1k\nV1 A 0 5\nC1 {} 470u\n"
    found = changes(circuit.format("A 0"), circuit.format("0 A"), old_parts=parts, new_parts=parts)
    (change,) = found.parts_changed
    assert moves(change) == [("1", "A", "0"), ("2", "0", "A")]


def test_a_coupled_winding_has_no_ends_to_exchange(changes: Changes) -> None:
    circuit = "L1 {} 1m\nL2 C 0 1m\nR1 A C 1k\nR2 B 0 1k\nV1 A 0 5\nK1 L1 L2 0.99\n"
    (change,) = changes(circuit.format("A B"), circuit.format("B A")).parts_changed
    assert moves(change) == [("1", "A", "B"), ("2", "B", "A")]


def test_a_controllers_pins_go_by_the_package(changes: Changes) -> None:
    pins = "P M COMP DTC CT RT 0 C1 0 0 C2 VIN MODE REF X Y"
    rest = "".join(f"\nR{number} {net} 0 1k" for number, net in enumerate(pins.split(), 1))
    names = "1IN+ 1IN- FEEDBACK DTC CT RT GND C1 E1 E2 C2 VCC OUTCTRL REF 2IN- 2IN+"
    turned = (" ".join(reversed(pins.split())), " ".join(reversed(names.split())))
    old = f"XU1 {pins} 494{rest}\n.subckt 494 {names}\n.ends"
    new = f"XU1 {turned[0]} 494{rest}\n.subckt 494 {turned[1]}\n.ends"
    assert not changes(old, new)
    swapped = new.replace("MODE VIN", "VIN MODE", 1)
    (change,) = changes(old, swapped).parts_changed
    assert moves(change) == [("VCC", "VIN", "MODE"), ("OUTPUT CTRL", "MODE", "VIN")]


class TestNets:
    def test_a_net_was_renamed(self, changes: Changes) -> None:
        found = changes(DIVIDER, DIVIDER.replace("FB", "SENSE"))
        assert renamed(found.nets_changed) == {"FB": "SENSE"}
        assert found.parts_changed == ()

    def test_letter_case_and_the_word_for_ground_are_no_new_name(self, changes: Changes) -> None:
        assert not changes(DIVIDER, DIVIDER.replace("VIN", "vin").replace(" 0 ", " GND "))

    def test_two_nets_swapped_their_names(self, changes: Changes) -> None:
        nets = "R1 A X 1k\nC1 A X 1n\nD1 A 0 DX\nD2 B 0 DX\nC2 B X 2n\nR2 B X 2k\nV1 X 0 5\n"
        swapped = nets.translate(str.maketrans("AB", "BA"))
        found = changes(nets, swapped)
        assert renamed(found.nets_changed) == {"A": "B", "B": "A"}
        assert found.parts_changed == ()

    def test_a_net_that_grew_under_another_name_is_renamed(self, changes: Changes) -> None:
        new = DIVIDER.replace("FB", "SENSE") + "R3 SENSE 0 1k\nR4 SENSE 0 1k\n"
        found = changes(DIVIDER, new)
        assert renamed(found.nets_changed) == {"FB": "SENSE"}
        assert traffic(found)["SENSE"] == (("R3", "R4"), ())

    def test_a_net_that_was_split_keeps_its_name(self, changes: Changes) -> None:
        # Five of the eight pins went behind a filter, and VBAT is still VBAT.
        loads = "".join(f"R{number} VBAT 0 {number}k\n" for number in range(1, 9))
        new = "".join(f"R{number} {'VBAT' if number < 4 else 'VF'} 0 {number}k\n" for number in range(1, 9))
        found = changes(loads, new)
        assert renamed(found.nets_changed) == {}
        assert [(net.name, len(net.pins)) for net in found.nets_added] == [("VF", 5)]
        assert [moves(change) for change in found.parts_changed] == [[("one end", "VBAT", "VF")]] * 5

    def test_two_nets_were_joined(self, changes: Changes) -> None:
        old = "R1 A 0 1k\nR2 A 0 2k\nR3 A 0 3k\nR4 B 0 4k\nR5 B 0 5k\n"
        found = changes(old, old.replace("B", "A"))
        assert [net.name for net in found.nets_removed] == ["B"]
        assert traffic(found) == {"A": (("R4", "R5"), ())}

    def test_a_net_with_all_its_parts_exchanged_goes_by_its_name(self, changes: Changes) -> None:
        found = changes("R1 FB 0 1k\nR2 FB 0 2k\nV1 X 0 1\n", "C1 FB 0 1n\nC2 FB 0 2n\nV1 X 0 1\n")
        assert (found.nets_added, found.nets_removed) == ((), ())
        assert traffic(found)["FB"] == (("C1", "C2"), ("R1", "R2"))

    def test_nets_that_differ_in_case_alone_stay_apart(self, changes: Changes) -> None:
        old = edif({"R1": ("fb", "GND"), "R2": ("FB", "GND"), "R3": ("FB", "fb")})
        assert not changes(old, old)
        new = edif({"R1": ("fb", "GND"), "R2": ("FB", "GND"), "R3": ("FB", "GND")})
        (change,) = changes(old, new).parts_changed
        assert moves(change) == [("one end", "fb", "GND")]


class TestNumberedAnew:
    def test_a_part_under_another_designator(self, changes: Changes) -> None:
        found = changes(DIVIDER, DIVIDER.replace("R2", "R20"))
        (change,) = found.parts_changed
        assert (change.old.reference, change.new.reference, change.renumbered) == ("R2", "R20", True)
        assert (found.parts_added, found.parts_removed, found.nets_changed) == ((), (), ())

    def test_all_numbers_moved_up_by_one(self, changes: Changes) -> None:
        old = "".join(f"R{n} N{n} N{n + 1} {n}k\n" for n in range(1, 9)) + "V1 N1 0 5\nR99 N9 0 1\n"
        new = "R1 N1 0 99k\n" + "".join(f"R{n + 1} N{n} N{n + 1} {n}k\n" for n in range(1, 9))
        found = changes(old, new + "V1 N1 0 5\nR99 N9 0 1\n")
        assert [part.reference for part in found.parts_added] == ["R1"]
        assert {change.old.reference: change.new.reference for change in found.parts_changed} == {
            f"R{n}": f"R{n + 1}" for n in range(1, 9)
        }
        assert all(change.renumbered and not change.pins for change in found.parts_changed)
        assert renamed(found.nets_changed) == {}

    def test_two_designators_were_exchanged(self, changes: Changes) -> None:
        rest = "V1 A 0 5\nR8 B 0 8k\nR9 C 0 9k\n"
        found = changes("R1 A B 1k\nR2 A C 2k\n" + rest, "R2 A B 1k\nR1 A C 2k\n" + rest)
        assert {change.old.reference: change.new.reference for change in found.parts_changed} == {
            "R1": "R2",
            "R2": "R1",
        }

    def test_of_two_alike_none_is_certain(self, changes: Changes) -> None:
        found = changes("C1 A 0 100n\nC2 A 0 100n\nR1 A 0 1k\n", "C7 A 0 100n\nC8 A 0 100n\nR1 A 0 1k\n")
        assert [part.reference for part in found.parts_removed] == ["C1", "C2"]
        assert [part.reference for part in found.parts_added] == ["C7", "C8"]

    def test_another_value_or_another_net_is_another_part(self, changes: Changes) -> None:
        for new in ("R20 FB 0 11k", "R20 FB VIN 10k"):
            found = changes(DIVIDER, DIVIDER.replace("R2 FB 0 10k", new))
            assert [part.reference for part in found.parts_removed] == ["R2"]
            assert [part.reference for part in found.parts_added] == ["R20"]

    def test_a_changed_part_keeps_its_designator_though_a_copy_of_it_was_added(
        self, changes: Changes
    ) -> None:
        found = changes(DIVIDER, DIVIDER.replace("R2 FB 0 10k", "R2 FB 0 22k\nR5 FB 0 10k"))
        assert [part.reference for part in found.parts_added] == ["R5"]
        assert [change.renumbered for change in found.parts_changed] == [False]


def edif(parts: dict[str, tuple[str, str]]) -> str:
    """Return resistors of 1 k between nets as EDIF, whose names tell upper from lower case."""
    instances = "".join(
        f'(instance {name} (viewRef NET (cellRef RES (libraryRef SYMBOLS))) (property VALUE (string "1k")))'
        for name in parts
    )
    ends: dict[str, list[str]] = {}
    for name, nets in parts.items():
        for number, net in enumerate(nets, 1):
            ends.setdefault(net, []).append(f"(portRef P{number} (instanceRef {name}))")
    joined = "".join(
        f'(net (rename N{number} "{net}") (joined {" ".join(refs)}))'
        for number, (net, refs) in enumerate(ends.items(), 1)
    )
    return (
        "(edif BOARD (edifVersion 2 0 0) (edifLevel 0) (keywordMap (keywordLevel 0))"
        "(library SYMBOLS (edifLevel 0) (technology (numberDefinition))"
        "(cell RES (cellType GENERIC) (view NET (viewType NETLIST) (interface"
        '(port P1 (direction INOUT) (designator "1")) (port P2 (direction INOUT) (designator "2"))'
        '(designator "R")))))'
        "(library DESIGN (edifLevel 0) (technology (numberDefinition))"
        "(cell TOP (cellType GENERIC) (view NET (viewType NETLIST) (interface)"
        f"(contents {instances}{joined}))))"
        "(design BOARD (cellRef TOP (libraryRef DESIGN))))"
    )
