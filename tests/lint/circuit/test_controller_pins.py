"""A controller's pins under whatever order, name and number they come."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.lint.circuit.controllers import find_controllers
from pwmlint.lint.controllers import ROLES

from .controller_parts import (
    DATA_SHEET_ORDER,
    INPUTS_FIRST,
    NETS,
    NUMBERS_AS_NAMES,
    ROLES_INPUTS_FIRST,
    ROLES_SUPPLY_FIRST,
    SHEET,
    SUPPLY_FIRST,
    board,
    fan_part,
    mapped_nets,
    nets_in,
    the_controller,
)


class TestKnownOrders:
    """Every order gives the same board."""

    def test_data_sheet_order_by_names(self):
        part = fan_part(nets_in(list(SHEET.values())), DATA_SHEET_ORDER, known="names")
        controller = the_controller(part)
        assert mapped_nets(controller) == NETS
        assert (controller.unmapped, controller.assumptions, controller.problem) == ((), (), "")

    def test_data_sheet_order_by_package_numbers(self):
        part = fan_part(nets_in(list(SHEET.values())), numbers=list(SHEET), known="numbers", element="")
        controller = the_controller(part)
        assert mapped_nets(controller) == NETS
        assert (controller.unmapped, controller.assumptions, controller.problem) == ((), (), "")

    def test_package_numbers_in_any_order(self):
        numbers = NUMBERS_AS_NAMES
        nets = nets_in([SHEET[number] for number in numbers])
        controller = the_controller(fan_part(nets, numbers=numbers, known="numbers", element=""))
        assert mapped_nets(controller) == NETS
        assert controller.assumptions == ()

    def test_inputs_first_with_unsigned_inputs(self):
        controller = the_controller(fan_part(nets_in(ROLES_INPUTS_FIRST), INPUTS_FIRST, known="names"))
        assert mapped_nets(controller) == NETS
        assert (controller.assumptions, controller.problem) == ((), "")

    def test_seventeen_pins_leave_one_over(self):
        nets = [*nets_in(ROLES_SUPPLY_FIRST), "NOWHERE"]
        controller = the_controller(fan_part(nets, SUPPLY_FIRST, known="names"))
        assert mapped_nets(controller) == NETS
        assert controller.problem == ""
        assert controller.assumptions == ("U1: Ctctr read as no pin of the 494 class and left out",)

    @pytest.mark.parametrize("known", ["names", "numbers"])
    def test_numbers_of_a_library_are_an_assumption(self, known: str):
        nets = nets_in([SHEET[number] for number in NUMBERS_AS_NAMES])
        names = NUMBERS_AS_NAMES if known == "names" else []
        numbers = NUMBERS_AS_NAMES if known == "numbers" else []
        controller = the_controller(fan_part(nets, names, numbers, known=known))
        assert mapped_nets(controller) == NETS
        assert controller.problem == ""
        [assumption] = controller.assumptions
        assert "taken as pin numbers of the package" in assumption
        assert "nothing in the file proves it" in assumption

    def test_position_is_a_guess_that_is_printed(self):
        controller = the_controller(fan_part(nets_in(list(SHEET.values()))))
        assert mapped_nets(controller) == NETS
        assert controller.problem == ""
        [assumption] = controller.assumptions
        assert assumption.startswith("U1: pins taken by position")
        assert "[controllers.U1]" in assumption


class TestSpellings:
    """Common spellings of each role's pin."""

    @pytest.mark.parametrize(
        ("role", "names"),
        [
            ("amplifier 1 in+", ["1IN+", "IN1+", "+IN1", "1+IN", "IN+1", "NONINV1", "E/A 1 +", "1in(+)"]),
            (
                "amplifier 1 in-",
                [
                    "1IN-",
                    "IN1-",
                    "-IN1",
                    "1-IN",
                    "IN-1",
                    "INV1",
                    "E/A 1 -",
                    "1IN\N{MINUS SIGN}",
                ],
            ),
            ("amplifier 2 in+", ["2IN+", "IN2+", "+IN2", "2+IN", "IN+2", "Noninv_Input_2", "E/A 2 +"]),
            ("amplifier 2 in-", ["2IN-", "IN2-", "-IN2", "2-IN", "IN-2", "Inv. Input 2", "E/A 2 -"]),
            ("feedback", ["FEEDBACK", "Feedback", "FB", "COMP", "Compen", "FEED_BACK"]),
            ("dead time", ["DTC", "DT", "DEADTIME", "Dead-Time Control", "DEAD_TIME_CTRL"]),
            ("timing capacitor", ["CT", "Ct", "C_T", "C_OSC"]),
            ("timing resistor", ["RT", "Rt", "R_T", "R_OSC"]),
            ("ground", ["GND", "Ground", "VSS", "COM", "V-"]),
            ("output 1 collector", ["C1", "CT1", "COL1", "Collector 1", "OUT1_C"]),
            ("output 1 emitter", ["E1", "ET1", "EM1", "Emitter 1", "OUT1_E"]),
            ("output 2 emitter", ["E2", "ET2", "EM2", "Emitter 2", "OUT2_E"]),
            ("output 2 collector", ["C2", "CT2", "COL2", "Collector 2", "OUT2_C"]),
            ("supply", ["VCC", "V+", "VIN", "Vcc", "V_CC", "+VCC"]),
            (
                "output control",
                [
                    "OC",
                    "OUTCTRL",
                    "OUTPUT CTRL",
                    "OUTPUTCONTROL",
                    "Output Control",
                    "OCT",
                    "O/C",
                ],
            ),
            ("reference", ["REF", "VREF", "REFOUT", "5VREF", "V_REF", "REF_OUT", "5V REF"]),
        ],
    )
    def test_is_read(self, role: str, names: list[str]):
        roles = list(SHEET.values())
        at = roles.index(role)
        for name in names:
            spelt = [*DATA_SHEET_ORDER[:at], name, *DATA_SHEET_ORDER[at + 1 :]]
            controller = the_controller(fan_part(nets_in(roles), spelt, known="names"))
            assert mapped_nets(controller) == NETS, name
            assert controller.problem == "", name

    def test_unsigned_input_alone_tells_nothing(self):
        names = ["IN1", *DATA_SHEET_ORDER[1:]]
        controller = the_controller(fan_part(nets_in(list(SHEET.values())), names, known="names"))
        assert controller.net("amplifier 1 in+") is None

    def test_unsigned_input_beside_a_signed_pair_is_left_out(self):
        names = [*DATA_SHEET_ORDER, "1IN"]
        nets = [*nets_in(list(SHEET.values())), "ELSEWHERE"]
        controller = the_controller(fan_part(nets, names, known="names"))
        assert mapped_nets(controller) == NETS
        assert controller.assumptions == ("U1: 1IN read as no pin of the 494 class and left out",)

    def test_ct1_is_a_collector_where_ct_is_the_capacitor(self):
        controller = the_controller(fan_part(nets_in(ROLES_INPUTS_FIRST), INPUTS_FIRST, known="names"))
        assert controller.net("timing capacitor") == "RAMP"
        assert controller.net("output 1 collector") == "VBAT"


