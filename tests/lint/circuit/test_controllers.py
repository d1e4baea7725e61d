"""Finding controllers in a netlist, and asking one for its pins."""

from __future__ import annotations

from pwmlint.grammar.netlist import Place
from pwmlint.lint.circuit.controllers import find_controllers

from .controller_parts import (
    DATA_SHEET_ORDER,
    FILE,
    INPUTS_FIRST,
    ROLES_INPUTS_FIRST,
    ROLES_SUPPLY_FIRST,
    SHEET,
    SUPPLY_FIRST,
    board,
    fan_part,
    nets_in,
    the_controller,
)


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
