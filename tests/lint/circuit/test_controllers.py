"""Finding controllers in a netlist, and their pins under whatever order, name and number they come."""

from __future__ import annotations

from collections.abc import Sequence

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.grammar.netlist import Netlist, Part, Pin, Place
from pwmlint.lint.circuit.controllers import Controller, find_controllers
from pwmlint.lint.controllers import ROLES, load

FILE = "frost_fan.cir"

# The net that an orchard's frost fan has on each pin 1..16 of its controller.
NETS = {
    "amplifier 1 in+": "FAN_SENSE",
    "amplifier 1 in-": "FAN_SET",
    "feedback": "COMP",
    "dead time": "SLOW_START",
    "timing capacitor": "RAMP",
    "timing resistor": "RATE",
    "ground": "0",
    "output 1 collector": "VBAT",
    "output 1 emitter": "DRIVE",
    "output 2 emitter": "DRIVE2",
    "output 2 collector": "VBAT2",
    "supply": "VCELL",
    "output control": "MODE",
    "reference": "V5",
    "amplifier 2 in-": "LIMIT_SET",
    "amplifier 2 in+": "LIMIT_SENSE",
}

SHEET = {pin.number: pin.role for pin in load("494").pins}

# The orders that libraries of the 494 class are known to use, by the names of their pins.
DATA_SHEET_ORDER = [
    "1IN+",
    "1IN-",
    "FEEDBACK",
    "DTC",
    "CT",
    "RT",
    "GND",
    "C1",
    "E1",
    "E2",
    "C2",
    "VCC",
    "OUTPUT_CTRL",
    "REF",
    "2IN-",
    "2IN+",
]
INPUTS_FIRST = [
    "IN1",
    "-IN1",
    "IN2",
    "-IN2",
    "FB",
    "DTC",
    "Vref",
    "OCT",
    "CT1",
    "ET1",
    "CT2",
    "ET2",
    "Ct",
    "Rt",
    "GND",
    "Vcc",
]
SUPPLY_FIRST = [
    "Vcc",
    "OCT",
    "CT1",
    "ET1",
    "CT2",
    "ET2",
    "GND",
    "VREF",
    "Rt",
    "Ct",
    "DTC",
    "FB",
    "-IN2",
    "IN2",
    "-IN1",
    "IN1",
    "Ctctr",
]
NUMBERS_AS_NAMES = ["1", "2", "15", "16", "3", "4", "13", "14", "5", "6", "9", "10", "11", "8", "12", "7"]

ROLES_INPUTS_FIRST = [
    "amplifier 1 in+",
    "amplifier 1 in-",
    "amplifier 2 in+",
    "amplifier 2 in-",
    "feedback",
    "dead time",
    "reference",
    "output control",
    "output 1 collector",
    "output 1 emitter",
    "output 2 collector",
    "output 2 emitter",
    "timing capacitor",
    "timing resistor",
    "ground",
    "supply",
]
ROLES_SUPPLY_FIRST = [
    "supply",
    "output control",
    "output 1 collector",
    "output 1 emitter",
    "output 2 collector",
    "output 2 emitter",
    "ground",
    "reference",
    "timing resistor",
    "timing capacitor",
    "dead time",
    "feedback",
    "amplifier 2 in-",
    "amplifier 2 in+",
    "amplifier 1 in-",
    "amplifier 1 in+",
]


def fan_part(
    nets: Sequence[str],
    names: Sequence[str] = (),
    numbers: Sequence[str] = (),
    *,
    known: str = "positions",
    element: str = "X",
    model: str = "xx494",
    value: str = "",
    reference: str = "U1",
    fitted: bool = True,
) -> Part:
    """A part whose nodes stand in one line of the file, one every eight columns."""
    pins = tuple(
        Pin(
            number=numbers[index] if numbers else str(index + 1),
            name=names[index] if names else "",
            net=net,
            place=Place(FILE, 12, 8 * (index + 1)),
        )
        for index, net in enumerate(nets)
    )
    return Part(reference, element, value, model, pins, Place(FILE, 12, 1), pins_known=known, fitted=fitted)


def board(*parts: Part) -> Netlist:
    return Netlist(FILE, "SPICE list", parts={part.reference: part for part in parts})


def the_controller(part: Part, pins: tuple[str, ...] | None = None) -> Controller:
    [controller] = find_controllers(board(part), {} if pins is None else {part.reference: pins})
    return controller


def nets_in(roles: Sequence[str]) -> list[str]:
    return [NETS[role] for role in roles]


def mapped_nets(controller: Controller) -> dict[str, str]:
    return {role: pin.net for role, pin in controller.pins.items()}


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


class TestFinding:
    def test_by_model_or_value(self):
        nets = nets_in(list(SHEET.values()))
        netlist = board(
            fan_part(nets, reference="U1", model="xx494CN"),
            fan_part(nets, reference="U2", model="DIP16", value="594"),
            fan_part(nets, reference="U3", model="xx4940"),
            fan_part(nets, reference="U4", model="74HC594"),
            fan_part(nets, reference="U5", model="xx7500", fitted=False),
        )
        found = find_controllers(netlist)
        assert [(one.reference, one.generic_number) for one in found] == [("U1", "494"), ("U2", "594")]

    def test_a_resistor_of_that_value_is_none(self):
        assert find_controllers(board(fan_part(["V5", "0"], model="", value="494", reference="R7"))) == ()

    def test_none_in_an_empty_netlist(self):
        assert find_controllers(board()) == ()

    def test_profile_is_the_variants_own(self):
        nets = nets_in(list(SHEET.values()))
        assert the_controller(fan_part(nets)).profile.figure("reference.voltage").maximum == 5.25
        better = the_controller(fan_part(nets, model="xx594"))
        assert better.profile.figure("reference.voltage").maximum == 5.05


class TestController:
    def test_pin_by_role(self):
        controller = the_controller(fan_part(nets_in(ROLES_INPUTS_FIRST), INPUTS_FIRST, known="names"))
        pin = controller.pin("dead time")
        assert pin is not None
        assert (pin.role, pin.name, pin.number, pin.net, pin.index) == (
            "dead time",
            "DTC",
            "4",
            "SLOW_START",
            5,
        )
        assert pin.place == Place(FILE, 12, 48)
        assert controller.part.pins[pin.index].net == "SLOW_START"

    def test_role_by_index(self):
        nets = [*nets_in(ROLES_SUPPLY_FIRST), "NOWHERE"]
        controller = the_controller(fan_part(nets, SUPPLY_FIRST, known="names"))
        assert [controller.role_of(index) for index in range(17)] == [*ROLES_SUPPLY_FIRST, None]

    def test_open_pin_and_unmapped_pin_differ(self):
        nets = nets_in(list(SHEET.values()))
        nets[3] = ""
        names = [*DATA_SHEET_ORDER[:2], "BARREL", *DATA_SHEET_ORDER[3:]]
        controller = the_controller(fan_part(nets, names, known="names"))
        assert controller.net("dead time") == ""
        assert controller.net("feedback") is None
        assert controller.pin("feedback") is None


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