class TestBriefsList:
    """The brief's `pins` outrank all that the file tells."""

    def test_names_in_the_netlists_order(self):
        controller = the_controller(fan_part(nets_in(ROLES_INPUTS_FIRST)), tuple(INPUTS_FIRST))
        assert mapped_nets(controller) == NETS
        assert (controller.assumptions, controller.problem) == ((), "")

    def test_numbers_in_the_netlists_order(self):
        nets = nets_in([SHEET[number] for number in NUMBERS_AS_NAMES])
        controller = the_controller(fan_part(nets), tuple(NUMBERS_AS_NAMES))
        assert mapped_nets(controller) == NETS
        assert (controller.assumptions, controller.problem) == ((), "")

    def test_outranks_names_in_the_file(self):
        wrong = [*DATA_SHEET_ORDER[1:], DATA_SHEET_ORDER[0]]
        part = fan_part(nets_in(list(SHEET.values())), wrong, known="names")
        assert mapped_nets(the_controller(part, tuple(DATA_SHEET_ORDER))) == NETS

    @pytest.mark.parametrize("nothing", ["", "-", "NC", "nc"])
    def test_a_node_can_be_no_pin(self, nothing: str):
        nets = [*nets_in(list(SHEET.values())), "NOWHERE"]
        controller = the_controller(fan_part(nets), (*DATA_SHEET_ORDER, nothing))
        assert mapped_nets(controller) == NETS
        assert (controller.assumptions, controller.problem) == ((), "")

    def test_wrong_count(self):
        controller = the_controller(fan_part(nets_in(list(SHEET.values()))), ("1IN+", "1IN-"))
        assert controller.pins == {}
        assert controller.unmapped == tuple(SHEET.values())
        assert "the brief lists 2 pins, the netlist has 16 nodes" in controller.problem

    def test_unknown_name_is_told(self):
        listed = (*DATA_SHEET_ORDER[:3], "BARREL", *DATA_SHEET_ORDER[4:])
        controller = the_controller(fan_part(nets_in(list(SHEET.values()))), listed)
        assert controller.unmapped == ("dead time",)
        assert "the brief's 'BARREL' is no pin of the 494 class" in controller.problem
        assert "no pin found for DTC (4)" in controller.problem

    def test_one_role_twice_is_told(self):
        listed = (*DATA_SHEET_ORDER[:3], "VCC", *DATA_SHEET_ORDER[4:])
        controller = the_controller(fan_part(nets_in(list(SHEET.values()))), listed)
        assert controller.unmapped == ("dead time", "supply")
        assert "all read as VCC, on different nets" in controller.problem

    def test_makes_a_part_of_few_pins_a_controller(self):
        part = fan_part(["FAN_SENSE", "V5", "0"])
        assert find_controllers(board(part)) == ()
        controller = the_controller(part, ("1", "REF", "GND"))
        assert mapped_nets(controller) == {"amplifier 1 in+": "FAN_SENSE", "reference": "V5", "ground": "0"}
        assert len(controller.unmapped) == 13

    def test_reference_is_found_in_any_case(self):
        part = fan_part(nets_in(ROLES_INPUTS_FIRST), reference="psu/u1")
        [controller] = find_controllers(board(part), {"PSU/U1": tuple(INPUTS_FIRST)})
        assert mapped_nets(controller) == NETS


class TestPartlyKnown:
    def test_keeps_what_resolves_and_lists_the_rest(self):
        names = [*DATA_SHEET_ORDER[:3], "BARREL", *DATA_SHEET_ORDER[4:]]
        controller = the_controller(fan_part(nets_in(list(SHEET.values())), names, known="names"))
        assert len(controller.pins) == 15
        assert controller.unmapped == ("dead time",)
        assert controller.assumptions == ("U1: BARREL read as no pin of the 494 class and left out",)
        assert controller.problem == (
            "U1: no pin found for DTC (4); add to the brief, under [controllers.U1]: "
            'pins = ["1IN+", "1IN-", ...] with one name or number for each of the 16 nodes, '
            "in the netlist's order"
        )

    def test_pin_left_out_by_the_exporter_cannot_be_mended_by_the_brief(self):
        numbers = [number for number in SHEET if number not in {"3", "13"}]
        nets = nets_in([SHEET[number] for number in numbers])
        controller = the_controller(fan_part(nets, numbers=numbers, known="numbers", element=""))
        assert controller.unmapped == ("feedback", "output control")
        assert controller.problem == (
            "U1: no pin found for FEEDBACK (3) and OUTPUT CTRL (13); "
            "let the exporter write every pin of the part, connected or not"
        )

    def test_thermal_pad_is_left_out(self):
        numbers = [*SHEET, "17"]
        nets = [*nets_in(list(SHEET.values())), "0"]
        controller = the_controller(fan_part(nets, numbers=numbers, known="numbers", element=""))
        assert mapped_nets(controller) == NETS
        assert controller.assumptions == ("U1: 17 read as no pin of the 494 class and left out",)

    def test_names_serve_where_numbers_are_none_of_the_package(self):
        numbers = [f"A{index}" for index in range(16)]
        part = fan_part(nets_in(list(SHEET.values())), DATA_SHEET_ORDER, numbers, known="numbers", element="")
        assert mapped_nets(the_controller(part)) == NETS

    def test_names_that_tell_nothing_fall_back_on_position(self):
        names = ["3", "14", "15", "1", "18", "4", "20", "2", "5", "6", "7", "8", "9", "10", "11", "12"]
        controller = the_controller(fan_part(nets_in(list(SHEET.values())), names, known="names"))
        assert mapped_nets(controller) == NETS
        assert "taken by position" in controller.assumptions[0]

    def test_no_way_at_all(self):
        controller = the_controller(fan_part(nets_in(list(SHEET.values()))[:14], reference="press/U3"))
        assert controller.pins == {}
        assert controller.assumptions == ()
        assert controller.problem.startswith(
            "press/U3: neither names nor numbers of its 14 pins fit the 494 class of 16 pins; "
        )
        assert '[controllers."press/U3"]' in controller.problem
        assert "each of the 14 nodes" in controller.problem

    def test_symbol_whose_names_contradict_its_numbers(self):
        names = ["1IN-", "1IN+", *DATA_SHEET_ORDER[2:]]
        part = fan_part(nets_in(list(SHEET.values())), names, list(SHEET), known="numbers", element="")
        controller = the_controller(part)
        assert mapped_nets(controller) == NETS, "the number is followed"
        assert controller.assumptions == (
            "U1: pin 1 is called 1IN- in the netlist, the data sheet has 1IN+ there; the number is followed",
            "U1: pin 2 is called 1IN+ in the netlist, the data sheet has 1IN- there; the number is followed",
        )


class TestDoublePins:
    def test_on_one_net_are_taken_as_one(self):
        names = [*DATA_SHEET_ORDER, "VCC", "GND"]
        nets = [*nets_in(list(SHEET.values())), "VCELL", "0"]
        controller = the_controller(fan_part(nets, names, known="names"))
        assert mapped_nets(controller) == NETS
        assert controller.assumptions == (
            "U1: 2 pins read as GND; taken as one",
            "U1: 2 pins read as VCC; taken as one",
        )

    def test_the_connected_one_is_taken(self):
        names = ["VCC", *DATA_SHEET_ORDER]
        nets = ["", *nets_in(list(SHEET.values()))]
        controller = the_controller(fan_part(nets, names, known="names"))
        pin = controller.pin("supply")
        assert pin is not None
        assert (pin.net, pin.index) == ("VCELL", 12)

    def test_on_two_nets_are_a_problem(self):
        names = [*DATA_SHEET_ORDER, "VCC"]
        nets = [*nets_in(list(SHEET.values())), "VBAT"]
        controller = the_controller(fan_part(nets, names, known="names"))
        assert controller.unmapped == ("supply",)
        assert "VCC and VCC all read as VCC, on different nets" in controller.problem
        assert "no pin found for VCC (12)" in controller.problem


@given(order=st.permutations(range(16)))
@settings(deadline=None, max_examples=40)
def test_names_map_in_any_order(order: list[int]):
    roles = [list(SHEET.values())[index] for index in order]
    names = [DATA_SHEET_ORDER[index] for index in order]
    assert mapped_nets(the_controller(fan_part(nets_in(roles), names, known="names"))) == NETS


@given(
    names=st.lists(st.text(alphabet="IN12+-CTE VREFGNDxX.", max_size=6), min_size=8, max_size=20),
    known=st.sampled_from(["names", "numbers", "positions"]),
    element=st.sampled_from(["", "X"]),
)
@settings(deadline=None, max_examples=100)
def test_any_names_give_an_answer(names: list[str], known: str, element: str):
    nets = [f"N{index}" for index in range(len(names))]
    controller = the_controller(fan_part(nets, names, names, known=known, element=element))
    assert set(controller.pins) | set(controller.unmapped) == set(ROLES)
    assert not set(controller.pins) & set(controller.unmapped)
    assert bool(controller.problem) >= bool(controller.unmapped)
    indices = [pin.index for pin in controller.pins.values()]
    assert len(set(indices)) == len(indices)
